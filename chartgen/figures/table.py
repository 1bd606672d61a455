"""Edition -> one tidy table. A figure is computed once, rounded once, here; everything above reads these rows."""

from __future__ import annotations

import math
from collections.abc import Iterable
from itertools import product
from typing import Final

import numpy as np
import numpy.typing as npt
import pandas as pd

from chartgen.edition.catalogue import GAP_RULES, HEADLIGHTS
from chartgen.edition.model import Edition, Friction, Source
from chartgen.figures.adopted import adopted
from chartgen.figures.answers import answer_distances, answers
from chartgen.figures.gaps import gaps, gaps_by_rule
from chartgen.figures.notices import notices
from chartgen.figures.record import Columns, Figures, Notice
from chartgen.figures.rounding import nearest, print_parts, up
from chartgen.figures.spread import spread
from chartgen.figures.stops import stops
from chartgen.figures.units import from_metres
from chartgen.motion.friction import friction_at
from chartgen.motion.limits import KMH_PER_MPS

__all__ = ["COLUMNS", "Figures", "Notice", "figures", "select"]

Floats = npt.NDArray[np.float64]

PRINTED: Final = ("reaction", "lag", "braking", "stopping")

COLUMNS: Final = (
    "row", "case", "driver", "vehicle", "surface", "grade", "load", "state", "method", "speed", "speed_mps",
    "reaction_time_s", "reaction_percentile", "brake_lag_s", "build_up_s", "brake_efficiency", "max_deceleration_mps2",
    "friction_mu", "friction_f60", "friction_sp_kmh", "friction_max_mu", "friction", "full_deceleration_mps2",
    "reaction_distance_m", "lag_distance_m", "braking_distance_m", "stopping_distance_m", "stopping_time_s",
    "stops", "reason",
    "printed_speed", "printed_reaction", "printed_lag", "printed_braking", "printed_stopping",
    "printed_also_reaction", "printed_also_lag", "printed_also_braking", "printed_also_stopping",
    "gap_s", "printed_gap_s", "printed_gap_distance", "printed_also_gap_distance",
    "brake_share", "valid_to_mps", "friction_table", "length_m",
    "reaction_mu", "reaction_sigma", "friction_low", "friction_high",
    "perception_s", "perception_distance_m", "printed_perception", "printed_also_perception",
    "stopping_p50_m", "stopping_p85_m", "stopping_p95_m", "spread_error_m",
    "printed_p50", "printed_p85", "printed_p95", "printed_also_p50", "printed_also_p85", "printed_also_p95",
    "residual_speed_mps", "printed_residual_speed",
    "greatest_sight_mps", "greatest_headlight_mps", "greatest_gap_mps",
    "greatest_sight_at_top", "greatest_headlight_at_top", "greatest_gap_at_top",
    "printed_greatest_sight", "printed_greatest_headlight", "printed_greatest_gap",
    "added_by_driver_m", "printed_added_by_driver", "printed_also_added_by_driver",
    "added_by_surface_m", "printed_added_by_surface", "printed_also_added_by_surface",
)  # fmt: skip
"""Columns of the table, in order.

`case` counts from 1; the case that first asks for a row keeps it. `grade` is a fraction, uphill +. `load` and `state`
are "" where the edition does not say; `reaction_percentile` is "" for a fixed time. `friction` is the coefficient at
the row's speed, nan where none is used. `full_deceleration_mps2` is the deceleration as full braking begins, slope
included. Distances in m, unrounded, nan where the vehicle does not stop; `printed_…` in the printed unit after
rounding, `printed_also_…` in the second unit, from the unrounded value. `gap_…` nan without cab cards.
`friction_table` is a table by speed as "30:0.62 100:0.45" (km/h), else "". `perception_…`: the share of the reaction
that passes before the foot moves; nan where the source does not keep it apart. `reaction_mu`, `reaction_sigma` (of
ln(t/s)), `friction_low`, `friction_high`: what a spread is taken over, nan where nothing varies. `length_m`: trailer
included. `stopping_p…`: see `spread`; the columns of `[questions]`: see `answers`. What is not asked for is nan.

Behind these stand, for each rule of `questions.gaps`, the four gap columns under its key: "gap_s gap/…" and so on.
"""


def figures(edition: Edition) -> Figures:
    """All figures of an edition: computed by its method, rounded by its rule, with their notices.

    A row that does not stop keeps its reaction and lag; its braking, total and time are nan and `reason` says why.
    Where the edition leaves a choice open the longer distance is printed.

    Formula: the edition's method, see `motion.methods.METHOD_INPUTS`.

    Args:
        edition: from the front door.

    Returns:
        `Figures`: the table, its notices and its sources.

    Raises:
        ValueError: an input that the method cannot use (the front door has looked).

    Source: each value's own; they stand in `Figures.sources`.
    """
    columns = _assumptions(edition)
    if edition.adopted is None:
        columns |= stops(columns, edition)
        columns |= _printed(columns, edition)
    else:
        columns |= adopted(columns, edition)
    columns |= _perception(columns, edition)
    columns |= gaps(columns, edition)
    columns |= spread(columns, edition)
    columns |= answers(columns, edition)
    by_rule = gaps_by_rule(columns, edition)
    # The frame is made once, of finished columns: growing it column by column costs more than the mechanics.
    table = pd.DataFrame({name: columns[name] for name in COLUMNS} | by_rule)
    return Figures(
        edition_id=edition.id,
        speed_unit=edition.speed_unit,
        distance_unit=edition.distance_unit,
        also_unit=edition.also_unit,
        method=edition.method,
        rounding=edition.rounding,
        table=table,
        notices=notices(table, edition),
        sources=_sources(edition),
        gap_rule=edition.cards.gap if edition.cards else None,
        questions=edition.questions,
        spread=edition.spread,
        answer_distances=answer_distances(edition),
        issue=edition.issue,
        issued=edition.issued.isoformat(),
    )


def select(
    figures: Figures,
    *,
    driver: str | Iterable[str] | None = None,
    vehicle: str | Iterable[str] | None = None,
    surface: str | Iterable[str] | None = None,
    grade: float | None = None,
) -> pd.DataFrame:
    """The rows with these ids (one, several, or None for any) and this grade, in speed order; may be empty.

    Formula: none.

    Args:
        figures: of an edition.
        driver: one id, several, or None for any.
        vehicle: likewise.
        surface: likewise.
        grade: a fraction, or None for any.

    Returns:
        The rows in speed order; may be none.

    Raises:
        Nothing.

    Source: none needed.
    """
    table = figures.table
    keep = np.ones(len(table), dtype=bool)
    for column, wanted in (("driver", driver), ("vehicle", vehicle), ("surface", surface)):
        if wanted is not None:
            ids = [wanted] if isinstance(wanted, str) else list(wanted)
            keep &= table[column].isin(ids).to_numpy()
    if grade is not None:
        keep &= np.isclose(table["grade"].to_numpy(), grade, rtol=0.0, atol=1e-12)
    return table[keep].sort_values("speed_mps", kind="stable")


def _assumptions(edition: Edition) -> Columns:
    """One row a combination, each once, in the order case, driver, vehicle, surface, grade, speed, with its inputs."""
    rising = sorted(range(len(edition.speeds)), key=lambda i: edition.speeds_mps[i])
    rows: dict[tuple[str, str, str, float, int], int] = {}
    for number, case in enumerate(edition.cases, start=1):
        for row in product(case.drivers, case.vehicles, case.surfaces, case.grades, rising):
            rows.setdefault(row, number)
    drivers, vehicles, surfaces, grades, which = zip(*rows, strict=True)
    known_drivers = {d.id: d for d in edition.drivers}
    known_vehicles = {v.id: v for v in edition.vehicles}
    known_surfaces = {s.id: s for s in edition.surfaces}
    vehicle = [known_vehicles[i] for i in vehicles]
    surface = [known_surfaces[i] for i in surfaces]
    reaction = [known_drivers[i].reaction for i in drivers]
    friction = [s.friction for s in surface]
    speed = np.array(edition.speeds)[list(which)]
    return {
        "row": np.arange(len(rows)),
        "case": np.array(list(rows.values())),
        "driver": np.array(drivers, dtype=object),
        "vehicle": np.array(vehicles, dtype=object),
        "surface": np.array(surfaces, dtype=object),
        # Adding zero turns a grade of "-0 %" into plain 0.
        "grade": np.array(grades, dtype=np.float64) + 0.0,
        "load": np.array([v.load or "" for v in vehicle], dtype=object),
        "state": np.array([s.state or "" for s in surface], dtype=object),
        "method": np.full(len(rows), edition.method, dtype=object),
        "speed": speed,
        "printed_speed": speed,
        "speed_mps": np.array(edition.speeds_mps)[list(which)],
        "reaction_time_s": np.array([r.time_s for r in reaction]),
        "reaction_percentile": np.array([r.percentile or "" for r in reaction], dtype=object),
        "brake_lag_s": np.array([v.brake_lag_s for v in vehicle]),
        "build_up_s": np.array([v.build_up_s for v in vehicle]),
        "brake_efficiency": np.array([v.brake_efficiency for v in vehicle]),
        "max_deceleration_mps2": _or([v.max_deceleration_mps2 for v in vehicle], np.inf),
        "friction_mu": _or([f.mu for f in friction], np.nan),
        "friction_f60": _or([f.f60 for f in friction], np.nan),
        "friction_sp_kmh": _or([f.sp_kmh for f in friction], np.nan),
        "friction_max_mu": np.array([_cap(f) for f in friction]),
        "friction_table": np.array([_table_text(f) for f in friction], dtype=object),
        "valid_to_mps": _or([f.valid_kmh[1] / KMH_PER_MPS if f.valid_kmh else None for f in friction], np.inf),
        "brake_share": np.array([v.brake_share for v in vehicle]),
        "reaction_mu": _or([r.mu for r in reaction], np.nan),
        "reaction_sigma": _or([r.sigma for r in reaction], np.nan),
        "friction_low": _or([f.low for f in friction], np.nan),
        "friction_high": _or([f.high for f in friction], np.nan),
        "perception_s": _or([r.perception_s for r in reaction], np.nan),
        "length_m": _or([v.whole_length_m for v in vehicle], np.nan),
    }


def _cap(friction: Friction) -> float:
    """The cap on friction that falls with speed. Below the slowest speed its source speaks of the value there holds:
    the law goes on rising, which nobody has measured, and would print a distance too short."""
    cap = math.inf if friction.max_mu is None else friction.max_mu
    if friction.valid_kmh is None or friction.f60 is None or friction.sp_kmh is None:
        return cap
    least_mps = friction.valid_kmh[0] / KMH_PER_MPS
    return min(cap, float(friction_at(least_mps, f60=friction.f60, sp_kmh=friction.sp_kmh)))


def _table_text(friction: Friction) -> str:
    return " ".join(f"{kmh:g}:{mu:g}" for kmh, mu in friction.table or ())


def _or(values: list[float | None], missing: float) -> Floats:
    """Values as an array, `missing` where there is none."""
    return np.array([missing if v is None else v for v in values], dtype=np.float64)


def _printed(columns: Columns, edition: Edition) -> Columns:
    """The printed columns, from the unrounded distances, in the edition's unit and in its second one."""
    out: Columns = {}
    for prefix, unit, step in (
        ("printed", edition.distance_unit, edition.rounding.step),
        ("printed_also", edition.also_unit, edition.rounding.also_step),
    ):
        if unit is None:
            out |= {f"{prefix}_{part}": np.full(len(columns["row"]), np.nan) for part in PRINTED}
            continue
        exact = [from_metres(columns[f"{part}_distance_m"], unit) for part in PRINTED[:3]]
        printed = print_parts(*exact, rounding=edition.rounding, step=step)
        out |= {f"{prefix}_{part}": getattr(printed, part) for part in PRINTED}
    return out


def _perception(columns: Columns, edition: Edition) -> Columns:
    """The road covered before the foot moves: a share of the reaction, rounded by the reaction's rule."""
    distance = columns["speed_mps"] * columns["perception_s"]
    out: Columns = {"perception_distance_m": distance}
    for prefix, unit, step in (
        ("printed", edition.distance_unit, edition.rounding.step),
        ("printed_also", edition.also_unit, edition.rounding.also_step),
    ):
        round_ = nearest if edition.rounding.rules["reaction"] == "nearest" else up
        values = np.full(len(distance), np.nan) if unit is None else round_(from_metres(distance, unit), step)
        out[f"{prefix}_perception"] = values
    return out


def _sources(edition: Edition) -> dict[str, Source]:
    """Where the edition's values come from, by the keys that rows name in their trace."""
    out = {f"driver/{d.id}": d.source for d in edition.drivers}
    out |= {f"surface/{s.id}": s.source for s in edition.surfaces}
    out |= {f"vehicle/{v.id}": v.source for v in edition.vehicles if v.source}
    rules = (*((edition.cards.gap,) if edition.cards else ()), *edition.questions.gaps)
    out |= {key: GAP_RULES[key].source for key in rules}
    if edition.questions.headlight:
        out[edition.questions.headlight] = HEADLIGHTS[edition.questions.headlight].source
    if edition.adopted:
        out["adopted"] = edition.adopted.source
    return out
