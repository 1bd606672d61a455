"""The overflow gate: text that leaves its container or the page, and text that lies on other text.

The engine cuts or overprints without a word, so the tree of laid-out boxes is walked before a file is written. Lengths
are CSS px (96 an inch) as the engine has them; messages say millimetres.
"""

from __future__ import annotations

import importlib
import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

MM_PER_PX = 25.4 / 96
TOLERANCE_PX = 0.6
"""About 0.15 mm (chosen): under it nobody sees an overflow, over it a cutter or a reader may."""
# Where the ink of a line of text lies about its base line, in parts of the font size. Read from our font files: digits
# and capitals 0.70 high, descenders 0.21 deep; Arabic tails up to 0.41.
ASCENT = 0.70
DESCENT, ARABIC_DESCENT, FLAT_DESCENT = 0.21, 0.41, 0.02
_DESCENDING = set("gjpqyýÿŷỳçşţģķļņŗQ,;()[]{}|/_µ")


@dataclass(frozen=True, slots=True)
class Ink:
    """One run of laid-out text: where its ink stands on the page (px) and what it says."""

    page: int
    text: str
    left: float
    top: float
    right: float
    bottom: float


def problems(document: Any) -> list[str]:
    """Every overflow and every overlap in a laid-out document, as sentences; empty when all is well."""
    found: list[str] = []
    for number, page in enumerate(document.pages, 1):
        inks: list[Ink] = []
        for box, ancestors in _walk(page._page_box, ()):
            if type(box).__name__ == "TextBox" and box.text.strip():
                ink = _ink(box, number)
                inks.append(ink)
                found.extend(_leaves(ink, page, ancestors))
        found.extend(_overlaps(inks))
    return found


def _walk(box: Any, ancestors: tuple[Any, ...]) -> Iterator[tuple[Any, tuple[Any, ...]]]:
    box = getattr(box, "_box", box)
    yield box, ancestors
    for child in getattr(box, "children", ()):
        yield from _walk(child, (*ancestors, box))


def _ink(box: Any, page: int) -> Ink:
    size, base = box.style["font_size"], box.position_y + box.baseline
    bottom = base + _descent(box.text) * size
    return Ink(page, box.text.strip(), box.position_x, base - ASCENT * size, box.position_x + box.width, bottom)


def _descent(text: str) -> float:
    if any("\u0600" <= letter <= "\u06ff" for letter in text):
        return ARABIC_DESCENT
    return DESCENT if _DESCENDING & set(text) else FLAT_DESCENT


def _leaves(ink: Ink, page: Any, ancestors: tuple[Any, ...]) -> Iterator[str]:
    boxes = importlib.import_module("weasyprint.formatting_structure.boxes")
    containers = (boxes.BlockContainerBox, boxes.FlexContainerBox, boxes.GridContainerBox)
    for box in reversed(ancestors):
        if isinstance(box, containers):
            beyond = _beyond(ink, *_room(box))
            if beyond > TOLERANCE_PX:
                yield _sentence(ink, "leaves its container", beyond)
                return
        if box.style["position"] in ("absolute", "fixed"):
            break  # what is placed by hand may stand outside the box it is placed from, never off the page
    beyond = _beyond(ink, 0, 0, page.width, page.height)
    if beyond > TOLERANCE_PX:
        yield _sentence(ink, "leaves the page", beyond)


def _room(box: Any) -> tuple[float, float, float, float]:
    """Left, top, right, bottom of what a box may hold. One that is as high as its text has no foot of its own: what
    it pushes out shows in the boxes around it. Padding is room that the design gives."""
    left, top = box.padding_box_x(), box.padding_box_y()
    right, bottom = left + box.padding_width(), top + box.padding_height()
    return (left, -math.inf, right, math.inf) if box.style["height"] == "auto" else (left, top, right, bottom)


def _beyond(ink: Ink, left: float, top: float, right: float, bottom: float) -> float:
    return max(left - ink.left, top - ink.top, ink.right - right, ink.bottom - bottom)


def _overlaps(inks: list[Ink]) -> Iterator[str]:
    inks = sorted(inks, key=lambda ink: ink.top)
    for index, upper in enumerate(inks):
        for lower in inks[index + 1 :]:
            if lower.top >= upper.bottom:
                break
            wide = min(upper.right, lower.right) - max(upper.left, lower.left)
            # Descenders may dip into the next line's ascent: only a fifth of the smaller line's height is an overlap.
            deep = min(upper.bottom, lower.bottom) - lower.top
            if wide > TOLERANCE_PX and deep > 0.2 * min(upper.bottom - upper.top, lower.bottom - lower.top):
                yield _sentence(upper, f"lies on “{lower.text[:40]}”", min(wide, deep))


def _sentence(ink: Ink, what: str, beyond_px: float) -> str:
    return f"page {ink.page}: “{ink.text[:60]}” {what} by {beyond_px * MM_PER_PX:.1f} mm"
