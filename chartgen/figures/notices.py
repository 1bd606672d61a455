"""What is odd about an edition's figures, and what the reader must be told. Codes are stable; tests assert them.

`unusual-value` (found while reading the edition), `design-reaction-hybrid` and `gap-unknown` are for the publisher;
`unladen-shorter`, `wet-shorter`, `does-not-stop` and `may-be-short` are for the reader as well.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import TYPE_CHECKING, Final

import numpy as np
import numpy.typing as npt
import pandas as pd

from chartgen.figures.record import Notice
from chartgen.figures.rounding import CLOSE, shortfall, shortfall_printed
from chartgen.figures.units import from_metres

if TYPE_CHECKING:
    from chartgen.edition.model import Case, Edition

DESIGN_REACTION_S: Final = 2.0
"""From here on a reaction time is one of road design (2.0 s United Kingdom and Europe, 2.5 s AASHTO)."""

EMERGENCY_MPS2: Final = 4.5
"""Above this a deceleration is one of an emergency: the Green Book says that most drivers brake harder than 4.5 m/s²
when they must stop for the unexpected, and designs with 3.4. From memory."""

REASONS: Final[Mapping[str, str]] = {
    "too-little-friction": "the friction leaves less than 0.1 m/s² of braking on this slope",
    "never-at-rest": "the slope pulls at least as hard as the brakes can hold",
}


def notices(table: pd.DataFrame, edition: Edition) -> tuple[Notice, ...]:
    """All notices of an edition's finished table, in a fixed order; equal ones once."""
    found = [Notice(code="unusual-value", text=text) for text in edition.warnings]
    for number, case in enumerate(edition.cases, start=1):
        rows = _of_case(table, case)
        found += _unladen_shorter(rows, edition, number)
        found += _wet_shorter(rows, edition, number)
    found += _hybrid(table)
    found += _does_not_stop(table, edition)
    found += _gap_unknown(table, edition)
    found += _may_be_short(table, edition)
    once: dict[tuple[str, tuple[int, ...], str], Notice] = {}
    for notice in found:
        # Two cases that share rows would say the same thing twice, but for the number of the case.
        once.setdefault((notice.code, notice.rows, "" if notice.rows else notice.text), notice)
    return tuple(once.values())


def _of_case(table: pd.DataFrame, case: Case) -> pd.DataFrame:
    """The rows a case asks for, whichever case they are filed under."""
    return table[
        table["driver"].isin(case.drivers)
        & table["vehicle"].isin(case.vehicles)
        & table["surface"].isin(case.surfaces)
        & table["grade"].isin(case.grades)
    ]


def _shorter(pairs: pd.DataFrame) -> npt.NDArray[np.bool_]:
    """Where the first total of a merged pair is shorter than the second. One that never stops is longer than all."""
    first = np.where(pairs["stops"], pairs["stopping_distance_m"], np.inf)
    second = np.where(pairs["stops_than"], pairs["stopping_distance_m_than"], np.inf)
    return np.asarray(first < second * (1.0 - CLOSE))


SIDE: Final = ["row", "driver", "vehicle", "surface", "grade", "speed", "stops", "stopping_distance_m"]


def _unladen_shorter(rows: pd.DataFrame, edition: Edition, number: int) -> Iterator[Notice]:
    for vehicle in edition.vehicles:
        laden = vehicle.unladen_of
        if laden is None:
            continue
        pairs = rows.loc[rows["vehicle"] == vehicle.id, SIDE].merge(
            rows.loc[rows["vehicle"] == laden, SIDE], on=["driver", "surface", "grade", "speed"], suffixes=("", "_than")
        )
        pairs = pairs[_shorter(pairs)]
        if len(pairs):
            yield Notice(
                code="unladen-shorter",
                text=f"Case {number}: vehicle “{vehicle.id}”, unladen, stops shorter than “{laden}”, laden, on "
                f"{_list(pairs['surface'])} at {_speeds(pairs, edition)}; an empty lorry may need more room, not less.",
                reader=True,
                fields={"vehicle": vehicle.id, "laden": laden},
                rows=tuple(int(row) for row in pairs["row"]),
            )


def _wet_shorter(rows: pd.DataFrame, edition: Edition, number: int) -> Iterator[Notice]:
    dry = [s.id for s in edition.surfaces if s.state == "dry"]
    for surface in edition.surfaces:
        if surface.state not in ("wet", "snow", "ice"):
            continue
        for other in dry:
            pairs = rows.loc[rows["surface"] == surface.id, SIDE].merge(
                rows.loc[rows["surface"] == other, SIDE],
                on=["driver", "vehicle", "grade", "speed"],
                suffixes=("", "_than"),
            )
            pairs = pairs[_shorter(pairs)]
            if len(pairs):
                yield Notice(
                    code="wet-shorter",
                    text=f"Case {number}: on surface “{surface.id}” ({surface.state}) {_list(pairs['vehicle'])} stops "
                    f"shorter than on “{other}” (dry) at {_speeds(pairs, edition)}; look at the friction of both.",
                    reader=True,
                    fields={"surface": surface.id, "dry": other},
                    rows=tuple(int(row) for row in pairs["row"]),
                )


def _hybrid(table: pd.DataFrame) -> Iterator[Notice]:
    """A design reaction time beside an emergency deceleration: a pairing that no authority publishes."""
    odd = table[
        (table["reaction_time_s"] >= DESIGN_REACTION_S)
        & (table["full_deceleration_mps2"] > EMERGENCY_MPS2)
        & (table["grade"] == 0.0)
    ]
    for driver, rows in odd.groupby("driver", sort=False):
        yield Notice(
            code="design-reaction-hybrid",
            text=f"Driver “{driver}” reacts in {rows['reaction_time_s'].iloc[0]:g} s, a time of road design, and "
            f"brakes with up to {rows['full_deceleration_mps2'].max():.1f} m/s² on {_list(rows['surface'])} with "
            f"{_list(rows['vehicle'])}, as in an emergency; road design pairs such a time with about 3.4 m/s².",
            fields={"driver": str(driver)},
            rows=tuple(int(row) for row in rows["row"]),
        )


def _does_not_stop(table: pd.DataFrame, edition: Edition) -> Iterator[Notice]:
    odd = table[~table["stops"].to_numpy(dtype=bool)]
    for _, rows in odd.groupby(["vehicle", "surface", "grade", "reason"], sort=False):
        first = rows.iloc[0]
        vehicle, surface, grade = str(first["vehicle"]), str(first["surface"]), float(first["grade"])
        reason = str(first["reason"])
        yield Notice(
            code="does-not-stop",
            text=f"Vehicle “{vehicle}” does not stop on surface “{surface}” at a grade of {_percent(grade)} "
            f"from {_speeds(rows, edition)}: {REASONS[reason]}.",
            reader=True,
            fields={"vehicle": vehicle, "surface": surface, "grade": repr(grade), "reason": reason},
            rows=tuple(int(row) for row in rows["row"]),
        )


def _gap_unknown(table: pd.DataFrame, edition: Edition) -> Iterator[Notice]:
    if edition.cards is None:
        return
    odd = table[table["gap_s"].isna()]
    for vehicle, rows in odd.groupby("vehicle", sort=False):
        yield Notice(
            code="gap-unknown",
            text=f"Vehicle “{vehicle}” has no length, which the following-gap rule “{edition.cards.gap}” needs; "
            "its gap is left out.",
            fields={"vehicle": str(vehicle), "rule": edition.cards.gap},
            rows=tuple(int(row) for row in rows["row"]),
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
    up to the next tenth of a step. Units that fall short nowhere are left out. Works for one sheet's rows as well."""
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


def _speeds(rows: pd.DataFrame, edition: Edition) -> str:
    return f"{_list(sorted(set(rows['speed'])), quote='')} {edition.speed_unit}"


def _percent(grade: float) -> str:
    return f"{100.0 * grade:g} %".replace("-", "−")


def _list(values: Iterable[object], quote: str = "“”") -> str:
    """Distinct values, quoted, joined for a sentence."""
    items = [f"{value:g}" if isinstance(value, float) else str(value) for value in dict.fromkeys(values)]
    if quote:
        items = [quote[0] + item + quote[1] for item in items]
    return items[0] if len(items) == 1 else ", ".join(items[:-1]) + " and " + items[-1]
