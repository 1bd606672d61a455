"""Where the templates and the starter editions lie: inside an installed wheel, or beside the package in a checkout."""

from __future__ import annotations

from importlib.resources import files
from pathlib import Path

from chartgen.errors import MachineFault

_CHECKOUT = Path(__file__).resolve().parents[1]


def data_dir(name: str) -> Path:
    """The folder `name` ("templates" or "site_config") that came with the program.

    A wheel carries it under ``chartgen/_data``; a checkout (editable install) has it beside ``chartgen/``. Raises
    MachineFault where neither is there: the installation is broken, not the edition.
    """
    packaged = Path(str(files("chartgen"))) / "_data" / name
    if packaged.is_dir():
        return packaged
    beside = _CHECKOUT / name
    if (_CHECKOUT / "pyproject.toml").is_file() and beside.is_dir():
        return beside
    raise MachineFault(f"the program's own folder {name!r} is missing", "install chartgen again")


def templates() -> Path:
    """The folder of the page and sheet templates and of the word lists (``words/<tag>.po``)."""
    return data_dir("templates")


def starters() -> Path:
    """The folder of the editions that come with the program (``site_config/`` of a checkout)."""
    return data_dir("site_config")
