"""What a friction by speed comes to at one speed: for the checks between a curve, its range and its bounds."""

from __future__ import annotations

from itertools import pairwise
from math import exp, inf

from chartgen.edition.model import Friction

REFERENCE_KMH = 60.0
"""Where a stated range of friction stands (ASTM E1960 reports friction at this speed)."""
KM_PER_MILE = 1.609344


def speed_constant(texture_mm: float) -> float:
    """Sp in km/h from the mean profile depth: Sp = 14.2 + 89.7 MPD (ASTM E1960)."""
    return 14.2 + 89.7 * texture_mm


def penn_state(sn0: float, png_h_per_mile: float) -> tuple[float, float]:
    """F60 and Sp in km/h of SN(V) = SN0 exp(-PNG V / 100), V in mph: the same fall in other letters."""
    return sn0 / 100.0 * exp(
        -png_h_per_mile / 100.0 * REFERENCE_KMH / KM_PER_MILE
    ), 100.0 * KM_PER_MILE / png_h_per_mile


def reference_kmh(friction: Friction) -> float:
    """60 km/h; of a table that does not reach there, the end that is nearest."""
    if friction.table is None:
        return REFERENCE_KMH
    return min(max(REFERENCE_KMH, friction.table[0][0]), friction.table[-1][0])


def at_60(friction: Friction) -> float:
    """The friction that a stated range stands around: the constant, or the curve's value at `reference_kmh`."""
    if friction.mu is not None:
        return friction.mu
    if friction.table is not None:
        return _interpolated(friction.table, reference_kmh(friction))
    return min(friction.f60 or inf, _cap(friction))


def greatest(friction: Friction) -> float:
    """The greatest friction anywhere on the curve: near standstill, or a table's greatest."""
    if friction.mu is not None:
        return friction.mu
    if friction.table is not None:
        return max(mu for _, mu in friction.table)
    if friction.f60 is None or friction.sp_kmh is None:
        return inf
    return min(friction.f60 * exp(REFERENCE_KMH / friction.sp_kmh), _cap(friction))


def _cap(friction: Friction) -> float:
    return inf if friction.max_mu is None else friction.max_mu


def _interpolated(table: tuple[tuple[float, float], ...], at: float) -> float:
    for (slow, mu), (fast, next_mu) in pairwise(table):
        if slow <= at <= fast:
            return mu + (next_mu - mu) * (at - slow) / (fast - slow)
    return table[-1][1]
