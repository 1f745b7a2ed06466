"""Random beams: equilibrium to rounding, mirrors, and a finite-element beam written here with numpy alone."""

from __future__ import annotations

from functools import cache

import builders
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fibremr.beam.collapse import collapse
from fibremr.beam.effects import reactions
from fibremr.beam.hinges import hinges
from fibremr.beam.model import FIXED, PINNED, Beam, Load, stations
from fibremr.beam.response import Branch, Response
from fibremr.beam.solve import solve
from fibremr.bending import trace_curve
from fibremr.section.catalogue import profile
from fibremr.steel.bilinear import Bilinear
from fibremr.steel.quad_linear import QuadLinear

LAWS = {
    "hardening": Bilinear(210e3, 355.0, 2100.0),
    "quad-linear": QuadLinear(210e3, 355.0, 490.0),
    "plastic": Bilinear(210e3, 355.0),
}


@cache
def response(name: str) -> tuple[Response, float]:
    branches = []
    for sense in (1, -1):
        bar = builders.bar(profile("IPE 400"), LAWS[name], sense=sense)
        branches.append(
            Branch.of(trace_curve(bar, None, stops=[bar.unit_curvature, 60 * bar.unit_curvature]))
        )
    return Response(*branches), bar.plastic.moment


@st.composite
def beams(draw: st.DrawFn) -> Beam:
    spans = tuple(draw(st.lists(st.floats(4000.0, 12000.0), min_size=1, max_size=4)))
    ends = (draw(st.sampled_from([PINNED, FIXED])), draw(st.sampled_from([PINNED, FIXED])))
    loads = [Load(0, 10.0)]
    for i, length in enumerate(spans):
        if draw(st.booleans()):
            loads.append(Load(i, draw(st.floats(2.0, 40.0))))
        if draw(st.booleans()):
            loads.append(Load(i, 0.0, draw(st.floats(5e3, 9e4)), draw(st.floats(0.1, 0.9)) * length))
    return Beam(spans, ends, tuple(loads))


@given(beams(), st.sampled_from(sorted(LAWS)), st.floats(0.3, 0.97))
@settings(max_examples=40)
def test_equilibrium(beam: Beam, law: str, share: float) -> None:
    found, mp = response(law)
    made = stations(beam)
    factor = share * collapse(made, mp, mp).factor
    solved = solve(made, found, factor)
    total = factor * sum(l.uniform * beam.spans[l.span] + l.point for l in beam.loads)
    forces = reactions(solved)
    assert sum(forces) == pytest.approx(total, rel=1e-10)
    # moments of all forces about the left support, with the end moments
    arms = beam.supports
    moment = sum(r * x for r, x in zip(forces, arms, strict=True))
    for l in beam.loads:
        left = arms[l.span]
        moment -= factor * (
            l.uniform * beam.spans[l.span] * (left + beam.spans[l.span] / 2) + l.point * (left + l.at)
        )
    ends = solved.moment[-1] - solved.moment[0]
    assert moment + ends == pytest.approx(0.0, abs=1e-9 * mp * len(beam.spans) + 1e-9 * abs(ends) + 1.0)
    assert np.all(np.abs(solved.moment) <= found.sagging.largest * 1.002)


@given(beams(), st.sampled_from(sorted(LAWS)), st.floats(0.5, 0.95))
@settings(max_examples=25)
def test_mirrored_beams_agree(beam: Beam, law: str, share: float) -> None:
    found, mp = response(law)
    count = len(beam.spans)
    mirrored = Beam(
        beam.spans[::-1],
        (beam.ends[1], beam.ends[0]),
        tuple(
            Load(count - 1 - l.span, l.uniform, l.point, beam.spans[l.span] - l.at if l.point else 0.0)
            for l in beam.loads
        ),
    )
    a, b = stations(beam), stations(mirrored)
    first, second = collapse(a, mp, mp).factor, collapse(b, mp, mp).factor
    assert first == pytest.approx(second, rel=1e-9)
    one, two = solve(a, found, share * first), solve(b, found, share * first)
    np.testing.assert_allclose(one.redundants, two.redundants[::-1], rtol=1e-6, atol=1e-7 * mp)
    turned = [h.required for h in hinges(two, mp, mp)][::-1]
    np.testing.assert_allclose([h.required for h in hinges(one, mp, mp)], turned, rtol=2e-3, atol=2e-6)


# --- a displacement-based beam, with nothing of fibremr but the section's own polygon -----------------


class FiniteElements:
    """Euler-Bernoulli elements with cubic deflection and three Gauss points, Newton on displacements."""

    def __init__(self, beam: Beam, moment: np.ndarray, curvature: np.ndarray, each: int) -> None:
        self.beam, self.m, self.k = beam, moment, curvature
        self.work = np.concatenate([[0.0], np.cumsum(np.diff(curvature) * (moment[:-1] + moment[1:]) / 2.0)])
        nodes, support = [0.0], {0}
        for span, length in enumerate(beam.spans):
            left = beam.supports[span]
            ends = sorted({0.0, length, *(l.at for l in beam.loads if l.span == span and l.point)})
            for a, b in zip(ends, ends[1:], strict=False):
                n = max(8, int(each * (b - a) / length))
                t = (1 - np.cos(np.pi * np.arange(1, n + 1) / n)) / 2
                nodes += list(left + a + (b - a) * t)
            support.add(len(nodes) - 1)
        self.x = np.array(nodes)
        dofs = 2 * self.x.size
        fixed = {2 * i for i in support}
        fixed |= {1} if beam.ends[0] == FIXED else set()
        fixed |= {dofs - 1} if beam.ends[1] == FIXED else set()
        self.free = np.array([i for i in range(dofs) if i not in fixed])
        self.u = np.zeros(dofs)
        self.force = self._loads()

    def _loads(self) -> np.ndarray:
        f = np.zeros(2 * self.x.size)
        h = np.diff(self.x)
        middle = (self.x[:-1] + self.x[1:]) / 2
        for l in self.beam.loads:
            left, right = self.beam.supports[l.span], self.beam.supports[l.span + 1]
            for e in np.flatnonzero((middle > left) & (middle < right)) if l.uniform else ():
                f[2 * e : 2 * e + 4] += l.uniform * h[e] * np.array([0.5, h[e] / 12, 0.5, -h[e] / 12])
            if l.point:
                f[2 * int(np.argmin(np.abs(self.x - left - l.at)))] += l.point
        return f

    def moment_of(self, curvature: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        size = np.abs(curvature)
        i = np.clip(np.searchsorted(self.k, size, side="right") - 1, 0, self.k.size - 2)
        slope = (self.m[i + 1] - self.m[i]) / (self.k[i + 1] - self.k[i])
        return np.sign(curvature) * (self.m[i] + slope * (size - self.k[i])), slope

    def shapes(self) -> tuple[np.ndarray, np.ndarray]:
        """Second derivatives of the shape functions `(element, point, 4)`, sign for sagging, and weights."""
        h = np.diff(self.x)[:, None]
        t = (np.array([-np.sqrt(0.6), 0.0, np.sqrt(0.6)])[None, :] + 1) / 2
        b = np.stack([(12 * t - 6) / h**2, (6 * t - 4) / h, (6 - 12 * t) / h**2, (6 * t - 2) / h], axis=-1)
        return -b, h * np.array([5 / 18, 8 / 18, 5 / 18])[None, :]

    def solve(self, steps: int, factor: float) -> None:
        for s in range(1, steps + 1):
            target = factor * s / steps * self.force
            small = 1e-6 * np.max(np.abs(target))
            for _ in range(400):
                out, stiff = self._out(self.u, target)
                if np.max(np.abs(out)) < small:
                    break
                step = np.linalg.solve(stiff, out)
                length, here = 1.0, self._energy(self.u, target)
                slope = float(out @ step)
                while length > 1e-6:
                    trial = self.u.copy()
                    trial[self.free] += length * step
                    if self._energy(trial, target) <= here - 1e-4 * length * slope:
                        break
                    length /= 2.0
                self.u = trial
            else:
                raise AssertionError("the finite elements did not settle")

    def _energy(self, u: np.ndarray, target: np.ndarray) -> float:
        """Potential energy: convex, and least where the forces balance."""
        b, w = self.shapes()
        index = 2 * np.arange(self.x.size - 1)[:, None] + np.arange(4)[None, :]
        size = np.abs(np.einsum("epi,ei->ep", b, u[index]))
        i = np.clip(np.searchsorted(self.k, size, side="right") - 1, 0, self.k.size - 2)
        slope = (self.m[i + 1] - self.m[i]) / (self.k[i + 1] - self.k[i])
        d = size - self.k[i]
        return float(np.sum(w * (self.work[i] + self.m[i] * d + slope * d * d / 2.0)) - target @ u)

    def _out(self, u: np.ndarray, target: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Forces out of balance and stiffness, at the free displacements."""
        b, w = self.shapes()
        index = 2 * np.arange(self.x.size - 1)[:, None] + np.arange(4)[None, :]
        kappa = np.einsum("epi,ei->ep", b, u[index])
        m, slope = self.moment_of(kappa)
        inner = np.zeros(u.size)
        np.add.at(inner, index, np.einsum("ep,ep,epi->ei", w, m, b))
        stiff = np.zeros((u.size, u.size))
        local = np.einsum("ep,ep,epi,epj->eij", w, slope, b, b)
        np.add.at(stiff, (index[:, :, None], index[:, None, :]), local)
        return (target - inner)[self.free], stiff[np.ix_(self.free, self.free)]

    def plastic_rotation(self, low: float, high: float, stiffness: float) -> float:
        b, w = self.shapes()
        index = 2 * np.arange(self.x.size - 1)[:, None] + np.arange(4)[None, :]
        kappa = np.einsum("epi,ei->ep", b, self.u[index])
        m, _ = self.moment_of(kappa)
        t = (np.array([-np.sqrt(0.6), 0.0, np.sqrt(0.6)]) + 1) / 2
        x = self.x[:-1, None] + np.diff(self.x)[:, None] * t
        inside = (x > low) & (x < high)
        return abs(float(np.sum((w * (kappa - m / stiffness))[inside])))


@pytest.mark.parametrize(
    ("spans", "ends", "loads", "law", "share"),
    [
        ((8000.0, 8000.0), (PINNED, PINNED), (Load(0, 20.0), Load(1, 20.0)), "quad-linear", 0.9),
        ((8000.0, 8000.0), (PINNED, PINNED), (Load(0, 20.0), Load(1, 20.0)), "hardening", 1.05),
        (
            (7000.0, 9500.0, 6000.0), (FIXED, PINNED),
            (Load(0, 18.0), Load(1, 22.0), Load(2, 9.0)), "hardening", 0.98,
        ),
        ((9000.0,), (FIXED, FIXED), (Load(0, 12.0), Load(0, 0.0, 6e4, 3000.0)), "quad-linear", 0.97),
        ((6000.0, 8000.0), (PINNED, FIXED), (Load(0, 0.0, 9e4, 2500.0), Load(1, 25.0)), "hardening", 1.0),
    ],
)  # fmt: skip
def test_required_rotation_agrees_with_finite_elements(
    spans: tuple[float, ...], ends: tuple[str, str], loads: tuple[Load, ...], law: str, share: float
) -> None:
    found, mp = response(law)
    beam = Beam(spans, ends, loads)
    made = stations(beam, 240)
    factor = share * collapse(made, mp, mp).factor
    solved = solve(made, found, factor)
    model = FiniteElements(beam, found.sagging.moment, found.sagging.curvature, 90)
    model.solve(4, factor)
    turned = hinges(solved, mp, mp)
    assert turned
    for h in turned:
        if h.required < 1e-4:
            continue
        theirs = model.plastic_rotation(*h.region, found.stiffness)
        assert h.required == pytest.approx(theirs, rel=0.01), h
