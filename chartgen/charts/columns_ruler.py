"""The ruler beside the columns and the worth of a course: both in round numbers of the printed unit."""

from __future__ import annotations

from typing import Final

from chartgen.charts.measures import Measures
from chartgen.figures.units import METRES_IN

_COURSES: Final = {
    "m": (10.0, 20.0, 50.0, 100.0, 200.0, 500.0),
    "ft": (25.0, 50.0, 100.0, 200.0, 500.0, 1000.0, 2000.0),
}


def course_step(unit: str, scale: float, room_mm: float) -> float:
    """The least round distance, in `unit`, that is at least `room_mm` tall at `scale` mm a metre: 10 m, or 25 ft, and
    up."""
    steps = _COURSES[unit]
    return next((step for step in steps if step * METRES_IN[unit] * scale >= room_mm), steps[-1])


def ruler_ticks(
    unit: str, scale: float, base_y: float, longest_m: float, endless: bool, unit_lines: int, m: Measures
) -> tuple[tuple[tuple[float, float | None], ...], float]:
    """(ticks as (y, the number it carries or None), the y on which the unit's word stands above them).

    The ruler ends with the tallest column, or, where one does not end (`endless`), with the drawing.
    """
    metres = METRES_IN[unit]
    step = course_step(unit, scale, 2.2 * m.ruler)
    half = step / 2 if step / 2 * metres * scale >= 1.6 and step != 25 else step
    top_room = (1.6 + 1.2 * unit_lines) * m.ruler
    reach = (
        (base_y - top_room) / (metres * scale)
        if endless
        else min(longest_m / metres, (base_y - top_room) / (metres * scale))
    )
    ticks = []
    for i in range(1, int(reach / half + 1e-9) + 1):
        value = i * half
        ticks.append((base_y - value * metres * scale, value if abs(value % step) < 1e-9 else None))
    top = min((y for y, _ in ticks), default=base_y - top_room)
    return tuple(ticks), top - 1.1 * m.ruler
