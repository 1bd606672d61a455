"""What a cab card says in words: the small print of each side, every number in it accounted for."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Final

from markupsafe import Markup

from chartgen.edition.catalogue import GAP_RULES
from chartgen.figures.table import select
from chartgen.figures.units import LEAST_DECELERATION_MPS2, from_metres
from chartgen.language.sentences import REASONS
from chartgen.sheets import card_plan as plan
from chartgen.sheets.account import Account
from chartgen.sheets.assumed import Assumed, assumed
from chartgen.sheets.card_foot import Foot, Paragraph, sentences
from chartgen.sheets.card_rows import Series, longest, never_less
from chartgen.sheets.control import Field, caution, control_fields, notices

if TYPE_CHECKING:
    from chartgen.edition.model import Cards, Edition, RosterRow
    from chartgen.figures.record import Figures
    from chartgen.language.load import Language

SHORT_CAUTION: Final = ("caution.no_guarantee", "caution.law")
"""What the back says where the four sentences, which stand on the front, have no room a second time."""
_SIDES: Final = 2


@dataclass(frozen=True, slots=True, kw_only=True)
class Card:
    """One card to be made: a roster row in one of its languages."""

    edition: Edition
    cards: Cards
    figures: Figures
    row: RosterRow
    language: Language
    most_rows: int = plan.MOST_ROWS
    known: dict[tuple[str, str, int], Series] = field(default_factory=dict, compare=False, repr=False)
    """What was worked out already, shared by all cards of an edition: many show the same vehicles."""

    @property
    def unladen(self) -> str | None:
        """Id of the vehicle that is this one's unladen state."""
        return next((v.id for v in self.edition.vehicles if v.unladen_of == self.row.vehicle), None)

    @property
    def vehicles(self) -> tuple[str, ...]:
        """The row's vehicle, and its unladen state where the figures know one."""
        return (self.row.vehicle, self.unladen) if self.unladen else (self.row.vehicle,)

    def worked_out(self, vehicle: str, surface: str) -> Series:
        """The table's rows at the speeds the card shows, as they were worked out."""
        key = (vehicle, surface, self.most_rows)
        if key not in self.known:
            driver, grade = self.cards.driver, self.cards.grade
            found = select(self.figures, driver=driver, vehicle=vehicle, surface=surface, grade=grade)
            rows = found.iloc[list(plan.chosen(len(found), self.most_rows))]
            self.known[key] = Series(vehicle=vehicle, surface=surface, rows=rows)
        return self.known[key]

    def shown(self, surface: str) -> tuple[Series, ...]:
        """What the card prints on a surface: laden, and unladen but never less than laden."""
        laden = self.worked_out(self.row.vehicle, surface)
        return (laden, *(never_less(self.worked_out(vehicle, surface), laden) for vehicle in self.vehicles[1:]))

    @property
    def name(self) -> str:
        """The vehicle's name without its load where both loads stand on the card: what the two begin with alike."""
        names = [self.language.text(self.edition.vehicle(vehicle).name) for vehicle in self.vehicles]
        alike = names[0]
        while not all(name.startswith(alike) for name in names):
            alike = alike[:-1]
        alike = alike.rstrip(" ,;:–-(،")
        return alike if len(alike) >= min(3, len(names[0])) else names[0]


def front_foot(card: Card, account: Account) -> Foot:
    """Warnings, following gap, the bar's scale, what the totals rest on, the caution, document control."""
    language, surface = card.language, card.cards.surfaces[0]
    series = card.shown(surface)
    paragraphs = [
        _warnings(card, (surface,), account),
        _gap(card, series[0], account),
        _reading(card, series[0], account),
        _resting(card, (), account),
        sentences(caution(language, account)),
    ]
    return Foot(paragraphs=tuple(p for p in paragraphs if p.pieces), fields=_fields(card, account, page=1))


def back_foot(card: Card, account: Account, *, short: bool) -> Foot:
    """Warnings, what all figures of the card rest on, the caution (`short`: its two main sentences), control."""
    language, surfaces = card.language, card.cards.surfaces
    if short:
        said = account.fact(" ".join(account.sentence(language, language.t(key)) for key in SHORT_CAUTION))
    else:
        said = caution(language, account)
    # Fewer rows than on the front: the reader is told once more how to read between them.
    between = language.t("card.between") if card.most_rows < plan.MOST_ROWS else ""
    paragraphs = [
        _warnings(card, surfaces, account), sentences(between), _resting(card, surfaces[1:], account), sentences(said),
    ]  # fmt: skip
    return Foot(paragraphs=tuple(p for p in paragraphs if p.pieces), fields=_fields(card, account, page=2))


def _warnings(card: Card, surfaces: Sequence[str], account: Account) -> Paragraph:
    """How to use the card, then what is odd about the figures of its side."""
    language = card.language
    said = [language.t("card.read_parked"), language.t("card.not_windscreen")]
    more = less = False
    rows: list[int] = []
    reasons: dict[str, None] = {}
    for surface in surfaces:
        laden, *unladen = card.shown(surface)
        for series in (laden, *unladen):
            rows += [int(row) for row in series.rows["row"]]
            reasons |= dict.fromkeys(str(reason) for reason in series.rows["reason"] if reason)
        more = more or any(bool((one.reach > laden.reach).any()) for one in unladen)
        less = less or any(bool((one.rows["vehicle"] != one.vehicle).any()) for one in unladen)
    said += [language.t("card.unladen_more")] * more + [language.t("card.unladen_less")] * less
    found = sentences(*said, strong=True)
    warned = [(one.striptags(), one) for one in notices(language, card.figures, rows, account)]
    why = [(one.striptags(), one) for one in (_reason(card, reason, account) for reason in reasons)]
    return Paragraph(pieces=(*found.pieces, *warned, *why), strong=True)


def _reason(card: Card, reason: str, account: Account) -> Markup:
    """Why a row does not stop."""
    language, values = card.language, {}
    if reason == "too-little-friction":
        feet = card.edition.distance_unit == "ft"
        least = float(from_metres(LEAST_DECELERATION_MPS2, "ft")) if feet else LEAST_DECELERATION_MPS2
        values = {"least": account.fact(language.deceleration(least, "ft/s²" if feet else "m/s²"))}
    return language.html(REASONS[reason], **values)


def _gap(card: Card, laden: Series, account: Account) -> Paragraph:
    """The following gap: its seconds where they are the same at all speeds, and the rule by name."""
    language, rows = card.language, laden.rows
    rule = account.fact(language.text(GAP_RULES[card.cards.gap].name)) + "."
    seconds = rows["printed_gap_s"]
    if seconds.nunique() > 1:
        # One number would be too few at some speed: the column has them all.
        return sentences(f"{language.t('card.gap')}: {rule}", language.t("card.gap_more"))
    account.enter(int(rows["row"].iloc[0]), "printed_gap_s", language.tag)
    value = {"seconds": language.seconds(float(seconds.iloc[0]))}
    said = [(f"{language.t('card.gap')}:", Markup.escape(f"{language.t('card.gap')}:"))]
    said.append((language.t("card.gap_rule", **value), language.html("card.gap_rule", **value)))
    said.append((rule, Markup.escape(rule)))
    return Paragraph(pieces=tuple(said))


def _reading(card: Card, laden: Series, account: Account) -> Paragraph:
    """How to read the bars and the rows."""
    language, between = card.language, card.language.t("card.between")
    fullest = longest(laden)
    if fullest is None:
        return sentences(between)
    account.enter(int(laden.rows["row"].iloc[fullest]), "printed_stopping", language.tag)
    value = {"distance": language.distance(float(laden.printed[fullest]), card.edition.distance_unit)}
    scale = (language.t("card.scale", **value), language.html("card.scale", **value))
    line = language.t("card.line")
    return Paragraph(pieces=((line, Markup.escape(line)), scale, (between, Markup.escape(between))))


def _resting(card: Card, others: Sequence[str], account: Account) -> Paragraph:
    """What the side rests on: the loaded vehicle on the first surface in full; then, behind the name of what is
    different, what else holds for the empty one and on the other surfaces."""
    language, first = card.language, card.cards.surfaces[0]
    full = assumed(language, card.edition, [card.worked_out(card.row.vehicle, first).rows], account)
    parts = [(one.text, one.markup) for one in full]
    differ = [(language.t("word.unladen"), card.worked_out(vehicle, first)) for vehicle in card.vehicles[1:]]
    for surface in others:
        name = account.fact(language.text(card.edition.surface(surface).name))
        differ.append((name, card.worked_out(card.row.vehicle, surface)))
    for name, series in differ:
        changed = _changed(card, series, {text for text, _ in parts}, name, account)
        if changed:
            head, *rest = changed
            parts.append((f"{name} – {head.text}", Markup("{} – {}").format(name, head.markup)))
            parts += [(one.text, one.markup) for one in rest]
    return Paragraph(pieces=tuple(parts), whole=True)


def _changed(card: Card, series: Series, known: set[str], name: str, account: Account) -> Iterable[Assumed]:
    """The fragments of other rows that are not among the `known`; what only repeats their name or load is left out.

    Each is entered as it is printed: entering the whole line would account for numbers that do not stand there.
    """
    language = card.language
    repeated = {language.t("assume.surface", name=name), language.t("assume.load", state=name)}
    fragments = assumed(language, card.edition, [series.rows], Account(card.figures))
    found = [one for one in fragments if one.text not in known | repeated]
    for one in found:
        account.fact(one.text)
    return found


def _fields(card: Card, account: Account, *, page: int) -> tuple[Field, ...]:
    """Whose card it is, then document control."""
    language, row = card.language, card.row
    own = [
        Field(
            key,
            ((language.tag, language.direction, language.t(f"card.{key}")),),
            (Markup.escape(account.fact(value)),),
        )
        for key, value in (("depot", row.depot), ("holder", row.holder))
        if value
    ]
    fields = control_fields(card.edition, (language,), account, copy_no=row.copy_no, page=page, pages=_SIDES)
    return (*own, *fields)
