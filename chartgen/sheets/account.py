"""The account of a sheet: every digit that goes onto it is entered here, as a figure of the table or as a fact."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field
from decimal import Decimal

from chartgen.figures.record import Figures
from chartgen.language.load import Language
from chartgen.sheets.sheet import Box, Inked


def decimals_of(step: float) -> int:
    """Decimals that figures rounded to `step` are written with, all alike in a column: 0 for 1, 1 for 0.5.

    >>> decimals_of(5.0), decimals_of(0.5)
    (0, 1)
    """
    exponent = Decimal(repr(step)).normalize().as_tuple().exponent
    return max(0, -exponent) if isinstance(exponent, int) else 0


@dataclass
class Account:
    """Gathers what one sheet prints while it is put together; `inked` and `facts` then go onto the `Sheet`."""

    figures: Figures
    facts: list[str] = field(default_factory=list)
    sentences: dict[tuple[str, str], None] = field(default_factory=dict)
    _times: Counter[tuple[int, str, str]] = field(default_factory=Counter)
    _boxes: dict[tuple[int, str, str], list[tuple[int, Box]]] = field(default_factory=dict)

    def enter(self, row: int, quantity: str, lang: str, place: tuple[int, Box] | None = None) -> None:
        """A figure of the table goes onto the sheet once more; `place`: the page and the box it will stand in."""
        key = (row, quantity, lang)
        self._times[key] += 1
        if place is not None:
            self._boxes.setdefault(key, []).append(place)

    def figure(
        self, row: int, quantity: str, language: Language, place: tuple[int, Box] | None = None, step: float = 1.0
    ) -> str:
        """The number of a printed figure without its unit, entered. `step`: the one it was rounded to."""
        self.enter(row, quantity, language.tag, place)
        return language.number(float(self.figures.table[quantity].iloc[row]), decimals_of(step))

    def fact(self, text: str) -> str:
        """A text that is printed as it stands, entered."""
        self.facts.append(text)
        return text

    def sentence(self, language: Language, text: str) -> str:
        """A sentence that must be found word for word in the finished file."""
        self.sentences[(language.tag, text)] = None
        return text

    @property
    def inked(self) -> tuple[Inked, ...]:
        """Everything entered with `enter` and `figure`, in the order of first entry."""
        return tuple(
            Inked(row=key[0], quantity=key[1], lang=key[2], times=times, boxes=tuple(self._boxes.get(key, ())))
            for key, times in self._times.items()
        )
