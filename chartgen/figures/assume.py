"""What the printed figures rest on: the seven fields of every assumption line, as numbers and ids.

Reaction, lag, deceleration, surface, gradient, load, rounding. The wording is the business of the floors above (word
keys `assume.…`); the values are those of the table, so sheet, page and CSV cannot differ.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np
import pandas as pd

from chartgen.edition.model import DistanceUnit, Method, Part, Rule, Total
from chartgen.figures.notices import may_be_short

if TYPE_CHECKING:
    from chartgen.edition.model import Edition


@dataclass(frozen=True, slots=True, kw_only=True)
class AtSpeed:
    """A value at the lowest and at the highest speed shown (speeds in the edition's speed unit, as printed)."""

    low_speed: float
    low: float
    high_speed: float
    high: float

    @property
    def falls(self) -> bool:
        """True where the two differ, so that a line must give both."""
        return self.low != self.high


@dataclass(frozen=True, slots=True, kw_only=True)
class Braking:
    """The deceleration field. `friction`: None where the method uses none; `limit_mps2`: the vehicle's own limit,
    None without one; `full_mps2`: the deceleration as full braking begins, slope included."""

    friction: AtSpeed | None
    limit_mps2: float | None
    efficiency: float
    full_mps2: AtSpeed


@dataclass(frozen=True, slots=True, kw_only=True)
class Rounded:
    """The rounding field. Steps in printed units. `short`: by unit, how much a printed figure on the sheet may fall
    short, as a reader is told; empty where none does. `never_short`: the rule alone makes sure of that."""

    unit: DistanceUnit
    step: float
    also_unit: DistanceUnit | None
    also_step: float
    rules: Mapping[Part, Rule]
    total: Total
    never_short: bool
    short: Mapping[str, float]

    @property
    def rule(self) -> Rule | Literal["mixed"]:
        """The one rule of all parts, or "mixed"."""
        found = set(self.rules.values())
        return found.pop() if len(found) == 1 else "mixed"


@dataclass(frozen=True, slots=True, kw_only=True)
class Assumption:
    """The assumptions of one driver, vehicle, surface and grade. Times in s, `grade` a fraction, uphill +.

    `reaction_percentile`: "p85" and the like where the time is that percentile of a spread, else None.
    `load`: None where the edition does not say.
    """

    driver: str
    reaction_time_s: float
    reaction_percentile: Literal["p50", "p85", "p95"] | None
    vehicle: str
    brake_lag_s: float
    build_up_s: float
    braking: Braking
    surface: str
    grade: float
    load: Literal["laden", "unladen"] | None
    rounding: Rounded
    method: Method
    perception_s: float | None = None
    """The share of the reaction time that passes before the foot moves, where the source keeps it apart."""
    adopted: str | None = None
    """Source of a published table that is printed as it stands: then nothing else here is known but the names."""


def assumptions(edition: Edition, rows: pd.DataFrame | pd.Series, sheet: pd.DataFrame | None = None) -> Assumption:
    """What `rows` rest on: one row of the table, or all rows of one driver, vehicle, surface and grade.

    `sheet`: every row printed on the same sheet, from which "may be up to N short" is taken; default `rows`.
    Raises ValueError where the rows are none, or do not share driver, vehicle, surface and grade.

    Formula: none; the values are those of the rows, at the lowest and at the highest speed.

    Args:
        edition: for names, load, method and rounding.
        rows: one row of the table, or all rows of one driver, vehicle, surface and grade.
        sheet: every row printed on the same sheet, from which "may be up to N short" is taken; default `rows`.

    Returns:
        An `Assumption`, in SI.

    Raises:
        ValueError: the rows are none, or do not share driver, vehicle, surface and grade.

    Source: the edition.
    """
    table = rows if isinstance(rows, pd.DataFrame) else rows.to_frame().T.infer_objects()
    if len(table) == 0 or len(table.drop_duplicates(["driver", "vehicle", "surface", "grade"])) != 1:
        raise ValueError("an assumption line speaks of one driver, vehicle, surface and grade")
    table = table.sort_values("speed_mps", kind="stable")
    first = table.iloc[0]
    driver = edition.driver(str(first["driver"]))
    vehicle = edition.vehicle(str(first["vehicle"]))
    rounding = edition.rounding
    return Assumption(
        driver=driver.id,
        reaction_time_s=float(first["reaction_time_s"]),
        reaction_percentile=driver.reaction.percentile,
        vehicle=vehicle.id,
        brake_lag_s=float(first["brake_lag_s"]),
        build_up_s=float(first["build_up_s"]),
        braking=Braking(
            friction=None if np.isnan(first["friction"]) else _between(table, "friction"),
            limit_mps2=vehicle.max_deceleration_mps2,
            efficiency=float(first["brake_efficiency"]),
            full_mps2=_between(table, "full_deceleration_mps2"),
        ),
        surface=str(first["surface"]),
        grade=float(first["grade"]),
        load=vehicle.load,
        rounding=Rounded(
            unit=edition.distance_unit,
            step=rounding.step,
            also_unit=edition.also_unit,
            also_step=rounding.also_step,
            rules=rounding.rules,
            total=rounding.total,
            never_short=rounding.never_short,
            short=may_be_short(table if sheet is None else sheet, edition),
        ),
        method=edition.method,
        perception_s=driver.reaction.perception_s,
        adopted=edition.adopted.source.text if edition.adopted else None,
    )


def _between(rows: pd.DataFrame, column: str) -> AtSpeed:
    """The column at the lowest and at the highest speed of `rows`, which stand in speed order; speeds of which the
    friction's source does not speak are passed over."""
    known = rows[rows[column].notna()]
    seen = known if len(known) else rows
    low, high = seen.iloc[0], seen.iloc[-1]
    return AtSpeed(
        low_speed=float(low["speed"]),
        low=float(low[column]),
        high_speed=float(high["speed"]),
        high=float(high[column]),
    )
