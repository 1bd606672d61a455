"""The demonstration editions' pages, read again from their bytes by an independent reader (html5lib)."""

from __future__ import annotations

import gzip
import os
import re
import subprocess
import sys
from collections.abc import Iterator
from functools import cache
from itertools import pairwise
from pathlib import Path
from typing import Any

import html5lib
import numpy as np
import pytest

from chartgen.language.load import Language
from chartgen.output import File
from chartgen.site.check import check_pages
from chartgen.site.reading import read_page
from tests.site.made import DEMOS, Leaf, made

LANGUAGES = [(name, language) for name in DEMOS for language in made(name).languages]
EACH = pytest.mark.parametrize(("name", "language"), LANGUAGES, ids=[f"{n}-{x.tag}" for n, x in LANGUAGES])
HTML = "{http://www.w3.org/1999/xhtml}"


@cache
def tree(name: str, path: str) -> Any:
    """The page as html5lib reads it; raises ParseError on the first fault of the markup."""
    parser = html5lib.HTMLParser(strict=True, tree=html5lib.getTreeBuilder("etree"))
    return parser.parse(made(name).files[path])


def text(element: Any) -> str:
    return "".join(element.itertext()).strip()


def printed_tables(page: Any, kind: str) -> Iterator[tuple[list[str], Any]]:
    """(column of the figures under each head, body row) of every table of a class."""
    for table in page.iter(f"{HTML}table"):
        if table.get("class") == kind:
            heads = [th.get("data-q") for th in table.iter(f"{HTML}th") if th.get("scope") == "col"]
            body = table.find(f"{HTML}tbody")
            for row in body.iter(f"{HTML}tr"):
                yield heads, row


@EACH
def test_markup_is_valid_and_in_order(name: str, language: Language) -> None:
    """No parse error; headings go down one step at a time; tables have a caption, scopes and units."""
    it = made(name)
    for path in it.own(language):
        page = tree(name, path)
        tags = [str(e.tag).removeprefix(HTML) for e in page.iter()]
        levels = [int(tag[1]) for tag in tags if tag in ("h1", "h2", "h3", "h4", "h5", "h6")]
        assert levels[0] == 1, path
        assert levels.count(1) == 1, path
        assert all(b - a <= 1 for a, b in pairwise(levels)), (path, levels)
        for table in page.iter(f"{HTML}table"):
            assert all(th.get("scope") in ("col", "row") for th in table.iter(f"{HTML}th")), path
            if table.get("class") == "dist":
                assert text(table.find(f"{HTML}caption"))
                units = [text(span) for span in table.iter(f"{HTML}span") if span.get("class") == "unit"]
                assert language.unit(it.figures.distance_unit) in units
                assert language.unit(it.figures.speed_unit) in units


@pytest.mark.parametrize("name", DEMOS)
def test_language_choice_is_valid(name: str) -> None:
    tree(name, "index.html")


@pytest.mark.parametrize("name", DEMOS)
def test_nothing_is_found_wrong(name: str) -> None:
    it = made(name)
    assert check_pages(it.files, it.edition, it.figures, it.languages) == ()


@EACH
def test_every_number_of_a_table_is_the_figures_own(name: str, language: Language) -> None:
    it = made(name)
    table = it.figures.table.set_index("row")
    read = 0
    for path in (path for path in it.own(language) if "/surface-" in path):  # vehicles' pages hold the same blocks
        for heads, row in printed_tables(tree(name, path), "dist"):
            link = row.find(f"{HTML}th/{HTML}a").get("href")
            record = table.loc[int(link.removeprefix("method.html#r"))]
            cells = [cell for cell in row if cell.tag in (f"{HTML}th", f"{HTML}td")]
            for quantity, cell in zip(heads, cells, strict=False):
                if cell.get("class") == "never":
                    assert not record["stops"]
                    break
                if quantity != "stopping_time_s":  # the one column that the page rounds up itself
                    assert text(cell) == language.number(float(str(record[quantity]))), (path, link, quantity)
                    read += 1
    assert read >= 3 * len(table)


@EACH
def test_numbers_on_a_chart_are_labels_of_its_rows(name: str, language: Language) -> None:
    """Counted with the other reader: each total that a chart prints stands in the tables beneath it."""
    for path, data in made(name).own(language).items():
        page = read_page(data)
        tables = sum(table.kind == "dist" for table in page.tables)
        assert len(page.charts) <= (3 if "answers-greatest" in path else 1) * tables
        for chart in page.charts:
            assert chart.numbers, path


@EACH
def test_each_row_leads_to_its_inputs(name: str, language: Language) -> None:
    it = made(name)
    page = tree(name, f"{language.tag}/method.html")
    rows = {
        row.get("id"): [text(cell) for cell in row if cell.tag in (f"{HTML}th", f"{HTML}td")]
        for _, row in printed_tables(page, "trace")
    }
    assert set(rows) == {f"r{row}" for row in it.figures.table["row"]}
    for record in it.figures.table.to_dict("records"):
        cells = rows[f"r{record['row']}"]
        assert cells[0] == language.number(record["printed_speed"])
        assert language.number(record["speed_mps"], 2) in cells
        assert language.number(record["reaction_distance_m"], 2) in cells
        if np.isfinite(record["full_deceleration_mps2"]):
            assert language.number(record["full_deceleration_mps2"], 2) in cells
        for quantity in ("stopping_p50_m", "stopping_p85_m", "stopping_p95_m", "residual_speed_mps"):
            if np.isfinite(record[quantity]):
                assert language.number(record[quantity], 2) in cells, quantity


@EACH
def test_greatest_speeds_are_shown_before_they_are_rounded(name: str, language: Language) -> None:
    """Under each case's table; none where the answer is in words, and none at all where nothing was asked."""
    it = made(name)
    page = tree(name, f"{language.tag}/method.html")
    shown = [[text(one) for one in part.iter(f"{HTML}li")] for part in page.iter(f"{HTML}section")
             if str(part.get("id")).startswith("case-")]  # fmt: skip
    wanted, asked = [], list[str]()
    for _, case in it.figures.table.groupby(["driver", "vehicle", "surface", "grade"], sort=False):
        first = case.iloc[0]
        asked = [kind for kind in ("sight", "headlight", "gap") if np.isfinite(first[f"printed_greatest_{kind}"])]
        wanted.append([
            language.number(first[f"greatest_{kind}_mps"], 2)
            for kind in asked
            if first[f"printed_greatest_{kind}"] > 0 and not first[f"greatest_{kind}_at_top"]
        ])  # fmt: skip
    assert sorted(map(len, shown)) == sorted(map(len, wanted))
    assert any(wanted) or not asked
    for numbers in wanted:
        assert any(
            len(lines) == len(numbers) and all(n in line for n, line in zip(numbers, lines, strict=True))
            for lines in shown
        ), numbers


@EACH
def test_every_value_stands_with_its_source(name: str, language: Language) -> None:
    it = made(name)
    page = tree(name, f"{language.tag}/method.html")
    ids = {e.get("id"): text(e) for e in page.iter() if isinstance(e.tag, str) and e.get("id")}
    used = it.figures.table
    for driver in it.edition.drivers:
        if driver.id in set(used["driver"]):
            row = ids[f"driver-{driver.id}"]
            assert driver.source.text in row
            assert language.seconds(driver.reaction.time_s) in row
    for surface in it.edition.surfaces:
        if surface.id in set(used["surface"]):
            assert surface.source.text in ids[f"surface-{surface.id}"]
    for vehicle in it.edition.vehicles:
        if vehicle.id in set(used["vehicle"]) and vehicle.source:
            assert vehicle.source.text in ids[f"vehicle-{vehicle.id}"]


@EACH
def test_word_list_says_that_nobody_has_read_it(name: str, language: Language) -> None:
    page = read_page(made(name).files[f"{language.tag}/method.html"])
    assert language.native_reader is None
    assert language.t("method.words_unread") in page.text
    for _, _, note in language.doubtful:
        assert note in page.text


@EACH
def test_text_alternatives_state_a_claim_and_its_range(name: str, language: Language) -> None:
    it = made(name)
    ends = [language.speed(v, it.figures.speed_unit) for v in (min(it.edition.speeds), max(it.edition.speeds))]
    for path, data in it.own(language).items():
        for chart in read_page(data).charts:
            told = chart.told.lower()
            openings = ("chart", "graph", "diagram", "siart", "graphique", "gráfic", "رسم", "مخطط")
            assert not told.startswith(openings), path
            if "answers-greatest" in path:
                # Its claim is of speeds that are found, not of those that are asked.
                assert re.search(r"\d", chart.told), (path, chart.told)
            elif "answers-residual" in path:
                # Speeds without a figure, for want of a measured friction, are not spoken of.
                asked = [language.speed(v, it.figures.speed_unit) for v in it.edition.speeds]
                assert sum(speed in chart.told for speed in asked) >= 2, (path, chart.told)
            else:
                assert any(end in chart.told for end in ends), (path, chart.told)


@EACH
def test_page_is_light(name: str, language: Language) -> None:
    """W8: at most 30 kB of compressed HTML, 100 kB for a page with one chart, four requests (five are allowed)."""
    it = made(name)
    for path, data in it.own(language).items():
        page = read_page(data)
        needs = [a for e, a, v in page.links if e == "link" and v.get("rel") in ("stylesheet", "icon")]
        assert 1 + len(needs) <= 5, path
        assert len(gzip.compress(data, 9)) <= 30_000, path
        if len(page.charts) == 1:
            assert len(data) <= 100_000, path
        shared = sum(len(gzip.compress(it.files[a.removeprefix("../")], 9)) for a in needs)
        assert shared + len(gzip.compress(data, 9)) <= 100_000, path


@EACH
def test_control_block_and_assumptions_are_on_the_page(name: str, language: Language) -> None:
    it = made(name)
    edition = it.edition
    for path, data in it.own(language).items():
        page = read_page(data)
        for part in (edition.reference, edition.issue, edition.issued.isoformat(), edition.licence, edition.owner):
            assert part in page.text, path
        assert language.t(f"control.status.{edition.status}") in page.text
        if page.charts:
            assert language.t("assume.level") in page.text or language.t("quantity.grade") in page.text


@EACH
def test_other_languages_are_named_in_their_own_words(name: str, language: Language) -> None:
    it = made(name)
    for path, data in it.own(language).items():
        words = read_page(data).text
        for other in it.languages:
            if other is not language:
                assert other.t("page.also_in") in words, path
                assert other.own_name in words


def test_sizes_come_with_the_sheets() -> None:
    from chartgen.site.pages import sized_pages

    it = made("tarnholt")
    first = it.languages[0]
    said = tuple((language.tag, "…") for language in it.languages)
    sheet = Leaf("sheets/poster.pdf", first.text(it.edition.title), first.tag, said)
    made_before = [File(path, data) for path, data in it.files.items()]
    sized = sized_pages(it.edition, it.figures, it.languages, [sheet], {sheet.path: 19}, made_before)
    again = {f.path: f.data for f in sized}
    assert set(again) == {f"{language.tag}/downloads.html" for language in it.languages}
    assert all(it.files[path] == data for path, data in again.items())
    for data in again.values():
        words = read_page(data).text
        assert all(language.own_name in words for language in it.languages)


PRINT_HASH = """
import hashlib
from tests.site.made import made
print(hashlib.sha256(b"".join(p.encode() + d for p, d in sorted(made("tarnholt").files.items()))).hexdigest())
"""


def test_same_bytes_in_another_process(tmp_path: Path) -> None:
    root = Path(__file__).resolve().parents[2]
    hashes = set()
    for seed, lang, zone in (("1", "C", "UTC"), ("2", "fr_FR.UTF-8", "Asia/Tokyo")):
        env = {**os.environ, "PYTHONHASHSEED": seed, "LANG": lang, "TZ": zone, "PYTHONPATH": str(root)}
        command = [sys.executable, "-c", PRINT_HASH]
        hashes.add(subprocess.run(command, env=env, cwd=tmp_path, capture_output=True, check=True).stdout)
    assert len(hashes) == 1
