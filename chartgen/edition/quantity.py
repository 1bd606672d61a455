"""Quantities as a publisher writes them: one number, one space, one unit. Read strictly, converted exactly.

The whole text must match before a units library sees anything, and then it sees the unit alone: it never evaluates a
publisher's text. Left to itself it would read "0,67 s" as 0 s and "−9 %" (U+2212) as +9 %.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from difflib import get_close_matches
from fractions import Fraction
from functools import cache, lru_cache
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pint import UnitRegistry

LONGEST = 40
"""Characters: longer texts are no quantity, and would only slow the search for what is wrong with them."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Measure:
    """What a key measures: the units it may be written in (spelling as written -> name for the units library), the
    unit that goes inside, and an example that shows the right spelling."""

    name: str
    units: dict[str, str]
    inside: str
    example: str


SPEED = Measure(
    name="a speed",
    units={
        "mph": "mile/hour",
        "mile/hour": "mile/hour",
        "km/h": "kilometre/hour",
    },
    inside="metre/second",
    example="30 mph",
)
TIME = Measure(name="a time", units={"s": "second"}, inside="second", example="0.67 s")
DECELERATION = Measure(
    name="a deceleration",
    units={
        "m/s^2": "metre/second**2",
        "m/s²": "metre/second**2",
        "ft/s^2": "foot/second**2",
        "ft/s²": "foot/second**2",
        "g": "standard_gravity",
    },
    inside="metre/second**2",
    example="5 m/s^2",
)
LENGTH = Measure(name="a length", units={"m": "metre", "ft": "foot"}, inside="metre", example="16.5 m")
SIZE = Measure(
    name="a size on paper", units={"mm": "millimetre", "cm": "centimetre", "in": "inch"}, inside="millimetre", example="3 mm"
)
GRADE = Measure(name="a grade", units={"%": "percent"}, inside="one", example="-9 %")
DECAY = Measure(name="a speed", units={"km/h": "kilometre/hour"}, inside="kilometre/hour", example="110 km/h")

_DEFINITIONS = (
    "metre = [length] = m",
    "second = [time] = s",
    "millimetre = metre / 1000 = mm",
    "centimetre = metre / 100 = cm",
    "kilometre = 1000 * metre = km",
    "hour = 3600 * second = h",
    "inch = 0.0254 * metre",
    "foot = 0.3048 * metre = ft",
    "mile = 5280 * foot = mi",
    "standard_gravity = 9.80665 * metre / second ** 2",
    "percent = 0.01 = _",
    "one = []",
)
"""Only the units of the lists above, each by its exact definition (international yard and pound agreement of 1959;
standard gravity of the 3rd CGPM, 1901). The library's whole default list takes ten times as long to read."""


class NotAQuantity(ValueError):
    """`problem` says what is wrong with the text, `right` shows how it is written."""

    def __init__(self, problem: str, right: str, near: str | None = None) -> None:
        super().__init__(problem)
        self.problem = problem
        self.right = right
        self.near = near


@dataclass(frozen=True, slots=True)
class Quantity:
    """`number` and `unit` as written, `value` in the measure's inside unit."""

    number: Fraction
    unit: str
    value: float


@cache
def _registry() -> UnitRegistry:
    from pint import UnitRegistry

    return UnitRegistry(list(_DEFINITIONS), non_int_type=Fraction)


@lru_cache(maxsize=256)
def factor(unit: str, into: str) -> Fraction:
    """How many `into` one `unit` is, exactly. Both are names of `_DEFINITIONS` or products of them."""
    return Fraction(_registry().convert(Fraction(1), unit, into))


def parse(text: str, measure: Measure) -> Quantity:
    """Read `text` as one number, one space and one unit of `measure`.

    Grammar: ``[+-]?digits[.digits] unit``, matched whole, ASCII digits. Converted as exact fractions and rounded once,
    to the nearest float. Raises NotAQuantity with the right spelling.
    """
    found = re.fullmatch(r"([+-]?[0-9]+(?:\.[0-9]+)?) (\S+)", text) if len(text) <= LONGEST else None
    if found is None or found[2] not in measure.units:
        raise next(_faults(text, measure))
    number = Fraction(found[1])
    exact = number * factor(measure.units[found[2]], measure.inside)
    return Quantity(number, found[2], float(exact))


def parse_size(text: str) -> tuple[float, float]:
    """Read "600 mm x 900 mm" as width and height in mm. Raises NotAQuantity."""
    sides = text.split(" x ")
    if len(sides) != 2:
        raise NotAQuantity("a size on paper is width x height, each with its unit", '"600 mm x 900 mm" or "18 in x 24 in"')
    width, height = (parse(side, SIZE).value for side in sides)
    return width, height


_NUM = r"[+-]?[0-9]+(?:\.[0-9]+)?"
_SPACES = "[ \u00a0\u2007\u2009\u202f]"
_DASHES = "\u2010\u2011\u2012\u2013\u2014\u2212\ufe63\uff0d"


def _faults(text: str, measure: Measure) -> Iterator[NotAQuantity]:
    """The named faults, the most telling first; the last one always applies."""
    if len(text) > LONGEST:
        yield NotAQuantity(f"more than {LONGEST} characters are no quantity", f'"{measure.example}"')
    plain = "".join(_ascii_digit(c) for c in text)
    for pattern, problem, mend in _NAMED:
        found = re.fullmatch(pattern, plain)
        if found is not None:
            yield NotAQuantity(problem, mend(found, measure))
    if plain != text:
        yield NotAQuantity("digits are written 0 to 9", f'"{plain}"')
    found = re.fullmatch(rf"({_NUM}) (.+)", plain)
    if found is not None:
        yield _wrong_unit(found[1], found[2], measure)
    yield NotAQuantity(f"this is not {measure.name}: one number, a space and a unit are needed", f'"{measure.example}"')


def _ascii_digit(character: str) -> str:
    return str(unicodedata.digit(character)) if character.isdigit() and character not in "²³¹" else character


def _wrong_unit(number: str, unit: str, measure: Measure) -> NotAQuantity:
    close = get_close_matches(unit, measure.units, n=1, cutoff=0.5) or [
        u for u in measure.units if u.lower() == unit.lower() or _OTHER_SPELLINGS.get(unit.lower()) == u
    ]
    shown = " or ".join(f'"{number} {u}"' for u in (close[:1] or _plain_units(measure)))
    return NotAQuantity(f'"{unit}" is not a unit for {measure.name} here', shown, close[0] if close else None)


_OTHER_SPELLINGS = {
    "mya": "mph", "mi/h": "mph", "miles/hour": "mph", "kmh": "km/h", "kph": "km/h", "kmph": "km/h", "km/awr": "km/h",
    "sec": "s", "secs": "s", "seconds": "s", "second": "s", "metres": "m", "metre": "m", "meters": "m", "feet": "ft",
    "foot": "ft", "'": "ft", "percent": "%", '"': "in", "inch": "in", "inches": "in", "m/s/s": "m/s^2", "m/s2": "m/s^2",
    "ms-2": "m/s^2", "ft/s2": "ft/s^2",
}  # fmt: skip


def _plain_units(measure: Measure) -> list[str]:
    """One spelling a unit, in the order of the list."""
    return list({name: u for u, name in reversed(measure.units.items())}.values())[::-1]


def _unit_in(rest: str, measure: Measure) -> str:
    """The unit to show in a right spelling: the one given where it is known, else the example's."""
    rest = rest.strip()
    return rest if rest in measure.units else measure.example.split(" ", 1)[1]


def _as(number: str, rest: str, measure: Measure) -> str:
    return f'"{number} {_unit_in(rest, measure)}"'


_Mend = Callable[[re.Match[str], Measure], str]
_NAMED: tuple[tuple[str, str, _Mend], ...] = (
    (r"\s*", "nothing is written here", lambda m, q: f'"{q.example}"'),
    (
        rf"({_NUM})",
        "the unit is missing",
        lambda m, q: " or ".join(f'"{m[1]} {u}"' for u in _plain_units(q)),
    ),
    (
        r"(?i)\s*[+-]?(?:nan|inf|infinity|∞)\b.*",
        "this is not a number",
        lambda m, q: f'"{q.example}"',
    ),
    (
        rf"[{_DASHES}]{_SPACES}?([0-9]+(?:\.[0-9]+)?){_SPACES}?(.*)",
        "the minus is a dash or U+2212; a hyphen-minus (-) is needed",
        lambda m, q: _as("-" + m[1], m[2], q),
    ),
    (
        rf"({_NUM}){_SPACES}?([^0-9]*?){_SPACES}?(?:[-{_DASHES}]|\.\.\.?|…| to | bis | à ){_SPACES}?[0-9].*?([^0-9., ]*)",
        "this is a range; one value is needed",
        lambda m, q: _as(m[1], m[3] or m[2], q),
    ),
    (
        r"([+-]?[0-9]{1,3}),([0-9]{3})" + rf"{_SPACES}?([^0-9]*)",
        "a comma is neither a decimal point nor a thousands mark here",
        lambda m, q: f"{_as(m[1] + '.' + m[2], m[3], q)}, or {_as(m[1] + m[2], m[3], q)} if thousands were meant",
    ),
    (
        rf"([+-]?[0-9]+),([0-9]+){_SPACES}?([^0-9]*)",
        "a comma is not a decimal point here",
        lambda m, q: _as(m[1] + "." + m[2], m[3], q),
    ),
    (
        rf"([+-]?[0-9]{{1,3}}(?:(?:{_SPACES}|['’])[0-9]{{3}})+(?:\.[0-9]+)?)(?:{_SPACES}([^0-9]*))?",
        "thousands are written without a space or mark",
        lambda m, q: _as(re.sub("[^0-9.+-]", "", m[1]), m[2] or "", q),
    ),
    (
        r"([+-]?)(?:\.([0-9]+)|([0-9]+)\.)" + rf"{_SPACES}?([^0-9]*)",
        "a decimal point needs a digit on both sides",
        lambda m, q: _as(m[1] + (f"0.{m[2]}" if m[2] else f"{m[3]}.0"), m[4], q),
    ),
    (
        r"[+-]?[0-9.]+[eE][+-]?[0-9]+.*",
        "powers of ten are not read here; write the number out",
        lambda m, q: f'"{q.example}"',
    ),
    (
        rf"(?:<|>|≤|≥|~|≈|about |circa |ca\.? ?|approx\.? ?|±){_SPACES}?({_NUM}){_SPACES}?(.*)",
        "one exact value is needed, without a sign or word before it",
        lambda m, q: _as(m[1], m[2], q),
    ),
    (
        rf"{_NUM}{_SPACES}?[*/×x·+^:]{_SPACES}?[0-9(].*|.*[()].*|{_NUM} \S+{_SPACES}?[*×+]{_SPACES}?[0-9].*",
        "nothing is worked out here; write the result",
        lambda m, q: f'"{q.example}"',
    ),
    (
        rf"({_NUM}){_SPACES}?([^0-9 ]+){_SPACES}?[+-]?[0-9].*|({_NUM}) (\S+) +\D+",
        "there are two units; one number with one unit is needed",
        lambda m, q: f'"{q.example}"',
    ),
    (
        rf"\s*({_NUM})\s*(\S+)\s*",
        "one ordinary space stands between number and unit, and none before or after",
        lambda m, q: _as(m[1], m[2], q),
    ),
)
"""Pattern of the whole text, what is wrong, and how to show it right."""
