"""What a method of the edition works with: asked by drivers, surfaces, vehicles, cases and questions alike."""

from __future__ import annotations

from typing import Final

FIRST_PRINCIPLES: Final = "first-principles"
ADOPTED: Final = "adopted"
THUMB = ("square-metric", "square-half-metric", "square-feet")
"""Rules of thumb, a distance from the speed alone: everything else is within the rule."""
METHODS = (FIRST_PRINCIPLES, "sight-metric", "sight-us", "slide-metric", "slide-us", *THUMB)
"""Those that an edition may name; a table that is adopted needs no name."""


def needs_time(method: str) -> bool:
    """Whether a reaction time goes into its distances."""
    return method != ADOPTED and method not in THUMB


def needs_friction(method: str) -> bool:
    """Whether the surface's friction goes into its distances, and must be there."""
    return method == FIRST_PRINCIPLES or method.startswith("slide-")


def called(method: str) -> str:
    """ "the method sight-us", or "a table that is adopted", for a message."""
    return "a table that is adopted" if method == ADOPTED else f"the method {method}"
