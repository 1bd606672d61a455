"""The parts of a sheet: the account, what fits where, cards on a sheet, the code."""

from __future__ import annotations

import itertools
from collections.abc import Callable
from typing import Any

import pytest
import segno
from hypothesis import given, settings
from hypothesis import strategies as st

from chartgen.edition.model import Paper
from chartgen.sheets.account import Account, decimals_of
from chartgen.sheets.fitting import fit_headline, lines, packed, text_width
from chartgen.sheets.imposition import grid
from chartgen.sheets.qr import QUIET_MODULES, qr

A4 = Paper(name="A4", width_mm=210, height_mm=297)
LYING = Paper(name="A4 lying", width_mm=297, height_mm=210)
A6 = Paper(name="A6", width_mm=105, height_mm=148)
PAPERS = st.builds(lambda w, h: Paper(name="any", width_mm=w, height_mm=h), st.floats(40, 220), st.floats(40, 320))


@pytest.mark.parametrize(("step", "decimals"), [(1.0, 0), (5.0, 0), (10.0, 0), (0.5, 1), (0.25, 2), (2.5, 1)])
def test_decimals_follow_the_rounding_step(step: float, decimals: int) -> None:
    assert decimals_of(step) == decimals


def test_the_account_counts_what_is_entered(read_edition: Callable[[str], Any]) -> None:
    read = read_edition("miles")
    account = Account(read.figures)
    welsh = read.language("cy")
    assert account.figure(0, "printed_stopping", welsh, step=0.5) == welsh.number(
        float(read.figures.table["printed_stopping"].iloc[0]), 1
    )
    account.enter(0, "printed_stopping", "cy", (1, (1.0, 2.0, 3.0, 4.0)))
    account.fact("TVF-014")
    (only,) = account.inked
    assert (only.row, only.quantity, only.lang, only.times) == (0, "printed_stopping", "cy", 2)
    assert only.boxes == ((1, (1.0, 2.0, 3.0, 4.0)),)
    assert account.facts == ["TVF-014"]


TEXTS = st.lists(st.text("abcde fghij", min_size=1, max_size=9).map(str.strip).filter(bool), min_size=1, max_size=12)


@settings(max_examples=500, deadline=None)
@given(TEXTS, st.floats(8, 120))
def test_lines_lose_no_word_and_break_only_where_they_must(words: list[str], room: float) -> None:
    text = " ".join(words)
    found = lines(text, "text", 4.0, room)
    assert " ".join(found) == text
    for line in found:
        assert " " not in line or text_width(line, "text", 4.0) <= room
    for line, following in itertools.pairwise(found):
        assert text_width(f"{line} {following.split(' ')[0]}", "text", 4.0) > room


@settings(max_examples=500, deadline=None)
@given(TEXTS, st.floats(20, 200))
def test_fragments_keep_their_order_and_are_never_broken(fragments: list[str], room: float) -> None:
    rows = packed(fragments, "text", 4.0, room, " · ")
    assert list(itertools.chain(*rows)) == list(range(len(fragments)))
    for row in rows:
        assert len(row) == 1 or text_width(" · ".join(fragments[i] for i in row), "text", 4.0) <= room


STAIRS = ((0.0, 40.0, 200.0), (45.0, 85.0, 150.0), (90.0, 130.0, 90.0), (135.0, 175.0, 20.0))


@pytest.mark.parametrize("against", [(), (1,)])
def test_a_headline_stays_in_the_free_paper(against: tuple[int, ...]) -> None:
    texts = ["At 70 you travel far before the brakes do anything", "And then some more"]
    sizes = [20.0 * 0.95**i for i in range(18)]
    fitted = fit_headline(texts, STAIRS, top_mm=0, sizes_mm=sizes, clear_mm=4, against=against)
    assert fitted is not None
    for block, text in enumerate(texts):
        assert " ".join(line.text for line in fitted.lines if line.block == block) == text
    widths = [(line.block, text_width(line.text, "numeral-bold", line.size_mm)) for line in fitted.lines]
    widest = {block: max(width for own, width in widths if own == block) for block in (0, 1)}
    for line, (_, width) in zip(fitted.lines, widths, strict=True):
        # Set flush at its own start, a line of the other direction reaches as far as the widest of its block.
        reach = widest[line.block] if line.block in against else width
        foot = line.top_mm + line.size_mm
        assert all(start > reach for start, _, y in STAIRS if y < foot)


def test_a_headline_without_room_is_none() -> None:
    assert fit_headline(["Impossible"], [(0.0, 10.0, 0.0)], top_mm=0, sizes_mm=[10.0], clear_mm=1) is None


def test_four_a6_cards_fill_an_a4_sheet() -> None:
    made = grid(A6, A4)
    assert made is not None
    assert (made.columns, made.rows, made.left_mm, made.top_mm) == (2, 2, 0, 0.5)
    assert [made.front(i) for i in range(4)] == [(0, 0.5), (105, 0.5), (0, 148.5), (105, 148.5)]
    assert [made.back(i) for i in range(4)] == [(105, 0.5), (0, 0.5), (105, 148.5), (0, 148.5)]


@settings(max_examples=500, deadline=None)
@given(PAPERS, st.sampled_from([A4, LYING]))
def test_cards_lie_on_the_sheet_apart_and_back_to_back(card: Paper, sheet: Paper) -> None:
    made = grid(card, sheet)
    if made is None:
        assert card.width_mm > sheet.width_mm or card.height_mm > sheet.height_mm
        return
    fronts = [made.front(i) for i in range(made.places)]
    for left, top in fronts:
        assert -1e-6 <= left <= sheet.width_mm - card.width_mm + 1e-6
        assert -1e-6 <= top <= sheet.height_mm - card.height_mm + 1e-6
    for (left, top), (other_left, other_top) in itertools.combinations(fronts, 2):
        apart = abs(left - other_left) > card.width_mm - 1e-6 or abs(top - other_top) > card.height_mm - 1e-6
        assert apart
    for i, (left, top) in enumerate(fronts):
        # Turned over its long edge, the sheet shows each back behind its front, to 0.01 mm (requirement P8).
        back_left, back_top = made.back(i)
        upright = sheet.height_mm >= sheet.width_mm
        seen = (sheet.width_mm - back_left - card.width_mm, back_top) if upright else (
            back_left, sheet.height_mm - back_top - card.height_mm
        )  # fmt: skip
        assert seen == pytest.approx((left, top), abs=0.01)


def test_cut_marks_lie_on_cut_lines_and_inside_the_printable_sheet() -> None:
    made = grid(A6, A4)
    assert made is not None
    ticks = made.ticks()
    upright = [tick for tick in ticks if tick[2] == 0]
    across = [tick for tick in ticks if tick[3] == 0]
    assert {x for x, *_ in upright} == {105}
    assert {y for _, y, *_ in across} == {148.5}
    assert len(upright) == len(across) == 3
    assert min(x for x, *_ in across) >= 3
    assert max(x + width for x, _, width, _ in across) <= 207


@pytest.mark.parametrize(
    "address", ["https://two-ways.example/", "https://tarnholt.example/stopping/and/further/down/"]
)
def test_the_code_is_the_one_of_an_independent_drawing(address: str) -> None:
    # The module matrix is segno's (ISO/IEC 18004); what is ours is the path, so it is painted here and held against it.
    matrix = segno.make(address, error="m", micro=False).matrix
    made = qr(address)
    assert made.side == len(matrix) + 2 * QUIET_MODULES
    painted = [[0] * made.side for _ in range(made.side)]
    for run in made.path.removesuffix("z").split("z"):
        corner, right = run.removeprefix("M").split("h")[:2]
        x, y = map(int, corner.split())
        for i in range(int(right.split("v")[0])):
            painted[y][x + i] = 1
    inner = [row[QUIET_MODULES:-QUIET_MODULES] for row in painted[QUIET_MODULES:-QUIET_MODULES]]
    assert inner == [[int(bool(module)) for module in row] for row in matrix]
    assert sum(map(sum, painted)) == sum(map(sum, inner))
