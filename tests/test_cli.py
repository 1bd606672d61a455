"""The bell's question: does every command end with its code, results on stdout, and a sentence a person can act on?"""

from __future__ import annotations

import dataclasses
import json
import os
import shutil
import signal
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from datetime import date
from pathlib import Path

import pytest

from chartgen import cli, pipeline, report
from chartgen.edition.model import Edition
from chartgen.errors import ChartgenError, CommandFault, EditionFaults, Fault, Finding, MachineFault, ProductFaults

ROOT = Path(__file__).parents[1]
NO_NUMBER = "is not a number from 1 to 64.\nRight: see chartgen press --help.\n"
COMMANDS = "Right: press, figures, preflight, catalogue, compare, changes, begin.\n"


def chartgen(*arguments: str, cwd: Path = ROOT, **environment: str) -> subprocess.CompletedProcess[str]:
    """The command as a user has it: a process of its own."""
    command = [sys.executable, "-m", "chartgen", *arguments]
    env = {**os.environ, "PYTHONPATH": str(ROOT), **environment}
    return subprocess.run(command, cwd=cwd, env=env, capture_output=True, text=True, timeout=100, check=False)


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        ([], f"chartgen: no command was given.\n{COMMANDS}"),
        (["pres"], f'chartgen: there is no command "pres"; did you mean "press"?\n{COMMANDS}'),
        (["xyz"], f'chartgen: there is no command "xyz".\n{COMMANDS}'),
        (["proof", "a"], f'chartgen: not yet: "proof" is not made in this version.\n{COMMANDS}'),
        (["press", "--workers", "0"], f"chartgen press: argument --workers: '0' {NO_NUMBER}"),
        (["--quick"], None),
        (["press", "--quick"], None),
        (["figures"], None),
        (["figures", "tarnholt", "--format", "xml"], None),
        (["begin", "charities", "x"], None),
    ],
)
def test_a_wrong_command_line_is_told(
    arguments: list[str], said: str | None, capsys: pytest.CaptureFixture[str]
) -> None:
    assert cli.main(arguments) == 2
    got = capsys.readouterr()
    assert got.out == ""
    assert 1 <= got.err.count("\n") <= 2
    if said is not None:
        assert got.err == said


@pytest.mark.parametrize("argument", ["--help", "--version"])
def test_help_and_version_answer_at_once_on_stdout(argument: str, tmp_path: Path) -> None:
    got = chartgen(argument, cwd=tmp_path)
    assert (got.returncode, got.stderr) == (0, "")
    assert "chartgen" in got.stdout


def test_an_unknown_edition_is_told_with_a_near_name(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    assert cli.main(["figures", "tarnholm"]) == 2
    assert capsys.readouterr().err == (
        'There is no edition "tarnholm"; did you mean "tarnholt"?\n'
        "Right: a folder that holds edition.toml, that file, or one of: quillane, sarvelle, tarnholt.\n"
    )


def test_figures_go_to_stdout_and_warnings_to_stderr() -> None:
    for shape in ("text", "json", "csv"):
        got = chartgen("figures", "quillane", "--format", shape, SOURCE_DATE_EPOCH="0")
        assert got.returncode == 0, got.stderr
        assert "Warning" not in got.stdout or shape == "text"
        assert all(line.startswith("Warning: ") for line in got.stderr.splitlines())
    rows = json.loads(chartgen("figures", "quillane", "--format", "json").stdout)["rows"]
    assert rows[0]["printed"]["stopping"] > 0


def test_a_reader_that_closes_the_pipe_is_no_fault() -> None:
    command = f"{sys.executable} -m chartgen figures quillane --format csv | head -n 1"
    got = subprocess.run(["sh", "-c", command], cwd=ROOT, capture_output=True, text=True, check=True)
    assert got.stdout.startswith("driver,") or "driver" in got.stdout
    assert "Broken" not in got.stderr
    assert "Traceback" not in got.stderr


def test_output_is_utf_8_whatever_the_terminal_is_set_to() -> None:
    odd = chartgen(
        "figures", "tarnholt", LC_ALL="C", PYTHONUTF8="0", PYTHONCOERCECLOCALE="0", PYTHONIOENCODING="latin-1"
    )
    assert odd.stdout == chartgen("figures", "tarnholt").stdout


def test_faults_of_all_editions_are_told_at_once(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    for name, wrong in (("one", 'system = "uk"'), ("two", "[speeds]")):
        shutil.copytree(ROOT / "site_config/tarnholt", tmp_path / name)
        file = tmp_path / name / "edition.toml"
        text = file.read_text()
        assert wrong in text
        file.write_text(text.replace(wrong, wrong.replace('"uk"', '"imperial"').replace("[speeds]", "[speed]")))
    editions = [str(tmp_path / "one"), str(tmp_path / "two")]
    assert cli.main(["press", *editions, "--into", str(tmp_path / "b"), "--quiet"]) == 2
    err = capsys.readouterr().err
    assert f'{tmp_path}/one/edition.toml: units.system = "imperial": ' in err
    assert f"{tmp_path}/two/edition.toml: speed" in err
    assert err.endswith("; nothing was made.\n")
    assert not (tmp_path / "b").exists()


def test_two_editions_with_one_id_are_a_fault(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    copy = shutil.copytree(ROOT / "site_config/tarnholt", tmp_path / "copy")
    original = str(ROOT / "site_config/tarnholt")
    assert cli.main(["press", original, str(copy), "--into", str(tmp_path / "b"), "--quiet"]) == 2
    assert capsys.readouterr().err == (
        f'{copy}/edition.toml: edition.id = "tarnholt": {original}/edition.toml has this id already. '
        "Right: an id of its own.\n1 fault; nothing was made.\n"
    )


def test_what_is_not_made_yet_is_refused_by_name(make_edition: Callable[..., Edition]) -> None:
    edition = make_edition(unmade=("press.marks: cut marks come with the press edition",))
    with pytest.raises(EditionFaults) as caught:
        pipeline.refuse_unmade([edition])
    assert report.sentences(caught.value) == (
        "tried/edition.toml: press.marks: not yet: cut marks come with the press edition. Right: leave it out.",
        "1 fault; nothing was made.",
    )


ERRORS: list[tuple[ChartgenError, list[str]]] = [
    (
        EditionFaults((Fault("a.toml", "speeds", "this is needed", 'steps = ["30 mph"]', near="speed"),)),
        [
            'a.toml: speeds: this is needed. Right: steps = ["30 mph"]. Did you mean "speed"?',
            "1 fault; nothing was made.",
        ],
    ),
    (
        EditionFaults((Fault("a", "", "empty"), Fault("b", "c", "d", given="1"))),
        ["a: empty.", "b: c = 1: d.", "2 faults; nothing was made."],
    ),
    (
        ProductFaults((Finding("preflight.size", "v/a.pdf", "too small"),)),
        ["v/a.pdf: too small. [preflight.size]", "1 failed check; the build folder is as it was."],
    ),
    (CommandFault("no such thing", "that thing"), ["no such thing.", "Right: that thing."]),
    (MachineFault("No space left.", "Make some"), ["No space left.", "Make some."]),
    (MachineFault("No space left."), ["No space left."]),
]


CODES = (2, 2, 1, 2, 3, 3)


@pytest.mark.parametrize(("error", "code", "lines"), [(e, c, t) for (e, t), c in zip(ERRORS, CODES, strict=True)])
def test_every_error_has_its_code_and_its_words(
    error: Exception, code: int, lines: list[str], monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    def fail(*_: object) -> int:
        raise error

    monkeypatch.setattr(cli, "_figures", fail)
    assert cli.main(["figures", "x"]) == code
    assert capsys.readouterr().err.splitlines() == lines


def test_what_nobody_foresaw_is_one_line_and_a_log(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    def fail(*_: object) -> int:
        raise ZeroDivisionError("division by zero")

    monkeypatch.setattr(cli, "_figures", fail)
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path))
    assert cli.main(["figures", "x"]) == 3
    (log,) = tmp_path.iterdir()
    said = f"Something went wrong inside chartgen: ZeroDivisionError: 'division by zero'. Details: {log}\n"
    assert capsys.readouterr().err == said
    assert "Traceback" in log.read_text()


def test_what_nobody_foresaw_is_one_line_even_where_no_log_can_be_written(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    def fail(*_: object) -> int:
        raise ZeroDivisionError("division by zero")

    monkeypatch.setattr(cli, "_figures", fail)
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path / "gone"))
    assert cli.main(["figures", "x"]) == 3
    (line,) = capsys.readouterr().err.splitlines()
    assert line.startswith(
        "Something went wrong inside chartgen: ZeroDivisionError: 'division by zero'. Details: test_cli.py, line "
    )
    assert line.endswith("; no file could be written (No such file or directory).")


@pytest.mark.parametrize("how", [signal.SIGINT, signal.SIGTERM])
def test_stopped_midway_nothing_is_left_behind(tmp_path: Path, how: signal.Signals) -> None:
    command = [sys.executable, "-m", "chartgen", "press", "tarnholt", "--into", str(tmp_path / "build")]
    with subprocess.Popen(command, cwd=ROOT, stderr=subprocess.PIPE, text=True) as running:
        assert running.stderr is not None
        for line in running.stderr:
            if line.startswith("3/6"):
                time.sleep(0.3)
                running.send_signal(how)
                break
        assert running.stderr.read() == "Stopped. The build folder is as it was.\n"
    assert running.returncode == 130
    assert list(tmp_path.iterdir()) == []


REVIEW = date(2027, 11, 2)


@pytest.mark.parametrize(
    ("on", "said"),
    [
        (date(2027, 9, 2), None),
        (date(2027, 9, 3), "edition.review_by: the review is due on 2027-11-02."),
        (REVIEW, "edition.review_by: the review is due on 2027-11-02."),
        (date(2027, 11, 3), "edition.review_by: the review was due on 2027-11-02; this edition is out of date."),
    ],
)
def test_a_review_is_called_for_sixty_days_before(
    make_edition: Callable[..., Edition], on: date, said: str | None
) -> None:
    edition = make_edition(review_by=REVIEW)
    assert cli.review_warning(edition, on) == said
    assert cli.review_warning(dataclasses.replace(edition, review_by=None), on) is None


def test_the_date_of_the_build_may_be_given(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1000000000")
    assert cli.today() == date(2001, 9, 9)  # `date -u -d @1000000000`
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "soon")
    assert abs((cli.today() - date.today()).days) <= 1  # noqa: DTZ011  # the day of this machine is meant


@pytest.mark.parametrize(("starter", "languages"), [("charity", 2), ("fleet", 2), ("authority", 2)])
def test_begin_makes_an_edition_with_an_id_of_its_own(
    starter: str, languages: int, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    folder = tmp_path / "Our Own Roads"
    assert cli.main(["begin", starter, str(folder)]) == 0
    got = capsys.readouterr()
    assert f"{folder}/edition.toml\n" in got.out
    assert got.err == f"Change it to your own, then: chartgen press {folder}\n"
    from chartgen.edition.load import load_edition

    edition = load_edition(folder)
    assert edition.id == "our-own-roads"
    assert len(edition.languages) == languages
    assert cli.main(["begin", starter, str(folder)]) == 2
    assert capsys.readouterr().err == f'"{folder}" is there already.\nRight: a folder that is empty or not there yet.\n'


def test_begin_refuses_a_name_that_makes_no_id(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["begin", "fleet", str(tmp_path / "طرق")]) == 2
    said = 'the folder name "طرق" makes no id.\nRight: a name with letters a to z or digits.\n'
    assert capsys.readouterr().err == said


def test_the_readme_names_every_command_and_every_starter() -> None:
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    for name in ("press", "figures", "preflight", "begin"):
        assert f"`chartgen {name} " in readme
    for starter, edition in cli.STARTERS.items():
        assert f"`{starter}`" in readme or f" {starter} " in readme
        assert f"`{edition}`" in readme
