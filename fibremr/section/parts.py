"""A section as a list of parts: flat plates, and regions of any outline (fillets, corners, tubes).

Coordinates: v to the right, u upwards, in mm. A section is bent about the horizontal axis as it
stands; to bend it about another axis it is turned first.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from math import cos, hypot, pi, sin
from typing import TYPE_CHECKING

from fibremr.section.outline import Arc, Line, Moments, Outline, Point

if TYPE_CHECKING:
    from fibremr.section.shapes import Shape


@dataclass(frozen=True)
class Plate:
    """A flat plate along its centre line from `start` to `end`, with a thickness; all in mm."""

    start: Point
    end: Point
    thickness: float

    @property
    def length(self) -> float:
        """Length along the centre line [mm]."""
        return hypot(self.end[0] - self.start[0], self.end[1] - self.start[1])

    @property
    def along(self) -> tuple[float, float]:
        """Unit vector (v, u) from start to end."""
        length = self.length
        return (self.end[0] - self.start[0]) / length, (self.end[1] - self.start[1]) / length

    def point(self, at: float, side: float) -> Point:
        """The point at a share `at` of the length, `side` times half the thickness to the left."""
        ev, eu = self.along
        half = side * self.thickness / 2.0
        return (
            self.start[0] + at * (self.end[0] - self.start[0]) - half * eu,
            self.start[1] + at * (self.end[1] - self.start[1]) + half * ev,
        )

    def outline(self) -> Outline:
        """The four edges."""
        return Outline.polygon([self.point(0, -1), self.point(1, -1), self.point(1, 1), self.point(0, 1)])

    def turned(self, angle: float) -> Plate:
        """Turned anticlockwise about the origin [rad]."""
        return replace(self, start=_turned(self.start, angle), end=_turned(self.end, angle))


@dataclass(frozen=True)
class Region:
    """A region of any outline, such as a root fillet, the corner of a box or a tube."""

    boundary: Outline

    def outline(self) -> Outline:
        """Its boundary."""
        return self.boundary

    def turned(self, angle: float) -> Region:
        """Turned anticlockwise about the origin [rad]."""
        return Region(self.boundary.turned(angle))


@dataclass(frozen=True)
class Part:
    """One part of a section.

    `steel` names the table [steel.<name>] that it is made of, empty for [steel] itself; `thickness` [mm]
    is what its strength is read by. A part that fills the corner between others (a root fillet) names
    in `joins` these parts and the share of their length at which it sits: it has no residual stress
    pattern of its own and takes the mean of theirs there.
    """

    name: str
    body: Plate | Region
    thickness: float
    steel: str = ""
    joins: tuple[tuple[str, float], ...] = ()

    @cached_property
    def outline(self) -> Outline:
        """The boundary of the part."""
        return self.body.outline()

    @cached_property
    def moments(self) -> Moments:
        """Area and moments about the origin, exact."""
        return self.outline.moments()

    @cached_property
    def extent(self) -> tuple[float, float]:
        """Lowest and highest u [mm]."""
        return self.outline.extent()


@dataclass(frozen=True)
class Section:
    """A cross-section: a name, its parts, and the shape with dimensions that it was built from.

    `one_piece` is true for rolled, extruded or solid sections, whose strength goes by their thickest
    part as a whole; the plates of a built-up section go by their own thickness.
    """

    name: str
    parts: tuple[Part, ...]
    shape: Shape
    one_piece: bool
    source: str
    mass_kg_per_m: float | None = None

    def turned(self, angle: float) -> Section:
        """The section turned anticlockwise about the origin [rad]."""
        if angle == 0.0:
            return self
        return replace(self, parts=tuple(replace(p, body=p.body.turned(angle)) for p in self.parts))

    @property
    def extent(self) -> tuple[float, float]:
        """Lowest and highest u [mm]."""
        return min(p.extent[0] for p in self.parts), max(p.extent[1] for p in self.parts)

    def part(self, name: str) -> Part:
        """The part of that name; KeyError if there is none."""
        for part in self.parts:
            if part.name == name:
                return part
        raise KeyError(name)


def fillet(corner: Point, radius: float, angle: float) -> Region:
    """A quarter-circle root fillet of a radius [mm] in a right-angled corner.

    The corner's edges leave `corner` at `angle` and at `angle` + 90 degrees [rad].
    """
    e1 = (cos(angle), sin(angle))
    e2 = (-sin(angle), cos(angle))
    first = (corner[0] + radius * e1[0], corner[1] + radius * e1[1])
    last = (corner[0] + radius * e2[0], corner[1] + radius * e2[1])
    centre = (first[0] + radius * e2[0], first[1] + radius * e2[1])
    lines = Outline.polygon([corner, first, last]).lines
    arc = Arc(centre[0], centre[1], radius, angle - pi / 2.0, angle - pi)
    return Region(Outline((lines[0], lines[2]), (arc,)))


def ring(inner: float, outer: float, centre: Point = (0.0, 0.0)) -> Region:
    """A full ring between two radii [mm]; a solid disc for an inner radius of zero."""
    arcs = [Arc(centre[0], centre[1], outer, 0.0, 2.0 * pi)]
    if inner > 0.0:
        arcs.append(Arc(centre[0], centre[1], inner, 2.0 * pi, 0.0))
    return Region(Outline((), tuple(arcs)))


def box_corner(
    corner: Point, angle: float, *, first: float, second: float, outer: float, inner: float
) -> Region:
    """The corner of a hollow section, as far as its two arcs reach.

    `corner` is where the outer faces would meet; they leave it at `angle` and at `angle` + 90 degrees
    [rad]. `first` is the thickness of the wall along the first face, `second` of the wall along the
    other one; `outer` and `inner` are the radii of the two arcs, which need not be concentric. All in mm.
    """
    e1 = (cos(angle), sin(angle))
    e2 = (-sin(angle), cos(angle))

    def at(x: float, y: float) -> Point:
        return corner[0] + x * e1[0] + y * e2[0], corner[1] + x * e1[1] + y * e2[1]

    reach_1, reach_2 = corner_reach(first, second, outer, inner)
    lines: list[Line] = []
    arcs = []

    def line(a: tuple[float, float], b: tuple[float, float]) -> None:
        if a != b:
            lines.extend(Outline.polygon([at(*a), at(*b)]).lines[:1])

    line((outer, 0.0), (reach_1, 0.0))
    line((reach_1, 0.0), (reach_1, first))
    line((reach_1, first), (second + inner, first))
    if inner > 0.0:
        centre = at(second + inner, first + inner)
        arcs.append(Arc(*centre, inner, angle - pi / 2.0, angle - pi))
    line((second, first + inner), (second, reach_2))
    line((second, reach_2), (0.0, reach_2))
    line((0.0, reach_2), (0.0, outer))
    if outer > 0.0:
        arcs.append(Arc(*at(outer, outer), outer, angle - pi, angle - pi / 2.0))
    return Region(Outline(tuple(lines), tuple(arcs)))


def corner_reach(first: float, second: float, outer: float, inner: float) -> tuple[float, float]:
    """How far a box corner extends along its two faces [mm]."""
    return max(outer, second + inner), max(outer, first + inner)


def _turned(point: Point, angle: float) -> Point:
    c, s = cos(angle), sin(angle)
    return point[0] * c - point[1] * s, point[0] * s + point[1] * c
