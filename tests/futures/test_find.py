"""The refined curve pins the answer between two neighbouring printable quotas, whatever the coarse grid."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from harvest.errors import SettingsError
from harvest.futures import find_quota
from harvest.rates import draw_rates
from harvest.record import demo_folder, read_record
from harvest.record.model import Level


@pytest.fixture(scope="module")
def deer():
    record = read_record(demo_folder("deer"))
    return record, draw_rates(record, 5, 4000)


def test_the_answer_does_not_depend_on_the_coarse_grid(deer):
    found = {points: find_quota(*deer, "limit", points=points)[1] for points in (3, 7, 50, 200)}
    assert len({a.quota for a in found.values()}) == 1
    assert len({a.probability for a in found.values()}) == 1


def test_the_answer_is_simulated_and_its_neighbour_fails(deer):
    curve, advice = find_quota(*deer, "limit")
    risk = dict(zip(curve.quotas, curve.probability["ever_below_limit"][:, advice.criterion.year - 1], strict=True))
    assert risk[advice.quota] == advice.probability <= advice.criterion.bound
    assert risk[advice.quota + 1.0] > advice.criterion.bound
    assert (np.diff(curve.quotas) > 0).all()


def test_tonnes_are_pinned_to_three_figures():
    record = read_record(demo_folder("lake"))
    curve, advice = find_quota(record, draw_rates(record, 5, 4000), "limit")
    i = int(np.searchsorted(curve.quotas, advice.quota))
    assert curve.quotas[i] == advice.quota == float(f"{advice.quota:.3g}")
    assert curve.quotas[i + 1] <= advice.quota * 1.011


def test_more_quotas_change_nothing_on_the_curve(deer):
    """All quotas are projected on the same futures."""
    coarse, fine = (find_quota(*deer, "limit", points=points)[0] for points in (50, 99))
    shared = np.intersect1d(coarse.quotas, fine.quotas)
    assert shared.size > 10
    for curve in (coarse, fine):
        assert curve.quotas[0] == 0.0
    for event in coarse.probability:
        a = coarse.probability[event][np.isin(coarse.quotas, shared)]
        b = fine.probability[event][np.isin(fine.quotas, shared)]
        np.testing.assert_array_equal(a, b)


def test_a_lower_tolerance_never_brings_a_higher_quota(deer):
    quotas = [find_quota(*deer, "limit", tolerance=t)[1].quota for t in (0.01, 0.02, 0.05, 0.1, 0.3, 0.6)]
    assert quotas == sorted(quotas)
    assert quotas[0] < quotas[-1]


def test_too_fine_a_tolerance_and_an_idle_recovery_are_refused(deer):
    with pytest.raises(SettingsError, match="draw at least 10,000"):
        find_quota(*deer, "limit", tolerance=0.001)
    with pytest.raises(SettingsError, match="above its limit"):
        find_quota(*deer, "recovery")
    record = replace(deer[0], objectives=replace(deer[0].objectives, limit=Level(1.0), target=None))
    _, advice = find_quota(record, deer[1], "limit", horizon=1)
    assert not advice.at_edge
