"""The sheets' own test editions, read and worked out once."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from pathlib import Path

import pytest

from chartgen.edition.load import load_edition
from chartgen.edition.model import Edition
from chartgen.figures.record import Figures
from chartgen.figures.table import figures
from chartgen.language.load import Language, languages

EDITIONS = Path(__file__).parent / "editions"


@dataclass(frozen=True)
class Read:
    edition: Edition
    figures: Figures
    languages: tuple[Language, ...]

    def language(self, tag: str) -> Language:
        return next(language for language in self.languages if language.tag == tag)


@cache
def _read(name: str) -> Read:
    edition = load_edition(EDITIONS / f"{name}.toml")
    return Read(edition, figures(edition), languages(edition))


@pytest.fixture(scope="session")
def read_edition() -> Callable[[str], Read]:
    """Call it with the name of a file in `editions`."""
    return _read
