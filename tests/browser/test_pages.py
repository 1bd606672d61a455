"""The pages in a real browser, opened from the disk with the network off: no console error, no sideways scroll, axe.

Debian's Chromium does it (``apt-get install chromium``; start.sh looks for it). Where it is missing these tests fail: a
page that nobody opened is not tested.
"""

from __future__ import annotations

import shutil
from collections.abc import Iterator
from pathlib import Path

import pytest
from axe_playwright_python.sync_playwright import Axe
from playwright.sync_api import Browser, Page, Request, Route, sync_playwright

from tests.site.made import DEMOS, made, write

LANGUAGES = [(name, language.tag) for name in DEMOS for language in made(name).languages]
EACH = pytest.mark.parametrize(("name", "tag"), LANGUAGES, ids=[f"{n}-{t}" for n, t in LANGUAGES])


@pytest.fixture(scope="module")
def build(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder as `press` leaves it, with every demonstration edition's pages."""
    return write(tmp_path_factory.mktemp("build")).parent


@pytest.fixture(scope="module")
def browser() -> Iterator[Browser]:
    path = shutil.which("chromium") or shutil.which("chromium-browser")
    if path is None:
        pytest.fail("Chromium is not installed; the pages cannot be opened. Install it: apt-get install chromium")
    with sync_playwright() as playwright:
        opened = playwright.chromium.launch(executable_path=path, args=["--disable-quic"])
        yield opened
        opened.close()


class Opened:
    """A page with what went wrong while it was open."""

    def __init__(self, page: Page) -> None:
        self.page = page
        self.said: list[str] = []
        self.asked: list[str] = []
        page.on("console", lambda message: self.said.append(f"{message.type}: {message.text[:300]}"))
        page.on("pageerror", lambda error: self.said.append(str(error)))
        page.on("requestfailed", self._failed)
        page.on("request", lambda request: self.asked.append(request.url))
        page.route("**/*", self._route)

    def _route(self, route: Route) -> None:
        if route.request.url.startswith("file:"):
            route.continue_()
        else:
            route.abort()

    def _failed(self, request: Request) -> None:
        # The browser drops the icon of a page that we leave before it came; a missing one is another failure.
        if not (request.failure == "net::ERR_ABORTED" and request.url.endswith(".svg")):
            self.said.append(f"failed: {request.failure} {request.url[:200]}")

    def open(self, file: Path) -> None:
        self.page.goto(file.as_uri())
        self.page.evaluate("document.fonts.ready.then(() => true)")


@pytest.fixture
def opened(browser: Browser) -> Iterator[Opened]:
    context = browser.new_context(viewport={"width": 1280, "height": 900}, offline=True)
    yield Opened(context.new_page())
    context.close()


def pages_of(build: Path, name: str, tag: str) -> list[Path]:
    return sorted((build / made(name).edition.id / tag).glob("*.html"))


# What sticks out of the page sideways and does not lie in a box that scrolls by itself.
OVERFLOW = """() => {
  const wide = document.documentElement.clientWidth, out = [];
  if (document.documentElement.scrollWidth > wide) out.push('page ' + document.documentElement.scrollWidth);
  for (const e of document.querySelectorAll('body *:not(.scroll *):not(.skip)')) {
    const box = e.getBoundingClientRect();
    if (box.width && (box.right > wide + 0.5 || box.left < -0.5))
      out.push(e.tagName + ' ' + e.className + ' ' + Math.round(box.left) + '..' + Math.round(box.right));
  }
  return out;
}"""
SPACING = """() => {
  const sheet = new CSSStyleSheet();
  sheet.replaceSync('*{line-height:1.5!important;letter-spacing:.12em!important;word-spacing:.16em!important}');
  document.adoptedStyleSheets = [sheet];
}"""
TARGETS = """() => [...document.querySelectorAll('a:not(.skip)')].map(a => [a, a.getBoundingClientRect()])
  .filter(([a, b]) => b.width && !a.closest('p, h3, h2') && (b.height < 43.5 || b.width < 23.5))
  .map(([a, b]) => a.textContent.trim() + ' ' + b.width + 'x' + b.height)"""
LABELS = """() => [...document.querySelectorAll('.chart svg')].flatMap(svg => {
  const box = svg.getBoundingClientRect();
  return [...svg.querySelectorAll('text')].filter(t => {
    const b = t.getBoundingClientRect();
    return b.left < box.left - 1.5 || b.right > box.right + 1.5;
  }).map(t => t.textContent + ' in ' + svg.getAttribute('aria-label').slice(0, 60));
})"""


@EACH
def test_every_page_stands_in_the_browser(build: Path, opened: Opened, name: str, tag: str) -> None:
    """Each page opened once from the disk.

    Console and requests are silent, at most five files are asked for, our own fonts are in use, no script is there.
    On a wide screen each label, shaped by the browser, lies within its drawing. At 320 px (1280 px at 400 %, WCAG 2.2,
    1.4.10) nothing sticks out, with a reader's own spacing neither (1.4.12); targets are 44 px high and at least 24 px
    wide (2.5.8 asks for 24 by 24; links inside a sentence are exempt there).
    """
    page = opened.page
    for file in pages_of(build, name, tag):
        page.set_viewport_size({"width": 1280, "height": 900})
        opened.asked.clear()
        opened.open(file)
        assert opened.said == [], file.name
        assert all(url.startswith(("file:", "data:")) for url in opened.asked)
        assert len([url for url in opened.asked if url.startswith("file:")]) <= 5, file.name
        faces = page.evaluate("[...document.fonts].filter(f => f.status === 'loaded').map(f => f.family)")
        assert {"Chartgen Narrow"} <= {face.strip('"') for face in faces}, file.name
        assert page.evaluate("document.scripts.length") == 0
        assert page.evaluate(LABELS) == [], file.name
        assert page.evaluate(OVERFLOW) == [], file.name
        page.set_viewport_size({"width": 320, "height": 900})
        assert page.evaluate(OVERFLOW) == [], f"{file.name} at 320 px"
        assert page.evaluate(TARGETS) == [], file.name
        if tag != "ar":  # joined letters are never spaced
            page.evaluate(SPACING)
            assert page.evaluate(OVERFLOW) == [], f"{file.name} at 320 px, spaced"


def test_first_pages_stand_in_the_browser(build: Path, opened: Opened) -> None:
    for file in (build / "index.html", *(build / name / "index.html" for name in DEMOS)):
        opened.open(file)
        assert opened.said == []
        for width in (1280, 320):
            opened.page.set_viewport_size({"width": width, "height": 900})
            assert opened.page.evaluate(OVERFLOW) == [], f"{file} at {width} px"


def kinds(name: str, tag: str) -> list[str]:
    """One page of each kind."""
    it = made(name).edition
    own = ("index", f"surface-{it.surfaces[0].id}", f"vehicle-{it.vehicles[0].id}", "method", "downloads")
    return ["index.html", f"{it.id}/index.html", *(f"{it.id}/{tag}/{page}.html" for page in own)]


@pytest.mark.parametrize(("name", "tag", "most"), [("tarnholt", "cy", 7), ("sarvelle", "ar", 3)])
def test_axe_finds_nothing(build: Path, opened: Opened, name: str, tag: str, most: int) -> None:
    """All of axe-core's rules: every kind of page, and the first ones right to left."""
    for kind in kinds(name, tag)[:most]:
        opened.page.goto((build / kind).as_uri())
        results = Axe().run(opened.page)
        assert results.violations_count == 0, f"{kind}\n{results.generate_report()}"


@pytest.mark.parametrize("name", DEMOS)
def test_contrast_holds_in_the_dark(build: Path, browser: Browser, name: str) -> None:
    context = browser.new_context(viewport={"width": 1280, "height": 900}, color_scheme="dark", offline=True)
    page = context.new_page()
    for kind in kinds(name, made(name).languages[0].tag)[1:4]:
        page.goto((build / kind).as_uri())
        results = Axe().run(page, options={"runOnly": ["color-contrast"]})
        assert results.violations_count == 0, f"{kind}\n{results.generate_report()}"
    context.close()


def test_reader_can_walk_from_the_first_page_to_a_figures_inputs(build: Path, opened: Opened) -> None:
    """Opening page, edition, surface, a row's trace, the other language: by clicks alone."""
    page = opened.page
    opened.open(build / "index.html")
    page.click('a[href="tarnholt/en-GB/index.html"]')
    page.click("text=Wet asphalt")
    page.click('a[href^="method.html#r"] >> nth=0')
    target = page.evaluate("document.querySelector(':target').id")
    assert target.startswith("r")
    page.click('header a[hreflang="cy"]')
    assert page.url.endswith("/cy/method.html")
    assert page.evaluate("document.documentElement.lang") == "cy"
    assert opened.said == []


def test_right_to_left_runs_right_to_left(build: Path, opened: Opened) -> None:
    """First column of the table and first bar at the right; numbers and their units keep their own order."""
    opened.open(build / "sarvelle" / "ar" / "index.html")
    page = opened.page
    heads = page.evaluate("[...document.querySelector('.dist tr').children].map(e => e.getBoundingClientRect().left)")
    assert heads == sorted(heads, reverse=True)
    speeds = page.evaluate(
        """() => { const texts = [...document.querySelectorAll('.chart svg g.ink-paper text')]
          .filter(t => /^\\d+$/.test(t.textContent) && t.closest('g').getAttribute('font-size') > 4);
          return texts.map(t => [Number(t.textContent), t.getBoundingClientRect().left]); }"""
    )
    by_speed = [left for _, left in sorted(pair for pair in speeds if pair[0] in made("sarvelle").edition.speeds)]
    assert len(by_speed) >= 3
    assert by_speed[0] > by_speed[-1]
    assert page.evaluate("getComputedStyle(document.body).direction") == "rtl"
