"""Quantities: read strictly, converted exactly, and a right spelling for each that is not one."""

from __future__ import annotations

import re
from fractions import Fraction

import pint
import pytest
import scipy.constants as physics
from hypothesis import given, settings
from hypothesis import strategies as st

from chartgen.edition.measures import (
    DECAY,
    DECELERATION,
    GRADE,
    LENGTH,
    SIZE,
    SPEED,
    TIME,
    Measure,
    NotAQuantityError,
)
from chartgen.edition.quantity import factor, parse, parse_size

MEASURES = (SPEED, TIME, DECELERATION, LENGTH, SIZE, GRADE, DECAY)


@pytest.mark.parametrize(
    ("text", "measure", "value"),
    [
        ("30 mph", SPEED, 30 * physics.mph),
        ("30 mile/hour", SPEED, 30 * physics.mph),
        ("120 km/h", SPEED, 120 * physics.kmh),
        ("0.67 s", TIME, 0.67),
        ("+2 s", TIME, 2.0),
        ("5 m/s^2", DECELERATION, 5.0),
        ("5 m/s²", DECELERATION, 5.0),
        ("14.8 ft/s^2", DECELERATION, 14.8 * physics.foot),
        # g is standard gravity (3rd CGPM, 1901).
        ("0.5 g", DECELERATION, 0.5 * physics.g),
        ("68 ft", LENGTH, 68 * physics.foot),
        ("18 in", SIZE, 18 * physics.inch * 1000),
        ("-9 %", GRADE, -0.09),
        ("110 km/h", DECAY, 110.0),
    ],
)
def test_conversions_agree_with_scipy(text: str, measure: Measure, value: float) -> None:
    assert parse(text, measure).value == pytest.approx(value, rel=1e-15)


def test_the_short_list_of_units_agrees_with_the_librarys_own() -> None:
    library: pint.UnitRegistry[Fraction] = pint.UnitRegistry(non_int_type=Fraction)
    for measure in MEASURES:
        inside = "dimensionless" if measure.inside == "one" else measure.inside
        for name in measure.units.values():
            assert factor(name, measure.inside) == library.convert(Fraction(1), name, inside)


def test_a_speed_is_rounded_once() -> None:
    assert parse("70 mph", SPEED).value == float(Fraction(70) * Fraction(44704, 100000))


@pytest.mark.parametrize(
    ("text", "measure", "problem", "right"),
    [
        ("", TIME, "nothing is written here", 'such as "0.67 s"'),
        ("30", SPEED, "the unit is missing", '"30 mph" or "30 km/h"'),
        ("nan s", TIME, "this is not a number", 'such as "0.67 s"'),
        ("-inf", TIME, "this is not a number", 'such as "0.67 s"'),
        ("0,67 s", TIME, "a comma is not read as a decimal point, nor as a thousands mark", '"0.67 s"'),
        (
            "1,200 m",
            LENGTH,
            "a comma is not read as a decimal point, nor as a thousands mark",
            '"1.200 m", or "1200 m" if thousands were meant',
        ),
        ("1,234,567 m", LENGTH, "thousands are written without a space or mark", '"1234567 m"'),
        ("1 200 ft", LENGTH, "thousands are written without a space or mark", '"1200 ft"'),
        ("1\u202f200 ft", LENGTH, "thousands are written without a space or mark", '"1200 ft"'),
        ("1'200 m", LENGTH, "thousands are written without a space or mark", '"1200 m"'),
        (
            "\u22129 %",
            GRADE,
            "the minus sign is a dash or U+2212, not the hyphen-minus of the keyboard",
            '"-9 %"',
        ),
        (
            "\u20139 %",
            GRADE,
            "the minus sign is a dash or U+2212, not the hyphen-minus of the keyboard",
            '"-9 %"',
        ),
        ("0.6-0.8 s", TIME, "this is a range, and one value is needed", '"0.6 s" or "0.8 s"'),
        ("0.6 s – 0.8 s", TIME, "this is a range, and one value is needed", '"0.6 s" or "0.8 s"'),
        ("20 to 30 mph", SPEED, "this is a range, and one value is needed", '"20 mph" or "30 mph"'),
        ("2*3 s", TIME, "nothing is worked out here; the result is written", 'such as "0.67 s"'),
        ("1/2 s", TIME, "nothing is worked out here; the result is written", 'such as "0.67 s"'),
        ("5 m/s^2 + 1 m/s^2", DECELERATION, "nothing is worked out here; the result is written", 'such as "5 m/s^2"'),
        ("2^3 s", TIME, "nothing is worked out here; the result is written", 'such as "0.67 s"'),
        ("5 m 30 cm", LENGTH, "there are two units; one number with one unit is needed", 'such as "16.5 m"'),
        ("0.4 s s", TIME, "there are two units; one number with one unit is needed", 'such as "0.67 s"'),
        ("1e3 m", LENGTH, "powers of ten are not read; the number is written out", 'such as "16.5 m"'),
        (".5 s", TIME, "a decimal point needs a digit on both sides", '"0.5 s"'),
        ("5. s", TIME, "a decimal point needs a digit on both sides", '"5 s"'),
        ("<2 s", TIME, "one exact value is needed, with nothing before it", '"2 s"'),
        ("30mph", SPEED, "one ordinary space stands between number and unit, and none elsewhere", '"30 mph"'),
        ("30\u00a0mph", SPEED, "one ordinary space stands between number and unit, and none elsewhere", '"30 mph"'),
        (" 30 mph", SPEED, "one ordinary space stands between number and unit, and none elsewhere", '"30 mph"'),
        ("30 kmh", SPEED, '"kmh" is not a unit for a speed here', '"30 km/h"'),
        ("30 MPH", SPEED, '"MPH" is not a unit for a speed here', '"30 mph"'),
        ("30 knots", SPEED, '"knots" is not a unit for a speed here', "a speed in mph or km/h"),
        ("5 m/s/s", DECELERATION, '"m/s/s" is not a unit for a deceleration here', '"5 m/s^2"'),
        ("5 m^2", LENGTH, '"m^2" is not a unit for a length here', "a length in m or ft"),
        ("٣٠ km/h", SPEED, "digits are written 0 to 9", '"30 km/h"'),
        ("fast", SPEED, "one number, a space and a unit are needed here", 'such as "30 mph"'),
        ("9" * 41, TIME, "more than 40 characters are no quantity", 'such as "0.67 s"'),
    ],
)
def test_each_fault_has_its_name_and_shows_the_right_spelling(
    text: str, measure: Measure, problem: str, right: str
) -> None:
    with pytest.raises(NotAQuantityError) as caught:
        parse(text, measure)
    assert (caught.value.problem, caught.value.right) == (problem, right)


@settings(max_examples=500, derandomize=True, database=None, deadline=None)
@given(
    text=st.one_of(
        st.text(max_size=60),
        st.text(alphabet="0123456789.,-+−– \u00a0\u202f%/^*()eEmphkfst²gin", max_size=20),
    ),
    measure=st.sampled_from(MEASURES),
)
def test_nothing_but_the_grammar_is_read(text: str, measure: Measure) -> None:
    units = "|".join(re.escape(unit) for unit in measure.units)
    fits = re.fullmatch(rf"[+-]?[0-9]+(\.[0-9]+)? ({units})", text) is not None and len(text) <= 40
    if fits:
        parse(text, measure)
    else:
        with pytest.raises(NotAQuantityError) as caught:
            parse(text, measure)
        assert caught.value.problem
        assert caught.value.right


@settings(max_examples=500, derandomize=True, database=None, deadline=None)
@given(text=st.text(alphabet="0123456789.,-+−–' \u202f", min_size=1, max_size=8), measure=st.sampled_from(MEASURES))
def test_a_right_spelling_that_is_shown_is_right(text: str, measure: Measure) -> None:
    unit = next(iter(measure.units))
    try:
        parse(f"{text} {unit}", measure)
    except NotAQuantityError as fault:
        for shown in re.findall(r'"([^"]*)"', fault.right):
            parse(shown, measure)


@pytest.mark.parametrize(
    ("text", "sides"),
    [("600 mm x 900 mm", (600, 900)), ("18 in x 24 in", (457.2, 609.6)), ("60 cm x 900 mm", (600, 900))],
)
def test_a_size_is_split_and_each_side_read(text: str, sides: tuple[float, float]) -> None:
    assert parse_size(text) == pytest.approx(sides)


@pytest.mark.parametrize(
    ("text", "right"),
    [
        ("600 x 900 mm", '"600 mm x 900 mm"'),
        ("600 mm × 900 mm", '"600 mm x 900 mm" or "18 in x 24 in"'),
        ("600 mm", '"600 mm x 900 mm" or "18 in x 24 in"'),
        ("60,5 cm x 90 cm", '"60.5 cm"'),
    ],
)
def test_a_size_that_is_none_shows_how(text: str, right: str) -> None:
    with pytest.raises(NotAQuantityError) as caught:
        parse_size(text)
    assert caught.value.right == right
