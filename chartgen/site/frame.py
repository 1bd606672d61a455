"""What stands round every page: languages, pages, caution, control block, security policy."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from markupsafe import Markup, escape

from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.language.sentences import caution_sentences
from chartgen.site.assets import scripts
from chartgen.site.edition_site import Site, colon, named

# Everything comes from the folder itself; the fonts lie in the style sheet. No script, no frame, no form.
CSP: Final = (
    "default-src 'none'; style-src 'self'; font-src data:; img-src 'self' data:; base-uri 'none'; form-action 'none'"
)
# The policy's frame-ancestors and sandbox need an HTTP header and are the web server's business.

_PAGES: Final = (
    ("index.html", "page.home"),
    ("answers.html", "page.answers"),
    ("compare.html", "page.compare"),
    ("changes.html", "page.changes"),
    ("method.html", "page.method"),
    ("downloads.html", "page.downloads"),
)
"""Those an edition has, see `edition_site.page_names`; the catalogue is reached from the method page."""


@dataclass(frozen=True, slots=True)
class Link:
    """A link to a page or a part of it."""

    href: str
    title: Markup
    current: bool = False


@dataclass(frozen=True, slots=True)
class Tongue:
    """A language the page exists in."""

    tag: str
    direction: str
    own_name: str
    also_in: str
    href: str
    current: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Frame:
    tag: str
    direction: str
    title: str
    description: str
    publisher: Markup
    flag: Markup
    stylesheets: tuple[str, ...]
    icon: str
    csp: str
    languages: tuple[Tongue, ...]
    pages: tuple[Link, ...]
    words: dict[str, str]
    control: tuple[tuple[str, Markup], ...]


def frame(site: Site, language: Language, page: str, title: str, description: str) -> Frame:
    """The frame of the page `page` (a file name in the language's folder)."""
    edition = site.edition
    whole = f"{title} – {language.text(edition.title)}" if title != language.text(edition.title) else title
    return Frame(
        tag=language.tag,
        direction=language.direction,
        title=whole,
        description=description,
        publisher=named(language, edition.publisher),
        flag=_flag(site, language),
        stylesheets=("../assets/site.css", *(f"../assets/fonts-{script}.css" for script in scripts(language.tag))),
        icon="../assets/icon.svg",
        csp=CSP,
        languages=tuple(
            Tongue(
                other.tag, other.direction, other.own_name, other.t("page.also_in") + colon(other),
                page if other is language else f"../{other.tag}/{page}", other is language,
            )
            for other in site.languages
        ),
        pages=tuple(
            Link(href, escape(language.t(key)), href == page) for href, key in _PAGES if href in site.page_names
        ),
        words={
            "language": language.t("page.language"),
            "nav": language.t("page.nav"),
            "skip": language.t("page.skip"),
            "caution_title": language.t("caution.title"),
            "caution": " ".join(caution_sentences(language)),
        },
        control=control(site, language),
    )  # fmt: skip


def _flag(site: Site, language: Language) -> Markup:
    """A draft and a superseded issue say so at the head of the page."""
    if site.edition.status not in ("draft", "superseded"):
        return Markup("")
    return escape(
        f"{language.t('control.status')}{colon(language)}{language.t('control.status.' + site.edition.status)}"
    )


def control(site: Site, language: Language) -> tuple[tuple[str, Markup], ...]:
    """The document control block: label and value; dates as ISO 8601 has them."""
    edition = site.edition
    fields: list[tuple[str, Markup]] = [
        ("control.title", named(language, edition.title)),
        ("control.reference", _given(language, edition.reference)),
        ("control.issue", _given(language, edition.issue)),
        ("control.issued", _date(edition.issued.isoformat())),
        ("control.review_by", _date(edition.review_by.isoformat()) if edition.review_by else _not_given(language)),
        ("control.owner", _given(language, edition.owner)),
        ("control.approver", _given(language, edition.approver)),
        ("control.status", escape(language.t(f"control.status.{edition.status}"))),
        ("control.licence", _given(language, edition.licence)),
        ("control.publisher", named(language, edition.publisher)),
    ]
    return tuple((language.t(key), value) for key, value in fields)


def _date(iso: str) -> Markup:
    return Markup('<time datetime="{0}"><bdi dir="ltr">{0}</bdi></time>').format(iso)


def _not_given(language: Language) -> Markup:
    return escape(language.t("word.not_given"))


def _given(language: Language, text: str) -> Markup:
    """A text that the edition gives in one form only; its language is not known, only its direction."""
    return isolate(text) if text else _not_given(language)
