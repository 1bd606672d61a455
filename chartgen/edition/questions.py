"""What is asked beside the distances, held against the speeds, ids, methods and catalogue that there are."""

from __future__ import annotations

from collections.abc import Sequence

from chartgen.edition.cases import known
from chartgen.edition.catalogue import GAP_RULES, HEADLIGHTS
from chartgen.edition.methods import FIRST_PRINCIPLES, called
from chartgen.edition.model import Driver, Questions, Spread, Surface
from chartgen.edition.parts import plain
from chartgen.edition.prints import Made
from chartgen.edition.quantity import Quantity
from chartgen.edition.reading import Reading, Row, listed, near

_BACKWARDS = ("residual_from", "sight", "headlight", "gap")
"""Questions that are answered by running the motion backwards, which only first principles can."""


def questions(reading: Reading, row: Row, made: Made, method: str) -> Questions:
    """The [questions] section; what does not hold together in it is noted."""
    if method != FIRST_PRINCIPLES:
        for key in (k for k in _BACKWARDS if k in row):
            value = row[key]
            reading.fault(
                row.at(key),
                f"{called(method)} gives no motion from which this could be answered",
                f'leave it out, or method = "{FIRST_PRINCIPLES}"',
                given=plain(value),
            )
    sight: Quantity | None = row.get("sight")
    headlight: str | None = row.get("headlight")
    if headlight is not None and headlight not in HEADLIGHTS:
        reading.fault(
            row.at("headlight"),
            "the catalogue has no such headlight reach",
            listed(HEADLIGHTS),
            given=headlight,
            near=near(headlight, HEADLIGHTS),
        )
    return Questions(
        residual_from=_residual_from(reading, row, made),
        sight_m=sight.value if sight else None,
        headlight=headlight,
        gaps=_gaps(reading, row, made),
        driver=_reference(reading, row, made, "driver"),
        surface=_reference(reading, row, made, "surface"),
    )


def _residual_from(reading: Reading, row: Row, made: Made) -> float | None:
    speed: Quantity | None = row.get("residual_from")
    if speed is None:
        return None
    value = float(speed.number)
    if made.speeds and (speed.unit != made.speed_unit or value not in made.speeds):
        reading.fault(
            row.at("residual_from"),
            "this is not one of the edition's speeds",
            listed(list(made.speeds.values())),
            given=speed.text,
        )
    elif made.speeds and value == max(made.speeds):
        reading.warn(row.at("residual_from"), "this is the fastest of the speeds; none is left to compare with it.")
    return value


def _gaps(reading: Reading, row: Row, made: Made) -> tuple[str, ...]:
    gaps: tuple[str, ...] = row.get("gap", ())
    for number, gap in enumerate(gaps, 1):
        where = f"{row.at('gap')}[{number}]"
        if gap not in GAP_RULES:
            reading.fault(
                where, "the catalogue has no such rule", listed(GAP_RULES), given=gap, near=near(gap, GAP_RULES)
            )
        elif GAP_RULES[gap].per_length_s_per_m is not None:
            used = None if made.rows is None else {combination[1] for combination in made.rows}
            for vehicle in (v for v, length in made.lengths.items() if length is None and (used is None or v in used)):
                reading.warn(where, f'{gap} goes by length, and the vehicle "{vehicle}" states none: it gets no gap.')
    return gaps


def _reference(reading: Reading, row: Row, made: Made, kind: str) -> str | None:
    """The id that others are compared with; it must stand in a case, beside another."""
    given: str | None = row.get(kind)
    if given is None or not known(reading, row.at(kind), kind, given, made.ids[kind]) or made.rows is None:
        return given
    place = 0 if kind == "driver" else 2
    there = {combination[place] for combination in made.rows}
    if given not in there:
        others = sorted(str(i) for i in there)
        reading.fault(row.at(kind), f"no [[case]] has this {kind}", listed(others), given=given)
    elif len(there) == 1:
        reading.warn(row.at(kind), f"there is no other {kind} that could be compared with it.")
    return given


# ---- the spread ------------------------------------------------------------------------------------------------------


def spread(
    reading: Reading,
    row: Row | None,
    method: str,
    drivers: Sequence[Driver | None],
    surfaces: Sequence[Surface | None],
    made: Made,
) -> Spread | None:
    """The [figures.spread] section. `drivers`, `surfaces`: those of the edition, None for each that is at fault."""
    if row is None:
        return None
    samples, seed = row.get("samples", 4096), row.get("seed", 1)
    if samples & (samples - 1):
        below = 1 << (samples.bit_length() - 1)
        allowed = f"{below} or {2 * below}"
        reading.fault(row.at("samples"), "the sample is not a power of two", allowed, given=samples)
    if method != FIRST_PRINCIPLES:
        reading.fault(
            row.path,
            f"{called(method)} gives one distance and no spread of it",
            f'leave the section out, or method = "{FIRST_PRINCIPLES}"',
        )
    elif not row.broken and None not in drivers and None not in surfaces and made.rows is not None:
        _something_varies(reading, row, drivers, surfaces, made)
    return Spread(samples=samples, seed=seed)


def _something_varies(
    reading: Reading, row: Row, drivers: Sequence[Driver | None], surfaces: Sequence[Surface | None], made: Made
) -> None:
    used = {item for combination in made.rows or () for item in (combination[0], combination[2])}
    varying = [d.id for d in drivers if d is not None and d.reaction.sigma]
    varying += [s.id for s in surfaces if s is not None and s.friction.low is not None and (
        s.friction.high is None or s.friction.low < s.friction.high)]  # fmt: skip
    if used and not used & set(varying):
        reading.fault(
            row.path,
            "there is nothing from which a spread could follow: each reaction time and each friction is one value",
            'reaction_time = { p50 = "1.1 s", p85 = "1.6 s" }, or friction_range = [0.60, 0.80]',
        )
