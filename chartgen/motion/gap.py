"""Following gaps: the time a rule asks for, and the distance it comes to at a speed."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from chartgen.motion.limits import FloatArray, checked

_SAME = 1e-9
"""Relative: a speed this near the rule's threshold counts as on it, whatever unit it was converted from."""


def gap_seconds(
    speed_mps: ArrayLike,
    *,
    fixed_s: ArrayLike | None = None,
    per_length_s_per_m: ArrayLike | None = None,
    length_m: ArrayLike | None = None,
    extra_s: ArrayLike = 0.0,
    extra_above_mps: ArrayLike = np.inf,
    factor: ArrayLike = 1.0,
) -> FloatArray:
    """The following gap in time that a rule asks for.

    Formula: ``(fixed + per_length·length + extra where v >= extra_above) · factor``. At the threshold speed itself
    the extra counts: rules say "below" and "above" it, and the longer gap is the safe reading.

    Args:
        speed_mps: m/s, more than 0, at most 200.
        fixed_s: the same for every vehicle, s, 0 to 60; nan or None where the rule has no such part.
        per_length_s_per_m: seconds for each metre of vehicle, 0 to 10; nan or None where the rule has no such part.
        length_m: length of the vehicle, m, more than 0, at most 100; needed with `per_length_s_per_m`.
        extra_s: added from a threshold speed on, s, 0 to 60.
        extra_above_mps: that speed, m/s; infinite for none.
        factor: for wet, ice and the like, 1 to 20; never shortens.

        All broadcast against one another.

    Returns:
        Seconds, in the broadcast shape.

    Raises:
        ValueError: an argument is outside its range or not finite; a rule with neither part; a length that is missing.

    Source: the form of the rules in driving codes and licence manuals; each rule carries its own source in the
    catalogue.

    >>> gap_seconds([15.0, 25.0], per_length_s_per_m=0.25, length_m=16.0, extra_s=1.0, extra_above_mps=18.0).tolist()
    [4.0, 5.0]
    >>> float(gap_seconds(20.0, fixed_s=2.0, factor=2.0))
    4.0
    """
    speed = checked("speed_mps", speed_mps)
    fixed = checked("fixed_s", np.nan if fixed_s is None else fixed_s, absent=True)
    each = checked("per_length_s_per_m", np.nan if per_length_s_per_m is None else per_length_s_per_m, absent=True)
    length = checked("length_m", np.nan if length_m is None else length_m, absent=True)
    extra = checked("extra_s", extra_s)
    threshold = checked("extra_above_mps", extra_above_mps)
    if (np.isnan(fixed) & np.isnan(each)).any():
        raise ValueError("fixed_s, per_length_s_per_m: a rule needs at least one of them")
    if (~np.isnan(each) & np.isnan(length)).any():
        raise ValueError("length_m: a rule by length needs the vehicle's length")
    by_length = np.where(np.isnan(each), 0.0, each * length)
    seconds = np.nan_to_num(fixed, nan=0.0) + by_length
    seconds = seconds + np.where(speed >= threshold * (1.0 - _SAME), extra, 0.0)
    return np.asarray(seconds * checked("factor", factor))


def gap_distance_m(speed_mps: ArrayLike, gap_s: ArrayLike) -> FloatArray:
    """The distance a following gap comes to.

    Formula: ``v·t``.

    Args:
        speed_mps: m/s, more than 0, at most 200.
        gap_s: s, 0 to 1,000; broadcasts with the speed.

    Returns:
        Metres, in the broadcast shape.

    Raises:
        ValueError: an argument is outside its range or not finite; the message names it.

    Source: uniform motion.

    >>> gap_distance_m([10.0, 20.0], 2.0).tolist()
    [20.0, 40.0]
    """
    return np.asarray(checked("speed_mps", speed_mps) * checked("gap_s", gap_s))
