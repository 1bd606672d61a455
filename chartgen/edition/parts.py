"""Drivers, surfaces and vehicles: from tables that passed the walk to records, with the checks within one of them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import exp, log
from statistics import NormalDist
from typing import Literal, TypeVar, cast

from chartgen.edition.catalogue import DRIVERS, SURFACES
from chartgen.edition.model import Driver, Friction, Reaction, Source, Surface, Text, Vehicle
from chartgen.edition.quantity import Quantity
from chartgen.edition.reading import Reading, Row, listed, near
from chartgen.edition.spec import FRICTION_BOUNDS, NEEDS_LIMIT, PERCENTILES, REACTION_BOUNDS, TABLES
from chartgen.edition.walk import example, within

_Percentile = Literal["p50", "p85", "p95"]
_State = Literal["dry", "wet", "snow", "ice"]
STATES: tuple[_State, ...] = ("dry", "wet", "snow", "ice")
OWN_ASSUMPTION = Source(text="", kind="publisher")
"""No source stated: printed as the publisher's own assumption."""
_P = TypeVar("_P")


def unique(reading: Reading, rows: Sequence[Row]) -> None:
    """Fault each id that an earlier row of the same kind has."""
    seen: dict[str, Row] = {}
    for row in rows:
        if "id" in row and row["id"] in seen:
            first = seen[row["id"]].path
            reading.fault(row.at("id"), f"{first} has this id already", "an id of its own", given=row["id"])
        seen.setdefault(row.get("id", ""), row)


def _needed(reading: Reading, row: Row, table: str, *keys: str) -> bool:
    """Fault each key that is missing though no preset stands in for it. True where all are there and sound."""
    for key in keys:
        if key not in row and key not in row.broken:
            row.broken.add(key)
            reading.fault(row.at(key), "this is needed and missing", example(key, TABLES[table][key], reading))
    return not row.broken


def _preset(reading: Reading, row: Row, catalogue: Mapping[str, _P]) -> _P | None:
    key = row.get("use")
    if key is None:
        return None
    if key not in catalogue:
        row.broken.add("use")
        reading.fault(
            row.at("use"), "the catalogue has no such preset", listed(catalogue), given=key, near=near(key, catalogue)
        )
    return catalogue.get(key)


def _preset_name(reading: Reading, row: Row, names: Text) -> Text:
    """The preset's own name in the edition's languages; one that it lacks is the edition's to give."""
    for tag in reading.languages:
        if tag not in names:
            reading.missing_text(row.at(f"name.{tag}"), tag)
    return {tag: names[tag] for tag in reading.languages if tag in names}


def _source(row: Row) -> Source:
    return Source(text=row["source"]) if "source" in row else OWN_ASSUMPTION


# ---- drivers -----------------------------------------------------------------------------------------------------


def driver(reading: Reading, row: Row) -> Driver | None:
    """One [[driver]]; None where it does not hold together (the faults are noted)."""
    preset = _preset(reading, row, DRIVERS)
    if preset is None and "use" not in row:
        _needed(reading, row, "driver", "name", "reaction_time")
    reaction = _reaction(reading, row, preset.reaction if preset else None)
    if row.broken or reaction is None:
        return None
    own_time = "reaction_time" in row or preset is None
    # The preset's source vouches for the preset's value only.
    source = _source(row) if own_time or "source" in row or preset is None else preset.source
    name = row["name"] if "name" in row or preset is None else _preset_name(reading, row, preset.name)
    return Driver(id=row["id"], name=name, reaction=reaction, source=source, preset=preset.key if preset else None)


def _reaction(reading: Reading, row: Row, preset: Reaction | None) -> Reaction | None:
    given = row.get("reaction_time")
    wanted: _Percentile | None = row.get("percentile")
    if isinstance(given, Row):
        if given.broken:
            return None
        found = _lognormal(reading, given)
        if found is None:
            return None
        mu, sigma = found
    elif given is None and preset is not None and preset.mu is not None and preset.sigma is not None:
        mu, sigma = preset.mu, preset.sigma
    else:
        if wanted is not None and "reaction_time" not in row.broken:
            allowed = 'reaction_time = { p50 = "1.1 s", p85 = "1.6 s" }, or leave percentile out'
            reading.fault(row.at("percentile"), "one fixed reaction time has no percentiles", allowed, given=wanted)
            row.broken.add("percentile")
        return Reaction(time_s=given.value) if isinstance(given, Quantity) else preset
    percentile = wanted or "p85"
    if percentile == "p50":
        reading.warn(row.at("percentile"), "the median is printed: half of drivers need longer than the figures allow.")
    time_s = _percentile_time(given, percentile, mu, sigma)
    key = row.at("reaction_time")
    if not within(reading, key, REACTION_BOUNDS, time_s, f"{percentile} of {time_s:.3g} s"):
        return None
    return Reaction(time_s=time_s, percentile=percentile, mu=mu, sigma=sigma)


def _percentile_time(given: object, percentile: str, mu: float, sigma: float) -> float:
    """The percentile as it was stated, else the lognormal's: a stated 1.6 s stays 1.6 s to the last digit."""
    if isinstance(given, Row) and percentile in given:
        return float(given[percentile].value)
    return exp(mu + sigma * _z(percentile))


def _z(percentile: str) -> float:
    return NormalDist().inv_cdf(int(percentile[1:]) / 100)


def _lognormal(reading: Reading, given: Row) -> tuple[float, float] | None:
    """mu and sigma of ln(t/s) through two stated percentiles: ln t = mu + sigma z."""
    stated = [p for p in PERCENTILES if p in given]
    if len(stated) != 2:
        allowed = '{ p50 = "1.1 s", p85 = "1.6 s" }'
        reading.fault(given.path, "exactly two percentiles describe the spread", allowed, given=_plain(given))
        return None
    low, high = stated
    t_low, t_high = given[low].value, given[high].value
    if not t_low < t_high:
        allowed = f"a time for {high} that is longer than the one for {low}"
        reading.fault(given.path, f"{low} is not shorter than {high}", allowed, given=_plain(given))
        return None
    sigma = (log(t_high) - log(t_low)) / (_z(high) - _z(low))
    return log(t_low) - sigma * _z(low), sigma


def _plain(row: Row) -> dict[str, str]:
    """A table of quantities as it was written, for a message."""
    return {key: value.text for key, value in row.items()}


# ---- surfaces ----------------------------------------------------------------------------------------------------


def surface(reading: Reading, row: Row, method: str) -> Surface | None:
    """One [[surface]]; None where it does not hold together."""
    preset = _preset(reading, row, SURFACES)
    sight = method.startswith("sight-")
    if preset is None and "use" not in row:
        _needed(reading, row, "surface", "name", *(() if sight else ("friction",)))
    friction = _friction(reading, row) if "friction" in row else (preset.friction if preset else Friction())
    if sight and "friction" in row:
        reading.warn(row.at("friction"), f"the method {method} does not use friction; the value has no effect.")
    _range_needs_constant(reading, row)
    if row.broken or friction is None:
        return None
    source = preset.source if preset and "friction" not in row and "source" not in row else _source(row)
    name = row["name"] if "name" in row or preset is None else _preset_name(reading, row, preset.name)
    return Surface(
        id=row["id"],
        name=name,
        friction=friction,
        source=source,
        state=row.get("state") or (cast("_State", preset.state) if preset else _state_of(row["id"])),
        preset=preset.key if preset else None,
    )


def _state_of(surface_id: str) -> _State | None:
    first = surface_id.split("-", maxsplit=1)[0]
    return next((state for state in STATES if state == first), None)


def _range_needs_constant(reading: Reading, row: Row) -> None:
    if "friction_range" in row and not isinstance(row.get("friction"), float) and "friction" not in row.broken:
        row.broken.add("friction_range")
        reading.fault(
            row.at("friction_range"),
            "a range belongs to one constant friction of this surface",
            "friction = 0.67 beside it, or leave it out",
            given=list(row["friction_range"]),
        )


def _friction(reading: Reading, row: Row) -> Friction | None:
    given = row["friction"]
    if isinstance(given, Row):
        return None if given.broken else _falling(reading, given)
    low, high = row.get("friction_range", (None, None))
    if low is not None and high is not None:
        if not low <= given <= high:
            reading.fault(
                row.at("friction_range"),
                f"the friction {given:g} does not lie in its range",
                "[lowest, highest] around it",
                given=list(row["friction_range"]),
            )
            return None
        reading.warn(
            row.at("friction_range"),
            "the range is printed among the assumptions; the spread of distances that follows from it is not made yet.",
        )
    return Friction(mu=given, low=low, high=high)


def _falling(reading: Reading, given: Row) -> Friction | None:
    f60, sp_kmh, cap = given["f60"], given["sp"].value, given.get("max")
    at_rest = min(f60 * exp(60 / sp_kmh), cap if cap is not None else float("inf"))
    if at_rest > FRICTION_BOUNDS.most:
        reading.fault(
            given.path,
            f"near standstill this friction reaches {at_rest:.2f}",
            f"max = … beside f60 and sp, {FRICTION_BOUNDS.says}",
            given={"f60": f60, "sp": given["sp"].text},
        )
        return None
    if at_rest > 1.2:
        reading.warn(given.path, f"near standstill the friction reaches {at_rest:.2f}; usual is up to 1.2.")
    return Friction(f60=f60, sp_kmh=sp_kmh, max_mu=cap)


# ---- vehicles ----------------------------------------------------------------------------------------------------


def vehicle(reading: Reading, row: Row, method: str, others: Sequence[Row]) -> Vehicle | None:
    """One [[vehicle]]; None where it does not hold together. `others`: all vehicle tables, for the laden partner."""
    _needed(reading, row, "vehicle", "kind", "name")
    _method_inputs(reading, row, method)
    heavy = row.get("kind") in NEEDS_LIMIT
    if heavy and method == "first-principles":
        _lag_is_usual(reading, row)
    limit = row.get("max_deceleration")
    if row.broken:
        return None
    return Vehicle(
        id=row["id"],
        kind=row["kind"],
        name=row["name"],
        load=row.get("load"),
        unladen_of=_laden_partner(reading, row, others),
        max_deceleration_mps2=limit.value if limit else None,
        brake_lag_s=row["brake_lag"].value if "brake_lag" in row else 0.0,
        build_up_s=row["build_up"].value if "build_up" in row else 0.0,
        brake_efficiency=row.get("brake_efficiency", 1.0),
        length_m=row["length"].value if "length" in row else None,
        source=_source(row),
    )


def _method_inputs(reading: Reading, row: Row, method: str) -> None:
    """What the method must have and what it cannot use: an input is never ignored."""
    kind = row.get("kind")
    if "max_deceleration" not in row and "max_deceleration" not in row.broken:
        if method == "first-principles" and kind in NEEDS_LIMIT:
            row.broken.add("max_deceleration")
            reading.fault(
                row.at("max_deceleration"),
                f"a vehicle of kind {kind} needs its own braking limit: the road alone would make it stop too short",
                'max_deceleration = "5 m/s^2"',
            )
        elif method.startswith("sight-"):
            row.broken.add("max_deceleration")
            reading.fault(
                row.at("max_deceleration"),
                f"the method {method} works with the vehicle's deceleration",
                'max_deceleration = "3.4 m/s^2"',
            )
    unused = {"brake_lag", "build_up"} if method != "first-principles" else set()
    unused |= {"max_deceleration"} if method.startswith("slide-") else set()
    unused |= {"brake_efficiency"} if method.startswith("sight-") else set()
    for key in [k for k in row if k in unused]:
        row.broken.add(key)
        value = row[key]
        shown = value.text if isinstance(value, Quantity) else value
        reading.fault(
            row.at(key),
            f"the method {method} cannot use this",
            'leave it out, or method = "first-principles"',
            given=shown,
        )


def _lag_is_usual(reading: Reading, row: Row) -> None:
    if "brake_lag" in row.broken:
        return
    lag_s = row["brake_lag"].value if "brake_lag" in row else 0.0
    if not 0.2 <= lag_s <= 1.0:
        reading.warn(
            row.at("brake_lag"),
            f"a lag of {lag_s:g} s is accepted but unusual for air brakes; usual is 0.2 s to 1 s.",
        )


def _laden_partner(reading: Reading, row: Row, others: Sequence[Row]) -> str | None:
    """Id of the laden vehicle: as stated, else by the id's stem ("rigid-unladen" beside "rigid-laden" or "rigid")."""
    laden = [o["id"] for o in others if "id" in o and o.get("load") == "laden" and o.get("kind") == row["kind"]]
    stated = row.get("unladen_of")
    if stated is None:
        stem = row["id"].replace("unladen", "").strip("-")
        same = [i for i in laden if i.replace("laden", "").strip("-") == stem]
        return same[0] if row.get("load") == "unladen" and len(same) == 1 else None
    if row.get("load") != "unladen":
        reading.fault(row.at("unladen_of"), "only an unladen vehicle has a laden one", 'load = "unladen"', given=stated)
    elif stated not in laden:
        reading.fault(
            row.at("unladen_of"),
            f"there is no laden {row['kind']} with this id",
            listed(laden) or 'a [[vehicle]] with load = "laden"',
            given=stated,
            near=near(stated, laden),
        )
    return cast("str", stated)
