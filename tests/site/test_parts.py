"""Pieces of the pages that no demonstration edition shows on its own."""

from __future__ import annotations

import base64
import io
import re
from collections.abc import Callable
from functools import cache

import pytest
from fontTools.ttLib import TTFont
from markupsafe import escape

from chartgen.charts.canvas import read_pieces
from chartgen.charts.inks import HOUSE, contrast
from chartgen.edition.model import Driver, Edition, Reaction, Source, Surface, Vehicle
from chartgen.language.load import languages
from chartgen.language.numbers import MINUS
from chartgen.site import assets, opening
from chartgen.site.check import check_pages
from chartgen.site.compact import compact
from chartgen.site.reading import read_page
from tests.conftest import driver, surface
from tests.site.made import make

MakeEdition = Callable[..., Edition]
TAGS = ("en-GB", "cy", "en-US", "es-US", "fr", "ar")


def test_ice_on_a_downgrade_says_does_not_stop(make_edition: MakeEdition) -> None:
    """Friction 0.05 on a 9 % downgrade: the slope pulls with 0.09 g and more than the tyres hold."""
    from chartgen.edition.model import Case

    case = Case(drivers=("ready",), vehicles=("car",), surfaces=("ice",), grades=(-0.09, 0.0))
    it = make(make_edition(surfaces=(surface("ice", mu=0.05),), cases=(case,)))
    page = read_page(it.files["en-GB/surface-ice.html"])
    verdict = it.languages[0].t("verdict.does_not_stop")
    downhill, level = page.tables
    assert [row.cells[-1].text for row in downhill.rows[1:]] == [verdict, verdict]
    assert all(verdict not in row.cells[-1].text for row in level.rows[1:])
    reasons = {
        key: it.languages[0].words[f"verdict.{key}"].split("{")[0] for key in ("too_little_friction", "never_at_rest")
    }
    assert any(reason in page.text for reason in reasons.values())
    assert it.languages[0].t("notice.does-not-stop") in page.text
    assert "does not stop" in page.charts[0].told
    assert check_pages(it.files, it.edition, it.figures, it.languages) == ()


def test_lag_column_only_where_there_is_a_lag(make_edition: MakeEdition) -> None:
    bus = Vehicle(id="bus", kind="bus", name={"en-GB": "Bus"}, max_deceleration_mps2=5.0, brake_lag_s=0.4)
    car = Vehicle(id="car", kind="car", name={"en-GB": "Car"})
    it = make(make_edition(vehicles=(car, bus), also_unit="ft"))
    heads = {
        name: [cell.quantity for cell in read_page(it.files[f"en-GB/vehicle-{name}.html"]).tables[0].rows[0].cells]
        for name in ("car", "bus")
    }
    assert "printed_lag" not in heads["car"]
    assert heads["bus"] == [
        "printed_speed", "printed_reaction", "printed_lag", "printed_braking", "printed_stopping",
        "printed_also_stopping", "stopping_time_s",
    ]  # fmt: skip


def test_four_drivers_make_two_charts(make_edition: MakeEdition) -> None:
    drivers = tuple(driver(f"driver-{n}", 0.5 + 0.2 * n) for n in range(4))
    it = make(make_edition(drivers=drivers))
    page = read_page(it.files["en-GB/vehicle-car.html"])
    assert len(page.charts) == 2
    assert len(page.tables) == 4
    assert check_pages(it.files, it.edition, it.figures, it.languages) == ()


def test_text_of_an_edition_is_never_markup(make_edition: MakeEdition) -> None:
    nasty = 'x"><script>alert(1)</script>&amp; <b>'
    text = {"en-GB": nasty}
    it = make(
        make_edition(
            title=text,
            publisher=text,
            owner=nasty,
            licence=nasty,
            reference=nasty,
            drivers=(Driver(id="d", name=text, reaction=Reaction(time_s=1.0), source=Source(text=nasty)),),
            surfaces=(Surface(id="s", name=text, friction=surface().friction, source=Source(text=nasty)),),
            vehicles=(Vehicle(id="v", kind="car", name=text),),
        )
    )
    assert check_pages(it.files, it.edition, it.figures, it.languages) == ()
    for path, data in it.html.items():
        assert b"<script" not in data, path
        assert str(escape(nasty)).encode() in data, path
    listed = opening.opening({"tried": opening.about(it.edition, it.languages)})
    assert b"<script" not in listed.data


def test_name_in_another_language_is_tagged(make_edition: MakeEdition) -> None:
    it = make(make_edition(languages=("en-GB", "ar")))
    page = it.files["ar/vehicle-car.html"].decode()
    assert '<span lang="en-GB" dir="auto">Tarnholt Vale Road Safety Forum</span>' in page
    assert read_page(page.encode()).dir == "rtl"


def test_claim_without_a_poster_is_the_greatest_speed(make_edition: MakeEdition) -> None:
    it = make(make_edition())
    words = read_page(it.files["en-GB/index.html"]).text
    last = it.figures.table.iloc[-1]
    assert it.languages[0].distance(last["printed_stopping"], "m") in words
    assert it.languages[0].speed(30, "mph") in words


@pytest.mark.parametrize("name", sorted(HOUSE))
def test_the_dark_keeps_the_contrast_of_the_light(name: str) -> None:
    """WCAG 2.2, 1.4.3 and 1.4.11; where the light palette itself stays below 4.5 (on the lag), the dark is no worse."""
    light, dark = assets.light_inks(name), assets.DARK[name]
    assert contrast(dark["type"], dark["paper"]) >= 7
    assert contrast(dark["accent"], dark["paper"]) >= 4.5
    for text, ground in (("type", "reaction"), ("paper", "braking")):
        assert contrast(dark[text], dark[ground]) >= 4.5
    assert contrast(dark["paper"], dark["lag"]) >= max(3.0, contrast(light["paper"], light["lag"]))
    assert contrast(dark["lag"], dark["braking"]) >= 3.0
    # The outline of the reaction part is type; it is what must stand out, as in the light.
    assert contrast(dark["type"], dark["paper"]) >= 3.0


@pytest.mark.parametrize("name", sorted(HOUSE))
def test_claim_is_readable_in_accent(name: str) -> None:
    """Large bold text needs 3:1 (WCAG 2.2, 1.4.3); the claim is at least 21.6 px bold."""
    inks = assets.light_inks(name)
    assert contrast(inks["accent"], inks["paper"]) >= 3.0
    assert contrast(inks["type"], inks["paper"]) >= 7


@cache
def _covered(css: str) -> dict[str, frozenset[int]]:
    """Characters by family, from the fonts inside a style sheet."""
    found: dict[str, set[int]] = {}
    for family, data in re.findall(r'font-family:"([^"]+)".*?base64,([A-Za-z0-9+/=]+)\)', css):
        with TTFont(io.BytesIO(base64.b64decode(data))) as font:
            mapped = set(font.getBestCmap())
        found[family] = found[family] & mapped if family in found else mapped
    return {family: frozenset(codes) for family, codes in found.items()}


@pytest.mark.parametrize("tag", TAGS)
def test_web_fonts_cover_every_word(make_edition: MakeEdition, tag: str) -> None:
    """Every character of the word list, the numbers and the units, in each face that can set it."""
    files = {f.path: f.data.decode() for f in assets.assets("gorse", [tag]) if f.path.endswith(".css")}
    css = "".join(data for path, data in files.items() if "fonts-" in path)
    (language,) = languages(make_edition(languages=(tag,)))
    words = "".join(language.words.values()) + language.own_name
    units = "".join(language.with_unit("0123456789", unit) for unit in ("mph", "km/h", "m", "ft", "s", "m/s²", "ft/s²"))
    numbers = language.number(-1234567.89, 2) + language.percent(0.5) + MINUS
    covered = _covered(css)
    plain = "".join(text for key, text in language.words.items() if not key.startswith("method."))
    stacks = [(["Chartgen Narrow", "Chartgen Text"], words), (["Chartgen Text"], words), (["Chartgen Narrow"], plain)]
    if tag == "ar":
        stacks = [(["Chartgen Arabic", "Chartgen Narrow", "Chartgen Text"], words)]
    for stack, letters in stacks:
        have = set().union(*(covered[family] for family in stack))
        missing = {c for c in letters + units + numbers if ord(c) not in have and c not in "\n\u2066\u2067\u2069"}
        assert not missing, (stack, {f"U+{ord(c):04X} {c}" for c in missing})


def test_fonts_carry_names_of_their_own_and_their_licence() -> None:
    """OFL 1.1, condition 3: no modified version may use the reserved font name."""
    from chartgen.resources import templates

    folder = templates() / "site" / "fonts"
    fonts = sorted(folder.glob("*.woff2"))
    assert len(fonts) == 10
    for path in fonts:
        with TTFont(path) as font:
            shown = [str(r) for r in font["name"].names if r.nameID not in (0, 13, 14)]
        assert not [name for name in shown if "Plex" in name or "Tajawal" in name], path
        assert any("Open Font License" in str(r) for r in font["name"].names)
    assert "Reserved Font Name" in (folder / "OFL.txt").read_text(encoding="utf-8")


def test_compact_marks_are_the_same_shapes() -> None:
    marks = (
        '<svg viewBox="0 0 9 9"><path class="ink-type" fill="#000000" '
        'd="M0.004 1.25L3.5 1.25L3.5 2.999L0.004 2.999zM4 4L5 4.5L4.333 6zM7 7L7.001 7L7 7.001z"/></svg>'
    )
    short = compact(marks)
    assert len(short) < len(marks)
    assert 'd="M0 1.25h3.5v1.75h-3.5zM4 4l1 .5-.67 1.5z"' in short.replace("l-.67", "-.67")
    with pytest.raises(ValueError, match="only M, L and z"):
        compact('<svg><path d="M0 0C1 1 2 2 3 3z"/></svg>')


def test_compact_keeps_every_point_of_a_real_drawing(make_edition: MakeEdition) -> None:
    """To 0.005 mm, half of a hundredth; the path data is read by a small interpreter of its own."""
    from chartgen.charts.columns import columns
    from chartgen.charts.inks import palette
    from chartgen.figures.table import figures

    edition = make_edition()
    rows = figures(edition).table
    drawing = columns(
        [rows], languages=languages(edition), palette=palette("gorse"), width_mm=180, height_mm=104, direction="ltr",
        distance_unit="m", speed_unit="mph", medium="web",
    )  # fmt: skip
    exact = [ring for _, rings in read_pieces(drawing.marks_svg) for ring in rings]
    short = [ring for data in re.findall(r' d="([^"]*)"', compact(drawing.marks_svg)) for ring in _rings(data)]
    assert len(short) == len(exact)
    for one, other in zip(exact, short, strict=True):
        for (x0, y0), (x1, y1) in zip(one, other, strict=True):
            assert abs(x0 - x1) <= 0.005 + 1e-9
            assert abs(y0 - y1) <= 0.005 + 1e-9


def _rings(data: str) -> list[list[tuple[float, float]]]:
    """SVG 2, path data: M absolute, l h v relative, z closes."""
    rings: list[list[tuple[float, float]]] = []
    x = y = 0.0
    for command, rest in re.findall(r"([Mlhvz])([^Mlhvz]*)", data):
        numbers = [float(n) for n in re.findall(r"-?(?:\d+\.\d+|\.\d+|\d+)", rest)]
        if command == "M":
            x, y = numbers
            rings.append([(x, y)])
        elif command != "z":
            dx, dy = (
                {"h": (numbers[0], 0.0), "v": (0.0, numbers[0]), "l": tuple(numbers)}[command] if numbers else (0, 0)
            )
            x, y = x + dx, y + dy
            rings[-1].append((x, y))
    return rings


def test_opening_lists_each_edition_in_its_languages(make_edition: MakeEdition) -> None:
    edition = make_edition(languages=("en-GB", "ar"), title={"en-GB": "Room", "ar": "مسافة"})
    known = opening.about(edition, languages(edition))
    page = read_page(opening.opening({"b": known, "a": known, "odd": {}}).data)
    hrefs = [address for element, address, _ in page.links if element == "a"]
    assert hrefs == ["a/en-GB/index.html", "a/ar/index.html", "b/en-GB/index.html", "b/ar/index.html"]
    assert "مسافة" in page.text
    assert not page.elements & {"script", "style"}
    with pytest.raises(ValueError, match="no edition"):
        opening.opening({"odd": {"languages": [{"tag": "cy"}]}})
