"""Exact properties of a section about its horizontal axis, straight from its parts' outlines."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import fsum

from fibremr.section.outline import Moments
from fibremr.section.parts import Section
from fibremr.solve.roots import find_root

STEEL_DENSITY = 7850.0  # kg/m3, EN 1991-1-1 Table A.4 (from memory)


@dataclass(frozen=True)
class Geometry:
    """Geometric properties about the horizontal axis; mm and its powers.

    `bottom` and `top` are the extreme heights in the section's own coordinates, `centroid` the height
    of the centroid there; moduli belong to the centroidal axis. `product` is the product moment of area
    about the centroid.
    """

    area: float
    bottom: float
    top: float
    centroid: float
    second_moment: float
    second_moment_side: float
    product: float

    @property
    def modulus_top(self) -> float:
        """Elastic modulus of the top edge [mm3]."""
        return self.second_moment / (self.top - self.centroid)

    @property
    def modulus_bottom(self) -> float:
        """Elastic modulus of the bottom edge [mm3]."""
        return self.second_moment / (self.centroid - self.bottom)


@dataclass(frozen=True)
class Plastic:
    """Full plasticity: height of the neutral axis [mm] in the section's coordinates and moment [Nmm].

    `moment` is positive and acts about the centroid; `modulus` [mm3] is the first moment of area about
    the neutral axis.
    """

    axis: float
    moment: float
    modulus: float


@dataclass(frozen=True)
class Elastic:
    """Elastic stiffness of a section whose parts may differ in modulus.

    `axial` [N] is the sum of E A; `axis` [mm] the height of the stiffness-weighted centroid above the
    geometric one; `bending` [N mm2] the bending stiffness at constant axial force.
    """

    axial: float
    axis: float
    bending: float


def total(section: Section) -> Moments:
    """Area and moments of the whole section about the origin."""
    parts = [part.moments for part in section.parts]
    return Moments(
        fsum(m.area for m in parts),
        fsum(m.first_v for m in parts),
        fsum(m.first_u for m in parts),
        fsum(m.second_vv for m in parts),
        fsum(m.second_uu for m in parts),
        fsum(m.second_vu for m in parts),
    )


def geometry(section: Section) -> Geometry:
    """Geometric properties of the section as it stands."""
    m = total(section)
    bottom, top = section.extent
    side, centroid = m.first_v / m.area, m.first_u / m.area
    return Geometry(
        area=m.area,
        bottom=bottom,
        top=top,
        centroid=centroid,
        second_moment=m.second_uu - m.area * centroid**2,
        second_moment_side=m.second_vv - m.area * side**2,
        product=m.second_vu - m.area * side * centroid,
    )


def elastic(section: Section, moduli: Sequence[float]) -> Elastic:
    """Elastic stiffness for the modulus of each part [MPa]."""
    centroid = geometry(section).centroid
    weighted = [p.moments.scaled(e) for p, e in zip(section.parts, moduli, strict=True)]
    axial = fsum(m.area for m in weighted)
    first = fsum(m.first_u for m in weighted)
    second = fsum(m.second_uu for m in weighted)
    axis = first / axial
    return Elastic(axial=axial, axis=axis - centroid, bending=second - axial * axis**2)


def squash(section: Section, yields: Sequence[float]) -> float:
    """Squash load [N]: the sum of area times yield strength [MPa] of each part."""
    return fsum(p.moments.area * fy for p, fy in zip(section.parts, yields, strict=True))


def plastic(section: Section, yields: Sequence[float], axial: float = 0.0, sense: int = 1) -> Plastic:
    """Full plasticity with an axial force [N, tension positive], for the yield strength of each part.

    `sense` +1 is sagging (the top compressed), -1 hogging. The neutral axis is where the stress blocks
    balance the axial force: equal areas when all parts have one strength and there is no axial force.

    Raises ValueError when the axial force reaches the squash load.
    """
    load = squash(section, yields)
    if abs(axial) >= load:
        raise ValueError(f"axial force {axial:g} N reaches the squash load {load:g} N")
    bottom, top = section.extent
    pairs = list(zip(section.parts, yields, strict=True))
    target = (load - sense * axial) / 2.0  # force of the blocks above the axis

    def excess(level: float) -> float:
        return fsum(fy * part.outline.above(level)[0] for part, fy in pairs) - target

    tolerance = 1e-13 * (top - bottom)
    axis = find_root(excess, bottom, top, tolerance=tolerance)
    centroid = geometry(section).centroid
    first_total = fsum(fy * (p.moments.first_u - axis * p.moments.area) for p, fy in pairs)
    first_above = fsum(fy * part.outline.above(axis)[1] for part, fy in pairs)
    # moment about the axis, then carried to the centroid with the axial force
    about_axis = 2.0 * first_above - first_total
    moment = about_axis - sense * axial * (axis - centroid)
    area_first = fsum(p.moments.first_u - axis * p.moments.area for p in section.parts)
    modulus = 2.0 * fsum(p.outline.above(axis)[1] for p in section.parts) - area_first
    return Plastic(axis=axis, moment=moment, modulus=modulus)
