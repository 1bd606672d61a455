"""The list of the catalogue: does it say everything, in columns that fit, and the same to programs?"""

from __future__ import annotations

import csv
import io
import json

import pytest

from chartgen import cli
from chartgen.edition.catalogue import SHELVES
from chartgen.edition.listing import to_csv, to_json, to_text

COUNT = sum(len(shelf) for shelf in SHELVES.values())


@pytest.mark.parametrize("width", [60, 80, 100, 140])
def test_the_text_fits_its_width_and_says_every_source(width: int) -> None:
    text = to_text(width=width)
    assert text.endswith(".\n")
    assert max(map(len, text.splitlines())) <= width
    flat = " ".join(text.split())
    for shelf in SHELVES.values():
        for preset in shelf.values():
            said = " ".join(preset.source.text.split())
            assert f"{said}{'. From memory.' if preset.source.from_memory else '.'}" in flat
            assert preset.name["en-GB"] in flat


@pytest.mark.parametrize("kind", SHELVES)
def test_columns_stand_under_one_another(kind: str) -> None:
    lines = [line for line in to_text([kind]).splitlines() if line.startswith(f"{kind}/")]
    assert len(lines) == len(SHELVES[kind])
    starts = {tuple(i for i in range(1, len(line)) if line[i - 2 : i] == "  " and line[i] != " ") for line in lines}
    assert len({places[0] for places in starts}) == 1
    assert len({places[-1] for places in starts}) == 1


def test_a_line_has_value_range_and_kind() -> None:
    lines = to_text().splitlines()
    assert "reaction/licence-manual 2.5 s 2.5 to 2.75 s rule of thumb" in [" ".join(line.split()) for line in lines]
    assert "gap/two-seconds 2 s one figure rule of thumb" in [" ".join(line.split()) for line in lines]
    assert "vehicle/rigid-un-unladen 5 m/s² one figure statute" in [" ".join(line.split()) for line in lines]
    assert any(line.endswith("lorry; unladen; lag 0.54 s; length 12 m; a test figure") for line in lines)


def test_the_json_has_each_preset_with_all_its_names() -> None:
    presets = json.loads(to_json())["presets"]
    assert len(presets) == COUNT
    assert {tuple(preset) for preset in presets} == {
        ("key", "shelf", "name", "value", "unit", "low", "high", "kind", "work", "place", "year", "source",
         "from_memory", "doubtful", "parameters")
    }  # fmt: skip
    by_key = {preset["key"]: preset for preset in presets}
    surprise = by_key["reaction/surprise"]
    assert surprise["parameters"]["mu"] == 0.17
    assert surprise["parameters"]["sigma"] == 0.44
    assert surprise["from_memory"] is True
    assert by_key["surface/grass-wet"]["work"] is None
    assert by_key["surface/grass-wet"]["place"] is None
    assert by_key["surface/ice-smooth"]["parameters"]["table"] == [[45.0, 0.1], [48.0, 0.07], [113.0, 0.07]]
    assert by_key["vehicle/car-trailer-unbraked"]["parameters"]["trailer"] == {
        "length_m": 5.0, "braked": False, "mass_kg": 750.0,
    }  # fmt: skip
    assert by_key["headlight/main-least"]["parameters"] == {"reach_m": 100.0}


def test_the_csv_has_the_same_rows() -> None:
    rows = list(csv.DictReader(io.StringIO(to_csv(), newline="")))
    presets = json.loads(to_json())["presets"]
    assert list(rows[0]) == list(presets[0])
    assert [row["key"] for row in rows] == [preset["key"] for preset in presets]
    assert [float(row["value"]) for row in rows] == [preset["value"] for preset in presets]
    assert {row["from_memory"] for row in rows} == {"true", "false"}


def test_the_command_lists_one_shelf_or_all(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["catalogue", "gap", "--format", "json"]) == 0
    assert {p["shelf"] for p in json.loads(capsys.readouterr().out)["presets"]} == {"gap"}
    assert cli.main(["catalogue", "--format", "csv"]) == 0
    assert capsys.readouterr().out == to_csv()
    assert cli.main(["catalogue"]) == 0
    assert capsys.readouterr().out == to_text(width=100)
    assert tuple(SHELVES) == cli.SHELVES


def test_the_command_refuses_a_kind_that_is_none(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["catalogue", "drivers"]) == 2
    got = capsys.readouterr()
    assert got.out == ""
    assert "invalid choice: 'drivers'" in got.err
    assert "reaction" in got.err
