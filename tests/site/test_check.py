"""The check of finished pages finds what it is there to find: each fault planted once in pages that are right."""

from __future__ import annotations

import re
from functools import cache

import pytest

from chartgen.edition.model import Case, Vehicle
from chartgen.site import reading
from chartgen.site.check import check_numbers, check_pages, read_number, records_of
from chartgen.site.reading import read_page
from tests.conftest import driver, edition, surface
from tests.site.made import Made, make


@cache
def small() -> Made:
    """Two languages, two drivers, a lorry with a lag, wet and ice, level and a downgrade on which it does not stop."""
    lorry = Vehicle(id="lorry", kind="lorry", name={"en-GB": "Lorry"}, max_deceleration_mps2=5.0, brake_lag_s=0.4)
    return make(
        edition(
            languages=("en-GB", "cy"),
            drivers=(driver("typical", 1.1), driver("cautious", 1.9)),
            surfaces=(surface("wet", f60=0.35, sp_kmh=110.0), surface("ice", mu=0.05)),
            vehicles=(lorry,),
            cases=(
                Case(
                    drivers=("typical", "cautious"), vehicles=("lorry",), surfaces=("wet", "ice"), grades=(0.0, -0.09)
                ),
            ),
        )
    )


def codes(path: str, old: str, new: str, *, regex: bool = False) -> set[str]:
    """Codes found after `old` became `new` in one place of the page `path`."""
    it = small()
    before = it.files[path].decode()
    after = re.sub(old, new, before, count=1, flags=re.DOTALL) if regex else before.replace(old, new, 1)
    assert after != before, "nothing was planted"
    files = {**it.files, path: after.encode()}
    return {f.code for f in check_pages(files, it.edition, it.figures, it.languages)}


WET, ICE = "en-GB/surface-wet.html", "en-GB/surface-ice.html"


def test_nothing_is_found_before_anything_is_planted() -> None:
    it = small()
    assert check_pages(it.files, it.edition, it.figures, it.languages) == ()


def test_every_printed_number_is_looked_at() -> None:
    """Each number of each table of two pages in turn, its last digit altered."""
    it = small()
    records = records_of(it.figures)
    for path, which, most in ((WET, 0, 40), ("cy/method.html", 1, 56)):
        page = it.files[path].decode()
        cells = list(re.finditer(r"<td(?: class=\"num\")?>(\d+(?:\.\d+)?)</td>", page))
        assert len(cells) >= most
        for cell in cells:
            digit = page[cell.end(1) - 1]
            altered = page[: cell.end(1) - 1] + str((int(digit) + 5) % 10) + page[cell.end(1) :]
            found = {f.code for f in check_numbers(path, read_page(altered.encode()), it.languages[which], records)}
            assert found == {"site.figure"}, cell[0]


def test_one_digit_of_a_chart_altered() -> None:
    assert codes(WET, r'(<g class="nb[^>]*><text[^>]*>)(\d+)', r"\g<1>9\2", regex=True) == {"site.chart"}


def test_row_that_stops_is_said_not_to() -> None:
    old = r'<td>\d+</td><td class="num">\d+</td><td>[\d.]+</td></tr>'
    assert codes(WET, old, '<td class="never" colspan="3">does not stop</td></tr>', regex=True) == {"site.figure"}


def test_row_that_does_not_stop_gets_a_number() -> None:
    old = r'<td class="never" colspan="3"><strong>does not stop</strong></td>'
    assert codes(ICE, old, "<td>9</td><td>9</td><td>9</td>", regex=True) == {"site.figure"}


def test_row_loses_a_cell() -> None:
    assert codes(WET, r"<td>[\d.]+</td></tr>", "</tr>", regex=True) == {"site.table"}


def test_row_left_out() -> None:
    found = codes(WET, r"<tr><th scope=\"row\">.*?</tr>", "", regex=True)
    assert "site.row" in found


def test_row_without_its_trace() -> None:
    found = codes(WET, r'href="method.html#r\d+"', 'href="method.html#r99999"', regex=True)
    assert {"site.trace", "site.link"} <= found


@pytest.mark.parametrize(
    ("old", "new", "code"),
    [
        ('href="downloads.html"', 'href="download.html"', "site.link"),
        ('href="#content"', 'href="#contents"', "site.link"),
        ('href="downloads.html"', 'href="https://tarnholt.example/"', "site.outside"),
        ('href="downloads.html"', 'href="/downloads.html"', "site.outside"),
        ("<main ", "<script>1</script><main ", "site.forbidden"),
        ("<main ", '<main style="color:red" ', "site.forbidden"),
        ("<main ", '<main onclick="x" ', "site.forbidden"),
        ('id="content"', 'id="caution"', "site.id"),
        ("default-src", "script-src", "site.policy"),
        ('lang="en-GB" dir="ltr"', 'lang="cy" dir="ltr"', "site.language"),
        ("no guarantee", "a guarantee", "site.caution"),
        ('hreflang="cy" href="../cy/surface-wet.html"', 'hreflang="cy" href="../cy/index.html"', "site.switch"),
        ('lang="en-GB" aria-label="', 'lang="en-GB" aria-label="" data-x="', "site.alternative"),
    ],
)
def test_planted_fault_is_found(old: str, new: str, code: str) -> None:
    assert code in codes(WET, old, new)


def test_another_size_is_found() -> None:
    assert codes("en-GB/downloads.html", r">1\u00a0kB<", ">9\u00a0kB<", regex=True) == {"site.size"}


def test_missing_page_and_foreign_data() -> None:
    it = small()
    files = {path: data for path, data in it.files.items() if path != "cy/vehicle-lorry.html"}
    files["data/figures.csv"] = files["data/figures.csv"].replace(b"20", b"21", 1)
    found = {f.code for f in check_pages(files, it.edition, it.figures, it.languages)}
    assert {"site.missing", "site.data", "site.link"} <= found


@pytest.mark.parametrize(
    ("text", "tag", "value"),
    [
        ("1,016", "en-GB", 1016.0), ("1\u202f016", "fr", 1016.0), ("1\u00a0016", "fr", 1016.0), ("4,2", "fr", 4.2),
        ("1,016.5", "ar", 1016.5), ("\u22123", "cy", -3.0), ("12 m", "en-GB", None), ("", "en-GB", None),
    ],
)  # fmt: skip
def test_numbers_are_read_as_the_locale_writes_them(text: str, tag: str, value: float | None) -> None:
    """Separators: CLDR, the same source from which they are written."""
    assert read_number(text, tag) == value


def test_a_page_is_read_alike_by_both_readers(monkeypatch: pytest.MonkeyPatch) -> None:
    """The quick reader gives what the standard library's gives, and leaves to it what is not plainly marked up."""
    pages = [data for path, data in small().files.items() if path.endswith(".html")]
    quick = [read_page(data) for data in pages]
    assert all(reading._plain_tokens(data.decode()) is not None for data in pages)
    odd = b"<!doctype html><p>5 < 6<!-- 7 --><b>8</b><p class=never>9"
    assert reading._plain_tokens(odd.decode()) is None
    monkeypatch.setattr(reading, "_read_plain", lambda *_: False)
    assert quick == [read_page(data) for data in pages]
    assert "8" in read_page(odd).text
