"""Whatever a valid record holds, the whole way to the files ends in results or in a told error."""

from __future__ import annotations

from dataclasses import replace

from hypothesis import HealthCheck, given, settings

from harvest.errors import HarvestError
from harvest.plan import make_quota_table
from harvest.plan.csv_files import card_csv, quota_csv
from harvest.plan.json_files import json_bytes, quota_json, thresholds_json, yield_json
from harvest.plan.layout import parts, shown
from harvest.plan.sentences import findings, headline
from harvest.plan.workbook import quota_workbook
from harvest.rates import draw_rates
from harvest.record.model import Survey
from harvest.yields import find_thresholds, summarise_yield
from tests.record.strategies import records


def with_evidence(record):
    """The record with a count in its last year and no missing removals, so that its rates can be drawn."""
    gaps = (None,) * (len(record.history.years) - 1)
    survey = Survey("sure", "sure", "absolute", record.count_when, (*gaps, 1000.0), (*gaps, 0.2), cv=0.2)
    removals = tuple(5.0 if h is None else h for h in record.history.removals)
    return replace(
        record,
        history=replace(record.history, removals=removals),
        surveys=(*record.surveys, survey),
        lag=1 if record.count_when == "after" else 0,
        first_quota_year=None,
    )


@settings(max_examples=40, suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much])
@given(records())
def test_any_record_ends_in_results_or_in_a_told_error(record):
    record = with_evidence(record)
    try:
        rates = draw_rates(record, 1, 200)
        told = [
            yield_json(record, rates, summarise_yield(record, rates)),
            thresholds_json(record, rates, find_thresholds(record, rates)),
        ]
        table = make_quota_table(record, rates, threads=1)
    except HarvestError as error:
        assert str(error)
        return
    assert all(json_bytes(t) for t in told)
    assert json_bytes(quota_json(table)).startswith(b"{")
    assert quota_csv(table).startswith(b"quota_year")
    assert card_csv(table).startswith(b"count_from")
    assert quota_workbook(table).startswith(b"PK")
    assert headline(table)
    assert findings(table)
    for part in parts(table):
        for row in part.rows:
            cells = [shown(v, k, record.unit) for v, k in zip(row, part.kinds, strict=True)]
            assert all(isinstance(c, str) for c in cells)
            assert len(row) == len(part.headings)
    probabilities = [p for grid in table.curve.probability.values() for p in grid.ravel()]
    assert all(0.0 <= p <= 1.0 for p in probabilities)
