"""The bell: commands, progress, exit codes. The only place that shows a person an error, and the only one with a clock.

Heavy libraries are imported within the command that needs them, so that `--help` and a mistyped name answer at once.
"""

from __future__ import annotations

import argparse
import contextlib
import difflib
import io
import os
import shutil
import signal
import sys
import tempfile
import traceback
from collections.abc import Callable, Iterator, Sequence
from datetime import UTC, date, datetime, timedelta
from pathlib import Path
from types import FrameType
from typing import TYPE_CHECKING, Any, NoReturn

from chartgen import __version__, report
from chartgen.errors import ChartgenError, CommandFault

if TYPE_CHECKING:
    from chartgen.commands import Answer
    from chartgen.edition.model import Edition
    from chartgen.pipeline import Pressed

NOT_YET = ("proof", "words")
STARTERS = {"charity": "tarnholt", "fleet": "quillane", "authority": "sarvelle"}
SHELVES = ("reaction", "surface", "vehicle", "gap", "headlight")
WARN_BEFORE = timedelta(days=60)


def run() -> NoReturn:
    """The command `chartgen`."""
    sys.exit(main(sys.argv[1:]))


def main(argv: Sequence[str]) -> int:
    """Run one command. Returns the exit code: 0 done, 1 the product fails its checks, 2 wrong input, 3 the machine."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):  # the names are in many scripts, whatever the terminal is set to
            stream.reconfigure(encoding="utf-8")
    try:
        with _stopped_by_signals():
            arguments = _parser().parse_args(_known(argv))
            code: int = arguments.command(arguments)
            sys.stdout.flush()
    except ChartgenError as error:
        _say(*report.sentences(error))
        code = error.exit_code
    except BrokenPipeError:
        # Whoever read our output has read enough. Nothing may be flushed into the closed pipe at exit.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        code = 0
    except KeyboardInterrupt:
        _say("Stopped. The build folder is as it was.")
        code = 130
    except Exception as error:  # noqa: BLE001  # no traceback ever reaches a person; it goes into a file
        what = f"{type(error).__name__}: {str(error)[:200]!r}"
        _say(f"Something went wrong inside chartgen: {what}. Details: {_details(error)}")
        code = 3
    return code


def _details(fault: Exception) -> str:
    """Where the details stand; the place of the fault itself where no file can be written."""
    told = f"chartgen {__version__}, Python {sys.version}\n{sys.argv}\n{traceback.format_exc()}"
    try:
        with tempfile.NamedTemporaryFile("w", prefix="chartgen-", suffix=".log", delete=False, encoding="utf-8") as log:
            log.write(told)
    except OSError as error:
        last = traceback.extract_tb(fault.__traceback__)[-1]
        return f"{Path(last.filename).name}, line {last.lineno}; no file could be written ({error.strerror or error})."
    return log.name


@contextlib.contextmanager
def _stopped_by_signals() -> Iterator[None]:
    """Within: a TERM (of a build server, say) stops us as Ctrl-C does, so that what is half made is cleared away."""

    def stop(_number: int, _frame: FrameType | None) -> None:
        raise KeyboardInterrupt

    before = signal.signal(signal.SIGTERM, stop)
    try:
        yield
    finally:
        signal.signal(signal.SIGTERM, before)


class _Parser(argparse.ArgumentParser):
    def error(self, message: str) -> NoReturn:
        raise CommandFault(f"{self.prog}: {message}", f"see {self.prog} --help")


def _parser() -> argparse.ArgumentParser:
    main_parser = _Parser(
        prog="chartgen",
        description="Stopping-distance posters, cab cards and web pages in two languages, from one edition file.",
        epilog="EDITION is a folder that holds edition.toml, that file, or the name of a folder under site_config/.",
        allow_abbrev=False,
    )
    main_parser.add_argument("--version", action="version", version=f"chartgen {__version__}")
    commands = main_parser.add_subparsers(metavar="COMMAND", required=True)

    def add(name: str, command: Callable[[argparse.Namespace], int], what: str) -> argparse.ArgumentParser:
        parser = commands.add_parser(name, help=what, description=what, allow_abbrev=False)
        parser.set_defaults(command=command)
        return parser

    press = add("press", _press, "make everything that editions ask for; without a name, all of site_config/")
    preflight = add("preflight", _preflight, "check the finished files of editions again")
    for parser in (press, preflight):
        parser.add_argument("editions", nargs="*", metavar="EDITION", help="default: all")
        parser.add_argument("--into", type=Path, default=Path("build"), metavar="DIR", help="the build folder (build)")
        parser.add_argument("--workers", type=_workers, default=None, metavar="N", help="processes (as many as cores)")
        parser.add_argument("--quiet", action="store_true", help="no progress; warnings and errors only")
    figures = add("figures", _figures, "show an edition's table of figures")
    figures.add_argument("edition", metavar="EDITION")
    figures.add_argument("--format", choices=("text", "json", "csv"), default="text", help="text if left out")
    catalogue = add("catalogue", _catalogue, "list the presets an edition may pick by key, with their sources")
    catalogue.add_argument("kind", nargs="?", choices=SHELVES, metavar="KIND", help=f"one of {', '.join(SHELVES)}; all")
    catalogue.add_argument("--format", choices=("text", "json", "csv"), default="text", help="text if left out")
    compare = add("compare", _compare, "set an edition's figures beside published tables of the same units and meaning")
    compare.add_argument("edition", metavar="EDITION")
    changes = add("changes", _changes, "list every printed number that differs between two issues, and why")
    for name in ("old", "new"):
        changes.add_argument(name, metavar=name.upper(), help="an edition, or the figures of an issue (JSON)")
    for parser in (compare, changes):
        parser.add_argument("--format", choices=("text", "json", "csv"), default="text", help="text if left out")
    begin = add("begin", _begin, "start an edition of your own from one of the starters")
    begin.add_argument("starter", choices=tuple(STARTERS), help="whom it is for: charity, fleet or authority")
    begin.add_argument("folder", type=Path, metavar="FOLDER", help="where to put it; must not be there yet")
    return main_parser


def _workers(text: str) -> int:
    if not (text.isascii() and text.isdigit() and 1 <= int(text) <= 64):
        raise argparse.ArgumentTypeError(f"{text!r} is not a number from 1 to 64")
    return int(text)


def _known(argv: Sequence[str]) -> Sequence[str]:
    """`argv`, unless its command is none: then a fault with the name that was most likely meant."""
    names = ("press", "figures", "preflight", "catalogue", "compare", "changes", "begin")
    if not argv:
        raise CommandFault("chartgen: no command was given", ", ".join(names))
    if argv[0] in NOT_YET:
        raise CommandFault(f'chartgen: not yet: "{argv[0]}" is not made in this version', ", ".join(names))
    if not argv[0].startswith("-") and argv[0] not in names:
        near = difflib.get_close_matches(argv[0], names, n=1)
        guess = f'; did you mean "{near[0]}"?' if near else ""
        raise CommandFault(f'chartgen: there is no command "{argv[0]}"{guess}', ", ".join(names))
    return argv


def _press(arguments: argparse.Namespace) -> int:
    from chartgen import jobs, pipeline

    with _progress(quiet=arguments.quiet) as progress:
        pressed = pipeline.press(
            arguments.editions or _all_editions(),
            arguments.into,
            workers=arguments.workers or jobs.cores(),
            progress=progress,
        )
    for made in pressed:
        _warn(made.work.edition, made.work.warnings)
    sys.stdout.write(_made(pressed, arguments.into))
    return 0


def _preflight(arguments: argparse.Namespace) -> int:
    from chartgen import jobs, pipeline

    with _progress(quiet=arguments.quiet) as progress:
        works = pipeline.preflight(
            arguments.editions or _all_editions(),
            arguments.into,
            workers=arguments.workers or jobs.cores(),
            progress=progress,
        )
    for work in works:
        _warn(work.edition, work.warnings)
        sys.stdout.write(f"{arguments.into / work.edition.id}: every check passes.\n")
    return 0


def _figures(arguments: argparse.Namespace) -> int:
    from chartgen.edition.load import load_edition
    from chartgen.figures import export, table

    edition = load_edition(arguments.edition)
    figures = table.figures(edition)
    if arguments.format == "text":
        from chartgen.figures.terminal import table_text

        shown = sys.stdout.isatty()
        width = shutil.get_terminal_size().columns if shown else 100
        text = table_text(figures, edition, width=width, colour=shown and "NO_COLOR" not in os.environ)
        _warn(edition, edition.warnings)  # the text says the figures' own
    else:
        text = export.to_json(figures) if arguments.format == "json" else export.to_csv(figures)
        _warn(edition, (*edition.warnings, *(notice.text for notice in figures.notices)))
    sys.stdout.write(text if text.endswith("\n") else f"{text}\n")
    return 0


def _catalogue(arguments: argparse.Namespace) -> int:
    from chartgen.edition import listing

    kinds = [arguments.kind] if arguments.kind else SHELVES
    if arguments.format == "text":
        sys.stdout.write(listing.to_text(kinds, _width()))
    else:
        sys.stdout.write(listing.to_json(kinds) if arguments.format == "json" else listing.to_csv(kinds))
    return 0


def _compare(arguments: argparse.Namespace) -> int:
    from chartgen import commands

    return _answer(commands.compared(arguments.edition, arguments.format, _width()))


def _changes(arguments: argparse.Namespace) -> int:
    from chartgen import commands

    return _answer(commands.changed(arguments.old, arguments.new, arguments.format, _width()))


def _answer(answer: Answer) -> int:
    for edition in answer.editions:
        _warn(edition, edition.warnings)
    _say(*(f"Warning: {text}" for text in answer.warnings))
    sys.stdout.write(answer.text)
    return 0


def _width() -> int:
    return shutil.get_terminal_size().columns if sys.stdout.isatty() else 100


def _begin(arguments: argparse.Namespace) -> int:
    from chartgen.begin import begin

    made = begin(STARTERS[arguments.starter], arguments.folder)
    sys.stdout.write("".join(f"{path}\n" for path in made))
    _say(f"Change it to your own, then: chartgen press {arguments.folder}")
    return 0


def _all_editions() -> list[Path]:
    from chartgen.edition.find import names

    editions = list(names().values())
    if not editions:
        raise CommandFault("there are no editions in site_config/", "chartgen press EDITION, or chartgen begin")
    return editions


def today() -> date:
    """Today's date, or that of SOURCE_DATE_EPOCH. It decides warnings, never a byte of the output."""
    given = os.environ.get("SOURCE_DATE_EPOCH", "")
    if given.isascii() and given.isdigit():
        return datetime.fromtimestamp(int(given), UTC).date()
    return datetime.now(UTC).astimezone().date()


def review_warning(edition: Edition, on: date) -> str | None:
    """What is to be said on the day `on` of an edition whose review is due."""
    due = edition.review_by
    if due is None or on < due - WARN_BEFORE:
        return None
    if on > due:
        return f"edition.review_by: the review was due on {due}; this edition is out of date."
    return f"edition.review_by: the review is due on {due}."


def _warn(edition: Edition, warnings: Sequence[str]) -> None:
    review = review_warning(edition, today())
    _say(*(f"Warning: {edition.file}: {text}" for text in dict.fromkeys((*warnings, *filter(None, [review])))))


def _made(pressed: Sequence[Pressed], build: Path) -> str:
    """What was made and where, for stdout."""
    lines = []
    for made in pressed:
        edition, files = made.work.edition, made.manifest.files
        folder = build / edition.id
        pages = sum(file.path.endswith(".html") for file in files)
        lines.append(f"{edition.id}: {edition.title[edition.languages[0]]} ({', '.join(edition.languages)})")
        lines.append(f"  {folder / 'index.html'}  {_counted(pages, 'page')}")
        sizes = {file.path: file.bytes for file in files}
        lines += [f"  {folder / path}  {_counted(count, 'page')}, {_size(sizes[path])}" for path, count in made.sheets]
        lines += [f"  {folder / f.path}  {_size(f.bytes)}" for f in files if f.path.endswith((".csv", ".json"))]
    total = sum(file.bytes for made in pressed for file in made.manifest.files)
    count = sum(len(made.manifest.files) for made in pressed)
    lines.append(f"{build / 'index.html'}  the way in to {_counted(len(pressed), 'edition')}")
    sheets = sum(len(made.sheets) for made in pressed)
    read_back = f"every number on {_counted(sheets, 'sheet')} was read back"
    lines.append(f"{_counted(count, 'file')}, {_size(total)}; {read_back}.")
    return "\n".join(lines) + "\n"


def _counted(number: int, what: str) -> str:
    return f"{number} {what}{'' if number == 1 else 's'}"


def _size(count: int) -> str:
    return f"{count / 1000:.0f} kB" if count < 1_000_000 else f"{count / 1_000_000:.1f} MB"


def _say(*lines: str) -> None:
    # A closed stderr is nobody's fault: there is nobody to tell.
    with contextlib.suppress(OSError, ValueError):
        sys.stderr.write("".join(f"{line}\n" for line in lines))
        sys.stderr.flush()


class Lines:
    """Progress as plain lines, one a step: for a log, or where stderr is no terminal."""

    def __init__(self, *, quiet: bool = False) -> None:
        self.quiet = quiet

    def step(self, number: int, what: str, of: int) -> None:
        if not self.quiet:
            _say(f"{number}/6 {what} ({of})" if of > 1 else f"{number}/6 {what}")

    def done(self, what: str) -> None:
        if what.startswith("waiting"):
            _say(what)


class Bars:
    """Progress on a terminal: a bar for each step."""

    def __init__(self, bars: Any) -> None:
        self.bars = bars
        self.task: Any = None

    def step(self, number: int, what: str, of: int) -> None:
        self._finish()
        self.task = self.bars.add_task(f"{number}/6 {what}", total=max(of, 1), piece="")
        self.bars.refresh()

    def done(self, what: str) -> None:
        self.bars.update(self.task, advance=0 if what.startswith("waiting") else 1, piece=what)
        self.bars.refresh()

    def _finish(self) -> None:
        if self.task is not None:
            self.bars.update(self.task, completed=self.bars.tasks[self.task].total, piece="")


@contextlib.contextmanager
def _progress(*, quiet: bool) -> Iterator[Lines | Bars]:
    if quiet or not sys.stderr.isatty():
        yield Lines(quiet=quiet)
        return
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn

    columns = (TextColumn("{task.description}"), BarColumn(), MofNCompleteColumn(), TextColumn("{task.fields[piece]}"))
    # No refreshing thread: the workers are forked from this process.
    with Progress(*columns, console=Console(stderr=True), auto_refresh=False) as bars:
        made = Bars(bars)
        yield made
        made._finish()
