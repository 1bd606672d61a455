"""Which of a row's public keys are inputs, and which printed numbers each input bears on."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any, Final

Value = bool | int | float | str | None

_NAMES: Final = frozenset({"driver", "vehicle", "surface", "grade", "speed_mps", "case", "sources"})
"""What a row is called and where it stands: rows are matched by it."""

RESULTS: Final = frozenset({
    "full_deceleration_mps2", "reaction_distance_m", "lag_distance_m", "braking_distance_m", "stopping_distance_m",
    "perception_distance_m", "stopping_time_s", "stops", "reason", "residual_speed_mps", "greatest_speed_mps",
    "greatest_speed_at_least", "added_m", "gap_s", "gaps", "spread",
})  # fmt: skip
"""Row keys that are worked out. Every other key is an input, those that may be added too."""

_ADOPTED: Final = ("reaction_distance_m", "lag_distance_m", "braking_distance_m", "stopping_distance_m")

ABSENT_MEANS: Final[Mapping[str, Value]] = {
    "brake_share": 1.0, "friction_table": None, "valid_to_mps": None, "perception_s": None, "gap_rule": None,
}  # fmt: skip
"""What it means that a row does not have the input. Of any other input that one issue alone knows nothing is said: the
issue was made before the program wrote it down."""

_TOTALS: Final = frozenset({"stopping", "p50", "p85", "p95", "added_by_driver", "added_by_surface"})
_PERCENTILES: Final = frozenset({"p50", "p85", "p95"})
_SPEEDS: Final = frozenset({"residual_speed", "greatest_sight", "greatest_headlight", "greatest_gap"})
_GAPS: Final = frozenset({"gap_s", "gap_distance"})
_SUMS: Final = _TOTALS | _SPEEDS
_PARTS: Final = frozenset({"reaction", "lag", "braking"})

BEARS: Final[Mapping[str, frozenset[str]]] = {
    "reaction_time_s": _SUMS | {"reaction", "perception"},
    "reaction_percentile": _SUMS | {"reaction", "perception"},
    "perception_s": frozenset({"perception"}),
    "brake_lag_s": _SUMS | {"lag", "braking"},
    "build_up_s": _SUMS | {"braking"},
    "brake_efficiency": _SUMS | {"braking"},
    "max_deceleration_mps2": _SUMS | {"braking"},
    "brake_share": _SUMS | {"braking"},
    "friction": _SUMS | {"braking"},
    "friction_f60": _SUMS | {"braking"},
    "friction_sp_kmh": _SUMS | {"braking"},
    "friction_max_mu": _SUMS | {"braking"},
    "friction_table": _SUMS | {"braking"},
    "valid_to_mps": _SUMS | {"braking"},
    "load": _SUMS | {"braking"},
    "gap_rule": _GAPS,
    "rounding.reaction": frozenset({"reaction", "perception", "stopping", "added_by_driver", "added_by_surface"}),
    "rounding.lag": frozenset({"lag", "stopping", "added_by_driver", "added_by_surface"}),
    "rounding.braking": frozenset({"braking", "stopping", "added_by_driver", "added_by_surface"}),
    "rounding.total": _PARTS | {"stopping", "added_by_driver", "added_by_surface"},
    "reaction_distance_m": frozenset({"reaction"}),
    "lag_distance_m": frozenset({"lag"}),
    "braking_distance_m": frozenset({"braking"}),
    "stopping_distance_m": frozenset({"stopping", "added_by_driver", "added_by_surface"}),
    "state": _GAPS | {"greatest_gap"},
    "length_m": _GAPS | {"greatest_gap"},
    "reaction_mu": _PERCENTILES,
    "reaction_sigma": _PERCENTILES,
    "friction_low": _PERCENTILES,
    "friction_high": _PERCENTILES,
    "spread.samples": _PERCENTILES,
    "spread.seed": _PERCENTILES,
    "questions.residual_from": frozenset({"residual_speed"}),
    "questions.sight_m": frozenset({"greatest_sight"}),
    "questions.headlight": frozenset({"greatest_headlight"}),
    "questions.gaps": frozenset({"greatest_gap"}),
    "questions.driver": frozenset({"added_by_driver"}),
    "questions.surface": frozenset({"added_by_surface"}),
    "fastest_speed": frozenset({"greatest_sight", "greatest_headlight", "greatest_gap"}),
}
"""Names of printed numbers by input. An input that is not here bears on every number, a number that no set names is
borne on by every input."""

_KNOWN: Final = frozenset().union(*BEARS.values())


def inputs(row: Mapping[str, Any]) -> dict[str, Value]:
    """The inputs of a row by key, nested ones joined with "."; for an adopted table its numbers are the inputs.

    Formula: none; keys that are no result and no name.

    Args:
        row: one row of the public data.

    Returns:
        Values by key, nested ones joined with ".".

    Raises:
        Nothing.

    Source: the public data.
    """
    out = dict(ABSENT_MEANS)
    for key, value in _leaves("", row):
        head = key.partition(".")[0]
        adopted = row.get("method") == "adopted" and key in _ADOPTED
        if adopted or head not in RESULTS | _NAMES:
            out[key] = value
    # A curve's value at the row's speed follows from the curve.
    if any(out.get(f"friction_{name}") is not None for name in ("f60", "table")):
        out["friction"] = None
    return out


def document_inputs(document: Mapping[str, Any]) -> dict[str, Value]:
    """Inputs of the edition as a whole: its questions and its sample where the figures carry them, its top speed.

    Formula: ``fastest_speed = max(printed speed)``; the rest as it stands.

    Args:
        document: the public data of an issue.

    Returns:
        Values by key.

    Raises:
        KeyError: a key is missing that every figures JSON has.

    Source: the public data.
    """
    out: dict[str, Value] = {"fastest_speed": max(row["printed"]["speed"] for row in document["rows"])}
    if isinstance(document.get("questions"), Mapping):
        out |= _leaves("questions.", document["questions"])
    if "spread" in document:
        sample = document["spread"] or {}
        out |= {f"spread.{name}": sample.get(name) for name in ("samples", "seed")}
    return out


def _leaves(prefix: str, node: Mapping[str, Any]) -> Iterator[tuple[str, Value]]:
    """All values that are not printed, by key; units of the rounding are the edition's and stand there."""
    for key, value in node.items():
        where = f"{prefix}{key}"
        if key.startswith("printed") or where in {"rounding.unit", "rounding.also_unit"}:
            continue
        if isinstance(value, Mapping):
            yield from _leaves(f"{where}.", value)
        else:
            yield where, " ".join(map(str, value)) if isinstance(value, list | tuple) else value


def bears_on(key: str, name: str, *, also: bool, shared: bool, where: str) -> bool:
    """Whether the input `key` bears on the printed number `name`.

    `also`: the number is one in the second unit. `shared`: the parts were adjusted to add up to the total, so what
    bears on one bears on all of them. `where`: the number's own key; a gap under `gaps` has its rule in its key.

    Formula: none; see `BEARS`.

    Args:
        key: of the input.
        name: of the printed number.
        also: True for a number in the second unit.
        shared: True where the parts were adjusted to add up to the total.
        where: the number's own key.

    Returns:
        True where the one bears on the other.

    Raises:
        Nothing.

    Source: the formulas of `motion` and the rules of `rounding`.
    """
    if key in {"rounding.step", "rounding.also_step"}:
        stepped = name not in _SPEEDS and name != "gap_s"
        return stepped and also == (key == "rounding.also_step")
    if key == "gap_rule" and where.startswith("gaps."):
        return False
    reached = BEARS.get(key)
    if reached is None:
        # A method has no say in the seconds of a gap, nor has any other input of a stop.
        return key != "method" or name not in _GAPS
    if shared and name in _PARTS and reached & (_PARTS | {"stopping"}):
        return True
    return name in reached or name not in _KNOWN


def own_reference(name: str, document: Mapping[str, Any]) -> tuple[str, str] | None:
    """The column and id of the row that a number is the difference to, where the figures carry the question.

    Formula: none.

    Args:
        name: of the printed number.
        document: the public data of an issue.

    Returns:
        Column and id, or None.

    Raises:
        Nothing.

    Source: the public data.
    """
    asked = document.get("questions")
    column = {"added_by_driver": "driver", "added_by_surface": "surface"}.get(name)
    if column is None or not isinstance(asked, Mapping) or not isinstance(asked.get(column), str):
        return None
    return column, asked[column]
