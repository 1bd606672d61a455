"""A published table taken as it stands: its own numbers are printed; nothing is computed and nothing rounded anew.

Only where the table's unit is not the edition's are its numbers converted, and then rounded by the edition's rule.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from chartgen.figures.record import Columns
from chartgen.figures.rounding import print_parts, up
from chartgen.figures.units import METRES_IN, from_metres

if TYPE_CHECKING:
    from chartgen.edition.model import Edition

PARTS: Final = ("reaction", "lag", "braking", "stopping")


def adopted(columns: Columns, edition: Edition) -> Columns:
    """The computed and printed columns of an edition that adopts a table.

    Formula: none; ``metres = number x metres in the table's unit``.

    Args:
        columns: the inputs of the table (`driver`, `vehicle`, `surface`, `grade`, `speed`), one length.
        edition: one with `adopted`; the front door has seen to it that every row is there, once.

    Returns:
        The columns that `stops` and rounding give otherwise. A lag that the table does not give is 0, as its parts are
        then its whole; times, friction and deceleration are nan, for the table does not tell them.

    Raises:
        KeyError: a row that the table does not have (the front door has looked).

    Source: the table's own, printed with it.
    """
    table = edition.adopted
    if table is None:
        raise ValueError("the edition adopts no table")
    found = {(r.driver, r.vehicle, r.surface, r.grade, r.speed): r for r in table.rows}
    keys = zip(*(columns[n] for n in ("driver", "vehicle", "surface", "grade", "speed")), strict=True)
    rows = [found[key] for key in keys]
    given = {
        part: np.array([np.nan if (x := getattr(row, part)) is None else x for row in rows], dtype=np.float64)
        for part in PARTS
    }
    given["lag"] = np.nan_to_num(given["lag"], nan=0.0)
    unknown = np.full(len(rows), np.nan)
    out: Columns = {f"{part}_distance_m": given[part] * METRES_IN[table.distance_unit] for part in PARTS}
    out |= dict.fromkeys(("stopping_time_s", "friction", "full_deceleration_mps2"), unknown)
    out |= {"stops": np.ones(len(rows), dtype=bool), "reason": np.full(len(rows), "", dtype=object)}
    for prefix, unit, step in (
        ("printed", edition.distance_unit, edition.rounding.step),
        ("printed_also", edition.also_unit, edition.rounding.also_step),
    ):
        for part in PARTS:
            out[f"{prefix}_{part}"] = unknown if unit is None else given[part]
        if unit not in (None, table.distance_unit):
            exact = [from_metres(out[f"{part}_distance_m"], unit) for part in PARTS]
            made = print_parts(*exact[:3], rounding=edition.rounding, step=step)
            out |= {f"{prefix}_{part}": getattr(made, part) for part in PARTS}
            # A table of totals alone has no parts to add up.
            alone = np.isnan(made.stopping)
            out[f"{prefix}_stopping"] = np.where(alone, up(exact[3], step), made.stopping)
    return out
