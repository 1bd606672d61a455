"""Rounding: examples by hand, and laws over the full range, each shown to fail on a planted mutant."""

from __future__ import annotations

import itertools
from collections.abc import Callable
from fractions import Fraction
from typing import Any

import numpy as np
import pytest
from hypothesis import Phase, given, settings
from hypothesis import strategies as st

from chartgen.edition.model import Rounding
from chartgen.figures import rounding as r

Round = Callable[..., Any]
Print = Callable[..., r.Printed]

STEPS = st.sampled_from([0.1, 0.25, 0.5, 1.0, 5.0, 10.0, 25.0])
VALUES = st.floats(0.0, 20_000.0, allow_subnormal=False)
"""Nothing, and from 2e-308 up: a value whose steps are below the least float there is counts as nothing."""
NEAREST: dict[Any, Any] = {"reaction": "nearest", "lag": "nearest", "braking": "nearest"}
UP: dict[Any, Any] = {"reaction": "up", "lag": "up", "braking": "up"}


def hold(law: Callable[..., None], *strategies: st.SearchStrategy[Any], shrink: bool = True) -> None:
    """Tries a law on 500 examples; the same ones each time, so that a failure can be seen again."""
    phases = [Phase.generate, Phase.shrink] if shrink else [Phase.generate]
    tried = settings(
        max_examples=500, derandomize=True, database=None, deadline=None, phases=phases, report_multiple_bugs=False
    )
    tried(given(*strategies)(law))()


def breaks(law: Callable[..., None], *strategies: st.SearchStrategy[Any]) -> None:
    """The law must not hold: it is tried on a planted mutant."""
    with pytest.raises(AssertionError):
        hold(law, *strategies, shrink=False)


# ---- one value -----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("value", "step", "nearest", "up", "down"),
    [
        (14.5, 1, 15, 15, 14),  # half away from zero, not to even
        (15.5, 1, 16, 16, 15),
        (-14.5, 1, -15, -14, -15),
        (14.499, 1, 14, 15, 14),
        (0.0, 1, 0, 0, 0),
        (1e-12, 1, 0, 1, 0),  # small is not nothing: up shortens nothing
        (76.7, 5, 75, 80, 75),
        (77.5, 5, 80, 80, 75),
        (20.85, 0.1, 20.9, 20.9, 20.8),  # a tie in decimals, below it in binary
        (0.3, 0.1, 0.3, 0.3, 0.3),
        (55.00000000001, 1, 55, 55, 55),  # 2e-13 relative: exactly 55
        (54.99999999999, 1, 55, 55, 55),
        (55.0000002, 1, 55, 56, 55),  # 3.6e-9 relative: more than 55
    ],
)
def test_one_value(value: float, step: float, nearest: float, up: float, down: float) -> None:
    assert (float(r.nearest(value, step)), float(r.up(value, step)), float(r.down(value, step))) == (nearest, up, down)


def test_nan_stays_nan_and_shapes_are_kept() -> None:
    out = r.up([[1.2, np.nan], [3.0, 4.1]], 1.0)
    assert np.array_equal(out, np.array([[2.0, np.nan], [3.0, 5.0]]), equal_nan=True)


@pytest.mark.parametrize("step", [0.0, -1.0, float("nan"), float("inf")])
def test_a_step_that_is_none_is_refused(step: float) -> None:
    with pytest.raises(ValueError, match="positive number"):
        r.up(1.0, step)


def up_never_shortens(up: Round) -> Callable[..., None]:
    def law(value: float, step: float) -> None:
        out = float(up(value, step))
        assert out >= value * (1 - 1e-9)
        assert out - value < step * (1 + 1e-9)

    return law


def test_up_never_shortens() -> None:
    hold(up_never_shortens(r.up), VALUES, STEPS)


def test_up_law_sees_nearest_in_its_place() -> None:
    breaks(up_never_shortens(r.nearest), VALUES, STEPS)


def down_never_lengthens(down: Round) -> Callable[..., None]:
    def law(value: float, step: float) -> None:
        out = float(down(value, step))
        assert out <= value * (1 + 1e-9)
        assert value - out < step * (1 + 1e-9)

    return law


def test_down_never_lengthens() -> None:
    hold(down_never_lengthens(r.down), VALUES, STEPS)


def test_down_law_sees_nearest_in_its_place() -> None:
    breaks(down_never_lengthens(r.nearest), VALUES, STEPS)


def nearest_is_within_half(nearest: Round) -> Callable[..., None]:
    def law(value: float, step: float) -> None:
        assert abs(float(nearest(value, step)) - value) <= step / 2 + 1e-9 * abs(value) + 1e-12

    return law


def test_nearest_is_within_half() -> None:
    hold(nearest_is_within_half(r.nearest), st.floats(-20_000.0, 20_000.0, allow_subnormal=False), STEPS)


def test_nearest_law_sees_down_in_its_place() -> None:
    breaks(nearest_is_within_half(r.down), VALUES, STEPS)


def close_counts_as_exact(rounded: dict[str, Round]) -> Callable[..., None]:
    """Within 1e-9 of a multiple or a tie a value is that; from 1.1e-9 on it is not."""

    def law(count: int, step: float, off: float) -> None:
        exact = Fraction(repr(step))
        multiple, tie, above = (
            float(exact * n) for n in (Fraction(count), count + Fraction(1, 2), Fraction(count + 1))
        )
        for name in ("up", "down", "nearest"):
            assert float(rounded[name](multiple * (1 + off), step)) == multiple
        assert float(rounded["nearest"](tie * (1 + off), step)) == above
        assert float(rounded["up"](multiple * (1 + 1.1e-9), step)) == above
        assert float(rounded["nearest"](tie * (1 - 1.1e-9), step)) == multiple

    return law


ALL = {"up": r.up, "down": r.down, "nearest": r.nearest}
CLOSE = (st.integers(1, 100_000), STEPS, st.floats(-0.99e-9, 0.99e-9))


def test_close_counts_as_exact() -> None:
    hold(close_counts_as_exact(ALL), *CLOSE)


@pytest.mark.parametrize(
    ("name", "mutant"),
    [
        ("up", lambda value, step: np.ceil(value / step) * step),
        ("nearest", lambda value, step: np.rint(value / step) * step),
        ("nearest", lambda value, step: np.floor(value / step + 0.5) * step),
    ],
    ids=["plain ceiling", "half to even", "no closeness"],
)
def test_close_law_sees(name: str, mutant: Round) -> None:
    breaks(close_counts_as_exact(ALL | {name: mutant}), *CLOSE)


# ---- parts and totals ----------------------------------------------------------------------------------------------

PARTS = st.tuples(VALUES, st.floats(0.0, 100.0, allow_subnormal=False), VALUES)


def counts(values: list[float], step: float) -> list[int]:
    """Printed values as whole numbers of steps; they must be such."""
    found = [Fraction(repr(v)) / Fraction(repr(step)) for v in values]
    assert all(abs(f - round(f)) < Fraction(1, 10**6) for f in found)
    return [round(f) for f in found]


def run(print_parts: Print, parts: tuple[float, float, float], rounding: Rounding, step: float) -> list[float]:
    out = print_parts(*([p] for p in parts), rounding=rounding, step=step)
    return [float(x[0]) for x in (out.reaction, out.lag, out.braking, out.stopping)]


def parts_add_up(print_parts: Print, rounding: Rounding) -> Callable[..., None]:
    def law(parts: tuple[float, float, float], step: float) -> None:
        *printed, total = counts(run(print_parts, parts, rounding, step), step)
        assert sum(printed) == total

    return law


def never_short(print_parts: Print, rounding: Rounding) -> Callable[..., None]:
    def law(parts: tuple[float, float, float], step: float) -> None:
        for exact, printed in zip((*parts, sum(parts)), run(print_parts, parts, rounding, step), strict=True):
            assert printed >= exact * (1 - 2e-9)

    return law


def controlled_is_least(print_parts: Print) -> Callable[..., None]:
    """Adds up to the rounded total, moves no part by a whole step, and no other way of adding up distorts less."""
    rounding = Rounding(rules=NEAREST, total="controlled")

    def law(parts: tuple[float, float, float], step: float) -> None:
        *printed, total = counts(run(print_parts, parts, rounding, step), step)
        assert sum(printed) == total == counts([float(r.nearest(sum(parts), step))], step)[0]
        exact = [p / step for p in parts]
        moves = [abs(p - e) for p, e in zip(printed, exact, strict=True)]
        assert max(moves) < 1
        least = min(
            sum((w - e) ** 2 for w, e in zip(way, exact, strict=True))
            for way in itertools.product(*((np.floor(e), np.floor(e) + 1) for e in exact))
            if sum(way) == total
        )
        assert sum(m * m for m in moves) <= least + 1e-4

    return law


def printed_nearest_each(*args: Any, **kwargs: Any) -> r.Printed:
    """A mutant: parts and total each to the nearest, nothing adjusted."""
    return r.print_parts(*args, rounding=Rounding(rules=NEAREST, total="on-its-own"), step=kwargs["step"])


def all_on_the_braking(reaction: Any, lag: Any, braking: Any, *, rounding: Rounding, step: float) -> r.Printed:
    """A mutant: what is left over goes to the last part."""
    total = r.nearest(np.add(np.add(reaction, lag), braking), step)
    first, second = r.nearest(reaction, step), r.nearest(lag, step)
    return r.Printed(reaction=first, lag=second, braking=total - first - second, stopping=total)


SUM_UP = Rounding(rules=UP)
SUM_NEAREST = Rounding(rules=NEAREST)
MIXED = Rounding(rules=NEAREST | {"reaction": "up"})
OWN_UP = Rounding(rules=UP, total="on-its-own")


@pytest.mark.parametrize("rounding", [SUM_UP, SUM_NEAREST, MIXED], ids=["up", "nearest", "by part"])
def test_sum_of_parts_adds_up(rounding: Rounding) -> None:
    hold(parts_add_up(r.print_parts, rounding), PARTS, STEPS)


def test_adding_up_law_sees_a_total_of_its_own() -> None:
    breaks(parts_add_up(printed_nearest_each, SUM_UP), PARTS, STEPS)


@pytest.mark.parametrize("rounding", [SUM_UP, OWN_UP], ids=["sum", "on its own"])
def test_up_is_never_short(rounding: Rounding) -> None:
    assert rounding.never_short
    hold(never_short(r.print_parts, rounding), PARTS, STEPS)


def test_never_short_law_sees_nearest_in_its_place() -> None:
    breaks(never_short(printed_nearest_each, SUM_UP), PARTS, STEPS)


def test_controlled_adds_up_with_least_distortion() -> None:
    hold(controlled_is_least(r.print_parts), PARTS, STEPS)


@pytest.mark.parametrize("mutant", [printed_nearest_each, all_on_the_braking])
def test_controlled_law_sees(mutant: Print) -> None:
    breaks(controlled_is_least(mutant), PARTS, STEPS)


def test_controlled_with_up_is_refused() -> None:
    with pytest.raises(ValueError, match="cannot be adjusted"):
        run(r.print_parts, (1.2, 0.0, 3.4), Rounding(rules=UP, total="controlled"), 1.0)


def test_mixed_rules_make_a_total_of_its_own_go_up() -> None:
    rounding = Rounding(rules=MIXED.rules, total="on-its-own")
    assert run(r.print_parts, (1.0, 0.0, 3.1), rounding, 1.0) == [1, 0, 3, 5]


@pytest.mark.parametrize("total", ["sum-of-parts", "on-its-own", "controlled"])
def test_what_does_not_stop_has_no_total(total: Any) -> None:
    out = run(r.print_parts, (7.4, 2.6, float("nan")), Rounding(rules=NEAREST, total=total), 1.0)
    assert out[:2] == [7, 3]
    assert np.isnan(out[2:]).all()


# ---- how much may be missing ---------------------------------------------------------------------------------------


def test_shortfall_is_that_of_the_worst_row() -> None:
    assert r.shortfall([10.4, 12.49, np.nan, 7.6], [10.0, 12.0, np.nan, 8.0]) == pytest.approx(0.49)
    assert r.shortfall([10.0 + 1e-9], [10.0]) == 0.0
    assert r.shortfall([], []) == 0.0


def test_shortfall_is_told_up_to_the_next_tenth_of_a_step() -> None:
    assert r.shortfall_printed(0.41, 1.0) == 0.5
    assert r.shortfall_printed(2.41, 5.0) == 2.5
    assert r.shortfall_printed(0.4, 1.0) == 0.4
