"""How a figure is made, step by step, with the formulas: from first principles, or a manual's printed form."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final

from markupsafe import Markup, escape

from chartgen.language.load import Language
from chartgen.site.edition_site import Site

# The formulas of the mechanics as they are worked out; one-letter symbols, explained below them.
_BRAKES = Markup(
    "<var>β</var> = min(<var>η</var> <var>μ</var> <var>g</var> cos <var>θ</var>, <var>A</var>), "
    "<var>a</var> = <var>β</var> + <var>g</var> sin <var>θ</var>"
)
_STEPS: Final[tuple[tuple[str, tuple[Markup, ...]], ...]] = (
    ("method.step.reaction", (Markup("<var>d</var> = <var>v</var> <var>t</var>"),)),
    ("method.step.grade", ()),
    (
        "method.step.lag",
        (
            Markup(
                "<var>d</var> = <var>v</var> <var>l</var> − <var>g</var> sin <var>θ</var> <var>l</var><sup>2</sup> / 2"
            ),
        ),
    ),
    (
        "method.step.build_up",
        (
            Markup(
                "<var>d</var> = <var>v</var> <var>b</var> − <var>g</var> sin <var>θ</var> <var>b</var><sup>2</sup> / 2"
                " − <var>β</var> <var>b</var><sup>2</sup> / 6"
            ),
        ),
    ),
    (
        "method.step.braking",
        (_BRAKES, Markup("<var>d</var> = <var>v</var><sup>2</sup> / (2 <var>a</var>)")),
    ),
    (
        "method.step.friction",
        (Markup("<var>d</var> = ∫ <var>v</var> d<var>v</var> / <var>a</var>(<var>v</var>)"),),
    ),
)
# As printed in the manuals; the same text stands beside each method of the mechanics.
_PRINTED: Final[dict[str, tuple[str, ...]]] = {
    "sight-metric": ("0.278 V t + 0.039 V² / a", "0.278 V t + V² / (254 ((a / 9.81) ± G))"),
    "sight-us": ("1.47 V t + 1.075 V² / a", "1.47 V t + V² / (30 ((a / 32.2) ± G))"),
    "slide-metric": ("0.278 V t + V² / (254 (f ± G))",),
    "slide-us": ("1.47 V t + V² / (30 (f ± G))",),
    "square-metric": ("3 V / 10 + (V / 10)²",),
    "square-half-metric": ("3 V / 10 + (V / 10)² / 2",),
    "square-feet": ("V + V² / 20",),
}


@dataclass(frozen=True, slots=True)
class Step:
    text: str
    formulas: tuple[Markup, ...]


def steps(site: Site, language: Language) -> Iterator[Step]:
    """The steps of the edition's method, in their order."""
    method = site.edition.method
    if site.edition.adopted is not None:
        yield Step(language.t("method.adopted_text"), ())
        return
    if method in _PRINTED:
        printed = tuple(escape(formula) for formula in _PRINTED[method])
        text = language.t("method.printed_formula")
        if method.startswith("square-"):
            own = float(site.figures.table["reaction_time_s"].iloc[0])
            text = language.plain("method.square_text", time=language.seconds(own))
        yield Step(text, printed)
        return
    for key, formulas in _STEPS:
        yield Step(language.t(key), formulas)
    yield Step(language.t("method.symbols"), ())
