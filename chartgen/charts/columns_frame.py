"""Where the columns stand: scale, base line, widths, ruler. Logical millimetres: x runs in reading direction from the
start edge, so one frame serves both directions; y runs downwards."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Final

from chartgen.charts.columns_data import (
    Bar,
    Group,
    Part,
    all_bars,
    distance_decimals,
    distances,
    has_spread,
    speed_contents,
)
from chartgen.charts.columns_ruler import course_step, ruler_ticks
from chartgen.charts.columns_totals import TOTAL_GAP, Column, Seat, seats
from chartgen.charts.fonts import digit_ratio, extent
from chartgen.charts.measures import Measures
from chartgen.charts.words import Content, Number, Readers, Unit, say
from chartgen.figures.units import METRES_IN

_LEAST_JOINTED_MM: Final = 2.0
"""A column narrower than this has no joints: they would shimmer, and nobody counts them."""
_LEAST_PART_MM: Final = 0.4
"""A part that is something is never drawn as nothing."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Needs:
    """Room that words outside the columns ask for, in mm; found by placing them, then granted by the next frame."""

    start_lane: float = 0.0
    end_lane: float = 0.0
    before_groups: float = 0.0
    after_groups: float = 0.0
    names_lane: float = 0.0
    foot: float = 0.0
    head: float = 0.0

    def grown(self, other: Needs) -> Needs:
        """The greater of each: room once granted is not taken back, so that placing comes to rest."""
        return Needs(
            start_lane=max(self.start_lane, other.start_lane),
            end_lane=max(self.end_lane, other.end_lane),
            before_groups=max(self.before_groups, other.before_groups),
            after_groups=max(self.after_groups, other.after_groups),
            names_lane=max(self.names_lane, other.names_lane),
            foot=max(self.foot, other.foot),
            head=max(self.head, other.head),
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class Edge:
    """A part as it is drawn, white gaps taken off: from `low_y` (nearer the base) up to `high_y`."""

    part: Part
    low_y: float
    high_y: float

    @property
    def height(self) -> float:
        return self.low_y - self.high_y


@dataclass(frozen=True, slots=True, kw_only=True)
class Post:
    """One column: its row, where it stands, its parts. `top_y` is the exact end of the stopping distance (0 without
    one)."""

    group: int
    series: int
    bar: Bar
    x0: float
    x1: float
    top_y: float
    edges: tuple[Edge, ...]

    @property
    def centre(self) -> float:
        return (self.x0 + self.x1) / 2


@dataclass(frozen=True, slots=True, kw_only=True)
class Frame:
    """Everything that stands still while the words are placed."""

    width: float
    height: float
    base_y: float
    band_y: float
    scale: float
    """mm on the drawing for one metre of road."""
    posts: tuple[Post, ...]
    centres: tuple[float, ...]
    spans: tuple[tuple[float, float], ...]
    """Start and end of each group."""
    every: int
    """Every how-manieth group is labelled, counted back from the last; 1 unless the columns are too narrow for
    numbers."""
    total_size: float
    seats: tuple[Seat, ...]
    """Where totals sit; `Seat.column` counts the posts."""
    speed_size: float
    course: float
    course_mm: float
    granted: bool
    """False where the columns stand too close for the room that was asked for between them."""
    columns_end: float
    ruler_x: float
    ticks: tuple[tuple[float, float | None], ...]
    """(y, the number it carries or None)."""
    unit_y: float
    """Foot of the unit's word above the ruler."""

    def labelled(self, group: int) -> bool:
        return (len(self.centres) - 1 - group) % self.every == 0


def part_edges(bar: Bar, base_y: float, scale: float, gap: float, top_y: float) -> tuple[Edge, ...]:
    """The parts of a bar stacked on the base line from unrounded lengths, a white gap centred on each boundary.

    A part thinner than its share of the gaps keeps a visible sliver and moves the boundary it shares with the greater
    neighbour; the column's end stays exact. Where the whole column is shorter than slivers and gaps, both shrink.
    """
    parts: tuple[Part, ...] = bar.parts if bar.stops else (*bar.parts, "braking")
    marks = [base_y]
    for length in bar.lengths_m:
        marks.append(marks[-1] - length * scale)
    if bar.stops:
        marks[-1] = top_y
    else:
        marks.append(top_y)
    n = len(parts)
    shrink = min(1.0, (base_y - top_y) / (n * _LEAST_PART_MM + (n - 1) * gap)) if n else 1.0
    gap, least = gap * shrink, _LEAST_PART_MM * shrink
    # What a part needs between its boundaries: its sliver and its share of the gaps at either end.
    needs = [least + gap / 2 * ((i > 0) + (i < n - 1)) for i in range(n)]
    for i in range(1, n):
        marks[i] = min(marks[i], marks[i - 1] - needs[i - 1])
    for i in range(n - 1, 0, -1):
        marks[i] = max(marks[i], marks[i + 1] + needs[i])
    return tuple(
        Edge(part=part, low_y=marks[i] - (gap / 2 if i else 0), high_y=marks[i + 1] + (gap / 2 if i < n - 1 else 0))
        for i, part in enumerate(parts)
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _Row:
    """Across: where the groups stand."""

    spans: tuple[tuple[float, float], ...]
    column: float
    pitch: float
    gutter: float
    end: float
    ruler_x: float
    granted: bool


def _across(n: int, series: int, width: float, ruler: float, m: Measures, needs: Needs) -> _Row:
    start = needs.start_lane
    ruler_x = width - ruler
    end = ruler_x - needs.names_lane - needs.end_lane - m.gutter * 0.4
    room = end - start
    gutter = max(m.gutter * (1.0 if series == 1 else 2.0), needs.before_groups + needs.after_groups)
    granted = gutter <= room / n * 0.5
    gutter = min(gutter, room / n * 0.5)
    group = (room - (n - 1) * gutter) / n
    widest = 0.26 * width * (1 + 0.5 * (series - 1))
    if group > widest:  # few speeds: keep pillars, spread them
        group = widest
        gutter = (room - n * group) / (n - 1) if n > 1 else 0.0
        gutter = min(gutter, group)
        start = start + (room - n * group - (n - 1) * gutter) / 2
    spans = tuple((start + i * (group + gutter), start + i * (group + gutter) + group) for i in range(n))
    pair = min(m.pair, 0.2 * group / series)
    return _Row(
        spans=spans,
        column=(group - (series - 1) * pair) / series,
        pitch=group + gutter,
        gutter=gutter,
        end=end,
        ruler_x=ruler_x,
        granted=granted,
    )


def _every(groups: tuple[Group, ...], readers: Readers, row: _Row, m: Measures) -> tuple[float, int]:
    """(font size of the speeds, every how-manieth group is labelled)."""
    speed_em = readers.widest(speed_contents(groups), "numeral", 1.0)
    total_em = readers.widest_ink(distances(groups), "numeral-bold")
    speed = min(m.speed, 0.82 * row.pitch / speed_em)
    if speed >= m.unit:
        return speed, 1
    return m.unit, math.ceil(max(1.2 * m.unit * speed_em, 0.8 * m.total_least * total_em) / row.pitch)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Standing:
    """A bar and where it stands across."""

    group: int
    series: int
    bar: Bar
    x0: float
    x1: float


def _standing(groups: tuple[Group, ...], row: _Row) -> tuple[_Standing, ...]:
    series = len(groups[0].bars)
    pair = (row.spans[0][1] - row.spans[0][0] - series * row.column) / max(series - 1, 1)
    return tuple(
        _Standing(group=g, series=s, bar=bar, x0=x0, x1=x0 + row.column)
        for g, group in enumerate(groups)
        for s, bar in enumerate(group.bars)
        if bar is not None
        for x0 in (row.spans[g][0] + s * (row.column + pair),)
    )


def _seated(
    standing: tuple[_Standing, ...],
    groups: tuple[Group, ...],
    readers: Readers,
    row: _Row,
    base_y: float,
    every: int,
    m: Measures,
    head: float,
) -> tuple[float, float, tuple[Seat, ...]]:
    """(font size of the totals, scale, seats): the largest size at which every total has a seat."""
    places, ratio, last = distance_decimals(groups), digit_ratio("numeral-bold"), len(groups) - 1
    inks = [
        readers.widest_ink([Number(s.bar.printed_total, places)], "numeral-bold")
        if s.bar.stops and (last - s.group) % every == 0 else None
        for s in standing
    ]  # fmt: skip
    widest = max((ink for ink in inks if ink is not None), default=0.0)
    air = total_air(groups, readers)

    def attempt(size: float, reach: float | None = None) -> tuple[float, float, tuple[Seat, ...], int]:
        scale = _scale(groups, base_y, size, air, head, m)
        columns = [
            Column(x0=s.x0, x1=s.x1, top=base_y - s.bar.known_m * scale if s.bar.stops else 0.0, ink=ink, air=air)
            for s, ink in zip(standing, inks, strict=True)
        ]
        found, without = seats(columns, size, size * ratio, reach=reach, all_or_none=reach is None)
        return size, scale, found, without

    if not widest:
        return attempt(m.total_least)[:3]
    pillar = min(m.total, row.column / widest)
    # A whisker stands beside its column: there a total keeps to its pillar.
    greatest = pillar if has_spread(groups) else min(m.total, 1.6 * row.column / widest)
    # A little larger is not worth leaving the pillar for.
    wishes = [greatest * (pillar * 1.1 / greatest) ** (i / 6) for i in range(7)] if greatest > 1.1 * pillar else []
    for size in (*wishes, pillar, (pillar + m.total_least) / 2, m.total_least):
        if size >= m.total_least:
            tried = attempt(size)
            if not tried[3]:
                return tried[:3]
    return attempt(m.total_least, reach=math.inf)[:3]


def total_air(groups: tuple[Group, ...], readers: Readers) -> float:
    """Air between a column and its total, as a part of the font size."""
    said = [say(number, setting[0]) for number in distances(groups) for setting in readers.settings]
    return max(TOTAL_GAP, max((extent(text, "numeral-bold").below for text in said), default=0.0) + 0.03)


def _scale(groups: tuple[Group, ...], base_y: float, total_size: float, air: float, head: float, m: Measures) -> float:
    ending = [bar.known_m for bar in all_bars(groups) if bar.stops]
    endless = [bar.known_m for bar in all_bars(groups) if not bar.stops]
    wishes = []
    if ending:
        top = (
            (digit_ratio("numeral-bold") + air + 0.02) * total_size
            + 0.5
            + (max(head, 0.5 * m.broken) if endless else 0.0)
        )
        wishes.append((base_y - top) / max(ending))
    if endless and max(endless) > 0:
        wishes.append(0.45 * (base_y - head) / max(endless))
    spreads = [bar.spread_m[-1] for bar in all_bars(groups) if bar.spread_m is not None]
    if spreads:
        wishes.append((base_y - 1.0) / max(spreads))
    if not wishes or not max(wishes) > 0:
        raise ValueError("nothing to draw, or no room to draw it in")
    return min(wishes)


def _posts(standing: tuple[_Standing, ...], base_y: float, scale: float, m: Measures) -> tuple[Post, ...]:
    posts = []
    for s in standing:
        top = base_y - s.bar.known_m * scale if s.bar.stops else 0.0
        edges = part_edges(s.bar, base_y, scale, m.gap, top)
        posts.append(Post(group=s.group, series=s.series, bar=s.bar, x0=s.x0, x1=s.x1, top_y=top, edges=edges))
    return tuple(posts)


def frame(
    groups: tuple[Group, ...],
    readers: Readers,
    m: Measures,
    needs: Needs,
    *,
    width: float,
    height: float,
    speed_unit: str,
    unit: str,
) -> Frame:
    """Stand the columns in `width` x `height` mm so that the tallest fits with its total, granting `needs`.

    Raises ValueError where the drawing is too small to hold any column.
    """
    longest = max(bar.known_m for bar in all_bars(groups))
    endless = any(not bar.stops for bar in all_bars(groups))
    unit_words: tuple[Content, ...] = (Unit(unit),)
    # Where a column does not end, the ruler runs on to the top: less than four times the longest length there is.
    number = Number(float(math.ceil(longest / METRES_IN[unit] * (4.0 if endless else 1.0))))
    ruler_words = max(readers.widest((number,), "text", m.ruler), readers.widest(unit_words, "text", m.ruler))
    band_words = readers.widest((Unit(speed_unit),), "text", m.unit)
    ruler = max(m.gutter * 0.4 + m.tick + 0.35 * m.ruler + ruler_words, band_words + 0.8 * m.unit) + 0.2
    row = _across(len(groups), len(groups[0].bars), width, ruler, m, needs)
    if row.column <= 0.2:
        raise ValueError(f"{len(groups)} columns do not fit in {width:g} mm")
    speed, every = _every(groups, readers, row, m)
    band_y = height - m.band
    base_y = band_y - m.gap - needs.foot
    standing = _standing(groups, row)
    total, scale, taken = _seated(standing, groups, readers, row, base_y, every, m, needs.head)
    ticks, unit_y = ruler_ticks(unit, scale, base_y, longest, endless, readers.room(Unit(unit), "text", m.ruler)[0], m)
    course = course_step(unit, scale, 2.6 * m.joint + 1.2) if row.column >= _LEAST_JOINTED_MM else 0.0
    return Frame(
        width=width, height=height, base_y=base_y, band_y=band_y, scale=scale,
        posts=_posts(standing, base_y, scale, m),
        centres=tuple((a + b) / 2 for a, b in row.spans), spans=row.spans,
        every=every, total_size=total, seats=taken, speed_size=speed, course=course,
        course_mm=course * METRES_IN[unit] * scale,
        columns_end=row.end, granted=row.granted, ruler_x=row.ruler_x, ticks=ticks, unit_y=unit_y,
    )  # fmt: skip
