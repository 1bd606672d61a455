"""The yardstick: what one person writes in an afternoon to make the same outputs, with nothing wasted on purpose.

    python benchmarks/straightforward.py OUT EDITION...

The same editions, figures, fonts, page counts and paper sizes; pyplot chart by chart, one document after another, one
process. It takes the numbers and the words from chartgen (they cost next to nothing) and checks nothing afterwards.
"""

from __future__ import annotations

import io
import sys
from dataclasses import dataclass
from pathlib import Path

import fontpkg
import jinja2
import matplotlib as mpl
import numpy as np
import pandas as pd
import weasyprint

from chartgen.charts.inks import palette
from chartgen.edition.catalogue import SHELVES
from chartgen.edition.load import load_edition
from chartgen.edition.model import Cards, Edition, RosterRow
from chartgen.figures.assume import assumptions
from chartgen.figures.compare import compare
from chartgen.figures.export import asked_greatest, to_csv, to_json
from chartgen.figures.record import Figures
from chartgen.figures.table import figures, select
from chartgen.language.headline import headline_plain
from chartgen.language.load import Language, languages
from chartgen.language.sentences import assumption_line_plain, caution_sentences

mpl.use("svg")
from matplotlib import font_manager
from matplotlib import pyplot as plt

LATIN, ARABIC = "IBM Plex Sans Condensed", "Tajawal"
WEIGHTS = (400, 700)

PAGE = jinja2.Template("""<!doctype html>
<html lang="{{ language.tag }}" dir="{{ language.direction }}"><meta charset="utf-8">
<title>{{ title }}</title><h1>{{ title }}</h1>
{% for chart, rows in blocks %}{{ chart }}
<table>{% for row in rows %}<tr>{% for cell in row %}<td>{{ cell }}</td>{% endfor %}</tr>{% endfor %}</table>
{% endfor %}{% for sentence in caution %}<p>{{ sentence }}</p>{% endfor %}</html>""")

SHEET = jinja2.Template("""<!doctype html>
<html lang="{{ languages[0].tag }}"><meta charset="utf-8"><title>{{ title }}</title>
<style>{{ faces }}@page{size:{{ width }}mm {{ height }}mm;margin:10mm}
body{font:{{ size }}pt "{{ latin }}","{{ arabic }}"}h1{font-size:3em;margin:0}svg{width:100%;height:auto}
td{padding:1mm 3mm}.two{display:flex}.two>div{width:50%}dl div{display:inline-block;margin-right:2em}</style>
{% for headline in headlines %}<h1>{{ headline }}</h1>{% endfor %}{{ chart }}
{% for rows in tables %}
<table>{% for row in rows %}<tr>{% for cell in row %}<td>{{ cell }}</td>{% endfor %}</tr>{% endfor %}</table>
{% endfor %}<div class="two">{% for small in smalls %}<div dir="{{ small.language.direction }}">
{% for sentence in small.sentences %}<p>{{ sentence }}</p>{% endfor %}</div>{% endfor %}</div>
<dl>{% for name, value in smalls[0].control %}<div><dt>{{ name }}</dt><dd>{{ value }}</dd></div>{% endfor %}</dl>
</html>""")

CARDS = jinja2.Template("""<!doctype html>
<html lang="{{ languages[0].tag }}"><meta charset="utf-8"><title>{{ title }}</title>
<style>{{ faces }}@page{size:{{ width }}mm {{ height }}mm;margin:0}
body{font:6pt "{{ latin }}","{{ arabic }}";margin:0}
.card{width:94.9mm;height:138mm;padding:5mm;float:left}.front td{font-size:12pt}td{padding:0 2mm}p,dl,dd{margin:0}
dl div{display:inline-block;margin-right:2em}dt,dd{display:inline}</style>
{% for face in sides %}<div class="card {{ face.side }}" lang="{{ face.language.tag }}"><h2>{{ face.title }}</h2>
{% for rows in face.tables %}
<table>{% for row in rows %}<tr>{% for cell in row %}<td>{{ cell }}</td>{% endfor %}</tr>{% endfor %}</table>
{% endfor %}{% for sentence in face.sentences %}<p>{{ sentence }}</p>{% endfor %}
<dl>{% for name, value in face.control %}<div><dt>{{ name }}</dt> <dd>{{ value }}</dd></div>{% endfor %}</dl>
</div>{% endfor %}</html>""")
CONTROL = ("title", "reference", "issue", "issued", "review_by", "owner", "approver", "copy", "status", "licence")


Block = tuple[str, list[list[str]]]


@dataclass(frozen=True)
class Job:
    edition: Edition
    figures: Figures
    languages: tuple[Language, ...]


def register_fonts() -> str:
    """The fonts for matplotlib, and their @font-face rules for the documents."""
    faces = ""
    for name in (LATIN, ARABIC):
        for file in fontpkg.family(name).files:
            if file.style == "normal" and file.weight in WEIGHTS and not file.variable:
                font_manager.fontManager.addfont(file.path)
                address = Path(file.path).as_uri()
                faces += f"@font-face{{font-family:'{name}';font-weight:{file.weight};src:url('{address}')}}"
    plt.rcParams["font.family"] = [LATIN, ARABIC]
    return faces


def chart(
    job: Job, series: list[pd.DataFrame], speakers: tuple[Language, ...], width_mm: float, height_mm: float
) -> str:
    """Stacked bars with every part and total labelled, named in each of the `speakers`, as an SVG."""
    inks = palette(job.edition.palette)
    first = speakers[0]
    fig, ax = plt.subplots(figsize=(width_mm / 25.4, height_mm / 25.4))
    wide = 0.8 / len(series)
    for number, rows in enumerate(series):
        places = np.arange(len(rows)) + number * wide
        under = np.zeros(len(rows))
        for part in ("reaction", "lag", "braking"):
            lengths = np.nan_to_num(rows[f"{part}_distance_m"].to_numpy(dtype=float))
            if not lengths.any():
                continue
            words = " / ".join(dict.fromkeys(language.t(f"part.{part}") for language in speakers))
            bars = ax.bar(places, lengths, wide * 0.9, bottom=under, label=words, color=inks.ink(part).srgb, hatch="//")
            printed = rows[f"printed_{part}"].to_numpy(dtype=float)
            ax.bar_label(bars, ["" if np.isnan(x) else first.number(x) for x in printed], label_type="center")
            under += lengths
        for place, top, total in zip(places, under, rows["printed_stopping"].to_numpy(dtype=float), strict=True):
            text = first.t("verdict.does_not_stop") if np.isnan(total) else first.number(total)
            ax.text(place, top, text, ha="center", va="bottom", weight="bold")
    ax.set_xticks(np.arange(len(series[0])), [first.number(s) for s in series[0]["printed_speed"]])
    ax.set_xlabel(" / ".join(language.unit(job.figures.speed_unit) for language in speakers))
    ax.set_ylabel(" / ".join(language.unit(job.figures.distance_unit) for language in speakers))
    if first.direction == "rtl":
        ax.invert_xaxis()
        ax.yaxis.tick_right()
    ax.legend(loc="upper left")  # its own search for the best place would take a third of the time
    out = io.StringIO()
    fig.savefig(out, format="svg")
    plt.close(fig)
    return out.getvalue()


def bars(job: Job, names: list[str], lengths: list[float], texts: list[str], language: Language) -> str:
    """Level bars with a name before and a figure behind each, as an SVG."""
    ink = palette(job.edition.palette).ink("braking").srgb
    fig, ax = plt.subplots(figsize=(180 / 25.4, max(1.0, 0.33 * len(names))))
    drawn = ax.barh(np.arange(len(names)), np.nan_to_num(lengths), color=ink)
    ax.bar_label(drawn, texts, weight="bold")
    ax.set_yticks(np.arange(len(names)), names)
    ax.invert_yaxis()
    if language.direction == "rtl":
        ax.invert_xaxis()
        ax.yaxis.tick_right()
    out = io.StringIO()
    fig.savefig(out, format="svg")
    plt.close(fig)
    return out.getvalue()


def by_speed(job: Job, language: Language, rows: pd.DataFrame, printed: list[str], length: str = "") -> Block:
    """A table of some printed columns by speed, with the bars of `length` where it is given."""
    lines = [
        [language.speed(row["printed_speed"], job.figures.speed_unit)]
        + [language.t("word.none") if np.isnan(row[c]) else language.number(row[c]) for c in printed]
        for row in rows.to_dict("records")
    ]
    if not length or rows[length].isna().all():
        return "", lines
    known = rows[rows[length].notna()]
    names = [language.speed(x, job.figures.speed_unit) for x in known["printed_speed"]]
    texts = [language.number(x) for x in known[printed[0]]]
    return bars(job, names, list(known[length]), texts, language), lines


def answers(job: Job, language: Language) -> dict[str, list[Block]]:
    """A page for each question that the edition asks."""
    asked, table, made = job.edition.questions, job.figures.table, {}
    cases = [rows for _, rows in table.groupby(["vehicle", "surface", "grade", "driver"], sort=False)]
    slowest = [
        max((r for _, r in rows.groupby("driver", sort=False)), key=lambda r: r["reaction_time_s"].iloc[0])
        for _, rows in table.groupby(["vehicle", "surface", "grade"], sort=False)
    ]
    charted = {(*rows[["vehicle", "surface", "grade", "driver"]].iloc[0],) for rows in slowest}

    def pages_of(printed: list[str], length: str) -> list[Block]:
        return [
            by_speed(
                job, language, rows, printed,
                length if (*rows[["vehicle", "surface", "grade", "driver"]].iloc[0],) in charted else "",
            )
            for rows in cases
            if rows[printed[0]].notna().any()
        ]  # fmt: skip

    if job.edition.spread is not None:
        made["spread"] = pages_of(["printed_p50", "printed_p85", "printed_p95"], "")
    if asked.residual_from is not None:
        made["residual"] = pages_of(["printed_residual_speed"], "residual_speed_mps")
    for name in ("driver", "surface"):
        if getattr(asked, name) is not None:
            made[f"added-{name}"] = pages_of([f"printed_added_by_{name}"], f"added_by_{name}_m")
    firsts = [rows.iloc[0] for rows in cases]
    kinds = asked_greatest(asked)
    if kinds:
        named = [f"{r['driver']} {r['vehicle']} {r['surface']}" for r in firsts]
        made["greatest"] = [greatest(job, named, firsts, kind, language) for kind in kinds]
    if asked.gaps:
        columns = [f"printed_{what} {rule}" for rule in asked.gaps for what in ("gap_distance", "gap_s")]
        different = {tuple(np.nan_to_num(rows[columns].to_numpy()).ravel()): rows for rows in reversed(cases)}
        made["gaps"] = [by_speed(job, language, rows, columns, columns[0]) for rows in different.values()]
    return made


def greatest(job: Job, named: list[str], firsts: list[pd.Series], kind: str, language: Language) -> Block:
    """The greatest speeds of one kind: a bar and a line a case."""
    texts = [language.number(np.nan_to_num(row[f"printed_greatest_{kind}"])) for row in firsts]
    drawn = bars(job, named, [row[f"greatest_{kind}_mps"] for row in firsts], texts, language)
    return drawn, [list(pair) for pair in zip(named, texts, strict=True)]


def beside(job: Job) -> list[Block]:
    """The edition beside each published table."""
    comparisons = compare(job.figures, job.edition) if job.edition.compare else ()
    return [("", [[str(getattr(row, name)) for name in row.__slots__] for row in c.rows]) for c in comparisons]


def catalogue(language: Language) -> list[Block]:
    return [
        (
            "",
            [
                [language.text(p.name), p.key, str(p.value), str(p.low), str(p.high), p.source.text]
                for p in shelf.values()
            ],
        )
        for shelf in SHELVES.values()
    ]


def cells(job: Job, language: Language, rows: pd.DataFrame) -> list[list[str]]:
    unit, out = job.figures.distance_unit, []
    for row in rows.to_dict("records"):
        printed = [row[f"printed_{part}"] for part in ("reaction", "lag", "braking", "stopping")]
        out.append([language.speed(row["printed_speed"], job.figures.speed_unit)])
        out[-1] += ["–" if np.isnan(x) else language.distance(x, unit) for x in printed]
    return out


def pages(job: Job, folder: Path) -> None:
    edition, table = job.edition, job.figures.table
    keys = ["vehicle", "surface", "grade"]
    for language in job.languages:
        target = folder / language.tag
        target.mkdir(parents=True)
        blocks = {}
        for key, rows in table.groupby(keys, sort=False):  # each chart once, though two pages show it
            series = [part for _, part in rows.groupby("driver", sort=False)]
            lines = [row for part in series for row in cells(job, language, part)]
            blocks[key] = (chart(job, series, (language,), 180, 104), lines)
        wanted = {"index": [next(iter(blocks.values()))], "downloads": []}
        wanted |= {f"surface-{s}": [b for k, b in blocks.items() if k[1] == s] for s in table["surface"].unique()}
        wanted |= {f"vehicle-{v}": [b for k, b in blocks.items() if k[0] == v] for v in table["vehicle"].unique()}
        wanted["method"] = [("", cells(job, language, table))]
        wanted |= {f"answers-{id}": blocks for id, blocks in answers(job, language).items()}
        wanted |= {"compare": beside(job), "catalogue": catalogue(language)}
        for name, shown in wanted.items():
            title, caution = language.text(edition.title), caution_sentences(language)
            text = PAGE.render(language=language, title=title, blocks=shown, caution=caution)
            (target / f"{name}.html").write_text(text, encoding="utf-8")
    (folder / "figures.csv").write_text(to_csv(job.figures), encoding="utf-8")
    (folder / "figures.json").write_text(to_json(job.figures), encoding="utf-8")


def small(job: Job, language: Language, rows: list[pd.DataFrame], copy: str = "") -> dict[str, object]:
    """Assumptions, caution and document control: what stands on every sheet."""
    edition = job.edition
    assumed = [assumption_line_plain(language, edition, assumptions(edition, part)) for part in rows]
    title, status = language.text(edition.title), language.t(f"control.status.{edition.status}")
    values = (title, edition.reference, edition.issue, str(edition.issued), str(edition.review_by), edition.owner)
    control = zip(CONTROL, (*values, edition.approver, copy, status, edition.licence), strict=True)
    return {
        "language": language,
        "sentences": [*assumed, *caution_sentences(language)],
        "control": [(language.t(f"control.{name}"), value) for name, value in control],
    }


def document(template: jinja2.Template, path: Path, faces: str, **values: object) -> None:
    html = template.render(faces=faces, latin=LATIN, arabic=ARABIC, **values)
    weasyprint.HTML(string=html).write_pdf(path, pdf_variant="pdf/ua-1")


def posters(job: Job, folder: Path, faces: str) -> None:
    edition = job.edition
    for poster in edition.posters:
        show, paper = poster.show, poster.paper
        for speakers in [job.languages] if poster.together else [(language,) for language in job.languages]:
            series = [
                select(job.figures, driver=d, vehicle=show.vehicle, surface=show.surface, grade=show.grade)
                for d in show.drivers
            ]
            if show.speeds is not None:
                series = [rows[rows["speed"].isin(show.speeds)] for rows in series]
            drawn = chart(job, series, speakers, paper.width_mm - 20, (paper.height_mm - 20) * 0.55)
            drawn = drawn[drawn.index("<svg") :].replace("<svg", f"<svg role='img' aria-label='{poster.id}'", 1)
            document(
                SHEET, folder / f"{poster.id}-{speakers[0].tag}.pdf", faces, title=poster.id, languages=speakers,
                headlines=[headline_plain(language, edition, job.figures, poster) for language in speakers],
                tables=[cells(job, speakers[0], rows) for rows in series], chart=drawn, size=paper.width_mm / 30,
                smalls=[small(job, language, series) for language in speakers],
                width=paper.width_mm, height=paper.height_mm,
            )  # fmt: skip


def cards(job: Job, folder: Path, faces: str) -> None:
    """A document a depot, four cards a page, a front and a back a card, a card a language."""
    plan, tags = job.edition.cards, {language.tag: language for language in job.languages}
    if plan is None:
        return
    for depot in dict.fromkeys(row.depot for row in plan.roster):
        sides = []
        for row in (row for row in plan.roster if row.depot == depot):
            empty = next((v.id for v in job.edition.vehicles if v.unladen_of == row.vehicle), None)
            for tag in row.languages:
                sides += card(job, plan, tags[tag], row, [row.vehicle, *([empty] if empty else [])])
        fours = [sides[i : i + 8] for i in range(0, len(sides), 8)]
        ordered = [side for four in fours for side in (*four[::2], *four[1::2])]
        document(
            CARDS, folder / f"cards-{depot}.pdf", faces, title=depot, languages=job.languages, sides=ordered,
            width=plan.sheet.width_mm, height=plan.sheet.height_mm,
        )  # fmt: skip


def card(job: Job, plan: Cards, language: Language, row: RosterRow, vehicles: list[str]) -> list[dict[str, object]]:
    """Front and back: totals and the gap in front; parts and the other surfaces behind."""

    def rows(vehicle: str, surface: str) -> pd.DataFrame:
        return select(job.figures, driver=plan.driver, vehicle=vehicle, surface=surface, grade=plan.grade)

    def totals(surface: str, *more: pd.Series) -> list[list[str]]:
        columns = [rows(vehicle, surface)["printed_stopping"] for vehicle in vehicles] + list(more)
        speeds = rows(vehicles[0], surface)["printed_speed"]
        return [[language.number(x) for x in line] for line in zip(speeds, *columns, strict=True)]

    first, *others = plan.surfaces
    laden = [rows(row.vehicle, surface) for surface in plan.surfaces]
    title = f"{row.vehicle_id} {language.text(job.edition.vehicle(row.vehicle).name)} {row.depot} {row.holder}"
    parts = [cells(job, language, rows(vehicle, first)) for vehicle in vehicles]
    front = small(job, language, [rows(vehicle, first) for vehicle in vehicles], row.copy_no)
    back = small(job, language, laden, row.copy_no)
    return [
        {"side": "front", "title": title, "tables": [totals(first, laden[0]["printed_gap_s"])], **front},
        {"side": "back", "title": title, "tables": [*parts, *(totals(surface) for surface in others)], **back},
    ]


def main(out: Path, names: list[str]) -> None:
    faces = register_fonts()
    for name in names:
        edition = load_edition(name)
        job = Job(edition, figures(edition), languages(edition))
        folder = out / edition.id
        folder.mkdir(parents=True)
        pages(job, folder)
        posters(job, folder, faces)
        cards(job, folder, faces)


if __name__ == "__main__":
    main(Path(sys.argv[1]), sys.argv[2:])
