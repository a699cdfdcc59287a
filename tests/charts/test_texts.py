"""Text of a record stays text, and what is private stays at home."""

from __future__ import annotations

from dataclasses import replace
from xml.etree import ElementTree

import pytest

from harvest.charts import draw_history, draw_risk, files
from harvest.charts.hiding import shareable
from harvest.charts.phrases import capital, label_width, listed, plain, what
from tests.charts.conftest import texts_of

NASTY = [
    "<script>alert(1)</script>",
    "{{datum}}",
    "='x",
    "datum.x + 1",
    'a"b\\c',
    "red\ndeer\x00\u202e",
    "æ" * 300,
    "&amp;",
]


def renamed(record, text):
    survey = replace(record.surveys[0], name=text)
    return replace(record, species=text, name=text, surveys=(survey, *record.surveys[1:]))


@pytest.mark.parametrize("text", NASTY)
def test_text_of_a_record_stays_text(cases, text):
    for name in ("deer", "lake"):
        record = renamed(cases[name].record, text)
        for picture in cases[name].pictures(record).values():
            root = ElementTree.fromstring(files.svg(picture))
            assert not [e for e in root.iter() if e.tag.endswith("script")]
            spec = picture.chart.to_dict()
            assert what(shareable(record, ())) in picture.sentence or picture.name in ("indices", "chances-by-year")
            assert all("signal" not in str(layer["encoding"]) for layer in spec["layer"])


@pytest.mark.parametrize("text", NASTY)
def test_an_axis_is_named_by_the_text_in_one_line(cases, text):
    picture = draw_history(replace(cases["deer"].record, species=text))
    title = picture.chart.to_dict()["layer"][0]["encoding"]["y"]["title"]
    assert title == f"{capital(plain(text, 24))} before the season"


def test_a_formula_in_a_name_is_guarded_in_the_csv(cases):
    record = renamed(cases["deer"].record, "='x")
    assert b",'='x," in files.csv(draw_history(record))


@pytest.mark.parametrize(
    ("text", "line"), [("a\n b\t\x07c", "a b c"), ("", ""), ("x" * 41, "x" * 39 + "…"), ("x" * 40, "x" * 40)]
)
def test_plain_is_one_short_line(text, line):
    assert plain(text) == line


def test_small_words():
    assert listed(["a"]) == "a"
    assert listed(["a", "b", "c"]) == "a, b and c"
    assert capital("") == ""
    assert label_width("iiii") < label_width("nnnn") < label_width("MMMM")


def test_private_names_and_removals_stay_out_of_public_pictures(cases):
    case = cases["deer"]
    record = renamed(case.record, "SECRET")
    secret = replace(record, private=("species", "survey", "history.removals"))
    for picture in case.pictures(secret, public=True).values():
        told = files.svg(picture) + files.csv(picture) + picture.chart.to_json().encode()
        assert b"SECRET" not in told
        assert b"ecret" not in told
    public = case.pictures(secret, public=True)
    assert "removals" not in public["history"].table["What"].tolist()
    assert "Reported removals are not shown." in public["history"].sentence
    assert "Present removals are not shown." in public["yield-curve"].sentence
    assert not [t for t in texts_of(public["yield-curve"]) if t.startswith("present")]
    assert "removals" in case.pictures(secret)["history"].table["What"].tolist()


def test_a_quota_that_is_the_private_removals_is_not_drawn_in_public(cases):
    case = cases["deer"]
    secret = replace(case.record, private=("history.removals",), present_quota=None)
    assert case.thresholds.quota == 315
    picture = case.pictures(secret, public=True)["equilibria"]
    assert not [t for t in texts_of(picture) if t.startswith(("quota", "today"))]
    assert "Under 315" not in picture.sentence
    assert "quota 315" in texts_of(case.pictures(secret)["equilibria"])


def test_a_mark_on_a_public_picture_keeps_the_species_private(cases):
    case = cases["deer"]
    secret = replace(renamed(case.record, "SECRET"), private=("species",))
    picture = draw_risk(secret, case.curve, case.advice, marked_quota=100.0, public=True)
    assert "SECRET" not in picture.chart.to_json()
    titles = {layer["encoding"]["x"]["title"] for layer in picture.chart.to_dict()["layer"] if "x" in layer["encoding"]}
    assert titles == {"Legal quota, animals a year"}


def test_what_is_hidden_can_be_asked_for(cases):
    picture = draw_history(cases["deer"].record, hidden=("history",))
    assert "removals" not in picture.table["What"].tolist()
