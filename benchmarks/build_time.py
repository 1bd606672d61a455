"""How long the demonstration editions take, beside what they take at least and beside a straightforward script.

    python benchmarks/build_time.py [ROUNDS]

In each round, one after another, each in a process of its own on the same cores:
(a) `chartgen press` of all editions of site_config/, from the start of the process to its end, all checks included;
(b) the library calls that this takes at least, one after another in one warm process: each distinct drawing inked, each
    distinct page filled, each distinct sheet laid out and written, each finished sheet's text read back; nothing of our
    own. Given without and with the import of those libraries, because (a) and (c) import them too;
(c) `straightforward.py`: the same outputs and fonts, pyplot chart by chart, one document after another.

Targets: a at most 1.1 of b with its imports, and at most 0.35 of c. Ratios are of the same round.
"""

from __future__ import annotations

import importlib
import json
import os
import platform
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable, Iterable
from functools import partial
from pathlib import Path
from typing import Any

ROOT = Path(__file__).resolve().parents[1]
LIBRARIES = (
    *("pint", "numpy", "pandas", "babel.numbers", "jinja2", "matplotlib.backends.backend_svg", "segno"),
    *("weasyprint", "pikepdf", "pypdfium2"),
)
MOST_OF_LEAST, MOST_OF_STRAIGHTFORWARD = 1.1, 0.35


def editions() -> list[str]:
    return sorted(str(file.parent) for file in (ROOT / "site_config").glob("*/edition.toml"))


def process_time(command: list[str]) -> float:
    """Wall time of a process in seconds, from its start to its end."""
    environment = {**os.environ, "PYTHONPATH": str(ROOT), "PYTHONWARNINGS": "ignore"}
    began = time.perf_counter()
    subprocess.run(command, check=True, cwd=ROOT, env=environment, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
    return time.perf_counter() - began


def timed(calls: Iterable[Callable[[], object]]) -> float:
    began = time.perf_counter()
    for call in calls:
        call()
    return time.perf_counter() - began


def least() -> dict[str, float]:
    """(b), in seconds by kind of call. To be run in a fresh process."""
    took = {"imports": timed([partial(importlib.import_module, name) for name in LIBRARIES])}
    from chartgen import jobs

    with jobs.rare_collections():  # the same levers as the program itself has
        took |= _calls()
    return took


def _calls() -> dict[str, float]:
    from chartgen import pipeline
    from chartgen.charts import canvas
    from chartgen.press import engine, readback
    from chartgen.press.render import render
    from chartgen.site import pages
    from chartgen.site import render as pages_render

    drawings: dict[str, Callable[[], object]] = {}
    filled: dict[bytes, Callable[[], object]] = {}
    ink, fill = canvas.svg, pages_render.render

    def recorded_ink(*given: Any) -> str:
        made = ink(*given)
        drawings[made] = lambda: ink(*given)
        return made

    def recorded_fill(template: str, **values: Any) -> bytes:
        made = fill(template, **values)
        filled[made] = lambda: fill(template, **values)
        return made

    # Assignments to a module's functions would be faults to the type checker.
    setattr(canvas, "svg", recorded_ink)  # noqa: B010
    for module in list(sys.modules.values()):
        if getattr(module, "render", None) is fill:
            setattr(module, "render", recorded_fill)  # noqa: B010
    works = [pipeline.work_out(edition, Silent()) for edition in pipeline.read(editions(), Silent())]
    sheets: list[Any] = []
    for work in works:
        made = (*pipeline._posters(work), *pipeline._cards(work))
        list(pages.pages(work.edition, work.figures, work.languages, made))
        sheets += made
    distinct = list({(s.html, s.title): s for s in sheets}.values())
    printed = [render(sheet) for sheet in distinct]

    def lay_out_and_write(html: str) -> None:
        with engine.session():
            engine.lay_out(html).write_pdf(pdf_variant="pdf/ua-1")

    # What follows the library's call is ours.
    setattr(canvas, "_clean", lambda source, *_: source)  # noqa: B010
    return {
        f"{len(drawings)} drawings": timed(drawings.values()),
        f"{len(filled)} pages": timed(filled.values()),
        f"{len(distinct)} sheets": timed([partial(lay_out_and_write, sheet.html) for sheet in distinct]),
        f"{len(distinct)} sheets read back": timed([partial(readback.read, data) for data in printed]),
    }


class Silent:
    """Nobody is told how far the work is."""

    def step(self, number: int, what: str, of: int) -> None:
        pass

    def done(self, what: str) -> None:
        pass


def fast_subsetting() -> bool:
    from chartgen.press import engine

    return engine.fast_subsetting()


def one_round(folder: Path, number: int) -> dict[str, float]:
    python = sys.executable
    ours = [python, "-m", "chartgen", "press", "--quiet", "--into", str(folder / f"a{number}"), *editions()]
    a = process_time(ours)
    told = subprocess.run(
        [python, __file__, "--least"], check=True, cwd=ROOT, capture_output=True, text=True,
        env={**os.environ, "PYTHONPATH": str(ROOT), "PYTHONWARNINGS": "ignore"},
    )  # fmt: skip
    parts: dict[str, float] = json.loads(told.stdout)
    script = [python, str(ROOT / "benchmarks/straightforward.py"), str(folder / f"c{number}"), *editions()]
    c = process_time(script)
    calls = sum(parts.values()) - parts["imports"]
    shown = ", ".join(f"{name} {seconds:.2f}" for name, seconds in parts.items())
    print(f"round {number}: a {a:.2f} s   b {calls:.2f} s, with imports {sum(parts.values()):.2f} s   c {c:.2f} s")
    print(f"         b is {shown}", flush=True)
    return {"a/b without imports": a / calls, "a/b with imports": a / sum(parts.values()), "a/c": a / c}


def main(rounds: int) -> None:
    subset = "is there" if fast_subsetting() else "is MISSING (fonts are subset several times as slowly)"
    cores = len(os.sched_getaffinity(0))
    print(f"{len(editions())} editions; Python {platform.python_version()}; {cores} cores;", end=" ")
    print(f"load before {os.getloadavg()[0]:.1f}; libharfbuzz-subset {subset}")
    with tempfile.TemporaryDirectory() as folder:
        ratios = [one_round(Path(folder), number) for number in range(1, rounds + 1)]
    targets = {"a/b without imports": None, "a/b with imports": MOST_OF_LEAST, "a/c": MOST_OF_STRAIGHTFORWARD}
    for name, most in targets.items():
        median = statistics.median(ratio[name] for ratio in ratios)
        verdict = "" if most is None else f"   target {most}: {'met' if median <= most else 'MISSED'}"
        print(f"{name}: {median:.2f}{verdict}")


if __name__ == "__main__":
    if sys.argv[1:] == ["--least"]:
        print(json.dumps(least()))
    else:
        main(int(sys.argv[1]) if sys.argv[1:] else 3)
