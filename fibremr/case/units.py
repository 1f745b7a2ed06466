"""Quantities as text with a unit, to and from N, mm, MPa and rad.

A dimensional value in a case is always a text such as "6 m" or "50 ksi". Reading never guesses: a
decimal comma, a missing unit or a unit of the wrong kind is an error that says what to write.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from math import isfinite, pi

from fibremr.errors import ValueFault, closest

INCH = 25.4
POUND_FORCE = 4.4482216152605  # N, exact by definition
KIP = 1000.0 * POUND_FORCE
KSI = KIP / INCH**2

LENGTH = {"mm": 1.0, "cm": 10.0, "m": 1e3, "in": INCH, "ft": 12.0 * INCH}
FORCE = {"N": 1.0, "kN": 1e3, "MN": 1e6, "lbf": POUND_FORCE, "kip": KIP}
STRESS = {
    "MPa": 1.0, "Pa": 1e-6, "kPa": 1e-3, "GPa": 1e3, "N/mm2": 1.0, "kN/mm2": 1e3, "kN/cm2": 10.0,
    "psi": KSI / 1e3, "ksi": KSI,
}  # fmt: skip
LINE_LOAD = {
    "kN/m": 1.0, "N/m": 1e-3, "N/mm": 1.0, "lbf/ft": POUND_FORCE / LENGTH["ft"],
    "kip/ft": KIP / LENGTH["ft"], "kip/in": KIP / INCH, "lbf/in": POUND_FORCE / INCH,
}  # fmt: skip
MOMENT = {
    "kNm": 1e6, "kN m": 1e6, "Nm": 1e3, "N m": 1e3, "Nmm": 1.0, "N mm": 1.0, "MNm": 1e9, "MN m": 1e9,
    "kip ft": KIP * LENGTH["ft"], "kip in": KIP * INCH, "lbf ft": POUND_FORCE * LENGTH["ft"],
    "lbf in": POUND_FORCE * INCH,
}  # fmt: skip
ANGLE = {"rad": 1.0, "mrad": 1e-3, "deg": pi / 180.0}
SHARE = {"%": 1e-2, "mm/mm": 1.0, "in/in": 1.0, "m/m": 1.0}


@dataclass(frozen=True)
class Kind:
    """A kind of quantity: its name, its units with their factors, and an example to show."""

    name: str
    units: dict[str, float]
    examples: tuple[str, str]


KINDS = {
    kind.name: kind
    for kind in (
        Kind("length", LENGTH, ("mm", "m")),
        Kind("force", FORCE, ("kN", "kip")),
        Kind("stress", STRESS, ("MPa", "ksi")),
        Kind("line load", LINE_LOAD, ("kN/m", "kip/ft")),
        Kind("moment", MOMENT, ("kNm", "kip ft")),
        Kind("angle", ANGLE, ("deg", "mrad")),
        Kind("strain", SHARE, ("%", "mm/mm")),
    )
}

_NUMBER = re.compile(r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?")
_COMMA = re.compile(r"([+-]?[0-9.]*,[0-9.,]*)((?:[eE][+-]?[0-9]+)?)(\s*)(.*)")
_ALIASES = {"²": "2", "·": " ", "⋅": " ", "°C": "degC", "°F": "degF", "°": "deg", "−": "-"}


def quantity(text: object, kind: str) -> float:
    """The value of a text of that kind, in N, mm, MPa, rad or 1.

    Raises ValueFault that says what is allowed and one thing to write instead.
    """
    of = KINDS[kind]
    if isinstance(text, bool) or not isinstance(text, str):
        if isinstance(text, float) and not isfinite(text):
            raise ValueFault("not a finite number", allowed=f"a finite {kind}", code="not-finite")
        if isinstance(text, int | float) and not isinstance(text, bool):
            a, b = of.examples
            raise ValueFault(
                f"{'an' if kind[0] in 'aeiou' else 'a'} {kind} needs its unit",
                suggestion=f'write "{text} {a}" or "{text} {b}"',
                code="unit-missing",
            )
        raise ValueFault(
            f"a {kind} is a text with its unit", allowed=f'such as "6 {of.examples[0]}"', code="type"
        )
    plain = text.strip()
    for written, meant in _ALIASES.items():
        plain = plain.replace(written, meant)
    comma = _COMMA.fullmatch(plain)
    if comma:
        raise _comma(*comma.groups())
    number = _NUMBER.match(plain)
    if not number:
        first = plain.split()[0].lower().lstrip("+-") if plain.split() else ""
        if first.startswith(("nan", "inf")):
            raise ValueFault("not a finite number", allowed=f"a finite {kind}", code="not-finite")
        raise ValueFault(
            f"no number to be read as a {kind}",
            allowed=f'such as "6 {of.examples[0]}"',
            code="not-a-number",
        )
    value = float(number.group())
    unit = re.sub(r"\s+", " ", plain[number.end() :].strip().replace("*", " "))
    unit = unit.replace(" /", "/").replace("/ ", "/").replace("^", "")
    if not unit:
        a, b = of.examples
        raise ValueFault(
            f"a {kind} needs its unit",
            suggestion=f'write "{number.group()} {a}" or "{number.group()} {b}"',
            code="unit-missing",
        )
    if unit not in of.units:
        raise _unknown_unit(unit, of)
    result = value * of.units[unit]
    if not isfinite(result):
        raise ValueFault("not a finite number", allowed=f"a finite {kind}", code="not-finite")
    return result


def _comma(digits: str, power: str, gap: str, unit: str) -> ValueFault:
    """A fault for a number with commas: a decimal comma, or one between thousands."""
    end = f"{power}{gap}{unit}"
    without = digits.replace(",", "").replace(".", "")
    if re.fullmatch(r"[+-]?[0-9]{1,3}(,[0-9]{3})+\.[0-9]+", digits):
        hint = f'write "{digits.replace(",", "")}{end}"'
    elif re.fullmatch(r"[+-]?[0-9]{1,3}(\.[0-9]{3})+,[0-9]+", digits):
        hint = f'write "{digits.replace(".", "").replace(",", ".")}{end}"'
    elif re.fullmatch(r"[+-]?[0-9]{1,3}(,[0-9]{3}){2,}", digits):
        hint = f'write "{without}{end}"'
    elif re.fullmatch(r"[+-]?[0-9]{1,3},[0-9]{3}", digits) and not digits.lstrip("+-").startswith("0,"):
        hint = f'write "{digits.replace(",", ".")}{end}" or "{without}{end}", whichever is meant'
    elif re.fullmatch(r"[+-]?[0-9]*,[0-9]+", digits):
        hint = f'write "{digits.replace(",", ".")}{end}"'
    else:
        hint = "write digits with one decimal point"
    return ValueFault("a decimal comma", suggestion=hint, code="decimal-comma")


def temperature(text: object) -> float:
    """A temperature in degrees Celsius from a text such as "20 degC", "293.15 K" or "68 degF"."""
    plain = text.strip() if isinstance(text, str) else ""
    for written, meant in _ALIASES.items():
        plain = plain.replace(written, meant)
    number = _NUMBER.match(plain)
    unit = plain[number.end() :].strip() if number else ""
    if not number or unit not in ("degC", "K", "degF"):
        raise ValueFault(
            "not a temperature", allowed="degC, K, degF", suggestion='such as "20 degC"', code="type"
        )
    value = float(number.group())
    return {"degC": value, "K": value - 273.15, "degF": (value - 32.0) / 1.8}[unit]


def _unknown_unit(unit: str, of: Kind) -> ValueFault:
    allowed = ", ".join(of.units)
    for other in KINDS.values():
        if unit in other.units and other is not of:
            return ValueFault(
                f"{unit} is a unit of {other.name}, and a {of.name} is asked for",
                allowed=allowed,
                code="unit-kind",
            )
    same = [u for u in of.units if u.lower() == unit.lower()]
    if same:
        hint = f'units are case-sensitive: write "{same[0]}"'
    else:
        hint = closest(unit, list(of.units)) if re.match(r"[A-Za-z%]", unit) else ""
    return ValueFault(
        f'"{unit}" is not a unit of {of.name}', allowed=allowed, suggestion=hint, code="unit-unknown"
    )


def fraction_of(text: object, symbol: str) -> float | None:
    """The n of a text such as "E/100" or "L/360", or None if it is not of that form.

    Raises ValueFault when the divisor is not a number above one, or divides something else.
    """
    match = re.fullmatch(r"\s*([A-Za-z]+)\s*/\s*(\S+)\s*", text) if isinstance(text, str) else None
    if not match or (match[1] != symbol and not _NUMBER.fullmatch(match[2])):
        return None
    if match[1] != symbol:
        hint = f'write "{symbol}/{match[2]}"'
        raise ValueFault(f'"{match[1]}" divided by a number', allowed=f"a share of {symbol}", suggestion=hint)
    if not _NUMBER.fullmatch(match[2]) or not 1.0 < float(match[2]) < 1e9:
        raise ValueFault(f"{symbol} is to be divided by a number above 1", allowed=f'such as "{symbol}/100"')
    return float(match[2])


@dataclass(frozen=True)
class System:
    """Units to show results in: for each kind the unit and its factor."""

    name: str
    length: str
    span: str
    force: str
    stress: str
    moment: str
    curvature: str
    line_load: str

    def show(self, value: float, what: str) -> float:
        """A value in N, mm, MPa or 1/mm in the unit of this system for `what`."""
        unit = getattr(self, what)
        if what == "curvature":
            return value * (1000.0 if unit == "1/m" else LENGTH["in"])
        table = {
            "length": LENGTH, "span": LENGTH, "force": FORCE, "stress": STRESS, "moment": MOMENT,
            "line_load": LINE_LOAD,
        }[what]  # fmt: skip
        return float(value / table[unit])

    def place(self, x: float) -> str:
        """A place along a beam, or a length of it [mm], in words."""
        return f"{self.show(x, 'span'):.2f} {self.span}"


SYSTEMS = {
    "SI": System("SI", "mm", "m", "kN", "MPa", "kNm", "1/m", "kN/m"),
    "US": System("US", "in", "ft", "kip", "ksi", "kip ft", "1/in", "kip/ft"),
}
