"""exp, log, sine and cosine of the kernels against numpy."""

from __future__ import annotations

import numba
import numpy as np
import pytest

from harvest.kernels.compiling import CAREFUL
from harvest.kernels.vectormath import exp, log, sine_cosine

OPTIONS = {"error_model": "numpy", "fastmath": set(CAREFUL)}


@numba.njit(**OPTIONS)
def _exp(x, out):
    for j in range(x.size):
        out[j] = exp(x[j])


@numba.njit(**OPTIONS)
def _log(x, out):
    for j in range(x.size):
        out[j] = log(x[j])


@numba.njit(**OPTIONS)
def _turn(x, sine, cosine):
    for j in range(x.size):
        sine[j], cosine[j] = sine_cosine(x[j])


def applied(function, x):
    out = np.empty_like(x)
    function(x, out)
    return out


@pytest.mark.parametrize("width", [1e-12, 1e-6, 0.3, 1.0, 30.0, 699.999])
def test_exp(width):
    x = np.random.default_rng(1).uniform(-width, width, 100_003)
    assert np.abs(applied(_exp, x) / np.exp(x) - 1).max() < 1.5e-15 * max(1.0, width / 100)


def test_exp_at_its_edges():
    x = np.array([0.0, -0.0, 1.0, -700.0, np.nextafter(-700.0, -800.0), -745.0, -1e4, -1e300, 700.0, 5000.0])
    got = applied(_exp, x)
    assert got[:2].tolist() == [1.0, 1.0]
    assert got[2] == pytest.approx(np.e, rel=3e-16)
    assert got[3] == pytest.approx(np.exp(-700.0), rel=1e-14)
    assert got[4:8].tolist() == [0.0] * 4, "an exponent too small is exactly zero"
    assert got[8:] == pytest.approx([np.exp(700.0)] * 2, rel=1e-14)


def test_log_over_all_magnitudes():
    rng = np.random.default_rng(2)
    x = np.exp(rng.uniform(-700, 700, 200_003))
    assert np.abs(applied(_log, x) / np.log(x) - 1).max() < 1e-15
    near = np.concatenate([1 + rng.uniform(-1e-3, 1e-3, 10_000), rng.uniform(0.5, 2, 100_000), [1 + 2e-16, 1 - 1e-16]])
    near = near[near != 1.0]
    assert np.abs(applied(_log, near) / np.log(near) - 1).max() < 2e-15


def test_log_at_its_edges():
    half = np.sqrt(0.5)
    x = np.array([1.0, half, np.nextafter(half, 0), np.nextafter(half, 1), 2.0**-1022, 2.0**1023, np.nextafter(1, 0)])
    assert applied(_log, x)[0] == 0.0
    np.testing.assert_allclose(applied(_log, x), np.log(x), rtol=4e-16)
    assert applied(_log, x)[-1] < 0.0, "so that the square root of −2 log is real"


def test_sine_and_cosine_over_one_turn():
    rng = np.random.default_rng(3)
    eighths = np.arange(8) / 8
    u = np.concatenate(
        [rng.random(200_000), eighths, np.nextafter(eighths[1:], 0), np.nextafter(eighths, 1), [1 - 2.0**-52]]
    )
    sine, cosine = np.empty_like(u), np.empty_like(u)
    _turn(u, sine, cosine)
    assert np.abs(sine - np.sin(2 * np.pi * u)).max() < 1.2e-15
    assert np.abs(cosine - np.cos(2 * np.pi * u)).max() < 1.2e-15
    assert np.abs(sine**2 + cosine**2 - 1).max() < 1e-15
    assert (sine[200_000], cosine[200_000]) == (0.0, 1.0)


def test_exp_and_log_are_inverse_over_lanes_of_any_length():
    for size in (1, 3, 7, 8, 255, 256, 257):
        x = np.linspace(-600, 600, size)
        np.testing.assert_allclose(applied(_log, applied(_exp, x)), x, rtol=1e-14, atol=1e-15)
