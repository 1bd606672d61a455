"""The editions that come with the program: sound, complete in each language, and the scenarios they say they are."""

from __future__ import annotations

import dataclasses
import json
import re
import tomllib
from collections.abc import Iterator, Mapping
from datetime import date
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from chartgen.edition.headline import placeholders
from chartgen.edition.load import load_edition
from chartgen.edition.model import Edition
from chartgen.edition.schema import schema, schema_text
from chartgen.edition.spec import TABLES

ROOT = Path(__file__).parents[2]
DEMOS = ("quillane", "sarvelle", "tarnholt")
EXAMPLE = Path(__file__).parent / "data" / "example"


@pytest.fixture(scope="module", params=DEMOS)
def demo(request: pytest.FixtureRequest) -> Edition:
    return load_edition(ROOT / "site_config" / request.param)


def texts(record: object) -> Iterator[Mapping[str, str]]:
    """Every text by language that stands anywhere in an edition."""
    if isinstance(record, Mapping):
        if record and all((isinstance(value, str) and "-" in key) or len(key) == 2 for key, value in record.items()):
            yield record
    elif isinstance(record, tuple):
        for item in record:
            yield from texts(item)
    elif dataclasses.is_dataclass(record):
        for field in dataclasses.fields(record):
            yield from texts(getattr(record, field.name))


def test_a_demo_is_sound_and_wholly_made(demo: Edition) -> None:
    assert demo.warnings == ()
    assert demo.unmade == ()
    assert demo.review_by is not None
    assert demo.issued < demo.review_by


def test_a_demo_has_every_text_in_both_languages(demo: Edition) -> None:
    found = list(texts(demo))
    # Title, publisher, a name for each driver, surface, vehicle and speed limit, a headline for each poster.
    assert len(found) == 2 + len(demo.drivers + demo.surfaces + demo.vehicles + demo.limits + demo.posters)
    assert all(tuple(text) == demo.languages for text in found)


def test_a_demo_invents_its_figures_and_says_so(demo: Edition) -> None:
    sources = [record.source for record in demo.drivers + demo.surfaces + demo.vehicles]
    assert all(source is not None and source.text.endswith("invented for this demonstration") for source in sources)
    assert all(record.preset is None for record in demo.drivers + demo.surfaces + demo.vehicles)


def test_a_demo_reprints_no_national_table(demo: Edition) -> None:
    """Great Britain's 0.67 or 0.68 s with 6.57 m/s² (0.67 g) would; so would France's and Germany's one second."""
    assert all(driver.reaction.time_s not in (0.67, 0.68, 1.0) for driver in demo.drivers)
    assert all(surface.friction.mu != 0.67 for surface in demo.surfaces)


def test_both_languages_of_a_headline_have_the_same_numbers(demo: Edition) -> None:
    for poster in demo.posters:
        first, second = (sorted(p.text for p in placeholders(text)) for text in poster.headline.values())
        assert first == second


def test_the_charity_sets_two_drivers_side_by_side() -> None:
    made = load_edition(ROOT / "site_config" / "tarnholt")
    assert (made.languages, made.speed_unit, made.distance_unit) == (("en-GB", "cy"), "mph", "m")
    assert [poster.show.drivers for poster in made.posters] == [("typical",), ("typical", "cautious")]
    assert made.driver("cautious").reaction.time_s > made.driver("typical").reaction.time_s


def test_the_fleet_has_air_brakes_and_twelve_cards() -> None:
    made = load_edition(ROOT / "site_config" / "quillane")
    assert (made.languages, made.speed_unit, made.distance_unit) == (("en-US", "es-US"), "mph", "ft")
    assert all(0.4 <= vehicle.brake_lag_s <= 0.6 and vehicle.build_up_s > 0 for vehicle in made.vehicles)
    empty = [vehicle for vehicle in made.vehicles if vehicle.load == "unladen"]
    assert sorted(vehicle.unladen_of or "" for vehicle in empty) == ["articulated-laden", "rigid-laden"]
    assert made.cards is not None
    assert len(made.cards.roster) == 12
    assert {row.languages for row in made.cards.roster} >= {("en-US",), ("es-US",)}


def test_the_authority_has_ice_on_a_descent() -> None:
    made = load_edition(ROOT / "site_config" / "sarvelle")
    assert (made.languages, made.speed_unit, made.distance_unit) == (("fr", "ar"), "km/h", "m")
    assert made.cases[0].grades == (0.0, -0.09)
    assert made.surface("glace").friction.mu == 0.05
    assert {poster.together for poster in made.posters} == {True, False}


# ---- the schema for editors ----------------------------------------------------------------------------------------


def plain(value: Any) -> Any:
    """TOML's values as JSON has them: dates as text."""
    if isinstance(value, dict):
        return {key: plain(item) for key, item in value.items()}
    if isinstance(value, list):
        return [plain(item) for item in value]
    return value.isoformat() if isinstance(value, date) else value


def test_the_committed_schema_is_current() -> None:
    file = ROOT / "site_config" / "edition.schema.json"
    assert file.read_text(encoding="utf-8") == schema_text(), "write chartgen.edition.schema.schema_text() to it"


def test_the_schema_is_one() -> None:
    jsonschema.Draft202012Validator.check_schema(schema())


EXAMPLES = [EXAMPLE, *(EXAMPLE.with_name(name) for name in ("asked", "adopted"))]


@pytest.mark.parametrize("folder", [*(ROOT / "site_config" / name for name in DEMOS), *EXAMPLES], ids=lambda f: f.name)
def test_demos_and_example_are_valid_by_the_schema(folder: Path) -> None:
    raw = tomllib.loads((folder / "edition.toml").read_text(encoding="utf-8"))
    jsonschema.validate(plain(raw), json.loads(schema_text()), jsonschema.Draft202012Validator)


@pytest.mark.parametrize(
    "spoil",
    [
        lambda raw: raw["driver"][0].update(reaction_time="0,8 s"),
        lambda raw: raw["driver"][0].update(reaction_tme="0.8 s"),
        lambda raw: raw["vehicle"][0].update(kind="truck"),
        lambda raw: raw["poster"][0].update(layout="trail"),
        lambda raw: raw["surface"][0].update(friction=0),
        lambda raw: raw["edition"].update(id="../vale"),
        lambda raw: raw.pop("units"),
    ],
)
def test_the_schema_finds_what_an_editor_can_find(spoil: Any) -> None:
    raw = plain(tomllib.loads((EXAMPLE / "edition.toml").read_text(encoding="utf-8")))
    spoil(raw)
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.validate(raw, schema(), jsonschema.Draft202012Validator)


def test_every_key_is_tried_in_some_example() -> None:
    """What `test_sturdy` spoils in every place is the whole of the description."""
    tried = {key for folder in EXAMPLES for key in every_key(raw_edition(folder))}
    assert {key for table in TABLES.values() for key, about in table.items() if not about.not_yet} <= tried | BY_STEPS


BY_STEPS = {"from", "to", "by", "speed", "distance"}
"""Keys that stand in the place of others, which the examples have; see `test_load`."""


def raw_edition(folder: Path) -> dict[str, Any]:
    return tomllib.loads((folder / "edition.toml").read_text(encoding="utf-8"))


def every_key(value: Any) -> Iterator[str]:
    for key, item in value.items() if isinstance(value, dict) else ():
        yield key
        yield from every_key(item)
    for item in value if isinstance(value, list) else ():
        yield from every_key(item)


def test_every_key_of_the_example_is_described() -> None:
    """The keys of the example keep their names."""
    text = (EXAMPLE / "edition.toml").read_text(encoding="utf-8")
    keys = set(re.findall(r"^(?:# )?([a-z_]+) +=", text, re.MULTILINE))
    assert keys >= {"reaction_time", "friction_range", "brake_lag", "also_step", "read_from", "profile"}
    assert keys <= {key for table in TABLES.values() for key in table}
