"""The one error tree. Facts are fields; only `cli.py` turns an error into text for a person.

Exit codes: 0 done; 1 the finished work fails its own checks; 2 the edition or the command line is wrong;
3 the machine failed us.
"""

from __future__ import annotations

from dataclasses import dataclass


class ChartgenError(Exception):
    """Root of everything this program raises on purpose."""

    exit_code = 3


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing that is wrong in an edition: where it stands, what was given, what would be right.

    `file` is the path as the user named it, `key` a dotted path such as ``vehicle[2].brake_lag`` ("" for the whole
    file), `given` the value as written in the file (None where nothing was given), `problem` one sentence, `allowed`
    what would be right, `near` a near name for a misspelt one.
    """

    file: str
    key: str
    problem: str
    allowed: str = ""
    given: str | None = None
    near: str | None = None


class EditionFaults(ChartgenError):
    """Everything that is wrong with an edition, all at once."""

    exit_code = 2

    def __init__(self, faults: tuple[Fault, ...]) -> None:
        super().__init__(f"{len(faults)} fault(s)")
        self.faults = faults


class CommandFault(ChartgenError):
    """The command line asks for something that cannot be: a missing folder, an unknown edition name."""

    exit_code = 2

    def __init__(self, problem: str, allowed: str = "") -> None:
        super().__init__(problem)
        self.problem = problem
        self.allowed = allowed


@dataclass(frozen=True, slots=True)
class Finding:
    """One failed check of a finished file. `code` is stable and tested; `file` is relative to the build folder."""

    code: str
    file: str
    detail: str


class ProductFaults(ChartgenError):
    """The finished work fails its own checks."""

    exit_code = 1

    def __init__(self, findings: tuple[Finding, ...]) -> None:
        super().__init__(f"{len(findings)} finding(s)")
        self.findings = findings


class MachineFault(ChartgenError):
    """The machine failed us: no disk, a library or a font that is not there. `remedy` says what to do."""

    exit_code = 3

    def __init__(self, problem: str, remedy: str = "") -> None:
        super().__init__(problem)
        self.problem = problem
        self.remedy = remedy


class WordMissing(ChartgenError, KeyError):
    """A key that no word list has, or a placeholder that was not filled: a fault of the program, not of an edition."""

    exit_code = 3

    def __init__(self, tag: str, key: str, detail: str = "") -> None:
        super().__init__(f"{tag}: {key}")
        self.tag = tag
        self.key = key
        self.detail = detail

    def __str__(self) -> str:
        reason = self.detail or "no word list has this key"
        return f"word {self.key!r} ({self.tag}): {reason}"


class Unprintable(ChartgenError, ValueError):
    """A number that must not be printed as it is: not finite, or not rounded yet where only a rounded one may stand."""

    exit_code = 3
