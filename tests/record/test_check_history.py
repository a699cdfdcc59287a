"""Every fault of the history is found, placed and explained."""

from __future__ import annotations

import pytest

from harvest.record.check import check_texts
from harvest.record.numbers import explain_number, find_date_year, parse_number

from .edits import CSV, TOML, edited, problems_of, told


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        # years
        ("2021,90", "2020,90", ["row 4, column year", "stands twice"]),
        ("2021,90,720,0.14,,\n", "", ["row 4, column year", "Add a row for 2021"]),
        ("2021,90,720,0.14,,\n2022,90,700,0.16,10,\n", "", ["Add a row for 2021 to 2022"]),
        ("2019,80", "2024,80", ["row 3, column year", "Sort the rows"]),
        ("2021,90", "21,90", ["row 4, column year", "four digits"]),
        ("2021,90", "2021.0,90", ["row 4, column year", "Write 2021."]),
        ("2021,90", "2021-04-01,90", ["row 4, column year", "the date", "2021"]),
        ("2021,90", "1/4/2021,90", ["row 4, column year", "the date", "2021"]),
        ("2021,90", ",90", ["row 4, column year", "an empty text"]),
        ("2021,90", "1500,90", ["row 4, column year", "from 1600 to 2200"]),
        ("2021,90", "٢٠٢١,90", ["row 4, column year"]),
        # numbers
        ("2021,90", "2021,-90", ["row 4 (year 2021), column removals", "-90", "from 0"]),
        ("2021,90", "2021,ninety", ["row 4 (year 2021), column removals", "plain number"]),
        ("2021,90", '2021,"12,5"', ["decimal comma", "Write 12.5"]),
        ("2021,90", '2021,"1,200"', ["thousands mark", "Write 1200", "or 1.200"]),
        ("2021,90", "2021,1 200", ["thousands mark", "Write 1200"]),
        ("2021,90", "2021,1\u00a0200", ["thousands mark", "Write 1200"]),
        ("2021,90", "2021,1'200", ["thousands mark", "Write 1200"]),
        ("2021,90", '2021,"1.200,5"', ["Write 1200.5"]),
        ("2021,90", "2021,n/a", ["missing value", "Leave the cell empty"]),
        ("2021,90", "2021,-", ["missing value", "Leave the cell empty"]),
        ("2021,90", "2021,nd", ["missing value", "Leave the cell empty"]),
        ("2021,90", "2021,NaN", ["missing value", "Leave the cell empty"]),
        ("2021,90", "2021,inf", ["infinity"]),
        ("2021,90", "2021,1_000", ["plain number"]),
        ("2021,90", "2021,0x5A", ["plain number"]),
        ("2021,90", "2021,٩٠", ["digits 0 to 9"]),
        ("2021,90", "2021,1e99", ["beyond all bounds"]),
        ("2021,90", "2021,=A1+B1", ["a formula"]),
        ("2021,90", "2021,>90", ["sign of doubt"]),
        ("2021,90", "2021,90 t", ["without its unit"]),
        ("2021,90", f"2021,{'9' * 100000}", ["only the number"]),
        # CVs and counts
        ("0.14", "14", ["row 4 (year 2021), column ground_cv", "Was 0.14 (14 percent) meant?"]),
        ("0.14", "14%", ["column ground_cv", "Was 0.14 meant?"]),
        ("0.14", "0", ["column ground_cv", "above 0"]),
        ("0.14", "", ["column ground_cv", "found nothing", "each count needs"]),
        ("720", "0", ["column ground", "detection_limit"]),
        # header and shape
        ("year,removals", "Year,removals", ['unknown column "Year"', "Was year meant?"]),
        ("year,removals", "year,removal", ['unknown column "removal"', "Was removals meant?"]),
        ("year,removals", "year,removal", ['no column "removals"']),
        ("ground,ground_cv", "ground,groundcv", ['no column "ground_cv"', 'Was the column "groundcv" meant?']),
        (",note", ",weather", ['unknown column "weather"']),
        (",note", ",pellets", ["a second column"]),
        (",note", ",", ["column 6", "without a name"]),
        (CSV[: CSV.index("2019")], "", ["row 1", "numbers, not names"]),
        ("year,removals", "\nyear,removals", ["row 1", "an empty row"]),
        ("2021,90,720,0.14,,", "2021,90,720,0.14", ["row 4", "4 cells"]),
        ("2021,90,720,0.14,,", "2021,90,720,0.14,,fog, rain", ["row 4", "7 cells", "quotes"]),
        ("no count", '"no count', ["row 3", "quotes"]),
        ("no count", 'no "count"x', []),
        ("no count", '"no" count', ["row 3", "quotes"]),
        ("no count", "x" * 5001, ["row 3 (year 2020), column note", "5,000"]),
        ("no count", "x" * 140_000, ["row 3", "cannot be told apart"]),
        ("no count", "a\x07b", ["row 3 (year 2020), column note", "control characters"]),
        (CSV[CSV.index("2019") :], "", ["no years"]),
    ],
)
def test_an_error_is_found(old: str, new: str, words: list[str]) -> None:
    problems = problems_of(csv=edited(CSV, old, new))
    assert told(problems, "error", "history.csv", *words) or (not words and problems == ())


@pytest.mark.parametrize(("mark", "name"), [(";", "semicolons"), ("\t", "tabs")])
def test_another_separator_is_told_and_read_through(mark: str, name: str) -> None:
    csv = CSV.replace(",", mark).replace("0.14", "0,14")
    problems = problems_of(csv=csv)
    assert told(problems, "error", "row 1", name)
    assert told(problems, "error", "row 4 (year 2021), column ground_cv", "Write 0.14")
    assert len(problems) == 2


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ("0.14", "1.4", ["column ground_cv", "Unusual"]),
        ("2021,90", "2021,900", ["row 4 (year 2021), column removals", "ground = 720"]),
        ("2020,85,,", "2020,85,,0.2", ["row 3 (year 2020), column ground_cv", "without a count"]),
        ("2022,90,700,0.16,10,\n2023,,735,0.15,11,\n", "2022,,700,0.16,10,\n2023,,,,11,\n", ["nothing for 2022"]),
        ("2019,80,690,0.15,11,\n2020,85,,,12.5,no count\n2021,90,720,0.14,,\n", "", ["2 year(s)"]),
    ],
)
def test_a_warning_is_given(old: str, new: str, words: list[str]) -> None:
    problems = problems_of(csv=edited(CSV, old, new))
    assert told(problems, "warning", "history.csv", *words)
    assert not told(problems, "error")


def test_removals_that_are_zero_throughout_are_doubted() -> None:
    csv = CSV.replace(",80,", ",0,").replace(",85,", ",0,").replace(",90,", ",0,")
    assert told(problems_of(csv=csv), "warning", "0 in every year")


def test_a_zero_count_with_a_detection_limit_passes() -> None:
    toml = edited(TOML, 'cv_column = "ground_cv"', 'cv_column = "ground_cv"\ndetection_limit = 20')
    assert not told(problems_of(toml, edited(CSV, "720", "0")), "error")


@pytest.mark.parametrize(
    "csv",
    [
        CSV.replace("\n", "\n\n"),
        CSV + ",,,,,\n,,,,,\n",
        CSV.replace("\n", ",,\n"),
        CSV.replace(",", " , ").replace(" , \n", ",\n"),
        CSV.replace("90", "9.0e1"),
        CSV.rstrip("\n"),
        edited(CSV, "no count", '"no count, said ""Ann""\nand left"'),
    ],
)
def test_harmless_shapes_pass(csv: str) -> None:
    assert problems_of(csv=csv) == ()


def test_notes_come_back_without_their_guard() -> None:
    record, _ = check_texts(TOML, edited(CSV, "no count", "'=1+1"))
    assert record is not None
    assert record.history.notes == ("", "=1+1", "", "", "")


def test_surveys_may_share_a_column_of_cvs() -> None:
    toml = edited(TOML, "cv = 0.3", 'cv_column = "ground_cv"')
    problems = problems_of(toml)
    assert told(problems, "error", "row 3 (year 2020), column ground_cv", "nothing")
    assert problems_of(toml, edited(CSV, "2020,85,,", "2020,85,,0.2")) == ()


def test_the_shape_of_a_huge_history_is_bounded() -> None:
    assert told(problems_of(csv="year,removals\n" + "2000,1\n" * 100_000), "error", "too many rows")
    assert told(problems_of(csv="x," * 300_000), "error", "at most 200 columns")


@pytest.mark.parametrize("text", ["0", "12", "12.5", ".5", "5.", "-3", "+3", "1e3", "1.5E-2", " 7 "])
def test_plain_numbers_are_read(text: str) -> None:
    assert parse_number(text) == float(text)


@pytest.mark.parametrize(
    "text", ["", "1,2", "1_0", "0x1", "inf", "nan", "1e", "e5", "--1", "1 2", "٣", "1e400", "1e16", "½", "1.2.3"]
)
def test_other_numbers_are_not_read(text: str) -> None:
    assert parse_number(text) is None
    assert explain_number(text)[1].endswith(".")


def test_dates_tell_their_year() -> None:
    assert find_date_year("2019-05-01") == "2019"
    assert find_date_year("1.5.2019") == "2019"
    assert find_date_year("3 May 2019 12:00") == "2019"
    assert find_date_year("2019") is None


def test_a_thousands_mark_written_as_a_point_is_asked_about() -> None:
    faults = problems_of(TOML, edited(CSV, "2021,90,720", "2021,90,1.720"))
    assert told(faults, "warning", "row 4 (year 2021)", "If 1720 was meant")
    assert not told(problems_of(TOML, edited(CSV, "2021,90,720", "2021,90,720.5")), "warning", "was meant")


def test_a_row_added_at_the_end_comes_with_the_quota_year_it_serves() -> None:
    """With a lag of 2 an added row would move the quota year on by one, so the cure states the year."""
    toml = edited(TOML, "lag = 0", "lag = 2")
    csv = edited(CSV, "2023,,735,0.15,11,", "2023,95,735,0.15,11,")
    assert told(problems_of(toml, csv), "warning", "nothing for 2024", "first_quota_year = 2025")
    mended = edited(toml, "lag = 2", "lag = 2\nfirst_quota_year = 2025")
    assert not told(problems_of(mended, csv + "2024,95,,,,\n"), "warning", "nothing for")
