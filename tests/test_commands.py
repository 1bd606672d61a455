"""The longer answers: does each way of naming an issue work, and is each wrong one told whole, with exit code 2?"""

from __future__ import annotations

import dataclasses
import json
from pathlib import Path
from typing import Any

import pytest

from chartgen import cli, commands
from chartgen.edition.load import load_edition
from chartgen.figures.compare import compare
from chartgen.figures.table import figures

ROOT = Path(__file__).parents[1]
TARNHOLT = str(ROOT / "site_config/tarnholt")
RIGHT = "Right: the figures (JSON) of an issue, as they were made."


@pytest.fixture
def issue(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> Path:
    """The figures of an edition as the command prints them."""
    assert cli.main(["figures", TARNHOLT, "--format", "json"]) == 0
    file = tmp_path / "issue-1.json"
    file.write_text(capsys.readouterr().out, encoding="utf-8")
    return file


def edited(file: Path, **changes: Any) -> Path:
    """Another issue beside `file`, with keys of the document changed; None takes a key away."""
    document = json.loads(file.read_text(encoding="utf-8")) | changes
    out = file.with_name("issue-2.json")
    out.write_text(json.dumps({k: v for k, v in document.items() if v is not None}), encoding="utf-8")
    return out


def test_an_edition_and_the_file_of_its_figures_are_the_same_issue(
    issue: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    for old, new in ((str(issue), TARNHOLT), (TARNHOLT, str(issue)), (str(issue), str(issue)), (TARNHOLT, TARNHOLT)):
        assert cli.main(["changes", old, new]) == 0
        got = capsys.readouterr()
        assert got.out.startswith("No printed number differs: ")
        assert len(got.err.splitlines()) == len(set(got.err.splitlines()))


@pytest.mark.parametrize("shape", ["text", "csv", "json"])
def test_a_changed_number_is_told_in_every_shape(shape: str, issue: Path, capsys: pytest.CaptureFixture[str]) -> None:
    rows = json.loads(issue.read_text(encoding="utf-8"))["rows"]
    rows[3]["printed"]["braking"] += 100
    assert cli.main(["changes", str(issue), str(edited(issue, rows=rows)), "--format", shape]) == 0
    got = capsys.readouterr()
    assert got.err == ""
    assert str(rows[3]["printed"]["braking"]) in got.out
    assert "program" in got.out


def test_figures_of_another_edition_are_a_warning(issue: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["changes", str(issue), str(edited(issue, edition="other"))]) == 0
    assert capsys.readouterr().err == 'Warning: these are figures of two editions, "tarnholt" and "other".\n'


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        ({"rows": None}, ["rows: there are no rows."]),
        ({"edition": None, "speed_unit": None, "distance_unit": None}, [
            "edition: this is needed and missing.",
            "speed_unit: this is needed and missing.",
            "distance_unit: this is needed and missing.",
        ]),
        ({"rows": [{"driver": "a"}]}, ["rows[1]: its vehicle is missing."]),
    ],
)  # fmt: skip
def test_what_is_no_figures_json_is_told_whole(
    changes: dict[str, Any], said: list[str], issue: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    bad = edited(issue, **changes)
    for pair in ((str(issue), str(bad)), (str(bad), str(bad))):
        assert cli.main(["changes", *pair]) == 2
        got = capsys.readouterr()
        assert got.out == ""
        lines = [f"{bad}: {sentence} {RIGHT}" for sentence in said]
        count = f"{len(said)} fault{'' if len(said) == 1 else 's'}; nothing was made."
        assert got.err.splitlines() == [*lines, count]


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("[1, 2]", "these are not figures of an edition."),
        ("{", "this is not JSON: Expecting property name enclosed in double quotes: line 1 column 2 (char 1)."),
        ("", "this is not JSON: Expecting value: line 1 column 1 (char 0)."),
    ],
)
def test_a_file_of_something_else_is_told(
    text: str, said: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    bad = tmp_path / "x.json"
    bad.write_text(text, encoding="utf-8")
    assert cli.main(["changes", str(bad), TARNHOLT]) == 2
    assert capsys.readouterr().err.splitlines()[0] == f"{bad}: {said} {RIGHT}"


def test_a_file_that_is_not_there_is_told(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["changes", "no.json", TARNHOLT]) == 2
    assert capsys.readouterr().err == (
        'There is no file "no.json".\nRight: the figures (JSON) of an issue, or an edition.\n'
    )
    assert cli.main(["changes", TARNHOLT, "tarnholm"]) == 2
    assert capsys.readouterr().err.startswith('There is no edition "tarnholm"; did you mean "tarnholt"?')


@pytest.mark.parametrize("shape", ["text", "csv", "json"])
def test_a_comparison_is_told_in_every_shape(shape: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["compare", TARNHOLT, "--format", shape]) == 0
    got = capsys.readouterr()
    assert got.out == commands.compared(TARNHOLT, shape, 100).text
    assert "highway-code-126-m" in got.out
    assert all(line.startswith("Warning: ") for line in got.err.splitlines())


@pytest.mark.parametrize("name", ["tarnholt", "quillane", "sarvelle"])
def test_each_starter_has_a_table_beside_it(name: str) -> None:
    # A spread is the long part of an edition's figures, and no comparison looks at it.
    edition = dataclasses.replace(load_edition(ROOT / "site_config" / name), spread=None)
    found = compare(figures(edition), edition)
    assert found
    assert all(comparison.rows for comparison in found)
