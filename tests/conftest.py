"""Fixtures that the tests of several rooms share: an edition made by hand, so that no floor needs the front door."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from datetime import date
from pathlib import Path

import pytest

from chartgen.edition.model import Case, Driver, Edition, Friction, Reaction, Rounding, Source, Surface, Vehicle

HERE = Path(__file__).parent
PUBLISHED = HERE / "published"

INVENTED = Source(text="invented for this test")


def driver(id: str = "ready", time_s: float = 0.8) -> Driver:
    return Driver(id=id, name={"en-GB": id.capitalize()}, reaction=Reaction(time_s=time_s), source=INVENTED)


def surface(id: str = "dry", **friction: float) -> Surface:
    state = next((s for s in ("dry", "wet", "snow", "ice") if id.startswith(s)), None)
    return Surface(
        id=id,
        name={"en-GB": id.capitalize()},
        friction=Friction(**(friction or {"mu": 0.67})),  # type: ignore[arg-type]  # any of its numbers
        source=INVENTED,
        state=state,  # type: ignore[arg-type]  # a literal by construction
    )


def edition(**changes: object) -> Edition:
    """A small edition: one driver, car, dry road, 20 and 30 mph, printed in m; every field can be changed.

    Without `cases` it has the one case of all its drivers, vehicles and surfaces on the level, as the front door
    gives it.
    """
    plain = Edition(
        id="tried",
        file="tried/edition.toml",
        status="draft",
        title={"en-GB": "Tried"},
        publisher={"en-GB": "Tarnholt Vale Road Safety Forum"},
        web_address=None,
        reference="",
        issue="1",
        issued=date(2026, 1, 2),
        review_by=None,
        owner="",
        approver="",
        licence="",
        languages=("en-GB",),
        emphasis="equal",
        unit_style="si",
        speed_unit="mph",
        distance_unit="m",
        also_unit=None,
        speeds=(20.0, 30.0),
        speeds_mps=(),
        method="first-principles",
        rounding=Rounding(),
        drivers=(driver(),),
        surfaces=(surface(),),
        vehicles=(Vehicle(id="car", kind="car", name={"en-GB": "Car"}),),
        cases=(),
        posters=(),
        cards=None,
        own_words={},
        palette="gorse",
        warnings=(),
        unmade=(),
    )
    made = dataclasses.replace(plain, **changes)  # type: ignore[arg-type]  # any field
    if not made.speeds_mps:
        scale = 0.44704 if made.speed_unit == "mph" else 1.0 / 3.6
        made = dataclasses.replace(made, speeds_mps=tuple(v * scale for v in made.speeds))
    if not made.cases:
        whole = Case(
            drivers=tuple(d.id for d in made.drivers),
            vehicles=tuple(v.id for v in made.vehicles),
            surfaces=tuple(s.id for s in made.surfaces),
        )
        made = dataclasses.replace(made, cases=(whole,))
    return made


@pytest.fixture
def make_edition() -> Callable[..., Edition]:
    """`edition` as a fixture: call it with the fields that the test is about."""
    return edition


@pytest.fixture(scope="session")
def published() -> Path:
    """The folder of published tables."""
    return PUBLISHED
