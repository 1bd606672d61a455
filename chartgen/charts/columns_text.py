"""Where the words and numbers of the columns stand, and what room they ask for outside the columns.

Order of preference of a part's number: inside its part in the part's own ink; beside the column with a leader; where
neither has room (a middle column of three, columns too narrow for any number) it is left to the table.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Final

from chartgen.charts.canvas import Polygon
from chartgen.charts.columns_data import Group, Part, distance_decimals, speed_contents
from chartgen.charts.columns_frame import Edge, Frame, Needs, Post
from chartgen.charts.drawing import FaceName, Role
from chartgen.charts.fonts import digit_ratio
from chartgen.charts.inks import Palette, contrast, least_contrast
from chartgen.charts.measures import Measures
from chartgen.charts.words import LEADING, Content, Name, Number, Readers, Unit

DIGIT: Final = digit_ratio
INK_ON: Final = {"reaction": "type", "lag": "paper", "braking": "paper"}
SHRINK: Final = (1.0, 0.88, 0.77, 0.68, 0.6, 0.52, 0.46, 0.4)
Align = str


@dataclass(frozen=True, slots=True, kw_only=True)
class Spot:
    """Room for one content: a box in logical mm. Words wrap to its width and stand centred in its height."""

    content: Content
    x0: float
    x1: float
    y0: float
    y1: float
    align: Align
    size: float
    face: FaceName
    ink: str
    role: Role
    row: int | None = None
    quantity: str | None = None
    inked: bool = False
    """True where the box is that of the ink, not of the advance: the text then stands by what is seen of it."""

    @property
    def middle(self) -> float:
        return (self.y0 + self.y1) / 2


@dataclass(frozen=True, slots=True, kw_only=True)
class Plate:
    """A place in a texture that stays flat, so that what is written there can be read."""

    post: int
    part: Part
    x0: float
    x1: float
    y0: float
    y1: float


@dataclass(slots=True)
class Placed:
    """What placing has found so far. The only record here that grows; it does not leave this module unfrozen."""

    spots: list[Spot] = field(default_factory=list)
    plates: list[Plate] = field(default_factory=list)
    strokes: list[Polygon] = field(default_factory=list)
    lintels: list[tuple[float, float, float, float]] = field(default_factory=list)
    needs: Needs = field(default_factory=Needs)

    def need(self, **room: float) -> None:
        self.needs = self.needs.grown(Needs(**room))


@dataclass(frozen=True, slots=True, kw_only=True)
class Task:
    """What is to be labelled, for whom, how large."""

    groups: tuple[Group, ...]
    readers: Readers
    measures: Measures
    palette: Palette
    drivers: tuple[Name, ...]
    speed_unit: str
    distance_unit: str
    lanes: bool = True
    """Whether numbers may stand beside the columns, in lanes that take room from them."""


def ladder(wish: float, least: float) -> tuple[float, ...]:
    """Font sizes to try, from the wish down to the floor: few steps, so that a drawing keeps few sizes."""
    return (*(wish * f for f in SHRINK if wish * f > least * 1.02), least) if wish > least else (least,)


def legible(task: Task, ink: str, ground: str, size: float, *, bold: bool) -> bool:
    ratio = contrast(task.palette.ink(ink).srgb, task.palette.ink(ground).srgb)
    return ratio >= least_contrast(size, bold=bold)


def stroke(x0: float, y0: float, x1: float, y1: float, thick: float) -> Polygon:
    """A straight line as a thin piece; lines here run more across than up, or straight up."""
    h = thick / 2
    if abs(x1 - x0) >= abs(y1 - y0):
        return ((x0, y0 - h), (x1, y1 - h), (x1, y1 + h), (x0, y0 + h))
    return ((x0 - h, y0), (x0 + h, y0), (x1 + h, y1), (x1 - h, y1))


# ---- totals, speeds, ruler ----------------------------------------------------------------------


def totals(frame: Frame, task: Task, placed: Placed) -> None:
    places = distance_decimals(task.groups)
    for seat in frame.seats:
        bar = frame.posts[seat.column].bar
        placed.spots.append(Spot(
            content=Number(bar.printed_total, places), x0=seat.x0, x1=seat.x1, y0=seat.y0, y1=seat.y1,
            align="center" if seat.centred else "end", inked=True, size=frame.total_size, face="numeral-bold",
            ink="type", role="total", row=bar.row, quantity="stopping",
        ))  # fmt: skip


def speeds(frame: Frame, task: Task, placed: Placed) -> None:
    digit = DIGIT("numeral") * frame.speed_size
    middle = (frame.band_y + frame.height) / 2
    for g, content in enumerate(speed_contents(task.groups)):
        if not frame.labelled(g):
            continue
        bar = next(bar for bar in task.groups[g].bars if bar is not None)
        wide = task.readers.room(content, "numeral", frame.speed_size)[1]
        x0 = min(max(frame.centres[g] - wide / 2, 0.0), frame.ruler_x - wide)
        placed.spots.append(Spot(
            content=content, x0=x0, x1=x0 + wide, y0=middle - digit / 2, y1=middle + digit / 2, align="center",
            size=frame.speed_size, face="numeral", ink="paper", role="speed", row=bar.row, quantity="speed",
        ))  # fmt: skip
    size = task.measures.unit
    count, _ = task.readers.room(Unit(task.speed_unit), "text", size)
    size = min(size, (task.measures.band - 1.0) / (count * LEADING))
    placed.spots.append(Spot(
        content=Unit(task.speed_unit), x0=frame.ruler_x, x1=frame.width, y0=frame.band_y, y1=frame.height,
        align="center", size=size, face="text", ink="paper", role="unit",
    ))  # fmt: skip


def ruler(frame: Frame, task: Task, placed: Placed) -> None:
    m = task.measures
    x = frame.ruler_x + 0.4 * m.gutter
    digit = DIGIT("text") * m.ruler
    for y, value in frame.ticks:
        placed.strokes.append(stroke(x, y, x + (m.tick if value is not None else 0.5 * m.tick), y, m.hairline))
        if value is not None:
            placed.spots.append(Spot(
                content=Number(value), x0=x + m.tick + 0.35 * m.ruler, x1=frame.width, y0=y - digit / 2,
                y1=y + digit / 2, align="start", size=m.ruler, face="text", ink="type", role="ruler",
            ))  # fmt: skip
    count, _ = task.readers.room(Unit(task.distance_unit), "text", m.ruler)
    height = count * LEADING * m.ruler
    placed.spots.append(Spot(
        content=Unit(task.distance_unit), x0=x + m.tick + 0.35 * m.ruler, x1=frame.width, y0=frame.unit_y - height,
        y1=frame.unit_y, align="start", size=m.ruler, face="text", ink="type", role="unit",
    ))  # fmt: skip


# ---- numbers of the parts ----------------------------------------------------------------------


def inner_height(edge: Edge, m: Measures) -> float:
    """Height within a part that a number may fill."""
    return edge.height - 2 * (m.outline + 0.5 if edge.part == "reaction" else 0.4)


def least_size(part: Part, m: Measures) -> float:
    return m.lag_least if part == "lag" else m.number_least


def inner_width(post: Post, edge: Edge, m: Measures, *, hatch: float = 0.2) -> float:
    """Width within a part that words may fill. `hatch`: the part of the width that the lag's hatch keeps at either
    side, since words lie on flat ink through the part's whole height."""
    width = post.x1 - post.x0
    pad = min(m.pad, 0.08 * width)
    return width - 2 * {"reaction": pad + m.outline, "lag": max(pad, hatch * width), "braking": pad}[edge.part]


def _number_size(post: Post, edge: Edge, content: Number, task: Task) -> float | None:
    m = task.measures
    room = inner_width(post, edge, m)
    em = task.readers.room(content, "numeral", 1.0)[1]
    for size in ladder(m.number, least_size(edge.part, m)):
        if (
            size * DIGIT("numeral") <= inner_height(edge, m)
            and size * em <= room
            and legible(task, INK_ON[edge.part], edge.part, size, bold=False)
        ):
            return size
    return None


def numbers(frame: Frame, task: Task, placed: Placed) -> dict[tuple[int, Part], Spot]:
    """Place the number of every part; give back those that stand inside, by (index of the post, part)."""
    places = distance_decimals(task.groups)
    inside: dict[tuple[int, Part], Spot] = {}
    for index, post in enumerate(frame.posts):
        if not frame.labelled(post.group):
            continue
        outside: list[tuple[Edge, Number]] = []
        for edge, value in zip(post.edges, post.bar.printed, strict=False):
            content = Number(value, places)
            size = _number_size(post, edge, content, task)
            if size is None:
                outside.append((edge, content))
                continue
            wide, tall = task.readers.room(content, "numeral", size)[1], size * DIGIT("numeral")
            middle = (edge.low_y + edge.high_y) / 2
            inside[index, edge.part] = Spot(
                content=content, x0=post.centre - wide / 2, x1=post.centre + wide / 2, y0=middle - tall / 2,
                y1=middle + tall / 2, align="center", size=size, face="numeral", ink=INK_ON[edge.part],
                role="lag" if edge.part == "lag" else "part", row=post.bar.row, quantity=edge.part,
            )  # fmt: skip
        if outside and frame.every == 1:
            _beside(frame, task, placed, post, outside)
    return inside


def _beside(frame: Frame, task: Task, placed: Placed, post: Post, outside: Sequence[tuple[Edge, Number]]) -> None:
    m = task.measures
    series = len(task.groups[0].bars)
    first, last = post.series == 0, post.series == series - 1
    if not task.lanes or not (first or last) or post.x1 - post.x0 < 0.8 * m.beside:
        return
    digit = DIGIT("numeral") * m.beside
    leader = max(1.2, 0.35 * m.beside)
    wide = max(task.readers.room(content, "numeral", m.beside)[1] for _, content in outside)
    edge_of_all = post.group == (0 if first else len(task.groups) - 1)
    lane = ("start_lane" if first else "end_lane") if edge_of_all else ("before_groups" if first else "after_groups")
    placed.need(**{lane: wide + leader + 1.0})
    middle = frame.base_y + digit
    for edge, content in outside:
        middle = min(middle - 1.4 * digit, (edge.low_y + edge.high_y) / 2, frame.base_y - digit / 2)
        width = task.readers.room(content, "numeral", m.beside)[1]
        near = post.x0 - leader if first else post.x1 + leader
        touch = post.x0 if first else post.x1
        target = min(max(middle, edge.high_y + m.hairline), edge.low_y - m.hairline)
        placed.strokes.append(stroke(near + (0.4 if first else -0.4), middle, touch, target, m.hairline))
        placed.spots.append(Spot(
            content=content, x0=near - width if first else near, x1=near if first else near + width,
            y0=middle - digit / 2, y1=middle + digit / 2, align="end" if first else "start", size=m.beside,
            face="numeral", ink="type", role="lag" if edge.part == "lag" else "part", row=post.bar.row,
            quantity=edge.part,
        ))  # fmt: skip
