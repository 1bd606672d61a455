"""The table: order, rows once, printed columns from unrounded values, rows that do not stop, following gaps."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
import scipy.constants as sc

from chartgen.edition.catalogue import GAP_RULES
from chartgen.edition.model import (
    Cards,
    Case,
    Driver,
    Edition,
    Friction,
    Paper,
    Reaction,
    Rounding,
    Source,
    Surface,
    Vehicle,
)
from chartgen.figures import units
from chartgen.figures.table import COLUMNS, figures, select
from chartgen.motion.stopping import stop

Make = Callable[..., Edition]

HERE = Source(text="invented for this test")
A6 = Paper(name="A6", width_mm=105, height_mm=148)


def driver(id: str, time_s: float) -> Driver:
    return Driver(id=id, name={"en-GB": id}, reaction=Reaction(time_s=time_s), source=HERE)


def road(id: str, mu: float) -> Surface:
    state = id if id in ("dry", "wet", "snow", "ice") else None
    return Surface(id=id, name={"en-GB": id}, friction=Friction(mu=mu), source=HERE, state=state)  # type: ignore[arg-type]  # as checked


LORRY = Vehicle(
    id="lorry", kind="lorry", name={"en-GB": "Lorry"}, load="laden", max_deceleration_mps2=5.0, brake_lag_s=0.4,
    build_up_s=0.3, length_m=16.5,
)  # fmt: skip
CAR = Vehicle(id="car", kind="car", name={"en-GB": "Car"})


def test_conversion_factors_are_those_of_scipy() -> None:
    """To the last binary place but two: scipy makes the foot from twelve inches."""
    for ours, theirs in ((units.METRES_IN, {"m": 1.0, "ft": sc.foot}), (units.MPS_IN, {"mph": sc.mph, "km/h": sc.kmh})):
        assert ours == pytest.approx(theirs, rel=4e-16, abs=0.0)


def test_order_is_case_driver_vehicle_surface_grade_speed(make_edition: Make) -> None:
    """In the order in which the edition names them, not that of the alphabet; speeds rise."""
    edition = make_edition(
        drivers=(driver("z", 1.0), driver("a", 0.8)),
        vehicles=(LORRY, CAR),
        surfaces=(road("wet", 0.4), road("dry", 0.7)),
        speeds=(30.0, 20.0),
        cases=(
            Case(drivers=("z", "a"), vehicles=("lorry",), surfaces=("wet", "dry"), grades=(0.05, -0.05)),
            Case(drivers=("a",), vehicles=("car", "lorry"), surfaces=("dry",)),
        ),
    )
    table = figures(edition).table
    key = ["case", "driver", "vehicle", "surface", "grade", "speed"]
    want = [
        (1, d, "lorry", s, g, v) for d in "za" for s in ("wet", "dry") for g in (0.05, -0.05) for v in (20.0, 30.0)
    ] + [(2, "a", v, "dry", 0.0, s) for v in ("car", "lorry") for s in (20.0, 30.0)]
    assert list(table[key].itertuples(index=False, name=None)) == want
    assert table["row"].tolist() == list(range(len(want)))
    assert tuple(table.columns) == COLUMNS


def test_a_row_of_two_cases_stands_once_under_the_first(make_edition: Make) -> None:
    edition = make_edition(
        drivers=(driver("a", 1.0), driver("b", 2.0)),
        cases=(
            Case(drivers=("a",), vehicles=("car",), surfaces=("dry",)),
            Case(drivers=("b", "a"), vehicles=("car",), surfaces=("dry",), grades=(-0.0, 0.02)),
        ),
    )
    table = figures(edition).table
    assert not table.duplicated(["driver", "vehicle", "surface", "grade", "speed"]).any()
    assert list(table[["case", "driver", "grade"]].drop_duplicates().itertuples(index=False, name=None)) == [
        (1, "a", 0.0), (2, "b", 0.0), (2, "b", 0.02), (2, "a", 0.02),
    ]  # fmt: skip
    assert not np.signbit(table["grade"]).any()


def test_one_vectorised_call_gives_each_row_its_own_inputs(make_edition: Make) -> None:
    """Against single calls of the mechanics, row by row."""
    falling = Surface(
        id="wet", name={"en-GB": "Wet"}, friction=Friction(f60=0.35, sp_kmh=110.0, max_mu=0.5), source=HERE, state="wet"
    )
    weak = dataclasses.replace(LORRY, id="weak", brake_efficiency=0.8)
    edition = make_edition(
        drivers=(driver("a", 0.8), driver("b", 1.6)),
        vehicles=(CAR, LORRY, weak),
        surfaces=(road("dry", 0.67), falling),
        speeds=(20.0, 45.0, 70.0),
        cases=(
            Case(drivers=("a", "b"), vehicles=("car", "lorry", "weak"), surfaces=("dry", "wet"), grades=(0, -0.06)),
        ),
    )
    for row in figures(edition).table.to_dict("records"):
        vehicle, friction = edition.vehicle(row["vehicle"]), edition.surface(row["surface"]).friction
        alone = stop(
            row["speed"] * sc.mph,
            reaction_time_s=edition.driver(row["driver"]).reaction.time_s,
            brake_lag_s=vehicle.brake_lag_s,
            build_up_s=vehicle.build_up_s,
            mu=math.nan if friction.mu is None else friction.mu,
            f60=math.nan if friction.f60 is None else friction.f60,
            sp_kmh=math.nan if friction.sp_kmh is None else friction.sp_kmh,
            max_mu=math.inf if friction.max_mu is None else friction.max_mu,
            grade=row["grade"],
            brake_efficiency=vehicle.brake_efficiency,
            max_deceleration_mps2=vehicle.max_deceleration_mps2 or math.inf,
        )
        assert row["stopping_distance_m"] == pytest.approx(float(alone.stopping_distance_m), rel=1e-12)
        assert row["lag_distance_m"] == pytest.approx(float(alone.lag_distance_m), rel=1e-12)
        assert row["full_deceleration_mps2"] == pytest.approx(float(alone.full_deceleration_mps2), rel=1e-12)


def test_printed_is_made_from_the_unrounded_value_in_each_unit(make_edition: Make) -> None:
    """30 mph, 1.5 s: 20.1168 m are 66 ft exactly. From the printed 21 m they would be 68.9, printed 69."""
    edition = make_edition(also_unit="ft", drivers=(driver("a", 1.5),), speeds=(30.0,))
    row = figures(edition).table.iloc[0]
    assert row["printed_reaction"] == 21.0
    assert row["printed_also_reaction"] == 66.0
    # Braking 13.68705 m = 44.9050 ft; sums of printed parts in each unit.
    assert (row["printed_braking"], row["printed_also_braking"]) == (14.0, 45.0)
    assert (row["printed_stopping"], row["printed_also_stopping"]) == (35.0, 111.0)


def test_each_unit_has_its_own_step_under_the_same_rules(make_edition: Make) -> None:
    nearest: dict[Any, Any] = {"reaction": "nearest", "lag": "nearest", "braking": "nearest"}
    edition = make_edition(also_unit="ft", rounding=Rounding(step=0.5, also_step=5.0, rules=nearest), speeds=(30.0,))
    row = figures(edition).table.iloc[0]
    # 0.8 s and 0.67 at 30 mph: 10.72896 m = 35.2 ft; 13.687048 m = 44.905 ft.
    assert (row["printed_reaction"], row["printed_braking"], row["printed_stopping"]) == (10.5, 13.5, 24.0)
    assert (row["printed_also_reaction"], row["printed_also_braking"], row["printed_also_stopping"]) == (35, 45, 80)


def test_without_a_second_unit_its_columns_are_empty(make_edition: Make) -> None:
    table = figures(make_edition()).table
    assert table.filter(like="printed_also").isna().all(axis=None)


def test_a_downgrade_of_ice_does_not_stop(make_edition: Make) -> None:
    edition = make_edition(
        surfaces=(road("ice", 0.05), road("dry", 0.7)),
        vehicles=(LORRY,),
        also_unit="ft",
        cases=(Case(drivers=("ready",), vehicles=("lorry",), surfaces=("ice", "dry"), grades=(-0.09,)),),
    )
    found = figures(edition)
    ice, dry = select(found, surface="ice"), select(found, surface="dry")
    assert ice["stops"].tolist() == [False, False]
    assert ice["reason"].tolist() == ["never-at-rest", "never-at-rest"]
    gone = [f"{p}_{q}" for p in ("printed", "printed_also") for q in ("braking", "stopping")]
    gone += ["braking_distance_m", "stopping_distance_m", "stopping_time_s"]
    assert ice[gone].isna().all(axis=None)
    kept = ["reaction_distance_m", "lag_distance_m", "printed_reaction", "printed_lag", "printed_also_lag"]
    assert np.array_equal(ice[kept].to_numpy(), dry[kept].to_numpy())
    assert dry["reason"].tolist() == ["", ""]
    assert dry[gone].notna().all(axis=None)


def test_an_input_that_the_method_cannot_use_is_refused(make_edition: Make) -> None:
    with pytest.raises(ValueError, match="brake_lag_s: the method sight-metric cannot use it"):
        figures(make_edition(method="sight-metric", vehicles=(LORRY,)))


@pytest.mark.parametrize("method", ["slide-metric", "slide-us"])
def test_slide_methods_use_friction(method: str, make_edition: Make) -> None:
    """Doubling the friction halves the braking of the printed formulas exactly."""
    edition = make_edition(method=method, surfaces=(road("low", 0.3), road("high", 0.6)))
    found = figures(edition)
    low, high = (select(found, surface=s)["braking_distance_m"].to_numpy() for s in ("low", "high"))
    assert low == pytest.approx(2 * high, rel=1e-12)
    assert select(found, surface="low")["friction"].tolist() == [0.3, 0.3]


def test_select_takes_one_or_several_ids_in_speed_order(make_edition: Make) -> None:
    edition = make_edition(
        drivers=(driver("a", 1.0), driver("b", 2.0), driver("c", 0.5)),
        speeds=(20.0, 30.0, 40.0),
        cases=(Case(drivers=("a", "b", "c"), vehicles=("car",), surfaces=("dry",), grades=(0.0, -0.05)),),
    )
    found = figures(edition)
    assert select(found, driver="b", grade=-0.05)["speed"].tolist() == [20.0, 30.0, 40.0]
    two = select(found, driver=["c", "a"], vehicle="car", surface="dry", grade=0.0)
    assert two["speed"].tolist() == [20.0, 20.0, 30.0, 30.0, 40.0, 40.0]
    assert two["driver"].tolist() == ["a", "c"] * 3
    assert len(select(found)) == len(found.table) == 18
    assert select(found, driver="nobody").empty


# ---- following gaps -------------------------------------------------------------------------------------------------


def with_gap(make_edition: Make, gap: str, **changes: object) -> Edition:
    cards = Cards(size=A6, sheet=A6, roster=(), driver="ready", surfaces=("dry",), grade=0.0, gap=gap)
    return make_edition(**{"cards": cards, "vehicles": (LORRY,), "distance_unit": "ft", **changes})


def test_without_cards_there_is_no_gap(make_edition: Make) -> None:
    assert figures(make_edition()).table[["gap_s", "printed_gap_s", "printed_gap_distance"]].isna().all(axis=None)


def test_gap_by_length_goes_up_to_whole_seconds(make_edition: Make) -> None:
    """One second for each 10 ft, one more from 40 mph on (commercial-licence manual): 40 ft are 4 s, and 5 s at 40 mph.

    The rule says "above 40 mph"; at 40 itself the longer gap is taken. The distance is that of the printed seconds:
    30 mph = 44 ft/s, 176 ft; 40 mph = 58.67 ft/s, 293.3 ft, printed 294.
    """
    lorry = dataclasses.replace(LORRY, length_m=40 * sc.foot)
    table = figures(with_gap(make_edition, "gap/per-length", vehicles=(lorry,), speeds=(30.0, 40.0, 50.0))).table
    assert table["gap_s"].tolist() == pytest.approx([4.0, 5.0, 5.0])
    assert table["printed_gap_s"].tolist() == [4.0, 5.0, 5.0]
    assert table["printed_gap_distance"].tolist() == [176.0, 294.0, 367.0]


def test_gap_is_longer_on_wet_and_ice_by_the_rule(make_edition: Make) -> None:
    """The Highway Code, rule 126: two seconds, at least doubled in the wet, up to ten times on ice; snow as ice."""
    surfaces = (road("dry", 0.7), road("wet", 0.4), road("snow", 0.2), road("ice", 0.1), road("gravel", 0.5))
    edition = with_gap(make_edition, "gap/two-seconds", surfaces=surfaces, speeds=(30.0,))
    table = figures(edition).table
    assert dict(zip(table["surface"], table["printed_gap_s"], strict=True)) == {
        "dry": 2.0, "wet": 4.0, "snow": 20.0, "ice": 20.0, "gravel": 2.0,
    }  # fmt: skip


@pytest.mark.parametrize("gap", sorted(GAP_RULES))
def test_gap_is_never_printed_short(gap: str, make_edition: Make) -> None:
    lengths = [dataclasses.replace(LORRY, id=f"l{n}", length_m=n / 2) for n in range(2, 50, 3)]
    edition = with_gap(make_edition, gap, vehicles=tuple(lengths), speeds=tuple(float(v) for v in range(5, 80, 5)))
    table = figures(edition).table
    assert (table["printed_gap_s"] >= table["gap_s"] * (1 - 1e-9)).all()
    assert (table["printed_gap_s"] - table["gap_s"] < 1).all()
    exact_ft = table["gap_s"] * table["speed_mps"] / sc.foot
    assert (table["printed_gap_distance"] >= exact_ft * (1 - 1e-9)).all()


def test_gap_by_length_without_a_length_is_left_out_and_said(make_edition: Make) -> None:
    short = dataclasses.replace(LORRY, id="short", length_m=None)
    found = figures(with_gap(make_edition, "gap/per-length", vehicles=(LORRY, short)))
    assert select(found, vehicle="short")["printed_gap_s"].isna().all()
    assert select(found, vehicle="lorry")["printed_gap_s"].notna().all()
    assert [n.rows for n in found.notices if n.code == "gap-unknown"] == [(2, 3)]


def test_many_rows_take_little_time(make_edition: Make) -> None:
    """5,000 rows, the most an edition may have, are one call of the mechanics."""
    import time

    many = tuple(driver(f"d{n}", 0.5 + n / 50) for n in range(25))
    edition = make_edition(drivers=many, speeds=tuple(float(v) for v in range(1, 201)))
    began = time.perf_counter()
    table = figures(edition).table
    assert len(table) == 5000
    assert time.perf_counter() - began < 2.0
