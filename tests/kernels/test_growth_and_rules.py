"""Growth curves and rules over lanes against plain Python, one number at a time."""

from __future__ import annotations

import numpy as np
import pytest

from harvest.futures.rules import RULES, rule_from
from harvest.kernels.equilibria import years_to_cross
from harvest.kernels.growth import fill_growth, growth_array
from harvest.kernels.rules import fill_quota
from harvest.population import BY_NAME

from . import reference

CODES = [curve.code for curve in BY_NAME.values()]


def lanes(curve: int, n: int = 500):
    rng = np.random.default_rng(curve)
    k = np.exp(rng.uniform(np.log(1e-2), np.log(1e8), n))
    x = k * np.exp(rng.uniform(-25, 2, n))
    x[:5] = [0.0, k[1], k[2] * 0.5, k[3] * 3, k[4] * 1e-12]
    r = rng.uniform(0.01, 3, n)
    survival = np.where(np.arange(n) % 7 == 0, 0.0, rng.uniform(0, 0.99, n))  # every seventh dies after breeding
    s = {
        1: rng.uniform(0.05, 8, n),
        3: rng.uniform(0.02, 0.98, n),
        4: rng.uniform(0.01, 0.6, n),
        5: survival,
        6: survival,
    }.get(curve, np.zeros(n))
    return x, r, k, s


@pytest.mark.parametrize("curve", CODES)
def test_growth_curves(curve):
    x, r, k, s = lanes(curve)
    expected = [reference.growth(curve, *values) for values in zip(x, r, k, s, strict=True)]
    out = np.empty_like(x)
    fill_growth(curve, x, r, k, s, out)
    np.testing.assert_allclose(out, expected, rtol=1e-10, atol=0 if curve == 0 else 1e-12 * k.min())
    np.testing.assert_allclose(out / k, np.array(expected) / k, rtol=1e-10, atol=1e-14)
    np.testing.assert_allclose(growth_array(np.full(x.size, curve), x, r, k, s) / k, out / k, rtol=1e-13, atol=1e-15)
    assert out[0] == 0.0
    assert abs(out[1]) <= 1e-14 * k[1] * 3


def test_growth_array_broadcasts_and_mixes_curves():
    curve = np.array(CODES)[:, None]
    n = np.linspace(0, 1500, 7)[None, :]
    got = growth_array(curve, n, 0.3, 1000.0, 0.2)
    assert got.shape == (len(CODES), 7)
    for i, code in enumerate(CODES):
        for j in range(7):
            assert got[i, j] == pytest.approx(reference.growth(code, n[0, j], 0.3, 1000.0, 0.2), rel=1e-10, abs=1e-10)


SETTINGS = {
    "fixed quota": {"quota": 12.5},
    "fixed share": {"share": 0.13},
    "escapement": {"escapement": 400.0},
    "ramp": {"lower": 200.0, "upper": 600.0, "share": 0.3},
}


@pytest.mark.parametrize("name", SETTINGS)
def test_rules(name):
    x = np.concatenate([np.random.default_rng(0).uniform(0, 1000, 300), [0.0, 200.0, 400.0, 600.0, 1e9]])
    code, order = RULES[name]
    settings = [SETTINGS[name][s] for s in order]
    out = np.empty_like(x)
    fill_quota(code, np.array(settings), x, out)
    expected = [reference.quota(code, settings, value) for value in x]
    np.testing.assert_allclose(out, expected, rtol=1e-12)
    np.testing.assert_allclose(rule_from(name, SETTINGS[name]).quota(x), expected, rtol=1e-12)
    assert (out >= 0).all()


def test_ramp_is_continuous_and_closes_below():
    rule = rule_from("ramp", SETTINGS["ramp"])
    assert rule.quota([0.0, 199.0, 200.0]).tolist() == [0.0, 0.0, 0.0]
    assert rule.quota([400.0, 600.0, 900.0]) == pytest.approx([0.3 * 400 * 0.5, 180.0, 270.0])


@pytest.mark.parametrize("curve", CODES)
@pytest.mark.parametrize(("season", "when"), [(0, 0), (0, 1), (1, 0)])
@pytest.mark.parametrize("falling", [True, False])
def test_years_to_cross(curve, season, when, falling):
    _, r, _, s = lanes(curve)
    n = r.size
    rng = np.random.default_rng(9)
    r, k = 0.3 * r, rng.uniform(200, 2000, n)
    x, level, h = k * rng.uniform(0.05, 1.2, n), k * rng.uniform(0.1, 0.7, n), k * rng.uniform(0, 0.15, n)
    out = np.empty(n)
    years_to_cross(season, when, 60, falling, np.full(n, curve), r, k, s, x, h, level, out)
    expected = [
        reference.years_to_cross(season, when, 60, falling, curve, *row)
        for row in zip(r, k, s, x, h, level, strict=True)
    ]
    assert out.tolist() == expected
    assert np.isinf(out).any()
    assert np.unique(out).size > 3
