"""The back door's question: is the build folder always the old one or the new one, and whole?"""

from __future__ import annotations

import errno
import os
import random
import signal
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path

import pytest

from chartgen import exchange, output
from chartgen.errors import CommandFault, MachineFault
from chartgen.output import File

ROOT = Path(__file__).parents[1]


def contents(folder: Path) -> dict[str, bytes]:
    return {p.relative_to(folder).as_posix(): p.read_bytes() for p in sorted(folder.rglob("*")) if p.is_file()}


def beside(build: Path) -> list[str]:
    return sorted(p.name for p in build.parent.iterdir() if p != build)


def test_an_edition_is_written_with_its_manifest(tmp_path: Path) -> None:
    build = tmp_path / "build"
    files = [File("index.html", b"one"), File("sheets/a.pdf", b"two")]
    output.publish(build, {"vale": files}, [File("index.html", b"o")])
    made = ["vale/index.html", "vale/manifest.json", "vale/sheets/a.pdf"]
    assert sorted(contents(build)) == [".chartgen", "index.html", *made]
    manifest = output.read_manifest(build / "vale")
    assert manifest is not None
    # SHA-256 of b"one", as `printf one | sha256sum` prints it.
    assert manifest.files[0].sha256 == "7692c3ad3540bb803c020b3aee66cd8887123234ea0c6e7143c0add73ff431ed"
    assert [e.path for e in manifest.files] == ["index.html", "sheets/a.pdf"]
    assert output.differences(build / "vale") == ()
    assert beside(build) == []


def test_the_manifest_does_not_depend_on_the_order_of_the_files(tmp_path: Path) -> None:
    files = [File("b", b"2"), File("a/c", b"3"), File("a/b", b"1")]
    output.publish(tmp_path / "one", {"vale": files})
    output.publish(tmp_path / "two", {"vale": files[::-1]})
    assert contents(tmp_path / "one") == contents(tmp_path / "two")


def test_other_editions_and_dot_files_stay_and_the_edition_is_replaced_whole(tmp_path: Path) -> None:
    build = tmp_path / "build"
    build.mkdir()
    (build / ".gitkeep").touch()
    output.publish(build, {"vale": [File("a", b"1"), File("gone", b"2")], "hill": [File("h", b"3")]})
    output.publish(build, {"vale": [File("a", b"9")]})
    assert {k: v for k, v in contents(build).items() if "manifest" not in k} == {
        ".chartgen": contents(build)[".chartgen"], ".gitkeep": b"", "hill/h": b"3", "vale/a": b"9",
    }  # fmt: skip
    assert output.differences(build / "hill") == ()


NO_PATHS = ["../x", "a/../x", "/x", "a//x", "", ".", "a/", "a\\x", "a\0x", ".htaccess", "-x", "a b", "é"]
NO_PATHS += ["manifest.json"]


@pytest.mark.parametrize("path", NO_PATHS)
def test_a_path_that_leaves_the_folder_or_is_none_is_refused(tmp_path: Path, path: str) -> None:
    with pytest.raises(ValueError, match="not a path"):
        output.publish(tmp_path / "build", {"vale": [File(path, b"")]})
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize("edition_id", ["../x", "", ".", "a/b", "A", "-a"])
def test_an_id_that_is_none_is_refused(tmp_path: Path, edition_id: str) -> None:
    with pytest.raises(ValueError, match="not an edition's id"):
        output.publish(tmp_path / "build", {edition_id: []})


@pytest.mark.parametrize("twice", ["a/x.html", "a/X.html"])
def test_never_twice_to_one_path(tmp_path: Path, twice: str) -> None:
    with pytest.raises(ValueError, match="two files for one path"):
        output.publish(tmp_path / "build", {"vale": [File("a/x.html", b"1"), File(twice, b"2")]})


def test_a_folder_with_other_files_is_left_alone(tmp_path: Path) -> None:
    (tmp_path / "thesis.odt").write_text("years of work")
    with pytest.raises(CommandFault) as caught:
        output.publish(tmp_path, {"vale": []})
    assert caught.value.problem == f"{tmp_path} holds files that chartgen did not make."
    assert contents(tmp_path) == {"thesis.odt": b"years of work"}


def test_a_link_to_a_build_folder_is_followed(tmp_path: Path) -> None:
    (tmp_path / "disk").mkdir()
    (tmp_path / "build").symlink_to("disk")
    output.publish(tmp_path / "build", {"vale": [File("a", b"1")]})
    assert (tmp_path / "build").is_symlink()
    assert (tmp_path / "disk/vale/a").read_bytes() == b"1"


def test_a_full_disk_leaves_the_old_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    build = tmp_path / "build"
    output.publish(build, {"vale": [File("a", b"old"), File("b", b"old")]})
    before = contents(build)
    real = output._write

    def full(path: Path, data: bytes) -> None:
        if path.name == "b":
            raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC), str(path))
        real(path, data)

    monkeypatch.setattr(output, "_write", full)
    with pytest.raises(MachineFault) as caught:
        output.publish(build, {"vale": [File("a", b"new"), File("b", b"new")]})
    assert "No space left on device" in caught.value.problem
    assert caught.value.problem.endswith(f"{build} is as it was.")
    assert caught.value.remedy == "Free some space and run the same command again."
    assert contents(build) == before
    assert beside(build) == []


def test_what_was_changed_afterwards_is_found(tmp_path: Path) -> None:
    build = tmp_path / "build"
    output.publish(build, {"vale": [File("a", b"1"), File("b", b"2"), File("c", b"3")]})
    (build / "vale/a").write_bytes(b"7")
    (build / "vale/b").unlink()
    (build / "vale/d").write_bytes(b"4")
    assert output.differences(build / "vale") == (
        "a was changed after it was made.",
        "b is in the manifest, but not in the folder.",
        "d is in the folder, but not in the manifest.",
    )
    (build / "vale/manifest.json").write_text("{}")
    assert output.differences(build / "vale") == ("manifest.json is missing or cannot be read.",)


def test_a_second_writer_waits_for_the_first(tmp_path: Path) -> None:
    build = tmp_path / "build"
    program = (
        "import sys; from pathlib import Path; from chartgen import output\n"
        "with output.staging(Path(sys.argv[1]), lambda: print('waiting', flush=True)) as s: print('in', flush=True)\n"
    )
    with output.staging(build):
        command = [sys.executable, "-c", program, str(build)]
        other = subprocess.Popen(command, cwd=ROOT, stdout=subprocess.PIPE, text=True)
        assert other.stdout is not None
        assert other.stdout.readline() == "waiting\n"
    assert other.communicate(timeout=20)[0] == "in\n"
    assert other.returncode == 0


WRITER = """
import sys
from pathlib import Path
from chartgen import output
print("ready", flush=True)
for issue in range(10_000):
    data = str(issue).encode() * 500
    output.publish(Path(sys.argv[1]), {"vale": [output.File(f"f{i // 10}/{i}", data) for i in range(60)]})
"""


def test_killed_at_random_moments_the_folder_is_the_old_or_the_new_one(tmp_path: Path) -> None:
    moments = random.Random(20)
    issues, cut_short = set(), 0
    build = tmp_path / "build"
    for _ in range(20):
        writer = subprocess.Popen([sys.executable, "-c", WRITER, str(build)], cwd=ROOT, stdout=subprocess.PIPE)
        assert writer.stdout is not None
        writer.stdout.readline()
        time.sleep(moments.uniform(0.0, 0.2))
        writer.send_signal(signal.SIGKILL)
        writer.communicate()
        cut_short += len(beside(build)) > 0
        if not build.exists():
            continue
        assert output.differences(build / "vale") == ()
        assert len(contents(build)) == 62
        issues.add((build / "vale/f0/0").read_bytes())
        assert len({d for p, d in contents(build).items() if p.startswith("vale/f")}) == 1
    # That the kills did hit: in the middle of writing, and in more than one issue.
    assert cut_short > 3
    assert len(issues) > 1
    output.publish(build, {"hill": []})
    assert beside(build) == []
    assert output.differences(build / "vale") == ()


@pytest.mark.parametrize("step", [0, 1, 2])
def test_without_the_single_step_the_next_writer_brings_the_folder_back(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, step: int
) -> None:
    build = tmp_path / "build"
    output.publish(build, {"vale": [File("a", b"old")]})
    real: Callable[..., Path] = Path.rename
    done = 0

    def dying(self: Path, target: Path) -> Path:
        nonlocal done
        if done == step:
            os._exit(9)
        done += 1
        return real(self, target)

    child = os.fork()
    if child == 0:
        monkeypatch.setattr(exchange, "_exchange_in_one", lambda _new, _place: False)
        monkeypatch.setattr(Path, "rename", dying)
        output.publish(build, {"vale": [File("a", b"new")]})
        os._exit(0)
    assert os.waitstatus_to_exitcode(os.waitpid(child, 0)[1]) == 9
    assert build.exists() == (step != 1)
    output.publish(build, {"hill": []})
    assert (build / "vale/a").read_bytes() == (b"new" if step == 2 else b"old")
    assert beside(build) == []


def test_the_single_step_is_there_on_linux(tmp_path: Path) -> None:
    for name in "ab":
        (tmp_path / name).mkdir()
        (tmp_path / name / name).touch()
    if sys.platform != "linux":
        pytest.skip("renameat2 is a call of Linux")
    assert exchange._exchange_in_one(tmp_path / "a", tmp_path / "b")
    assert (tmp_path / "a/b").exists()
    assert (tmp_path / "b/a").exists()
