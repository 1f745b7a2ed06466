"""What must not matter does not: scale, mirrors, the order of things; and how much work is done."""

from __future__ import annotations

from math import pi

import builders
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fibremr.bending import Bar, trace_curve
from fibremr.residual import EccsRolled
from fibremr.rotation import Setup
from fibremr.section import shapes
from fibremr.section.catalogue import profile
from fibremr.section.parts import Section
from fibremr.section.properties import geometry, plastic
from fibremr.steel.bilinear import Bilinear
from fibremr.steel.quad_linear import QuadLinear

LAWS = [Bilinear(210e3, 355.0), Bilinear(210e3, 355.0, 2100.0), QuadLinear(210e3, 355.0, 490.0)]
PLACES = np.array([0.4, 0.9, 1.1, 1.6, 3.0, 8.0, 19.0])


@st.composite
def i_shapes(draw: st.DrawFn) -> shapes.IShape:
    """Plausible I sections, symmetric or not, with or without fillets."""
    h = draw(st.floats(100.0, 900.0))
    top = shapes.Flange(h * draw(st.floats(0.25, 1.0)), h * draw(st.floats(0.02, 0.1)))
    bottom = top
    if draw(st.booleans()):
        bottom = shapes.Flange(h * draw(st.floats(0.25, 1.0)), h * draw(st.floats(0.02, 0.1)))
    web = min(h * draw(st.floats(0.012, 0.05)), 0.2 * min(top.width, bottom.width))
    radius = draw(st.sampled_from([0.0, 0.03])) * h
    return shapes.IShape(h, shapes.Web(web), top, bottom, radius)


def moments(bar: Bar, **more: object) -> np.ndarray:
    _, found = builders.curve_through(bar, list(PLACES * bar.unit_curvature), **more)  # type: ignore[arg-type]
    return found / bar.plastic_alone.moment


@given(i_shapes(), st.sampled_from(LAWS), st.floats(-0.6, 0.6))
@settings(max_examples=25)
def test_all_lengths_doubled(shape: shapes.IShape, law: Bilinear, n: float) -> None:
    def twice(s: shapes.IShape) -> shapes.IShape:
        top, bottom = (shapes.Flange(2 * f.width, 2 * f.thickness) for f in (s.top_flange, s.bottom_flange))
        return shapes.IShape(2 * s.height, shapes.Web(2 * s.web.thickness), top, bottom, 2 * s.root_radius)

    one, two = (shapes.build(s) for s in (shape, twice(shape)))
    a = builders.bar(one, law)
    a = builders.bar(one, law, axial=n * a.squash)
    b = builders.bar(two, law, axial=4.0 * a.axial)
    assert b.plastic.moment == pytest.approx(8.0 * a.plastic.moment, rel=1e-10)
    assert b.unit_curvature == pytest.approx(a.unit_curvature / 2.0, rel=1e-12)
    np.testing.assert_allclose(moments(b), moments(a), rtol=1e-9)


@given(i_shapes(), st.sampled_from(LAWS), st.floats(-0.6, 0.6))
@settings(max_examples=25)
def test_hogging_is_sagging_upside_down(shape: shapes.IShape, law: Bilinear, n: float) -> None:
    flipped = shapes.IShape(shape.height, shape.web, shape.bottom_flange, shape.top_flange, shape.root_radius)
    a = builders.bar(shapes.build(shape), law)
    a = builders.bar(shapes.build(shape), law, axial=n * a.squash, sense=-1)
    b = builders.bar(shapes.build(flipped), law, axial=a.axial)
    assert b.plastic.moment == pytest.approx(a.plastic.moment, rel=1e-9)
    assert b.first_yield_curvature(None) == pytest.approx(a.first_yield_curvature(None), rel=1e-9)
    np.testing.assert_allclose(moments(b), moments(a), rtol=1e-7, atol=1e-9)


@given(i_shapes(), st.sampled_from(LAWS), st.floats(0.05, 0.6))
@settings(max_examples=25)
def test_tension_and_compression_are_alike_for_the_mirrored_section(
    shape: shapes.IShape, law: Bilinear, n: float
) -> None:
    """All signs turned: compression under sagging is tension under hogging."""
    section = shapes.build(shape)
    load = n * builders.bar(section, law).squash
    a = builders.bar(section, law, axial=-load, sense=1)
    b = builders.bar(section, law, axial=load, sense=-1)
    np.testing.assert_allclose(moments(b), moments(a), rtol=1e-7, atol=1e-9)


@pytest.mark.parametrize("name", ["IPE 300", "HEA 260", "RHS 200x100x8", "CHS 168.3x5"])
def test_both_senses_about_both_axes_agree_for_symmetric_sections(name: str) -> None:
    for minor in (False, True):
        a, b = (builders.bar(profile(name), LAWS[2], sense=s, minor=minor) for s in (1, -1))
        np.testing.assert_allclose(moments(b), moments(a), rtol=1e-9)


def test_channel_about_its_minor_axis_is_the_same_from_both_sides() -> None:
    right = profile("UPE 200").turned(pi / 2)
    left = profile("UPE 200").turned(-pi / 2)
    a = Bar(right, (LAWS[0],) * len(right.parts), sense=1)
    b = Bar(left, (LAWS[0],) * len(left.parts), sense=-1)
    assert a.plastic.moment == pytest.approx(b.plastic.moment, rel=1e-10)
    np.testing.assert_allclose(moments(a), moments(b), rtol=1e-7)


def test_minor_axis_has_the_right_hand_side_on_top() -> None:
    g = geometry(profile("UPE 200").turned(pi / 2))
    # the web stands at the left, so that the centroid is nearer to the bottom
    assert g.bottom == pytest.approx(0.0, abs=1e-9)
    assert g.top == pytest.approx(80.0)
    assert g.centroid < 40.0


@given(i_shapes(), st.floats(0.0, 0.95))
@settings(max_examples=40)
def test_full_plasticity_balances(shape: shapes.IShape, n: float) -> None:
    """Blocks above and below the axis give the axial force back, and the moment is a maximum over axes."""
    section = shapes.build(shape)
    yields = [355.0 if "web" in p.name else 460.0 for p in section.parts]
    load = sum(p.moments.area * fy for p, fy in zip(section.parts, yields, strict=True))
    full = plastic(section, yields, -n * load)
    pairs = list(zip(section.parts, yields, strict=True))
    above = sum(fy * p.outline.above(full.axis)[0] for p, fy in pairs)
    assert load - 2.0 * above == pytest.approx(-n * load, rel=1e-9, abs=1e-6 * load)
    c = geometry(section).centroid

    def support(axis: float) -> float:
        """Moment about the centroid plus axial force times the axis: convex, largest where it balances."""
        total = sum(fy * (p.moments.first_u - axis * p.moments.area) for p, fy in pairs)
        return 2.0 * sum(fy * p.outline.above(axis)[1] for p, fy in pairs) - total + n * load * (axis - c)

    assert support(full.axis) == pytest.approx(full.moment, rel=1e-9)
    for shift in (-3.0, 3.0):
        assert support(full.axis + shift) >= full.moment * (1.0 - 1e-12)


@pytest.mark.parametrize("law", LAWS, ids=lambda law: law.name)
def test_shorter_steps_move_no_reported_number(law: Bilinear) -> None:
    bar = builders.bar(profile("HEA 260"), law, axial=-500e3)
    residual = bar.residual(EccsRolled(), 1.0)
    setup = Setup("three-point", 5000.0)
    end = 12.0 * bar.unit_curvature
    events = [
        bar.first_yield_curvature(residual),
        bar.yield_moment / bar.elastic.bending,
        bar.unit_curvature,
        end,
    ]
    few = trace_curve(bar, residual, stops=events)
    many = trace_curve(bar, residual, stops=sorted([*events, *np.linspace(0.0, end, 400)[1:]]))
    assert len(many.states) > 2 * len(few.states)
    for k in events:
        a, b = (c.event(c.at_curvature(k)).moment for c in (few, many))
        assert abs(a - b) <= few.error * bar.plastic_alone.moment
    a, b = (setup.rotations(c.curvature, c.moment)[0][-1] for c in (few, many))
    assert a == pytest.approx(b, rel=3e-4)


@pytest.mark.parametrize(
    ("name", "axial", "sense", "minor", "most"),
    [
        ("IPE 300", 0.0, 1, False, 1.05),  # symmetric, no force: the centroid does not strain
        ("IPE 300", -0.3, 1, False, 2.4),
        ("T IPE 300 half", 0.0, -1, False, 2.4),
        ("UPE 200", 0.1, 1, True, 2.4),
        ("L 100x100x10", 0.0, 1, False, 2.4),
    ],
)
def test_work(name: str, axial: float, sense: int, minor: bool, most: float) -> None:
    """Iterations for each accepted point, and points for each curve: independent of the machine."""
    bar = builders.bar(profile(name), LAWS[0], sense=sense, minor=minor)
    bar = builders.bar(profile(name), LAWS[0], axial=axial * bar.squash, sense=sense, minor=minor)
    curve = trace_curve(bar, None, stops=[bar.unit_curvature, 20.0 * bar.unit_curvature])
    assert np.mean([s.iterations for s in curve.states[1:]]) <= most
    assert max(s.iterations for s in curve.states) <= 12
    assert len(curve.states) <= 220
    assert curve.fibres.area.size <= 1200


def test_fibres_are_merged_without_loss() -> None:
    from fibremr.section import mesh

    section: Section = profile("HEA 260")
    points = mesh.points(section, modulus=1e6, target=5e-4, focus=125.0)
    zero = np.zeros_like(points.u)
    u, area, _, _ = mesh.merged(points.u, points.area, zero, points.part * 0)
    assert u.size < 0.6 * points.u.size
    for power in (0, 1, 2, 3):
        assert area @ u**power == pytest.approx(points.area @ points.u**power, rel=1e-8)


def test_unbalanced_kernel_says_how_far_it_came() -> None:
    from fibremr import kernel
    from fibremr.errors import NotConverged

    bar = builders.bar(profile("IPE 300"), LAWS[0])
    made = kernel.Fibres(np.ones((2, 1)), np.ones((2, 1)), np.zeros((2, 1)), ((LAWS[0], slice(0, 2)),))
    with pytest.raises(NotConverged, match="left after"):
        kernel.advance(made, kernel.virgin(made), np.array([0.0]), np.array([1e4]))
    assert bar.squash > 0.0
