"""A beam and its loads, its stations, and the moments that equilibrium leaves open.

x runs along the beam from its left end [mm]; moments are in Nmm, sagging positive, loads act downwards
and are positive so. M(x) = factor * M0(x) + sum of X_i m_i(x) with the support moments X as redundants
is in equilibrium whatever they are.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

PINNED, FIXED = "pinned", "fixed"


@dataclass(frozen=True)
class Load:
    """A design load on one span (counted from 0): uniform [N/mm], or a point load [N] at a distance [mm]."""

    span: int
    uniform: float = 0.0
    point: float = 0.0
    at: float = 0.0


@dataclass(frozen=True)
class Beam:
    """Spans [mm], how the two ends are held, and the design loads at load factor 1."""

    spans: tuple[float, ...]
    ends: tuple[str, str]
    loads: tuple[Load, ...]

    @cached_property
    def supports(self) -> Array:
        """Places of the supports [mm]."""
        return np.concatenate([[0.0], np.cumsum(self.spans)])

    @cached_property
    def redundants(self) -> tuple[int, ...]:
        """The supports whose moment is open: inner ones, and fixed ends."""
        last = len(self.spans)
        inner = list(range(1, last))
        return tuple(
            ([0] if self.ends[0] == FIXED else []) + inner + ([last] if self.ends[1] == FIXED else [])
        )

    def point_places(self, span: int) -> list[float]:
        """Where point loads act on a span [mm from its left end]."""
        return sorted({l.at for l in self.loads if l.span == span and l.point})


@dataclass(frozen=True)
class Stations:
    """Places along a beam and what equilibrium says there.

    Arrays are `(station,)`, span by span, so that a support between two spans stands twice: x [mm], span
    index, `free` the moment of the loads on simple spans [Nmm] and `shear` its slope there [N];
    `unit` is `(redundant, station)`, the moment for a redundant of one. `slope` likewise, per mm.
    """

    beam: Beam
    x: Array
    span: NDArray[np.intp]
    free: Array
    shear_left: Array
    shear_right: Array
    unit: Array
    slope: Array
    starts: tuple[int, ...]

    def moment(self, factor: float, redundants: Array) -> Array:
        """Moment at every station [Nmm]."""
        return np.asarray(factor * self.free + redundants @ self.unit)


def stations(beam: Beam, each: int = 160) -> Stations:
    """Stations on supports and point loads, and between them, denser towards both ends of each stretch."""
    x, span, free, left, right = [], [], [], [], []
    unit_parts, slope_parts, starts = [], [], []
    count = 0
    for i, length in enumerate(beam.spans):
        ends = [0.0, *(p for p in beam.point_places(i) if 0.0 < p < length), length]
        places = [np.zeros(1)]
        for a, b in zip(ends, ends[1:], strict=False):
            n = max(24, int(np.ceil(each * (b - a) / length)))
            t = np.arange(1, n + 1) / n
            # a blend of even and cosine spacing: fine where moments peak, and nowhere coarse
            t = 0.35 * t + 0.65 * (1.0 - np.cos(np.pi * t)) / 2.0
            places.append(a + (b - a) * t)
        s = np.concatenate(places)
        m, vl, vr = _simple(beam, i, s)
        x.append(beam.supports[i] + s)
        span.append(np.full(s.size, i, dtype=np.intp))
        free.append(m)
        left.append(vl)
        right.append(vr)
        unit = np.zeros((len(beam.redundants), s.size))
        slope = np.zeros((len(beam.redundants), s.size))
        for j, support in enumerate(beam.redundants):
            if support == i:
                unit[j], slope[j] = 1.0 - s / length, -1.0 / length
            elif support == i + 1:
                unit[j], slope[j] = s / length, 1.0 / length
        unit_parts.append(unit)
        slope_parts.append(slope)
        starts.append(count)
        count += s.size
    return Stations(
        beam, np.concatenate(x), np.concatenate(span), np.concatenate(free), np.concatenate(left),
        np.concatenate(right), np.concatenate(unit_parts, axis=1), np.concatenate(slope_parts, axis=1),
        (*starts, count),
    )  # fmt: skip


def _simple(beam: Beam, span: int, s: Array) -> tuple[Array, Array, Array]:
    """Moment of the loads on a simple span, and its slope just left and just right of each place."""
    length = beam.spans[span]
    moment, left, right = np.zeros(s.size), np.zeros(s.size), np.zeros(s.size)
    for load in beam.loads:
        if load.span != span:
            continue
        if load.uniform:
            moment += load.uniform * s * (length - s) / 2.0
            slope = load.uniform * (length / 2.0 - s)
            left += slope
            right += slope
        if load.point:
            a, b = load.at, length - load.at
            moment += load.point * np.where(s <= a, b * s, a * (length - s)) / length
            left += load.point * np.where(s <= a, b, -a) / length
            right += load.point * np.where(s < a, b, -a) / length
    return moment, left, right
