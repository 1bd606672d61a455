"""Style sheets, web fonts and the icon: files that all pages of an edition share.

The fonts go into the style sheet as data: a page opened from a disk is a place of its own to some browsers, which then
refuse a font file beside it.
"""

from __future__ import annotations

import base64
from collections.abc import Iterable, Iterator, Mapping
from typing import Final

from chartgen.charts.inks import palette
from chartgen.output import File
from chartgen.resources import templates

INKS: Final = ("paper", "type", "reaction", "lag", "braking", "accent")

# For the dark the palette turns over: light parts become dark ones and dark ones light, so that every neighbour keeps
# its contrast and a label its ground. Chosen by eye, held by the contrast tests.
DARK: Final[Mapping[str, Mapping[str, str]]] = {
    "gorse": {
        "paper": "#17151c", "type": "#f4efe2", "reaction": "#5d4a08", "lag": "#916baf", "braking": "#dfd6f3",
        "accent": "#f0916f",
    },
    "lichen": {
        "paper": "#131a1d", "type": "#eef2ea", "reaction": "#3f5527", "lag": "#4f847e", "braking": "#d0dfe7",
        "accent": "#f0966c",
    },
    "bracken": {
        "paper": "#1b1613", "type": "#f6eee1", "reaction": "#664a0e", "lag": "#ae6a31", "braking": "#ecd9c8",
        "accent": "#5fc3c0",
    },
}  # fmt: skip

# Which files make up a script's style sheet: (file, family, weight). Bold text is set in the narrow cut throughout.
_FACES: Final[Mapping[str, tuple[tuple[str, str, int], ...]]] = {
    "latin": (
        ("text-400", "Chartgen Text", 400),
        ("narrow-500", "Chartgen Narrow", 500),
        ("narrow-700", "Chartgen Narrow", 700),
    ),
    "cyrillic": (("text-400-cyrillic", "Chartgen Text", 400), ("text-700-cyrillic", "Chartgen Text", 700)),
    "arabic": (
        ("arabic-400", "Chartgen Arabic", 400),
        ("arabic-700", "Chartgen Arabic", 700),
        ("text-400-basic", "Chartgen Text", 400),
        ("narrow-500-basic", "Chartgen Narrow", 500),
        ("narrow-700-basic", "Chartgen Narrow", 700),
    ),
}
_DESCRIPTORS: Final = {
    "text-400-cyrillic": "unicode-range:U+0400-04FF;",
    "text-700-cyrillic": "unicode-range:U+0400-04FF;",
    # The face's own box stands so low that its letters hang at the top of a button; these centre them.
    "arabic-400": "ascent-override:86%;descent-override:36%;line-gap-override:0%;",
    "arabic-700": "ascent-override:86%;descent-override:36%;line-gap-override:0%;",
}
_SCRIPTS: Final = {"ar": ("arabic",), "fa": ("arabic",), "ur": ("arabic",), "uk": ("latin", "cyrillic"),
                   "bg": ("latin", "cyrillic"), "ru": ("latin", "cyrillic")}  # fmt: skip


def scripts(tag: str) -> tuple[str, ...]:
    """The font style sheets a page in this language needs."""
    return _SCRIPTS.get(tag.split("-", maxsplit=1)[0], ("latin",))


def assets(palette_name: str, tags: Iterable[str]) -> Iterator[File]:
    """The shared files of an edition in these languages."""
    light = light_inks(palette_name)
    css = (templates() / "site" / "site.css").read_text(encoding="utf-8")
    yield File("assets/site.css", (_inks_css(palette_name) + css).encode("utf-8"))
    for script in sorted({script for tag in tags for script in scripts(tag)}):
        yield File(f"assets/fonts-{script}.css", _fonts_css(script).encode("ascii"))
    yield File("assets/icon.svg", _icon(light).encode("ascii"))


def light_inks(palette_name: str) -> dict[str, str]:
    """Hexadecimal sRGB of the palette's inks by name, as on paper."""
    chosen = palette(palette_name)
    return {name: getattr(chosen, name).srgb.lower() for name in INKS}


def _inks_css(palette_name: str) -> str:
    def declared(inks: Mapping[str, str]) -> str:
        return "".join(f"--{name}:{inks[name]};" for name in INKS)

    return (
        f":root{{{declared(light_inks(palette_name))}}}\n"
        f"@media screen and (prefers-color-scheme:dark){{:root{{{declared(DARK[palette_name])}}}}}\n"
    )


def _fonts_css(script: str) -> str:
    out = []
    for file, family, weight in _FACES[script]:
        data = base64.b64encode((templates() / "site" / "fonts" / f"{file}.woff2").read_bytes()).decode("ascii")
        out.append(
            f'@font-face{{font-family:"{family}";font-weight:{weight};font-display:swap;{_DESCRIPTORS.get(file, "")}'
            f"src:url(data:font/woff2;base64,{data}) format('woff2')}}\n"
        )
    return "".join(out)


def _icon(inks: Mapping[str, str]) -> str:
    """Three columns, each with its two parts."""
    bars = "".join(
        f'<rect x="{x}" y="{28 - low}" width="7" height="{low}" fill="{inks["reaction"]}"/>'
        f'<rect x="{x}" y="{27 - low - high}" width="7" height="{high}" fill="{inks["braking"]}"/>'
        for x, low, high in ((3, 4, 5), (12.5, 5, 11), (22, 6, 18))
    )
    return (
        '<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 32 32">'
        f'<rect width="32" height="32" fill="{inks["paper"]}"/>{bars}</svg>\n'
    )
