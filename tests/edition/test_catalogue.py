"""The catalogue: each preset with a source, and its value found where the source says."""

from __future__ import annotations

from math import exp

import pytest
from scipy.stats import lognorm

from chartgen.edition.catalogue import DRIVERS, GAP_RULES, SURFACES

TAGS = {"en-GB", "en-US", "cy", "fr", "ar", "es-US"}


def test_everything_has_a_key_a_source_and_a_name_in_each_language() -> None:
    for prefix, entries in (("reaction/", DRIVERS), ("surface/", SURFACES), ("gap/", GAP_RULES)):
        for key, preset in entries.items():
            assert key == preset.key
            assert key.startswith(prefix)
            assert preset.source.text
            assert set(preset.name) == TAGS


def test_there_are_five_reaction_times_and_more_over_the_whole_range() -> None:
    times = [preset.reaction.time_s for preset in DRIVERS.values()]
    assert len(times) >= 5
    assert (min(times), max(times)) == (0.67, 2.5)


@pytest.mark.parametrize(("mph", "thinking_m"), [(20, 6), (30, 9), (40, 12), (50, 15), (60, 18), (70, 21)])
def test_the_alert_driver_is_the_highway_codes(mph: float, thinking_m: float) -> None:
    """The Highway Code, rule 126: thinking distances in whole metres."""
    assert round(mph * 0.44704 * DRIVERS["reaction/alert"].reaction.time_s) == thinking_m


def test_the_surprised_driver_has_the_published_percentiles() -> None:
    """Traffic Flow Theory (FHWA), chapter 3, table of brake reaction times to a surprise: median 1.18, 85th percentile
    1.87, 95th 2.45, 99th 3.31 s (from memory in part; the table's own last digit is worth 0.01 to 0.02 s)."""
    reaction = DRIVERS["reaction/surprise"].reaction
    assert reaction.mu is not None
    assert reaction.sigma is not None
    spread = lognorm(s=reaction.sigma, scale=exp(reaction.mu))
    assert spread.ppf([0.5, 0.85, 0.95, 0.99]) == pytest.approx([1.18, 1.87, 2.45, 3.31], abs=0.02)
    assert reaction.time_s == pytest.approx(spread.ppf(0.85), rel=1e-12)
    assert DRIVERS["reaction/surprise"].source.from_memory


def test_the_wet_minimum_is_never_above_its_two_published_points() -> None:
    """Road Research Laboratory, LR 131 (1968): 0.4 at 30 mile/h and 0.3 at 80 mile/h."""
    friction = SURFACES["surface/wet-minimum"].friction
    assert friction.f60 is not None
    assert friction.sp_kmh is not None
    for mph, published in ((30, 0.4), (80, 0.3)):
        at = friction.f60 * exp((60 - mph * 1.609344) / friction.sp_kmh)
        assert published - 0.001 < at <= published


def test_the_rule_by_length_gives_the_manuals_example() -> None:
    """Commercial driver's license manual: a 60-ft vehicle above 40 mph needs 7 seconds; 40 ft below 40 mph, 4."""
    rule = GAP_RULES["gap/per-length"]
    assert rule.per_length_s_per_m is not None
    assert rule.per_length_s_per_m * 60 * 0.3048 + rule.extra_s == pytest.approx(7)
    assert rule.per_length_s_per_m * 40 * 0.3048 == pytest.approx(4)
    assert rule.extra_above_mps == pytest.approx(40 * 0.44704)
