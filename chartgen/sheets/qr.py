"""The QR code of a web address, as inline SVG drawn in modules."""

from __future__ import annotations

from dataclasses import dataclass

import segno

QUIET_MODULES = 4
"""Clear modules on every side (ISO/IEC 18004)."""


@dataclass(frozen=True, slots=True)
class Qr:
    """The dark modules as an SVG path in module units; `modules` is the side without the quiet zone."""

    path: str
    modules: int

    @property
    def side(self) -> int:
        """Side with the quiet zone, in modules."""
        return self.modules + 2 * QUIET_MODULES


def qr(address: str) -> Qr:
    """The code of `address` at error level M or better, its mask chosen as the standard asks.

    Raises segno's DataOverflowError for an address longer than any code holds; an edition's address is far shorter.
    """
    matrix = segno.make(address, error="m", micro=False).matrix
    runs = []
    for y, line in enumerate(matrix):
        x = 0
        while x < len(line):
            start = x
            while x < len(line) and line[x]:
                x += 1
            if x > start:
                # One rectangle a run of dark modules: no hair lines between modules, whatever the printer's grid.
                runs.append(f"M{start + QUIET_MODULES} {y + QUIET_MODULES}h{x - start}v1h{start - x}z")
            x += 1
    return Qr("".join(runs), len(matrix))
