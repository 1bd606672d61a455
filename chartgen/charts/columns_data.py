"""Rows of the one table as bars: plain, frozen, in the order in which they stand."""

from __future__ import annotations

import math
from collections.abc import Hashable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Final, Literal

import pandas as pd

from chartgen.charts.words import Number
from chartgen.figures.notices import OUTSIDE

Part = Literal["reaction", "lag", "braking"]
PARTS: Final[tuple[Part, ...]] = ("reaction", "lag", "braking")
_FIELDS: Final = (
    "row", "speed", "printed_speed", "stops", "reaction_distance_m", "lag_distance_m", "braking_distance_m",
    "stopping_distance_m", "printed_reaction", "printed_lag", "printed_braking", "printed_stopping",
    "reason", "stopping_p50_m", "stopping_p85_m", "stopping_p95_m",
)  # fmt: skip
MOST_SERIES: Final = 3
"""Scenarios side by side (requirement N8)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Bar:
    """One row. `lengths_m` are unrounded, of the parts of `PARTS` in order, a part that is nothing left out; `printed`
    the same parts' printed figures. Where it does not stop the braking part has no length and no figure."""

    row: int
    speed: float
    printed_speed: float
    stops: bool
    parts: tuple[Part, ...]
    lengths_m: tuple[float, ...]
    printed: tuple[float, ...]
    printed_total: float
    spread_m: tuple[float, float, float] | None = None
    """Within these distances 50, 85 and 95 of 100 stops end; None where nothing varies, or not all of them end."""

    @property
    def known_m(self) -> float:
        """Length of what has one: the whole, or what passes before the braking that has no end."""
        return sum(self.lengths_m)


@dataclass(frozen=True, slots=True, kw_only=True)
class Group:
    """The bars of one speed, series by series; None where a series has no row at this speed."""

    speed: float
    printed_speed: float
    bars: tuple[Bar | None, ...]


def _bar(record: Mapping[Hashable, Any], *, with_lag: bool) -> Bar:
    stops = bool(record["stops"])
    parts = tuple(part for part in PARTS if part != "lag" or with_lag)
    measured = tuple(part for part in parts if stops or part != "braking")
    lengths = tuple(float(record[f"{part}_distance_m"]) for part in measured)
    if not all(
        length >= 0 for length in lengths
    ):  # also refuses nan: a bar of no length must never pass for a short one
        raise ValueError(f"row {int(record['row'])}: a part has no length to draw ({lengths})")
    kept = tuple(i for i, length in enumerate(lengths) if length > 0)
    return Bar(
        row=int(record["row"]),
        speed=float(record["speed"]),
        printed_speed=float(record["printed_speed"]),
        stops=stops,
        parts=tuple(measured[i] for i in kept),
        lengths_m=tuple(lengths[i] for i in kept),
        printed=tuple(float(record[f"printed_{measured[i]}"]) for i in kept),
        printed_total=float(record["printed_stopping"]),
        spread_m=_spread(record) if stops else None,
    )


def _spread(record: Mapping[Hashable, Any]) -> tuple[float, float, float] | None:
    low, middle, high = (float(record.get(f"stopping_p{percent}_m", math.nan)) for percent in (50, 85, 95))
    return (low, middle, high) if math.isfinite(low + middle + high) else None


def has_spread(groups: tuple[Group, ...]) -> bool:
    """Whether any column has a whisker."""
    return any(bar.spread_m is not None for bar in all_bars(groups))


def groups(series: Sequence[pd.DataFrame]) -> tuple[Group, ...]:
    """One group a speed, in the speeds' order. Each of one to three frames is a slice of the table with one row a
    speed.

    Raises ValueError for another number of series, for a speed twice in one series, and for no rows at all.
    """
    if not 1 <= len(series) <= MOST_SERIES:
        raise ValueError(f"one to {MOST_SERIES} series, not {len(series)}")
    found: list[dict[float, Bar]] = []
    for frame in series:
        # A row without a figure for want of a measured friction is a gap: it must not look like one that never ends.
        # Column by column: a frame's own way to records costs more than all the rest here.
        fields = [name for name in _FIELDS if name in frame]
        columns = (frame[name].tolist() for name in fields)
        known: list[dict[Hashable, Any]] = [dict(zip(fields, row, strict=True)) for row in zip(*columns, strict=True)]
        records = [record for record in known if record.get("reason") != OUTSIDE]
        with_lag = any(record["lag_distance_m"] > 0 for record in records)
        bars = [_bar(record, with_lag=with_lag) for record in records]
        by_speed = {bar.speed: bar for bar in bars}
        if len(by_speed) != len(bars):
            raise ValueError("a speed stands twice in one series")
        found.append(by_speed)
    speeds = sorted({speed for by_speed in found for speed in by_speed})
    if not speeds:
        raise ValueError("no rows to draw")
    made = []
    for speed in speeds:
        bars_here = tuple(by_speed.get(speed) for by_speed in found)
        printed = next(bar.printed_speed for bar in bars_here if bar is not None)
        made.append(Group(speed=speed, printed_speed=printed, bars=bars_here))
    return tuple(made)


def decimals(values: Sequence[float]) -> int:
    """Decimal places (0 to 3) that write every finite one of these printed values as it is."""
    finite = [value for value in values if value == value]  # noqa: PLR0124 nan is what differs from itself
    return next((places for places in range(3) if all(abs(round(v, places) - v) < 1e-9 for v in finite)), 3)


def distances(groups: tuple[Group, ...]) -> tuple[Number, ...]:
    """The printed totals of the columns that end."""
    values = [bar.printed_total for bar in all_bars(groups) if bar.stops]
    places = distance_decimals(groups)
    return tuple(Number(value, places) for value in values)


def distance_decimals(groups: tuple[Group, ...]) -> int:
    """Decimal places of every distance of the drawing."""
    return decimals([v for bar in all_bars(groups) for v in (*bar.printed, bar.printed_total)])


def speed_contents(groups: tuple[Group, ...]) -> tuple[Number, ...]:
    """The printed speeds, group by group."""
    places = decimals([group.printed_speed for group in groups])
    return tuple(Number(group.printed_speed, places) for group in groups)


def all_bars(groups: tuple[Group, ...]) -> Iterator[Bar]:
    """Every bar, in the order in which the columns stand."""
    return (bar for group in groups for bar in group.bars if bar is not None)
