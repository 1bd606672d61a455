"""Where the templates and the starter editions lie: in the checkout, or inside an installed wheel.

A foundation stone like `errors.py`: any floor may ask it, it asks nobody.
"""

from __future__ import annotations

from pathlib import Path

from chartgen.errors import MachineFault

_PACKAGE = Path(__file__).resolve().parent
_CHECKOUT = _PACKAGE.parent


def _folder(name: str) -> Path:
    packed = _PACKAGE / "_data" / name
    if packed.is_dir():
        return packed
    if (_CHECKOUT / "pyproject.toml").is_file() and (_CHECKOUT / name).is_dir():
        return _CHECKOUT / name
    raise MachineFault(f"chartgen's own folder '{name}' is missing.", "Install chartgen again.")


def templates() -> Path:
    """The folder of the page and sheet templates and of the word lists (``words/<tag>.po``)."""
    return _folder("templates")


def starters() -> Path:
    """The folder of the editions that come with the program (``site_config/`` of a checkout)."""
    return _folder("site_config")
