"""Shapes drawn by the user: a round bar, plates placed freely, an outline with holes; all in mm."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from math import cos, sin

import numpy as np
from numpy.typing import NDArray

from fibremr.errors import ValueFault
from fibremr.section.outline import Outline, Point
from fibremr.section.parts import Part, Plate, Region, ring

Array = NDArray[np.float64]
Ring = tuple[Point, ...]

MOST_POINTS = 1000


@dataclass(frozen=True)
class RoundShape:
    """Solid round bar."""

    diameter: float


@dataclass(frozen=True)
class PlacedPlate:
    """A plate `width` long along `angle` [rad] from the y axis, about its `centre`; steel table."""

    width: float
    thickness: float
    centre: Point
    angle: float = 0.0
    steel: str = ""

    @property
    def plate(self) -> Plate:
        """The plate along its centre line, from left to right or from bottom to top."""
        v, u = self.width / 2.0 * cos(self.angle), self.width / 2.0 * sin(self.angle)
        y, z = self.centre
        return Plate((y - v, z - u), (y + v, z + u), self.thickness)


@dataclass(frozen=True)
class PlatesShape:
    """Plates that touch or stand apart, taken to bend as one section."""

    plates: tuple[PlacedPlate, ...]


@dataclass(frozen=True)
class OutlineShape:
    """A solid outline and the holes in it, as corners in either order."""

    points: Ring
    holes: tuple[Ring, ...] = ()

    @property
    def rings(self) -> tuple[Ring, ...]:
        """The outline and its holes."""
        return (self.points, *self.holes)


Drawn = RoundShape | PlatesShape | OutlineShape


def faults(shape: Drawn) -> Iterator[ValueFault]:
    """Everything about a drawn shape that cannot be, with the key it concerns."""
    if isinstance(shape, PlatesShape):
        for i, one in enumerate(shape.plates):
            for k, other in enumerate(shape.plates[:i]):
                if _gap(one.plate, other.plate) < -1e-6:
                    yield ValueFault(
                        f"this plate overlaps plate {k + 1}", key=f"part[{i}]",
                        allowed="plates that touch or stand apart",
                    )  # fmt: skip
    elif isinstance(shape, OutlineShape):
        keys = ["points", *(f"holes[{i}]" for i in range(len(shape.holes)))]
        sound = True
        for key, corners in zip(keys, shape.rings, strict=True):
            for fault in _ring_faults(key, corners):
                sound = False
                yield fault
        if sound:
            yield from _hole_faults(shape)


def parts(shape: Drawn) -> Iterator[Part]:
    """The parts of a drawn shape."""
    if isinstance(shape, RoundShape):
        radius = shape.diameter / 2.0
        yield Part("bar", ring(0.0, radius, (0.0, radius)), shape.diameter)
    elif isinstance(shape, PlatesShape):
        for i, p in enumerate(shape.plates):
            yield Part(f"plate {i + 1}", p.plate, p.thickness, p.steel)
    else:
        lines = Outline.polygon(_directed(shape.points, 1.0)).lines
        for hole in shape.holes:
            lines += Outline.polygon(_directed(hole, -1.0)).lines
        yield Part("outline", Region(Outline(lines)), inscribed(shape))


def inscribed(shape: OutlineShape) -> float:
    """Diameter [mm] of the largest circle in the material, to about a hundredth.

    Strength by thickness goes by it: where walls meet it exceeds their thickness, which is the safe side.
    """
    a, b = _segments(shape.rings)
    low, high = a.min(axis=0), a.max(axis=0)
    middle, reach = (low + high) / 2.0, (high - low) / 2.0
    best = 0.0
    for _ in range(8):
        steps = np.linspace(-1.0, 1.0, 41)
        grid = np.stack(np.meshgrid(*(middle[i] + reach[i] * steps for i in (0, 1))), axis=-1).reshape(-1, 2)
        depth = np.where(_inside(grid, a, b), _distance(grid, a, b), -1.0)
        at = int(np.argmax(depth))
        if depth[at] > best:
            best, middle = float(depth[at]), grid[at]
        reach = reach / 5.0
    return 2.0 * best


def _ring_faults(key: str, corners: Ring) -> Iterator[ValueFault]:
    if len(corners) < 3:
        yield ValueFault("an outline has three corners or more", key=key, allowed="[[y, z], ...]")
        return
    if len(corners) > MOST_POINTS:
        yield ValueFault("too many corners", key=key, allowed=f"up to {MOST_POINTS}")
        return
    a, b = _segments((corners,))
    short = np.flatnonzero(np.hypot(*(b - a).T) < 1e-6)
    if short.size:
        yield ValueFault(f"corner {(short[0] + 1) % len(corners) + 1} repeats the one before it", key=key)
        return
    crossed = _meetings(a, b, a, b)
    count = len(corners)
    one, other = np.indices(crossed.shape)
    apart = np.minimum((one - other) % count, (other - one) % count)
    pairs = np.argwhere(crossed & (apart > 1) & (one < other))
    if pairs.size:
        first, second = pairs[0] + 1
        yield ValueFault(
            f"the outline crosses or touches itself: the edges after corners {first} and {second}", key=key,
            allowed="corners in order around the outline",
        )  # fmt: skip
        return
    size = float(np.ptp(a, axis=0).max())
    if abs(_signed_area(corners)) < 1e-9 * size**2:
        yield ValueFault("the outline encloses no area", key=key)


def _hole_faults(shape: OutlineShape) -> Iterator[ValueFault]:
    for i, hole in enumerate(shape.holes):
        key = f"holes[{i}]"
        a, b = _segments((hole,))
        for k, other in enumerate((shape.points, *shape.holes[:i])):
            c, d = _segments((other,))
            within, around = bool(_inside(a[:1], c, d)[0]), bool(_inside(c[:1], a, b)[0])
            apart = within if k == 0 else not within and not around
            if not apart or _meetings(a, b, c, d).any():
                yield ValueFault(
                    "this hole is not within the outline" if k == 0 else f"this hole meets hole {k}", key=key,
                    allowed="holes within the outline and apart from each other",
                )  # fmt: skip
                break


def _signed_area(corners: Ring) -> float:
    a, b = _segments((corners,))
    return float(np.sum(a[:, 0] * b[:, 1] - b[:, 0] * a[:, 1])) / 2.0


def _directed(corners: Ring, sign: float) -> Ring:
    """Corners anticlockwise for a positive sign, clockwise for a negative one."""
    return corners if sign * _signed_area(corners) > 0.0 else corners[::-1]


def _segments(rings: Sequence[Ring]) -> tuple[Array, Array]:
    """Starts and ends of all edges, each `(edge, 2)`."""
    starts = [np.array(r, dtype=np.float64) for r in rings]
    return np.concatenate(starts), np.concatenate([np.roll(s, -1, axis=0) for s in starts])


def _cross(a: Array, b: Array) -> Array:
    return np.asarray(a[..., 0] * b[..., 1] - a[..., 1] * b[..., 0], dtype=np.float64)


def _meetings(a: Array, b: Array, c: Array, d: Array) -> NDArray[np.bool_]:
    """Which edges a-b meet which edges c-d, touching included: `(first, second)`."""
    size = max(float(np.ptp(np.concatenate([a, c]), axis=0).max()), 1e-300)
    tiny = 1e-12 * size**2
    a, b, c, d = a[:, None], b[:, None], c[None, :], d[None, :]
    sides = [_cross(b - a, c - a), _cross(b - a, d - a), _cross(d - c, a - c), _cross(d - c, b - c)]
    s1, s2, s3, s4 = (np.where(np.abs(s) < tiny, 0.0, np.sign(s)) for s in sides)
    boxes = np.all(
        (np.minimum(a, b) <= np.maximum(c, d) + 1e-9) & (np.minimum(c, d) <= np.maximum(a, b) + 1e-9), axis=-1
    )
    return np.asarray((s1 * s2 <= 0.0) & (s3 * s4 <= 0.0) & boxes)


def _inside(points: Array, a: Array, b: Array) -> NDArray[np.bool_]:
    """Whether points lie in the region with these edges, by the parity of crossings to the right."""
    v, u = points[:, None, 0], points[:, None, 1]
    spans = (a[:, 1] > u) != (b[:, 1] > u)
    rise = np.where(a[:, 1] == b[:, 1], 1.0, b[:, 1] - a[:, 1])
    crossing = a[:, 0] + (u - a[:, 1]) * (b[:, 0] - a[:, 0]) / rise
    return np.asarray((spans & (v < crossing)).sum(axis=1) % 2 == 1)


def _distance(points: Array, a: Array, b: Array) -> Array:
    """Distance from points to the nearest edge [mm]."""
    along = b - a
    share = ((points[:, None] - a) * along).sum(axis=-1) / (along**2).sum(axis=-1)
    nearest = a + np.clip(share, 0.0, 1.0)[..., None] * along
    return np.asarray(np.hypot(*np.moveaxis(points[:, None] - nearest, -1, 0)).min(axis=1))


def apart(shape: PlatesShape) -> list[int]:
    """The plates, counted from 1, that touch no other one."""
    plates = [p.plate for p in shape.plates]
    return [
        i + 1
        for i, one in enumerate(plates)
        if len(plates) > 1 and all(_gap(one, other) > 0.5 for other in plates if other is not one)
    ]


def _gap(one: Plate, other: Plate) -> float:
    """How far two plates stand apart [mm], across the edge that separates them best; negative: overlap."""
    corners = [
        np.array([p.point(at, side) for at in (0.0, 1.0) for side in (-1.0, 1.0)]) for p in (one, other)
    ]
    gaps = []
    for ev, eu in (one.along, other.along):
        for axis in (np.array([ev, eu]), np.array([-eu, ev])):
            first, second = (c @ axis for c in corners)
            gaps += [second.min() - first.max(), first.min() - second.max()]
    return float(max(gaps))
