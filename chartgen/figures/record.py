"""The records that leave this floor: `Figures` and its `Notice`s."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

import numpy.typing as npt

from chartgen.edition.model import DistanceUnit, Method, Questions, Rounding, Source, SpeedUnit, Spread

if TYPE_CHECKING:
    import pandas as pd


Columns = dict[str, npt.NDArray[Any]]
"""The table while it is being made: arrays of one length by column name."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Notice:
    """Something about the figures that a person should know. Facts are fields.

    `code` is stable; `text` is one full English sentence with its place, for stderr and the JSON's `warnings`.
    `reader`: it concerns the reader too and goes onto the sheet through the word key ``"notice." + code``; `fields`
    are that sentence's values as plain ASCII (ids, and numbers such as "0.5" still to be written by a language).
    `rows`: the rows it is about, empty where it is about the whole edition.
    """

    code: str
    text: str
    reader: bool = False
    fields: Mapping[str, str] = field(default_factory=dict)
    rows: tuple[int, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Figures:
    """Every figure of one edition.

    `table`: one row a case, driver, vehicle, surface, grade and speed, in that order (columns: `table.COLUMNS`).
    `sources`: where the values come from, by key ("driver/ready", "surface/dry", "vehicle/lorry", "gap/…"); a row's
    trace names the keys. `gap_rule`: key of the cards' following-gap rule, None without cab cards. `questions` and
    `spread`: what the edition asks for, so that those who print know which columns have a meaning.
    """

    edition_id: str
    speed_unit: SpeedUnit
    distance_unit: DistanceUnit
    also_unit: DistanceUnit | None
    method: Method
    rounding: Rounding
    table: pd.DataFrame
    notices: tuple[Notice, ...]
    sources: Mapping[str, Source]
    gap_rule: str | None
    questions: Questions = field(default_factory=Questions)
    spread: Spread | None = None
    answer_distances: Mapping[str, float] = field(default_factory=dict)
    """Distances that greatest speeds are asked for, "sight" and "headlight", as printed."""
    issue: str = ""
    """The edition's issue and the day of it (ISO 8601), so that its figures can be told from those of another."""
    issued: str = ""
