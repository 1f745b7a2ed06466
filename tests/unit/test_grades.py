"""Grades by name, standard, product and thickness; and how a section's steel is found from them."""

from __future__ import annotations

import pytest

from fibremr.case.reader import parse_case
from fibremr.errors import ValueFault
from fibremr.steel import grades

TABLE = grades.TABLE_3_1


def fy(grade: str, thickness: float, *, made: str = grades.ROLLED, standard: str | None = None) -> float:
    standards = (standard,) if standard else TABLE
    return grades.find(
        grade, thickness, made=made, standards=standards, strict=standard is not None
    ).yield_stress


@pytest.mark.parametrize(
    ("grade", "thickness", "standard", "strength"),
    [
        ("S355", 40.0, None, 355.0), ("S355", 40.001, None, 335.0), ("S355", 80.0, None, 335.0),
        ("S355", 16.0, "EN 10025-2", 355.0), ("S355", 16.1, "EN 10025-2", 345.0),
        ("S355", 63.0, "EN 10025-2", 335.0), ("S355", 80.0, "EN 10025-2", 325.0),
        ("S355", 100.0, "EN 10025-2", 315.0), ("s275", 30.0, "en 10025-2", 265.0),
        ("S355J2", 20.0, None, 355.0), ("S355JR", 20.0, "SANS 50025-2", 345.0), ("S460NL", 20.0, None, 460.0),
        ("S460", 20.0, None, 460.0), ("S690QL", 20.0, None, 690.0), ("A992", 200.0, None, 345.0),
        ("A572 Grade 50", 20.0, None, 345.0), ("S355H", 10.0, None, 355.0),
    ],
)  # fmt: skip
def test_strength(grade: str, thickness: float, standard: str | None, strength: float) -> None:
    assert fy(grade, thickness, standard=standard) == strength


def test_round_and_square_tubes_of_one_grade() -> None:
    assert fy("A500 Gr B", 8.0, made=grades.HOLLOW) == 315.0
    assert fy("A500 Gr B", 8.0, made=grades.ROUND) == 290.0


def test_beyond_the_table() -> None:
    with pytest.raises(ValueFault, match="no strength for a thickness of 90 mm") as caught:
        fy("S355", 90.0)
    assert "80 mm" in caught.value.allowed


def test_unknown_grade() -> None:
    with pytest.raises(ValueFault, match="no such grade") as caught:
        grades.matching("S365")
    assert "S355" in caught.value.suggestion


def test_bands_of_each_product_meet_and_do_not_rise() -> None:
    groups: dict[tuple[str, str, str], list[grades.Strength]] = {}
    for s in grades.strengths():
        groups.setdefault((s.grade, s.standard, s.product), []).append(s)
    for bands in groups.values():
        for a, b in zip(bands, bands[1:], strict=False):
            assert a.upto == b.above
            assert b.yield_stress <= a.yield_stress or not a.carbon  # extrusions of aluminium do rise
        assert all(s.yield_stress < s.ultimate for s in bands)


GIRDER = """
[section]
shape = "I"
height = "600 mm"
web = "10 mm"
top_flange = { width = "300 mm", thickness = "50 mm" }
bottom_flange = { width = "300 mm", thickness = "20 mm" }
%s
[steel]
grade = "S355"
"""


def test_plates_of_a_welded_section_go_by_their_own_thickness() -> None:
    case = parse_case((GIRDER % "").encode(), name="x")
    found = {p.name: s.law.yield_stress for p, s in zip(case.section.parts, case.steels, strict=True)}
    assert found == {"top flange": 335.0, "bottom flange": 355.0, "web": 355.0}


def test_a_rolled_section_goes_by_its_thickest_part() -> None:
    case = parse_case((GIRDER % 'root_radius = "20 mm"').encode(), name="x")
    assert {s.law.yield_stress for s in case.steels} == {335.0}
    heavy = parse_case(
        b'[section]\nprofile = "HEM 300"\n[steel]\ngrade = "S355"\nstandard = "EN 10025-2"\n', name="x"
    )
    assert {s.law.yield_stress for s in heavy.steels} == {345.0}  # tf 39 mm


def test_a_part_of_another_grade_does_not_take_strengths_given_for_the_others() -> None:
    text = """
[section]
shape = "I"
height = "600 mm"
web = "10 mm"
flange = { width = "300 mm", thickness = "20 mm", steel = "flange" }
[steel]
yield = "240 MPa"
ultimate = "380 MPa"
law = "bilinear"
hardening = "1 GPa"
[steel.flange]
grade = "S460N"
"""
    case = parse_case(text.encode(), name="x")
    flange, _, web = case.steels
    assert (flange.law.yield_stress, web.law.yield_stress) == (460.0, 240.0)
    assert flange.law.name == web.law.name == "bilinear"
    assert flange.law.hardening == 1000.0  # type: ignore[attr-defined]
