"""What stands on every sheet whatever it shows: document control, licence, caution, notices."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from markupsafe import Markup

from chartgen.edition.model import Edition
from chartgen.figures.record import Figures
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.language.sentences import caution_sentences, notice_sentence, notice_sentence_html
from chartgen.sheets.account import Account


@dataclass(frozen=True, slots=True)
class Field:
    """One field of the control block: its label in each language (tag, direction, text), its value once or in each
    language where the languages differ."""

    key: str
    labels: tuple[tuple[str, str, str], ...]
    values: tuple[Markup, ...]


def control_fields(
    edition: Edition, languages: Sequence[Language], account: Account, *, copy_no: str | None, page: int, pages: int
) -> tuple[Field, ...]:
    """Title, reference, issue, issued, review, owner, approver, copy number, status, licence, page; dates ISO 8601."""
    none = [language.t("word.not_given") for language in languages]
    titles = [language.text(edition.title) for language in languages]
    same = {
        "reference": edition.reference,
        "issue": edition.issue,
        "issued": edition.issued.isoformat(),
        "review_by": edition.review_by.isoformat() if edition.review_by else "",
        "owner": edition.owner,
        "approver": edition.approver,
        "copy": copy_no or "",
    }
    fields = [_field("title", languages, _texts(titles, languages, account))]
    for key, value in same.items():
        values: tuple[Markup, ...]
        if value:
            values = (isolate(account.fact(value)),)
        else:
            texts = none if key != "copy" else [language.t("control.uncontrolled_copy") for language in languages]
            values = _texts(texts, languages, account)
        fields.append(_field(key, languages, values))
    status = [language.t(f"control.status.{edition.status}") for language in languages]
    fields.append(_field("status", languages, _texts(status, languages, account)))
    fields.append(_field("licence", languages, (isolate(account.fact(edition.licence)),)))
    if edition.web_address:
        typed = edition.web_address.partition("://")[2]
        fields.append(_field("method_at", languages, (isolate(account.fact(typed)),)))
    places = [
        language.t("control.page", page=language.number(page), pages=language.number(pages)) for language in languages
    ]
    fields.append(Field("page", (), _texts(places, languages, account)))
    return tuple(fields)


def _field(key: str, languages: Sequence[Language], values: tuple[Markup, ...]) -> Field:
    labels = tuple((language.tag, language.direction, language.t(f"control.{key}")) for language in languages)
    return Field(key, once(labels), values)


def once(labels: Iterable[tuple[str, str, str]]) -> tuple[tuple[str, str, str], ...]:
    """Labels that read the same in two languages stand once."""
    kept: dict[str, tuple[str, str, str]] = {}
    for label in labels:
        kept.setdefault(label[2], label)
    return tuple(kept.values())


def _texts(texts: Iterable[str], languages: Sequence[Language], account: Account) -> tuple[Markup, ...]:
    """Each text once, marked with its language."""
    kept: dict[str, Markup] = {}
    for language, text in zip(languages, texts, strict=True):
        if text not in kept:
            kept[text] = isolate(account.fact(text), language.tag)
    return tuple(kept.values())


def caution(language: Language, account: Account) -> str:
    """The caution's full sentences, each to be found again in the finished file."""
    sentences = caution_sentences(language)
    for sentence in sentences:
        account.sentence(language, sentence)
    return account.fact(" ".join(sentences))


def notices(language: Language, figures: Figures, rows: Iterable[int], account: Account) -> tuple[Markup, ...]:
    """The sentences that a reader of these rows must see, each once."""
    shown = set(rows)
    kept: dict[str, Markup] = {}
    for notice in figures.notices:
        if notice.reader and (not notice.rows or shown & set(notice.rows)):
            text = notice_sentence(language, notice)
            if text not in kept:
                kept[text] = notice_sentence_html(language, notice)
    for text in kept:
        account.sentence(language, account.fact(text))
    return tuple(kept.values())
