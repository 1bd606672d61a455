"""The wording of errors: one tree of errors in, sentences for a person out. Only `cli.py` asks for them."""

from __future__ import annotations

import re

from chartgen.errors import ChartgenError, CommandFault, EditionFaults, Fault, MachineFault, ProductFaults


def sentences(error: ChartgenError) -> tuple[str, ...]:
    """What went wrong, one line each: what, where, and what would be right."""
    match error:
        case EditionFaults():
            lines = (fault_line(fault) for fault in error.faults)
            return (*lines, _count(len(error.faults), "fault", "nothing was made"))
        case ProductFaults():
            lines = (f"{f.file}: {_end(f.detail)} [{f.code}]" for f in error.findings)
            return (*lines, _count(len(error.findings), "failed check", "the build folder is as it was"))
        case CommandFault():
            return (_end(error.problem), *([f"Right: {_end(error.allowed)}"] if error.allowed else []))
        case MachineFault():
            return (_end(error.problem), *([_end(error.remedy)] if error.remedy else []))
        case _:
            return (_end(str(error)),)


_COUNTED = re.compile(r"(driver|surface|vehicle|case|poster|limit)\[([0-9]+)\]")
"""Sections that stand in a file more than once: key paths count them from 1, and the message says so in words."""


def fault_line(fault: Fault) -> str:
    """``file: key = given: problem. Right: allowed. Did you mean "near"?``, without what is not there."""
    where = ": ".join(filter(None, [fault.file, fault.key]))
    if fault.given is not None:
        where += f" = {fault.given}" if fault.key else f": {fault.given}"
    if (counted := _COUNTED.match(fault.key)) is not None:
        where += f" (in the {_ordinal(int(counted[2]))} [[{counted[1]}]])"
    parts = [f"{where}: {_end(fault.problem)}"]
    if fault.allowed:
        parts.append(f"Right: {_end(fault.allowed)}")
    if fault.near:
        parts.append(f'Did you mean "{fault.near}"?')
    return " ".join(parts)


def _ordinal(number: int) -> str:
    tail = "th" if number % 100 in (11, 12, 13) else {1: "st", 2: "nd", 3: "rd"}.get(number % 10, "th")
    return f"{number}{tail}"


def _count(number: int, what: str, so: str) -> str:
    return f"{number} {what}{'' if number == 1 else 's'}; {so}."


def _end(sentence: str) -> str:
    return sentence if sentence.endswith((".", "?", "!", "…")) else f"{sentence}."
