"""Quantities as text: every unit, and every way of getting one wrong."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fibremr.case.units import KINDS, SYSTEMS, fraction_of, quantity
from fibremr.errors import ValueFault


@pytest.mark.parametrize(
    ("text", "kind", "value"),
    [
        ("6 m", "length", 6000.0), ("6m", "length", 6000.0), ("1e1 cm", "length", 100.0),
        ("0.5 in", "length", 12.7), ("10 ft", "length", 3048.0), (".5 mm", "length", 0.5),
        ("355 MPa", "stress", 355.0), ("355 N/mm2", "stress", 355.0), ("355 N/mm²", "stress", 355.0),
        ("355 N / mm^2", "stress", 355.0), ("50 ksi", "stress", 344.7378647),
        ("29000 ksi", "stress", 199947.9615),
        ("210 GPa", "stress", 210e3), ("36000 psi", "stress", 248.2112625),
        ("200 kN", "force", 2e5), ("1 MN", "force", 1e6), ("100 kip", "force", 444822.1615),
        ("38 kN/m", "line load", 38.0), ("1 kip/ft", "line load", 14.59390294),
        ("38 kN / m", "line load", 38.0),
        ("120 kNm", "moment", 1.2e8), ("120 kN m", "moment", 1.2e8), ("120 kN·m", "moment", 1.2e8),
        ("1 kip ft", "moment", 1355817.948), ("1 kip in", "moment", 112984.829),
        ("30 deg", "angle", 0.5235987756), ("5 mrad", "angle", 0.005),
        ("3 %", "strain", 0.03), ("0.03 mm/mm", "strain", 0.03), ("-70 MPa", "stress", -70.0),
        ("−70 MPa", "stress", -70.0),
    ],
)  # fmt: skip
def test_values(text: str, kind: str, value: float) -> None:
    assert quantity(text, kind) == pytest.approx(value, rel=1e-9)


@pytest.mark.parametrize(
    ("text", "kind", "code", "hint"),
    [
        ("6,0 m", "length", "decimal-comma", 'write "6.0 m"'),
        ("1,5kN", "force", "decimal-comma", 'write "1.5kN"'),
        (6, "length", "unit-missing", 'write "6 mm" or "6 m"'),
        (6.5, "length", "unit-missing", 'write "6.5 mm" or "6.5 m"'),
        ("6", "length", "unit-missing", 'write "6 mm" or "6 m"'),
        ("355 mPa", "stress", "unit-unknown", 'write "MPa"'),
        ("355 Mpa", "stress", "unit-unknown", 'write "MPa"'),
        ("6 metres", "length", "unit-unknown", ""),
        ("6 kN", "length", "unit-kind", ""),
        ("nan mm", "length", "not-finite", ""), ("inf m", "length", "not-finite", ""),
        ("-inf m", "length", "not-finite", ""), ("1e999 m", "length", "not-finite", ""),
        ("m", "length", "not-a-number", ""), ("", "length", "not-a-number", ""),
        ("1.2.3 m", "length", "unit-unknown", ""),
        (True, "length", "type", ""), (None, "length", "type", ""), ([1], "length", "type", ""),
        ("1,000.5 mm", "length", "decimal-comma", ""),
    ],
)  # fmt: skip
def test_faults(text: object, kind: str, code: str, hint: str) -> None:
    with pytest.raises(ValueFault) as caught:
        quantity(text, kind)
    assert caught.value.code == code
    assert hint in caught.value.suggestion


@given(st.floats(-1e6, 1e6), st.sampled_from(sorted(KINDS)), st.data())
def test_every_unit_of_every_kind(x: float, kind: str, data: st.DataObject) -> None:
    unit = data.draw(st.sampled_from(sorted(KINDS[kind].units)))
    assert quantity(f"{x!r} {unit}", kind) == pytest.approx(x * KINDS[kind].units[unit], rel=1e-14)


def test_fraction() -> None:
    assert fraction_of("E/100", "E") == 100.0
    assert fraction_of(" L / 360 ", "L") == 360.0
    assert fraction_of("2.1 GPa", "E") is None
    assert fraction_of("2.1 kN/mm2", "E") is None
    for bad in ("G/100", "E/0", "E/x", "E/1", "E/-5", "E/inf", "E/nan"):
        with pytest.raises(ValueFault):
            fraction_of(bad, "E")


def test_showing() -> None:
    us = SYSTEMS["US"]
    assert us.show(1355817.948, "moment") == pytest.approx(1.0)
    assert us.show(1.0 / 25.4, "curvature") == pytest.approx(1.0)
    assert SYSTEMS["SI"].show(1e-6, "curvature") == pytest.approx(1e-3)
    assert us.place(3048.0) == "10.00 ft"
    assert SYSTEMS["SI"].place(3048.0) == "3.05 m"
