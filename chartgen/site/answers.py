"""The pages of what else follows from the figures: speeds that remain, greatest speeds, gaps, differences, spread."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, replace

from markupsafe import escape

from chartgen.charts.inks import palette
from chartgen.edition.catalogue import GAP_RULES
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.language.sentences import where_line_html
from chartgen.site.answer_greatest import greatest
from chartgen.site.answer_tables import (
    Answer,
    AnswerHead,
    AnswerTable,
    Pen,
    at_speed,
    by_speed,
    chart,
    every,
    finite,
    in_unit,
    slowest,
    speed_bars,
    whose,
    with_charts,
)  # fmt: skip
from chartgen.site.drawings import Figure
from chartgen.site.edition_site import Group, Series, Site, answer_ids, named
from chartgen.site.frame import Link
from chartgen.site.method import spread_text


@dataclass(frozen=True, slots=True, kw_only=True)
class AnswersPage:
    """The page that lists the questions, or, with `answer`, the page of one of them."""

    title: str
    intro: str
    question_word: str
    questions: tuple[Link, ...]
    trace_hint: str
    answer: Answer | None


def answer_pages(site: Site, language: Language) -> Iterator[tuple[str, AnswersPage]]:
    """File name and content: the list of the edition's questions, then a page for each in a fixed order."""
    pen = Pen(site, language, palette(site.edition.palette))
    answers = {answer.id: answer for answer in (_answer(pen, id) for id in answer_ids(site.edition))}
    for id, answer in ((None, None), *answers.items()):
        name = f"answers-{id}.html" if id else "answers.html"
        links = (Link(f"answers-{a.id}.html", escape(a.title), a.id == id) for a in answers.values())
        yield (
            name,
            AnswersPage(
                title=answer.title if answer else language.t("page.answers"),
                intro=language.t("answers.intro"),
                question_word=language.t("page.answers"),
                questions=tuple(links),
                trace_hint=language.t("page.trace_hint"),
                answer=answer,
            ),
        )


def _answer(pen: Pen, id: str) -> Answer:
    asked = pen.site.edition.questions
    match id:
        case "spread":
            return _spread(pen)
        case "greatest":
            return greatest(pen)
        case "residual":
            return _residual(pen, asked.residual_from or 0.0)
        case "added-driver":
            return _added(pen, "driver", asked.driver or "")
        case "added-surface":
            return _added(pen, "surface", asked.surface or "")
        case _:
            return _gaps(pen)


def _spread(pen: Pen) -> Answer:
    unit = pen.distance_unit()
    heads = [
        AnswerHead(
            pen.language.html("quantity.percentile", share=pen.language.percent(percent / 100)),
            unit,
            f"printed_p{percent}",
        )
        for percent in (50, 85, 95)
    ]
    tables = tuple(
        by_speed(pen, group, series, heads)
        for group, series in every(pen)
        if any(math.isfinite(float(r["stopping_p50_m"])) for r in series.records)
    )
    text = spread_text(pen.site, pen.language)
    return Answer(id="spread", title=pen.t("method.spread"), paragraphs=(text,), tables=tables)


def _residual(pen: Pen, reference: float) -> Answer:
    language, unit = pen.language, pen.site.figures.speed_unit
    speed, quantity = language.speed(reference, unit), "printed_residual_speed"
    head = AnswerHead(pen.word("quantity.residual_speed"), pen.speed_unit(), quantity)
    tables = []
    for group, series in every(pen):
        table = by_speed(pen, group, series, (head,))
        faster = [r for r in finite(series.records, quantity) if r["printed_speed"] > reference]
        if faster and series is slowest(group):
            last = language.speed(float(faster[-1][quantity]), unit)
            told = language.plain("alt.residual", low=speed, high=at_speed(pen, faster[-1]), last=last)
            bars = speed_bars(pen, faster, quantity, "residual_speed_mps", key="answers.residual_from")
            caption = in_unit(pen, table.caption, unit)
            table = with_charts(table, chart(pen, bars, table.label, told, caption, "accent"))
        tables.append(table)
    return Answer(
        id="residual",
        title=language.plain("answers.residual_title", speed=speed),
        paragraphs=(language.html("answers.residual_text", speed=speed),),
        tables=tuple(tables),
    )


def _added(pen: Pen, kind: str, reference: str) -> Answer:
    """What every other driver, or every other surface, adds: a table and a chart for each."""
    language, unit, edition = pen.language, pen.site.figures.distance_unit, pen.site.edition
    quantity = f"printed_added_by_{kind}"
    head = AnswerHead(pen.word("quantity.added"), pen.distance_unit(), quantity)
    tables = []
    for group, series in every(pen):
        known = finite(series.records, quantity)
        if not known or (series.driver if kind == "driver" else group.surface) == reference:
            continue
        table = by_speed(pen, group, series, (head,), signed=True)
        if series is not slowest(group):
            tables.append(table)
            continue
        low, high = (language.distance(float(r[quantity]), unit) for r in (known[0], known[-1]))
        told = language.plain(
            "alt.added", first=low, low=at_speed(pen, known[0]), last=high, high=at_speed(pen, known[-1])
        )
        bars = speed_bars(pen, known, quantity, f"added_by_{kind}_m", signed=True)
        ink = "reaction" if kind == "driver" else "braking"
        caption = in_unit(pen, table.caption, unit)
        tables.append(with_charts(table, chart(pen, bars, table.label, told, caption, ink)))
    texts = edition.driver(reference).name if kind == "driver" else edition.surface(reference).name
    return Answer(
        id=f"added-{kind}",
        title=pen.t(f"answers.{kind}_title"),
        paragraphs=(language.html("answers.added_text", name=language.text(texts)),),
        tables=tuple(tables),
    )


def _gaps(pen: Pen) -> Answer:
    """One table for all rows that share their gaps: the driver never matters, the vehicle only to a rule by length."""
    rules = pen.site.edition.questions.gaps
    seen: dict[tuple[float, ...], AnswerTable] = {}
    for group, series in every(pen):
        gaps = (float(r[f"printed_gap_s {rule}"]) for rule in rules for r in series.records)
        key = tuple(-1.0 if math.isnan(x) else x for x in gaps)
        if key not in seen:
            seen[key] = _gap_table(pen, group, series, rules)
    return Answer(
        id="gaps",
        title=pen.t("answers.gaps_title"),
        paragraphs=(pen.word("answers.gaps_text"),),
        tables=tuple(seen.values()),
    )


def _gap_table(pen: Pen, group: Group, series: Series, rules: tuple[str, ...]) -> AnswerTable:
    language, unit = pen.language, pen.site.figures.distance_unit
    heads: list[AnswerHead] = []
    for rule in rules:
        name = named(language, GAP_RULES[rule].name)
        heads += [
            AnswerHead(name, isolate(language.unit("s")), f"printed_gap_s {rule}"),
            AnswerHead(name, pen.distance_unit(), f"printed_gap_distance {rule}"),
        ]
    table = by_speed(pen, group, series, heads)
    caption, label = whose(pen, group, series, leave_out="driver")
    quantity = f"printed_gap_distance {rules[0]}"
    known = finite(series.records, quantity)
    figures: tuple[Figure, ...] = ()
    if known:
        ends = (known[0], known[-1])
        first, last = (language.distance(float(r[quantity]), unit) for r in ends)
        low, high = (at_speed(pen, r) for r in ends)
        told = language.plain("alt.gaps", first=first, low=low, last=last, high=high)
        shown = in_unit(pen, named(language, GAP_RULES[rules[0]].name), unit)
        figures = chart(pen, speed_bars(pen, known, quantity, quantity), label, told, shown, "lag")
    # Driver and reaction have no part in a gap.
    where = (where_line_html(language, pen.site.edition, series.assumption),)
    return replace(table, label=label, caption=caption, figures=figures, assumptions=where)
