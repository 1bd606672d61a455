"""A print page before it is printed: plain records that the printer and its preflight read."""

from __future__ import annotations

from dataclasses import dataclass, field

Box = tuple[float, float, float, float]
"""Left, top, right, bottom in mm from the top left corner of the page."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Inked:
    """A figure of the table that stands on a sheet `times` times: `quantity` of the table's row `row`, as `lang` writes
    it. `quantity` is a column of the table. `boxes`: where it stands, one a time, as (page, box); empty where its
    place says nothing (a number inside a sentence)."""

    row: int
    quantity: str
    lang: str
    times: int = 1
    boxes: tuple[tuple[int, Box], ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Sheet:
    """A print page: HTML for the printer and what its finished file must say.

    `inked` and `facts` together account for every digit on the sheet: the first are looked up in the table again, the
    second are printed as they stand (dates, references, sentences). `sentences`: by language, what must be found word
    for word (the caution, the headline).
    """

    path: str
    title: str
    lang: str
    html: str
    width_mm: float
    height_mm: float
    pages: int
    inked: tuple[Inked, ...]
    facts: tuple[str, ...]
    sentences: tuple[tuple[str, str], ...] = field(default=())
