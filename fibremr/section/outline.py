"""Closed boundaries of straight lines and circular arcs, and exact integrals over what they enclose.

Everything rests on Green's theorem: for a function f(u) with antiderivative F, the integral of f over
the region is minus the integral of F(u) dv along its boundary, taken anticlockwise. Along a line u is
linear, along an arc it is a sine, so each integral is in closed form, also for the part of the region
above a level, with holes or several pieces, without any clipping of shapes.

Coordinates are v to the right and u upwards, in mm.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from math import asin, cos, pi, sin

Point = tuple[float, float]


@dataclass(frozen=True)
class Line:
    """A straight piece of boundary from (v1, u1) to (v2, u2) [mm]."""

    v1: float
    u1: float
    v2: float
    u2: float


@dataclass(frozen=True)
class Arc:
    """A circular piece of boundary: centre [mm], radius [mm], from angle `start` to `end` [rad].

    Angles count anticlockwise from the v axis; `end` below `start` means that it is run clockwise.
    """

    v: float
    u: float
    radius: float
    start: float
    end: float


@dataclass(frozen=True)
class Moments:
    """Integrals over a region: area [mm2], first [mm3] and second [mm4] moments about the origin."""

    area: float
    first_v: float
    first_u: float
    second_vv: float
    second_uu: float
    second_vu: float

    def __add__(self, other: Moments) -> Moments:
        return Moments(
            self.area + other.area,
            self.first_v + other.first_v,
            self.first_u + other.first_u,
            self.second_vv + other.second_vv,
            self.second_uu + other.second_uu,
            self.second_vu + other.second_vu,
        )

    def scaled(self, factor: float) -> Moments:
        """All integrals times a factor (a modulus, say)."""
        return Moments(
            self.area * factor,
            self.first_v * factor,
            self.first_u * factor,
            self.second_vv * factor,
            self.second_uu * factor,
            self.second_vu * factor,
        )


@dataclass(frozen=True)
class Outline:
    """A region given by its boundary, anticlockwise around material, clockwise around holes."""

    lines: tuple[Line, ...]
    arcs: tuple[Arc, ...] = ()

    @staticmethod
    def polygon(points: Iterable[Point]) -> Outline:
        """A polygon from its corners [mm], anticlockwise."""
        corners = list(points)
        return Outline(tuple(Line(*a, *b) for a, b in zip(corners, corners[1:] + corners[:1], strict=True)))

    def turned(self, angle: float) -> Outline:
        """The region turned anticlockwise about the origin [rad]."""
        c, s = cos(angle), sin(angle)
        return Outline(
            tuple(
                Line(l.v1 * c - l.u1 * s, l.v1 * s + l.u1 * c, l.v2 * c - l.u2 * s, l.v2 * s + l.u2 * c)
                for l in self.lines
            ),
            tuple(
                Arc(a.v * c - a.u * s, a.v * s + a.u * c, a.radius, a.start + angle, a.end + angle)
                for a in self.arcs
            ),
        )

    def above(self, level: float) -> tuple[float, float, float]:
        """Integrals over the part with u > level: area, first and second moment about that level.

        In mm2, mm3 and mm4.
        """
        area = first = second = 0.0
        for line in self.lines:
            h1, h2 = line.u1 - level, line.u2 - level
            if h1 <= 0.0 and h2 <= 0.0:
                continue
            dv = line.v2 - line.v1
            if h1 < 0.0:
                dv *= h2 / (h2 - h1)
                h1 = 0.0
            elif h2 < 0.0:
                dv *= h1 / (h1 - h2)
                h2 = 0.0
            area -= dv * (h1 + h2) / 2.0
            first -= dv * (h1 * h1 + h1 * h2 + h2 * h2) / 6.0
            second -= dv * (h1 + h2) * (h1 * h1 + h2 * h2) / 12.0
        for arc in self.arcs:
            b, r = arc.u - level, arc.radius
            for start, end in _ranges_above(arc, level):
                j1, j2, j3, j4 = _sine_powers(start, end)
                area += r * (b * j1 + r * j2)
                first += r * (b * b * j1 + 2.0 * b * r * j2 + r * r * j3) / 2.0
                second += r * (b**3 * j1 + 3.0 * b * b * r * j2 + 3.0 * b * r * r * j3 + r**3 * j4) / 3.0
        return area, first, second

    def _upright(self) -> tuple[float, float, float]:
        """Area, first and second moment in u about the origin, of the whole region."""
        low = self.extent()[0] - 1.0
        area, first, second = self.above(low)
        return area, first + low * area, second + 2.0 * low * first + low * low * area

    def moments(self) -> Moments:
        """Area, first and second moments about the origin, in closed form."""
        area, first_u, second_uu = self._upright()
        _, first_v, second_vv = self.turned(pi / 2.0)._upright()
        diagonal = self.turned(pi / 4.0)._upright()[2]
        product = diagonal - (second_vv + second_uu) / 2.0
        return Moments(area, first_v, first_u, second_vv, second_uu, product)

    def extent(self) -> tuple[float, float]:
        """Lowest and highest u of the region [mm]."""
        heights = [h for l in self.lines for h in (l.u1, l.u2)]
        for a in self.arcs:
            low, high = min(a.start, a.end), max(a.start, a.end)
            heights += [a.u + a.radius * sin(low), a.u + a.radius * sin(high)]
            for turn in range(-3, 4):
                if low <= pi / 2.0 + 2.0 * pi * turn <= high:
                    heights.append(a.u + a.radius)
                if low <= -pi / 2.0 + 2.0 * pi * turn <= high:
                    heights.append(a.u - a.radius)
        return min(heights), max(heights)


def _sine_powers(start: float, end: float) -> tuple[float, float, float, float]:
    """Integrals of sin, sin2, sin3 and sin4 between two angles."""

    def primitives(x: float) -> tuple[float, float, float, float]:
        c = cos(x)
        s2 = sin(2.0 * x)
        return (
            -c,
            x / 2.0 - s2 / 4.0,
            -c + c**3 / 3.0,
            3.0 * x / 8.0 - s2 / 4.0 + sin(4.0 * x) / 32.0,
        )

    a, b = primitives(start), primitives(end)
    return b[0] - a[0], b[1] - a[1], b[2] - a[2], b[3] - a[3]


def _ranges_above(arc: Arc, level: float) -> list[tuple[float, float]]:
    """The pieces of an arc, as angles in its own direction, that lie above a level."""
    s = (level - arc.u) / arc.radius
    if s <= -1.0:
        return [(arc.start, arc.end)]
    if s >= 1.0:
        return []
    rise = asin(s)
    low, high = min(arc.start, arc.end), max(arc.start, arc.end)
    cuts = {low, high}
    for turn in range(-3, 4):
        for angle in (rise + 2.0 * pi * turn, pi - rise + 2.0 * pi * turn):
            if low < angle < high:
                cuts.add(angle)
    ordered = sorted(cuts)
    kept = [(a, b) for a, b in zip(ordered, ordered[1:], strict=False) if sin((a + b) / 2.0) > s]
    return kept if arc.end >= arc.start else [(b, a) for a, b in reversed(kept)]
