"""The catalogue as a page: every value that an edition may pick by key, with its range, its kind and its source."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final

from markupsafe import Markup, escape

from chartgen.edition.catalogue import (
    SHELVES,
    DriverPreset,
    GapRule,
    HeadlightReach,
    Preset,
    SurfacePreset,
    VehiclePreset,
)  # fmt: skip
from chartgen.figures.rounding import down, up
from chartgen.figures.units import from_metres
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.site.edition_site import Site, named
from chartgen.site.method import Part, ValueRow, ValueTable, friction_text, source_cells
from chartgen.site.tables import deceleration

_WHAT: Final[Mapping[str, str]] = {
    "reaction": "quantity.driver", "surface": "quantity.surface", "vehicle": "quantity.vehicle",
    "gap": "quantity.gap_rule", "headlight": "catalogue.headlight",
}  # fmt: skip


@dataclass(frozen=True, slots=True, kw_only=True)
class CataloguePage:
    title: str
    intro: str
    parts: tuple[Part, ...]


def catalogue_page(site: Site, language: Language) -> CataloguePage:
    """All shelves of the catalogue, in its own order."""
    return CataloguePage(
        title=language.t("page.catalogue"),
        intro=language.t("catalogue.intro"),
        parts=tuple(_part(site, language, shelf, presets) for shelf, presets in SHELVES.items()),
    )


def _part(site: Site, language: Language, shelf: str, presets: Mapping[str, Preset]) -> Part:
    title = language.t(f"catalogue.{shelf}")
    heads = (_WHAT[shelf], "catalogue.key", "method.value", "catalogue.range", "method.source", "method.kind")
    rows = tuple(
        ValueRow(
            preset.key.replace("/", "-"),
            (
                named(language, preset.name),
                Markup('<code dir="ltr">{}</code>').format(preset.key),
                _value(site, language, preset),
                _range(site, language, preset),
                *source_cells(language, preset.source),
            ),
        )
        for preset in presets.values()
    )
    table = ValueTable(label=title, heads=tuple(language.t(key) for key in heads), rows=rows)
    return Part(id=f"shelf-{shelf}", title=title, table=table)


def _value(site: Site, language: Language, preset: Preset) -> Markup:
    """What the preset gives, as a method page writes it."""
    match preset:
        case DriverPreset(reaction=reaction):
            value = isolate(language.seconds(reaction.time_s))
            if reaction.percentile is not None:
                share = language.percent(int(reaction.percentile[1:]) / 100)
                value = Markup("{}. {}").format(value, language.html("method.lognormal", share=share))
            return value
        case SurfacePreset(friction=friction):
            return friction_text(language, friction, with_range=False)
        case VehiclePreset():
            return _vehicle(site, language, preset)
        case GapRule():
            return _gap(language, preset)
        case HeadlightReach(reach_m=reach_m):
            return _reach(site, language, reach_m)
    raise TypeError(f"no page form for {preset!r}")


def _vehicle(site: Site, language: Language, preset: VehiclePreset) -> Markup:
    limit = preset.max_deceleration_mps2
    pieces = [
        escape(language.t("method.no_own_limit")) if limit is None else isolate(deceleration(site, language, limit))
    ]
    if preset.brake_lag_s:
        pieces.append(
            Markup("{} {}").format(language.t("method.lag_time"), isolate(language.seconds(preset.brake_lag_s)))
        )
    if preset.build_up_s:
        pieces.append(
            Markup("{} {}").format(language.t("quantity.build_up"), isolate(language.seconds(preset.build_up_s)))
        )
    if preset.trailer is not None:
        braked = preset.trailer.braked or preset.mass_kg is None or preset.trailer.mass_kg is None
        if braked:
            pieces.append(escape(language.t("method.trailer_braked")))
        else:
            share = preset.mass_kg / (preset.mass_kg + preset.trailer.mass_kg)  # type: ignore[operator]
            pieces.append(language.html("method.trailer_unbraked", share=language.percent(share)))
    return Markup(" · ").join(pieces)


def _gap(language: Language, rule: GapRule) -> Markup:
    """The rule's name says how it is made; here its number."""
    if rule.fixed_s is not None:
        return isolate(language.seconds(rule.fixed_s))
    return isolate(f"{language.number(rule.value or 0.0, 3)} {language.unit('s')}/{language.unit('m')}")


def _reach(site: Site, language: Language, reach_m: float) -> Markup:
    """Down to a whole one: a reach printed longer than it is would let a speed seem safe that is not."""
    unit = site.figures.distance_unit
    return isolate(language.distance(float(down(from_metres(reach_m, unit))), unit))


def _range(site: Site, language: Language, preset: Preset) -> Markup:
    """Lowest and highest value of the source; one where it gives one."""
    low, high = preset.low, preset.high
    if low is None or high is None:
        return escape(language.t("word.none"))
    if isinstance(preset, HeadlightReach):
        unit = site.figures.distance_unit
        ends = [language.distance(float(r(from_metres(x, unit))), unit) for r, x in ((down, low), (up, high))]
    elif isinstance(preset, VehiclePreset):
        ends = [deceleration(site, language, x) for x in (low, high)]
    elif isinstance(preset, DriverPreset) or (isinstance(preset, GapRule) and preset.fixed_s is not None):
        ends = [language.seconds(x) for x in (low, high)]
    else:
        ends = [language.number(x, 2) for x in (low, high)]
    return isolate(ends[0]) if low == high else isolate(" – ".join(ends))
