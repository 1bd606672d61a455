"""Files beside edition.toml: which file a name means, and a CSV's rows with their line numbers."""

from __future__ import annotations

import csv
import io
import re
from pathlib import Path

from chartgen.edition.find import MOST_BYTES, read_text
from chartgen.edition.reading import Reading
from chartgen.errors import EditionFaults


def text_beside(
    reading: Reading, folder: Path, key: str, name: str, example: str, most_bytes: int = MOST_BYTES
) -> tuple[str, str] | None:
    """The text of the file `name` in the edition's folder and how messages call it; None where it cannot be had.

    Only a plain name of the kind of `example` is taken: never a path out of the folder.
    """
    suffix = re.escape(Path(example).suffix)
    if not re.fullmatch(rf"[A-Za-z0-9][A-Za-z0-9_.-]*{suffix}", name):
        reading.fault(key, "this is not the name of a file beside edition.toml", f'"{example}"', given=name)
        return None
    file = folder / name
    if not file.is_file():
        reading.fault(key, "there is no such file beside edition.toml", f"a file {name}", given=name)
        return None
    shown = str(Path(reading.file).parent / name)
    try:
        return read_text(file, shown, most_bytes), shown
    except EditionFaults as fault:
        reading.faults.extend(fault.faults)
        return None


def csv_lines(reading: Reading, text: str, shown: str) -> list[tuple[int, list[str]]] | None:
    """Rows of a CSV (RFC 4180) that hold anything, each with the number of its last line; None where it is no CSV."""
    rows = csv.reader(io.StringIO(text, newline=""), strict=True)
    try:
        lines = [(rows.line_num, [cell.strip() for cell in cells]) for cells in rows if any(c.strip() for c in cells)]
    except csv.Error as fault:
        reading.fault("", f"this is not CSV: {fault}", "one row a line, commas between the cells", file=shown)
        return None
    if lines and len(lines[0][1]) == 1 and ";" in lines[0][1][0]:
        reading.fault("line 1", "the columns are separated by semicolons", "commas between the columns", file=shown)
        return None
    return lines
