"""Units, speeds and rounding: the scales on which an edition is printed."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise
from typing import cast

from chartgen.edition.measures import SPEED
from chartgen.edition.model import PARTS, DistanceUnit, Rounding, SpeedUnit
from chartgen.edition.parts import plain
from chartgen.edition.quantity import Quantity, factor
from chartgen.edition.reading import Reading, Row
from chartgen.edition.spec import DISTANCE_NAMES, SPEED_NAMES

MOST_SPEEDS = 200
FASTEST_MPS = 400 / 3.6
_SYSTEMS: dict[str, tuple[SpeedUnit, DistanceUnit]] = {
    "metric": ("km/h", "m"),
    "us": ("mph", "ft"),
    "uk": ("mph", "m"),
}


def units(reading: Reading, root: Row) -> tuple[SpeedUnit | None, DistanceUnit | None, DistanceUnit | None]:
    row: Row = root.get("units", Row("units"))
    by_hand = [key for key in ("speed", "distance") if key in row]
    speed: SpeedUnit | None = None
    distance: DistanceUnit | None = None
    right = 'system = "uk", or both speed = "mph" and distance = "m"'
    if "system" in row and by_hand:
        reading.fault(
            row.at(by_hand[0]), "the units are given twice, by system and by hand", right, given=row[by_hand[0]]
        )
    elif "system" in row:
        speed, distance = _SYSTEMS[row["system"]]
    elif len(by_hand) == 2:
        speed = cast("SpeedUnit", SPEED_NAMES[row["speed"]])
        distance = cast("DistanceUnit", DISTANCE_NAMES[row["distance"]])
    elif "units" in root and not row.broken:
        reading.fault(row.at("system"), "the units of speed and distance are missing", right)
    also = cast("DistanceUnit", DISTANCE_NAMES[row["also"]]) if "also" in row else None
    if also is not None and also == distance:
        reading.fault(
            row.at("also"), "this is the printed distance unit already", "the other unit, or leave it out", given=also
        )
    return speed, distance, also


def shown(number: Fraction, unit: str) -> str:
    """A number made here, as it would be written."""
    return f"{float(number):.12g} {unit}"


def speeds(reading: Reading, root: Row, unit: str | None) -> tuple[Quantity, ...]:
    row: Row = root.get("speeds", Row("speeds"))
    ends = [key for key in ("from", "to", "by") if key in row or key in row.broken]
    right = 'steps = ["20 mph", …], or from, to and by'
    if ("steps" in row or "steps" in row.broken) == bool(ends):
        if "speeds" in root:
            reading.fault(row.path, "the speeds are given twice" if ends else "there are no speeds", right)
        return ()
    if row.broken:
        return ()
    if len(ends) not in (0, 3):
        missing = next(key for key in ("from", "to", "by") if key not in row)
        reading.fault(row.at(missing), "from, to and by belong together", right)
        return ()
    for key in ends or ["steps"]:
        for i, speed in enumerate([row[key]] if ends else row[key], 1):
            _speed_is_sound(reading, row.at(key) if ends else f"{row.at(key)}[{i}]", speed, unit)
    if unit is None or any(f.key.startswith("speeds") for f in reading.faults):
        return ()
    return _stepped(reading, row, unit) if ends else _rising(reading, row)


def _speed_is_sound(reading: Reading, where: str, speed: Quantity, unit: str | None) -> None:
    given = speed.text
    if speed.number <= 0:
        reading.fault(where, "a speed must be above 0", f'such as "30 {unit or "mph"}"', given=given)
    elif speed.value > FASTEST_MPS:
        reading.fault(where, "this speed is out of range", "up to 400 km/h (248 mph)", given=given)
    elif unit is not None and SPEED_NAMES[speed.unit] != unit:
        reading.fault(where, f"the edition's speeds are in {unit}", f'such as "30 {unit}"', given=given)


def _rising(reading: Reading, row: Row) -> tuple[Quantity, ...]:
    steps: tuple[Quantity, ...] = row["steps"]
    for i, (before, after) in enumerate(pairwise(steps), 2):
        if after.number == before.number:
            reading.fault(
                f"speeds.steps[{i}]",
                "this speed stands there twice",
                "each speed once",
                given=after.text,
            )
        elif after.number < before.number:
            reading.fault(
                f"speeds.steps[{i}]",
                "the speeds do not rise",
                "from slow to fast",
                given=after.text,
            )
    return steps


def _stepped(reading: Reading, row: Row, unit: str) -> tuple[Quantity, ...]:
    """from, to, by: exact, counted before any is made."""
    first, last, by = (row[key].number for key in ("from", "to", "by"))
    if last < first:
        reading.fault("speeds.to", "the last speed is below the first", "from slow to fast", given=row["to"].text)
        return ()
    steps = (last - first) / by
    if steps + 1 > MOST_SPEEDS:
        count = f"{int(steps) + 1:,}"
        reading.fault("speeds.by", f"these are {count} speeds", f"at most {MOST_SPEEDS}", given=row["by"].text)
        return ()
    if steps.denominator != 1:
        below = first + int(steps) * by
        right = f'"{shown(below, unit)}" or "{shown(below + by, unit)}"'
        reading.fault("speeds.to", "the last speed is not one of the steps", right, given=row["to"].text)
        return ()
    to_mps = factor(SPEED.units[unit], SPEED.inside)
    numbers = [first + i * by for i in range(int(steps) + 1)]
    return tuple(Quantity(shown(n, unit), n, unit, float(n * to_mps)) for n in numbers)


def rounding(reading: Reading, figures: Row, unit: str | None, also: str | None) -> Rounding:
    row: Row = figures.get("rounding", Row("figures.rounding"))
    rule = row.get("rule", "up")
    rules = {part: rule.get(part, "up") if isinstance(rule, Row) else rule for part in PARTS}
    total = row.get("total", "sum-of-parts")
    if total == "controlled" and "up" in rules.values():
        reading.fault(
            row.at("total"),
            "parts that round up cannot be adjusted to a controlled total",
            'total = "sum-of-parts", or rule = "nearest"',
            given=total,
        )
    if "also_step" in row and also is None:
        reading.fault(row.at("also_step"), "there is no second distance unit", "units.also, or leave it out",
                      given=row["also_step"].text)  # fmt: skip
        also_step = 1.0
    else:
        also_step = _step(reading, row, "also_step", also)
    return Rounding(step=_step(reading, row, "step", unit), also_step=also_step, rules=rules, total=total)


def rounding_is_used(reading: Reading, figures: Row, given: DistanceUnit, unit: str | None, also: str | None) -> None:
    """Fault each rounding key that an adopted table leaves without effect: only where its unit `given` is not the
    printed one are its numbers converted, and then rounded."""
    row: Row = figures.get("rounding", Row("figures.rounding"))
    converted = {"step": unit != given, "also_step": also is not None and also != given}
    for key in row:
        if not converted.get(key, any(converted.values())):
            reading.fault(
                row.at(key),
                "a table that is adopted stays as it stands; it is rounded only where its distances are converted",
                "leave it out",
                given=plain(row[key]),
            )


def _step(reading: Reading, row: Row, key: str, unit: str | None) -> float:
    step: Quantity | None = row.get(key)
    if step is None or unit is None:
        return 1.0
    given = step.text
    if step.unit != unit:
        reading.fault(row.at(key), f"this distance is printed in {unit}", f'such as "1 {unit}"', given=given)
    elif not 0 < step.number <= 100:
        reading.fault(row.at(key), "this step is out of range", f'above 0, up to "100 {unit}"', given=given)
    return float(step.number)
