"""Moment against curvature of a section: fibres chosen by accuracy, a driven path, events solved for.

Everything here works in the frame in which the section is bent about its horizontal axis; `Bar` is
what is bent. Curvature and moment are positive in the sense asked for.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import cached_property
from math import inf

import numpy as np
from numpy.typing import NDArray

from fibremr import kernel
from fibremr.errors import NotConverged
from fibremr.residual import Pattern, Residual, balanced
from fibremr.section import mesh
from fibremr.section import properties as exact
from fibremr.section.edges import edge_points
from fibremr.section.mesh import Points
from fibremr.section.parts import Section
from fibremr.solve.path import Readings, march
from fibremr.solve.roots import find_root
from fibremr.steel.law import Law

Array = NDArray[np.float64]

TARGET = 5e-4  # default error of the moment over the whole curve, as a share of Mp
CHORD = 2e-5  # largest departure of the traced polygon from the curve, as a share of Mp


@dataclass(frozen=True)
class Bar:
    """A section, turned so that it bends about its horizontal axis, with its steel and axial force.

    `laws` has one law for each part, `axial` is in N (tension positive) and acts at the centroid,
    `sense` is +1 for sagging and -1 for hogging.
    """

    section: Section
    laws: tuple[Law, ...]
    axial: float = 0.0
    sense: int = 1

    @cached_property
    def yields(self) -> tuple[float, ...]:
        """Yield strength of each part [MPa]."""
        return tuple(law.yield_stress for law in self.laws)

    @cached_property
    def moduli(self) -> tuple[float, ...]:
        """Elastic modulus of each part [MPa]."""
        return tuple(law.modulus for law in self.laws)

    @cached_property
    def geometry(self) -> exact.Geometry:
        """Exact geometric properties."""
        return exact.geometry(self.section)

    @cached_property
    def elastic(self) -> exact.Elastic:
        """Exact elastic stiffness."""
        return exact.elastic(self.section, self.moduli)

    @cached_property
    def squash(self) -> float:
        """Squash load [N]."""
        return exact.squash(self.section, self.yields)

    @cached_property
    def plastic(self) -> exact.Plastic:
        """Full plasticity with the axial force."""
        return exact.plastic(self.section, self.yields, self.axial, self.sense)

    @cached_property
    def plastic_alone(self) -> exact.Plastic:
        """Full plasticity without axial force."""
        return exact.plastic(self.section, self.yields, 0.0, self.sense)

    @cached_property
    def yield_moment(self) -> float:
        """My [Nmm]: the smallest moment at which a part yields, without residual stress or axial force."""
        axis = self.geometry.centroid + self.elastic.axis
        curvatures = []
        for part, law in zip(self.section.parts, self.laws, strict=True):
            reach = max(abs(h - axis) for h in part.extent)
            curvatures.append(law.yield_stress / (law.modulus * reach))
        return min(curvatures) * self.elastic.bending

    @property
    def unit_curvature(self) -> float:
        """Mp/(EI) for no axial force [1/mm]: the unit of [trace] to."""
        return self.plastic_alone.moment / self.elastic.bending

    def residual(self, pattern: Pattern, scale: float) -> Residual:
        """A residual-stress pattern on this section, scaled and balanced."""
        integrating = mesh.points(
            self.section,
            modulus=self.plastic_alone.modulus,
            target=TARGET,
            focus=self.plastic.axis,
            breaks={n: a.at for n, a in pattern.over(self.section).items()},
        )
        return balanced(
            pattern,
            self.section,
            integrating,
            scale=scale,
            moduli=self.moduli,
            yields=self.yields,
            squash=self.squash,
            yield_moment=self.yield_moment,
        )

    def edges(self, residual: Residual | None) -> tuple[Points, Array]:
        """The points at which stress can be extreme, and their initial strain."""
        points = edge_points(self.section, residual.breaks(self.section) if residual else None)
        if residual is None:
            return points, np.zeros(points.u.shape)
        return points, residual.strain(points, self.section, self.moduli)

    def first_yield_curvature(self, residual: Residual | None) -> float:
        """Curvature [1/mm] at which some point of a part, edges included, first yields.

        Residual stress and axial force are included; 0 when they bring the section to yield already.
        """
        return self._first_yield(residual)[0]

    def first_to_yield(self, residual: Residual | None) -> str:
        """The name of the part that yields first, or of those that do together."""
        return self._first_yield(residual)[1]

    def _first_yield(self, residual: Residual | None) -> tuple[float, str]:
        points, initial = self.edges(residual)
        centre = self.geometry.centroid + self.elastic.axis
        first = np.array([law.yield_stress / law.modulus for law in self.laws])[points.part]
        start = self.axial / self.elastic.axial + initial
        slope = -self.sense * (points.u - centre)
        room = np.where(slope > 0.0, first - start, first + start)
        with np.errstate(divide="ignore", invalid="ignore"):
            places = np.where(slope == 0.0, inf, room / np.abs(slope))
        places[np.abs(start) >= first * (1.0 - 1e-12)] = 0.0
        least = float(places.min())
        together = points.part[places <= least * (1.0 + 1e-9)]
        names = dict.fromkeys(self.section.parts[int(i)].name for i in together)
        return least, " and ".join(names)


def fibres(bar: Bar, residual: Residual | None, target: float, across: int) -> kernel.Fibres:
    """Fibres for a target error of the moment (a share of Mp), merged where they bend alike."""
    points = mesh.points(
        bar.section,
        modulus=bar.plastic_alone.modulus,
        target=target,
        focus=bar.plastic.axis,
        breaks=residual.breaks(bar.section) if residual else None,
        across=across,
    )
    initial = residual.strain(points, bar.section, bar.moduli) if residual else np.zeros(points.u.shape)
    different = list(dict.fromkeys(bar.laws))
    kind = np.array([different.index(law) for law in bar.laws])[points.part]
    z, area, strain, kind = mesh.merged(points.u - bar.geometry.centroid, points.area, initial, kind)
    ends = np.searchsorted(kind, np.arange(len(different) + 1))
    steels = tuple((law, slice(int(ends[i]), int(ends[i + 1]))) for i, law in enumerate(different))
    return kernel.Fibres(z[:, None], area[:, None], strain[:, None], steels)


@dataclass(frozen=True)
class Event:
    """A place on the curve that was solved for: curvature [1/mm] and moment [Nmm]."""

    curvature: float
    moment: float


@dataclass(frozen=True)
class Curve:
    """A traced moment–curvature curve, positive in the sense of the bar.

    Arrays are `(point,)`: curvature [1/mm], moment [Nmm], strain at the centroid, at the top and at the
    bottom edge [1] (applied, tension positive), tangent stiffness [Nmm2], yielded share of the area [1].
    `error` is the estimated error of the moment by the fibres over the whole curve, as a share of Mp.
    `ended_by_law` is true when the curve stops because a law ends; `coarse` are the fibres half as fine that
    the error is judged by, with their state at the last curvature traced.
    """

    bar: Bar
    residual: Residual | None
    fibres: kernel.Fibres
    states: tuple[kernel.State, ...]
    error: float
    ended_by_law: bool
    coarse: tuple[kernel.Fibres, kernel.State]

    @cached_property
    def curvature(self) -> Array:
        """Curvature [1/mm]."""
        return np.array([s.curvature[0] for s in self.states]) * self.bar.sense

    @cached_property
    def moment(self) -> Array:
        """Moment [Nmm]."""
        return np.array([self.event(s).moment for s in self.states])

    @cached_property
    def strain(self) -> Array:
        """Applied strain at the centroid [1]."""
        return np.array([s.strain[0] for s in self.states])

    def strain_at(self, height: float) -> Array:
        """Applied strain at a height in the section's coordinates [mm]."""
        z = height - self.bar.geometry.centroid
        return self.strain - self.bar.sense * self.curvature * z

    @cached_property
    def stiffness(self) -> Array:
        """Tangent stiffness dM/dkappa at constant axial force [Nmm2]."""
        return np.array([s.stiffness[0] for s in self.states])

    @cached_property
    def yielded(self) -> Array:
        """Share of the area that is yielding [1]."""
        area = self.fibres.area[:, 0]
        modulus = np.concatenate(
            [np.full(run.stop - run.start, law.modulus) for law, run in self.fibres.steels]
        )
        flows = np.array([s.tangent[:, 0] < modulus * (1.0 - 1e-9) for s in self.states])
        return np.asarray(flows @ area / area.sum())

    def tracer(self) -> Tracer:
        """The tracer that made this curve, to go on from any of its states."""
        return Tracer(self.bar, self.fibres)

    def first(self, values: Array, function: Callable[[kernel.State], float]) -> kernel.State | None:
        """The first state at which a function reaches zero from below, solved for; None if it does not.

        `values` are those of the function at the points of the curve.
        """
        past = np.flatnonzero(values >= 0.0)
        if past.size == 0:
            return None
        i = int(past[0])
        if i == 0:
            return self.states[0]
        tracer, here = self.tracer(), self.states[i - 1]
        place = find_root(
            lambda k: function(tracer.advance(here, k)),
            float(self.curvature[i - 1]),
            float(self.curvature[i]),
            tolerance=1e-13 * float(self.curvature[i]),
        )
        return tracer.advance(here, place)

    def event(self, state: kernel.State) -> Event:
        """A state as a place on the curve."""
        sense, moment = self.bar.sense, float(state.moment[0])
        if abs(moment) < 1e-12 * self.bar.plastic_alone.moment:
            moment = 0.0  # rounding of the sum over the fibres
        return Event(float(state.curvature[0]) * sense, moment * sense)

    def at_curvature(self, curvature: float) -> kernel.State:
        """The state at a curvature [1/mm] within the curve, solved for."""
        i = int(np.searchsorted(self.curvature, curvature, side="right")) - 1
        i = min(max(i, 0), len(self.states) - 1)
        if self.curvature[i] == curvature:
            return self.states[i]
        return self.tracer().advance(self.states[i], curvature)


@dataclass(frozen=True)
class Tracer:
    """Steps the fibres of a bar along curvatures, by the kernel at one sample."""

    bar: Bar
    fibres: kernel.Fibres

    def advance(self, state: kernel.State, curvature: float) -> kernel.State:
        """The state at another curvature [1/mm], positive in the bar's sense."""
        return kernel.advance(
            self.fibres, state, np.array([self.bar.sense * curvature]), np.array([self.bar.axial])
        )

    def begin(self) -> kernel.State:
        """The state at no curvature, with the axial force brought on."""
        return self.advance(kernel.virgin(self.fibres), 0.0)

    @property
    def read(self) -> Readings[kernel.State]:
        """How the driver reads a state."""
        sense = self.bar.sense
        return Readings(
            position=lambda s: float(s.curvature[0]) * sense,
            value=lambda s: float(s.moment[0]) * sense,
            slope=lambda s: float(s.stiffness[0]),
        )

    def past_law(self, residual: Residual | None) -> Callable[[kernel.State], float] | None:
        """How far the most strained edge is past the end of its law [1]; None if no law ends."""
        if not any(np.isfinite(law.largest_strain) for law in self.bar.laws):
            return None
        points, initial = self.bar.edges(residual)
        z = points.u - self.bar.geometry.centroid
        last = np.array([law.largest_strain for law in self.bar.laws])[points.part]

        def excess(state: kernel.State) -> float:
            strain = initial + state.strain[0] - state.curvature[0] * z
            return float(np.max(np.abs(strain) - last))

        return excess


def trace_curve(
    bar: Bar, residual: Residual | None, *, stops: Sequence[float], target: float = TARGET
) -> Curve:
    """The curve of a bar up to the last of the curvatures `stops` [1/mm], all of which it meets.

    The fibres are made finer until the largest difference to a mesh half as fine, over the whole curve,
    is within `target` (a share of Mp); that difference is the error reported, and a cautious one, since
    the fibres used err by about a quarter of it. The curve ends early where a law ends.

    Raises NotConverged when the target is out of reach, or when the axial force alone ends the law.
    """
    aim, across = target / 40.0, 12
    for _ in range(6):
        tracer = Tracer(bar, fibres(bar, residual, aim, across))
        coarse = Tracer(bar, fibres(bar, residual, 4.0 * aim, max(1, across // 2)))
        begin = tracer.begin()
        past_law = tracer.past_law(residual)
        if past_law is not None and past_law(begin) > 0.0:
            raise NotConverged("the axial force strains the steel beyond the end of its law")
        start = Curve(bar, residual, tracer.fibres, (begin,), 0.0, False, (coarse.fibres, coarse.begin()))
        curve = extended(start, stops)
        if curve.error <= target:
            return curve
        refine = min(16.0, 1.5 * curve.error / target)
        aim, across = aim / refine, int(np.ceil(across * min(3.0, refine**0.5)))
    raise NotConverged(
        f"the fibres do not reach an error of {100 * target:g} % of Mp: {100 * curve.error:.3g} % with "
        f"{tracer.fibres.area.size} fibres"
    )


def extended(curve: Curve, stops: Sequence[float]) -> Curve:
    """A curve traced on from its end through further curvatures [1/mm]; its error is kept up to date."""
    bar, tracer = curve.bar, curve.tracer()
    end = float(curve.curvature[-1])
    further = sorted(s for s in set(stops) if s > end)
    if not further or curve.ended_by_law:
        return curve
    past_law, unit = tracer.past_law(curve.residual), bar.unit_curvature
    states = march(
        tracer.advance,
        curve.states[-1],
        tracer.read,
        stops=further,
        tolerance=CHORD * bar.plastic_alone.moment,
        largest=lambda x: 0.04 * x + 0.1 * unit,
        until=past_law,
    )
    ended = past_law is not None and past_law(states[-1]) > -1e-9
    made, state = curve.coarse
    check, worst = Tracer(bar, made), 0.0
    for given in states[1:]:
        state = check.advance(state, float(given.curvature[0]) * bar.sense)
        worst = max(worst, abs(float(state.moment[0] - given.moment[0])))
    error = max(curve.error, worst / bar.plastic_alone.moment)
    return Curve(bar, curve.residual, curve.fibres, (*curve.states, *states[1:]), error, ended, (made, state))
