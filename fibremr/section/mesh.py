"""Fibres: a section cut into small cells, each represented by points that keep its moments exact.

A cell of area A, centroid c and second moments about its centroid is replaced by four points of area
A/4 at c +- r1 e1 +- r2 e2, with e the principal directions of the cell and r its radii of gyration.
Area, first and second moments of the section are then exact however few cells there are (for a
rectangle these are the two-point Gauss positions), and only the place of a yield front within a cell
is approximate.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from math import ceil, pi, sqrt

import numpy as np
from numpy.typing import NDArray

from fibremr.section.outline import Outline
from fibremr.section.parts import Part, Plate, Section

Array = NDArray[np.float64]

# (part, width of a front crossing it [mm]) -> height of a cell at density 1, see `cell_height`
FRONT_ERROR = 0.03  # largest error of two Gauss points for a kink inside a cell, of width x cell height^2


@dataclass(frozen=True)
class Points:
    """Points of a section, each of shape (n,): v, u [mm], area [mm2], part index, share of its length."""

    v: Array
    u: Array
    area: Array
    part: NDArray[np.intp]
    at: Array


def cell_height(target: float, modulus: float, width: float) -> float:
    """Height of cell [mm] that keeps a yield front of that width [mm] within a target, as a share of Mp.

    `modulus` is the plastic modulus [mm3]. Four fronts are taken to err to the same side.
    """
    return sqrt(target * modulus / (4.0 * FRONT_ERROR * width))


def points(
    section: Section,
    *,
    modulus: float,
    target: float,
    focus: float,
    breaks: Mapping[str, Sequence[float]] | None = None,
    across: int = 1,
) -> Points:
    """Points of a section for bending about its horizontal axis.

    `target` is the error of the moment aimed at, as a share of the plastic moment, and `modulus` the
    plastic modulus [mm3]. Cells shrink towards the height `focus` [mm], the plastic neutral axis, where
    the last elastic core lies. `breaks` names the parts with a residual stress that changes along them
    and where its slope jumps (shares of the length); each stretch between breaks gets at least `across`
    cells along the plate.
    """
    bottom, top = section.extent
    # a core of depth d is met by cells of a quarter of d, down to a four-thousandth of the depth
    shares = 2.0 ** (-np.arange(10, 37) / 3.0)
    levels = [focus, *(focus + (top - bottom) * np.concatenate([shares, -shares]))]
    pieces = []
    for index, part in enumerate(section.parts):
        if isinstance(part.body, Plate):
            stretches = None if breaks is None else breaks.get(part.name)
            v, u, area, at = _plate(part.body, modulus, target, levels, stretches, across)
        else:
            v, u, area = _region(part, modulus, target, levels)
            at = np.full_like(u, 0.5)
        pieces.append((v, u, area, np.full(u.shape, index, dtype=np.intp), at))
    columns = [np.concatenate(column) for column in zip(*pieces, strict=True)]
    return Points(*columns)


def _plate(
    plate: Plate,
    modulus: float,
    target: float,
    levels: Sequence[float],
    breaks: Sequence[float] | None,
    across: int,
) -> tuple[Array, Array, Array, Array]:
    length, thickness = plate.length, plate.thickness
    ev, eu = plate.along
    rise_along, rise_through = length * abs(eu), thickness * abs(ev)
    area = length * thickness
    graded_along: list[float] = []
    graded_through: list[float] = []
    if rise_along > rise_through:
        n_along = ceil(rise_along / cell_height(target, modulus, area / rise_along))
        n_through = max(1, ceil(rise_through / cell_height(target, modulus, length)))
        if rise_through < 1e-9 * rise_along:
            graded_along = [(u - plate.start[1]) / (length * eu) for u in levels]
    else:
        # where residual stress varies along the plate it yields in patches, and layers count for less
        share = target if breaks is None else 4.0 * target
        n_through = ceil(rise_through / cell_height(share, modulus, area / rise_through))
        n_along = max(1, ceil(rise_along / cell_height(target, modulus, thickness)))
        if rise_along < 1e-9 * rise_through:
            graded_through = [0.5 + (u - plate.start[1]) / (thickness * ev) for u in levels]
    s, ws = _gauss(_cells(n_along, breaks or (), graded_along, across if breaks is not None else 1))
    t, wt = _gauss(_cells(n_through, (), graded_through, 1))
    sv, su = plate.start
    at = np.repeat(s, t.size)
    through = np.tile(t - 0.5, s.size) * thickness
    v = sv + at * length * ev - through * eu
    u = su + at * length * eu + through * ev
    return v, u, (np.outer(ws, wt) * area).ravel(), at


def _cells(count: int, breaks: Sequence[float], graded: Sequence[float], least: int) -> Array:
    """Bounds of cells over a length of one: even, between breaks at least so many, and at graded places."""
    edges = [0.0, *sorted(b for b in breaks if 0.0 < b < 1.0), 1.0]
    even = [
        np.linspace(a, b, max(ceil(count * (b - a)), least), endpoint=False)
        for a, b in zip(edges, edges[1:], strict=False)
    ]
    inside = np.array([g for g in graded if 1e-9 < g < 1.0 - 1e-9])
    bounds = np.unique(np.concatenate([*even, inside, np.ones(1)]))
    kept = np.concatenate([[True], np.diff(bounds) > 1e-12])
    return np.asarray(bounds[kept], dtype=np.float64)


def _gauss(bounds: Array) -> tuple[Array, Array]:
    """Two Gauss points in each cell and their weights."""
    step = np.diff(bounds)
    middle = bounds[:-1] + step / 2.0
    reach = 0.5 / sqrt(3.0) * step
    return np.concatenate([middle - reach, middle + reach]), np.concatenate([step, step]) / 2.0


def _region(part: Part, modulus: float, target: float, levels: Sequence[float]) -> tuple[Array, Array, Array]:
    """Points of a region cut into strips across u; strips are denser where its outline runs level."""
    outline = part.outline
    turns = _levels(outline)
    total = part.moments.area
    cells = []
    for low, high in zip(turns, turns[1:], strict=False):
        slice_area = outline.above(low)[0] - outline.above(high)[0]
        if slice_area <= 1e-14 * total:
            continue
        width = slice_area / (high - low)
        count = max(2, ceil(1.5 * (high - low) / cell_height(target, modulus, width)))
        bounds = (low + high) / 2 - (high - low) / 2 * np.cos(np.arange(count + 1) * pi / count)
        bounds[0], bounds[-1] = low, high
        graded = [u for u in levels if low + 1e-6 * (high - low) < u < high - 1e-6 * (high - low)]
        bounds = np.unique(np.concatenate([bounds, graded]))
        bounds = bounds[np.concatenate([[True], np.diff(bounds) > 1e-9 * (high - low)])]
        bounds[-1] = high
        cells.append(_strips(outline, bounds))
    area, mean_v, mean_u, vv, uu, vu = (np.concatenate(c) for c in zip(*cells, strict=True))
    # principal radii of gyration of each cell, and its four points
    half_trace = (vv + uu) / 2.0
    half_gap = np.sqrt(((vv - uu) / 2.0) ** 2 + vu**2)
    r1, r2 = np.sqrt(half_trace + half_gap), np.sqrt(np.maximum(half_trace - half_gap, 0.0))
    turn = 0.5 * np.arctan2(2.0 * vu, vv - uu)
    c, s = np.cos(turn), np.sin(turn)
    v = np.concatenate([mean_v + a * r1 * c - b * r2 * s for a in (-1, 1) for b in (-1, 1)])
    u = np.concatenate([mean_u + a * r1 * s + b * r2 * c for a in (-1, 1) for b in (-1, 1)])
    return v, u, np.tile(area / 4.0, 4)


def _levels(outline: Outline) -> list[float]:
    """Heights between which the outline crosses every level with the same edges, without a turn."""
    found = [h for l in outline.lines for h in (l.u1, l.u2)]
    for arc in outline.arcs:
        single = Outline((), (arc,))
        found += [*single.extent(), *(arc.u + arc.radius * np.sin(x) for x in (arc.start, arc.end))]
    low, high = min(found), max(found)
    kept = [low]
    for level in sorted(found):
        if level - kept[-1] > 1e-9 * (high - low):
            kept.append(float(level))
    return kept


_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)


def _strips(outline: Outline, bounds: Array) -> tuple[Array, Array, Array, Array, Array, Array]:
    """Cells between neighbouring levels: area, centroid and second moments about it, per unit area.

    Integrated across the height with a substitution that takes out the square roots of an arc that
    turns level at a bound, so that twelve points reach rounding. Each chord makes a cell of its own.
    """
    low, high = bounds[:-1, None], bounds[1:, None]
    angle = (_NODES + 1.0) * pi / 2.0
    height = (low + high) / 2.0 - (high - low) / 2.0 * np.cos(angle)
    weight = (high - low) / 2.0 * np.sin(angle) * _WEIGHTS * pi / 2.0
    crossings = []
    middle = (bounds[0] + bounds[-1]) / 2.0
    for line in outline.lines:
        if min(line.u1, line.u2) <= middle <= max(line.u1, line.u2) and line.u1 != line.u2:
            crossings.append(line.v1 + (height - line.u1) * (line.v2 - line.v1) / (line.u2 - line.u1))
    for arc in outline.arcs:
        if abs(middle - arc.u) >= arc.radius:
            continue
        half = np.sqrt(np.maximum(arc.radius**2 - (height - arc.u) ** 2, 0.0))
        rise = float(np.arcsin((middle - arc.u) / arc.radius))
        first, last = min(arc.start, arc.end), max(arc.start, arc.end)
        for turn in range(-3, 4):
            if first <= rise + 2.0 * pi * turn <= last:
                crossings.append(arc.v + half)
            if first <= pi - rise + 2.0 * pi * turn <= last:
                crossings.append(arc.v - half)
    chords = np.sort(np.stack(crossings), axis=0)
    left, right = chords[0::2], chords[1::2]
    width = right - left
    mean = (left + right) / 2.0
    dA = width * weight
    area = dA.sum(axis=-1)
    mean_v = (mean * dA).sum(axis=-1) / area
    mean_u = (height * dA).sum(axis=-1) / area
    dv, du = mean - mean_v[..., None], height - mean_u[..., None]
    vv = ((dv**2 + width**2 / 12.0) * dA).sum(axis=-1) / area
    uu = (du**2 * dA).sum(axis=-1) / area
    vu = (dv * du * dA).sum(axis=-1) / area
    return (area.ravel(), mean_v.ravel(), mean_u.ravel(), vv.ravel(), uu.ravel(), vu.ravel())


def merged(
    u: Array, area: Array, strain: Array, kind: NDArray[np.intp]
) -> tuple[Array, Array, Array, NDArray[np.intp]]:
    """Fibres that bend alike made one: same height, same initial strain, same kind of steel.

    Returns u, area, strain and kind, sorted by kind and height. Lossless for bending about the
    horizontal axis, and a symmetric section has a quarter of its points left.
    """
    scale = max(float(np.ptp(u)), 1e-300)
    keys = np.stack(
        [kind, np.round(u / scale * 1e9).astype(np.intp), np.round(strain * 1e13).astype(np.intp)], axis=1
    )
    _, first, inverse = np.unique(keys, axis=0, return_index=True, return_inverse=True)
    summed: Array = np.asarray(np.bincount(inverse.ravel(), weights=area), dtype=np.float64)
    kept = np.asarray(first, dtype=np.intp)
    return u[kept], summed, strain[kept], kind[kept]
