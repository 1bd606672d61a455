"""The opening page beside the editions: one entry an edition, each in its own languages."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Final

from chartgen.edition.model import Edition
from chartgen.language.load import Language
from chartgen.language.sentences import caution_sentences
from chartgen.output import File
from chartgen.site.assets import scripts
from chartgen.site.frame import CSP
from chartgen.site.render import render

PATH: Final = "index.html"
_TONGUE: Final = {"tag", "direction", "own_name", "title", "publisher", "editions", "caution_title", "caution"}


@dataclass(frozen=True, slots=True)
class _Entry:
    """One language of one edition."""

    tag: str
    direction: str
    title: str
    publisher: str
    own_name: str
    href: str


def about(edition: Edition, languages: Sequence[Language]) -> dict[str, object]:
    """What the opening page needs to know of an edition: plain data, kept in the edition's manifest, so that an edition
    of an earlier run can be listed again without its source."""
    return {
        "reference": edition.reference,
        "issue": edition.issue,
        "issued": edition.issued.isoformat(),
        "languages": [
            {
                "tag": language.tag,
                "direction": language.direction,
                "own_name": language.own_name,
                "title": language.text(edition.title),
                "publisher": language.text(edition.publisher),
                "editions": language.t("page.opening"),
                "caution_title": language.t("caution.title"),
                "caution": " ".join(caution_sentences(language)),
            }
            for language in languages
        ],
    }


def opening(editions: Mapping[str, Mapping[str, Any]]) -> File:
    """The page that lists `editions`: `about` by edition id. It borrows the first edition's style sheets.

    An edition whose record lacks its languages (another program's, or an older one's) is left out. Raises ValueError
    where none is left.
    """
    ids = sorted(id for id in editions if _known(editions[id]))
    if not ids:
        raise ValueError("no edition to list")
    tongues = {tongue["tag"]: tongue for id in ids for tongue in editions[id]["languages"]}
    first = editions[ids[0]]["languages"][0]
    headings: dict[str, Mapping[str, str]] = {}  # the same word in two languages stands once
    for tag in sorted(tongues, key=lambda tag: (tag != first["tag"], tag)):
        headings.setdefault(tongues[tag]["editions"], tongues[tag])
    sheets = [f"{ids[0]}/assets/site.css"]
    for id in ids:
        for tongue in editions[id]["languages"]:
            for script in scripts(tongue["tag"]):
                if not any(sheet.endswith(f"fonts-{script}.css") for sheet in sheets):
                    sheets.append(f"{id}/assets/fonts-{script}.css")
    page = render(
        "editions.html",
        csp=CSP,
        first=first,
        stylesheets=sheets,
        icon=f"{ids[0]}/assets/icon.svg",
        headings=list(headings.values()),
        tongues=list(tongues.values()),
        editions=[
            {
                "id": id,
                "reference": editions[id]["reference"],
                "issue": editions[id]["issue"],
                "issued": editions[id]["issued"],
                "entries": [_entry(id, tongue) for tongue in editions[id]["languages"]],
            }
            for id in ids
        ],
    )
    return File(PATH, page)


def _known(about: Mapping[str, Any]) -> bool:
    tongues = about.get("languages") or ()
    return bool(tongues) and {"reference", "issue", "issued"} <= set(about) and all(set(t) >= _TONGUE for t in tongues)


def _entry(id: str, tongue: Mapping[str, str]) -> _Entry:
    return _Entry(
        tag=tongue["tag"],
        direction=tongue["direction"],
        title=tongue["title"],
        publisher=tongue["publisher"],
        own_name=tongue["own_name"],
        href=f"{id}/{tongue['tag']}/index.html",
    )
