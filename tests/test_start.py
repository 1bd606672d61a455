"""The questions of start.sh: does it say in one line what a machine lacks, and cost nothing once it is set up?"""

from __future__ import annotations

import os
import shutil
import subprocess
import time
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
# What the smallest Debian has of what start.sh calls.
TOOLS = ("cat", "cksum", "dirname", "env", "flock", "grep", "mkdir", "mv", "rm", "tail", "tr", "uname")
PANGO = "libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz-subset0"


class Machine:
    """A copy of what start.sh reads, in a folder with a space and an umlaut, on a machine with few tools."""

    def __init__(self, folder: Path) -> None:
        self.root = folder / "a föld er"
        (self.root / "requirements").mkdir(parents=True)
        for name in ("start.sh", "pyproject.toml", "requirements/run.lock", "requirements/check.lock"):
            shutil.copy(ROOT / name, self.root / name)
        self.bin = folder / "bin"
        self.bin.mkdir()
        for name in TOOLS:
            found = shutil.which(name)
            assert found, f"{name} is not on this machine"
            (self.bin / name).symlink_to(found)

    def tool(self, name: str, script: str) -> None:
        # First away with a link: writing goes through it, into the machine's own tool.
        (self.bin / name).unlink(missing_ok=True)
        with (self.bin / name).open("x") as file:
            file.write(f"#!/bin/sh\n{script}\n")
        (self.bin / name).chmod(0o755)

    def start(self, *arguments: str) -> subprocess.CompletedProcess[str]:
        command = ["/bin/sh", str(self.root / "start.sh"), *arguments]
        environment = {"PATH": str(self.bin)}
        return subprocess.run(command, env=environment, capture_output=True, text=True, timeout=60, check=False)

    def set_up_as(self, what: str) -> None:
        """Put a stamp there as if set up, and a Python that says how it is called."""
        bin_ = self.root / ".venv/bin"
        bin_.mkdir(parents=True, exist_ok=True)
        (bin_ / "python").write_text('#!/bin/sh\n[ "$1" = -c ] || printf "%s|" "$PWD" "$@"\n')
        (bin_ / "python").chmod(0o755)
        parts = ("requirements/run.lock", "requirements/check.lock", "pyproject.toml")
        content = b"".join((self.root / part).read_bytes() for part in parts) + f"{self.root}\n".encode()
        total = subprocess.run(["cksum"], input=content, capture_output=True, check=True).stdout.decode()
        (self.root / ".venv/.stamp").write_text(f"{what} {total}")


@pytest.fixture
def machine(tmp_path: Path) -> Machine:
    return Machine(tmp_path)


def test_without_root_one_line_says_exactly_what_to_install(machine: Machine) -> None:
    machine.tool("apt-get", "exit 1")
    machine.tool("id", "echo 1000")
    for arguments, more in (((), ""), (("test",), " chromium libatomic1")):
        got = machine.start(*arguments)
        assert got.stderr.rstrip() == (
            "start.sh: please run this as root, then start again: apt-get update && apt-get install -y"
            f" --no-install-recommends python3 python3-venv {PANGO}{more}"
        )
        assert got.returncode == 3


def test_another_system_is_told_in_one_line(machine: Machine) -> None:
    machine.tool("uname", "echo Darwin")
    got = machine.start()
    begin = "start.sh: this system lacks something that chartgen needs; please do this, then start again: "
    assert got.stderr == begin + "brew install python pango\n"
    assert got.returncode == 3


def test_a_failing_apt_is_told_in_one_line_and_logged(machine: Machine) -> None:
    machine.tool("apt-get", "echo no mirror answers; exit 100")
    machine.tool("id", "echo 0")
    got = machine.start()
    first, second = got.stderr.splitlines()
    assert first == f"start.sh: installing python3 python3-venv {PANGO} (a minute; only this once)"
    assert second == (
        f"start.sh: apt-get could not install python3 python3-venv {PANGO} (why: {machine.root}/.setup.log)"
    )
    assert got.returncode == 3
    assert "no mirror answers" in (machine.root / ".setup.log").read_text()


def test_all_packages_are_asked_for_in_one_call(machine: Machine) -> None:
    machine.tool("apt-get", f'echo "$*" >>"{machine.root}/calls"')
    machine.tool("id", "echo 0")
    got = machine.start("test")
    installs = [c for c in (machine.root / "calls").read_text().splitlines() if " install " in c]
    assert len(installs) == 1
    assert installs[0].endswith(f"--no-install-recommends python3 python3-venv {PANGO} chromium libatomic1")
    assert "this is still not usable: python3" in got.stderr
    assert got.returncode == 3


def test_a_folder_that_cannot_be_written_is_told(machine: Machine) -> None:
    if os.getuid() == 0:
        pytest.skip("root may write everywhere")
    machine.root.chmod(0o555)
    got = machine.start()
    assert got.stderr == f"start.sh: cannot write into {machine.root}; put the project into a folder of your own\n"
    assert got.returncode == 3


@pytest.mark.parametrize("stamp", ["run", "check"])
def test_once_set_up_it_starts_at_once_and_passes_the_command_on(machine: Machine, stamp: str) -> None:
    machine.set_up_as(stamp)
    began = time.perf_counter()
    assert machine.start().stdout == f"{machine.root}|-m|chartgen|press|"
    assert time.perf_counter() - began < 1.0
    passed_on = machine.start("figures", "a b", "--format", "json").stdout
    assert passed_on == f"{Path.cwd()}|-m|chartgen|figures|a b|--format|json|"


def test_tests_need_their_own_set_up(machine: Machine) -> None:
    machine.set_up_as("check")
    assert machine.start("test", "tests/a b").stdout == f"{machine.root}|-m|pytest|-n|auto|tests/a b|"
    machine.set_up_as("run")
    assert "start.sh: " in machine.start("test").stderr


@pytest.mark.parametrize("changed", ["requirements/run.lock", "requirements/check.lock", "pyproject.toml"])
def test_a_change_of_what_is_pinned_sets_up_again(machine: Machine, changed: str) -> None:
    machine.set_up_as("run")
    with (machine.root / changed).open("a") as file:
        file.write("\n")
    assert machine.start().returncode == 3


def test_whoever_has_the_packages_of_the_tests_keeps_them(machine: Machine) -> None:
    """Where what is pinned changes and another command runs first; not without Chromium, which the tests need."""
    machine.set_up_as("check")
    (machine.root / "pyproject.toml").write_text("")
    machine.tool("apt-get", "exit 1")
    machine.tool("id", "echo 1000")
    asked = "apt-get install -y --no-install-recommends"
    assert f"{asked} python3 python3-venv {PANGO} \n" in machine.start().stderr
    machine.tool("chromium", "")
    assert f"{asked} python3 python3-venv {PANGO} libatomic1 \n" in machine.start().stderr


def test_a_folder_that_was_moved_sets_up_again(machine: Machine, tmp_path: Path) -> None:
    machine.set_up_as("run")
    machine.root = machine.root.rename(tmp_path / "elsewhere")
    assert machine.start().returncode == 3


def test_a_virtual_environment_whose_python_is_gone_is_made_again(machine: Machine) -> None:
    machine.set_up_as("run")
    (machine.root / ".venv/bin/python").unlink()
    assert machine.start().returncode == 3


def test_a_failing_installation_is_told_by_its_first_error(machine: Machine) -> None:
    """A wrong hash, say: pip refuses the file, no stamp is written, and the next start begins anew."""
    script = """case "$1 $2" in
  "-m venv") mkdir -p "$3/bin"; cat >"$3/bin/python" <<'X'
#!/bin/sh
printf 'Collecting a\\nERROR: THE HASHES DO NOT MATCH\\n  Got 12\\n'
exit 1
X
  chmod +x "$3/bin/python" ;;
esac"""
    machine.tool("python3", script)
    machine.tool("chmod", 'exec /bin/chmod "$@"')
    got = machine.start()
    said = "installing the pinned packages failed"
    assert got.stderr.splitlines()[-1] == (
        f"start.sh: {said} (all of it: {machine.root}/.setup.log): ERROR: THE HASHES DO NOT MATCH"
    )
    assert got.returncode == 3
    assert not (machine.root / ".venv/.stamp").exists()


def test_two_at_once_wait_for_each_other(machine: Machine) -> None:
    lock = machine.root / ".setup.lock"
    holder = subprocess.Popen(["flock", str(lock), "-c", "echo held; sleep 1"], stdout=subprocess.PIPE, text=True)
    assert holder.stdout is not None
    assert holder.stdout.readline() == "held\n"
    got = machine.start()
    assert got.stderr.splitlines()[0] == "start.sh: another set-up is at work here; waiting for it"
    assert holder.wait(timeout=20) == 0
    holder.stdout.close()


def test_ci_calls_the_second_command_and_nothing_else() -> None:
    lines = [line for line in (ROOT / ".ci/run").read_text().splitlines() if line and not line.startswith("#")]
    assert lines == ['cd "$(dirname "$0")/.." && exec sh start.sh test']
