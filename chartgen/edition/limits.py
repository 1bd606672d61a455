"""Speed limits in force on a day: what is printed beside the figures so that nobody takes a speed for allowed."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import date

from chartgen.edition.model import SpeedLimit
from chartgen.edition.parts import source
from chartgen.edition.quantity import Quantity
from chartgen.edition.reading import Reading, Row
from chartgen.edition.scales import FASTEST_MPS
from chartgen.edition.spec import SPEED_NAMES

OLD_DAYS = 366
"""A limit that nobody has looked at for longer than a year may have changed."""


def limits(reading: Reading, rows: Sequence[Row], unit: str | None, issued: date | None) -> tuple[SpeedLimit, ...]:
    """The [[limit]] sections; what does not hold together in them is noted."""
    read = [_limit(reading, row, unit, issued) for row in rows]
    return tuple(limit for limit in read if limit is not None)


def _limit(reading: Reading, row: Row, unit: str | None, issued: date | None) -> SpeedLimit | None:
    before = len(reading.faults)
    speed: Quantity | None = row.get("speed")
    if speed is not None and (speed.number <= 0 or speed.value > FASTEST_MPS):
        allowed = "above 0, up to 400 km/h (248 mph)"
        reading.fault(row.at("speed"), "this speed is out of range", allowed, given=speed.text)
    elif speed is not None and unit is not None and SPEED_NAMES[speed.unit] != unit:
        reading.fault(row.at("speed"), f"the edition's speeds are in {unit}", f'such as "30 {unit}"', given=speed.text)
    as_at: date | None = row.get("as_at")
    if as_at is not None and issued is not None:
        if as_at > issued:
            problem = f"the limit is as at a day after the issue of {issued.isoformat()}"
            reading.fault(row.at("as_at"), problem, "a date on or before edition.issued", given=as_at)
        elif (issued - as_at).days > OLD_DAYS:
            name = next(iter(row.get("name", {}).values()), "")
            reading.warn(
                row.at("as_at"),
                f"the limit “{name}” is as at {as_at.isoformat()}, more than 12 months before the issue of "
                f"{issued.isoformat()}; look whether it still holds.",
            )
    if row.broken or speed is None or as_at is None or len(reading.faults) > before:
        return None
    return SpeedLimit(
        name=row["name"],
        speed=float(speed.number),
        as_at=as_at,
        source=source(row),
        kinds=row.get("kinds", ()),
    )
