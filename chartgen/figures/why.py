"""Which assumptions of a row and of a published table differ: codes with both values, worded by the floors above."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Literal

from chartgen.edition.model import PARTS, Part
from chartgen.figures.library import PublishedRow, PublishedTable
from chartgen.figures.rounding import total_rule

if TYPE_CHECKING:
    from chartgen.edition.model import Edition

Code = Literal[
    "reaction", "friction", "deceleration", "lag", "build-up", "rounding", "total", "sum", "kind", "state"
]  # fmt: skip
"""reaction, lag, build-up: s; friction: coefficient; deceleration: m/s², as full braking begins; rounding: rule of
`part`, total: how the total is made, both with their steps; sum: the sum of the published parts (as `ours`) beside the
published total that they do not add up to; kind of vehicle; state of the road."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Why:
    """One assumption that differs. None: not stated, or none."""

    code: Code
    ours: float | str | None
    theirs: float | str | None
    fitted: bool = False
    """True: theirs is not stated by the source, it was worked out from its rows."""
    part: Part | None = None
    """The part that a rounding rule is for."""
    ours_step: float | None = None
    theirs_step: float | None = None


def whys(record: Mapping[str, Any], published: PublishedRow, table: PublishedTable, edition: Edition) -> Iterator[Why]:
    """What differs between a row of the edition's table and the published row beside it, in a fixed order.

    Formula: values differ where they are more than 1e-4 apart, relative.

    Args:
        record: a row of the edition's table.
        published: the row beside it.
        table: its table.
        edition: the same edition.

    Returns:
        What differs, in a fixed order.

    Raises:
        Nothing.

    Source: each table's own, in the library.
    """
    yield from _mechanics(record, published, table)
    yield from _roundings(table, edition)
    yield from _sum(published, table)
    kind = edition.vehicle(record["vehicle"]).kind
    if table.kinds and kind not in table.kinds:
        yield Why(code="kind", ours=kind, theirs=" ".join(table.kinds))
    if table.state is not None and record["state"] != table.state:
        yield Why(code="state", ours=record["state"] or None, theirs=table.state)


def _mechanics(record: Mapping[str, Any], published: PublishedRow, table: PublishedTable) -> Iterator[Why]:
    def parameter(code: Code, ours: float | None, name: str) -> Iterator[Why]:
        theirs = table.value(name)
        if _differ(ours, theirs):
            yield Why(code=code, ours=ours, theirs=theirs, fitted=name in table.fitted)

    yield from parameter("reaction", _known(record["reaction_time_s"]), "reaction_time_s")
    if published.friction is None:
        yield from parameter("deceleration", _deceleration(record), "deceleration_mps2")
    elif _differ(ours := _known(record["friction"]), published.friction):
        yield Why(code="friction", ours=ours, theirs=published.friction)
    lag, theirs = _known(record["brake_lag_s"]) or None, table.value("brake_lag_s")
    if _differ(lag, theirs):
        yield Why(code="lag", ours=lag, theirs=theirs, fitted="brake_lag_s" in table.fitted)
    if build_up := _known(record["build_up_s"]):
        yield Why(code="build-up", ours=build_up, theirs=None)


def _deceleration(record: Mapping[str, Any]) -> float | None:
    """As full braking begins. Where no friction is used it is the stated one itself: a manual's formula has its own g,
    which would show as a difference where there is none."""
    stated = _known(record["max_deceleration_mps2"])
    return (
        stated
        if stated is not None and _known(record["friction"]) is None
        else _known(record["full_deceleration_mps2"])
    )


def _roundings(table: PublishedTable, edition: Edition) -> Iterator[Why]:
    ours, theirs = edition.rounding, table.rounding
    for part in PARTS:
        if part not in theirs.parts:
            continue
        rules = (ours.rules[part], theirs.parts[part])
        if rules[0] != rules[1] or ours.step != theirs.step:
            yield Why(
                code="rounding", part=part, ours=rules[0], theirs=rules[1],
                ours_step=ours.step, theirs_step=None if rules[1] is None else theirs.step,
            )  # fmt: skip
    total = total_rule(ours.rules) if ours.total == "on-its-own" else ours.total
    if total != theirs.total or ours.step != theirs.total_step:
        yield Why(
            code="total", ours=total, theirs=theirs.total, ours_step=ours.step, theirs_step=theirs.total_step
        )  # fmt: skip


def _sum(published: PublishedRow, table: PublishedTable) -> Iterator[Why]:
    """A published total that its own parts do not add up to; a total rounded more coarsely may be a step away."""
    if not table.parts:
        return
    added = round(math.fsum(getattr(published, part) for part in table.parts), 6)
    coarse = 0.0 if table.rounding.total in ("sum-of-parts", None) else table.rounding.total_step
    if abs(added - published.stopping) > coarse:
        yield Why(code="sum", ours=added, theirs=published.stopping)


def _known(value: float) -> float | None:
    return float(value) if math.isfinite(value) else None


def _differ(ours: float | None, theirs: float | None) -> bool:
    """Whether two values differ by more than what a fit or a printed third digit leaves open."""
    if ours is None or theirs is None:
        return ours is not theirs
    return not math.isclose(ours, theirs, rel_tol=1e-4)
