"""The stairs' question: from edition files to a build folder, is it always the same bytes, whole, and checked?"""

from __future__ import annotations

import json
import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from chartgen import cli, output, pipeline

ROOT = Path(__file__).parents[1]
EDITIONS = ("quillane", "sarvelle", "tarnholt")


def contents(folder: Path) -> dict[str, bytes]:
    return {p.relative_to(folder).as_posix(): p.read_bytes() for p in sorted(folder.rglob("*")) if p.is_file()}


def press(home: Path, cwd: Path, *arguments: str, **environment: str) -> subprocess.CompletedProcess[str]:
    command = [sys.executable, "-m", "chartgen", "press", *arguments]
    env = {**os.environ, "PYTHONPATH": str(home), "PYTHONSAFEPATH": "1", **environment}
    return subprocess.run(command, cwd=cwd, env=env, capture_output=True, text=True, timeout=300, check=False)


@pytest.fixture(scope="module")
def built(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """All demonstration editions, pressed once by one worker."""
    build = tmp_path_factory.mktemp("one") / "build"
    where = {"TZ": "UTC", "LC_ALL": "C", "PYTHONHASHSEED": "0", "SOURCE_DATE_EPOCH": "0"}
    done = press(ROOT, ROOT, "--into", str(build), "--workers", "1", **where)
    assert done.returncode == 0, done.stderr
    return build


@pytest.fixture
def copy(built: Path, tmp_path: Path) -> Path:
    return shutil.copytree(built, tmp_path / "build")


def test_each_edition_has_its_site_sheets_and_data(built: Path) -> None:
    assert sorted(p.name for p in built.iterdir()) == sorted((".chartgen", "index.html", *EDITIONS))
    for name in EDITIONS:
        about = json.loads((built / name / "manifest.json").read_bytes())["about"]
        tags = [language["tag"] for language in about["languages"]]
        assert len(tags) == 2
        assert all((built / name / tag / page).is_file() for tag in tags for page in ("index.html", "method.html"))
        assert (built / name / "data/figures.csv").is_file()
        assert (built / name / "data/figures.json").is_file()
        assert list((built / name / "sheets").glob("*.pdf"))
        assert output.differences(built / name) == ()
    assert len(list((built / "quillane/sheets").glob("*card*.pdf"))) >= 1


def test_another_folder_zone_language_seed_date_and_number_of_workers_give_the_same_bytes(
    built: Path, tmp_path: Path
) -> None:
    home = tmp_path / "anöther home"
    for part in ("chartgen", "templates", "site_config", "pyproject.toml"):
        copy = shutil.copytree if (ROOT / part).is_dir() else shutil.copy
        home.mkdir(exist_ok=True)
        copy(ROOT / part, home / part)
    cwd = tmp_path / "elsewhere"
    cwd.mkdir()
    where = {"TZ": "Pacific/Kiritimati", "LC_ALL": "ar_EG.UTF-8", "LANG": "cy", "PYTHONHASHSEED": "4711"}
    done = press(home, cwd, "--into", "out", "--workers", "3", SOURCE_DATE_EPOCH="2000000000", **where)
    assert done.returncode == 0, done.stderr
    one, other = contents(built), contents(cwd / "out")
    assert sorted(one) == sorted(other)
    assert [path for path in one if one[path] != other[path]] == []


def test_one_edition_pressed_again_leaves_the_others_and_the_way_in(copy: Path) -> None:
    before = contents(copy)
    assert cli.main(["press", str(ROOT / "site_config/sarvelle"), "--into", str(copy), "--quiet"]) == 0
    assert contents(copy) == before


def test_what_was_made_and_where_goes_to_stdout(copy: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["press", str(ROOT / "site_config/sarvelle"), "--into", str(copy)]) == 0
    got = capsys.readouterr()
    assert f"  {copy}/sarvelle/index.html  " in got.out
    assert f"  {copy}/sarvelle/data/figures.csv  " in got.out
    assert got.out.count(".pdf  ") == len(list((copy / "sarvelle/sheets").glob("*.pdf")))
    steps = [line.split("/6")[0] for line in got.err.splitlines() if "/6 " in line]
    assert steps == ["1", "2", "3", "4", "5", "6"]


def test_the_steps_are_the_same_in_the_docs_and_in_the_program() -> None:
    developers = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    for number, step in enumerate(pipeline.STEPS, 1):
        assert f"\n{number}. **{step}**" in developers
        assert f"\n{number}. **{step}**" in (pipeline.__doc__ or "")


def test_preflight_passes_what_was_made_and_finds_what_was_changed(
    copy: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    command = ["preflight", str(ROOT / "site_config/sarvelle"), "--into", str(copy), "--quiet"]
    assert cli.main(command) == 0
    assert capsys.readouterr().out == f"{copy / 'sarvelle'}: every check passes.\n"
    sheet = next((copy / "sarvelle/sheets").glob("*.pdf"))
    sheet.write_bytes(sheet.read_bytes() + b"\n")
    assert cli.main(command) == 1
    assert capsys.readouterr().err == (
        f"sarvelle: sheets/{sheet.name} was changed after it was made. [output.manifest]\n"
        "1 failed check; the build folder is as it was.\n"
    )


def test_preflight_of_what_was_never_made_is_told(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["preflight", str(ROOT / "site_config/sarvelle"), "--into", str(tmp_path), "--quiet"]) == 2
    assert capsys.readouterr().err == f"{tmp_path} holds no edition sarvelle.\nRight: chartgen press sarvelle.\n"


def test_a_product_that_fails_its_checks_is_not_published(
    copy: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """A digit of the data file altered between writing and checking: exit 1, and the old folder stands."""
    before = contents(copy)
    real = output._write

    def slip(path: Path, data: bytes) -> None:
        real(path, data.replace(b"7", b"8", 1) if path.name == "figures.csv" else data)

    monkeypatch.setattr(output, "_write", slip)
    command = ["press", str(ROOT / "site_config/sarvelle"), "--into", str(copy), "--quiet", "--workers", "1"]
    assert cli.main(command) == 1
    said = capsys.readouterr().err
    assert "sarvelle: data/figures.csv was changed after it was made. [output.manifest]\n" in said
    assert said.endswith("1 failed check; the build folder is as it was.\n")
    assert contents(copy) == before
    assert sorted(p.name for p in copy.parent.iterdir()) == ["build"]


SMALL = """
[edition]
id = "small"
status = "draft"
title = { en-GB = "Room to stop" }
publisher = { en-GB = "Tarnholt Vale Road Safety Forum" }
reference = "TVF-1"
issue = "ISSUE"
issued = 2026-11-02

[languages]
use = ["en-GB"]

[units]
system = "uk"

[speeds]
steps = ["20 mph", "30 mph", "40 mph"]

[[driver]]
id = "ready"
name = { en-GB = "Ready" }
reaction_time = "0.8 s"
source = "invented for this test"

[[surface]]
id = "dry"
name = { en-GB = "Dry asphalt" }
friction = 0.67
source = "invented for this test"

[[vehicle]]
id = "car"
kind = "car"
name = { en-GB = "Car" }

[[poster]]
layout = "columns"
paper = "A4"
headline = { en-GB = "At {speed:40 mph} you need {stopping:40 mph} to stop." }
show = { driver = "ready", vehicle = "car", surface = "dry" }
read_from = "0.5 m"
"""
# Presses issue after issue in a forked child, so that each begins with everything loaded, and kills it outright: told
# the step after whose beginning, and how much later.
KILLER = """
import os, random, signal, sys, time
from pathlib import Path
from chartgen import output, pipeline
folder, template = Path(sys.argv[1]), sys.argv[2]
pipeline.load_libraries()

class Pipe:
    def __init__(self, end): self.end = end
    def step(self, number, what, of): os.write(self.end, str(number).encode())
    def done(self, what): pass

def press(issue, end):
    edition = folder / "edition.toml"
    edition.write_text(template.replace("ISSUE", str(issue)))
    pipeline.press([edition], folder / "build", workers=2, progress=Pipe(end))

press(0, os.open(os.devnull, os.O_WRONLY))
moments, issue_now = random.Random(12), "0"
for issue in range(1, 21):
    reads, writes = os.pipe()
    child = os.fork()
    if child == 0:
        press(issue, writes)
        os._exit(0)
    os.close(writes)
    last = moments.choice((b"1", b"2", b"3", b"4", b"5", b"5", b"6", b"6"))
    while os.read(reads, 1) not in (last, b""): pass
    time.sleep(moments.uniform(0, 0.05 if last > b"4" else 0.3))
    os.kill(child, signal.SIGKILL)
    code = os.waitstatus_to_exitcode(os.waitpid(child, 0)[1])
    os.close(reads)
    whole = output.differences(folder / "build/small")
    about = output.read_manifest(folder / "build/small").about["issue"]
    assert whole == (), whole
    assert about in (issue_now, str(issue)), (about, issue)
    assert code == 0 or code == -9
    assert (folder / "build/index.html").is_file()
    print(last.decode(), code, "new" if about == str(issue) else "old", flush=True)
    issue_now = about
press(99, os.open(os.devnull, os.O_WRONLY))
assert sorted(os.listdir(folder)) == ["build", "edition.toml"], os.listdir(folder)
"""


def test_killed_at_twenty_random_moments_the_folder_is_the_old_or_the_new_one(
    tmp_path: Path, tmp_path_factory: pytest.TempPathFactory
) -> None:
    command = [sys.executable, "-c", KILLER, str(tmp_path), SMALL]
    # What killed engines leave behind lies where pytest clears away.
    beside = os.environ | {"TMPDIR": str(tmp_path_factory.mktemp("left"))}
    done = subprocess.run(command, cwd=ROOT, env=beside, capture_output=True, text=True, timeout=300, check=False)
    assert done.returncode == 0, done.stdout + done.stderr
    kills = [line.split() for line in done.stdout.splitlines()]
    assert len(kills) == 20
    # That the moments were worth it: most fell into the work, some found the old folder and some the new one.
    assert sum(code == "-9" for _, code, _ in kills) >= 10
    assert {found for _, _, found in kills} == {"old", "new"}
