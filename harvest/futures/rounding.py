"""Whole animals and three figures of tonnes, down for a quota, up for the smallest cull under a ceiling."""

from __future__ import annotations

import math

#: Slack, so that 0.29 × 100 is 29.
SLACK = 1e-9


def _step(value: float, unit: str) -> float:
    """The rounding step: one animal, or the third significant figure of tonnes."""
    if unit == "animals" or value == 0.0:
        return 1.0
    return 10.0 ** (math.floor(math.log10(value)) - 2)


def _rounded(value: float, unit: str, whole: int, step: float) -> float:
    """``whole`` steps as the float that prints without a tail of digits."""
    return float(whole) if unit == "animals" else float(f"{whole * step:.3g}")


def round_down(value: float, unit: str) -> float:
    """The largest whole number of animals, or three significant figures of tonnes, not above ``value``."""
    step = _step(value, unit)
    return _rounded(value, unit, math.floor(value / step + SLACK), step)


def round_up(value: float, unit: str) -> float:
    """The smallest whole number of animals, or three significant figures of tonnes, not below ``value``."""
    step = _step(value, unit)
    return _rounded(value, unit, math.ceil(value / step - SLACK), step)


def precision_words(unit: str) -> str:
    """To what a quota is rounded."""
    return "whole animals" if unit == "animals" else "three significant figures"
