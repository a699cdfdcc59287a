"""Every place that the record's check names is found again in the form."""

from __future__ import annotations

import tomllib
from typing import Any

import pytest

from harvest.record.check import check_texts
from harvest.record.fields import SECTIONS, fields_of
from harvest.workspace import Draft
from harvest.workspace.document import locate, table_at, tables_in
from tests.record.edits import CSV, TOML, edited

Place = tuple[str, int | None, str]

#: By the edit that makes the fault: the place.
FAULTS: list[tuple[str, str, Place]] = [
    ("lag = 0", "lag = -1", ("", None, "lag")),
    ("lag = 0\n", "", ("", None, "lag")),
    ('unit = "animals"', 'unit = "heads"', ("", None, "unit")),
    ('name = "Test herd"', "name = 5", ("", None, "name")),
    ("lag = 0", "lag = 0\ncolour = 1", ("", None, "colour")),
    ("lag = 0", 'lag = 0\n"a.b \\"c\\"" = 1', ("", None, 'a.b "c"')),
    ("lag = 0", "lag = 0\nfirst_quota_year = 2000", ("", None, "first_quota_year")),
    ('count_when = "before"', 'count_when = "start"', ("", None, "count_when")),
    ("cv = 0.3", "cv = 30", ("survey", 1, "cv")),
    ("cv = 0.3", "", ("survey", 1, "")),
    ("cv = 0.3", "cv = 0.3\nbad-key = 1", ("survey", 1, "bad-key")),
    ("cv = 0.3", 'cv = 0.3\n"a.b" = 1', ("survey", 1, "a.b")),
    ("cv = 0.3", 'cv = 0.3\nwhen = "after"\nbias = { distribution = "uniform", low = 0.9 }', ("survey", 1, "bias")),
    ('column = "pellets"', 'column = "ground"', ("survey", 1, "column")),
    ('name = "pellets"', 'name = "ground"', ("survey", 1, "name")),
    ('kind = "absolute"', 'kind = "absolute"\nwhen = "mean of year"', ("survey", 0, "when")),
    ("carrying_capacity", "# ", ("curve", 0, "")),
    ("max_growth", "# ", ("curve", 0, "")),
    ('name = "logistic"', 'name = "logistic"\nshape = 1', ("curve", 0, "shape")),
    ('name = "logistic"', 'name = "gompertz"\ngrowth_rate = 0.3', ("curve", 0, "growth_rate")),
    ('name = "logistic"', 'name = "theta-logistic"', ("curve", 0, "shape")),
    ('[[curve]]\nname = "logistic"', "", ("curve", None, "")),
    ("high = 0.4", 'high = "0,4"', ("rates", None, "max_growth")),
    ("low = 0.2", "low = 0.6", ("rates", None, "max_growth")),
    ("process_noise = 0.1", "process_noise = 0.1\ngrowth_rate = 0.3", ("rates", None, "")),
    ("process_noise = 0.1", "process_noise = 0.1\nspeed = 3", ("rates", None, "speed")),
    ("process_noise = 0.1", "process_noise = 0.1\nlow_abundance = 3", ("rates", None, "low_abundance")),
    ("target = 600", "target = 200", ("objectives", None, "target")),
    ("limit = 300", "limit = { of_capacity = 2 }", ("objectives", None, "limit")),
    ("target = 600", "reduction = { years = 5, chance = 0.8 }", ("objectives", None, "reduction")),
    ("target = 600", "recovery = { years = 0.5, chance = 0.8 }", ("objectives", None, "recovery")),
    ("target = 600", "recovery = { years = 5 }", ("objectives", None, "recovery")),
    ("share = 0.1", "", ("rule", None, "share")),
    ("share = 0.1", "share = 0.1\nescapement = 5", ("rule", None, "escapement")),
    ("upper = 600", "upper = 100", ("rule", None, "lower")),
    ("[rule]", '[private]\nfields = ["nobody"]\n[rule]', ("private", None, "fields")),
    ("[rule]", "[life]\nbody_mass = -1\n[rule]", ("life", None, "body_mass")),
    ("[rule]", "[plan]\nauthor = 1\n[rule]", ("plan", None, "author")),
    ("[rule]", "[losses]\nwounding = -1\n[rule]", ("losses", None, "wounding")),
    ("[rule]", "[survey_plan]\nevery = 0\n[rule]", ("survey_plan", None, "every")),
    ("[rule]", "[weather]\nrain = 0\n[rule]", ("", None, "weather")),
    ("[rule]", '[[correlation]]\nbetween = ["max_growth"]\nvalue = 0.1\n[rule]', ("correlation", 0, "between")),
    (
        "[rule]",
        '[[correlation]]\nbetween = ["max_growth", "carrying_capacity"]\nvalue = 3\n[rule]',
        ("correlation", 0, "value"),
    ),
]


@pytest.mark.parametrize(
    ("old", "new", "place"), FAULTS, ids=[f"{place}-{n}" for n, (_, _, place) in enumerate(FAULTS)]
)
def test_a_fault_of_the_record_is_located(old: str, new: str, place: Place) -> None:
    _, problems = check_texts(edited(TOML, old, new), CSV)
    places = [locate(p.where) for p in problems if p.file == "record.toml" and p.severity == "error"]
    assert place in places
    allowed = {s.name: {f.key for f in fields_of(s.name)} for s in SECTIONS}
    assert all(key in allowed[section] | {"", place[2]} for section, _, key in places)


@pytest.mark.parametrize(
    ("where", "place"),
    [
        ("objectives.recovery.years", ("objectives", None, "recovery")),
        ("survey 12, bias.low", ("survey", 11, "bias")),
        ("curve 2 (theta-logistic)", ("curve", 1, "")),
        ("curve 2 (gompertz), growth_rate", ("curve", 1, "growth_rate")),
        ('rates."a, b.c"', ("rates", None, "a, b.c")),
        ('"rates.x"', ("", None, "rates.x")),
        ("survey", ("survey", None, "")),
        ("line 3", ("", None, "line 3")),
        ("", ("", None, "")),
    ],
)
def test_a_place_as_the_check_writes_it(where: str, place: Place) -> None:
    assert locate(where) == place


@pytest.mark.parametrize(
    "field", [f for s in SECTIONS for f in fields_of(s.name)], ids=lambda f: f"{f.section}.{f.key}"
)
def test_a_value_of_the_wrong_kind_is_located_for_every_key(field: Any) -> None:
    index = 0 if next(s.many for s in SECTIONS if s.name == field.section) else None
    draft = Draft(TOML, CSV).with_value(field.section, index, field.key, [[]])
    _, problems = draft.check()
    assert (field.section, index, field.key) in [locate(p.where) for p in problems if p.severity == "error"]


def test_the_tables_of_a_section() -> None:
    document = tomllib.loads(TOML)
    assert tables_in(document, "") == [document]
    assert tables_in(document, "survey") == document["survey"]
    assert tables_in(document, "rates") == [document["rates"]]
    assert (tables_in(document, "life"), tables_in(document, "correlation")) == ([{}], [])
    assert tables_in({"survey": {"name": "x"}}, "survey") == [{"name": "x"}]
    assert tables_in({"survey": "none"}, "survey") == []
    assert tables_in({"survey": [1, {"name": "x"}], "rates": 3}, "survey") == [{"name": "x"}]
    assert tables_in({"rates": 3}, "rates") == [{}]


def test_a_table_is_made_where_a_change_goes() -> None:
    document: dict[str, Any] = {}
    table_at(document, "survey", None)["name"] = "first"
    table_at(document, "survey", None)["name"] = "second"
    table_at(document, "survey", 0)["cv"] = 0.1
    table_at(document, "life", None)["body_mass"] = 5
    assert document == {"survey": [{"name": "first", "cv": 0.1}, {"name": "second"}], "life": {"body_mass": 5}}
