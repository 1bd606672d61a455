"""The method page: how a figure is made, every value with its source, and every row with its inputs."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final

from markupsafe import Markup, escape

from chartgen.edition.catalogue import GAP_RULES
from chartgen.edition.model import Friction, Source, Vehicle
from chartgen.figures.notices import may_be_short
from chartgen.figures.rounding import up
from chartgen.figures.spread import printed_step
from chartgen.figures.units import GRAVITY_MPS2, from_metres
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.language.sentences import notice_sentence_html
from chartgen.site.edition_site import Site, answer_ids, colon, named
from chartgen.site.method_steps import Step, steps
from chartgen.site.tables import TIME_STEP_S, deceleration, least_deceleration
from chartgen.site.trace import Trace, traces

_PLACEHOLDER: Final = re.compile(r"\{[a-z_]+\}")


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
    title: str | Markup
    paragraphs: tuple[Markup, ...] = ()
    table: ValueTable | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class MethodPage:
    title: str
    intro: str
    catalogue: str
    notices: tuple[Markup, ...]
    steps_title: str
    method_name: Markup
    steps: tuple[Step, ...]
    gravity: Markup
    parts: tuple[Part, ...]
    trace_title: str
    trace_text: str
    greatest_title: str
    traces: tuple[Trace, ...]


FALLING = "F(S) = F60 · exp((60 − S)/Sp)"
"""Friction falling with speed, PIARC / ASTM E1960: a value of its own in a sentence, so that it runs left to right."""
TEXTURE = "Sp = 14.2 + 89.7 · MPD"
GRADIENT = "SN(V) = SN0 · exp(−PNG · V / 100)"
DROPPED = "t = √(2s/g)"


def method_page(site: Site, language: Language) -> MethodPage:
    method = site.edition.method
    every = frozenset(row for group in site.groups for row in group.rows)
    return MethodPage(
        title=language.t("page.method"),
        intro=language.t("method.intro"),
        catalogue=language.t("page.catalogue"),
        notices=tuple(notice_sentence_html(language, n) for n in site.notices(every)),
        steps_title=language.t("method.steps"),
        method_name=language.html("assume.method", name=language.t(f"method.name.{method}")),
        steps=tuple(steps(site, language)),
        gravity=language.html("method.gravity", value=language.deceleration(GRAVITY_MPS2, decimals=5)),
        parts=tuple(_parts(site, language)),
        trace_title=language.t("method.rows"),
        trace_text=language.t("method.rows_text"),
        greatest_title=language.t("quantity.greatest_speed"),
        traces=tuple(traces(site, language)),
    )


def _parts(site: Site, language: Language) -> Iterator[Part]:
    yield Part(id="drivers", title=language.t("method.drivers"), table=_drivers(site, language))
    yield Part(id="surfaces", title=language.t("method.surfaces"), table=_surfaces(site, language))
    yield Part(id="vehicles", title=language.t("method.vehicles"), table=_vehicles(site, language))
    if site.figures.gap_rule is not None or site.figures.questions.gaps:
        yield _gap(site, language)
    if site.figures.spread is not None:
        yield Part(id="spread", title=language.t("method.spread"), paragraphs=(spread_text(site, language),))
    if answer_ids(site.edition):
        yield Part(
            id="answers", title=language.t("method.questions"), paragraphs=(escape(language.t("method.residual_text")),)
        )
    yield Part(id="rounding", title=language.t("method.rounding"), paragraphs=tuple(_rounding(site, language)))
    yield Part(
        id="does-not-stop",
        title=language.t("method.not_stopping"),
        paragraphs=(language.html("method.not_stopping_text", least=least_deceleration(site, language)),),
    )
    yield _words(language)


def source_cells(language: Language, source: Source | None) -> tuple[Markup, ...]:
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
        # A table adopted as it stands need not tell a time.
        told = math.isfinite(reaction.time_s)
        value = isolate(language.seconds(reaction.time_s)) if told else escape(language.t("word.not_given"))
        if reaction.percentile is not None:
            share = language.percent(int(reaction.percentile[1:]) / 100)
            value = Markup("{}. {}").format(value, language.html("method.lognormal", share=share))
        if reaction.perception_s is not None:
            kept_apart = language.html("method.perception", time=language.seconds(reaction.perception_s))
            value = Markup("{} · {}").format(value, kept_apart)
        if reaction.drop_m is not None:
            drop = f"{language.number(reaction.drop_m, 2)}\u00a0{language.unit('m')}"
            value = Markup("{}. {}").format(value, language.html("method.dropped_rule", formula=DROPPED, drop=drop))
        cells = (named(language, driver.name), value, *source_cells(language, driver.source))
        rows.append(ValueRow(f"driver-{driver.id}", cells))
    return _value_table(language, "method.drivers", ("quantity.driver", "method.reaction_time"), rows)


def _surfaces(site: Site, language: Language) -> ValueTable:
    rows = [
        ValueRow(
            f"surface-{surface.id}",
            (
                named(language, surface.name),
                friction_text(language, surface.friction),
                *source_cells(language, surface.source),
            ),
        )
        for surface in site.edition.surfaces
        if surface.id in site.surfaces
    ]
    return _value_table(language, "method.surfaces", ("quantity.surface", "quantity.friction"), rows)


def friction_text(language: Language, friction: Friction, *, with_range: bool = True) -> Markup:
    """A friction in words: its constant, its law with its constants or its table; its range; what it comes from."""
    pieces = [_law(language, friction)]
    if friction.texture_mm is not None:
        depth = f"{language.number(friction.texture_mm, 2)}\u00a0mm"
        pieces.append(language.html("method.friction_texture", depth=depth, formula=TEXTURE))
    if friction.sn0 is not None and friction.png_h_per_mile is not None:
        start, gradient = (
            f"{name} = {language.number(x, 2)}" for name, x in (("SN0", friction.sn0), ("PNG", friction.png_h_per_mile))
        )
        pieces.append(language.html("method.friction_gradient", formula=GRADIENT, start=start, gradient=gradient))
    if friction.valid_kmh is not None:
        low, high = (_speed(language, x) for x in friction.valid_kmh)
        pieces.append(language.html("method.friction_valid", low=low, high=high))
    if with_range and friction.mu is None and friction.low is not None and friction.high is not None:
        low, high = (language.number(x, 2) for x in (friction.low, friction.high))
        pieces.append(language.html("method.range_at", low=low, high=high, speed=language.speed(60.0, "km/h")))
    elif with_range and friction.low is not None and friction.high is not None and friction.mu is not None:
        low, high = (language.number(x, 2) for x in (friction.low, friction.high))
        pieces[0] = language.html("method.range", value=pieces[0], low=low, high=high)
    return Markup(" · ").join(pieces)


def _speed(language: Language, kmh: float) -> str:
    """A speed of a friction law, in km/h as the laws have it; one that was stated in mph to two decimals."""
    return language.speed(round(kmh, 2), "km/h")


def _law(language: Language, friction: Friction) -> Markup:
    if friction.mu is not None:
        return isolate(language.number(friction.mu, 2))
    if friction.table is not None:
        pairs = Markup(", ").join(
            language.html("method.at_speed", value=language.number(mu, 2), speed=_speed(language, kmh))
            for kmh, mu in friction.table
        )
        return language.html("method.friction_table", pairs=pairs)
    if friction.f60 is None or friction.sp_kmh is None:
        return escape(language.t("word.none"))
    grip, sp = language.number(friction.f60, 2), _speed(language, friction.sp_kmh)
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
            _vehicle_name(language, vehicle),
            escape(language.t(f"word.{vehicle.load}" if vehicle.load else "word.not_given")),
            surface_alone if limit is None else isolate(deceleration(site, language, limit)),
            isolate(language.seconds(vehicle.brake_lag_s)) if vehicle.brake_lag_s else none,
            isolate(language.seconds(vehicle.build_up_s)) if vehicle.build_up_s else none,
            isolate(language.percent(vehicle.brake_efficiency)),
            *source_cells(language, vehicle.source),
        )
        rows.append(ValueRow(f"vehicle-{vehicle.id}", cells))
    heads = (
        "quantity.vehicle", "quantity.load", "method.limit", "method.lag_time", "quantity.build_up",
        "quantity.efficiency",
    )  # fmt: skip
    return _value_table(language, "method.vehicles", heads, rows)


def _vehicle_name(language: Language, vehicle: Vehicle) -> Markup:
    """Its name, and what it draws."""
    name = named(language, vehicle.name)
    if vehicle.trailer is None:
        return name
    if vehicle.brake_share == 1.0:
        return Markup("{}. {}").format(name, language.t("method.trailer_braked"))
    share = language.percent(vehicle.brake_share)
    return Markup("{}. {}").format(name, language.html("method.trailer_unbraked", share=share))


def _value_table(language: Language, title: str, heads: tuple[str, ...], rows: list[ValueRow]) -> ValueTable:
    keys = (*heads, "method.source", "method.kind")
    return ValueTable(label=language.t(title), heads=tuple(language.t(k) for k in keys), rows=tuple(rows))


def _gap(site: Site, language: Language) -> Part:
    """Each rule that the edition prints gaps by, with its source."""
    keys = dict.fromkeys(filter(None, (site.figures.gap_rule, *site.figures.questions.gaps)))
    paragraphs: list[Markup] = []
    for rule in (GAP_RULES[key] for key in keys):
        source, kind = source_cells(language, rule.source)
        paragraphs += [
            language.html("method.gap_text", rule=named(language, rule.name)),
            Markup("{}{}{} ({})").format(language.t("method.source"), colon(language), source, kind),
        ]
    return Part(id="gap", title=language.t("quantity.gap"), paragraphs=tuple(paragraphs))


def spread_text(site: Site, language: Language) -> Markup:
    """How the percentiles were sampled, how far they may be off, and to what they are rounded; "" without a spread."""
    figures = site.figures
    sample = figures.spread
    if sample is None:
        return Markup("")
    worst = float(from_metres(figures.table["spread_error_m"].max(), figures.distance_unit))
    return language.html(
        "method.spread_text",
        samples=language.number(sample.samples),
        seed=str(sample.seed),
        error=language.distance(float(up(worst, 0.01)), figures.distance_unit),
        step=language.distance(printed_step(worst, figures.rounding.step), figures.distance_unit),
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
