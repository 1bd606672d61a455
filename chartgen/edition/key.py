"""How a key of an edition file is described: its form, its bounds, its choices. Plain data; nothing is read here."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from chartgen.edition import measures as q

Form = Literal[
    "text", "texts", "id", "use", "uses", "choice", "quantity", "quantities", "number", "numbers", "flag", "date",
    "tags", "size", "table", "tables", "pairs", "choices", "whole",
]  # fmt: skip


@dataclass(frozen=True, slots=True, kw_only=True)
class Bounds:
    """Accepted from `least` to `most` (in the measure's inside unit; `least` itself too unless `above`); outside
    `usual` a warning. The sentences are for people, in the unit they write."""

    least: float
    most: float
    says: str
    above: bool = False
    usual: tuple[float, float] | None = None
    usual_says: str = ""
    end_says: str = ""
    """Why the lower end itself is refused, where that is worth a sentence of its own."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Key:
    """`table` beside a form other than table(s): the value may be such a table instead."""

    says: str
    form: Form
    needed: bool = False
    choices: tuple[str, ...] = ()
    later: tuple[str, ...] = ()
    """Values that are known but not made yet."""
    measure: q.Measure | None = None
    bounds: Bounds | None = None
    table: str = ""
    count: tuple[int, int] = (1, 200)
    """How many entries a list may have."""
    not_yet: str = ""
    """Set: the whole key is known but not made yet; the reason."""
    as_list: str = ""
    """Set: how a list is written that somebody may put here, for the message."""
    meant: Mapping[str, str] = field(default_factory=dict)
    """Other words for the choices, as people may write them."""
