"""A headline's numbers are the table's, and each knows its row."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from chartgen.edition.model import Edition, Friction, Paper, Poster, Show, Source, Surface
from chartgen.errors import EditionFaults
from chartgen.figures.table import figures
from chartgen.language.headline import headline, headline_html, headline_pieces, headline_plain
from chartgen.language.load import languages
from tests.conftest import driver

MakeEdition = Callable[..., Edition]
A3 = Paper(name="A3", width_mm=297.0, height_mm=420.0)


def _edition(make_edition: MakeEdition, texts: dict[str, str], **changes: object) -> Edition:
    show = Show(drivers=("ready",), vehicle="car", surface="dry")
    poster = Poster(id="one", layout="columns", paper=A3, together=True, headline=texts, show=show, read_from_m=3.0)
    return make_edition(languages=tuple(texts), posters=(poster,), drivers=(driver(), driver("slow", 2.0)), **changes)


def test_numbers_come_from_the_table_as_the_language_writes_them(make_edition: MakeEdition) -> None:
    texts = {
        "en-GB": "At {speed:30 mph} you need {stopping:30 mph} to stop, tired {stopping:30 mph, driver=slow}.",
        "fr": "À {speed:30 mph}, il faut {stopping:30 mph}.",
    }
    edition = _edition(make_edition, texts)
    table = figures(edition)
    english, french = languages(edition)
    # 30 mph = 13.4112 m/s, mu 0.67, g 9.80665: reaction 0.8 s 10.73 m, 2 s 26.82 m; braking 13.69 m; each rounded up.
    assert headline(english, edition, table, edition.posters[0]) == (
        "At 30\u00a0mph you need 25\u00a0m to stop, tired 41\u00a0m."
    )
    assert headline(french, edition, table, edition.posters[0]) == "À 30\u202fmi/h, il faut 25\u202fm."
    assert headline_html(french, edition, table, edition.posters[0]) == (
        'À <bdi dir="ltr">30\u202fmi/h</bdi>, il faut <bdi dir="ltr">25\u202fm</bdi>.'
    )
    pieces = [p for p in headline_pieces(english, edition, table, edition.posters[0]) if p.quantity]
    assert [(p.quantity, p.text) for p in pieces] == [
        ("speed", "30\u00a0mph"), ("stopping", "25\u00a0m"), ("stopping", "41\u00a0m"),
    ]  # fmt: skip
    rows = table.table.set_index("row").loc[[p.row for p in pieces]]
    assert list(rows["driver"]) == ["ready", "ready", "slow"]
    assert list(rows["printed_stopping"]) == [25.0, 25.0, 41.0]


def test_parts_can_be_named(make_edition: MakeEdition) -> None:
    edition = _edition(make_edition, {"en-GB": "{reaction:20 mph}, {lag:20 mph}, {braking:20 mph}"})
    (english,) = languages(edition)
    # 20 mph = 8.9408 m/s: reaction 7.15 m, braking 6.08 m; each rounded up.
    assert headline(english, edition, figures(edition), edition.posters[0]) == "8\u00a0m, 0\u00a0m, 7\u00a0m"


def test_arabic_numbers_are_isolated(make_edition: MakeEdition) -> None:
    edition = _edition(make_edition, {"ar": "عند {speed:30 mph} تحتاج إلى {stopping:30 mph}."}, unit_style="own")
    (arabic,) = languages(edition)
    args = (arabic, edition, figures(edition), edition.posters[0])
    assert headline(*args) == "عند 30\u00a0ميل/س تحتاج إلى 25\u00a0م."
    assert headline_plain(*args) == "عند \u206730\u00a0ميل/س\u2069 تحتاج إلى \u206725\u00a0م\u2069."
    assert str(headline_html(*args)).count('<bdi dir="rtl">') == 2


def test_a_distance_that_does_not_exist_is_refused(make_edition: MakeEdition) -> None:
    ice = Surface(id="dry", name={"en-GB": "Ice"}, friction=Friction(mu=0.05), source=Source(text="invented"))
    text = {"en-GB": "{speed:30 mph} needs {stopping:30 mph} after {reaction:30 mph}, {braking:20 mph}"}
    edition = _edition(make_edition, text, surfaces=(ice,))
    poster = replace(edition.posters[0], show=replace(edition.posters[0].show, grade=-0.09))
    edition = replace(edition, posters=(poster,), cases=(replace(edition.cases[0], grades=(-0.09,)),))
    with pytest.raises(EditionFaults) as caught:
        headline(languages(edition)[0], edition, figures(edition), poster)
    where = 'the vehicle does not stop there: driver "ready", vehicle "car", surface "dry", at a grade of -9 %'
    assert [(f.key, f.problem, f.given) for f in caught.value.faults] == [
        ("poster[1].headline.en-GB", where, "{stopping:30 mph}"),
        ("poster[1].headline.en-GB", where, "{braking:20 mph}"),
    ]


def test_a_row_that_is_not_in_the_table_is_refused(make_edition: MakeEdition) -> None:
    edition = _edition(make_edition, {"en-GB": "{stopping:30 mph, driver=slow}"})
    edition = replace(edition, cases=(replace(edition.cases[0], drivers=("ready",)),))
    with pytest.raises(EditionFaults) as caught:
        headline(languages(edition)[0], edition, figures(edition), edition.posters[0])
    (fault,) = caught.value.faults
    assert fault.problem == (
        'there is no such row in the table: driver "slow", vehicle "car", surface "dry", at a grade of 0 %'
    )
