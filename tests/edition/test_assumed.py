"""Reaction times, frictions by speed, trailers, presets of vehicles, the spread and the questions: what they become."""

from __future__ import annotations

from collections.abc import Callable
from math import exp, sqrt

import pytest

from chartgen.edition.catalogue import DRIVERS, VEHICLES
from chartgen.edition.model import Edition, Questions, Spread, Trailer

Changed = Callable[..., Edition]
TIME = 'reaction_time = "0.8 s"'
FRICTION = "friction = 0.64"
FALLING = 'friction = { f60 = 0.35, sp = "110 km/h" }'


# ---- reaction ------------------------------------------------------------------------------------------------------


def test_a_dropped_rule_is_a_time_of_its_own(edition: Changed) -> None:
    made = edition((TIME, 'reaction_time = { drop = "60 cm" }'))
    reaction = made.driver("ready").reaction
    # t = sqrt(2 s/g), worked out by hand: 0.3498 s.
    assert reaction.time_s == pytest.approx(sqrt(2 * 0.6 / 9.80665))
    assert reaction.time_s == pytest.approx(0.3498, abs=5e-5)
    assert reaction.drop_m == 0.6
    assert made.warnings == (
        (
            "driver[1].reaction_time.drop: 0.35 s is the time of a hand that waits for the rule; a driver who is "
            "surprised, and whose foot must reach the brake, needs longer."
        ),
    )


def test_perception_is_part_of_the_reaction_time(edition: Changed) -> None:
    reaction = edition((TIME, 'reaction_time = "2.5 s"\nperception = "1.5 s"')).driver("ready").reaction
    assert (reaction.time_s, reaction.perception_s) == (2.5, 1.5)


def test_perception_of_ones_own_takes_the_presets_source_away(edition: Changed) -> None:
    driver = edition((TIME, 'use = "reaction/sight-design"\nperception = "1.5 s"')).driver("ready")
    assert (driver.reaction.time_s, driver.reaction.perception_s, driver.source.text) == (2.5, 1.5, "")


def test_a_preset_keeps_the_percentile_of_its_source(edition: Changed) -> None:
    """A preset that prints its 95th percentile is not shortened to the 85th."""
    late = next(p for p in DRIVERS.values() if p.reaction.percentile == "p95")
    assert edition((TIME, f'use = "{late.key}"')).driver("ready").reaction == late.reaction
    other = edition((TIME, f'use = "{late.key}"\npercentile = "p85"')).driver("ready").reaction
    assert other.time_s < late.reaction.time_s


# ---- friction ------------------------------------------------------------------------------------------------------


def test_the_speed_constant_comes_from_texture(edition: Changed) -> None:
    friction = edition((FALLING, 'friction = { f60 = 0.35, texture = "0.8 mm", max = 0.7 }')).surface("wet").friction
    # ASTM E1960: Sp = 14.2 + 89.7 MPD.
    assert friction.sp_kmh == pytest.approx(85.96)
    assert (friction.f60, friction.max_mu, friction.texture_mm) == (0.35, 0.7, 0.8)


def test_the_penn_state_gradient_is_the_same_fall_in_other_letters(edition: Changed) -> None:
    friction = edition((FALLING, "friction = { sn0 = 50, png = 0.9 }")).surface("wet").friction
    assert (friction.sn0, friction.png_h_per_mile) == (50, 0.9)
    assert friction.f60 is not None
    assert friction.sp_kmh is not None
    # SN(V) = SN0 exp(-PNG V / 100), V in mph, at 40 mph.
    at_40 = friction.f60 * exp((60 - 40 * 1.609344) / friction.sp_kmh)
    assert at_40 == pytest.approx(0.5 * exp(-0.9 * 40 / 100))


def test_a_table_of_friction_is_kept_in_kmh_and_exact(edition: Changed) -> None:
    pairs = 'friction = { table = [["30 km/h", 0.62], ["60 km/h", 0.5], ["100 km/h", 0.45]] }'
    friction = edition((FRICTION, f'{pairs}\nvalid = ["30 km/h", "90 km/h"]')).surface("dry").friction
    assert friction.table == ((30.0, 0.62), (60.0, 0.5), (100.0, 0.45))
    assert friction.valid_kmh == (30.0, 90.0)
    in_mph = edition((FRICTION, 'friction = { table = [["20 mph", 0.62], ["60 mph", 0.5]] }')).surface("dry").friction
    assert in_mph.table == ((32.18688, 0.62), (96.56064, 0.5))


def test_a_friction_that_rises_with_speed_is_a_warning(edition: Changed) -> None:
    made = edition((FRICTION, 'friction = { table = [["30 km/h", 0.5], ["60 km/h", 0.55]] }'))
    assert made.warnings == (
        (
            "surface[1].friction.table[2]: from 30 km/h to 60 km/h the friction rises from 0.5 to 0.55; as a rule it "
            "falls with speed."
        ),
    )


@pytest.mark.parametrize(
    ("change", "surface"),
    [
        ((FRICTION, FRICTION + "\nfriction_range = [0.6, 0.7]"), "dry"),
        ((FALLING, FALLING + "\nfriction_range = [0.3, 0.4]"), "wet"),
        ((FALLING, "friction = { sn0 = 50, png = 0.9 }\nfriction_range = [0.3, 0.4]"), "wet"),
        (
            (FRICTION, 'friction = { table = [["30 km/h", 0.45], ["60 km/h", 0.35]] }\nfriction_range = [0.3, 0.4]'),
            "dry",
        ),
    ],
)
def test_every_form_may_have_a_range(edition: Changed, change: tuple[str, str], surface: str) -> None:
    made = edition(change)
    friction = made.surface(surface).friction
    assert (friction.low, friction.high) in ((0.6, 0.7), (0.3, 0.4))
    assert made.warnings == ()


def test_a_range_of_ones_own_takes_the_presets_source_away(edition: Changed) -> None:
    made = edition((FALLING, 'use = "surface/wet-minimum"\nfriction_range = [0.3, 0.4]'))
    surface = made.surface("wet")
    assert (surface.friction.f60, surface.friction.low, surface.source.text) == (0.383, 0.3, "")


# ---- vehicles ------------------------------------------------------------------------------------------------------


def test_an_unbraked_trailer_takes_its_share_of_the_brakes(edition: Changed) -> None:
    trailer = 'mass = "1.5 t"\ntrailer = { length = "6 m", braked = false, mass = "750 kg" }'
    lorry = edition(('length = "10 m"', 'length = "10 m"\n' + trailer)).vehicle("lorry")
    assert lorry.trailer == Trailer(length_m=6, braked=False, mass_kg=750)
    assert lorry.whole_length_m == 16
    assert lorry.brake_share == pytest.approx(1500 / 2250)


def test_a_braked_trailer_needs_no_mass(edition: Changed) -> None:
    lorry = edition(('length = "10 m"', 'trailer = { length = "20 ft", braked = true }')).vehicle("lorry")
    assert (lorry.brake_share, lorry.whole_length_m) == (1.0, None)


CAR = 'kind = "car"\nname = { en-GB = "Car", cy = "Car" }'


def test_a_vehicle_may_be_a_preset(edition: Changed) -> None:
    preset = VEHICLES["vehicle/car-un"]
    car = edition((CAR, 'use = "vehicle/car-un"')).vehicle("car")
    assert (car.kind, car.max_deceleration_mps2, car.brake_lag_s) == ("car", preset.max_deceleration_mps2, 0.36)
    assert (car.source, car.preset, car.test_figure) == (preset.source, "vehicle/car-un", True)
    assert car.name["cy"] == preset.name["cy"]


def test_a_key_beside_a_vehicle_preset_overrides_it(edition: Changed) -> None:
    car = edition((CAR, 'use = "vehicle/car-un"\nmax_deceleration = "5 m/s^2"')).vehicle("car")
    assert (car.max_deceleration_mps2, car.brake_lag_s, car.test_figure) == (5, 0.36, False)
    assert car.source is not None
    assert car.source.text == ""
    longer = edition((CAR, 'use = "vehicle/car-un"\nlength = "4.5 m"')).vehicle("car")
    assert (longer.length_m, longer.source) == (4.5, VEHICLES["vehicle/car-un"].source)


# ---- the spread and the questions ------------------------------------------------------------------------------------

QUESTIONS = """
[questions]
residual_from = "30 mph"
sight = "300 ft"
headlight = "headlight/dipped-least"
gap = ["gap/two-seconds", "gap/per-length"]
driver = "ready"
surface = "dry"
"""
LENGTH = ('kind = "car"', 'kind = "car"\nlength = "4.5 m"')


def test_every_question_may_be_asked(edition: Changed) -> None:
    made = edition(LENGTH, more=QUESTIONS)
    assert made.questions == Questions(
        residual_from=30.0,
        sight_m=91.44,
        headlight="headlight/dipped-least",
        gaps=("gap/two-seconds", "gap/per-length"),
        driver="ready",
        surface="dry",
    )
    assert made.warnings == ("questions.driver: there is no other driver that could be compared with it.",)


def test_a_vehicle_without_a_length_gets_no_gap_by_length(edition: Changed) -> None:
    assert edition(more='\n[questions]\ngap = "gap/per-length"\n').warnings == (
        'questions.gap[1]: gap/per-length goes by length, and the vehicle "car" states none: it gets no gap.',
    )


def test_without_questions_none_is_asked(edition: Changed) -> None:
    made = edition()
    assert (made.questions, made.spread, made.compare) == (Questions(), None, True)


def test_the_fastest_speed_leaves_none_to_compare(edition: Changed) -> None:
    assert edition(more='\n[questions]\nresidual_from = "70 mph"\n').warnings == (
        "questions.residual_from: this is the fastest of the speeds; none is left to compare with it.",
    )


@pytest.mark.parametrize("change", [(FRICTION, FRICTION + "\nfriction_range = [0.6, 0.7]"), (
    TIME, 'reaction_time = { p50 = "1.1 s", p85 = "1.6 s" }')])  # fmt: skip
def test_a_spread_follows_from_reaction_or_friction(edition: Changed, change: tuple[str, str]) -> None:
    section = ("[[driver]]", "[figures]\ncompare = false\n[figures.spread]\nsamples = 256\nseed = 7\n\n[[driver]]")
    made = edition(section, change)
    assert (made.spread, made.compare) == (Spread(samples=256, seed=7), False)
    assert edition((section[0], "[figures.spread]\n\n[[driver]]"), change).spread == Spread(samples=4096, seed=1)


@pytest.mark.parametrize("method", ["slide-metric", "sight-metric"])
def test_only_first_principles_leave_rows_out(edition: Changed, method: str) -> None:
    """Within the source's speeds another method loses nothing without them."""
    lorry = ('brake_lag = "0.4 s"\n', "")
    limit = ('max_deceleration = "5 m/s^2"\n', "") if method == "slide-metric" else (
        'kind = "car"', 'kind = "car"\nmax_deceleration = "3.4 m/s^2"'
    )  # fmt: skip
    made = edition(
        ("[[driver]]", f'[figures]\nmethod = "{method}"\n\n[[driver]]'),
        (FRICTION, FRICTION + '\nvalid = ["20 mph", "70 mph"]'),
        lorry,
        limit,
    )
    assert made.surface("dry").friction.valid_kmh is None
