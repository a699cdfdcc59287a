"""The quota table as a Word document for the management plan: the words, parts and colours of screen and Excel."""

from __future__ import annotations

import io

from docx.document import Document as DocumentObject
from docx.enum.section import WD_SECTION
from docx.image.exceptions import InvalidImageStreamError, UnexpectedEndOfFileError
from docx.shared import Mm

from harvest.errors import CAUTION, SettingsError
from harvest.plan import words
from harvest.plan.assumptions import Pairs, assumptions, provenance, public, rates_words, record_pairs
from harvest.plan.document_styles import LONG, MARGIN, SHORT, add_line, new_document, plain_text, set_page
from harvest.plan.document_tables import add_table, least_widths, part_texts
from harvest.plan.layout import Part, parts
from harvest.plan.method import method
from harvest.plan.sentences import findings, headline
from harvest.plan.table import QuotaTable

#: Width of the text on an upright page and the tallest picture, mm.
TEXT_WIDTH, TALLEST = SHORT - 2.0 * MARGIN, 80.0
#: How a PNG file begins.
_PNG = b"\x89PNG\r\n\x1a\n"


def quota_document(
    table: QuotaTable,
    risk_png: bytes | None = None,
    history_png: bytes | None = None,
    *,
    risk_caption: str = "",
    risk_description: str = "",
    history_caption: str = "",
    history_description: str = "",
) -> bytes:
    """The Word file's bytes: finding, quota table, lookup card, pictures, method, reasons, assumptions, provenance.

    Parameters
    ----------
    table : QuotaTable
        Its private names and texts do not enter the document.
    risk_png, history_png : bytes, optional
        Pictures of the risk against the quota and of the history, PNG, drawn for the public: what they show
        cannot be taken out here.
    risk_caption, history_caption : str
        The sentence under the picture.
    risk_description, history_description : str
        What a screen reader says in the picture's place; needed with a picture.

    Raises
    ------
    SettingsError
        A picture without a description, or one that is no picture.
    """
    table = public(table)
    quotas, card, steps, others = parts(table)
    document = new_document(headline(table))
    _add_findings(document, table)
    _add_wide_part(document, quotas, table.record.unit)
    _add_part(document, card, table.record.unit)
    _add_picture(document, "Risk against quota", risk_png, risk_caption, risk_description)
    _add_picture(document, "Counts and removals", history_png, history_caption, history_description)
    add_line(document, "Method", "Heading 1")
    add_line(document, method(table), "Normal")
    for part in (steps, others):
        _add_part(document, part, table.record.unit)
    for name, pairs in (
        ("Assumptions", assumptions(table)),
        ("Record", record_pairs(table.record)),
        ("Provenance", provenance(table)),
    ):
        _add_pairs(document, name, pairs)
    stream = io.BytesIO()
    document.save(stream)
    return stream.getvalue()


def subtitle(table: QuotaTable) -> str:
    """Whose quota this is and what it rests on: name, quota years, count, where the rates come from."""
    years = words.years_words(table.rates.first_year, len(table.rows))
    count = dict(assumptions(table))["Abundance from"]
    return f"{table.record.name} · quota of {years} · {count} · rates {rates_words(table.rates)}"


def _add_findings(document: DocumentObject, table: QuotaTable) -> None:
    add_line(document, headline(table), "Title")
    add_line(document, subtitle(table), "Subtitle")
    for sentence in findings(table):
        add_line(document, sentence, "Normal")
    add_line(document, CAUTION, "Harvest caution")


def _add_part(document: DocumentObject, part: Part, unit: str, width: float = TEXT_WIDTH) -> None:
    add_line(document, part.title, "Heading 1")
    if part.note:
        add_line(document, part.note, "Harvest note")
    add_table(document, part, unit, width)


def _add_wide_part(document: DocumentObject, part: Part, unit: str) -> None:
    """A part on an upright page if its columns fit there, else on a lying page of its own."""
    if sum(least_widths(part, part_texts(part, unit))) <= TEXT_WIDTH:
        _add_part(document, part, unit)
        return
    set_page(document.add_section(WD_SECTION.NEW_PAGE), landscape=True)
    _add_part(document, part, unit, LONG - 2.0 * MARGIN)
    set_page(document.add_section(WD_SECTION.NEW_PAGE), landscape=False)


def _add_pairs(document: DocumentObject, name: str, pairs: Pairs) -> None:
    _add_part(document, Part(name, "", ("Item", "Content"), ("text", "text"), tuple(pairs)), "animals")


def _add_picture(document: DocumentObject, title: str, png: bytes | None, caption: str, description: str) -> None:
    """A picture with its sentence under it and its description for those who cannot see it."""
    if png is None:
        return
    if not description.strip():
        raise SettingsError(f'the picture "{title}" has no description: say in words what it shows')
    add_line(document, title, "Heading 1")
    paragraph = document.add_paragraph()
    paragraph.paragraph_format.keep_with_next = bool(caption)
    try:
        if not png.startswith(_PNG):
            raise InvalidImageStreamError
        picture = paragraph.add_run().add_picture(io.BytesIO(png), width=Mm(TEXT_WIDTH))
    except (InvalidImageStreamError, UnexpectedEndOfFileError) as error:
        raise SettingsError(f'the picture "{title}" cannot be read: give the bytes of a PNG file') from error
    if picture.height > Mm(TALLEST):
        picture.width, picture.height = Mm(TALLEST * picture.width / picture.height), Mm(TALLEST)
    inline = picture._inline
    inline.docPr.set("descr", plain_text(description))
    for side in ("distT", "distB", "distL", "distR"):
        inline.set(side, "0")
    if caption:
        add_line(document, caption, "Caption")
