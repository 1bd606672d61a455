"""Exchange two folders' names in one step of the file system, for `output.py`."""

from __future__ import annotations

import ctypes
import errno
import os
from pathlib import Path

_AT_FDCWD = -100
_RENAME_EXCHANGE = 2
# What a kernel, a C library or a file system says that has no such call.
_UNABLE = {errno.ENOSYS, errno.EINVAL, errno.ENOTSUP, errno.EPERM}


def exchange(new: Path, place: Path) -> None:
    """Put the folder `new` at `place`; what stood there is then at `new`, or gone where nothing stood there.

    On Linux in one step (renameat2 with RENAME_EXCHANGE, see renameat2(2)). Elsewhere in two: ``place`` is first
    renamed to ``place.old-xxxxxxxx``, from where `output` brings it back if this process dies between the two.
    Raises OSError.
    """
    if not place.exists():
        new.rename(place)
    elif not _exchange_in_one(new, place):
        exchange_in_two(new, place)


def _exchange_in_one(new: Path, place: Path) -> bool:
    try:
        renameat2 = ctypes.CDLL(None, use_errno=True).renameat2
    except (AttributeError, OSError):
        return False
    if renameat2(_AT_FDCWD, os.fsencode(new), _AT_FDCWD, os.fsencode(place), _RENAME_EXCHANGE) == 0:
        return True
    code = ctypes.get_errno()
    if code in _UNABLE:
        return False
    raise OSError(code, os.strerror(code), str(place))


def exchange_in_two(new: Path, place: Path) -> None:
    """The way of `exchange` where the system has no single step."""
    aside = place.with_name(f"{place.name}.old-{new.name[-8:]}")
    place.rename(aside)
    try:
        new.rename(place)
    except OSError:
        aside.rename(place)
        raise
    aside.rename(new)
