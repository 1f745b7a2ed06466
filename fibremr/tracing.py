"""`trace`: from a case to the curve, its rotation, its limits and the record of results."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fibremr import __version__, available, results
from fibremr.available import Limit, Turning
from fibremr.bending import Bar, Curve, extended, trace_curve
from fibremr.case.records import Case
from fibremr.case.tables import bar_of
from fibremr.classes import SectionClass, classify
from fibremr.residual import Residual

if TYPE_CHECKING:
    from matplotlib.figure import Figure

Array = NDArray[np.float64]

DEFAULT_END = 20.0
FURTHEST_END = 640.0  # multiples of Mp/(EI) up to which a limit is looked for


@dataclass(frozen=True)
class TraceResult:
    """A traced case: the record of results.json, the curve, its rotation, class and limits."""

    case: Case
    bar: Bar
    curve: Curve
    turn: Turning | None
    classed: SectionClass
    limits: tuple[Limit, ...]
    record: results.TraceRecord

    @property
    def gap_below(self) -> bool:
        """Whether the largest gap to the two straight lines is one where the curve lies below them."""
        gap = self._gap
        return bool(gap[np.argmax(np.abs(gap))] < 0.0)

    @cached_property
    def _gap(self) -> Array:
        upto = self.record.curvatures.largest_per_m / 1e3 * (1.0 + 1e-12)
        within = self.curve.curvature <= upto
        return gap_to_two_lines(self.bar, self.curve.curvature[within], self.curve.moment[within])

    @property
    def governs(self) -> Limit | None:
        """The limit that governs, if any."""
        return next((l for l in self.limits if l.governs), None)

    @cached_property
    def plain(self) -> Curve:
        """The curve without residual stress, for comparison; the same as `curve` when there is none."""
        if self.curve.residual is None:
            return self.curve
        return _curve(self.bar, None, self.curve.curvature[-1] / self.bar.unit_curvature)

    @property
    def plain_turn(self) -> Turning | None:
        """The rotation without residual stress."""
        return self.turn if self.curve.residual is None else available.turning(self.plain, self.case.setup)

    @cached_property
    def tables(self) -> dict[str, dict[str, Array]]:
        """Columns of the CSV files by the name of the file, without its ending."""
        return {"moment-curvature": self.columns(), **self._rotation_columns()}

    def columns(self) -> dict[str, Array]:
        """The moment–curvature curve as a dict of arrays, with the headers of the CSV file."""
        c, g = self.curve, self.bar.geometry
        return {
            "curvature_per_m": c.curvature * 1e3,
            "moment_kNm": c.moment / 1e6,
            "axial_kN": np.full(c.moment.shape, self.bar.axial / 1e3),
            "strain_centroid": c.strain,
            "strain_top": c.strain_at(g.top),
            "strain_bottom": c.strain_at(g.bottom),
            "stiffness_kNm2": c.stiffness / 1e9,
            "yielded_pct": 100.0 * c.yielded,
        }

    def _rotation_columns(self) -> dict[str, dict[str, Array]]:
        if self.turn is None:
            return {}
        c, turn = self.curve, self.turn
        plastic = [turn.plastic(float(r), float(m)) for r, m in zip(turn.rotation, c.moment, strict=True)]
        return {
            "moment-rotation": {
                "moment_kNm": c.moment / 1e6,
                "rotation_mrad": 1e3 * turn.rotation,
                "plastic_rotation_mrad": 1e3 * np.array(plastic),
                "curvature_per_m": c.curvature * 1e3,
                "deflection_mm": turn.deflection,
            }
        }

    def figure(self, name: str) -> Figure:
        """A picture by name: section, moment-curvature, moment-rotation or stress-stages."""
        from fibremr import figures

        return figures.draw(self, name)


def trace(case: Case, *, figures_and_files: tuple[str, ...] = ()) -> TraceResult:
    """Trace a case: moment against curvature and rotation, with everything that results.json says.

    Raises NotConverged when the analysis cannot be completed.
    """
    bar = bar_of(case)
    residual = bar.residual(case.pattern, case.scale) if case.pattern else None
    classed = _class(case, bar)
    limits = available.wanted(case.limits, classed)
    names = available.named(case.limits)
    end = DEFAULT_END if case.to is None else case.to
    curve = _curve(bar, residual, end)
    full = _far_enough(curve, case, limits, names, end)
    turn = available.turning(full, case.setup)
    carried = available.governing([available.carried(l, full, turn) for l in limits], names)
    governs = next((l for l in carried if l.governs), None)
    if case.to is None and governs is not None and governs.curvature is not None:
        last = max(float(curve.curvature[-1]), governs.curvature)
        if last > curve.curvature[-1]:
            curve = _cut(full, last)
    curve = _with_limits(curve, carried)
    turn = available.turning(curve, case.setup)
    record = _record(case, bar, residual, curve, turn, classed, carried)
    record = replace(record, files=figures_and_files)
    return TraceResult(case, bar, curve, turn, classed, tuple(carried), record)


def _class(case: Case, bar: Bar) -> SectionClass:
    classed = classify(bar, case.section, minor=case.bending.about == "minor")
    if all(steel.carbon for steel in case.steels):
        return classed
    return SectionClass(classed.code, None, (), "its classes are those of carbon steel")


def _stops(bar: Bar, residual: Residual | None) -> list[float]:
    """Curvatures of the events: first yield, My and Mp on the elastic line [1/mm]."""
    ei = bar.elastic.bending
    return [
        bar.first_yield_curvature(residual),
        bar.yield_moment / ei,
        bar.plastic.moment / ei,
    ]


def _curve(bar: Bar, residual: Residual | None, end: float) -> Curve:
    last = end * bar.unit_curvature
    return trace_curve(bar, residual, stops=[*(s for s in _stops(bar, residual) if s < last), last])


def _far_enough(curve: Curve, case: Case, limits: list[Limit], names: set[str], end: float) -> Curve:
    """The curve, traced on until every limit that may govern is reached, or will not be.

    A limit will not be reached when a law ends, or when twice the curvature hardly adds rotation.
    """
    while not curve.ended_by_law and end < FURTHEST_END:
        turn = available.turning(curve, case.setup)
        missing = [
            l
            for l in limits
            if l.method in names and l.applies and (l.quantity == "strain" or turn is not None)
            and available.reached(l, curve, turn) is None
        ]  # fmt: skip
        if not missing:
            return curve
        further = extended(curve, [2.0 * end * curve.bar.unit_curvature])
        if turn is not None and all(l.quantity != "strain" for l in missing):
            gained = available.turning(further, case.setup)
            assert gained is not None
            if gained.rotation[-1] - turn.rotation[-1] < 0.02 * turn.theta_p:
                return curve
        curve, end = further, 2.0 * end
    return curve


def _cut(curve: Curve, last: float) -> Curve:
    """The curve up to a curvature, which becomes its last point."""
    kept = [s for s, k in zip(curve.states, curve.curvature, strict=True) if k < last * (1.0 - 1e-12)]
    return replace(
        curve,
        states=(*kept, curve.at_curvature(last)),
        ended_by_law=curve.ended_by_law and last >= curve.curvature[-1],
    )


def _with_limits(curve: Curve, limits: list[Limit]) -> Curve:
    """The curve with a point at each limit that lies on it."""
    end = float(curve.curvature[-1])
    places = {l.curvature for l in limits if l.curvature is not None and 0.0 < l.curvature < end}
    new = [curve.at_curvature(k) for k in places if k not in curve.curvature]
    states = sorted((*curve.states, *new), key=lambda s: abs(float(s.curvature[0])))
    return replace(curve, states=tuple(states))


def _record(
    case: Case,
    bar: Bar,
    residual: Residual | None,
    curve: Curve,
    turn: Turning | None,
    classed: SectionClass,
    limits: list[Limit],
) -> results.TraceRecord:
    geometry, ei = bar.geometry, bar.elastic.bending
    governs = next((l for l in limits if l.governs), None)
    upto = float(curve.curvature[-1])
    if governs is not None and governs.curvature is not None:
        upto = min(upto, governs.curvature)
    within = curve.curvature <= upto * (1.0 + 1e-12)
    moment, curvature = curve.moment[within], curve.curvature[within]
    first = bar.first_yield_curvature(residual)
    at_mp = bar.plastic.moment / ei
    warnings = list(case.warnings)
    if first == 0.0:
        both = " with the residual stress" if residual is not None else ""
        warnings.append(f"the axial force{both} brings the section to yield before it bends")
    if first > curve.curvature[-1]:
        first_moment = first * ei
        warnings.append("the trace ends before first yield")
    else:
        first_moment = curve.event(curve.at_curvature(first)).moment
    if classed.number == 4:
        warnings.append(
            "class 4: a part buckles before the section yields; this is the curve of a section held against "
            "local buckling, and neither Mp nor a rotation may be used"
        )
    elif classed.number == 3:
        warnings.append("class 3: local buckling may come before Mp; the code allows My, and no rotation")
    elif classed.number == 2:
        warnings.append("class 2: the code allows Mp, and no rotation")
    if curve.ended_by_law:
        warnings.append(
            f"the curve ends at {curve.curvature[-1] * 1e3:.4g} 1/m, "
            "where the steel law reaches its last strain"
        )
    if case.setup is not None and bar.axial != 0.0:
        warnings.append("rotations are of first order: the axial force does not act on the deflected shape")
    if case.setup is not None and turn is None:
        warnings.append("no rotation: the axial force alone bends the section, so the curve starts off zero")
    if turn is not None and governs is not None and governs.curvature is not None:
        sag = turn.deflection_at(curve.at_curvature(min(governs.curvature, float(curve.curvature[-1]))))
        if sag > turn.setup.span / 20.0:
            warnings.append(
                f"the deflection at the governing limit, {sag:.0f} mm, exceeds a twentieth of the span: "
                "outside the theory of small displacements"
            )
    if all(l.method not in available.named(case.limits) or not l.applies for l in limits):
        warnings.append("no limit that applies is asked for: the curve says nothing of how far it can turn")
    base = case.base
    return results.TraceRecord(
        schema=results.SCHEMA,
        fibremr=__version__,
        written=dt.datetime.now(dt.UTC).isoformat(timespec="seconds"),
        case=results.CaseRecord(case.title, case.sha256),
        files=(),
        warnings=tuple(warnings),
        section=results.SectionRecord(
            name=case.section.name,
            source=case.section.source,
            area_mm2=geometry.area,
            centroid_z_mm=geometry.centroid - geometry.bottom,
            second_moment_mm4=geometry.second_moment,
            elastic_modulus_top_mm3=geometry.modulus_top,
            elastic_modulus_bottom_mm3=geometry.modulus_bottom,
            plastic_modulus_mm3=bar.plastic_alone.modulus,
            plastic_neutral_axis_z_mm=bar.plastic_alone.axis - geometry.bottom,
            mass_kg_per_m=sum(
                p.moments.area * s.density * 1e-6
                for p, s in zip(case.section.parts, case.steels, strict=True)
            ),
        ),
        steel=results.SteelRecord(
            yield_MPa=base.law.yield_stress,
            ultimate_MPa=base.ultimate,
            modulus_MPa=base.law.modulus,
            law=base.law.name,
            source=base.source,
            parts={
                p.name: s.law.yield_stress
                for p, s in zip(case.section.parts, case.steels, strict=True)
                if s.law != base.law
            },
        ),
        fibres=results.FibresRecord(int(curve.fibres.area.size), 100.0 * curve.error),
        residual=_residual_record(residual, case.scale),
        moments=results.MomentsRecord(
            first_yield_kNm=first_moment / 1e6,
            My_kNm=bar.yield_moment / 1e6,
            Mp_kNm=bar.plastic.moment / 1e6,
            largest_kNm=float(moment.max()) / 1e6,
        ),
        curvatures=results.CurvaturesRecord(
            first_yield_per_m=first * 1e3,
            elastic_at_My_per_m=bar.yield_moment / ei * 1e3,
            elastic_at_Mp_per_m=at_mp * 1e3,
            largest_per_m=upto * 1e3,
        ),
        shape_factor=bar.plastic_alone.moment / bar.yield_moment,
        bilinear=_bilinear(bar, curve, curvature, moment, at_mp),
        rotation=None
        if turn is None
        else results.RotationRecord(
            turn.setup.kind, turn.setup.span / 1e3, 1e3 * turn.theta_p, turn.setup.definition
        ),
        class_=results.ClassRecord(
            classed.code,
            classed.number,
            tuple(results.PartRecord(p.part, p.ratio, p.limit, p.number, p.source) for p in classed.parts),
        ),
        limits=tuple(_limit_record(l) for l in limits),
        governing=None
        if governs is None
        else results.GoverningRecord(
            governs.method, _times(governs.rotation, 1e3), governs.rotation_capacity
        ),
    )


def _residual_record(residual: Residual | None, scale: float) -> results.ResidualRecord | None:
    if residual is None:
        return None
    return results.ResidualRecord(
        pattern=residual.name,
        scale=scale,
        source=residual.source,
        correction_force_pct=100.0 * residual.force_share,
        correction_moment_pct=100.0 * residual.moment_share,
        out_of_balance_force_pct=100.0 * residual.left_force_share,
        out_of_balance_moment_pct=100.0 * residual.left_moment_share,
        peak_compression_MPa=residual.peak_compression,
        peak_tension_MPa=residual.peak_tension,
    )


def gap_to_two_lines(bar: Bar, curvature: Array, moment: Array) -> Array:
    """How far a curve lies above E I and then Mp [Nmm], `(point,)`; rounding counts as nothing."""
    mp = bar.plastic.moment
    gap = moment - np.minimum(bar.elastic.bending * curvature, mp)
    return np.where(np.abs(gap) < 1e-10 * mp, 0.0, gap)


def _bilinear(
    bar: Bar, curve: Curve, curvature: Array, moment: Array, at_mp: float
) -> results.BilinearRecord:
    """The curve against E I and Mp, and the plateau of equal energy at the same initial slope.

    Equal energy: ASTM E2126 form (from memory) with E I as the slope: the yield point lies at
    x_u - sqrt(x_u^2 - 2 A/K).
    """
    ei, mp = bar.elastic.bending, bar.plastic.moment
    gap = float(np.max(np.abs(gap_to_two_lines(bar, curvature, moment)))) / mp
    ratio = None
    if at_mp <= curve.curvature[-1]:
        ratio = curve.event(curve.at_curvature(at_mp)).moment / mp
    energy = float(np.sum(np.diff(curvature) * (moment[:-1] + moment[1:])) / 2.0)
    last = float(curvature[-1])
    inside = last**2 - 2.0 * energy / ei
    plateau = None
    if last > 0.0 and inside >= 0.0 and curvature[-1] > at_mp * (1.0 - 1e-12):
        plateau = ei * (last - inside**0.5) / 1e6
    return results.BilinearRecord(
        stiffness_kNm2=ei / 1e9,
        plateau_kNm=mp / 1e6,
        largest_gap_pct=100.0 * gap,
        moment_at_elastic_Mp_curvature_ratio=ratio,
        equal_energy_plateau_kNm=plateau,
    )


def _limit_record(l: Limit) -> results.LimitRecord:
    return results.LimitRecord(
        method=l.method,
        applies=l.applies,
        why_not=l.why_not,
        verified=l.verified,
        governs=l.governs,
        quantity=l.quantity,
        strain_pct=_times(l.strain, 100.0),
        curvature_per_m=_times(l.curvature, 1e3),
        moment_kNm=_times(l.moment, 1e-6),
        rotation_mrad=_times(l.rotation, 1e3),
        plastic_rotation_mrad=_times(l.plastic_rotation, 1e3),
        rotation_capacity=l.rotation_capacity,
        warning=l.warning,
        source=l.source,
    )


def _times(value: float | None, factor: float) -> float | None:
    return None if value is None else value * factor
