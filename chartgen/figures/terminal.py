"""The figures as a person reads them in a terminal: plain English, units in the heads, assumptions said.

One block a driver, vehicle, surface and grade. A block whose table is wider than the terminal becomes a list, which
wraps. The text is a function of its arguments only; colour is added when asked for.
"""

from __future__ import annotations

import io
from collections.abc import Iterator
from typing import TYPE_CHECKING, Final

import numpy as np
from rich import box
from rich.console import Console
from rich.measure import Measurement
from rich.padding import Padding
from rich.table import Table

from chartgen.edition.model import PARTS, Text
from chartgen.figures.assume import Assumption, Rounded, assumptions
from chartgen.figures.export import asked_greatest, whole
from chartgen.figures.notices import OUTSIDE, REASONS

if TYPE_CHECKING:
    import pandas as pd

    from chartgen.edition.model import Edition
    from chartgen.figures.record import Figures

DOES_NOT_STOP: Final = "does not stop"
NO_FIGURE: Final = "no figure"


def table_text(figures: Figures, edition: Edition, width: int = 100, colour: bool = False) -> str:
    """The readable table of `chartgen figures EDITION`, ending with a newline.

    `width`: columns of the terminal, at least 20 are used; no line is longer, unless one word is. `colour`: ANSI
    bold and dim for a terminal; without it the text holds no control characters.
    """
    out = io.StringIO()
    console = Console(
        file=out,
        width=max(width, 20),
        force_terminal=colour,
        color_system="standard" if colour else None,
        no_color=not colour,
        highlight=False,
        markup=False,
        emoji=False,
        legacy_windows=False,
        _environ={},
    )
    _head(console, figures, edition)
    for _, rows in figures.table.groupby(["driver", "vehicle", "surface", "grade"], sort=False):
        _block(console, rows, figures, edition)
    if figures.notices:
        console.print("Warnings", style="bold")
        for notice in figures.notices:
            console.print(f"- {notice.text}")
    # rich pads lines to the width; trailing blanks are of no use to a reader or to a comparison.
    return "\n".join(line.rstrip() for line in out.getvalue().splitlines()).rstrip("\n") + "\n"


def _head(console: Console, figures: Figures, edition: Edition) -> None:
    console.print(f"{_name(edition.title, edition)} ({edition.id})", style="bold")
    console.print(f"{_name(edition.publisher, edition)}, issue {edition.issue}, {edition.issued.isoformat()}")
    console.print(f"Speeds in {figures.speed_unit}, distances in {figures.distance_unit}; method: {figures.method}.")
    console.print(_rounded(assumptions(edition, figures.table.iloc[0], sheet=figures.table).rounding))
    console.print()


def _block(console: Console, rows: pd.DataFrame, figures: Figures, edition: Edition) -> None:
    assumed = assumptions(edition, rows)
    driver, vehicle, surface = (
        _name(edition.driver(assumed.driver).name, edition),
        _name(edition.vehicle(assumed.vehicle).name, edition) + (f" ({assumed.load})" if assumed.load else ""),
        _name(edition.surface(assumed.surface).name, edition),
    )
    console.print(f"{driver} · {vehicle} · {surface} · {_grade(assumed.grade)}", style="bold")
    console.print(Padding(_assumed(assumed, edition), (0, 0, 1, 2)), style="dim")
    for heads in (_heads(rows, figures), _asked(rows, figures), _gaps(figures)):
        if len(heads) > 1:
            _columns(console, rows, heads)
            console.print()
    lines = list(_greatest(rows.iloc[0], figures))
    if lines:
        console.print(Padding("\n".join(lines), (0, 0, 1, 2)))
    for reason in dict.fromkeys(rows.loc[~rows["stops"].astype(bool), "reason"]):
        verdict = NO_FIGURE if reason == OUTSIDE else DOES_NOT_STOP
        console.print(Padding(f"{verdict}: {REASONS[reason]}", (0, 0, 1, 2)))


def _columns(console: Console, rows: pd.DataFrame, heads: dict[str, str]) -> None:
    """A table, or a list where it would be too wide: it would lose a column without a word, so it is not tried."""
    table = _table(rows, heads)
    if Measurement.get(console, console.options.update(max_width=1000), table).maximum > console.width:
        for line in _list(rows, heads):
            console.print(Padding(line, (0, 0, 0, 2)))
    else:
        console.print(table)


def _heads(rows: pd.DataFrame, figures: Figures) -> dict[str, str]:
    """Columns to show with their heads: the lag only where there is one, second unit and gap where they exist."""
    unit, also = figures.distance_unit, figures.also_unit
    heads = {"printed_speed": f"Speed ({figures.speed_unit})", "printed_reaction": f"Reaction ({unit})"}
    if (rows["lag_distance_m"] != 0.0).any():
        heads["printed_lag"] = f"Lag ({unit})"
    heads |= {"printed_braking": f"Braking ({unit})", "printed_stopping": f"Stopping ({unit})"}
    if also:
        heads["printed_also_stopping"] = f"Stopping ({also})"
    if figures.gap_rule:
        heads |= {"printed_gap_s": "Gap (s)", "printed_gap_distance": f"Gap ({unit})"}
    return heads


def _asked(rows: pd.DataFrame, figures: Figures) -> dict[str, str]:
    """The columns that the edition asks for beside the distances; the speed alone where it asks for none."""
    unit, speed, asked = figures.distance_unit, figures.speed_unit, figures.questions
    heads = {"printed_speed": f"Speed ({speed})"}
    if rows["perception_s"].notna().any():
        heads["printed_perception"] = f"of which perception ({unit})"
    if figures.spread is not None and rows["spread_error_m"].notna().any():
        heads |= {f"printed_p{percent}": f"P{percent} ({unit})" for percent in (50, 85, 95)}
    if asked.residual_from is not None:
        heads["printed_residual_speed"] = f"Speed left ({speed})"
    for name in ("driver", "surface"):
        reference = getattr(asked, name)
        if reference is not None:
            heads[f"printed_added_by_{name}"] = f"More than {reference} ({unit})"
    return heads


def _gaps(figures: Figures) -> dict[str, str]:
    """The following gaps by the rules that the edition asks for."""
    heads = {"printed_speed": f"Speed ({figures.speed_unit})"}
    for rule in figures.questions.gaps:
        short = rule.removeprefix("gap/")
        heads[f"printed_gap_s {rule}"] = f"Gap {short} (s)"
        heads[f"printed_gap_distance {rule}"] = f"Gap {short} ({figures.distance_unit})"
    return heads


def _greatest(row: pd.Series, figures: Figures) -> Iterator[str]:
    """The greatest speeds, which are the same at every speed of a block: a line each."""
    asked, unit = figures.questions, figures.distance_unit
    for name in asked_greatest(asked):
        within = f"its gap by {asked.gaps[0]}" if name == "gap" else f"{figures.answer_distances[name]:g} {unit}"
        if name == "headlight":
            within += f" ({asked.headlight})"
        speed = _cell(row, f"printed_greatest_{name}")
        unit_said = "" if speed == "none" else f" {figures.speed_unit}"
        yield f"Greatest speed that stops within {within}: {speed}{unit_said}"


def _cell(row: pd.Series, column: str) -> str:
    """One printed value; in words where there is none."""
    value = row[column]
    if not np.isnan(value):
        more = column.startswith("printed_greatest_") and row[column.replace("printed_", "") + "_at_top"]
        return f"{whole(float(value))}{' or more' if more else ''}"
    if row["reason"] == OUTSIDE:
        return NO_FIGURE
    return DOES_NOT_STOP if column in ("printed_braking", "printed_stopping", "printed_also_stopping") else "none"


def _table(rows: pd.DataFrame, heads: dict[str, str]) -> Table:
    table = Table(box=box.SIMPLE_HEAD, pad_edge=False, padding=(0, 1), show_edge=False)
    for column, head in heads.items():
        style = "bold" if column == "printed_stopping" else None
        table.add_column(head.replace(" (", "\n("), justify="right", style=style)
    for _, row in rows.iterrows():
        table.add_row(*(_cell(row, column).replace("not stop", "not\nstop") for column in heads))
    return table


def _list(rows: pd.DataFrame, heads: dict[str, str]) -> Iterator[str]:
    for _, row in rows.iterrows():
        yield "; ".join(f"{head}: {_cell(row, column)}" for column, head in heads.items())


def _assumed(a: Assumption, edition: Edition) -> str:
    """Six of the seven fields, short; the rounding is the same for all blocks and stands at the top."""
    if a.adopted is not None:
        return f"as published: {a.adopted}; surface {a.surface}; {_grade(a.grade)}."
    reaction = f"reaction {a.reaction_time_s:.4g} s"
    if a.perception_s is not None:
        reaction += f" (of which perception {a.perception_s:.4g} s)"
    if a.reaction_percentile:
        reaction += f" ({a.reaction_percentile.upper()})"
    lag = f"brake lag {a.brake_lag_s:g} s" if a.brake_lag_s else "no brake lag"
    if a.build_up_s:
        lag += f", build-up {a.build_up_s:g} s"
    state = edition.surface(a.surface).state
    surface = f"surface {a.surface}" + (f" ({state})" if state and state != a.surface else "")
    load = f"load {a.load}" if a.load else "load not stated"
    return "; ".join([reaction, lag, _braking(a, edition), surface, _grade(a.grade), load]) + "."


def _braking(a: Assumption, edition: Edition) -> str:
    b = a.braking
    full = f"{b.full_mps2.low:.2f}"
    if b.full_mps2.falls:
        full += f" to {b.full_mps2.high:.2f}"
    full = full.replace("-", "−")
    said = [f"deceleration {full} m/s² as full braking begins"]
    if b.friction:
        friction = f"friction {b.friction.low:.3g}"
        if b.friction.falls:
            low, high = (f"{v:g} {edition.speed_unit}" for v in (b.friction.low_speed, b.friction.high_speed))
            friction += f" at {low} to {b.friction.high:.3g} at {high}"
        said.append(friction)
    if b.limit_mps2 is not None:
        said.append(f"at most {b.limit_mps2:.4g} m/s² by the vehicle")
    if b.efficiency != 1.0:
        said.append(f"brake efficiency {100 * b.efficiency:g} %")
    return ", ".join(said)


def _rounded(r: Rounded) -> str:
    step = f"{r.step:g} {r.unit}" + (f" ({r.also_step:g} {r.also_unit})" if r.also_unit else "")
    if r.rule == "mixed":
        said = f"Rounded to {step} by part (" + ", ".join(f"{p} {r.rules[p]}" for p in PARTS) + ")"
    else:
        said = f"Rounded up to {step}" if r.rule == "up" else f"Rounded to the nearest {step}"
    said += {
        "sum-of-parts": ", total the sum of the printed parts",
        "on-its-own": ", total rounded on its own",
        "controlled": ", parts adjusted to add up to the total",
    }[r.total]
    if r.short:
        said += "; may be up to " + " or ".join(f"{short:g} {unit}" for unit, short in r.short.items()) + " short"
    return said + "."


def _grade(grade: float) -> str:
    if grade == 0.0:
        return "level"
    return f"{abs(100 * grade):g} % " + ("uphill" if grade > 0 else "downhill")


def _name(text: Text, edition: Edition) -> str:
    """English where there is any, since the rest of the table is; else the edition's first language."""
    english = [value for tag, value in text.items() if tag.split("-")[0] == "en"]
    return (english or [text[tag] for tag in edition.languages if tag in text] or list(text.values()))[0]
