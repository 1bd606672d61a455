"""``python -m chartgen``: the same as the command ``chartgen``."""

from __future__ import annotations

from chartgen.cli import run

if __name__ == "__main__":
    run()
