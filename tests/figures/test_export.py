"""The public data: keys by name, JSON and CSV alike, empty where there is nothing, the same bytes each time."""

from __future__ import annotations

import csv
import io
import json
import os
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from chartgen.edition.load import load_edition
from chartgen.edition.model import Cards, Case, Edition, Friction, Paper, Rounding, Source, Surface, Vehicle
from chartgen.figures.export import plain, to_csv, to_json, whole
from chartgen.figures.record import Figures
from chartgen.figures.table import figures

Make = Callable[..., Edition]
DATA = Path(__file__).parent / "data"

NUMBER: dict[str, Any] = {"type": "number"}
MAYBE: dict[str, Any] = {"type": ["number", "null"]}
TEXT: dict[str, Any] = {"type": "string"}
PRINTED = {"speed": NUMBER, "reaction": NUMBER, "lag": NUMBER, "braking": MAYBE, "stopping": MAYBE}
ROW = {
    "driver": TEXT, "vehicle": TEXT, "surface": TEXT, "grade": NUMBER, "method": TEXT, "speed_mps": NUMBER,
    "reaction_distance_m": NUMBER, "lag_distance_m": NUMBER, "braking_distance_m": MAYBE, "stopping_distance_m": MAYBE,
    "stopping_time_s": MAYBE, "stops": {"type": "boolean"},
    "printed": {"type": "object", "properties": PRINTED, "required": list(PRINTED)},
    # The trace and the fields of the assumption line.
    "reaction_time_s": NUMBER, "brake_lag_s": NUMBER, "build_up_s": NUMBER, "friction": MAYBE,
    "full_deceleration_mps2": NUMBER, "load": {"type": ["string", "null"]}, "reason": {"type": ["string", "null"]},
    "rounding": {"type": "object", "required": ["unit", "step", "reaction", "lag", "braking", "total"]},
    "sources": {"type": "array", "items": TEXT, "minItems": 2},
}  # fmt: skip
SCHEMA = {
    "type": "object",
    "properties": {
        "edition": TEXT,
        "speed_unit": {"enum": ["mph", "km/h"]},
        "distance_unit": {"enum": ["m", "ft"]},
        "warnings": {"type": "array"},
        "rows": {"type": "array", "minItems": 1, "items": {"type": "object", "properties": ROW, "required": list(ROW)}},
    },
    "required": ["edition", "speed_unit", "distance_unit", "warnings", "rows"],
}
"""The public keys as the house promises them, written out here apart from the code that writes them."""


@pytest.fixture
def icy(make_edition: Make) -> Figures:
    """A lorry with all that there is, on a downgrade of dry road and of ice, where it does not stop."""
    here = Source(text="invented, with “marks”, commas", kind="chosen by us", from_memory=True)
    lorry = Vehicle(
        id="lorry", kind="lorry", name={"en-GB": "Lorry"}, load="laden", max_deceleration_mps2=5.0, brake_lag_s=0.4,
        length_m=16.5, source=here,
    )  # fmt: skip
    surfaces = tuple(
        Surface(id=i, name={"en-GB": i}, friction=Friction(mu=mu), source=here)
        for i, mu in (("dry", 0.7), ("ice", 0.05))
    )
    a6 = Paper(name="A6", width_mm=105, height_mm=148)
    edition = make_edition(
        also_unit="ft",
        vehicles=(lorry,),
        surfaces=surfaces,
        rounding=Rounding(step=0.5),
        cases=(Case(drivers=("ready",), vehicles=("lorry",), surfaces=("dry", "ice"), grades=(-0.09,)),),
        cards=Cards(size=a6, sheet=a6, roster=(), driver="ready", surfaces=("dry",), grade=-0.09, gap="gap/per-length"),
    )
    return figures(edition)


def test_json_keeps_the_public_keys(icy: Figures, make_edition: Make) -> None:
    for found in (icy, figures(make_edition())):
        jsonschema.validate(json.loads(to_json(found)), SCHEMA)


@pytest.mark.parametrize("key", ["driver", "stopping_time_s", "printed"])
def test_the_schema_sees_a_key_that_is_gone(key: str, icy: Figures) -> None:
    document = json.loads(to_json(icy))
    del document["rows"][-1][key]
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.validate(document, SCHEMA)


def test_rows_stand_in_the_order_of_the_table(icy: Figures) -> None:
    rows = json.loads(to_json(icy))["rows"]
    assert [(r["surface"], r["printed"]["speed"]) for r in rows] == [("dry", 20), ("dry", 30), ("ice", 20), ("ice", 30)]


def test_what_does_not_stop_is_null_and_the_rest_stays(icy: Figures) -> None:
    row = json.loads(to_json(icy))["rows"][-1]
    assert (row["stops"], row["reason"]) == (False, "never-at-rest")
    assert [row[k] for k in ("braking_distance_m", "stopping_distance_m", "stopping_time_s")] == [None] * 3
    assert row["printed"] == {
        "speed": 30, "reaction": 11, "lag": 5.5, "braking": None, "stopping": None, "gap_s": 6, "gap_distance": 80.5,
    }  # fmt: skip
    assert row["printed_also"]["braking"] is None
    assert row["printed_also"]["reaction"] == 36


def test_whole_numbers_in_printed_are_integers(icy: Figures) -> None:
    text = to_json(icy)
    printed = json.loads(text)["rows"][1]["printed"]
    assert {k: type(printed[k]) for k in ("speed", "reaction", "lag")} == {"speed": int, "reaction": int, "lag": float}
    assert '"speed": 30,' in text


def test_each_row_carries_its_trace(icy: Figures) -> None:
    document = json.loads(to_json(icy))
    row = document["rows"][0]
    assert row["method"] == "first-principles"
    assert row["rounding"] == {
        "unit": "m", "step": 0.5, "also_unit": "ft", "also_step": 1, "reaction": "up", "lag": "up", "braking": "up",
        "total": "sum-of-parts",
    }  # fmt: skip
    assert row["sources"] == ["driver/ready", "surface/dry", "vehicle/lorry", "gap/per-length"]
    assert set(row["sources"]) <= set(document["sources"])
    assert document["sources"]["vehicle/lorry"] == {
        "text": "invented, with “marks”, commas", "kind": "chosen by us", "from_memory": True,
    }  # fmt: skip
    assert [row[k] for k in ("reaction_time_s", "brake_lag_s", "build_up_s", "max_deceleration_mps2")] == [
        0.8,
        0.4,
        0,
        5,
    ]
    assert (row["friction"], row["load"], row["friction_f60"]) == (0.7, "laden", None)


def test_notices_are_among_the_warnings(icy: Figures) -> None:
    warnings = json.loads(to_json(icy))["warnings"]
    assert [w["code"] for w in warnings] == ["does-not-stop"]
    assert warnings[0]["rows"] == [2, 3]
    assert warnings[0]["text"].startswith("Vehicle “lorry” does not stop on surface “ice”")


def flat(row: dict[str, Any]) -> dict[str, str]:
    """A JSON row as the CSV should have it; written apart from the code that writes it."""
    out: dict[str, str] = {}
    for key, value in row.items():
        for name, item in ((f"{key}_{k}", v) for k, v in value.items()) if isinstance(value, dict) else [(key, value)]:
            out[name] = " ".join(item) if isinstance(item, list) else "" if item is None else str(item)
    return out | {"stops": str(row["stops"]).lower()}


def test_csv_holds_the_same_values_flat(icy: Figures) -> None:
    text = to_csv(icy)
    assert text.endswith("\r\n")
    assert text.count("\r\n") == text.count("\n") == 1 + len(icy.table)
    rows = list(csv.DictReader(io.StringIO(text, newline="")))
    assert rows == [flat(row) for row in json.loads(to_json(icy))["rows"]]
    for name in ("printed_speed", "printed_reaction", "printed_lag", "printed_braking", "printed_stopping"):
        assert name in rows[0]


def test_csv_quotes_as_rfc_4180_asks() -> None:
    """No value of the table can hold a comma or a quote today; a change that brings one must not break the file."""
    import dataclasses

    found = figures(load_edition(DATA / "rule126"))
    odd = dataclasses.replace(found, table=found.table.assign(reason='a "b", c'))
    rows = list(csv.reader(io.StringIO(to_csv(odd), newline=""), strict=True))
    assert {len(r) for r in rows} == {len(rows[0])}
    assert rows[1][rows[0].index("reason")] == 'a "b", c'
    assert '"a ""b"", c"' in to_csv(odd)


@pytest.mark.parametrize(
    ("value", "public"), [(float("nan"), None), (float("inf"), None), ("", None), (-0.0, 0.0), (True, True), (1.5, 1.5)]
)
def test_plain(value: object, public: object) -> None:
    assert plain(value) == public
    assert str(plain(value)) == str(public)


def test_plain_refuses_what_has_no_public_form() -> None:
    with pytest.raises(TypeError, match="no public form"):
        plain([1])


def test_whole() -> None:
    assert [repr(whole(v)) for v in (23.0, 23.5, float("nan"), -0.0)] == ["23", "23.5", "None", "0"]


def test_same_bytes_whatever_the_surroundings(tmp_path: Path) -> None:
    """Another folder, time zone, language and hash seed; both files."""
    code = (
        "import sys; from chartgen.edition.load import load_edition; from chartgen.figures.table import figures;"
        "from chartgen.figures.export import to_csv, to_json; f = figures(load_edition(sys.argv[1]));"
        "sys.stdout.buffer.write((to_json(f) + to_csv(f)).encode())"
    )
    root = str(Path(__file__).resolve().parents[2])
    out = []
    for folder, extra in (
        (root, {"TZ": "UTC", "LANG": "C.UTF-8", "PYTHONHASHSEED": "1"}),
        (str(tmp_path), {"TZ": "Asia/Tokyo", "LANG": "tr_TR.UTF-8", "PYTHONHASHSEED": "4242"}),
    ):
        surroundings = os.environ | extra | {"PYTHONPATH": root}
        done = subprocess.run(
            [sys.executable, "-c", code, str(DATA / "licence-manual")],
            cwd=folder, env=surroundings, capture_output=True, check=True,
        )  # fmt: skip
        out.append(done.stdout)
    assert out[0] == out[1]
    assert out[0]
