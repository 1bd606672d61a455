"""A headline makes a claim found in the edition's own data: its numbers are filled in from the table, never typed.

``"At {speed:70 mph} you need {stopping:70 mph} to stop."`` — a placeholder names a quantity and the speed of its row.
The row is the one the poster shows (its first driver); ``driver=``, ``vehicle=``, ``surface=`` and ``grade=`` take
another: ``{stopping:70 mph, driver=cautious}``.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from typing import Any

from markupsafe import Markup, escape

from chartgen.edition.model import Edition, Poster
from chartgen.errors import EditionFaults, Fault
from chartgen.figures.record import Figures
from chartgen.figures.table import select
from chartgen.language.bidi import isolated
from chartgen.language.html import isolate
from chartgen.language.load import Language

QUANTITIES = ("speed", "reaction", "lag", "braking", "stopping")
_PLACEHOLDER = re.compile(r"\{([^{}]*)\}")
_NUMBER_UNIT = re.compile(r"(-?\d+(?:\.\d+)?) ?(\S+)")
_BRACES_OR_DIGIT = re.compile(r"[{}]|\d")


@dataclass(frozen=True, slots=True, kw_only=True)
class Piece:
    """A stretch of a headline. Words: `quantity` is None. A filled-in number: `row` of the table and `quantity`."""

    text: str
    row: int | None = None
    quantity: str | None = None


def headline(language: Language, edition: Edition, figures: Figures, poster: Poster) -> str:
    """The poster's headline with its numbers, bare text. Raises EditionFaults as `headline_pieces` does."""
    return "".join(piece.text for piece in headline_pieces(language, edition, figures, poster))


def headline_plain(language: Language, edition: Edition, figures: Figures, poster: Poster) -> str:
    """As `headline`, numbers isolated by direction characters where needed: text alternatives and document titles."""
    pieces = headline_pieces(language, edition, figures, poster)
    return "".join(isolated(p.text, language.direction) if p.quantity else p.text for p in pieces)


def headline_html(language: Language, edition: Edition, figures: Figures, poster: Poster) -> Markup:
    """As `headline`, for markup: words escaped, each number in a ``<bdi>``."""
    pieces = headline_pieces(language, edition, figures, poster)
    return Markup("").join(isolate(p.text) if p.quantity else escape(p.text) for p in pieces)


def headline_pieces(
    language: Language, edition: Edition, figures: Figures, poster: Poster
) -> tuple[Piece, ...]:
    """The headline cut into words and filled-in numbers, with the row each number comes from.

    Raises EditionFaults, all faults of this headline at once: an unknown quantity or id, a speed that is not one of the
    edition's, a row that does not stop, a number typed by hand.
    """
    tag = language.text_tag(poster.headline)
    place = f"poster[{edition.posters.index(poster)}].headline.{tag}"
    faults: list[Fault] = []
    pieces: list[Piece] = []
    parts = _PLACEHOLDER.split(poster.headline[tag])
    for index, part in enumerate(parts):
        if index % 2:
            try:
                pieces.append(_filled(part, language, edition, figures, poster))
            except _NotFilledError as wrong:
                faults.append(Fault(edition.file, place, wrong.problem, wrong.allowed, "{" + part + "}", wrong.near))
            continue
        if found := _BRACES_OR_DIGIT.search(part):
            problem = "has a brace without its partner" if found[0] in "{}" else "has a number typed by hand"
            allowed = "numbers from the table, e.g. {stopping:" + _speeds(edition)[0] + "}"
            faults.append(Fault(edition.file, place, problem, allowed, part.strip()))
        if part:
            pieces.append(Piece(text=part))
    if faults:
        raise EditionFaults(tuple(faults))
    return tuple(pieces)


class _NotFilledError(Exception):
    def __init__(self, problem: str, allowed: str, near: str | None = None) -> None:
        super().__init__(problem)
        self.problem, self.allowed, self.near = problem, allowed, near


def _filled(inside: str, language: Language, edition: Edition, figures: Figures, poster: Poster) -> Piece:
    quantity, _, rest = (text.strip() for text in inside.partition(":"))
    if quantity not in QUANTITIES:
        raise _NotFilledError("names no quantity of the table", ", ".join(QUANTITIES), _near(quantity, QUANTITIES))
    first, *others = (text.strip() for text in rest.split(","))
    speed = _speed(first, edition)
    row = _row(speed, _where(others, edition, poster), figures, first)
    number = int(row["row"])
    if quantity == "speed":
        return Piece(text=language.speed(speed, edition.speed_unit), row=number, quantity=quantity)
    if quantity in {"braking", "stopping"} and not bool(row["stops"]):
        raise _NotFilledError("asks for a distance where the vehicle does not stop", "a row that stops")
    text = language.distance(float(row[f"printed_{quantity}"]), edition.distance_unit)
    return Piece(text=text, row=number, quantity=quantity)


def _speed(text: str, edition: Edition) -> float:
    found = _NUMBER_UNIT.fullmatch(text)
    if not found or found[2] != edition.speed_unit or float(found[1]) not in edition.speeds:
        raise _NotFilledError("names no speed of this edition", ", ".join(_speeds(edition)))
    return float(found[1])


def _speeds(edition: Edition) -> list[str]:
    return [f"{speed:g} {edition.speed_unit}" for speed in edition.speeds]


def _where(others: list[str], edition: Edition, poster: Poster) -> dict[str, Any]:
    """Which row: the poster's own choice, and over it what the placeholder says."""
    show = poster.show
    where: dict[str, Any] = {
        "driver": show.drivers[0], "vehicle": show.vehicle, "surface": show.surface, "grade": show.grade,
    }
    ids = {
        "driver": [d.id for d in edition.drivers],
        "vehicle": [v.id for v in edition.vehicles],
        "surface": [s.id for s in edition.surfaces],
    }
    for other in others:
        key, _, value = (text.strip() for text in other.partition("="))
        if key not in where:
            allowed = ", ".join(f"{known}=…" for known in where)
            raise _NotFilledError(f'holds "{key}", which picks no row', allowed, _near(key, where))
        if key == "grade":
            found = _NUMBER_UNIT.fullmatch(value)
            if not found or found[2] != "%":
                raise _NotFilledError("has a grade that cannot be read", 'a percentage such as "grade=-6 %"')
            where["grade"] = float(found[1]) / 100
        elif value in ids[key]:
            where[key] = value
        else:
            problem = f'names the {key} "{value}", which is not there'
            raise _NotFilledError(problem, ", ".join(ids[key]), _near(value, ids[key]))
    return where


def _row(speed: float, where: Mapping[str, Any], figures: Figures, given: str) -> Any:
    rows = select(figures, **where)
    rows = rows[rows["speed"] == speed]
    if rows.empty:
        named = {**where, "grade": f"{where['grade'] * 100:g} %"}
        chosen = ", ".join(f"{key} {value}" for key, value in named.items())
        problem = f"asks for a row that no case of this edition has: {given}, {chosen}"
        raise _NotFilledError(problem, "a row of the table")
    return rows.iloc[0]


def _near(given: str, known: Mapping[str, Any] | list[str] | tuple[str, ...]) -> str | None:
    return next(iter(get_close_matches(given, list(known), 1)), None)
