"""How a figure is printed. The only place in the program that rounds a distance, a gap or a speed.

Rounding is done in counts of the step, so that the sum of three printed parts is a sum of whole numbers, and a step
such as 0.1 leaves no binary dust: 3 counts of 0.1 is 0.3.

A value within 1e-9 (relative) of a multiple of the step counts as exactly that multiple, and one as close to a tie
counts as exactly that tie: 30 mph for 1.5 s must not be printed a foot longer because of the 16th binary digit.
Meaningful from 1e-300 to 1e8 steps.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Final

import numpy as np
import numpy.typing as npt

from chartgen.edition.model import PARTS, Part, Rounding, Rule

Floats = npt.NDArray[np.float64]

CLOSE: Final = 1e-9
"""Relative distance within which a value counts as exactly a multiple or a tie."""


def _steps(values: npt.ArrayLike, step: float) -> Floats:
    """`values` as a number of steps, multiples and ties made exact; nan stays nan."""
    if not (step > 0.0 and np.isfinite(step)):
        raise ValueError(f"a rounding step must be a positive number, not {step!r}")
    q = np.asarray(values, dtype=np.float64) / step
    near = CLOSE * np.abs(q)
    whole = np.rint(q)
    q = np.where(np.abs(q - whole) <= near, whole, q)
    tie = np.floor(q) + 0.5
    return np.where(np.abs(q - tie) <= near, tie, q)


def _counts(q: Floats, rule: Rule) -> Floats:
    """Steps `q` (from `_steps`) to whole counts by `rule`."""
    if rule == "up":
        return np.ceil(q)
    # Half away from zero; np.rint would send 14.5 to 14, a printed figure too short.
    return np.copysign(np.floor(np.abs(q) + 0.5), q)


def _values(counts: Floats, step: float) -> Floats:
    """Whole counts back to values: one rounding only, so that 3 counts of 0.1 is the float 0.3. No minus zero."""
    exact = Fraction(repr(float(step)))
    return counts * float(exact.numerator) / float(exact.denominator) + 0.0


def nearest(values: npt.ArrayLike, step: float = 1.0) -> Floats:
    """The nearest multiple of `step`, half away from zero. Any shape, any sign; nan stays nan.

    Formula: ``step·floor(value/step + 1/2)``, of the amount, with its sign.

    Args:
        values: any shape, any sign, in any unit.
        step: more than 0, in the same unit.

    Returns:
        Multiples of the step; nan stays nan.

    Raises:
        ValueError: the step is not a positive number.

    Source: half away from zero, as in commerce; common practice.

    >>> nearest([14.5, 14.4999, -14.5])
    array([ 15.,  14., -15.])
    """
    return _values(_counts(_steps(values, step), "nearest"), step)


def up(values: npt.ArrayLike, step: float = 1.0) -> Floats:
    """The next multiple of `step` that is not below the value: distances, gaps, residual speeds. nan stays nan.

    Formula: ``step·ceil(value/step)``.

    Args:
        values: any shape, any sign, in any unit.
        step: more than 0, in the same unit.

    Returns:
        Multiples of the step; nan stays nan.

    Raises:
        ValueError: the step is not a positive number.

    Source: our own rule: no printed distance is shorter than the exact one.

    >>> up([14.0, 14.0001, 76.7], 5.0)
    array([15., 15., 80.])
    """
    return _values(_counts(_steps(values, step), "up"), step)


def down(values: npt.ArrayLike, step: float = 1.0) -> Floats:
    """The multiple of `step` that is not above the value: greatest safe speeds, speeds of a sight distance.

    Formula: ``step·floor(value/step)``.

    Args:
        values: any shape, any sign, in any unit.
        step: more than 0, in the same unit.

    Returns:
        Multiples of the step; nan stays nan.

    Raises:
        ValueError: the step is not a positive number.

    Source: our own rule: no printed speed is faster than the exact one.

    >>> down([39.2, 40.0])
    array([39., 40.])
    """
    return _values(np.floor(_steps(values, step)), step)


def _shared_out(parts: Floats, total: Floats) -> Floats:
    """Counts of the parts (first axis) that add up to `total` counts with the least distortion.

    Each part goes down or up to a neighbouring whole count; the ups go to the parts with the largest remainders
    (largest-remainder method), which gives the least sum of squared moves, and moves no part by a whole step.
    Equal remainders: the earlier part of the stop goes up.
    """
    low = np.floor(parts)
    missing = total - low.sum(axis=0)
    # A stable sort by falling remainder; the rank of each part says whether it is among the `missing` largest.
    order = np.argsort(-(parts - low), axis=0, kind="stable")
    rank = np.argsort(order, axis=0, kind="stable")
    return np.asarray(low + (rank < missing), dtype=np.float64)


@dataclass(frozen=True, slots=True, kw_only=True)
class Printed:
    """Printed figures, one array a quantity, all in the same unit as they were given."""

    reaction: Floats
    lag: Floats
    braking: Floats
    stopping: Floats


def total_rule(rules: Mapping[Part, Rule]) -> Rule:
    """The rule of a total rounded on its own: that of the parts; where they differ, the longer one, `up`.

    Formula: none.

    Args:
        rules: a rule by part.

    Returns:
        "up" or "nearest".

    Raises:
        Nothing.

    Source: our own: where a choice is open, the longer distance.
    """
    return "up" if "up" in rules.values() else "nearest"


def print_parts(
    reaction: npt.ArrayLike, lag: npt.ArrayLike, braking: npt.ArrayLike, *, rounding: Rounding, step: float
) -> Printed:
    """The printed parts and total of stops.

    `reaction`, `lag`, `braking`: unrounded distances in the printed unit, same shape, >= 0, nan where there is none
    (a stop that never ends has no braking distance; its total is nan too). `step` in the same unit; it is given apart
    because the second unit has a step of its own under the same rules.

    Totals: `sum-of-parts` adds the printed parts; `on-its-own` rounds the unrounded total (`total_rule`);
    `controlled` rounds the total to the nearest and adjusts the parts with the least distortion so that they add up.
    Raises ValueError for `controlled` with `up`: parts that all go up cannot be adjusted.

    Formula: parts by `up` or `nearest`; the total as said above.

    Args:
        reaction: unrounded, in the printed unit, at least 0.
        lag: likewise.
        braking: likewise; nan where the stop never ends.
        rounding: the edition's rules.
        step: in the printed unit, more than 0.

    Returns:
        `Printed`, in the printed unit.

    Raises:
        ValueError: `controlled` with `up`, or a step that is not a positive number.

    Source: largest remainders for `controlled` (common practice in apportionment).
    """
    exact = [np.asarray(part, dtype=np.float64) for part in (reaction, lag, braking)]
    q = np.stack([_steps(part, step) for part in exact])
    # The total in steps is made from the distances, not from the adjusted steps: its own closeness is judged anew.
    whole = _steps(exact[0] + exact[1] + exact[2], step)
    counts = np.stack([_counts(q[i], rounding.rules[part]) for i, part in enumerate(PARTS)])
    if rounding.total == "sum-of-parts":
        total = counts.sum(axis=0)
    elif rounding.total == "on-its-own":
        total = _counts(whole, total_rule(rounding.rules))
    else:
        if "up" in rounding.rules.values():
            raise ValueError("controlled rounding cannot go with the rule up: parts that all go up cannot be adjusted")
        total = _counts(whole, "nearest")
        counts = np.where(np.isnan(total), counts, _shared_out(q, total))
    return Printed(
        reaction=_values(counts[0], step),
        lag=_values(counts[1], step),
        braking=_values(counts[2], step),
        stopping=_values(total, step),
    )


def shortfall(exact: npt.ArrayLike, printed: npt.ArrayLike) -> float:
    """How much the worst printed figure falls short of the exact one, >= 0, in their unit; nan is passed over.

    A difference within 1e-9 of the figure is no shortfall: it counts as exactly printed.

    Formula: ``max(exact - printed, 0)``.

    Args:
        exact: any shape, any unit.
        printed: the same shape and unit.

    Returns:
        The worst, at least 0.

    Raises:
        Nothing.

    Source: none needed; arithmetic.
    """
    exact_ = np.asarray(exact, dtype=np.float64)
    short = exact_ - np.asarray(printed, dtype=np.float64)
    real = np.isfinite(short) & (short > CLOSE * np.abs(exact_))
    return float(short[real].max()) if real.any() else 0.0


def shortfall_printed(short: float, step: float) -> float:
    """A shortfall as a reader is told it: up to the next tenth of a step, so that "up to N" is never an understatement.

    Formula: ``up(short, step/10)``.

    Args:
        short: at least 0, in the printed unit.
        step: in the printed unit, more than 0.

    Returns:
        A multiple of a tenth of the step.

    Raises:
        ValueError: the step is not a positive number.

    Source: our own rule.

    >>> shortfall_printed(0.4321, 1.0)
    0.5
    """
    return float(up(short, float(Fraction(repr(float(step))) / 10)))
