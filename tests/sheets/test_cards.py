"""Cab cards: every vehicle has its card in its driver's language, and every card says all that it must."""

from __future__ import annotations

import io
import re
from collections.abc import Callable, Iterator
from dataclasses import replace

import page
import pikepdf
import pytest

from chartgen.charts.fonts import digit_ratio
from chartgen.edition.load import load_edition
from chartgen.edition.model import Cards, Edition, Friction, RosterRow
from chartgen.edition.paper import paper
from chartgen.errors import EditionFaults
from chartgen.figures.record import Figures
from chartgen.figures.table import figures
from chartgen.language.load import Language, languages
from chartgen.press.preflight import check_pdf
from chartgen.press.readback import read
from chartgen.press.render import render
from chartgen.sheets import card_plan
from chartgen.sheets.cards import cards
from chartgen.sheets.imposition import grid
from chartgen.sheets.sheet import Sheet

Made = tuple[Edition, Figures, tuple[Language, ...], Sheet, bytes]


@pytest.fixture(scope="module")
def made() -> Made:
    """The fleet's cards, printed once for all tests."""
    edition = load_edition("quillane")
    table, spoken = figures(edition), languages(edition)
    assert edition.cards is not None
    one_depot = tuple(replace(row, depot="Ridge yard") for row in edition.cards.roster)
    edition = replace(edition, cards=replace(edition.cards, roster=one_depot))
    (sheet,) = cards(edition, table, spoken)
    return edition, table, spoken, sheet, render(sheet)


def test_each_depot_has_a_document_of_its_own() -> None:
    edition = load_edition("quillane")
    assert edition.cards is not None
    sheets = cards(edition, figures(edition), languages(edition))
    assert [sheet.path for sheet in sheets] == [
        "sheets/cab-cards-ridge-yard.pdf",
        "sheets/cab-cards-stonefold.pdf",
        "sheets/cab-cards-low-ferry.pdf",
    ]
    for sheet, depot in zip(sheets, dict.fromkeys(row.depot for row in edition.cards.roster), strict=True):
        assert depot in sheet.title
        there = [row.vehicle_id for row in edition.cards.roster if row.vehicle_id in sheet.facts]
        assert there == [row.vehicle_id for row in edition.cards.roster if row.depot == depot]


def texts(data: bytes) -> Iterator[str]:
    """The text of each page."""
    reading = read(data)
    for number in range(1, len(reading.sizes_mm) + 1):
        yield " ".join(piece.text for piece in reading.pieces if piece.page == number)


def test_a_card_for_every_vehicle_in_each_of_its_languages(made: Made) -> None:
    edition, _, _, sheet, data = made
    assert edition.cards is not None
    assert len(edition.cards.roster) == 12
    wanted = sum(len(row.languages) for row in edition.cards.roster)
    fronts = " ".join(text for i, text in enumerate(texts(data)) if i % 2 == 0)
    for row in edition.cards.roster:
        assert len(re.findall(rf"{row.vehicle_id}\b", fronts)) == len(row.languages)
    assert sheet.pages == 2 * -(-wanted // 4)


def test_the_finished_file_passes_the_preflight(made: Made) -> None:
    _, table, spoken, sheet, data = made
    assert check_pdf(data, sheet, table, spoken) == ()


def test_a_changed_table_is_seen_on_the_cards(made: Made) -> None:
    _, table, spoken, sheet, data = made
    first = next(figure for figure in sheet.inked if figure.quantity == "printed_stopping")
    altered = table.table.copy()
    altered.loc[altered.index[first.row], "printed_stopping"] += 1
    codes = {finding.code for finding in check_pdf(data, sheet, replace(table, table=altered), spoken)}
    assert {"preflight.number-missing", "preflight.number-misplaced"} <= codes


def test_the_cards_are_accessible(made: Made) -> None:
    """PDF/UA-1 by an independent checker."""
    report = page.validate_pdf_bytes(made[4], profile="ua1")
    assert report.is_compliant, [failure.message for failure in report.failures]


def test_every_side_has_the_caution_and_the_copy_number(made: Made) -> None:
    edition, _, spoken, _, data = made
    assert edition.cards is not None
    for number, text in enumerate(texts(data)):
        first = 4 * (number // 2)
        cards_here = [(row, tag) for row in edition.cards.roster for tag in row.languages][first : first + 4]
        squeezed = re.sub(r"\s", "", text)
        for row, tag in cards_here:
            language = next(one for one in spoken if one.tag == tag)
            for key in ("worked", "no_guarantee", "law", "design"):
                sentence = re.sub(r"\s", "", language.t(f"caution.{key}"))
                assert squeezed.count(sentence) == sum(1 for _, other in cards_here if other == tag)
            assert re.search(rf"{language.t('control.copy')}\s*{row.copy_no}\b", text)


def test_the_gap_is_on_the_front_in_seconds(made: Made) -> None:
    _, table, _, sheet, _ = made
    gaps = [figure for figure in sheet.inked if figure.quantity == "printed_gap_s" and figure.boxes]
    assert gaps
    assert all(number % 2 == 1 for figure in gaps for number, _ in figure.boxes)
    # 68 ft of vehicle by the rule of one second for each 10 ft: 6.8 s, up to 7; one more above 40 mph.
    articulated = {float(table.table["speed"].iloc[f.row]): table.table["printed_gap_s"].iloc[f.row] for f in gaps
                   if table.table["vehicle"].iloc[f.row] == "articulated-laden"}  # fmt: skip
    assert articulated == {25.0: 7.0, 35.0: 7.0, 45.0: 8.0, 55.0: 8.0, 65.0: 8.0}


def test_lag_stands_apart_and_no_empty_vehicle_is_given_less(made: Made) -> None:
    _, table, _, sheet, _ = made
    assert any(figure.quantity == "printed_lag" for figure in sheet.inked)
    empty, loaded = totals(table, sheet)
    assert len(empty) == len(loaded) > 0
    assert all(distance >= loaded[key] for key, distance in empty.items())


Totals = dict[tuple[str, str, float], float]


def totals(table: Figures, sheet: Sheet) -> tuple[Totals, Totals]:
    """Printed totals of (empty, loaded) vehicles, by (loaded vehicle, surface, speed)."""
    rows = {figure.row for figure in sheet.inked if figure.quantity == "printed_stopping" and figure.boxes}
    found: tuple[Totals, Totals] = ({}, {})
    for row in table.table.iloc[sorted(rows)].to_dict("records"):
        load = 0 if row["vehicle"].endswith("-unladen") else 1
        key = (row["vehicle"].replace("unladen", "laden"), row["surface"], float(row["speed"]))
        found[load][key] = float(row["printed_stopping"])
    return found


def test_a_back_lies_behind_its_front(made: Made) -> None:
    """Turned over the long edge, each back stands mirrored about the sheet's middle, to 0.01 mm."""
    edition = made[0]
    assert edition.cards is not None
    laid = grid(edition.cards.size, edition.cards.sheet)
    assert laid is not None
    for index in range(laid.places):
        front, back = laid.front(index), laid.back(index)
        assert back[0] + laid.card.width_mm == pytest.approx(laid.sheet.width_mm - front[0], abs=0.01)
        assert back[1] == pytest.approx(front[1], abs=0.01)


def test_in_the_finished_file_each_card_stands_behind_itself(made: Made) -> None:
    """The vehicle's id, read from the file: as far from its card's left edge on the back as on the front."""
    edition, _, _, sheet, data = made
    assert edition.cards is not None
    width, card = edition.cards.sheet.width_mm, edition.cards.size.width_mm
    ids = {row.vehicle_id for row in edition.cards.roster}
    places: dict[int, list[tuple[str, float, float]]] = {}
    for piece in read(data).pieces:
        if piece.text.strip() in ids:
            places.setdefault(piece.page, []).append((piece.text.strip(), piece.left, piece.top))
    assert sum(map(len, places.values())) == 2 * sum(len(row.languages) for row in edition.cards.roster)
    for number in range(1, sheet.pages, 2):
        for name, left, top in places[number]:
            column, inside = divmod(left, card)
            # Turned over the long edge, what lay between x and x + card lies between width - x - card and width - x.
            behind = width - (column + 1) * card + inside
            there = [x for other, x, y in places[number + 1] if other == name and abs(y - top) <= 0.01]
            assert min(abs(x - behind) for x in there) <= 0.01


def test_every_side_says_how_to_use_it_what_it_rests_on_and_how_to_print_it(made: Made) -> None:
    edition, _, spoken, _, data = made
    assert edition.cards is not None
    for number, text in enumerate(texts(data)):
        first = 4 * (number // 2)
        tags = [tag for row in edition.cards.roster for tag in row.languages][first : first + 4]
        squeezed = re.sub(r"\s", "", text)
        for language in spoken:
            for key in ("card.read_parked", "card.not_windscreen"):
                assert squeezed.count(re.sub(r"\s", "", language.t(key))) == tags.count(language.tag)
            level = re.sub(r"\s", "", language.t("assume.level"))
            assert squeezed.count(level) == tags.count(language.tag)
            side = language.t("card.back" if number % 2 else "card.front")
            assert f"{side} · {language.t('sheet.two_sided')}" in text


def test_the_bar_says_its_scale(made: Made) -> None:
    """The longest bar is as wide as the type area, and the card says how far that is."""
    _, _, spoken, sheet, data = made
    english = next(language for language in spoken if language.tag == "en-US")
    front = next(iter(texts(data)))
    said = english.t("card.scale", distance=english.distance(550, "ft"))
    assert re.sub(r"\s", "", said) in re.sub(r"\s", "", front)
    bars = [float(x) for x in re.findall(r'class="at bar" style="left:7\.0mm;width:([\d.]+)mm', sheet.html)]
    assert max(bars) == pytest.approx(105 - 14)
    # Articulated, loaded, dry: 144, 225, 320, 428 and 550 ft on one scale.
    assert bars[:5] == pytest.approx([91 * feet / 550 for feet in (144, 225, 320, 428, 550)])


def test_digits_and_small_print_keep_their_sizes(made: Made) -> None:
    """Totals at least 8 mm, other figures at least 3.7 mm (in-cab size), small print at least 6 pt."""
    html = made[3].html
    sizes: dict[str, set[float]] = {}
    for kind, size in re.findall(r'class="at in (front|back)" style="top:[\d.]+mm;font-size:([\d.]+)mm"', html):
        sizes.setdefault(kind, set()).add(float(size) * digit_ratio("text-bold"))
    assert min(sizes["front"]) >= 8.0
    assert min(sizes["back"]) >= 3.7
    small = [float(size) for size in re.findall(r'<article[^>]*font-size:([\d.]+)mm"', html)]
    assert len(small) == 2 * 14
    assert min(small) * 72 / 25.4 >= 6.0


Change = Callable[[Edition], Edition]


def printed(change: Change) -> tuple[Figures, tuple[Language, ...], Sheet, str]:
    """The cards of the first two vehicles of each kind after a change to the edition, through press and preflight."""
    edition = load_edition("quillane")
    assert edition.cards is not None
    kinds = ("articulated-laden", "rigid-laden")
    first = [next(row for row in edition.cards.roster if row.vehicle == kind) for kind in kinds]
    rows = tuple(replace(row, depot="", languages=("en-US", "es-US")) for row in first)
    edition = change(replace(edition, cards=replace(edition.cards, roster=rows)))
    table, spoken = figures(edition), languages(edition)
    (sheet,) = cards(edition, table, spoken)
    data = render(sheet)
    assert check_pdf(data, sheet, table, spoken) == ()
    return table, spoken, sheet, re.sub(r"\s+", " ", " ".join(texts(data)))


def with_vehicle(edition: Edition, id: str, **values: float) -> Edition:
    vehicles = tuple(replace(v, **values) if v.id == id else v for v in edition.vehicles)  # type: ignore[arg-type]
    return replace(edition, vehicles=vehicles)


def test_a_shorter_empty_distance_is_never_printed_as_an_allowance() -> None:
    def change(edition: Edition) -> Edition:
        return with_vehicle(edition, "articulated-unladen", max_deceleration_mps2=6.5, brake_efficiency=1.0)

    table, spoken, sheet, text = printed(change)
    worked_out = table.table[table.table["driver"] == "late-shift"].set_index(["vehicle", "surface", "speed"])
    total = worked_out["printed_stopping"]
    assert (total["articulated-unladen"] < total["articulated-laden"]).all()
    rows = {figure.row for figure in sheet.inked if figure.boxes and figure.quantity.startswith("printed_")}
    assert "articulated-unladen" not in set(table.table["vehicle"].iloc[sorted(rows)])
    twice = [f for f in sheet.inked if f.quantity == "printed_stopping" and f.lang == "en-US" and f.boxes]
    articulated = [f for f in twice if table.table["vehicle"].iloc[f.row] == "articulated-laden"]
    assert [len(f.boxes) for f in articulated] == [2] * 15  # loaded and empty, five speeds on three surfaces
    for language in spoken:
        assert language.t("card.unladen_less") in text
        assert language.t("card.unladen_more") in text  # the rigid one
        assert language.t("notice.unladen-shorter") not in text


def test_an_empty_vehicle_has_its_own_lag_where_it_differs() -> None:
    table, spoken, sheet, text = printed(lambda edition: with_vehicle(edition, "rigid-unladen", brake_lag_s=0.9))
    lags = {f.row for f in sheet.inked if f.quantity == "printed_lag"}
    of = table.table.iloc[sorted(lags)].groupby("vehicle")["speed"].count()
    assert dict(of) == {"articulated-laden": 5, "rigid-laden": 5, "rigid-unladen": 5}
    english = spoken[0]
    assert f"{english.t('part.lag')}: {english.t('word.unladen')}" in text


def with_ice(edition: Edition) -> Edition:
    ice = replace(
        edition.surface("packed-snow"), id="ice", name={"en-US": "Ice", "es-US": "Hielo"}, state="ice",
        friction=Friction(mu=0.08),
    )  # fmt: skip
    assert edition.cards is not None
    return replace(
        edition,
        surfaces=(*edition.surfaces, ice),
        cases=tuple(replace(case, surfaces=(*case.surfaces, "ice")) for case in edition.cases),
        cards=replace(edition.cards, surfaces=(*edition.cards.surfaces, "ice")),
    )


def test_no_surface_is_left_out() -> None:
    table, _, sheet, text = printed(with_ice)
    rows = {figure.row for figure in sheet.inked if figure.quantity == "printed_stopping" and figure.boxes}
    assert set(table.table["surface"].iloc[sorted(rows)]) == {"dry", "wet", "packed-snow", "ice"}
    assert "Ice (ft)" in text


def test_surfaces_that_have_no_room_are_a_fault_and_not_left_out() -> None:
    def change(edition: Edition) -> Edition:
        edition = with_ice(edition)
        assert edition.cards is not None
        more = replace(edition.surface("ice"), id="clear-ice", name={"en-US": "Clear ice", "es-US": "Hielo liso"})
        return replace(
            edition,
            surfaces=(*edition.surfaces, more),
            cases=tuple(replace(case, surfaces=(*case.surfaces, "clear-ice")) for case in edition.cases),
            cards=replace(edition.cards, surfaces=(*edition.cards.surfaces, "clear-ice")),
        )

    with pytest.raises(EditionFaults) as caught:
        printed(change)
    (fault,) = caught.value.faults
    assert fault.key == "cards.surfaces"
    assert fault.given == "5 surfaces, 9 speeds"
    assert "3.7 mm" in str(fault.allowed)


def test_a_vehicle_that_does_not_stop_is_said_to_with_the_reason() -> None:
    def change(edition: Edition) -> Edition:
        assert edition.cards is not None
        ice = replace(edition.surface("packed-snow"), friction=Friction(mu=0.05))
        return replace(
            edition,
            surfaces=(*edition.surfaces[:2], ice),
            cases=tuple(replace(case, grades=(-0.09,)) for case in edition.cases),
            cards=replace(edition.cards, grade=-0.09),
        )

    _, spoken, _, text = printed(change)
    for language in spoken:
        # Said once over both loads: five speeds, two vehicles.
        assert text.count(f" {language.t('verdict.does_not_stop')} ") >= 10
        assert language.t("verdict.never_at_rest") in text
        assert language.t("notice.does-not-stop") in text


def test_right_to_left_cards_mirror_their_columns() -> None:
    edition = load_edition("sarvelle")
    roster = tuple(
        RosterRow(
            vehicle_id=f"SR {line}",
            vehicle=vehicle,
            languages=("ar", "fr"),
            depot="",
            holder="",
            copy_no=str(line),
            line=line,
        )
        for line, vehicle in enumerate(("autocar", "voiture"), 2)
    )
    edition = replace(
        edition,
        cards=Cards(size=paper("A6"), sheet=paper("A4"), roster=roster, driver="surpris", grade=-0.09,
                    surfaces=("seche", "mouillee", "glace"), gap="gap/two-seconds"),
    )  # fmt: skip
    table, spoken = figures(edition), languages(edition)
    (sheet,) = cards(edition, table, spoken)
    data = render(sheet)
    assert check_pdf(data, sheet, table, spoken) == ()
    report = page.validate_pdf_bytes(data, profile="ua1")
    assert report.is_compliant, [failure.message for failure in report.failures]
    boxes = {f.lang: f.boxes[0][1] for f in sheet.inked if f.quantity == "speed" and f.boxes}
    assert boxes["ar"][0] % 105 > 105 / 2 > boxes["fr"][0] % 105


def test_the_document_keeps_its_tags_and_its_two_languages(made: Made) -> None:
    with pikepdf.open(io.BytesIO(made[4])) as pdf:
        assert pdf.Root.MarkInfo.Marked
        assert pdf.Root.ViewerPreferences.Duplex == "/DuplexFlipLongEdge"
        assert pdf.Root.ViewerPreferences.PrintScaling == "/None"
        assert pdf.Root.ViewerPreferences.DisplayDocTitle
        tags = {
            str(item.get("/Lang")) for item in pdf.objects if isinstance(item, pikepdf.Dictionary) and "/Lang" in item
        }
    assert {"en-US", "es-US"} <= tags


@pytest.mark.parametrize("speeds", range(1, 30))
def test_the_highest_speed_is_always_on_the_card(speeds: int) -> None:
    shown = card_plan.chosen(speeds)
    assert shown[-1] == speeds - 1
    assert 1 <= len(shown) <= card_plan.MOST_ROWS
    assert list(shown) == sorted(set(shown))
