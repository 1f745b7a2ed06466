"""What each table of a case may hold, and the records made from it."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from pathlib import PurePath

from fibremr.bending import Bar
from fibremr.case.records import Bending, Case, Limits, Steel
from fibremr.case.table import Table, dotted
from fibremr.case.units import SYSTEMS, fraction_of, quantity
from fibremr.errors import ValueFault, closest
from fibremr.residual import EccsRolled, Pattern, Points, PointStress
from fibremr.rotation import Setup
from fibremr.section import shapes
from fibremr.section.catalogue import find
from fibremr.section.parts import Section
from fibremr.section.properties import STEEL_DENSITY, squash
from fibremr.steel import grades
from fibremr.steel.bilinear import Bilinear
from fibremr.steel.law import Law
from fibremr.steel.quad_linear import QuadLinear

LAWS = ("elastic-plastic", "bilinear", "quad-linear")
LATER_LAWS = ("multi-linear", "ramberg-osgood", "two-stage", "menegotto-pinto", "fire", "coupon")
LATER_PATTERNS = (
    "Galambos-Ketter", "Young", "welded I", "welded box", "cold-formed", "flame-cut", "file",
)  # fmt: skip
CODES = ("EN 1993-1-1:2005",)
LATER_CODES = ("EN 1993-1-1:2022", "AISC 360-22", "AISC 360", "SANS 10162-1:2011", "SANS 10162-1")
SETUPS = ("three-point", "four-point", "cantilever", "uniform load", "end moment")
OTHER_TABLES = ("beam", "choose", "study")  # for other commands than those of this version


def read_tables(root: Table, *, file: str, sha256: str) -> Case | None:
    """The case of a whole file, or None after a fault; the faults are with the tables' notes."""
    notes = root.notes
    title = root.text("title", default=PurePath(file).stem if file != "-" else "case")
    units = root.choice("units", tuple(SYSTEMS), default="SI")
    for name in OTHER_TABLES:
        root.has(name)
    section_table = root.table(
        "section", required=True, kind='a table [section], such as profile = "IPE 450"'
    )
    section = _section(section_table) if section_table else None
    steel_table = root.table("steel", required=True, kind='a table [steel], such as grade = "S355"')
    limits_table = root.table("limits") or Table(notes, ("limits",), {})
    limits = _limits(limits_table)
    steels = _steels(steel_table, section_table, section) if steel_table else None
    bending_table = root.table("bending") or Table(notes, ("bending",), {})
    bending = _bending(bending_table)
    trace_table = root.table("trace") or Table(notes, ("trace",), {})
    to = _trace(trace_table)
    rotation_table = root.table("rotation")
    setup = _rotation(rotation_table) if rotation_table else None
    residual_table = root.table("residual")
    pattern, scale = _residual(residual_table) if residual_table else (None, 1.0)
    root.finish()
    if section is None or steels is None or bending is None or limits is None:
        return None
    per_part, base = steels
    case = Case(
        file=file,
        sha256=sha256,
        title=title or "",
        system=SYSTEMS[units or "SI"],
        section=section,
        steels=per_part,
        base=base,
        pattern=pattern,
        scale=1.0 if scale is None else scale,
        bending=bending,
        to=to,
        setup=setup,
        limits=limits,
        entries=(),
        warnings=(),
    )
    _together(case, bending_table, residual_table)
    if notes.faults:
        return None
    return replace(case, entries=tuple(notes.entries), warnings=tuple(notes.warnings))


def bar_of(case: Case) -> Bar:
    """What a case asks to bend: the section turned to its bending axis, with laws and axial force."""
    from math import pi

    turn = pi / 2.0 if case.bending.about == "minor" else 0.0
    laws = tuple(steel.law for steel in case.steels)
    return Bar(case.section.turned(turn), laws, case.bending.axial, case.bending.sense)


def _together(case: Case, bending: Table, residual: Table | None) -> None:
    """What only shows when the tables are seen together."""
    yields = [steel.law.yield_stress for steel in case.steels]
    load = squash(case.section, yields)
    axial = case.bending.axial
    if abs(axial) >= load:
        key = "compression" if axial < 0.0 else "tension"
        bending.fail(
            key,
            ValueFault(
                "the axial force reaches the squash load of the section",
                allowed=f"below {load / 1e3:.4g} kN",
                code="range",
            ),
        )
        return
    bar = bar_of(case)
    geometry = bar.geometry
    lopsided = abs(geometry.product) > 1e-6 * geometry.second_moment
    if lopsided and bending.data.get("sideways") == "free":
        bending.fail(
            "sideways",
            ValueFault(
                "not available in this version for a section without an axis of symmetry in or across "
                "the plane of bending",
                allowed='"held"',
                code="not-available",
            ),
        )
    elif lopsided:
        share = abs(geometry.product) / geometry.second_moment
        bending.notes.warnings.append(
            f"{case.section.name} has no symmetry in or across the plane of bending: it is held sideways, "
            f"which in the elastic range takes a sideways moment of {share:.2f} times the moment shown"
        )
    if case.pattern is None or residual is None:
        return
    try:
        found = bar.residual(case.pattern, case.scale)
    except ValueFault as error:
        residual.fail(error.key, error)
        return
    lacked = max(abs(found.force_share), abs(found.moment_share))
    if lacked > 0.03:
        bending.notes.warnings.append(
            f"the residual-stress pattern lacks {100 * lacked:.1f} % (of the squash load or of My) for "
            "equilibrium; it was balanced by a plane of strain"
        )
    shape = case.section.shape
    if case.pattern.name == EccsRolled.name and getattr(shape, "root_radius", 0.0) == 0.0:
        bending.notes.warnings.append(
            "the ECCS pattern is one of rolled sections, and this section has no root radius: "
            "if it is welded, its residual stresses are others"
        )


# --- [section] --------------------------------------------------------------------------------------

_SIZES = ("height", "width", "thickness", "diameter", "root_radius", "corner_radius")
_FLANGES = ("flange", "top_flange", "bottom_flange", "web")
_SHAPES = ("I", "T", "channel", "angle", "box", "tube", "rectangle")
_LATER_SHAPES = ("round", "plates", "outline")
_LATER_SECTION_KEYS = ("plate", "add", "opening")


def _section(table: Table) -> Section | None:
    table.refuse_later(_LATER_SECTION_KEYS)
    by_profile, by_shape = table.has("profile"), table.has("shape")
    if by_profile and by_shape:
        table.fail("shape", ValueFault("a section has a profile or a shape, not both"))
    if by_profile:
        name = table.text("profile")
        table.finish(owner="a section by profile, whose dimensions come from the tables")
        try:
            return find(name).section() if name is not None else None
        except ValueFault as error:
            table.fail("profile", error)
            return None
    if not by_shape:
        table.fail(
            "",
            ValueFault(
                "neither a profile nor a shape",
                allowed='profile = "IPE 450", or shape and dimensions',
                code="missing",
            ),
        )
        shape_name = None
    else:
        shape_name = table.choice("shape", _SHAPES, later=_LATER_SHAPES)
    if shape_name is None:
        _any_sizes(table)
        return None
    shape = _READERS[shape_name](table)
    table.finish(owner=f'shape = "{shape_name}"')
    if shape is None or not table.sound:
        return None
    found = list(shapes.faults(shape))
    for fault in found:
        table.fail(_written(fault.key, table), fault)
    if found:
        return None
    return shapes.build(shape, source="dimensions given in the case")


def _written(key: str, table: Table) -> str:
    """A key of a shape as it stands in the table, where web and thickness may be written in two ways."""
    head, _, tail = key.partition(".")
    if head in table.data:
        if tail and not isinstance(table.data[head], dict):
            return head
        if not tail and isinstance(table.data[head], dict):
            return f"{head}.thickness"
        return key
    return "thickness" if "thickness" in table.data else head


def _any_sizes(table: Table) -> None:
    """Check what can be checked of a section whose shape is not known."""
    for key in _SIZES:
        if key in table.data:
            table.quantity(key, "length", zero=key.endswith("radius"))
    for key in _FLANGES:
        if isinstance(table.data.get(key), dict):
            inner = table.table(key)
            for size in ("width", "thickness"):
                if inner and size in inner.data:
                    inner.quantity(size, "length")
        elif key in table.data:
            table.quantity(key, "length")
    table.known += [*_SIZES, *_FLANGES]
    table.finish()


def _web(table: Table, key: str = "web") -> shapes.Web | None:
    if isinstance(table.data.get(key), dict):
        inner = table.table(key)
        if inner is None:
            return None
        thickness = inner.quantity("thickness", "length", required=True)
        steel = inner.text("steel", default="") if inner.has("steel") else ""
        inner.finish()
        table.sound &= inner.sound
        return None if thickness is None else shapes.Web(thickness, steel or "")
    thickness = table.quantity(key, "length", required=True)
    return None if thickness is None else shapes.Web(thickness)


def _flange(table: Table, key: str) -> shapes.Flange | None:
    inner = table.table(key, required=True, kind='{ width = "200 mm", thickness = "15 mm" }')
    if inner is None:
        return None
    width = inner.quantity("width", "length", required=True)
    thickness = inner.quantity("thickness", "length", required=True)
    steel = inner.text("steel") if inner.has("steel") else ""
    inner.finish()
    table.sound &= inner.sound
    return None if width is None or thickness is None else shapes.Flange(width, thickness, steel or "")


def _radius(table: Table, key: str) -> float:
    return table.quantity(key, "length", zero=True, default=0.0, text="0 mm") or 0.0


def _i(table: Table) -> shapes.Shape | None:
    height = table.quantity("height", "length", required=True)
    web = _web(table)
    if table.has("flange"):
        top = bottom = _flange(table, "flange")
        for key in ("top_flange", "bottom_flange"):
            if table.has(key):
                table.fail(key, ValueFault("flange already gives both flanges"))
    elif table.has("top_flange") or table.has("bottom_flange"):
        top, bottom = _flange(table, "top_flange"), _flange(table, "bottom_flange")
    else:
        top = bottom = _flange(table, "flange")
    radius = _radius(table, "root_radius")
    if height is None or web is None or top is None or bottom is None:
        return None
    return shapes.IShape(height, web, top, bottom, radius)


def _t(table: Table) -> shapes.Shape | None:
    height, web, flange = (
        table.quantity("height", "length", required=True),
        _web(table),
        _flange(table, "flange"),
    )
    radius = _radius(table, "root_radius")
    if height is None or web is None or flange is None:
        return None
    return shapes.TShape(height, web, flange, radius)


def _channel(table: Table) -> shapes.Shape | None:
    height, web, flange = (
        table.quantity("height", "length", required=True),
        _web(table),
        _flange(table, "flange"),
    )
    radius = _radius(table, "root_radius")
    if height is None or web is None or flange is None:
        return None
    return shapes.ChannelShape(height, web, flange, radius)


def _angle(table: Table) -> shapes.Shape | None:
    sizes = [table.quantity(k, "length", required=True) for k in ("height", "width", "thickness")]
    radius = _radius(table, "root_radius")
    height, width, thickness = sizes
    if height is None or width is None or thickness is None:
        return None
    return shapes.AngleShape(height, width, thickness, radius)


def _box(table: Table) -> shapes.Shape | None:
    height = table.quantity("height", "length", required=True)
    width = table.quantity("width", "length", required=True)
    web: shapes.Web | None
    flange: shapes.Web | None
    if table.has("thickness") or not (table.has("web") or table.has("flange")):
        thickness = table.quantity("thickness", "length", required=True)
        web = flange = None if thickness is None else shapes.Web(thickness)
        for key in ("web", "flange"):
            if table.has(key):
                table.fail(key, ValueFault("thickness already gives all walls"))
    else:
        web, flange = _web(table), _web(table, "flange")
    radius = _radius(table, "corner_radius")
    if height is None or width is None or web is None or flange is None:
        return None
    inner = max(radius - max(web.thickness, flange.thickness), 0.0)
    return shapes.BoxShape(height, width, web, flange, radius, inner)


def _tube(table: Table) -> shapes.Shape | None:
    diameter = table.quantity("diameter", "length", required=True)
    thickness = table.quantity("thickness", "length", required=True)
    if diameter is None or thickness is None:
        return None
    return shapes.TubeShape(diameter, thickness)


def _rectangle(table: Table) -> shapes.Shape | None:
    width = table.quantity("width", "length", required=True)
    height = table.quantity("height", "length", required=True)
    return None if width is None or height is None else shapes.RectangleShape(width, height)


_READERS: Mapping[str, Callable[[Table], shapes.Shape | None]] = {
    "I": _i, "T": _t, "channel": _channel, "angle": _angle, "box": _box, "tube": _tube,
    "rectangle": _rectangle,
}  # fmt: skip

# --- [steel] ----------------------------------------------------------------------------------------

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


def _steels(
    table: Table, section_table: Table | None, section: Section | None
) -> tuple[tuple[Steel, ...], Steel] | None:
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
    if section is None or section_table is None:
        return None
    used = {part.steel for part in section.parts}
    for name in inner:
        if name not in used:
            table.notes.warnings.append(f"[steel.{name}] is not used by any part of the section")
    for key, value in section_table.data.items():
        wanted = value.get("steel") if isinstance(value, dict) else None
        if isinstance(wanted, str) and wanted not in special:
            section_table.fail(
                f"{key}.steel",
                ValueFault(
                    f"there is no table [steel.{wanted}]",
                    allowed=", ".join(inner) or "a table [steel.NAME] of the case",
                    suggestion=closest(wanted, inner),
                    code="unknown-name",
                ),
            )
    if not table.sound or not section_table.sound:
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
    plain = [s for part, s in zip(section.parts, every, strict=True) if not part.steel]
    first = plain[0] if plain else steel("", thickest)
    if first is None or any(s is None for s in every):
        return None
    return tuple(s for s in every if s is not None), first


def _made(section: Section) -> str:
    if isinstance(section.shape, shapes.TubeShape):
        return grades.ROUND
    if isinstance(section.shape, shapes.BoxShape) and section.one_piece:
        return grades.HOLLOW
    return grades.ROLLED if section.one_piece else grades.PLATED


def _steel_spec(table: Table) -> _SteelSpec:
    table.refuse_later(_LATER_STEEL_KEYS)
    grade = table.text("grade") if table.has("grade") else None
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
    hardening: object = None
    if table.has("hardening"):
        hardening = _hardening(table)
    return _SteelSpec(
        table, grade, standard, law, sizes["yield"], sizes["ultimate"], sizes["modulus"], hardening
    )


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
        standards = (spec.standard,) if spec.standard else grades.CODE_STANDARDS[CODES[0]]
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
    if fu is not None and fu < fy:
        key = "ultimate" if spec.ultimate is not None else "yield"
        table.fail(
            key,
            ValueFault(
                "the yield strength exceeds the ultimate strength",
                allowed=f"yield up to ultimate; here {fy:g} and {fu:g} MPa",
                code="range",
            ),
        )
        return None
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
            law = QuadLinear(modulus, fy, fu)
        elif law_name == "bilinear":
            law = Bilinear(modulus, fy, _slope(spec.hardening, modulus))
        else:
            law = Bilinear(modulus, fy)
    except ValueFault as error:
        table.fail(error.key, error)
        return None
    if spec.hardening is not None and law_name != "bilinear":
        table.notes.warnings.append(f"{where}.hardening is not used by the law {law_name}")
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
    return Steel(law, fu, strength.density if strength else STEEL_DENSITY, source)


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


# --- the other tables -------------------------------------------------------------------------------


def _residual(table: Table) -> tuple[Pattern | None, float | None]:
    table.refuse_later(("compare", "file"))
    name = table.choice(
        "pattern", (EccsRolled.name, Points.name, "none"), required=True, later=LATER_PATTERNS
    )
    scale = table.number("scale", default=1.0, least=0.0, most=5.0)
    points = table.tables("point", kind='[ { part = "web", at = 0.5, stress = "-70 MPa" }, ... ]')
    stresses = []
    for point in points or []:
        part = point.text("part", required=True)
        at = point.number("at", least=0.0, most=1.0)
        if "at" not in point.data:
            point.fail("at", ValueFault("missing", allowed="a number from 0 to 1", code="missing"))
        stress = point.quantity("stress", "stress", signed=True, required=True)
        point.finish()
        if part is not None and at is not None and stress is not None:
            stresses.append(PointStress(part.strip().lower(), at, stress))
    table.finish()
    if name == Points.name:
        if points is None:
            if "point" not in table.data:
                table.fail("point", ValueFault("missing: the pattern `points` needs points", code="missing"))
            return None, scale
        return (Points(tuple(stresses)) if len(stresses) == len(points) else None), scale
    if points is not None:
        table.fail(
            "point", ValueFault('only the pattern "points" has points', suggestion='write pattern = "points"')
        )
    return (EccsRolled() if name == EccsRolled.name else None), scale


def _bending(table: Table) -> Bending | None:
    about = "major"
    if table.has("about"):
        value = table.data["about"]
        try:
            quantity(value, "angle")
            angle = True
        except ValueFault:
            angle = False
        if angle:
            table.fail(
                "about",
                ValueFault(
                    "an inclined axis is not available in this version",
                    allowed="major, minor",
                    code="not-available",
                ),
            )
        else:
            about = table.choice("about", ("major", "minor")) or "major"
    else:
        table.choice("about", ("major", "minor"), default="major")
    sense = table.choice("sense", ("sagging", "hogging"), default="sagging")
    compression = table.quantity("compression", "force", zero=True) if table.has("compression") else None
    tension = table.quantity("tension", "force", zero=True) if table.has("tension") else None
    if table.has("compression") and table.has("tension"):
        table.fail("tension", ValueFault("compression and tension exclude each other"))
    table.refuse_later(("shear",))
    if table.has("temperature") and str(table.data["temperature"]).replace(" ", "") not in ("20degC", "20°C"):
        table.fail(
            "temperature",
            ValueFault("not available in this version", allowed='"20 degC"', code="not-available"),
        )
    table.choice("sideways", ("held", "free"), default="held")
    table.finish()
    if sense is None:
        return None
    axial = (tension or 0.0) - (compression or 0.0)
    return Bending(about, 1 if sense == "sagging" else -1, axial)


def _trace(table: Table) -> float | None:
    to = table.number("to", least=0.0, above=True, most=1000.0)
    if "to" not in table.data:
        table.notes.entry(("trace", "to"), "20, or the governing limit where that is further", "default")
    table.refuse_later(("path",))
    if table.flag("unload", default=False):
        table.fail(
            "unload", ValueFault("not available in this version", allowed="false", code="not-available")
        )
    table.finish()
    return to


def _rotation(table: Table) -> Setup | None:
    kind = table.choice("setup", SETUPS, required=True)
    span = table.quantity("span", "length", required=True)
    shear_span = None
    if kind == "four-point" or (kind is None and table.has("shear_span")):
        shear_span = table.quantity("shear_span", "length", required=kind == "four-point")
    elif table.has("shear_span"):
        table.fail("shear_span", ValueFault("only four-point bending has a shear span"))
    table.finish()
    if kind is None or span is None:
        return None
    if kind == "four-point":
        if shear_span is None:
            return None
        if 2.0 * shear_span > span:
            table.fail(
                "shear_span",
                ValueFault("the loads cross", allowed=f"up to half the span, {span / 2e3:g} m", code="range"),
            )
            return None
        return Setup(kind, span, shear_span)
    return Setup(kind, span)


def _limits(table: Table) -> Limits | None:
    code = table.choice("code", CODES, default=CODES[0], later=LATER_CODES)
    strain = capacity = None
    if table.has("strain"):
        strain = table.quantity("strain", "strain", most=0.5, least=0.0, text="up to 50 %")
    if table.has("rotation_capacity"):
        capacity = table.number("rotation_capacity", least=0.0, above=True, most=100.0)
    source = table.text("rotation_source") if table.has("rotation_source") else None
    if capacity is not None and source is None:
        table.fail(
            "rotation_source",
            ValueFault(
                "missing: a rotation capacity of your own must say where it comes from",
                code="missing",
                allowed='a text, such as "tests of series B, report 12"',
            ),
        )
    names = table.texts("methods")
    methods: list[str] = []
    for i, name in enumerate(names or []):
        plain = " ".join(name.lower().replace("-", " ").split())
        if plain == "class rotation":
            methods.append(plain)
        else:
            table.fail(
                f"methods[{i}]",
                ValueFault(
                    "no such method in this version",
                    allowed="class rotation",
                    suggestion=closest(name, ["class rotation"]),
                    code="unknown-name",
                ),
            )
    if names is None and "methods" not in table.data:
        table.notes.entry(
            ("limits", "methods"),
            '["class rotation"]' if strain is None and capacity is None else "the limits of your own",
            "default",
        )
        methods = ["class rotation"] if strain is None and capacity is None else []
    table.number("resistance_factor", least=0.0, above=True, most=1.0)
    table.finish()
    if code is None:
        return None
    return Limits(code, tuple(dict.fromkeys(methods)), strain, capacity, source or "")
