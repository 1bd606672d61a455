"""Surfaces: from a table that passed the walk to a record with its friction, in one of its forms."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise
from typing import Any, Literal, cast

from chartgen.edition.catalogue import SURFACES
from chartgen.edition.curves import at_60, greatest, reference_kmh
from chartgen.edition.measures import SPEED
from chartgen.edition.methods import ADOPTED, FIRST_PRINCIPLES, THUMB, called, needs_friction
from chartgen.edition.model import Friction, Surface
from chartgen.edition.parts import cannot_use, needed, picked, plain, preset_name, source
from chartgen.edition.quantity import Quantity, factor
from chartgen.edition.reading import Reading, Row
from chartgen.edition.scales import FASTEST_MPS
from chartgen.edition.spec_parts import FRICTION_BOUNDS
from chartgen.motion.friction import penn_state, speed_constant

_State = Literal["dry", "wet", "snow", "ice"]
STATES: tuple[_State, ...] = ("dry", "wet", "snow", "ice")
FORMS = '{ f60 = 0.35, sp = "110 km/h" }, { f60 = 0.35, texture = "0.8 mm" }, { sn0 = 50, png = 0.9 } or { table = … }'
_KEYS = ("friction", "friction_range", "valid")


def surface(reading: Reading, row: Row, method: str, fastest: Quantity | None) -> Surface | None:
    """One [[surface]]; None where it does not hold together. `fastest`: the last of the edition's speeds."""
    preset = picked(reading, row, SURFACES)
    if preset is None and "use" not in row:
        needed(reading, row, "surface", "name", *(("friction",) if needs_friction(method) else ()))
    friction = _friction(reading, row) if "friction" in row else (preset.friction if preset else Friction())
    _unused(reading, row, method)
    if friction is not None and "friction" not in row.broken:
        friction = _limits(reading, row, friction)
    if friction is not None and method != FIRST_PRINCIPLES:
        friction = _without_gaps(reading, row, method, friction, fastest)
    if row.broken or friction is None:
        return None
    own = preset is None or "source" in row or any(key in row for key in _KEYS)
    name = row["name"] if "name" in row or preset is None else preset_name(reading, row, preset.name)
    return Surface(
        id=row["id"],
        name=name,
        friction=friction,
        # The preset's source vouches for the preset's values only.
        source=source(row) if own or preset is None else preset.source,
        state=row.get("state") or (cast("_State", preset.state) if preset else _state_of(row["id"])),
        preset=preset.key if preset else None,
    )


def _unused(reading: Reading, row: Row, method: str) -> None:
    if method in THUMB or method == ADOPTED:
        for key in (k for k in ("use", *_KEYS) if k in row):
            cannot_use(reading, row, key, method)
    elif not needs_friction(method):
        for key in (k for k in _KEYS if k in row):
            reading.warn(row.at(key), f"the method {method} does not use friction; the value has no effect.")


def _state_of(surface_id: str) -> _State | None:
    first = surface_id.split("-", maxsplit=1)[0]
    return next((state for state in STATES if state == first), None)


def kmh(speed: Quantity) -> float:
    """A speed in km/h, exact as it was written: "30 km/h" is 30."""
    return float(speed.number * factor(SPEED.units[speed.unit], "kilometre/hour"))


# ---- the forms -----------------------------------------------------------------------------------------------------


def _friction(reading: Reading, row: Row) -> Friction | None:
    given = row["friction"]
    if not isinstance(given, Row):
        return Friction(mu=given)
    if given.broken:
        return None
    forms = [form for form, keys in _OWN_KEYS.items() if any(key in given for key in keys)]
    if len(forms) != 1:
        problem = "this is friction in two forms at once" if forms else "there is no friction in it"
        reading.fault(given.path, problem, f"one form: {FORMS}", given=plain(given))
        return None
    return _READ[forms[0]](reading, given)


_OWN_KEYS = {"falling": ("f60", "sp", "texture"), "skid": ("sn0", "png"), "table": ("table",)}
"""Keys by which each form is known."""


def _both(reading: Reading, given: Row, *keys: str) -> bool:
    """Fault what is missing of a form's keys."""
    examples = {"f60": "f60 = 0.35", "sn0": "sn0 = 50", "png": "png = 0.9"}
    missing = [key for key in keys if key not in given]
    for key in missing:
        reading.fault(given.at(key), "this is needed and missing", examples[key])
    return not missing


def _falling(reading: Reading, given: Row) -> Friction | None:
    if not _both(reading, given, "f60"):
        return None
    if ("sp" in given) == ("texture" in given):
        problem = "the speed constant is given twice" if "sp" in given else "it is not said how friction falls"
        allowed = 'either sp = "110 km/h" or texture = "0.8 mm" beside f60'
        reading.fault(given.path, problem, allowed, given=plain(given))
        return None
    depth: Quantity | None = given.get("texture")
    sp_kmh = speed_constant(depth.value) if depth else given["sp"].value
    friction = Friction(
        f60=given["f60"], sp_kmh=sp_kmh, max_mu=given.get("max"), texture_mm=depth.value if depth else None
    )
    return _bounded(reading, given, friction)


def _skid(reading: Reading, given: Row) -> Friction | None:
    if not _both(reading, given, "sn0", "png"):
        return None
    f60, sp_kmh = penn_state(given["sn0"], given["png"])
    friction = Friction(f60=f60, sp_kmh=sp_kmh, max_mu=given.get("max"), sn0=given["sn0"], png_h_per_mile=given["png"])
    return _bounded(reading, given, friction)


def _bounded(reading: Reading, given: Row, friction: Friction) -> Friction | None:
    """Hold a falling friction against the bounds where it is greatest."""
    at_rest = greatest(friction)
    if at_rest > FRICTION_BOUNDS.most:
        beside = " and ".join(key for key in given if key != "max")
        reading.fault(
            given.path,
            f"near standstill this friction reaches {at_rest:.2f}",
            f"max = … beside {beside}, {FRICTION_BOUNDS.says}",
            given=plain(given),
        )
        return None
    if at_rest > 1.2:
        reading.warn(given.path, f"near standstill the friction reaches {at_rest:.2f}; usual is up to 1.2.")
    return friction


def _table(reading: Reading, given: Row) -> Friction | None:
    if "max" in given:
        reading.fault(given.at("max"), "a table has no cap", "the values as they are in the table", given=given["max"])
        return None
    pairs: tuple[tuple[Quantity, float], ...] = given["table"]
    before = len(reading.faults)
    unit = pairs[0][0].unit
    for number, (speed, _) in enumerate(pairs, 1):
        where = f"{given.at('table')}[{number}]"
        if speed.number < 0 or speed.value > FASTEST_MPS:
            reading.fault(where, "this speed is out of range", "0 to 400 km/h (248 mph)", given=speed.text)
        elif SPEED.units[speed.unit] != SPEED.units[unit]:
            reading.fault(where, f"the speeds of this table are in {unit}", f'such as "30 {unit}"', given=speed.text)
    if len(reading.faults) > before:
        return None
    for number, ((slow, mu), (fast, next_mu)) in enumerate(pairwise(pairs), 2):
        where = f"{given.at('table')}[{number}]"
        if fast.number == slow.number:
            reading.fault(where, "this speed stands there twice", "each speed once", given=fast.text)
        elif fast.number < slow.number:
            reading.fault(where, "the speeds do not rise", "from slow to fast", given=fast.text)
        elif next_mu > mu:
            reading.warn(
                where, f"from {slow.text} to {fast.text} the friction rises from {mu:g} to {next_mu:g}; as a rule it "
                "falls with speed.",
            )  # fmt: skip
    if len(reading.faults) > before:
        return None
    return Friction(table=tuple((kmh(speed), mu) for speed, mu in pairs))


_READ = {"falling": _falling, "skid": _skid, "table": _table}


# ---- its range, and the speeds it is for ----------------------------------------------------------------------------


def _limits(reading: Reading, row: Row, friction: Friction) -> Friction | None:
    """The friction with `friction_range` and `valid`; None where they do not go together."""
    before = len(reading.faults)
    stated: Any = {}
    if "friction_range" in row:
        low, high = row["friction_range"]
        _range(reading, row, friction, low, high)
        stated |= {"low": low, "high": high}
    if "valid" in row:
        stated["valid_kmh"] = _valid(reading, row, friction)
    return replace(friction, **stated) if len(reading.faults) == before else None


def _without_gaps(
    reading: Reading, row: Row, method: str, friction: Friction, fastest: Quantity | None
) -> Friction | None:
    """The friction without its `valid`: only first principles leave a row out. Where the method uses friction, a fault
    for speeds that the source does not speak of."""
    table = friction.table
    ends = ([friction.valid_kmh[1]] if friction.valid_kmh else []) + ([table[-1][0]] if table else [])
    if needs_friction(method) and ends and fastest is not None and kmh(fastest) > min(ends) * (1 + 1e-9):
        where = next((row.at(key) for key in ("valid", "friction") if key in row), row.at("use"))
        reading.fault(
            where,
            f"the source speaks of speeds up to {min(ends):.6g} km/h, and the edition goes up to {fastest.text}; "
            f"{called(method)} cannot leave a row out",
            f'slower speeds, or method = "{FIRST_PRINCIPLES}"',
        )
        return None
    return replace(friction, valid_kmh=None)


def _range(reading: Reading, row: Row, friction: Friction, low: float, high: float) -> None:
    where, given = row.at("friction_range"), list(row["friction_range"])
    if friction == Friction():
        reading.fault(where, "a range belongs to a friction", "friction beside it, or leave it out", given=given)
        return
    value, top = at_60(friction), greatest(friction)
    at = "" if friction.mu is not None else f" at {reference_kmh(friction):g} km/h"
    if not low <= value <= high:
        problem = f"the friction{at}, {value:.3g}, does not lie in its range" if at else (
            f"the friction {value:g} does not lie in its range"
        )  # fmt: skip
        reading.fault(where, problem, "[lowest, highest] around it", given=given)
    elif top * high / value > FRICTION_BOUNDS.most:
        reading.fault(
            where,
            f"with the highest value the friction reaches {top * high / value:.2f} at its greatest",
            f"a curve, with all of its range, {FRICTION_BOUNDS.says}",
            given=given,
        )


def _valid(reading: Reading, row: Row, friction: Friction) -> tuple[float, float] | None:
    slow, fast = row["valid"]
    where, given = row.at("valid"), [slow.text, fast.text]
    right = '["30 km/h", "100 km/h"]'
    if SPEED.units[slow.unit] != SPEED.units[fast.unit]:
        reading.fault(where, "the two speeds are in different units", right, given=given)
    elif slow.number < 0 or fast.value > FASTEST_MPS:
        reading.fault(where, "these speeds are out of range", "0 to 400 km/h (248 mph)", given=given)
    elif not slow.number < fast.number:
        reading.fault(where, "the first speed is not slower than the second", right, given=given)
    elif friction.table and not friction.table[0][0] <= kmh(slow) < kmh(fast) <= friction.table[-1][0]:
        ends = f"{friction.table[0][0]:g} km/h to {friction.table[-1][0]:g} km/h"
        reading.fault(where, "these speeds go beyond the table of friction", f"within {ends}", given=given)
    return kmh(slow), kmh(fast)
