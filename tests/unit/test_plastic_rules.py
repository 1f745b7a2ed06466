"""What the code asks of a plastically designed beam: values of its formulas, both sides of each border."""

from __future__ import annotations

from math import sqrt

import pytest

from fibremr.limits import en_1993_1_1_2005_plastic as en
from fibremr.limits.en_1993_1_1_2005 import epsilon


@pytest.mark.parametrize(
    ("fy", "lengths"),
    [(235.0, {1.0: 1172, 0.0: 2010, -1.0: 3350}), (355.0, {1.0: 954, 0.0: 1635, -1.0: 2726})],
)
def test_stable_length_of_ipe_300(fy: float, lengths: dict[float, float]) -> None:
    """Values of the project's sheet of methods, D3.11, iz 33.50."""
    for psi, length in lengths.items():
        assert en.stable_length(psi, epsilon(fy), 33.50) == pytest.approx(length, abs=1.0)


def test_stable_length_joins_and_ends() -> None:
    assert en.stable_length(0.625, 1.0, 1.0) == pytest.approx(35.0)
    assert en.stable_length(0.625 - 1e-9, 1.0, 1.0) == pytest.approx(35.0, abs=1e-6)
    assert en.stable_length(-2.0, 1.0, 1.0) == en.stable_length(-1.0, 1.0, 1.0) == 100.0


def test_shear_of_ipe_300() -> None:
    """A - 2 b tf + (tw + 2 r) tf = 5381.20 - 3210 + 396.97; the sheet's 2567.97 goes by A 5381.0."""
    area = en.rolled_i_shear_area(5381.2016, 150.0, 10.7, 7.1, 15.0, 278.6)
    assert area == pytest.approx(2568.17, abs=0.005)
    assert en.shear_resistance(area, 355.0) / 1e3 == pytest.approx(526.37, abs=0.01)


def test_shear_area_of_a_rolled_section_is_not_less_than_its_web() -> None:
    assert en.rolled_i_shear_area(3000.0, 100.0, 10.0, 10.0, 0.0, 200.0) == 2000.0


def test_other_shear_areas() -> None:
    assert en.welded_shear_area(400.0, 10.0) == 4000.0
    assert en.box_shear_area(6000.0, 200.0, 100.0) == pytest.approx(4000.0)
    assert en.tube_shear_area(3141.59265) == pytest.approx(2000.0)
    assert en.shear_resistance(sqrt(3.0), 355.0) == pytest.approx(355.0)
    assert en.slenderest_web(epsilon(235.0)) == 72.0
