"""Every published table against the program, as `claims/*.toml` says: the score exactly, each disagreement exactly.

A better score fails too, so that what is written stays true. A new table needs a CSV and a claim, and no code here.
"""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from . import claims as book
from .claims import Claim, Row, key_of, load, rows_of, tally, work_out
from .expressions import evaluate

CLAIMS, NOTHING_TO_COMPUTE, TALLY = load()
MINE = pytest.mark.parametrize("claim", CLAIMS, ids=lambda c: c.id)
# Cells that stand in the table as they are compared: a claim's own sum of a row has no cell to change.
PRINTED = pytest.mark.parametrize("claim", [c for c in CLAIMS if not c.printed], ids=lambda c: c.id)


@MINE
def test_the_score_and_the_disagreements_are_exactly_as_listed(claim: Claim) -> None:
    found = work_out(claim, rows_of(claim))
    assert found.differs == claim.listed
    assert found.score == claim.score
    assert len(found.agrees) >= 1


@MINE
def test_each_disagreement_has_its_reason(claim: Claim) -> None:
    for one in claim.differs:
        assert set(one) == {"row", "printed", "computed", "why"}
        assert len(str(one["why"]).split()) >= 5


@MINE
def test_a_recalled_column_is_never_called_evidence(claim: Claim) -> None:
    if claim.evidence and not claim.variant:
        assert any(work_out(claim, rows_of(claim)).read_in_page), "mark it: evidence = false"


def test_every_table_is_claimed_or_has_nothing_to_compute() -> None:
    tables = {path.stem for path in book.FOLDER.glob("*.csv")}
    assert {c.table for c in CLAIMS} | set(NOTHING_TO_COMPUTE) == tables
    assert not {c.table for c in CLAIMS} & set(NOTHING_TO_COMPUTE)
    assert all(len(why.split()) >= 3 for why in NOTHING_TO_COMPUTE.values())


def test_the_tally_keeps_what_shows_nothing_apart() -> None:
    assert tally(CLAIMS) == TALLY


def changed(row: Row, claim: Claim, by: int) -> Row:
    """The row with the last digit of its printed number changed."""
    cell = row[claim.column]
    hit = re.search(claim.read, cell) if claim.read else re.search(r"(.*)", cell)
    assert hit
    at = hit.end(1) - 1
    return {**row, claim.column: f"{cell[:at]}{(int(cell[at]) + by) % 10}{cell[at + 1 :]}"}


@PRINTED
def test_a_wrong_digit_in_any_row_is_found(claim: Claim) -> None:
    """The mutants of every compared cell: last digit plus one, or plus five where a tolerance is claimed."""
    rows = rows_of(claim)
    for place, row in enumerate(rows):
        mutant = [*rows[:place], changed(row, claim, 5 if claim.within else 1), *rows[place + 1 :]]
        found = work_out(claim, mutant)
        assert (found.score, found.differs) != (claim.score, claim.listed), key_of(row, claim)


def test_a_wrong_digit_in_a_file_is_found(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    claim = next(c for c in CLAIMS if c.table == "queensland_dry" and c.column == "total_m")
    assert work_out(claim, rows_of(claim)).score == "8/8"
    text = (book.FOLDER / "queensland_dry.csv").read_text(encoding="utf-8")
    (tmp_path / "queensland_dry.csv").write_text(text.replace("dry,70,29,27,56", "dry,70,29,27,57"), encoding="utf-8")
    monkeypatch.setattr(book, "FOLDER", tmp_path)
    book._file.cache_clear()
    try:
        found = work_out(claim, rows_of(claim))
    finally:
        book._file.cache_clear()
    assert found.score == "7/8"
    assert found.differs == [("70", 57.0, 56.0)]


@pytest.mark.parametrize(("text", "value"), [("2 + 3*4", 14.0), ("-x**2", -9.0), (7, 7.0), ("up(4.2)", 5.0)])
def test_a_sum_is_plain_arithmetic(text: str | float, value: float) -> None:
    assert evaluate(text, {"x": 3.0}) == value


@pytest.mark.parametrize("text", ["x.real", "__import__('os')", "y", "x if x else 1", "[x]", "up(x=1)", "'x'"])
def test_anything_else_in_a_sum_is_refused(text: str) -> None:
    with pytest.raises(ValueError, match="cannot work out"):
        evaluate(text, {"x": 3.0})


def test_an_unknown_key_of_a_claim_is_refused() -> None:
    with pytest.raises(TypeError, match="skore"):
        book._claim({"table": "t", "key": "k", "name": "c", "score": "1/1", "skore": "1/1"})
