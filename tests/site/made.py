"""The pages of the demonstration editions, made once for all tests that read them."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from pathlib import Path

from chartgen.edition.load import load_edition
from chartgen.edition.model import Edition
from chartgen.figures.record import Figures
from chartgen.figures.table import figures
from chartgen.language.load import Language, languages
from chartgen.site import opening
from chartgen.site.pages import pages

STARTERS = Path(__file__).resolve().parents[2] / "site_config"
DEMOS = tuple(sorted(p.name for p in STARTERS.iterdir() if (p / "edition.toml").is_file()))


@dataclass(frozen=True, slots=True)
class Leaf:
    """Stands in for a sheet: the pages ask it nothing else."""

    path: str
    title: str
    lang: str
    sentences: tuple[tuple[str, str], ...] = ()


@dataclass(frozen=True, slots=True)
class Made:
    edition: Edition
    figures: Figures
    languages: tuple[Language, ...]
    files: dict[str, bytes]

    @property
    def html(self) -> dict[str, bytes]:
        return {path: data for path, data in self.files.items() if path.endswith(".html")}

    def own(self, language: Language) -> dict[str, bytes]:
        """The pages of one language."""
        return {path: data for path, data in self.html.items() if path.startswith(f"{language.tag}/")}


@cache
def made(name: str) -> Made:
    """The finished files of a demonstration edition, with one stand-in sheet that the lists can link to."""
    edition = load_edition(STARTERS / name)
    return make(edition)


def make(edition: Edition) -> Made:
    table, tongues = figures(edition), languages(edition)
    sheet = Leaf("sheets/poster.pdf", tongues[0].text(edition.title), tongues[0].tag, _said(tongues))
    content = b"%PDF-1.7 a stand-in"
    files = {f.path: f.data for f in pages(edition, table, tongues, [sheet], {sheet.path: len(content)})}
    return Made(edition, table, tongues, files | {sheet.path: content})


def _said(tongues: tuple[Language, ...]) -> tuple[tuple[str, str], ...]:
    return tuple((language.tag, language.t("caution.law")) for language in tongues)


def write(folder: Path) -> Path:
    """Every demonstration edition and the opening page, as files; returns the opening page."""
    about = {}
    for name in DEMOS:
        edition = made(name)
        about[edition.edition.id] = opening.about(edition.edition, edition.languages)
        for path, data in edition.files.items():
            target = folder / edition.edition.id / path
            target.parent.mkdir(parents=True, exist_ok=True)
            target.write_bytes(data)
    first = opening.opening(about)
    (folder / first.path).write_bytes(first.data)
    return folder / first.path
