from __future__ import annotations

import math
from dataclasses import replace

import pytest

from harvest.plan import words


@pytest.mark.parametrize(
    ("p", "told"),
    [
        (0.0, "fewer than 1 in 1,000"),
        (0.00099, "fewer than 1 in 1,000"),
        (0.0494, "4.9%"),
        (0.05, "5.0%"),
        (0.34, "34%"),
        (0.936, "93.6%"),
        (0.9995, "more than 999 in 1,000"),
        (1.0, "more than 999 in 1,000"),
        (math.nan, "none"),
    ],
)
def test_probabilities_have_two_figures_and_are_never_certain(p, told):
    assert words.probability(p) == told


@pytest.mark.parametrize(
    ("value", "unit", "told"),
    [
        (1234.4, "animals", "1,234"),
        (1234.4, "tonnes", "1,234"),
        (12.345, "tonnes", "12.3"),
        (0.012345, "tonnes", "0.0123"),
        (0.0, "tonnes", "0"),
        (math.inf, "animals", "never"),
        (math.nan, "tonnes", "none"),
    ],
)
def test_numbers(value, unit, told):
    assert words.number(value, unit) == told


def test_errors_have_one_figure():
    assert words.error(0.00216) == "±0.2%"
    assert words.error(0.0) == "<0.01%"


def test_the_limit_s_words_fit_into_any_sentence(demos):
    stated = demos["deer"]
    none = replace(stated, objectives=replace(stated.objectives, limit=None))
    assert words.limit_words(stated) == "1,200 red deer"
    assert words.limit_words(none) == "the collapse level (10% of the carrying capacity; no limit is stated)"
