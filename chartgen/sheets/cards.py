"""Cab cards: one roster row becomes a card in each of its languages, four cards to a sheet, backs behind their fronts.

The front answers at a glance: how far loaded, how far empty, how many seconds behind the one in front. The back holds
the parts, the other surfaces and what it all rests on. Numerals first, near-black on white, no
colour that carries meaning.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from markupsafe import Markup

from chartgen.edition.catalogue import GAP_RULES
from chartgen.edition.model import Cards, Edition, RosterRow
from chartgen.figures.record import Figures
from chartgen.figures.table import select
from chartgen.language.load import Language
from chartgen.sheets import card_plan as plan
from chartgen.sheets.account import Account
from chartgen.sheets.assumed import Assumed, assumed
from chartgen.sheets.card_table import Block, front_block, parts_block, surfaces_block
from chartgen.sheets.control import Field, caution, control_fields, notices
from chartgen.sheets.fitting import packed
from chartgen.sheets.imposition import Grid, grid
from chartgen.sheets.sheet import Sheet
from chartgen.sheets.template import fill

if TYPE_CHECKING:
    import pandas as pd

PATH = "sheets/cab-cards{}.pdf"
_SEVERAL = 2
SMALL_MM = 2.2
"""Running text and document control: 6.2 pt, held in the hand."""
JOINT = " · "
_LEAST_NAME = 2
_JOINT = Markup(JOINT)  # noqa: S704 - our own constant


@dataclass(frozen=True, slots=True, kw_only=True)
class Side:
    """One side of one card, ready for the template; `left` and `top` of the card on its page."""

    left: float
    top: float
    language: Language
    heading: tuple[str, str, str]
    blocks: tuple[Block, ...]
    lines: tuple[tuple[str, tuple[Markup, ...]], ...]
    """Paragraphs as (class, lines)."""
    fields: tuple[Field, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Task:
    edition: Edition
    cards: Cards
    figures: Figures
    account: Account
    row: RosterRow
    language: Language
    grid: Grid
    index: int
    """Place of the card on its sheet, from 0."""
    sheet: int
    """Number of the sheet, from 0; its front is page 2 * sheet + 1, its back the next."""

    @property
    def unladen(self) -> str | None:
        found = (v.id for v in self.edition.vehicles if v.unladen_of == self.row.vehicle)
        return next(found, None)

    def rows(self, vehicle: str, surface: str) -> pd.DataFrame:
        """The table's rows of one vehicle on one surface, at the speeds the card shows."""
        found = select(self.figures, driver=self.cards.driver, vehicle=vehicle, surface=surface, grade=self.cards.grade)
        return found.iloc[list(plan.chosen(len(found)))]


def cards(edition: Edition, figures: Figures, languages: Sequence[Language]) -> tuple[Sheet, ...]:
    """The edition's cab cards, one document a depot: fronts and backs in turn, to be turned over the long edge.

    A roster row with two languages gives two cards. Nothing where the edition asks for no cards.
    """
    if edition.cards is None:
        return ()
    depots: dict[str, list[RosterRow]] = {}
    for row in edition.cards.roster:
        depots.setdefault(row.depot, []).append(row)
    paths = _paths(tuple(depots))
    made = (_document(edition, figures, languages, rows, paths[depot]) for depot, rows in depots.items())
    return tuple(sheet for sheet in made if sheet is not None)


def _paths(depots: Sequence[str]) -> dict[str, str]:
    """A file a depot, named after it; the plain name where there is only one."""
    if len(depots) < _SEVERAL:
        return dict.fromkeys(depots, PATH.format(""))
    found: dict[str, str] = {}
    for number, depot in enumerate(depots, 1):
        name = re.sub(
            r"[^a-z0-9]+", "-", unicodedata.normalize("NFKD", depot).lower().encode("ascii", "ignore").decode()
        )
        path = PATH.format(f"-{name.strip('-')}" if name.strip("-") else f"-{number}")
        found[depot] = path if path not in found.values() else PATH.format(f"-{number}")
    return found


def _document(
    edition: Edition, figures: Figures, languages: Sequence[Language], roster: Sequence[RosterRow], path: str
) -> Sheet | None:
    ordered = edition.cards
    imposed = grid(ordered.size, ordered.sheet) if ordered else None
    if ordered is None or imposed is None:
        return None
    by_tag = {language.tag: language for language in languages}
    wanted = [(row, by_tag[tag]) for row in roster for tag in row.languages]
    account = Account(figures)
    pages: list[list[Side]] = [[] for _ in range(2 * -(-len(wanted) // imposed.places))]
    for number, (row, language) in enumerate(wanted):
        sheet, index = divmod(number, imposed.places)
        task = _Task(
            edition=edition, cards=ordered, figures=figures, account=account, row=row, language=language,
            grid=imposed, index=index, sheet=sheet,
        )  # fmt: skip
        pages[2 * sheet].append(_front(task))
        pages[2 * sheet + 1].append(_back(task))
    first = languages[0]
    title = JOINT.join(filter(None, (first.t("sheet.cards"), roster[0].depot, first.text(edition.title))))
    html = fill(
        "cards.html", edition=edition, title=title, first=first, pages=pages, grid=imposed, small=SMALL_MM,
        size=ordered.size, margin=plan.MARGIN_MM,
    )  # fmt: skip
    return Sheet(
        path=path,
        title=title,
        lang=first.tag,
        html=html,
        width_mm=imposed.sheet.width_mm,
        height_mm=imposed.sheet.height_mm,
        pages=len(pages),
        inked=account.inked,
        facts=tuple(account.facts),
        sentences=tuple(account.sentences),
    )


def _front(task: _Task) -> Side:
    language, account = task.language, task.account
    surface = task.cards.surfaces[0]
    left, top = task.grid.front(task.index)
    place = (2 * task.sheet + 1, left, top)
    laden = task.rows(task.row.vehicle, surface)
    unladen = task.rows(task.unladen, surface) if task.unladen else None
    block = front_block(language, task.edition, laden, unladen, account, place, task.cards.size.width_mm)
    gap = language.t("card.gap_rule", seconds=language.seconds(float(laden["printed_gap_s"].iloc[0])))
    account.enter(int(laden["row"].iloc[0]), "printed_gap_s", language.tag)
    rule = account.fact(language.text(GAP_RULES[task.cards.gap].name))
    lines = [
        ("strong", _one((language.t("card.read_parked"), language.t("card.not_windscreen")))),
        ("", _one((f"{language.t('card.gap')}: {gap}", f"{rule}."), joint=" ")),
        ("", _one((language.t("card.line"), language.t("card.between")), joint=" ")),
        ("", (Markup.escape(caution(language, account)),)),
    ]
    rows = [int(row) for rows in (laden, unladen) if rows is not None for row in rows["row"]]
    warned = notices(language, task.figures, rows, account)
    if unladen is not None and bool((unladen["stopping_distance_m"].to_numpy() > laden["stopping_distance_m"]).any()):
        lines.insert(1, ("strong", (Markup.escape(language.t("card.unladen_more")),)))
    lines[1:1] = [("strong", (one,)) for one in warned]
    return _side(task, left, top, surface, (block,), lines, page=1)


def _back(task: _Task) -> Side:
    language, account = task.language, task.account
    first, others = task.cards.surfaces[0], task.cards.surfaces[1:]
    left, top = task.grid.back(task.index)
    place = (2 * task.sheet + 2, left, top)
    vehicles = [task.row.vehicle, *([task.unladen] if task.unladen else [])]
    width = task.cards.size.width_mm
    series = [task.rows(vehicle, first) for vehicle in vehicles]
    blocks = [parts_block(language, task.edition, series, account, place, width)]
    shown: list[pd.DataFrame] = []
    if others:
        pairs = [(surface, vehicle) for surface in others[:2] for vehicle in vehicles]
        shown = [task.rows(vehicle, surface) for surface, vehicle in pairs]
        blocks.append(
            surfaces_block(language, task.edition, shown, account, place, width, below_mm=blocks[0].bottom_mm)
        )
    lines: list[tuple[str, tuple[Markup, ...]]] = [("", _resting(task, series, others[:2]))]
    rows = [int(row) for rows in (*series, *shown) for row in rows["row"]]
    lines += [("strong", (one,)) for one in notices(language, task.figures, rows, account)]
    lines.append(("", (Markup.escape(caution(language, account)),)))
    return _side(task, left, top, first, tuple(blocks), lines, page=2)


def _resting(task: _Task, series: Sequence[pd.DataFrame], others: Sequence[str]) -> tuple[Markup, ...]:
    """What the card rests on, in whole lines: the loaded vehicle on the first surface in full; then, behind the name of
    what is different, what else holds for the empty one and on the other surfaces."""
    language, room = task.language, task.cards.size.width_mm - 2 * plan.MARGIN_MM
    full = assumed(language, task.edition, series[:1], task.account)
    parts = [(one.text, one.markup) for one in full]
    differ = [(language.t("word.unladen"), rows) for rows in series[1:]]
    for surface in others:
        name = task.account.fact(language.text(task.edition.surface(surface).name))
        differ.append((name, task.rows(task.row.vehicle, surface)))
    for name, rows in differ:
        changed = _changed(task, rows, {text for text, _ in parts}, name)
        if changed:
            head, *rest = changed
            parts.append((f"{name} – {head.text}", Markup("{} – {}").format(name, head.markup)))
            parts += [(one.text, one.markup) for one in rest]
    laid = packed([text for text, _ in parts], "text", SMALL_MM, room, JOINT)
    return tuple(_JOINT.join(parts[i][1] for i in line) for line in laid)


def _changed(task: _Task, rows: pd.DataFrame, known: set[str], name: str) -> list[Assumed]:
    """The fragments of other rows that are not among the `known`; what only repeats their name or load is left out.

    Each is entered as it is printed: entering the whole line would account for numbers that do not stand there.
    """
    language = task.language
    repeated = {language.t("assume.surface", name=name), language.t("assume.load", state=name)}
    found = [
        one
        for one in assumed(language, task.edition, [rows], Account(task.figures))
        if one.text not in known | repeated
    ]
    for one in found:
        task.account.fact(one.text)
    return found


def _one(sentences: Sequence[str], joint: str = " ") -> tuple[Markup, ...]:
    return (Markup.escape(joint.join(sentences)),)


def _side(
    task: _Task, left: float, top: float, surface: str, blocks: tuple[Block, ...],
    lines: Sequence[tuple[str, tuple[Markup, ...]]], *, page: int,
) -> Side:  # fmt: skip
    language, edition = task.language, task.edition
    name = _vehicle_name(task)
    # The back names its surfaces over their figures.
    shown = language.text(edition.surface(surface).name) if page == 1 else ""
    task.account.fact(task.row.vehicle_id)
    task.account.fact(name)
    task.account.fact(shown)
    fields = control_fields(edition, (language,), task.account, copy_no=task.row.copy_no, page=page, pages=2)
    extra = [
        Field(key, ((language.tag, language.direction, language.t(f"card.{key}")),), (Markup.escape(value),))
        for key, value in (("depot", task.row.depot), ("holder", task.row.holder))
        if value
    ]
    for value in (task.row.depot, task.row.holder):
        task.account.fact(value)
    heading = (task.row.vehicle_id, name, shown)
    return Side(
        left=left, top=top, language=language, heading=heading, blocks=blocks, lines=tuple(lines),
        fields=(*extra, *fields),
    )  # fmt: skip


def _vehicle_name(task: _Task) -> str:
    """The vehicle's name without its load where both loads stand on the card: what the two names begin with alike."""
    names = [task.language.text(task.edition.vehicle(task.row.vehicle).name)]
    if task.unladen:
        names.append(task.language.text(task.edition.vehicle(task.unladen).name))
    alike = names[0]
    while not all(name.startswith(alike) for name in names):
        alike = alike[:-1]
    alike = alike.rstrip(" ,;:–-(،")
    return alike if len(alike) > _LEAST_NAME else names[0]
