"""One harness that every steel law must pass, and the values of each law's source."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fibremr.errors import ValueFault
from fibremr.steel.bilinear import Bilinear
from fibremr.steel.law import Curve, Law
from fibremr.steel.quad_linear import QuadLinear

LAWS: dict[str, Law] = {
    "elastic-plastic": Bilinear(210e3, 355.0),
    "bilinear": Bilinear(210e3, 355.0, 2100.0),
    "steep bilinear": Bilinear(200e3, 240.0, 20e3),
    "quad-linear": QuadLinear(210e3, 355.0, 490.0),
    "quad-linear S460": QuadLinear(210e3, 460.0, 550.0),
}
every_law = pytest.mark.parametrize("law", LAWS.values(), ids=LAWS.keys())


def path(law: Law, strains: np.ndarray) -> np.ndarray:
    """Stress along a path of strains for one fibre."""
    history = law.start((1, 1))
    stresses = []
    for e in strains:
        s, _, history = law.advance(np.array([[e]]), history)
        stresses.append(float(s[0, 0]))
    return np.array(stresses)


def monotone(law: Law, strains: np.ndarray) -> np.ndarray:
    """Stress on first loading, for all strains at once."""
    column = strains[:, None]
    return law.advance(column, law.start(column.shape))[0][:, 0]


def reach(law: Law) -> float:
    return min(law.largest_strain, 0.12)


@every_law
def test_words(law: Law) -> None:
    assert law.name
    assert law.source
    assert law.modulus > 0.0
    assert law.yield_stress > 0.0
    assert law.largest_stress >= law.yield_stress
    assert all(0.0 < k <= law.largest_strain for k in law.kinks)


@every_law
def test_elastic_up_to_yield_and_odd(law: Law) -> None:
    first = law.yield_stress / law.modulus
    e = np.linspace(0.0, first, 11)
    np.testing.assert_allclose(monotone(law, e), law.modulus * e, rtol=1e-13, atol=1e-12)
    far = np.linspace(0.0, reach(law), 301)
    np.testing.assert_allclose(monotone(law, -far), -monotone(law, far), rtol=1e-13, atol=1e-12)


@every_law
def test_stress_stays_within_what_the_law_declares(law: Law) -> None:
    s = monotone(law, np.linspace(0.0, reach(law), 500))
    assert np.all(np.diff(s) >= -1e-10)
    assert s.max() <= law.largest_stress * (1.0 + 1e-12)


@every_law
def test_tangent_is_the_slope(law: Law) -> None:
    e = np.linspace(1e-5, 0.999 * reach(law), 997)
    d = 1e-7
    e = e[np.min(np.abs(e[:, None] - np.array(law.kinks)), axis=1) > 2 * d]
    _, tangent, _ = law.advance(e[:, None], law.start((e.size, 1)))
    slope = (monotone(law, e + d) - monotone(law, e - d)) / (2.0 * d)
    np.testing.assert_allclose(tangent[:, 0], slope, rtol=1e-5, atol=1e-2)


@every_law
def test_many_small_steps_are_one_large_step(law: Law) -> None:
    strains = np.linspace(0.0, 0.8 * reach(law), 400)
    np.testing.assert_allclose(path(law, strains), monotone(law, strains), rtol=1e-10)


@every_law
def test_unloads_with_the_modulus_and_reloads_onto_the_curve(law: Law) -> None:
    first = law.yield_stress / law.modulus
    out = 6.0 * first
    back = out - 1.5 * first
    s_out, s_back, s_again, s_on = path(law, np.array([out, back, out, out + first]))
    assert s_out - s_back == pytest.approx(law.modulus * 1.5 * first, rel=1e-12)
    assert s_again == pytest.approx(s_out, rel=1e-12)
    assert s_on == pytest.approx(float(monotone(law, np.array([out + first]))[0]), rel=1e-12)


@every_law
def test_yields_in_reverse_after_twice_the_yield_stress(law: Law) -> None:
    first = law.yield_stress / law.modulus
    out = 4.0 * first
    turn = out - 2.0 * first
    just_before, just_after = turn + 1e-4 * first, turn - 1e-4 * first
    history = law.start((1, 1))
    stress, _, history = law.advance(np.array([[out]]), history)
    before, t_before, _ = law.advance(np.array([[just_before]]), history)
    after, t_after, _ = law.advance(np.array([[just_after]]), history)
    assert t_before[0, 0] == law.modulus
    assert t_after[0, 0] < law.modulus
    assert before[0, 0] == pytest.approx(float(stress[0, 0]) - 2.0 * law.yield_stress, rel=1e-3)
    assert abs(float(after[0, 0]) - float(before[0, 0])) < 1e-3 * law.yield_stress


@every_law
@given(st.lists(st.floats(-0.03, 0.03), min_size=2, max_size=8))
def test_reversals_are_continuous_and_dissipate(law: Law, turns: list[float]) -> None:
    """Along any path stress is continuous, its slope never beyond the modulus, and work is not gained."""
    strains = np.concatenate(
        [[0.0], *(np.linspace(a, b, 60)[1:] for a, b in zip([0.0, *turns], turns, strict=False))]
    )
    stresses = path(law, strains)
    step = np.abs(np.diff(strains))
    assert np.all(np.abs(np.diff(stresses)) <= law.modulus * step * (1.0 + 1e-9) + 1e-9)
    closed = np.append(strains, strains[0])
    stress_back = path(law, closed)
    work = np.sum(np.diff(closed) * (stress_back[:-1] + stress_back[1:]) / 2.0)
    stored = stress_back[-1] ** 2 / (2.0 * law.modulus)
    slack = law.modulus * np.max(np.abs(np.diff(closed))) ** 2  # the trapezium across a kink, each turn
    if law.name == "bilinear":  # kinematic hardening stores energy that is not elastic
        stored = 0.0
    assert work >= stored - 2 * (len(turns) + 2) * slack


@every_law
def test_history_passed_in_is_not_changed(law: Law) -> None:
    history = law.start((3, 2))
    copies = [h.copy() for h in history]
    law.advance(np.full((3, 2), 0.02), history)
    for h, c in zip(history, copies, strict=True):
        np.testing.assert_array_equal(h, c)


@every_law
def test_fibres_and_samples_do_not_mix(law: Law) -> None:
    rng = np.random.default_rng(1)
    history, alone = law.start((4, 3)), [law.start((1, 1)) for _ in range(12)]
    for _ in range(12):
        e = rng.uniform(-0.03, 0.03, (4, 3))
        s, t, history = law.advance(e, history)
        for i in range(12):
            si, ti, alone[i] = law.advance(e.reshape(12)[i].reshape(1, 1), alone[i])
            assert s.reshape(12)[i] == pytest.approx(si[0, 0], rel=1e-13, abs=1e-10)
            assert t.reshape(12)[i] == ti[0, 0]


class BilinearByCurve(Curve):
    """The bilinear law through the machinery of curves with history."""

    modulus, yield_stress = 210e3, 355.0

    def curve(self, strain: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Stress and slope."""
        return 355.0 + 2100.0 * (strain - 355.0 / 210e3), np.full_like(strain, 2100.0)


@given(st.lists(st.floats(-0.02, 0.02), min_size=1, max_size=20))
def test_two_ways_to_kinematic_hardening_agree(strains: list[float]) -> None:
    by_curve = path(BilinearByCurve(), np.array(strains))  # type: ignore[arg-type]
    np.testing.assert_allclose(by_curve, path(LAWS["bilinear"], np.array(strains)), rtol=1e-9, atol=1e-7)


@pytest.mark.parametrize(
    ("fy", "fu", "last", "plateau", "slope", "at_2", "at_5", "knee"),
    [
        # Yun and Gardner (2017), values worked out in the project's sheet of methods
        (235.0, 360.0, 0.20833, 0.01500, 1616.4, 243.08, 291.57, 56.60),
        (275.0, 430.0, 0.21628, 0.01500, 1925.2, 284.63, 342.38, 49.88),
        (355.0, 490.0, 0.16531, 0.01745, 2282.6, 360.82, 429.30, 32.19),
        (460.0, 550.0, 0.09818, 0.02864, 3235.3, 460.00, 518.82, 21.01),
    ],
)
def test_quad_linear_values(
    fy: float, fu: float, last: float, plateau: float, slope: float, at_2: float, at_5: float, knee: float
) -> None:
    law = QuadLinear(210e3, fy, fu)
    assert law.largest_strain == pytest.approx(last, abs=6e-6)
    assert law.plateau_end == pytest.approx(plateau, abs=6e-6)
    assert law.hardening == pytest.approx(slope, abs=0.06)
    found = monotone(law, np.array([0.02, 0.05, law.knee, law.largest_strain]))
    assert found[:2] == pytest.approx([at_2, at_5], abs=0.006)
    assert found[2] == pytest.approx(fy + 0.625 * (fu - fy), rel=1e-12)
    assert found[3] == pytest.approx(fu, rel=1e-12)
    assert law.knee / (fy / 210e3) == pytest.approx(knee, abs=0.006)


def test_quad_linear_refuses_what_it_has_no_curve_for() -> None:
    with pytest.raises(ValueFault, match="ultimate strength above"):
        QuadLinear(210e3, 355.0, 355.0)
    with pytest.raises(ValueFault, match="before first yield"):
        QuadLinear(60e3, 960.0, 1800.0)
