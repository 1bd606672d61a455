"""Does a text alternative say the claim and the range, in few words and true ones?"""

from __future__ import annotations

import pytest

from chartgen.charts.columns_data import Bar
from chartgen.charts.describe import alt_text, times_as_far
from tests.charts.made import EN, rows

MPH = (20, 30, 40, 50, 60, 70)
UNITS = {"language": EN, "speed_unit": "mph", "distance_unit": "m"}


def told(*series: object, **changes: object) -> str:
    return alt_text(list(series), **{**UNITS, **changes}).replace("\u00a0", " ")  # type: ignore[arg-type]


def test_claim_and_range() -> None:
    assert told(rows(MPH)) == (
        # 96.6 m is 7.96 times 12.2 m, but 98 is just 7 times 14.
        "Stopping distance grows from 14 m at 20 mph to 98 m at 70 mph: at least 7 times as far."
    )


@pytest.mark.parametrize(
    ("first", "last", "times"), [((10.0, 10), (19.9, 20), 1), ((10.0, 11), (30.0, 30), 2), ((10.0, 10), (30.0, 30), 3)]
)
def test_a_multiple_is_true_of_the_printed_and_of_the_exact_figures(
    first: tuple[float, float], last: tuple[float, float], times: int
) -> None:
    bars = [
        Bar(
            row=0,
            speed=1,
            printed_speed=1,
            stops=True,
            parts=("braking",),
            lengths_m=(exact,),
            printed=(shown,),
            printed_total=shown,
        )
        for exact, shown in (first, last)
    ]
    assert times_as_far(*bars) == times


def test_less_than_twice_is_no_claim() -> None:
    assert told(rows((60, 70))) == "Stopping distance: 75 m at 60 mph, 98 m at 70 mph."


def test_one_speed() -> None:
    assert told(rows((30,))) == "Stopping distance at 30 mph: 24 m."


def test_what_does_not_stop_is_said_and_never_counted() -> None:
    assert told(rows(MPH, deceleration=[6, 6, 6, 6, 0, 0])) == (
        "Stopping distance: 14 m at 20 mph, 58 m at 50 mph. From 60 mph the vehicle does not stop."
    )
    assert told(rows((20, 30), deceleration=[6, 0])) == (
        "Stopping distance at 20 mph: 14 m. From 30 mph the vehicle does not stop."
    )
    assert told(rows(MPH, deceleration=0)) == "From 20 mph to 70 mph the vehicle does not stop."
    assert told(rows((30,), deceleration=0)) == "From 30 mph the vehicle does not stop."


def test_a_slower_speed_that_does_not_stop_speaks_for_the_faster() -> None:
    assert "From 30 mph the vehicle does not stop." in told(rows(MPH, deceleration=[6, 0, 6, 6, 6, 6]))


def test_several_series_each_by_name() -> None:
    names = [{"en-GB": "Typical driver"}, {"en-GB": "Cautious allowance"}, {"en-GB": "At the end of a shift"}]
    text = told(rows(MPH), rows(MPH, reaction_s=1.5), rows(MPH, deceleration=0), names_of_series=names)
    assert text == (
        "Typical driver: 14 m to 98 m. Cautious allowance: 21 m to 123 m. At the end of a shift: does not stop."
    )
    assert told(rows(MPH), rows(MPH, reaction_s=1.5), names_of_series=names[:2]) == (
        "Stopping distance grows with speed, from 20 mph to 70 mph. Typical driver: 14 m to 98 m. "
        "Cautious allowance: 21 m to 123 m."
    )
    assert told(rows(MPH, deceleration=0), rows(MPH, deceleration=0), names_of_series=names[:2]) == (
        "From 20 mph to 70 mph the vehicle does not stop."
    )
    with pytest.raises(ValueError, match="needs a name"):
        told(rows(MPH), rows(MPH))


def test_too_much_to_listen_to_becomes_the_claim_of_the_series_that_needs_most_room() -> None:
    names = [{"en-GB": "A driver who is rested and alert"}, {"en-GB": "A driver at the end of a long shift"}]
    text = told(rows(MPH), rows(MPH, reaction_s=1.5), names_of_series=names)
    assert text == "Stopping distance grows from 21 m at 20 mph to 123 m at 70 mph: at least 5 times as far."
