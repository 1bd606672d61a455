"""Words on columns that do not end, and the names of the series beneath the columns."""

from __future__ import annotations

from typing import Final

from chartgen.charts.columns_frame import Frame, Post
from chartgen.charts.columns_text import Placed, Plate, Spot, Task, ladder, stroke
from chartgen.charts.words import LEADING, Key, Name

VERDICT: Final = Key("verdict.does_not_stop")


def verdicts(frame: Frame, task: Task, placed: Placed) -> None:
    """“Does not stop” in every column that does not end, or, where one is too narrow for the words, on a lintel laid
    across neighbours that all do not end."""
    endless = [post for post in frame.posts if not post.bar.stops]
    if not endless:
        return
    m = task.measures
    room = endless[0].x1 - endless[0].x0 - 2 * m.pad
    tall = 0.55 * min(post.edges[-1].height for post in endless) - m.broken - 2 * m.pad  # the rest is the part's name's
    for size in ladder(m.verdict, m.verdict_least):
        count, wide = task.readers.room(VERDICT, "text-bold", size, room)
        if wide <= room and count * LEADING * size <= tall and not placed.needs.head:
            for post in endless:
                _in_column(frame, placed, post, size, count * LEADING * size, task)
            return
    _lintels(frame, task, placed)


def _in_column(frame: Frame, placed: Placed, post: Post, size: float, height: float, task: Task) -> None:
    m = task.measures
    top = m.broken + m.pad
    placed.spots.append(Spot(
        content=VERDICT, x0=post.x0 + m.pad, x1=post.x1 - m.pad, y0=top, y1=top + height, align="center", size=size,
        face="text-bold", ink="paper", role="verdict", row=post.bar.row, quantity="stops",
    ))  # fmt: skip
    placed.plates.append(
        Plate(post=frame.posts.index(post), part="braking", x0=post.x0, x1=post.x1, y0=top, y1=top + height)
    )


def _runs(posts: tuple[Post, ...]) -> list[list[Post]]:
    runs: list[list[Post]] = []
    following = False
    for post in posts:
        if post.bar.stops:
            following = False
            continue
        if following:
            runs[-1].append(post)
        else:
            runs.append([post])
        following = True
    return runs


def _lintels(frame: Frame, task: Task, placed: Placed) -> None:
    m = task.measures
    size = m.verdict_least
    count, wide = task.readers.room(VERDICT, "text-bold", size)
    top = m.broken
    foot = top + count * LEADING * size + 2 * m.pad
    placed.need(head=foot + 1.0)
    taken = frame.columns_end
    for run in reversed(_runs(frame.posts)):
        x1 = run[-1].x1
        x0 = min(run[0].x0, x1 - wide - 2 * m.pad)
        if x0 < 0:
            x0, x1 = 0.0, max(x1, wide + 2 * m.pad)
        if x1 > taken + 0.01:
            # Columns that end and columns that do not stand by turns, closer than the words are wide: the greater
            # speed's lintel speaks; this run keeps its open top and is told as unlabelled.
            continue
        taken = x0 - 1.0
        placed.lintels.append((x0, top, x1, foot))
        placed.spots.append(Spot(
            content=VERDICT, x0=x0 + m.pad - 0.01, x1=x1 - m.pad + 0.01, y0=top + m.pad, y1=foot - m.pad,
            align="center", size=size,
            face="text-bold", ink="paper", role="verdict", row=run[0].bar.row, quantity="stops",
        ))  # fmt: skip


def drivers(frame: Frame, task: Task, placed: Placed) -> None:
    """The names of the series beneath every column, or, where a column is too narrow, once: as flags that hang from the
    first group's columns."""
    if len(task.drivers) < 2:
        return
    m = task.measures
    room = min(post.x1 - post.x0 for post in frame.posts)
    for size in ladder(m.driver, m.driver_least):
        blocks = [task.readers.room(name, "text", size, room) for name in task.drivers]
        most = max(count for count, _ in blocks)
        if max(wide for _, wide in blocks) <= room and most <= (6 if task.readers.together else 3) and frame.every == 1:
            height = most * LEADING * size
            placed.need(foot=height + 1.2)
            for post in frame.posts:
                name = task.drivers[post.series]
                tall = task.readers.room(name, "text", size, room)[0] * LEADING * size
                placed.spots.append(
                    _driver(
                        name, post.centre - room / 2, post.centre + room / 2, frame.base_y + 1.0, tall, "center", size
                    )
                )
            return
    _flags(frame, task, placed)


def _driver(name: Name, x0: float, x1: float, top: float, height: float, align: str, size: float) -> Spot:
    return Spot(
        content=name,
        x0=x0,
        x1=x1 + 0.01,
        y0=top,
        y1=top + height,
        align=align,
        size=size,
        face="text",
        ink="type",
        role="driver",
    )


def _flags(frame: Frame, task: Task, placed: Placed) -> None:
    m = task.measures
    size = m.driver_least
    top = frame.base_y + 1.0
    for series in range(len(task.drivers) - 1, -1, -1):
        post = next((p for p in frame.posts if p.series == series), None)
        if post is None:
            continue
        name = task.drivers[series]
        room = frame.width - post.centre - 1.0
        count, _ = task.readers.room(name, "text", size, room)
        height = count * LEADING * size
        placed.strokes.append(
            stroke(post.centre, frame.base_y + 0.5, post.centre, top + height - 0.25 * size, m.hairline * 1.4)
        )
        placed.spots.append(_driver(name, post.centre + 1.0, frame.width, top, height, "start", size))
        top += height + 0.2 * size
    placed.need(foot=top - frame.base_y)
