"""Drivers: from a table that passed the walk to a record with its reaction time, with the checks within it."""

from __future__ import annotations

from dataclasses import replace
from math import ceil, nan
from typing import Literal

from chartgen.edition.catalogue import DRIVERS
from chartgen.edition.methods import needs_time
from chartgen.edition.model import Driver, Reaction, Source
from chartgen.edition.parts import cannot_use, needed, picked, plain, preset_name, source
from chartgen.edition.quantity import Quantity
from chartgen.edition.reading import Reading, Row
from chartgen.edition.spec_parts import PERCENTILES, REACTION_BOUNDS
from chartgen.edition.walk import within
from chartgen.motion.limits import GRAVITY_MPS2
from chartgen.motion.reaction import dropped_rule_time, lognormal, lognormal_percentile
from chartgen.motion.thumb import IMPLIED_REACTION_S

_Percentile = Literal["p50", "p85", "p95"]
_TWO_PERCENTILES = 'reaction_time = { p50 = "1.1 s", p85 = "1.6 s" }'


def driver(reading: Reading, row: Row, method: str) -> Driver | None:
    """One [[driver]]; None where it does not hold together (the faults are noted)."""
    if not needs_time(method):
        for key in (k for k in ("use", "reaction_time", "perception", "percentile") if k in row):
            cannot_use(reading, row, key, method)
        if "use" not in row and not {"reaction_time", "perception", "percentile"} & set(row):
            return _within_the_method(reading, row, method)
    preset = picked(reading, row, DRIVERS)
    if preset is None and "use" not in row:
        needed(reading, row, "driver", "name", "reaction_time")
    reaction = _reaction(reading, row, preset.reaction if preset else None)
    if reaction is not None:
        reaction = _kept_apart(reading, row, reaction)
    if row.broken or reaction is None:
        return None
    own_time = "reaction_time" in row or "perception" in row or preset is None
    # The preset's source vouches for the preset's value only.
    where = source(row) if own_time or "source" in row or preset is None else preset.source
    name = row["name"] if "name" in row or preset is None else preset_name(reading, row, preset.name)
    return Driver(id=row["id"], name=name, reaction=reaction, source=where, preset=preset.key if preset else None)


def _within_the_method(reading: Reading, row: Row, method: str) -> Driver | None:
    """A driver whose reaction time is part of a rule of thumb, or is not told apart by a table that is adopted."""
    needed(reading, row, "driver", "name")
    if row.broken:
        return None
    time_s = IMPLIED_REACTION_S.get(method, nan)
    where = source(row)
    if "source" not in row and method in IMPLIED_REACTION_S:
        where = Source(text=f"within the rule of thumb {method}: its first term, as a time", kind="rule of thumb")
    return Driver(id=row["id"], name=row["name"], reaction=Reaction(time_s=time_s), source=where)


def _reaction(reading: Reading, row: Row, preset: Reaction | None) -> Reaction | None:
    given = row.get("reaction_time")
    wanted: _Percentile | None = row.get("percentile")
    if isinstance(given, Row):
        if given.broken:
            return None
        if "drop" in given:
            _no_percentiles(reading, row, wanted)
            return _dropped(reading, given)
        found = _lognormal(reading, given)
        if found is None:
            return None
        mu, sigma = found
    elif given is None and preset is not None and preset.mu is not None and preset.sigma is not None:
        mu, sigma = preset.mu, preset.sigma
        if wanted in (None, preset.percentile):
            # As the preset has it, to the last digit of its source.
            return preset
    else:
        if "reaction_time" not in row.broken:
            _no_percentiles(reading, row, wanted)
        return Reaction(time_s=given.value) if isinstance(given, Quantity) else preset
    percentile = wanted or "p85"
    if percentile == "p50":
        reading.warn(row.at("percentile"), "the median is printed: half of drivers need longer than the figures allow.")
    time_s = _percentile_time(given, percentile, mu, sigma)
    key = row.at("reaction_time")
    if not within(reading, key, REACTION_BOUNDS, time_s, f"{percentile} of {time_s:.3g} s"):
        return None
    return Reaction(time_s=time_s, percentile=percentile, mu=mu, sigma=sigma)


def _no_percentiles(reading: Reading, row: Row, wanted: str | None) -> None:
    if wanted is not None:
        row.broken.add("percentile")
        allowed = f"{_TWO_PERCENTILES}, or leave percentile out"
        reading.fault(row.at("percentile"), "one fixed reaction time has no percentiles", allowed, given=wanted)


def _percentile_time(given: object, percentile: str, mu: float, sigma: float) -> float:
    """The percentile as it was stated, else the lognormal's: a stated 1.6 s stays 1.6 s to the last digit."""
    if isinstance(given, Row) and percentile in given:
        return float(given[percentile].value)
    return lognormal_percentile(mu, sigma, _share(percentile))


def _share(percentile: str) -> float:
    return int(percentile[1:]) / 100


def _lognormal(reading: Reading, given: Row) -> tuple[float, float] | None:
    """mu and sigma of ln(t/s) through two stated percentiles: ln t = mu + sigma z."""
    stated = [p for p in PERCENTILES if p in given]
    if len(stated) != 2:
        allowed = '{ p50 = "1.1 s", p85 = "1.6 s" }'
        reading.fault(given.path, "exactly two percentiles describe the spread", allowed, given=plain(given))
        return None
    low, high = stated
    t_low, t_high = given[low].value, given[high].value
    if not t_low < t_high:
        allowed = f"a time for {high} that is longer than the one for {low}"
        reading.fault(given.path, f"{low} is not shorter than {high}", allowed, given=plain(given))
        return None
    return lognormal(_share(low), t_low, _share(high), t_high)


# ---- a group's own measurement, and the two shares of a time ------------------------------------------------------


def _dropped(reading: Reading, given: Row) -> Reaction | None:
    """The time in which a dropped rule falls so far."""
    if len(given) > 1:
        allowed = '{ drop = "0.60 m" } or { p50 = "1.1 s", p85 = "1.6 s" }'
        reading.fault(given.path, "a dropped rule and percentiles are two ways to say it", allowed, given=plain(given))
        return None
    drop: Quantity = given["drop"]
    time_s = float(dropped_rule_time(drop.value))
    if time_s < REACTION_BOUNDS.least:
        least_m = ceil(GRAVITY_MPS2 * REACTION_BOUNDS.least**2 / 2.0 * 1000.0) / 1000.0
        problem = f"a rule falls so far in {time_s:.3g} s, which is out of range"
        allowed = f"{REACTION_BOUNDS.says}: a fall of at least {least_m:.3f} m"
        reading.fault(given.at("drop"), problem, allowed, given=drop.text)
        return None
    reading.warn(
        given.at("drop"),
        f"{time_s:.3g} s is the time of a hand that waits for the rule; a driver who is surprised, and whose foot must "
        "reach the brake, needs longer.",
    )
    return Reaction(time_s=time_s, drop_m=drop.value)


def _kept_apart(reading: Reading, row: Row, reaction: Reaction) -> Reaction | None:
    """The reaction time with its share of perception; None where they do not go together."""
    perception: Quantity | None = row.get("perception")
    if perception is None:
        return reaction
    where = row.at("perception")
    if reaction.mu is not None:
        reading.fault(
            where,
            "perception and reaction are kept apart only for a fixed time",
            'reaction_time = "2.5 s", or leave perception out',
            given=perception.text,
        )
    elif reaction.drop_m is not None:
        reading.fault(
            where,
            "a dropped rule measures the whole time; it does not keep the two apart",
            "leave perception out",
            given=perception.text,
        )
    elif not perception.value < reaction.time_s:
        reading.fault(
            where,
            f"perception is part of the reaction time of {reaction.time_s:g} s and must be shorter",
            f"above 0 s, below {reaction.time_s:g} s",
            given=perception.text,
        )
    else:
        return replace(reaction, perception_s=perception.value)
    return None
