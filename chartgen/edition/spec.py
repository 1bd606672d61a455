"""Every key of an edition file: what it means, how its value is written, between which bounds.

One description for three readers: the walk that reads a file, the JSON Schema for editors, and the list of keys in the
handbook. Plain data; nothing is read here.
"""

from __future__ import annotations

from chartgen.edition import measures as q
from chartgen.edition.key import Bounds, Key
from chartgen.edition.methods import METHODS
from chartgen.edition.spec_parts import DRIVER, FRICTION, KINDS, OTHER_KINDS, REACTION, SURFACE, TRAILER, VEHICLE

LAYOUTS_LATER = ("trail", "fan", "leftover")
PALETTES = ("gorse", "lichen", "bracken")


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
    "previous": Key(says="Figures (JSON) of the issue before, in the edition's folder.", form="text"),
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
    "adopt": Key(says="A published table, adopted as it stands: CSV in the edition's folder.", form="text"),
    "adopt_source": Key(says="Where the adopted table comes from; needed with it.", form="text"),
    "spread": Key(
        says="Percentiles of the stopping distance over reaction time and friction.", form="table", table="spread"
    ),
    "compare": Key(
        says="Whether the figures are set beside published tables of the same units and meaning; true if left out.",
        form="flag",
    ),
}
SPREAD: dict[str, Key] = {
    "samples": Key(
        says="Size of the sample, a power of two; 4096 if left out.",
        form="whole",
        bounds=Bounds(least=256, most=65_536, says="a power of two from 256 to 65536"),
    ),
    "seed": Key(
        says="Seed of the sample; 1 if left out.",
        form="whole",
        bounds=Bounds(least=0, most=2**31, says="0 to 2147483648"),
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
LIMIT: dict[str, Key] = {
    "name": Key(says="Where or for whom it holds, by language.", form="texts", needed=True),
    "speed": Key(says="The limit, in the edition's unit.", form="quantity", measure=q.SPEED, needed=True),
    "as_at": Key(says="Day on which it was looked up.", form="date", needed=True),
    "source": Key(says="Where it is laid down.", form="text", needed=True),
    "kinds": Key(says="Vehicles it is for; all if left out.", form="choices", choices=KINDS, meant=OTHER_KINDS),
}
QUESTIONS: dict[str, Key] = {
    "residual_from": Key(
        says="One of the speeds: where the vehicle that began at it has stopped, how fast are faster ones still going?",
        form="quantity",
        measure=q.SPEED,
    ),
    "sight": Key(
        says="Greatest speed that stops within this distance.",
        form="quantity",
        measure=q.LENGTH,
        bounds=Bounds(least=1, most=2000, says="1 m to 2000 m"),
    ),
    "headlight": Key(says="Greatest speed that stops within this headlight reach of the catalogue.", form="use"),
    "gap": Key(says="Following-gap rules of the catalogue, in seconds and in distance.", form="uses", count=(1, 12)),
    "driver": Key(says="Id: what every other driver's reaction time adds to the distance of this one.", form="use"),
    "surface": Key(says="Id: what every other surface adds to the distance on this one.", form="use"),
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
    "limit": Key(says="Speed limits in force.", form="tables", table="limit"),
    "questions": Key(says="What is asked beside the distances.", form="table", table="questions"),
    "poster": Key(says="Posters.", form="tables", table="poster"),
    "cards": Key(says="Cab cards.", form="table", table="cards"),
    "press": Key(says="For the print shop.", form="table", table="press"),
}
TABLES: dict[str, dict[str, Key]] = {
    "": ROOT, "edition": EDITION, "languages": LANGUAGES, "units": UNITS, "speeds": SPEEDS, "figures": FIGURES,
    "rounding": ROUNDING, "rules": RULES, "spread": SPREAD, "driver": DRIVER, "reaction": REACTION, "surface": SURFACE,
    "friction": FRICTION, "vehicle": VEHICLE, "trailer": TRAILER, "case": CASE, "questions": QUESTIONS,
    "limit": LIMIT,
    "poster": POSTER, "show": SHOW, "cards": CARDS, "press": PRESS,
}  # fmt: skip
