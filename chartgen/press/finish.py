"""The last pass over a PDF: everything in it that could differ between two runs is settled."""

from __future__ import annotations

import io

import pikepdf


def finish(data: bytes) -> bytes:
    """The same document, compressed, with an identifier made from its content: same input, same bytes."""
    out = io.BytesIO()
    with pikepdf.open(io.BytesIO(data)) as pdf:
        if "/ID" in pdf.trailer:
            del pdf.trailer["/ID"]
        pdf.save(
            out,
            object_stream_mode=pikepdf.ObjectStreamMode.generate,
            compress_streams=True,
            deterministic_id=True,
            force_version="1.7",
        )
    return out.getvalue()
