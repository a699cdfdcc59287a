"""Keyed random numbers: the right distribution, independent across every part of the key."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from scipy import stats

from harvest.kernels.randomness import DEMOGRAPHY, ENVIRONMENT, IMPLEMENTATION, SURVEY, normals

PURPOSES = (ENVIRONMENT, DEMOGRAPHY, SURVEY, IMPLEMENTATION)
LANES = 256


def many(seed=0, blocks=range(400), years=(0,), purposes=(ENVIRONMENT,)):
    """Shape (blocks, years, purposes, lanes)."""
    return np.array([[[normals(seed, b, y, p, LANES) for p in purposes] for y in years] for b in blocks])


@pytest.mark.parametrize("seed", [0, 1, 2**63 - 1])
def test_normals_are_normal(seed):
    x = many(seed, years=(0, 1, 2), purposes=PURPOSES).ravel()
    n = x.size
    assert stats.kstest(x, "norm").pvalue > 1e-4
    assert abs(x.mean()) < 4.5 / np.sqrt(n)
    assert abs(x.var() - 1) < 4.5 * np.sqrt(2 / n)
    assert abs((x**3).mean()) < 4.5 * np.sqrt(15 / n)
    assert abs((x**4).mean() - 3) < 4.5 * np.sqrt(96 / n)
    for z in (2.0, 3.0, 4.0):
        expected = 2 * stats.norm.sf(z)
        assert abs((np.abs(x) > z).mean() - expected) < 4.5 * np.sqrt(expected / n)
    assert np.unique(x).size == n


def test_each_lane_is_normal_across_blocks():
    x = many(3, blocks=range(1000))[:, 0, 0, :]
    p = np.array([stats.kstest(x[:, j], "norm").pvalue for j in range(LANES)])
    assert stats.kstest(p, "uniform").pvalue > 1e-4


def test_lanes_are_independent_pairs_included():
    """Lane j and lane j + half share a Box–Muller pair: neither they nor their squares correlate."""
    x = many(5, blocks=range(3000))[:, 0, 0, :]
    for values in (x, x**2):
        c = np.corrcoef(values.T)[np.triu_indices(LANES, 1)]
        assert np.abs(c).max() < 6.0 / np.sqrt(3000)
        assert abs(c.std() * np.sqrt(3000) - 1) < 0.05
    radius = x[:, :128] ** 2 + x[:, 128:] ** 2
    assert stats.kstest(radius.ravel(), stats.expon(scale=2).cdf).pvalue > 1e-4


@pytest.mark.parametrize("part", ["block", "year", "purpose", "seed"])
def test_neighbouring_keys_are_independent(part):
    keys = {
        "block": [(0, b, 0, 1) for b in range(300)],
        "year": [(0, 0, y, 1) for y in range(-150, 150)],
        "purpose": [(0, 0, 0, p) for p in range(1, 301)],
        "seed": [(s, 0, 0, 1) for s in range(300)],
    }[part]
    x = np.array([normals(*key, LANES) for key in keys])
    assert np.unique(x).size == x.size
    for shift in (1, 2, 3, 7):
        c = (x[shift:] * x[:-shift]).mean()
        assert abs(c) < 4.5 / np.sqrt(x[shift:].size)
    assert np.abs(np.corrcoef(x)[np.triu_indices(300, 1)]).max() < 6.0 / np.sqrt(LANES)


def test_streams_do_not_overlap_at_any_offset():
    """Values, not only correlation: no number of one key turns up under another, in any lane."""
    keys = itertools.product((0, 1), range(20), range(-3, 10), PURPOSES)
    x = np.concatenate([normals(*key, LANES) for key in keys])
    assert np.unique(x).size == x.size


def test_same_key_same_numbers_and_seed_zero_is_a_seed():
    assert (normals(0, 1, 2, 3, LANES) == normals(0, 1, 2, 3, LANES)).all()
    assert not (normals(0, 1, 2, 3, LANES) == normals(1, 1, 2, 3, LANES)).any()
    assert not (normals(0, 1, -1, 3, LANES) == normals(0, 1, 1, 3, LANES)).any()
    assert not (normals(0, 1, 0, 3, LANES) == normals(0, 0, 1, 3, LANES)).any()
