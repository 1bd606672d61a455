"""Posters of the layout *columns*: a claim, one drawing, its table on the same grid, what it rests on, who answers."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from markupsafe import Markup

from chartgen.charts.columns import finish as finish_drawing
from chartgen.charts.columns import plan as plan_drawing
from chartgen.charts.describe import alt_text
from chartgen.charts.drawing import Direction, Drawing
from chartgen.charts.inks import Palette, palette
from chartgen.edition.model import Edition, Poster
from chartgen.errors import EditionFaults, Fault
from chartgen.figures.record import Figures
from chartgen.figures.table import select
from chartgen.language.headline import headline_pieces, headline_plain
from chartgen.language.load import Language
from chartgen.sheets.account import Account
from chartgen.sheets.control import control_fields, once
from chartgen.sheets.fitting import Headline, fit_headline
from chartgen.sheets.markup import headline_block, placed_labels, reading_order
from chartgen.sheets.poster_notes import poster_notes
from chartgen.sheets.poster_plan import Block, PosterPlan, mirrored, plan
from chartgen.sheets.poster_table import poster_table, row_count
from chartgen.sheets.qr import qr
from chartgen.sheets.sheet import Sheet
from chartgen.sheets.template import fill

if TYPE_CHECKING:
    import pandas as pd

READING_RATIO = 120
"""Reading distance over digit height for easy reading (requirement P6)."""
_HEADLINE_MM = 20.0
_HEADLINE_STEPS = tuple(0.95**i for i in range(18))
_ENOUGH = 0.6
"""A headline smaller than this part of its largest size gets paper of its own above the drawing."""
_MOST_HEADLINE = 0.36
"""Part of the height between brand and table that a headline with paper of its own may take."""
_LATER_SCALE = 0.72
"""Size of the second language's headline where the edition favours the first."""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Task:
    """One sheet to be made: a poster in these languages. `everyone`: all languages of the edition; sheets apart share
    one drawing, with room for each."""

    edition: Edition
    figures: Figures
    poster: Poster
    languages: tuple[Language, ...]
    everyone: tuple[Language, ...]
    series: tuple[pd.DataFrame, ...]
    inks: Palette

    @property
    def direction(self) -> Direction:
        return self.languages[0].direction

    @property
    def others(self) -> tuple[Language, ...]:
        return tuple(language for language in self.everyone if language not in self.languages)

    @property
    def title(self) -> str:
        return headline_plain(self.languages[0], self.edition, self.figures, self.poster)


def posters(edition: Edition, figures: Figures, languages: Sequence[Language]) -> tuple[Sheet, ...]:
    """Every poster of the edition: one sheet in all languages, or one a language.

    Raises EditionFaults, all at once, where a drawing's totals are too small for the reading distance asked for.
    """
    sheets: list[Sheet] = []
    faults: list[Fault] = []
    for poster in edition.posters:
        for setting in [tuple(languages)] if poster.together else [(language,) for language in languages]:
            task = _Task(
                edition=edition, figures=figures, poster=poster, languages=setting, everyone=tuple(languages),
                series=_series(figures, poster), inks=palette(edition.palette),
            )  # fmt: skip
            try:
                sheets.append(_sheet(task))
            except EditionFaults as found:
                faults.extend(fault for fault in found.faults if fault not in faults)
    if faults:
        raise EditionFaults(tuple(faults))
    return tuple(sheets)


def _series(figures: Figures, poster: Poster) -> tuple[pd.DataFrame, ...]:
    """The rows shown, a slice a driver, in speed order."""
    show = poster.show
    found = []
    for driver in show.drivers:
        rows = select(figures, driver=driver, vehicle=show.vehicle, surface=show.surface, grade=show.grade)
        found.append(rows if show.speeds is None else rows[rows["speed"].isin(show.speeds)])
    return tuple(found)


def _sheet(task: _Task) -> Sheet:
    edition, account = task.edition, Account(task.figures)
    address = edition.web_address
    code = qr(address) if address else None
    fields = control_fields(edition, task.languages, account, copy_no=None, page=1, pages=1)
    notes = [
        poster_notes(language, task.others, edition, task.figures, task.series, account) for language in task.languages
    ]
    room = plan(
        task.poster.paper,
        notes=[own.measured for own in notes],
        fields=fields,
        table_rows=row_count(task.series, edition),
        qr_side=code.side / code.modules if code else None,
    )
    headline_top = room.drawing.top
    if task.direction == "rtl":
        room = mirrored(room)
    pieces = [headline_pieces(language, edition, task.figures, task.poster) for language in task.languages]
    drawing, room, fitted = _fit(task, room, ["".join(piece.text for piece in own) for own in pieces])
    _check_reading_distance(task, drawing)
    values: dict[str, Any] = {
        "labels": placed_labels(drawing, room.drawing, task.inks, account),
        "table": poster_table(edition, task.languages, task.series, drawing, room, account),
        "headlines": [
            headline_block(fitted, block, own, task.languages[block], account, top_mm=headline_top)
            for block, own in enumerate(pieces)
        ],
        "notes": [
            own.all(drawing, task.figures, account, room.sizes.note, block.width)
            for own, block in zip(notes, room.notes, strict=True)
        ],
        "publishers": once(
            (language.tag, language.direction, language.text(edition.publisher)) for language in task.languages
        ),
        "alternatives": [(language, _alternative(task, language)) for language in task.languages],
        "qr_text": task.languages[0].t("sheet.alt_qr", address=address) if address else "",
        # Attributes for the engine and no words: safe by construction, made of path data and colours.
        "marks": Markup(drawing.marks_svg.replace("<svg ", '<svg aria-hidden="true" ', 1)),  # noqa: S704
        "start": "left" if task.direction == "ltr" else "right",
        "end": "right" if task.direction == "ltr" else "left",
    }
    for publisher in values["publishers"]:
        account.fact(publisher[2])
    for language, own in zip(task.languages, pieces, strict=True):
        account.sentence(language, "".join(piece.text for piece in own))
    html = fill(
        "poster.html", task=task, edition=edition, room=room, drawing=drawing, code=code, fields=fields, inks=task.inks,
        sizes=room.sizes, **values,
    )  # fmt: skip
    return _made(task, html, account)


def _made(task: _Task, html: str, account: Account) -> Sheet:
    suffix = f"-{task.languages[0].tag}" if task.others else ""
    return Sheet(
        path=f"sheets/{task.poster.id}{suffix}.pdf",
        title=task.title,
        lang=task.languages[0].tag,
        html=html,
        width_mm=task.poster.paper.width_mm,
        height_mm=task.poster.paper.height_mm,
        pages=1,
        inked=account.inked,
        facts=tuple(account.facts),
        sentences=tuple(account.sentences),
    )


def _fit(task: _Task, room: PosterPlan, headlines: Sequence[str]) -> tuple[Drawing, PosterPlan, Headline]:
    """The drawing as tall as may be, with the headline in its free paper; where that is too small, the headline gets
    paper of its own above the drawing, in thirds of what it needs there, so that it is no more than it takes."""
    unit = room.sizes.unit
    sizes = [_HEADLINE_MM * unit * step for step in _HEADLINE_STEPS]
    clear = 4 * unit
    later = 1.0 if task.edition.emphasis == "equal" else _LATER_SCALE
    against = [i for i, language in enumerate(task.languages) if language.direction != task.direction]
    free = [(0.0, room.drawing.width, math.inf)]
    tried = (
        fit_headline(headlines, free, top_mm=0, sizes_mm=[size], clear_mm=0, later_scale=later, against=against)
        for size in sizes
    )
    fits = (found for found in tried if found is not None and found.bottom_mm <= _MOST_HEADLINE * room.drawing.height)
    alone = next(fits, None)
    if alone is None:
        raise EditionFaults((_headline_fault(task, headlines),))
    smallest = min(_ENOUGH * sizes[0], alone.lines[0].size_mm)
    for thirds in range(4):
        lowered = (alone.bottom_mm + clear) * thirds / 3
        block = replace(room.drawing, top=room.drawing.top + lowered, height=room.drawing.height - lowered)
        drawing = _drawing(task, block)
        skyline = [(start, end, y + lowered) for start, end, y in reading_order(drawing)]
        fitted = fit_headline(
            headlines, skyline, top_mm=0, sizes_mm=[size for size in sizes if size >= smallest], clear_mm=clear,
            later_scale=later, against=against,
        )  # fmt: skip
        if fitted is not None:
            return drawing, replace(room, drawing=block), fitted
    raise EditionFaults((_headline_fault(task, headlines),))


def _drawing(task: _Task, block: Block) -> Drawing:
    show = task.poster.show
    made = plan_drawing(
        task.series,
        languages=task.everyone,
        palette=task.inks,
        width_mm=block.width,
        height_mm=block.height,
        distance_unit=task.edition.distance_unit,
        speed_unit=task.edition.speed_unit,
        names_of_series=[task.edition.driver(driver).name for driver in show.drivers],
        together=not task.others,
    )
    return finish_drawing(
        made, name=task.poster.id, languages=task.languages, palette=task.inks, direction=task.direction
    )


def _alternative(task: _Task, language: Language) -> str:
    """The drawing in words, in one language."""
    return alt_text(
        task.series,
        language=language,
        speed_unit=task.edition.speed_unit,
        distance_unit=task.edition.distance_unit,
        names_of_series=[task.edition.driver(driver).name for driver in task.poster.show.drivers],
    )


def _check_reading_distance(task: _Task, drawing: Drawing) -> None:
    """Refuse a poster whose totals cannot be read from as far as the edition asks (requirement P6)."""
    poster, digit = task.poster, drawing.total_digit_mm
    far = digit * READING_RATIO / 1000
    if not digit or far >= poster.read_from_m - 1e-9:
        return
    number = task.edition.posters.index(poster) + 1
    problem = (
        f"the totals' digits are {digit:.1f} mm high on {poster.paper.name}: easy to read from {far:.1f} m, "
        f"not from {poster.read_from_m:g} m ({poster.read_from_m * 1000 / READING_RATIO:.0f} mm are needed)"
    )
    allowed = f"at most {int(far * 10) / 10:g} m, a larger paper, or fewer columns (show.speeds, show.driver)"
    place = f"poster[{number}].read_from"
    raise EditionFaults((Fault(task.edition.file, place, problem, allowed, f"{poster.read_from_m:g} m"),))


def _headline_fault(task: _Task, headlines: Sequence[str]) -> Fault:
    number = task.edition.posters.index(task.poster) + 1
    problem = f"the headline is too long for {task.poster.paper.name}"
    longest = max(headlines, key=len)
    return Fault(task.edition.file, f"poster[{number}].headline", problem, "a shorter sentence", longest)
