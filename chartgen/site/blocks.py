"""A block: the chart of one vehicle, surface and slope, its tables, and what the reader must be told about them."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Final

from markupsafe import Markup

from chartgen.language.load import Language
from chartgen.language.sentences import notice_sentence_html
from chartgen.site.drawings import Drawings, Figure
from chartgen.site.edition_site import Group, Site, grade_id, named, slope
from chartgen.site.tables import Table, tables


@dataclass(frozen=True, slots=True, kw_only=True)
class Block:
    """`title`: the slope, where its section has several."""

    id: str
    title: Markup | None
    notices: tuple[Markup, ...]
    figures: tuple[Figure, ...]
    tables: tuple[Table, ...]
    side_by_side: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Section:
    """One vehicle of a surface's page, or one surface of a vehicle's page."""

    id: str
    title: Markup
    blocks: tuple[Block, ...]


_NARROW_COLUMNS: Final = 7
"""Up to so many columns two tables stand side by side on a wide screen."""


class Blocks:
    """The blocks of one language: each stands on its surface's page and on its vehicle's, and is made once."""

    def __init__(self, site: Site, language: Language, drawings: Drawings) -> None:
        self._site, self._language, self._drawings = site, language, drawings
        self._made: dict[tuple[str, str, float], Block] = {}

    def block(self, group: Group) -> Block:
        """Without a title."""
        if group.key not in self._made:
            made = tables(self._site, self._language, group)
            self._made[group.key] = Block(
                id=f"{group.vehicle}-{group.surface}-{grade_id(group.grade)}",
                title=None,
                notices=tuple(notice_sentence_html(self._language, n) for n in self._site.notices(group.rows)),
                figures=self._drawings.figures(self._language, group),
                tables=made,
                side_by_side=len(made[0].heads) <= _NARROW_COLUMNS,
            )
        return self._made[group.key]

    def sections(self, groups: tuple[Group, ...], by: str) -> tuple[Section, ...]:
        """The groups of one page, cut by "vehicle" or by "surface", as the other one is the page's own."""
        out = []
        for key in dict.fromkeys(getattr(group, by) for group in groups):
            of = tuple(group for group in groups if getattr(group, by) == key)
            edition = self._site.edition
            texts = edition.vehicle(key).name if by == "vehicle" else edition.surface(key).name
            plain = len(of) == 1 and of[0].grade == 0.0
            blocks = (
                self.block(g) if plain else replace(self.block(g), title=slope(self._language, g.grade)) for g in of
            )
            out.append(Section(id=f"{by}-{key}", title=named(self._language, texts), blocks=tuple(blocks)))
        return tuple(out)
