"""The growth curves as the rest of the program sees them: names, shapes and closed-form reference values.

g(N) itself lives in ``harvest.kernels.growth``. Every function here takes arrays of equal length and returns
one value a draw. ``r`` per year, ``k`` (carrying capacity K) in the record's unit, ``s`` the curve's shape.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy import special

from harvest.kernels import growth as kernels

Array = np.ndarray


@dataclass(frozen=True)
class Curve:
    """One growth curve.

    Attributes
    ----------
    name : str
        As in the record.
    code : int
        As in ``harvest.kernels.growth``.
    shape : str
        What the shape parameter is, or "" if the curve has none.
    msy, peak : callable (r, k, s) -> ndarray
        Greatest yearly growth max g, and the N where it is reached.
    greatest_growth : callable (r, s) -> ndarray
        p = sup g(N)/N, infinite where unbounded.
    slope : callable (n, r, k, s) -> ndarray
        g'(N).
    from_growth : callable (p, s, low) -> (r, s)
        The curve's parameters from its greatest per-head growth p; for unbounded curves p is the growth at
        abundance ``low``·K.
    source : str
    """

    name: str
    code: int
    shape: str
    msy: Callable[[Array, Array, Array], Array]
    peak: Callable[[Array, Array, Array], Array]
    greatest_growth: Callable[[Array, Array], Array]
    slope: Callable[[Array, Array, Array, Array], Array]
    from_growth: Callable[[Array, Array, float], tuple[Array, Array]]
    source: str


def _allee_peak(r: Array, k: Array, s: Array) -> Array:
    a = s * k
    return (k + a + np.sqrt(k * k - k * a + a * a)) / 3.0


def _allee_msy(r: Array, k: Array, s: Array) -> Array:
    n = _allee_peak(r, k, s)
    return r * n * (1.0 - n / k) * (n / k - s)


def _ricker_log(r: Array, s: Array) -> Array:
    """ln(a/m), m = 1 − s the adults' yearly mortality and a = r + m the recruits per adult at low abundance."""
    return np.asarray(np.log1p(r / (1.0 - s)))


def _ricker_scaled_peak(r: Array, s: Array) -> Array:
    """y = (N*/K) ln(a/m) = 1 − W(e·m/a), Lambert's W by Wright's omega; Scheuerell 2016, doi:10.7717/peerj.1623."""
    return np.asarray(1.0 - special.wrightomega(1.0 - _ricker_log(r, s)))


def _ricker_peak(r: Array, k: Array, s: Array) -> Array:
    return k * _ricker_scaled_peak(r, s) / _ricker_log(r, s)


def _ricker_msy(r: Array, k: Array, s: Array) -> Array:
    y = _ricker_scaled_peak(r, s)
    return (1.0 - s) * _ricker_peak(r, k, s) * y / (1.0 - y)


def _ricker_slope(n: Array, r: Array, k: Array, s: Array) -> Array:
    log, x = _ricker_log(r, s), n / k
    return (1.0 - s) * ((1.0 - log * x) * np.exp(log * (1.0 - x)) - 1.0)


def _beverton_holt_root(r: Array, s: Array) -> Array:
    """√(a/m), m = 1 − s and a = r + m as in Ricker's curve."""
    return np.asarray(np.sqrt(1.0 + r / (1.0 - s)))


def _beverton_holt_slope(n: Array, r: Array, k: Array, s: Array) -> Array:
    m = 1.0 - s
    return (r + m) / (1.0 + r / m * n / k) ** 2 - m


LOGISTIC = Curve(
    name="logistic",
    code=kernels.LOGISTIC,
    shape="",
    msy=lambda r, k, s: r * k / 4.0,
    peak=lambda r, k, s: k / 2.0,
    greatest_growth=lambda r, s: r * 1.0,
    slope=lambda n, r, k, s: r * (1.0 - 2.0 * n / k),
    from_growth=lambda p, s, low: (p, s),
    source="Schaefer 1954",
)
THETA_LOGISTIC = Curve(
    name="theta-logistic",
    code=kernels.THETA_LOGISTIC,
    shape="exponent θ",
    msy=lambda r, k, s: r * k * s / (1.0 + s) ** ((1.0 + s) / s),
    peak=lambda r, k, s: k / (1.0 + s) ** (1.0 / s),
    greatest_growth=lambda r, s: r * 1.0,
    slope=lambda n, r, k, s: r * (1.0 - (1.0 + s) * (n / k) ** s),
    from_growth=lambda p, s, low: (p, s),
    source="Pella & Tomlinson 1969; Gilpin & Ayala 1973",
)
FOX = Curve(
    name="fox",
    code=kernels.FOX,
    shape="",
    msy=lambda r, k, s: r * k / np.e,
    peak=lambda r, k, s: k / np.e,
    greatest_growth=lambda r, s: np.full_like(r, np.inf),
    slope=lambda n, r, k, s: r * (np.log(k / n) - 1.0),
    from_growth=lambda p, s, low: (p / np.log(1.0 / low), s),
    source="Fox 1970",
)
GOMPERTZ = Curve(
    name="gompertz",
    code=kernels.GOMPERTZ,
    shape="strength of regulation b",
    msy=lambda r, k, s: s * k * (1.0 - s) ** ((1.0 - s) / s),
    peak=lambda r, k, s: k * (1.0 - s) ** (1.0 / s),
    greatest_growth=lambda r, s: np.full_like(s, np.inf),
    slope=lambda n, r, k, s: (1.0 - s) * (k / n) ** s - 1.0,
    from_growth=lambda p, s, low: (np.full_like(p, np.nan), np.log1p(p) / np.log(1.0 / low)),
    source="the Gompertz map, linear in logs (Dennis et al. 2006)",
)
ALLEE = Curve(
    name="allee",
    code=kernels.ALLEE,
    shape="threshold as a fraction of K",
    msy=_allee_msy,
    peak=_allee_peak,
    greatest_growth=lambda r, s: r * (1.0 - s) ** 2 / 4.0,
    slope=lambda n, r, k, s: r * (-s + 2.0 * (1.0 + s) * (n / k) - 3.0 * (n / k) ** 2),
    from_growth=lambda p, s, low: (4.0 * p / (1.0 - s) ** 2, s),
    source="the logistic with a threshold (Lewis & Kareiva 1993, doi:10.1006/tpbi.1993.1007)",
)
RICKER = Curve(
    name="ricker",
    code=kernels.RICKER,
    shape="adult survival",
    msy=_ricker_msy,
    peak=_ricker_peak,
    greatest_growth=lambda r, s: r * 1.0,
    slope=_ricker_slope,
    from_growth=lambda p, s, low: (p, s),
    source="Ricker 1954, doi:10.1139/f54-039, with adult survival",
)
BEVERTON_HOLT = Curve(
    name="beverton-holt",
    code=kernels.BEVERTON_HOLT,
    shape="adult survival",
    msy=lambda r, k, s: r * k / (1.0 + _beverton_holt_root(r, s)) ** 2,
    peak=lambda r, k, s: k / (1.0 + _beverton_holt_root(r, s)),
    greatest_growth=lambda r, s: r * 1.0,
    slope=_beverton_holt_slope,
    from_growth=lambda p, s, low: (p, s),
    # The DOI, of the 1993 reprint, is from memory.
    source="Beverton & Holt 1957, doi:10.1007/978-94-011-2106-4, with adult survival",
)

CURVES: tuple[Curve, ...] = (LOGISTIC, THETA_LOGISTIC, FOX, GOMPERTZ, ALLEE, RICKER, BEVERTON_HOLT)
BY_NAME = {curve.name: curve for curve in CURVES}


def by_draw(codes: Array, quantity: str, *arguments: Array) -> Array:
    """Evaluate a curve's closed form (``msy``, ``peak``, ...) draw by draw for a mixture of curves."""
    out = np.empty(codes.shape[0])
    for curve in CURVES:
        mine = codes == curve.code
        if mine.any():
            with np.errstate(divide="ignore", invalid="ignore"):
                out[mine] = getattr(curve, quantity)(*(a[mine] for a in arguments))
    return out
