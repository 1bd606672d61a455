"""Editions of every kind go the whole way: rules of thumb, adopted tables, all asked at once, perception apart."""

from __future__ import annotations

from pathlib import Path

import pytest

from chartgen import pipeline
from chartgen.errors import EditionFaults
from chartgen.press.preflight import check_pdf
from chartgen.press.render import render
from chartgen.site.check import check_pages


class Silent:
    """Nobody is told how far the work is."""

    def step(self, number: int, what: str, of: int) -> None:
        pass

    def done(self, what: str) -> None:
        pass


HEAD = """
[edition]
id = "kind"
status = "draft"
title = "Kinds"
publisher = "Vale forum"
reference = "K-1"
issue = "1"
issued = 2026-11-02
[languages]
use = ["en-GB"]
[units]
system = "metric"
[speeds]
steps = ["30 km/h", "50 km/h", "100 km/h", "120 km/h"]
"""
DRIVER = '[[driver]]\nid = "d"\nname = "Driver"\n'
TIMED = DRIVER + 'reaction_time = "1.5 s"\nperception = "0.75 s"\nsource = "invented"\n'
SURFACE = '[[surface]]\nid = "dry"\nname = "Dry"\n'
GRIPPY = SURFACE + "friction = 0.6\nfriction_range = [0.5, 0.7]\n"
VEHICLE = '[[vehicle]]\nid = "c"\nkind = "car"\nname = "Car"\n'
POSTER = """
[[poster]]
layout = "columns"
paper = "A3"
languages = "together"
read_from = "1.5 m"
headline = { en-GB = "At {speed:100 km/h} you need {stopping:100 km/h}." }
"""
TRAILER = (
    VEHICLE + 'mass = "1500 kg"\nlength = "4.4 m"\ntrailer = { length = "5 m", mass = "700 kg", braked = false }\n'
)
TABLE = '[[surface]]\nid = "wet"\nname = "Wet"\nfriction = { table = [["30 km/h", 0.6], ["100 km/h", 0.4]] }\n'
GRADIENT = (
    '[[surface]]\nid = "wet-2"\nname = "Wet 2"\nfriction = { sn0 = 55, png = 0.87 }\nvalid = ["30 km/h", "100 km/h"]\n'
)
TEXTURE = '[[surface]]\nid = "wet-3"\nname = "Wet 3"\nfriction = { f60 = 0.4, texture = "0.83 mm" }\n'
ADOPT = '[figures]\nadopt = "table.csv"\nadopt_source = "Vale survey, invented"\n'
WHOLE = "speed (km/h),reaction (m),braking (m),stopping (m)\n30,9,9,18\n50,15,25,40\n100,30,100,130\n120,36,144,180\n"
TOTALS = "speed (km/h),stopping (ft)\n30,60\n50,130\n100,420\n120,600\n"
SPREAD = "[figures.spread]\nsamples = 1024\n"

KINDS = {
    "rule of thumb": (HEAD + '[figures]\nmethod = "square-metric"\n' + DRIVER + SURFACE + VEHICLE + POSTER, ""),
    "adopted": (HEAD + ADOPT + DRIVER + SURFACE + VEHICLE + POSTER, WHOLE),
    "adopted totals": (HEAD + ADOPT + DRIVER + SURFACE + VEHICLE, TOTALS),
    "perception": (HEAD + SPREAD + TIMED + GRIPPY + VEHICLE + POSTER, ""),
    "laws": (HEAD + TIMED + TABLE + GRADIENT + TEXTURE + TRAILER, ""),
}


@pytest.mark.parametrize("kind", KINDS)
def test_it_goes_the_whole_way(kind: str, tmp_path: Path) -> None:
    edition, table = KINDS[kind]
    (tmp_path / "edition.toml").write_text(edition, encoding="utf-8")
    if table:
        (tmp_path / "table.csv").write_text(table, encoding="utf-8")
    _whole_way(tmp_path)


@pytest.mark.parametrize("name", ["asked", "adopted"])
def test_the_examples_go_the_whole_way_to_their_pages(name: str) -> None:
    _pages(Path(__file__).parent / "edition" / "data" / name)


def _pages(folder: Path) -> pipeline.Work:
    work = pipeline.work_out(pipeline.read([folder], Silent())[0], Silent())
    files = {file.path: file.data for file in pipeline._pages(work, ())}
    assert check_pages(files, work.edition, work.figures, work.languages) == ()
    return work


def _whole_way(folder: Path) -> None:
    work = _pages(folder)
    for sheet in pipeline._posters(work):
        assert check_pdf(render(sheet), sheet, work.figures, work.languages) == ()


def test_totals_alone_make_no_sheet(tmp_path: Path) -> None:
    (tmp_path / "edition.toml").write_text(HEAD + ADOPT + DRIVER + SURFACE + VEHICLE + POSTER, encoding="utf-8")
    (tmp_path / "table.csv").write_text(TOTALS, encoding="utf-8")
    with pytest.raises(EditionFaults) as refused:
        pipeline.read([tmp_path], Silent())
    (fault,) = refused.value.faults
    assert (fault.key, fault.problem) == (
        "poster[1]", "sheets are drawn of reaction and braking, and table.csv gives totals alone",
    )  # fmt: skip
