"""Vehicles: from a table that passed the walk, and the preset it may use, to a record, with the checks within it."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, cast

from chartgen.edition.catalogue import VEHICLES, VehiclePreset
from chartgen.edition.methods import ADOPTED, FIRST_PRINCIPLES, THUMB
from chartgen.edition.model import Trailer, Vehicle
from chartgen.edition.parts import cannot_use, needed, picked, preset_name, source
from chartgen.edition.quantity import Quantity
from chartgen.edition.reading import Reading, Row, listed, near
from chartgen.edition.spec_parts import NEEDS_LIMIT

LONGEST_M = 60.0
"""Of a vehicle with its trailer."""
_INSIDE = {
    "max_deceleration": "max_deceleration_mps2", "brake_lag": "brake_lag_s", "build_up": "build_up_s",
    "brake_efficiency": "brake_efficiency",
}  # fmt: skip
"""Keys that say how it brakes, with the names of their values in a record."""
_UNSET: dict[str, float | None] = {
    "max_deceleration": None, "brake_lag": 0.0, "build_up": 0.0, "brake_efficiency": 1.0
}  # fmt: skip


def vehicle(reading: Reading, row: Row, method: str, others: Sequence[Row]) -> Vehicle | None:
    """One [[vehicle]]; None where it does not hold together. `others`: all vehicle tables, for the laden partner."""
    preset = picked(reading, row, VEHICLES)
    if preset is None and "use" not in row:
        needed(reading, row, "vehicle", "kind", "name")
    kind = _kind(row)
    brakes = {key: _value(row, preset, key) for key in _INSIDE}
    _method_inputs(reading, row, method, preset, brakes)
    if kind in NEEDS_LIMIT and method == FIRST_PRINCIPLES:
        _lag_is_usual(reading, row, cast("float", brakes["brake_lag"]))
    length_m = row["length"].value if "length" in row else (preset.length_m if preset else None)
    mass_kg = row["mass"].value if "mass" in row else (preset.mass_kg if preset else None)
    trailer = _trailer(reading, row, length_m, mass_kg) if "trailer" in row else (preset.trailer if preset else None)
    if row.broken or kind is None:
        return None
    # The preset's source vouches for the preset's values only.
    own = preset is None or "source" in row or any(key in row for key in _INSIDE) or _is_drag(row)
    values: dict[str, Any] = {inside: brakes[key] for key, inside in _INSIDE.items()}
    return Vehicle(
        id=row["id"],
        kind=kind,
        name=row["name"] if "name" in row or preset is None else preset_name(reading, row, preset.name),
        load=_load(row),
        unladen_of=_laden_partner(reading, row, others),
        length_m=length_m,
        source=source(row) if own or preset is None else preset.source,
        preset=preset.key if preset else None,
        mass_kg=mass_kg,
        trailer=trailer,
        test_figure=preset is not None and preset.test_figure and "max_deceleration" not in row,
        **values,
    )


def _kind(row: Row) -> Any:
    """As written, else the preset's."""
    preset = VEHICLES.get(row["use"]) if "use" in row else None
    return row.get("kind", preset.kind if preset and "kind" not in row.broken else None)


def _load(row: Row) -> Any:
    preset = VEHICLES.get(row["use"]) if "use" in row else None
    return row.get("load", preset.load if preset else None)


def _value(row: Row, preset: VehiclePreset | None, key: str) -> float | None:
    if key in row:
        value = row[key]
        return float(value.value if isinstance(value, Quantity) else value)
    return cast("float | None", getattr(preset, _INSIDE[key])) if preset else _UNSET[key]


def _method_inputs(
    reading: Reading, row: Row, method: str, preset: VehiclePreset | None, brakes: dict[str, float | None]
) -> None:
    """What the method must have and what it cannot use: an input is never ignored."""
    kind = _kind(row)
    if brakes["max_deceleration"] is None and "max_deceleration" not in row.broken and "use" not in row.broken:
        if method == FIRST_PRINCIPLES and kind in NEEDS_LIMIT:
            row.broken.add("max_deceleration")
            reading.fault(
                row.at("max_deceleration"),
                f"a vehicle of kind {kind} needs its own braking limit: the road alone would make it stop too short",
                'max_deceleration = "5 m/s^2"',
            )
        elif method.startswith("sight-"):
            row.broken.add("max_deceleration")
            reading.fault(
                row.at("max_deceleration"),
                f"the method {method} works with the vehicle's deceleration",
                'max_deceleration = "3.4 m/s^2"',
            )
    unused = _unused(method)
    for key in [k for k in row if k in unused]:
        cannot_use(reading, row, key, method)
    if method != FIRST_PRINCIPLES and _is_drag(row):
        cannot_use(reading, row, "trailer", method)
    of_preset = [key for key in _INSIDE if key in unused and key not in row and brakes[key] != _UNSET[key]]
    if of_preset and preset is not None and method == ADOPTED:
        cannot_use(reading, row, "use", method)
    elif of_preset and preset is not None:
        row.broken.add("use")
        reading.fault(
            row.at("use"),
            f"the method {method} cannot use this preset's {listed(of_preset).replace(' or ', ' and ')}",
            f'kind and name written here, or method = "{FIRST_PRINCIPLES}"',
            given=preset.key,
        )


def _unused(method: str) -> set[str]:
    """Keys of how it brakes that the method cannot use."""
    if method == FIRST_PRINCIPLES:
        return set()
    if method in THUMB or method == ADOPTED:
        return set(_INSIDE)
    unused = {"brake_lag", "build_up"}
    unused |= {"max_deceleration"} if method.startswith("slide-") else set()
    unused |= {"brake_efficiency"} if method.startswith("sight-") else set()
    return unused


def _lag_is_usual(reading: Reading, row: Row, lag_s: float) -> None:
    if "brake_lag" not in row.broken and not 0.2 <= lag_s <= 1.0:
        reading.warn(
            row.at("brake_lag"),
            f"a lag of {lag_s:g} s is accepted but unusual for air brakes; usual is 0.2 s to 1 s.",
        )


# ---- what it draws ---------------------------------------------------------------------------------------------------


def _is_drag(row: Row) -> bool:
    """Whether it draws a trailer that its own brakes must stop as well."""
    trailer = row.get("trailer")
    return isinstance(trailer, Row) and trailer.get("braked") is False


def _trailer(reading: Reading, row: Row, length_m: float | None, mass_kg: float | None) -> Trailer | None:
    given: Row = row["trailer"]
    if given.broken:
        return None
    before = len(reading.faults)
    if not given["braked"]:
        missing = [(given, "mass", "750 kg")] if "mass" not in given else []
        missing += [(row, "mass", "1500 kg")] if mass_kg is None and "mass" not in row.broken else []
        for table, key, shown in missing:
            problem = "with an unbraked trailer both masses are needed: the vehicle's brakes must stop them both"
            reading.fault(table.at(key), problem, f'{key} = "{shown}"')
    if length_m is not None and length_m + given["length"].value > LONGEST_M:
        reading.fault(
            given.at("length"),
            f"vehicle and trailer are {length_m + given['length'].value:.4g} m long",
            f"at most {LONGEST_M:g} m together",
            given=given["length"].text,
        )
    if len(reading.faults) > before:
        row.broken.add("trailer")
        return None
    return Trailer(
        length_m=given["length"].value,
        braked=given["braked"],
        mass_kg=given["mass"].value if "mass" in given else None,
    )


# ---- the laden partner -------------------------------------------------------------------------------------------


def _laden_partner(reading: Reading, row: Row, others: Sequence[Row]) -> str | None:
    """Id of the laden vehicle: as stated, else by the id's stem ("rigid-unladen" beside "rigid-laden" or "rigid")."""
    laden = [o["id"] for o in others if "id" in o and _load(o) == "laden" and _kind(o) == _kind(row)]
    stated = row.get("unladen_of")
    if stated is None:
        stem = row["id"].replace("unladen", "").strip("-")
        same = [i for i in laden if i.replace("laden", "").strip("-") == stem]
        return same[0] if _load(row) == "unladen" and len(same) == 1 else None
    if _load(row) != "unladen":
        reading.fault(row.at("unladen_of"), "only an unladen vehicle has a laden one", 'load = "unladen"', given=stated)
    elif stated not in laden:
        reading.fault(
            row.at("unladen_of"),
            f"there is no laden {_kind(row)} with this id",
            listed(laden) or 'a [[vehicle]] with load = "laden"',
            given=stated,
            near=near(stated, laden),
        )
    return cast("str", stated)
