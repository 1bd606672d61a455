"""Numbers as a locale writes them, from CLDR (by Babel), with the departures that print needs.

Digits are always Latin (0-9), also in Arabic: one sheet keeps one set of digits, and ISO dates and references stay
readable. A negative number carries U+2212, not CLDR's hyphen. Between number and unit stands U+202F in French of France
and U+00A0 elsewhere, where CLDR has a plain space that would let the line break. Source: CLDR as shipped with Babel.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import ROUND_HALF_UP, Decimal
from functools import lru_cache

from babel import Locale

from chartgen.errors import Unprintable

MINUS = "\u2212"
NO_BREAK = "\u00a0"
NARROW_NO_BREAK = "\u202f"

# CLDR minimumGroupingDigits = 2, which Babel does not read: four-digit numbers stay without a separator.
_MIN_GROUPING = {"es": 2, "it": 2, "pl": 2, "pt-PT": 2, "pt": 2}
_SAME = 1e-9
"""Relative difference below which a float counts as exactly the decimal number meant."""


@dataclass(frozen=True, slots=True, kw_only=True)
class NumberStyle:
    decimal: str
    group: str
    min_grouping_digits: int
    unit_space: str
    percent_space: str


def babel_locale(tag: str) -> Locale:
    """The CLDR locale of a BCP 47 tag. Plain "pt" is European Portuguese here, as in the trade's word lists."""
    return Locale.parse("pt_PT" if tag == "pt" else tag, sep="_" if tag == "pt" else "-")


@lru_cache(maxsize=64)
def number_style(tag: str) -> NumberStyle:
    """What is to know of a locale's numbers; read from CLDR once a tag."""
    locale = babel_locale(tag)
    symbols = locale.number_symbols["latn"]
    space = NARROW_NO_BREAK if tag in {"fr", "fr-FR"} else NO_BREAK
    around = locale.percent_formats[None].pattern.replace("%", "")
    return NumberStyle(
        decimal=symbols["decimal"],
        group=symbols["group"],
        min_grouping_digits=_MIN_GROUPING.get(tag, 1),
        unit_space=space,
        percent_space=space if around != around.rstrip() else "",
    )


def format_number(x: float, tag: str, decimals: int = 0) -> str:
    """`x` with exactly `decimals` decimals, half away from zero. Raises Unprintable where `x` is not finite."""
    return _written(_decimal(x).quantize(Decimal(1).scaleb(-decimals), ROUND_HALF_UP), number_style(tag))


def format_trimmed(x: float, tag: str, decimals: int) -> str:
    """As `format_number`, without trailing zeros: 0.80 s is 0.8 s."""
    return _written(_trim(_decimal(x).quantize(Decimal(1).scaleb(-decimals), ROUND_HALF_UP)), number_style(tag))


def format_exact(x: float, tag: str, decimals: int | None = None, most: int = 3) -> str:
    """A number that is already rounded: as many decimals as it has (or `decimals`, where a column wants them equal).

    Raises Unprintable where that would change it: a distance is rounded in the table and nowhere else.
    """
    value = _decimal(x)
    kept = value.quantize(Decimal(1).scaleb(-(most if decimals is None else decimals)), ROUND_HALF_UP)
    if abs(value - kept) > abs(value) * Decimal(_SAME):
        raise Unprintable(f"{x!r} is not rounded to {most if decimals is None else decimals} decimals")
    return _written(kept if decimals is not None else _trim(kept), number_style(tag))


def format_percent(fraction: float, tag: str, decimals: int = 1) -> str:
    """A fraction as a percentage, trailing zeros left out: 0.09 is "9%" in English and "9 %" (no-break) in French."""
    style = number_style(tag)
    return f"{format_trimmed(fraction * 100, tag, decimals)}{style.percent_space}%"


def _decimal(x: float) -> Decimal:
    if not math.isfinite(x):
        raise Unprintable(f"{x!r} is not a number that can be printed")
    return Decimal(repr(float(x)))


def _trim(value: Decimal) -> Decimal:
    return value.quantize(Decimal(1)) if value == value.to_integral_value() else value.normalize()


def _written(value: Decimal, style: NumberStyle) -> str:
    digits, _, fraction = f"{abs(value):f}".partition(".")
    if len(digits) >= 3 + style.min_grouping_digits:
        head = len(digits) % 3
        parts = ([digits[:head]] if head else []) + [digits[i : i + 3] for i in range(head, len(digits), 3)]
        digits = style.group.join(parts)
    sign = MINUS if value < 0 else ""
    return sign + digits + (style.decimal + fraction if fraction else "")
