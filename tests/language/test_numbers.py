"""Numbers, whole, in every locale of the fact table beside this file (its source stands in its head)."""

from __future__ import annotations

import csv
import math
from collections.abc import Callable
from pathlib import Path

import pytest

from chartgen.errors import Unprintable
from chartgen.language import numbers

_LINES = (Path(__file__).parent / "locale_facts.csv").read_text(encoding="utf-8").splitlines()
FACTS = list(csv.DictReader(line for line in _LINES if not line.startswith("#")))
TAGS = [fact["locale"] for fact in FACTS]


def _sign(code: str) -> str:
    return chr(int(code, 16)) if code else ""


@pytest.mark.parametrize("fact", FACTS, ids=TAGS)
def test_a_locale_writes_numbers_as_its_facts_say(fact: dict[str, str]) -> None:
    tag, point, group = fact["locale"], _sign(fact["decimal"]), _sign(fact["grouping"])
    four = "1" + (group if fact["min_grouping"] == "1" else "") + "234"
    assert numbers.format_number(1234567.25, tag, 2) == f"1{group}234{group}567{point}25"
    assert numbers.format_number(1234, tag) == four
    assert numbers.format_number(12345, tag) == f"12{group}345"
    assert numbers.format_number(-999.5, tag, 1) == f"\u2212999{point}5"
    assert numbers.format_percent(0.085, tag) == f"8{point}5{_sign(fact['percent_space'])}%"
    assert numbers.format_percent(-0.09, tag) == f"\u22129{_sign(fact['percent_space'])}%"
    assert numbers.number_style(tag).unit_space == _sign(fact["unit_space"])
    assert numbers.babel_locale(tag).text_direction == fact["direction"]


@pytest.mark.parametrize("tag", TAGS)
def test_digits_are_latin_everywhere(tag: str) -> None:
    assert set("0123456789") <= set(numbers.format_number(1234567890, tag))


@pytest.mark.parametrize(("x", "decimals", "written"), [
    (0.5, 0, "1"), (1.5, 0, "2"), (2.5, 0, "3"), (-2.5, 0, "−3"), (0.125, 2, "0.13"), (1.005, 2, "1.01"), (23, 0, "23"),
    (0.29 * 100, 0, "29"), (-0.0, 0, "0"), (1e6, 0, "1,000,000"), (-0.4, 0, "0"),
])  # fmt: skip
def test_a_number_is_rounded_half_away_from_zero(x: float, decimals: int, written: str) -> None:
    assert numbers.format_number(x, "en-GB", decimals) == written


@pytest.mark.parametrize(("x", "written"), [(0.8, "0.8"), (1.634, "1.63"), (2.0, "2"), (100.0, "100"), (0, "0")])
def test_trailing_zeros_are_left_out_where_a_value_is_named(x: float, written: str) -> None:
    assert numbers.format_trimmed(x, "en-GB", 2) == written


@pytest.mark.parametrize(("x", "written"), [
    (23.0, "23"), (0.1 * 3, "0.3"), (12.5, "12.5"), (1230, "1,230"), (0.025, "0.025"),
])  # fmt: skip
def test_a_rounded_figure_keeps_the_decimals_it_has(x: float, written: str) -> None:
    assert numbers.format_exact(x, "en-GB") == written


def test_a_column_may_ask_for_equal_decimals() -> None:
    assert numbers.format_exact(13.0, "fr", 1) == "13,0"


@pytest.mark.parametrize("x", [math.pi, 22.9996, 1 / 3])
def test_a_figure_that_is_not_rounded_is_refused(x: float) -> None:
    with pytest.raises(Unprintable, match="not rounded"):
        numbers.format_exact(x, "en-GB")
    with pytest.raises(Unprintable, match="not rounded"):
        numbers.format_exact(12.5, "en-GB", 0)


@pytest.mark.parametrize("x", [math.nan, math.inf, -math.inf])
@pytest.mark.parametrize("write", [numbers.format_number, numbers.format_exact, numbers.format_percent])
def test_what_is_not_a_number_is_refused(x: float, write: Callable[[float, str], str]) -> None:
    with pytest.raises(Unprintable, match="not a number"):
        write(x, "en-GB")
