"""Published values, read from data files and set against the program's own functions."""

from __future__ import annotations

import math
import tomllib
from pathlib import Path

import numpy as np
import pytest

from harvest.record.model import Objectives, fixed
from harvest.yields.biological_removal import (
    biological_removal,
    minimum_abundance,
    potential_biological_removal,
)
from harvest.yields.reference import both_equilibria, reference_values, return_time, slope_at

from ..builders import make_rates, make_record

HERE = Path(__file__).parent
POINTS = tomllib.loads((HERE / "reference_points.toml").read_text("utf-8"))["value"]
REMOVALS = tomllib.loads((HERE / "biological_removal.toml").read_text("utf-8"))


def computed(quantity: str, given: dict) -> float:
    """The program's value of one quantity, for an all-year season unless stated."""
    season = given.get("season", "all year")
    columns = {k: given[k] for k in ("r", "K", "shape") if k in given}
    rates = make_rates(given["curve"], **({"r": np.nan, "shape": np.nan, "abundance": 0.5 * given["K"]} | columns))
    if "quota_over_msy" in given:
        _, upper = both_equilibria(rates, given["quota_over_msy"] * rates.closed_form("msy"))
        slope = slope_at(rates, upper)
        return float((return_time(slope) if quantity == "return_time" else slope)[0])
    return float(reference_values(make_record(season), rates)[quantity].iloc[0])


@pytest.mark.parametrize("value", POINTS, ids=lambda v: f"{v['quantity']}-{v['given']['curve']}-{v['expected']}")
def test_reference_point(value):
    assert computed(value["quantity"], value["given"]) == pytest.approx(
        value["expected"],
        rel=value["tolerance"],
        abs=value["tolerance"] * 1e-3 if value["expected"] else value["tolerance"],
    ), (value["citation"], value["where"])


@pytest.mark.parametrize("stock", REMOVALS["stock"], ids=lambda s: f"{s['name']} {s['n_best']}")
def test_biological_removal_as_printed(stock):
    n_min = minimum_abundance(stock["n_best"], stock["cv"])
    assert n_min == pytest.approx(stock["n_min"], rel=REMOVALS["n_min_tolerance"])
    removal = potential_biological_removal(stock["n_min"], stock["r_max"], stock["recovery_factor"])
    half = 0.501 * 10.0 ** -stock["digits"]
    assert math.isclose(removal, stock["removal"], abs_tol=half)


@pytest.mark.parametrize("bias", [1.0, 0.7])
def test_biological_removal_of_a_whole_record(bias):
    """The same bound through a record: the latest count over its bias, R_max from the draws."""
    stock = REMOVALS["stock"][0]
    record = make_record(
        counts={2020: stock["n_best"] * bias},
        cv=stock["cv"],
        bias=fixed(bias),
        objectives=Objectives(recovery_factor=stock["recovery_factor"]),
    )
    bound = biological_removal(record, make_rates(r=[0.03, stock["r_max"], 0.09], K=2e5))
    assert round(bound.value) == stock["removal"]
    assert (bound.year, round(bound.n_min), bound.r_max) == (2020, stock["n_min"], stock["r_max"])


def test_every_value_says_where_it_is_from():
    assert len(POINTS) + 2 * len(REMOVALS["stock"]) >= 40
    for value in POINTS:
        assert value["citation"] and value["where"] and 0 < value["tolerance"] < 0.05
        assert isinstance(value["from_memory"], bool)
        assert value["basis"] in ("printed", "derived")
    assert REMOVALS["citation"]
    for stock in REMOVALS["stock"]:
        assert stock["where"] and isinstance(stock["from_memory"], bool)
    # of a stock N_min and the bound are printed; counted once, so that the count does not rest on one table
    assert sum(value["basis"] == "printed" for value in POINTS) + len(REMOVALS["stock"]) >= 25
