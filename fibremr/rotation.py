"""Moment against rotation over a whole hinge region, from a moment–curvature curve.

The curve is taken as the polygon through its points, and for that polygon every integral below is
exact: no stations along the beam, hence no trouble with the curvature that shoots up next to the peak.
First-order theory: the axial force does not act on the deflected shape.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import nan

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Setup:
    """How a test or a piece of beam is loaded: kind, span [mm] and, for four-point bending, shear span.

    `kind` is three-point, four-point, cantilever, uniform load or end moment.
    """

    kind: str
    span: float
    shear_span: float = nan

    @property
    def definition(self) -> str:
        """What rotation, theta_p and deflection mean here, in words."""
        return _DEFINITIONS[self.kind]

    def elastic_rotation(self, moment: float, stiffness: float) -> float:
        """Elastic rotation over the region [rad] for a peak moment [Nmm] and EI [Nmm2]."""
        share = {
            "three-point": self.span / 2.0,
            "four-point": self.span - self.shear_span,
            "cantilever": self.span / 2.0,
            "uniform load": self.span * 2.0 / 3.0,
            "end moment": self.span / 2.0,
        }[self.kind]
        return share * moment / stiffness

    def rotations(self, curvature: Array, moment: Array, *, since: int = 1) -> tuple[Array, Array]:
        """Rotation over the region [rad] and deflection [mm] for each point as the peak of the diagram.

        Both arrays are `(point,)`, rising from (0, 0), curvature in 1/mm and moment in Nmm. Points before
        `since` may be left at zero where that saves work.
        """
        moment = np.maximum.accumulate(moment)
        span = self.span
        if self.kind == "three-point":
            turn, sag = linear(curvature, moment)
            return span * turn, (span / 2.0) ** 2 * sag
        if self.kind == "cantilever":
            turn, sag = linear(curvature, moment)
            return span * turn, span**2 * sag
        if self.kind == "four-point":
            turn, sag = linear(curvature, moment)
            arm, level = self.shear_span, span - 2.0 * self.shear_span
            rotation = 2.0 * arm * turn + level * curvature
            return rotation, arm**2 * sag + curvature * (span**2 / 8.0 - arm**2 / 2.0)
        if self.kind == "uniform load":
            turn, sag = parabola(curvature, moment, since=since)
            return span * turn, span**2 / 4.0 * sag
        turn, _ = linear(curvature, moment)
        return span * turn, span**2 * _middle_of_triangle(curvature, moment, since=since)


_DEFINITIONS = {
    "three-point": "load at midspan: rotation between the ends of the span, both sides of the load, "
    "theta_p = Mp L/(2 EI); deflection under the load",
    "four-point": "two loads at the shear span a from the supports: rotation between the ends of the span, "
    "theta_p = Mp (L - a)/(EI); deflection at midspan",
    "cantilever": "load at the tip: rotation of the tip against the fixed end, one side, "
    "theta_p = Mp L/(2 EI); deflection of the tip",
    "uniform load": "uniform load on a simple span: rotation between the ends of the span, "
    "theta_p = 2 Mp L/(3 EI); deflection at midspan",
    "end moment": "moment at one end of a simple span, none at the other: rotation between the ends, "
    "theta_p = Mp L/(2 EI); deflection at midspan",
}


def linear(curvature: Array, moment: Array) -> tuple[Array, Array]:
    """Rotation per length and tip deflection per length squared under a moment that grows linearly.

    For a peak M over a length L the rotation is (L/M) times the integral of kappa dM, which is
    (L/M)(kappa M - integral of M dkappa), and the deflection (L/M)^2 times that of kappa M dM.
    """
    step = np.diff(moment)
    k1, k2, m1, m2 = curvature[:-1], curvature[1:], moment[:-1], moment[1:]
    area = np.concatenate([[0.0], np.cumsum(step * (k1 + k2) / 2.0)])
    first = np.cumsum(step * (k1 * (2.0 * m1 + m2) + k2 * (m1 + 2.0 * m2)) / 6.0)
    first = np.concatenate([[0.0], first])
    with np.errstate(invalid="ignore", divide="ignore"):
        turn, sag = area / moment, first / moment**2
    turn[moment == 0.0] = sag[moment == 0.0] = 0.0
    return turn, sag


def parabola(curvature: Array, moment: Array, *, since: int = 1) -> tuple[Array, Array]:
    """Rotation per span, and midspan deflection per quarter of the span squared, under a parabola.

    With w the distance from midspan over half the span, M(w) = M (1 - w^2), so that the rotation is the
    span times the integral of kappa dw from 0 to 1, and the deflection that of kappa (1 - w) dw.
    """
    n = moment.size
    turn, sag = np.zeros(n), np.zeros(n)
    for i in range(max(since, 1), n):
        if moment[i] <= 0.0:
            continue
        w = np.sqrt(np.maximum(1.0 - moment[: i + 1] / moment[i], 0.0))
        w1, w2 = w[:-1], w[1:]
        k1, k2 = curvature[:i], curvature[1 : i + 1]
        width, both = w1 - w2, w1 + w2
        with np.errstate(invalid="ignore", divide="ignore"):
            share = np.where(both > 0.0, (2.0 * w1 + w2) / (3.0 * both), 0.0)
        inner = np.sum(width * (k1 + (k2 - k1) * share))
        turn[i] = inner
        sag[i] = inner - np.sum(width * both * (k1 + k2)) / 4.0
    return turn, sag


def _middle_of_triangle(curvature: Array, moment: Array, *, since: int = 1) -> Array:
    """Midspan deflection per span squared of a simple span with a moment at one end."""
    step = np.diff(moment)
    k1, k2, m1, m2 = curvature[:-1], curvature[1:], moment[:-1], moment[1:]
    zero = np.concatenate([[0.0], np.cumsum(step * (k1 + k2) / 2.0)])
    first = np.concatenate([[0.0], np.cumsum(step * (k1 * (2 * m1 + m2) + k2 * (m1 + 2 * m2)) / 6.0)])
    sag = np.zeros(moment.size)
    for i in range(max(since, 1), moment.size):
        peak = moment[i]
        if peak <= 0.0:
            continue
        half = peak / 2.0
        j = min(int(np.searchsorted(moment, half, side="right")) - 1, moment.size - 2)
        share = (half - m1[j]) / step[j] if step[j] > 0.0 else 0.0
        kh = k1[j] + share * (k2[j] - k1[j])
        to_half = zero[j] + (half - m1[j]) * (k1[j] + kh) / 2.0
        first_half = first[j] + (half - m1[j]) * (k1[j] * (2 * m1[j] + half) + kh * (m1[j] + 2 * half)) / 6.0
        sag[i] = (first_half + peak * (zero[i] - to_half) - (first[i] - first_half)) / (2.0 * peak**2)
    return sag
