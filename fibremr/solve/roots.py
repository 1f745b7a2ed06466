"""A bracketed root finder for one unknown; knows nothing of steel or sections."""

from __future__ import annotations

from collections.abc import Callable

from fibremr.errors import NotConverged


def find_root(
    function: Callable[[float], float], low: float, high: float, *, tolerance: float, most: int = 200
) -> float:
    """The argument in [low, high] at which a continuous function changes sign.

    Inverse quadratic interpolation where it can be trusted, bisection elsewhere, after
    Chandrupatla (1997), Advances in Engineering Software 28, 145-149 (method from memory).
    `tolerance` is the half width of the last bracket, in the unit of the argument.

    Raises NotConverged if the ends do not bracket a root or `most` evaluations do not suffice.
    """
    b, a = low, high
    fb, fa = function(b), function(a)
    if fb == 0.0:
        return b
    if fa == 0.0:
        return a
    if (fa > 0.0) == (fb > 0.0):
        raise NotConverged(f"no sign change between {low:.9g} and {high:.9g}")
    c, fc = a, fa
    t = 0.5
    for _ in range(most):
        x = a + t * (b - a)
        fx = function(x)
        if (fx > 0.0) == (fa > 0.0):
            c, fc = a, fa
        else:
            c, b, fc, fb = b, a, fb, fa
        a, fa = x, fx
        best, f_best = (a, fa) if abs(fa) < abs(fb) else (b, fb)
        width = abs(b - a)
        if f_best == 0.0 or width <= 2.0 * tolerance or 0.5 * (a + b) in (a, b):
            return best
        limit = tolerance / width
        xi = (a - b) / (c - b)
        phi = (fa - fb) / (fc - fb)
        if 1.0 - (1.0 - xi) ** 0.5 < phi < xi**0.5:
            t = fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (fc - fb)
        else:
            t = 0.5
        t = min(1.0 - limit, max(limit, t))
    raise NotConverged(f"no root to {tolerance:.3g} between {low:.9g} and {high:.9g} in {most} evaluations")
