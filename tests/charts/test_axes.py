from __future__ import annotations

import numpy as np
import pytest

from harvest.charts.axes import (
    LINE_HEIGHT,
    PLOT_HEIGHT,
    Axis,
    chance_axis,
    keep_apart,
    label_rows,
    round_top,
    year_axis,
)

HUNDRED = Axis("", 0.0, 100.0)
GAP = 100.0 * LINE_HEIGHT / PLOT_HEIGHT


@pytest.mark.parametrize(
    ("value", "top"),
    [(0.0, 1.0), (-3.0, 1.0), (float("nan"), 1.0), (1.0, 1.0), (97.0, 100.0), (4154.0, 4500.0), (0.0123, 0.014)],
)
def test_an_axis_ends_at_a_round_number(value, top):
    assert round_top(value) == top


def test_a_round_top_is_close_above():
    for value in np.geomspace(1e-6, 1e9, 400):
        assert value <= round_top(value) * (1 + 1e-9) <= 1.25 * value


def test_labels_that_have_room_stay_where_they_are():
    assert keep_apart([10.0, 90.0, 50.0], HUNDRED) == [10.0, 90.0, 50.0]


def test_labels_on_one_another_are_spread_about_their_mean():
    assert keep_apart([50.0, 50.0], HUNDRED) == pytest.approx([50.0 - GAP / 2, 50.0 + GAP / 2])


@pytest.mark.parametrize("values", [[0.0] * 4, [100.0] * 4, [99.0, 2.0, 98.5, 1.0, 50.0], [150.0, -5.0]])
def test_labels_keep_apart_in_order_and_inside(values):
    placed = keep_apart(values, HUNDRED)
    assert (np.diff(np.sort(placed)) >= GAP - 1e-9).all()
    assert min(placed) >= 0.0
    assert max(placed) <= 100.0 + 1e-9
    assert (np.argsort(placed, kind="stable") == np.argsort(values, kind="stable")).all()


def test_no_label_needs_no_place():
    assert keep_apart([], HUNDRED) == []


def test_labels_above_the_plot_take_a_row_only_where_they_must():
    assert label_rows([(0, 10), (12, 20), (8, 14), (30, 40)]) == [0, 0, 1, 0]


@pytest.mark.parametrize(
    ("first", "last", "written"),
    [
        (2020, 2020, [2019, 2020, 2021]),
        (2013, 2027, [2014, 2016, 2018, 2020, 2022, 2024, 2026]),
        (1601, 2199, [1700, 1800, 1900, 2000, 2100]),
    ],
)
def test_whole_years_are_written(first, last, written):
    axis = year_axis("Year", first, last)
    assert axis.channel("x")["axis"]["values"] == written
    assert (axis.low, axis.high) == ((first, last) if first < last else (2019, 2021))


@pytest.mark.parametrize(("highest", "top"), [(0.9, 1.0), (0.3, 0.35), (0.0, 1.0), (0.0001, 0.01)])
def test_small_chances_are_not_pressed_to_the_ground(highest, top):
    assert chance_axis("", highest).high == (top if highest else 1.0)
