"""Whatever a valid record holds, the whole way to the files ends in results or in a told error."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

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


def with_evidence(record, later=()):
    """The record with a count in its last year, removals of later years, and no removals missing."""
    history, more = record.history, (None,) * len(later)
    gaps = (None,) * (len(history.years) - 1)
    sure = Survey("sure", "sure", "absolute", record.count_when, (*gaps, 1000.0), (*gaps, 0.2), cv=0.2)
    surveys = tuple(replace(s, values=s.values + more, cvs=s.cvs + more) for s in (*record.surveys, sure))
    years = history.years + tuple(history.years[-1] + i for i in range(1, len(later) + 1))
    removals = (*(5.0 if h is None else h for h in history.removals), *later)
    notes = history.notes + ("",) * len(later) if history.notes else ()
    return replace(
        record,
        history=replace(history, years=years, removals=removals, notes=notes),
        surveys=surveys,
        lag=1 if record.count_when == "after" else 0,
        first_quota_year=None,
    )


#: Removals since the count, from none to more than any draw holds.
later_removals = st.lists(st.sampled_from([0.0, 50.0, 900.0, 1e12]), max_size=3)


@settings(max_examples=60, suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much])
@given(records(), later_removals)
def test_any_record_ends_in_results_or_in_a_told_error(record, later):
    record = with_evidence(record, later)
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
    assert (rates.column("abundance") > 0.0).any()
    assert all(json_bytes(t) for t in told)
    assert json_bytes(quota_json(table)).startswith(b"{")
    assert quota_csv(table).startswith(b"quota_year")
    assert card_csv(table).startswith(b"when,count_from")
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


@settings(max_examples=20, suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much])
@given(records(), later_removals)
def test_no_draw_is_left_after_removals_beyond_any_abundance(record, later):
    record = with_evidence(record, [*later, 1e30])
    with pytest.raises(HarvestError):
        draw_rates(record, 1, 200)
