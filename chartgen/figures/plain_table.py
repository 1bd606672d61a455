"""Columns for a terminal: as wide as their widest cell, no colour, no lines. Used by the texts of comparisons."""

from __future__ import annotations

import csv
import io
import textwrap
from collections.abc import Iterable, Mapping, Sequence


def columns(
    heads: Sequence[str], rows: Sequence[Sequence[str]], width: int, indent: str = "  ", words: bool = False
) -> list[str]:
    """Lines of a table, its columns to the right; with `words` the last one to the left, and wrapped.

    Where the table is wider than `width`, or leaves a column of words less than 20 of it, each row is written as a
    line of its own, "head: cell; head: cell", wrapped; no column is lost.
    """
    sizes = [max(len(row[i]) for row in (heads, *rows)) for i in range(len(heads))]
    used = len(indent) + sum(sizes[:-1]) + 2 * (len(heads) - 1)
    room = width - used
    if room < (min(20, sizes[-1]) if words else sizes[-1]):
        listed = ("; ".join(f"{h}: {c}" for h, c in zip(heads, row, strict=True) if c) for row in rows)
        return [line for text in listed for line in wrapped(text, width, indent)]
    lines = []
    for row in (heads, *rows):
        front = "  ".join(cell.rjust(size) for cell, size in zip(row[:-1], sizes[:-1], strict=True))
        text = row[-1] if words else row[-1].rjust(sizes[-1])
        last = (textwrap.wrap(text, room, break_on_hyphens=False) if words else [text]) or [""]
        lines.append(f"{indent}{front}  {last[0]}".rstrip())
        lines += [" " * used + more for more in last[1:]]
    return lines


def wrapped(text: str, width: int, indent: str = "") -> list[str]:
    """A sentence in lines of at most `width`, what follows the first indented by two more."""
    return textwrap.wrap(text, width, initial_indent=indent, subsequent_indent=indent + "  ", break_on_hyphens=False)


def csv_text(heads: Sequence[str], rows: Iterable[Mapping[str, object]]) -> str:
    """CSV (RFC 4180): commas, CRLF, quotes doubled, a header first; None is empty, truths are `true` and `false`."""
    out = io.StringIO()
    writer = csv.DictWriter(out, heads, lineterminator="\r\n")
    writer.writeheader()
    writer.writerows({key: _cell(value) for key, value in row.items()} for row in rows)
    return out.getvalue()


def _cell(value: object) -> object:
    if isinstance(value, bool):
        return "true" if value else "false"
    return "" if value is None else value
