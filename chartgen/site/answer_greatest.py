"""The greatest speeds that still stop in time: within a clear view, a headlight's reach, a following gap."""

from __future__ import annotations

import math
from collections.abc import Sequence

from markupsafe import Markup, escape

from chartgen.charts.rungs import Rung
from chartgen.figures.export import asked_greatest
from chartgen.site.answer_tables import (
    WIDE_MM,
    Answer,
    AnswerHead,
    AnswerRow,
    AnswerTable,
    Pen,
    chart,
    every,
    finite,
    in_unit,
    trace,
    whose,
)  # fmt: skip
from chartgen.site.drawings import Figure
from chartgen.site.edition_site import Record
from chartgen.site.tables import condition


def greatest(pen: Pen) -> Answer:
    """One row a driver, vehicle, surface and slope; one chart a condition."""
    language, site = pen.language, pen.site
    kinds = asked_greatest(site.edition.questions)
    names = {kind: condition(site, language, kind) for kind in kinds}
    heads = (
        AnswerHead(Markup(""), Markup(""), ""),
        *(AnswerHead(escape(names[kind]), pen.speed_unit(), f"printed_greatest_{kind}") for kind in kinds),
    )
    rows = [(series.records[0], *whose(pen, group, series)) for group, series in every(pen)]
    figures: tuple[Figure, ...] = ()
    for kind in kinds:
        bars = [_greatest_rung(pen, record, kind, plain) for record, _, plain in rows]
        caption = in_unit(pen, names[kind], site.figures.speed_unit)
        told = _greatest_told(pen, [record for record, _, _ in rows], kind)
        figures += chart(pen, bars, names[kind], told, caption, "braking", WIDE_MM)
    table = AnswerTable(
        label=pen.t("answers.greatest_title"),
        caption=pen.word("quantity.greatest_speed"),
        heads=heads,
        rows=tuple(
            AnswerRow(name, trace(record), tuple(escape(_greatest_cell(pen, record, kind)) for kind in kinds))
            for record, name, _ in rows
        ),
        figures=figures,
        assumptions=tuple(
            Markup("<b>{}</b> {}").format(name, series.line(language, site.edition))
            for group, series in every(pen)
            for name in (whose(pen, group, series)[0],)
        ),
    )
    top = language.speed(max(site.edition.speeds), site.figures.speed_unit)
    return Answer(
        id="greatest", title=pen.t("answers.greatest_title"), tables=(table,),
        paragraphs=(language.html("answers.greatest_text", top=top),),
    )  # fmt: skip


def _greatest_cell(pen: Pen, record: Record, kind: str) -> str:
    value = float(record[f"printed_greatest_{kind}"])
    if math.isnan(value):
        return pen.t("word.none")
    if value == 0.0:
        return pen.t("answers.no_speed")
    number = pen.language.number(value)
    return pen.t("answers.at_least", speed=number) if record[f"greatest_{kind}_at_top"] else number


def _greatest_rung(pen: Pen, record: Record, kind: str, name: str) -> Rung:
    text = _greatest_cell(pen, record, kind)
    value = float(record[f"printed_greatest_{kind}"])
    in_words = not math.isfinite(value) or value == 0.0 or bool(record[f"greatest_{kind}_at_top"])
    length = 0.0 if value == 0.0 else float(record[f"greatest_{kind}_mps"])
    return Rung(
        name=name, length=length, figure=text, words=in_words, row=int(record["row"]),
        quantity=f"printed_greatest_{kind}",
    )  # fmt: skip


def _greatest_told(pen: Pen, records: Sequence[Record], kind: str) -> str:
    """From the lowest to the highest of the greatest speeds."""
    some = [r for r in finite(records, f"printed_greatest_{kind}") if r[f"printed_greatest_{kind}"] > 0]
    known = sorted(some, key=lambda r: float(r[f"greatest_{kind}_mps"]))
    if not known:
        return pen.t("answers.no_speed")
    ends = []
    for record in (known[0], known[-1]):
        speed = pen.language.speed(float(record[f"printed_greatest_{kind}"]), pen.site.figures.speed_unit)
        ends.append(pen.t("answers.at_least", speed=speed) if record[f"greatest_{kind}_at_top"] else speed)
    return pen.language.plain("alt.greatest", low=ends[0], high=ends[1])
