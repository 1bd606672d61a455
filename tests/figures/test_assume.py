"""The seven fields of the assumption line, the same values as the table's and so as the CSV's."""

from __future__ import annotations

import csv
import dataclasses
import io
from collections.abc import Callable
from typing import Any

import pytest

from chartgen.edition.model import Case, Driver, Edition, Friction, Reaction, Rounding, Source, Surface, Vehicle
from chartgen.figures.assume import AtSpeed, assumptions
from chartgen.figures.export import to_csv
from chartgen.figures.record import Figures
from chartgen.figures.table import figures, select

Make = Callable[..., Edition]
HERE = Source(text="invented for this test")
NEAREST: dict[Any, Any] = {"reaction": "nearest", "lag": "nearest", "braking": "nearest"}


@pytest.fixture
def edition(make_edition: Make) -> Edition:
    survey = Driver(
        id="survey",
        name={"en-GB": "Survey"},
        reaction=Reaction(time_s=1.6, percentile="p85", mu=0.0953, sigma=0.3615),
        source=HERE,
    )
    lorry = Vehicle(
        id="lorry", kind="lorry", name={"en-GB": "Lorry"}, load="laden", max_deceleration_mps2=5.0, brake_lag_s=0.4,
        build_up_s=0.3, brake_efficiency=0.9,
    )  # fmt: skip
    wet = Surface(id="wet", name={"en-GB": "Wet"}, friction=Friction(f60=0.35, sp_kmh=110.0), source=HERE, state="wet")
    return make_edition(
        drivers=(survey,),
        vehicles=(lorry,),
        surfaces=(wet,),
        speeds=(20.0, 50.0, 70.0),
        cases=(Case(drivers=("survey",), vehicles=("lorry",), surfaces=("wet",), grades=(0.0, -0.03)),),
        rounding=Rounding(rules=NEAREST),
    )


@pytest.fixture
def found(edition: Edition) -> Figures:
    return figures(edition)


def test_all_seven_fields(edition: Edition, found: Figures) -> None:
    rows = select(found, grade=-0.03)
    a = assumptions(edition, rows)
    assert (a.driver, a.reaction_time_s, a.reaction_percentile) == ("survey", 1.6, "p85")
    assert (a.vehicle, a.brake_lag_s, a.build_up_s) == ("lorry", 0.4, 0.3)
    assert (a.braking.limit_mps2, a.braking.efficiency) == (5.0, 0.9)
    assert (a.surface, a.grade, a.load, a.method) == ("wet", -0.03, "laden", "first-principles")
    assert (a.rounding.unit, a.rounding.step, a.rounding.rule, a.rounding.total) == (
        "m",
        1.0,
        "nearest",
        "sum-of-parts",
    )
    assert not a.rounding.never_short
    # The same values in the public data, row by row.
    public = next(csv.DictReader(io.StringIO(to_csv(dataclasses.replace(found, table=rows)), newline="")))
    assert {
        "reaction_time_s": "1.6", "reaction_percentile": "p85", "brake_lag_s": "0.4", "build_up_s": "0.3",
        "max_deceleration_mps2": "5.0", "brake_efficiency": "0.9", "surface": "wet", "grade": "-0.03", "load": "laden",
        "rounding_step": "1", "rounding_unit": "m", "rounding_braking": "nearest", "rounding_total": "sum-of-parts",
        "full_deceleration_mps2": repr(a.braking.full_mps2.low), "method": "first-principles",
    }.items() <= public.items()  # fmt: skip


def test_friction_that_falls_is_given_at_both_ends(edition: Edition, found: Figures) -> None:
    """F(S) = 0.35 exp((60 - S)/110) (ASTM E1960) at 20 and 70 mph = 32.187 and 112.654 km/h: 0.4507 and 0.2169."""
    friction = assumptions(edition, select(found, grade=0.0)).braking.friction
    assert friction is not None
    assert friction.falls
    assert (friction.low_speed, friction.high_speed) == (20.0, 70.0)
    assert (friction.low, friction.high) == pytest.approx((0.4507, 0.2169), abs=5e-5)


def test_constant_friction_does_not_fall(make_edition: Make) -> None:
    edition = make_edition()
    braking = assumptions(edition, figures(edition).table).braking
    assert braking.friction == AtSpeed(low_speed=20.0, low=0.67, high_speed=30.0, high=0.67)
    assert not braking.friction.falls
    assert braking.limit_mps2 is None
    assert braking.full_mps2.low == pytest.approx(0.67 * 9.80665)


def test_a_method_without_friction_has_none(make_edition: Make) -> None:
    car = Vehicle(id="car", kind="car", name={"en-GB": "Car"}, max_deceleration_mps2=3.4)
    edition = make_edition(method="sight-metric", vehicles=(car,))
    braking = assumptions(edition, figures(edition).table).braking
    assert braking.friction is None
    assert braking.limit_mps2 == 3.4


def test_one_row_will_do(edition: Edition, found: Figures) -> None:
    row = found.table.iloc[1]
    a = assumptions(edition, row)
    assert a == assumptions(edition, found.table.iloc[[1]])
    assert a.braking.friction is not None
    assert a.braking.friction.low_speed == a.braking.friction.high_speed == 50.0


def test_how_short_is_taken_from_the_sheet(make_edition: Make) -> None:
    """From the rows given, or from all rows of the sheet where those are more.

    To the nearest metre the row of 30 mph is short nowhere; that of 20 mph by 0.236 m, told as 0.3 (test_notices).
    """
    edition = make_edition(rounding=Rounding(rules=NEAREST))
    table = figures(edition).table
    assert assumptions(edition, table.iloc[[1]]).rounding.short == {}
    assert assumptions(edition, table.iloc[[1]], sheet=table).rounding.short == {"m": 0.3}


def test_mixed_rules_say_so(edition: Edition) -> None:
    mixed = dataclasses.replace(edition, rounding=Rounding(rules=NEAREST | {"braking": "up"}))
    assert assumptions(mixed, figures(mixed).table.iloc[0]).rounding.rule == "mixed"


@pytest.mark.parametrize("rows", [slice(0, 0), slice(0, 6)], ids=["none", "two grades"])
def test_rows_that_rest_on_different_things_are_refused(rows: slice, edition: Edition, found: Figures) -> None:
    with pytest.raises(ValueError, match="one driver, vehicle, surface and grade"):
        assumptions(edition, found.table.iloc[rows])
