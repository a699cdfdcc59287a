from __future__ import annotations

import io
import re
import struct
import zipfile
import zlib
from dataclasses import replace

import pytest
from docx import Document
from docx.enum.section import WD_ORIENT
from docx.enum.text import WD_ALIGN_PARAGRAPH
from docx.oxml.ns import qn
from docx.shared import Mm

from harvest.errors import CAUTION, SettingsError
from harvest.futures import Rule
from harvest.plan import make_quota_table
from harvest.plan.assumptions import assumptions, provenance, public, record_pairs
from harvest.plan.document import TALLEST, TEXT_WIDTH, quota_document, subtitle
from harvest.plan.document_tables import column_widths, least_widths
from harvest.plan.layout import Part, parts, shown
from harvest.plan.method import method
from harvest.plan.sentences import findings, headline
from harvest.record.model import ByYear, Level, Losses, Objectives, fixed
from tests.builders import make_rates, make_record, spread
from tests.plan.conftest import DRAWS, table_of

DEMOS = ["deer", "lake", "geese"]
HEADINGS = ["Lookup card", "Method", "Why this number", "Other quotas", "Assumptions", "Record", "Provenance"]


def opened(table, *pictures, **told):
    return Document(io.BytesIO(quota_document(table, *pictures, **told)))


def png(width, height):
    def chunk(name, data):
        return struct.pack(">I", len(data)) + name + data + struct.pack(">I", zlib.crc32(name + data))

    header = struct.pack(">IIBBBBB", width, height, 8, 0, 0, 0, 0)
    pixels = zlib.compress((b"\x00" + b"\x80" * width) * height)
    start = b"\x89PNG\r\n\x1a\n"
    return start + chunk(b"IHDR", header) + chunk(b"IDAT", pixels) + chunk(b"IEND", b"")


def styled(document, style):
    return [p.text for p in document.paragraphs if p.style.name == style]


def cells(word_table):
    return [[cell.text for cell in row.cells] for row in word_table.rows]


def everything(data):
    archive = zipfile.ZipFile(io.BytesIO(data))
    return b"".join(archive.read(name) for name in archive.namelist())


@pytest.fixture(scope="module")
def documents(tables):
    return {name: opened(table) for name, table in tables.items()}


@pytest.mark.parametrize("demo", DEMOS)
def test_every_cell_is_what_the_screen_shows(tables, documents, demo):
    table = public(tables[demo])
    unit = table.record.unit
    written = [cells(t) for t in documents[demo].tables]
    for part, rows in zip(parts(table), written[:4], strict=True):
        assert rows[0] == list(part.headings)
        assert rows[1:] == [[shown(v, k, unit) for v, k in zip(row, part.kinds, strict=True)] for row in part.rows]
    for pairs, rows in zip(
        (assumptions(table), record_pairs(table.record), provenance(table)), written[4:], strict=True
    ):
        assert rows == [["Item", "Content"], *map(list, pairs)]


@pytest.mark.parametrize("demo", DEMOS)
def test_the_finding_comes_first_and_the_parts_in_their_order(tables, documents, demo):
    table, document = public(tables[demo]), documents[demo]
    quotas, *others = parts(table)
    assert document.paragraphs[0].text == headline(table)
    assert styled(document, "Title") == [headline(table)]
    assert styled(document, "Subtitle") == [subtitle(table)]
    assert styled(document, "Heading 1") == [quotas.title, *HEADINGS]
    assert styled(document, "Harvest note") == [part.note for part in (quotas, *others)]
    assert styled(document, "Normal") == [*findings(table), method(table)]


def test_the_subtitle_says_whose_quota_it_is_and_what_it_rests_on(tables):
    assert subtitle(tables["geese"]) == (
        "Sellan Marshes geese · quota of 2026 to 2030 · winter count of 2025: 10,920, coefficient of variation 8% · "
        "rates stated, not fitted"
    )


@pytest.mark.parametrize("demo", DEMOS)
def test_the_caution_is_in_the_footer_and_once_in_the_body(documents, demo):
    document = documents[demo]
    assert [p.text for p in document.paragraphs].count(CAUTION) == 1
    footer = document.sections[0].footer
    assert footer.paragraphs[0].text.startswith(f"{CAUTION}\t")
    assert [f.get(qn("w:instr")) for f in footer._element.iter(qn("w:fldSimple"))] == ["PAGE"]


@pytest.mark.parametrize("demo", DEMOS)
def test_tables_repeat_their_first_row_do_not_split_rows_and_fit_the_page(documents, demo):
    for table in documents[demo].tables:
        first, *rest = table.rows
        assert first._tr.trPr.find(qn("w:tblHeader")) is not None
        assert all(row._tr.trPr.find(qn("w:tblHeader")) is None for row in rest)
        assert all(row._tr.trPr.find(qn("w:cantSplit")) is not None for row in table.rows)
        assert not table.autofit
        assert sum(column.width for column in table.columns) <= Mm(TEXT_WIDTH) + 1000
        for row in table.rows:
            assert [c.width for c in row.cells] == [c.width for c in table.columns]


@pytest.mark.parametrize("demo", DEMOS)
def test_numbers_stand_right_and_texts_left(tables, documents, demo):
    sides = {True: WD_ALIGN_PARAGRAPH.LEFT, False: WD_ALIGN_PARAGRAPH.RIGHT}
    for part, table in zip(parts(tables[demo]), documents[demo].tables, strict=False):
        for row in table.rows:
            found = [cell.paragraphs[0].style.paragraph_format.alignment for cell in row.cells]
            assert found == [sides[kind == "text"] for kind in part.kinds]


def test_a_long_text_may_break_over_pages(demos):
    deer = replace(demos["deer"], plan=(("purpose", "long " * 900), ("note", "a\n" * 40), ("author", "short")))
    record = opened(table_of(deer)).tables[5]
    split = {row.cells[0].text: row._tr.trPr is None for row in record.rows[1:]}
    assert (split["Purpose"], split["Note"], split["Author"], split["Name"]) == (True, True, False, False)


def test_the_file_is_british_upright_a4_and_names_no_one(tables):
    data = quota_document(tables["deer"])
    document = Document(io.BytesIO(data))
    (section,) = document.sections
    assert (round(section.page_width.mm), round(section.page_height.mm)) == (210, 297)
    told = document.core_properties
    assert (told.title, told.author, told.last_modified_by) == (headline(tables["deer"]), "Harvest", "Harvest")
    assert (told.language, told.comments) == ("en-GB", CAUTION)
    archive = zipfile.ZipFile(io.BytesIO(data))
    assert archive.testzip() is None
    assert b'w:lang w:val="en-GB"' in archive.read("word/styles.xml")
    assert not [name for name in archive.namelist() if re.search("thumbnail|vba|app.xml", name)]
    relations = b"".join(archive.read(name) for name in archive.namelist() if name.endswith(".rels"))
    assert b"External" not in relations


@pytest.mark.parametrize("rule", [None, Rule("ramp", (1200.0, 2200.0, 0.1))], ids=["constant", "ramp"])
def test_private_fields_do_not_leave(demos, rule):
    deer = demos["deer"]
    hidden = replace(
        deer,
        name="SECRET-NAME",
        species="SECRET-SPECIES",
        place="SECRET-PLACE",
        surveys=(replace(deer.surveys[0], name="SECRET-SURVEY"),),
        history=replace(deer.history, notes=tuple("SECRET-NOTE" for _ in deer.history.years)),
        plan=(("author", "SECRET-AUTHOR"),),
        private=("name", "species", "place", "survey", "plan", "history.note", "history.removals"),
    )
    told = everything(quota_document(table_of(hidden, rule=rule)))
    assert b"SECRET" not in told
    assert b"(private)" in told


def test_a_picture_has_its_sentence_and_its_description(tables):
    picture, history = png(760, 420), png(400, 800)
    told = {"risk_caption": "Risk < 5% & slow.", "risk_description": 'A "line" that rises.\nThen more.'}
    document = opened(tables["deer"], picture, history, **told, history_description="Points\x0b.")
    shapes = document.inline_shapes
    assert [s._inline.docPr.get("descr") for s in shapes] == [
        told["risk_description"],
        "Points\N{REPLACEMENT CHARACTER}.",
    ]
    blobs = {part.blob for part in document.part.package.iter_parts() if part.content_type == "image/png"}
    assert blobs == {picture, history}
    assert styled(document, "Caption") == ["Risk < 5% & slow."]
    assert styled(document, "Heading 1")[1:5] == ["Lookup card", "Risk against quota", "Counts and removals", "Method"]
    for shape, ratio in zip(shapes, (760 / 420, 0.5), strict=True):
        assert shape.width <= Mm(TEXT_WIDTH)
        assert shape.height == Mm(TALLEST)
        assert shape.width / shape.height == pytest.approx(ratio, rel=1e-3)


def test_a_flat_picture_is_as_wide_as_the_text(tables):
    (shape,) = opened(tables["deer"], png(800, 100), risk_description="A line.").inline_shapes
    assert (shape.width, shape.height) == (Mm(TEXT_WIDTH), pytest.approx(Mm(TEXT_WIDTH) / 8, rel=1e-3))


@pytest.mark.parametrize("data", [b"", b"no picture", png(9, 9)[:20]], ids=["empty", "text", "cut off"])
def test_what_is_no_picture_is_refused(tables, data):
    with pytest.raises(SettingsError, match='picture "Risk against quota" cannot be read: give the bytes of a PNG'):
        quota_document(tables["deer"], data, risk_description="A line.")


def test_a_picture_without_a_description_is_refused(tables):
    with pytest.raises(SettingsError, match='picture "Counts and removals" has no description: say in words'):
        quota_document(tables["deer"], None, png(9, 9), history_description=" ")


def test_text_from_a_record_stays_text(demos):
    hostile = '</w:t><w:p/>&amp; =1+1 {PAGE} <script> "x"'
    survey = replace(demos["deer"].surveys[0], name=hostile)
    purpose = "one\ntwo\tthree"
    deer = replace(demos["deer"], name=hostile, species="a" * 400, surveys=(survey,), plan=(("purpose", purpose),))
    table = table_of(deer)
    document = opened(table)
    record = dict(cells(document.tables[5]))
    assert (record["Name"], record["Purpose"]) == (hostile, purpose)
    (paragraph,) = [row.cells[1].paragraphs[0] for row in document.tables[5].rows if row.cells[0].text == "Purpose"]
    assert len(list(paragraph._p.iter(qn("w:br")))) == 1
    assert dict(cells(document.tables[4]))["Abundance from"].startswith(f"{hostile} of 2026")
    assert document.core_properties.title == headline(table)[:254] + "…"
    assert styled(document, "Title") == [headline(table)]


def test_what_xml_cannot_hold_is_seen_and_not_lost(tables):
    deer = tables["deer"]
    record = opened(replace(deer, record=replace(deer.record, name="a\x00b\ud800c\uffffd"))).tables[5]
    assert dict(cells(record))["Name"] == "a�b�c�d"


def test_a_quota_table_that_is_too_wide_lies_on_a_page_of_its_own(tables):
    lake = tables["lake"]
    amounts = ["quota", "quota_low90", "quota_high90", "removals", "abundance", "abundance_low90", "abundance_high90"]
    rows = lake.rows.copy()
    rows[amounts] *= 1e9
    document = opened(replace(lake, rows=rows))
    lying, upright = WD_ORIENT.LANDSCAPE, WD_ORIENT.PORTRAIT
    assert [s.orientation for s in document.sections] == [upright, lying, upright]
    assert [round(s.page_width.mm) for s in document.sections] == [210, 297, 210]
    assert all(s.footer.paragraphs[0].text.startswith(CAUTION) for s in document.sections)
    assert Mm(TEXT_WIDTH) < sum(column.width for column in document.tables[0].columns) <= Mm(257) + 1000


def make_part(*columns):
    """A part of texts: (heading, kind, cells)."""
    headings, kinds, texts = zip(*columns, strict=True)
    return Part("", "", headings, kinds, ()), [list(row) for row in zip(*texts, strict=True)]


def test_a_column_is_never_narrower_than_its_longest_number_or_word():
    part, rows = make_part(
        ("Legal quota", "amount", ["1,234,567", "9"]), ("Why", "text", ["so it is", "because " * 40])
    )
    assert least_widths(part, rows) == pytest.approx([9 * 1.65 + 2.6, 7 * 1.65 + 2.6])


def test_short_columns_get_some_air_and_long_ones_share_what_is_left():
    part, rows = make_part(("A", "amount", ["12"]), ("B", "text", ["ab cd"]))
    assert column_widths(part, rows, 170.0) == pytest.approx([2 * 1.65 + 14.6, 5 * 1.65 + 14.6])
    part, rows = make_part(("A", "text", ["four " * 4]), ("B", "text", ["five5 " * 100]))
    widths = column_widths(part, rows, 100.0)
    assert sum(widths) == pytest.approx(100.0)
    least = least_widths(part, rows)
    lacks = [20 * 1.65 + 2.6 - least[0], 110.0 - least[1]]
    assert (widths[0] - least[0]) / (widths[1] - least[1]) == pytest.approx(lacks[0] / lacks[1])


def test_columns_that_cannot_fit_share_the_page_in_proportion():
    part, rows = make_part(("A", "amount", ["1" * 40]), ("B", "amount", ["1" * 20]))
    widths = column_widths(part, rows, 50.0)
    assert sum(widths) == pytest.approx(50.0)
    assert widths[0] / widths[1] == pytest.approx((40 * 1.65 + 2.6) / (20 * 1.65 + 2.6))


def test_the_method_tells_the_numbers_that_were_used():
    """A record without any uncertainty: every number of the paragraph is known beforehand."""
    losses = Losses(fixed(0.1), fixed(0.05), fixed(7.0), 0.12)
    record = make_record(losses=losses, objectives=Objectives(limit=Level(400.0), horizon=12), species="roe")
    rates = make_rates(draws=400, abundance=900.0, wounding=0.1, unreported=0.05, other=7.0, seed=3)
    table = make_quota_table(record, rates, seed=5, futures_per_draw=2)
    last = f"{round(float(table.curve.quotas[-1])):,}"
    assert method(table) == (
        "What is uncertain is carried by 400 draws of the rates (stated, not fitted), each with 2 futures of random "
        "years: 800 futures in all. Rates and abundances below are medians over the draws with their 90% intervals. "
        "Growth curve: logistic in 100% of the draws [Schaefer 1954]. One year is one step: removals fall in one "
        "short season, and what is left grows until the next, without yearly noise. Each draw's abundance starts "
        "from the count of 2020 (1,000, coefficient of variation 20%) divided by a survey bias of 1. Quotas start "
        "from an abundance of 900 roe before the season. Total removals are the legal take times 1.15 for wounding "
        "and unreported take, plus other human-caused deaths of 7 a year; the legal take misses the quota with a "
        "coefficient of variation of 12%. Quotas are legal takes, and risk counts total removals. Risk is the chance "
        "of ever being below 400 roe, before the season, in 12 years of quotas from 2021; the tolerance is 5%. Risk "
        f"is read off one stored curve of {table.curve.quotas.size} constant quotas from 0 to {last}, all on the same "
        f"futures, whose number was fixed before looking; the largest quota on it within the tolerance is "
        f"{table.recommendation.quota:.0f} (whole animals, rounded down). Each ± is one Monte Carlo standard error. "
        f"Computed with Harvest {table.version}; seed of the rates 3, of the futures 5."
    )


@pytest.mark.parametrize(
    ("demo", "told"),
    [
        ("deer", f"carried by {DRAWS:,} draws of the rates (stated, not fitted), each with 1 future of random years"),
        ("deer", "logistic in 50% of the draws [Schaefer 1954], theta-logistic in 50% of the draws [Pella & Tomlinson"),
        ("deer", "demographic noise (the same, at one animal) 0.5; autocorrelation 0.2."),
        ("lake", "Fox in 60% of the draws [Fox 1970], logistic in 40% of the draws [Schaefer 1954]."),
        ("lake", "removals and growth run together"),
        ("lake", "carried with noise through the removals on record to the season of 2026. Quotas start from an"),
        ("lake", "the rule in force (ramp: nothing below 100, rising to 18% of the count at 220 and above) is its own"),
        ("lake", "(three significant figures, rounded down)"),
        ("geese", "Gompertz in 50% of the draws [the Gompertz map, linear in logs (Dennis et al. 2006)]"),
        ("geese", "a chance of at least 80% of being under the ceiling within 5 years (asked for)."),
        ("geese", "the smallest quota on it that meets the aim is"),
    ],
)
def test_the_method_follows_the_record(tables, demo, told):
    assert told in method(tables[demo])


def test_the_method_tells_the_noise_as_drawn(tables):
    sigma = tables["geese"].rates.table["sigma"]
    low, median, high = (f"{q:.3g}" for q in sigma.quantile([0.05, 0.5, 0.95]))
    assert f"(standard deviation of the logarithm) {median} (90% between {low} and {high})." in method(tables["geese"])


def test_the_method_of_a_recovery_and_of_a_closure():
    aims = Objectives(limit=Level(800.0), recovery=ByYear(8, 0.9))
    rates = make_rates(draws=300, abundance=600.0)
    told = method(make_quota_table(make_record(objectives=aims), rates))
    assert "a chance of at least 90% of being back above the limit within 8 years (asked for)." in told
    assert "the largest quota on it that meets the aim is" in told
    assumed = make_record(objectives=Objectives(limit=Level(800.0)))
    assert "within 10 years (assumed)." in method(make_quota_table(assumed, rates))
    hopeless = make_record(objectives=replace(aims, recovery=ByYear(1, 0.9)))
    assert "no quota on it meets what is asked." in method(make_quota_table(hopeless, rates))


def test_a_given_quota_is_told_as_the_rule_in_force(demos):
    told = method(table_of(demos["deer"], rule=Rule("fixed quota", (100.0,))))
    assert "the rule in force (fixed quota of 100 a year) is its own projection on those futures." in told


def test_uncertain_losses_are_told_with_their_interval():
    record = make_record(losses=Losses(other=spread("uniform", low=0.0, high=20.0)))
    other = [float(i) for i in range(201)]
    told = method(make_quota_table(record, make_rates(other=other)))
    assert "plus other human-caused deaths of 100 (90% between 10 and 190) a year." in told
