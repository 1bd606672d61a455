"""What is odd about an edition's figures, and what the reader must be told. Codes are stable; tests assert them.

`unusual-value` (found while reading the edition), `design-reaction-hybrid` and `gap-unknown` are for the publisher;
`spread-endless` too; `unladen-shorter`, `wet-shorter`, `does-not-stop`, `outside-friction-range`, `test-figure` and
`may-be-short` are for the reader as well.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping
from itertools import product
from typing import TYPE_CHECKING, Any, Final, NamedTuple

from chartgen.figures.record import Notice
from chartgen.figures.rounding import CLOSE, shortfall, shortfall_printed
from chartgen.figures.units import from_metres

if TYPE_CHECKING:
    import pandas as pd

    from chartgen.edition.model import Case, Edition

DESIGN_REACTION_S: Final = 2.0
"""From here on a reaction time is one of road design (2.0 s United Kingdom and Europe, 2.5 s AASHTO)."""

EMERGENCY_MPS2: Final = 4.5
"""Above this a deceleration is one of an emergency: the Green Book says that most drivers brake harder than 4.5 m/s²
when they must stop for the unexpected, and designs with 3.4. From memory."""

OUTSIDE: Final = "outside-friction-range"
"""The reason of a row that is a gap: nobody has measured the friction at such a speed."""

REASONS: Final[Mapping[str, str]] = {
    "too-little-friction": "the friction leaves less than 0.1 m/s² of braking on this slope",
    "never-at-rest": "the slope pulls at least as hard as the brakes can hold",
    OUTSIDE: "it is faster than the source of its friction speaks of",
}


def notices(table: pd.DataFrame, edition: Edition) -> tuple[Notice, ...]:
    """All notices of an edition's finished table, in a fixed order; equal ones once.

    Formula: none; each notice says what it compares.

    Args:
        table: the finished table.
        edition: the same edition.

    Returns:
        The notices, equal ones once.

    Raises:
        Nothing.

    Source: requirements of the trade, said at each notice; the Green Book for 4.5 m/s² (from memory).
    """
    # Plain lists: a few thousand look-ups in them cost less than one merge of frames.
    rows = [_Row(*values) for values in zip(*(table[name].tolist() for name in _Row._fields), strict=True)]
    at = {_key(row): row for row in rows}
    found = [Notice(code="unusual-value", text=text) for text in edition.warnings]
    for number, case in enumerate(edition.cases, start=1):
        found += _unladen_shorter(at, edition, case, number)
        found += _wet_shorter(at, edition, case, number)
    found += _hybrid(rows)
    found += _does_not_stop(rows, edition)
    found += _test_figure(rows, edition)
    found += _spread_endless(table, edition)
    found += _gap_unknown(rows, edition)
    found += _may_be_short(table, edition)
    once: dict[tuple[str, tuple[int, ...], str], Notice] = {}
    for notice in found:
        # Two cases that share rows would say the same thing twice, but for the number of the case.
        once.setdefault((notice.code, notice.rows, "" if notice.rows else notice.text), notice)
    return tuple(once.values())


class _Row(NamedTuple):
    """What the notices look at in a row of the table."""

    row: int
    driver: str
    vehicle: str
    surface: str
    grade: float
    speed: float
    reaction_time_s: float
    full_deceleration_mps2: float
    stopping_distance_m: float
    stops: bool
    reason: str
    gap_s: float

    @property
    def reach(self) -> float:
        """The total in m; one that never stops is longer than all."""
        return self.stopping_distance_m if self.stops else math.inf


_Key = tuple[str, str, str, float, float]


def _key(row: _Row) -> _Key:
    return row.driver, row.vehicle, row.surface, row.grade, row.speed


def _shorter(at: Mapping[_Key, _Row], pairs: Iterable[tuple[_Key, _Key]]) -> list[_Row]:
    """The first rows of those pairs in which the first total is shorter than the second, in table order."""
    both = ((at[first], at[second]) for first, second in pairs)
    return sorted({a for a, b in both if a.reach < b.reach * (1.0 - CLOSE)})


def _unladen_shorter(at: Mapping[_Key, _Row], edition: Edition, case: Case, number: int) -> Iterator[Notice]:
    for vehicle in edition.vehicles:
        laden = vehicle.unladen_of
        if laden is None or not {vehicle.id, laden} <= set(case.vehicles):
            continue
        others = product(case.drivers, case.surfaces, case.grades, edition.speeds)
        short = _shorter(at, (((d, vehicle.id, s, g, v), (d, laden, s, g, v)) for d, s, g, v in others))
        if short:
            yield Notice(
                code="unladen-shorter",
                text=f"Case {number}: vehicle “{vehicle.id}”, unladen, stops shorter than “{laden}”, laden, on "
                f"{_list(row.surface for row in short)} at {_speeds(short, edition)}; an empty lorry may need more "
                "room, not less.",
                reader=True,
                fields={"vehicle": vehicle.id, "laden": laden},
                rows=_numbers(short),
            )


def _wet_shorter(at: Mapping[_Key, _Row], edition: Edition, case: Case, number: int) -> Iterator[Notice]:
    here = [surface for surface in edition.surfaces if surface.id in case.surfaces]
    slippery = [surface for surface in here if surface.state in ("wet", "snow", "ice")]
    for surface, dry in product(slippery, (s.id for s in here if s.state == "dry")):
        others = product(case.drivers, case.vehicles, case.grades, edition.speeds)
        short = _shorter(at, (((d, w, surface.id, g, v), (d, w, dry, g, v)) for d, w, g, v in others))
        if short:
            yield Notice(
                code="wet-shorter",
                text=f"Case {number}: on surface “{surface.id}” ({surface.state}) "
                f"{_list(row.vehicle for row in short)} stops shorter than on “{dry}” (dry) at "
                f"{_speeds(short, edition)}; look at the friction of both.",
                reader=True,
                fields={"surface": surface.id, "dry": dry},
                rows=_numbers(short),
            )


def _hybrid(rows: list[_Row]) -> Iterator[Notice]:
    """A design reaction time beside an emergency deceleration: a pairing that no authority publishes."""
    odd = [
        row
        for row in rows
        if row.reaction_time_s >= DESIGN_REACTION_S and row.full_deceleration_mps2 > EMERGENCY_MPS2 and row.grade == 0.0
    ]
    for (driver,), some in _by(odd, "driver").items():
        most = max(row.full_deceleration_mps2 for row in some)
        yield Notice(
            code="design-reaction-hybrid",
            text=f"Driver “{driver}” reacts in {some[0].reaction_time_s:g} s, a time of road design, and brakes with "
            f"up to {most:.1f} m/s² on {_list(row.surface for row in some)} with {_list(row.vehicle for row in some)}, "
            "as in an emergency; road design pairs such a time with about 3.4 m/s².",
            fields={"driver": driver},
            rows=_numbers(some),
        )


def _does_not_stop(rows: list[_Row], edition: Edition) -> Iterator[Notice]:
    yield from _outside(rows, edition)
    odd = [row for row in rows if not row.stops and row.reason != OUTSIDE]
    for (vehicle, surface, grade, reason), some in _by(odd, "vehicle", "surface", "grade", "reason").items():
        yield Notice(
            code="does-not-stop",
            text=f"Vehicle “{vehicle}” does not stop on surface “{surface}” at a grade of {_percent(grade)} "
            f"from {_speeds(some, edition)}: {REASONS[reason]}.",
            reader=True,
            fields={"vehicle": vehicle, "surface": surface, "grade": repr(grade), "reason": reason},
            rows=_numbers(some),
        )


def _outside(rows: list[_Row], edition: Edition) -> Iterator[Notice]:
    odd = [row for row in rows if row.reason == OUTSIDE]
    for (surface,), some in _by(odd, "surface").items():
        yield Notice(
            code=OUTSIDE,
            text=f"Surface “{surface}”: there is no figure for {_speeds(some, edition)}: {REASONS[OUTSIDE]}.",
            reader=True,
            fields={"surface": surface},
            rows=_numbers(some),
        )


def _test_figure(rows: list[_Row], edition: Edition) -> Iterator[Notice]:
    """A brake test's deceleration inside a total: it holds on a test track, with a driver who waits for the signal."""
    on_test = {v.id for v in edition.vehicles if v.test_figure}
    odd = [row for row in rows if row.vehicle in on_test or (edition.adopted and edition.adopted.test_figure)]
    for (vehicle,), some in _by(odd, "vehicle").items():
        yield Notice(
            code="test-figure",
            text=f"Vehicle “{vehicle}” brakes as a regulation's brake test asks; such a figure is not one of the road, "
            "and stands here in a total.",
            reader=True,
            fields={"vehicle": vehicle},
            rows=_numbers(some),
        )


def _spread_endless(table: pd.DataFrame, edition: Edition) -> Iterator[Notice]:
    """Percentiles that lie among stops which never end are left out."""
    if edition.spread is None:
        return
    lost = table["stops"] & table["stopping_p95_m"].isna() & ~table["spread_error_m"].isna()
    if lost.any():
        yield Notice(
            code="spread-endless",
            text="In some rows so many sampled stops never end that a percentile does not exist; it is left out.",
            rows=tuple(int(row) for row in table.loc[lost, "row"]),
        )


def _gap_unknown(rows: list[_Row], edition: Edition) -> Iterator[Notice]:
    if edition.cards is None:
        return
    for (vehicle,), some in _by([row for row in rows if math.isnan(row.gap_s)], "vehicle").items():
        yield Notice(
            code="gap-unknown",
            text=f"Vehicle “{vehicle}” has no length, which the following-gap rule “{edition.cards.gap}” needs; "
            "its gap is left out.",
            fields={"vehicle": vehicle, "rule": edition.cards.gap},
            rows=_numbers(some),
        )


def _may_be_short(table: pd.DataFrame, edition: Edition) -> Iterator[Notice]:
    short = may_be_short(table, edition)
    if not short:
        return
    fields: dict[str, str] = {}
    for prefix, unit in (("", edition.distance_unit), ("also_", edition.also_unit)):
        if unit in short:
            fields |= {f"{prefix}short": f"{short[unit]:g}", f"{prefix}unit": unit}
    amounts = " and ".join(f"up to {worst:g} {unit}" for unit, worst in short.items())
    yield Notice(
        code="may-be-short",
        text=f"Printed distances are rounded and may be {amounts} short.",
        reader=True,
        fields=fields,
    )


def may_be_short(rows: pd.DataFrame, edition: Edition) -> dict[str, float]:
    """How much the printed distances of `rows` may fall short of the exact ones, by printed unit, as a reader is told:
    up to the next tenth of a step. Units that fall short nowhere are left out. Works for one sheet's rows as well.

    Formula: ``max(exact - printed)``, up to the next tenth of a step.

    Args:
        rows: of the table.
        edition: for its units and steps.

    Returns:
        Amounts by printed unit.

    Raises:
        Nothing.

    Source: none needed; arithmetic.
    """
    out: dict[str, float] = {}
    for prefix, unit, step in (
        ("printed", edition.distance_unit, edition.rounding.step),
        ("printed_also", edition.also_unit, edition.rounding.also_step),
    ):
        if unit is None:
            continue
        worst = max(
            shortfall(from_metres(rows[f"{part}_distance_m"].to_numpy(), unit), rows[f"{prefix}_{part}"].to_numpy())
            for part in ("reaction", "lag", "braking", "stopping")
        )
        if worst > 0.0:
            out[unit] = shortfall_printed(worst, step)
    return out


def _by(rows: Iterable[_Row], *names: str) -> dict[tuple[Any, ...], list[_Row]]:
    """Rows by the values of these fields, in the order in which they first come."""
    groups: dict[tuple[Any, ...], list[_Row]] = {}
    for row in rows:
        groups.setdefault(tuple(getattr(row, name) for name in names), []).append(row)
    return groups


def _numbers(rows: list[_Row]) -> tuple[int, ...]:
    return tuple(row.row for row in rows)


def _speeds(rows: list[_Row], edition: Edition) -> str:
    return f"{_list(sorted({row.speed for row in rows}), quote='')} {edition.speed_unit}"


def _percent(grade: float) -> str:
    return f"{100.0 * grade:g} %".replace("-", "−")


def _list(values: Iterable[object], quote: str = "“”") -> str:
    """Distinct values, quoted, joined for a sentence."""
    items = [f"{value:g}" if isinstance(value, float) else str(value) for value in dict.fromkeys(values)]
    if quote:
        items = [quote[0] + item + quote[1] for item in items]
    return items[0] if len(items) == 1 else ", ".join(items[:-1]) + " and " + items[-1]
