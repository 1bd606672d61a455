"""Rows of parameters through the program itself: an edition in memory, its figures, what it prints."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from chartgen.edition.model import Case, Friction, Rounding, Surface, Vehicle
from chartgen.figures.rounding import nearest
from chartgen.figures.table import figures
from chartgen.figures.units import MPS_IN
from tests.conftest import INVENTED, driver, edition

PARTS = ("reaction", "lag", "braking", "stopping")
GRIP = 1.5
"""Friction above any deceleration in use, so that the vehicle's own limit alone governs the braking."""


@dataclass(frozen=True)
class Printing:
    """How a table prints: its unit, step, rule by part, and total."""

    unit: str
    step: float
    rules: tuple[tuple[str, str], ...]
    total: str

    @classmethod
    def of(cls, unit: str, given: Mapping[str, Any]) -> Printing:
        """From a claims file: `rule` is that of all parts, and a part's own name overrides it."""
        known = {"step", "rule", "total", "reaction", "lag", "braking"}
        assert set(given) <= known, f"unknown rounding: {set(given) - known}"
        rules = tuple((part, given.get(part, given.get("rule"))) for part in PARTS[:3])
        return cls(unit, float(given["step"]), rules, given["total"])


@dataclass(frozen=True, kw_only=True)
class Inputs:
    """What one row is computed from."""

    method: str
    speed: float
    speed_unit: str
    speed_step_mps: float
    friction_table: tuple[tuple[float, float], ...]
    parameters: tuple[tuple[str, float], ...]

    @property
    def speed_mps(self) -> float:
        exact = self.speed * MPS_IN[self.speed_unit]
        return float(nearest(exact, self.speed_step_mps)) if self.speed_step_mps else exact

    @property
    def rest(self) -> tuple[object, ...]:
        """All but the speed: rows that share it go into one edition."""
        return (self.method, self.speed_unit, self.friction_table, self.parameters)


_DONE: dict[tuple[Inputs, Printing], dict[str, float]] = {}


def printed_by_edition(rows: Sequence[Inputs], printing: Printing) -> list[dict[str, float]]:
    """The four printed figures of each row. Rows already computed are remembered."""
    missing = dict.fromkeys(r for r in rows if (r, printing) not in _DONE)
    groups: dict[tuple[object, ...], list[Inputs]] = {}
    for one in missing:
        groups.setdefault(one.rest, []).append(one)
    for group in groups.values():
        _compute(sorted(group, key=lambda one: one.speed), printing)
    return [_DONE[one, printing] for one in rows]


def _compute(group: Sequence[Inputs], printing: Printing) -> None:
    """One edition for rows that differ by their speed only, which stand in rising order."""
    first = group[0]
    given = dict(first.parameters)
    table = first.friction_table or None
    mu = None if table else given.get("mu", GRIP)
    made = edition(
        method=first.method,
        speed_unit=first.speed_unit,
        distance_unit=printing.unit,
        speeds=tuple(one.speed for one in group),
        speeds_mps=tuple(one.speed_mps for one in group),
        rounding=Rounding(step=printing.step, rules=dict(printing.rules), total=printing.total),  # type: ignore[arg-type]
        drivers=(driver("driver", given["reaction_time_s"]),),
        surfaces=(Surface(id="road", name={"en-GB": "Road"}, friction=Friction(mu=mu, table=table), source=INVENTED),),
        vehicles=(
            Vehicle(
                id="car",
                kind="car",
                name={"en-GB": "Car"},
                max_deceleration_mps2=given.get("deceleration_mps2"),
                brake_lag_s=given.get("brake_lag_s", 0.0),
                build_up_s=given.get("build_up_s", 0.0),
                brake_efficiency=given.get("brake_efficiency", 1.0),
            ),
        ),
        cases=(Case(drivers=("driver",), vehicles=("car",), surfaces=("road",), grades=(given.get("grade", 0.0),)),),
    )
    columns = figures(made).table
    for place, one in enumerate(group):
        row = columns.iloc[place]
        assert row["speed"] == one.speed
        _DONE[one, printing] = {part: float(row[f"printed_{part}"]) for part in PARTS}
