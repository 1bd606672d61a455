"""The way out of SI: metres to the printed unit. The factors are exact by definition, so no units library is needed.

Source: the international yard and pound agreement of 1959 (1 ft = 0.3048 m, 1 mile = 1609.344 m); a test holds the
factors to scipy.constants.

Two constants of the mechanics that pages and sheets say aloud go through here, so that nobody writes them twice.
"""

from __future__ import annotations

from typing import Final

import numpy as np
import numpy.typing as npt

from chartgen.motion.limits import GRAVITY_MPS2, LEAST_DECELERATION_MPS2

__all__ = ["GRAVITY_MPS2", "LEAST_DECELERATION_MPS2", "METRES_IN", "MPS_IN", "from_metres"]

Floats = npt.NDArray[np.float64]

METRES_IN: Final = {"m": 1.0, "ft": 0.3048}
"""Metres in one printed unit; exact."""

MPS_IN: Final = {"mph": 1609.344 / 3600.0, "km/h": 1.0 / 3.6}
"""Metres a second in one printed unit of speed; exact but for the last binary place."""


def from_metres(distance_m: npt.ArrayLike, unit: str) -> Floats:
    """A distance in m, any shape, as a number of `unit` ("m" or "ft"), unrounded. Raises KeyError for another unit.

    Formula: ``distance / metres in the unit``.

    Args:
        distance_m: metres, any shape.
        unit: "m" or "ft".

    Returns:
        A number of the unit, unrounded.

    Raises:
        KeyError: another unit.

    Source: sources:yard-1959.
    """
    return np.asarray(distance_m, dtype=np.float64) / METRES_IN[unit]
