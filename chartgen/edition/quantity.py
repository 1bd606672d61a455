"""Quantities as a publisher writes them: one number, one space, one unit. Read strictly, converted exactly.

The whole text must match before the units library sees anything, and then it sees the unit alone: it never evaluates a
publisher's text. Left to itself it would read "0,67 s" as 0 s and "−9 %" (U+2212) as +9 %.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from typing import Any

from chartgen.edition.measures import DEFINITIONS, LONGEST, SIZE, Measure, NotAQuantityError
from chartgen.edition.misspelt import what_is_wrong


@dataclass(frozen=True, slots=True)
class Quantity:
    """`text` as written; its `number` and `unit`; `value` in the measure's inside unit."""

    text: str

    number: Fraction
    unit: str
    value: float


@cache
def _registry() -> Any:
    # Half of the time that an edition takes to load: only where there is a unit to convert.
    from pint import UnitRegistry  # noqa: PLC0415

    return UnitRegistry(list(DEFINITIONS), non_int_type=Fraction)


@cache
def factor(unit: str, inside: str) -> Fraction:
    """How many `inside` one `unit` is, exactly. Both are names of `measures.DEFINITIONS` or products of them."""
    return Fraction(_registry().convert(Fraction(1), unit, inside))


def parse(text: str, measure: Measure) -> Quantity:
    """Read `text` as one number, one space and one unit of `measure`.

    Grammar: ``[+-]?digits[.digits] unit``, matched whole, ASCII digits. Converted as exact fractions and rounded once,
    to the nearest float. Raises NotAQuantityError with the right spelling.

    >>> from chartgen.edition.measures import SPEED
    >>> parse("30 mph", SPEED).value
    13.4112
    """
    found = re.fullmatch(r"([+-]?[0-9]+(?:\.[0-9]+)?) (\S+)", text) if len(text) <= LONGEST else None
    if found is None or found[2] not in measure.units:
        raise what_is_wrong(text, measure)
    number = Fraction(found[1])
    return Quantity(text, number, found[2], float(number * factor(measure.units[found[2]], measure.inside)))


def parse_size(text: str) -> tuple[float, float]:
    """Read "600 mm x 900 mm" as width and height in mm. Raises NotAQuantityError."""
    sides = text.split(" x ")
    if len(sides) != 2:
        problem = "a size is width x height, each with its unit"
        raise NotAQuantityError(problem, '"600 mm x 900 mm" or "18 in x 24 in"')
    without_unit = re.compile(r"[0-9]+(\.[0-9]+)?")
    if without_unit.fullmatch(sides[0]) and (unit := sides[1].rpartition(" ")[2]) in SIZE.units:
        raise NotAQuantityError("each side needs its unit", f'"{sides[0]} {unit} x {sides[1]}"')
    width, height = (parse(side, SIZE).value for side in sides)
    return width, height
