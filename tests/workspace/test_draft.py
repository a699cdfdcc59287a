"""A draft keeps everything that it is not asked to change, whatever stands in it."""

from __future__ import annotations

import tomllib
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from harvest.record import Record
from harvest.record.document import render_document
from harvest.record.write import in_order, record_to_files
from harvest.workspace import Draft, Grid
from tests.record.edits import CSV, TOML
from tests.record.strategies import notes, records, texts

DRAFT = Draft(TOML, CSV)
BROKEN = Draft("name = ", CSV)
HOSTILE = [
    "<script>x</script>",
    '"',
    "'''",
    "\\",
    "a\nb\r\nc",
    "\t",
    "=1+1",
    "[survey]",
    "# no comment",
    "\u202e",
    "\0",
]
_PLAIN_VALUES = st.one_of(st.booleans(), st.integers(-(2**62), 2**62), st.floats(allow_nan=False), texts)
_VALUES = st.recursive(
    _PLAIN_VALUES, lambda inner: st.lists(inner, max_size=3) | st.dictionaries(texts, inner, max_size=3), max_leaves=6
)
_KEYS = texts | st.sampled_from(["name", "rates", "survey", "curve", "history", "a.b", "a b", "private"])


def cells(draft: Draft) -> Grid:
    grid = draft.grid
    if grid is None:
        raise AssertionError("the history has no cells")
    return grid


def document(draft: Draft) -> dict[str, Any]:
    found = draft.document
    if found is None:
        raise AssertionError(f"no TOML: {draft.record_text}")
    return found


@given(records())
@settings(max_examples=60)
def test_a_record_survives_being_written_by_a_draft(record: Record) -> None:
    draft = Draft(*record_to_files(record))
    again = draft.with_document(document(draft)).with_grid(cells(draft))
    assert again.check()[0] == in_order(record)


@given(st.dictionaries(_KEYS, _VALUES, max_size=5))
@settings(max_examples=100)
def test_any_document_is_written_without_loss(content: dict[str, Any]) -> None:
    assert tomllib.loads(render_document(content, "# head\n")) == content


@pytest.mark.parametrize(
    "content",
    [
        {"a b": 1, "": 2, '"': 3, "a.b": 4},
        {"x": {"y": {"c d": {"e f": 1}}}},
        {"survey": [{"a b": "x", "deep": {"a b": {}}}], "curve": [{"name": "fox", "shape": {"a b": [{"c d": 1}]}}]},
        {"survey": []},
        {"survey": [1, {"a": 2}]},
        {"survey": {"name": "single"}},
        {"rates": 5, "life": [{"a": 1}], "unknown": [{"a": 1}]},
        {"rates": {}, "plan": {}},
        {"big": 1e300, "endless": float("inf")},
        {f"k{n}": text for n, text in enumerate(HOSTILE)},
    ],
)
def test_documents_that_are_no_record_are_written_without_loss(content: dict[str, Any]) -> None:
    assert tomllib.loads(render_document(content, "# head\n")) == content


def test_what_is_nested_deeply_is_written_or_not_read() -> None:
    deep = Draft(f"a = {'[' * 300}1{']' * 300}\n", CSV)
    assert document(deep.with_value("", None, "name", "x")) == {**document(deep), "name": "x"}
    too_deep = Draft(f"a = {'[' * 5000}1{']' * 5000}\n", CSV)
    assert too_deep.document is None
    assert too_deep.with_value("", None, "name", "x") is too_deep


@pytest.mark.parametrize("text", HOSTILE)
def test_hostile_texts_survive_in_every_place(text: str) -> None:
    draft = DRAFT.with_value("", None, "name", text).with_value("plan", None, "purpose", text)
    draft = draft.with_value("survey", 1, "name", text).with_value("rates", None, text, {text: [text]})
    found = document(draft)
    assert (found["name"], found["plan"]["purpose"], found["survey"][1]["name"]) == (text, text, text)
    assert found["rates"][text] == {text: [text]}
    assert draft.history_text == CSV


@pytest.mark.parametrize(
    ("section", "index", "key", "value"),
    [
        ("", None, "name", "Other herd"),
        ("", None, "present_quota", 12.5),
        ("survey", 0, "cv", 0.2),
        ("survey", 1, "cv", "0,3"),
        ("rates", None, "process_noise", {"distribution": "uniform", "low": 0.1, "high": "1,200"}),
        ("objectives", None, "limit", {"of_capacity": 0.2}),
        ("correlation", 0, "between", ["max_growth", "carrying_capacity"]),
        ("survey_plan", None, "every", 2),
        ("private", None, "fields", ["name"]),
    ],
)
def test_a_value_is_set_and_everything_else_stays(section: str, index: int | None, key: str, value: Any) -> None:
    changed = DRAFT.with_value(section, index, key, value)
    expected = tomllib.loads(TOML)
    if not section:
        table = expected
    elif index is None:
        table = expected.setdefault(section, {})
    else:
        tables = expected.setdefault(section, [])
        tables += [{}] * (index + 1 - len(tables))
        table = tables[index]
    table[key] = value
    assert document(changed) == expected
    assert changed.history_text == CSV
    assert DRAFT.record_text == TOML


@pytest.mark.parametrize("nothing", [None, ""])
def test_a_value_is_taken_out(nothing: str | None) -> None:
    expected = tomllib.loads(TOML)
    del expected["objectives"]["target"]
    assert document(DRAFT.with_value("objectives", None, "target", nothing)) == expected


def test_a_section_without_keys_goes() -> None:
    private = DRAFT.with_value("private", None, "fields", ["name"])
    assert document(private.with_value("private", None, "fields", None)) == tomllib.loads(TOML)
    assert document(DRAFT.with_value("life", None, "body_mass", None)) == tomllib.loads(TOML)
    assert document(DRAFT.with_document({"survey": [{"cv": 1}]}).with_value("survey", 0, "cv", None)) == {
        "survey": [{}]
    }


def test_zero_and_false_and_an_empty_list_are_values() -> None:
    draft = DRAFT.with_value("", None, "present_quota", 0).with_value("private", None, "fields", [])
    draft = draft.with_value("rates", None, "odd", False)
    found = document(draft)
    assert (found["present_quota"], found["private"], found["rates"]["odd"]) == (0, {"fields": []}, False)


def test_what_was_typed_wrongly_stays_and_is_explained() -> None:
    draft = DRAFT.with_value("rates", None, "max_growth", "0,3")
    assert document(draft)["rates"]["max_growth"] == "0,3"
    record, problems = draft.check()
    assert record is None
    assert [p.where for p in problems if p.severity == "error"] == ["rates.max_growth"]


def test_a_value_of_another_kind_gives_way_to_a_table() -> None:
    draft = DRAFT.with_document({**tomllib.loads(TOML), "rates": 5, "survey": "none"})
    mended = draft.with_value("rates", None, "max_growth", 0.3).with_value("survey", 0, "name", "ground")
    assert document(mended)["rates"] == {"max_growth": 0.3}
    assert document(mended)["survey"] == [{"name": "ground"}]


@pytest.mark.parametrize("found", [[1, {"name": "x", "cv": 0.1}], {"name": "x", "cv": 0.1}])
def test_a_list_that_is_none_becomes_one_with_the_first_change(found: Any) -> None:
    draft = DRAFT.with_document({**tomllib.loads(TOML), "survey": found})
    assert document(draft.with_value("survey", 0, "name", "y"))["survey"] == [{"name": "y", "cv": 0.1}]
    assert document(draft.without_table("survey", 0))["survey"] == []


def test_one_table_is_taken_out() -> None:
    expected = tomllib.loads(TOML)
    del expected["survey"][0]
    assert document(DRAFT.without_table("survey", 0)) == expected
    assert DRAFT.without_table("survey", 0).history_text == CSV


@pytest.mark.parametrize("index", [-1, 2, 99])
def test_a_table_that_is_not_there_is_not_taken_out(index: int) -> None:
    assert DRAFT.without_table("survey", index) is DRAFT


@pytest.mark.parametrize("text", ["name = ", "= 1", "\0", "a = 1\na = 2", "[[x]\n", "x = " + "9" * 5000])
def test_broken_toml_has_no_document_and_is_left_alone(text: str) -> None:
    draft = Draft(text, CSV)
    assert (draft.document, draft.name, draft.history_name) == (None, "", "history.csv")
    assert draft.with_value("", None, "name", "x") is draft
    assert draft.without_table("survey", 0) is draft
    record, problems = draft.check()
    assert record is None
    assert any(p.severity == "error" and p.file == "record.toml" for p in problems)


@pytest.mark.parametrize(
    ("stated", "name"),
    [
        ('"counts.csv"', "counts.csv"),
        ('"COUNTS.CSV"', "COUNTS.CSV"),
        ('"../counts.csv"', "history.csv"),
        ('"a\\\\b.csv"', "history.csv"),
        ('"c:x.csv"', "history.csv"),
        ('".csv"', "history.csv"),
        ('"counts.txt"', "history.csv"),
        ('""', "history.csv"),
        ("5", "history.csv"),
    ],
)
def test_the_history_is_handed_out_under_a_bare_name(stated: str, name: str) -> None:
    assert Draft(f"history = {stated}\n", CSV).history_name == name


def test_the_cells_of_a_history() -> None:
    assert Draft(TOML, "year, removals \n2020,5\n\n 2021 ,,\n").grid == Grid(
        ("year", "removals", ""), (("2020", "5", ""), ("2021", "", ""))
    )


def test_a_note_keeps_its_blanks() -> None:
    assert Draft(TOML, 'year,note\n 2020 , " wet"\n2021," wet\n"\n2022,\t\n').grid == Grid(
        ("year", "note"), (("2020", ' " wet"'), ("2021", " wet\n"), ("2022", "\t"))
    )


@pytest.mark.parametrize("text", ["", "\n\n", "removals\n5\n", "\0", 'year\n"open', '2020,"x"y\n', "<html>"])
def test_a_history_without_cells(text: str) -> None:
    assert Draft(TOML, text).grid is None


@given(
    st.lists(
        st.tuples(texts.map(str.strip), texts.map(str.strip), notes).filter(lambda row: any(map(str.strip, row))),
        max_size=5,
    )
)
def test_any_cells_are_written_without_loss(rows: list[tuple[str, ...]]) -> None:
    grid = Grid(("year", "removals", "note"), tuple(rows))
    changed = BROKEN.with_grid(grid)
    assert changed.grid == grid
    assert changed.record_text == BROKEN.record_text
