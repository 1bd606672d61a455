"""Every key of an edition file: what it means, how its value is written, between which bounds.

One description for three readers: the walk that reads a file, the JSON Schema for editors, and the list of keys in the
handbook. Plain data; nothing is read here.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from chartgen.edition import measures as q

Form = Literal[
    "text", "texts", "id", "use", "uses", "choice", "quantity", "quantities", "number", "numbers", "flag", "date",
    "tags", "size", "table", "tables",
]  # fmt: skip


@dataclass(frozen=True, slots=True, kw_only=True)
class Bounds:
    """Accepted from `least` to `most` (in the measure's inside unit; `least` itself too unless `above`); outside
    `usual` a warning. The sentences are for people, in the unit they write."""

    least: float
    most: float
    says: str
    above: bool = False
    usual: tuple[float, float] | None = None
    usual_says: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Key:
    """`table` beside a form other than table(s): the value may be such a table instead."""

    says: str
    form: Form
    needed: bool = False
    choices: tuple[str, ...] = ()
    later: tuple[str, ...] = ()
    """Values that are known but not made yet."""
    measure: q.Measure | None = None
    bounds: Bounds | None = None
    table: str = ""
    count: tuple[int, int] = (1, 200)
    """How many entries a list may have."""
    not_yet: str = ""
    """Set: the whole key is known but not made yet; the reason."""
    list_not_yet: str = ""
    """Set: as a list the value is known but not made yet; the reason."""
    meant: Mapping[str, str] = field(default_factory=dict)
    """Other words for the choices, as people may write them."""


REACTION_BOUNDS = Bounds(least=0.2, most=10, says="0.2 s to 10 s", usual=(0.3, 4), usual_says="0.3 s to 4 s")
FRICTION_BOUNDS = Bounds(
    least=0, above=True, most=1.5, says="above 0, up to 1.5", usual=(0, 1.2), usual_says="up to 1.2"
)
LAYOUTS_LATER = ("trail", "fan", "leftover")
KINDS = ("car", "van", "bus", "lorry", "articulated", "motorcycle", "bicycle")
OTHER_KINDS = {
    "truck": "lorry", "hgv": "lorry", "rigid": "lorry", "tractor-trailer": "articulated", "artic": "articulated",
    "semi": "articulated", "coach": "bus", "motorbike": "motorcycle", "bike": "bicycle", "cycle": "bicycle",
}  # fmt: skip
NEEDS_LIMIT = ("bus", "lorry", "articulated")
METHODS = ("first-principles", "sight-metric", "sight-us", "slide-metric", "slide-us")
PALETTES = ("gorse", "lichen", "bracken")
PERCENTILES = ("p50", "p85", "p95")


EDITION: dict[str, Key] = {
    "id": Key(says="Name of the folder under build/.", form="id", needed=True),
    "status": Key(
        says="Only a draft may miss translations.",
        form="choice",
        choices=("draft", "controlled", "uncontrolled", "superseded"),
        needed=True,
    ),
    "title": Key(says="Title, by language.", form="texts", needed=True),
    "publisher": Key(says="Who publishes the edition, by language.", form="texts", needed=True),
    "web_address": Key(says="Where the site will live; the QR code's target.", form="text"),
    "reference": Key(says="Document reference, printed on every sheet.", form="text", needed=True),
    "issue": Key(says="Number or name of the issue.", form="text", needed=True),
    "issued": Key(says="Date of issue.", form="date", needed=True),
    "review_by": Key(says="Date by which the edition is to be reviewed.", form="date"),
    "owner": Key(says="Who looks after the document.", form="text"),
    "approver": Key(says="Who approved it.", form="text"),
    "licence": Key(says="Under which licence others may use it.", form="text"),
    "palette": Key(says="Set of inks.", form="choice", choices=PALETTES),
}
LANGUAGES: dict[str, Key] = {
    "use": Key(says="BCP 47 tags; the first is a page's default language.", form="tags", needed=True, count=(1, 4)),
    "emphasis": Key(
        says="Whether the languages have equal weight.", form="choice", choices=("equal", "first"), later=("first",)
    ),
    "units": Key(
        says="How units are written: SI symbols, as the locale database has them, or from own wording.",
        form="choice",
        choices=("si", "locale", "own"),
    ),
}
SPEED_NAMES = {
    "mph": "mph", "mile/hour": "mph", "miles/hour": "mph", "mi/h": "mph",
    "km/h": "km/h", "kilometre/hour": "km/h", "kilometer/hour": "km/h",
}  # fmt: skip
DISTANCE_NAMES = {"m": "m", "metre": "m", "meter": "m", "ft": "ft", "foot": "ft", "feet": "ft"}
UNITS: dict[str, Key] = {
    "system": Key(says="metric (km/h, m), us (mph, ft) or uk (mph, m).", form="choice", choices=("metric", "us", "uk")),
    "speed": Key(says="Speed unit by hand.", form="choice", choices=tuple(SPEED_NAMES)),
    "distance": Key(says="Distance unit by hand.", form="choice", choices=tuple(DISTANCE_NAMES)),
    "also": Key(
        says="Second distance unit, converted from the unrounded value.", form="choice", choices=tuple(DISTANCE_NAMES)
    ),
}
SPEEDS: dict[str, Key] = {
    "steps": Key(says="The speeds, rising.", form="quantities", measure=q.SPEED),
    "from": Key(says="First speed.", form="quantity", measure=q.SPEED),
    "to": Key(says="Last speed; it must be one of the steps.", form="quantity", measure=q.SPEED),
    "by": Key(says="Distance from step to step.", form="quantity", measure=q.SPEED),
}
_STEP = Bounds(least=0, above=True, most=100, says="above 0, up to 100")
FIGURES: dict[str, Key] = {
    "method": Key(says="How distances are worked out.", form="choice", choices=METHODS),
    "rounding": Key(says="How figures are rounded.", form="table", table="rounding"),
    "adopt": Key(
        says="A published table, adopted as it stands.", form="text", not_yet="a published table cannot be adopted yet"
    ),
}
RULES: dict[str, Key] = {
    part: Key(says=f"Rule for the {part} distance.", form="choice", choices=("up", "nearest"))
    for part in ("reaction", "lag", "braking")
}
ROUNDING: dict[str, Key] = {
    "step": Key(says="In the printed distance unit.", form="quantity", measure=q.LENGTH),
    "also_step": Key(says="For units.also.", form="quantity", measure=q.LENGTH),
    "rule": Key(
        says="up (never short) or nearest; or by part.", form="choice", choices=("up", "nearest"), table="rules"
    ),
    "total": Key(says="How the total is made.", form="choice", choices=("sum-of-parts", "on-its-own", "controlled")),
}
PERCENTILE_KEYS: dict[str, Key] = {
    p: Key(
        says=f"{p[1:]} % of drivers react in at most this time.",
        form="quantity",
        measure=q.TIME,
        bounds=REACTION_BOUNDS,
    )
    for p in PERCENTILES
}
DRIVER: dict[str, Key] = {
    "id": Key(says="Name used in this file and in web addresses.", form="id", needed=True),
    "use": Key(says="A preset of the catalogue; keys beside it override it.", form="use"),
    "name": Key(says="Name, by language.", form="texts"),
    "reaction_time": Key(
        says="Perception included: one time, or a lognormal from two percentiles.",
        form="quantity",
        measure=q.TIME,
        bounds=REACTION_BOUNDS,
        table="percentiles",
    ),
    "percentile": Key(says="Which percentile is printed; p85 if left out.", form="choice", choices=PERCENTILES),
    "source": Key(says="Where the value comes from.", form="text"),
}
FRICTION: dict[str, Key] = {
    "f60": Key(says="Friction at 60 km/h.", form="number", bounds=FRICTION_BOUNDS, needed=True),
    "sp": Key(
        says="Speed constant: how fast friction falls.",
        form="quantity",
        measure=q.DECAY,
        bounds=Bounds(least=10, most=1000, says="10 km/h to 1000 km/h"),
        needed=True,
    ),
    "max": Key(says="Cap at low speeds.", form="number", bounds=FRICTION_BOUNDS),
    "table": Key(says="Friction by speed.", form="text", not_yet="friction from a table of speeds is not made yet"),
}
SURFACE: dict[str, Key] = {
    "id": Key(says="Name used in this file and in web addresses.", form="id", needed=True),
    "use": Key(says="A preset of the catalogue; keys beside it override it.", form="use"),
    "name": Key(says="Name, by language.", form="texts"),
    "state": Key(says="For the checks between surfaces.", form="choice", choices=("dry", "wet", "snow", "ice")),
    "friction": Key(
        says="A constant, or { f60, sp } falling with speed.",
        form="number",
        bounds=FRICTION_BOUNDS,
        table="friction",
        list_not_yet="friction from a list of speeds is not made yet",
    ),
    "friction_range": Key(
        says="Lowest and highest value of a constant.", form="numbers", bounds=FRICTION_BOUNDS, count=(2, 2)
    ),
    "source": Key(says="Where the value comes from.", form="text"),
}
VEHICLE: dict[str, Key] = {
    "id": Key(says="Name used in this file and in web addresses.", form="id", needed=True),
    "use": Key(
        says="A preset of the catalogue.", form="use", not_yet="the catalogue has no vehicles; write the values here"
    ),
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
        says="Overall length.",
        form="quantity",
        measure=q.LENGTH,
        bounds=Bounds(least=1, most=60, says="1 m to 60 m", usual=(1, 30), usual_says="up to 30 m"),
    ),
    "source": Key(says="Where the values come from.", form="text"),
}
GRADE_BOUNDS = Bounds(least=-0.30, most=0.30, says="-30 % to 30 %", usual=(-0.12, 0.12), usual_says="-12 % to 12 %")
CASE: dict[str, Key] = {
    "driver": Key(says="Ids of drivers.", form="uses", needed=True),
    "vehicle": Key(says="Ids of vehicles.", form="uses", needed=True),
    "surface": Key(says="Ids of surfaces.", form="uses", needed=True),
    "grade": Key(
        says="Uphill positive, rise over run; level if left out.",
        form="quantities",
        measure=q.GRADE,
        bounds=GRADE_BOUNDS,
    ),
    "drop": Key(
        says="Combinations to leave out.", form="text", not_yet="leaving single combinations out is not made yet"
    ),
}
SHOW: dict[str, Key] = {
    "driver": Key(says="One driver, or up to three side by side.", form="uses", count=(1, 3)),
    "vehicle": Key(says="Id of the vehicle.", form="use"),
    "surface": Key(says="Id of the surface.", form="use"),
    "grade": Key(says="Grade.", form="quantity", measure=q.GRADE, bounds=GRADE_BOUNDS),
    "speeds": Key(says="Which of the speeds to draw; all if left out.", form="quantities", measure=q.SPEED),
}
POSTER: dict[str, Key] = {
    "id": Key(says="Name of the file.", form="id"),
    "layout": Key(says="The drawing.", form="choice", choices=("columns", *LAYOUTS_LATER), later=LAYOUTS_LATER),
    "paper": Key(says='A5 to A0, Letter, Tabloid, or "600 mm x 900 mm".', form="size"),
    "languages": Key(says="All on one sheet, or one sheet a language.", form="choice", choices=("together", "apart")),
    "headline": Key(
        says="The claim, by language; its numbers are placeholders such as {stopping:70 mph}.",
        form="texts",
        needed=True,
    ),
    "show": Key(says="Which rows are drawn.", form="table", table="show"),
    "read_from": Key(
        says="Reading distance of the drawing's totals.",
        form="quantity",
        measure=q.LENGTH,
        bounds=Bounds(least=0.3, most=30, says="0.3 m to 30 m"),
    ),
}
CARDS: dict[str, Key] = {
    "size": Key(says="Size of a card.", form="size"),
    "sheet": Key(says="Sheet the cards are imposed on.", form="size"),
    "roster": Key(says="CSV in the edition's folder, one row a card.", form="text", needed=True),
    "driver": Key(says="Whose reaction time the cards use.", form="use"),
    "surfaces": Key(says="Surfaces on the card, in this order.", form="uses"),
    "grade": Key(says="Grade.", form="quantity", measure=q.GRADE, bounds=GRADE_BOUNDS),
    "gap": Key(says="Following-gap rule of the catalogue.", form="use"),
}
PRESS: dict[str, Key] = {
    "bleed": Key(
        says="Bleed of the press edition.",
        form="quantity",
        measure=q.SIZE,
        bounds=Bounds(least=0, most=10, says="0 mm to 10 mm"),
    ),
    "marks": Key(says="Crop marks.", form="flag"),
    "inks": Key(says="Inks of the press edition.", form="choice", choices=("cmyk", "rgb")),
    "profile": Key(says="Printing condition.", form="text"),
}
ROOT: dict[str, Key] = {
    "edition": Key(says="What it is, who stands behind it.", form="table", table="edition", needed=True),
    "languages": Key(says="In which languages.", form="table", table="languages", needed=True),
    "units": Key(says="In which units.", form="table", table="units", needed=True),
    "speeds": Key(says="For which speeds.", form="table", table="speeds", needed=True),
    "figures": Key(says="How figures are made.", form="table", table="figures"),
    "driver": Key(says="Reaction-time assumptions.", form="tables", table="driver", needed=True),
    "surface": Key(says="Surface conditions.", form="tables", table="surface", needed=True),
    "vehicle": Key(says="Vehicles.", form="tables", table="vehicle", needed=True),
    "case": Key(
        says="Which go together: the product of the lists; with none, everything.", form="tables", table="case"
    ),
    "poster": Key(says="Posters.", form="tables", table="poster"),
    "cards": Key(says="Cab cards.", form="table", table="cards"),
    "press": Key(says="For the print shop.", form="table", table="press"),
}
TABLES: dict[str, dict[str, Key]] = {
    "": ROOT, "edition": EDITION, "languages": LANGUAGES, "units": UNITS, "speeds": SPEEDS, "figures": FIGURES,
    "rounding": ROUNDING, "rules": RULES, "driver": DRIVER, "percentiles": PERCENTILE_KEYS, "surface": SURFACE,
    "friction": FRICTION, "vehicle": VEHICLE, "case": CASE, "poster": POSTER, "show": SHOW, "cards": CARDS,
    "press": PRESS,
}  # fmt: skip
