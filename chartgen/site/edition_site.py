"""What every page of one edition needs to know: its records, and how a name, a slope and a unit are written."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

from markupsafe import Markup, escape

from chartgen.edition.model import Edition, Text
from chartgen.figures.assume import Assumption, assumptions
from chartgen.figures.changes import Changes
from chartgen.figures.compare import Comparison
from chartgen.figures.record import Figures, Notice
from chartgen.language.bidi import isolated
from chartgen.language.load import Language
from chartgen.language.sentences import assumption_line_html

if TYPE_CHECKING:
    import pandas as pd


@dataclass(frozen=True, slots=True, kw_only=True)
class Leaflet:
    """A finished sheet that lies beside the pages: `path` from the edition's folder, `bytes` None where not known.
    `lang` is that of its title, `tags` all languages that stand on it."""

    path: str
    title: str
    lang: str
    tags: tuple[str, ...]
    bytes: int | None


Record = Mapping[str, Any]
"""One row of the figures by column."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Series:
    """One driver's rows in speed order: as a frame for the drawing, as records for tables, with what they rest on."""

    driver: str
    frame: pd.DataFrame
    records: tuple[Record, ...]
    assumption: Assumption
    _lines: dict[str, Markup] = field(default_factory=dict, compare=False, repr=False)

    def line(self, language: Language, edition: Edition) -> Markup:
        """The assumption line, made once a language: it stands under every table of the series."""
        if language.tag not in self._lines:
            self._lines[language.tag] = assumption_line_html(language, edition, self.assumption)
        return self._lines[language.tag]


@dataclass(frozen=True, slots=True, kw_only=True)
class Group:
    """All rows of one vehicle, surface and slope: a series a driver."""

    vehicle: str
    surface: str
    grade: float
    series: tuple[Series, ...]

    @property
    def key(self) -> tuple[str, str, float]:
        return self.vehicle, self.surface, self.grade

    @property
    def rows(self) -> frozenset[int]:
        return frozenset(int(record["row"]) for series in self.series for record in series.records)

    def any_positive(self, column: str) -> bool:
        """True where any row has more than nothing in this column."""
        return any(record[column] > 0 for series in self.series for record in series.records)


@dataclass(frozen=True, slots=True, kw_only=True)
class Site:
    """One edition's pages in the making."""

    edition: Edition
    figures: Figures
    languages: tuple[Language, ...]
    leaflets: tuple[Leaflet, ...]
    groups: tuple[Group, ...]
    comparisons: tuple[Comparison, ...] = ()
    changes: Changes | None = None
    page_names: tuple[str, ...]
    """File names of the pages beside those of surfaces and vehicles."""

    def on_surface(self, surface: str) -> tuple[Group, ...]:
        return tuple(g for g in self.groups if g.surface == surface)

    def with_vehicle(self, vehicle: str) -> tuple[Group, ...]:
        return tuple(g for g in self.groups if g.vehicle == vehicle)

    @property
    def surfaces(self) -> tuple[str, ...]:
        """Ids of the surfaces that any row has, in the edition's order."""
        return tuple(s.id for s in self.edition.surfaces if self.on_surface(s.id))

    @property
    def vehicles(self) -> tuple[str, ...]:
        return tuple(v.id for v in self.edition.vehicles if self.with_vehicle(v.id))

    def notices(self, rows: frozenset[int]) -> tuple[Notice, ...]:
        """What the reader of these rows must be told, each kind once."""
        found: dict[str, Notice] = {}
        for notice in self.figures.notices:
            if notice.reader and (not notice.rows or rows.intersection(notice.rows)):
                found.setdefault(notice.code, notice)
        return tuple(found.values())


def page_names(edition: Edition, compared: bool) -> tuple[str, ...]:
    """The pages that every language of an edition has, beside those of its surfaces and vehicles.

    `compared`: a published table was found that can stand beside its rows.
    """
    names = ["index.html"]
    if answer_ids(edition):
        names += ["answers.html", *(f"answers-{id}.html" for id in answer_ids(edition))]
    if compared:
        names.append("compare.html")
    if edition.previous is not None:
        names.append("changes.html")
    return (*names, "method.html", "catalogue.html", "downloads.html")


def answer_ids(edition: Edition) -> tuple[str, ...]:
    """What an edition asks for beside the distances, in the order of its pages; each has a page of its own."""
    asked = edition.questions
    there = {
        "spread": edition.spread is not None,
        "greatest": asked.sight_m is not None or asked.headlight is not None or bool(asked.gaps),
        "residual": asked.residual_from is not None,
        "added-driver": asked.driver is not None,
        "added-surface": asked.surface is not None,
        "gaps": bool(asked.gaps),
    }
    return tuple(id for id, wanted in there.items() if wanted)


def groups(edition: Edition, figures: Figures) -> Iterator[Group]:
    """The table cut into what one drawing shows, in the order vehicle, surface, slope of the edition."""
    table = figures.table
    columns = list(table.columns)
    # Once for the whole table: a frame's own way to records costs more than all the writing.
    records = [dict(zip(columns, row, strict=True)) for row in zip(*(table[c].tolist() for c in columns), strict=True)]
    places: dict[tuple[str, str, float], dict[str, list[int]]] = {}
    for place, record in enumerate(records):
        key = (record["vehicle"], record["surface"], record["grade"])
        places.setdefault(key, {}).setdefault(record["driver"], []).append(place)
    vehicles = [v.id for v in edition.vehicles]
    surfaces = [s.id for s in edition.surfaces]
    drivers = [d.id for d in edition.drivers]
    # Stable: slopes keep the order in which the cases give them.
    for key in sorted(places, key=lambda k: (vehicles.index(k[0]), surfaces.index(k[1]))):
        series = []
        for driver in sorted(places[key], key=drivers.index):
            rows = sorted(places[key][driver], key=lambda place: records[place]["speed_mps"])
            frame = table.iloc[rows]
            series.append(
                Series(
                    driver=driver,
                    frame=frame,
                    records=tuple(records[place] for place in rows),
                    assumption=assumptions(edition, frame),
                )
            )
        yield Group(vehicle=key[0], surface=key[1], grade=key[2], series=tuple(series))


def named(language: Language, texts: Text) -> Markup:
    """An edition's own text; tagged where it stands in another language than the page."""
    tag = language.text_tag(texts)
    if tag == language.tag:
        return escape(texts[tag])
    return Markup('<span lang="{}" dir="auto">{}</span>').format(tag, texts[tag])


def slope(language: Language, grade: float) -> Markup:
    """The slope in words: "level road", "6 %, uphill"."""
    if grade == 0.0:
        return escape(language.t("word.level"))
    word = language.t("word.uphill" if grade > 0 else "word.downhill")
    return Markup('<bdi dir="ltr">{}</bdi>{}{}').format(language.percent(abs(grade)), comma(language), word)


def slope_plain(language: Language, grade: float) -> str:
    """As `slope`, for attributes."""
    if grade == 0.0:
        return language.t("word.level")
    word = language.t("word.uphill" if grade > 0 else "word.downhill")
    return f"{isolated(language.percent(abs(grade)), language.direction)}{comma(language)}{word}"


def colon(language: Language) -> str:
    """What stands between a label and its value: French sets a no-break space before the colon."""
    return "\u00a0: " if language.tag.split("-", maxsplit=1)[0] == "fr" else ": "


def comma(language: Language) -> str:
    """What stands between two parts of a name: Arabic has a comma of its own."""
    return "\u060c " if language.direction == "rtl" else ", "


def grade_id(grade: float) -> str:
    """A grade as part of an anchor: "level", "up-6", "down-9.5" (in percent)."""
    if grade == 0.0:
        return "level"
    return f"{'up' if grade > 0 else 'down'}-{abs(grade) * 100:g}"


def decimals(values: Iterable[float]) -> int:
    """As many decimals as a column of rounded numbers needs, so that its digits stand one below the other."""
    real = [value for value in values if math.isfinite(value)]
    return next((n for n in range(4) if all(abs(value - round(value, n)) < 1e-9 for value in real)), 4)
