"""The points of a section at which stress and strain can be extreme: the edges of its parts."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import cos, pi, sin

import numpy as np

from fibremr.section.mesh import Points
from fibremr.section.outline import Outline, Point
from fibremr.section.parts import Plate, Section


def edge_points(section: Section, breaks: Mapping[str, Sequence[float]] | None = None) -> Points:
    """Edges of all parts, of no area: corners, where an arc turns level, and where a pattern breaks.

    A strain that is linear over the section, plus an initial strain that is linear between `breaks`
    along a plate and constant through it, is extreme at one of these points.
    """
    v, u, index, at = [], [], [], []
    for i, part in enumerate(section.parts):
        if isinstance(part.body, Plate):
            shares = (0.0, *((breaks or {}).get(part.name, ())), 1.0)
            found = [(part.body.point(s, side), s) for s in shares for side in (-1.0, 1.0)]
        else:
            found = [(point, 0.5) for point in _corners(part.outline)]
        for point, share in found:
            v.append(point[0])
            u.append(point[1])
            index.append(i)
            at.append(share)
    return Points(np.array(v), np.array(u), np.zeros(len(u)), np.array(index, dtype=np.intp), np.array(at))


def _corners(outline: Outline) -> list[Point]:
    points = [(l.v1, l.u1) for l in outline.lines]
    for arc in outline.arcs:
        low, high = min(arc.start, arc.end), max(arc.start, arc.end)
        turns = [k * pi / 2.0 for k in range(-12, 13) if low < k * pi / 2.0 < high]
        points += [(arc.v + arc.radius * cos(x), arc.u + arc.radius * sin(x)) for x in (low, *turns, high)]
    return points
