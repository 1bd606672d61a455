"""Reading a finished PDF again, as another program would: what it says, where, and in which font.

Uses a PDF reader that shares no code with the engine that wrote the file.
"""

from __future__ import annotations

import ctypes
import re
import unicodedata
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import pypdfium2

MM_PER_POINT = 25.4 / 72
_NUMBER = re.compile(r"\d+(?:[.,]\d+)*")
_SEPARATORS = str.maketrans({"\u066b": ".", "\u066c": ","})


@dataclass(frozen=True, slots=True)
class Piece:
    """One run of text of a page: what it says and its box in mm from the top left corner."""

    page: int
    text: str
    left: float
    top: float
    right: float
    bottom: float


@dataclass(frozen=True, slots=True)
class Reading:
    """What a finished file says: runs of text, the whole text of each page, page sizes in mm."""

    pieces: tuple[Piece, ...]
    pages: tuple[str, ...]
    sizes_mm: tuple[tuple[float, float], ...]


def read(data: bytes) -> Reading:
    """All text of a PDF. Text drawn in one marked run is one piece, so numbers that stand close never run together."""
    pieces: list[Piece] = []
    pages, sizes = [], []
    with pypdfium2.PdfDocument(data) as document:
        for number in range(len(document)):
            page = document[number]
            width, height = page.get_size()
            sizes.append((width * MM_PER_POINT, height * MM_PER_POINT))
            textpage = page.get_textpage()
            pages.append(textpage.get_text_bounded())
            pieces.extend(_pieces(pypdfium2.raw, page, textpage, number + 1, height))
            textpage.close()
            page.close()
    return Reading(tuple(pieces), tuple(pages), tuple(sizes))


def _pieces(raw: Any, page: Any, textpage: Any, number: int, height: float) -> Iterator[Piece]:
    current: tuple[int, list[str], list[float]] | None = None
    for index in range(raw.FPDFPage_CountObjects(page.raw)):
        item = raw.FPDFPage_GetObject(page.raw, index)
        if raw.FPDFPageObj_GetType(item) != raw.FPDF_PAGEOBJ_TEXT:
            continue
        mark = raw.FPDFPageObj_GetMarkedContentID(item)
        text, box = _text(raw, item, textpage), _bounds(raw, item, height)
        if current and mark == current[0] and mark >= 0:
            current[1].append(text)
            old = current[2]
            current[2][:] = [min(old[0], box[0]), min(old[1], box[1]), max(old[2], box[2]), max(old[3], box[3])]
            continue
        if current:
            yield Piece(number, "".join(current[1]), *current[2])
        current = (mark, [text], box)
    if current:
        yield Piece(number, "".join(current[1]), *current[2])


def _text(raw: Any, item: Any, textpage: Any) -> str:
    size = raw.FPDFTextObj_GetText(item, textpage.raw, None, 0)
    buffer = ctypes.create_string_buffer(size)
    raw.FPDFTextObj_GetText(item, textpage.raw, ctypes.cast(buffer, ctypes.POINTER(ctypes.c_ushort)), size)
    return buffer.raw[: max(size - 2, 0)].decode("utf-16-le")


def _bounds(raw: Any, item: Any, height: float) -> list[float]:
    left, bottom, right, top = (ctypes.c_float() for _ in range(4))
    raw.FPDFPageObj_GetBounds(item, left, bottom, right, top)
    edges = (left.value, height - top.value, right.value, height - bottom.value)
    return [edge * MM_PER_POINT for edge in edges]


def numbers(text: str) -> list[str]:
    """Every number in a text, digits of any script as 0-9; a space between digits separates, a stop or comma joins.

    >>> numbers("23\u00a0m, 0,68\u00a0s, ٢٣, 12.0 1,000")
    ['23', '0,68', '23', '12', '1,000']
    """
    plain = "".join(str(unicodedata.digit(c)) if unicodedata.category(c) == "Nd" else c for c in text)
    return [_without_trailing_zeros(number) for number in _NUMBER.findall(plain.translate(_SEPARATORS))]


def _without_trailing_zeros(number: str) -> str:
    """12.0 and 12.50 as 12 and 12.5: a column of equal decimals says no more. Three digits after a sign may be
    thousands and stay."""
    return re.sub(r"[.,]0{1,2}$|(?<=[.,]\d)0$", "", number)


def squeezed(text: str) -> str:
    """A text without spaces and soft marks: two texts that a reader would call the same are equal."""
    folded = unicodedata.normalize("NFKC", text)
    return "".join(c for c in folded if not c.isspace() and unicodedata.category(c) not in ("Cf", "Cc", "Co"))
