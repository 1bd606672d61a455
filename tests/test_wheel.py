"""The question of the wheel: does it carry templates and starters, and does it run from any folder?"""

from __future__ import annotations

import os
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Built by the pinned back end of this very environment: no network, nothing unpinned."""
    folder = tmp_path_factory.mktemp("dist")
    program = "import sys; from hatchling.build import build_wheel; print(build_wheel(sys.argv[1]))"
    command = [sys.executable, "-c", program, str(folder)]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=True)
    return folder / done.stdout.split()[-1]


def kept(folder: str) -> set[str]:
    """The files of `folder` that belong to the project: not ignored by git, or all where there is no git."""
    command = ["git", "ls-files", "-z", "--cached", "--others", "--exclude-standard", folder]
    try:
        listed = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=True).stdout.split("\0")
    except (FileNotFoundError, subprocess.CalledProcessError):
        paths = (p for p in (ROOT / folder).rglob("*") if p.is_file() and "__pycache__" not in p.parts)
        listed = [p.relative_to(ROOT).as_posix() for p in paths]
    return {path for path in listed if (ROOT / path).is_file()}


@pytest.mark.parametrize("folder", ["templates", "site_config"])
def test_it_holds_every_file_of_ours_and_no_other(wheel: Path, folder: str) -> None:
    with zipfile.ZipFile(wheel) as packed:
        names = packed.namelist()
    inside = {n.removeprefix("chartgen/_data/") for n in names if n.startswith(f"chartgen/_data/{folder}/")}
    assert inside == kept(folder)
    assert len(inside) >= 3


def test_it_holds_the_program_and_nothing_beside_it(wheel: Path) -> None:
    with zipfile.ZipFile(wheel) as packed:
        names = packed.namelist()
    assert {name.split("/")[0] for name in names if ".dist-info/" not in name} == {"chartgen"}
    assert {name for name in names if "/_data/" not in name and ".dist-info/" not in name} == kept("chartgen")
    assert any(name.endswith("licenses/LICENSE") for name in names)


def test_it_runs_from_any_folder(wheel: Path, tmp_path: Path) -> None:
    target, elsewhere = tmp_path / "unpacked", tmp_path / "else where"
    elsewhere.mkdir()
    with zipfile.ZipFile(wheel) as packed:
        packed.extractall(target)
    environment = {**os.environ, "PYTHONPATH": str(target), "PYTHONSAFEPATH": "1"}

    def chartgen(*arguments: str) -> str:
        command = [sys.executable, "-m", "chartgen", *arguments]
        done = subprocess.run(command, cwd=elsewhere, env=environment, capture_output=True, text=True, check=False)
        assert done.returncode == 0, done.stderr
        return done.stdout

    where = [sys.executable, "-c", "import chartgen; print(chartgen.__file__)"]
    assert subprocess.run(where, cwd=elsewhere, env=environment, capture_output=True, text=True, check=True).stdout == (
        f"{target}/chartgen/__init__.py\n"
    )
    assert '"edition": "tarnholt"' in chartgen("figures", "tarnholt", "--format", "json")
    chartgen("begin", "fleet", "own")
    assert '"edition": "own"' in chartgen("figures", "own", "--format", "json")
