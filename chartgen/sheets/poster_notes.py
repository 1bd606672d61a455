"""One language's notes on a poster: what is shown, what it rests on, what to beware of, who else can read it."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from markupsafe import Markup, escape

from chartgen.charts.drawing import Drawing, FaceName
from chartgen.edition.model import Edition
from chartgen.figures.record import Figures
from chartgen.language.load import Language
from chartgen.language.sentences import JOIN, spread_sentence
from chartgen.sheets.account import Account
from chartgen.sheets.assumed import Assumed, assumed
from chartgen.sheets.control import caution, notices
from chartgen.sheets.fitting import packed
from chartgen.sheets.poster_plan import Paragraph

if TYPE_CHECKING:
    import pandas as pd

_COURSE_ROOM = "1000 m"
"""Stands in for the course's length while room is kept for it."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Note:
    """A paragraph: its lines as markup (one, where the engine breaks it), its kind (class), its language."""

    lines: tuple[Markup, ...]
    kind: str
    language: Language


@dataclass(frozen=True, slots=True, kw_only=True)
class Notes:
    """The notes of one language but for the course and the line breaks, which are known once the drawing stands."""

    language: Language
    vehicle: str
    assumed: tuple[Assumed, ...]
    rest: tuple[Note, ...]

    @property
    def measured(self) -> tuple[Paragraph, ...]:
        """What room has to be kept for."""
        shown = self.vehicle + JOIN + self.language.t("sheet.course_m", length=_COURSE_ROOM)
        faces: dict[str, FaceName] = {"notice": "text-bold"}
        return (
            Paragraph(parts=(shown,), face="text-bold"),
            Paragraph(parts=tuple(one.text for one in self.assumed), face="text"),
            *(Paragraph(parts=(note.lines[0].striptags(),), face=faces.get(note.kind, "text")) for note in self.rest),
        )

    def all(self, drawing: Drawing, figures: Figures, account: Account, size_mm: float, room_mm: float) -> list[Note]:
        """Everything in order; the course filled in from the drawing and entered."""
        first = escape(self.vehicle)
        if drawing.course:
            length = self.language.distance(drawing.course, figures.distance_unit)
            account.fact(self.language.t("sheet.course_m", length=length))
            first += JOIN + self.language.html("sheet.course_m", length=length)
        packing = packed([one.text for one in self.assumed], "text", size_mm, room_mm, JOIN)
        lines = tuple(escape(JOIN).join(self.assumed[i].markup for i in line) for line in packing)
        return [
            Note(lines=(first,), kind="shown", language=self.language),
            Note(lines=lines, kind="assumed", language=self.language),
            *self.rest,
        ]


def poster_notes(
    language: Language,
    others: Sequence[Language],
    edition: Edition,
    figures: Figures,
    series: Sequence[pd.DataFrame],
    account: Account,
) -> Notes:
    """The notes of `language`; `others`: languages of the edition that have a sheet of their own (requirement B12)."""
    rows = [int(row) for one in series for row in one["row"]]
    also = [(other, account.fact(f"{other.t('page.also_in')} {other.own_name}")) for other in others]
    return Notes(
        language=language,
        vehicle=account.fact(language.text(edition.vehicle(str(series[0]["vehicle"].iloc[0])).name)),
        assumed=assumed(language, edition, series, account),
        rest=(
            *(
                Note(lines=(notice,), kind="notice", language=language)
                for notice in notices(language, figures, rows, account)
            ),
            *_spread(language, series, account),
            Note(lines=(escape(caution(language, account)),), kind="caution", language=language),
            *(Note(lines=(escape(text),), kind="also", language=other) for other, text in also),
        ),
    )


def _spread(language: Language, series: Sequence[pd.DataFrame], account: Account) -> Iterator[Note]:
    """What a whisker beside a column means, where there is one."""
    if any(one["stopping_p50_m"].notna().any() for one in series):
        key, values = spread_sentence(language)
        account.fact(language.t(key, **values))
        yield Note(lines=(language.html(key, **values),), kind="spread", language=language)
