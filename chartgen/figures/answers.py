"""What people ask beside the distances: how fast is the other one still, how fast is safe here, what does it add?

Each answer is a column of the table: in SI, unrounded, and as printed. Residual speeds are printed up, greatest speeds
down, and what something adds is the difference of the printed totals, so that the reader's own subtraction works.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

import numpy as np
import numpy.typing as npt

from chartgen.edition.catalogue import GAP_RULES, HEADLIGHTS
from chartgen.figures.gaps import gap_known, rule_arguments
from chartgen.figures.record import Columns
from chartgen.figures.rounding import down, up
from chartgen.figures.stops import Arguments, arguments
from chartgen.figures.units import METRES_IN, MPS_IN, from_metres
from chartgen.motion.inverse import greatest_speed, greatest_speed_in_gap, residual_speed

if TYPE_CHECKING:
    from chartgen.edition.model import Edition

Floats = npt.NDArray[np.float64]

SPEED_STEP: Final = 1.0
"""Printed speeds are whole, in the edition's unit."""

GREATEST: Final = ("sight", "headlight", "gap")
"""What a greatest speed may be asked for: a sight distance, a headlight's reach, a following gap."""

ADDED: Final = ("driver", "surface")
"""What a difference may be asked for: another reaction time, another surface."""


def answer_distances(edition: Edition) -> dict[str, float]:
    """The distances that greatest speeds are asked for, as printed: in the edition's unit, whole, rounded down.

    Formula: ``down(metres / metres in the unit)``. A greatest speed is worked out for the distance that is printed, so
    that it never needs more than the reader is told.

    Args:
        edition: for its questions and its unit.

    Returns:
        "sight" and "headlight", those that are asked.

    Raises:
        KeyError: a headlight that the catalogue does not have (the front door has looked).

    Source: the edition; the catalogue's reach.
    """
    asked = edition.questions
    metres = {"sight": asked.sight_m, "headlight": HEADLIGHTS[asked.headlight].reach_m if asked.headlight else None}
    unit = edition.distance_unit
    return {kind: float(down(from_metres(m, unit))) for kind, m in metres.items() if m is not None}


def answers(columns: Columns, edition: Edition) -> Columns:
    """The columns that the edition's `[questions]` ask for; those it does not ask for are nan.

    Formula: see `motion.inverse`; differences ``printed total - printed total of the reference``.

    Args:
        columns: inputs, computed and printed columns of the table.
        edition: for its questions and its units.

    Returns:
        `residual_speed_mps`, `printed_residual_speed`; for each of `GREATEST` `greatest_…_mps`, `printed_greatest_…`
        and `greatest_…_at_top` (true where even the fastest speed of the edition is slow enough, so that the answer is
        "at least"); for each of `ADDED` `added_by_…_m`, `printed_added_by_…`, `printed_also_added_by_…`.

    Raises:
        ValueError: a question that the method cannot answer (the front door has looked).

    Source: equation of motion; the gap rule's own source, the reach's own source.
    """
    return {**_residual(columns, edition), **_greatest(columns, edition), **_added(columns, edition)}


def _nothing(columns: Columns) -> Floats:
    return np.full(len(columns["row"]), np.nan)


def _taken(given: Arguments, rows: npt.NDArray[Any]) -> Arguments:
    """The arguments of some rows; what is not one value a row is left as it is."""
    return {name: value if name == "tables" else value[rows] for name, value in given.items()}


def _residual(columns: Columns, edition: Edition) -> Columns:
    """How fast each row's vehicle still is at the place where the one that began at the reference speed has stopped.

    nan where that one never stops: there is no such place. 0 for rows that have stopped by then.
    """
    speed = edition.questions.residual_from
    if speed is None:
        return {"residual_speed_mps": _nothing(columns), "printed_residual_speed": _nothing(columns)}
    reach = _of_reference(columns, columns["speed"] == speed, "stopping_distance_m", ("driver", "vehicle", "surface"))
    known = ~np.isnan(reach)
    residual = _nothing(columns)
    residual[known] = residual_speed(
        columns["speed_mps"][known], reach[known], **_taken(arguments(columns, edition), known)
    )
    # The reference itself has stopped there, to the last digit.
    residual[known & (columns["speed"] <= speed)] = 0.0
    return {
        "residual_speed_mps": residual,
        "printed_residual_speed": up(residual / MPS_IN[edition.speed_unit], SPEED_STEP),
    }


def _of_reference(columns: Columns, is_reference: npt.NDArray[np.bool_], what: str, by: tuple[str, ...]) -> Floats:
    """For each row the value of `what` in the reference row that agrees with it in `by` and in grade; nan if none."""
    keys = list(zip(*(columns[name] for name in by), columns["grade"], strict=True))
    found = {keys[i]: columns[what][i] for i in np.flatnonzero(is_reference)}
    return np.array([found.get(key, np.nan) for key in keys], dtype=np.float64)


def _greatest(columns: Columns, edition: Edition) -> Columns:
    """The greatest speeds, up to the edition's fastest: one answer a driver, vehicle, surface, grade, on each row."""
    out: Columns = {}
    top = max(edition.speeds_mps)
    keys = list(zip(*(columns[n] for n in ("driver", "vehicle", "surface", "grade")), strict=True))
    first = {key: place for place, key in reversed(list(enumerate(keys)))}
    rows = np.array(sorted(first.values()))
    of_row = np.array([{place: at for at, place in enumerate(rows)}[first[key]] for key in keys])
    for name in GREATEST:
        found, at_top = _greatest_of(name, columns, edition, rows, top)
        speed = found[of_row] / MPS_IN[edition.speed_unit]
        out[f"greatest_{name}_mps"] = found[of_row]
        out[f"greatest_{name}_at_top"] = at_top[of_row]
        out[f"printed_greatest_{name}"] = np.where(at_top[of_row], max(edition.speeds), down(speed, SPEED_STEP))
    return out


def _greatest_of(
    name: str, columns: Columns, edition: Edition, rows: npt.NDArray[Any], top_mps: float
) -> tuple[Floats, npt.NDArray[np.bool_]]:
    """The greatest speeds of one kind for `rows`, and whether the top itself is slow enough."""
    asked = edition.questions
    found, at_top = np.full(len(rows), np.nan), np.zeros(len(rows), dtype=bool)
    reach = answer_distances(edition)
    if name in reach:
        reach_m = reach[name] * METRES_IN[edition.distance_unit]
        answer = greatest_speed(reach_m, top_mps=top_mps, **_taken(arguments(columns, edition), rows))
        return answer.speed_mps, answer.at_top
    if name == "gap" and asked.gaps:
        rule = GAP_RULES[asked.gaps[0]]
        known = gap_known(rule, columns)[rows]
        some = rows[known]
        given = _taken(arguments(columns, edition), some)
        answer = greatest_speed_in_gap(rule_arguments(rule, columns, some), top_mps=top_mps, **given)
        found[known], at_top[known] = answer.speed_mps, answer.at_top
    return found, at_top


def _added(columns: Columns, edition: Edition) -> Columns:
    """What a row's driver or surface adds to the distance of the reference one, all else alike. nan where either of
    the two never stops, or where no case has the reference."""
    out: Columns = {}
    for name in ADDED:
        asked = edition.questions.driver if name == "driver" else edition.questions.surface
        by = tuple(x for x in ("driver", "vehicle", "surface", "speed") if x != name)
        for added, total in (
            (f"added_by_{name}_m", "stopping_distance_m"),
            (f"printed_added_by_{name}", "printed_stopping"),
            (f"printed_also_added_by_{name}", "printed_also_stopping"),
        ):
            if asked is None:
                out[added] = _nothing(columns)
            else:
                out[added] = columns[total] - _of_reference(columns, columns[name] == asked, total, by) + 0.0
    return out
