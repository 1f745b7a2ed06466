"""Beams against outside numbers: hinge theory in the limit, two independent solutions, collapse loads."""

from __future__ import annotations

import tomllib
from math import sqrt
from pathlib import Path
from typing import Any

import builders
import numpy as np
import pytest

from fibremr.beam.collapse import collapse
from fibremr.beam.effects import deflections
from fibremr.beam.hinges import hinges
from fibremr.beam.model import FIXED, PINNED, Beam, Load, stations
from fibremr.beam.response import Branch, Response
from fibremr.beam.solve import elastic_redundants, solve
from fibremr.bending import trace_curve
from fibremr.case.reader import parse_case
from fibremr.justification import JustifyResult, justify
from fibremr.section import shapes
from fibremr.section.parts import Section
from fibremr.steel.bilinear import Bilinear
from fibremr.steel.law import Law

HERE = Path(__file__).parent
CHECKS = {c["id"]: c for c in tomllib.loads((HERE / "checks.toml").read_text())["check"]}


def response_of(section: Section, law: Law, to: float = 60.0) -> Response:
    branches = []
    for sense in (1, -1):
        bar = builders.bar(section, law, sense=sense)
        branches.append(
            Branch.of(trace_curve(bar, None, stops=[bar.unit_curvature, to * bar.unit_curvature]))
        )
    return Response(*branches)


# thin flanges far apart and a sliver of a web: a shape factor of 1.002, nearly hinge theory itself
TWO_FLANGES = shapes.i_section(1000.0, 300.0, 0.002, 1.0)
LAW = Bilinear(210e3, 355.0)


@pytest.fixture(scope="module")
def thin() -> tuple[Response, float]:
    bar = builders.bar(TWO_FLANGES, LAW)
    assert bar.plastic.moment / bar.yield_moment < 1.002
    return response_of(TWO_FLANGES, LAW), bar.plastic.moment


UNIFORM, LENGTH = 1.0, 10_000.0


def udl(count: int, spans: tuple[int, ...] | None = None) -> tuple[Load, ...]:
    return tuple(Load(i, UNIFORM) for i in (spans or range(count)))


def points(count: int, *shares: float, spans: tuple[int, ...] | None = None) -> tuple[Load, ...]:
    return tuple(Load(i, 0.0, 1000.0, s * LENGTH) for i in (spans or range(count)) for s in shares)


TWO, PROPPED, BOTH = (PINNED, PINNED), (FIXED, PINNED), (FIXED, FIXED)
ROOT2 = sqrt(2.0)
# name: spans, ends, loads, first hinge, collapse (Mp/L2 or Mp/L), place of the first hinge (L) and its
# rotation (MpL/EI); sheet of methods, part E, and D-C04 to D-C10 of checks.toml
CASES: dict[str, tuple[Any, ...]] = {
    "fixed ends, uniform": ((1.0,), BOTH, udl(1), 12.0, 16.0, 0.0, 1 / 6),
    "fixed ends, thirds": ((1.0,), BOTH, points(1, 1 / 3, 2 / 3), 4.5, 6.0, 0.0, 1 / 6),
    "propped, uniform": ((1.0,), PROPPED, udl(1), 8.0, 6 + 4 * ROOT2, 0.0, 0.1524),
    "propped, midspan": ((1.0,), PROPPED, points(1, 0.5), 16 / 3, 6.0, 0.0, 1 / 24),
    "propped, at 0.3": ((1.0,), PROPPED, points(1, 0.3), 2 / (0.3 * 0.7 * 1.7), 1.7 / 0.21, 0.0, 0.1483),
    "two spans, uniform": ((1.0, 1.0), TWO, udl(2), 8.0, 6 + 4 * ROOT2, 1.0, 0.3047),
    "two spans, midspans": ((1.0, 1.0), TWO, points(2, 0.5), 16 / 3, 6.0, 1.0, 1 / 12),
    "two spans, thirds": ((1.0, 1.0), TWO, points(2, 1 / 3, 2 / 3), 3.0, 4.0, 1.0, 0.2222),
    "three spans, uniform": ((1.0, 1.0, 1.0), TWO, udl(3), 10.0, 6 + 4 * ROOT2, 1.0, 0.1381),
    "four spans, uniform": ((1.0,) * 4, TWO, udl(4), 28 / 3, 6 + 4 * ROOT2, 1.0, 0.1452),
    "propped, at 0.7": (
        (1.0,),
        PROPPED,
        points(1, 0.7),
        1 / (0.21 * (1 - 0.3 * 1.3 / 2)),
        1.3 / 0.21,
        0.7,
        0.172,
    ),
    "propped, at 0.8": (
        (1.0,),
        PROPPED,
        points(1, 0.8),
        1 / (0.16 * (1 - 0.2 * 1.2 / 2)),
        1.2 / 0.16,
        0.8,
        0.467,
    ),
    "two spans, one midspan": ((1.0, 1.0), TWO, points(2, 0.5, spans=(0,)), 4.923, 6.0, 0.5, 0.5833),
    "three spans, Stuessi and Kollbrunner": (
        (1.0, 1.0, 1.0),
        TWO,
        points(3, 0.5, spans=(1,)),
        5.714,
        8.0,
        1.5,
        2 / 3,
    ),
    "two spans, one short": ((1.0, 0.7), TWO, udl(2), 10.127, 6 + 4 * ROOT2, 1.0, 0.0856),
}


@pytest.mark.parametrize("name", CASES)
def test_hinge_theory_in_the_limit(name: str, thin: tuple[Response, float]) -> None:
    response, mp = thin
    shares, ends, loads, first, last, place, rotation = CASES[name]
    beam = Beam(tuple(s * LENGTH for s in shares), ends, loads)
    made = stations(beam, 240)
    unit = (mp / LENGTH**2 / UNIFORM) if loads[0].uniform else (mp / LENGTH / 1000.0)
    found = collapse(made, mp, mp)
    assert found.factor / unit == pytest.approx(last, rel=3e-5)
    elastic = made.moment(1.0, elastic_redundants(made, 1.0))
    at = int(np.argmax(np.abs(elastic)))
    assert mp / abs(elastic[at]) / unit == pytest.approx(first, rel=2e-3)
    # just below collapse the first hinge has turned by nearly what hinge theory asks of it
    solved = solve(made, response, 0.9995 * found.factor)
    hinge = min(hinges(solved, mp, mp), key=lambda h: abs(h.at - place * LENGTH))
    assert hinge.at == pytest.approx(place * LENGTH, abs=1e-6)
    # between first hinge and collapse the rotation grows with the load, all of it for point loads
    expected = rotation * (1.0 - 0.0005 * last / (last - first))
    assert hinge.required / (mp * LENGTH / response.stiffness) == pytest.approx(expected, rel=0.006)


@pytest.mark.parametrize("name", ["D-C04", "D-C06", "D-C08", "D-C09", "D-C10"])
def test_collapse_of_the_outside_checks(name: str) -> None:
    rows = {e["quantity"]: e["value"] for e in CHECKS[name]["expect"]}
    kind = {
        "D-C04": "fixed ends, uniform", "D-C06": "propped, uniform", "D-C08": "two spans, midspans",
        "D-C09": "three spans, uniform", "D-C10": "two spans, uniform",
    }[name]  # fmt: skip
    _, _, _, first, last, _, rotation = CASES[kind]
    theta = rows.get("theta_support", rows.get("theta_end"))
    assert (first, last) == pytest.approx((rows["first_hinge"], rows["collapse"]), rel=2e-3)
    assert rotation == pytest.approx(theta, rel=2e-3)


def test_two_spans_of_ipe_360() -> None:
    """D-C11: physical numbers."""
    i = CHECKS["D-C11"]["inputs"]
    rows = {e["quantity"]: e["value"] for e in CHECKS["D-C11"]["expect"]}
    mp, length = i["W_pl"] * i["fy"], i["L"]
    made = stations(Beam((length, length), TWO, (Load(0, 1.0), Load(1, 1.0))))
    assert mp / 1e6 == pytest.approx(rows["M_p"], rel=1e-3)
    assert collapse(made, mp, mp).factor == pytest.approx(rows["w_collapse"], rel=3e-3)
    elastic = made.moment(1.0, elastic_redundants(made, 1.0))
    assert mp / np.max(np.abs(elastic)) == pytest.approx(rows["w_first"], rel=3e-3)


@pytest.mark.parametrize(("share", "rotation"), [(0.80, 8.46), (0.90, 15.89), (0.95, 19.99)])
def test_spread_plasticity(share: float, rotation: float) -> None:
    """Two spans of 8 m of the I without fillets, perfectly plastic: an independent solution."""
    section = shapes.i_section(400.0, 180.0, 8.6, 13.5)
    bar = builders.bar(section, LAW)
    made = stations(Beam((8000.0, 8000.0), TWO, (Load(0, 1.0), Load(1, 1.0))))
    mp = bar.plastic.moment
    load = share * (6 + 4 * ROOT2) * mp / 8000.0**2
    (hinge,) = (h for h in hinges(solve(made, response_of(section, LAW), load), mp, mp) if h.support == 1)
    assert 1e3 * hinge.required == pytest.approx(rotation, abs=0.006)


DECK = b"""
title = "Harrow Quay gallery deck"
[section]
profile = "IPE 450"
[steel]
grade = "S355"
law = "quad-linear"
[beam]
spans = ["8 m", "8 m"]
restraints = { top = "continuous", bottom = "2 m" }
stiffeners = true
loads = [ { span = "all", uniform = "94 kN/m" } ]
service_factor = 0.68
deflection_limit = "L/360"
"""


@pytest.fixture(scope="module")
def deck() -> JustifyResult:
    return justify(parse_case(DECK, name="deck.toml"))


def test_the_deck_beam(deck: JustifyResult) -> None:
    """Numbers on which two independent solutions agree."""
    assert deck.plastic[0] / 1e6 == pytest.approx(604.1, abs=0.05)
    assert deck.section.record.moments.My_kNm == pytest.approx(532.4, abs=0.05)
    assert deck.ladder.first_yield == pytest.approx(0.708, abs=5e-4)
    assert deck.ladder.first_hinge == pytest.approx(0.835, abs=5e-4)
    assert deck.ladder.simple_plastic_collapse == pytest.approx(1.171, abs=5e-4)
    (judged,) = deck.hinges
    hinge = judged.hinge
    assert hinge.moment / 1e6 == pytest.approx(624.8, abs=0.1)
    assert deck.shown.moment.max() / 1e6 == pytest.approx(472.0, abs=0.1)
    peak = np.max(np.abs(deck.shown.curvature)) * 225.0 / (355.0 / 210e3)
    assert peak == pytest.approx(14.8, abs=0.05)
    assert hinge.at - hinge.region[0] == pytest.approx(1660.0, abs=5.0)
    assert 1e3 * judged.case_law == pytest.approx(9.61, abs=0.02)
    assert 1e3 * judged.elastic_plastic == pytest.approx(11.13, abs=0.02)
    assert 1e3 * hinge.theta_p == pytest.approx(13.19, abs=0.01)
    assert deck.deflection is not None
    assert deck.deflection.largest == pytest.approx(20.0, abs=0.05)
    assert deck.verdict == "justified"


def test_available_rotation_of_the_deck_beam(deck: JustifyResult) -> None:
    """(R + 1 - M/Mp) theta_p with R = 3."""
    (judged,) = deck.hinges
    expected = (4.0 - judged.hinge.moment / judged.hinge.plastic) * judged.hinge.theta_p
    assert judged.governing is not None
    assert judged.governing.rotation == pytest.approx(expected, rel=1e-12)
    assert judged.use == pytest.approx(11.13 / 39.11, abs=1e-3)


def test_elastic_deflection_of_two_spans() -> None:
    """Largest deflection w L4/(184.6 EI) of two equal spans under uniform load."""
    section = shapes.i_section(400.0, 180.0, 8.6, 13.5)
    response = response_of(section, LAW)
    made = stations(Beam((8000.0, 8000.0), TWO, (Load(0, 5.0), Load(1, 5.0))))
    solved = solve(made, response, 1.0)
    sag = deflections(solved)
    assert sag.max() == pytest.approx(5.0 * 8000.0**4 / (184.6 * response.stiffness), rel=1e-3)
    assert abs(sag[made.starts[1]]) < 1e-9
