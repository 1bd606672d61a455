"""Finished sheets for the printer's tests: the posters of the sheets' own test editions, each printed once."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import pytest

from chartgen.edition.load import load_edition
from chartgen.edition.model import Edition
from chartgen.figures.record import Figures
from chartgen.figures.table import figures
from chartgen.language.load import Language, languages
from chartgen.press.render import render
from chartgen.sheets.posters import posters
from chartgen.sheets.sheet import Sheet

EDITIONS = Path(__file__).parents[1] / "sheets" / "editions"


@dataclass(frozen=True)
class Printed:
    edition: Edition
    figures: Figures
    languages: Sequence[Language]
    sheets: tuple[Sheet, ...]
    pdfs: tuple[bytes, ...]

    def only(self, stem: str) -> tuple[Sheet, bytes]:
        return next((s, p) for s, p in zip(self.sheets, self.pdfs, strict=True) if s.path == f"sheets/{stem}.pdf")


def _printed(name: str) -> Printed:
    edition = load_edition(EDITIONS / f"{name}.toml")
    table, tongues = figures(edition), languages(edition)
    sheets = posters(edition, table, tongues)
    return Printed(edition, table, tongues, sheets, tuple(render(sheet) for sheet in sheets))


@pytest.fixture(scope="session")
def two_ways() -> Printed:
    return _printed("two-ways")


@pytest.fixture(scope="session")
def miles() -> Printed:
    return _printed("miles")
