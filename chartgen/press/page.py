"""What the printer asks of a print page. The floor beside this one makes them; nothing of it is imported here."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Protocol

Box = tuple[float, float, float, float]
"""Left, top, right, bottom in mm from the top left corner of the page."""


class InkedFigure(Protocol):
    """A figure of the table on a page: `quantity` (a column) of row `row` as language `lang` writes it, `times` times;
    `boxes` says on which page and where, one a time, and is empty where the place says nothing."""

    @property
    def row(self) -> int: ...
    @property
    def quantity(self) -> str: ...
    @property
    def lang(self) -> str: ...
    @property
    def times(self) -> int: ...
    @property
    def boxes(self) -> tuple[tuple[int, Box], ...]: ...


class PrintPage(Protocol):
    """HTML for the printer, the size and number of its pages, and what the finished file must say: `inked` and `facts`
    account for every digit; `sentences` (language, sentence) must be there word for word."""

    @property
    def path(self) -> str: ...
    @property
    def title(self) -> str: ...
    @property
    def lang(self) -> str: ...
    @property
    def html(self) -> str: ...
    @property
    def width_mm(self) -> float: ...
    @property
    def height_mm(self) -> float: ...
    @property
    def pages(self) -> int: ...
    @property
    def inked(self) -> Sequence[InkedFigure]: ...
    @property
    def facts(self) -> tuple[str, ...]: ...
    @property
    def sentences(self) -> tuple[tuple[str, str], ...]: ...
