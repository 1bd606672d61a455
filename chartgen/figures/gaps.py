"""The following gap of each row, where the edition has cab cards and so names a rule of the catalogue."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from chartgen.edition.catalogue import GAP_RULES
from chartgen.figures.record import Columns
from chartgen.figures.rounding import up
from chartgen.figures.units import from_metres
from chartgen.motion.gap import gap_seconds

if TYPE_CHECKING:
    from chartgen.edition.model import Edition

NAMES: Final = ("gap_s", "printed_gap_s", "printed_gap_distance", "printed_also_gap_distance")


def gaps(columns: Columns, edition: Edition) -> Columns:
    """The gap columns; nan without cab cards, and where the rule needs a length that the vehicle does not give.

    `gap_s` is the rule's gap in s, longer on wet, snow and ice by the rule's factors. `printed_gap_s` goes up to the
    next whole second, and the printed distance is the road covered in those printed seconds, up to the next step: the
    reader who counts the seconds on the card keeps the distance on the card, and neither is shorter than the rule.
    """
    rows = len(columns["row"])
    if edition.cards is None:
        return {name: np.full(rows, np.nan) for name in NAMES}
    rule = GAP_RULES[edition.cards.gap]
    state = columns["state"]
    factor = np.select([state == "wet", (state == "snow") | (state == "ice")], [rule.wet_factor, rule.ice_factor], 1.0)
    speed, length = columns["speed_mps"], columns["length_m"]
    known = np.full(rows, rule.per_length_s_per_m is None) | ~np.isnan(length)
    gap_s = np.full(rows, np.nan)
    gap_s[known] = gap_seconds(
        speed[known],
        fixed_s=rule.fixed_s,
        per_length_s_per_m=rule.per_length_s_per_m,
        length_m=length[known],
        extra_s=rule.extra_s,
        extra_above_mps=rule.extra_above_mps,
        factor=factor[known],
    )
    printed_s = up(gap_s)
    out = {"gap_s": gap_s, "printed_gap_s": printed_s}
    for name, unit, step in (
        ("printed_gap_distance", edition.distance_unit, edition.rounding.step),
        ("printed_also_gap_distance", edition.also_unit, edition.rounding.also_step),
    ):
        out[name] = np.full(rows, np.nan) if unit is None else up(from_metres(speed * printed_s, unit), step)
    return out
