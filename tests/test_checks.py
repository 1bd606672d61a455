"""Lint, types and the floors of the house: the tools' own verdict, as a part of the test run."""

from __future__ import annotations

import re
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]


def run(*command: str) -> str:
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
    return "" if done.returncode == 0 else done.stdout + done.stderr


def test_lint() -> None:
    assert run(sys.executable, "-m", "ruff", "check", "--no-cache", "--output-format=concise", ".") == ""


def test_types() -> None:
    assert run(sys.executable, "-m", "mypy") == ""


def test_floors() -> None:
    """Imports go down only; each heavy library has one room. The contracts stand in pyproject.toml."""
    assert run(str(Path(sys.executable).parent / "lint-imports"), "--no-cache") == ""


def modules() -> list[str]:
    paths = sorted((ROOT / "chartgen").rglob("*.py"))
    return [".".join(p.relative_to(ROOT).with_suffix("").parts).removesuffix(".__init__") for p in paths]


HEAVY = ["matplotlib", "pandas", "weasyprint", "pint", "babel", "pikepdf", "rich", "numpy", "jinja2"]
HEAVY += ["segno", "pypdfium2"]


@pytest.mark.parametrize("module", ["cli", "pipeline", "jobs", "output", "report", "begin", "errors", "resources"])
def test_nothing_heavy_is_imported_before_a_command_needs_it(module: str) -> None:
    program = f"import sys, chartgen.{module}; print(*[name for name in {HEAVY!r} if name in sys.modules])"
    done = subprocess.run([sys.executable, "-c", program], cwd=ROOT, capture_output=True, text=True, check=True)
    assert done.stdout == "\n"


def test_packages_bring_nothing_heavy_with_their_name() -> None:
    packages = [m for m in modules() if (ROOT / m.replace(".", "/")).is_dir()]
    program = f"import sys, {', '.join(packages)}; print(*[name for name in {HEAVY!r} if name in sys.modules])"
    done = subprocess.run([sys.executable, "-c", program], cwd=ROOT, capture_output=True, text=True, check=True)
    assert len(packages) >= 8
    assert done.stdout == "\n"


def test_every_package_says_what_comes_in_what_goes_out_and_what_it_must_not_know() -> None:
    for name in (m for m in modules() if m.count(".") == 1 and (ROOT / m.replace(".", "/")).is_dir()):
        text = (ROOT / name.replace(".", "/") / "__init__.py").read_text(encoding="utf-8").lower()
        for part in (r"\bin:|comes in", r"\bout:|goes out", r"must not know|must\s+not\s+know"):
            assert re.search(part, text), f"{name}: {part}"


def test_files_stay_short_enough_to_read() -> None:
    long = {m: n for m in modules() if (n := _lines(m)) > 400}
    assert long == {}


def _lines(module: str) -> int:
    path = ROOT / module.replace(".", "/")
    return len((path / "__init__.py" if path.is_dir() else path.with_suffix(".py")).read_text().splitlines())


def test_no_line_of_ours_is_left_for_later() -> None:
    marks = re.compile(r"\b(TO" + r"DO|FIX" + r"ME|X" + r"XX)\b")
    for folder in ("chartgen", "templates", "tests", "site_config", "benchmarks", "tools"):
        for path in (ROOT / folder).rglob("*"):
            if path.suffix in {".py", ".html", ".css", ".po", ".toml", ".sh", ".xml", ".csv"}:
                assert not marks.search(path.read_text(encoding="utf-8")), path


def names(requirements: list[str]) -> set[str]:
    return {line.split("#")[0].strip() for line in requirements} - {""}


def test_the_wheel_needs_what_the_lock_pins() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]
    written = names((ROOT / "requirements/run.in").read_text().splitlines())
    for_setting_up = {"hatchling>=1.27", "editables>=0.5"}
    assert written - set(project["dependencies"]) == for_setting_up
    assert set(project["dependencies"]) <= written


@pytest.mark.parametrize("lock", ["run", "check"])
def test_a_lock_pins_everything_with_hashes_and_names_no_place(lock: str) -> None:
    text = (ROOT / f"requirements/{lock}.lock").read_text()
    assert "://" not in text
    assert "--index" not in text
    blocks = re.split(r"\n(?=\S)", text.strip())
    assert len(blocks) > 40
    for block in blocks:
        assert re.match(r"[a-z0-9.-]+==[^ ]+", block), block[:80]
        assert "--hash=sha256:" in block


def test_the_test_lock_contains_the_run_lock() -> None:
    run_lock, check_lock = ((ROOT / f"requirements/{lock}.lock").read_text() for lock in ("run", "check"))
    pinned = re.findall(r"^[a-z0-9.-]+==[^ ]+", run_lock, re.MULTILINE)
    assert len(pinned) > 40
    assert set(pinned) <= set(re.findall(r"^[a-z0-9.-]+==[^ ]+", check_lock, re.MULTILINE))
