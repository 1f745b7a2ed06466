"""What each table of a case may hold, and the records made from it."""

from __future__ import annotations

from dataclasses import replace
from pathlib import PurePath

from fibremr.bending import Bar
from fibremr.case.beam_table import read_beam
from fibremr.case.records import Bending, Case, Limits, Steel
from fibremr.case.section_table import read_section
from fibremr.case.steel_table import read_steels
from fibremr.case.table import Table
from fibremr.case.units import SYSTEMS, quantity, temperature
from fibremr.errors import ValueFault, closest
from fibremr.residual import EccsRolled, Pattern, Points, PointStress
from fibremr.rotation import Setup
from fibremr.section.drawn import PlatesShape, apart
from fibremr.section.parts import Section
from fibremr.section.properties import squash

LATER_PATTERNS = (
    "Galambos-Ketter", "Young", "welded I", "welded box", "cold-formed", "flame-cut", "file",
)  # fmt: skip
CODES = ("EN 1993-1-1:2005",)
LATER_CODES = ("EN 1993-1-1:2022", "AISC 360-22", "AISC 360", "SANS 10162-1:2011", "SANS 10162-1")
SETUPS = ("three-point", "four-point", "cantilever", "uniform load", "end moment")
OTHER_TABLES = ("choose", "study")  # for other commands than those of this version


def read_tables(root: Table, *, file: str, sha256: str) -> Case | None:
    """The case of a whole file, or None after a fault; the faults are with the tables' notes."""
    notes = root.notes
    title = root.text("title", default=PurePath(file).stem if file != "-" else "case")
    system = SYSTEMS[root.choice("units", tuple(SYSTEMS), default="SI") or "SI"]
    for name in OTHER_TABLES:
        root.has(name)
    section_table = root.table(
        "section", required=True, kind='a table [section], such as profile = "IPE 450"'
    )
    section = read_section(section_table, system) if section_table else None
    steel_table = root.table("steel", required=True, kind='a table [steel], such as grade = "S355"')
    limits_table = root.table("limits") or Table(notes, ("limits",), {})
    limits = _limits(limits_table)
    steels = read_steels(steel_table, section_table, section) if steel_table else None
    bending_table = root.table("bending") or Table(notes, ("bending",), {})
    bending, axial = _bending(bending_table)
    trace_table = root.table("trace") or Table(notes, ("trace",), {})
    to = _trace(trace_table)
    rotation_table = root.table("rotation")
    setup = _rotation(rotation_table) if rotation_table else None
    residual_table = root.table("residual")
    pattern, scale = _residual(residual_table) if residual_table else (None, 1.0)
    beam_table = root.table("beam")
    beam = read_beam(beam_table) if beam_table else None
    root.finish()
    if section is not None and steels is not None:
        _check_axial(section, steels[0], axial, bending_table)
    if section is not None and pattern is not None and residual_table is not None:
        _check_pattern(pattern, section, residual_table)
    if section is None or steels is None or bending is None or limits is None:
        return None
    per_part, base = steels
    case = Case(
        file=file,
        sha256=sha256,
        title=title or "",
        system=system,
        section=section,
        steels=per_part,
        base=base,
        pattern=pattern,
        scale=1.0 if scale is None else scale,
        bending=bending,
        to=to,
        setup=setup,
        limits=limits,
        beam=beam,
        entries=(),
        warnings=(),
    )
    if notes.faults:
        return None
    _together(case, bending_table, residual_table)
    if notes.faults:
        return None
    order = {name: i for i, name in enumerate(root.data)}
    entries = sorted(notes.entries, key=lambda e: order.get(e.key.split(".")[0], len(order)))
    return replace(case, entries=tuple(entries), warnings=tuple(dict.fromkeys(notes.warnings)))


def bar_of(case: Case) -> Bar:
    """What a case asks to bend: the section turned to its bending axis, with laws and axial force."""
    from math import pi

    turn = pi / 2.0 if case.bending.about == "minor" else 0.0
    laws = tuple(steel.law for steel in case.steels)
    return Bar(case.section.turned(turn), laws, case.bending.axial, case.bending.sense)


def _check_axial(section: Section, steels: tuple[Steel, ...], axial: float, table: Table) -> None:
    load = squash(section, [steel.law.yield_stress for steel in steels])
    if abs(axial) >= load:
        table.fail(
            "compression" if axial < 0.0 else "tension",
            ValueFault(
                "the axial force reaches the squash load of the section",
                allowed=f"below {load / 1e3:.7g} kN",
                code="range",
            ),
        )


def _check_pattern(pattern: Pattern, section: Section, table: Table) -> None:
    if isinstance(pattern, Points):
        for error in pattern.faults(section):
            table.fail(error.key, error)
        return
    try:
        pattern.over(section)
    except ValueFault as error:
        table.fail(error.key, error)


def _together(case: Case, bending: Table, residual: Table | None) -> None:
    """What only shows when the tables, each without a fault, are seen together."""
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
            "the section has no symmetry in or across the plane of bending: it is held sideways, "
            f"which in the elastic range takes a sideways moment of {share:.2f} times the moment shown"
        )
    if isinstance(case.section.shape, PlatesShape) and (loose := apart(case.section.shape)):
        bending.notes.warnings.append(
            f"plate {', '.join(map(str, loose))} touches no other: all are taken to bend as one section"
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


def _bending(table: Table) -> tuple[Bending | None, float]:
    """How the section is bent, or None after a fault; and the axial force as far as it can be read."""
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
    if table.has("temperature"):
        try:
            if abs(temperature(table.data["temperature"]) - 20.0) > 0.5:
                raise ValueFault("not available in this version", allowed='"20 degC"', code="not-available")
        except ValueFault as error:
            table.fail("temperature", error)
    table.choice("sideways", ("held", "free"), default="held")
    table.finish()
    axial = (tension or 0.0) - (compression or 0.0)
    if sense is None:
        return None, axial
    return Bending(about, 1 if sense == "sagging" else -1, axial), axial


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
    span = table.quantity("span", "length", required=True, least=10.0, most=1e6, text="10 mm to 1 km")
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
    code = table.choice(
        "code",
        CODES,
        default=CODES[0],
        later=LATER_CODES,
        also={"EN 1993-1-1": CODES[0], "EN 1993": CODES[0]},
    )
    strain = capacity = None
    if table.has("strain"):
        strain = table.quantity("strain", "strain", most=0.5, least=0.0, text="up to 50 %")
    if table.has("rotation_capacity"):
        capacity = table.number("rotation_capacity", least=0.0, above=True, most=100.0)
    source = table.text("rotation_source") if table.has("rotation_source") else None
    if capacity is not None and "rotation_source" not in table.data:
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
    if table.number("resistance_factor", least=0.0, above=True, most=1.0) not in (None, 1.0):
        only = "1.0, that of EN 1993-1-1"
        fault = ValueFault("not available in this version", allowed=only, code="not-available")
        table.fail("resistance_factor", fault)
    table.finish()
    if code is None:
        return None
    return Limits(code, tuple(dict.fromkeys(methods)), strain, capacity, source or "")
