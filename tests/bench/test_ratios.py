"""Ratios of one run; seconds are only reported (``python -m tests.bench.measure``)."""

from __future__ import annotations

import pytest

from harvest.kernels.projection import SUMMARY
from tests.bench import measure

pytestmark = pytest.mark.bench


def test_the_projection_is_at_least_six_times_plain_numpy():
    """On two threads against the best of whole arrays and chunks on one; the best of three rounds on a busy machine."""
    ratios = []
    for _ in range(3):
        ratios.append(measure.projection_ratio(rounds=3)["ratio"])
        if ratios[-1] >= 6.0:
            break
    assert max(ratios) >= 6.0, ratios


def test_memory_is_flat_but_for_one_summary_row_a_future():
    """One row of float64 a future, and at most one temporary column on top."""
    row = 8 * SUMMARY
    assert 0.9 * row < measure.memory_per_future() < row + 3 * 8
