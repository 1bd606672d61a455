"""All pages of one edition. The way in: `pages`."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Protocol

from markupsafe import Markup, escape

from chartgen.edition.model import Edition, Poster
from chartgen.figures.changes import changes
from chartgen.figures.compare import compare
from chartgen.figures.export import document
from chartgen.figures.record import Figures
from chartgen.language.headline import headline_html, headline_plain
from chartgen.language.load import Language
from chartgen.output import File
from chartgen.site.answers import answer_pages
from chartgen.site.assets import assets
from chartgen.site.blocks import Block, Blocks, Section
from chartgen.site.catalogue_page import catalogue_page
from chartgen.site.changes_page import changes_page
from chartgen.site.choose import choose_page
from chartgen.site.compare_page import compare_page
from chartgen.site.downloads import COMPARED, FileItem, data_files, downloads_page, leaflet_items
from chartgen.site.drawings import Drawings
from chartgen.site.edition_site import Group, Leaflet, Site, groups, named, page_names, slope
from chartgen.site.frame import Link, frame
from chartgen.site.limits import Limits, limits
from chartgen.site.method import method_page
from chartgen.site.render import render


class Printed(Protocol):
    """What is asked of a sheet: where it lies, what it is called, the languages of its title and of its sentences."""

    @property
    def path(self) -> str: ...

    @property
    def title(self) -> str: ...

    @property
    def lang(self) -> str: ...

    @property
    def sentences(self) -> tuple[tuple[str, str], ...]: ...


@dataclass(frozen=True, slots=True, kw_only=True)
class Overview:
    title: Markup
    claim: Markup
    surface_word: str
    surfaces: tuple[Link, ...]
    vehicle_word: str
    vehicles: tuple[Link, ...]
    block_title: Markup
    block: Block
    trace_hint: str
    method_title: str
    downloads_title: str
    sheets_title: str
    sheets: tuple[FileItem, ...]
    limits: Limits | None


@dataclass(frozen=True, slots=True, kw_only=True)
class GroupPage:
    title: str
    surface_word: str
    surfaces: tuple[Link, ...]
    vehicle_word: str
    vehicles: tuple[Link, ...]
    trace_hint: str
    sections: tuple[Section, ...]


def pages(
    edition: Edition,
    figures: Figures,
    languages: tuple[Language, ...],
    sheets: Iterable[Printed],
    sizes: Mapping[str, int] | None = None,
) -> Iterator[File]:
    """Every file of the edition's site, paths relative to the edition's folder, in a fixed order.

    ``index.html`` (choice of language), ``<tag>/*.html``, ``assets/*``, ``data/figures.csv`` and ``.json``.
    `sizes`: bytes of finished sheets by path; where given, the download lists name them.
    """
    site = _site(edition, figures, languages, sheets, sizes or {})
    drawings = Drawings(site)
    data = tuple(data_files(figures, edition, site.comparisons))
    yield File("index.html", choose_page(site))
    for language in languages:
        yield from _language_pages(site, language, drawings, data)
    yield from assets(edition.palette, (language.tag for language in languages))
    yield from data


def sized_pages(
    edition: Edition,
    figures: Figures,
    languages: tuple[Language, ...],
    sheets: Iterable[Printed],
    sizes: Mapping[str, int],
    files: Iterable[File],
) -> Iterator[File]:
    """The downloads pages alone, once the sheets' sizes are known: the same files as `pages` gives with `sizes`.

    `files`: what `pages` gave before; the data files among them are not made a second time.
    """
    data = tuple(file for file in files if file.path.startswith("data/"))
    site = Site(
        edition=edition,
        figures=figures,
        languages=languages,
        leaflets=tuple(_leaflet(sheet, sizes.get(sheet.path)) for sheet in sheets),
        groups=(),
        page_names=page_names(edition, any(file.path == COMPARED for file in data)),
    )
    for language in languages:
        yield _downloads(site, language, data)


def _site(
    edition: Edition,
    figures: Figures,
    languages: tuple[Language, ...],
    sheets: Iterable[Printed],
    sizes: Mapping[str, int],
) -> Site:
    found = compare(figures, edition) if edition.compare else ()
    return Site(
        edition=edition,
        figures=figures,
        languages=languages,
        leaflets=tuple(_leaflet(sheet, sizes.get(sheet.path)) for sheet in sheets),
        groups=tuple(groups(edition, figures)),
        comparisons=found,
        changes=None if edition.previous is None else changes(edition.previous.figures, document(figures)),
        page_names=page_names(edition, bool(found)),
    )


def _leaflet(sheet: Printed, size: int | None) -> Leaflet:
    tags = tuple(dict.fromkeys((sheet.lang, *(tag for tag, _ in sheet.sentences))))
    return Leaflet(path=sheet.path, title=sheet.title, lang=sheet.lang, tags=tags, bytes=size)


def _downloads(site: Site, language: Language, data: tuple[File, ...]) -> File:
    page = downloads_page(site, language, data)
    framed = frame(site, language, "downloads.html", page.title, page.title)
    return File(f"{language.tag}/downloads.html", render("downloads.html", frame=framed, page=page))


def _language_pages(site: Site, language: Language, drawings: Drawings, data: tuple[File, ...]) -> Iterator[File]:
    folder = language.tag
    blocks = Blocks(site, language, drawings)
    yield File(f"{folder}/index.html", _overview(site, language, blocks))
    for surface in site.surfaces:
        page = f"surface-{surface}.html"
        yield File(f"{folder}/{page}", _group_page(site, language, blocks, page, surface=surface))
    for vehicle in site.vehicles:
        page = f"vehicle-{vehicle}.html"
        yield File(f"{folder}/{page}", _group_page(site, language, blocks, page, vehicle=vehicle))
    method = method_page(site, language)
    framed = frame(site, language, "method.html", method.title, method.intro)
    yield File(f"{folder}/method.html", render("method.html", frame=framed, page=method))
    for name, template, made in _further_pages(site, language):
        framed = frame(site, language, name, made.title, made.intro)
        yield File(f"{folder}/{name}", render(template, frame=framed, page=made))
    yield _downloads(site, language, data)


class _Made(Protocol):
    """What is asked of a finished page's content."""

    @property
    def title(self) -> str: ...

    @property
    def intro(self) -> str: ...


def _further_pages(site: Site, language: Language) -> Iterator[tuple[str, str, _Made]]:
    """File name, template and content of the pages that not every edition has, and of the catalogue."""
    names = site.page_names
    if "answers.html" in names:
        for name, page in answer_pages(site, language):
            yield name, "answers.html", page
    if "compare.html" in names:
        yield "compare.html", "compare.html", compare_page(site, language)
    if "changes.html" in names:
        yield "changes.html", "changes.html", changes_page(site, language)
    yield "catalogue.html", "listing.html", catalogue_page(site, language)


def _overview(site: Site, language: Language, blocks: Blocks) -> bytes:
    edition = site.edition
    poster = edition.posters[0] if edition.posters else None
    group = _main_group(site, poster)
    claim, plain = _claim(site, language, group, poster)
    surfaces, vehicles = _picks(site, language, "index.html")
    page = Overview(
        title=named(language, edition.title),
        claim=claim,
        surface_word=language.t("quantity.surface"),
        surfaces=surfaces,
        vehicle_word=language.t("quantity.vehicle"),
        vehicles=vehicles,
        block_title=_group_title(site, language, group),
        block=blocks.block(group),
        trace_hint=language.t("page.trace_hint"),
        method_title=language.t("page.method"),
        downloads_title=language.t("page.downloads"),
        sheets_title=language.t("page.sheets"),
        sheets=leaflet_items(site, language),
        limits=limits(site, language),
    )
    framed = frame(site, language, "index.html", language.text(edition.title), plain)
    return render("overview.html", frame=framed, page=page)


def _main_group(site: Site, poster: Poster | None) -> Group:
    """What the first poster shows; without one, the first case."""
    if poster is not None:
        show = poster.show
        for group in site.groups:
            level = math.isclose(group.grade, show.grade, abs_tol=1e-12)
            if level and (group.vehicle, group.surface) == (show.vehicle, show.surface):
                return group
    return site.groups[0]


def _group_title(site: Site, language: Language, group: Group) -> Markup:
    parts = [
        named(language, site.edition.vehicle(group.vehicle).name),
        named(language, site.edition.surface(group.surface).name),
    ]
    if group.grade != 0.0:
        parts.append(slope(language, group.grade))
    return Markup(" · ").join(parts)


def _claim(site: Site, language: Language, group: Group, poster: Poster | None) -> tuple[Markup, str]:
    """The poster's headline, filled from the table; without one, the distance from the greatest speed that stops."""
    if poster is not None:
        args = (language, site.edition, site.figures, poster)
        return headline_html(*args), headline_plain(*args)
    stopping = [record for record in group.series[0].records if record["stops"]]
    if not stopping:
        verdict = language.t("verdict.does_not_stop")
        return escape(verdict), verdict
    last = stopping[-1]
    values = {
        "vehicle": language.text(site.edition.vehicle(group.vehicle).name),
        "surface": language.text(site.edition.surface(group.surface).name),
        "speed": language.speed(float(last["printed_speed"]), site.figures.speed_unit),
        "distance": language.distance(float(last["printed_stopping"]), site.figures.distance_unit),
    }
    return language.html("page.claim", **values), language.plain("page.claim", **values)


def _picks(site: Site, language: Language, page: str) -> tuple[tuple[Link, ...], tuple[Link, ...]]:
    """Links to every surface and every vehicle."""
    edition = site.edition
    surfaces = ((f"surface-{s}.html", edition.surface(s).name) for s in site.surfaces)
    vehicles = ((f"vehicle-{v}.html", edition.vehicle(v).name) for v in site.vehicles)
    return (
        tuple(Link(href, named(language, name), href == page) for href, name in surfaces),
        tuple(Link(href, named(language, name), href == page) for href, name in vehicles),
    )


def _group_page(
    site: Site, language: Language, blocks: Blocks, page: str, *, surface: str = "", vehicle: str = ""
) -> bytes:
    if surface:
        own = language.text(site.edition.surface(surface).name)
        title, plain = language.t("page.surface_title", surface=own), language.plain("page.surface_title", surface=own)
        made = blocks.sections(site.on_surface(surface), "vehicle")
    else:
        own = language.text(site.edition.vehicle(vehicle).name)
        title, plain = language.t("page.vehicle_title", vehicle=own), language.plain("page.vehicle_title", vehicle=own)
        made = blocks.sections(site.with_vehicle(vehicle), "surface")
    surfaces, vehicles = _picks(site, language, page)
    content = GroupPage(
        title=title,
        surface_word=language.t("quantity.surface"),
        surfaces=surfaces,
        vehicle_word=language.t("quantity.vehicle"),
        vehicles=vehicles,
        trace_hint=language.t("page.trace_hint"),
        sections=made,
    )
    return render("group.html", frame=frame(site, language, page, plain, plain), page=content)
