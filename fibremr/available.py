"""How far the section can turn: each limit carried to strain, curvature, moment and rotation."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property
from math import inf, isfinite

import numpy as np
from numpy.typing import NDArray

from fibremr import kernel
from fibremr.bending import Curve
from fibremr.case.records import Limits
from fibremr.classes import SectionClass
from fibremr.limits import class_rotation, own
from fibremr.rotation import Setup

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Limit:
    """One limit on a curve; None where a quantity does not exist. Curvature 1/mm, moment Nmm, angles rad.

    `rotation` is over the whole hinge region, `plastic_rotation` its plastic part, `rotation_capacity` R.
    """

    method: str
    applies: bool
    why_not: str
    verified: bool
    quantity: str
    source: str
    strain: float | None = None
    curvature: float | None = None
    moment: float | None = None
    rotation: float | None = None
    plastic_rotation: float | None = None
    rotation_capacity: float | None = None
    warning: str = ""
    governs: bool = False


@dataclass(frozen=True)
class Turning:
    """A curve over a hinge region: setup, theta_p [rad], and the rotation at each of the curve's points."""

    curve: Curve
    setup: Setup
    theta_p: float

    @cached_property
    def _at_points(self) -> tuple[Array, Array]:
        return self.setup.rotations(self.curve.curvature, self.curve.moment)

    @property
    def rotation(self) -> Array:
        """Rotation over the region at each point of the curve [rad]."""
        return self._at_points[0]

    @property
    def deflection(self) -> Array:
        """Deflection at each point of the curve [mm]."""
        return self._at_points[1]

    def rotation_at(self, state: kernel.State) -> float:
        """Rotation [rad] with a state as the peak of the diagram, whose place is on or past the curve."""
        return self._at(state)[0]

    def deflection_at(self, state: kernel.State) -> float:
        """Deflection [mm] with a state as the peak of the diagram."""
        return self._at(state)[1]

    def _at(self, state: kernel.State) -> tuple[float, float]:
        event = self.curve.event(state)
        before = int(np.searchsorted(self.curve.curvature, event.curvature, side="left"))
        curvature = np.append(self.curve.curvature[:before], event.curvature)
        moment = np.append(self.curve.moment[:before], event.moment)
        rotation, deflection = self.setup.rotations(curvature, moment, since=before)
        return float(rotation[-1]), float(deflection[-1])

    def plastic(self, rotation: float, moment: float) -> float:
        """Plastic part of a rotation [rad] at a peak moment [Nmm]; rounding counts as nothing."""
        part = rotation - self.elastic(moment)
        return part if abs(part) > 1e-12 * self.theta_p else 0.0

    def elastic(self, moment: float) -> float:
        """Elastic rotation [rad] for a peak moment [Nmm]."""
        return self.setup.elastic_rotation(moment, self.curve.bar.elastic.bending)


def turning(curve: Curve, setup: Setup | None) -> Turning | None:
    """The curve over the region of a setup; None without a setup, or when it does not start at rest."""
    if setup is None or abs(curve.moment[0]) > 1e-9 * curve.bar.plastic.moment:
        return None
    theta_p = setup.elastic_rotation(curve.bar.plastic.moment, curve.bar.elastic.bending)
    return Turning(curve, setup, theta_p)


def edge_strain(curve: Curve) -> Callable[[kernel.State], float]:
    """A function of a state: the larger applied strain of the two extreme edges [1]."""
    g = curve.bar.geometry
    top, bottom = g.top - g.centroid, g.bottom - g.centroid

    def strain(state: kernel.State) -> float:
        e, k = float(state.strain[0]), float(state.curvature[0])
        return max(abs(e - k * top), abs(e - k * bottom))

    return strain


def at_edge_strain(curve: Curve, most: float) -> kernel.State | None:
    """The state at which the larger edge strain reaches a value [1], solved for; None if it does not."""
    strain = edge_strain(curve)
    values = np.array([strain(s) for s in curve.states]) - most
    return curve.first(values, lambda s: strain(s) - most)


def wanted(limits: Limits, classed: SectionClass) -> list[Limit]:
    """The limits that there are to be carried, before they meet a curve."""
    found = []
    if limits.strain is not None:
        found.append(Limit(own.STRAIN, True, "", True, "strain", own.STRAIN_SOURCE, strain=limits.strain))
    if limits.rotation_capacity is not None:
        found.append(
            Limit(
                own.CAPACITY, True, "", True, "rotation capacity",
                f"given in the case: {limits.rotation_source}", rotation_capacity=limits.rotation_capacity,
            )
        )  # fmt: skip
    capacity = class_rotation.capacity(classed.number)
    why_not = ""
    if classed.number is None:
        why_not = classed.why_not
    elif capacity is None:
        why_not = f"the section is of class {classed.number}, and only class 1 carries a rotation"
    found.append(
        Limit(
            class_rotation.NAME, not why_not, why_not, True, class_rotation.QUANTITY, class_rotation.SOURCE,
            rotation_capacity=capacity,
        )
    )  # fmt: skip
    return found


def named(limits: Limits) -> set[str]:
    """The methods that may govern: those named in the case, and limits of the user's own."""
    names = set(limits.methods)
    if limits.strain is not None:
        names.add(own.STRAIN)
    if limits.rotation_capacity is not None:
        names.add(own.CAPACITY)
    return names


def reached(limit: Limit, curve: Curve, turn: Turning | None) -> kernel.State | None:
    """The state at which a limit is reached on a curve, solved for; None where it is not reached."""
    if not limit.applies:
        return None
    if limit.quantity == "strain" and limit.strain is not None:
        return at_edge_strain(curve, limit.strain)
    if turn is None or limit.rotation_capacity is None:
        return None
    target = (limit.rotation_capacity + 1.0) * turn.theta_p
    return curve.first(turn.rotation - target, lambda s: turn.rotation_at(s) - target)


def carried(limit: Limit, curve: Curve, turn: Turning | None) -> Limit:
    """A limit with everything that the curve says of it."""
    if not limit.applies:
        return limit
    state = reached(limit, curve, turn)
    if state is not None:
        event = curve.event(state)
        limit = replace(limit, curvature=event.curvature, moment=event.moment)
        if limit.quantity != "strain":
            limit = replace(limit, strain=edge_strain(curve)(state))
        if turn is not None:
            rotation = turn.rotation_at(state)
            limit = replace(
                limit,
                rotation=rotation,
                plastic_rotation=turn.plastic(rotation, event.moment),
                rotation_capacity=rotation / turn.theta_p - 1.0,
            )
        return _conditioned(limit, curve, turn)
    if limit.quantity == "strain":
        reason = "the law ends before this strain" if curve.ended_by_law else "the trace ends before it"
        return replace(limit, warning=f"not reached: {reason}")
    if turn is None or limit.rotation_capacity is None:
        return replace(
            limit, warning="no [rotation] in the case, so that this R cannot be carried to a rotation"
        )
    most = float(turn.rotation[-1]) / turn.theta_p - 1.0
    where = f"{1e3 * float(curve.curvature[-1]):.3g} 1/m"
    why = f"where the law ends, at {where}" if curve.ended_by_law else f"and was followed to {where}"
    warning = f"the curve comes to R = {most:.3g} {why}: moment and curvature are not given"
    return replace(
        limit,
        rotation=(limit.rotation_capacity + 1.0) * turn.theta_p,
        plastic_rotation=limit.rotation_capacity * turn.theta_p,
        warning=warning,
    )


def _conditioned(limit: Limit, curve: Curve, turn: Turning | None) -> Limit:
    """Warn of a strain limit next to the end of a plateau, where the rotation jumps."""
    ends = {k for law in curve.bar.laws for k in law.kinks[1:2] if len(law.kinks) > 1}
    if limit.quantity != "strain" or limit.strain is None:
        return limit
    for end in ends:
        if abs(limit.strain / end - 1.0) <= 0.10:
            text = f"within 10 % of the strain at which hardening begins ({100 * end:.3g} %): ill-conditioned"
            if turn is not None:
                sides = []
                for factor in (0.9, 1.1):
                    state = at_edge_strain(curve, factor * end)
                    sides.append(None if state is None else 1e3 * turn.rotation_at(state))
                shown = ["not reached" if r is None else f"{r:.4g} mrad" for r in sides]
                text += f"; rotation {shown[0]} at 0.9 and {shown[1]} at 1.1 of that strain"
            return replace(limit, warning=text)
    return limit


def governing(limits: list[Limit], names: set[str]) -> list[Limit]:
    """The limits with the smallest of those named that apply marked as governing."""

    def size(limit: Limit) -> tuple[float, float, float]:
        big = inf
        return (
            limit.rotation if limit.rotation is not None else big,
            limit.curvature if limit.curvature is not None else big,
            limit.rotation_capacity if limit.rotation_capacity is not None else big,
        )

    able = [l for l in limits if l.applies and l.method in names and any(isfinite(x) for x in size(l))]
    if not able:
        return limits
    least = min(able, key=size)
    return [replace(l, governs=l is least) for l in limits]
