"""What has changed since the issue before: every printed number, old and new, with the input that changed it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import groupby
from typing import Final

from markupsafe import Markup, escape

from chartgen.edition.model import DistanceUnit
from chartgen.figures.changes import Change, InputChange, RowChange
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.site.edition_site import Site, decimals, named, slope
from chartgen.site.method import Part, ValueRow, ValueTable

_NUMBERS: Final = {
    "reaction": "quantity.reaction", "lag": "quantity.lag", "braking": "quantity.braking",
    "stopping": "quantity.stopping", "perception": "quantity.perception", "residual_speed": "quantity.residual_speed",
    "greatest_sight": "quantity.greatest_speed", "greatest_headlight": "quantity.greatest_speed",
    "greatest_gap": "quantity.greatest_speed", "added_by_driver": "answers.driver_title",
    "added_by_surface": "answers.surface_title", "gap_s": "quantity.gap", "gap_distance": "quantity.gap_distance",
}  # fmt: skip
_INPUTS: Final = {
    "reaction_time_s": "method.reaction_time", "reaction_percentile": "input.reaction_percentile",
    "perception_s": "quantity.perception", "brake_lag_s": "method.lag_time", "build_up_s": "quantity.build_up",
    "brake_efficiency": "quantity.efficiency", "max_deceleration_mps2": "method.limit",
    "brake_share": "input.brake_share", "friction": "quantity.friction", "friction_low": "input.friction_low",
    "friction_high": "input.friction_high", "friction_table": "input.friction_table",
    "valid_to_mps": "input.valid_to_mps", "load": "quantity.load", "length_m": "quantity.length",
    "gap_rule": "quantity.gap_rule", "state": "quantity.surface",
}  # fmt: skip


@dataclass(frozen=True, slots=True, kw_only=True)
class ChangesPage:
    title: str
    intro: str
    statements: tuple[Markup, ...]
    parts: tuple[Part, ...]


def changes_page(site: Site, language: Language) -> ChangesPage:
    """One row a printed number that differs."""
    changes, previous = site.changes, site.edition.previous
    if changes is None or previous is None:
        raise ValueError("an edition without an issue before it has no changes")
    issue = str(previous.figures.get("issue") or previous.file)
    statements = [
        language.html("changes.unit", old=_unit(language, change.old), new=_unit(language, change.new))
        for change in changes.units
    ]
    if not changes.rows:
        statements.append(escape(language.t("changes.none")))
    runs = groupby(changes.rows, key=lambda row: (row.driver, row.vehicle, row.surface, row.grade))
    return ChangesPage(
        title=language.t("page.changes"),
        intro=language.plain("changes.intro", issue=issue),
        statements=tuple(statements),
        parts=tuple(_part(site, language, number, tuple(run)) for number, (_, run) in enumerate(runs, start=1)),
    )


def _part(site: Site, language: Language, number: int, rows: tuple[RowChange, ...]) -> Part:
    """All changes of one driver, vehicle, surface and slope."""
    heads = ("quantity.speed", "changes.quantity", "changes.old", "changes.new", "changes.reason")
    title = _whose(site, language, rows[0])
    once: set[str] = set()  # greatest speeds are the same at every speed: one number, told once
    made = tuple(ValueRow("", cells) for row in rows for cells in _rows(language, row, once))
    label = str(title.striptags())
    table = ValueTable(label=label, heads=tuple(language.t(key) for key in heads), rows=made)
    return Part(id=f"changes-{number}", title=title, table=table)


def _rows(language: Language, row: RowChange, once: set[str]) -> Iterator[tuple[Markup, ...]]:
    places = decimals([row.speed])
    speed = isolate(f"{language.number(row.speed, places)}\u00a0{language.unit(row.speed_unit)}")
    if row.kind != "changed":
        said = escape(language.t("changes.added" if row.kind == "added" else "changes.removed"))
        totals = [change for change in row.changes if change.name == "stopping" and not change.also]
        for change in totals or row.changes[:1]:
            yield (speed, *_cells(language, change), said)
        return
    for change in row.changes:
        if change.name.startswith("greatest_"):
            if change.key in once:
                continue
            once.add(change.key)
        yield (speed, *_cells(language, change), _reason(language, change))


def _whose(site: Site, language: Language, row: RowChange) -> Markup:
    """Driver, vehicle, surface and slope. A row of the issue before may name what this edition no longer has."""
    edition = site.edition
    names = []
    for id, known in ((row.driver, edition.drivers), (row.vehicle, edition.vehicles), (row.surface, edition.surfaces)):
        one = next((x for x in known if x.id == id), None)
        names.append(isolate(id) if one is None else named(language, one.name))
    if row.grade:
        names.append(slope(language, row.grade))
    return Markup(" · ").join(names)


def _cells(language: Language, change: Change) -> tuple[Markup, Markup, Markup]:
    name = escape(language.t(_NUMBERS[change.name])) if change.name in _NUMBERS else _percentile(language, change.name)
    return name, _number(language, change.old, change.old_unit), _number(language, change.new, change.new_unit)


def _percentile(language: Language, name: str) -> Markup:
    if name[:1] == "p" and name[1:].isdigit():
        return language.html("quantity.percentile", share=language.percent(int(name[1:]) / 100))
    return Markup('<code dir="ltr">{}</code>').format(name)


def _number(language: Language, value: object, unit: str | None) -> Markup:
    if not isinstance(value, int | float) or isinstance(value, bool):
        return escape(language.t("word.none"))
    number = language.number(float(value), decimals([float(value)]))
    return isolate(f"{number}\u00a0{_unit(language, unit)}" if unit else number)


def _unit(language: Language, unit: object) -> str:
    known: tuple[DistanceUnit | str, ...] = ("m", "ft", "mph", "km/h", "s")
    return language.unit(str(unit)) if unit in known else language.t("word.none")


def _reason(language: Language, change: Change) -> Markup:
    if change.reason == "input":
        return Markup("; ").join(_input(language, one) for one in change.inputs)
    return escape(language.t("changes.program" if change.reason == "program" else "changes.untold"))


def _input(language: Language, change: InputChange) -> Markup:
    """Name, old and new value of an input: "Reaction time 1.1 → 1.24"."""
    key = change.key.rpartition(".")[2] if "/" in change.key else change.key
    name = _input_name(language, key)
    pair = " → ".join(_plain(language, value) for value in (change.old, change.new))
    return Markup('{} <bdi dir="ltr">{}</bdi>').format(name, pair)


def _input_name(language: Language, key: str) -> Markup:
    if key in _INPUTS:
        return escape(language.t(_INPUTS[key]))
    for start, word in (
        ("rounding", "method.rounding"), ("spread", "input.sample"), ("questions", "input.question"),
        ("friction", "quantity.friction"), ("reaction", "method.reaction_time"), ("method", "page.method"),
    ):  # fmt: skip
        if key.startswith(start):
            return escape(language.t(word))
    return Markup('<code dir="ltr">{}</code>').format(key)


def _plain(language: Language, value: object) -> str:
    if value is None:
        return language.t("word.none")
    if isinstance(value, int | float) and not isinstance(value, bool):
        return language.number(float(value), min(3, decimals([round(float(value), 3)])))
    return str(value)
