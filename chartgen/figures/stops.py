"""Rows of assumptions to stops: one vectorised call of the edition's method. No rounding, no units but SI."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np
import numpy.typing as npt

from chartgen.figures.record import Columns
from chartgen.motion.friction import friction_at
from chartgen.motion.methods import METHOD_INPUTS
from chartgen.motion.stopping import Stop

if TYPE_CHECKING:
    from chartgen.edition.model import Method

Floats = npt.NDArray[np.float64]

FRICTION: Final = ("mu", "f60", "sp_kmh", "max_mu")

UNSET: Final = {
    "reaction_time_s": np.nan,
    "brake_lag_s": 0.0,
    "build_up_s": 0.0,
    "grade": 0.0,
    "brake_efficiency": 1.0,
    "max_deceleration_mps2": np.inf,
}
"""Inputs beside friction, each with the value that means "not stated"."""


def stops(given: Columns, method: Method) -> Columns:
    """The computed columns (inputs as in `table.COLUMNS`): distances in m, unrounded, times in s.

    Where the vehicle does not stop, braking, total and time are nan; reaction and lag stay; `reason` says why.
    """
    done = _run(given, method)
    return {
        "friction": _friction(given, method),
        "full_deceleration_mps2": done.full_deceleration_mps2,
        "reaction_distance_m": done.reaction_distance_m,
        "lag_distance_m": done.lag_distance_m,
        "braking_distance_m": done.braking_distance_m,
        "stopping_distance_m": done.stopping_distance_m,
        "stopping_time_s": done.stopping_time_s,
        "stops": done.stops,
        "reason": done.reason.astype(object),
    }


def _run(given: Columns, method: Method) -> Stop:
    """The method's own function with the inputs it can use; one that it cannot use must not be there at all."""
    inputs = METHOD_INPUTS[method]
    arguments: Columns = {}
    for name, unset in UNSET.items():
        if inputs.usable(name):
            arguments[name] = given[name]
        elif (given[name] != unset).any():
            raise ValueError(f"{name}: the method {method} cannot use it, and would print a figure without it")
    if inputs.usable("friction"):
        arguments |= {name: given[f"friction_{name}"] for name in FRICTION}
    return inputs.function(given["speed_mps"], **arguments)


def _friction(given: Columns, method: Method) -> Floats:
    """Friction at each row's speed; nan for a method that takes a deceleration instead."""
    if not METHOD_INPUTS[method].usable("friction"):
        return np.full(len(given["speed_mps"]), np.nan)
    return friction_at(given["speed_mps"], **{name: given[f"friction_{name}"] for name in FRICTION})
