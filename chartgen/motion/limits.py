"""Constants and accepted ranges of the mechanics, and the one check that holds arguments to them.

Every constant says whether it is exact, chosen or measured. What lies outside a range raises ValueError with the name
of the argument: a figure worked out from such a value would be worth nothing.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]
Rows = slice | BoolArray | NDArray[np.intp]
"""Some of the rows: a stretch of them, a mask, or their places."""

GRAVITY_MPS2 = 9.80665
"""Standard gravity. Exact: fixed by the 3rd General Conference on Weights and Measures, 1901."""

KMH_PER_MPS = 3.6
"""Exact."""

LEAST_DECELERATION_MPS2 = 0.1
"""Chosen by us: below this, an error of one hundredth in friction decides whether the vehicle stops at all."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Range:
    """What an argument may be: from `low` to `high`, `high` itself allowed, `low` unless `open_low`."""

    low: float
    high: float
    unit: str
    open_low: bool = False

    def holds(self, value: FloatArray) -> BoolArray:
        """True per element where it lies in the range; false for a value that is not a number."""
        above = value > self.low if self.open_low else value >= self.low
        return above & (value <= self.high)

    def __str__(self) -> str:
        opening = "more than" if self.open_low else "at least"
        unit = f" {self.unit}" if self.unit else ""
        if np.isinf(self.high):
            return f"{opening} {self.low:g}{unit}"
        return f"{opening} {self.low:g}{unit} and at most {self.high:g}{unit}"


RANGES: dict[str, Range] = {
    "speed_mps": Range(low=0.0, high=200.0, unit="m/s", open_low=True),
    "reaction_time_s": Range(low=0.0, high=10.0, unit="s"),
    "brake_lag_s": Range(low=0.0, high=3.0, unit="s"),
    "build_up_s": Range(low=0.0, high=3.0, unit="s"),
    "mu": Range(low=0.0, high=1.5, unit="", open_low=True),
    "f60": Range(low=0.0, high=1.5, unit="", open_low=True),
    "sp_kmh": Range(low=10.0, high=10_000.0, unit="km/h"),
    "max_mu": Range(low=0.0, high=np.inf, unit="", open_low=True),
    "brake_share": Range(low=0.0, high=1.0, unit="", open_low=True),
    "valid_to_mps": Range(low=0.0, high=np.inf, unit="m/s", open_low=True),
    "grade": Range(low=-0.30, high=0.30, unit=""),
    "brake_efficiency": Range(low=0.0, high=1.0, unit="", open_low=True),
    "max_deceleration_mps2": Range(low=0.0, high=np.inf, unit="m/s²", open_low=True),
    "fixed_s": Range(low=0.0, high=60.0, unit="s"),
    "per_length_s_per_m": Range(low=0.0, high=10.0, unit="s/m"),
    "length_m": Range(low=0.0, high=100.0, unit="m", open_low=True),
    "extra_s": Range(low=0.0, high=60.0, unit="s"),
    "extra_above_mps": Range(low=0.0, high=np.inf, unit="m/s"),
    "factor": Range(low=1.0, high=20.0, unit=""),
    "gap_s": Range(low=0.0, high=1_000.0, unit="s"),
}
"""What the mechanics accept, by argument name. The front door may be stricter; it is never laxer.

Zero is allowed for a reaction time, a lag and a build-up, so that a phase can be looked at on its own. The grade is
rise over run, uphill positive. The limits on speed, slope and times are chosen by us, far outside what is met on
roads.
"""


def checked(name: str, value: ArrayLike, *, absent: bool = False) -> FloatArray:
    """`value` as a float array, held to ``RANGES[name]``.

    With `absent`, an element that is not a number means "not given" and passes; infinities pass only where the range
    has no upper end.

    Raises:
        ValueError: an element is outside the range or not a finite number; the message names the argument, the first
            such value and what is allowed.

    >>> float(checked("grade", 0.05))
    0.05
    >>> checked("grade", 0.31)
    Traceback (most recent call last):
        ...
    ValueError: grade: 0.31 is not accepted; it must be at least -0.3 and at most 0.3
    """
    array = np.asarray(value, dtype=np.float64)
    allowed = RANGES[name]
    # The two ends first: it takes half the time, and a value that is not a number makes both of them none.
    if array.size and allowed.holds(np.stack([array.min(), array.max()])).all():
        return array
    good = allowed.holds(array)
    if absent:
        good = good | np.isnan(array)
    if not good.all():
        first = float(array[~good].flat[0]) if array.ndim else float(array)
        raise ValueError(f"{name}: {first!r} is not accepted; it must be {allowed}")
    return array
