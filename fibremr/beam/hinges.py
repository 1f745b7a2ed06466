"""Plastic hinges of a solved beam: where they are, the region that turns, and how far it must turn."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fibremr.beam.model import Stations
from fibremr.beam.response import Response
from fibremr.beam.solve import Solution

Array = NDArray[np.float64]

REACHED = 0.98  # share of Mp from which a peak counts as a hinge


@dataclass(frozen=True)
class Hinge:
    """A hinge region: place of its peak and its ends between points of zero moment [mm].

    `sense` is +1 sagging, -1 hogging; `moment` and `plastic` [Nmm] are positive in that sense; `required`
    is the plastic rotation over the region [rad] and `theta_p` the elastic one with the peak at Mp.
    """

    at: float
    support: int | None
    span: int
    sense: int
    moment: float
    plastic: float
    region: tuple[float, float]
    theta_p: float
    required: float


@dataclass(frozen=True)
class _Diagram:
    """The moment over one region as a polygon: places [mm] and moments [Nmm], positive in its sense."""

    x: Array
    moment: Array
    peak: int


def regions(solution: Solution) -> list[tuple[int, int]]:
    """First and last station of each stretch of one sign of moment, supports between spans included."""
    sign = np.sign(solution.moment)
    found, start = [], 0
    for i in range(1, sign.size + 1):
        if i == sign.size or (sign[i] != sign[start] and sign[i] != 0.0):
            if sign[start] != 0.0:
                found.append((start, i - 1))
            start = i
        elif sign[start] == 0.0:
            start = i
    return found


def hinges(solution: Solution, sagging: float, hogging: float) -> list[Hinge]:
    """Every hinge of a solution: peaks of |M|/Mp that reach 0.98, one a region."""
    found = []
    for first, last in regions(solution):
        sense = 1 if solution.moment[first] > 0.0 else -1
        plastic = sagging if sense > 0 else hogging
        size = sense * solution.moment[first : last + 1]
        if size.max() < REACHED * plastic:
            continue
        peak = first + int(np.argmax(size))
        found.append(_hinge(solution, first, last, peak, sense, plastic))
    return found


def at_region(solution: Solution, place: float, sagging: float, hogging: float) -> Hinge | None:
    """The region of a solution that holds a place [mm], as if it were a hinge; None if it has no moment."""
    for first, last in regions(solution):
        low, high = _ends(solution.stations, solution.moment, first, last)
        if low <= place <= high:
            sense = 1 if solution.moment[first] > 0.0 else -1
            plastic = sagging if sense > 0 else hogging
            peak = first + int(np.argmax(sense * solution.moment[first : last + 1]))
            return _hinge(solution, first, last, peak, sense, plastic)
    return None


def _hinge(solution: Solution, first: int, last: int, peak: int, sense: int, plastic: float) -> Hinge:
    stations = solution.stations
    diagram = _diagram(stations, solution.moment, first, last, peak, sense)
    stiffness = solution.response.stiffness
    required = plastic_rotation(solution.response, diagram.x, diagram.moment, sense, stiffness)
    turned = np.abs(solution.turning[first : last + 1]).copy()
    twice = np.flatnonzero(np.diff(stations.x[first : last + 1]) == 0.0) + 1
    turned[twice] = 0.0  # a support stands twice, and turns once
    top = float(diagram.moment.max())
    elastic = float(np.sum(np.diff(diagram.x) * (diagram.moment[:-1] + diagram.moment[1:])) / 2.0)
    place = float(stations.x[peak])
    at = np.flatnonzero(np.abs(stations.beam.supports - place) < 1e-9)
    return Hinge(
        at=place,
        support=int(at[0]) if at.size else None,
        span=int(stations.span[peak]),
        sense=sense,
        moment=top,
        plastic=plastic,
        region=(float(diagram.x[0]), float(diagram.x[-1])),
        theta_p=elastic / stiffness * plastic / top,
        required=required + float(turned.sum()),
    )


def scaled_rotation(solution: Solution, hinge: Hinge, moment: float) -> float:
    """Plastic rotation [rad] over a hinge's region with its diagram scaled to a peak moment [Nmm]."""
    diagram = _of(solution, hinge)
    m = diagram.moment * (moment / diagram.moment.max())
    return plastic_rotation(solution.response, diagram.x, m, hinge.sense, solution.response.stiffness)


def plastic_rotation(response: Response, x: Array, moment: Array, sense: int, stiffness: float) -> float:
    """Integral of kappa - M/(EI) over a polygon of moments [rad], exact for the section's polygon."""
    branch = response.sagging if sense > 0 else response.hogging
    k, _, first, _ = branch.at(moment)
    dx, rise = np.diff(x), np.diff(moment)
    flat = np.abs(rise) < 1e-7 * branch.largest
    mean = np.where(flat, (k[:-1] + k[1:]) / 2.0, np.diff(first) / np.where(flat, 1.0, rise))
    return float(np.sum(dx * (mean - (moment[:-1] + moment[1:]) / (2.0 * stiffness))))


def _of(solution: Solution, hinge: Hinge) -> _Diagram:
    for first, last in regions(solution):
        peak = first + int(np.argmax(hinge.sense * solution.moment[first : last + 1]))
        if abs(solution.stations.x[peak] - hinge.at) < 1e-9:
            return _diagram(solution.stations, solution.moment, first, last, peak, hinge.sense)
    raise KeyError(hinge.at)


def _diagram(stations: Stations, moment: Array, first: int, last: int, peak: int, sense: int) -> _Diagram:
    low, high = _ends(stations, moment, first, last)
    x = stations.x[first : last + 1]
    m = sense * moment[first : last + 1]
    if low < x[0]:
        x, m, peak, first = np.append(low, x), np.append(0.0, m), peak + 1, first
    if high > x[-1]:
        x, m = np.append(x, high), np.append(m, 0.0)
    return _Diagram(x, m, peak - first)


def _ends(stations: Stations, moment: Array, first: int, last: int) -> tuple[float, float]:
    """Points of zero moment at both ends of a region, on the chord between stations [mm]."""

    def crossing(inside: int, outside: int) -> float:
        if not 0 <= outside < moment.size or moment[inside] * moment[outside] > 0.0:
            return float(stations.x[inside])
        a, b = moment[inside], moment[outside]
        return float(stations.x[inside] + a / (a - b) * (stations.x[outside] - stations.x[inside]))

    return crossing(first, first - 1), crossing(last, last + 1)
