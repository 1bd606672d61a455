"""The back door: the only writer to the build folder. Whole or not at all, never twice to one path.

In: files as bytes, by edition. Out: the build folder, one folder an edition, each with a manifest of hashes.
It must not know what is in a file.

How: a complete new build folder is made beside the old one, other editions carried over by hard links; when all of it
stands (and the caller has checked it) the two names are exchanged in one step of the file system. A process killed at
any moment leaves the old folder or the new one; what it left beside it is cleared away by the next writer.
"""

from __future__ import annotations

import contextlib
import errno
import fcntl
import glob
import hashlib
import json
import os
import re
import secrets
import shutil
from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from pathlib import Path, PurePosixPath

from chartgen.errors import CommandFault, MachineFault
from chartgen.exchange import exchange

MANIFEST = "manifest.json"
_MARK = ".chartgen"
_MARK_TEXT = b"chartgen wrote this folder. Its editions are replaced whole when they are made again.\n"
_SEGMENT = re.compile(r"[A-Za-z0-9_][A-Za-z0-9._-]*")
_ID = re.compile(r"[a-z0-9][a-z0-9-]*")


@dataclass(frozen=True, slots=True)
class File:
    """One finished file. `path` is relative to its edition's folder, with forward slashes."""

    path: str
    data: bytes


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """One line of a manifest."""

    path: str
    bytes: int
    sha256: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Manifest:
    """What an edition's folder holds. `about` is what the opening page needs to know of the edition."""

    edition: str
    about: Mapping[str, object]
    files: tuple[Entry, ...]

    def to_json(self) -> bytes:
        """The same bytes for the same files: sorted, no date, no machine."""
        files = [{"path": e.path, "bytes": e.bytes, "sha256": e.sha256} for e in self.files]
        content = {"edition": self.edition, "about": self.about, "files": files}
        return (json.dumps(content, ensure_ascii=False, indent=1, sort_keys=True) + "\n").encode()


def read_manifest(folder: Path) -> Manifest | None:
    """The manifest of an edition's folder; None where there is none that can be read."""
    try:
        content = json.loads((folder / MANIFEST).read_bytes())
        files = tuple(Entry(path=f["path"], bytes=f["bytes"], sha256=f["sha256"]) for f in content["files"])
        return Manifest(edition=content["edition"], about=dict(content["about"]), files=files)
    except (OSError, ValueError, KeyError, TypeError):
        return None


def differences(folder: Path) -> tuple[str, ...]:
    """What does not agree between an edition's folder and its manifest: one sentence each; () where it is whole."""
    manifest = read_manifest(folder)
    if manifest is None:
        return (f"{MANIFEST} is missing or cannot be read.",)
    wrong = []
    listed = {entry.path: entry for entry in manifest.files}
    found = {p.relative_to(folder).as_posix() for p in folder.rglob("*") if not p.is_dir()} - {MANIFEST}
    for path in sorted(found | set(listed)):
        if path not in found:
            wrong.append(f"{path} is in the manifest, but not in the folder.")
        elif path not in listed:
            wrong.append(f"{path} is in the folder, but not in the manifest.")
        elif _sha256((folder / path).read_bytes()) != listed[path].sha256:
            wrong.append(f"{path} was changed after it was made.")
    return tuple(wrong)


def _sha256(data: bytes) -> str:
    return hashlib.sha256(data).hexdigest()


def checked_path(path: str) -> PurePosixPath:
    """`path` as one that stays inside its folder and that any web server and memory stick takes.

    Raises ValueError for one that is absolute, climbs out, is empty or has a character outside ``A-Z a-z 0-9 . _ -``.
    """
    segments = path.split("/")
    if not all(_SEGMENT.fullmatch(s) for s in segments) or path == MANIFEST:
        raise ValueError(f"not a path for a finished file: {path!r}")
    return PurePosixPath(*segments)


@dataclass(slots=True)
class Stage:
    """A build folder in the making, at `path`. Made by `staging`; `publish` puts it in place of the old one."""

    build: Path
    path: Path
    published: bool = False
    _taken: set[str] = field(default_factory=set)

    def write_edition(self, edition_id: str, files: Iterable[File], about: Mapping[str, object]) -> Manifest:
        """Write an edition's folder and its manifest. ValueError for a path or id that is not one, or used twice."""
        if not _ID.fullmatch(edition_id):
            raise ValueError(f"not an edition's id: {edition_id!r}")
        self._take(edition_id)
        entries = []
        with _disk(self.build):
            folder = self.path / edition_id
            folder.mkdir()
            for file in files:
                self._take(f"{edition_id}/{checked_path(file.path)}")
                target = folder / file.path
                target.parent.mkdir(parents=True, exist_ok=True)
                _write(target, file.data)
                entries.append(Entry(path=file.path, bytes=len(file.data), sha256=_sha256(file.data)))
            manifest = Manifest(edition=edition_id, about=about, files=tuple(sorted(entries, key=lambda e: e.path)))
            _write(folder / MANIFEST, manifest.to_json())
        return manifest

    def carry_over(self) -> tuple[Manifest, ...]:
        """Take over from the old build folder whatever this stage does not write itself; what it knows of editions."""
        known = []
        with _disk(self.build):
            for old in sorted(self.build.iterdir()) if self.build.is_dir() else ():
                if old.name.casefold() in self._taken or old.name == _MARK:
                    continue
                self._take(old.name)
                _link(old, self.path / old.name)
                manifest = read_manifest(old) if old.is_dir() else None
                known += [manifest] if manifest is not None and manifest.edition == old.name else []
        return tuple(known)

    def reserve(self, name: str) -> None:
        """Say before `carry_over` that this top-level file will be written anew."""
        self._take(str(checked_path(name)))

    def write_opening(self, file: File) -> None:
        """Write a top-level file whose name was reserved."""
        if file.path.casefold() not in self._taken or (self.path / file.path).exists():
            raise ValueError(f"not reserved, or written twice: {file.path!r}")
        with _disk(self.build):
            _write(self.path / file.path, file.data)

    def publish(self) -> None:
        """Put this folder in place of the old one, in one step."""
        with _disk(self.build):
            _write(self.path / _MARK, _MARK_TEXT)
            exchange(self.path, self.build)
        self.published = True

    def _take(self, path: str) -> None:
        # Folded: two names that differ in case are one on many a memory stick.
        if path.casefold() in self._taken:
            raise ValueError(f"two files for one path: {path!r}")
        self._taken.add(path.casefold())


@contextlib.contextmanager
def staging(build: Path, waiting: Callable[[], None] = lambda: None) -> Iterator[Stage]:
    """A new `Stage` beside `build`; removed at the end, with the old build folder where it was published.

    One writer at a time: where another holds the place, `waiting` is called and this one waits for it.
    Raises CommandFault where `build` holds something that chartgen did not put there, MachineFault where the disk
    refuses.
    """
    build = build.resolve()
    with _disk(build):
        build.parent.mkdir(parents=True, exist_ok=True)
    with _only_writer(build, waiting):
        _recover(build)
        _refuse_foreign(build)
        stage = Stage(build=build, path=build.with_name(f"{build.name}.new-{secrets.token_hex(4)}"))
        try:
            with _disk(build):
                stage.path.mkdir()
            yield stage
        finally:
            shutil.rmtree(stage.path, ignore_errors=True)


def publish(build: Path, editions: Mapping[str, Iterable[File]], opening: Iterable[File] = ()) -> None:
    """Write `editions` and the top-level files `opening` into `build`, whole or not at all; other editions stay."""
    with staging(build) as stage:
        top = tuple(opening)
        for file in top:
            stage.reserve(file.path)
        for edition_id, files in editions.items():
            stage.write_edition(edition_id, files, {})
        stage.carry_over()
        for file in top:
            stage.write_opening(file)
        stage.publish()


@contextlib.contextmanager
def _disk(build: Path) -> Iterator[None]:
    try:
        yield
    except OSError as error:
        where = error.filename or build
        remedy = "Check that the folder can be written, or choose another with --into."
        if error.errno in {errno.ENOSPC, errno.EDQUOT}:
            remedy = "Free some space and run the same command again."
        problem = f"Writing failed at {where}: {error.strerror}. {build} is as it was."
        raise MachineFault(problem, remedy) from error


@contextlib.contextmanager
def _only_writer(build: Path, waiting: Callable[[], None]) -> Iterator[None]:
    # The folder around `build` itself is locked: no lock file to forget, and the system lets go when a process dies.
    with _disk(build):
        handle = os.open(build.parent, os.O_RDONLY | os.O_DIRECTORY)
    try:
        try:
            fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            waiting()
            fcntl.flock(handle, fcntl.LOCK_EX)
        except OSError:
            pass  # a file system without locks: two writers at once then cost one of them its work, never the folder
        yield
    finally:
        os.close(handle)


def _recover(build: Path) -> None:
    """Clear away what killed writers left beside `build`; put back an old folder whose exchange was cut in two."""
    with _disk(build):
        name = glob.escape(build.name)
        beside = sorted(build.parent.glob(f"{name}.old-????????"))
        if beside and not build.exists():
            beside.pop().rename(build)
        for left in [*beside, *build.parent.glob(f"{name}.new-????????")]:
            shutil.rmtree(left, ignore_errors=True)


def _refuse_foreign(build: Path) -> None:
    if not build.exists() or (build / _MARK).is_file():
        return
    if not build.is_dir():
        raise CommandFault(f"{build} is not a folder.", "Name a folder that is empty or not there yet.")
    if any(not p.name.startswith(".") for p in build.iterdir()) or (build / ".git").exists():
        raise CommandFault(
            f"{build} holds files that chartgen did not make.", "Name a folder that is empty or not there yet."
        )


def _write(path: Path, data: bytes) -> None:
    # "x": a path that is there already is a fault of the program, never an overwriting.
    with path.open("xb") as stream:
        stream.write(data)


def _link(old: Path, new: Path) -> None:
    if old.is_symlink():
        new.symlink_to(old.readlink())
    elif old.is_dir():
        new.mkdir()
        for child in old.iterdir():
            _link(child, new / child.name)
    else:
        try:
            os.link(old, new)
        except OSError:  # another owner's file, or a file system without hard links
            shutil.copy2(old, new)
