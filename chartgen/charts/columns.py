"""The columns drawing: stopping distance grows upwards from a common base line, one column a speed, parts stacked.

1. `plan` works out where everything stands, once, with room for every language (frozen, hashable, no direction).
2. `draw` inks it for a direction: the same for every language, so it is kept.
3. `write` puts one setting's words on it. `columns` does all three.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from functools import lru_cache
from typing import Literal

import pandas as pd

from chartgen.charts import canvas, columns_marks, measures
from chartgen.charts.columns_data import Group, groups, has_spread
from chartgen.charts.columns_frame import Frame, Needs, frame
from chartgen.charts.columns_names import names
from chartgen.charts.columns_text import Placed, Plate, Spot, Task, numbers, ruler, speeds, totals
from chartgen.charts.columns_verdicts import drivers, verdicts
from chartgen.charts.drawing import Anchor, Direction, Drawing, Label
from chartgen.charts.fonts import digit_ratio, extent
from chartgen.charts.inks import Palette
from chartgen.charts.measures import Measures
from chartgen.charts.words import LEADING, Name, Number, Readers, Words, lines

Medium = Literal["poster", "web"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Plan:
    """Where everything stands. `spots` hold contents, not texts; x runs in reading direction."""

    frame: Frame
    measures: Measures
    needs: Needs
    spots: tuple[Spot, ...]
    plates: tuple[Plate, ...]
    strokes: tuple[canvas.Polygon, ...]
    lintels: tuple[tuple[float, float, float, float], ...]

    @property
    def unlabelled(self) -> tuple[int, ...]:
        """Rows whose total found no seat, or that do not stop and carry no words that say so."""
        told = {spot.row for spot in self.spots if spot.role in {"total", "verdict"}}
        across = [(x0, x1) for x0, _, x1, _ in self.lintels]
        return tuple(
            post.bar.row
            for post in self.frame.posts
            if post.bar.row not in told and (post.bar.stops or not any(x0 <= post.centre <= x1 for x0, x1 in across))
        )

    @property
    def total_digit_mm(self) -> float:
        printed = any(spot.role == "total" for spot in self.spots)
        return self.frame.total_size * digit_ratio("numeral-bold") if printed else 0.0


def plan(
    series: Sequence[pd.DataFrame],
    *,
    languages: tuple[Words, ...],
    palette: Palette,
    width_mm: float,
    height_mm: float,
    distance_unit: str,
    speed_unit: str,
    names_of_series: Sequence[Mapping[str, str]] = (),
    together: bool = True,
    medium: Medium = "poster",
) -> Plan:
    """Stand columns and words for one to three series (slices of the table in speed order).

    `together`: all languages on one drawing; False: each on its own, with the same marks. `names_of_series`: a name by
    language tag for each series, needed for two or three. Raises ValueError for rows that cannot be drawn and for too
    small a drawing.
    """
    made = groups(series)
    if len(series) > 1 and len(names_of_series) != len(series):
        raise ValueError("each of several series needs a name")
    m = measures.poster(width_mm, height_mm) if medium == "poster" else measures.web(width_mm, height_mm)
    if has_spread(made):
        m = replace(m, gutter=max(m.gutter, 2.0 * m.whisker), pair=max(m.pair, 2.0 * m.whisker))
    task = Task(
        groups=made,
        readers=Readers(languages, together),
        measures=m,
        palette=palette,
        drivers=tuple(Name(tuple(sorted(texts.items()))) for texts in names_of_series) if len(series) > 1 else (),
        speed_unit=speed_unit,
        distance_unit=distance_unit,
        lanes=not has_spread(made),
    )
    settled = _settle(task, width_mm, height_mm)
    if any((settled.needs.start_lane, settled.needs.end_lane, settled.needs.before_groups, settled.needs.after_groups)):
        without = _settle(replace(task, lanes=False), width_mm, height_mm)
        if not _worth_its_lanes(settled, without):
            return without
    return settled


def _worth_its_lanes(made: Plan, without: Plan) -> bool:
    """Whether numbers beside the columns may stay: they have the room they asked for, meet no total, cost no total its
    seat, and make the totals at most a seventh smaller."""
    beside = [
        spot for spot in made.spots if spot.role in {"part", "lag"} and spot.ink == "type" and spot.align != "center"
    ]
    leader = max(1.2, 0.35 * made.measures.beside)
    seated = [spot for spot in made.spots if spot.role == "total"]
    meets = any(
        one.x0 - leader < two.x1 and one.x1 + leader > two.x0 and one.y0 < two.y1 + 0.3 and one.y1 + 0.3 > two.y0
        for one in beside
        for two in seated
    )
    return (
        made.frame.granted
        and not meets
        and len(made.frame.seats) >= len(without.frame.seats)
        and made.frame.total_size >= 0.85 * without.frame.total_size
    )


def _settle(task: Task, width_mm: float, height_mm: float) -> Plan:
    """Stand the columns, place the words, grant the room they ask for, again until nothing more is asked."""
    # A whisker behind the last column keeps clear of the ruler.
    needs = Needs(end_lane=1.5 * task.measures.whisker) if has_spread(task.groups) else Needs()
    while True:
        still = frame(
            task.groups, task.readers, task.measures, needs,
            width=width_mm, height=height_mm, speed_unit=task.speed_unit, unit=task.distance_unit,
        )  # fmt: skip
        placed = _place(still, task, needs)
        if placed.needs == needs:
            break
        needs = placed.needs
    return Plan(
        frame=still, measures=task.measures, needs=needs, spots=tuple(placed.spots), plates=tuple(placed.plates),
        strokes=tuple(placed.strokes), lintels=tuple(placed.lintels),
    )  # fmt: skip


def _place(still: Frame, task: Task, needs: Needs) -> Placed:
    placed = Placed(needs=needs)
    totals(still, task, placed)
    speeds(still, task, placed)
    ruler(still, task, placed)
    inside = numbers(still, task, placed)
    names(still, task, placed, inside)
    verdicts(still, task, placed)
    drivers(still, task, placed)
    return placed


@lru_cache(maxsize=128)
def draw(plan: Plan, palette: Palette, direction: Direction) -> str:
    """The marks of a plan as textless SVG; for "rtl" as in a mirror: first column at the right, ruler at the left."""
    still = plan.frame
    pieces = columns_marks.pieces(still, plan.plates, plan.strokes, plan.lintels, plan.measures)
    if direction == "rtl":
        pieces = tuple((ink, canvas.mirrored(polygons, still.width)) for ink, polygons in pieces)
    return canvas.svg(pieces, palette, still.width, still.height)


def write(plan: Plan, languages: tuple[Words, ...], direction: Direction) -> tuple[Label, ...]:
    """The labels of one setting: all of `languages` on one drawing, in this direction."""
    return tuple(label for spot in plan.spots for label in _labels(spot, languages, plan.frame.width, direction))


def _labels(spot: Spot, languages: tuple[Words, ...], width: float, direction: Direction) -> list[Label]:
    room = spot.x1 - spot.x0
    block = lines(spot.content, languages, spot.face, spot.size, room)
    number = isinstance(spot.content, Number)
    pitch = LEADING * spot.size
    top = spot.middle - len(block) * pitch / 2
    x = {"start": spot.x0, "center": (spot.x0 + spot.x1) / 2, "end": spot.x1}[spot.align]
    anchors: dict[str, Anchor] = {"start": "left", "center": "center", "end": "right"}
    anchor = anchors[spot.align]
    if direction == "rtl":
        x = width - x
        anchor = {"left": "right", "right": "left", "center": "center"}[anchor]  # type: ignore[assignment]
    made = []
    if spot.inked:
        x, anchor = _by_ink(spot, block[0].text, width, direction), "center"
    for i, line in enumerate(block):
        # Digits stand on the foot of their box; words centre their capitals on their line.
        baseline = spot.y1 if number else top + (i + 0.5) * pitch + 0.5 * _middle(line.text, spot) * spot.size
        made.append(Label(
            text=line.text, x_mm=round(x, 3), y_mm=round(baseline, 3), size_mm=round(spot.size, 3), anchor=anchor,
            face=spot.face,
            ink=spot.ink, lang=line.words.tag, dir="ltr" if number else line.words.direction, role=spot.role,
            row=spot.row, quantity=spot.quantity,
        ))  # fmt: skip
    return made


def _by_ink(spot: Spot, text: str, width: float, direction: Direction) -> float:
    """Where the middle of the advance of `text` must stand for its ink to be centred in, or flush with, the spot's
    box."""
    reach = extent(text, spot.face)
    ink = reach.ink * spot.size
    middle = (spot.x0 + spot.x1) / 2 if spot.align == "center" else spot.x1 - ink / 2
    middle = width - middle if direction == "rtl" else middle
    return middle - (reach.before - reach.after) / 2 * spot.size


def _middle(text: str, spot: Spot) -> float:
    reach = extent(text, spot.face)
    return max(0.5, reach.above) - 0.6 * reach.below


def _skyline(plan: Plan, direction: Direction) -> tuple[tuple[float, float, float], ...]:
    still = plan.frame
    steps = []
    for index, (x0, x1) in enumerate(still.spans):
        tops = [post.top_y for post in still.posts if post.group == index]
        tops += [
            spot.y0 for spot in plan.spots if spot.role in {"total", "part", "lag"} and spot.x1 > x0 and spot.x0 < x1
        ]
        tops += [y0 for a, y0, b, _ in plan.lintels if b > x0 and a < x1]
        steps.append((x0, x1, min(tops)))
    if direction == "rtl":
        steps = [(still.width - x1, still.width - x0, y) for x0, x1, y in reversed(steps)]
    return tuple(steps)


def finish(plan: Plan, *, name: str, languages: tuple[Words, ...], palette: Palette, direction: Direction) -> Drawing:
    """A drawing from a plan: its marks in a direction, its labels in a setting of languages."""
    still = plan.frame
    jointed = any(edge.part == "braking" for post in still.posts for edge in post.edges)
    return Drawing(
        name=name, width_mm=still.width, height_mm=still.height, direction=direction,
        marks_svg=draw(plan, palette, direction), labels=write(plan, languages, direction),
        total_digit_mm=plan.total_digit_mm, unlabelled=plan.unlabelled, course=still.course if jointed else 0.0,
        spread=any(post.bar.spread_m is not None for post in still.posts), scale_mm_per_m=still.scale,
        skyline=_skyline(plan, direction),
    )  # fmt: skip


def columns(
    series: Sequence[pd.DataFrame],
    *,
    languages: tuple[Words, ...],
    palette: Palette,
    width_mm: float,
    height_mm: float,
    direction: Direction,
    distance_unit: str,
    speed_unit: str,
    names_of_series: Sequence[Mapping[str, str]] = (),
    medium: Medium = "poster",
    name: str = "columns",
) -> Drawing:
    """Plan, draw and write in one go: all `languages` together on one drawing."""
    made = plan(
        series, languages=languages, palette=palette, width_mm=width_mm, height_mm=height_mm,
        distance_unit=distance_unit, speed_unit=speed_unit, names_of_series=names_of_series, medium=medium,
    )  # fmt: skip
    return finish(made, name=name, languages=languages, palette=palette, direction=direction)


__all__ = ["Group", "Medium", "Plan", "columns", "draw", "finish", "plan", "write"]
