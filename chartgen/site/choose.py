"""The edition's first page: choose a language. Every part stands in its own language, one after the other."""

from __future__ import annotations

from dataclasses import dataclass

from chartgen.language.load import Language
from chartgen.language.sentences import caution_sentences
from chartgen.site.assets import scripts
from chartgen.site.edition_site import Site
from chartgen.site.frame import CSP
from chartgen.site.render import render


@dataclass(frozen=True, slots=True)
class Choice:
    """What one language's part of the page says."""

    tag: str
    direction: str
    own_name: str
    title: str
    title_tag: str
    publisher: str
    publisher_tag: str
    choose: str
    home: str
    caution_title: str
    caution: str
    href: str


def choose_page(site: Site) -> bytes:
    """Bilingual by blocks: each language's title, name and caution, tagged; the root is in the first language."""
    choices = tuple(_choice(site, language) for language in site.languages)
    sheets = ["assets/site.css"]
    for language in site.languages:
        sheets += [f"assets/fonts-{s}.css" for s in scripts(language.tag) if f"assets/fonts-{s}.css" not in sheets]
    return render(
        "choose.html",
        csp=CSP,
        stylesheets=tuple(sheets),
        icon="assets/icon.svg",
        first=choices[0],
        choices=choices,
        reference=site.edition.reference,
        issue=site.edition.issue,
        issued=site.edition.issued.isoformat(),
    )


def _choice(site: Site, language: Language) -> Choice:
    edition = site.edition
    return Choice(
        tag=language.tag,
        direction=language.direction,
        own_name=language.own_name,
        title=language.text(edition.title),
        title_tag=language.text_tag(edition.title),
        publisher=language.text(edition.publisher),
        publisher_tag=language.text_tag(edition.publisher),
        choose=language.t("page.choose"),
        home=language.t("page.home"),
        caution_title=language.t("caution.title"),
        caution=" ".join(caution_sentences(language)),
        href=f"{language.tag}/index.html",
    )
