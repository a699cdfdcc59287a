"""The growth curves as the rest of the program sees them: names, shapes and closed-form reference values.

g(N) itself lives in ``harvest.kernels.growth``. Every function here takes arrays of equal length and returns
one value a draw. ``r`` per year, ``k`` (carrying capacity K) in the record's unit, ``s`` the curve's shape.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

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

CURVES: tuple[Curve, ...] = (LOGISTIC, THETA_LOGISTIC, FOX, GOMPERTZ, ALLEE)
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
