"""One harness that every residual-stress pattern must pass, and the values of each source."""

from __future__ import annotations

from dataclasses import replace

import builders
import numpy as np
import pytest

from fibremr.errors import ValueFault
from fibremr.residual import PATTERNS, EccsRolled, Pattern, Points, PointStress
from fibremr.section.catalogue import profile
from fibremr.section.shapes import i_section
from fibremr.steel.bilinear import Bilinear

LOPSIDED = Points(
    (
        PointStress("top flange", 0.0, -60.0),
        PointStress("top flange", 0.3, 55.0),
        PointStress("top flange", 1.0, 10.0),
        PointStress("web", 0.1, 40.0),
        PointStress("web", 0.8, -35.0),
    )
)
EXAMPLES: dict[str, Pattern] = {EccsRolled.name: EccsRolled(), Points.name: LOPSIDED}
SECTIONS = ["IPE 300", "HEA 260", "UB 610x229x101", "W14x90", "HEM 100"]
every_pattern = pytest.mark.parametrize("pattern", EXAMPLES.values(), ids=EXAMPLES.keys())


def test_every_pattern_has_an_example() -> None:
    assert set(EXAMPLES) == {p.name for p in PATTERNS}


@every_pattern
@pytest.mark.parametrize("name", SECTIONS)
@pytest.mark.parametrize("minor", [False, True])
def test_balance(pattern: Pattern, name: str, minor: bool) -> None:
    bar = builders.bar(profile(name), builders.plastic_steel(), minor=minor)
    for scale in (0.4, 1.0, 1.5):
        residual = bar.residual(pattern, scale)
        assert abs(residual.left_force_share) < 1e-12
        assert abs(residual.left_moment_share) < 1e-12
        # and on a mesh that the balance was not made with
        from fibremr.section import mesh

        points = mesh.points(
            bar.section,
            modulus=bar.plastic.modulus,
            target=1e-5,
            focus=bar.plastic.axis,
            breaks=residual.breaks(bar.section),
            across=5,
        )
        stress = residual.strain(points, bar.section, bar.moduli) * 210e3
        force = stress @ points.area
        assert abs(force) < 1e-9 * bar.squash
        for arm in (points.u - bar.geometry.centroid, points.v):
            assert abs((stress * points.area) @ arm) < 1e-9 * bar.yield_moment


@every_pattern
def test_scale_is_linear(pattern: Pattern) -> None:
    bar = builders.bar(profile("IPE 300"), builders.plastic_steel())
    one, two = bar.residual(pattern, 0.5), bar.residual(pattern, 1.0)
    for key in ("force_share", "moment_share", "peak_compression", "peak_tension"):
        assert getattr(two, key) == pytest.approx(2.0 * getattr(one, key), rel=1e-9, abs=1e-12)


@every_pattern
def test_words(pattern: Pattern) -> None:
    assert pattern.source
    assert pattern.validity


@every_pattern
def test_full_plasticity_is_not_changed(pattern: Pattern) -> None:
    """Theorem: a self-balanced pattern leaves the moment at large curvature alone (perfectly plastic)."""
    bar = builders.bar(profile("IPE 300"), builders.plastic_steel())
    far = 150.0 * bar.unit_curvature
    _, with_it = builders.curve_through(bar, [far], pattern=pattern)
    _, without = builders.curve_through(bar, [far])
    assert with_it[0] == pytest.approx(without[0], rel=3e-5)
    assert with_it[0] == pytest.approx(bar.plastic.moment, rel=1e-4)


@pytest.mark.parametrize(
    ("name", "peak", "force_kN", "uniform", "k"),
    [("IPE 300", 70.5, 13.62, -2.53, 0.3), ("HEA 260", 117.5, 58.10, -6.69, 0.5)],
)
def test_eccs_values(name: str, peak: float, force_kN: float, uniform: float, k: float) -> None:
    """Values of the project's sheet of methods, part B: fillets in tension at the junction's value."""
    bar = builders.bar(profile(name), builders.plastic_steel())
    residual = bar.residual(EccsRolled(), 1.0)
    assert k * 235.0 == pytest.approx(peak)
    assert residual.force_share * bar.squash / 1e3 == pytest.approx(force_kN, abs=0.006)
    assert -residual.plane[0] * 210e3 == pytest.approx(uniform, abs=0.006)
    assert residual.peak_compression == pytest.approx(-peak + uniform, abs=0.006)
    assert residual.peak_tension == pytest.approx(peak + uniform, abs=0.006)


def test_eccs_balances_by_itself_without_fillets() -> None:
    bar = builders.bar(i_section(300.0, 150.0, 7.1, 10.7), builders.plastic_steel())
    assert abs(bar.residual(EccsRolled(), 1.0).force_share) < 1e-12


@pytest.mark.parametrize("name", ["RHS 200x100x8", "UPE 200", "CHS 168.3x5", "T IPE 300 half"])
def test_eccs_says_where_it_does_not_apply(name: str) -> None:
    bar = builders.bar(profile(name), builders.plastic_steel())
    with pytest.raises(ValueFault, match="rolled I and H"):
        bar.residual(EccsRolled(), 1.0)


def test_more_than_the_yield_strength_is_refused() -> None:
    bar = builders.bar(profile("HEA 260"), builders.plastic_steel(235.0))
    with pytest.raises(ValueFault, match="more than the yield strength"):
        bar.residual(EccsRolled(), 2.0)


def test_points_of_an_unknown_part() -> None:
    bar = builders.bar(profile("IPE 300"), builders.plastic_steel())
    with pytest.raises(ValueFault, match="no plate of that name") as caught:
        bar.residual(Points((PointStress("top flnge", 0.0, 5.0),)), 1.0)
    assert "top flange" in caught.value.suggestion


def test_residual_measured() -> None:
    """D-D04 of checks.toml: a measured pattern does not balance, and that is shown, not hidden."""
    from reference.test_checks import CHECKS

    i = CHECKS["D-D04"]["inputs"]
    rows = {e["quantity"]: e for e in CHECKS["D-D04"]["expect"]}
    section = builders.section_of(i["section"])
    bar = builders.bar(section, Bilinear(210e3, i["fy"]))
    h, b = i["section"]["h"], i["section"]["b"]
    tf = i["section"]["tf"]
    points = [
        *(PointStress("top flange", x / b, s) for x, s in zip(i["f1_x"], i["f1_s"], strict=True)),
        *(PointStress("bottom flange", x / b, s) for x, s in zip(i["f2_x"], i["f2_s"], strict=True)),
        *(PointStress("web", (x - tf) / (h - 2 * tf), s) for x, s in zip(i["w_x"], i["w_s"], strict=True)),
    ]
    pattern = Points(tuple(points))
    along = pattern.over(section)
    for part, key in (
        ("top flange", "mean_flange_1"),
        ("bottom flange", "mean_flange_2"),
        ("web", "mean_web"),
    ):
        s = (np.arange(20000) + 0.5) / 20000
        mean = float(along[part](s).mean())
        assert mean == pytest.approx(rows[key]["value"], abs=rows[key]["abs_tol"])
    residual = bar.residual(pattern, 1.0)
    mean = residual.force_share * i["fy"]
    assert mean == pytest.approx(rows["mean_section"]["value"], abs=rows["mean_section"]["abs_tol"])
    # the row's first yield is that of the pattern as measured; balancing moves it by the mean
    row = rows["first_yield_ratio_if_flange1_compressed"]
    as_measured = replace(residual, plane=(0.0, 0.0, 0.0))
    found = [
        bar.first_yield_curvature(r) * bar.elastic.bending / bar.yield_moment for r in (as_measured, residual)
    ]
    assert found[0] == pytest.approx(row["value"], abs=row["abs_tol"])
    assert found[0] - found[1] == pytest.approx(-mean / i["fy"], abs=0.005)
