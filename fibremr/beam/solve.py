"""Spread plasticity: the support moments that make a beam fit together at a load factor.

The gap in compatibility is the gradient of the complementary energy, a convex function of the support
moments; Newton's method with a line search finds its minimum. Between stations the moment is taken as
linear and the curvature integrated exactly along the section's polygon, so that the spike of curvature
next to a peak costs no stations.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fibremr.beam.model import Stations
from fibremr.beam.response import Response
from fibremr.errors import NotConverged

Array = NDArray[np.float64]

MOST = 80


@dataclass(frozen=True)
class Solution:
    """A beam at a load factor: redundants and moments [Nmm], curvature [1/mm], turning [rad] at stations.

    `rotation` and `weighted` are the integrals of kappa and of kappa times the distance from the left
    station over each interval between neighbouring stations, [rad] and [mm rad], `(station - 1,)`; those
    between two spans are zero.
    """

    stations: Stations
    response: Response
    factor: float
    redundants: Array
    moment: Array
    curvature: Array
    turning: Array
    rotation: Array
    weighted: Array
    iterations: int


def solve(stations: Stations, response: Response, factor: float, *, start: Array | None = None) -> Solution:
    """The solution at a load factor. Raises NotConverged when the beam cannot be made to fit together."""
    unit = stations.unit
    n = unit.shape[0]
    x = elastic_redundants(stations, factor) if start is None else start.copy()
    scale = response.sagging.largest
    gap_scale = scale / response.stiffness * sum(stations.beam.spans)
    energy, gradient, hessian = _energy(stations, response, factor, x)
    count = 0
    while n and np.max(np.abs(gradient)) > 1e-10 * gap_scale:
        count += 1
        if count > MOST:
            raise NotConverged(
                f"the beam does not fit together at load factor {factor:.4g}: a gap of "
                f"{np.max(np.abs(gradient)):.3g} rad is left after {MOST} iterations"
            )
        step = -np.linalg.solve(hessian + 1e-15 * np.trace(hessian) * np.eye(n), gradient)
        length = 1.0
        while True:
            trial = x + length * step
            new_energy, new_gradient, new_hessian = _energy(stations, response, factor, trial)
            downhill = new_energy <= energy + 1e-4 * length * float(gradient @ step)
            smaller = np.max(np.abs(new_gradient)) < np.max(np.abs(gradient))
            if downhill or smaller or length < 1e-6:
                break
            length /= 2.0
        x, energy, gradient, hessian = trial, new_energy, new_gradient, new_hessian
        if length < 1e-6 and not smaller:
            break  # rounding: the energy cannot be lowered any further
    moment = stations.moment(factor, x)
    curvature = response.at(moment)[0]
    part = _intervals(stations, response, moment)
    rotation, weighted = part.rotation, part.share * _lengths(stations)
    return Solution(
        stations,
        response,
        factor,
        x,
        moment,
        curvature,
        response.turning(moment)[0],
        rotation,
        weighted,
        count,
    )


class Solver:
    """Solves a beam at one load factor after another, each from the last solution."""

    def __init__(self, stations: Stations, response: Response) -> None:
        self._stations = stations
        self._response = response
        self._last: Solution | None = None

    def __call__(self, factor: float) -> Solution:
        """The solution at a load factor; see `solve`."""
        start = None
        if self._last is not None and abs(factor / self._last.factor - 1.0) < 0.5:
            start = self._last.redundants
        self._last = solve(self._stations, self._response, factor, start=start)
        return self._last


def elastic_redundants(stations: Stations, factor: float) -> Array:
    """Support moments of the elastic beam of constant E I [Nmm]."""
    unit, dx = stations.unit, _lengths(stations)
    n = unit.shape[0]
    if n == 0:
        return np.zeros(0)

    def product(a: Array, b: Array) -> float:
        # Simpson over each interval: exact for the cubics met here
        middle = (a[:-1] + a[1:]) * (b[:-1] + b[1:]) / 4.0
        return float(np.sum(dx * (a[:-1] * b[:-1] + a[1:] * b[1:] + 4.0 * middle) / 6.0))

    free = stations.free
    matrix = np.array([[product(unit[i], unit[j]) for j in range(n)] for i in range(n)])
    # between stations the free moment is a parabola: its bulge over the chord, integrated with the unit
    bulge = _bulge(stations)
    vector = np.array(
        [product(unit[i], free) + float(np.sum(bulge * (unit[i][:-1] + unit[i][1:]) / 2.0)) for i in range(n)]
    )
    return -factor * np.linalg.solve(matrix, vector)


def _bulge(stations: Stations) -> Array:
    """Area between the parabola of the free moment and its chord over each interval [N mm2]."""
    dx = _lengths(stations)
    load = np.zeros(len(stations.beam.spans))
    for l in stations.beam.loads:
        load[l.span] += l.uniform
    return np.asarray(load[stations.span[:-1]] * dx**3 / 12.0)


def _lengths(stations: Stations) -> Array:
    """Length of each interval [mm]; zero between two spans."""
    return np.where(np.diff(stations.span) == 0, np.diff(stations.x), 0.0)


@dataclass(frozen=True)
class _Intervals:
    """Integrals over each interval between stations, and their derivatives by the moments at its ends.

    With t running from 0 to 1: `rotation` is the integral of kappa, `share` that of kappa t; `left`, `both`
    and `right` are the derivatives of the integral of kappa (1 - t) by the left moment, of kappa t by the
    left moment (and the other way round), and of kappa t by the right moment.
    """

    rotation: Array
    share: Array
    left: Array
    both: Array
    right: Array
    energy: Array


def _intervals(stations: Stations, response: Response, moment: Array) -> _Intervals:
    dx = _lengths(stations)
    k, slope, first, second = response.at(moment)
    k1, k2, m1 = k[:-1], k[1:], moment[:-1]
    rise = np.diff(moment)
    flat = np.abs(rise) < 1e-6 * response.sagging.largest
    safe = np.where(flat, 1.0, rise)
    # the integral of kappa dM from zero is positive on both sides of zero
    mean = np.where(flat, (k1 + k2) / 2.0, np.diff(first) / safe)
    lever = np.where(flat, (k1 + 2.0 * k2) / 6.0, (np.diff(second) - m1 * np.diff(first)) / safe**2)
    level = (slope[:-1] + slope[1:]) / 2.0
    return _Intervals(
        rotation=dx * mean,
        share=dx * lever,
        left=dx * np.where(flat, level / 3.0, (2.0 * mean - k1 - 2.0 * lever) / safe),
        both=dx * np.where(flat, level / 6.0, (2.0 * lever - mean) / safe),
        right=dx * np.where(flat, level / 3.0, (k2 - 2.0 * lever) / safe),
        energy=dx * (first[:-1] + first[1:]) / 2.0,
    )


def _energy(stations: Stations, response: Response, factor: float, x: Array) -> tuple[float, Array, Array]:
    """Complementary energy, its gradient (the gaps in compatibility) and its Hessian."""
    unit = stations.unit
    moment = stations.moment(factor, x)
    part = _intervals(stations, response, moment)
    turn, turn_slope = response.turning(moment)
    turn, turn_slope = _once(stations, turn), _once(stations, turn_slope)
    left, right = unit[:, :-1], unit[:, 1:]
    gradient = left @ (part.rotation - part.share) + right @ part.share + unit @ turn
    cross = (left * part.both) @ right.T
    hessian = (left * part.left) @ left.T + cross + cross.T + (right * part.right) @ right.T
    hessian += (unit * turn_slope) @ unit.T
    excess = turn * turn / np.where(turn_slope > 0.0, 2.0 * turn_slope, 1.0)
    return float(np.sum(part.energy) + np.sum(excess)), gradient, hessian


def _once(stations: Stations, turn: Array) -> Array:
    """Turning at stations, with that of a support, which stands twice, halved at both of its stations."""
    halved = turn.copy()
    for start in stations.starts[1:-1]:
        halved[start - 1] /= 2.0
        halved[start] /= 2.0
    return halved
