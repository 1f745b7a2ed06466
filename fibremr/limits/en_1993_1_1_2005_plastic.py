"""What EN 1993-1-1:2005 asks of a beam whose moments are found by plastic analysis.

Plain numbers in and out; all clauses from memory unless said otherwise. Lengths mm, stresses MPa, forces N.
"""

from __future__ import annotations

from math import pi, sqrt

STEEL = "EN 1993-1-1:2005 3.2.2(1), 5.4.3 (from memory)"
GRADE = "EN 1993-1-12:2007 (from memory): no plastic analysis above S460"
SHEAR = "EN 1993-1-1:2005 6.2.6, 6.2.8(2), 6.2.10 (from memory)"
SHEAR_BUCKLING = "EN 1993-1-1:2005 6.2.6(6) (from memory)"
STIFFENER = "EN 1993-1-1:2005 5.6(2)b (from memory)"
RESTRAINT = "EN 1993-1-1:2005 6.3.5.2 (from memory)"
STABLE_LENGTH = "EN 1993-1-1:2005 6.3.5.3(1)B (from memory)"
CLASS = "EN 1993-1-1:2005 5.6(2)a, Table 5.2"

LEAST_STRENGTH_RATIO = 1.10
LEAST_ELONGATION = 0.15
LEAST_ULTIMATE_STRAIN = 15.0  # times the yield strain
LARGEST_YIELD = 460.0
SHEAR_SHARE = 0.5  # of the plastic shear resistance, up to which it does not reduce the moment
TRANSVERSE_SHARE = 0.1  # of the plastic shear resistance, above which a hinge asks for stiffeners
ETA = 1.0  # of 6.2.6(3): the safe value


def stable_length(psi: float, eps: float, radius: float) -> float:
    """Length [mm] from a hinge to the next restraint of the compressed flange that is stable.

    `psi` is the moment at that restraint over that at the hinge, negative when it changes sign; `eps` is
    sqrt(235/fy), `radius` the radius of gyration about the minor axis. For I and H sections with
    h/tf up to 40 eps and a moment that runs straight.
    """
    if psi >= 0.625:
        return 35.0 * eps * radius
    return (60.0 - 40.0 * max(psi, -1.0)) * eps * radius


def rolled_i_shear_area(
    area: float, width: float, flange: float, web: float, root: float, clear: float
) -> float:
    """Shear area [mm2] of a rolled I or H section; `clear` is the height between the flanges."""
    return max(area - 2.0 * width * flange + (web + 2.0 * root) * flange, ETA * clear * web)


def welded_shear_area(clear: float, web: float) -> float:
    """Shear area [mm2] of one web of a welded section."""
    return ETA * clear * web


def box_shear_area(area: float, height: float, width: float) -> float:
    """Shear area [mm2] of a rolled rectangular hollow section loaded along its height."""
    return area * height / (width + height)


def tube_shear_area(area: float) -> float:
    """Shear area [mm2] of a circular hollow section."""
    return 2.0 * area / pi


def shear_resistance(shear_area: float, yield_strength: float) -> float:
    """Plastic shear resistance [N] without a partial factor."""
    return shear_area * yield_strength / sqrt(3.0)


def slenderest_web(eps: float) -> float:
    """Largest hw/tw of an unstiffened web that needs no check for shear buckling."""
    return 72.0 * eps / ETA
