"""Exact integrals over outlines, against closed forms and against mpmath quadrature."""

from __future__ import annotations

from math import pi

import mpmath
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fibremr.section.outline import Outline
from fibremr.section.parts import box_corner, fillet, ring


def test_rectangle() -> None:
    m = Outline.polygon([(1.0, 2.0), (4.0, 2.0), (4.0, 9.0), (1.0, 9.0)]).moments()
    assert m.area == pytest.approx(21.0, rel=1e-14)
    assert (m.first_v, m.first_u) == pytest.approx((21.0 * 2.5, 21.0 * 5.5), rel=1e-14)
    assert m.second_uu == pytest.approx(3.0 * (9.0**3 - 2.0**3) / 3.0, rel=1e-13)
    assert m.second_vv == pytest.approx(7.0 * (4.0**3 - 1.0) / 3.0, rel=1e-13)
    assert m.second_vu == pytest.approx(21.0 * 2.5 * 5.5, rel=1e-13)


def test_fillet_closed_form() -> None:
    """Area (1 - pi/4) r^2, centroid 0.22337 r from the corner, own second moment 0.0075451 r^4."""
    r = 18.0
    m = fillet((0.0, 0.0), r, 0.0).outline().moments()
    assert m.area == pytest.approx((1.0 - pi / 4.0) * r**2, rel=1e-13)
    centroid = r * (10.0 - 3.0 * pi) / (3.0 * (4.0 - pi))
    assert m.first_u / m.area == pytest.approx(centroid, rel=1e-12)
    own = r**4 * (1.0 / 3.0 - pi / 16.0 - 1.0 / (9.0 * (4.0 - pi)))
    assert m.second_uu - m.area * centroid**2 == pytest.approx(own, rel=1e-10)


def test_ring_closed_form() -> None:
    m = ring(40.0, 50.0, (3.0, 7.0)).outline().moments()
    area = pi * (50.0**2 - 40.0**2)
    assert m.area == pytest.approx(area, rel=1e-14)
    assert m.second_uu == pytest.approx(pi / 4.0 * (50.0**4 - 40.0**4) + area * 49.0, rel=1e-13)
    assert m.second_vu == pytest.approx(area * 21.0, rel=1e-12)


def test_box_corner_area() -> None:
    """Printed properties of hot-finished tubes take radii 1.5 t outside and 1.0 t inside."""
    t = 8.0
    m = box_corner((0.0, 0.0), 0.0, first=t, second=t, outer=1.5 * t, inner=t).outline().moments()
    square = (2.0 * t) ** 2 - t**2  # two walls up to where the arcs end, sharp
    assert m.area == pytest.approx(square - (1.0 - pi / 4.0) * ((1.5 * t) ** 2 - t**2), rel=1e-12)


@given(st.floats(-1.2, 1.2), st.floats(0.05, 0.95), st.floats(0.0, 6.3))
def test_above_a_level_agrees_with_quadrature(shift: float, inner: float, turn: float) -> None:
    outline = ring(inner, 1.0, (0.3, -0.2)).outline().turned(turn)
    centre = outline.arcs[0].u
    level = centre + shift

    def width(u: float) -> mpmath.mpf:
        h = mpmath.mpf(u) - centre
        out = 2 * mpmath.sqrt(max(1 - h * h, 0))
        return out - 2 * mpmath.sqrt(max(mpmath.mpf(inner) ** 2 - h * h, 0))

    kinks = [k for k in (centre - 1, centre - inner, centre + inner, centre + 1) if k > level]
    limits = [max(level, centre - 1), *kinks]
    area, first, second = outline.above(level)
    for power, value in ((0, area), (1, first), (2, second)):
        expected = mpmath.quad(lambda u, p=power: width(u) * (u - level) ** p, limits) if kinks else 0
        assert value == pytest.approx(float(expected), rel=1e-9, abs=1e-11)


@given(st.floats(0.0, 6.3))
def test_turning_keeps_area_and_polar_moment(turn: float) -> None:
    outline = fillet((3.0, 5.0), 2.0, 0.4).outline()
    a, b = outline.moments(), outline.turned(turn).moments()
    assert b.area == pytest.approx(a.area, rel=1e-12)
    assert b.second_uu + b.second_vv == pytest.approx(a.second_uu + a.second_vv, rel=1e-12)


def test_extent_of_an_arc_that_passes_the_top() -> None:
    outline = ring(0.0, 2.0, (0.0, 1.0)).outline()
    assert outline.extent() == pytest.approx((-1.0, 3.0))
