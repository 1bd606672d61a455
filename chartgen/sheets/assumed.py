"""The assumption line as a sheet sets it, each of its numbers entered in the account as a figure of the table."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np
from markupsafe import Markup, escape

from chartgen.edition.model import Edition
from chartgen.figures.assume import assumptions
from chartgen.language.load import Language
from chartgen.language.sentences import Fragment, assumption_fragments
from chartgen.sheets.account import Account

if TYPE_CHECKING:
    import pandas as pd

_FALLING: Final = {"first": "friction", "low": "speed", "second": "friction", "high": "speed"}
_COLUMNS: Final[Mapping[str, Mapping[str, str]]] = {
    "assume.reaction": {"time": "reaction_time_s"},
    "assume.reaction_percentile": {"time": "reaction_time_s"},
    "assume.perception": {"time": "reaction_time_s", "perception": "perception_s"},
    "assume.lag": {"time": "brake_lag_s"},
    "assume.lag_build_up": {"time": "brake_lag_s", "rise": "build_up_s"},
    "assume.friction": {"value": "friction"},
    "assume.friction_limit": {"value": "friction", "deceleration": "max_deceleration_mps2"},
    "assume.friction_falling": _FALLING,
    "assume.friction_falling_limit": {**_FALLING, "deceleration": "max_deceleration_mps2"},
    "assume.limit": {"deceleration": "max_deceleration_mps2"},
    "assume.deceleration": {"deceleration": "max_deceleration_mps2"},
    "assume.efficiency": {"share": "brake_efficiency"},
    "assume.uphill": {"grade": "grade"},
    "assume.downhill": {"grade": "grade"},
}
"""Which column of the table each placeholder of a fragment prints."""
_AT_HIGHEST_SPEED: Final = ("second", "high")


@dataclass(frozen=True, slots=True, kw_only=True)
class Assumed:
    """One fragment of an assumption line, "label: value": bare and as markup."""

    text: str
    markup: Markup


def assumed(
    language: Language, edition: Edition, series: Sequence[pd.DataFrame], account: Account
) -> tuple[Assumed, ...]:
    """The fragments of the assumption line of the rows shown side by side.

    `series`: slices of the table in speed order, each of one driver, vehicle, surface and grade. Fragments that are the
    same for all stand once; those that differ stand once a slice, each behind the name of its driver (or its vehicle,
    or its surface, where that is what differs).
    """
    per_slice = [assumption_fragments(language, edition, assumptions(edition, rows)) for rows in series]
    shared = [fragment for fragment in per_slice[0] if all(fragment in fragments for fragments in per_slice)]
    found = [
        _assumed(fragment, rows, language, account, account.fact(_name(language, edition, rows, series)) + " – ")
        for rows, fragments in zip(series, per_slice, strict=True)
        for fragment in fragments
        if fragment not in shared
    ]
    return (*found, *(_assumed(fragment, series[0], language, account) for fragment in shared))


def _assumed(fragment: Fragment, rows: pd.DataFrame, language: Language, account: Account, name: str = "") -> Assumed:
    key, values = fragment
    _enter(fragment, rows, language, account)
    text = name + language.t(key, **values)
    # Isolation is for a line that runs the other way; in a line of its own direction it only disturbs the breaks.
    own = escape(text) if language.direction == "ltr" else escape(name) + language.html(key, **values)
    return Assumed(text=text, markup=own)


def _name(language: Language, edition: Edition, rows: pd.DataFrame, series: Sequence[pd.DataFrame]) -> str:
    vehicles = {str(one["vehicle"].iloc[0]) for one in series}
    if len(vehicles) > 1:
        return language.text(edition.vehicle(str(rows["vehicle"].iloc[0])).name)
    surfaces = {str(one["surface"].iloc[0]) for one in series}
    if len(surfaces) > 1:
        return language.text(edition.surface(str(rows["surface"].iloc[0])).name)
    return language.text(edition.driver(str(rows["driver"].iloc[0])).name)


def _enter(fragment: Fragment, rows: pd.DataFrame, language: Language, account: Account) -> None:
    key, values = fragment
    columns = _COLUMNS.get(key, {})
    for placeholder, value in values.items():
        if placeholder in columns:
            row = rows["row"].iloc[-1 if placeholder in _AT_HIGHEST_SPEED else 0]
            column = columns[placeholder]
            if column == "max_deceleration_mps2" and not np.isfinite(rows[column].iloc[0]):
                column = "full_deceleration_mps2"  # the one that lies in a rule of thumb
            account.enter(int(row), column, language.tag)
        else:
            account.fact(value)
