"""What is wrong with a text that is no quantity, and how it would be written right."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable
from difflib import get_close_matches

from chartgen.edition.measures import LONGEST, Measure, NotAQuantityError

_NUM = r"[+-]?[0-9]+(?:\.[0-9]+)?"
_SPACE = "[ \u00a0\u2007\u2009\u202f]"
_DASH = "[\u2010\u2011\u2012\u2013\u2014\u2212\ufe63\uff0d]"
_OTHER_SPELLINGS = {
    "mya": "mph", "mi/h": "mph", "miles/hour": "mph", "m.p.h.": "mph", "kmh": "km/h", "kph": "km/h", "kmph": "km/h",
    "km/awr": "km/h", "km/u": "km/h", "sec": "s", "secs": "s", "second": "s", "seconds": "s", "metre": "m",
    "metres": "m", "meter": "m", "meters": "m", "feet": "ft", "foot": "ft", "'": "ft", "percent": "%", '"': "in",
    "inch": "in", "inches": "in", "m/s/s": "m/s^2", "m/s2": "m/s^2", "m/s**2": "m/s^2", "ft/s2": "ft/s^2",
    "ft/s/s": "ft/s^2",
}  # fmt: skip


def what_is_wrong(text: str, measure: Measure) -> NotAQuantityError:
    """The most telling fault of `text`, which is no quantity of `measure`."""
    if len(text) > LONGEST:
        return NotAQuantityError(f"more than {LONGEST} characters are no quantity", _example(measure))
    plain = "".join(_ascii_digit(c) for c in text)
    if plain != text and re.fullmatch(rf"{_NUM} \S+", plain):
        return NotAQuantityError("digits are written 0 to 9", f'"{plain}"')
    for fault in _FAULTS:
        if (found := fault(plain, measure)) is not None:
            return found
    return NotAQuantityError("one number, a space and a unit are needed here", _example(measure))


# ---- what would be right -----------------------------------------------------------------------------------------


def _example(measure: Measure) -> str:
    return f'such as "{measure.example}"'


def _listed(units: tuple[str, ...]) -> str:
    return " or ".join(filter(None, [", ".join(units[:-1]), units[-1]]))


def _meant(unit: str, measure: Measure) -> str | None:
    """The unit of `measure` that `unit` is, or is most likely meant to be."""
    unit = unit.strip()
    if unit in measure.units:
        return unit
    other = _OTHER_SPELLINGS.get(unit.lower())
    if other in measure.units:
        return other
    by_lower = {u.lower(): u for u in measure.units}
    close = get_close_matches(unit.lower(), by_lower, n=1, cutoff=0.6)
    return by_lower[close[0]] if close else None


def _as(number: str, unit: str, measure: Measure) -> str:
    """The number with the unit that was given; with no or an unknown unit, with each that it may have."""
    meant = _meant(unit, measure)
    return " or ".join(f'"{number} {u}"' for u in ([meant] if meant else measure.shown_units()))


def _ascii_digit(character: str) -> str:
    # The raised 2 of m/s² is a digit to Unicode, and belongs to the unit.
    return str(unicodedata.digit(character)) if unicodedata.category(character) == "Nd" else character


# ---- the named faults, the most telling first ----------------------------------------------------------------------


def _empty(text: str, measure: Measure) -> NotAQuantityError | None:
    return None if text.strip() else NotAQuantityError("nothing is written here", _example(measure))


def _no_unit(text: str, measure: Measure) -> NotAQuantityError | None:
    return NotAQuantityError("the unit is missing", _as(text, "", measure)) if re.fullmatch(_NUM, text) else None


def _not_finite(text: str, measure: Measure) -> NotAQuantityError | None:
    if re.fullmatch(r"(?i)\s*[+-]?(?:nan|inf|infinity|∞)(?:\s.*)?", text) is None:
        return None
    return NotAQuantityError("this is not a number", _example(measure))


def _dash(text: str, measure: Measure) -> NotAQuantityError | None:
    found = re.fullmatch(rf"{_DASH}{_SPACE}?([0-9]+(?:\.[0-9]+)?){_SPACE}?([^0-9]*)", text)
    if found is None:
        return None
    problem = "the minus sign is a dash or U+2212, not the hyphen-minus of the keyboard"
    return NotAQuantityError(problem, _as("-" + found[1], found[2], measure))


def _range(text: str, measure: Measure) -> NotAQuantityError | None:
    between = rf"(?:-|{_DASH}|~|\.\.\.?|…|to|bis|à)"
    pattern = rf"({_NUM}){_SPACE}?([^0-9 -]*?){_SPACE}?{between}{_SPACE}?([0-9]+(?:\.[0-9]+)?){_SPACE}?([^0-9]*)"
    found = re.fullmatch(pattern, text)
    if found is None:
        return None
    ends = (_as(number, found[4] or found[2], measure) for number in (found[1], found[3]))
    return NotAQuantityError("this is a range, and one value is needed", " or ".join(ends))


def _comma(text: str, measure: Measure) -> NotAQuantityError | None:
    found = re.fullmatch(rf"([+-]?[0-9]+),([0-9]+){_SPACE}?([^0-9]*)", text)
    if found is None:
        return None
    right = _as(f"{found[1]}.{found[2]}", found[3], measure)
    if len(found[2]) == 3 and len(found[1].lstrip("+-")) <= 3 and found[1].lstrip("+-") != "0":
        right += f", or {_as(found[1] + found[2], found[3], measure)} if thousands were meant"
    return NotAQuantityError("a comma is not read as a decimal point, nor as a thousands mark", right)


def _thousands(text: str, measure: Measure) -> NotAQuantityError | None:
    found = re.fullmatch(rf"([+-]?[0-9]{{1,3}}(?:(?:{_SPACE}|['’,])[0-9]{{3}})+(?:\.[0-9]+)?){_SPACE}?([^0-9]*)", text)
    if found is None:
        return None
    number = re.sub("[^0-9.+-]", "", found[1])
    return NotAQuantityError("thousands are written without a space or mark", _as(number, found[2], measure))


def _point(text: str, measure: Measure) -> NotAQuantityError | None:
    found = re.fullmatch(rf"([+-]?)(?:\.([0-9]+)|([0-9]+)\.){_SPACE}?([^0-9]*)", text)
    if found is None:
        return None
    number = f"{found[1]}0.{found[2]}" if found[2] else f"{found[1]}{found[3]}"
    return NotAQuantityError("a decimal point needs a digit on both sides", _as(number, found[4], measure))


def _power_of_ten(text: str, measure: Measure) -> NotAQuantityError | None:
    if re.fullmatch(r"[+-]?[0-9]+(?:\.[0-9]+)?[eE][+-]?[0-9]+.*", text) is None:
        return None
    return NotAQuantityError("powers of ten are not read; the number is written out", _example(measure))


def _hedged(text: str, measure: Measure) -> NotAQuantityError | None:
    found = re.fullmatch(rf"(?:[<>≤≥~≈±]|about|circa|ca\.?|approx\.?){_SPACE}?({_NUM}){_SPACE}?([^0-9]*)", text)
    if found is None:
        return None
    return NotAQuantityError("one exact value is needed, with nothing before it", _as(found[1], found[2], measure))


def _operator(text: str, measure: Measure) -> NotAQuantityError | None:
    between_numbers = rf".*[0-9]{_SPACE}?\S*{_SPACE}?[*/×·+:x]{_SPACE}?[0-9(].*"
    if re.fullmatch(rf"{between_numbers}|.*[()].*|.*[0-9](?:\^|\*\*)[0-9].*", text) is None:
        return None
    return NotAQuantityError("nothing is worked out here; the result is written", _example(measure))


def _two_units(text: str, measure: Measure) -> NotAQuantityError | None:
    """Two numbers with units ("5 m 30 cm"), or two units after one number ("0.4 m s")."""
    word = r"[^0-9 +*/()^-][^0-9 ^]*"
    pattern = rf"{_NUM}{_SPACE}?{word}{_SPACE}*[0-9].*|{_NUM}{_SPACE}?{word}{_SPACE}+{word}"
    if re.fullmatch(pattern, text) is None or _meant(text.lstrip("+-.0123456789 "), measure):
        return None
    return NotAQuantityError("there are two units; one number with one unit is needed", _example(measure))


def _spacing(text: str, measure: Measure) -> NotAQuantityError | None:
    found = re.fullmatch(rf"\s*({_NUM})\s*(\S+)\s*", text)
    if found is None or found[2] not in measure.units:
        return None
    problem = "one ordinary space stands between number and unit, and none elsewhere"
    return NotAQuantityError(problem, f'"{found[1]} {found[2]}"')


def _unknown_unit(text: str, measure: Measure) -> NotAQuantityError | None:
    found = re.fullmatch(rf"\s*({_NUM})\s*([^0-9.,].*?)\s*", text)
    if found is None:
        return None
    meant = _meant(found[2], measure)
    right = f'"{found[1]} {meant}"' if meant else f"{measure.name} in {_listed(measure.shown_units())}"
    return NotAQuantityError(f'"{found[2]}" is not a unit for {measure.name} here', right, meant)


_FAULTS: tuple[Callable[[str, Measure], NotAQuantityError | None], ...] = (
    _empty, _no_unit, _not_finite, _spacing, _dash, _range, _comma, _thousands, _point, _power_of_ten, _hedged,
    _operator, _two_units, _unknown_unit,
)  # fmt: skip
