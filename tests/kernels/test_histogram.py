"""Quantiles of the log histogram against numpy's on the same sample."""

from __future__ import annotations

import numba
import numpy as np
import pytest

from harvest.kernels.histogram import BINS, base_of, bin_of, edges, quantiles
from harvest.kernels.projection import fill_histogram

LEVELS = np.array([0.05, 0.25, 0.5, 0.75, 0.95])
N = 50_000
rng = np.random.default_rng(4)
SHAPES = {
    "lognormal": 500 * np.exp(0.4 * rng.standard_normal(N)),
    "very wide lognormal": 500 * np.exp(2 * rng.standard_normal(N)),
    "uniform": rng.uniform(0, 1000, N),
    "gamma": rng.gamma(0.7, 100, N),
    "narrow": 700 + 1e-3 * rng.standard_normal(N),
    "a third zeros": np.where(rng.random(N) < 1 / 3, 0, rng.lognormal(5, 0.5, N)),
    "whole numbers": rng.poisson(200, N).astype(float),
    "tiny unit": 1e-5 * np.exp(0.4 * rng.standard_normal(N)),
    "huge unit": 1e12 * np.exp(0.4 * rng.standard_normal(N)),
}


def counted(x, reference=None):
    base = base_of(x.max() if reference is None else reference)
    counts, extremes = np.zeros(BINS, np.int32), np.array([1e300, -1e300])
    fill_histogram(x, x.size, base, np.empty(x.size, np.uint64), counts, extremes)
    return counts, base, extremes


def read(x, q=LEVELS, reference=None):
    counts, base, (least, most) = counted(x, reference)
    return quantiles(counts, base, least, most, q)


@pytest.mark.parametrize("name", SHAPES)
@pytest.mark.parametrize("factor", [1.0, 20.0, 0.05])
def test_quantiles_within_half_a_percent(name, factor):
    x = SHAPES[name]
    got = read(x, reference=factor * np.median(x) if factor != 1 else None)
    np.testing.assert_allclose(got, np.quantile(x, LEVELS), rtol=5e-3, atol=1e-6 * np.median(x))


@pytest.mark.parametrize("value", [0.0, 1.0, 123.456, 1e-3, 7e7])
def test_constant_is_exact(value):
    assert read(np.full(1001, value), reference=100.0).tolist() == [value] * 5


@pytest.mark.parametrize("share", [0.1, 0.4, 0.7, 0.97])
def test_two_points(share):
    x = np.where(np.arange(10_001) < share * 10_001, 10.0, 1000.0)
    np.testing.assert_allclose(read(x), np.quantile(x, LEVELS), rtol=5e-3)


def test_extremes_are_exact_and_quantiles_keep_within_them_in_order():
    for x in SHAPES.values():
        assert counted(x)[2].tolist() == [x.min(), x.max()]
        got = read(x, np.linspace(0, 1, 201))
        assert x.min() <= got[0] <= got[-1] <= x.max()
        assert (np.diff(got) >= 0).all()


def test_every_value_lies_within_its_bin():
    base = base_of(1000.0)
    edge = edges(base)
    assert edge.size == BINS + 1
    assert (np.diff(edge) > 0).all()
    assert (edge[2:] / edge[1:-1]).max() < 1.004

    @numba.njit
    def place(x, base, out):
        for j in range(x.size):
            out[j] = bin_of(x[j], base)

    x = np.concatenate(
        [np.exp(np.random.default_rng(0).uniform(np.log(1e-5), np.log(9e5), 50_000)), edge[5:-1:7], [0.0]]
    )
    out = np.empty(x.size, np.int64)
    place(x, base, out)
    assert (edge[out] <= x).all()
    assert (x < edge[out + 1]).all()
    place(np.array([1e-300, 1e300]), base, out)
    assert out[:2].tolist() == [0, BINS - 1]


def test_only_the_lanes_in_use_are_counted():
    counts, extremes = np.zeros(BINS, np.int32), np.array([1e300, -1e300])
    fill_histogram(np.array([5.0, 6.0, 1.0, 900.0]), 2, base_of(10.0), np.empty(4, np.uint64), counts, extremes)
    assert (counts.sum(), extremes.tolist()) == (2, [5.0, 6.0])
