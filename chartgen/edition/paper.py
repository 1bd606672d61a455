"""Paper and card sizes by name, as they are held upright, or by width and height."""

from __future__ import annotations

from difflib import get_close_matches

from chartgen.edition.measures import NotAQuantityError
from chartgen.edition.model import Paper
from chartgen.edition.quantity import parse_size

_INCH = 25.4

SIZES_MM: dict[str, tuple[float, float]] = {
    "A0": (841, 1189), "A1": (594, 841), "A2": (420, 594), "A3": (297, 420), "A4": (210, 297), "A5": (148, 210),
    "A6": (105, 148), "DL": (99, 210), "ID-1": (85.6, 53.98),
    "Letter": (8.5 * _INCH, 11 * _INCH), "Tabloid": (11 * _INCH, 17 * _INCH),
}  # fmt: skip
"""ISO 216 (A series), ISO/IEC 7810 (ID-1), ANSI/ASME Y14.1 (Letter = A, Tabloid = B); DL is the common trade size."""

LEAST_MM, MOST_MM = 50.0, 2000.0


def paper(text: str) -> Paper:
    """The size named or measured by `text`. Raises NotAQuantityError."""
    if text in SIZES_MM:
        width, height = SIZES_MM[text]
        return Paper(name=text, width_mm=width, height_mm=height)
    if not any(c.isdigit() for c in text) or " " not in text:
        by_lower = {name.lower(): name for name in SIZES_MM}
        close = get_close_matches(text.lower(), by_lower, n=1, cutoff=0.5)
        raise NotAQuantityError(
            "this paper size is not known",
            ", ".join(SIZES_MM) + ', or width x height such as "600 mm x 900 mm"',
            by_lower[close[0]] if close else None,
        )
    width, height = parse_size(text)
    if not (min(width, height) >= LEAST_MM and max(width, height) <= MOST_MM):
        raise NotAQuantityError("this paper size is out of range", f"each side {LEAST_MM:.0f} mm to {MOST_MM:.0f} mm")
    return Paper(name=text, width_mm=width, height_mm=height)
