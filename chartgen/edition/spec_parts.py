"""The keys of drivers, surfaces and vehicles: what an edition assumes. See `spec.py` for the other sections."""

from __future__ import annotations

from chartgen.edition import measures as q
from chartgen.edition.key import Bounds, Key

REACTION_BOUNDS = Bounds(least=0.2, most=10, says="0.2 s to 10 s", usual=(0.3, 4), usual_says="0.3 s to 4 s")
FRICTION_BOUNDS = Bounds(
    least=0,
    above=True,
    most=1.5,
    says="above 0, up to 1.5",
    usual=(0, 1.2),
    usual_says="up to 1.2",
    end_says="with a friction of 0 nothing would ever stop, and no distance could be printed",
)
KINDS = ("car", "van", "bus", "lorry", "articulated", "motorcycle", "bicycle")
OTHER_KINDS = {
    "truck": "lorry", "hgv": "lorry", "rigid": "lorry", "tractor-trailer": "articulated", "artic": "articulated",
    "semi": "articulated", "coach": "bus", "motorbike": "motorcycle", "bike": "bicycle", "cycle": "bicycle",
}  # fmt: skip
NEEDS_LIMIT = ("bus", "lorry", "articulated")
PERCENTILES = ("p50", "p85", "p95")


PERCENTILE_KEYS: dict[str, Key] = {
    p: Key(
        says=f"{p[1:]} % of drivers react in at most this time.",
        form="quantity",
        measure=q.TIME,
        bounds=REACTION_BOUNDS,
    )
    for p in PERCENTILES
}
REACTION: dict[str, Key] = {
    **PERCENTILE_KEYS,
    "drop": Key(
        says="Fall of a dropped rule until it was caught: a group's own measurement, t = sqrt(2 s/g).",
        form="quantity",
        measure=q.FALL,
        bounds=Bounds(least=0, above=True, most=10, says="above 0 m, up to 10 m"),
    ),
}
DRIVER: dict[str, Key] = {
    "id": Key(says="Name used in this file and in web addresses.", form="id", needed=True),
    "use": Key(says="A preset of the catalogue; keys beside it override it.", form="use"),
    "name": Key(says="Name, by language.", form="texts"),
    "reaction_time": Key(
        says="Perception included: one time, a lognormal from two percentiles, or the fall of a dropped rule.",
        form="quantity",
        measure=q.TIME,
        bounds=REACTION_BOUNDS,
        table="reaction",
    ),
    "perception": Key(
        says="Share of the reaction time that passes before the foot moves, where the source keeps the two apart.",
        form="quantity",
        measure=q.TIME,
        bounds=Bounds(least=0, above=True, most=10, says="above 0 s, shorter than reaction_time"),
    ),
    "percentile": Key(says="Which percentile is printed; p85 if left out.", form="choice", choices=PERCENTILES),
    "source": Key(says="Where the value comes from.", form="text"),
}
FRICTION: dict[str, Key] = {
    "f60": Key(says="Friction at 60 km/h.", form="number", bounds=FRICTION_BOUNDS),
    "sp": Key(
        says="Speed constant: how fast friction falls.",
        form="quantity",
        measure=q.DECAY,
        bounds=Bounds(least=10, most=1000, says="10 km/h to 1000 km/h"),
    ),
    "texture": Key(
        says="Mean profile depth, instead of sp: Sp = 14.2 + 89.7 MPD.",
        form="quantity",
        measure=q.DEPTH,
        bounds=Bounds(least=0.1, most=5, says="0.1 mm to 5 mm"),
    ),
    "sn0": Key(
        says="Skid number at zero speed (Penn State), 100 times the friction.",
        form="number",
        bounds=Bounds(
            least=0,
            above=True,
            most=150,
            says="above 0, up to 150",
            usual=(5, 120),
            usual_says="5 to 120",
            end_says="with a friction of 0 nothing would ever stop, and no distance could be printed",
        ),
    ),
    "png": Key(
        says="Percentage normalised gradient: by how many percent the skid number falls from one mph to the next.",
        form="number",
        bounds=Bounds(least=0.06, most=6, says="0.06 to 6, in % an mph", usual=(0.1, 2.5), usual_says="0.1 to 2.5"),
    ),
    "max": Key(says="Cap at low speeds, of a friction that falls with speed.", form="number", bounds=FRICTION_BOUNDS),
    "table": Key(
        says="Friction by speed, pairs in rising order; a smooth curve without overshoot between.",
        form="pairs",
        measure=q.SPEED,
        bounds=FRICTION_BOUNDS,
        count=(2, 50),
    ),
}
SURFACE: dict[str, Key] = {
    "id": Key(says="Name used in this file and in web addresses.", form="id", needed=True),
    "use": Key(says="A preset of the catalogue; keys beside it override it.", form="use"),
    "name": Key(says="Name, by language.", form="texts"),
    "state": Key(says="For the checks between surfaces.", form="choice", choices=("dry", "wet", "snow", "ice")),
    "friction": Key(
        says="A constant, or by speed: { f60, sp }, { f60, texture }, { sn0, png } or { table }.",
        form="number",
        bounds=FRICTION_BOUNDS,
        table="friction",
        as_list='{ table = [["30 km/h", 0.62], ["100 km/h", 0.45]] }',
    ),
    "friction_range": Key(
        says="Lowest and highest value: of a constant, or of the friction at 60 km/h; the whole curve goes with it.",
        form="numbers",
        bounds=FRICTION_BOUNDS,
        count=(2, 2),
    ),
    "valid": Key(
        says="Slowest and fastest speed that the source speaks of; a faster row gets no figure, but its reason.",
        form="quantities",
        measure=q.SPEED,
        count=(2, 2),
    ),
    "source": Key(says="Where the value comes from.", form="text"),
}
_MASS = Bounds(least=1, most=200_000, says="1 kg to 200 t")
TRAILER: dict[str, Key] = {
    "length": Key(
        says="Length that it adds, drawbar included.",
        form="quantity",
        measure=q.LENGTH,
        bounds=Bounds(least=0.5, most=59, says="0.5 m to 59 m"),
        needed=True,
    ),
    "braked": Key(says="Whether it has brakes of its own.", form="flag", needed=True),
    "mass": Key(says="Its whole mass.", form="quantity", measure=q.MASS, bounds=_MASS),
}
VEHICLE: dict[str, Key] = {
    "id": Key(says="Name used in this file and in web addresses.", form="id", needed=True),
    "use": Key(says="A preset of the catalogue; keys beside it override it.", form="use"),
    "kind": Key(says="What it is.", form="choice", choices=KINDS, meant=OTHER_KINDS),
    "name": Key(says="Name, by language.", form="texts"),
    "load": Key(says="Laden or unladen.", form="choice", choices=("laden", "unladen")),
    "unladen_of": Key(says="Id of the laden vehicle this one is the unladen state of.", form="use"),
    "max_deceleration": Key(
        says="The vehicle's own limit on the level.",
        form="quantity",
        measure=q.DECELERATION,
        bounds=Bounds(
            least=0.5, most=15, says="0.5 m/s^2 to 15 m/s^2", usual=(2, 10), usual_says="2 m/s^2 to 10 m/s^2"
        ),
    ),
    "brake_lag": Key(
        says="Time from the pedal until anything slows.",
        form="quantity",
        measure=q.TIME,
        bounds=Bounds(least=0, most=3, says="0 s to 3 s"),
    ),
    "build_up": Key(
        says="Time in which the deceleration then rises to its full value.",
        form="quantity",
        measure=q.TIME,
        bounds=Bounds(least=0, most=3, says="0 s to 3 s", usual=(0, 1), usual_says="up to 1 s"),
    ),
    "brake_efficiency": Key(
        says="Share of the friction that the brakes use.",
        form="number",
        bounds=Bounds(least=0, above=True, most=1, says="above 0, up to 1", usual=(0.4, 1), usual_says="0.4 to 1"),
    ),
    "length": Key(
        says="Overall length, without the trailer.",
        form="quantity",
        measure=q.LENGTH,
        bounds=Bounds(least=1, most=60, says="1 m to 60 m", usual=(1, 30), usual_says="up to 30 m"),
    ),
    "mass": Key(says="Mass without the trailer.", form="quantity", measure=q.MASS, bounds=_MASS),
    "trailer": Key(says="What it draws.", form="table", table="trailer"),
    "source": Key(says="Where the values come from.", form="text"),
}
