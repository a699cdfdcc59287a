"""What a page shows is what the library gives, and moves with the slider as the stored curve says."""

from __future__ import annotations

from typing import Any

import pytest

from harvest.desk.cards import season_cards
from harvest.errors import CAUTION
from harvest.plan import make_quota_table, words
from harvest.plan.layout import parts, shown
from harvest.plan.sentences import findings
from harvest.plan.spreads import HEADINGS
from harvest.plan.threshold_words import threshold_rows
from harvest.plan.yield_words import standing, yield_rows
from harvest.record import demo_names
from harvest.workspace import Workspace
from harvest.workspace.sources import draft_of_demo, open_demo
from harvest.yields import find_thresholds, summarise_yield
from tests.pages.screen import APP, PATIENCE, demo, draws, go_to, open_page, present_thresholds, read, table, widget

DEMOS = demo_names()


@pytest.mark.parametrize("name", DEMOS)
def test_this_season(space: Workspace, name: str) -> None:
    screen = read(open_page("start", open_demo(space, name)))
    found = find_thresholds(
        demo(name), draws(name), table(name).first_quota, branches=present_thresholds(name).branches
    )
    summary = summarise_yield(demo(name), draws(name))
    assert screen.cards == season_cards(demo(name), table(name), summary, found)
    assert set(findings(table(name))) <= set(screen.said)


@pytest.mark.parametrize("name", DEMOS)
def test_the_yield(space: Workspace, name: str) -> None:
    screen = read(open_page("sustain", open_demo(space, name)))
    summary = summarise_yield(demo(name), draws(name))
    assert [[*HEADINGS], *yield_rows(demo(name), draws(name), summary)] in screen.tables
    assert set(standing(demo(name), summary)) <= set(screen.said)
    today, capacity = summary.spreads["abundance"].median, summary.spreads["K"].median
    shown_cards = {card[0]: card[1] for card in screen.cards}
    assert shown_cards["Abundance today"] == words.number(today, demo(name).unit)
    assert shown_cards["Carrying capacity"] == words.number(capacity, demo(name).unit)


@pytest.mark.parametrize("name", DEMOS)
def test_the_quota_table_cell_by_cell(space: Workspace, name: str) -> None:
    screen = read(open_page("quota", open_demo(space, name)))
    for part in parts(table(name)):
        rows = [[shown(v, kind, demo(name).unit) for v, kind in zip(row, part.kinds, strict=True)] for row in part.rows]
        assert [[*part.headings], *rows] in screen.tables
        assert part.title in screen.of("hv-head")
        assert part.note in screen.of("hv-note")


def test_the_quota_table_in_the_readers_marks(space: Workspace) -> None:
    from streamlit.testing.v1 import AppTest

    at = AppTest.from_file(str(APP), default_timeout=PATIENCE)
    at.context = {"locale": "de-DE"}
    at.query_params["record"] = open_demo(space, "deer")
    screen = read(go_to(at.run(), "quota"))
    part = parts(table("deer"))[0]
    amount = float(part.rows[0][4])  # type: ignore[arg-type]
    assert amount > 1000
    assert f"{amount:,.0f}".replace(",", ".") in [cell for row in screen.tables[0] for cell in row]


def sentence_of(at: Any) -> str:
    """What the page says of the quota that is tried."""
    (told,) = [text for text in read(at).said if "and of ever collapsing (below" in text]
    return told


@pytest.mark.parametrize("source", ["slider", "number"])
@pytest.mark.parametrize("name", DEMOS)
def test_the_risk_follows_the_quota(space: Workspace, name: str, source: str) -> None:
    at = open_page("risk", open_demo(space, name))
    curve, unit, horizon = table(name).curve, demo(name).unit, table(name).horizon
    elements = at.slider if source == "slider" else at.number_input
    sentences = set()
    for share in (0.0, 0.25, 0.8):
        moved = widget(elements, source)
        quota = moved.step * round(share * curve.quotas[-1] / moved.step)
        quota = quota if source == "slider" or unit == "animals" else share * float(curve.quotas[-1]) + 0.123
        moved.set_value(quota).run()
        told = sentence_of(at)
        risk, error = curve.at("ever_below_limit", quota, horizon)
        collapsed, _ = curve.at("ever_collapsed", quota, horizon)
        assert f"With {words.number(quota, unit)} {words.kind(demo(name))} a year the chance" in told
        assert f"in {words.years(horizon)} is {words.probability(risk)} ({words.error(error)} Monte Carlo)" in told
        assert told.endswith(f") {words.probability(collapsed)}.")
        assert {w.value for w in (widget(at.slider, "slider"), widget(at.number_input, "number"))} == {quota}
        sentences.add(told)
    assert len(sentences) == 3


def test_the_quota_tried_is_kept_when_the_page_is_left(space: Workspace) -> None:
    at = open_page("risk", open_demo(space, "deer"))
    widget(at.number_input, "number").set_value(123.0).run()
    go_to(go_to(at, "quota"), "risk")
    assert widget(at.number_input, "number").value == widget(at.slider, "slider").value == 123.0
    assert "With 123 red deer a year" in sentence_of(at)


@pytest.mark.parametrize("name", DEMOS)
def test_another_tolerance(space: Workspace, name: str) -> None:
    at = open_page("risk", open_demo(space, name))
    base = table(name)
    if base.recommendation.criterion.question != "limit":
        assert len(at.select_slider) == 0
        return
    for tolerance in (0.01, 0.2):
        at.select_slider[0].set_value(tolerance).run()
        advice = make_quota_table(demo(name), draws(name), tolerance=tolerance).recommendation
        quota = f"{words.number(advice.quota, demo(name).unit)} {words.kind(demo(name))} a year"
        assert f"A tolerance of {words.percent(tolerance)} allows {quota}." in read(at).said


def test_a_demo_has_its_tolerance_tried() -> None:
    assert "limit" in {table(name).recommendation.criterion.question for name in DEMOS}


@pytest.mark.parametrize("name", DEMOS)
def test_the_thresholds_follow_the_quota(space: Workspace, name: str) -> None:
    at = open_page("collapse", open_demo(space, name))
    present, known = demo(name).present_quota or 0.0, present_thresholds(name).branches
    titles = set()
    for quota in (present, round(present / 3), round(present * 1.2)):
        widget(at.number_input, "number").set_value(float(quota)).run()
        screen = read(at)
        found = find_thresholds(demo(name), draws(name), float(quota), branches=known)
        told = f"{words.number(float(quota), demo(name).unit)} {words.kind(demo(name))} a year"
        assert screen.title == f"At {told} the chance of a decline without return is {words.probability(found.doomed)}"
        assert [[*HEADINGS], *threshold_rows(demo(name), found)] in screen.tables
        titles.add(screen.title)
    assert len(titles) == 3


PRIVATE = "Kept Secret Valley"


@pytest.mark.parametrize("page", ["start", "sustain", "collapse", "risk", "quota"])
def test_what_a_page_hands_out(space: Workspace, page: str, monkeypatch: pytest.MonkeyPatch) -> None:
    draft = draft_of_demo("deer")
    for key in ("name", "place", "species"):
        draft = draft.with_value("", None, key, PRIVATE)
    draft = draft.with_value("plan", None, "purpose", PRIVATE)
    draft = draft.with_value("private", None, "fields", ["name", "place", "species", "plan", "survey", "history.note"])
    draft = draft.with_value("survey", 0, "name", PRIVATE)
    given: dict[str, tuple[str, Any]] = {}

    def download(label: str, *, data: Any, file_name: str, key: str, **more: Any) -> None:
        given[key] = (file_name, data)

    monkeypatch.setattr("streamlit.download_button", download)
    read(open_page(page, space.add(draft, "a test")))
    assert given
    for file, make in given.values():
        assert "secret" not in file
        assert file == file.lower()
        if file.endswith((".csv", ".json", ".svg")):
            text = make().decode("utf-8-sig")
            assert CAUTION.split(":")[0] in text
            assert PRIVATE not in text
        elif page in ("start", "quota") or file.endswith(".xlsx"):
            assert len(make()) > 1000
