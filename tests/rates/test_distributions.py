"""Quantiles of the stated distributions against scipy, and what a domain does to them."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import integrate, stats

from harvest.rates.distributions import DOMAINS, outside, quantile
from harvest.record.fields import FIELDS

from ..builders import spread

POSITIVE, PROPORTION, CORRELATION = (0.0, math.inf), (0.0, 1.0), (-1.0, 1.0)
U = np.linspace(0.001, 0.999, 501)

INSIDE = [
    (spread("uniform", low=0.2, high=0.7), stats.uniform(0.2, 0.5)),
    (spread("triangular", low=0.2, mode=0.25, high=0.7), stats.triang(0.1, 0.2, 0.5)),
    (spread("triangular", low=0.2, mode=0.2, high=0.7), stats.triang(0.0, 0.2, 0.5)),
    (spread("lognormal", median=0.3, sd_log=0.4), stats.lognorm(0.4, scale=0.3)),
    (spread("normal", mean=0.5, sd=0.05), stats.norm(0.5, 0.05)),
    (spread("beta", a=2.0, b=5.0), stats.beta(2, 5)),
]


@pytest.mark.parametrize(("d", "exact"), INSIDE, ids=lambda v: str(v) if hasattr(v, "kind") else "")
def test_quantiles_inside_the_domain_are_scipys(d, exact):
    np.testing.assert_allclose(quantile(d, U, POSITIVE), exact.ppf(U), rtol=1e-9)
    assert outside(d, POSITIVE) < 1e-12


def test_parameters_mean_what_they_say():
    """Median and sd of log of the lognormal, mode of the triangular, mean of the beta: by numerical integration."""
    x = quantile(spread("lognormal", median=3.0, sd_log=0.4), U, POSITIVE)
    assert np.median(x) == pytest.approx(3.0)
    z = stats.norm.ppf(U)
    np.testing.assert_allclose(np.log(x / 3.0), 0.4 * z, atol=1e-9)
    beta = spread("beta", a=2.0, b=6.0)
    mean = integrate.quad(lambda u: quantile(beta, np.array([u]), PROPORTION)[0], 0, 1)[0]
    assert mean == pytest.approx(0.25, rel=1e-6)
    triangle = spread("triangular", low=1.0, mode=2.0, high=5.0)
    assert quantile(triangle, np.array([0.25]), POSITIVE)[0] == pytest.approx(2.0), "a quarter lies below the mode"


def test_fixed():
    assert (quantile(spread("fixed", value=0.2), U, POSITIVE) == 0.2).all()
    assert outside(spread("fixed", value=0.2), POSITIVE) == 0.0


@pytest.mark.parametrize(
    ("d", "domain", "exact"),
    [
        (spread("normal", mean=0.1, sd=0.2), POSITIVE, stats.truncnorm(-0.5, np.inf, 0.1, 0.2)),
        (spread("normal", mean=0.8, sd=0.3), PROPORTION, stats.truncnorm(-8 / 3, 2 / 3, 0.8, 0.3)),
        (spread("normal", mean=0.9, sd=0.2), CORRELATION, stats.truncnorm(-9.5, 0.5, 0.9, 0.2)),
        (spread("uniform", low=-0.1, high=0.4), POSITIVE, stats.uniform(0, 0.4)),
        (spread("lognormal", median=0.8, sd_log=0.5), PROPORTION, None),
    ],
)
def test_a_domain_conditions_the_distribution(d, domain, exact):
    x = quantile(d, U, domain)
    assert ((x > domain[0]) & (x < domain[1])).all()
    assert (np.diff(x) > 0).all()
    if exact is not None:
        np.testing.assert_allclose(x, exact.ppf(U), rtol=1e-7)
    whole = {"normal": lambda: stats.norm(d["mean"], d["sd"]), "uniform": lambda: stats.uniform(-0.1, 0.5)}.get(
        d.kind, lambda: stats.lognorm(0.5, scale=0.8)
    )()
    assert outside(d, domain) == pytest.approx(1 - (whole.cdf(domain[1]) - whole.cdf(domain[0])), rel=1e-9)


positive_ends = st.tuples(st.floats(1e-4, 1e6), st.floats(1.01, 100)).map(lambda t: (t[0], t[0] * t[1]))
proportion_ends = st.tuples(st.floats(0.001, 0.9), st.floats(0.01, 0.99)).map(
    lambda t: (t[0], t[0] + (0.999 - t[0]) * t[1])
)


@given(positive_ends)
def test_nine_tenths_between_is_lognormal_for_positive_rates(ends):
    d = spread("90% between", low=ends[0], high=ends[1])
    x = quantile(d, np.array([0.05, 0.25, 0.5, 0.95]), POSITIVE)
    assert x[[0, 3]] == pytest.approx(ends, rel=1e-9)
    assert x[2] == pytest.approx(math.sqrt(ends[0] * ends[1]), rel=1e-9)
    sd = math.log(ends[1] / ends[0]) / (2 * stats.norm.ppf(0.95))
    assert math.log(x[1] / x[2]) == pytest.approx(sd * stats.norm.ppf(0.25), rel=1e-9)


@given(proportion_ends)
def test_nine_tenths_between_is_logit_normal_for_proportions(ends):
    d = spread("90% between", low=ends[0], high=ends[1])
    x = quantile(d, np.array([0.05, 0.5, 0.95, 1e-9, 1 - 1e-9]), PROPORTION)
    assert x[[0, 2]] == pytest.approx(ends, rel=1e-9)
    logits = np.log(x[:3] / (1 - x[:3]))
    assert logits[1] == pytest.approx((logits[0] + logits[2]) / 2, abs=1e-7)
    assert ((x >= 0) & (x <= 1)).all()


def test_nine_tenths_between_is_normal_otherwise_and_truncated_like_one():
    d = spread("90% between", low=-0.2, high=0.4)
    x = quantile(d, np.array([0.05, 0.25, 0.5, 0.95]), CORRELATION)
    assert x == pytest.approx([-0.2, 0.1 + 0.3 * stats.norm.ppf(0.25) / stats.norm.ppf(0.95), 0.1, 0.4], abs=2e-6)
    wide = spread("90% between", low=0.2, high=0.99)
    assert (quantile(wide, U, CORRELATION) < 1).all()
    sd = 0.395 / stats.norm.ppf(0.95)
    assert outside(wide, CORRELATION) == pytest.approx(stats.norm.sf((1 - 0.595) / sd), rel=1e-3)


def test_which_meaning_each_rate_has():
    """Proportions are logit-normal, rates and ratios that only need to be positive lognormal."""
    proportions = {name for name, domain in DOMAINS.items() if domain == PROPORTION}
    assert proportions == {"gompertz shape", "allee shape", "ricker shape", "beverton-holt shape"}
    assert {name for name, domain in DOMAINS.items() if domain == CORRELATION} == {"autocorrelation"}
    assert DOMAINS["bias"] == DOMAINS["growth_rate"] == DOMAINS["carrying_capacity"] == POSITIVE


def test_the_record_and_the_draws_give_each_range_the_same_meaning():
    """Whether "90% between" is lognormal or logit-normal is told twice: by a field's range and by a rate's domain."""
    ranges = [f for f in FIELDS if f.sort == "distribution"]
    seen = set()
    for field in ranges:
        shaped = field.key == "shape"
        for curve in field.only_for if shaped else (None,):
            name, narrow = f"{curve} shape" if shaped else field.key, field.narrowed(curve)
            assert (narrow.is_positive, narrow.is_proportion) == (
                DOMAINS[name] == POSITIVE,
                DOMAINS[name] == PROPORTION,
            ), (field.path, curve)
            seen.add(name)
    assert seen == set(DOMAINS)
