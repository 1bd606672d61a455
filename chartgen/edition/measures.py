"""What can be measured in an edition, in which units it may be written, and the fault of a text that is no quantity."""

from __future__ import annotations

from dataclasses import dataclass

LONGEST = 40
"""Characters: longer texts are no quantity, and would only slow the search for what is wrong with them."""


class NotAQuantityError(ValueError):
    """`problem` says what is wrong with the text, `right` shows how it is written, `near` the unit meant."""

    def __init__(self, problem: str, right: str, near: str | None = None) -> None:
        super().__init__(problem)
        self.problem = problem
        self.right = right
        self.near = near


@dataclass(frozen=True, slots=True, kw_only=True)
class Measure:
    """`units`: spelling in the file -> name for the units library; the first spelling of a name is the one shown.
    `inside`: the unit of the converted value. `example`: a right spelling."""

    name: str
    units: dict[str, str]
    inside: str
    example: str

    def shown_units(self) -> tuple[str, ...]:
        """One spelling a unit, in the order of the list."""
        first: dict[str, str] = {}
        for spelling, name in self.units.items():
            first.setdefault(name, spelling)
        return tuple(first.values())


SPEED = Measure(
    name="a speed",
    units={"mph": "mile/hour", "mile/hour": "mile/hour", "km/h": "kilometre/hour"},
    inside="metre/second",
    example="30 mph",
)
TIME = Measure(name="a time", units={"s": "second"}, inside="second", example="0.67 s")
DECELERATION = Measure(
    name="a deceleration",
    units={
        "m/s^2": "metre/second**2",
        "m/s²": "metre/second**2",
        "ft/s^2": "foot/second**2",
        "ft/s²": "foot/second**2",
        "g": "standard_gravity",
    },
    inside="metre/second**2",
    example="5 m/s^2",
)
LENGTH = Measure(name="a length", units={"m": "metre", "ft": "foot"}, inside="metre", example="16.5 m")
SIZE = Measure(
    name="a length on paper",
    units={"mm": "millimetre", "cm": "centimetre", "in": "inch"},
    inside="millimetre",
    example="3 mm",
)
FALL = Measure(
    name="a fall",
    units={"m": "metre", "cm": "centimetre", "mm": "millimetre", "ft": "foot", "in": "inch"},
    inside="metre",
    example="0.60 m",
)
DEPTH = Measure(name="a depth", units={"mm": "millimetre", "in": "inch"}, inside="millimetre", example="0.8 mm")
MASS = Measure(
    name="a mass",
    units={"kg": "kilogram", "t": "tonne", "lb": "pound"},
    inside="kilogram",
    example="1500 kg",
)
GRADE = Measure(name="a grade", units={"%": "percent"}, inside="one", example="-9 %")
DECAY = Measure(name="a speed constant", units={"km/h": "kilometre/hour"}, inside="kilometre/hour", example="110 km/h")

DEFINITIONS = (
    "metre = [length] = m",
    "second = [time] = s",
    "kilogram = [mass] = kg",
    "millimetre = metre / 1000 = mm",
    "centimetre = metre / 100 = cm",
    "kilometre = 1000 * metre = km",
    "hour = 3600 * second = h",
    "inch = 0.0254 * metre",
    "foot = 0.3048 * metre = ft",
    "mile = 5280 * foot = mi",
    "tonne = 1000 * kilogram",
    "pound = 0.45359237 * kilogram",
    "standard_gravity = 9.80665 * metre / second ** 2",
    "percent = 0.01 = _",
    "one = []",
)
"""For the units library: only the units of the lists above, each by its exact definition (international yard and pound
agreement of 1959; standard gravity of the 3rd CGPM, 1901). Its own list takes ten times as long to read."""
