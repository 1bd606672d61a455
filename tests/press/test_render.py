"""The printer's questions: does it refuse what is wrong, and is what it makes the same wherever it is made?"""

from __future__ import annotations

import dataclasses
import gc
import hashlib
import importlib
import os
import subprocess
import sys
import tempfile
from pathlib import Path
from types import ModuleType

import pytest

from chartgen.errors import MachineFault, ProductFaults
from chartgen.press import engine
from chartgen.press.render import render
from chartgen.sheets.sheet import Sheet

HEAD = (
    '<!doctype html><html lang="en-GB"><head><title>Tried</title>'
    '<meta name="dcterms.created" content="2026-03-02T00:00:00Z"><style>@page{size:100mm 80mm;margin:5mm}'
    "body{font:4mm/1.2 'IBM Plex Sans Condensed',Tajawal;margin:0}</style></head><body>"
)


def sheet(body: str, **changes: object) -> Sheet:
    plain = Sheet(
        path="sheets/tried.pdf", title="Tried", lang="en-GB", html=HEAD + body, width_mm=100, height_mm=80, pages=1,
        inked=(), facts=(),
    )  # fmt: skip
    return dataclasses.replace(plain, **changes)  # type: ignore[arg-type]  # any field


def codes(body: str, **changes: object) -> list[str]:
    with pytest.raises(ProductFaults) as caught:
        render(sheet(body, **changes))
    return [finding.code for finding in caught.value.findings]


def test_a_plain_sheet_is_a_pdf() -> None:
    assert render(sheet("<h1>Stop in 96 m.</h1>")).startswith(b"%PDF-1.7")


def test_nothing_is_left_among_the_temporary_files(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """A worker never comes to collect what the engine keeps; here nothing is collected either."""
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path))
    gc.disable()
    try:
        render(sheet("<h1>Stop in 96 m.</h1>"))
    finally:
        gc.enable()
    assert not list(tmp_path.iterdir())


def test_without_room_for_temporary_files_it_says_so(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path / "gone"))
    with pytest.raises(MachineFault) as caught:
        render(sheet("<h1>Stop in 96 m.</h1>"))
    assert str(caught.value) == "No folder for temporary files can be made (No such file or directory)."
    assert caught.value.remedy == "Make room there, or name another folder in TMPDIR"


@pytest.mark.parametrize(
    "body",
    [
        '<div style="width:10mm">Geschwindigkeitsbegrenzung</div>',
        '<div style="height:6mm;overflow:hidden"><p>' + "one two three four five six " * 9 + "</p></div>",
        '<div style="position:absolute;left:90mm;top:0;white-space:nowrap">leaves the page</div>',
        '<p style="position:absolute;top:0">underneath</p><p style="position:absolute;top:1mm">above it</p>',
    ],
    ids=["too wide", "cut off", "off the page", "on other text"],
)
def test_a_planted_overflow_is_found(body: str) -> None:
    assert set(codes(body)) == {"press.overflow"}


def test_neighbouring_lines_are_no_overflow() -> None:
    render(sheet("<p>fgjpqy ÅÉ many lines of ordinary text that the engine breaks by itself, over and over. " * 4))


def test_a_missing_letter_is_a_fault_and_no_other_font_comes_in() -> None:
    assert codes("<p>停</p>") == ["press.engine"]


def test_an_unknown_property_is_a_fault() -> None:
    assert codes('<p style="mix-blend-mode:multiply">x</p>') == ["press.engine"]


def test_too_many_pages_and_a_wrong_size_are_faults() -> None:
    assert codes('<p>x</p><p style="break-before:page">y</p>') == ["press.pages"]
    assert codes("<p>x</p>", width_mm=101) == ["press.pages"]


def test_nothing_but_font_files_is_fetched() -> None:
    assert "press.engine" in codes('<img alt="x" src="https://two-ways.example/x.png">')


def test_fontconfig_is_set_back_after_a_sheet(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("FONTCONFIG_FILE", "/elsewhere")
    render(sheet("<p>x</p>"))
    assert os.environ["FONTCONFIG_FILE"] == "/elsewhere"
    monkeypatch.delenv("FONTCONFIG_FILE")
    render(sheet("<p>x</p>"))
    assert "FONTCONFIG_FILE" not in os.environ


def test_a_missing_library_is_the_machines_fault_and_says_what_to_install(monkeypatch: pytest.MonkeyPatch) -> None:
    def broken(name: str) -> ModuleType:
        raise OSError("cannot load library 'libpango-1.0-0'")

    engine.load.cache_clear()
    monkeypatch.setattr(importlib, "import_module", broken)
    try:
        with pytest.raises(MachineFault) as caught:
            engine.load()
    finally:
        monkeypatch.undo()
        engine.load.cache_clear()
    said = "The text layout library Pango cannot be loaded (cannot load library 'libpango-1.0-0')."
    assert caught.value.problem == said
    assert caught.value.remedy == "Run: apt-get install libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz-subset0"


def test_a_missing_font_is_the_machines_fault() -> None:
    with pytest.raises(MachineFault, match="is not installed"):
        engine.font_path("No Such Family", 400)


PROGRAM = """
import hashlib, sys
sys.path.insert(0, sys.argv[1])
from chartgen.edition.load import load_edition
from chartgen.figures.table import figures
from chartgen.language.load import languages
from chartgen.press.render import render
from chartgen.sheets.posters import posters
edition = load_edition(sys.argv[2])
sheets = posters(edition, figures(edition), languages(edition))
order = sheets if sys.argv[3] == "forward" else sheets[::-1]
for path, digest in sorted((s.path, hashlib.sha256(render(s)).hexdigest()) for s in order):
    print(path, digest)
"""


def test_two_processes_print_the_same_bytes(tmp_path: Path) -> None:
    root = Path(__file__).parents[2]
    edition = root / "tests/sheets/editions/two-ways.toml"
    started = []
    for seed, zone, tongue, order in (("1", "UTC", "C.UTF-8", "forward"), ("2", "Asia/Tokyo", "fr_FR.UTF-8", "back")):
        folder = tmp_path / seed
        folder.mkdir()
        environment = {**os.environ, "PYTHONHASHSEED": seed, "TZ": zone, "LANG": tongue, "LC_ALL": tongue}
        environment |= {"SOURCE_DATE_EPOCH": seed} if seed == "2" else {}
        command = [sys.executable, "-c", PROGRAM, str(root), str(edition), order]
        started.append(subprocess.Popen(command, cwd=folder, env=environment, stdout=subprocess.PIPE, text=True))
    heard = [process.communicate()[0].splitlines() for process in started]
    assert [process.returncode for process in started] == [0, 0]
    assert not [path for seed in "12" for path in (tmp_path / seed).iterdir()]
    assert len(heard[0]) == 4
    assert heard[0] == heard[1]


def test_the_same_sheet_twice_in_one_process_is_the_same() -> None:
    one = sheet("<h1>Stop in 96 m.</h1><p lang='ar' dir='rtl'>مسافة التوقف</p>")
    assert len({hashlib.sha256(render(one)).digest() for _ in range(2)}) == 1
