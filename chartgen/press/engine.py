"""The PDF engine behind one thin door: loading it, its fonts, its log, its collector settings.

Nothing here knows what is on a sheet.
"""

from __future__ import annotations

import gc
import importlib
import logging
import os
import tempfile
import warnings
from collections.abc import Iterator
from contextlib import contextmanager
from functools import cache
from pathlib import Path
from types import ModuleType
from typing import Any

from chartgen.errors import MachineFault

PANGO_LINE = "apt-get install libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz-subset0"
LATIN_FAMILY, ARABIC_FAMILY = "IBM Plex Sans Condensed", "Tajawal"
WEIGHTS = {LATIN_FAMILY: (400, 500, 600, 700), ARABIC_FAMILY: (400, 500, 700)}
"""The cuts the sheets use. Static files only: the engine makes a static cut of a variable font anew for every document,
which takes longer than all the rest, and stamps it with the time of day."""
_FONTS_CONF = Path(__file__).with_name("fonts.conf")
_COLLECT_EVERY = 200_000
"""Objects made between two collections while a sheet is laid out (chosen): the engine builds large trees that live
until the end, so collecting as often as Python does by default only walks them again."""


@contextmanager
def _own_fontconfig() -> Iterator[None]:
    """Let fontconfig see our font list alone; set back afterwards, for a browser started from here needs its own."""
    before = os.environ.get("FONTCONFIG_FILE")
    os.environ["FONTCONFIG_FILE"] = str(_FONTS_CONF)
    try:
        yield
    finally:
        if before is None:
            del os.environ["FONTCONFIG_FILE"]
        else:
            os.environ["FONTCONFIG_FILE"] = before


@contextmanager
def _own_scratch() -> Iterator[None]:
    """Let the engine lay its copies of the fonts into a folder that goes with the rendering.

    It clears them away when its objects are collected, which a worker that is dismissed never comes to: they would
    pile up among the machine's temporary files.
    """
    before = tempfile.tempdir
    try:
        scratch = tempfile.TemporaryDirectory(prefix="chartgen-", ignore_cleanup_errors=True)
    except OSError as error:
        problem = f"No folder for temporary files can be made ({error.strerror or error})."
        raise MachineFault(problem, "Make room there, or name another folder in TMPDIR") from error
    with scratch as folder:
        tempfile.tempdir = folder
        try:
            yield
        finally:
            tempfile.tempdir = before


@cache
def load() -> ModuleType:
    """The engine's module, imported on first use.

    Raises MachineFault with the command that installs what is missing.
    """
    with _own_fontconfig(), warnings.catch_warnings():
        # It warns that no fonts are configured, which is what we want, and that the fast subsetter is missing,
        # which only costs time.
        warnings.simplefilter("ignore")
        try:
            module = importlib.import_module("weasyprint")
        except OSError as error:
            problem = f"The text layout library Pango cannot be loaded ({error})."
            raise MachineFault(problem, f"Run: {PANGO_LINE}") from error
    gc.freeze()
    gc.set_threshold(_COLLECT_EVERY, *gc.get_threshold()[1:])
    return module


def fast_subsetting() -> bool:
    """Whether libharfbuzz-subset is there: without it fonts are subset several times as slowly, to other bytes."""
    load()
    return bool(importlib.import_module("weasyprint.text.ffi").harfbuzz_subset)


@cache
def font_faces(arabic: bool) -> str:
    """The @font-face rules of the sheets' families, from the installed font packages. Raises MachineFault."""
    families = (LATIN_FAMILY, *((ARABIC_FAMILY,) if arabic else ()))
    return "".join(_face(family, weight) for family in families for weight in WEIGHTS[family])


def font_path(family: str, weight: int) -> Path:
    """The file of one upright static cut. Raises MachineFault where the font is not installed."""
    fontpkg = importlib.import_module("fontpkg")
    try:
        files = fontpkg.family(family).files
    except LookupError as error:
        raise MachineFault(f"The font “{family}” is not installed ({error}).", "Run: sh start.sh") from error
    for file in files:
        if file.style == "normal" and file.weight == weight and not file.variable:
            return Path(file.path)
    raise MachineFault(f"The font “{family}” has no weight {weight}.", "Run: sh start.sh")


def _face(family: str, weight: int) -> str:
    # as_uri percent-encodes: a folder may hold spaces, and font files hold brackets.
    address = font_path(family, weight).as_uri()
    return f"@font-face{{font-family:'{family}';font-weight:{weight};src:url('{address}')}}\n"


class _Collector(logging.Handler):
    def __init__(self) -> None:
        super().__init__(logging.WARNING)
        self.messages: list[str] = []

    def emit(self, record: logging.LogRecord) -> None:
        self.messages.append(record.getMessage())


@contextmanager
def session() -> Iterator[list[str]]:
    """One rendering: our fonts only, a folder of its own; every warning of the engine goes into the list given."""
    load()
    logger = logging.getLogger("weasyprint")
    collector = _Collector()
    propagate = logger.propagate
    logger.addHandler(collector)
    logger.propagate = False
    try:
        with _own_fontconfig(), _own_scratch():
            yield collector.messages
    finally:
        logger.propagate = propagate
        logger.removeHandler(collector)


def lay_out(html: str) -> Any:
    """The engine's laid-out document. Only files of the fonts may be fetched: a sheet has no other outside part."""
    module = load()
    urls = importlib.import_module("weasyprint.urls")
    fonts = importlib.import_module("weasyprint.text.fonts").FontConfiguration()
    fetcher = urls.URLFetcher(allowed_protocols=("file",))
    faces = module.CSS(string=font_faces(_has_arabic(html)), font_config=fonts, url_fetcher=fetcher)
    source = module.HTML(string=html, url_fetcher=fetcher)
    return source.render(font_config=fonts, stylesheets=[faces], pdf_variant="pdf/ua-1")


def _has_arabic(text: str) -> bool:
    return any("\u0600" <= letter <= "\u06ff" for letter in text)
