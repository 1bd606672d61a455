"""The method page: how a figure is made, every value with its source, and every row with its inputs."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final

from markupsafe import Markup, escape

from chartgen.edition.catalogue import GAP_RULES
from chartgen.edition.model import Friction, Source
from chartgen.figures.notices import may_be_short
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.language.sentences import notice_sentence_html
from chartgen.site.edition_site import Site, colon, named
from chartgen.site.tables import TIME_STEP_S, deceleration, least_deceleration
from chartgen.site.trace import Trace, traces

GRAVITY_MPS2: Final = 9.80665
"""Standard gravity, exact by definition; a test holds it to the mechanics' own."""

_PLACEHOLDER: Final = re.compile(r"\{[a-z_]+\}")

# The formulas of architecture's mechanics as they are worked out; one-letter symbols, explained below them.
_BRAKES = Markup(
    "<var>β</var> = min(<var>η</var> <var>μ</var> <var>g</var> cos <var>θ</var>, <var>A</var>), "
    "<var>a</var> = <var>β</var> + <var>g</var> sin <var>θ</var>"
)
_STEPS: Final[tuple[tuple[str, tuple[Markup, ...]], ...]] = (
    ("method.step.reaction", (Markup("<var>d</var> = <var>v</var> <var>t</var>"),)),
    ("method.step.grade", ()),
    (
        "method.step.lag",
        (
            Markup(
                "<var>d</var> = <var>v</var> <var>l</var> − <var>g</var> sin <var>θ</var> <var>l</var><sup>2</sup> / 2"
            ),
        ),
    ),
    (
        "method.step.build_up",
        (
            Markup(
                "<var>d</var> = <var>v</var> <var>b</var> − <var>g</var> sin <var>θ</var> <var>b</var><sup>2</sup> / 2"
                " − <var>β</var> <var>b</var><sup>2</sup> / 6"
            ),
        ),
    ),
    (
        "method.step.braking",
        (_BRAKES, Markup("<var>d</var> = <var>v</var><sup>2</sup> / (2 <var>a</var>)")),
    ),
    (
        "method.step.friction",
        (Markup("<var>d</var> = ∫ <var>v</var> d<var>v</var> / <var>a</var>(<var>v</var>)"),),
    ),
)
# As printed in the manuals; the same text stands beside each method of the mechanics.
_PRINTED: Final[dict[str, tuple[str, ...]]] = {
    "sight-metric": ("0.278 V t + 0.039 V² / a", "0.278 V t + V² / (254 ((a / 9.81) ± G))"),
    "sight-us": ("1.47 V t + 1.075 V² / a", "1.47 V t + V² / (30 ((a / 32.2) ± G))"),
    "slide-metric": ("0.278 V t + V² / (254 (f ± G))",),
    "slide-us": ("1.47 V t + V² / (30 (f ± G))",),
}


@dataclass(frozen=True, slots=True)
class Step:
    text: str
    formulas: tuple[Markup, ...]


@dataclass(frozen=True, slots=True)
class ValueRow:
    id: str
    cells: tuple[Markup, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class ValueTable:
    label: str
    heads: tuple[str, ...]
    rows: tuple[ValueRow, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Part:
    id: str
    title: str
    paragraphs: tuple[Markup, ...] = ()
    table: ValueTable | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class MethodPage:
    title: str
    intro: str
    notices: tuple[Markup, ...]
    steps_title: str
    method_name: Markup
    steps: tuple[Step, ...]
    gravity: Markup
    parts: tuple[Part, ...]
    trace_title: str
    trace_text: str
    traces: tuple[Trace, ...]
FALLING = "F(S) = F60 · exp((60 − S)/Sp)"
"""Friction falling with speed, PIARC / ASTM E1960: a value of its own in a sentence, so that it runs left to right."""


def method_page(site: Site, language: Language) -> MethodPage:
    method = site.edition.method
    every = frozenset(row for group in site.groups for row in group.rows)
    return MethodPage(
        title=language.t("page.method"),
        intro=language.t("method.intro"),
        notices=tuple(notice_sentence_html(language, n) for n in site.notices(every)),
        steps_title=language.t("method.steps"),
        method_name=language.html("assume.method", name=language.t(f"method.name.{method}")),
        steps=tuple(_steps(language, method)),
        gravity=language.html("method.gravity", value=language.deceleration(GRAVITY_MPS2, decimals=5)),
        parts=tuple(_parts(site, language)),
        trace_title=language.t("method.rows"),
        trace_text=language.t("method.rows_text"),
        traces=tuple(traces(site, language)),
    )


def _steps(language: Language, method: str) -> Iterator[Step]:
    if method in _PRINTED:
        printed = tuple(escape(formula) for formula in _PRINTED[method])
        yield Step(language.t("method.printed_formula"), printed)
        return
    for key, formulas in _STEPS:
        yield Step(language.t(key), formulas)
    yield Step(language.t("method.symbols"), ())


def _parts(site: Site, language: Language) -> Iterator[Part]:
    yield Part(id="drivers", title=language.t("method.drivers"), table=_drivers(site, language))
    yield Part(id="surfaces", title=language.t("method.surfaces"), table=_surfaces(site, language))
    yield Part(id="vehicles", title=language.t("method.vehicles"), table=_vehicles(site, language))
    if site.edition.cards is not None:
        yield _gap(site, language)
    yield Part(id="rounding", title=language.t("method.rounding"), paragraphs=tuple(_rounding(site, language)))
    yield Part(
        id="does-not-stop",
        title=language.t("method.not_stopping"),
        paragraphs=(language.html("method.not_stopping_text", least=least_deceleration(site, language)),),
    )
    yield _words(language)


def _source_cells(language: Language, source: Source | None) -> tuple[Markup, ...]:
    """Where a value comes from and what kind of source that is; a source nobody opened says so."""
    if source is None:
        return escape(language.t("method.kind.publisher")), escape(language.t("method.kind.publisher"))
    text = isolate(source.text)
    if source.from_memory:
        text = Markup("{} ({})").format(text, language.t("method.from_memory"))
    return text, escape(language.t(f"method.kind.{source.kind}"))


def _drivers(site: Site, language: Language) -> ValueTable:
    used = set(site.figures.table["driver"])
    rows = []
    for driver in site.edition.drivers:
        if driver.id not in used:
            continue
        reaction = driver.reaction
        value = isolate(language.seconds(reaction.time_s))
        if reaction.percentile is not None:
            share = language.percent(int(reaction.percentile[1:]) / 100)
            value = Markup("{}. {}").format(value, language.html("method.lognormal", share=share))
        cells = (named(language, driver.name), value, *_source_cells(language, driver.source))
        rows.append(ValueRow(f"driver-{driver.id}", cells))
    return _value_table(language, "method.drivers", ("quantity.driver", "method.reaction_time"), rows)


def _surfaces(site: Site, language: Language) -> ValueTable:
    rows = [
        ValueRow(
            f"surface-{surface.id}",
            (
                named(language, surface.name),
                _friction(language, surface.friction),
                *_source_cells(language, surface.source),
            ),
        )
        for surface in site.edition.surfaces
        if surface.id in site.surfaces
    ]
    return _value_table(language, "method.surfaces", ("quantity.surface", "quantity.friction"), rows)


def _friction(language: Language, friction: Friction) -> Markup:
    if friction.mu is not None:
        value = isolate(language.number(friction.mu, 2))
        if friction.low is None or friction.high is None:
            return value
        low, high = language.number(friction.low, 2), language.number(friction.high, 2)
        return language.html("method.range", value=value, low=low, high=high)
    grip = language.number(friction.f60 or 0.0, 2)
    sp = language.speed(friction.sp_kmh or 0.0, "km/h")
    text = language.html("method.friction_falls", formula=FALLING, grip=f"F60 = {grip}", sp=f"Sp = {sp}")
    if friction.max_mu is not None:
        cap = language.html("method.friction_cap", max=language.number(friction.max_mu, 2))
        text = Markup("{} ({})").format(text, cap)
    return text


def _vehicles(site: Site, language: Language) -> ValueTable:
    rows = []
    none = escape(language.t("word.none"))
    surface_alone = escape(language.t("method.no_own_limit"))
    for vehicle in site.edition.vehicles:
        if vehicle.id not in site.vehicles:
            continue
        limit = vehicle.max_deceleration_mps2
        cells = (
            named(language, vehicle.name),
            escape(language.t(f"word.{vehicle.load}" if vehicle.load else "word.not_given")),
            surface_alone if limit is None else isolate(deceleration(site, language, limit)),
            isolate(language.seconds(vehicle.brake_lag_s)) if vehicle.brake_lag_s else none,
            isolate(language.seconds(vehicle.build_up_s)) if vehicle.build_up_s else none,
            isolate(language.percent(vehicle.brake_efficiency)),
            *_source_cells(language, vehicle.source),
        )
        rows.append(ValueRow(f"vehicle-{vehicle.id}", cells))
    heads = (
        "quantity.vehicle", "quantity.load", "method.limit", "method.lag_time", "quantity.build_up",
        "quantity.efficiency",
    )  # fmt: skip
    return _value_table(language, "method.vehicles", heads, rows)


def _value_table(language: Language, title: str, heads: tuple[str, ...], rows: list[ValueRow]) -> ValueTable:
    keys = (*heads, "method.source", "method.kind")
    return ValueTable(label=language.t(title), heads=tuple(language.t(k) for k in keys), rows=tuple(rows))


def _gap(site: Site, language: Language) -> Part:
    cards = site.edition.cards
    if cards is None:  # the caller has looked; for the type checker
        raise ValueError("no cards, no following gap")
    rule = GAP_RULES[cards.gap]
    name = named(language, rule.name)
    source, kind = _source_cells(language, rule.source)
    return Part(
        id="gap",
        title=language.t("quantity.gap"),
        paragraphs=(
            language.html("method.gap_text", rule=name),
            Markup("{}{}{} ({})").format(language.t("method.source"), colon(language), source, kind),
        ),
    )


def _rounding(site: Site, language: Language) -> Iterator[Markup]:
    rounding, figures = site.edition.rounding, site.figures
    step = language.distance(rounding.step, figures.distance_unit)
    if rounding.never_short and rounding.total == "sum-of-parts":
        yield language.html("method.rounding_up", step=step)
    else:
        short = may_be_short(figures.table, site.edition)
        amounts = " / ".join(language.distance(x, unit) for unit, x in short.items())
        if amounts:
            yield language.html("method.rounding_other", step=step, short=amounts)
        else:
            yield language.html("assume.rounding_not_short", step=step)
        totals = {"sum-of-parts": "sum", "on-its-own": "own", "controlled": "controlled"}
        yield escape(language.t(f"method.total_{totals[rounding.total]}"))
    if figures.also_unit is not None:
        yield language.html("method.also_unit", unit=language.unit_name(figures.also_unit))
    yield language.html("method.time_text", step=language.seconds(TIME_STEP_S))


def _words(language: Language) -> Part:
    paragraphs = []
    if language.native_reader is None:
        paragraphs.append(escape(language.t("method.words_unread")))
    if language.missing:
        paragraphs.append(language.html("method.words_missing", count=language.number(len(language.missing))))
    if language.own:
        paragraphs.append(language.html("method.words_own", count=language.number(len(language.own))))
    rows = tuple(
        ValueRow(
            "", (escape(_PLACEHOLDER.sub("…", text)), Markup('<span lang="en-GB" dir="ltr">{}</span>').format(note))
        )
        for _, text, note in language.doubtful
    )
    paragraphs.append(escape(language.t("method.words_doubtful" if rows else "method.words_none_doubtful")))
    heads = (language.t("method.word"), language.t("method.doubt"))
    table = ValueTable(label=language.t("method.words_doubtful"), heads=heads, rows=rows) if rows else None
    return Part(id="words", title=language.t("method.words"), paragraphs=tuple(paragraphs), table=table)
