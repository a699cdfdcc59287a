from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import pytest

from harvest.charts import (
    draw_equilibria,
    draw_future,
    draw_history,
    draw_indices,
    draw_probabilities,
    draw_risk,
    draw_yield,
)
from harvest.futures import Future, Recommendation, RiskCurve, find_quota, fixed_quota, pick_question, project
from harvest.rates import Rates, draw_rates
from harvest.record import Record, demo_folder, read_record
from harvest.yields import Thresholds, YieldSummary, find_thresholds, summarise_yield

DEMOS = ("deer", "lake", "geese")


@dataclass(frozen=True)
class Case:
    """A record with everything that the pictures draw."""

    record: Record
    rates: Rates
    summary: YieldSummary
    thresholds: Thresholds
    curve: RiskCurve
    advice: Recommendation
    future: Future

    def pictures(self, record: Record | None = None, **settings: Any) -> dict[str, Any]:
        """Every picture by its name."""
        record = self.record if record is None else record
        made = [
            draw_history(record, **settings),
            draw_indices(record, **settings),
            draw_yield(record, self.rates, self.summary, **settings),
            draw_equilibria(record, self.rates, self.thresholds, **settings),
            draw_future(record, self.rates, self.future, **settings),
            draw_risk(record, self.curve, self.advice, **settings),
            draw_probabilities(record, self.future, **settings),
        ]
        return {p.name: p for p in made if p is not None}


def make_case(record: Record, rates: Rates | None = None, quota: float | None = None) -> Case:
    rates = draw_rates(record, 7, 1000) if rates is None else rates
    question = pick_question(record, rates)
    curve, advice = find_quota(record, rates, question, points=20)
    rule = fixed_quota(advice.quota if quota is None else quota)
    return Case(
        record=record,
        rates=rates,
        summary=summarise_yield(record, rates),
        thresholds=find_thresholds(record, rates, quota),
        curve=curve,
        advice=advice,
        future=project(record, rates, rule, paths=8),
    )


@pytest.fixture(scope="session")
def cases():
    return {name: make_case(read_record(demo_folder(name))) for name in DEMOS}


def layers_of(picture, kind=None):
    """The chart's layers as (mark, rows of data), of one kind of mark or all."""
    spec = picture.chart.to_dict()
    found = [(layer["mark"], spec["datasets"][layer["data"]["name"]]) for layer in spec["layer"]]
    return [(mark, rows) for mark, rows in found if kind in (None, mark["type"])]


def texts_of(picture):
    """All labels of a chart."""
    layers = picture.chart.to_dict()["layer"]
    return [layer["encoding"]["text"]["value"] for layer in layers if layer["mark"]["type"] == "text"]
