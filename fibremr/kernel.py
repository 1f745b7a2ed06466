"""Equilibrium of fibres stepped along curvatures: the one place where sections bend.

Arrays are `(fibre, sample)`; sums over the fibres are `(sample,)`. Strain in a fibre is
eps0 - kappa z plus its initial strain; moment is minus the sum of stress, area and z, so that sagging
(the top compressed) is positive. Units N, mm, MPa.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fibremr.errors import NotConverged
from fibremr.steel.law import History, Law

Array = NDArray[np.float64]

BALANCE = 1e-12  # largest unbalanced force, as a share of the squash load
MOST = 80


@dataclass(frozen=True)
class Fibres:
    """Fibres of a section: height above the centroid [mm], area [mm2] and initial strain [1].

    Each array is `(fibre, 1)` or `(fibre, sample)`. `steels` pairs each law with its run of fibres.
    """

    z: Array
    area: Array
    initial: Array
    steels: tuple[tuple[Law, slice], ...]

    @property
    def squash(self) -> Array:
        """Squash load by the yield stresses [N], shape `(sample,)`."""
        loads = [law.yield_stress * self.area[run].sum(axis=0) for law, run in self.steels]
        return np.asarray(sum(loads))


@dataclass(frozen=True)
class State:
    """Fibres in equilibrium at a curvature.

    curvature [1/mm], strain (eps0) [1], moment [Nmm] and the tangent sums axial [N], first [Nmm] and
    second [Nmm2] are `(sample,)`; stress and tangent [MPa] are `(fibre, sample)`.
    """

    curvature: Array
    strain: Array
    moment: Array
    stress: Array
    tangent: Array
    axial_stiffness: Array
    first_stiffness: Array
    second_stiffness: Array
    history: tuple[History, ...]
    iterations: int

    @property
    def stiffness(self) -> Array:
        """Tangent dM/dkappa at constant axial force [Nmm2], zero where nothing resists extension."""
        ea = self.axial_stiffness
        held = ea > 0.0
        return np.where(held, self.second_stiffness - self.first_stiffness**2 / np.where(held, ea, 1.0), 0.0)


def virgin(fibres: Fibres, samples: int = 1) -> State:
    """The state to start from: no curvature, no strain, steel without history."""
    histories = tuple(law.start((run.stop - run.start, samples)) for law, run in fibres.steels)
    return _state(fibres, np.zeros(samples), np.zeros(samples), histories, 0)


def advance(fibres: Fibres, state: State, curvature: Array, axial: Array) -> State:
    """The state at another curvature [1/mm] under an axial force [N], reached from a state.

    Newton's method on eps0 from the tangent of the last state, kept inside a bracket and helped by
    bisection where the tangent vanishes because nearly all fibres have yielded.

    Raises NotConverged when the force is not balanced after MOST iterations, with how far it came.
    """
    allowed = BALANCE * fibres.squash
    ea = state.axial_stiffness
    drift = np.where(ea > 0.0, state.first_stiffness / np.where(ea > 0.0, ea, 1.0), 0.0)
    strain = state.strain + drift * (curvature - state.curvature)
    low = np.full(strain.shape, -np.inf)
    high = np.full(strain.shape, np.inf)
    reach = 1e-5 + 0.1 * np.abs(curvature) * float(np.ptp(fibres.z))
    for count in range(1, MOST + 1):
        trial = _state(fibres, curvature, strain, state.history, count)
        out = _sum(fibres.area, trial.stress) - axial
        settled = np.abs(out) <= allowed
        if settled.all():
            return trial
        low = np.where(out < 0.0, strain, low)
        high = np.where(out > 0.0, strain, high)
        ea = trial.axial_stiffness
        steps = ea > 0.0
        newton = strain - out / np.where(steps, ea, 1.0)
        steps &= (newton > low) & (newton < high)
        bounded = np.isfinite(low) & np.isfinite(high)
        with np.errstate(invalid="ignore"):
            middle = (low + high) / 2.0
        beyond = strain + np.where(out < 0.0, reach, -reach)
        if count > 30:  # Newton steps that do not settle are left to bisection
            steps &= ~bounded
        strain = np.where(settled, strain, np.where(steps, newton, np.where(bounded, middle, beyond)))
        reach = 2.0 * reach
        if bounded.all() and (high - low <= 1e-15).all():
            return trial  # rounding of eps0: the force cannot be balanced any closer
    worst = int(np.argmax(np.abs(out) / allowed))
    raise NotConverged(
        f"axial equilibrium not reached at curvature {curvature.flat[worst]:.6g} 1/mm: "
        f"{out.flat[worst]:.3g} N left after {MOST} iterations"
    )


def _state(fibres: Fibres, curvature: Array, strain: Array, before: tuple[History, ...], count: int) -> State:
    z, area = fibres.z, fibres.area
    whole = fibres.initial + (strain - curvature * z)
    if len(fibres.steels) == 1:
        law, _ = fibres.steels[0]
        stress, tangent, after = law.advance(whole, before[0])
        history: tuple[History, ...] = (after,)
    else:
        results = [law.advance(whole[run], h) for (law, run), h in zip(fibres.steels, before, strict=True)]
        stress = np.concatenate([r[0] for r in results])
        tangent = np.concatenate([r[1] for r in results])
        history = tuple(r[2] for r in results)
    stiff = area * tangent
    first = stiff * z
    return State(
        curvature=curvature,
        strain=strain,
        moment=-_sum(area * z, stress),
        stress=stress,
        tangent=tangent,
        axial_stiffness=stiff.sum(axis=0),
        first_stiffness=first.sum(axis=0),
        second_stiffness=_sum(first, z),
        history=history,
        iterations=count,
    )


def _sum(a: Array, b: Array) -> Array:
    return np.asarray(np.vecdot(a.T, b.T))
