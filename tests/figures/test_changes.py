"""Changes: is every printed number that differs named, and is its reason the input that was changed, and no other?"""

from __future__ import annotations

import copy
import csv
import dataclasses
import io
import json
from collections.abc import Callable
from typing import Any

import pytest

from chartgen.edition.model import (
    Adopted,
    AdoptedRow,
    Cards,
    Case,
    Driver,
    Edition,
    Friction,
    Paper,
    Questions,
    Reaction,
    Rounding,
    Source,
    Spread,
    Surface,
    Vehicle,
)
from chartgen.figures import changes_text
from chartgen.figures.changes import BASIC, Change, Changes, changes, printed_numbers
from chartgen.figures.export import document, to_json
from chartgen.figures.table import figures

Make = Callable[..., Edition]
HERE = Source(text="invented")
A6 = Paper(name="A6", width_mm=105, height_mm=148)
WAYS: dict[str, Any] = {
    "speeds": (20.0, 30.0, 50.0),
    "also_unit": "ft",
    "drivers": (
        Driver(id="ready", name={"en-GB": "Ready"}, reaction=Reaction(time_s=0.8, perception_s=0.4), source=HERE),
        Driver(
            id="usual", name={"en-GB": "Usual"}, source=HERE,
            reaction=Reaction(time_s=1.86, percentile="p85", mu=0.17, sigma=0.44),
        ),
    ),
    "surfaces": (
        Surface(
            id="dry", name={"en-GB": "Dry"}, source=HERE, state="dry", friction=Friction(mu=0.7, low=0.6, high=0.8)
        ),
        Surface(id="wet", name={"en-GB": "Wet"}, source=HERE, state="wet", friction=Friction(f60=0.5, sp_kmh=90.0)),
    ),
    "vehicles": (
        Vehicle(
            id="lorry", kind="lorry", name={"en-GB": "Lorry"}, load="laden", max_deceleration_mps2=5.0, brake_lag_s=0.4,
            build_up_s=0.2, brake_efficiency=0.9, length_m=16.5,
        ),
    ),
    "cards": Cards(
        size=A6, sheet=A6, roster=(), driver="ready", surfaces=("dry",), grade=0.0, gap="gap/per-length"
    ),
    "spread": Spread(samples=256, seed=1),
    "questions": Questions(
        residual_from=30.0, sight_m=40.0, headlight="headlight/dipped-least", gaps=("gap/two-seconds",), driver="ready",
        surface="dry",
    ),
}  # fmt: skip
"""An edition that asks for everything, so that every kind of printed number is there."""


@pytest.fixture
def whole(make_edition: Make) -> Edition:
    return make_edition(**WAYS)


def issue(edition: Edition) -> dict[str, Any]:
    return document(figures(edition))


def first(records: tuple[Any, ...], **fields: Any) -> tuple[Any, ...]:
    """The records with fields of the first one changed."""
    return (dataclasses.replace(records[0], **fields), *records[1:])


def friction(edition: Edition, number: int, **fields: Any) -> Edition:
    surfaces = list(edition.surfaces)
    old = surfaces[number]
    surfaces[number] = dataclasses.replace(old, friction=dataclasses.replace(old.friction, **fields))
    return dataclasses.replace(edition, surfaces=tuple(surfaces))


def reaction(edition: Edition, number: int, **fields: Any) -> Edition:
    drivers = list(edition.drivers)
    old = drivers[number]
    drivers[number] = dataclasses.replace(old, reaction=dataclasses.replace(old.reaction, **fields))
    return dataclasses.replace(edition, drivers=tuple(drivers))


def vehicle(edition: Edition, **fields: Any) -> Edition:
    return dataclasses.replace(edition, vehicles=first(edition.vehicles, **fields))


def rounding(edition: Edition, **fields: Any) -> Edition:
    return dataclasses.replace(edition, rounding=dataclasses.replace(edition.rounding, **fields))


def asked(edition: Edition, **fields: Any) -> Edition:
    return dataclasses.replace(edition, questions=dataclasses.replace(edition.questions, **fields))


def cells(found: Changes) -> list[Change]:
    return [change for row in found.rows for change in row.changes]


def key(row: dict[str, Any]) -> tuple[Any, ...]:
    return (row["driver"], row["vehicle"], row["surface"], row["grade"], row["printed"]["speed"])


def differing_by_hand(old: dict[str, Any], new: dict[str, Any]) -> set[tuple[Any, ...]]:
    """Every printed number that differs, found without the program: in the text of the two files."""
    was = {key(row): row for row in json.loads(json.dumps(old))["rows"]}
    out = set()
    for row in json.loads(json.dumps(new))["rows"]:
        before = was[key(row)]
        for group in ("printed", "printed_also"):
            out |= {(key(row), f"{group}.{n}") for n, v in row[group].items() if v != before[group].get(n)}
        for rule, gap in row["gaps"].items():
            for name, value in gap.items():
                if name.startswith("printed") and value != before["gaps"][rule][name]:
                    out.add((key(row), f"gaps.{rule}.{name}"))
    return out


EDITS: list[tuple[str, Callable[[Edition], Edition], set[str]]] = [
    ("reaction time", lambda e: reaction(e, 0, time_s=1.3), {"reaction_time_s", "driver/ready.reaction_time_s"}),
    ("perception", lambda e: reaction(e, 0, perception_s=0.7), {"perception_s"}),
    ("lognormal", lambda e: reaction(e, 1, sigma=0.7), {"reaction_sigma"}),
    ("constant friction", lambda e: friction(e, 0, mu=0.5), {"friction", "surface/dry.friction"}),
    ("range of friction", lambda e: friction(e, 0, low=0.4), {"friction_low"}),
    ("falling friction", lambda e: friction(e, 1, sp_kmh=50.0), {"friction_sp_kmh"}),
    ("lag", lambda e: vehicle(e, brake_lag_s=0.9), {"brake_lag_s"}),
    ("build-up", lambda e: vehicle(e, build_up_s=0.9), {"build_up_s"}),
    ("efficiency", lambda e: vehicle(e, brake_efficiency=0.5), {"brake_efficiency"}),
    ("limit", lambda e: vehicle(e, max_deceleration_mps2=3.0), {"max_deceleration_mps2"}),
    ("length", lambda e: vehicle(e, length_m=30.0), {"length_m"}),
    ("step", lambda e: rounding(e, step=5.0), {"rounding.step"}),
    ("second step", lambda e: rounding(e, also_step=5.0), {"rounding.also_step"}),
    ("total", lambda e: rounding(e, total="on-its-own"), {"rounding.total"}),
    ("reaction's rule", lambda e: rounding(e, rules={"reaction": "nearest", "lag": "up", "braking": "up"}),
     {"rounding.reaction"}),
    ("residual from", lambda e: asked(e, residual_from=20.0), {"questions.residual_from"}),
    ("sight", lambda e: asked(e, sight_m=30.0), {"questions.sight_m"}),
    ("reference driver", lambda e: asked(e, driver="usual"), {"questions.driver"}),
    ("reference surface", lambda e: asked(e, surface="wet"), {"questions.surface"}),
    ("cards' gap", lambda e: dataclasses.replace(e, cards=dataclasses.replace(WAYS["cards"], gap="gap/two-seconds")),
     {"gap_rule"}),
    ("state", lambda e: dataclasses.replace(e, surfaces=first(e.surfaces, state="ice")), {"state"}),
]  # fmt: skip


@pytest.mark.parametrize(("what", "edit", "inputs"), EDITS, ids=[row[0] for row in EDITS])
def test_one_changed_input_is_named_for_every_number_it_changes(
    what: str, edit: Callable[[Edition], Edition], inputs: set[str], whole: Edition
) -> None:
    old, new = issue(whole), issue(edit(whole))
    found = changes(old, new)
    listed = {((r.driver, r.vehicle, r.surface, r.grade, r.speed), c.key) for r in found.rows for c in r.changes}
    assert listed == differing_by_hand(old, new)
    assert listed
    # A percentile's step hangs on the sampling error of every row: another row's input may have changed it.
    for change in cells(found):
        if change.reason == "untold":
            assert change.name in {"p50", "p85", "p95"}
            continue
        assert change.reason == "input", change
        assert {i.key for i in change.inputs} <= inputs, change
    assert {i.key for c in cells(found) for i in c.inputs} == inputs


def test_two_changed_inputs_are_each_named_where_they_bear(whole: Edition) -> None:
    found = changes(issue(whole), issue(vehicle(reaction(whole, 0, time_s=1.3), brake_lag_s=0.9)))
    named = {c.name: {i.key for i in c.inputs} for r in found.rows if r.driver == "ready" for c in r.changes}
    assert named["reaction"] == {"reaction_time_s"}
    assert named["lag"] == {"brake_lag_s"}
    assert named["stopping"] == {"reaction_time_s", "brake_lag_s"}


def test_where_parts_were_adjusted_every_part_s_input_bears_on_all(make_edition: Make) -> None:
    tied = Rounding(total="controlled", rules=dict.fromkeys(("reaction", "lag", "braking"), "nearest"))
    old = make_edition(rounding=tied, speeds=tuple(map(float, range(20, 70))))
    found = changes(issue(old), issue(friction(old, 0, mu=0.61)))
    moved = [c for c in cells(found) if c.name == "reaction"]
    assert moved
    assert {(c.reason, c.inputs[0].key) for c in moved} == {("input", "friction")}


def test_without_a_changed_input_it_is_the_program(whole: Edition) -> None:
    old = issue(whole)
    new = copy.deepcopy(old)
    new["rows"][4]["printed"]["braking"] += 1
    new["rows"][4]["printed"]["gap_s"] += 1
    (row,) = changes(old, new).rows
    assert [(c.key, c.reason, c.inputs) for c in row.changes] == [
        ("printed.braking", "program", ()),
        ("printed.gap_s", "untold", ()),
    ]
    text = changes_text.to_text(changes(old, new))
    assert "the program or its rounding changed\n" in text
    assert "an input that the figures do not carry" in " ".join(text.split())


def test_any_printed_key_that_may_come_is_compared(whole: Edition) -> None:
    old, new = issue(whole), issue(whole)
    for document_, value in ((old, 3), (new, 4)):
        row = document_["rows"][0]
        row["printed"]["something_new"] = value
        row["printed_third"] = {"stopping": value}
        row["deep"] = {"er": {"printed_x_s": value}}
    assert [c.key for c in cells(changes(old, new))] == [
        "printed.something_new", "printed_third.stopping", "deep.er.printed_x_s",
    ]  # fmt: skip
    assert cells(changes(old, new))[2].old_unit == "s"


def test_an_unknown_input_that_may_come_is_a_reason(whole: Edition) -> None:
    old, new = issue(whole), issue(whole)
    old["rows"][0]["tyre_depth_mm"], new["rows"][0]["tyre_depth_mm"] = 3, 4
    new["rows"][0]["printed"]["braking"] += 1
    (change,) = cells(changes(old, new))
    assert [(i.key, i.old, i.new) for i in change.inputs] == [("tyre_depth_mm", 3, 4)]


def test_what_an_older_issue_did_not_write_down_is_no_change(whole: Edition) -> None:
    old, new = issue(whole), issue(whole)
    for row in old["rows"]:
        del row["length_m"], row["brake_share"]
    assert not changes(old, new).rows
    new["rows"][0]["printed"]["braking"] += 1
    assert [c.reason for c in cells(changes(old, new))] == ["program"]
    new["rows"][0]["brake_share"] = 0.7
    assert [i.key for c in cells(changes(old, new)) for i in c.inputs] == ["brake_share"]


def test_the_last_binary_digit_of_an_input_is_no_change(whole: Edition) -> None:
    old, new = issue(whole), issue(whole)
    new["rows"][0]["reaction_time_s"] *= 1 + 1e-14
    new["rows"][0]["printed"]["reaction"] += 1
    assert [c.reason for c in cells(changes(old, new))] == ["program"]


def test_rows_that_come_and_go_are_listed_with_their_numbers(make_edition: Make) -> None:
    old, new = make_edition(speeds=(20.0, 30.0)), make_edition(speeds=(30.0, 50.0))
    found = changes(issue(old), issue(new))
    assert [(r.kind, r.speed) for r in found.rows] == [("added", 50.0), ("removed", 20.0)]
    added, removed = found.rows
    assert {c.name for c in added.changes} == {"reaction", "lag", "braking", "stopping"}
    assert {(c.old, c.reason) for c in added.changes} == {(None, "added")}
    assert {(c.new, c.reason) for c in removed.changes} == {(None, "removed")}
    assert (found.matched, found.numbers) == (1, 0)


def test_another_unit_is_one_statement_and_every_number_in_it_counts(make_edition: Make) -> None:
    old, new = make_edition(), make_edition(distance_unit="ft")
    found = changes(issue(old), issue(new))
    assert [(u.key, u.old, u.new) for u in found.units] == [("distance_unit", "m", "ft")]
    assert len(found.of("changed")) == found.matched == 2
    # All but the lag, which is nothing in either unit.
    assert {c.name for c in cells(found)} == {"reaction", "braking", "stopping"}
    assert {(c.old_unit, c.new_unit, c.inputs[0].key) for c in cells(found)} == {("m", "ft", "distance_unit")}
    same_digits = issue(old) | {"distance_unit": "ft"}
    assert len(cells(changes(issue(old), same_digits))) == 6


def test_another_unit_of_speed_matches_rows_by_the_speed_itself(make_edition: Make) -> None:
    old = make_edition(speeds=(20.0, 25.0))
    new = make_edition(speed_unit="km/h", speeds=(32.18688, 50.0))
    found = changes(issue(old), issue(new))
    assert [(r.kind, r.speed, r.speed_unit) for r in found.rows] == [
        ("changed", 32.18688, "km/h"), ("added", 50.0, "km/h"), ("removed", 25.0, "mph"),
    ]  # fmt: skip
    (change,) = found.rows[0].changes
    assert (change.key, change.old, change.old_unit, change.inputs[0].key) == ("printed.speed", 20, "mph", "speed_unit")


def test_the_numbers_of_an_adopted_table_are_its_inputs(make_edition: Make) -> None:
    def taken(stopping: float) -> Edition:
        row = AdoptedRow(driver="ready", vehicle="car", surface="dry", grade=0.0, speed=20.0, stopping=stopping)
        table = Adopted(file="t.csv", source=HERE, distance_unit="m", rows=(row,))
        return make_edition(method="adopted", adopted=table, speeds=(20.0,))

    (change,) = cells(changes(issue(taken(12.0)), issue(taken(14.0))))
    assert [(i.key, i.old, i.new) for i in change.inputs] == [("stopping_distance_m", 12.0, 14.0)]


def test_a_vehicle_that_no_longer_stops_is_a_change_to_nothing(make_edition: Make) -> None:
    downhill = (Case(drivers=("ready",), vehicles=("car",), surfaces=("dry",), grades=(-0.1,)),)
    old = make_edition(cases=downhill)
    found = changes(issue(old), issue(friction(old, 0, mu=0.05)))
    assert {(c.name, c.new, c.reason) for c in cells(found)} == {
        ("braking", None, "input"), ("stopping", None, "input"),
    }  # fmt: skip


def test_nothing_differs_and_files_and_documents_are_the_same(whole: Edition) -> None:
    made = figures(whole)
    found = changes(json.loads(to_json(made)), document(made))
    assert (found.rows, found.units, found.numbers) == ((), (), 0)
    assert found.compared == sum(len(printed_numbers(row)) for row in document(made)["rows"])
    assert changes_text.to_text(found) == f"No printed number differs: {found.compared} numbers compared.\n"


def test_every_basic_number_is_printed(whole: Edition) -> None:
    names = {key.rpartition(".")[2] for key in printed_numbers(issue(whole)["rows"][0])}
    assert names >= BASIC


def test_the_csv_is_rfc_4180_and_the_json_holds_the_same(whole: Edition) -> None:
    found = changes(issue(whole), issue(vehicle(whole, brake_lag_s=0.9)))
    text = changes_text.to_csv(found)
    assert text.count("\r\n") == text.count("\n")
    lines = list(csv.DictReader(io.StringIO(text, newline="")))
    rows = json.loads(changes_text.to_json(found))["rows"]
    flat = [(r["speed"], c["key"], c["old"], c["new"]) for r in rows for c in r["changes"]]
    assert [(float(x["speed"]), x["number"], float(x["old"]), float(x["new"])) for x in lines] == flat
    assert {x["inputs"] for x in lines} == {"brake_lag_s: 0.4 -> 0.9"}
    assert tuple(lines[0]) == changes_text.CSV_HEADS


@pytest.mark.parametrize("width", [40, 72, 100])
def test_the_text_keeps_its_width_and_loses_nothing(width: int, whole: Edition) -> None:
    found = changes(issue(whole), issue(vehicle(whole, brake_lag_s=0.9)))
    text = changes_text.to_text(found, width)
    assert max(map(len, text.splitlines())) <= width
    assert text.count("brake_lag_s:") == len(cells(found))
    assert text == changes_text.to_text(found, width)
