"""`justify`: from a case with a beam to its load ladder, hinges, two lines of verdict and record."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from fibremr import code_line
from fibremr.beam.collapse import Collapse, collapse
from fibremr.beam.effects import deflections, shear_forces
from fibremr.beam.hinges import Hinge, at_region, hinges
from fibremr.beam.model import FIXED, Stations, stations
from fibremr.beam.response import Branch, Response
from fibremr.beam.solve import Solution, Solver, elastic_redundants, solve
from fibremr.bending import Bar, Curve, extended, trace_curve
from fibremr.case.beam_table import BeamCase
from fibremr.case.records import Case
from fibremr.case.tables import bar_of
from fibremr.code_line import Check
from fibremr.errors import CaseError, Fault
from fibremr.hinge_verdict import JUSTIFIED, NOT, OUTSIDE, HingeVerdict, Judge, worse
from fibremr.residual import EccsRolled
from fibremr.section.shapes import BoxShape, IShape, RectangleShape, TubeShape
from fibremr.solve.roots import find_root
from fibremr.steel.bilinear import Bilinear
from fibremr.tracing import TraceResult, trace

if TYPE_CHECKING:
    from matplotlib.figure import Figure

Array = NDArray[np.float64]

FAR = 60.0  # multiples of Mp/(EI) to which the section's curve is laid out for the beam
NEAR_MP = 0.999  # share of Mp at which a section of a law without hardening counts as having reached it
NOT_CHECKED = (
    "buckling of the beam between restraints away from hinges",
    "web crippling and web buckling under transverse forces",
    "connections",
    "repeated or moving load, fatigue, impact",
    "torsion and axial force",
    "fracture at holes and weld toes",
)
ASSUMPTIONS = (
    "plane sections, small displacements, static load that grows in proportion",
    "supports hold both flanges and twist, and do not settle",
    "design loads and nominal strengths as given, no partial or resistance factor (EN 1993-1-1: 1.0)",
    "self-weight only where it is among the loads",
)


@dataclass(frozen=True)
class Ladder:
    """Load factors; None where a rung is not reached."""

    first_yield: float
    first_hinge: float | None
    rotation_limit: float | None
    simple_plastic_collapse: float
    largest_traced: float


@dataclass(frozen=True)
class Deflection:
    """Largest deflection under the service share of the loads [mm], downwards positive."""

    largest: float
    at: float
    span: int
    limit: float | None
    verdict: str | None


@dataclass(frozen=True)
class JustifyResult:
    """A justified case: the section's trace, the beam's solutions, ladder, hinges, checks and verdicts.

    `shown` is the solution that the tables and pictures show: at load factor 1, or at the largest load
    factor below it that the case's law carries.
    """

    case: Case
    beam: BeamCase
    section: TraceResult
    stations: Stations
    response: Response
    plastic: tuple[float, float]
    shown: Solution
    simple: Collapse
    ladder: Ladder
    hinges: tuple[HingeVerdict, ...]
    checks: tuple[Check, ...]
    code_verdict: str
    rotation_verdict: str
    rotation_why: str
    deflection: Deflection | None
    warnings: tuple[str, ...]
    files: tuple[str, ...] = ()

    @property
    def verdict(self) -> str:
        """The worse of the two lines."""
        return worse(self.code_verdict, self.rotation_verdict)

    @cached_property
    def elastic_moment(self) -> Array:
        """Moment of the elastic beam at the load factor shown [Nmm]."""
        return self.stations.moment(self.shown.factor, elastic_redundants(self.stations, self.shown.factor))

    @cached_property
    def redistribution(self) -> float | None:
        """Share of the largest elastic support moment that is redistributed; None without a redundant."""
        every = list(self.stations.starts[1:-1])
        every += [0] if self.beam.beam.ends[0] == FIXED else []
        every += [self.stations.x.size - 1] if self.beam.beam.ends[1] == FIXED else []
        if not every:
            return None
        worst = max(every, key=lambda i: abs(self.elastic_moment[i]))
        if self.elastic_moment[worst] == 0.0:
            return None
        return float(1.0 - self.shown.moment[worst] / self.elastic_moment[worst])

    def columns(self) -> dict[str, Array]:
        """beam.csv as a dict of arrays."""
        left, right = shear_forces(self.shown)
        size = self.stations.x.size
        first = np.zeros(size, dtype=bool)
        first[list(self.stations.starts[:-1])] = True
        return {
            "x_m": self.stations.x / 1e3,
            "moment_kNm": self.shown.moment / 1e6,
            "elastic_moment_kNm": self.elastic_moment / 1e6,
            "shear_kN": np.where(first, right, left) / 1e3,
            "curvature_per_m": self.shown.curvature * 1e3,
            "deflection_mm": deflections(self.shown),
            "Mp_hogging_kNm": np.full(size, -self.plastic[1] / 1e6),
            "Mp_sagging_kNm": np.full(size, self.plastic[0] / 1e6),
        }

    def figure(self, name: str) -> Figure:
        """A picture by name: beam, ladder or hinges, or one of the section's trace."""
        from fibremr import figures

        return figures.draw(self, name)

    def as_dict(self) -> dict[str, Any]:
        """Plain data with the keys of results.json."""
        from fibremr.beam_record import beam_record

        record = self.section.record.as_dict()
        record["files"] = list(self.files)
        record["warnings"] = list(dict.fromkeys([*record["warnings"], *self.warnings]))
        record["beam"] = beam_record(self)
        return record


def justify(case: Case) -> JustifyResult:
    """May plastic hinges be assumed in the beam of a case?

    Raises CaseError when the case has no beam, NotConverged when the analysis cannot be completed.
    """
    if case.beam is None:
        fault = Fault(
            "missing", "missing: `justify` needs a beam", file=case.file, key="beam",
            allowed='a table [beam], such as spans = ["8 m", "8 m"] and loads',
            suggestion="`fibremr trace` needs none",
        )  # fmt: skip
        raise CaseError([fault])
    beam = case.beam
    section = trace(case)
    curves = _curves(case, traced=section.curve)
    bars = {sense: replace(bar_of(case), sense=sense) for sense in (1, -1)}
    response = Response(Branch.of(curves[1]), Branch.of(curves[-1]))
    plastic = (bars[1].plastic.moment, bars[-1].plastic.moment)
    place = stations(beam.beam)
    simple = collapse(place, *plastic)
    hardens = any(not isinstance(law, Bilinear) or law.hardening for law in bars[1].laws)
    ideal = response if not hardens else _ideal(case)
    most = _largest(place, response, simple, hardens)
    factor = min(1.0, most * (1.0 - 1e-4))
    shown = solve(place, response, factor)
    reachable = most > 1.0
    plastic_solution = None
    if simple.factor > 1.0:
        plastic_solution = shown if ideal is response else solve(place, ideal, 1.0)
    warnings = []
    if factor < 1.0:
        warnings.append(
            f"the loads are not carried: moments and deflections are shown at load factor {factor:.3f}"
        )
    judge = Judge(case, curves, bars)
    judged = tuple(
        judge.hinge(shown, plastic_solution, h, reachable)
        for h in _all_hinges(shown, plastic_solution, *plastic)
    )
    found = [h.hinge for h in judged]
    ladder = _ladder(place, response, ideal, bars, plastic, simple, most, hardens, judge)
    checks = _checks(case, beam, shown, found, judged, simple)
    code = _code_verdict(checks)
    rotation, why = _rotation_verdict(shown, judged, plastic, bars, judge, simple)
    if case.bending.axial or case.bending.about == "minor":
        code = rotation = worse(OUTSIDE, NOT if simple.factor <= 1.0 else OUTSIDE)
        why = "beams with axial force or bent about the minor axis are outside the methods of this version"
    return JustifyResult(
        case=case,
        beam=beam,
        section=section,
        stations=place,
        response=response,
        plastic=plastic,
        shown=shown,
        simple=simple,
        ladder=ladder,
        hinges=judged,
        checks=checks,
        code_verdict=code,
        rotation_verdict=rotation,
        rotation_why=why,
        deflection=_deflection(beam, place, response, most),
        warnings=tuple(warnings),
    )


def _curve(case: Case, sense: int, *, plastic: bool) -> Curve:
    bar = replace(bar_of(case), sense=sense)
    if plastic:
        bar = replace(bar, laws=tuple(Bilinear(law.modulus, law.yield_stress) for law in bar.laws))
    residual = bar.residual(case.pattern, case.scale) if case.pattern else None
    ei = bar.elastic.bending
    stops = [bar.first_yield_curvature(residual), bar.yield_moment / ei, bar.unit_curvature, _far(case, bar)]
    return trace_curve(bar, residual, stops=stops)


def _far(case: Case, bar: Bar) -> float:
    """Curvature to which the section's curve is laid out [1/mm], past a strain limit of the user's own."""
    g = bar.geometry
    strain = 1.5 * (case.limits.strain or 0.0) / min(g.top - g.centroid, g.centroid - g.bottom)
    return max(FAR * bar.unit_curvature, strain)


def _curves(case: Case, *, traced: Curve | None = None, plastic: bool = False) -> dict[int, Curve]:
    """The section's curve in both senses; one does for both where top and bottom are alike.

    `traced` is one that is there already, and is gone on with.
    """
    if traced is not None and traced.bar.sense == 1:
        sagging = extended(traced, [_far(case, traced.bar)])
    else:
        sagging = _curve(case, 1, plastic=plastic)
    shape = case.section.shape
    alike = isinstance(shape, BoxShape | TubeShape | RectangleShape)
    alike |= isinstance(shape, IShape) and shape.symmetric
    if alike and (case.pattern is None or case.pattern.name == EccsRolled.name):
        return {1: sagging, -1: sagging}
    return {1: sagging, -1: _curve(case, -1, plastic=plastic)}


def _ideal(case: Case) -> Response:
    curves = _curves(case, plastic=True)
    return Response(Branch.of(curves[1]), Branch.of(curves[-1]))


def _largest(place: Stations, response: Response, simple: Collapse, hardens: bool) -> float:
    """Load factor up to which the case's law can be traced: collapse, or where the section's curve ends."""
    if not hardens:
        return simple.factor

    at = Solver(place, response)

    def past(factor: float) -> float:
        moment = at(factor).moment
        return (
            float(np.max(np.maximum(moment / response.sagging.largest, -moment / response.hogging.largest)))
            - 1.0
        )

    high = (
        simple.factor
        * max(response.sagging.largest, response.hogging.largest)
        / min(response.sagging.largest, response.hogging.largest)
        * 1.6
    )
    if past(high) <= 0.0:
        return high
    return find_root(past, 0.8 * simple.factor, high, tolerance=2e-6)


def _all_hinges(shown: Solution, other: Solution | None, sagging: float, hogging: float) -> list[Hinge]:
    """Hinges of the case's law, and those that only the elastic-plastic law has."""
    found = hinges(shown, sagging, hogging)
    if other is None or other is shown:
        return found
    for hinge in hinges(other, sagging, hogging):
        if not any(h.sense == hinge.sense and h.region[0] <= hinge.at <= h.region[1] for h in found):
            mine = at_region(shown, hinge.at, sagging, hogging)
            if mine is not None and mine.sense == hinge.sense:
                found.append(mine)
    return sorted(found, key=lambda h: h.at)


def _ladder(
    place: Stations, response: Response, ideal: Response, bars: dict[int, Bar], plastic: tuple[float, float],
    simple: Collapse, most: float, hardens: bool, judge: Judge,
) -> Ladder:  # fmt: skip
    residuals = {s: judge.curves[s].residual for s in (1, -1)}
    first_moment = {s: bars[s].first_yield_curvature(residuals[s]) * bars[s].elastic.bending for s in (1, -1)}
    elastic = place.moment(1.0, elastic_redundants(place, 1.0))
    share = np.max(np.maximum(elastic / max(first_moment[1], 1e-9), -elastic / max(first_moment[-1], 1e-9)))
    first_yield = float(1.0 / share)
    reach = 1.0 if hardens else NEAR_MP
    last = most * (1.0 - 1e-6)

    at, ideal_at = Solver(place, response), Solver(place, ideal)

    def peak(factor: float) -> float:
        moment = at(factor).moment
        return float(np.max(np.maximum(moment / plastic[0], -moment / plastic[1]))) - reach

    first_hinge = _first_root(peak, first_yield * 0.999, last)

    def over(factor: float) -> float:
        solution = at(factor)
        other = None
        if factor < simple.factor * (1.0 - 1e-6):
            other = solution if ideal is response else ideal_at(factor)
        worst = -1.0
        for hinge in _all_hinges(solution, other, *plastic):
            use = judge.hinge(solution, other, hinge, True).use
            if use is not None:
                worst = max(worst, use - 1.0)
        return worst

    limit = None
    if first_hinge is not None:
        # elastic-plastic steel asks for the more, and only up to its collapse: look on both sides of it
        below = min(last, simple.factor * (1.0 - 2e-6))
        limit = _first_root(over, min(first_hinge, below), below)
        if limit is None and last > below:
            limit = _first_root(over, simple.factor, last)
    return Ladder(first_yield, first_hinge, limit, simple.factor, most)


def _first_root(function: Callable[[float], float], low: float, high: float) -> float | None:
    """Where a rising function turns positive between two load factors, to 1e-6; None if it does not."""
    if high <= low or function(high) < 0.0:
        return None
    if function(low) >= 0.0:
        return low
    return find_root(function, low, high, tolerance=1e-6)


def _checks(
    case: Case,
    beam: BeamCase,
    shown: Solution,
    found: list[Hinge],
    judged: tuple[HingeVerdict, ...],
    simple: Collapse,
) -> tuple[Check, ...]:
    checks: list[Check] = []
    if found:
        checks += [code_line.class_check(h.hinge, h.classed) for h in judged]
        checks += code_line.steel_checks(case)
        checks += code_line.restraint_checks(case, beam, shown, found)
        checks += code_line.stiffener_checks(case, beam, shown, found)
    checks += code_line.shear_checks(case, shown, found)
    checks.append(code_line.collapse_check(simple.factor))
    return tuple(checks)


def _code_verdict(checks: tuple[Check, ...]) -> str:
    verdicts = {c.verdict for c in checks}
    if code_line.FAILS in verdicts:
        return NOT
    return OUTSIDE if code_line.OUTSIDE in verdicts else JUSTIFIED


def _rotation_verdict(
    shown: Solution, judged: tuple[HingeVerdict, ...], plastic: tuple[float, float], bars: dict[int, Bar],
    judge: Judge, simple: Collapse,
) -> tuple[str, str]:  # fmt: skip
    if simple.factor <= 1.0:
        return NOT, f"the loads reach simple plastic collapse at load factor {simple.factor:.3f}"
    if judged:
        verdict = worse(*(h.verdict for h in judged))
        worst = max(judged, key=lambda h: (h.verdict == NOT, h.verdict == OUTSIDE, h.use or 0.0))
        where = f"at {judge.case.system.place(worst.hinge.at)}"
        if worst.governing is None or worst.required is None:
            return verdict, f"no method named gives the hinge {where} a rotation"
        text = (
            f"the hinge {where} needs {1e3 * worst.required:.1f} mrad and has "
            f"{1e3 * (worst.governing.rotation or 0.0):.1f} mrad by {worst.governing.method}"
        )
        if worst.use is not None and 0.9 <= worst.use <= 1.1:
            text += " (near the edge)"
        return verdict, text
    for sense in (1, -1):
        peak = float(np.max(sense * shown.moment))
        if peak <= 0.0:
            continue
        number = judge.classed(sense).number
        allowed = plastic[0 if sense > 0 else 1] if number in (1, 2) else bars[sense].yield_moment
        if number is None or number == 4:
            return OUTSIDE, "no hinge forms, but the section is of class 4 or of none"
        if peak > allowed:
            return NOT, f"no hinge forms, but the moment exceeds what class {number} allows"
    return JUSTIFIED, "no hinge forms below load factor 1: nothing needs to turn"


def _deflection(beam: BeamCase, place: Stations, response: Response, most: float) -> Deflection | None:
    if beam.service is None or beam.service >= most:
        return None
    solution = solve(place, response, beam.service)
    sag = deflections(solution)
    worst: Deflection | None = None
    for span, length in enumerate(beam.beam.spans):
        a, b = place.starts[span], place.starts[span + 1]
        i = a + int(np.argmax(np.abs(sag[a:b])))
        limit = beam.length_limit if beam.span_share is None else length / beam.span_share
        largest = float(sag[i])
        verdict = None if limit is None else (JUSTIFIED if abs(largest) <= limit else NOT)
        found = Deflection(largest, float(place.x[i]), span, limit, verdict)
        size = abs(largest) / (limit or 1.0)
        if worst is None or size > abs(worst.largest) / (worst.limit or 1.0):
            worst = found
    return worst
