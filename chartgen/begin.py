"""Start an edition: a copy of a starter in a folder of one's own."""

from __future__ import annotations

import re
import shutil
from pathlib import Path

from chartgen.errors import CommandFault, MachineFault
from chartgen.resources import starters

_PREVIOUS_LINE = re.compile(r'^previous\s*=\s*"([^"/]+)"[^\n]*\n', re.MULTILINE)
_ID_LINE = re.compile(r'^(id\s*=\s*)"[^"]*"', re.MULTILINE)


def begin(starter: str, folder: Path) -> tuple[Path, ...]:
    """Copy the edition `starter` into the new folder `folder`, with the folder's name as its id. The files made.

    Raises CommandFault where the folder is there already and not empty, or its name makes no id.
    """
    name = folder.resolve().name
    new_id = re.sub(r"[^a-z0-9]+", "-", name.lower()).strip("-")
    if not new_id:
        raise CommandFault(f'the folder name "{name}" makes no id', "a name with letters a to z or digits")
    if folder.exists() and (not folder.is_dir() or any(folder.iterdir())):
        raise CommandFault(f'"{folder}" is there already', "a folder that is empty or not there yet")
    source = starters() / starter
    try:
        shutil.copytree(source, folder, dirs_exist_ok=True)
        edition = folder / "edition.toml"
        text = edition.read_text(encoding="utf-8")
        text = _ID_LINE.sub(rf'\g<1>"{new_id}"', text, count=1)
        # A first issue has none before it.
        for line in _PREVIOUS_LINE.finditer(text):
            (folder / line[1]).unlink(missing_ok=True)
        edition.write_text(_PREVIOUS_LINE.sub("", text), encoding="utf-8")
    except OSError as error:
        problem = f"Writing failed at {error.filename or folder}: {error.strerror}"
        raise MachineFault(problem, "Choose a folder that can be written") from error
    return tuple(sorted(p for p in folder.rglob("*") if p.is_file()))
