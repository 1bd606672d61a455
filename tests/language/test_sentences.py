"""Assumption line, caution, notices: whole sentences in six languages, from the rows' own values."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from chartgen.edition.model import (
    PARTS,
    Driver,
    Edition,
    Friction,
    Part,
    Reaction,
    Rounding,
    Rule,
    Source,
    Surface,
    Vehicle,
)
from chartgen.figures.assume import Assumption, assumptions
from chartgen.figures.table import figures, select
from chartgen.language.bidi import stripped
from chartgen.language.load import Language, languages
from chartgen.language.sentences import (
    assumption_fragments,
    assumption_line,
    assumption_line_html,
    assumption_line_plain,
    caution_sentences,
    notice_sentence,
    notice_sentence_html,
)
from tests.conftest import surface

MakeEdition = Callable[..., Edition]
TAGS = ("en-GB", "en-US", "cy", "fr", "ar", "es-US")


def _spaces(text: str) -> str:
    """As it is read: no-break spaces as plain ones."""
    return text.replace("\u00a0", " ").replace("\u202f", " ")


def _assumed(edition: Edition, grade: float = 0.0) -> Assumption:
    table = figures(edition)
    return assumptions(edition, select(table, grade=grade), table.table)


def _lorry(make_edition: MakeEdition, **changes: object) -> Edition:
    lorry = Vehicle(
        id="lorry", kind="lorry", name={"en-GB": "Lorry"}, load="laden", max_deceleration_mps2=5.0, brake_lag_s=0.4,
        build_up_s=0.3, brake_efficiency=0.85,
    )  # fmt: skip
    return make_edition(languages=TAGS, vehicles=(lorry,), **changes)


# The wanted lines were put together by hand from the word lists and the values of the edition above.
WANTED = {
    "en-GB": "Reaction: 0.8 s · Brake lag: 0.4 s, build-up: 0.3 s · Braking: friction 0.67, at most 5 m/s² · "
    "Brake efficiency: 85% · Surface: Dry · Slope: level · Load: laden · Rounded up to 1 m",
    "en-US": "Reaction: 0.8 s · Brake lag: 0.4 s, build-up: 0.3 s · Braking: friction 0.67, at most 5 m/s² · "
    "Brake efficiency: 85% · Surface: Dry · Grade: level · Load: loaded · Rounded up to 1 m",
    "cy": "Ymateb: 0.8 s · Oedi’r brêcs: 0.4 s, cynnydd y grym: 0.3 s · Brecio: ffrithiant 0.67, 5 m/s² ar y mwyaf · "
    "Effeithlonrwydd: 85% · Wyneb: Dry · Graddiant: gwastad · Cerbyd: llwythog · Talgrynnu i fyny: 1 m",
    "fr": "Réaction : 0,8 s · Freins : réponse 0,4 s, pression en 0,3 s · Freinage : adhérence 0,67, 5 m/s² au plus "
    "· Efficacité freins : 85 % · Chaussée : Dry · Pente : à plat · Véhicule : en charge · Arrondi au supérieur : 1 m",
    "ar": "رد الفعل: 0.8 s · تأخر الفرامل: 0.4 s، التصاعد: 0.3 s · الفرملة: احتكاك 0.67، 5 m/s² على الأكثر · "
    "كفاءة الفرامل: 85% · سطح الطريق: Dry · ميل الطريق: مستوٍ · المركبة: محمّلة · مقرّب إلى الأعلى: 1 m",
    "es-US": "Reacción: 0.8 s · Retraso de frenos: 0.4 s, aumento: 0.3 s · Frenado: fricción 0.67, máximo 5 m/s² · "
    "Eficiencia frenos: 85% · Pavimento: Dry · Pendiente: plano · Vehículo: cargado · Redondeo hacia arriba: 1 m",
}


def test_the_whole_line_in_every_language(make_edition: MakeEdition) -> None:
    edition = _lorry(make_edition)
    assumed = _assumed(edition)
    for language in languages(edition):
        assert _spaces(assumption_line(language, edition, assumed)) == WANTED[language.tag]


def test_three_ways_of_writing_the_line_say_the_same(make_edition: MakeEdition) -> None:
    edition = _lorry(make_edition)
    assumed = _assumed(edition)
    for language in languages(edition):
        line = assumption_line(language, edition, assumed)
        assert stripped(assumption_line_plain(language, edition, assumed)) == line
        markup = assumption_line_html(language, edition, assumed)
        assert markup.striptags() == " ".join(line.split())
        assert markup.count("<bdi") == 9  # each value, once


def _fragment(language: Language, edition: Edition, assumed: Assumption, start: str) -> str:
    (found,) = [
        language.t(key, **values)
        for key, values in assumption_fragments(language, edition, assumed)
        if key.startswith(start)
    ]
    return _spaces(found)


def _english(edition: Edition) -> Language:
    return languages(edition)[0]


@pytest.mark.parametrize(("grade", "says"), [
    (0.0, "Slope: level"), (0.06, "Slope: 6% uphill"), (-0.09, "Slope: 9% downhill"), (-0.055, "Slope: 5.5% downhill"),
])  # fmt: skip
def test_the_slope_is_said_in_words_and_never_with_a_sign(make_edition: MakeEdition, grade: float, says: str) -> None:
    edition = make_edition()
    assumed = replace(_assumed(edition), grade=grade)
    key = "assume.level" if grade == 0 else "assume.uphill" if grade > 0 else "assume.downhill"
    assert _fragment(_english(edition), edition, assumed, key) == says


@pytest.mark.parametrize(("lag", "rise", "says"), [
    (0.0, 0.0, "Brake lag: none"), (0.4, 0.0, "Brake lag: 0.4 s"), (0.4, 0.3, "Brake lag: 0.4 s, build-up: 0.3 s"),
    (0.0, 0.3, "Brake lag: 0 s, build-up: 0.3 s"),
])  # fmt: skip
def test_the_lag(make_edition: MakeEdition, lag: float, rise: float, says: str) -> None:
    edition = make_edition()
    assumed = replace(_assumed(edition), brake_lag_s=lag, build_up_s=rise)
    line = _spaces(assumption_line(_english(edition), edition, assumed))
    assert f" · {says} · " in line


def test_a_percentile_is_said_with_the_share_of_drivers_that_are_quicker(make_edition: MakeEdition) -> None:
    spread = Reaction(time_s=1.6, percentile="p85", mu=0.0953, sigma=0.3615)
    driver = Driver(id="survey", name={"en-GB": "Survey"}, reaction=spread, source=Source(text="invented"))
    edition = make_edition(drivers=(driver,))
    said = _fragment(_english(edition), edition, _assumed(edition), "assume.reaction")
    assert said == "Reaction: 1.6 s (85% of drivers are quicker)"


def test_friction_that_falls_is_said_at_both_ends(make_edition: MakeEdition) -> None:
    edition = make_edition(surfaces=(surface("wet", f60=0.35, sp_kmh=110.0),))
    said = _fragment(_english(edition), edition, _assumed(edition), "assume.friction")
    # F(S) = F60 exp((60 - S)/Sp): 0.35 exp((60 - 32.19)/110) = 0.4507, 0.35 exp((60 - 48.28)/110) = 0.3894
    assert said == "Braking: friction 0.45 at 20 mph, 0.39 at 30 mph"


def test_a_limit_is_in_feet_where_the_distances_are(make_edition: MakeEdition) -> None:
    edition = _lorry(make_edition, distance_unit="ft")
    said = _fragment(_english(edition), edition, _assumed(edition), "assume.friction")
    assert said == "Braking: friction 0.67, at most 16.4 ft/s²"  # 5 / 0.3048 = 16.40


def test_a_design_method_names_itself_and_its_one_deceleration(make_edition: MakeEdition) -> None:
    car = Vehicle(id="car", kind="car", name={"en-GB": "Car"}, max_deceleration_mps2=3.4)
    edition = make_edition(method="sight-metric", speed_unit="km/h", speeds=(50.0, 60.0), vehicles=(car,))
    line = _spaces(assumption_line(_english(edition), edition, _assumed(edition)))
    assert " · Braking: 3.4 m/s² · " in line
    assert line.endswith(" · Method: design manual formula, metric")


def test_every_line_has_the_seven_fields(make_edition: MakeEdition) -> None:
    edition = make_edition()
    keys = [key.split(".")[1] for key, _ in assumption_fragments(_english(edition), edition, _assumed(edition))]
    assert keys == ["reaction", "no_lag", "friction", "surface", "level", "load_not_stated", "rounding_up"]


def test_rounding_that_can_shorten_warns(make_edition: MakeEdition) -> None:
    rules: dict[Part, Rule] = dict.fromkeys(PARTS, "nearest")
    edition = make_edition(rounding=Rounding(rules=rules, total="on-its-own"), also_unit="ft")
    assumed = _assumed(edition)
    short = assumed.rounding.short
    assert set(short) == {"m", "ft"}
    said = _fragment(_english(edition), edition, assumed, "assume.rounding")
    assert said == f"Rounded to the nearest 1 m / 1 ft; may be up to {short['m']:g} m / {short['ft']:g} ft short"
    none = replace(assumed, rounding=replace(assumed.rounding, short={}))
    said = _fragment(_english(edition), edition, none, "assume.rounding")
    assert said == "Rounded to 1 m / 1 ft; no figure here is short"
    (notice,) = [n for n in figures(edition).notices if n.code == "may-be-short"]
    sentence = _spaces(notice_sentence(_english(edition), notice))
    assert sentence == f"Figures are rounded and may be up to {short['m']:g} m / {short['ft']:g} ft short."


def test_mixed_rules_warn_too(make_edition: MakeEdition) -> None:
    rules: dict[Part, Rule] = {"reaction": "nearest", "lag": "up", "braking": "up"}
    edition = make_edition(rounding=Rounding(rules=rules))
    assumed = replace(_assumed(edition), rounding=replace(_assumed(edition).rounding, short={"m": 0.5}))
    said = _fragment(_english(edition), edition, assumed, "assume.rounding")
    assert said == "Rounded by part to 1 m; may be up to 0.5 m short"


def test_a_notice_for_the_reader_has_a_sentence_in_every_language(make_edition: MakeEdition) -> None:
    ice = Surface(id="ice", name={"en-GB": "Ice"}, friction=Friction(mu=0.05), source=Source(text="invented"))
    edition = make_edition(languages=TAGS, surfaces=(ice,))
    edition = replace(edition, cases=(replace(edition.cases[0], grades=(-0.09,)),))
    (notice,) = [n for n in figures(edition).notices if n.code == "does-not-stop"]
    found = {language.tag: notice_sentence(language, notice) for language in languages(edition)}
    assert found["en-GB"] == "At some speeds, surfaces and slopes shown here the vehicle does not stop."
    assert len(set(found.values())) == len(TAGS)
    for language in languages(edition):
        assert notice_sentence_html(language, notice).striptags() == _spaces(found[language.tag])


@pytest.mark.parametrize("code", ["may-be-short", "does-not-stop", "unladen-shorter", "wet-shorter"])
def test_every_notice_code_of_the_reader_has_its_word(make_edition: MakeEdition, code: str) -> None:
    for language in languages(make_edition(languages=TAGS)):
        assert f"notice.{code}" in language.words


def test_the_caution_is_four_sentences_in_every_language(make_edition: MakeEdition) -> None:
    said = {language.tag: caution_sentences(language) for language in languages(make_edition(languages=TAGS))}
    assert said["en-GB"] == (
        (
            "These figures are worked out, not measured. They serve planning and education, under the assumptions "
            "stated here."
        ),
        "They are no guarantee for any driver, vehicle or road: leave more room.",
        "The national code and local law come first.",
        "The design of roads is work for licensed professionals.",
    )
    for tag, sentences in said.items():
        assert len(sentences) == 4
        assert all(sentence.endswith(".") for sentence in sentences), tag
