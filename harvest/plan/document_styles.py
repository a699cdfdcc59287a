"""The look of the Word document: page, fonts, colours, language and properties."""

from __future__ import annotations

import re
from dataclasses import dataclass
from datetime import UTC, datetime
from typing import cast

from docx import Document
from docx.document import Document as DocumentObject
from docx.enum.section import WD_ORIENT
from docx.enum.style import WD_STYLE_TYPE
from docx.enum.text import WD_ALIGN_PARAGRAPH, WD_TAB_ALIGNMENT
from docx.opc.constants import RELATIONSHIP_TYPE
from docx.oxml import OxmlElement, parse_xml
from docx.oxml.ns import nsdecls, qn
from docx.oxml.xmlchemy import BaseOxmlElement
from docx.section import Section
from docx.shared import Mm, Pt, RGBColor
from docx.styles.style import ParagraphStyle
from docx.text.paragraph import Paragraph

from harvest.errors import CAUTION
from harvest.plan.workbook import ABUNDANCE, INK, MUTED, RISK, RULE

#: Has the same widths wherever the file is opened (a free font of equal metrics stands in).
FONT = "Arial"
LANGUAGE = "en-GB"
TABLE_STYLE = "Harvest table"
#: A4 and its margins, mm.
SHORT, LONG, MARGIN = 210.0, 297.0, 20.0
#: Longest text of a core property.
_LONGEST_PROPERTY = 255
#: Characters that an XML file cannot hold.
_NOT_XML = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\ud800-\udfff\ufffe\uffff]")
#: The parts of the writer's template that describe another document: its preview and its program.
_STRAY = (RELATIONSHIP_TYPE.THUMBNAIL, RELATIONSHIP_TYPE.EXTENDED_PROPERTIES)


@dataclass(frozen=True)
class Look:
    """How a paragraph style looks: points, and colour as six hexadecimal digits."""

    size: float
    color: str = INK
    bold: bool = False
    italic: bool = False
    before: float = 0.0
    after: float = 0.0
    keep: bool = False
    align: WD_ALIGN_PARAGRAPH = WD_ALIGN_PARAGRAPH.LEFT


STYLES = {
    "Normal": Look(10.0, after=5.0),
    "Title": Look(20.0, ABUNDANCE, bold=True, after=4.0, keep=True),
    "Subtitle": Look(10.0, MUTED, after=10.0),
    "Heading 1": Look(13.0, bold=True, before=16.0, after=3.0, keep=True),
    "Caption": Look(9.0, MUTED, before=2.0, after=8.0),
    "Footer": Look(7.5, MUTED),
    "Harvest caution": Look(9.0, RISK, italic=True, before=4.0, after=4.0),
    "Harvest note": Look(9.0, MUTED, after=4.0, keep=True),
    "Harvest heading": Look(8.0, "FFFFFF", bold=True),
    "Harvest number heading": Look(8.0, "FFFFFF", bold=True, align=WD_ALIGN_PARAGRAPH.RIGHT),
    "Harvest text": Look(8.5),
    "Harvest number": Look(8.5, align=WD_ALIGN_PARAGRAPH.RIGHT),
}


def plain_text(text: str) -> str:
    """The text with a visible replacement character for each that XML cannot hold (a checked record has none)."""
    return _NOT_XML.sub("\N{REPLACEMENT CHARACTER}", text)


def add_text(paragraph: Paragraph, text: str) -> None:
    """Add text as nothing but text; line breaks stay."""
    paragraph.add_run(plain_text(text))


def add_line(document: DocumentObject, text: str, style: str) -> Paragraph:
    """Add a paragraph of text in a style."""
    paragraph = document.add_paragraph(style=style)
    add_text(paragraph, text)
    return paragraph


def new_document(title: str) -> DocumentObject:
    """An empty A4 document with the styles, language, footer and properties in place."""
    document = Document()
    _set_styles(document)
    _set_properties(document, title)
    section = document.sections[0]
    set_page(section, landscape=False)
    _write_footer(section)
    package = document.part.package
    for key, relation in list(package.rels.items()):
        if relation.reltype in _STRAY:
            del package.rels[key]
    return document


def set_page(section: Section, *, landscape: bool) -> None:
    """A4, upright or lying."""
    section.orientation = WD_ORIENT.LANDSCAPE if landscape else WD_ORIENT.PORTRAIT
    width, height = (LONG, SHORT) if landscape else (SHORT, LONG)
    section.page_width, section.page_height = Mm(width), Mm(height)
    section.left_margin = section.right_margin = section.top_margin = section.bottom_margin = Mm(MARGIN)
    section.footer_distance = Mm(10.0)


def _set_styles(document: DocumentObject) -> None:
    defaults = document.styles.element.find(f"{qn('w:docDefaults')}/{qn('w:rPrDefault')}/{qn('w:rPr')}")
    fonts, language = defaults.find(qn("w:rFonts")), defaults.find(qn("w:lang"))
    fonts.attrib.clear()
    for script in ("w:ascii", "w:hAnsi", "w:cs", "w:eastAsia"):
        fonts.set(qn(script), FONT)
    language.set(qn("w:val"), LANGUAGE)
    document.settings.element.find(qn("w:themeFontLang")).set(qn("w:val"), LANGUAGE)
    known = {style.name for style in document.styles}
    for name, look in STYLES.items():
        if name not in known:
            document.styles.add_style(name, WD_STYLE_TYPE.PARAGRAPH)
        _set_look(cast(ParagraphStyle, document.styles[name]), look)
    document.styles.element.append(_table_style())


def _set_look(style: ParagraphStyle, look: Look) -> None:
    """Give a style this look and nothing of the template's."""
    outline = style.element.find(f"{qn('w:pPr')}/{qn('w:outlineLvl')}")
    for tag in ("w:pPr", "w:rPr"):
        for old in style.element.findall(qn(tag)):
            style.element.remove(old)
    style.font.size, style.font.bold, style.font.italic = Pt(look.size), look.bold, look.italic
    style.font.color.rgb = RGBColor.from_string(look.color)
    layout = style.paragraph_format
    layout.space_before, layout.space_after = Pt(look.before), Pt(look.after)
    layout.line_spacing, layout.alignment = 1.1, look.align
    layout.keep_with_next, layout.widow_control = look.keep, True
    if outline is not None:
        style.element.get_or_add_pPr().append(outline)


def _table_style() -> BaseOxmlElement:
    """Thin lines between the rows, and a dark first row."""
    return parse_xml(
        f'<w:style {nsdecls("w")} w:type="table" w:customStyle="1" w:styleId="HarvestTable">'
        f'<w:name w:val="{TABLE_STYLE}"/><w:basedOn w:val="TableNormal"/>'
        f'<w:tblPr><w:tblInd w:w="70" w:type="dxa"/><w:tblBorders><w:bottom w:val="single" w:sz="6" w:color="{MUTED}"/>'
        f'<w:insideH w:val="single" w:sz="4" w:color="{RULE}"/></w:tblBorders>'
        '<w:tblCellMar><w:top w:w="30" w:type="dxa"/><w:left w:w="70" w:type="dxa"/>'
        '<w:bottom w:w="30" w:type="dxa"/><w:right w:w="70" w:type="dxa"/></w:tblCellMar></w:tblPr>'
        '<w:tblStylePr w:type="firstRow"><w:tcPr>'
        f'<w:shd w:val="clear" w:color="auto" w:fill="{ABUNDANCE}"/></w:tcPr></w:tblStylePr></w:style>'
    )


def _write_footer(section: Section) -> None:
    """The caution line and the page's number; later sections take it over."""
    paragraph = section.footer.paragraphs[0]
    paragraph.paragraph_format.tab_stops.add_tab_stop(Mm(SHORT - 2.0 * MARGIN), WD_TAB_ALIGNMENT.RIGHT)
    add_text(paragraph, f"{CAUTION}\t")
    field = OxmlElement("w:fldSimple")
    field.set(qn("w:instr"), "PAGE")
    paragraph.add_run("1")
    field.append(paragraph.runs[-1]._r)
    paragraph._p.append(field)


def _set_properties(document: DocumentObject, title: str) -> None:
    told, now = document.core_properties, datetime.now(UTC).replace(tzinfo=None)
    text = plain_text(title)
    told.title = text if len(text) <= _LONGEST_PROPERTY else text[: _LONGEST_PROPERTY - 1] + "…"
    told.author = told.last_modified_by = "Harvest"
    told.comments, told.language = CAUTION, LANGUAGE
    told.created = told.modified = now
