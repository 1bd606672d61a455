"""The strip of speed limits on the overview: each with its vehicles, the day it was looked up, and its source."""

from __future__ import annotations

from dataclasses import dataclass

from markupsafe import Markup, escape

from chartgen.edition.model import SpeedLimit
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.site.edition_site import Site, comma, named
from chartgen.site.method import ValueRow, ValueTable, source_cells


@dataclass(frozen=True, slots=True, kw_only=True)
class Limits:
    title: str
    text: str
    table: ValueTable


def limits(site: Site, language: Language) -> Limits | None:
    """The edition's speed limits in its order; None where it gives none."""
    if not site.edition.limits:
        return None
    heads = ("limits.title", "limits.limit", "limits.for", "limits.as_at", "method.source")
    rows = tuple(ValueRow("", _cells(site, language, limit)) for limit in site.edition.limits)
    title = language.t("limits.title")
    table = ValueTable(label=title, heads=tuple(language.t(key) for key in heads), rows=rows)
    return Limits(title=title, text=language.t("limits.text"), table=table)


def _cells(site: Site, language: Language, limit: SpeedLimit) -> tuple[Markup, ...]:
    kinds = comma(language).join(language.t(f"kind.{kind}") for kind in limit.kinds)
    return (
        named(language, limit.name),
        isolate(language.speed(limit.speed, site.figures.speed_unit)),
        escape(kinds or language.t("limits.all")),
        Markup('<time datetime="{0}"><bdi dir="ltr">{0}</bdi></time>').format(limit.as_at.isoformat()),
        source_cells(language, limit.source)[0],
    )
