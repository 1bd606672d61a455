"""Isolation in markup: a number with its unit, or a name of the other language, never pulls its neighbours about."""

from __future__ import annotations

from markupsafe import Markup, escape

from chartgen.language.bidi import direction_of, stripped


def isolate(text: str, lang: str | None = None) -> Markup:
    """``<bdi dir="…">text</bdi>``, escaped. The direction is said outright: "−9 %" has no letter to guess it from."""
    clean = stripped(text)
    language = Markup(' lang="{}"').format(lang) if lang else ""
    return Markup('<bdi dir="{}"{}>{}</bdi>').format(direction_of(clean), language, escape(clean))
