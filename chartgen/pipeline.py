"""The stairs: from edition files to a build folder, in numbered steps. DEVELOPERS.md and the progress count the same.

1. **Read** each edition: every fault at once (`edition/`).
2. **Work out** its figures: one tidy table (`figures/`, `motion/`).
3. **Compose** sheets and pages from that table and the word lists (`charts/`, `language/`, `sheets/`, `site/`).
4. **Print** each distinct sheet to PDF over the cores (`press/`, `jobs.py`).
5. **Check** our own product: write it beside the build folder, read it from there, find every number in the table.
6. **Publish**: exchange the finished folder with the old one, whole or not at all (`output.py`).
"""

from __future__ import annotations

import importlib
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Protocol, TypeVar, cast

from chartgen import jobs, output
from chartgen.edition.model import Edition
from chartgen.errors import CommandFault, EditionFaults, Fault, Finding, ProductFaults

if TYPE_CHECKING:
    from chartgen.figures.record import Figures
    from chartgen.language.load import Language
    from chartgen.sheets.sheet import Sheet

T = TypeVar("T")
STEPS = ("Read", "Work out", "Compose", "Print", "Check", "Publish")
LONG = 1e9  # an edition's pages take longer than any sheet: first into the queue
WAITING = "waiting: another chartgen is writing into this folder"


class Progress(Protocol):
    """Who is told how far the work is. `number` counts from 1 as above."""

    def step(self, number: int, what: str, of: int) -> None:
        """A step begins that has `of` pieces."""

    def done(self, what: str) -> None:
        """One piece of the step is finished."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Work:
    """An edition with all that is made from it before anything is drawn."""

    edition: Edition
    figures: Figures
    languages: tuple[Language, ...]

    @property
    def warnings(self) -> tuple[str, ...]:
        return (*self.edition.warnings, *(notice.text for notice in self.figures.notices))


@dataclass(frozen=True, slots=True, kw_only=True)
class Pressed:
    """What was made of one edition. `sheets`: each file's path with its number of pages."""

    work: Work
    manifest: output.Manifest
    sheets: tuple[tuple[str, int], ...]


def press(paths: Sequence[str | Path], build: Path, *, workers: int, progress: Progress) -> tuple[Pressed, ...]:
    """Make everything the editions at `paths` ask for, into `build`, whole or not at all.

    Raises EditionFaults, CommandFault, ProductFaults (the build folder is then as it was) or MachineFault.
    """
    with jobs.crew(workers, load_libraries) as crew:
        progress.step(1, "Reading the editions", len(paths))
        editions = read(paths, progress)
        refuse_unmade(editions)

        progress.step(2, "Working out the figures", len(editions))
        works = [work_out(edition, progress) for edition in editions]

        progress.step(3, "Composing sheets and pages", 2 * len(works))
        sheets = compose_sheets(works, crew, progress)
        pages = compose_pages(works, sheets, crew, progress)

        progress.step(4, "Printing the sheets", sum(len(s) for s in sheets) + len(works))
        printed = print_sheets(sheets, crew, progress)

        with output.staging(build, lambda: progress.done(WAITING)) as stage:
            manifests = write(stage, works, *with_sizes(works, sheets, pages(), printed()))
            progress.step(5, "Checking every number on the finished files", sum(len(s) + 1 for s in sheets))
            check(stage.path, works, sheets, crew, progress)

            progress.step(6, "Putting the finished files in place", 1)
            stage.publish()
            progress.done(str(build))
    return tuple(
        Pressed(work=w, manifest=m, sheets=tuple((s.path, s.pages) for s in made))
        for w, m, made in zip(works, manifests, sheets, strict=True)
    )


def read(paths: Sequence[str | Path], progress: Progress) -> list[Edition]:
    """The editions, or all faults of all of them at once; two with one id are a fault."""
    from chartgen.edition.load import load_edition

    editions: dict[str, Edition] = {}
    faults: list[Fault] = []
    for path in paths:
        try:
            edition = load_edition(path)
        except EditionFaults as error:
            faults += error.faults
            continue
        if edition.id in editions:
            problem = f"{editions[edition.id].file} has this id already"
            faults.append(Fault(edition.file, "edition.id", problem, "an id of its own", f'"{edition.id}"'))
        editions.setdefault(edition.id, edition)
        progress.done(edition.id)
    if faults:
        raise EditionFaults(tuple(faults))
    return list(editions.values())


def refuse_unmade(editions: Iterable[Edition]) -> None:
    """Raise EditionFaults for every part of an edition that parses but is not made yet: nothing is left out unsaid."""
    unmade = [(edition.file, *part.partition(": ")) for edition in editions for part in edition.unmade]
    if unmade:
        raise EditionFaults(
            tuple(Fault(file, key, f"not yet: {reason}", "leave it out") for file, key, _, reason in unmade)
        )


def work_out(edition: Edition, progress: Progress) -> Work:
    """The edition's table of figures and its languages."""
    from chartgen.figures.table import figures
    from chartgen.language.load import languages

    work = Work(edition=edition, figures=figures(edition), languages=languages(edition))
    progress.done(edition.id)
    return work


def load_libraries() -> None:
    """What each worker loads while this process reads the editions."""
    for name in ("sheets.posters", "sheets.cards", "site.pages", "site.check", "press.preflight", "press.render"):
        importlib.import_module(f"chartgen.{name}")
    importlib.import_module("chartgen.press.engine").load()


def compose_sheets(works: Sequence[Work], crew: jobs.Crew, progress: Progress) -> list[tuple[Sheet, ...]]:
    """Posters and cards of each edition, in the order they are asked for."""
    work = [
        jobs.Job(name=f"{w.edition.id}: {kind}", key=f"{kind} {w.edition.id}", work=make, args=(w,))
        for w in works
        for kind, make in (("posters", _posters), ("cards", _cards))
    ]
    made = _all_or_faults(crew, work, progress)()
    return [(*made[2 * i], *made[2 * i + 1]) for i in range(len(works))]


def _posters(work: Work) -> tuple[Sheet, ...]:
    from chartgen.sheets.posters import posters

    return posters(work.edition, work.figures, work.languages)


def _cards(work: Work) -> tuple[Sheet, ...]:
    if work.edition.cards is None:
        return ()
    from chartgen.sheets.cards import cards

    return cards(work.edition, work.figures, work.languages)


def compose_pages(
    works: Sequence[Work], sheets: Sequence[tuple[Sheet, ...]], crew: jobs.Crew, progress: Progress
) -> Callable[[], list[tuple[output.File, ...]]]:
    """The web pages and data files of each edition, begun: the cores work on them and on the sheets side by side."""
    work = [
        jobs.Job(name=f"{w.edition.id}: pages", key=f"pages {w.edition.id}", work=_pages, args=(w, made), weight=LONG)
        for w, made in zip(works, sheets, strict=True)
    ]
    return _all_or_faults(crew, work, progress)


def _pages(work: Work, sheets: tuple[Sheet, ...]) -> tuple[output.File, ...]:
    from chartgen.site.pages import pages

    return tuple(pages(work.edition, work.figures, work.languages, sheets))


def _all_or_faults(crew: jobs.Crew, work: Sequence[jobs.Job[T]], progress: Progress) -> Callable[[], list[T]]:
    """The results, or what is wrong with any of them, all at once: a person should not mend one sheet a run."""
    tried = [jobs.Job(name=j.name, key=j.key, weight=j.weight, work=_tried, args=(j.work, j.args)) for j in work]
    wait = crew.start(tried, lambda job: progress.done(job.name))

    def results() -> list[T]:
        made = wait()
        if faults := [fault for result in made if isinstance(result, EditionFaults) for fault in result.faults]:
            raise EditionFaults(tuple(dict.fromkeys(faults)))
        if findings := [finding for result in made if isinstance(result, ProductFaults) for finding in result.findings]:
            raise ProductFaults(tuple(findings))
        return cast("list[T]", made)

    return results


def _tried(work: Callable[..., T], args: tuple[object, ...]) -> T | EditionFaults | ProductFaults:
    try:
        return work(*args)
    except (EditionFaults, ProductFaults) as error:
        return error


def print_sheets(
    sheets: Sequence[tuple[Sheet, ...]], crew: jobs.Crew, progress: Progress
) -> Callable[[], list[tuple[output.File, ...]]]:
    """The PDF of each sheet, begun; sheets with the same content are printed once."""
    from chartgen.press.render import render

    work = [
        jobs.Job(
            name=sheet.path,
            key=jobs.content_key(sheet.html, sheet.title, sheet.lang, sheet.width_mm, sheet.height_mm, sheet.pages),
            work=render,
            args=(sheet,),
            weight=len(sheet.html),
        )
        for made in sheets
        for sheet in made
    ]
    wait = _all_or_faults(crew, work, progress)

    def printed() -> list[tuple[output.File, ...]]:
        data = iter(wait())
        return [tuple(output.File(sheet.path, next(data)) for sheet in made) for made in sheets]

    return printed


def with_sizes(
    works: Sequence[Work],
    sheets: Sequence[tuple[Sheet, ...]],
    pages: Sequence[tuple[output.File, ...]],
    printed: Sequence[tuple[output.File, ...]],
) -> tuple[list[tuple[output.File, ...]], Sequence[tuple[output.File, ...]]]:
    """The pages again, with how large each printed sheet is on the pages that offer it, and the sheets as they are."""
    from chartgen.site.pages import sized_pages

    made = []
    for work, sheet, files, pdfs in zip(works, sheets, pages, printed, strict=True):
        sizes = {file.path: len(file.data) for file in pdfs}
        sized = {f.path: f for f in sized_pages(work.edition, work.figures, work.languages, sheet, sizes, files)}
        made.append(tuple(sized.get(file.path, file) for file in files))
    return made, printed


def write(
    stage: output.Stage,
    works: Sequence[Work],
    pages: Sequence[tuple[output.File, ...]],
    printed: Sequence[tuple[output.File, ...]],
) -> list[output.Manifest]:
    """Write it all into the stage: the editions, what else the build folder holds, and an opening page for all."""
    from chartgen.site import opening

    stage.reserve(opening.PATH)
    made = [
        stage.write_edition(w.edition.id, (*page_files, *sheet_files), opening.about(w.edition, w.languages))
        for w, page_files, sheet_files in zip(works, pages, printed, strict=True)
    ]
    others = stage.carry_over()
    stage.write_opening(opening.opening({m.edition: m.about for m in (*made, *others)}))
    return made


def check(
    folder: Path, works: Sequence[Work], sheets: Sequence[tuple[Sheet, ...]], crew: jobs.Crew, progress: Progress
) -> None:
    """Read every finished file again from `folder`. Raises ProductFaults with all that is wrong."""
    work = [
        jobs.Job(name=name, key=name, work=_check_sheet, args=(folder, w, sheet))
        for w, made in zip(works, sheets, strict=True)
        for sheet in made
        for name in (f"{w.edition.id}/{sheet.path}",)
    ]
    work += [
        jobs.Job(name=f"{w.edition.id}: pages", key=f"pages {w.edition.id}", work=_check_pages, args=(folder, w))
        for w in works
    ]
    findings = crew.run(work, lambda job: progress.done(job.name))
    if wrong := [finding for part in findings for finding in part]:
        raise ProductFaults(tuple(wrong))


def _check_sheet(folder: Path, work: Work, sheet: Sheet) -> tuple[Finding, ...]:
    from chartgen.press.preflight import check_pdf

    place = folder / work.edition.id / sheet.path
    if not place.is_file():
        return (Finding("output.missing", f"{work.edition.id}/{sheet.path}", "the file is not there"),)
    return _placed(work, check_pdf(place.read_bytes(), sheet, work.figures, work.languages))


def _check_pages(folder: Path, work: Work) -> tuple[Finding, ...]:
    from chartgen.site.check import check_pages

    place = folder / work.edition.id
    whole = tuple(Finding("output.manifest", work.edition.id, detail) for detail in output.differences(place))
    if whole:
        return whole
    files = {p.relative_to(place).as_posix(): p.read_bytes() for p in sorted(place.rglob("*")) if p.is_file()}
    return _placed(work, check_pages(files, work.edition, work.figures, work.languages))


def _placed(work: Work, findings: Iterable[Finding]) -> tuple[Finding, ...]:
    return tuple(Finding(f.code, f"{work.edition.id}/{f.file}", f.detail) for f in findings)


def preflight(paths: Sequence[str | Path], build: Path, *, workers: int, progress: Progress) -> tuple[Work, ...]:
    """Check the finished files of editions again, against the editions as they are now: steps 1, 2, 3 and 5."""
    with jobs.crew(workers, load_libraries) as crew:
        progress.step(1, "Reading the editions", len(paths))
        editions = read(paths, progress)
        refuse_unmade(editions)
        for edition in editions:
            if not (build / edition.id).is_dir():
                raise CommandFault(f"{build} holds no edition {edition.id}", f"chartgen press {edition.id}")
        progress.step(2, "Working out the figures", len(editions))
        works = [work_out(edition, progress) for edition in editions]
        progress.step(3, "Composing the sheets to compare with", 2 * len(works))
        sheets = compose_sheets(works, crew, progress)
        progress.step(5, "Checking every number on the finished files", sum(len(s) + 1 for s in sheets))
        check(build, works, sheets, crew, progress)
    return tuple(works)
