"""EN 1993-1-1:2005 Table 5.2: values of its expressions, both sides of each border, known sections."""

from __future__ import annotations

from math import inf, sqrt

import builders
import pytest

from fibremr.classes import classify
from fibremr.limits import en_1993_1_1_2005 as en
from fibremr.section import shapes
from fibremr.section.catalogue import profile
from fibremr.steel.bilinear import Bilinear


def test_epsilon() -> None:
    assert en.epsilon(235.0) == 1.0
    assert en.epsilon(355.0) == pytest.approx(0.81361651, rel=1e-7)


@pytest.mark.parametrize(
    ("alpha", "psi", "limits"),
    [
        (0.5, -1.0, (72.0, 83.0, 124.0)),
        (1.0, 1.0, (33.0, 38.0, 42.0)),
        (0.75, 0.0, (396 / 8.75, 456 / 8.75, 42 / 0.67)),
        (0.25, -2.0, (144.0, 166.0, 62.0 * 3.0 * sqrt(2.0))),
        (0.0, -1.0, (inf, inf, 124.0)),
    ],
)
def test_internal(alpha: float, psi: float, limits: en.Three) -> None:
    assert en.internal(alpha, psi, 1.0) == pytest.approx(limits)


def test_internal_in_pure_bending_with_rounding() -> None:
    """456/(13 alpha - 1) gives 82.9 at one half and not 83: rounding of alpha must not choose the row."""
    assert en.internal(0.5 + 1e-12, -1.0 - 1e-12, 1.0) == pytest.approx((72.0, 83.0, 124.0))
    assert en.internal(0.5 + 1e-6, -1.0, 1.0)[1] == pytest.approx(82.909, abs=1e-3)


@pytest.mark.parametrize(
    ("alpha", "psi", "tip", "limits"),
    [
        (1.0, 1.0, True, (9.0, 10.0, 14.0)),
        (0.5, 0.0, True, (18.0, 20.0, 21.0 * sqrt(0.57))),
        (0.25, -1.0, False, (72.0, 80.0, 21.0 * sqrt(23.8))),
        (1.0, 0.0, False, (9.0, 10.0, 21.0 * sqrt(1.7))),
    ],
)
def test_outstand(alpha: float, psi: float, tip: bool, limits: en.Three) -> None:
    assert en.outstand(alpha, psi, 1.0, tip_compressed=tip) == pytest.approx(limits)


def test_buckling_factors_join() -> None:
    assert en.outstand_factor(1.0, tip_compressed=True) == pytest.approx(0.43)
    assert en.outstand_factor(1.0, tip_compressed=False) == pytest.approx(0.43, abs=0.002)
    assert en.outstand_factor(1e-12, tip_compressed=False) == pytest.approx(1.70, abs=1e-9)
    assert en.outstand_factor(-1e-12, tip_compressed=False) == pytest.approx(1.70, abs=1e-9)
    assert en.outstand_factor(-1.0, tip_compressed=True) == pytest.approx(0.85)


@pytest.mark.parametrize(
    ("limits", "ratios"), [((9.0, 10.0, 14.0), (9.0, 10.0, 14.0)), ((50.0, 70.0, 90.0), (50.0, 70.0, 90.0))]
)
def test_borders(limits: en.Three, ratios: en.Three) -> None:
    for number, ratio in enumerate(ratios, start=1):
        assert en.class_of(ratio, limits) == number
        assert en.class_of(ratio * (1.0 - 1e-6), limits) == number
        assert en.class_of(ratio * (1.0 + 1e-6), limits) == number + 1


def number(name: str, fy: float, *, compression: float = 0.0, **how: object) -> int | None:
    section = profile(name)
    bar = builders.bar(section, Bilinear(210e3, fy), axial=-compression, **how)  # type: ignore[arg-type]
    return classify(bar, section, minor=bool(how.get("minor", False))).number


@pytest.mark.parametrize(
    ("name", "classes"),
    [
        # sheet of methods D3.8, and published tables of rolled sections in bending
        ("IPE 300", {235: 1, 275: 1, 355: 1, 460: 1}),
        ("HEA 260", {235: 1, 275: 1, 355: 3, 460: 3}),
        ("HEA 300", {235: 1, 275: 2, 355: 3, 460: 3}),
        ("HEB 300", {235: 1, 275: 1, 355: 1, 460: 1}),
    ],
)
def test_rolled_sections_in_bending(name: str, classes: dict[float, int]) -> None:
    assert {fy: number(name, fy) for fy in classes} == classes


def test_ipe_300_with_compression() -> None:
    """S355 with 400 kN: alpha 0.8192, web limits 33.39 and 38.45, class 2."""
    section = profile("IPE 300")
    bar = builders.bar(section, Bilinear(210e3, 355.0), axial=-400e3)
    web = next(p for p in classify(bar, section, minor=False).parts if p.part == "web")
    assert web.number == 2
    assert web.limit == pytest.approx(38.45, abs=0.005)
    assert web.ratio == pytest.approx(35.0, abs=0.05)


def test_ipe_300_nearly_squashed_is_class_4() -> None:
    """In uniform compression the web at 35.0 exceeds 42 epsilon = 34.2."""
    section = profile("IPE 300")
    bar = builders.bar(section, Bilinear(210e3, 355.0))
    bar = builders.bar(section, Bilinear(210e3, 355.0), axial=-0.9999 * bar.squash)
    assert classify(bar, section, minor=False).number == 4


def test_tension_in_the_flange_is_not_classed() -> None:
    section = profile("HEA 260")
    parts = {
        p.part for p in classify(builders.bar(section, Bilinear(210e3, 235.0)), section, minor=False).parts
    }
    assert parts == {"top flange", "web"}
    hogging = classify(builders.bar(section, Bilinear(210e3, 235.0), sense=-1), section, minor=False)
    assert {p.part for p in hogging.parts} == {"bottom flange", "web"}


def test_tee() -> None:
    """Sagging: the flange is compressed and the stem mostly pulled; hogging: the stem's tip is compressed."""
    section = profile("T IPE 300 half")
    steel = Bilinear(210e3, 355.0)
    sagging = classify(builders.bar(section, steel), section, minor=False)
    hogging = classify(builders.bar(section, steel, sense=-1), section, minor=False)
    assert {p.part for p in sagging.parts} >= {"top flange"}
    stem = next(p for p in hogging.parts if p.part == "web")
    assert stem.ratio == pytest.approx((150.0 - 10.7 - 15.0) / 7.1)
    assert hogging.number == 3 or hogging.number == 4
    assert sagging.number == 1


def test_minor_axis_of_an_h_section() -> None:
    section = profile("HEA 300")
    steel = Bilinear(210e3, 355.0)
    found = classify(builders.bar(section, steel, minor=True), section, minor=True)
    assert {p.part for p in found.parts} == {"top flange", "bottom flange"}
    assert found.number == 3
    alpha, psi = 1.0, (8.5 / 2 + 27.0) / 150.0
    limits = en.outstand(alpha, psi, en.epsilon(355.0), tip_compressed=True)
    assert found.parts[0].limit == pytest.approx(limits[2], rel=1e-9)


def test_tubes_on_both_sides_of_each_border() -> None:
    for number_, border in ((1, 50.0), (2, 70.0), (3, 90.0)):
        for side, expected in ((-0.01, number_), (0.01, number_ + 1)):
            section = shapes.build(shapes.TubeShape((border + side) * 5.0, 5.0))
            assert (
                classify(builders.bar(section, Bilinear(210e3, 235.0)), section, minor=False).number
                == expected
            )


def test_hollow_sections() -> None:
    """Flat width is the width less three thicknesses for a hot-finished tube."""
    section = profile("RHS 300x200x8")
    found = classify(builders.bar(section, Bilinear(210e3, 355.0)), section, minor=False)
    flange = next(p for p in found.parts if p.part == "top flange")
    web = next(p for p in found.parts if p.part == "left web")
    assert flange.ratio == pytest.approx((200.0 - 24.0) / 8.0)
    assert web.ratio == pytest.approx((300.0 - 24.0) / 8.0)
    assert flange.limit == pytest.approx(33.0 * en.epsilon(355.0))
    assert web.limit == pytest.approx(72.0 * en.epsilon(355.0))
    assert found.number == 1


@pytest.mark.parametrize("name", ["UPE 200", "L 100x100x10"])
def test_no_rule_for_the_shape(name: str) -> None:
    assert number(name, 355.0) is None


@pytest.mark.parametrize("name", ["IPE 300", "HEA 200", "T IPE 300 half", "SHS 100x100x5", "RHS 200x100x8"])
def test_every_force_and_sense_has_a_class_without_infinities(name: str) -> None:
    section = profile(name)
    alone = builders.bar(section, Bilinear(210e3, 355.0))
    for n in (-0.95, -0.7, -0.3, 0.0, 0.3, 0.7, 0.95):
        for sense in (1, -1):
            for minor in (False, True):
                bar = builders.bar(
                    section, Bilinear(210e3, 355.0), axial=n * alone.squash, sense=sense, minor=minor
                )
                found = classify(bar, section, minor=minor)
                assert found.number in (1, 2, 3, 4)
                for part in found.parts:
                    assert part.limit is None or 0.0 < part.limit < 1e9
                    assert part.limit is not None or part.number in (1, 3)  # plastic, elastic tension


def test_web_of_a_hybrid_girder_goes_by_the_stronger_flanges() -> None:
    both = shapes.Flange(200.0, 20.0, "flange")
    section = shapes.build(shapes.IShape(600.0, shapes.Web(9.0), both, both))
    laws = [Bilinear(210e3, 460.0 if p.steel else 275.0) for p in section.parts]
    found = classify(builders.bar(section, laws), section, minor=False)
    web = next(p for p in found.parts if p.part == "web")
    assert web.limit == pytest.approx(83.0 * en.epsilon(460.0)) or web.limit == pytest.approx(
        124.0 * en.epsilon(460.0)
    )
