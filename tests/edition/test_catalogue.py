"""The catalogue: each preset with a source, its value found where the source says, and fit to be used."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Iterator
from math import exp
from pathlib import Path

import pytest
from scipy.interpolate import PchipInterpolator
from scipy.stats import lognorm

from chartgen.edition.catalogue import (
    DRIVERS,
    FOLDER,
    GAP_RULES,
    HEADLIGHTS,
    SHELVES,
    SURFACES,
    UNITS,
    VEHICLES,
    Preset,
    VehiclePreset,
)
from chartgen.edition.load import load_edition
from chartgen.edition.model import Driver, Edition, Friction, Surface, Vehicle
from chartgen.edition.spec import TABLES
from chartgen.sources import BIBLIOGRAPHY, CHOSEN, DESIGN, MEASURED, RULE, STATUTE

TAGS = {"en-GB", "en-US", "cy", "fr", "ar", "es-US"}
FOOT, MPH = 0.3048, 0.44704
PRESETS = [preset for shelf in SHELVES.values() for preset in shelf.values()]


def bounded(table: str, key: str, value: float) -> bool:
    """Within the bounds that an edition's own value has to keep."""
    bounds = TABLES[table][key].bounds
    assert bounds is not None
    return (bounds.least < value if bounds.above else bounds.least <= value) and value <= bounds.most


# ---- every preset ------------------------------------------------------------------------------------------------


def test_the_shelves_hold_what_was_promised() -> None:
    assert {
        name: len(shelf) >= least for (name, shelf), least in zip(SHELVES.items(), (12, 25, 15, 8, 6), strict=True)
    } == (dict.fromkeys(("reaction", "surface", "vehicle", "gap", "headlight"), True))
    assert set(SHELVES) == set(UNITS) == {file.stem for file in FOLDER.glob("*.toml")}


@pytest.mark.parametrize("preset", PRESETS, ids=lambda p: p.key)
def test_a_preset_says_what_it_is_and_where_it_comes_from(preset: Preset) -> None:
    shelf, _, id = preset.key.partition("/")
    assert SHELVES[shelf][preset.key] is preset
    assert id.replace("-", "").isalnum()
    assert id == id.lower()
    assert set(preset.name) == TAGS
    assert all(text == text.strip() and text for text in preset.name.values())
    assert set(preset.doubtful) <= TAGS
    assert preset.source.text
    assert preset.source.kind in {MEASURED, STATUTE, DESIGN, RULE, CHOSEN}
    assert preset.work is None or preset.work in BIBLIOGRAPHY
    # Without a place in a work that can be named, the value is ours; so is every preset that says so.
    assert (preset.source.kind == CHOSEN) == (not preset.place)
    assert (preset.work is None) == (not preset.place)
    assert preset.year is None or 1900 < preset.year < 2030
    if preset.work is not None and not BIBLIOGRAPHY[preset.work].opened and not preset.source.from_memory:
        # Somebody opened the value in another text than the work itself; these were.
        assert preset.key in {"reaction/sight-design", "surface/wet-design-in"}
    assert preset.place in preset.source.text
    assert str(preset.year or "") in preset.source.text


def test_four_of_five_have_a_place_and_a_year() -> None:
    assert sum(bool(p.work and p.place) for p in PRESETS) >= 0.8 * len(PRESETS)
    assert sum(bool(p.work and p.place and p.year) for p in PRESETS) >= 0.8 * len(PRESETS)


@pytest.mark.parametrize("preset", PRESETS, ids=lambda p: p.key)
def test_its_range_holds_its_value(preset: Preset) -> None:
    assert preset.value is not None
    assert preset.low is not None
    assert preset.high is not None
    assert 0 < preset.low <= preset.value <= preset.high


def test_no_preset_is_called_the_right_one() -> None:
    for file in FOLDER.glob("*.toml"):
        text = file.read_text(encoding="utf-8").lower()
        assert not [word for word in ("correct", "recommend", "the right ", "official", "safe value") if word in text]


def test_names_of_a_shelf_differ_in_each_language() -> None:
    for shelf in SHELVES.values():
        for tag in TAGS:
            names = [preset.name[tag] for preset in shelf.values()]
            assert sorted(set(names)) == sorted(names)


def test_unknown_keys_are_unknown() -> None:
    assert "reaction/none" not in DRIVERS
    assert DRIVERS.get("surface/wet-minimum") is None
    with pytest.raises(KeyError):
        GAP_RULES["gap/none"]


def test_no_shelf_is_read_before_somebody_looks_into_it() -> None:
    program = (
        "import sys, pathlib; read = []; old = pathlib.Path.read_text\n"
        "def spy(self, *a, **k): read.append(self.stem); return old(self, *a, **k)\n"
        "pathlib.Path.read_text = spy\n"
        "from chartgen.edition import catalogue as c\n"
        "assert read == [], read\n"
        "c.GAP_RULES['gap/per-length']; c.GAP_RULES['gap/two-seconds']\n"
        "assert read == ['gap'], read\n"
        "assert not {'numpy', 'pint', 'statistics'} & set(sys.modules)\n"
    )
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr


# ---- reaction times ----------------------------------------------------------------------------------------------


def test_reaction_times_go_over_the_whole_range() -> None:
    times = [preset.reaction.time_s for preset in DRIVERS.values()]
    assert (min(times), max(times)) == (0.67, 2.5)
    assert all(bounded("driver", "reaction_time", time) for time in times)
    assert {preset.reaction.percentile for preset in DRIVERS.values()} >= {None, "p85", "p95"}


@pytest.mark.parametrize(("mph", "thinking_m"), [(20, 6), (30, 9), (40, 12), (50, 15), (60, 18), (70, 21)])
def test_the_alert_driver_is_the_highway_codes(mph: float, thinking_m: float) -> None:
    """The Highway Code, rule 126: thinking distances in whole metres."""
    preset = DRIVERS["reaction/alert"]
    for time in (preset.reaction.time_s, preset.low, preset.high):
        assert time is not None
        assert round(mph * MPH * time) == thinking_m


@pytest.mark.parametrize(
    ("key", "published"),
    [
        # Koppa, Traffic Flow Theory, chapter 3 (from memory in part): to a surprise, and expected.
        ("surprise", {0.50: 1.18, 0.85: 1.87, 0.95: 2.45, 0.99: 3.31}),
        ("expected", {0.50: 0.53, 0.85: 0.64, 0.95: 0.72, 0.99: 0.82}),
        # Johansson and Rumar 1971, abstract; Olson and Sivak 1986, abstract; Lerner 1995.
        ("on-the-road", {0.50: 0.9, 0.75: 1.2}),
        ("crest-obstacle", {0.50: 1.1, 0.95: 1.6}),
        ("rolling-barrel", {0.85: 1.9}),
    ],
)
def test_the_spreads_have_the_published_percentiles(key: str, published: dict[float, float]) -> None:
    """Within 0.02 s: the last digit of the printed tables is worth 0.01 to 0.02 s."""
    preset = DRIVERS[f"reaction/{key}"]
    reaction = preset.reaction
    assert reaction.mu is not None
    assert reaction.sigma is not None
    assert reaction.percentile is not None
    spread = lognorm(s=reaction.sigma, scale=exp(reaction.mu))
    assert spread.ppf(list(published)) == pytest.approx(list(published.values()), abs=0.02)
    assert reaction.time_s == pytest.approx(spread.ppf(int(reaction.percentile[1:]) / 100), rel=1e-12)
    assert (preset.low, preset.high) == pytest.approx(tuple(spread.ppf([0.5, 0.95])), rel=1e-12)


def test_a_published_percentile_stays_as_it_was_published() -> None:
    assert DRIVERS["reaction/crest-obstacle"].reaction.time_s == 1.6


def test_the_lognormal_of_a_mean_and_a_deviation_has_them() -> None:
    """Lerner: mean 1.5 s, standard deviation 0.4 s."""
    reaction = DRIVERS["reaction/rolling-barrel"].reaction
    assert reaction.mu is not None
    assert reaction.sigma is not None
    spread = lognorm(s=reaction.sigma, scale=exp(reaction.mu))
    assert (spread.mean(), spread.std()) == pytest.approx((1.5, 0.4), rel=1e-12)


# ---- surfaces ----------------------------------------------------------------------------------------------------


def at(friction: Friction, kmh: float) -> float:
    """The friction at a speed: below a table's first knot its first value."""
    if friction.mu is not None:
        return friction.mu
    if friction.table is not None:
        speeds, values = zip(*friction.table, strict=True)
        return float(PchipInterpolator(speeds, values)(max(kmh, speeds[0])))
    assert friction.f60 is not None
    assert friction.sp_kmh is not None
    return friction.f60 * exp((60 - kmh) / friction.sp_kmh)


@pytest.mark.parametrize("preset", SURFACES.values(), ids=lambda p: p.key)
def test_a_surface_is_sound(preset: Preset) -> None:
    friction = SURFACES[preset.key].friction
    assert SURFACES[preset.key].state in {"dry", "wet", "snow", "ice"}
    assert preset.value is not None
    # Cut, never rounded up, to three decimals.
    assert at(friction, 60) - 0.001 < preset.value <= at(friction, 60) + 1e-9
    assert preset.value == preset.low  # a range's lower end: the longer distance
    assert (friction.low is None) == (preset.low == preset.high)
    assert all(bounded("surface", "friction", at(friction, kmh)) for kmh in (10, 60, 100))
    if friction.table is not None:
        speeds = [speed for speed, _ in friction.table]
        assert speeds == sorted(set(speeds))
    if friction.valid_kmh is not None:
        assert friction.valid_kmh[0] < friction.valid_kmh[1]


def test_every_state_has_a_surface() -> None:
    assert {preset.state for preset in SURFACES.values()} == {"dry", "wet", "snow", "ice"}


# Baker and Fricke, pavement drag factors, lower ends below and above 30 mile/h.
BANDS = [
    ("dry-asphalt", 0.60, 0.55), ("wet-asphalt", 0.45, 0.40), ("wet-asphalt-polished", 0.45, 0.40),
    ("dry-concrete", 0.60, 0.60), ("wet-concrete", 0.45, 0.45), ("gravel-loose", 0.40, 0.40),
    ("snow-packed", 0.30, 0.35), ("snow-loose", 0.10, 0.10), ("ice-smooth", 0.10, 0.07), ("ice-wet", 0.05, 0.05),
    ("wet-stone-polished", 0.30, 0.25), ("dry-metal-grid", 0.70, 0.35),
]  # fmt: skip


@pytest.mark.parametrize(("key", "slow", "fast"), BANDS)
def test_drag_factors_are_never_above_their_own_band(key: str, slow: float, fast: float) -> None:
    friction = SURFACES[f"surface/{key}"].friction
    for kmh in (5, 20, 40, 45, 46, 47, 48, 48.2):
        assert at(friction, kmh) <= slow + 1e-12
    for kmh in (30 * 1.609344, 50, 80, 112.65):
        assert at(friction, kmh) <= fast + 1e-12
    assert at(friction, 40) == slow or slow < fast
    assert at(friction, 80) == min(slow, fast)


def test_the_wet_minimum_is_never_above_its_two_published_points() -> None:
    """Road Research Laboratory, LR 131 (1968): 0.4 at 30 mile/h and 0.3 at 80 mile/h."""
    friction = SURFACES["surface/wet-minimum"].friction
    for mph, published in ((30, 0.4), (80, 0.3)):
        assert published - 0.001 < at(friction, mph * 1.609344) <= published
    assert friction.valid_kmh is not None
    assert friction.valid_kmh[1] >= 80 * 1.609344


def test_seventy_miles_an_hour_is_within_the_american_table() -> None:
    """The Green Book of 1994, table III-1: 0.40 at 20 mile/h, 0.30 at 50, 0.28 at 70."""
    friction = SURFACES["surface/wet-design-us"].friction
    assert friction.table is not None
    assert friction.table[-1][0] >= 70 * 1.609344
    for mph, published in ((20, 0.40), (50, 0.30), (70, 0.28)):
        assert at(friction, mph * 1.609344) == pytest.approx(published, abs=1e-5)


# ---- vehicles ----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("preset", VEHICLES.values(), ids=lambda p: p.key)
def test_a_vehicle_is_sound(preset: VehiclePreset) -> None:
    assert preset.max_deceleration_mps2 is not None
    given = {
        "max_deceleration": preset.max_deceleration_mps2,
        "brake_lag": preset.brake_lag_s,
        "build_up": preset.build_up_s,
        "brake_efficiency": preset.brake_efficiency,
        "length": preset.length_m,
    }
    assert all(value is None or bounded("vehicle", key, value) for key, value in given.items())
    assert preset.load in {None, "laden", "unladen"}
    # A regulation asks for a deceleration in a test; nothing else here does.
    assert preset.test_figure == (preset.source.kind == STATUTE)
    if preset.source.kind == STATUTE:
        assert "test figure" in BIBLIOGRAPHY[preset.work or ""].text or preset.work == "france-1955"


def test_every_kind_of_vehicle_is_there() -> None:
    kinds = {(preset.kind, preset.load) for preset in VEHICLES.values()}
    assert {kind for kind, _ in kinds} == {"car", "van", "bus", "lorry", "articulated", "motorcycle", "bicycle"}
    assert {(kind, load) for kind in ("lorry", "articulated") for load in ("laden", "unladen")} <= kinds
    assert {p.trailer.braked for p in VEHICLES.values() if p.trailer} == {True, False}


def stop_m(preset: VehiclePreset, speed_mps: float) -> float:
    """From the first movement of the pedal, on the level: lag, linear build-up, full deceleration."""
    a, lag, rise = preset.max_deceleration_mps2, preset.brake_lag_s, preset.build_up_s
    assert a is not None
    return speed_mps * (lag + rise / 2) + speed_mps**2 / (2 * a) - a * rise**2 / 24


# Speed in m/s, published distance in m, and how much longer the preset's may be (its values are cut, not rounded).
DISTANCES = [
    # UN R13-H 0.1 V + 0.0060 V², R13 0.15 V + V²/130, R78 0.1 V + 0.0087 V² and 0.0133 V²; V in km/h.
    ("car-un", 100 / 3.6, 0.1 * 100 + 0.0060 * 100**2, 0.01),
    ("van-un", 80 / 3.6, 0.15 * 80 + 80**2 / 130, 0.2),
    ("bus-un", 60 / 3.6, 0.15 * 60 + 60**2 / 130, 0.1),
    ("rigid-un-unladen", 60 / 3.6, 0.15 * 60 + 60**2 / 130, 0.1),
    ("motorcycle-front-un", 60 / 3.6, 0.1 * 60 + 0.0087 * 60**2, 0.3),
    ("motorcycle-rear-un", 60 / 3.6, 0.1 * 60 + 0.0133 * 60**2, 0.1),
    # FMVSS 121, table II: 310 and 335 ft from 60 mile/h.
    ("rigid-us-laden", 60 * MPH, 310 * FOOT, 0.3),
    ("rigid-us-unladen", 60 * MPH, 335 * FOOT, 0.3),
    # 67 Pa. Code 175, table I: 35, 35 and 40 ft from 20 mile/h, and 25 and 20 ft (25.3 and 20.5 by its decelerations).
    ("bus-service-us", 20 * MPH, 35 * FOOT, 0.03),
    ("car-trailer-braked", 20 * MPH, 35 * FOOT, 0.03),
    ("articulated-service-us", 20 * MPH, 40 * FOOT, 0.03),
    ("van-service-us", 20 * MPH, 25 * FOOT, 0.11),
    ("car-service-us", 20 * MPH, 20 * FOOT, 0.15),
    # Virginia § 46.2-1067: 30 ft from 20 mile/h. 16 CFR 1512.5: 15 ft from 15 and from 10 mile/h.
    ("motorcycle-service-us", 20 * MPH, 30 * FOOT, 0.01),
    ("bicycle-hand", 15 * MPH, 15 * FOOT, 0.01),
    ("bicycle-foot", 10 * MPH, 15 * FOOT, 0.02),
    # The Highway Code, rule 126: 75 m of braking from 70 mile/h.
    ("car-handbook", 70 * MPH, 75, 0.1),
    # CDL manual 5.4.2: 216 ft of braking from 55 mile/h, and its lag in words, half a second.
    ("articulated-manual", 55 * MPH, 216 * FOOT + 55 * MPH * 0.5, 0.1),
]


@pytest.mark.parametrize(("key", "speed_mps", "published_m", "longer_m"), DISTANCES)
def test_a_vehicle_stops_where_its_source_says(key: str, speed_mps: float, published_m: float, longer_m: float) -> None:
    assert published_m - 0.06 <= stop_m(VEHICLES[f"vehicle/{key}"], speed_mps) <= published_m + longer_m


def test_no_unladen_vehicle_is_given_less_room_than_its_laden_one() -> None:
    pairs = [(p, VEHICLES[k.replace("-laden", "-unladen")]) for k, p in VEHICLES.items() if k.endswith("-laden")]
    assert len(pairs) >= 3
    for laden, unladen in pairs:
        assert stop_m(unladen, 25) >= stop_m(laden, 25)
        assert unladen.length_m == laden.length_m


# ---- gaps and headlights -----------------------------------------------------------------------------------------


def test_gap_rules_are_sound() -> None:
    for rule in GAP_RULES.values():
        assert (rule.fixed_s is None) != (rule.per_length_s_per_m is None)
        assert rule.unit == ("s/m" if rule.fixed_s is None else "s")
        assert 1 <= rule.wet_factor <= rule.ice_factor
        assert rule.extra_s >= 0


def test_the_rule_by_length_gives_the_manuals_example() -> None:
    """Commercial driver's license manual: a 60-ft vehicle above 40 mph needs 7 seconds; 40 ft below 40 mph, 4."""
    rule = GAP_RULES["gap/per-length"]
    assert rule.per_length_s_per_m is not None
    assert rule.per_length_s_per_m * 60 * FOOT + rule.extra_s == pytest.approx(7)
    assert rule.per_length_s_per_m * 40 * FOOT == pytest.approx(4)
    assert rule.extra_above_mps == pytest.approx(40 * MPH)


def test_half_the_speedometer_is_half_the_speedometer() -> None:
    """At 100 km/h, 50 m."""
    for key in ("gap/half-speedometer", "gap/half-speed-law"):
        assert GAP_RULES[key].fixed_s == pytest.approx(50 / (100 / 3.6))


def test_headlights_reach_as_far_as_the_law_says() -> None:
    """Code of Virginia § 46.2-1032: 350 and 100 ft. New Jersey 39:3-57: 200 ft. Code de la route: 100 and 30 m."""
    metres = {
        "high-beam-law": 350 * FOOT, "low-beam-law": 100 * FOOT, "single-beam-law": 200 * FOOT, "main-least": 100,
        "dipped-least": 30,
    }  # fmt: skip
    assert {key: HEADLIGHTS[f"headlight/{key}"].reach_m for key in metres} == pytest.approx(metres)
    high = HEADLIGHTS["headlight/high-beam-manual"]
    assert (high.low, high.high) == pytest.approx((350 * FOOT, 500 * FOOT))
    assert high.reach_m == high.low  # the lower safe speed


# ---- used --------------------------------------------------------------------------------------------------------

HEAD = """\
[edition]
id = "all"
status = "draft"
title = {{ {texts} }}
publisher = {{ {texts} }}
reference = "A-1"
issue = "1"
issued = 2026-11-02
[languages]
use = [{tags}]
[units]
system = "metric"
[speeds]
steps = ["30 km/h"]
[questions]
headlight = "{headlight}"
gap = [{gaps}]
"""


FIXED_GAPS = [key for key, rule in GAP_RULES.items() if rule.fixed_s is not None]
"""Any vehicle can be asked for these; the others need its length."""


def everything(languages: tuple[str, ...], headlight: str) -> Iterator[str]:
    """An edition that uses every preset."""
    yield HEAD.format(
        texts=", ".join(f'{tag} = "x"' for tag in languages),
        tags=", ".join(f'"{tag}"' for tag in languages),
        headlight=headlight,
        gaps=", ".join(f'"{key}"' for key in FIXED_GAPS),
    )
    for table, shelf in (("driver", DRIVERS), ("surface", SURFACES), ("vehicle", VEHICLES)):
        for number, key in enumerate(shelf):
            yield f'[[{table}]]\nid = "n{number}"\nuse = "{key}"\n'
    yield '[[case]]\ndriver = ["n0"]\nvehicle = ["n0"]\nsurface = ["n0"]\n'


@pytest.mark.parametrize("languages", [("en-GB", "cy"), ("en-US", "es-US", "fr", "ar")])
def test_an_edition_can_use_every_preset(languages: tuple[str, ...], tmp_path: Path) -> None:
    file = tmp_path / "all" / "edition.toml"
    file.parent.mkdir()
    file.write_text("\n".join(everything(languages, next(iter(HEADLIGHTS)))), encoding="utf-8")
    edition = load_edition(file)
    assert [d.reaction for d in edition.drivers] == [p.reaction for p in DRIVERS.values()]
    assert [s.friction for s in edition.surfaces] == [p.friction for p in SURFACES.values()]
    assert [s.state for s in edition.surfaces] == [p.state for p in SURFACES.values()]
    assert edition.questions.gaps == tuple(FIXED_GAPS)
    _same_vehicles(edition)
    records: tuple[Driver | Surface | Vehicle, ...] = (*edition.drivers, *edition.surfaces, *edition.vehicles)
    presets: tuple[Preset, ...] = (*DRIVERS.values(), *SURFACES.values(), *VEHICLES.values())
    for record, preset in zip(records, presets, strict=True):
        assert record.name == {tag: preset.name[tag] for tag in languages}
        assert record.source == preset.source
        assert record.preset == preset.key


def _same_vehicles(edition: Edition) -> None:
    same = (
        "kind", "load", "max_deceleration_mps2", "brake_lag_s", "build_up_s", "brake_efficiency", "length_m", "mass_kg",
        "trailer", "test_figure",
    )  # fmt: skip
    for vehicle, preset in zip(edition.vehicles, VEHICLES.values(), strict=True):
        assert [getattr(vehicle, name) for name in same] == [getattr(preset, name) for name in same], preset.key


@pytest.mark.parametrize("key", HEADLIGHTS)
def test_an_edition_can_ask_by_any_headlight(key: str, tmp_path: Path) -> None:
    (tmp_path / "edition.toml").write_text("\n".join(everything(("en-GB",), key)), encoding="utf-8")
    assert load_edition(tmp_path).questions.headlight == key


@pytest.mark.parametrize("key", GAP_RULES)
def test_an_edition_can_ask_by_any_gap_rule(key: str, tmp_path: Path) -> None:
    text = "\n".join(everything(("en-GB",), "headlight/main-least"))
    text = text[: text.index("gap = [")] + f'gap = ["{key}"]\n' + text[text.index("[[driver]]") :]
    # A rule by length asks every vehicle for one.
    text = text.replace('use = "vehicle/', 'length = "16.5 m"\nuse = "vehicle/')
    (tmp_path / "edition.toml").write_text(text, encoding="utf-8")
    assert load_edition(tmp_path).questions.gaps == (key,)
