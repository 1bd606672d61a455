"""What the commands `changes` and `compare` say: the bell rings here for the longer answers. No printing, no clock."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Any

from chartgen.edition.find import read_text
from chartgen.edition.load import load_edition
from chartgen.edition.previous import MOST_BYTES, figures_in
from chartgen.edition.reading import Reading
from chartgen.errors import CommandFault, EditionFaults, Fault
from chartgen.figures import changes_text, compare_text
from chartgen.figures.changes import changes
from chartgen.figures.compare import compare
from chartgen.figures.export import document
from chartgen.figures.table import figures

if TYPE_CHECKING:
    from chartgen.edition.model import Edition


@dataclass(frozen=True, slots=True, kw_only=True)
class Answer:
    """What goes to stdout; warnings that belong to no edition; the editions read, for their own warnings."""

    text: str
    warnings: tuple[str, ...] = ()
    editions: tuple[Edition, ...] = field(default=())


def compared(edition: str, shape: str, width: int) -> Answer:
    """The answer of `chartgen compare EDITION`; `shape`: text, csv or json."""
    read = load_edition(edition)
    made = figures(read)
    found = compare(made, read)
    if shape == "text":
        text = compare_text.to_text(found, made, read, width)
    else:
        text = compare_text.to_json(found, made) if shape == "json" else compare_text.to_csv(found)
    return Answer(text=text, editions=(read,))


def changed(old: str, new: str, shape: str, width: int) -> Answer:
    """The answer of `chartgen changes OLD NEW`; each an edition or a figures JSON; `shape`: text, csv or json.

    Raises CommandFault, EditionFaults: what is wrong with either, those of both files at once.
    """
    issues: list[dict[str, Any]] = []
    editions: list[Edition] = []
    faults: list[Fault] = []
    for given in (old, new):
        try:
            issue, edition = _issue(given)
        except EditionFaults as fault:
            faults += fault.faults
            continue
        issues.append(issue)
        # Named twice, an edition has its warnings once.
        if edition is not None and all(edition.file != other.file for other in editions):
            editions.append(edition)
    if faults:
        # The same file twice, with the same faults, is told once.
        raise EditionFaults(tuple(dict.fromkeys(faults)))
    found = changes(*issues)
    warnings = []
    if not found.same_edition:
        warnings.append(f'these are figures of two editions, "{found.old}" and "{found.new}".')
    makers = {
        "text": lambda c: changes_text.to_text(c, width),
        "csv": changes_text.to_csv,
        "json": changes_text.to_json,
    }
    return Answer(text=makers[shape](found), warnings=tuple(warnings), editions=tuple(editions))


def _issue(given: str) -> tuple[dict[str, Any], Edition | None]:
    """The public figures that a command line names, and the edition where it names one."""
    file = Path(given)
    is_json = file.suffix == ".json"
    if is_json and not file.is_file():
        raise CommandFault(f'There is no file "{given}"', "the figures (JSON) of an issue, or an edition")
    if not is_json:
        edition = load_edition(given)
        return document(figures(edition)), edition
    reading = Reading(file=given)
    found = figures_in(reading, read_text(file, given, MOST_BYTES), given)
    if found is None:
        raise EditionFaults(tuple(reading.faults))
    return found, None
