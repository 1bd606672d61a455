"""Rules of thumb, adopted tables, speed limits and the issue before: what they become, and what is only a warning."""

from __future__ import annotations

import json
from collections.abc import Callable
from datetime import date
from math import isnan
from typing import Any

import pytest

from chartgen.edition.model import AdoptedRow, Edition, Friction, Previous, SpeedLimit
from tests.edition.conftest import SOUND

Changed = Callable[..., Edition]
ONE_CASE = [('vehicle = ["car", "lorry"]', 'vehicle = ["car"]'), ('surface = ["dry", "wet"]', 'surface = ["dry"]')]
BARE = [
    ('reaction_time = "0.8 s"\n', ""),
    ("friction = 0.64\n", ""),
    ('friction = { f60 = 0.35, sp = "110 km/h" }\n', ""),
    ('max_deceleration = "5 m/s^2"\nbrake_lag = "0.4 s"\n', ""),
]
# Sheets are drawn of reaction and braking.
NO_POSTER = (SOUND[SOUND.index("[[poster]]") :], "")


def figures(text: str) -> tuple[str, str]:
    return ("[[driver]]", f"[figures]\n{text}\n\n[[driver]]")


# ---- rules of thumb ------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("method", "time_s"),
    # 3 m for each 10 km/h is 1.08 s of travel; 1 ft for each mph is 0.6818 s.
    [("square-metric", 1.08), ("square-half-metric", 1.08), ("square-feet", 0.681818)],
)
def test_a_rule_of_thumb_has_its_reaction_time_within_it(edition: Changed, method: str, time_s: float) -> None:
    made = edition(*BARE, figures(f'method = "{method}"'))
    assert made.method == method
    assert made.driver("ready").reaction.time_s == pytest.approx(time_s, abs=1e-6)
    assert made.driver("ready").source.kind == "rule of thumb"
    assert [s.friction for s in made.surfaces] == [Friction(), Friction()]
    assert made.warnings == ()


# ---- adopted tables ------------------------------------------------------------------------------------------------

ADOPT = 'adopt = "table.csv"\nadopt_source = "Vale, table of 1999"'
TABLE = "speed (mph),reaction (m),braking (m),stopping (m)\n20,6,6,12\n30,9,14,23\n70,21,75,96\n"


def test_a_table_is_adopted_as_it_stands(edition: Changed) -> None:
    made = edition(*ONE_CASE, *BARE, figures(ADOPT), files={"table.csv": TABLE})
    assert made.method == "adopted"
    assert made.adopted is not None
    assert (made.adopted.file, made.adopted.source.text) == ("table.csv", "Vale, table of 1999")
    assert made.adopted.distance_unit == "m"
    assert made.adopted.rows[1] == AdoptedRow(
        driver="ready", vehicle="car", surface="dry", grade=0.0, speed=30.0, stopping=23.0, reaction=9.0, braking=14.0
    )
    assert isnan(made.driver("ready").reaction.time_s)
    assert made.surface("dry").friction == Friction()
    assert made.vehicle("lorry").max_deceleration_mps2 is None
    assert made.warnings == ()


def test_windows_line_ends_a_mark_and_quotes_are_csv_too(edition: Changed) -> None:
    text = "\ufeff" + TABLE.replace("\n", "\r\n").replace("30,", '"30",')
    made = edition(*ONE_CASE, *BARE, figures(ADOPT), files={"table.csv": text})
    assert made.adopted is not None
    assert [row.stopping for row in made.adopted.rows] == [12, 23, 96]


def test_a_table_in_the_other_units_is_converted(edition: Changed) -> None:
    text = "speed (km/h),stopping (ft)\n32.18688,40\n48.28032,75\n112.65408,315\n"
    rounding = '\n[figures.rounding]\nstep = "1 m"\nrule = "nearest"'
    made = edition(*ONE_CASE, *BARE, NO_POSTER, figures(ADOPT + rounding), files={"table.csv": text})
    assert made.adopted is not None
    assert made.adopted.distance_unit == "ft"
    assert [(row.speed, row.stopping) for row in made.adopted.rows] == [(20, 40), (30, 75), (70, 315)]
    assert made.adopted.rows[0].reaction is None


def test_a_table_may_name_its_rows(edition: Changed) -> None:
    case = ('surface = ["dry", "wet"]', 'surface = ["wet", "dry"]\ngrade = ["0 %", "-6 %"]')
    rows = [
        f"{vehicle},{surface},{grade} %,{speed},{speed}"
        for vehicle in ("lorry", "car") for surface in ("dry", "wet") for grade in (-6, 0) for speed in (70, 20, 30)
    ]  # fmt: skip
    text = "\n".join(["vehicle,surface,grade,speed (mph),stopping (m)", *rows])
    made = edition(*BARE, NO_POSTER, case, figures(ADOPT), files={"table.csv": text})
    assert made.adopted is not None
    assert len(made.adopted.rows) == 24
    assert {row.grade for row in made.adopted.rows} == {grade for case in made.cases for grade in case.grades}
    assert made.warnings == ()


def test_what_a_table_does_not_use_is_said(edition: Changed) -> None:
    made = edition(*ONE_CASE, figures(ADOPT), files={"table.csv": TABLE})
    stays = "a table that is adopted stays as it stands: this is printed beside it, and changes no figure."
    assert made.warnings == tuple(
        f"{key}: {stays}"
        for key in (
            "driver[1].reaction_time", "surface[1].friction", "surface[2].friction", "vehicle[2].max_deceleration",
            "vehicle[2].brake_lag",
        )
    )  # fmt: skip
    assert made.driver("ready").reaction.time_s == 0.8


@pytest.mark.parametrize(
    ("old", "new", "warning"),
    [
        (
            "30,9,14,23", "30,9,14,25",
            "table.csv, line 3: the parts do not add up to the total, by more than their rounding.",
        ),
        (
            "20,6,6,12\n30,9,14,23", "20,6.0,6.0,12.2\n30,9,16,23",
            "table.csv, lines 2 and 3: the parts do not add up to the total, by more than their rounding.",
        ),
        (
            "70,21,75,96", "70,11,11,22",
            "table.csv, lines 3 and 4: the total of ready, car, dry, 0 % is shorter at 70 mph than at 30 mph.",
        ),
    ],
)  # fmt: skip
def test_an_odd_table_is_adopted_with_a_warning(edition: Changed, old: str, new: str, warning: str) -> None:
    made = edition(*ONE_CASE, *BARE, figures(ADOPT), files={"table.csv": TABLE.replace(old, new)})
    assert made.warnings == (warning,)


def test_parts_one_unit_away_are_rounding(edition: Changed) -> None:
    made = edition(*ONE_CASE, *BARE, figures(ADOPT), files={"table.csv": TABLE.replace("9,14,23", "9,14,24")})
    assert made.warnings == ()


# ---- speed limits --------------------------------------------------------------------------------------------------

LIMIT = """
[[limit]]
name = { en-GB = "Villages", cy = "Pentrefi" }
speed = "30 mph"
as_at = 2026-05-01
source = "invented"
kinds = ["car"]
"""


def test_a_limit_has_its_day_and_its_source(edition: Changed) -> None:
    made = edition(more=LIMIT)
    (limit,) = made.limits
    assert (limit.speed, limit.as_at, limit.kinds, limit.source.text) == (30, date(2026, 5, 1), ("car",), "invented")
    assert isinstance(limit, SpeedLimit)
    assert made.warnings == ()


@pytest.mark.parametrize(("day", "old"), [("2025-11-01", False), ("2025-10-31", True)])
def test_a_limit_that_nobody_looked_at_for_a_year_is_named(edition: Changed, day: str, old: bool) -> None:
    warning = (
        f"limit[1].as_at: the limit “Villages” is as at {day}, more than 12 months before the issue of 2026-11-02; "
        "look whether it still holds."
    )
    assert edition(more=LIMIT.replace("2026-05-01", day)).warnings == ((warning,) if old else ())


# ---- the issue before ----------------------------------------------------------------------------------------------

SECOND = ('issue = "1"', 'issue = "2"\nprevious = "issue-1.json"')


def before(**changes: Any) -> dict[str, Any]:
    printed = {"speed": 20, "reaction": 8, "lag": None, "stopping": 15}
    row = {"driver": "ready", "vehicle": "car", "surface": "dry", "grade": 0.0, "printed": printed}
    return {"edition": "vale", "speed_unit": "mph", "distance_unit": "m", "rows": [row]} | changes


def test_the_issue_before_is_kept_as_it_was(edition: Changed) -> None:
    made = edition(SECOND, files={"issue-1.json": json.dumps(before())})
    assert made.previous == Previous(file="issue-1.json", figures=before())
    assert made.warnings == ()


def test_the_issue_before_of_another_edition_is_a_warning(edition: Changed) -> None:
    made = edition(SECOND, files={"issue-1.json": json.dumps(before(edition="dale"))})
    assert made.warnings == ('edition.previous: issue-1.json holds the figures of the edition "dale", not of "vale".',)


def test_the_issue_before_may_be_large(edition: Changed) -> None:
    rows = [before()["rows"][0] | {"driver": f"d{i}", "note": "x" * 400} for i in range(4000)]
    text = json.dumps(before(rows=rows))
    assert len(text) > 2_000_000
    assert edition(SECOND, files={"issue-1.json": text}).previous is not None
