"""Rows of assumptions to stops: one vectorised call of the edition's method. No rounding, no units but SI."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

import numpy as np
import numpy.typing as npt

from chartgen.figures.record import Columns
from chartgen.motion.friction import friction_at
from chartgen.motion.friction_table import FrictionTable
from chartgen.motion.limits import KMH_PER_MPS
from chartgen.motion.methods import METHOD_INPUTS
from chartgen.motion.stopping import Stop
from chartgen.motion.thumb import IMPLIED_REACTION_S

if TYPE_CHECKING:
    from chartgen.edition.model import Edition, Method, Surface

Floats = npt.NDArray[np.float64]
Arguments = dict[str, Any]

FRICTION: Final = ("mu", "f60", "sp_kmh", "max_mu")

UNSET: Final = {
    "reaction_time_s": np.nan,
    "brake_lag_s": 0.0,
    "build_up_s": 0.0,
    "grade": 0.0,
    "brake_efficiency": 1.0,
    "max_deceleration_mps2": np.inf,
    "brake_share": 1.0,
    "valid_to_mps": np.inf,
}
"""Inputs beside friction, each with the value that means "not stated"."""


def stops(given: Columns, edition: Edition) -> Columns:
    """The computed columns: distances in m, unrounded, times in s.

    Formula: that of the edition's method, see `motion.methods.METHOD_INPUTS`.

    Args:
        given: the inputs, columns as in `table.COLUMNS`, SI, one length.
        edition: for its method and the frictions that are tables by speed.

    Returns:
        The columns by name. Where the vehicle does not stop, braking, total and time are nan; reaction and lag stay;
        `reason` says why.

    Raises:
        ValueError: an input that the method cannot use is stated, or one is outside its range.

    Source: as the method's.
    """
    done = run(given, edition)
    return {
        "friction": _friction(given, edition),
        "full_deceleration_mps2": done.full_deceleration_mps2,
        "reaction_distance_m": done.reaction_distance_m,
        "lag_distance_m": done.lag_distance_m,
        "braking_distance_m": done.braking_distance_m,
        "stopping_distance_m": done.stopping_distance_m,
        "stopping_time_s": done.stopping_time_s,
        "stops": done.stops,
        "reason": done.reason.astype(object),
    }


def run(given: Columns, edition: Edition) -> Stop:
    """The method's own function over all rows of `given` (see `stops` for arguments, errors and source).

    Formula: that of the edition's method.

    Args:
        given: the inputs, columns as in `table.COLUMNS`, SI, one length.
        edition: for its method and frictions.

    Returns:
        A `Stop`, one element a row.

    Raises:
        ValueError: as `arguments`, or an input is outside its range.

    Source: the method's.
    """
    return METHOD_INPUTS[edition.method].function(given["speed_mps"], **arguments(given, edition))


def arguments(given: Columns, edition: Edition) -> Arguments:
    """What the edition's method takes beside the speed, from the input columns, by argument name.

    Raises ValueError for an input that is stated and that the method cannot use: it would print a figure without it.

    Formula: none.

    Args:
        given: the input columns, SI.
        edition: for its method and frictions.

    Returns:
        Arguments by name, SI.

    Raises:
        ValueError: an input is stated that the method cannot use.

    Source: the method's.
    """
    method: Method = edition.method
    inputs = METHOD_INPUTS[method]
    out: Arguments = {}
    for name, unset in UNSET.items():
        if inputs.usable(name):
            out[name] = given[name]
        elif name == "reaction_time_s" and method in IMPLIED_REACTION_S:
            continue  # the rule's own time, which the front door fills in for the reader
        elif not _unset(given[name], unset):
            raise ValueError(f"{name}: the method {method} cannot use it, and would print a figure without it")
    if inputs.usable("friction"):
        out |= _frictions(given, edition)
    return out


def _unset(values: Floats, unset: float) -> bool:
    return bool((np.isnan(values) | (values == unset)).all())


def _frictions(given: Columns, edition: Edition) -> Arguments:
    """The friction arguments; those of tables by speed only where there is such a table."""
    out: Arguments = {name: given[f"friction_{name}"] for name in FRICTION}
    tables = friction_tables(edition.surfaces)
    if tables:
        out |= {"tables": tuple(tables.values()), "table": _table_index(given, tuple(tables))}
    return out


def friction_tables(surfaces: tuple[Surface, ...]) -> dict[str, FrictionTable]:
    """The frictions that are tables by speed, by surface id; speeds in m/s.

    Formula: ``m/s = (km/h)/3.6``.

    Args:
        surfaces: the edition's.

    Returns:
        Tables by surface id, speeds in m/s.

    Raises:
        ValueError: a table is none (the front door has looked).

    Source: each surface's own.
    """
    return {
        s.id: FrictionTable(
            speeds_mps=np.array([kmh for kmh, _ in s.friction.table]) / KMH_PER_MPS,
            mu=np.array([mu for _, mu in s.friction.table]),
        )
        for s in surfaces
        if s.friction.table is not None
    }


def _table_index(given: Columns, ids: tuple[str, ...]) -> npt.NDArray[np.int64]:
    """For each row the place of its surface's table in `ids`, -1 without one."""
    place = {surface: number for number, surface in enumerate(ids)}
    return np.array([place.get(surface, -1) for surface in given["surface"]], dtype=np.int64)


def _friction(given: Columns, edition: Edition) -> Floats:
    """Friction at each row's speed; nan for a method that takes a deceleration instead."""
    if not METHOD_INPUTS[edition.method].usable("friction"):
        return np.full(len(given["speed_mps"]), np.nan)
    return friction_at(given["speed_mps"], **_frictions(given, edition))
