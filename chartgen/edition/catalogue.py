"""What an edition may pick by key: reaction times, surfaces, vehicles, following-gap rules and headlight reaches.

The presets are data, `presets/<shelf>.toml`; a shelf is read when somebody first looks into it and then kept. A value
nobody has opened the source of says so (`from_memory`); it is printed with that remark. None is labelled correct: the
publisher chooses. Where a source gives a range of friction, the value is its lower end: the longer distance.
"""

from __future__ import annotations

import tomllib
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property
from math import exp, log, sqrt
from pathlib import Path
from types import MappingProxyType
from typing import Any, Generic, TypeVar, cast

from chartgen.edition.model import Friction, Kind, Reaction, Source, Text, Trailer
from chartgen.sources import BIBLIOGRAPHY, CHOSEN

FOLDER = Path(__file__).with_name("presets")
UNITS = {"reaction": "s", "surface": "", "vehicle": "m/s²", "gap": "s", "headlight": "m"}
"""The shelves, with the unit of each one's value and range."""

Entry = Mapping[str, Any]


@dataclass(frozen=True, slots=True, kw_only=True)
class Preset:
    """What every preset has. `value` with `low`..`high`: the quantity it is for, and the range that the source gives; a
    source that states one figure has it at both ends, as no spread is made up."""

    key: str
    name: Text
    source: Source
    work: str | None
    """Key in `sources.BIBLIOGRAPHY`; None: chosen by us."""
    place: str
    """Table, section or article in the work; empty: chosen by us."""
    year: int | None
    value: float | None
    low: float | None
    high: float | None
    doubtful: tuple[str, ...]
    """Languages in which the name is to be looked at first by somebody who grew up with it."""

    @property
    def unit(self) -> str:
        """Of `value`, `low` and `high`."""
        return UNITS[self.key.partition("/")[0]]


@dataclass(frozen=True, slots=True, kw_only=True)
class DriverPreset(Preset):
    """A reaction time; its range in s."""

    reaction: Reaction


@dataclass(frozen=True, slots=True, kw_only=True)
class SurfacePreset(Preset):
    """A surface; its range is that of the friction, at 60 km/h where it falls with speed."""

    friction: Friction
    state: str


@dataclass(frozen=True, slots=True, kw_only=True)
class VehiclePreset(Preset):
    """A vehicle; its range is that of the deceleration in m/s². Fields as in `model.Vehicle`."""

    kind: Kind
    load: str | None
    max_deceleration_mps2: float | None
    brake_lag_s: float
    build_up_s: float
    brake_efficiency: float
    length_m: float | None
    mass_kg: float | None
    trailer: Trailer | None
    test_figure: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class GapRule(Preset):
    """Following gap in seconds: `fixed_s`, or `per_length_s_per_m` times the vehicle's length (one of them is None);
    `extra_s` more above `extra_above_mps`; the sum times `wet_factor` or `ice_factor` (snow counts as ice: longer)."""

    fixed_s: float | None
    per_length_s_per_m: float | None
    extra_s: float
    extra_above_mps: float
    wet_factor: float
    ice_factor: float

    @property
    def unit(self) -> str:
        return "s" if self.fixed_s is not None else "s/m"


@dataclass(frozen=True, slots=True, kw_only=True)
class HeadlightReach(Preset):
    """How far ahead the headlights show what is on the road; its range in m."""

    reach_m: float


_P = TypeVar("_P", bound=Preset)


class Shelf(Mapping[str, _P], Generic[_P]):
    """The presets of one kind by key, e.g. ``reaction/surprise``. Its file is read at the first look into it."""

    def __init__(self, name: str, make: Callable[[Entry, dict[str, Any]], _P]) -> None:
        self.name = name
        self._make = make

    @cached_property
    def _presets(self) -> dict[str, _P]:
        entries = tomllib.loads((FOLDER / f"{self.name}.toml").read_text(encoding="utf-8"))
        return {key: self._make(entry, _common(key, entry)) for key, entry in self._keyed(entries)}

    def _keyed(self, entries: Mapping[str, Entry]) -> Iterator[tuple[str, Entry]]:
        return ((f"{self.name}/{id}", entry) for id, entry in entries.items())

    def __getitem__(self, key: str) -> _P:
        return self._presets[key]

    def __iter__(self) -> Iterator[str]:
        return iter(self._presets)

    def __len__(self) -> int:
        return len(self._presets)


def _common(key: str, entry: Entry) -> dict[str, Any]:
    low, high = entry.get("range", (None, None))
    return {
        "key": key,
        "name": MappingProxyType(entry["name"]),
        "source": _source(entry),
        "work": entry.get("work"),
        "place": entry.get("place", ""),
        "year": entry.get("year"),
        "low": low,
        "high": high,
        "doubtful": tuple(entry.get("doubtful", ())),
    }


def _source(entry: Entry) -> Source:
    """The work's own words, its place and year where they do not name them, and what the entry adds."""
    note = entry.get("note", "")
    if "work" not in entry:
        return Source(text=note, kind=CHOSEN)
    work = BIBLIOGRAPHY[entry["work"]]
    text = work.text
    if entry.get("place", "") not in text:
        text += f"; {entry['place']}"
    if str(entry.get("year", "")) not in text:
        text += f" ({entry['year']})"
    return Source(
        text=f"{text}: {note}" if note else text,
        kind=entry.get("kind", work.kind),
        from_memory=entry.get("from_memory", not work.opened),
    )


def _ranged(common: dict[str, Any], value: float | None) -> dict[str, Any]:
    """`common` with the value, which is at both ends of its range where the source states one figure."""
    return common | {"value": value} | ({} if common["low"] is not None else {"low": value, "high": value})


# ---- reaction times ----------------------------------------------------------------------------------------------


def _driver(entry: Entry, common: dict[str, Any]) -> DriverPreset:
    reaction = _lognormal(entry) if "percentile" in entry else Reaction(**_some(entry, "time_s", "perception_s"))
    if reaction.mu is not None and reaction.sigma is not None and common["low"] is None:
        # The range of a spread: what half and what nineteen of twenty drivers need at most.
        common |= {"low": exp(reaction.mu), "high": exp(reaction.mu + reaction.sigma * _z("p95"))}
    return DriverPreset(reaction=reaction, **_ranged(common, reaction.time_s))


def _lognormal(entry: Entry) -> Reaction:
    """ln t is normal: from its mean and deviation, from those of t itself, or from two percentiles, as published."""
    stated = {key.removesuffix("_s"): entry[key] for key in entry if key[0] == "p" and key[1:3].isdigit()}
    if "mu" in entry:
        mu, sigma = entry["mu"], entry["sigma"]
    elif "mean_s" in entry:
        sigma = sqrt(log(1 + (entry["sd_s"] / entry["mean_s"]) ** 2))
        mu = log(entry["mean_s"]) - sigma**2 / 2
    else:
        (low, t_low), (high, t_high) = sorted(stated.items())
        sigma = log(t_high / t_low) / (_z(high) - _z(low))
        mu = log(t_low) - sigma * _z(low)
    wanted = entry["percentile"]
    # A published percentile stays itself to the last digit.
    time_s = stated.get(wanted, exp(mu + sigma * _z(wanted)))
    return Reaction(time_s=time_s, percentile=wanted, mu=mu, sigma=sigma)


def _z(percentile: str) -> float:
    from statistics import NormalDist  # noqa: PLC0415 - only for whoever looks into the shelf

    return NormalDist().inv_cdf(int(percentile[1:]) / 100)


# ---- the other shelves -------------------------------------------------------------------------------------------


def _some(entry: Entry, *keys: str) -> dict[str, Any]:
    return {key: entry[key] for key in keys if key in entry}


def _surface(entry: Entry, common: dict[str, Any]) -> SurfacePreset:
    values = _some(entry, "mu", "f60", "sp_kmh", "max_mu", "texture_mm", "sn0", "png_h_per_mile")
    for key in ("table", "valid_kmh"):
        if key in entry:
            values[key] = tuple(tuple(pair) if isinstance(pair, list) else float(pair) for pair in entry[key])
    if common["low"] is not None:
        values |= {"low": common["low"], "high": common["high"]}
    friction = Friction(**values)
    at_60 = entry.get("mu", entry.get("f60", entry.get("at_60")))
    return SurfacePreset(friction=friction, state=entry["state"], **_ranged(common, at_60))


def _vehicle(entry: Entry, common: dict[str, Any]) -> VehiclePreset:
    limit = entry.get("max_deceleration_mps2")
    return VehiclePreset(
        kind=cast("Kind", entry["kind_of_vehicle"]),
        load=entry.get("load"),
        max_deceleration_mps2=limit,
        brake_lag_s=entry.get("brake_lag_s", 0.0),
        build_up_s=entry.get("build_up_s", 0.0),
        brake_efficiency=entry.get("brake_efficiency", 1.0),
        length_m=entry.get("length_m"),
        mass_kg=entry.get("mass_kg"),
        trailer=Trailer(**entry["trailer"]) if "trailer" in entry else None,
        test_figure=entry.get("test_figure", False),
        **_ranged(common, limit),
    )


def _gap(entry: Entry, common: dict[str, Any]) -> GapRule:
    per_length = entry.get("per_length_s_per_m")
    if "seconds_per_10_ft" in entry:
        per_length = entry["seconds_per_10_ft"] / (10 * 0.3048)
    return GapRule(
        fixed_s=entry.get("fixed_s"),
        per_length_s_per_m=per_length,
        extra_s=entry.get("extra_s", 0.0),
        extra_above_mps=entry.get("extra_above_mph", 0.0) * 0.44704,
        wet_factor=entry.get("wet_factor", 1.0),
        ice_factor=entry.get("ice_factor", 1.0),
        **_ranged(common, entry.get("fixed_s", per_length)),
    )


def _headlight(entry: Entry, common: dict[str, Any]) -> HeadlightReach:
    reach_m = entry["reach_m"] if "reach_m" in entry else entry["reach_ft"] * 0.3048
    if "range_ft" in entry:
        low, high = entry["range_ft"]
        common |= {"low": low * 0.3048, "high": high * 0.3048}
    return HeadlightReach(reach_m=reach_m, **_ranged(common, reach_m))


DRIVERS: Mapping[str, DriverPreset] = Shelf("reaction", _driver)
SURFACES: Mapping[str, SurfacePreset] = Shelf("surface", _surface)
VEHICLES: Mapping[str, VehiclePreset] = Shelf("vehicle", _vehicle)
GAP_RULES: Mapping[str, GapRule] = Shelf("gap", _gap)
HEADLIGHTS: Mapping[str, HeadlightReach] = Shelf("headlight", _headlight)
SHELVES: Mapping[str, Mapping[str, Preset]] = MappingProxyType(
    {"reaction": DRIVERS, "surface": SURFACES, "vehicle": VEHICLES, "gap": GAP_RULES, "headlight": HEADLIGHTS}
)
