"""Where the columns stand: scale, base line, widths, ruler. Logical millimetres: x runs in reading direction from the start
edge, so one frame serves both directions; y runs downwards."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final

from chartgen.charts.columns_data import Bar, Group, Part, decimals
from chartgen.charts.fonts import digit_ratio
from chartgen.charts.measures import Measures
from chartgen.charts.words import Content, Number, Readers, Unit
from chartgen.figures.units import METRES_IN

TOTAL_GAP: Final = 0.1
"""Air between a column and its total, as a part of the total's font size."""
_COURSES: Final = {"m": (10.0, 20.0, 50.0, 100.0, 200.0, 500.0), "ft": (25.0, 50.0, 100.0, 200.0, 500.0, 1000.0, 2000.0)}
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
    """One column: its row, where it stands, its parts. `top_y` is the exact end of the stopping distance (0 without one)."""

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
    """Every how-manieth group is labelled, counted back from the last; 1 unless the columns are too narrow for numbers."""
    total_size: float
    speed_size: float
    course: float
    course_mm: float
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

    A part thinner than the gap keeps a visible sliver and pushes the boundary above it up; the column's end stays exact.
    """
    marks = [base_y]
    for length in bar.lengths_m:
        marks.append(marks[-1] - length * scale)
    parts: tuple[Part, ...] = bar.parts
    if not bar.stops:
        marks.append(top_y)
        parts = (*parts, "braking")
    last = len(parts) - 1
    for i in range(last):
        eaten = gap if 0 < i else gap / 2
        marks[i + 1] = min(marks[i + 1], marks[i] - eaten - _LEAST_PART_MM)
    return tuple(
        Edge(part=part, low_y=marks[i] - (gap / 2 if i else 0), high_y=marks[i + 1] + (gap / 2 if i < last else 0))
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


def _across(n: int, series: int, width: float, ruler: float, m: Measures, needs: Needs) -> _Row:
    start = needs.start_lane
    ruler_x = width - ruler
    end = ruler_x - needs.names_lane - needs.end_lane - m.gutter * 0.4
    room = end - start
    gutter = max(m.gutter * (1.0 if series == 1 else 2.0), needs.before_groups + needs.after_groups)
    gutter = min(gutter, room / n * 0.5)
    group = (room - (n - 1) * gutter) / n
    widest = 0.26 * width * (1 + 0.5 * (series - 1))
    if group > widest:  # few speeds: keep pillars, spread them
        group = widest
        gutter = (room - n * group) / (n - 1) if n > 1 else 0.0
        if gutter > group:
            gutter = group
        start = start + (room - n * group - (n - 1) * gutter) / 2
    spans = tuple((start + i * (group + gutter), start + i * (group + gutter) + group) for i in range(n))
    pair = min(m.pair, 0.2 * group / series)
    return _Row(
        spans=spans, column=(group - (series - 1) * pair) / series, pitch=group + gutter, gutter=gutter, end=end, ruler_x=ruler_x
    )


def _sizes(groups: tuple[Group, ...], readers: Readers, row: _Row, m: Measures) -> tuple[float, float, int]:
    """(font size of totals, of speeds, every how-manieth group is labelled)."""
    totals = distances(groups)
    speeds = speed_contents(groups)
    series = len(groups[0].bars)
    # As wide as its column where it is inked: a capital on its pillar.
    total_em = max(readers.widest_ink(totals, "numeral-bold"), 0.01)
    speed_em = readers.widest(speeds, "numeral", 1.0)
    total = min(m.total, row.column / total_em)
    speed = min(m.speed, 0.82 * row.pitch / speed_em)
    every = 1
    least = m.total_least
    if total < least or speed < m.unit:
        total, speed = max(total, least), max(speed, m.unit)
        every = math.ceil(max(1.12 * total * total_em * series, 1.2 * speed * speed_em) / row.pitch)
    return total, speed, every


def distances(groups: tuple[Group, ...]) -> tuple[Number, ...]:
    """The printed totals of the columns that end."""
    values = [bar.printed_total for bar in all_bars(groups) if bar.stops]
    places = distance_decimals(groups)
    return tuple(Number(value, places) for value in values)


def distance_decimals(groups: tuple[Group, ...]) -> int:
    """Decimal places of every distance of the drawing."""
    return decimals([v for bar in all_bars(groups) for v in (*bar.printed, bar.printed_total)])


def speed_contents(groups: tuple[Group, ...]) -> tuple[Number, ...]:
    places = decimals([group.printed_speed for group in groups])
    return tuple(Number(group.printed_speed, places) for group in groups)


def all_bars(groups: tuple[Group, ...]) -> Iterator[Bar]:
    return (bar for group in groups for bar in group.bars if bar is not None)


def _scale(groups: tuple[Group, ...], base_y: float, total_size: float, head: float, m: Measures) -> float:
    ending = [bar.known_m for bar in all_bars(groups) if bar.stops]
    endless = [bar.known_m for bar in all_bars(groups) if not bar.stops]
    wishes = []
    if ending:
        top = (digit_ratio("numeral-bold") + TOTAL_GAP + 0.02) * total_size + 0.5 + (max(head, 0.5 * m.broken) if endless else 0.0)
        wishes.append((base_y - top) / max(ending))
    if endless and max(endless) > 0:
        wishes.append(0.45 * (base_y - head) / max(endless))
    if not wishes or not max(wishes) > 0:
        raise ValueError("nothing to draw, or no room to draw it in")
    return min(wishes)


def _step(unit: str, scale: float, room_mm: float, steps: tuple[float, ...]) -> float:
    metres = METRES_IN[unit]
    return next((step for step in steps if step * metres * scale >= room_mm), steps[-1])


def _ruler(
    unit: str, scale: float, base_y: float, longest_m: float, endless: bool, m: Measures
) -> tuple[tuple[tuple[float, float | None], ...], float]:
    metres = METRES_IN[unit]
    step = _step(unit, scale, 2.2 * m.ruler, _COURSES[unit])
    half = step / 2 if step / 2 * metres * scale >= 1.6 and step != 25 else step
    top_room = 2.6 * m.ruler
    reach = (base_y - top_room) / (metres * scale) if endless else min(longest_m / metres, (base_y - top_room) / (metres * scale))
    ticks = []
    for i in range(1, int(reach / half + 1e-9) + 1):
        value = i * half
        ticks.append((base_y - value * metres * scale, value if abs(value % step) < 1e-9 else None))
    top = min((y for y, _ in ticks), default=base_y - top_room)
    return tuple(ticks), top - 1.1 * m.ruler


def _posts(groups: tuple[Group, ...], row: _Row, base_y: float, scale: float, m: Measures) -> tuple[Post, ...]:
    series = len(groups[0].bars)
    pair = (row.spans[0][1] - row.spans[0][0] - series * row.column) / max(series - 1, 1)
    posts = []
    for g, group in enumerate(groups):
        for s, bar in enumerate(group.bars):
            if bar is None:
                continue
            x0 = row.spans[g][0] + s * (row.column + pair)
            top = base_y - bar.known_m * scale if bar.stops else 0.0
            edges = part_edges(bar, base_y, scale, m.gap, top)
            posts.append(Post(group=g, series=s, bar=bar, x0=x0, x1=x0 + row.column, top_y=top, edges=edges))
    return tuple(posts)


def frame(
    groups: tuple[Group, ...], readers: Readers, m: Measures, needs: Needs, *, width: float, height: float, speed_unit: str, unit: str
) -> Frame:
    """Stand the columns in `width` x `height` mm so that the tallest fits with its total, granting `needs`.

    Raises ValueError where the drawing is too small to hold any column.
    """
    longest = max(bar.known_m for bar in all_bars(groups))
    unit_words: tuple[Content, ...] = (Unit(unit),)
    number = Number(float(math.ceil(longest / METRES_IN[unit])))
    ruler_words = max(readers.widest((number,), "text", m.ruler), readers.widest(unit_words, "text", m.ruler))
    band_words = readers.widest((Unit(speed_unit),), "text", m.unit)
    ruler = max(m.gutter * 0.4 + m.tick + 0.35 * m.ruler + ruler_words, band_words + 0.8 * m.unit) + 0.2
    row = _across(len(groups), len(groups[0].bars), width, ruler, m, needs)
    if row.column <= 0.2:
        raise ValueError(f"{len(groups)} columns do not fit in {width:g} mm")
    total, speed, every = _sizes(groups, readers, row, m)
    band_y = height - m.band
    base_y = band_y - m.gap - needs.foot
    scale = _scale(groups, base_y, total, needs.head, m)
    endless = any(not bar.stops for bar in all_bars(groups))
    ticks, unit_y = _ruler(unit, scale, base_y, longest, endless, m)
    course = _step(unit, scale, 2.6 * m.joint + 1.2, _COURSES[unit])
    return Frame(
        width=width, height=height, base_y=base_y, band_y=band_y, scale=scale,
        posts=_posts(groups, row, base_y, scale, m),
        centres=tuple((a + b) / 2 for a, b in row.spans), spans=row.spans,
        every=every, total_size=total, speed_size=speed, course=course, course_mm=course * METRES_IN[unit] * scale,
        columns_end=row.end, ruler_x=row.ruler_x, ticks=ticks, unit_y=unit_y,
    )  # fmt: skip
