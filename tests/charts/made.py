"""Hand-made rows and words for tests of drawings: invented figures, in the columns of the one table."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import pandas as pd

from chartgen.charts.drawing import Direction

_WORDS = {
    "en-GB": {
        "part.reaction": "reaction",
        "part.lag": "brake lag",
        "part.braking": "braking",
        "verdict.does_not_stop": "does not stop",
    },
    "cy": {
        "part.reaction": "ymateb",
        "part.lag": "oedi’r brêc",
        "part.braking": "brecio",
        "verdict.does_not_stop": "nid yw’n stopio",
    },
    "fr": {
        "part.reaction": "réaction",
        "part.lag": "temps mort",
        "part.braking": "freinage",
        "verdict.does_not_stop": "ne s’arrête pas",
    },
    "ar": {
        "part.reaction": "رد الفعل",
        "part.lag": "تأخر المكابح",
        "part.braking": "الكبح",
        "verdict.does_not_stop": "لا تتوقف",
    },
}
_ALT = {
    "alt.columns": "Stopping distance grows from {first} at {low} to {last} at {high}: at least {times} times as far.",
    "alt.columns_short": "Stopping distance: {first} at {low}, {last} at {high}.",
    "alt.columns_one": "Stopping distance at {speed}: {total}.",
    "alt.columns_never": "From {never} the vehicle does not stop.",
    "alt.columns_none": "From {low} to {high} the vehicle does not stop.",
    "alt.columns_many": "Stopping distance grows with speed, from {low} to {high}.",
    "alt.columns_series": "{name}: {first} to {last}.",
    "alt.columns_series_none": "{name}: {verdict}.",
}
_UNITS = {"cy": {"mph": "mya"}, "ar": {"km/h": "كم/س", "m": "م"}}


@dataclass(frozen=True)
class MadeWords:
    """A small stand-in for a language: what the `Words` protocol asks, and nothing else."""

    tag: str
    direction: Direction = "ltr"

    def t(self, key: str, **values: str) -> str:
        return {**_ALT, **_WORDS[self.tag]}[key].format(**values)

    def plain(self, key: str, **values: str) -> str:
        return self.t(key, **values)

    def distance(self, x: float, unit: str) -> str:
        return f"{x:g}\u00a0{self.unit(unit)}"

    def speed(self, x: float, unit: str) -> str:
        return f"{x:g}\u00a0{self.unit(unit)}"

    def number(self, x: float, decimals: int = 0) -> str:
        return f"{x:.{decimals}f}"

    def unit(self, name: str) -> str:
        return _UNITS.get(self.tag, {}).get(name, name)

    def text(self, text: Mapping[str, str]) -> str:
        return text[self.tag]


EN, CY, FR, AR = MadeWords("en-GB"), MadeWords("cy"), MadeWords("fr"), MadeWords("ar", "rtl")


def rows(
    speeds: Sequence[float],
    *,
    reaction_s: float = 0.68,
    lag_s: float = 0.0,
    deceleration: float | Sequence[float] = 6.5,
    speed_unit: str = "mph",
    distance_unit: str = "m",
    first_row: int = 0,
) -> pd.DataFrame:
    """Rows at `speeds`; a deceleration of 0 does not stop. Printed figures are rounded up, the total is their sum."""
    mps = {"mph": 0.44704, "km/h": 1 / 3.6}[speed_unit]
    unit = {"m": 1.0, "ft": 0.3048}[distance_unit]
    slow = [deceleration] * len(speeds) if isinstance(deceleration, int | float) else list(deceleration)
    records = []
    for i, (speed, a) in enumerate(zip(speeds, slow, strict=True)):
        v = speed * mps
        parts = [v * reaction_s, v * lag_s, v * v / (2 * a) if a else math.nan]
        printed = [math.ceil(part / unit - 1e-9) if part == part else math.nan for part in parts]  # noqa: PLR0124
        records.append({
            "row": first_row + i, "speed": float(speed), "speed_mps": v, "printed_speed": float(speed),
            "stops": bool(a),
            "reaction_distance_m": parts[0], "lag_distance_m": parts[1], "braking_distance_m": parts[2],
            "stopping_distance_m": sum(parts), "printed_reaction": float(printed[0]), "printed_lag": float(printed[1]),
            "printed_braking": float(printed[2]), "printed_stopping": float(sum(printed)),
        })  # fmt: skip
    return pd.DataFrame(records)
