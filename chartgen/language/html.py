"""Isolation in markup: a number with its unit, or a name of the other language, never pulls its neighbours about."""

from __future__ import annotations

from functools import lru_cache

from markupsafe import Markup, escape

from chartgen.language.bidi import direction_of, stripped


def isolate(text: str, lang: str | None = None) -> Markup:
    """``<bdi dir="…">text</bdi>``, escaped. The direction is said outright: "−9 %" has no letter to guess it from."""
    return _isolated(str(text), lang)


@lru_cache(maxsize=16384)
def _isolated(text: str, lang: str | None) -> Markup:
    # The same few numbers and names stand on every page.
    clean = stripped(text)
    language = f' lang="{escape(lang)}"' if lang else ""
    return Markup(f'<bdi dir="{direction_of(clean)}"{language}>{escape(clean)}</bdi>')  # noqa: S704 it is escaped
