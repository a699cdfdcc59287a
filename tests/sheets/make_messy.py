"""Write the messy sheets of ``tests/sheets/messy`` anew: ``python tests/sheets/make_messy.py``. All is invented."""

from __future__ import annotations

import io
import re
import zipfile
from collections.abc import Callable
from datetime import date, datetime
from pathlib import Path
from typing import Any

from openpyxl import Workbook
from openpyxl.worksheet.worksheet import Worksheet

FOLDER = Path(__file__).parent / "messy"
_STAMP = datetime(2024, 1, 1)
_NBSP, _THIN, _NARROW = "\u00a0", "\u2009", "\u202f"


def fill(sheet: Worksheet, rows: list[list[Any]]) -> None:
    for row in rows:
        sheet.append(row)


def new_book(title: str) -> tuple[Workbook, Worksheet]:
    book = Workbook()
    sheet = book.active
    sheet.title = title
    return book, sheet


def save(book: Workbook, stored: dict[str, float] | None = None) -> bytes:
    """The workbook's bytes; ``stored`` gives cells with formulas the values that a spreadsheet program would store."""
    book.properties.created = book.properties.modified = _STAMP
    raw, out = io.BytesIO(), io.BytesIO()
    book.save(raw)
    with zipfile.ZipFile(raw) as old, zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as new:
        for name in old.namelist():
            data = old.read(name)
            if name.startswith("xl/worksheets/"):
                data = store(data.decode(), stored or {}).encode()
            new.writestr(zipfile.ZipInfo(name, (2024, 1, 1, 0, 0, 0)), data, zipfile.ZIP_DEFLATED)
    return out.getvalue()


def store(xml: str, stored: dict[str, float]) -> str:
    for cell, value in stored.items():
        pattern = rf'(<c r="{cell}"[^>]*><f>[^<]*</f>)<v\s*/?>(?:</v>)?'
        xml, times = re.subn(pattern, rf"\g<1><v>{value}</v>", xml)
        if times != 1:
            raise ValueError(f"no formula in {cell}")
    return xml


def marsh_hares() -> bytes:
    """Semicolons, Latin-1, German words and decimal commas."""
    return (
        "Feldhasen im Ostermoor;;;;\n"
        "Jahr;Jagdstrecke;Zählung je km²;Variationskoeffizient;Bemerkung\n"
        "2018;41;12,5;0,20;\n"
        "2019;38;11,25;0,18;nass, früh gezählt\n"
        "2020;k.A.;;;\n"
        "2021;29;9,75;0,22;\n"
        "2022;0;10,5;0,21;Schonzeit\n"
    ).encode("latin-1")


def valley_deer() -> bytes:
    """Titles, two header rows with merged cells, removals by sex and age, a footnote."""
    book, sheet = new_book("Deer")
    fill(
        sheet,
        [
            ["Red deer of the Aldra Valley"],
            ["Compiled by the game office"],
            [],
            ["Year", "Removals", None, None, "Spring count", None, "Remarks"],
            [None, "females", "males", "calves", "estimate", "CV", None],
            [2019, 120, 95, 60, 2140, 0.12, None],
            [2020, 131, 88, None, 2055, 0.14, "=late snow"],
            [2021, 118, 102, 0, 2210, 0.11, None],
            [2022, 140, 97, 71, None, None, "no flight"],
            ["* calves are counted until their first winter"],
        ],
    )
    sheet["G7"].data_type = "s"
    for merged in ("B4:D4", "E4:F4", "A4:A5", "G4:G5"):
        sheet.merge_cells(merged)
    return save(book)


def harbour_seals() -> bytes:
    """Years as dates, CVs in percent."""
    book, sheet = new_book("Seals")
    fill(sheet, [["Season", "Shot", "Census", "CV (%)"]])
    for year, shot, census, cv in ((2017, 12, 640, 15), (2018, 9, 655, 12.5), (2019, 14, 618, 18)):
        sheet.append([date(year, 1, 1), shot, census, cv])
    return save(book)


def upland_grouse() -> bytes:
    """An empty row between, a totals row, a mean row and a footnote."""
    book, sheet = new_book("Grouse")
    fill(
        sheet,
        [
            ["Year", "Bag", "Count"],
            [2020, 310, 1480],
            [2021, 295, 1390],
            [],
            [2022, 240, 1275],
            ["Total", 845, None],
            ["Mean 2020-2022", 281.7, 1381.7],
            [None, 845, None],
            ["Counted with pointing dogs."],
        ],
    )
    return save(book)


def bay_cod() -> bytes:
    """Counts with a plus-minus, thousands marks, decimals."""
    return (
        "year,landings (t),survey biomass\n"
        '2019,"1,050.5","12,400 ± 1,300"\n'
        '2020,980,"11,850 ± 1,250"\n'
        '2021,"1,010","12,020 ± 10%"\n'
        "2022,870.25,\n"
    ).encode()


def hidden_geese() -> bytes:
    """The history is in a hidden sheet, one of its rows and one of its columns are hidden too."""
    book, sheet = new_book("Read me")
    fill(sheet, [["The numbers of the Sellan geese"], ["Ask the reserve before use"]])
    data = book.create_sheet("Data")
    fill(
        data,
        [
            ["Year", "Harvest", "Winter count", "SE"],
            [2018, 300, 8700, 700],
            [2019, 310, 7500, 640],
            [2020, 9999, 1, 1],
            [2020, 350, 10060, 810],
        ],
    )
    data.sheet_state = "hidden"
    data.row_dimensions[4].hidden = True
    data.column_dimensions["D"].hidden = True
    return save(book)


def formula_book(stored: bool) -> bytes:
    book, sheet = new_book("Roe")
    fill(
        sheet,
        [
            ["Year", "Does", "Bucks", "Total cull", "Drive count"],
            [2020, 31, 40, "=B2+C2", 410],
            ["=A2+1", 28, 37, "=B3+C3", 395],
            ["=A3+1", 35, 33, "=B4+C4", 402],
        ],
    )
    values = {"D2": 71, "A3": 2021, "D3": 65, "A4": 2022, "D4": 68}
    return save(book, values if stored else {cell: v for cell, v in values.items() if cell[0] == "A"})


def formulas_stored() -> bytes:
    """Formulas with the values that the spreadsheet program stored."""
    return formula_book(True)


def formulas_unstored() -> bytes:
    """Formulas whose values another program did not store."""
    return formula_book(False)


def thousands_or_decimals() -> bytes:
    """Points before three digits: nothing in the file tells what they mean."""
    return b"Year;Removals;Count\n2020;987;1.234\n2021;1.020;1.310\n2022;954;998\n"


def thousands_marks() -> bytes:
    """Four kinds of thousands marks."""
    return (
        "Year;Catch;North survey;South survey\n"
        f"2019;1 204;12{_NBSP}400;1'150\n"
        f"2020;980;11{_THIN}850;990\n"
        f"2021;1 010;12{_NARROW}020;1’075\n"
    ).encode()


def transposed_elk() -> bytes:
    """The years run from left to right."""
    book, sheet = new_book("Elk")
    fill(
        sheet,
        [
            ["Elk of the Torva Forest"],
            [],
            ["Year", 2019, 2020, 2021, 2022],
            ["Bulls killed", 14, 11, 12, 15],
            ["Cows killed", 9, 10, 8, 7],
            ["Aerial count", 320, None, 305, 298],
            ["CV of aerial count", "15%", None, "12%", "14%"],
            ["Comments", None, "no money", None, None],
        ],
    )
    return save(book)


def winter_seasons() -> bytes:
    """Seasons that span two years, the latest first, one of them missing."""
    return (
        b"Winter\tBag\tCount\n"
        b"Winter 2021/22\t88\t1450\n"
        b"Winter 2020/21\t91\t1390\n"
        b"Winter 2018/19\t80\t1512\n"
        b"Winter 2017/2018\t75\t1475\n"
    )


def district_boar() -> bytes:
    """Several rows a year, one for each district, the year merged over them; a missing year."""
    book, sheet = new_book("Boar")
    fill(
        sheet,
        [
            ["Year", "District", "Harvest", "Count", "CV"],
            [2019, "Ost", 120, 800, 0.2],
            [None, "West", 95, 600, 0.25],
            [2020, "Ost", 134, 850, 0.2],
            [None, "West", None, 640, 0.25],
            [2022, "Ost", 101, 790, 0.2],
            [None, "West", 88, 610, 0.3],
            [2022, "Total", 189, 1400, None],
        ],
    )
    for first in (2, 4, 6):
        sheet.merge_cells(start_row=first, end_row=first + 1, start_column=1, end_column=1)
    return save(book)


def dressed_ibex() -> bytes:
    """Units, remarks, doubt, dashes, words for missing values, stars at years."""
    return (
        b"Year,Removals,Ground count,Notes\n"
        b"2018,12 ibex,234,\n"
        b"2019,-,241*,two days only\n"
        b"2020,9 ibex,n/a,\n"
        b"2021*,none,ca. 250,\n"
        b"2022,0,239 (fog),=SUM(1)\n"
    )


def unreadable_pike() -> bytes:
    """A number that cannot be read, and an answer that no option gives."""
    return b"Year,Catch (t),Index\n2020,12.5,31.2\n2021,10-14,29.8\n2022,11.0,thirty\n"


def letter() -> bytes:
    """A letter that was saved as CSV."""
    return (
        b"Dear colleagues of the game office,\n"
        b"thank you for the talk in spring, it was good to meet you all.\n"
        b"Our warden retired in 2019, and nobody has written down a count since.\n"
        b"With kind regards\n"
    )


MESSY: dict[str, Callable[[], bytes]] = {
    "marsh_hares.csv": marsh_hares,
    "valley_deer.xlsx": valley_deer,
    "harbour_seals.xlsx": harbour_seals,
    "upland_grouse.xlsx": upland_grouse,
    "bay_cod.csv": bay_cod,
    "hidden_geese.xlsx": hidden_geese,
    "formulas_stored.xlsx": formulas_stored,
    "formulas_unstored.xlsx": formulas_unstored,
    "thousands_or_decimals.csv": thousands_or_decimals,
    "thousands_marks.csv": thousands_marks,
    "transposed_elk.xlsx": transposed_elk,
    "winter_seasons.csv": winter_seasons,
    "district_boar.xlsx": district_boar,
    "dressed_ibex.csv": dressed_ibex,
    "unreadable_pike.csv": unreadable_pike,
    "letter.csv": letter,
}


if __name__ == "__main__":
    FOLDER.mkdir(exist_ok=True)
    for name, make in MESSY.items():
        (FOLDER / name).write_bytes(make())
