"""Round bars, free plates and outlines: against shapely, closed forms and the shapes built from parts."""

from __future__ import annotations

from math import cos, pi, radians, sin

import builders
import numpy as np
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st

from fibremr.bending import trace_curve
from fibremr.section import drawn, shapes
from fibremr.section.drawn import OutlineShape, PlacedPlate, PlatesShape, RoundShape
from fibremr.section.properties import geometry, plastic, total

I_CORNERS = (
    (-75.0, 0.0), (75.0, 0.0), (75.0, 10.7), (3.55, 10.7), (3.55, 289.3), (75.0, 289.3), (75.0, 300.0),
    (-75.0, 300.0), (-75.0, 289.3), (-3.55, 289.3), (-3.55, 10.7), (-75.0, 10.7),
)  # fmt: skip
SQUARE = ((0.0, 0.0), (100.0, 0.0), (100.0, 100.0), (0.0, 100.0))


@st.composite
def outlines(draw: st.DrawFn) -> OutlineShape:
    """Star-shaped outlines with, half the time, a hole well inside; either order of corners."""
    count = draw(st.integers(3, 14))
    steps = draw(st.lists(st.floats(0.2, 1.0), min_size=count, max_size=count))
    angles = 2.0 * pi * np.cumsum(steps) / sum(steps)
    radii = draw(st.lists(st.floats(60.0, 200.0), min_size=count, max_size=count))
    v, u = draw(st.floats(-300.0, 300.0)), draw(st.floats(-300.0, 300.0))
    ring = tuple((v + r * cos(a), u + r * sin(a)) for r, a in zip(radii, angles, strict=True))
    outline = shapely.Polygon(ring)
    hole = tuple((v + 8.0 * cos(a), u + 8.0 * sin(a)) for a in (0.3, 2.0, 4.0, 5.2))
    holes = (hole,) if draw(st.booleans()) and outline.buffer(-1.0).contains(shapely.Polygon(hole)) else ()
    return OutlineShape(ring[:: draw(st.sampled_from([1, -1]))], holes)


def triangles(shape: OutlineShape) -> list[np.ndarray]:
    """Shapely's own triangulation of the region."""
    region = shapely.Polygon(shape.points, shape.holes)
    found = shapely.constrained_delaunay_triangles(region).geoms
    return [np.array(t.exterior.coords[:3]) for t in found]


@given(outlines())
@settings(max_examples=60)
def test_outlines_agree_with_shapely(shape: OutlineShape) -> None:
    section = shapes.build(shape)
    region = shapely.Polygon(shape.points, shape.holes)
    m, g = total(section), geometry(section)
    assert m.area == pytest.approx(region.area, rel=1e-9)
    size = max(section.extent[1] - section.extent[0], 1.0)
    assert m.first_v / m.area == pytest.approx(region.centroid.x, abs=1e-9 * size)
    assert g.centroid == pytest.approx(region.centroid.y, abs=1e-9 * size)
    # second moments of each of shapely's triangles: area/12 (sum of squares + square of the sum)
    uu = vu = 0.0
    for t in triangles(shape):
        (d1, d2) = t[1] - t[0], t[2] - t[0]
        area = abs(d1[0] * d2[1] - d1[1] * d2[0]) / 2.0
        v, u = t[:, 0] - region.centroid.x, t[:, 1] - region.centroid.y
        uu += area / 12.0 * ((u**2).sum() + u.sum() ** 2)
        vu += area / 12.0 * ((v * u).sum() + v.sum() * u.sum())
    assert g.second_moment == pytest.approx(uu, rel=1e-9)
    assert g.product == pytest.approx(vu, abs=1e-9 * g.second_moment)
    # equal areas above and below the plastic axis, and their first moments, clipped by shapely
    found = plastic(section, [1.0])
    low, left, bottom, right = found.axis, *region.bounds[:2], region.bounds[2]
    above = region.intersection(shapely.box(left - 1.0, low, right + 1.0, low + 1e4))
    below = region.intersection(shapely.box(left - 1.0, bottom - 1.0, right + 1.0, low))
    assert above.area == pytest.approx(region.area / 2.0, rel=1e-9)
    modulus = above.area * (above.centroid.y - low) + below.area * (low - below.centroid.y)
    assert found.modulus == pytest.approx(modulus, rel=1e-9)


@given(outlines(), st.sampled_from([1, -1]))
@settings(max_examples=15)
def test_moments_of_an_outline_against_strips(shape: OutlineShape, sense: int) -> None:
    """Perfectly plastic steel on thin strips that shapely clips, bent by scipy's root finder."""
    from scipy.optimize import brentq

    section = shapes.build(shape)
    region = shapely.Polygon(shape.points, shape.holes)
    left, bottom, right, top = region.bounds
    edges = np.linspace(bottom, top, 801)
    strips = [
        region.intersection(shapely.box(left, a, right, b)) for a, b in zip(edges, edges[1:], strict=False)
    ]
    area = np.array([s.area for s in strips])
    z = np.array([s.centroid.y if s.area else 0.0 for s in strips]) - region.centroid.y
    bar = builders.bar(section, builders.plastic_steel(), sense=sense)
    curve = trace_curve(bar, None, stops=[k * bar.unit_curvature for k in (0.8, 1.5, 4.0)])
    for share in (0.8, 1.5, 4.0):
        kappa = sense * share * bar.unit_curvature

        def force(strain: float, kappa: float = kappa) -> float:
            return float(area @ np.clip(210e3 * (strain - kappa * z), -355.0, 355.0))

        strain = brentq(force, -0.1, 0.1, xtol=1e-15)
        moment = -sense * float((area * z) @ np.clip(210e3 * (strain - kappa * z), -355.0, 355.0))
        found = curve.event(curve.at_curvature(share * bar.unit_curvature)).moment
        assert found == pytest.approx(moment, abs=1e-3 * bar.plastic.moment)


def test_an_i_section_as_outline_plates_and_shape() -> None:
    both = shapes.Flange(150.0, 10.7)
    shape = shapes.build(shapes.IShape(300.0, shapes.Web(7.1), both, both))
    outline = shapes.build(OutlineShape(I_CORNERS))
    plates = shapes.build(
        PlatesShape(
            (
                PlacedPlate(150.0, 10.7, (0.0, 294.65)),
                PlacedPlate(278.6, 7.1, (0.0, 150.0), pi / 2.0),
                PlacedPlate(150.0, 10.7, (0.0, 5.35), pi),
            )
        )
    )
    bars = [builders.bar(s, builders.plastic_steel()) for s in (shape, outline, plates)]
    first = bars[0]
    stops = [k * first.unit_curvature for k in (0.95, 1.2, 3.0, 10.0)]
    curves = [trace_curve(bar, None, stops=stops) for bar in bars]
    for bar, curve in zip(bars[1:], curves[1:], strict=True):
        assert geometry(bar.section).second_moment == pytest.approx(
            geometry(first.section).second_moment, rel=1e-12
        )
        assert bar.plastic.moment == pytest.approx(first.plastic.moment, rel=1e-12)
        for k in stops:
            one, other = (c.event(c.at_curvature(k)).moment for c in (curves[0], curve))
            assert other == pytest.approx(one, abs=2e-4 * first.plastic.moment)


def test_round_bar() -> None:
    """I = pi d4/64, Wpl = d3/6, shape factor 16/(3 pi): closed forms."""
    section = shapes.build(RoundShape(80.0))
    g = geometry(section)
    assert g.second_moment == pytest.approx(pi * 80.0**4 / 64.0, rel=1e-12)
    assert plastic(section, [355.0]).moment == pytest.approx(355.0 * 80.0**3 / 6.0, rel=1e-12)
    bar = builders.bar(section, builders.plastic_steel())
    assert bar.plastic.moment / bar.yield_moment == pytest.approx(16.0 / (3.0 * pi), rel=1e-12)
    assert section.parts[0].thickness == 80.0
    assert section.one_piece


def test_a_turned_plate() -> None:
    """Second moments of a rectangle turn as a tensor does: t3w/12 cos2 + w3t/12 sin2."""
    w, t, angle = 200.0, 12.0, radians(25.0)
    g = geometry(shapes.build(PlatesShape((PlacedPlate(w, t, (40.0, 70.0), angle),))))
    along, across = w**3 * t / 12.0, t**3 * w / 12.0
    assert g.centroid == pytest.approx(70.0)
    assert g.second_moment == pytest.approx(across * cos(angle) ** 2 + along * sin(angle) ** 2, rel=1e-12)


@pytest.mark.parametrize(
    ("shape", "size"),
    [
        (OutlineShape(((0, 0), (30, 0), (30, 80), (0, 80))), 30.0),
        (
            OutlineShape(
                ((0, 0), (100, 0), (100, 100), (0, 100)), (((20, 20), (20, 80), (80, 80), (80, 20)),)
            ),
            None,
        ),
        (OutlineShape(((0, 0), (60, 0), (0, 80))), 40.0),  # a right triangle: a + b - c
    ],
)
def test_thickness_is_the_largest_circle(shape: OutlineShape, size: float | None) -> None:
    region = shapely.Polygon(shape.points, shape.holes)
    circle = shapely.maximum_inscribed_circle(region, tolerance=1e-3)
    wanted = 2.0 * circle.length
    assert size is None or wanted == pytest.approx(size, rel=1e-3)
    assert drawn.inscribed(shape) == pytest.approx(wanted, rel=0.01)


@pytest.mark.parametrize(
    ("shape", "key", "words"),
    [
        (OutlineShape(((0, 0), (1, 0))), "points", "three corners"),
        (OutlineShape(((0, 0), (9, 9), (9, 0), (0, 9))), "points", "crosses"),
        (OutlineShape(((0, 0), (9, 0), (9, 0), (0, 9))), "points", "corner 3 repeats"),
        (OutlineShape(((0, 0), (50, 0), (90, 0))), "points", "crosses|area"),
        (OutlineShape(SQUARE, (((20, 20), (120, 20), (60, 60)),)), "holes[0]", "not within"),
        (OutlineShape(SQUARE, (((0, 20), (50, 20), (50, 60)),)), "holes[0]", "not within"),
        (OutlineShape(SQUARE, (((-9, -9), (109, -9), (109, 109), (-9, 109)),)), "holes[0]", "not within"),
        (
            OutlineShape(SQUARE, (((10, 10), (50, 10), (50, 50)), ((40, 20), (45, 20), (45, 25)))),
            "holes[1]",
            "meets hole 1",
        ),
        (
            OutlineShape(SQUARE, (((40, 30), (45, 30), (45, 35)), ((10, 10), (50, 10), (50, 50)))),
            "holes[1]",
            "meets hole 1",
        ),
        (
            PlatesShape(
                (PlacedPlate(100.0, 10.0, (0.0, 0.0)), PlacedPlate(100.0, 10.0, (0.0, 54.9), pi / 2))
            ),
            "part[1]",
            "overlaps plate 1",
        ),
    ],
)
def test_shapes_that_cannot_be(shape: drawn.Drawn, key: str, words: str) -> None:
    found = list(drawn.faults(shape))
    assert [f.key for f in found] == [key]
    assert any(word in found[0].message for word in words.split("|"))


def test_plates_that_touch_or_stand_apart() -> None:
    flange = PlacedPlate(100.0, 10.0, (0.0, 0.0))
    touching = PlacedPlate(100.0, 10.0, (0.0, 55.0), pi / 2)
    far = PlacedPlate(100.0, 10.0, (0.0, 300.0), 0.3)
    assert not list(drawn.faults(PlatesShape((flange, touching, far))))
    assert drawn.apart(PlatesShape((flange, touching, far))) == [3]
    assert drawn.apart(PlatesShape((flange, touching))) == drawn.apart(PlatesShape((flange,))) == []
