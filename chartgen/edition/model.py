"""The frozen `Edition`: what every floor above the front door reads. SI inside; names carry units.

Plain records only: no units library, no parsing, no files. `load.py` makes them.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import date
from typing import Literal

Text = Mapping[str, str]
"""A text by language tag, e.g. ``{"en-GB": "Dry asphalt", "cy": "Asffalt sych"}``."""

Status = Literal["draft", "controlled", "uncontrolled", "superseded"]
Kind = Literal["car", "van", "bus", "lorry", "articulated", "motorcycle", "bicycle"]
Method = Literal[
    "first-principles",
    "sight-metric",
    "sight-us",
    "slide-metric",
    "slide-us",
    "square-metric",
    "square-half-metric",
    "square-feet",
    "adopted",
]
SpeedUnit = Literal["mph", "km/h"]
DistanceUnit = Literal["m", "ft"]
Rule = Literal["up", "nearest"]
Total = Literal["sum-of-parts", "on-its-own", "controlled"]
Part = Literal["reaction", "lag", "braking"]
PARTS: tuple[Part, ...] = ("reaction", "lag", "braking")


@dataclass(frozen=True, slots=True, kw_only=True)
class Source:
    """Where a value comes from. `kind`: measured, statute, design value, rule of thumb, chosen by us, publisher."""

    text: str
    kind: str = "publisher"
    from_memory: bool = False
    """True: nobody has opened the source; said in the catalogue and on the method page."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Reaction:
    """A reaction time, perception included. `time_s` is the one printed: the fixed time, or the lognormal's
    percentile `percentile`. For a lognormal, `mu` and `sigma` are of ln(t/s)."""

    time_s: float
    percentile: Literal["p50", "p85", "p95"] | None = None
    mu: float | None = None
    sigma: float | None = None
    perception_s: float | None = None
    """The share of `time_s` that passes before the foot moves, where the source keeps the two apart."""
    drop_m: float | None = None
    """Fall of the dropped rule from which a group measured its own time, t = sqrt(2 s/g)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Driver:
    id: str
    name: Text
    reaction: Reaction
    source: Source
    preset: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Friction:
    """Constant: `mu`. Falling with speed (PIARC / ASTM E1960): `f60`, `sp_kmh`, optional cap `max_mu`,
    F(S) = F60 exp((60 - S)/Sp), S in km/h. By speed: `table`, pairs of km/h and friction, rising in speed.

    `low`..`high`: the stated range of a constant, or of the friction at 60 km/h of the other two forms, whose whole
    curve is then scaled. `texture_mm`, `sn0`, `png_h_per_mile`: what `f60` and `sp_kmh` were worked out from.
    """

    mu: float | None = None
    f60: float | None = None
    sp_kmh: float | None = None
    max_mu: float | None = None
    low: float | None = None
    high: float | None = None
    table: tuple[tuple[float, float], ...] | None = None
    texture_mm: float | None = None
    """Mean profile depth MPD; then Sp = 14.2 + 89.7 MPD."""
    sn0: float | None = None
    """Skid number at zero speed (Penn State): SN(V) = SN0 exp(-PNG V / 100)."""
    png_h_per_mile: float | None = None
    """Percentage normalised gradient of that fall, in % an mph."""
    valid_kmh: tuple[float, float] | None = None
    """Speeds the source speaks of; a row faster than the second is a gap with its reason. None: a table's own ends."""

    @property
    def constant(self) -> bool:
        return self.mu is not None


@dataclass(frozen=True, slots=True, kw_only=True)
class Surface:
    id: str
    name: Text
    friction: Friction
    source: Source
    state: Literal["dry", "wet", "snow", "ice"] | None = None
    """Taken from the key `state`, or from the id where it begins with one of these words; feeds the warnings."""
    preset: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Trailer:
    """What the vehicle draws. An unbraked one is stopped by the vehicle's brakes alone: their part of the
    deceleration is then m/(m + m_t) of what it would be."""

    length_m: float
    braked: bool = True
    mass_kg: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Vehicle:
    id: str
    kind: Kind
    name: Text
    load: Literal["laden", "unladen"] | None = None
    unladen_of: str | None = None
    """Id of the laden vehicle this one is the unladen state of (key `unladen_of`, or the same id stem)."""
    max_deceleration_mps2: float | None = None
    brake_lag_s: float = 0.0
    build_up_s: float = 0.0
    brake_efficiency: float = 1.0
    length_m: float | None = None
    """Without the trailer."""
    source: Source | None = None
    preset: str | None = None
    mass_kg: float | None = None
    trailer: Trailer | None = None
    test_figure: bool = False
    """True: its deceleration is that of a brake test (a regulation's test track), not of a road."""

    @property
    def whole_length_m(self) -> float | None:
        """Vehicle and trailer: what a following gap by length goes by."""
        if self.length_m is None or self.trailer is None:
            return self.length_m
        return self.length_m + self.trailer.length_m

    @property
    def brake_share(self) -> float:
        """Mass with brakes over whole mass: 1 without an unbraked trailer."""
        trailer = self.trailer
        if trailer is None or trailer.braked or self.mass_kg is None or trailer.mass_kg is None:
            return 1.0
        return self.mass_kg / (self.mass_kg + trailer.mass_kg)


@dataclass(frozen=True, slots=True, kw_only=True)
class Case:
    """The product of its lists; ids, and grades as fractions (uphill +)."""

    drivers: tuple[str, ...]
    vehicles: tuple[str, ...]
    surfaces: tuple[str, ...]
    grades: tuple[float, ...] = (0.0,)


@dataclass(frozen=True, slots=True, kw_only=True)
class Rounding:
    """Step in the printed distance unit; a rule for each part; how the total is made."""

    step: float = 1.0
    also_step: float = 1.0
    rules: Mapping[Part, Rule] = field(default_factory=lambda: dict.fromkeys(PARTS, "up"))
    total: Total = "sum-of-parts"

    @property
    def never_short(self) -> bool:
        """True where every printed figure is at least the exact one."""
        return all(r == "up" for r in self.rules.values()) and self.total != "controlled"


@dataclass(frozen=True, slots=True, kw_only=True)
class Questions:
    """What is asked of the figures beside the distances. None or empty: not asked.

    `residual_from`: a speed of the edition, printed; where the vehicle that began at it has stopped, how fast are the
    faster ones still going? `sight_m`: greatest speed that stops within it. `headlight`: key of a reach in the
    catalogue; greatest speed that stops within it. `gaps`: keys of following-gap rules, shown in seconds and distance;
    greatest speed that stops within the first of them. `driver`, `surface`: ids; what every other driver's reaction
    time, every other surface adds to the distance of that one.
    """

    residual_from: float | None = None
    sight_m: float | None = None
    headlight: str | None = None
    gaps: tuple[str, ...] = ()
    driver: str | None = None
    surface: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Spread:
    """Percentiles of the stopping distance over reaction and friction, from a seeded quasi-Monte-Carlo sample."""

    samples: int = 4096
    """A power of two."""
    seed: int = 1


@dataclass(frozen=True, slots=True, kw_only=True)
class SpeedLimit:
    """A speed limit in force on the day `as_at`, for the strip of limits."""

    name: Text
    speed: float
    """In `speed_unit`, as given."""
    as_at: date
    source: Source
    kinds: tuple[Kind, ...] = ()
    """Vehicles it is for; empty: all."""


@dataclass(frozen=True, slots=True, kw_only=True)
class AdoptedRow:
    """One row of a published table, in SI, with its numbers as printed in the table's own unit. `braking`,
    `reaction`, `lag`: None where the table does not give them apart."""

    driver: str
    vehicle: str
    surface: str
    grade: float
    speed: float
    """In the edition's speed unit."""
    stopping: float
    reaction: float | None = None
    lag: float | None = None
    braking: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Adopted:
    """A published table taken as it stands: file name, source, unit of its distances, rows."""

    file: str
    source: Source
    distance_unit: DistanceUnit
    rows: tuple[AdoptedRow, ...]
    test_figure: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Previous:
    """The issue before this one, as its public figures (JSON) stood: what the page of changes compares with."""

    file: str
    figures: Mapping[str, object]


@dataclass(frozen=True, slots=True, kw_only=True)
class Paper:
    """A sheet, in mm as it is held (`width_mm` x `height_mm`)."""

    name: str
    width_mm: float
    height_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Show:
    """Which rows a poster draws: one vehicle, surface, grade, and one to three drivers side by side."""

    drivers: tuple[str, ...]
    vehicle: str
    surface: str
    grade: float = 0.0
    speeds: tuple[float, ...] | None = None
    """Printed speeds to draw; None: all the edition's."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Poster:
    id: str
    layout: Literal["columns"]
    paper: Paper
    together: bool
    """True: all languages on one sheet; False: one sheet a language."""
    headline: Text
    show: Show
    read_from_m: float


@dataclass(frozen=True, slots=True, kw_only=True)
class RosterRow:
    vehicle_id: str
    """The fleet's own name of the vehicle, printed on the card."""
    vehicle: str
    """Id of a `[[vehicle]]` (the laden one where there are two)."""
    languages: tuple[str, ...]
    depot: str
    holder: str
    copy_no: str
    line: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Cards:
    size: Paper
    sheet: Paper
    roster: tuple[RosterRow, ...]
    driver: str
    surfaces: tuple[str, ...]
    grade: float
    gap: str
    """Key of a following-gap rule of the catalogue, e.g. ``gap/per-length``."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Edition:
    """Everything one publisher puts out together."""

    id: str
    file: str
    """The edition file as the user named it; for messages only, never for output."""
    status: Status
    title: Text
    publisher: Text
    web_address: str | None
    reference: str
    issue: str
    issued: date
    review_by: date | None
    owner: str
    approver: str
    licence: str
    languages: tuple[str, ...]
    emphasis: Literal["equal", "first"]
    unit_style: Literal["si", "locale", "own"]
    speed_unit: SpeedUnit
    distance_unit: DistanceUnit
    also_unit: DistanceUnit | None
    speeds: tuple[float, ...]
    """In `speed_unit`, as given: exact for printing."""
    speeds_mps: tuple[float, ...]
    method: Method
    rounding: Rounding
    drivers: tuple[Driver, ...]
    surfaces: tuple[Surface, ...]
    vehicles: tuple[Vehicle, ...]
    cases: tuple[Case, ...]
    posters: tuple[Poster, ...]
    cards: Cards | None
    own_words: Mapping[str, Mapping[str, str]]
    """Own wording by language tag, then word key; laid over the built-in word lists."""
    palette: str
    warnings: tuple[str, ...]
    """What is unusual but allowed, found while reading; in English, each a full sentence with its place."""
    unmade: tuple[str, ...]
    """Parts of the edition that parse but that this version does not make yet, by key path with the reason.
    `press` refuses the edition with a fault for each; `figures` does not need them."""
    questions: Questions = Questions()
    spread: Spread | None = None
    limits: tuple[SpeedLimit, ...] = ()
    adopted: Adopted | None = None
    previous: Previous | None = None
    compare: bool = True
    """Set the figures beside published tables of the same units and meaning, on a page of the site."""

    def driver(self, id: str) -> Driver:
        return next(d for d in self.drivers if d.id == id)

    def surface(self, id: str) -> Surface:
        return next(s for s in self.surfaces if s.id == id)

    def vehicle(self, id: str) -> Vehicle:
        return next(v for v in self.vehicles if v.id == id)
