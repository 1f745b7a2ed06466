"""Whole curves against an independent dense integration, for sections nothing was tuned to."""

from __future__ import annotations

from math import pi

import builders
import numpy as np
import pytest

from convergence.dense import i_cells, moments
from fibremr.bending import Bar, trace_curve
from fibremr.residual import EccsRolled
from fibremr.rotation import Setup
from fibremr.section.catalogue import profile
from fibremr.section.shapes import i_section
from fibremr.steel.bilinear import Bilinear
from fibremr.steel.quad_linear import QuadLinear

# h, b, tw, tf, r, fy, N/Npl (compression +), residual scale, minor
BARS = [
    (300.0, 150.0, 7.1, 10.7, 15.0, 355.0, 0.0, 0.0, False),
    (250.0, 260.0, 7.5, 12.5, 24.0, 275.0, 0.0, 1.0, False),
    (410.0, 180.0, 9.3, 14.1, 17.0, 460.0, 0.35, 0.7, False),
    (520.0, 210.0, 11.0, 17.0, 0.0, 235.0, -0.15, 1.5, False),
    (180.0, 180.0, 8.5, 14.0, 15.0, 355.0, 0.5, 1.0, False),
    (300.0, 150.0, 7.1, 10.7, 15.0, 355.0, 0.0, 1.0, True),
    (250.0, 260.0, 7.5, 12.5, 24.0, 235.0, 0.25, 1.2, True),
    (360.0, 170.0, 8.0, 12.7, 18.0, 355.0, 0.8, 0.0, True),
]


@pytest.mark.parametrize("bar", BARS)
def test_moments_agree_point_by_point(bar: tuple[float, ...]) -> None:
    h, b, tw, tf, r, fy, n, scale, minor = bar
    section = i_section(h, b, tw, tf, r)
    law = Bilinear(210e3, fy)
    upright = Bar(section, (law,) * len(section.parts))
    axial = -n * upright.squash
    of = Bar(section.turned(pi / 2 if minor else 0.0), upright.laws, axial)
    residual = of.residual(EccsRolled(), scale) if scale else None
    curvatures = np.geomspace(0.2, 15.0, 36) * of.unit_curvature
    curve = trace_curve(of, residual, stops=list(curvatures))
    ours = np.array([curve.event(curve.at_curvature(k)).moment for k in curvatures])
    peak = scale * 235.0 * (0.5 if h <= 1.2 * b else 0.3)
    dense = moments(
        i_cells(h, b, tw, tf, r, peak=peak, minor=bool(minor)),
        fy=fy, modulus=210e3, axial=axial, curvatures=curvatures, minor=bool(minor),
    )  # fmt: skip
    assert np.max(np.abs(ours / dense - 1.0)) < 5e-4
    assert np.max(np.abs(ours - dense)) < 3e-4 * of.plastic_alone.moment


PLASTIC, QUAD = Bilinear(210e3, 355.0), QuadLinear(210e3, 355.0, 490.0)


@pytest.mark.parametrize(
    ("name", "law", "axial", "minor", "scale"),
    [
        ("IPE 450", PLASTIC, 0.0, False, 1.0),
        ("HEA 260", QUAD, -0.2, True, 1.0),
        ("HEB 300", PLASTIC, -0.4, False, 1.5),
        ("T IPE 300 half", Bilinear(210e3, 355.0, 2100.0), 0.0, False, 0.0),
        ("UPE 200", QUAD, 0.1, True, 0.0),
        ("L 100x100x10", PLASTIC, 0.0, False, 0.0),
    ],
)
def test_finer_fibres_move_no_reported_number(
    name: str, law: Bilinear | QuadLinear, axial: float, minor: bool, scale: float
) -> None:
    """Ten times finer: moments move by less than the reported error, rotations by far less than 0.1 %."""
    load = builders.bar(profile(name), law).squash
    of = builders.bar(profile(name), law, axial=axial * load, minor=minor)
    residual = of.residual(EccsRolled(), scale) if scale else None
    stops = [x * of.unit_curvature for x in (0.5, 0.8, 1.0, 1.3, 2.0, 4.0, 9.0, 20.0)]
    stops = sorted([*stops, of.first_yield_curvature(residual)])
    usual = trace_curve(of, residual, stops=stops)
    finer = trace_curve(of, residual, stops=stops, target=5e-5)
    assert finer.fibres.area.size > 1.5 * usual.fibres.area.size
    for k in stops:
        a, b = (c.event(c.at_curvature(k)).moment for c in (usual, finer))
        assert abs(a - b) <= usual.error * of.plastic_alone.moment
    turns = [Setup("three-point", 5000.0).rotations(c.curvature, c.moment)[0][-1] for c in (usual, finer)]
    assert turns[0] == pytest.approx(turns[1], rel=3e-4)


def test_moment_error_falls_with_the_square_of_the_cell() -> None:
    """Order 2 for a kinked law on two Gauss points; the rate is measured over three halvings."""
    from fibremr import bending

    of = builders.bar(i_section(300.0, 150.0, 7.1, 10.7), Bilinear(210e3, 355.0))
    exact_web = of.plastic.moment
    errors = []
    for target in (2e-3, 5e-4, 1.25e-4, 3.125e-5):
        tracer = bending.Tracer(of, bending.fibres(of, None, target, 1))
        worst = 0.0
        for x in np.linspace(1.2, 6.0, 160):
            kappa = x * of.unit_curvature
            state = tracer.advance(tracer.begin(), kappa)
            exact = exact_web - 355.0 * 7.1 * (355.0 / (210e3 * kappa)) ** 2 / 3.0
            worst = max(worst, abs(float(state.moment[0]) - exact) / exact)
        errors.append(worst)
    orders = np.log2(np.array(errors[:-1]) / np.array(errors[1:]))  # target / 4 is cell / 2
    assert errors[-1] < 2e-5
    assert np.mean(orders) == pytest.approx(2.0, abs=0.35)
