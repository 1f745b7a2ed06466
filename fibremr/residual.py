"""Residual-stress patterns over a section's parts, and their balance.

A pattern gives stresses along the plates of a section, constant through their thickness; parts that
fill the corners take the mean of what they join. The stresses enter as initial strains. What they lack
for equilibrium is removed by the plane of strain that a free section would take up by itself.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import ClassVar, Protocol

import numpy as np
from numpy.typing import NDArray

from fibremr.errors import ValueFault, closest
from fibremr.section.edges import edge_points
from fibremr.section.mesh import Points as SectionPoints
from fibremr.section.parts import Plate, Section
from fibremr.section.shapes import IShape

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Along:
    """Stress along a plate, straight between points: shares of its length (rising), stress [MPa].

    Beyond its first and last point the end values hold.
    """

    at: tuple[float, ...]
    stress: tuple[float, ...]

    def __call__(self, at: Array) -> Array:
        """Stress at shares of the length [MPa]."""
        return np.asarray(np.interp(at, self.at, self.stress))


class Pattern(Protocol):
    """A residual-stress pattern.

    `name` as in the case file; `form`, `source` and `validity` in words. `over` gives the stresses of the
    parts that have any, by name, and raises ValueFault when the pattern does not apply to the section.
    """

    name: ClassVar[str]
    form: ClassVar[str]
    source: ClassVar[str]
    validity: ClassVar[str]

    def over(self, section: Section) -> Mapping[str, Along]:
        """Stress along each part that has any [MPa, tension positive]."""
        ...


@dataclass(frozen=True)
class EccsRolled:
    """Straight-line pattern of rolled I and H sections, the same for all grades.

    Flanges: tips compressed, middle in tension; web: middle compressed, ends in tension; peaks of 0.3
    times 235 MPa for sections deeper than 1.2 times their width, 0.5 times otherwise.
    """

    name: ClassVar[str] = "ECCS rolled"
    form: ClassVar[str] = (
        "straight lines: flange tips and middle of the web -p, flange middles and web ends +p, "
        "p = 0.3 x 235 MPa for h/b > 1.2 and 0.5 x 235 MPa otherwise, whatever the grade"
    )
    source: ClassVar[str] = "ECCS Manual on Stability (1976) and ECCS publication 33 (1984), from memory"
    validity: ClassVar[str] = "rolled I and H sections with two equal flanges"

    def over(self, section: Section) -> Mapping[str, Along]:
        """Stress along flanges and web [MPa]."""
        shape = section.shape
        if not isinstance(shape, IShape) or not shape.symmetric:
            raise ValueFault(
                f"the pattern is one of rolled I and H sections with equal flanges, not of {section.name}",
                key="pattern",
                allowed="points, or none",
            )
        peak = 235.0 * (0.5 if shape.height <= 1.2 * shape.top_flange.width else 0.3)
        flange = Along((0.0, 0.5, 1.0), (-peak, peak, -peak))
        web = Along((0.0, 0.5, 1.0), (peak, -peak, peak))
        return {"top flange": flange, "bottom flange": flange, "web": web}


@dataclass(frozen=True)
class PointStress:
    """One point of a pattern of the user's own: part, share of its length, stress [MPa]."""

    part: str
    at: float
    stress: float


@dataclass(frozen=True)
class Points:
    """A pattern of the user's own: stresses at points along the parts, straight between them."""

    points: tuple[PointStress, ...]
    name: ClassVar[str] = "points"
    form: ClassVar[str] = "straight between the points given along each part, constant through its thickness"
    source: ClassVar[str] = "given in the case"
    validity: ClassVar[str] = "any section made of plates"

    def faults(self, section: Section) -> Iterator[ValueFault]:
        """Every point that the section has no place for."""
        plates = [p.name for p in section.parts if isinstance(p.body, Plate)]
        seen = set()
        for i, point in enumerate(self.points):
            if point.part not in plates:
                yield ValueFault(
                    f"{section.name} has no plate of that name",
                    key=f"point[{i}].part",
                    allowed=", ".join(plates) or "none: this section has no plates",
                    suggestion=closest(point.part, plates),
                    code="unknown-name",
                )
            elif (point.part, point.at) in seen:
                yield ValueFault("this place is given twice", key=f"point[{i}].at")
            seen.add((point.part, point.at))

    def over(self, section: Section) -> Mapping[str, Along]:
        """Stress along each part that has points [MPa]."""
        for fault in self.faults(section):
            raise fault
        table: dict[str, dict[float, float]] = {}
        for point in self.points:
            table.setdefault(point.part, {})[point.at] = point.stress
        along = {}
        for part, stresses in table.items():
            places = sorted(stresses)
            along[part] = Along(tuple(places), tuple(stresses[s] for s in places))
        return along


PATTERNS: tuple[type[EccsRolled] | type[Points], ...] = (EccsRolled, Points)


@dataclass(frozen=True)
class Residual:
    """A pattern on a section, scaled and balanced.

    `plane` are the coefficients of the strain that balance it: constant, per mm in u, per mm in v.
    `force_share` and `moment_share`: what it lacked, as a share of the squash load and of My (tension
    and sagging positive); `left_*`: what is left. Peaks in MPa, compression negative.
    """

    name: str
    source: str
    along: Mapping[str, Along]
    plane: tuple[float, float, float]
    force_share: float
    moment_share: float
    left_force_share: float
    left_moment_share: float
    peak_compression: float
    peak_tension: float

    def strain(self, points: SectionPoints, section: Section, moduli: Sequence[float]) -> Array:
        """Initial strain at points of the section (as the balance was made, in its own frame)."""
        constant, per_u, per_v = self.plane
        e: Array = np.asarray(moduli, dtype=float)[points.part]
        return raw_stress(self.along, section, points) / e - (constant + per_u * points.u + per_v * points.v)

    def breaks(self, section: Section) -> dict[str, tuple[float, ...]]:
        """Where the slope of the pattern jumps along each part of the section."""
        return {name: tuple(s for s in along.at if 0.0 < s < 1.0) for name, along in self.along.items()}


def raw_stress(along: Mapping[str, Along], section: Section, points: SectionPoints) -> Array:
    """Stress of a pattern at points, before any balance [MPa]."""
    stress = np.zeros(points.u.shape)
    for index, part in enumerate(section.parts):
        here = points.part == index
        if part.joins:
            values = [float(along[name](np.array(at))) if name in along else 0.0 for name, at in part.joins]
            stress[here] = sum(values) / len(values)
        elif part.name in along:
            stress[here] = along[part.name](points.at[here])
    return stress


def balanced(
    pattern: Pattern,
    section: Section,
    points: SectionPoints,
    *,
    scale: float,
    moduli: Sequence[float],
    yields: Sequence[float],
    squash: float,
    yield_moment: float,
) -> Residual:
    """The pattern on a section, scaled, and balanced by the smallest linear correction.

    `points` integrate the section; `squash` [N] and `yield_moment` [Nmm] are what the correction is
    measured by, `moduli` and `yields` [MPa] those of each part.

    Raises ValueFault when the pattern does not apply, lacks more than a tenth of the squash load or of
    My (library patterns), or exceeds the yield strength after correction.
    """
    along = {
        name: Along(a.at, tuple(s * scale for s in a.stress)) for name, a in pattern.over(section).items()
    }
    e = np.asarray(moduli)[points.part]
    weight = e * points.area
    middle_u = float(weight @ points.u / weight.sum())
    middle_v = float(weight @ points.v / weight.sum())
    base = np.stack([np.ones(points.u.shape), points.u - middle_u, points.v - middle_v])
    stress = raw_stress(along, section, points)
    lacking = base @ (stress * points.area)
    matrix = (base * weight) @ base.T
    constant, per_u, per_v = (float(x) for x in np.linalg.solve(matrix, lacking))
    plane = (constant - per_u * middle_u - per_v * middle_v, per_u, per_v)
    left = base @ ((stress - e * (np.array([constant, per_u, per_v]) @ base)) * points.area)
    breaks = {name: tuple(s for s in a.at if 0.0 < s < 1.0) for name, a in along.items()}
    edges = edge_points(section, breaks)
    residual = Residual(
        name=pattern.name,
        source=pattern.source,
        along=along,
        plane=plane,
        force_share=float(lacking[0]) / squash,
        moment_share=-float(lacking[1]) / yield_moment,
        left_force_share=float(left[0]) / squash,
        left_moment_share=-float(left[1]) / yield_moment,
        peak_compression=0.0,
        peak_tension=0.0,
    )
    at_edges = residual.strain(edges, section, moduli) * np.asarray(moduli)[edges.part]
    strength = np.asarray(yields)[edges.part]
    worst = int(np.argmax(np.abs(at_edges) / strength))
    if abs(at_edges[worst]) > strength[worst]:
        raise ValueFault(
            f"the residual stress reaches {at_edges[worst]:.4g} MPa after balancing, more than the yield "
            f"strength of {strength[worst]:g} MPa there",
            key="point" if isinstance(pattern, Points) and scale == 1.0 else "scale",
            suggestion="lower the stresses or the scale",
        )
    lacked = max(abs(residual.force_share), abs(residual.moment_share))
    if lacked > 0.10 and not isinstance(pattern, Points):
        raise ValueFault(
            f"on {section.name} the pattern lacks {100 * lacked:.1f} % for equilibrium, too much to correct",
            key="pattern",
        )
    from dataclasses import replace

    return replace(residual, peak_compression=float(at_edges.min()), peak_tension=float(at_edges.max()))
