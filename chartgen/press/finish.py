"""The last pass over a PDF: everything in it that could differ between two runs is settled."""

from __future__ import annotations

import io

import pikepdf


def finish(data: bytes, *, two_sided: bool = False) -> bytes:
    """The same document, compressed, with an identifier made from its content: same input, same bytes.

    Its print dialogue begins at true size, since sheets are measured in millimetres, and `two_sided` with the paper
    turned over its long edge (ISO 32000-1, table 150).
    """
    out = io.BytesIO()
    with pikepdf.open(io.BytesIO(data)) as pdf:
        if "/ID" in pdf.trailer:
            del pdf.trailer["/ID"]
        wishes = pdf.Root.get("/ViewerPreferences", pikepdf.Dictionary())
        wishes.PrintScaling = pikepdf.Name("/None")
        if two_sided:
            wishes.Duplex = pikepdf.Name("/DuplexFlipLongEdge")
        pdf.Root.ViewerPreferences = wishes
        pdf.save(
            out,
            object_stream_mode=pikepdf.ObjectStreamMode.generate,
            compress_streams=True,
            deterministic_id=True,
            force_version="1.7",
        )
    return out.getvalue()
