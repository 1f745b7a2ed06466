"""What a solved beam does to its supports and how it sags: shear, reactions, deflections."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fibremr.beam.solve import Solution

Array = NDArray[np.float64]


def shear_forces(solution: Solution) -> tuple[Array, Array]:
    """Shear just left and just right of every station [N], the slope of the moment."""
    slope = solution.redundants @ solution.stations.slope
    return (
        solution.factor * solution.stations.shear_left + slope,
        solution.factor * solution.stations.shear_right + slope,
    )


def reactions(solution: Solution) -> list[float]:
    """Upward reaction at each support [N]."""
    left, right = shear_forces(solution)
    starts = solution.stations.starts
    found = []
    for support in range(len(starts)):
        after = right[starts[support]] if support < len(starts) - 1 else 0.0
        before = left[starts[support] - 1] if support > 0 else 0.0
        found.append(float(after - before))
    return found


def deflections(solution: Solution) -> Array:
    """Deflection at every station [mm], downwards positive, zero at the supports."""
    st = solution.stations
    found = np.zeros(st.x.size)
    for a, b in zip(st.starts, st.starts[1:], strict=False):
        dx = np.diff(st.x[a:b])
        turn = solution.rotation[a : b - 1]
        lever = dx * turn - solution.weighted[a : b - 1]  # the curvature's own sag at the right station
        inner = solution.turning[a:b].copy()
        inner[0] = inner[-1] = 0.0  # turning at a support belongs to neither span's inside
        slope = np.concatenate([[0.0], -np.cumsum(turn + inner[1:])])
        sag = np.concatenate([[0.0], np.cumsum(slope[:-1] * dx - lever)])
        found[a:b] = sag - sag[-1] * (st.x[a:b] - st.x[a]) / (st.x[b - 1] - st.x[a])
    return found
