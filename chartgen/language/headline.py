"""A headline makes a claim found in the edition's own data: its numbers are filled in from the table, never typed.

``"At {speed:70 mph} you need {stopping:70 mph} to stop."`` — a placeholder names a quantity and the speed of its row.
The row is the one the poster shows (its first driver); ``driver=``, ``vehicle=`` and ``surface=`` take another:
``{stopping:70 mph, driver=cautious}``. The front door has checked how it is written; here it meets the table.
"""

from __future__ import annotations

from dataclasses import dataclass

from markupsafe import Markup, escape

from chartgen.edition.headline import PLACEHOLDER, Placeholder, placeholders
from chartgen.edition.model import Edition, Poster
from chartgen.errors import EditionFaults, Fault
from chartgen.figures.record import Figures
from chartgen.figures.table import select
from chartgen.language.bidi import isolated
from chartgen.language.html import isolate
from chartgen.language.load import Language


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


def headline_pieces(language: Language, edition: Edition, figures: Figures, poster: Poster) -> tuple[Piece, ...]:
    """The headline cut into words and filled-in numbers, with the row each number comes from.

    Raises EditionFaults, all faults of this headline at once: a row that is not in the table or does not stop.
    """
    tag = language.text_tag(poster.headline)
    place = f"poster[{edition.posters.index(poster) + 1}].headline.{tag}"
    words = PLACEHOLDER.split(poster.headline[tag])[::2]
    faults: list[Fault] = []
    pieces = [Piece(text=words[0])]
    for placeholder, after in zip(placeholders(poster.headline[tag]), words[1:], strict=True):
        filled = _filled(placeholder, language, edition, figures, poster)
        if isinstance(filled, Piece):
            pieces += [filled, Piece(text=after)]
        else:
            faults.append(Fault(edition.file, place, filled, "a row of the table that stops", placeholder.text))
    if faults:
        raise EditionFaults(tuple(faults))
    return tuple(piece for piece in pieces if piece.text)


def _filled(
    placeholder: Placeholder, language: Language, edition: Edition, figures: Figures, poster: Poster
) -> Piece | str:
    """The number of a placeholder, or what is wrong with it."""
    show = poster.show
    chosen = {"driver": show.drivers[0], "vehicle": show.vehicle, "surface": show.surface} | dict(placeholder.rows)
    rows = select(figures, grade=show.grade, **chosen)
    rows = rows[rows["printed_speed"] == placeholder.speed]
    where = ", ".join(f'{key} "{value}"' for key, value in chosen.items())
    if rows.empty:
        return f"there is no such row in the table: {where}, at a grade of {show.grade * 100:g} %"
    row = rows.iloc[0]
    number, quantity = int(row["row"]), placeholder.name
    if quantity == "speed":
        text = language.speed(float(row["printed_speed"]), edition.speed_unit)
    elif quantity in {"braking", "stopping"} and not bool(row["stops"]):
        return f"the vehicle does not stop there: {where}, at a grade of {show.grade * 100:g} %"
    else:
        text = language.distance(float(row[f"printed_{quantity}"]), edition.distance_unit)
    return Piece(text=text, row=number, quantity=quantity)
