"""Cab cards: one roster row becomes a card in each of its languages, four cards to a sheet, backs behind their fronts.

The front answers at a glance: how far loaded, how far empty, how many seconds behind the one in front. The back holds
the parts and the other surfaces. Both say what they rest on. Numerals first, near-black on white, no colour that
carries meaning.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

from markupsafe import Markup

from chartgen.edition.model import Cards, Edition, RosterRow
from chartgen.errors import EditionFaults, Fault
from chartgen.figures.record import Figures
from chartgen.language.load import Language
from chartgen.sheets import card_foot
from chartgen.sheets import card_plan as plan
from chartgen.sheets.account import Account
from chartgen.sheets.card_foot import Foot
from chartgen.sheets.card_rows import Series
from chartgen.sheets.card_table import (
    Block,
    Table,
    as_high,
    front_table,
    parts_table,
    set_table,
    surfaces_table,
)
from chartgen.sheets.card_words import Card, back_foot, front_foot
from chartgen.sheets.imposition import Grid, grid
from chartgen.sheets.sheet import Sheet
from chartgen.sheets.template import fill

PATH = "sheets/cab-cards{}.pdf"
JOINT = " · "
_SEVERAL = 2


@dataclass(frozen=True, slots=True, kw_only=True)
class Side:
    """One side of one card, ready for the template; `left` and `top` of the card on its page. `heading`: vehicle id,
    vehicle, surface; `heading_mm`: sizes of the first two together and of the third."""

    left: float
    top: float
    language: Language
    heading: tuple[str, str, str]
    heading_mm: tuple[float, float]
    blocks: tuple[Block, ...]
    foot: Foot
    paragraphs: tuple[tuple[bool, tuple[Markup, ...]], ...]
    """(strong, lines)."""
    small_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Page:
    """A front or a back of a sheet. `imprint`: a line for whoever prints it, (language, text, left), once a column."""

    sides: tuple[Side, ...]
    imprint: tuple[tuple[Language, str, float], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Draft:
    """One side of one card before the sizes are settled."""

    card: Card
    tables: tuple[Table, ...]
    foot: Foot


@dataclass(frozen=True, slots=True, kw_only=True)
class _Task:
    """One document: the cards of a depot."""

    edition: Edition
    cards: Cards
    grid: Grid
    deck: tuple[Card, ...]

    @property
    def inner_mm(self) -> float:
        return self.cards.size.width_mm - 2 * plan.MARGIN_MM

    @property
    def foot_mm(self) -> float:
        """Where the small print ends, from the card's top."""
        return self.cards.size.height_mm - plan.MARGIN_MM


def cards(edition: Edition, figures: Figures, languages: Sequence[Language]) -> tuple[Sheet, ...]:
    """The edition's cab cards, one document a depot: fronts and backs in turn, to be turned over the long edge.

    A roster row with two languages gives two cards. Nothing where the edition asks for no cards. Raises EditionFaults
    where the figures would be too small to read in a cab.
    """
    ordered = edition.cards
    imposed = grid(ordered.size, ordered.sheet) if ordered else None
    if ordered is None or imposed is None:
        return ()
    by_tag = {language.tag: language for language in languages}
    depots: dict[str, list[RosterRow]] = {}
    for row in ordered.roster:
        depots.setdefault(row.depot, []).append(row)
    paths = _paths(tuple(depots))
    sheets = []
    known: dict[tuple[str, str, int], Series] = {}
    for depot, rows in depots.items():
        deck = tuple(
            Card(edition=edition, cards=ordered, figures=figures, row=row, language=by_tag[tag], known=known)
            for row in rows
            for tag in row.languages
        )
        task = _Task(edition=edition, cards=ordered, grid=imposed, deck=deck)
        sheets.append(_document(task, figures, languages, paths[depot]))
    return tuple(sheets)


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


def _document(task: _Task, figures: Figures, languages: Sequence[Language], path: str) -> Sheet:
    front, first = Account(figures), languages[0]
    fronts = _set(task, _fronts(task, front), 0, front)
    drafts, back = _fitting_backs(task, figures)
    backs = _set(task, drafts, 1, back)
    pages = [page for pair in zip(fronts, backs, strict=True) for page in pair]
    title = JOINT.join(filter(None, (first.t("sheet.cards"), task.deck[0].row.depot, first.text(task.edition.title))))
    html = fill(
        "cards.html", edition=task.edition, title=title, first=first, grid=task.grid, size=task.cards.size, plan=plan,
        foot=card_foot, pages=[_page(task, languages, sides, number) for number, sides in enumerate(pages)],
    )  # fmt: skip
    return Sheet(
        path=path,
        title=title,
        lang=first.tag,
        html=html,
        width_mm=task.grid.sheet.width_mm,
        height_mm=task.grid.sheet.height_mm,
        pages=len(pages),
        inked=(*front.inked, *back.inked),
        facts=(*front.facts, *back.facts),
        sentences=tuple(front.sentences | back.sentences),
    )


def _page(task: _Task, languages: Sequence[Language], sides: Sequence[Side], number: int) -> Page:
    """The printer's line stands in one language over each column of cards."""
    key = "card.back" if number % 2 else "card.front"
    imprint = tuple(
        (language, f"{language.t(key)}{JOINT}{language.t('sheet.two_sided')}", task.grid.front(column)[0])
        for column, language in enumerate(languages[: task.grid.columns])
    )
    return Page(sides=tuple(sides), imprint=imprint)


def _fronts(task: _Task, account: Account) -> list[_Draft]:
    return _level(
        task,
        lambda card: (
            front_table(card.language, task.edition, card.shown(task.cards.surfaces[0]), task.cards.size.width_mm),
        ),
        lambda card: front_foot(card, account),
    )


def _backs(task: _Task, account: Account, *, short: bool) -> list[_Draft]:
    first, *others = task.cards.surfaces
    width = task.cards.size.width_mm

    def tables(card: Card) -> tuple[Table, ...]:
        parts = parts_table(card.language, task.edition, card.shown(first), width)
        if not others:
            return (parts,)
        series = [one for surface in others for one in card.shown(surface)]
        return parts, surfaces_table(card.language, task.edition, series, width)

    return _level(task, tables, lambda card: back_foot(card, account, short=short))


def _level(task: _Task, tables: Callable[[Card], tuple[Table, ...]], foot: Callable[[Card], Foot]) -> list[_Draft]:
    """Drafts of one side of all cards, the heads of their tables equally high."""
    planned = zip(*(as_high(column) for column in zip(*(tables(card) for card in task.deck), strict=True)), strict=True)
    return [_Draft(card=card, tables=own, foot=foot(card)) for card, own in zip(task.deck, planned, strict=True)]


def _tops(draft: _Draft, side: int, row_mm: float) -> list[float]:
    """Top of each table, then the foot of the last, in mm from the card's top."""
    tops = [plan.BACK_TOP_MM if side else plan.FRONT_TOP_MM]
    for table in draft.tables:
        tops.append(tops[-1] + table.head_mm + row_mm * len(table.wanted[0].rows) + plan.BACK_GAP_MM)
    tops[-1] -= plan.BACK_GAP_MM
    return tops


def _setting(task: _Task, drafts: Sequence[_Draft], side: int) -> plan.Setting | None:
    """Small print and rows of one side of all cards; None where there is no room for both."""
    above = _tops(drafts[0], side, 0.0)[-1]
    rows = sum(len(table.wanted[0].rows) for table in drafts[0].tables)
    feet: dict[str, list[Foot]] = {}
    for draft in drafts:
        feet.setdefault(draft.card.language.tag, []).append(draft.foot)
    heights = {tag: card_foot.tallest(own, task.inner_mm) for tag, own in feet.items()}
    free = task.foot_mm - plan.FOOT_GAP_MM - above
    return plan.settled(heights, free, rows, plan.LEAST_DIGIT_MM if side else plan.GLANCE_DIGIT_MM)


def _fitting_backs(task: _Task, figures: Figures) -> tuple[list[_Draft], Account]:
    """The backs with what they enter: as many speeds as the fronts and the whole caution where there is room, else the
    short caution, else fewer speeds."""
    drafts, account = _backs_of(task, figures, plan.MOST_ROWS, short=False)
    for rows in range(plan.MOST_ROWS, plan.FEWEST_ROWS - 1, -1):
        if _setting(task, drafts, 1):
            break
        drafts, account = _backs_of(task, figures, rows, short=True)
    return drafts, account


def _backs_of(task: _Task, figures: Figures, most_rows: int, *, short: bool) -> tuple[list[_Draft], Account]:
    # An account a try: only what is printed may be entered.
    account = Account(figures)
    tried = replace(task, deck=tuple(replace(card, most_rows=most_rows) for card in task.deck))
    return _backs(tried, account, short=short), account


def _set(task: _Task, drafts: Sequence[_Draft], side: int, account: Account) -> list[list[Side]]:
    """The sides on their pages, four (or as many as a sheet holds) to each."""
    setting = _setting(task, drafts, side)
    if setting is None:
        raise EditionFaults((_fault(task, "its small print leaves no room for them"),))
    pages: list[list[Side]] = [[] for _ in range(-(-len(drafts) // task.grid.places))]
    for number, draft in enumerate(drafts):
        sheet, index = divmod(number, task.grid.places)
        left, top = task.grid.back(index) if side else task.grid.front(index)
        made = _side(task, draft, side, setting, account, (2 * sheet + side + 1, left, top))
        smallest = min(block.digit_mm for block in made.blocks)
        if smallest < plan.LEAST_DIGIT_MM - 1e-6:
            raise EditionFaults((_fault(task, f"they would be {smallest:.1f} mm high"),))
        pages[sheet].append(made)
    return pages


def _side(
    task: _Task, draft: _Draft, side: int, setting: plan.Setting, account: Account, place: tuple[int, float, float]
) -> Side:
    card, language = draft.card, draft.card.language
    blocks = tuple(
        set_table(
            table, language, task.edition, account, place, task.cards.size.width_mm, top_mm=top, row_mm=setting.row_mm
        )
        for table, top in zip(draft.tables, _tops(draft, side, setting.row_mm)[:-1], strict=True)
    )
    # The back names its surfaces over their figures.
    surface = "" if side else language.text(task.edition.surface(task.cards.surfaces[0]).name)
    heading = (account.fact(card.row.vehicle_id), account.fact(card.name), account.fact(surface))
    small = setting.small_mm[language.tag]
    return Side(
        left=place[1], top=place[2], language=language, heading=heading, blocks=blocks, foot=draft.foot,
        heading_mm=(
            plan.shrunk(" ".join(heading[:2]), "text-bold", plan.NAME_MM, task.inner_mm),
            plan.shrunk(surface, "text-bold", plan.SURFACE_MM, task.inner_mm),
        ),
        paragraphs=tuple(
            (paragraph.strong, paragraph.lines(small, task.inner_mm)) for paragraph in draft.foot.paragraphs
        ),
        small_mm=small,
    )  # fmt: skip


def _fault(task: _Task, problem: str) -> Fault:
    given = f"{len(task.cards.surfaces)} surfaces, {len(task.edition.speeds)} speeds"
    return Fault(
        task.edition.file, "cards.surfaces", f"the digits on a card have no room beside all this: {problem}",
        f"fewer surfaces, so that the digits are {plan.LEAST_DIGIT_MM:g} mm high", given,
    )  # fmt: skip
