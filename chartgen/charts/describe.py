"""Text alternatives of drawings: what the drawing claims and over which range, never that it is a chart.

Every sentence is a whole one from the word list; figures are the printed ones.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Final

import pandas as pd

from chartgen.charts.columns_data import Bar, groups
from chartgen.charts.words import Words

MOST_CHARACTERS: Final = 150
"""Of a text alternative (requirement A4)."""


def alt_text(
    series: Sequence[pd.DataFrame],
    *,
    language: Words,
    speed_unit: str,
    distance_unit: str,
    names_of_series: Sequence[Mapping[str, str]] = (),
) -> str:
    """The claim of a columns drawing of the same rows, with its range, in one language.

    A slower speed that does not stop speaks for the faster ones too. Raises ValueError for rows that cannot be drawn.
    """
    made = groups(series)
    voice = _Voice(language, speed_unit, distance_unit)
    lists = [[bar for group in made if (bar := group.bars[i]) is not None] for i in range(len(series))]
    if len(lists) == 1:
        return voice.one(lists[0])
    if len(names_of_series) != len(series):
        raise ValueError("each of several series needs a name")
    if not any(bar.stops for bars in lists for bar in bars):
        return voice.one([bar for group in made for bar in group.bars if bar is not None])
    low, high = (language.speed(group.printed_speed, speed_unit) for group in (made[0], made[-1]))
    told = [voice.several(language.text(name), bars) for name, bars in zip(names_of_series, lists, strict=True)]
    whole = " ".join([language.plain("alt.columns_many", low=low, high=high), *told])
    short = " ".join(told)
    if len(whole) <= MOST_CHARACTERS:
        return whole
    # Too long to listen to. Where one series does not stop and another does, both stay; else the claim of the series
    # that needs most room, which errs on no side but the long one.
    if len(short) <= MOST_CHARACTERS and any(not bar.stops for bars in lists for bar in bars):
        return short
    return voice.one(max(lists, key=_reach))


class _Voice:
    def __init__(self, language: Words, speed_unit: str, distance_unit: str) -> None:
        self.language = language
        self.units = (speed_unit, distance_unit)

    def speed(self, bar: Bar) -> str:
        return self.language.speed(bar.printed_speed, self.units[0])

    def total(self, bar: Bar) -> str:
        return self.language.distance(bar.printed_total, self.units[1])

    def one(self, bars: Sequence[Bar]) -> str:
        """Sentences about the only series."""
        say = self.language.plain
        stopping, never = _parted(bars)
        if not stopping:
            if len(bars) == 1:
                return say("alt.columns_never", never=self.speed(bars[0]))
            return say("alt.columns_none", low=self.speed(bars[0]), high=self.speed(bars[-1]))
        first, last = stopping[0], stopping[-1]
        ends = {
            "first": self.total(first),
            "low": self.speed(first),
            "last": self.total(last),
            "high": self.speed(last),
        }
        times = times_as_far(first, last)
        if len(stopping) == 1:
            claim = say("alt.columns_one", total=self.total(first), speed=self.speed(first))
        elif times >= 2 and never is None:
            claim = say("alt.columns", times=self.language.number(times), **ends)
        else:
            claim = say("alt.columns_short", **ends)
        return claim if never is None else f"{claim} {say('alt.columns_never', never=self.speed(never))}"

    def several(self, name: str, bars: Sequence[Bar]) -> str:
        """Sentences about one series of several."""
        say, verdict = self.language.plain, self.language.t("verdict.does_not_stop")
        stopping, never = _parted(bars)
        if not stopping:
            return say("alt.columns_series_none", name=name, verdict=verdict)
        told = say("alt.columns_series", name=name, first=self.total(stopping[0]), last=self.total(stopping[-1]))
        return told if never is None else f"{told} {say('alt.columns_never', never=self.speed(never))}"


def _parted(bars: Sequence[Bar]) -> tuple[list[Bar], Bar | None]:
    """(the bars that stop, below the first that does not; that first one)."""
    for index, bar in enumerate(bars):
        if not bar.stops:
            return list(bars[:index]), bar
    return list(bars), None


def _reach(bars: Sequence[Bar]) -> float:
    """The greatest length of a series; endless where one does not stop."""
    return max(bar.known_m if bar.stops else math.inf for bar in bars)


def times_as_far(first: Bar, last: Bar) -> int:
    """The whole number of times that the last distance holds the first, by the printed and by the exact figures (the
    lesser): "at least so many times as far" is then true of both."""
    if not (first.known_m > 0 and first.printed_total > 0):
        return 0
    return math.floor(min(last.known_m / first.known_m, last.printed_total / first.printed_total) + 1e-9)
