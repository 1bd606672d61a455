"""Headlines, posters and rosters, held against the cases of their edition."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from chartgen.edition.headline import Placeholder, placeholders
from chartgen.edition.model import Edition, RosterRow

CARDS = '\n[cards]\nroster = "roster.csv"\ngap = "gap/two-seconds"\nsurfaces = ["dry", "wet"]\n'
HEADINGS = "vehicle_id,vehicle,languages,depot,holder,copy_no\n"


def test_a_placeholder_may_pick_another_row() -> None:
    assert placeholders("{stopping:70 mph, surface=wet, grade=-6 %} and {speed:70 mph}") == (
        Placeholder(
            text="{stopping:70 mph, surface=wet, grade=-6 %}",
            name="stopping",
            speed=70,
            speed_unit="mph",
            rows={"surface": "wet"},
            grade=-0.06,
        ),
        Placeholder(text="{speed:70 mph}", name="speed", speed=70, speed_unit="mph"),
    )


@pytest.mark.parametrize(
    ("placeholder", "said"),
    [
        ("{stopping}", "the placeholder names no speed. Right: {stopping:30 mph}."),
        ("{stopping:70}", 'in this placeholder, the unit is missing. Right: "70 mph" or "70 km/h".'),
        (
            "{stopping:70 mph, surfaces=wet}",
            (
                '"surfaces=wet" picks no row. Right: after the speed: driver=…, vehicle=…, surface=…, grade=…, each '
                'once. Did you mean "surface"?'
            ),
        ),
        (
            "{stopping:70 mph, grade=-6 %}",
            "no [[case]] has the combination ready, car, dry, -6 %. Right: a case with all four of them.",
        ),
    ],
)
def test_a_placeholder_that_cannot_be_filled(placeholder: str, said: str, messages: Callable[..., list[str]]) -> None:
    (message,) = messages(("At {speed:70 mph}, {stopping:70 mph}.", f"Stop in {placeholder}."))
    assert message.endswith(f"(in the 1st [[poster]]): {said}")


def test_two_posters_of_one_name(messages: Callable[..., list[str]]) -> None:
    again = '\n[[poster]]\nid = "poster-1"\nheadline = { en-GB = "Room.", cy = "Lle." }\n'
    assert messages(more=again) == [
        (
            'vale/edition.toml: poster[2].id = "poster-1" (in the 2nd [[poster]]): poster[1] has this id already. '
            "Right: an id of its own."
        )
    ]


def test_drivers_side_by_side(edition: Callable[..., Edition]) -> None:
    slow = '\n[[driver]]\nid = "slow"\nname = { en-GB = "Slow", cy = "Araf" }\nreaction_time = "2 s"\n'
    made = edition(
        ('driver = ["ready"]', 'driver = ["ready", "slow"]'),
        ("[[poster]]", '[[poster]]\nshow = { driver = ["ready", "slow"], surface = "wet", speeds = ["30 mph"] }'),
        more=slow,
    )
    show = made.posters[0].show
    assert (show.drivers, show.vehicle, show.surface, show.speeds) == (("ready", "slow"), "car", "wet", (30,))


def test_a_roster_is_read(edition: Callable[..., Edition]) -> None:
    Path("vale/roster.csv").write_bytes(
        b"\xef\xbb\xbf" + (HEADINGS + '"V, 1",lorry,cy en-GB,Hengoed,,7\r\n\r\nV 2,car,en-GB,,"A. B.",8\r\n').encode()
    )
    cards = edition(more=CARDS).cards
    assert cards is not None
    assert cards.roster == (
        RosterRow(
            vehicle_id="V, 1",
            vehicle="lorry",
            languages=("cy", "en-GB"),
            depot="Hengoed",
            holder="",
            copy_no="7",
            line=2,
        ),
        RosterRow(vehicle_id="V 2", vehicle="car", languages=("en-GB",), depot="", holder="A. B.", copy_no="8", line=4),
    )


@pytest.mark.parametrize(
    ("roster", "said"),
    [
        ("", ["line 1: the column vehicle_id is missing. Right: vehicle_id,vehicle,languages,depot,holder,copy_no.",
              "line 1: the column vehicle is missing. Right: vehicle_id,vehicle,languages,depot,holder,copy_no.",
              "line 1: the column languages is missing. Right: vehicle_id,vehicle,languages,depot,holder,copy_no.",
              "line 1: the column copy_no is missing. Right: vehicle_id,vehicle,languages,depot,holder,copy_no."]),
        (HEADINGS, ["the roster has no cards. Right: a row for each card below the headings."]),
        (HEADINGS.replace(",", ";"),
         ["line 1: the columns are separated by semicolons. Right: commas between the columns."]),
        (HEADINGS.replace("depot", "depo") + "V 1,car,cy,,,1\n",
         [('line 1 = "depo": this column is not known. Right: vehicle_id, vehicle, languages, depot, holder or '
          'copy_no. Did you mean "depot"?')]),
        (HEADINGS + "V 1,car,cy,,,1\nV 2,lory,cy,,,2\n",
         [('line 3, column vehicle = "lory": there is no vehicle with this id. Right: car or lorry. '
          'Did you mean "lorry"?')]),
        (HEADINGS + "V 1,car,fr,,,1\n",
         ['line 2, column languages = "fr": this language is not among languages.use. Right: en-GB cy.']),
        (HEADINGS + "V 1,car,cy,,,1\nV 2,car,cy,,,1\n",
         ['line 3, column copy_no = "1": line 2 has this copy number already. Right: a number of its own.']),
        (HEADINGS + "V 1,car,cy\n",
         ['line 2 = "V 1,car,cy": the row has 3 cells. Right: 6 cells, one a column.']),
        (HEADINGS + "V 1,car,,,,1\n",
         ["line 2, column languages: the cell is empty. Right: a value in each row."]),
    ],
)  # fmt: skip
def test_a_broken_roster(roster: str, said: list[str], messages: Callable[..., list[str]]) -> None:
    Path("vale/roster.csv").write_text(roster, encoding="utf-8")
    assert messages(more=CARDS) == [f"vale/roster.csv: {line}" for line in said]


def test_a_rule_by_length_needs_lengths(messages: Callable[..., list[str]]) -> None:
    Path("vale/roster.csv").write_text(HEADINGS + "V 1,car,cy,,,1\nV 2,lorry,cy,,,2\n", encoding="utf-8")
    assert messages(more=CARDS.replace("two-seconds", "per-length")) == [
        (
            'vale/edition.toml: cards.gap = "gap/per-length": the rule goes by length, and the vehicle "car" states '
            'none. Right: length = "16.5 m".'
        )
    ]


def test_a_vehicle_outside_the_cases_gets_no_card(messages: Callable[..., list[str]]) -> None:
    Path("vale/roster.csv").write_text(HEADINGS + "V 1,lorry,cy,,,1\n", encoding="utf-8")
    said = messages(('vehicle = ["car", "lorry"]', 'vehicle = ["car"]'), more=CARDS)
    assert said == [
        (
            'vale/roster.csv: line 2, column vehicle = "lorry": no case has this vehicle with the driver, surfaces and '
            "grade of the cards. Right: car."
        )
    ]
