"""The table [steel] and its tables for single parts: grade or strengths, and the law."""

from __future__ import annotations

from dataclasses import dataclass

from fibremr.case.records import Steel
from fibremr.case.table import Path, Table, dotted
from fibremr.case.units import fraction_of
from fibremr.errors import ValueFault, closest
from fibremr.section import shapes
from fibremr.section.parts import Section
from fibremr.section.properties import STEEL_DENSITY
from fibremr.steel import grades
from fibremr.steel.bilinear import Bilinear
from fibremr.steel.law import Law
from fibremr.steel.quad_linear import QuadLinear

LAWS = ("elastic-plastic", "bilinear", "quad-linear")
LATER_LAWS = ("multi-linear", "ramberg-osgood", "two-stage", "menegotto-pinto", "fire", "coupon")

_STEEL_KEYS = (
    "grade", "law", "standard", "yield", "ultimate", "modulus", "hardening", "plateau_end", "exponent",
    "second_exponent", "points", "file",
)  # fmt: skip
_LATER_STEEL_KEYS = ("plateau_end", "exponent", "second_exponent", "points", "file")


@dataclass(frozen=True)
class _SteelSpec:
    """A steel table as given: None where it says nothing."""

    table: Table
    grade: str | None
    standard: str | None
    law: str | None
    strength: float | None
    ultimate: float | None
    modulus: float | None
    hardening: object


def read_steels(
    table: Table, section_table: Table | None, section: Section | None
) -> tuple[tuple[Steel, ...], Steel] | None:
    """The steel of each part and that of [steel] itself, or None after a fault."""
    inner = [k for k, v in table.data.items() if isinstance(v, dict) and k not in _STEEL_KEYS]
    base = _steel_spec(table)
    table.known += inner
    table.finish()
    special = {}
    for name in inner:
        sub = Table(table.notes, (*table.path, name), table.data[name])
        special[name] = _inherited(_steel_spec(sub), base)
        sub.finish()
        table.sound &= sub.sound
    if section_table is not None:
        _check_references(section_table, inner)
    if section is None or section_table is None or not section_table.sound:
        for spec in (base, *special.values()):
            if base.table.sound and spec.table.sound and (spec.grade or spec.strength):
                _resolve(spec, 10.0, grades.ROLLED)  # any usual thickness shows what is not the section's
        return None
    used = {part.steel for part in section.parts}
    for name in inner:
        if name not in used:
            table.notes.warnings.append(f"[steel.{name}] is not used by any part of the section")
    if not table.sound:
        return None
    made = _made(section)
    thickest = max(part.thickness for part in section.parts)
    resolved: dict[tuple[str, float], Steel | None] = {}

    def steel(name: str, thickness: float) -> Steel | None:
        key = (name, thickness)
        if key not in resolved:
            resolved[key] = _resolve(special[name] if name else base, thickness, made)
        return resolved[key]

    every = []
    for part in section.parts:
        every.append(steel(part.steel, thickest if section.one_piece else part.thickness))
    found = tuple(s for s in every if s is not None)
    if len(found) < len(every):
        return None
    plain = [s for part, s in zip(section.parts, found, strict=True) if not part.steel]
    return found, (plain or found)[0]


def _check_references(section_table: Table, names: list[str]) -> None:
    """Every `steel = ...` of a part names a table [steel.NAME]."""
    owners: list[tuple[Path, object]] = []
    for key, value in section_table.data.items():
        inner = enumerate(value) if isinstance(value, list) else ()
        owners += [((key,), value), *(((key, i), item) for i, item in inner)]
    for path, value in owners:
        wanted = value.get("steel") if isinstance(value, dict) else None
        if isinstance(wanted, str) and wanted not in names:
            section_table.fail(
                (*path, "steel"),
                ValueFault(
                    f"there is no table [steel.{wanted}]",
                    allowed=", ".join(names) or "a table [steel.NAME] of the case",
                    suggestion=closest(wanted, names),
                    code="unknown-name",
                ),
            )


def _made(section: Section) -> str:
    if isinstance(section.shape, shapes.TubeShape):
        return grades.ROUND
    if isinstance(section.shape, shapes.BoxShape) and section.one_piece:
        return grades.HOLLOW
    return grades.ROLLED if section.one_piece else grades.PLATED


def _steel_spec(table: Table) -> _SteelSpec:
    table.refuse_later(_LATER_STEEL_KEYS)
    grade = table.text("grade") if table.has("grade") else None
    if grade is not None:
        try:
            grades.matching(grade)
        except ValueFault as error:
            table.fail(error.key, error)
    standard = table.text("standard") if table.has("standard") else None
    law = table.choice("law", LAWS, later=LATER_LAWS) if table.has("law") else None
    sizes = {}
    for key, least, most, text in (
        ("yield", 50.0, 2000.0, "50 MPa to 2000 MPa"),
        ("ultimate", 50.0, 3000.0, "50 MPa to 3000 MPa"),
        ("modulus", 50e3, 300e3, "50 GPa to 300 GPa"),
    ):
        given = table.has(key)
        sizes[key] = table.quantity(key, "stress", least=least, most=most, text=text) if given else None
    _ordered(table, sizes["yield"], sizes["ultimate"])
    hardening: object = None
    if table.has("hardening"):
        hardening = _hardening(table)
    return _SteelSpec(
        table, grade, standard, law, sizes["yield"], sizes["ultimate"], sizes["modulus"], hardening
    )


def _ordered(table: Table, fy: float | None, fu: float | None) -> bool:
    """Whether yield does not exceed ultimate [MPa]; a fault otherwise."""
    if fy is None or fu is None or fu >= fy:
        return True
    fault = ValueFault(
        "the yield strength exceeds the ultimate strength",
        allowed=f"yield up to ultimate; here {fy:g} and {fu:g} MPa",
        code="range",
    )
    table.fail("ultimate" if "ultimate" in table.data else "yield", fault)
    return False


def _hardening(table: Table) -> object:
    """Slope after yield: a stress in MPa, or the divisor of "E/100" as a tuple."""
    text = table.data["hardening"]
    try:
        divisor = fraction_of(text, "E")
        if divisor is not None:
            table.notes.entry((*table.path, "hardening"), f'"{text}"', "given")
            return (divisor,)
    except ValueFault as error:
        table.fail("hardening", error)
        return None
    return table.quantity("hardening", "stress", most=100e3, least=0.0, text="up to below the modulus")


def _inherited(spec: _SteelSpec, base: _SteelSpec) -> _SteelSpec:
    """A part's steel with what it does not say itself taken from [steel].

    A part that names a grade of its own means that grade's strengths, not those given in [steel].
    """
    own = spec.grade is not None
    return _SteelSpec(
        table=spec.table,
        grade=spec.grade or base.grade,
        standard=spec.standard or base.standard,
        law=spec.law or base.law,
        strength=spec.strength or (None if own else base.strength),
        ultimate=spec.ultimate or (None if own else base.ultimate),
        modulus=spec.modulus or (None if own else base.modulus),
        hardening=spec.hardening or base.hardening,
    )


def _resolve(spec: _SteelSpec, thickness: float, made: str) -> Steel | None:
    """The steel of a thickness, or None after a fault."""
    table = spec.table
    where = dotted(table.path)
    strength = None
    if spec.grade is not None:
        standards = (spec.standard,) if spec.standard else grades.TABLE_3_1
        try:
            strength = grades.find(
                spec.grade, thickness, made=made, standards=standards, strict=spec.standard is not None
            )
        except ValueFault as error:
            table.fail(error.key, error)
            return None
    elif spec.strength is None:
        table.fail(
            "grade",
            ValueFault("missing", allowed='a grade such as "S355", or yield = "355 MPa"', code="missing"),
        )
        return None
    given = spec.strength is not None
    fy = spec.strength if spec.strength is not None else strength.yield_stress if strength else 0.0
    fu = spec.ultimate if spec.ultimate is not None else strength.ultimate if strength else None
    modulus = spec.modulus or (strength.modulus if strength else 210e3)
    ordered = _ordered(table, fy, fu)
    law_name = spec.law or LAWS[0]
    law: Law
    try:
        if law_name == "quad-linear":
            if fu is None:
                raise ValueFault(
                    "missing: the quad-linear law needs it",
                    key="ultimate",
                    allowed='such as ultimate = "490 MPa"',
                    code="missing",
                )
            if strength is not None and not strength.carbon:
                raise ValueFault(
                    f"the quad-linear law is one of hot-rolled carbon steel, not of {strength.grade}",
                    key="law",
                    allowed="elastic-plastic, bilinear",
                )
            law = QuadLinear(modulus, fy, fu)
        elif law_name == "bilinear":
            law = Bilinear(modulus, fy, _slope(spec.hardening, modulus))
        else:
            law = Bilinear(modulus, fy)
    except ValueFault as error:
        table.fail(error.key, error)
        return None
    if not ordered:
        return None
    if spec.hardening is not None and law_name != "bilinear":
        table.notes.warnings.append(f"{where}.hardening is not used by the law {law_name}")
    if strength is not None and "hollow" in strength.product and made not in (grades.HOLLOW, grades.ROUND):
        table.notes.warnings.append(
            f"{strength.grade} is a grade of hollow sections, and this section is none"
        )
    if not 190e3 <= modulus <= 215e3:
        table.notes.warnings.append(f"{where}: a modulus of {modulus / 1e3:g} GPa is unusual for steel")
    source = strength.source if strength else "yield strength given in the case"
    if strength and given:
        source = f"yield strength given in the case; else {strength.source}"
    notes = table.notes
    if strength and not given:
        notes.entry((*table.path, f"yield ({thickness:g} mm)"), f"{fy:g} MPa", strength.source)
    if strength and spec.ultimate is None:
        notes.entry((*table.path, f"ultimate ({thickness:g} mm)"), f"{fu:g} MPa", strength.source)
    if spec.modulus is None:
        origin = strength.source if strength else "default"
        notes.entry((*table.path, "modulus"), f"{modulus / 1e3:g} GPa", origin)
    if spec.law is None:
        notes.entry((*table.path, "law"), f'"{law_name}"', "default")
    if law_name == "bilinear" and spec.hardening is None:
        notes.entry((*table.path, "hardening"), '"E/100"', "default, EN 1993-1-5 C.6(1)c")
    density = strength.density if strength else STEEL_DENSITY
    carbon = strength is None or strength.carbon
    elongation = None if strength is None else strength.elongation or grades.elongation(strength)
    return Steel(law, fu, density, source, carbon, elongation)


def _slope(hardening: object, modulus: float) -> float:
    if isinstance(hardening, tuple):
        return float(modulus / hardening[0])
    slope = modulus / 100.0 if hardening is None else float(hardening)  # type: ignore[arg-type]
    if slope >= modulus:
        raise ValueFault(
            "the slope after yield is not below the modulus",
            key="hardening",
            allowed=f"below {modulus / 1e3:g} GPa",
            code="range",
        )
    return slope
