"""How far two printed rows are apart, and what that is made of: reaction, lag, braking, and rounding."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Decimal
from typing import Final, Literal

from chartgen.edition.model import PARTS, Method, Part, Rule
from chartgen.figures.library import PublishedRow, PublishedTable
from chartgen.figures.rounding import CLOSE
from chartgen.figures.units import METRES_IN
from chartgen.motion.limits import GRAVITY_MPS2
from chartgen.motion.methods import METHOD_INPUTS

Basis = Literal["formula", "parameters", "printed", "none"]
"""What stands for the published part: the edition's own manual formula or plain mechanics with the table's parameters,
before rounding; the printed number as it stands; nothing, as the table has no such part."""

SplitMissing = Literal["does-not-stop", "ours-totals-only", "totals-only", "not-reproduced"]
"""Why a difference cannot be split: the row does not stop; the edition adopts a table of totals alone; the published
table gives totals alone and no parameters; it does, but they do not give its printed total."""

_DIGITS: Final = Decimal("0.001")
"""Shares are given to a thousandth of the unit; the remainder takes the rest, so that they add up to the last digit."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Parts:
    """Distances of one row in its printed unit; None where there is none."""

    reaction: float | None
    lag: float | None
    braking: float | None
    stopping: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Split:
    """The difference of two printed totals, ours less theirs, in four shares that add up to it exactly (as decimals).

    Three are differences before rounding; `rounding` is what is left: the rounding of both sides, and whatever a
    published total has that its parts do not. `basis`: what stood for each published part.
    """

    reaction: float
    lag: float
    braking: float
    rounding: float
    basis: Mapping[Part, Basis]


def difference(ours: Parts, theirs: Parts) -> Parts:
    """Ours less theirs, of each printed part; without binary dust: 69.5 - 62.6 is 6.9.

    Formula: ``ours - theirs``, part by part.

    Args:
        ours: printed parts and total, in the printed unit of both.
        theirs: those of the published row.

    Returns:
        The signed differences; None where either does not print it.

    Raises:
        Nothing.

    Source: none needed; arithmetic.
    """
    names = (*PARTS, "stopping")
    return Parts(**{name: _less(getattr(ours, name), getattr(theirs, name)) for name in names})


def _less(ours: float | None, theirs: float | None) -> float | None:
    return None if ours is None or theirs is None else float(_decimal(ours) - _decimal(theirs))


def _decimal(value: float) -> Decimal:
    return Decimal(repr(float(value)))


def split(
    ours: Parts,
    exact: Mapping[Part, float | None],
    published: PublishedRow,
    table: PublishedTable,
    *,
    speed_mps: float,
    method: Method,
) -> Split | SplitMissing:
    """The difference of the totals, split.

    Formula: a share is ``ours unrounded - theirs unrounded``. Theirs is worked out from the table's parameters,
    reaction ``v·t``, lag ``v·t_l``, braking ``v²/(2a)`` or ``v²/(2·g·f)`` with the friction of the row (a sight method
    of the edition: by its formula), where that rounds to what the table prints; else the printed part is taken as it
    stands. A part that the table does not have is 0. ``rounding = difference of the totals - the three shares``.

    Args:
        ours: printed, in the unit of the table.
        exact: ours before rounding, likewise.
        published: the row of the same speed.
        table: its table.
        speed_mps: that speed, m/s, more than 0.
        method: the edition's.

    Returns:
        The `Split`, or the code that says why there is none.

    Raises:
        ValueError: the speed is out of the range of the edition's formula.

    Source: equation of motion; the table's own.
    """
    total = _less(ours.stopping, published.stopping)
    if total is None:
        return "does-not-stop"
    known = {part: value for part, value in exact.items() if value is not None}
    if len(known) < len(PARTS):
        return "ours-totals-only"
    theirs = _published_parts(published, table, speed_mps, method)
    if isinstance(theirs, str):
        return theirs
    shares = {
        part: _decimal(known[part] - theirs[part][0]).quantize(_DIGITS, rounding=ROUND_HALF_EVEN) for part in PARTS
    }
    rest = _decimal(total) - sum(shares.values(), Decimal(0))
    basis = {part: theirs[part][1] for part in PARTS}
    # Adding zero turns a share of "-0" into plain 0.
    made = {part: float(share) + 0.0 for part, share in shares.items()}
    return Split(**made, rounding=float(rest) + 0.0, basis=basis)


_Known = dict[Part, tuple[float, Basis]]


def _published_parts(
    published: PublishedRow, table: PublishedTable, speed_mps: float, method: Method
) -> _Known | SplitMissing:
    """The published parts before rounding, as well as they are known, in the table's unit."""
    candidates = [*_by_formula(table, speed_mps, method), _by_parameters(published, table, speed_mps)]
    if not table.parts:
        whole = [c for c in candidates if {"reaction", "braking"} <= c.keys()]
        if not whole:
            return "totals-only"
        for some in whole:
            made: _Known = {part: some.get(part, (0.0, "none")) for part in PARTS}
            if _gives_total(sum(value for value, _ in made.values()), published, table):
                return made
        return "not-reproduced"
    out: _Known = {}
    for part in PARTS:
        printed: float | None = getattr(published, part)
        if printed is None:
            if part != "lag":
                return "totals-only"
            out[part] = (0.0, "none")
            continue
        fits = (c[part] for c in candidates if part in c and _gives(c[part][0], printed, part, table))
        out[part] = next(fits, (printed, "printed"))
    return out


def _by_parameters(published: PublishedRow, table: PublishedTable, speed_mps: float) -> _Known:
    """Plain mechanics with what the table states, or what was worked out from it."""
    scale = METRES_IN[table.distance_unit]
    out: _Known = {}
    time, lag, slowing = (table.value(n) for n in ("reaction_time_s", "brake_lag_s", "deceleration_mps2"))
    if published.friction is not None:
        slowing = GRAVITY_MPS2 * published.friction
    if time is not None:
        out["reaction"] = (speed_mps * time / scale, "parameters")
    if lag is not None:
        out["lag"] = (speed_mps * lag / scale, "parameters")
    if slowing is not None:
        out["braking"] = (speed_mps**2 / (2.0 * slowing) / scale, "parameters")
    return out


def _by_formula(table: PublishedTable, speed_mps: float, method: Method) -> list[_Known]:
    """The edition's own sight formula with the table's parameters: its printed constants are not the exact ones."""
    time, slowing = table.value("reaction_time_s"), table.value("deceleration_mps2")
    takes = METHOD_INPUTS[method].required if method in METHOD_INPUTS else frozenset()
    if table.meaning != "sight-design" or "max_deceleration_mps2" not in takes or time is None or slowing is None:
        return []
    made = METHOD_INPUTS[method].function(speed_mps, reaction_time_s=time, max_deceleration_mps2=slowing)
    scale = METRES_IN[table.distance_unit]
    return [{
        "reaction": (float(made.reaction_distance_m) / scale, "formula"),
        "braking": (float(made.braking_distance_m) / scale, "formula"),
    }]  # fmt: skip


def _gives(value: float, printed: float, part: Part, table: PublishedTable) -> bool:
    """Whether the unrounded value is rounded to the printed one by the table's habit."""
    return _rounds_to(value, printed, table.rounding.parts.get(part), table.rounding.step)


def _gives_total(value: float, published: PublishedRow, table: PublishedTable) -> bool:
    rule: Rule = "nearest" if table.rounding.total == "nearest" else "up"
    return _rounds_to(value, published.stopping, rule, table.rounding.total_step)


def _rounds_to(value: float, printed: float, rule: Rule | None, step: float) -> bool:
    """Up: not above what is printed, less than a step below it. Nearest: half a step to either side. Without a rule
    that is known: less than a step to either side."""
    near = CLOSE * max(abs(printed), step)
    over = printed - value
    if rule == "up":
        return -near <= over < step - near
    return abs(over) <= (step / 2.0 if rule == "nearest" else step) + near
