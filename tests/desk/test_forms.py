"""What a range keeps under another kind of range."""

from __future__ import annotations

from typing import Any

import pytest

from harvest.desk.forms import _WIDGETS, PARAMETERS, RANGES, carried
from harvest.record.fields import FIELDS
from harvest.record.schema import DISTRIBUTIONS


@pytest.mark.parametrize(
    ("table", "kind", "kept"),
    [
        ({"value": 0.3}, "triangular", {"mode": 0.3}),
        ({"value": 0.3}, "normal", {"mean": 0.3}),
        ({"value": 0.3}, "lognormal", {"median": 0.3}),
        ({"value": 0.3}, "uniform", {"low": 0.3}),
        ({"value": 0.3}, "beta", {}),
        ({"low": 0.1, "high": 0.5}, "90% between", {"low": 0.1, "high": 0.5}),
        ({"low": 0.1, "mode": 0.2, "high": 0.5}, "uniform", {"low": 0.1, "high": 0.5}),
        ({"low": 0.1, "mode": 0.2, "high": 0.5}, "fixed", {"value": 0.2}),
        ({"low": 0.1, "high": 0.5}, "fixed", {"value": 0.1}),
        ({"low": 0.1, "high": 0.5}, "triangular", {"low": 0.1, "high": 0.5, "mode": 0.1}),
        ({"mean": 0.2, "sd": 0.1}, "lognormal", {"median": 0.2}),
        ({"mean": "0,2", "sd": 0.1}, "fixed", {"value": "0,2"}),
        ({"a": 2, "b": 3}, "fixed", {}),
        ({}, "uniform", {}),
    ],
)
def test_the_middle_is_carried_over(table: dict[str, Any], kind: str, kept: dict[str, Any]) -> None:
    assert carried(table, DISTRIBUTIONS[kind]) == kept


def test_every_range_can_be_typed() -> None:
    assert set(RANGES.values()) == set(DISTRIBUTIONS)
    assert {name for names in DISTRIBUTIONS.values() for name in names} == set(PARAMETERS)


def test_only_plain_numbers_have_no_widget_of_their_own() -> None:
    assert {f.sort for f in FIELDS} - set(_WIDGETS) == {"whole number", "number", "proportion", "CV"}
