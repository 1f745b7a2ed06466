"""An independent dense integration: plain cells from an I section's dimensions, plastic strains stepped.

Shares nothing with fibremr: rectangles cut into midpoint cells, fillets into thin strips of their own
width, elastic-perfectly plastic steel by return to the yield stress, equilibrium by scipy's brentq.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.optimize import brentq


@dataclass(frozen=True)
class Cells:
    """Cells of an I section: position from mid-depth and mid-width, area, residual stress; mm, MPa."""

    y: np.ndarray
    z: np.ndarray
    area: np.ndarray
    stress: np.ndarray


def i_cells(h: float, b: float, tw: float, tf: float, r: float, *, peak: float, minor: bool) -> Cells:
    """Cells with straight-line residual stress: tips and mid-web -peak, junctions +peak, unbalanced."""
    parts = []
    across, through, web_across, web_along, layers = (900, 12, 48, 120, 12) if minor else (120, 60, 2, 600, 1)

    def grid(y0: float, y1: float, z0: float, z1: float, ny: int, nz: int) -> tuple[np.ndarray, ...]:
        ys = y0 + (np.arange(ny) + 0.5) * (y1 - y0) / ny
        zs = z0 + (np.arange(nz) + 0.5) * (z1 - z0) / nz
        yy, zz = np.meshgrid(ys, zs)
        return yy.ravel(), zz.ravel(), np.full(yy.size, (y1 - y0) * (z1 - z0) / (ny * nz))

    for side in (-1.0, 1.0):
        z0, z1 = sorted((side * (h / 2 - tf), side * h / 2))
        y, z, a = grid(-b / 2, b / 2, z0, z1, across, through)
        parts.append((y, z, a, peak * (1.0 - 2.0 * np.abs(y) / (b / 2))))
    hw = h - 2 * tf
    y, z, a = grid(-tw / 2, tw / 2, -hw / 2, hw / 2, web_across, web_along)
    parts.append((y, z, a, peak * (2.0 * np.abs(z) / (hw / 2) - 1.0)))
    if r > 0.0:
        # a spandrel in strips along the web: x from the flange it is r - sqrt(r2 - (r-x)2) wide
        strips = 240
        x = (np.arange(strips) + 0.5) * r / strips
        width = r - np.sqrt(r * r - (r - x) ** 2)
        for sz in (-1.0, 1.0):
            for sy in (-1.0, 1.0):
                for layer in range(layers):
                    away = tw / 2 + width * (layer + 0.5) / layers
                    area = width * r / strips / layers
                    parts.append((sy * away, sz * (hw / 2 - x), area, np.full(x.size, peak)))
    return Cells(*(np.concatenate(c) for c in zip(*parts, strict=True)))


def moments(
    cells: Cells, *, fy: float, modulus: float, axial: float, curvatures: np.ndarray, minor: bool
) -> np.ndarray:
    """Moment [Nmm] at rising curvatures [1/mm] under a constant axial force, with history."""
    arm = cells.y if minor else cells.z
    base = np.stack([np.ones_like(arm), cells.z, cells.y])
    lacking = base @ (cells.stress * cells.area)
    plane = np.linalg.solve((base * cells.area) @ base.T, lacking)
    initial = (cells.stress - plane @ base) / modulus
    plastic = np.zeros_like(arm)
    result = []
    for kappa in np.concatenate([[0.0], curvatures]):

        def stress(eps0: float, k: float = kappa, p: np.ndarray = plastic) -> np.ndarray:
            return np.clip(modulus * (eps0 - k * arm + initial - p), -fy, fy)

        def out(eps0: float, s=stress) -> float:  # type: ignore[no-untyped-def]
            return float(s(eps0) @ cells.area - axial)

        reach = 5.0 * fy / modulus + abs(kappa) * np.ptp(arm)
        eps0 = brentq(out, -reach, reach, xtol=1e-15, rtol=1e-14)
        s = stress(eps0)
        plastic = eps0 - kappa * arm + initial - s / modulus
        result.append(-float(s @ (cells.area * arm)))
    return np.array(result[1:])
