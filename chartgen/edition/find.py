"""Which file an edition's name means, and its bytes as text."""

from __future__ import annotations

import os
import re
import tomllib
from decimal import Decimal
from pathlib import Path
from typing import Any

from chartgen.edition.reading import ID_PATTERN, near
from chartgen.errors import CommandFault, EditionFaults, Fault, MachineFault
from chartgen.resources import starters

FILE_NAME = "edition.toml"
MOST_BYTES = 1_000_000


def edition_file(path: str | os.PathLike[str]) -> Path:
    """The edition file that `path` means: a folder that holds one, the file itself, or a name under site_config/.

    A site_config/ in the current folder goes before the starter editions that came with the program. Raises
    CommandFault.
    """
    named = Path(path)
    if named.is_dir():
        inside = named / FILE_NAME
        if inside.is_file():
            return inside
        if not re.fullmatch(ID_PATTERN, str(path)) or str(path) not in names():
            raise CommandFault(f'The folder "{named}" holds no {FILE_NAME}', f"a folder with a file {FILE_NAME}")
    if named.is_file():
        return named
    known = names()
    if str(path) in known:
        return known[str(path)]
    guess = near(str(path), known)
    allowed = "a folder that holds edition.toml, that file, or one of: " + ", ".join(known)
    raise CommandFault(f'There is no edition "{path}"' + (f'; did you mean "{guess}"?' if guess else ""), allowed)


def names() -> dict[str, Path]:
    """The editions that can be called by name, in alphabetical order: of ./site_config, else of the starters."""
    own = _in(Path("site_config"))
    return own or _in(starters())


def _in(folder: Path) -> dict[str, Path]:
    return {file.parent.name: file for file in sorted(folder.glob(f"*/{FILE_NAME}"))}


def read_text(file: Path, shown: str, most_bytes: int = MOST_BYTES) -> str:
    """The text of a file of an edition: UTF-8, at most `most_bytes`; a byte-order mark is dropped."""
    try:
        with file.open("rb") as stream:
            data = stream.read(most_bytes + 1)
    except OSError as fault:
        raise MachineFault(
            f'"{shown}" cannot be read: {fault.strerror}', "check the file and its permissions"
        ) from fault
    if len(data) > most_bytes:
        problem = f"the file is larger than {most_bytes // 1_000_000} MB"
        raise EditionFaults((Fault(shown, "", problem, f"at most {most_bytes:,} bytes"),))
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as fault:
        line = data.count(b"\n", 0, fault.start) + 1
        problem = f"the file is not UTF-8: the byte {data[fault.start]:#04x} in line {line} does not belong there"
        raise EditionFaults((Fault(shown, "", problem, "save the file as UTF-8"),)) from fault


def read_toml(text: str, shown: str) -> dict[str, Any]:
    """The tables of an edition file; numbers with a point as Decimal, as they were written."""
    if not text.strip():
        raise EditionFaults(
            (Fault(shown, "", "the file is empty", "at least [edition], [languages], [units] and so on"),)
        )
    try:
        return tomllib.loads(text, parse_float=Decimal)
    except RecursionError as fault:
        raise EditionFaults(
            (Fault(shown, "", "lists or tables stand too deep in one another", "a flat file"),)
        ) from fault
    except ValueError as fault:
        raise EditionFaults((Fault(shown, "", f"this is not TOML: {_plain(str(fault))}", _TOML_HINT),)) from fault


_TOML_HINT = 'sections such as [units], keys such as system = "uk", texts in double quotes'


def _plain(message: str) -> str:
    place = message[message.rfind("(at ") :] if "(at " in message else ""
    if message.startswith(("Cannot overwrite", "Cannot declare", "Duplicate")):
        return f"a key or a section stands there twice {place}".rstrip()
    return message[:1].lower() + message[1:160]
