"""The code line: what EN 1993-1-1:2005 asks of a beam designed plastically, check by check."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from math import sqrt

import numpy as np

from fibremr.beam.effects import reactions, shear_forces
from fibremr.beam.hinges import Hinge
from fibremr.beam.solve import Solution
from fibremr.case.beam_table import BeamCase, Restraint
from fibremr.case.records import Case
from fibremr.classes import SectionClass
from fibremr.limits import en_1993_1_1_2005 as classes
from fibremr.limits import en_1993_1_1_2005_plastic as en
from fibremr.section import shapes
from fibremr.section.properties import geometry

OK, FAILS, OUTSIDE, UNKNOWN = "ok", "fails", "outside the methods", "not known"


@dataclass(frozen=True)
class Check:
    """One check: what, where [mm, None for the whole beam], value and what is allowed in words, verdict."""

    check: str
    at: float | None
    value: str
    allowed: str
    verdict: str
    source: str


def steel_checks(case: Case) -> Iterator[Check]:
    """What plastic analysis asks of the steel."""
    steel, s = case.base, case.system
    fy, modulus = steel.law.yield_stress, steel.law.modulus
    if not steel.carbon:
        yield Check("steel", None, "not carbon steel", "carbon steel", OUTSIDE, en.STEEL)
        return
    strength, most = (f"{s.show(x, 'stress'):.4g} {s.stress}" for x in (fy, en.LARGEST_YIELD))
    verdict = OK if fy <= en.LARGEST_YIELD else OUTSIDE
    yield Check("grade", None, strength, f"up to {most}", verdict, en.GRADE)
    if steel.ultimate is None:
        yield Check("steel fu/fy", None, "fu not given", "at least 1.10", UNKNOWN, en.STEEL)
    else:
        ratio = steel.ultimate / fy
        good = ratio >= en.LEAST_STRENGTH_RATIO * (1.0 - 1e-9)
        yield Check("steel fu/fy", None, f"{ratio:.3f}", "at least 1.10", OK if good else FAILS, en.STEEL)
        last = max(0.6 * (1.0 - fy / steel.ultimate), 0.06)
        times = last * modulus / fy
        yield Check(
            "steel ultimate strain", None, f"{times:.0f} times yield, estimated from fu/fy",
            "at least 15 times", OK if times >= en.LEAST_ULTIMATE_STRAIN else FAILS,
            f"{en.STEEL}; strain by Yun and Gardner (2017)",
        )  # fmt: skip
    if steel.elongation is None:
        yield Check("steel elongation", None, "not in the table used", "at least 15 %", UNKNOWN, en.STEEL)
    else:
        good = steel.elongation >= en.LEAST_ELONGATION
        yield Check(
            "steel elongation", None, f"{100 * steel.elongation:g} % (least of the product standard)",
            "at least 15 %", OK if good else FAILS, en.STEEL,
        )  # fmt: skip


def class_check(hinge: Hinge, classed: SectionClass) -> Check:
    """Class 1 at a hinge."""
    if classed.number is None:
        return Check("class", hinge.at, "none", "1", OUTSIDE, en.CLASS)
    verdict = OK if classed.number == 1 else FAILS
    return Check("class", hinge.at, f"{classed.number}", "1", verdict, en.CLASS)


def shear_area(case: Case) -> float | None:
    """Shear area for vertical shear [mm2]; None where there is no rule here."""
    area = geometry(case.section).area
    match case.section.shape:
        case shapes.IShape() as s:
            clear = s.height - s.top_flange.thickness - s.bottom_flange.thickness
            if case.section.one_piece and s.symmetric:
                return en.rolled_i_shear_area(
                    area, s.top_flange.width, s.top_flange.thickness, s.web.thickness, s.root_radius, clear
                )
            return en.welded_shear_area(clear, s.web.thickness)
        case shapes.BoxShape() as s:
            if case.section.one_piece:
                return en.box_shear_area(area, s.height, s.width)
            return 2.0 * en.welded_shear_area(s.height - 2.0 * s.flange.thickness, s.web.thickness)
        case shapes.TubeShape():
            return en.tube_shear_area(area)
        case _:
            return None


def shear_checks(case: Case, solution: Solution, hinges: list[Hinge]) -> Iterator[Check]:
    """Shear at each hinge and largest along the beam, and shear buckling of the web."""
    area = shear_area(case)
    if area is None:
        yield Check("shear", None, "no shear area for this shape", "", OUTSIDE, en.SHEAR)
        return
    resistance = en.shear_resistance(area, case.base.law.yield_stress)
    left, right = shear_forces(solution)
    size = np.maximum(np.abs(left), np.abs(right))
    for hinge in hinges:
        at = np.abs(solution.stations.x - hinge.at) < 1e-6
        share = float(size[at].max()) / resistance
        yield Check(
            "shear at hinge", hinge.at, f"{share:.2f} Vpl", "up to 0.50 Vpl",
            OK if share <= en.SHEAR_SHARE else FAILS, en.SHEAR,
        )  # fmt: skip
    worst = int(np.argmax(size))
    share = float(size[worst]) / resistance
    yield Check(
        "shear", float(solution.stations.x[worst]), f"{share:.2f} Vpl", "up to 1.00 Vpl",
        OK if share <= 1.0 else FAILS, en.SHEAR,
    )  # fmt: skip
    shape = case.section.shape
    if isinstance(shape, shapes.IShape):
        clear = shape.height - shape.top_flange.thickness - shape.bottom_flange.thickness
        ratio = clear / shape.web.thickness
        most = en.slenderest_web(classes.epsilon(case.base.law.yield_stress))
        yield Check(
            "shear buckling hw/tw", None, f"{ratio:.1f}", f"up to {most:.1f}",
            OK if ratio <= most else FAILS, en.SHEAR_BUCKLING,
        )  # fmt: skip


def stiffener_checks(case: Case, beam: BeamCase, solution: Solution, hinges: list[Hinge]) -> Iterator[Check]:
    """Web stiffeners where the transverse force at a hinge asks for them."""
    area = shear_area(case)
    if area is None:
        return
    resistance = en.shear_resistance(area, case.base.law.yield_stress)
    forces = reactions(solution)
    for hinge in hinges:
        if hinge.support is not None:
            force = abs(forces[hinge.support])
        else:
            start = float(solution.stations.beam.supports[hinge.span])
            force = solution.factor * abs(
                sum(
                    l.point
                    for l in beam.beam.loads
                    if l.span == hinge.span and abs(start + l.at - hinge.at) < 1.0
                )
            )
        share = force / resistance
        asked = share > en.TRANSVERSE_SHARE
        value = f"{share:.2f} Vpl, {'stiffened' if beam.stiffeners else 'no stiffeners'}"
        verdict = FAILS if asked and not beam.stiffeners else OK
        yield Check(
            "stiffeners", hinge.at, value, "up to 0.10 Vpl unless stiffened within h/2", verdict, en.STIFFENER
        )


def restraint_checks(case: Case, beam: BeamCase, solution: Solution, hinges: list[Hinge]) -> Iterator[Check]:
    """Both flanges held at the hinge, and the compressed one within the stable length on both sides."""
    shape = case.section.shape
    if not isinstance(shape, shapes.IShape) or not shape.symmetric:
        for hinge in hinges:
            yield Check(
                "restraint", hinge.at, "not a symmetric I or H section", "I and H with equal flanges",
                OUTSIDE, en.STABLE_LENGTH,
            )  # fmt: skip
        return
    eps = classes.epsilon(case.base.law.yield_stress)
    if shape.height / shape.top_flange.thickness > 40.0 * eps:
        for hinge in hinges:
            yield Check(
                "restraint", hinge.at, f"h/tf {shape.height / shape.top_flange.thickness:.1f}",
                f"up to {40 * eps:.1f}", OUTSIDE, en.STABLE_LENGTH,
            )  # fmt: skip
        return
    g = geometry(case.section)
    radius = sqrt(g.second_moment_side / g.area)
    for hinge in hinges:
        if hinge.support is None:
            reach = shape.height / 2.0
            held = all(_held(r, hinge.at, reach) for r in (beam.top, beam.bottom))
            yield Check(
                "restraint at hinge", hinge.at, "both flanges held" if held else "not held on both flanges",
                "both flanges held within h/2", OK if held else FAILS, en.RESTRAINT,
            )  # fmt: skip
        flange = beam.top if hinge.sense > 0 else beam.bottom
        name = "top" if hinge.sense > 0 else "bottom"
        for side in (-1, 1):
            found = _side(solution, flange, hinge, side, eps, radius)
            if found is not None:
                length, most, straight, needed = found
                good = length <= most * (1.0 + 1e-9)
                allowed = case.system.place(most)
                if not good:
                    allowed += f" there (a restraint at {case.system.place(needed)} would do)"
                if not straight:
                    allowed += "; the rule assumes a straight moment, which this is not"
                where = "left" if side < 0 else "right"
                yield Check(
                    f"restraint {name}, {where} of hinge", hinge.at, case.system.place(length), allowed,
                    OK if good else FAILS, en.STABLE_LENGTH,
                )  # fmt: skip


def _held(restraint: Restraint, place: float, reach: float) -> bool:
    return restraint.continuous or any(abs(p - place) <= reach for p in restraint.places)


def _side(
    solution: Solution, flange: Restraint, hinge: Hinge, side: int, eps: float, radius: float
) -> tuple[float, float, bool, float] | None:
    """Distance to the next restraint, stable length, whether the moment is straight, where one is needed."""
    stations = solution.stations
    supports = stations.beam.supports
    if (hinge.at <= 0.0 and side < 0) or (hinge.at >= supports[-1] - 1e-9 and side > 0):
        return None  # nothing lies beyond the end
    if flange.continuous:
        return 0.0, en.stable_length(1.0, eps, radius), True, hinge.at
    places = np.array(sorted({*flange.places, *(float(s) for s in supports)}))
    ahead = places[side * (places - hinge.at) > 1e-6]
    nearest = float(ahead.min() if side > 0 else ahead.max())
    inside = (side * (stations.x - hinge.at) >= -1e-9) & (side * (nearest - stations.x) >= -1e-9)
    # of a support, the station that lies on this side
    x, m = stations.x[inside], hinge.sense * solution.moment[inside]
    order = np.argsort(side * x, kind="stable")
    x, m = x[order], m[order]
    psi = m / m[0]
    lengths = np.array([en.stable_length(float(p), eps, radius) for p in psi])
    away = side * (x - hinge.at)
    chord = m[0] + (m[-1] - m[0]) * away / max(away[-1], 1e-9)
    straight = bool(np.max(np.abs(m - chord)) <= 0.02 * abs(m[0]))
    fits = np.flatnonzero(away <= lengths)
    return abs(nearest - hinge.at), float(lengths[-1]), straight, float(x[fits[-1]])


def collapse_check(factor: float) -> Check:
    """Load factor 1 below simple plastic collapse."""
    return Check(
        "below collapse", None, f"1.00 of {factor:.3f}", f"below {factor:.3f}", OK if factor > 1.0 else FAILS,
        "static theorem, EN 1993-1-1:2005 5.4.3 (from memory)",
    )  # fmt: skip
