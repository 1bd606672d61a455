"""Make the web fonts of the pages: subsets of open fonts, renamed as their licence asks, as woff2 files.

Run once when a word list brings a character that no file covers (the test of the web fonts says so):

    .venv/bin/python tools/webfonts.py

Reads the font packages of the Python environment; writes ``templates/site/fonts/*.woff2`` and the notice beside
them. Same packages, same bytes: the time stamp of each file is that of its source.
"""

from __future__ import annotations

import logging
from dataclasses import dataclass
from pathlib import Path

import fontpkg
from fontTools.subset import Options, Subsetter
from fontTools.ttLib import TTFont
from fontTools.varLib.instancer import instantiateVariableFont

INTO = Path(__file__).resolve().parent.parent / "templates" / "site" / "fonts"

# The letters of every Latin alphabet the word lists use or are likely to use soon, not the whole of Unicode's blocks.
_LATIN = (
    set(range(0x20, 0x7F))
    | set(range(0xA0, 0x180))
    | {0x0218, 0x0219, 0x021A, 0x021B}  # Romanian with comma below
    | set(map(ord, "ẀẁẂẃẄẅỲỳ"))
)
_SIGNS = set(map(ord, "‐‑–—‘’‚“”„…‹›‰−×÷·•²³½≈≤≥≠→←µμβθηπ√∫°€ \u00a0\u2009\u202f"))
_CYRILLIC = set(range(0x0400, 0x0460)) | {0x0490, 0x0491}
_ARABIC = set(range(0x0600, 0x0700)) | set(range(0x20, 0x7F)) | set(range(0xA0, 0x100)) | _SIGNS
# Where the source has no glyph of its own, a near one stands in: a narrow no-break space, a no-break hyphen.
_STAND_INS = {0x202F: (0x2009, 0x20), 0x2009: (0x20,), 0x2011: (0x2010, 0x2D), 0x2010: (0x2D,), 0x03BC: (0xB5,)}


@dataclass(frozen=True, slots=True)
class Face:
    """One file to make: from which package family, at which weight, which characters, under which name."""

    file: str
    family: str
    weight: int
    name: str
    characters: frozenset[int]


_BASIC = frozenset(range(0x20, 0x7F)) | frozenset(_SIGNS)

FACES = (
    Face("text-400", "IBM Plex Sans", 400, "Chartgen Text", frozenset(_LATIN | _SIGNS)),
    Face("narrow-500", "IBM Plex Sans Condensed", 500, "Chartgen Narrow", frozenset(_LATIN | _SIGNS)),
    Face("narrow-700", "IBM Plex Sans Condensed", 700, "Chartgen Narrow", frozenset(_LATIN | _SIGNS)),
    Face("text-400-basic", "IBM Plex Sans", 400, "Chartgen Text", _BASIC),
    Face("narrow-500-basic", "IBM Plex Sans Condensed", 500, "Chartgen Narrow", _BASIC),
    Face("narrow-700-basic", "IBM Plex Sans Condensed", 700, "Chartgen Narrow", _BASIC),
    # The condensed cut has no Cyrillic: there bold text takes the full width.
    Face("text-400-cyrillic", "IBM Plex Sans", 400, "Chartgen Text", frozenset(_CYRILLIC)),
    Face("text-700-cyrillic", "IBM Plex Sans", 700, "Chartgen Text", frozenset(_CYRILLIC)),
    Face("arabic-400", "Tajawal", 400, "Chartgen Arabic", frozenset(_ARABIC)),
    Face("arabic-700", "Tajawal", 700, "Chartgen Arabic", frozenset(_ARABIC)),
)


def source(face: Face) -> TTFont:
    """The whole font as a static instance of the face's weight at full width."""
    files = [f for f in fontpkg.family(face.family).files if f.style == "normal"]
    fixed = [f for f in files if f.weight == face.weight and not f.variable]
    chosen = fixed[0] if fixed else next(f for f in files if f.variable)
    font = TTFont(chosen.path, recalcTimestamp=False)
    if "fvar" in font:
        font = instantiateVariableFont(font, {"wght": face.weight, "wdth": 100})
    return font


def stand_in(font: TTFont) -> None:
    """Map a few spaces and hyphens to near glyphs where the font has none, so that no foreign font is called in."""
    for table in font["cmap"].tables:
        if not table.isUnicode():
            continue
        for code, near in _STAND_INS.items():
            if code not in table.cmap:
                glyph = next((table.cmap[n] for n in near if n in table.cmap), None)
                if glyph is not None:
                    table.cmap[code] = glyph


def rename(font: TTFont, face: Face) -> None:
    """Give the subset its own name, as the reserved font name in the licence asks; keep copyright and licence."""
    style = {400: "Regular", 500: "Medium", 700: "Bold"}[face.weight]
    postscript = f"{face.name.replace(' ', '')}-{style}"
    names = {1: face.name, 2: style, 3: f"{postscript}-subset", 4: f"{face.name} {style}", 6: postscript}
    table = font["name"]
    table.names = [r for r in table.names if r.nameID in (0, 13, 14) and r.platformID == 3 and r.langID == 0x409]
    for name_id, text in names.items():
        table.setName(text, name_id, 3, 1, 0x409)


def make(face: Face) -> Path:
    """Write one woff2 file; returns its path."""
    font = source(face)
    stand_in(font)
    options = Options()
    latin = ["kern", "mark", "mkmk", "ccmp", "locl", "tnum", "lnum"]
    options.layout_features = ["*"] if face.name == "Chartgen Arabic" else latin
    options.name_IDs = ["*"]
    options.notdef_outline = True
    options.hinting = False
    options.desubroutinize = True
    options.flavor = "woff2"
    cutter = Subsetter(options)
    cutter.populate(unicodes=face.characters)
    cutter.subset(font)
    rename(font, face)
    font.flavor = "woff2"
    path = INTO / f"{face.file}.woff2"
    font.save(path)
    return path


def main() -> None:
    """Make every face and print its size."""
    logging.getLogger("fontTools").setLevel(logging.ERROR)
    INTO.mkdir(parents=True, exist_ok=True)
    for face in FACES:
        path = make(face)
        print(f"{path.name}: {path.stat().st_size} bytes")


if __name__ == "__main__":
    main()
