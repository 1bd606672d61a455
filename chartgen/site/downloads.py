"""The downloads page and the data files it leads to."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from markupsafe import Markup, escape

from chartgen.edition.model import Edition
from chartgen.figures import changes_text, compare_text
from chartgen.figures.changes import changes
from chartgen.figures.compare import Comparison
from chartgen.figures.export import document, to_csv, to_json
from chartgen.figures.record import Figures
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.output import File
from chartgen.site.edition_site import Leaflet, Site

CSV, JSON = "data/figures.csv", "data/figures.json"
COMPARED, CHANGED = "data/compared.csv", "data/changes.csv"


@dataclass(frozen=True, slots=True)
class FileItem:
    href: str
    title: Markup
    note: Markup
    type: str
    lang: str


@dataclass(frozen=True, slots=True, kw_only=True)
class DownloadsPage:
    title: str
    sheets_title: str
    accessible: str
    sheets: tuple[FileItem, ...]
    data_title: str
    data: tuple[FileItem, ...]
    licence_title: str
    licence: Markup


def data_files(figures: Figures, edition: Edition, found: tuple[Comparison, ...]) -> Iterator[File]:
    """All figures with the public names, as CSV and as JSON; the comparison and the changes where there are any."""
    yield File(CSV, to_csv(figures).encode("utf-8"))
    yield File(JSON, to_json(figures).encode("utf-8"))
    if found:
        yield File(COMPARED, compare_text.to_csv(found).encode("utf-8"))
    if edition.previous is not None:
        differing = changes(edition.previous.figures, document(figures))
        yield File(CHANGED, changes_text.to_csv(differing).encode("utf-8"))


def downloads_page(site: Site, language: Language, data: tuple[File, ...]) -> DownloadsPage:
    titles = {
        CSV: ("page.file_csv", "text/csv"), JSON: ("page.file_json", "application/json"),
        COMPARED: ("page.file_compare", "text/csv"), CHANGED: ("page.file_changes", "text/csv"),
    }  # fmt: skip
    licence = site.edition.licence
    return DownloadsPage(
        title=language.t("page.downloads"),
        sheets_title=language.t("page.sheets"),
        accessible=language.t("page.accessible"),
        sheets=leaflet_items(site, language),
        data_title=language.t("page.data"),
        data=tuple(
            FileItem(
                f"../{file.path}", escape(language.t(titles[file.path][0])), size(language, len(file.data)),
                titles[file.path][1], "",
            )
            for file in data
        ),
        licence_title=language.t("control.licence"),
        licence=isolate(licence) if licence else escape(language.t("word.not_given")),
    )  # fmt: skip


def leaflet_items(site: Site, language: Language) -> tuple[FileItem, ...]:
    """The sheets, in the order in which the edition asks for them."""
    return tuple(_leaflet(site, language, leaflet) for leaflet in site.leaflets)


def _leaflet(site: Site, language: Language, leaflet: Leaflet) -> FileItem:
    tags = [other for other in site.languages if other.tag in leaflet.tags]
    names = Markup(", ").join(Markup('<bdi lang="{}">{}</bdi>').format(other.tag, other.own_name) for other in tags)
    notes = [Markup("<bdi>PDF</bdi>")]
    if names:
        notes.insert(0, names)
    if leaflet.bytes is not None:
        notes.append(size(language, leaflet.bytes))
    note = Markup(" · ").join(notes)
    return FileItem(f"../{leaflet.path}", isolate(leaflet.title, leaflet.lang), note, "application/pdf", leaflet.lang)


def size(language: Language, count: int) -> Markup:
    """A file's size in kilobytes of 1000 bytes, up to the next whole one."""
    return isolate(f"{language.number(-(-count // 1000))}\u00a0{language.t('unit.kb')}")
