"""What is written is read back as it was."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from harvest.errors import RecordError
from harvest.record import Record, check_record, demo_folder, read_record
from harvest.record.check import check_texts
from harvest.record.history import RISKY, guard_note, unguard_note
from harvest.record.model import Correlation, Distribution, History, RuleChoice, fixed
from harvest.record.write import in_order, make_plain, record_to_files, render_pair

from .strategies import notes, records


@given(records())
@settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.too_slow])
def test_any_record_survives_its_files(record: Record) -> None:
    found, problems = check_texts(*record_to_files(record))
    assert found == record
    assert found is not None
    assert found.digest() == record.digest()
    assert {p.severity for p in problems} <= {"warning"}


def test_equal_records_have_one_digest() -> None:
    """Zero and negative zero are equal, so they must not tell two records apart."""
    record = read_record(demo_folder("deer"))
    zero, negative = (replace(record, correlations=(Correlation("a", "b", value),)) for value in (0.0, -0.0))
    assert zero == negative
    assert zero.digest() == negative.digest()


@given(records())
@settings(max_examples=30, deadline=None, suppress_health_check=[HealthCheck.too_slow])
def test_writing_again_gives_the_same_bytes(record: Record) -> None:
    texts = record_to_files(record)
    found, _ = check_texts(*texts)
    assert found is not None
    assert record_to_files(found) == texts


@given(notes | st.text(max_size=6))
@settings(max_examples=300)
def test_a_guarded_note_is_safe_and_comes_back(note: str) -> None:
    cell = guard_note(note)
    assert unguard_note(cell) == note
    assert cell[:1] not in RISKY or cell == ""


@pytest.mark.parametrize(
    ("note", "cell"),
    [
        ("=1+1", "'=1+1"),
        ("'=1+1", "''=1+1"),
        ("-2 degrees", "'-2 degrees"),
        ("'t was foggy", "'t was foggy"),
        ("", ""),
        ("@home", "'@home"),
        ("\tindented", "'\tindented"),
    ],
)
def test_guarded_notes(note: str, cell: str) -> None:
    assert guard_note(note) == cell


@given(st.floats(allow_nan=False, allow_infinity=False, min_value=0, max_value=1e15))
@settings(max_examples=200)
def test_removals_keep_every_digit(taken: float) -> None:
    demo = read_record(demo_folder("deer"))
    history = replace(demo.history, removals=(taken, *demo.history.removals[1:]))
    found, _ = check_texts(*record_to_files(replace(demo, history=history)))
    assert found is not None
    assert found.history.removals[0] == taken


def test_whole_numbers_are_written_without_a_point() -> None:
    assert render_pair("quota", make_plain(380.0)) == "quota = 380"
    assert render_pair("share", make_plain(0.1)) == "share = 0.1"
    assert render_pair("limit", {"of_capacity": 0.3}) == "limit = { of_capacity = 0.3 }"
    assert render_pair("fields", ["plan.author", 'a"b']) == 'fields = ["plan.author", "a\\"b"]'


def test_order_of_rates_does_not_matter() -> None:
    demo = read_record(demo_folder("deer"))
    shuffled = replace(demo, rates=tuple(reversed(demo.rates)), plan=tuple(reversed(demo.plan)))
    assert shuffled != demo
    assert in_order(shuffled) == demo
    assert record_to_files(shuffled) == record_to_files(demo)


@pytest.mark.parametrize(
    "change",
    [
        {"name": ""},
        {"name": "a\nb"},
        {"place": "bell\a"},
        {"place": "\ud800"},
        {"unit": "rabbits"},
        {"lag": 9},
        {"present_quota": math.nan},
        {"present_quota": -1.0},
        {"curves": ()},
        {"rates": (("growth_rat", fixed(0.2)),)},
        {"rates": (("growth_rate", Distribution("uniform", (("low", 2.0), ("high", 1.0)))),)},
        {"correlations": (Correlation("max_growth", "carrying_capacity", 2.0),)},
        {"rule": RuleChoice("ramp", (("lower", 1.0),))},
        {"history": History((2019, 2020), (1.0, 2.0))},
        {"history": History((), ())},
        {"plan": (("colour", "green"),)},
        {"private": ("nothing",)},
    ],
)
def test_a_record_that_breaks_a_rule_is_refused(change: dict[str, object]) -> None:
    demo = read_record(demo_folder("deer"))
    with pytest.raises(RecordError) as caught:
        record_to_files(replace(demo, **change))  # type: ignore[arg-type]
    assert any(p.severity == "error" for p in caught.value.problems)


def test_a_cv_that_no_column_can_hold_is_refused() -> None:
    demo = read_record(demo_folder("deer"))
    survey = replace(demo.surveys[0], cv=0.2, cv_column=None)
    with pytest.raises(RecordError, match="cannot hold"):
        record_to_files(replace(demo, surveys=(survey,)))


def test_the_demo_is_sound() -> None:
    record, problems = check_record(demo_folder("deer"))
    assert problems == ()
    assert record is not None
    assert record.quota_year == 2026
