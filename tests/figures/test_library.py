"""The library of published tables: whole, and each number the one of tests/published, which says how it was seen."""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from chartgen.errors import MachineFault
from chartgen.figures import library
from chartgen.figures.library import PublishedTable, table, tables
from chartgen.sources import BIBLIOGRAPHY

HERE = Path(__file__).parents[1]

# Id, file of tests/published, then which of its columns each of ours is.
COPIED = [
    ("highway-code-126-m", "uk_highway_code_126", "speed_mph", "total_m", "thinking_m", "braking_m"),
    ("highway-code-126-ft", "uk_highway_code_126", "speed_mph", "total_ft_printed", "thinking_ft", "braking_ft"),
    ("queensland-dry", "queensland_dry", "speed_kmh", "total_m", "reaction_m", "braking_m"),
    ("japan-textbook", "japan_standard_table", "speed_kmh", "total_m", "reaction_m", "braking_m"),
    ("aland", "aland_finland", "speed_kmh", "total_m", "reaction_m", "braking_m"),
    ("green-book-level-us", "aashto_ssd_level_us", "design_speed_mph", "ssd_design_ft", "brake_reaction_ft",
     "braking_level_ft"),
    ("green-book-level-metric", "aashto_ssd_level_metric", "design_speed_kmh", "ssd_design_m", "brake_reaction_m",
     "braking_level_m"),
    ("highway-handbook", "handbook_ssd_1mph_steps", "design_speed_mph", "ssd_design_ft", None, None),
    ("cd-109-desirable", "uk_cd109_ssd", "design_speed_kmh", "ssd_desirable_min_m", None, None),
    ("cd-109-one-step-below", "uk_cd109_ssd", "design_speed_kmh", "ssd_one_step_below_m", None, None),
    ("irc-66", "india_irc66_ssd", "speed_kmh", "ssd_rounded_m", "lag_m", "braking_m"),
    ("samoa-22-1109", "american_samoa_22_1109", "speed_mph", "stop_ft", None, "stop_ft"),
]  # fmt: skip


def printed(name: str) -> list[dict[str, str]]:
    lines = (HERE / "published" / f"{name}.csv").read_text(encoding="utf-8").splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


@pytest.mark.parametrize(("id", "file", "speed", "stopping", "reaction", "braking"), COPIED, ids=str)
def test_each_number_is_the_one_with_the_provenance(
    id: str, file: str, speed: str, stopping: str, reaction: str | None, braking: str | None
) -> None:
    theirs = printed(file)
    ours = table(id).rows
    assert [r.speed for r in ours] == [float(r[speed]) for r in theirs]
    assert [r.stopping for r in ours] == [float(r[stopping]) for r in theirs]
    assert [r.reaction for r in ours] == [None if reaction is None else float(r[reaction]) for r in theirs]
    assert [r.braking for r in ours] == [None if braking is None else float(r[braking]) for r in theirs]
    # "Partly memory" counts as memory: what was not read is not called read.
    assert [r.from_memory for r in ours] == [r["seen"] != "stored page" for r in theirs]


def test_the_licence_manual_s_row_is_its_printed_parts() -> None:
    theirs = {r["component"]: float(r["distance_ft"]) for r in printed("us_cdl_manual_55mph")}
    (hydraulic,), (air,) = table("cdl-manual-hydraulic").rows, table("cdl-manual-air").rows
    assert hydraulic.reaction == air.reaction == theirs["perception"] + theirs["reaction"]
    assert hydraulic.braking == air.braking == theirs["braking"]
    assert air.lag == theirs["air_brake_lag"]
    assert (hydraulic.stopping, air.stopping) == (theirs["total_hydraulic"], theirs["total_air_brakes"])


def test_every_table_is_copied_from_a_known_one() -> None:
    assert {t.id for t in tables()} == {row[0] for row in COPIED} | {"cdl-manual-hydraulic", "cdl-manual-air"}


def test_the_index_and_the_folder_name_the_same_tables() -> None:
    assert {p.stem for p in library.FOLDER.glob("*.csv")} == {t.id for t in tables()}
    assert {p.suffix for p in library.FOLDER.iterdir()} == {".csv", ".json"}


@pytest.mark.parametrize("one", tables(), ids=lambda t: t.id)
def test_a_record_says_what_the_reader_of_a_comparison_needs(one: PublishedTable) -> None:
    assert one.source in BIBLIOGRAPHY
    assert one.speed_unit in {"mph", "km/h"}
    assert one.distance_unit in {"m", "ft"}
    assert one.meaning in {"stopping", "sight-design", "test"}
    assert len(one.country) == 2
    assert one.remark.endswith(".")
    assert not set(one.stated) & set(one.fitted)
    assert set(one.stated) | set(one.fitted) <= {"reaction_time_s", "brake_lag_s", "deceleration_mps2"}
    assert set(one.rounding.parts) == set(one.parts)
    assert [r.speed for r in one.rows] == sorted({r.speed for r in one.rows}, reverse=one.source == "cd-109")
    for row in one.rows:
        given = {part for part in ("reaction", "lag", "braking") if getattr(row, part) is not None}
        assert given == set(one.parts), row
        assert row.stopping > 0.0
    assert one.at(one.rows[0].speed) == one.rows[0]
    assert one.at(1234.0) is None
    assert one.from_memory == any(r.from_memory for r in one.rows)
    assert one.cited.endswith(one.place)


def test_a_brake_test_is_marked_as_one() -> None:
    assert {t.id for t in tables() if t.meaning == "test"} == {"samoa-22-1109"}


def test_a_parameter_is_found_whether_stated_or_fitted() -> None:
    assert table("queensland-dry").value("reaction_time_s") == 1.5
    assert table("highway-code-126-m").value("deceleration_mps2") == 6.557
    assert table("japan-textbook").value("deceleration_mps2") is None


def test_an_unknown_table_is_a_key_error() -> None:
    with pytest.raises(KeyError):
        table("nowhere")


def test_a_missing_file_is_the_machine_s_fault(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "index.json").write_bytes((library.FOLDER / "index.json").read_bytes())
    monkeypatch.setattr(library, "FOLDER", tmp_path)
    with pytest.raises(MachineFault, match=r"highway-code-126-m\.csv"):
        tables.__wrapped__()
