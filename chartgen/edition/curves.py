"""What a friction comes to where it is checked: at 60 km/h, around which its range stands, and where it is greatest."""

from __future__ import annotations

from math import inf

import numpy as np

from chartgen.edition.model import Friction
from chartgen.motion.friction import friction_at
from chartgen.motion.friction_table import FrictionTable
from chartgen.motion.limits import KMH_PER_MPS

REFERENCE_KMH = 60.0
"""Where a stated range of a friction by speed stands: ASTM E1960 reports friction at this speed."""


def reference_kmh(friction: Friction) -> float:
    """60 km/h; of a table that does not reach there, the end that is nearest."""
    if friction.table is None:
        return REFERENCE_KMH
    return min(max(REFERENCE_KMH, friction.table[0][0]), friction.table[-1][0])


def at_60(friction: Friction) -> float:
    """The friction that a stated range stands around: the constant, or the curve's value at `reference_kmh`."""
    return _at(friction, reference_kmh(friction))


def greatest(friction: Friction) -> float:
    """The greatest friction anywhere on the curve: at standstill, or a table's greatest."""
    return _at(friction, 0.0) if friction.table is None else max(mu for _, mu in friction.table)


def _at(friction: Friction, speed_kmh: float) -> float:
    speed_mps = speed_kmh / KMH_PER_MPS
    if friction.table is not None:
        speeds, mu = (np.array(column) for column in zip(*friction.table, strict=True))
        return float(FrictionTable(speeds / KMH_PER_MPS, mu).at(speed_mps))
    if friction.mu is not None:
        return friction.mu
    if friction.f60 is None or friction.sp_kmh is None:
        raise ValueError("friction: there is none")
    cap = inf if friction.max_mu is None else friction.max_mu
    return float(friction_at(speed_mps, f60=friction.f60, sp_kmh=friction.sp_kmh, max_mu=cap))
