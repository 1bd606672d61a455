"""The edition beside published tables: signed differences, what they are made of, and which assumptions differ."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import groupby

from markupsafe import Markup, escape

from chartgen.figures.compare import ComparedRow, Comparison
from chartgen.figures.why import Why
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.language.numbers import MINUS
from chartgen.site.answer_tables import AnswerHead, AnswerRow, signed_html
from chartgen.site.edition_site import Series, Site, colon, decimals, named
from chartgen.site.tables import deceleration
from chartgen.sources import cite

_SHARES = ("reaction", "lag", "braking", "rounding")


@dataclass(frozen=True, slots=True, kw_only=True)
class Beside:
    """One driver, vehicle and surface beside the table."""

    label: str
    caption: Markup
    heads: tuple[AnswerHead, ...]
    rows: tuple[AnswerRow, ...]
    note: str
    why_title: str
    why: tuple[Markup, ...]
    assumptions: Markup


@dataclass(frozen=True, slots=True, kw_only=True)
class TableSection:
    id: str
    title: Markup
    source: Markup
    remark: Markup
    shown: str
    blocks: tuple[Beside, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class ComparePage:
    title: str
    intro: str
    trace_hint: str
    sections: tuple[TableSection, ...]


def compare_page(site: Site, language: Language) -> ComparePage:
    """A section for each published table, in the library's order."""
    return ComparePage(
        title=language.t("page.compare"),
        intro=language.t("compare.intro"),
        trace_hint=language.t("page.trace_hint"),
        sections=tuple(_section(site, language, comparison) for comparison in site.comparisons),
    )


def _section(site: Site, language: Language, comparison: Comparison) -> TableSection:
    table = comparison.table
    place = Markup('<span lang="en" dir="ltr">{}</span>').format(table.place)
    work = cite(table.source)
    source = isolate(work if table.place in work else f"{work}; {table.place}", "en")
    return TableSection(
        id=f"table-{table.id}",
        title=Markup("{} · {}").format(language.territory(table.country), place),
        source=Markup("{}{}{}").format(language.t("method.source"), colon(language), source),
        remark=Markup('<span lang="en" dir="ltr">{}</span>').format(table.remark) if table.remark else Markup(""),
        shown=language.t("compare.shown"),
        blocks=tuple(_blocks(site, language, comparison)),
    )


def _blocks(site: Site, language: Language, comparison: Comparison) -> Iterator[Beside]:
    """The slices on a surface of the state that the table is for; all where it is for none."""
    states = {surface.id: surface.state for surface in site.edition.surfaces}
    wanted = comparison.table.state
    rows = [r for r in comparison.rows if wanted is None or states[r.surface] == wanted]
    for key, run in groupby(rows, key=lambda r: (r.driver, r.vehicle, r.surface)):
        yield _beside(site, language, _series(site, *key), tuple(run))


def _series(site: Site, driver: str, vehicle: str, surface: str) -> Series:
    return next(
        series
        for group in site.groups
        if (group.vehicle, group.surface, group.grade) == (vehicle, surface, 0.0)
        for series in group.series
        if series.driver == driver
    )


def _beside(site: Site, language: Language, series: Series, rows: tuple[ComparedRow, ...]) -> Beside:
    edition, unit = site.edition, isolate(language.unit(site.figures.distance_unit))
    of = (edition.driver(rows[0].driver), edition.vehicle(rows[0].vehicle), edition.surface(rows[0].surface))
    split = [row.split for row in rows if row.split is not None]
    shares = [name for name in _SHARES if any(name == "rounding" or getattr(s, name) for s in split)]
    speed_unit = isolate(language.unit(site.figures.speed_unit))
    heads = [
        AnswerHead(escape(language.t("quantity.speed")), speed_unit, "printed_speed"),
        AnswerHead(escape(language.t("compare.ours")), unit, "printed_stopping"),
        AnswerHead(escape(language.t("compare.theirs")), unit, ""),
        AnswerHead(escape(language.t("compare.difference")), unit, ""),
        *(AnswerHead(escape(_share_name(language, name)), unit, "") for name in shares),
    ]
    places = decimals(row.speed for row in rows)
    return Beside(
        label=" · ".join(language.text(one.name) for one in of),
        caption=Markup(" · ").join(named(language, one.name) for one in of),
        heads=tuple(heads),
        rows=tuple(
            AnswerRow(escape(language.number(row.speed, places)), f"method.html#r{row.row}", cells)
            for row in rows
            for cells in (tuple(_cells(language, row, shares)),)
        ),
        note=_note(language, rows) if len(split) < len(rows) else "",
        why_title=language.t("compare.why"),
        why=tuple(dict.fromkeys(_why(site, language, w) for row in rows for w in row.why if _shown(w, row, rows))),
        assumptions=series.line(language, edition),
    )


def _share_name(language: Language, name: str) -> str:
    return language.t("compare.rounding") if name == "rounding" else language.t(f"part.{name}")


def _cells(language: Language, row: ComparedRow, shares: list[str]) -> Iterator[Markup]:
    yield _number(language, row.ours.stopping)
    yield _number(language, row.theirs.stopping)
    yield _number(language, row.difference.stopping, signed=True)
    left = row.difference.stopping or 0.0
    for name in shares:
        share = None if row.split is None else round(getattr(row.split, name), 1)
        if name == "rounding" and share is not None:
            share = left  # the remainder, so that the shares shown add up to the difference shown
        left -= share or 0.0
        yield _number(language, share, signed=True, places=1)


def _number(language: Language, value: float | None, *, signed: bool = False, places: int | None = None) -> Markup:
    if value is None or math.isnan(value):
        return escape(language.t("word.none"))
    text = language.number(value, decimals([value]) if places is None else places)
    if text.strip(MINUS + "0.,") == "":
        text = text.removeprefix(MINUS)  # a share of nothing has no sign
    return signed_html(f"+{text}" if signed and value > 0 and text.strip("0.,") else text)


def _note(language: Language, rows: tuple[ComparedRow, ...]) -> str:
    missing = {row.split_missing for row in rows if row.split is None}
    if "not-reproduced" in missing:
        return language.t("compare.not_reproduced")
    return language.t("compare.totals_only") if missing & {"totals-only", "ours-totals-only"} else ""


def _shown(why: Why, row: ComparedRow, rows: tuple[ComparedRow, ...]) -> bool:
    """What differs at every speed by another amount is told for the fastest speed alone."""
    return why.code not in ("friction", "deceleration", "sum") or row is rows[-1]


def _why(site: Site, language: Language, why: Why) -> Markup:
    ours, theirs = _value(site, language, why, theirs=False), _value(site, language, why, theirs=True)
    if why.fitted:
        theirs = language.t("compare.fitted", value=theirs)
    key = f"compare.why_{why.code.replace('-', '_')}"
    text = language.html(key, ours=ours, theirs=theirs)
    return text if why.part is None else Markup("{} ({})").format(text, language.t(f"part.{why.part}"))


def _value(site: Site, language: Language, why: Why, *, theirs: bool) -> str:
    value, step = (why.theirs, why.theirs_step) if theirs else (why.ours, why.ours_step)
    if value is None:
        return language.t("word.none") if why.code in ("lag", "build-up") else language.t("compare.unknown")
    match why.code:
        case "reaction" | "lag" | "build-up":
            return language.seconds(float(value))
        case "friction":
            return language.number(float(value), 2)
        case "deceleration":
            return deceleration(site, language, float(value))
        case "sum":
            return language.distance(float(value), site.figures.distance_unit)
        case "kind":
            return ", ".join(language.t(f"kind.{kind}") for kind in str(value).split())
        case "state":
            return language.t(f"state.{value}")
    return _rule(site, language, str(value), step)


def _rule(site: Site, language: Language, rule: str, step: float | None) -> str:
    shown = {} if step is None else {"step": language.distance(step, site.figures.distance_unit)}
    match rule:
        case "sum-of-parts":
            return language.t("compare.total_sum")
        case "up-from-sum":
            return language.t("compare.total_sum_up", **shown)
        case "controlled":
            return language.t("compare.total_adjusted")
    return language.t(f"compare.{rule}", **shown)
