"""Sentences of several words: the assumption line, the caution, the notices that go onto a sheet.

The assumption line is made of fragments "label: value", joined by a middle dot. No fragment leans on another's grammar:
adjectives agree with a noun in French, Spanish and Arabic, and Welsh words change behind a preposition.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from markupsafe import Markup, escape

from chartgen.edition.model import Edition
from chartgen.figures.assume import Assumption, AtSpeed, Braking, Rounded
from chartgen.figures.record import Notice
from chartgen.figures.units import from_metres
from chartgen.language.bidi import isolated
from chartgen.language.headline import headline, headline_html, headline_pieces, headline_plain
from chartgen.language.load import Language

__all__ = [
    "assumption_fragments", "assumption_line", "assumption_line_html", "assumption_line_plain", "caution_sentences",
    "headline", "headline_html", "headline_pieces", "headline_plain", "notice_sentence", "notice_sentence_html",
    "spread_sentence", "verdict", "where_line_html",
]  # fmt: skip

JOIN = " · "
CAUTION = ("caution.worked", "caution.no_guarantee", "caution.law", "caution.design")
"""The sentences of the caution, in their order; all of them stand on every page and sheet."""

VERDICTS = {"outside-friction-range": "verdict.outside_range"}
"""What stands in place of a distance, by the row's reason, where it is not “does not stop”."""
REASONS = {
    "too-little-friction": "verdict.too_little_friction",
    "never-at-rest": "verdict.never_at_rest",
    "outside-friction-range": "verdict.outside_range_reason",
}
"""The sentence that says why, by the row's reason."""

Fragment = tuple[str, Mapping[str, str]]
"""A word key and the values of its placeholders, written as the language writes them."""


def caution_sentences(language: Language) -> tuple[str, ...]:
    """The caution: worked out, no guarantee, code and law prevail, road design is for licensed practice."""
    return tuple(language.t(key) for key in CAUTION)


def assumption_line(language: Language, edition: Edition, assumption: Assumption) -> str:
    """Reaction, lag, deceleration, surface, gradient, load and rounding in one line of bare text."""
    fragments = assumption_fragments(language, edition, assumption)
    return JOIN.join(language.t(key, **values) for key, values in fragments)


def assumption_line_plain(language: Language, edition: Edition, assumption: Assumption) -> str:
    """As `assumption_line`, values isolated by direction characters where needed; for text without markup."""
    fragments = assumption_fragments(language, edition, assumption)
    pieces = (language.plain(key, **values) for key, values in fragments)
    return JOIN.join(isolated(piece, language.direction) for piece in pieces)


def assumption_line_html(language: Language, edition: Edition, assumption: Assumption) -> Markup:
    """As `assumption_line`, for markup: each value in a ``<bdi>``."""
    fragments = assumption_fragments(language, edition, assumption)
    return escape(JOIN).join(language.html(key, **values) for key, values in fragments)


def where_line_html(language: Language, edition: Edition, assumption: Assumption) -> Markup:
    """Surface, slope and load alone: what a following gap rests on."""
    return escape(JOIN).join(language.html(key, **values) for key, values in _where(language, edition, assumption))


def assumption_fragments(language: Language, edition: Edition, assumption: Assumption) -> tuple[Fragment, ...]:
    """The fragments of an assumption line, for those who set them as a list. Always the seven fields; a named method of
    a manual and a brake efficiency under 100 % are added."""
    if assumption.adopted is not None:
        return (("assume.adopted", {"source": assumption.adopted}), *_where(language, edition, assumption))
    fragments = [
        _reaction(language, assumption),
        _lag(language, assumption),
        _braking(language, edition, assumption.braking, assumption.method),
    ]
    if assumption.braking.efficiency != 1.0:
        fragments.append(("assume.efficiency", {"share": language.percent(assumption.braking.efficiency)}))
    fragments += _where(language, edition, assumption)
    fragments.append(_rounding(language, assumption.rounding))
    if assumption.method != "first-principles":
        fragments.append(("assume.method", {"name": language.t(f"method.name.{assumption.method}")}))
    return tuple(fragments)


def _where(language: Language, edition: Edition, assumption: Assumption) -> list[Fragment]:
    """Surface, slope and load."""
    load: Fragment = ("assume.load_not_stated", {})
    if assumption.load is not None:
        load = ("assume.load", {"state": language.t(f"word.{assumption.load}")})
    surface = language.text(edition.surface(assumption.surface).name)
    return [("assume.surface", {"name": surface}), _slope(language, assumption.grade), load]


def verdict(language: Language, reason: str) -> str:
    """The words in place of a distance that a row does not have: it does not stop, or there is no figure."""
    return language.t(VERDICTS.get(reason, "verdict.does_not_stop"))


def spread_sentence(language: Language) -> tuple[str, dict[str, str]]:
    """Key and values of the sentence that says what a whisker beside a column means."""
    return "sheet.spread", {"middle": language.percent(0.85), "most": language.percent(0.95)}


def notice_sentence(language: Language, notice: Notice) -> str:
    """A notice that concerns the reader, as a bare sentence. Raises WordMissing for one that does not."""
    return language.t(f"notice.{notice.code}", **_notice_values(language, notice))


def notice_sentence_html(language: Language, notice: Notice) -> Markup:
    """As `notice_sentence`, for markup."""
    return language.html(f"notice.{notice.code}", **_notice_values(language, notice))


def _notice_values(language: Language, notice: Notice) -> dict[str, str]:
    if notice.code != "may-be-short":
        return {}
    fields = notice.fields
    pairs = [(fields[p + "short"], fields[p + "unit"]) for p in ("", "also_") if p + "short" in fields]
    return {"short": _side_by_side(language.distance(float(number), unit) for number, unit in pairs)}


def _reaction(language: Language, assumption: Assumption) -> Fragment:
    time = language.seconds(assumption.reaction_time_s)
    if assumption.perception_s is not None:
        return "assume.perception", {"time": time, "perception": language.seconds(assumption.perception_s)}
    if assumption.reaction_percentile is None:
        return "assume.reaction", {"time": time}
    share = language.percent(int(assumption.reaction_percentile.removeprefix("p")) / 100)
    return "assume.reaction_percentile", {"time": time, "share": share}


def _lag(language: Language, assumption: Assumption) -> Fragment:
    if assumption.build_up_s > 0:
        values = {"time": language.seconds(assumption.brake_lag_s), "rise": language.seconds(assumption.build_up_s)}
        return "assume.lag_build_up", values
    if assumption.brake_lag_s > 0:
        return "assume.lag", {"time": language.seconds(assumption.brake_lag_s)}
    return "assume.no_lag", {}


def _braking(language: Language, edition: Edition, braking: Braking, method: str) -> Fragment:
    limit = {} if braking.limit_mps2 is None else {"deceleration": _deceleration(language, edition, braking.limit_mps2)}
    if braking.friction is None and not limit:
        # A rule of thumb: its deceleration lies in its formula.
        return "assume.deceleration", {"deceleration": _deceleration(language, edition, braking.full_mps2.low)}
    if braking.friction is None:
        return ("assume.deceleration" if method.startswith("sight-") else "assume.limit"), limit
    suffix = "_limit" if limit else ""
    if not _falls_in_print(language, braking.friction):
        return f"assume.friction{suffix}", {"value": _friction(language, braking.friction.low), **limit}
    values = {
        "first": _friction(language, braking.friction.low),
        "low": language.speed(braking.friction.low_speed, edition.speed_unit),
        "second": _friction(language, braking.friction.high),
        "high": language.speed(braking.friction.high_speed, edition.speed_unit),
    }
    return f"assume.friction_falling{suffix}", values | limit


def _falls_in_print(language: Language, friction: AtSpeed) -> bool:
    return friction.falls and _friction(language, friction.low) != _friction(language, friction.high)


def _friction(language: Language, mu: float) -> str:
    return language.number(mu, 2)


def _deceleration(language: Language, edition: Edition, mps2: float) -> str:
    """In ft/s² where the edition's distances are in feet, else in m/s²."""
    if edition.distance_unit == "ft":
        return language.deceleration(float(from_metres(mps2, "ft")), "ft/s²", 1)
    return language.deceleration(mps2)


def _slope(language: Language, grade: float) -> Fragment:
    if grade == 0:
        return "assume.level", {}
    return ("assume.uphill" if grade > 0 else "assume.downhill"), {"grade": language.percent(abs(grade))}


def _rounding(language: Language, rounding: Rounded) -> Fragment:
    steps = [(rounding.step, rounding.unit)]
    if rounding.also_unit is not None:
        steps.append((rounding.also_step, rounding.also_unit))
    step = _side_by_side(language.distance(number, unit) for number, unit in steps)
    if rounding.never_short:
        return "assume.rounding_up", {"step": step}
    if not rounding.short:
        return "assume.rounding_not_short", {"step": step}
    short = _side_by_side(language.distance(number, unit) for unit, number in rounding.short.items())
    key = "assume.rounding_nearest" if rounding.rule == "nearest" else "assume.rounding_mixed"
    return key, {"step": step, "short": short}


def _side_by_side(amounts: Iterable[str]) -> str:
    return " / ".join(amounts)
