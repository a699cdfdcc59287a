"""Every page stands, whatever the record: one title, the caution at the end, and nothing that failed."""

from __future__ import annotations

from pathlib import Path

import pytest

from harvest.errors import CAUTION
from harvest.plan import words
from harvest.plan.sentences import headline
from harvest.record import demo_names
from harvest.record.template import blank_record_files
from harvest.workspace import Draft, Workspace
from harvest.workspace.sources import draft_of_demo, empty_draft, open_demo
from harvest.yields import summarise_yield
from tests.pages.screen import PAGES, demo, draws, open_page, present_thresholds, read, table

HOSTILE = "<script>x</script> **b** :red[x] $y$ [a](http://b.c)"


def title_of(page: str, name: str) -> str:
    record = demo(name)
    if page in ("start", "risk", "quota"):
        return headline(table(name)).removesuffix(".")
    what = f"{words.kind(record)} a year"
    if page == "sustain":
        msy = summarise_yield(record, draws(name)).spreads["msy"].median
        return f"It can sustain at most about {words.number(msy, record.unit)} {what}"
    if page == "collapse":
        chance = words.probability(present_thresholds(name).doomed)
        quota = words.number(record.present_quota or 0.0, record.unit)
        return f"At {quota} {what} the chance of a decline without return is {chance}"
    return {"record": "The record is complete", "bring": "Bring your own sheet"}[page]


def test_every_page_is_walked() -> None:
    folder = Path(__file__).parents[2] / "pages"
    assert {f"{page}.py" for page in PAGES} == {path.name for path in folder.glob("*.py")}


@pytest.mark.parametrize("name", demo_names())
@pytest.mark.parametrize("page", PAGES)
def test_a_page_of_a_demo(space: Workspace, page: str, name: str) -> None:
    screen = read(open_page(page, open_demo(space, name)))
    assert screen.title == title_of(page, name)
    assert screen.texts[-1] == ("hv-caution", CAUTION)


@pytest.mark.parametrize("page", PAGES)
def test_a_page_without_a_record(page: str) -> None:
    screen = read(open_page(page))
    titles = {"start": "How much can be taken, and how sure is that?", "bring": "Bring your own sheet"}
    assert screen.title == titles.get(page, "No record is open")
    assert screen.texts[-1] == ("hv-caution", CAUTION)


BROKEN = {
    "a value": draft_of_demo("deer").with_value("rates", None, "max_growth", "0,3"),
    "the format": Draft('name = "Ostrel"\nunit = \n', draft_of_demo("deer").history_text),
    "the history": Draft(draft_of_demo("deer").record_text, 'year,"removals\n2020,5'),
    "a history without years": Draft(draft_of_demo("deer").record_text, "<html>no sheet</html>"),
    "an empty history": Draft(draft_of_demo("deer").record_text, ""),
    "columns that stand twice": Draft(draft_of_demo("deer").record_text, "year,removals,removals,\n2020,5,6,\n"),
    "both": Draft("= 1", ""),
    "nothing": empty_draft(),
    "hostile texts": Draft(f"name = '''{HOSTILE}\n# head'''\n\"{HOSTILE[:8]}\" = 1\n", f"year,{HOSTILE[:8]}\n2020,5\n"),
    "kinds": Draft("name = 5\nsurvey = [1]\ncurve = {}\nrates = 3\nrule = []\nplan = 1\nprivate = {}\n", "year\n"),
    "deep kinds": Draft(
        "[objectives]\nlimit = [1]\nrecovery = 5\n[rates]\nmax_growth = { distribution = [1], low = {} }\n"
        "[[survey]]\nname = 1\ncolumn = [1]\nkind = 2\nbias = true\n[[curve]]\nname = 2020-01-01\nweight = []\n"
        "[private]\nfields = [1, [2], {}]\n[[correlation]]\nbetween = 5\n[rule]\nname = []\nshare = false\n"
        "[plan]\npurpose = 12.5\n",
        "year,removals\nx,1\n",
    ),
}


#: Pages that compute refuse all faults alike.
PAIRS = [(page, fault) for page in PAGES for n, fault in enumerate(BROKEN) if page in ("start", "record") or n < 3]


@pytest.mark.parametrize(("page", "fault"), PAIRS)
def test_a_page_of_a_record_with_faults(space: Workspace, page: str, fault: str) -> None:
    screen = read(open_page(page, space.add(BROKEN[fault], "a test")))
    errors = sum(p.severity == "error" for p in BROKEN[fault].check()[1])
    told = f"{errors} thing{'s' if errors > 1 else ''}"
    titles = {"record": f"The record: {told} to mend", "bring": "Bring your own sheet"}
    assert errors > 0
    assert screen.title == titles.get(page, f"{told} to mend first")
    assert screen.texts[-1] == ("hv-caution", CAUTION)


@pytest.mark.parametrize("fault", BROKEN)
def test_every_error_stands_once_in_its_part(space: Workspace, fault: str) -> None:
    draft = BROKEN[fault]
    errors = [p for p in draft.check()[1] if p.severity == "error"]
    at = open_page("record", space.add(draft, "a test"))
    told = len(read(at).of("hv-problem"))
    if draft.document is None:
        assert told == len(errors)
        return
    for part in at.button_group[0].options[1:]:
        at.button_group[0].set_value(part.partition(" · ")[0]).run()
        here = len(read(at).of("hv-problem"))
        assert part == at.button_group[0].value + (f" · {here} to mend" if here else "")
        told += here
    assert told == len(errors)


def test_a_record_of_the_template(space: Workspace) -> None:
    at = open_page("sustain", space.add(Draft(*blank_record_files()), "a test"))
    assert read(at).title.startswith("It can sustain at most about ")


@pytest.mark.parametrize("page", PAGES)
def test_hostile_texts_stay_texts(space: Workspace, page: str) -> None:
    draft = draft_of_demo("deer")
    for key in ("name", "species", "place"):
        draft = draft.with_value("", None, key, HOSTILE)
    draft = draft.with_value("survey", 0, "name", HOSTILE).with_value("plan", None, "purpose", f"# {HOSTILE}\n\n- x")
    draft = draft.with_value("private", None, "fields", None)
    assert draft.check()[0] is not None
    at = open_page(page, space.add(draft, HOSTILE))
    read(at)
    shown = [element.value for element in at.get("html") if "hv-" in element.value]
    assert not [html for html in shown if "<script" in html]
    labels = [w.label for kind in ("button", "slider", "number_input", "text_input") for w in getattr(at, kind)]
    for label in labels:
        assert "**b" not in label
        assert not {"<script>", "$y$", "[a]", ":red[x]"} & set(label.split())
