"""What an edition may pick by key: reaction times, surfaces and following-gap rules, each with its source.

A value nobody has opened the source of says so (`from_memory`); it is printed with that remark. None is labelled
correct: the publisher chooses.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import exp
from types import MappingProxyType

from chartgen.edition.model import Friction, Reaction, Source, Text

# exp(mu + z85 sigma), z85 = 1.036433...: computed here so that the preset needs no import.
_SURPRISE_MU, _SURPRISE_SIGMA = 0.17, 0.44
_SURPRISE_P85 = exp(_SURPRISE_MU + 1.0364333894937898 * _SURPRISE_SIGMA)

FOOT_M = 0.3048
MPH_MPS = 0.44704


@dataclass(frozen=True, slots=True, kw_only=True)
class DriverPreset:
    key: str
    name: Text
    reaction: Reaction
    source: Source


@dataclass(frozen=True, slots=True, kw_only=True)
class SurfacePreset:
    key: str
    name: Text
    friction: Friction
    state: str
    source: Source


@dataclass(frozen=True, slots=True, kw_only=True)
class GapRule:
    """Following gap in seconds: `fixed_s`, or `per_length_s_per_m` times the vehicle's length (one of them is None);
    `extra_s` more above `extra_above_mps`; the sum times `wet_factor` or `ice_factor` (snow counts as ice: longer)."""

    key: str
    name: Text
    fixed_s: float | None
    per_length_s_per_m: float | None
    extra_s: float
    extra_above_mps: float
    wet_factor: float
    ice_factor: float
    source: Source


def _driver(key: str, reaction: Reaction, source: Source, **names: str) -> DriverPreset:
    return DriverPreset(key=f"reaction/{key}", name=_names(**names), reaction=reaction, source=source)


def _names(**names: str) -> Text:
    return MappingProxyType({tag.replace("_", "-"): text for tag, text in names.items()})


DRIVERS: Mapping[str, DriverPreset] = MappingProxyType(
    {
        preset.key: preset
        for preset in (
            _driver(
                "alert",
                Reaction(time_s=0.67),
                Source(
                    text="The Highway Code (Great Britain), rule 126: its thinking distances in metres are 0.67 s of "
                    "travel (those in feet 0.68 s); held by its critics to fit only a highly alert driver",
                    kind="rule of thumb",
                ),
                en_GB="Highly alert", en_US="Highly alert", cy="Effro iawn", fr="Très attentif", ar="شديد الانتباه",
                es_US="Muy alerta",
            ),
            _driver(
                "teaching",
                Reaction(time_s=1.0),
                Source(text="Driving-school teaching in France and Germany: one second", kind="rule of thumb"),
                en_GB="One second, as taught", en_US="One second, as taught", cy="Un eiliad, fel y dysgir",
                fr="Une seconde, comme on l’enseigne", ar="ثانية واحدة كما تُدرَّس", es_US="Un segundo, como se enseña",
            ),
            _driver(
                "brake-lights",
                Reaction(time_s=1.25),
                Source(
                    text="Green (2000), Transportation Human Factors 2(3): mean for an unexpected but common signal, "
                    "such as brake lights",
                    kind="measured",
                ),
                en_GB="Unexpected but common", en_US="Unexpected but common", cy="Annisgwyl ond cyffredin",
                fr="Imprévu mais courant", ar="غير متوقع لكنه شائع", es_US="Inesperado pero común",
            ),
            _driver(
                "mean-surprise",
                Reaction(time_s=1.5),
                Source(
                    text="Green (2000), Transportation Human Factors 2(3): mean for a surprise; about half of drivers "
                    "need longer",
                    kind="measured",
                ),
                en_GB="Surprised, mean", en_US="Surprised, mean", cy="Wedi’i synnu, cymedr", fr="Surpris, moyenne",
                ar="متفاجئ، المتوسط", es_US="Sorprendido, promedio",
            ),
            _driver(
                "surprise",
                Reaction(time_s=_SURPRISE_P85, percentile="p85", mu=_SURPRISE_MU, sigma=_SURPRISE_SIGMA),
                Source(
                    text="Koppa, Human Factors, in Traffic Flow Theory (FHWA), chapter 3: lognormal brake reaction "
                    "time to a surprise, location 0.17, scale 0.44 of ln(t/s)",
                    kind="measured",
                    from_memory=True,
                ),
                en_GB="Surprised", en_US="Surprised", cy="Wedi’i synnu", fr="Surpris", ar="متفاجئ",
                es_US="Sorprendido",
            ),
            _driver(
                "road-design",
                Reaction(time_s=2.0),
                Source(
                    text="CD 109, Highway link design (National Highways): stopping sight distance allows 2 s",
                    kind="design value",
                ),
                en_GB="Road design, two seconds", en_US="Road design, two seconds", cy="Dylunio ffyrdd, dwy eiliad",
                fr="Conception routière, deux secondes", ar="تصميم الطرق، ثانيتان",
                es_US="Diseño vial, dos segundos",
            ),
            _driver(
                "sight-design",
                Reaction(time_s=2.5),
                Source(
                    text="AASHTO, A Policy on Geometric Design of Highways and Streets: 2.5 s, about the 90th "
                    "percentile of drivers",
                    kind="design value",
                ),
                en_GB="Sight design, 2.5 seconds", en_US="Sight design, 2.5 seconds",
                cy="Dylunio gwelededd, 2.5 eiliad", fr="Distance de visibilité, 2,5 secondes",
                ar="تصميم الرؤية، 2.5 ثانية", es_US="Diseño por visibilidad, 2.5 segundos",
            ),
        )
    }
)  # fmt: skip

SURFACES: Mapping[str, SurfacePreset] = MappingProxyType(
    {
        preset.key: preset
        for preset in (
            SurfacePreset(
                key="surface/wet-minimum",
                name=_names(en_GB="Wet road, suggested minimum", en_US="Wet road, suggested minimum",
                        cy="Ffordd wlyb, isafswm a awgrymir", fr="Chaussée mouillée, minimum suggéré",
                        ar="طريق مبلل، الحد الأدنى المقترح", es_US="Pavimento mojado, mínimo sugerido"),
                # Through 0.4 at 30 mile/h and 0.3 at 80 mile/h; both constants rounded to the side of less friction.
                friction=Friction(f60=0.383, sp_kmh=279.0),
                state="wet",
                source=Source(
                    text="Road Research Laboratory, report LR 131 (1968): suggested minimum braking force coefficient "
                    "0.4 at 30 mile/h and 0.3 at 80 mile/h; the curve through both is fitted here",
                    kind="measured",
                ),
            ),
        )
    }
)  # fmt: skip

GAP_RULES: Mapping[str, GapRule] = MappingProxyType(
    {
        rule.key: rule
        for rule in (
            GapRule(
                key="gap/per-length",
                name=_names(en_GB="One second for each 10 ft of vehicle, one more above 40 mph",
                        en_US="One second for each 10 ft of vehicle, one more above 40 mph",
                        cy="Un eiliad am bob 10 tr o gerbyd, ac un arall dros 40 mya",
                        fr="Une seconde par 10 ft de véhicule, une de plus au-dessus de 40 mph",
                        ar="ثانية لكل 10 أقدام من طول المركبة، وثانية إضافية فوق 40 ميلاً في الساعة",
                        es_US="Un segundo por cada 10 pies de vehículo y uno más a más de 40 mph"),
                fixed_s=None,
                per_length_s_per_m=1 / (10 * FOOT_M),
                extra_s=1.0,
                extra_above_mps=40 * MPH_MPS,
                wet_factor=1.0,
                ice_factor=1.0,
                source=Source(
                    text="Commercial driver’s license manual (United States), section on space ahead",
                    kind="rule of thumb",
                ),
            ),
            GapRule(
                key="gap/two-seconds",
                name=_names(en_GB="Two seconds; four on a wet road, twenty on ice or snow",
                        en_US="Two seconds; four on a wet road, twenty on ice or snow",
                        cy="Dwy eiliad; pedair ar ffordd wlyb, ugain ar rew neu eira",
                        fr="Deux secondes ; quatre sur chaussée mouillée, vingt sur glace ou neige",
                        ar="ثانيتان؛ أربع على طريق مبلل، وعشرون على الجليد أو الثلج",
                        es_US="Dos segundos; cuatro sobre mojado, veinte sobre hielo o nieve"),
                fixed_s=2.0,
                per_length_s_per_m=None,
                extra_s=0.0,
                extra_above_mps=0.0,
                wet_factor=2.0,
                ice_factor=10.0,
                source=Source(
                    text="The Highway Code (Great Britain), rule 126: at least two seconds, at least doubled on wet "
                    "roads and up to ten times greater on icy roads; ten is used",
                    kind="rule of thumb",
                ),
            ),
            GapRule(
                key="gap/two-seconds-law",
                name=_names(en_GB="Two seconds, by law", en_US="Two seconds, by law", cy="Dwy eiliad, yn ôl y gyfraith",
                        fr="Deux secondes, selon la loi", ar="ثانيتان بحكم القانون", es_US="Dos segundos, por ley"),
                fixed_s=2.0,
                per_length_s_per_m=None,
                extra_s=0.0,
                extra_above_mps=0.0,
                wet_factor=1.0,
                ice_factor=1.0,
                source=Source(
                    text="Code de la route (France), article R412-12: the distance covered in at least two seconds",
                    kind="statute",
                ),
            ),
        )
    }
)  # fmt: skip
