"""Following gaps: what a rule of the catalogue asks for at each row's speed, in seconds and in distance."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Final

import numpy as np
import numpy.typing as npt

from chartgen.edition.catalogue import GAP_RULES, GapRule
from chartgen.figures.record import Columns
from chartgen.figures.rounding import up
from chartgen.figures.units import from_metres
from chartgen.motion.gap import gap_seconds

if TYPE_CHECKING:
    from chartgen.edition.model import Edition

NAMES: Final = ("gap_s", "printed_gap_s", "printed_gap_distance", "printed_also_gap_distance")


def gaps(columns: Columns, edition: Edition) -> Columns:
    """The gap columns of the cards' rule; nan without cab cards.

    Formula: see `motion.gap.gap_seconds`; longer on wet, snow and ice by the rule's factors.

    Args:
        columns: the inputs of the table, SI, one length.
        edition: for its rule, its units and its steps.

    Returns:
        Columns `NAMES`. `printed_gap_s` goes up to the next whole second, and the printed distance is the road covered
        in those printed seconds, up to the next step: the reader who counts the seconds on the card keeps the distance
        on the card, and neither is shorter than the rule. nan where the rule needs a length that the vehicle does not
        give.

    Raises:
        KeyError: the rule is not in the catalogue (the front door has looked).

    Source: the rule's own, in the catalogue.
    """
    if edition.cards is None:
        return {name: np.full(len(columns["row"]), np.nan) for name in NAMES}
    return _gap(columns, edition, GAP_RULES[edition.cards.gap])


def gaps_by_rule(columns: Columns, edition: Edition) -> Columns:
    """The gap columns of each rule that the edition's questions name: `"gap_s gap/two-seconds"` and so on.

    As `gaps`, once a rule; the rule's key stands behind the column's name.

    Formula: see `motion.gap.gap_seconds`.

    Args:
        columns: the inputs of the table, SI, one length.
        edition: for its questions, units and steps.

    Returns:
        The four gap columns a rule.

    Raises:
        KeyError: a rule is not in the catalogue (the front door has looked).

    Source: each rule's own, in the catalogue.
    """
    out: Columns = {}
    for key in edition.questions.gaps:
        made = _gap(columns, edition, GAP_RULES[key])
        out |= {f"{name} {key}": values for name, values in made.items()}
    return out


def rule_arguments(rule: GapRule, columns: Columns, rows: npt.NDArray[Any]) -> dict[str, Any]:
    """The rule as `motion.gap.gap_seconds` takes it, for the rows picked by `rows`.

    Formula: none; wet, snow and ice take the factors of the rule, snow that of ice.

    Args:
        rule: of the catalogue.
        columns: the inputs of the table, SI.
        rows: which of them, as an index of numpy.

    Returns:
        Arguments by name: s, s/m, m, m/s.

    Raises:
        Nothing.

    Source: the rule's own.
    """
    state = columns["state"][rows]
    factors = [rule.wet_factor, rule.ice_factor]
    return {
        "fixed_s": rule.fixed_s,
        "per_length_s_per_m": rule.per_length_s_per_m,
        "length_m": columns["length_m"][rows],
        "extra_s": rule.extra_s,
        "extra_above_mps": rule.extra_above_mps,
        "factor": np.select([state == "wet", (state == "snow") | (state == "ice")], factors, 1.0),
    }


def gap_known(rule: GapRule, columns: Columns) -> npt.NDArray[np.bool_]:
    """True for each row whose gap the rule can tell: one by length needs the vehicle's.

    Formula: none.

    Args:
        rule: of the catalogue.
        columns: the inputs of the table.

    Returns:
        Truths, one a row.

    Raises:
        Nothing.

    Source: the rule's own.
    """
    known = np.full(len(columns["row"]), rule.per_length_s_per_m is None)
    return np.asarray(known | ~np.isnan(columns["length_m"]))


def _gap(columns: Columns, edition: Edition, rule: GapRule) -> Columns:
    speed = columns["speed_mps"]
    known = gap_known(rule, columns)
    gap_s = np.full(len(speed), np.nan)
    gap_s[known] = gap_seconds(speed[known], **rule_arguments(rule, columns, known))
    printed_s = up(gap_s)
    out: Columns = {"gap_s": gap_s, "printed_gap_s": printed_s}
    for name, unit, step in (
        ("printed_gap_distance", edition.distance_unit, edition.rounding.step),
        ("printed_also_gap_distance", edition.also_unit, edition.rounding.also_step),
    ):
        out[name] = np.full(len(speed), np.nan) if unit is None else up(from_metres(speed * printed_s, unit), step)
    return out
