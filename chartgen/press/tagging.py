"""What the engine's tag tree leaves out and a reader with a screen reader needs (WCAG 3.1.2; ISO 14289-1, 7.2 to 7.5).

- the language of a passage (`lang` on an inner element);
- Scope of a header cell, and the header cells of a data cell where the page names them (`headers`): the engine finds
  those of the first column alone where a header spans several;
- the true box of a figure, in points from the foot of the page;
- a drawing with its labels as one figure: an element with ``role="img"`` and ``aria-label`` becomes the Figure with
  that alternative text, and what is inside it belongs to it.

The engine offers no way to do this, so one private function of it is wrapped while a document is written. The version
is pinned, and a test looks at the tags of a finished file.
"""

from __future__ import annotations

import importlib
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

_POINTS_PER_PX = 0.75


@contextmanager
def completed_tags(page_heights_px: list[float]) -> Iterator[None]:
    """While inside, documents are written with the completed tags. `page_heights_px`: CSS px, one a page."""
    tags: Any = importlib.import_module("weasyprint.pdf.tags")
    pydyf = importlib.import_module("pydyf")
    original = tags._build_box_tree

    def complete(box: Any, parent: Any, pdf: Any, page: int, nums: Any, annotations: Any, marks: Any) -> Iterator[Any]:
        for element in original(box, parent, pdf, page, nums, annotations, marks):
            _complete(element, getattr(box, "_box", box), page_heights_px[page], pydyf)
            yield element

    tags._build_box_tree = complete
    try:
        yield
    finally:
        tags._build_box_tree = original


def _name_headers(box: Any, pydyf: Any) -> None:
    for child in getattr(box, "children", ()):
        _name_headers(getattr(child, "_box", child), pydyf)
    mark, source = getattr(box, "mark", None), box.element
    if mark is None or source is None:
        return
    if mark["S"] == "/TH" and source.get("id"):
        mark["ID"] = pydyf.String(source.get("id"))
    if mark["S"] == "/TD" and source.get("headers"):
        mark["A"]["Headers"] = pydyf.Array(pydyf.String(name) for name in source.get("headers").split())


def _complete(element: Any, box: Any, page_height_px: float, pydyf: Any) -> None:
    source = box.element
    if element["S"] == "/Table":
        _name_headers(box, pydyf)
    if source is None or not hasattr(source, "get"):
        return
    if language := source.get("lang"):
        element["Lang"] = pydyf.String(language)
    if element["S"] == "/TH":
        element["A"]["Scope"] = "/Row" if source.get("scope") == "row" else "/Column"
    if source.get("role") == "img":
        element["S"] = "/Figure"
        element["Alt"] = pydyf.String(source.get("aria-label"))
        element["A"] = pydyf.Dictionary({"O": "/Layout"})
    elif source.get("aria-hidden") == "true" and element["S"] == "/Figure":
        # The marks of a drawing: part of the figure around them, which has the words.
        element["S"] = "/NonStruct"
        element.pop("A", None)
        element.pop("Alt", None)
    if element["S"] == "/Figure" and "A" in element:
        left, top = box.content_box_x(), box.content_box_y()
        edges = (left, page_height_px - top - box.height, left + box.width, page_height_px - top)
        element["A"]["BBox"] = pydyf.Array([round(_POINTS_PER_PX * edge, 2) for edge in edges])
