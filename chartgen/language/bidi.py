"""Numbers, units and names that must keep their own direction inside a text of the other one.

Two readers, two means: in markup an element isolates (html.py); in plain text (a text alternative, a PDF title) the
characters U+2066…U+2069 of the Unicode Bidirectional Algorithm (UAX 9) do. Text that is drawn must not hold them: the
fonts have no glyph for them.
"""

from __future__ import annotations

import unicodedata
from typing import Literal

Direction = Literal["ltr", "rtl"]

LRI, RLI, FSI, PDI = "\u2066", "\u2067", "\u2068", "\u2069"
_MARKS = dict.fromkeys(map(ord, "\u200e\u200f\u202a\u202b\u202c\u202d\u202e" + LRI + RLI + FSI + PDI))


def direction_of(text: str) -> Direction:
    """Direction of the first strong character; "ltr" where there is none, as in "−9 %"."""
    for character in text:
        kind = unicodedata.bidirectional(character)
        if kind == "L":
            return "ltr"
        if kind in {"R", "AL"}:
            return "rtl"
    return "ltr"


def isolated(text: str, around: Direction) -> str:
    """`text` between isolate characters, where it or the text around it runs right to left."""
    own = direction_of(text)
    if around == "ltr" and own == "ltr":
        return text
    return (LRI if own == "ltr" else RLI) + text + PDI


def stripped(text: str) -> str:
    """`text` without direction characters, for drawing and for comparing."""
    return text.translate(_MARKS)
