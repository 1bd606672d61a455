"""Notices: each found where it should be and nowhere else. Codes are asserted; each sentence is seen whole once."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from typing import Any

import pytest

from chartgen.edition.model import Case, Driver, Edition, Friction, Reaction, Rounding, Source, Surface, Vehicle
from chartgen.figures.notices import may_be_short
from chartgen.figures.record import Notice
from chartgen.figures.table import figures, select

Make = Callable[..., Edition]

HERE = Source(text="invented for this test")
LADEN = Vehicle(id="lorry", kind="lorry", name={"en-GB": "Lorry"}, load="laden", max_deceleration_mps2=5.0)
UNLADEN = dataclasses.replace(LADEN, id="lorry-unladen", load="unladen", unladen_of="lorry", max_deceleration_mps2=4.5)
NEAREST: dict[Any, Any] = {"reaction": "nearest", "lag": "nearest", "braking": "nearest"}


def road(id: str, mu: float, state: str | None = None) -> Surface:
    return Surface(id=id, name={"en-GB": id}, friction=Friction(mu=mu), source=HERE, state=state)  # type: ignore[arg-type]  # as written


DRY, WET, ICE = road("dry", 0.7, "dry"), road("wet", 0.4, "wet"), road("ice", 0.05, "ice")


def of(edition: Edition, code: str) -> list[Notice]:
    return [n for n in figures(edition).notices if n.code == code]


def test_a_plain_edition_has_none(make_edition: Make) -> None:
    edition = make_edition(vehicles=(LADEN, UNLADEN), surfaces=(DRY, WET))
    assert figures(edition).notices == ()


def test_unusual_values_of_the_edition_are_passed_on(make_edition: Make) -> None:
    said = ("driver[1].reaction_time: 0.25 s is outside 0.3 s to 4 s.",)
    assert [(n.text, n.reader) for n in of(make_edition(warnings=said), "unusual-value")] == [(said[0], False)]


def test_unladen_shorter_than_laden(make_edition: Make) -> None:
    """On the dry road only: on the wet one friction limits both."""
    quick = dataclasses.replace(UNLADEN, max_deceleration_mps2=5.5)
    edition = make_edition(vehicles=(LADEN, quick), surfaces=(DRY, WET))
    (notice,) = of(edition, "unladen-shorter")
    assert notice.text == (
        "Case 1: vehicle “lorry-unladen”, unladen, stops shorter than “lorry”, laden, on “dry” at 20 and 30 mph; "
        "an empty lorry may need more room, not less."
    )
    assert notice.reader
    assert notice.rows == tuple(select(figures(edition), vehicle="lorry-unladen", surface="dry")["row"])


def test_laden_and_unladen_of_different_cases_are_not_compared(make_edition: Make) -> None:
    quick = dataclasses.replace(UNLADEN, max_deceleration_mps2=5.5)
    apart = tuple(Case(drivers=("ready",), vehicles=(v,), surfaces=("dry",)) for v in ("lorry", "lorry-unladen"))
    assert not of(make_edition(vehicles=(LADEN, quick), cases=apart), "unladen-shorter")


def test_rows_shared_by_two_cases_are_compared_in_both_and_said_once(make_edition: Make) -> None:
    """The second case finds both its rows filed under the first; it must not lose the comparison, nor repeat it."""
    quick = dataclasses.replace(UNLADEN, max_deceleration_mps2=5.5)
    one = Case(drivers=("ready",), vehicles=("lorry",), surfaces=("dry",))
    both = Case(drivers=("ready",), vehicles=("lorry", "lorry-unladen"), surfaces=("dry",))
    edition = make_edition(vehicles=(LADEN, quick), cases=(one, both, both))
    assert [n.text[:7] for n in of(edition, "unladen-shorter")] == ["Case 2:"]


def test_laden_that_never_stops_is_longer_than_any(make_edition: Make) -> None:
    weak = dataclasses.replace(LADEN, max_deceleration_mps2=0.5)
    downhill = Case(drivers=("ready",), vehicles=("lorry", "lorry-unladen"), surfaces=("dry",), grades=(-0.09,))
    edition = make_edition(vehicles=(weak, UNLADEN), cases=(downhill,))
    assert of(edition, "unladen-shorter")
    assert [n.fields["vehicle"] for n in of(edition, "does-not-stop")] == ["lorry"]


@pytest.mark.parametrize("state", ["wet", "snow", "ice"])
def test_slippery_shorter_than_dry(state: str, make_edition: Make) -> None:
    edition = make_edition(surfaces=(road("dry", 0.5, "dry"), road("odd", 0.6, state)))
    (notice,) = of(edition, "wet-shorter")
    assert notice.text == (
        f"Case 1: on surface “odd” ({state}) “car” stops shorter than on “dry” (dry) at 20 and 30 mph; "
        "look at the friction of both."
    )
    assert notice.fields == {"surface": "odd", "dry": "dry"}
    assert notice.reader


def test_wet_as_long_as_dry_is_no_warning(make_edition: Make) -> None:
    """Where the vehicle's own limit governs on both, the distances are the same, not shorter."""
    assert not of(
        make_edition(surfaces=(road("dry", 0.7, "dry"), road("wet", 0.6, "wet")), vehicles=(LADEN,)), "wet-shorter"
    )


def test_a_surface_without_a_state_is_not_compared(make_edition: Make) -> None:
    assert not of(make_edition(surfaces=(road("dry", 0.5, "dry"), road("grippy", 0.9))), "wet-shorter")


@pytest.mark.parametrize(
    ("time_s", "mu", "hybrid"), [(2.0, 0.7, True), (1.9, 0.7, False), (2.5, 0.35, False), (2.5, 0.45, False)]
)
def test_design_reaction_with_emergency_braking(time_s: float, mu: float, hybrid: bool, make_edition: Make) -> None:
    slow = Driver(id="slow", name={"en-GB": "Slow"}, reaction=Reaction(time_s=time_s), source=HERE)
    found = of(make_edition(drivers=(slow,), surfaces=(road("dry", mu, "dry"),)), "design-reaction-hybrid")
    assert bool(found) is hybrid
    if hybrid:
        assert found[0].text == (
            "Driver “slow” reacts in 2 s, a time of road design, and brakes with up to 6.9 m/s² on “dry” with “car”, "
            "as in an emergency; road design pairs such a time with about 3.4 m/s²."
        )
        assert not found[0].reader


def test_a_hill_does_not_make_braking_an_emergency(make_edition: Make) -> None:
    """3.9 m/s² on the level are 4.9 up a hill of 10 %; the pairing is judged on the level."""
    slow = Driver(id="slow", name={"en-GB": "Slow"}, reaction=Reaction(time_s=2.5), source=HERE)
    case = Case(drivers=("slow",), vehicles=("car",), surfaces=("dry",), grades=(0.0, 0.10))
    edition = make_edition(drivers=(slow,), surfaces=(road("dry", 0.4, "dry"),), cases=(case,))
    assert figures(edition).table["full_deceleration_mps2"].max() > 4.5
    assert not of(edition, "design-reaction-hybrid")


def test_does_not_stop_says_where_and_why(make_edition: Make) -> None:
    case = Case(drivers=("ready",), vehicles=("car",), surfaces=("dry", "ice"), grades=(0.0, -0.045, -0.09))
    edition = make_edition(surfaces=(DRY, ICE), cases=(case,))
    little, never = of(edition, "does-not-stop")
    assert little.text == (
        "Vehicle “car” does not stop on surface “ice” at a grade of −4.5 % from 20 and 30 mph: "
        "the friction leaves less than 0.1 m/s² of braking on this slope."
    )
    assert never.text == (
        "Vehicle “car” does not stop on surface “ice” at a grade of −9 % from 20 and 30 mph: "
        "the slope pulls at least as hard as the brakes can hold."
    )
    assert never.fields == {"vehicle": "car", "surface": "ice", "grade": "-0.09", "reason": "never-at-rest"}
    assert never.reader


def test_rounding_that_may_be_short_says_by_how_much(make_edition: Make) -> None:
    """0.8 s and 0.67 at 20 and 30 mph: 7.15264 + 6.08313 = 13.23577, 10.72896 + 13.68705 = 24.41601 m.

    To the nearest metre: 7 + 6 = 13 and 11 + 14 = 25. The worst is 0.23577 m, told as 0.3; in feet (23.4667 + 19.9578,
    35.2 + 44.9050 = 80.105, printed 23 + 20 = 43, 35 + 45 = 80) it is 0.4667 ft of the reaction at 20 mph, told as 0.5.
    """
    edition = make_edition(rounding=Rounding(rules=NEAREST), also_unit="ft")
    (notice,) = of(edition, "may-be-short")
    assert notice.text == "Printed distances are rounded and may be up to 0.3 m and up to 0.5 ft short."
    assert notice.fields == {"short": "0.3", "unit": "m", "also_short": "0.5", "also_unit": "ft"}
    assert notice.reader


def test_how_short_is_that_of_the_rows_of_a_sheet(make_edition: Make) -> None:
    edition = make_edition(rounding=Rounding(rules=NEAREST), speeds=(20.0, 30.0))
    table = figures(edition).table
    assert may_be_short(table.iloc[[0]], edition) == {"m": 0.3}
    # At 30 mph 10.72896, 13.68705 and 24.41601 are printed 11, 14 and 25: none is short.
    assert may_be_short(table.iloc[[1]], edition) == {}


@pytest.mark.parametrize("total", ["sum-of-parts", "on-its-own"])
def test_up_is_short_nowhere(total: str, make_edition: Make) -> None:
    edition = make_edition(rounding=Rounding(total=total), also_unit="ft")  # type: ignore[arg-type]  # as written
    assert not of(edition, "may-be-short")
