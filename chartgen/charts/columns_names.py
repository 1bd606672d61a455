"""Where the names of the parts stand: each once, in every language, where it reads best; and the flat plates behind
words.

Inside the last column that has room, below or beside the number; low in a column that does not end; else in a lane
beside the last column, with a leader.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from chartgen.charts.columns_data import PARTS, Part
from chartgen.charts.columns_frame import Edge, Frame, Post
from chartgen.charts.columns_text import (
    INK_ON,
    SHRINK,
    Placed,
    Plate,
    Spot,
    Task,
    inner_height,
    inner_width,
    ladder,
    least_size,
    legible,
    stroke,
)
from chartgen.charts.inks import LARGE_BOLD_MM
from chartgen.charts.words import LEADING, Key


def _name_inside(post: Post, edge: Edge, number: Spot, task: Task) -> tuple[Spot, Spot] | None:
    """(the number moved aside, the name) where both fit in the part, the name below or beside the number, which may
    shrink."""
    m, part = task.measures, edge.part
    room, inner, middle = inner_width(post, edge, m, hatch=0.12), inner_height(edge, m), (edge.low_y + edge.high_y) / 2
    content = Key(f"part.{part}")
    base = Spot(
        content=content, x0=0, x1=0, y0=0, y1=0, align="start", size=0, face="text-bold", ink=INK_ON[part], role="name"
    )
    # The size from which bold counts as large is tried too: on a middle tone nothing smaller may stand.
    steps = {*ladder(m.name, m.name_least), *([LARGE_BOLD_MM] if m.name_least < LARGE_BOLD_MM < m.name else [])}
    sizes = [size for size in sorted(steps, reverse=True) if legible(task, INK_ON[part], part, size, bold=True)]
    longest = task.readers.longest_word(content, "text-bold")
    for shrink in SHRINK[:6]:
        figure = number.size * shrink
        if figure < least_size(part, m) - 1e-9 or not legible(task, number.ink, part, figure, bold=False):
            break
        tall, wide = (number.y1 - number.y0) * shrink, (number.x1 - number.x0) * shrink
        for size in sizes:
            air = 0.35 * size
            if longest * size <= room:
                count, width = task.readers.room(content, "text-bold", size, room)
                height = count * LEADING * size
                if width <= room and tall + air + height + 0.2 * size <= inner:
                    top = middle - (tall + air + height) / 2
                    moved = _at(number, post.centre - wide / 2, top, wide, tall, figure)
                    return moved, replace(
                        _at(base, post.centre - room / 2, top + tall + air, room, height, size), align="center"
                    )
            count, width = task.readers.room(content, "text-bold", size)
            height = count * LEADING * size
            if wide + 2 * air + width <= room and max(height + 0.2 * size, tall) <= inner:
                left = post.centre - (wide + 2 * air + width) / 2
                moved = _at(number, left, middle - tall / 2, wide, tall, figure)
                return moved, _at(base, left + wide + 2 * air, middle - height / 2, width + 0.01, height, size)
    return None


def _name_in_open_column(frame: Frame, task: Task) -> tuple[int, Spot] | None:
    """(index of the post, the braking part's name) in the last column that does not end, low enough to clear its
    verdict."""
    index = next((i for i in range(len(frame.posts) - 1, -1, -1) if not frame.posts[i].bar.stops), None)
    if index is None:
        return None
    post, edge, m = frame.posts[index], frame.posts[index].edges[-1], task.measures
    room = inner_width(post, edge, m)
    longest = task.readers.longest_word(Key("part.braking"), "text-bold")
    for size in ladder(m.name, m.name_least):
        if longest * size > room:
            continue
        count, width = task.readers.room(Key("part.braking"), "text-bold", size, room)
        height = count * LEADING * size
        if width <= room and height <= 0.3 * edge.height:
            y = edge.low_y - 0.3 * edge.height - height / 2
            return index, Spot(
                content=Key("part.braking"), x0=post.centre - room / 2, x1=post.centre + room / 2, y0=y,
                y1=y + height, align="center", size=size, face="text-bold", ink="paper", role="name",
            )  # fmt: skip
    return None


def _at(spot: Spot, x: float, y: float, wide: float, tall: float, size: float) -> Spot:
    return replace(spot, x0=x, x1=x + wide, y0=y, y1=y + tall, size=size)


def names(frame: Frame, task: Task, placed: Placed, inside: dict[tuple[int, Part], Spot]) -> None:
    """Each part's name once, in both languages, where it reads best; then plates for all that stands in a texture."""
    homeless: list[Part] = []
    parts = [part for part in PARTS if any(e.part == part for p in frame.posts for e in p.edges)]
    plates: dict[tuple[int, Part], list[Spot]] = {key: [spot] for key, spot in inside.items()}
    for part in parts:
        for index in range(len(frame.posts) - 1, -1, -1):
            number = inside.get((index, part))
            if number is None:
                continue
            post = frame.posts[index]
            found = _name_inside(post, next(e for e in post.edges if e.part == part), number, task)
            if found is not None:
                plates[index, part] = list(found)
                break
        else:
            if part == "braking" and (found_open := _name_in_open_column(frame, task)) is not None:
                plates[found_open[0], part] = [found_open[1]]
            else:
                homeless.append(part)
    for (index, part), spots in plates.items():
        placed.spots += spots
        placed.plates.append(_plate(frame.posts[index], index, part, spots, task))
    _names_lane(frame, task, placed, homeless)


def _plate(post: Post, index: int, part: Part, spots: Sequence[Spot], task: Task) -> Plate:
    margin = 0.18 * spots[0].size
    left, right = post.centre, post.centre
    for spot in spots:
        wide = task.readers.room(spot.content, spot.face, spot.size, spot.x1 - spot.x0)[1]
        middle = (spot.x0 + spot.x1) / 2
        left, right = min(left, middle - wide / 2), max(right, middle + wide / 2)
    edge = next(e for e in post.edges if e.part == part)
    return Plate(
        post=index, part=part,
        x0=max(left - margin, post.x0), x1=min(right + margin, post.x1),
        y0=max(min(s.y0 for s in spots) - margin, edge.high_y), y1=min(max(s.y1 for s in spots) + margin, edge.low_y),
    )  # fmt: skip


def _names_lane(frame: Frame, task: Task, placed: Placed, homeless: Sequence[Part]) -> None:
    if not homeless:
        return
    m = task.measures
    size = m.name_least
    leader = 1.6
    wide = task.readers.widest([Key(f"part.{part}") for part in homeless], "text-bold", size)
    placed.need(names_lane=wide + leader + 1.2)
    foot = frame.base_y
    for part in homeless:
        post = frame.posts[-1]
        edge = next((e for e in post.edges if e.part == part), None)
        if edge is None:  # only columns further in have it: a leader would cross the last one
            continue
        count, _ = task.readers.room(Key(f"part.{part}"), "text-bold", size)
        height = count * LEADING * size
        x = frame.columns_end + placed.needs.end_lane + leader
        beside = [s for s in placed.spots if s.row == post.bar.row and s.x0 > post.x1]
        own = next((s.middle for s in beside if s.quantity == part), None)
        middle = min((edge.low_y + edge.high_y) / 2 if own is None else own, foot - height / 2)
        foot = middle - height / 2 - 0.3 * size
        if own is not None:  # its number stands beside the column already, with the leader that serves both
            x = max(s.x1 for s in beside) + 0.35 * size
        else:
            target = min(max(middle, edge.high_y + m.hairline), edge.low_y - m.hairline)
            top, low = min(middle, target) - 0.3, max(middle, target) + 0.3
            # Past the number of another part there is no leader: the name stands level with its part all the same.
            if not any(s.y0 < low and s.y1 > top for s in beside):
                placed.strokes.append(stroke(x - 0.4, middle, post.x1, target, m.hairline))
        placed.spots.append(Spot(
            content=Key(f"part.{part}"), x0=x, x1=x + wide + 0.01, y0=middle - height / 2, y1=middle + height / 2,
            align="start", size=size, face="text-bold", ink="type", role="name",
        ))  # fmt: skip
