"""Charts on pages: marks drawn once for all languages of a direction, labels as text that the browser shapes."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import groupby
from typing import Final

from markupsafe import Markup, escape

from chartgen.charts.columns import Plan, finish, plan
from chartgen.charts.describe import alt_text
from chartgen.charts.drawing import Drawing, Label
from chartgen.charts.inks import palette
from chartgen.edition.model import Text
from chartgen.language.load import Language
from chartgen.language.sentences import spread_sentence
from chartgen.site.compact import compact
from chartgen.site.edition_site import Group, Series, Site, slope_plain


@dataclass(frozen=True, slots=True)
class Size:
    """A drawing's size in mm. Its words are made to be read at 4 px a mm; the page shows it at up to 976 px."""

    width_mm: float
    height_mm: float
    wide: bool


SMALL: Final = Size(180.0, 104.0, wide=False)
WIDE: Final = Size(240.0, 132.0, wide=True)
MOST_SMALL: Final = 12
"""More columns than these need the wide drawing for their numbers."""
MOST_SERIES: Final = 3
"""The drawing's own limit: more drivers make a second chart."""

_FACES: Final = {"numeral-bold": "nb", "numeral": "n", "text": "", "text-bold": "b"}
_ANCHOR: Final = {
    ("left", "ltr"): "", ("center", "ltr"): "middle", ("right", "ltr"): "end",
    ("left", "rtl"): "end", ("center", "rtl"): "middle", ("right", "rtl"): "",
}  # fmt: skip
_FIGURES: Final = ("total", "part", "lag", "speed")
"""Roles of labels that print a figure; the others are marked, so that the check of the finished page can tell them."""
_OPENING: Final = re.compile(r"^<svg\b")


@dataclass(frozen=True, slots=True, kw_only=True)
class Figure:
    """A chart as it stands on a page. `label` names its frame, which scrolls sideways where the screen is narrow."""

    svg: Markup
    label: str
    caption: Markup
    wide: bool


class Drawings:
    """The charts of one edition. Each is planned once for all languages and inked once a direction."""

    def __init__(self, site: Site) -> None:
        self._site = site
        self._plans: dict[tuple[str, str, float, int], Plan] = {}
        self._palette = palette(site.edition.palette)

    def figures(self, language: Language, group: Group) -> tuple[Figure, ...]:
        """The charts of a group in one language: one for up to three drivers; none of a table of totals alone, since
        the columns are made of parts."""
        if not all(math.isfinite(float(r["reaction_distance_m"])) for one in group.series for r in one.records):
            return ()
        return tuple(self._figure(language, group, index, series) for index, series in enumerate(_threes(group.series)))

    def _names(self, series: Sequence[Series]) -> list[Text]:
        return [self._site.edition.driver(one.driver).name for one in series]

    def _plan(self, group: Group, index: int, series: Sequence[Series]) -> Plan:
        key = (*group.key, index)
        if key not in self._plans:
            site = self._site
            self._plans[key] = plan(
                [one.frame for one in series],
                languages=site.languages,
                palette=self._palette,
                width_mm=_size(series).width_mm,
                height_mm=_size(series).height_mm,
                distance_unit=site.figures.distance_unit,
                speed_unit=site.figures.speed_unit,
                names_of_series=self._names(series),
                together=False,
                medium="web",
            )
        return self._plans[key]

    def _figure(self, language: Language, group: Group, index: int, series: Sequence[Series]) -> Figure:
        site = self._site
        drawing = finish(
            self._plan(group, index, series),
            name=f"{group.vehicle}-{group.surface}-{index}",
            languages=(language,),
            palette=self._palette,
            direction=language.direction,
        )
        names = self._names(series)
        told = alt_text(
            [one.frame for one in series],
            language=language,
            speed_unit=site.figures.speed_unit,
            distance_unit=site.figures.distance_unit,
            names_of_series=names if len(series) > 1 else (),
        )
        vehicle, surface = site.edition.vehicle(group.vehicle).name, site.edition.surface(group.surface).name
        name = " · ".join((language.text(vehicle), language.text(surface), slope_plain(language, group.grade)))
        return Figure(
            svg=inline(drawing, language, told),
            label=language.plain("page.chart_label", name=name),
            wide=_size(series).wide,
            caption=_caption(site, language, drawing, name),
        )


def _size(series: Sequence[Series]) -> Size:
    return WIDE if sum(len(one.records) for one in series) > MOST_SMALL else SMALL


def _threes(series: tuple[Series, ...]) -> Iterator[tuple[Series, ...]]:
    for start in range(0, len(series), MOST_SERIES):
        yield series[start : start + MOST_SERIES]


def _caption(site: Site, language: Language, drawing: Drawing, name: str) -> Markup:
    """What a course is worth; where no course is drawn, what the chart shows."""
    said = escape(name)
    if drawing.course:
        said = language.html("sheet.course_m", length=language.distance(drawing.course, site.figures.distance_unit))
    if drawing.spread:
        key, values = spread_sentence(language)
        said = Markup("{}. {}").format(said, language.html(key, **values))
    return said


def inline(drawing: Drawing, language: Language, told: str) -> Markup:
    """The drawing as an image with a text alternative: its marks, then its labels as text elements."""
    marks = compact(drawing.marks_svg)
    if not marks.endswith("</svg>"):
        raise ValueError("a drawing's marks must be one svg element")
    opening = Markup('<svg role="img" lang="{}" aria-label="{}"').format(language.tag, told)
    body = _OPENING.sub(lambda _: str(opening), marks, count=1).removesuffix("</svg>")
    # In HTML the name space is known; the attribute is weight only.
    body = body.replace(' xmlns="http://www.w3.org/2000/svg"', "", 1)
    return Markup(body) + _texts(drawing.labels, language) + Markup("</svg>")  # noqa: S704 our own SVG


def _texts(labels: Sequence[Label], language: Language) -> Markup:
    """The labels; what a run of them shares stands once, on a group."""
    out = []
    for shared, run in groupby(labels, key=lambda label: _shared(label, language)):
        inside = "".join(
            f'<text x="{label.x_mm:.2f}" y="{label.y_mm:.2f}">{escape(label.text)}</text>' for label in run
        )
        out.append(f"<g{shared}>{inside}</g>")
    return Markup("".join(out))  # noqa: S704 every text in it is escaped


def _shared(label: Label, language: Language) -> str:
    """Attributes that several labels have in common. The direction is said outright where it is not the page's: in a
    right-to-left page it would be inherited and turn the anchor."""
    attributes = {
        "class": " ".join(
            c for c in (_FACES[label.face], f"ink-{label.ink}", "" if label.role in _FIGURES else "free") if c
        ),
        "font-size": f"{label.size_mm:g}",
        "text-anchor": _ANCHOR[label.anchor, label.dir],
        "direction": label.dir if label.dir != language.direction else "",
        "lang": label.lang if label.lang != language.tag else "",
    }
    return "".join(f' {key}="{escape(value)}"' for key, value in attributes.items() if value)
