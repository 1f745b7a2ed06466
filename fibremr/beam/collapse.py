"""Simple plastic collapse of a beam by the static theorem, as a linear programme."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fibremr.beam.model import FIXED, Stations
from fibremr.errors import NotConverged

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Collapse:
    """Load factor of simple plastic collapse, the moments there [Nmm], and the mechanism.

    `hinges` are places along the beam [mm] with the sense of each, +1 sagging and -1 hogging; `span` (from
    0) is the one that fails by itself, None when several turn together.
    """

    factor: float
    moment: Array
    span: int | None
    hinges: tuple[tuple[float, int], ...]


def collapse(stations: Stations, sagging: float, hogging: float) -> Collapse:
    """The largest load factor for which some distribution of moments keeps within both plastic moments [Nmm].

    Raises NotConverged when the loads bend nothing, so that no load factor is too large.
    """
    from scipy.optimize import linprog

    unit, free = stations.unit, stations.free
    n = unit.shape[0]
    scale = max(float(np.max(np.abs(free))), 1e-300)
    if float(np.max(np.abs(free))) <= 0.0:
        raise NotConverged("the loads bend no span: there is no load factor of collapse")
    # unknowns: the load factor, and the support moments as shares of the larger plastic moment
    most = max(sagging, hogging)
    rows = np.vstack([np.column_stack([free / scale, unit.T]), -np.column_stack([free / scale, unit.T])])
    bounds = np.concatenate([np.full(free.size, sagging / most), np.full(free.size, hogging / most)])
    found = linprog(
        np.concatenate([[-1.0], np.zeros(n)]),
        A_ub=rows, b_ub=bounds, bounds=[(0.0, None), *([(None, None)] * n)], method="highs",
    )  # fmt: skip
    if not found.success or found.x is None:
        raise NotConverged(f"the linear programme of collapse was not solved: {found.message}")
    factor = float(found.x[0]) * most / scale
    moment = stations.moment(factor, found.x[1:] * most)
    span, hinges = _mechanism(stations, moment, sagging, hogging)
    return Collapse(factor, moment, span, hinges)


def _mechanism(
    stations: Stations, moment: Array, sagging: float, hogging: float
) -> tuple[int | None, tuple[tuple[float, int], ...]]:
    """The first span that has turned into a mechanism by itself and its hinges; else every hinge there is."""
    near = 1e-6
    for span in range(len(stations.beam.spans)):
        a, b = stations.starts[span], stations.starts[span + 1]
        m = moment[a:b]
        full = np.where(m >= 0.0, m >= sagging * (1 - near), -m >= hogging * (1 - near))
        inside = np.flatnonzero(full[1:-1]) + 1
        held_left = span > 0 or stations.beam.ends[0] == FIXED
        held_right = span < len(stations.beam.spans) - 1 or stations.beam.ends[1] == FIXED
        if inside.size == 0 or (held_left and not full[0]) or (held_right and not full[-1]):
            continue
        peak = int(inside[np.argmax(np.abs(m[inside]))])
        places = [(0, held_left), (peak, True), (m.size - 1, held_right)]
        return span, tuple((float(stations.x[a + i]), 1 if m[i] >= 0.0 else -1) for i, held in places if held)
    full = np.where(moment >= 0.0, moment >= sagging * (1 - near), -moment >= hogging * (1 - near))
    every = {round(float(stations.x[i]), 6): (1 if moment[i] >= 0.0 else -1) for i in np.flatnonzero(full)}
    return None, tuple(sorted(every.items()))
