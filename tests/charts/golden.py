"""Golden pictures: compare a picture with the one kept in tests/golden, and show what differs.

A picture that differs is written beside the kept one as NAME.actual.png, with NAME.difference.png (the kept picture
pale, what differs in black). Look at all three. To renew the kept pictures after looking:

    CHARTGEN_RENEW_GOLDEN=1 .venv/bin/python -m pytest tests/charts/test_golden.py

and look at each of them again before committing it.
"""

from __future__ import annotations

import io
import os
from pathlib import Path

import numpy as np
import numpy.typing as npt
from PIL import Image

FOLDER = Path(__file__).resolve().parents[1] / "golden"
CLEAR = 48
"""A channel that differs by more than this (of 255) can be seen; less is another way of smoothing an edge."""
MOST = 0.0015
"""Part of the pixels that may differ clearly: about one in 700, less than one small digit of these pictures."""


def pixels(png: bytes) -> npt.NDArray[np.int16]:
    with Image.open(io.BytesIO(png)) as image:
        return np.asarray(image.convert("RGB"), dtype=np.int16)


def small(png: bytes) -> bytes:
    """The same picture in 64 colours, which is all that flat inks and their edges need."""
    target = io.BytesIO()
    with Image.open(io.BytesIO(png)) as image:
        image.convert("RGB").quantize(64).save(target, "PNG", optimize=True)
    return target.getvalue()


def compare(name: str, png: bytes, folder: Path = FOLDER) -> str | None:
    """None where the picture is the kept one; else what is wrong, with the pictures to look at written beside it."""
    kept, actual, shown = (folder / f"{name}{end}.png" for end in ("", ".actual", ".difference"))
    if os.environ.get("CHARTGEN_RENEW_GOLDEN"):
        kept.write_bytes(small(png))
    if not kept.is_file():
        actual.write_bytes(png)
        return f"there is no {kept.name}; look at {actual.name}"
    # Both through the same few colours: what is compared is the drawing, not the palette of the file.
    want, have = pixels(kept.read_bytes()), pixels(small(png))
    if want.shape != have.shape:
        actual.write_bytes(png)
        return f"{kept.name} is {want.shape[1]} x {want.shape[0]}, {actual.name} is {have.shape[1]} x {have.shape[0]}"
    differs = np.abs(want - have).max(axis=2) > CLEAR
    if differs.mean() <= MOST:
        actual.unlink(missing_ok=True)
        shown.unlink(missing_ok=True)
        return None
    actual.write_bytes(png)
    pale = (255 - (255 - want) // 4).astype(np.uint8)
    pale[differs] = 0
    Image.fromarray(pale).save(shown)
    return f"{differs.mean():.2%} of {kept.name} differs clearly; look at {actual.name} and {shown.name}"
