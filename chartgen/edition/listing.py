"""The catalogue as a list: for a person in a terminal, and as JSON or CSV for programs. No clock, no locale."""

from __future__ import annotations

import csv
import io
import json
import textwrap
from collections.abc import Iterator, Sequence
from dataclasses import fields
from typing import Any

from chartgen.edition.catalogue import SHELVES, DriverPreset, GapRule, Preset, SurfacePreset, VehiclePreset

HEADS = {
    "reaction": "Reaction times, perception included",
    "surface": "Road surfaces: friction, at 60 km/h where it goes by speed",
    "vehicle": "Vehicles: greatest deceleration on the level",
    "gap": "Following-gap rules",
    "headlight": "Headlight reaches",
}
_COMMON = {field.name for field in fields(Preset)}


def to_json(kinds: Sequence[str] = tuple(SHELVES)) -> str:
    """The catalogue as JSON, UTF-8 text ending with a newline.

    `{"presets": [...]}`, one object a preset: `key` as an edition writes it in `use`; `shelf`, its first part; `name`
    by language tag; `value`, `unit`, `low`, `high`: the quantity and the source's range, the same at both ends where
    the source states one figure; `kind`: measured, statute, design value, rule of thumb, chosen by us; `work`: key of
    the bibliography, `place` in it and `year`, null where there is none; `source`: all of that as it is printed;
    `from_memory`: nobody has opened the source; `doubtful`: languages whose name is to be looked at first;
    `parameters`: everything else the preset sets, names as in the edition's record (SI, units in the names).
    """
    return json.dumps({"presets": [_entry(p) for p in _presets(kinds)]}, ensure_ascii=False, indent=1) + "\n"


def to_csv(kinds: Sequence[str] = tuple(SHELVES)) -> str:
    """The catalogue as CSV (RFC 4180), a header first: the keys of the JSON, with the English name only.

    `parameters` is one cell, in the words of the text list; what does not exist is empty; truths are `true`, `false`.
    """
    names = list(_entry(next(_presets(kinds))))
    out = io.StringIO()
    writer = csv.writer(out)
    writer.writerow(names)
    for preset in _presets(kinds):
        flat = _entry(preset) | {
            "name": preset.name["en-GB"],
            "doubtful": " ".join(preset.doubtful),
            "parameters": "; ".join(_details(preset)),
            "from_memory": "true" if preset.source.from_memory else "false",
        }
        writer.writerow([flat[name] for name in names])
    return out.getvalue()


def to_text(kinds: Sequence[str] = tuple(SHELVES), width: int = 100) -> str:
    """The catalogue for a terminal of at least 60 columns, ending with a newline.

    A line of columns for each preset (key, value with unit, range, kind), then its English name with whatever else it
    sets, then its source; one the source of which nobody has opened ends with "From memory."
    """
    width = max(width, 60)
    lines = textwrap.wrap(
        "None of these is right for everybody: whoever publishes chooses. Where a source gives a range of friction, "
        "the value is its lower end, which is the longer distance.",
        width,
    )
    for kind in kinds:
        shelf = SHELVES[kind].values()
        lines += ["", *_wrapped(f"{HEADS[kind]} ({len(shelf)})", width, first="")]
        rows = [(p.key, _value(p), _range(p), p.source.kind) for p in shelf]
        columns = [max(len(row[i]) for row in rows) for i in range(4)]
        for preset, row in zip(shelf, rows, strict=True):
            line = "  ".join(cell.ljust(size) for cell, size in zip(row, columns, strict=True)).rstrip()
            said = "; ".join((preset.name["en-GB"], *_details(preset)))
            source = preset.source.text + (". From memory." if preset.source.from_memory else ".")
            lines += ["", *(_wrapped(line, width, first="") if len(line) > width else [line])]
            lines += [*_wrapped(said, width), *_wrapped(source, width)]
    return "\n".join(lines) + "\n"


def _wrapped(text: str, width: int, first: str = "    ") -> list[str]:
    return textwrap.wrap(text, width, initial_indent=first, subsequent_indent="    ", break_on_hyphens=False)


def _presets(kinds: Sequence[str]) -> Iterator[Preset]:
    return (preset for kind in kinds for preset in SHELVES[kind].values())


def _number(value: float) -> str:
    return f"{value:.5g}"


def _value(preset: Preset) -> str:
    return "" if preset.value is None else f"{_number(preset.value)} {preset.unit}".rstrip()


def _range(preset: Preset) -> str:
    if preset.low is None or preset.high is None or preset.low == preset.high:
        return "one figure"
    return f"{_number(preset.low)} to {_number(preset.high)} {preset.unit}".rstrip()


def _details(preset: Preset) -> list[str]:
    """What the preset sets beside its value, in words."""
    match preset:
        case DriverPreset():
            return _of_reaction(preset)
        case SurfacePreset():
            return _of_surface(preset)
        case VehiclePreset():
            return _of_vehicle(preset)
        case GapRule():
            return _of_gap(preset)
    return []


def _of_reaction(preset: DriverPreset) -> list[str]:
    reaction = preset.reaction
    said = []
    if reaction.mu is not None and reaction.sigma is not None and reaction.percentile is not None:
        said.append(f"percentile {reaction.percentile[1:]} of a lognormal, {reaction.mu:.4f} and {reaction.sigma:.4f}")
    if reaction.perception_s is not None:
        said.append(f"{_number(reaction.perception_s)} s of it perception")
    return said


def _of_surface(preset: SurfacePreset) -> list[str]:
    friction = preset.friction
    said = [preset.state]
    if friction.table is not None:
        said.append(", ".join(f"{_number(mu)} at {_number(speed)}" for speed, mu in friction.table) + " km/h")
    if friction.sp_kmh is not None:
        said.append(f"falling with a speed constant of {_number(friction.sp_kmh)} km/h")
    if friction.valid_kmh is not None:
        said.append(f"up to {_number(friction.valid_kmh[1])} km/h")
    return said


def _of_vehicle(preset: VehiclePreset) -> list[str]:
    said = [preset.kind, *([preset.load] if preset.load else [])]
    for what, value, unit in (
        ("lag", preset.brake_lag_s or None, "s"),
        ("build-up", preset.build_up_s or None, "s"),
        ("length", preset.length_m, "m"),
        ("mass", preset.mass_kg, "kg"),
    ):
        if value is not None:
            said.append(f"{what} {_number(value)} {unit}")
    if preset.trailer is not None:
        braked = "braked" if preset.trailer.braked else "unbraked"
        mass = "" if preset.trailer.mass_kg is None else f", {_number(preset.trailer.mass_kg)} kg"
        said.append(f"{braked} trailer of {_number(preset.trailer.length_m)} m{mass}")
    return [*said, *(["a test figure"] if preset.test_figure else [])]


def _of_gap(rule: GapRule) -> list[str]:
    said = []
    if rule.per_length_s_per_m is not None:
        said.append("by the vehicle's length")
    if rule.extra_s:
        said.append(f"{_number(rule.extra_s)} s more above {_number(rule.extra_above_mps)} m/s")
    if rule.wet_factor != 1 or rule.ice_factor != 1:
        said.append(f"times {_number(rule.wet_factor)} on wet roads, {_number(rule.ice_factor)} on ice or snow")
    return said


def _entry(preset: Preset) -> dict[str, Any]:
    return {
        "key": preset.key,
        "shelf": preset.key.partition("/")[0],
        "name": dict(preset.name),
        "value": preset.value,
        "unit": preset.unit,
        "low": preset.low,
        "high": preset.high,
        "kind": preset.source.kind,
        "work": preset.work,
        "place": preset.place or None,
        "year": preset.year,
        "source": preset.source.text,
        "from_memory": preset.source.from_memory,
        "doubtful": list(preset.doubtful),
        "parameters": _parameters(preset),
    }


def _parameters(preset: Preset) -> dict[str, Any]:
    own = {field.name: getattr(preset, field.name) for field in fields(preset) if field.name not in _COMMON}
    if isinstance(preset, DriverPreset):
        own = _set(preset.reaction)
    elif isinstance(preset, SurfacePreset):
        own = {"state": preset.state, **_set(preset.friction)}
    elif isinstance(preset, VehiclePreset):
        own |= {"trailer": _set(preset.trailer) if preset.trailer else None}
    return {name: value for name, value in own.items() if value is not None}


def _set(record: Any) -> dict[str, Any]:
    """The fields of a record that are set."""
    return {f.name: getattr(record, f.name) for f in fields(record) if getattr(record, f.name) is not None}
