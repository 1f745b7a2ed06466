"""Results in words: the one screen that answers the engineer's question, and tables for the terminal."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from textwrap import wrap
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from fibremr.available import Limit
    from fibremr.case.records import Case
    from fibremr.section.catalogue import Profile
    from fibremr.tracing import TraceResult

CAUTION = "An aid for qualified engineers; it replaces neither the code in force nor their judgement."
NOT_IN_MODEL = (
    "No local or lateral buckling, shear, fracture or connection is in the fibres; "
    "the curve cannot show a moment that falls."
)


def number(value: float, digits: int = 4) -> str:
    """A number with so many significant digits, without an exponent where it can be read without."""
    if value == 0.0:
        return "0"
    if 1e-4 <= abs(value) < 10.0**digits or abs(value) < 1e7:
        size = len(str(int(abs(value)))) if abs(value) >= 1.0 else 1
        places = max(0, digits - size)
        if abs(value) < 1.0:
            from math import floor, log10

            places = digits - 1 - floor(log10(abs(value)))
        return f"{value:.{places}f}"
    return f"{value:.{digits - 1}e}"


def trace_summary(result: TraceResult, *, where: str = "") -> str:
    """A trace on one screen."""
    r, case, s = result.record, result.case, result.case.system
    sense = "sagging" if case.bending.sense > 0 else "hogging"
    unit = s.moment

    def m(value_kNm: float) -> str:
        return f"{number(s.show(value_kNm * 1e6, 'moment'))} {unit}"

    def k(value_per_m: float) -> str:
        return f"{number(s.show(value_per_m / 1e3, 'curvature'))} {s.curvature}"

    lines = [f"How does this section bend, and how far can it turn?  {case.title}"]
    lines += [f"  {line}" for line in _wrapped(_answer(result))]
    lines.append("")
    rows: list[tuple[str, str]] = []
    rows.append(
        ("Section", f"{r.section.name}, bent about its {case.bending.about} axis, {sense}{_axial(case)}")
    )
    rows.append(("Steel", _steel(result)))
    if r.residual is not None:
        rows.append(("Residual", _residual(result)))
    rows.append(("First yield", f"{m(r.moments.first_yield_kNm)} at {k(r.curvatures.first_yield_per_m)}"))
    rows.append(
        (
            "My, Mp",
            f"{m(r.moments.My_kNm)}, {m(r.moments.Mp_kNm)}{_with_axial(case)}; shape factor "
            f"{number(r.shape_factor)}{' (no axial force)' if case.bending.axial else ''}",
        )
    )
    b = r.bilinear
    bilinear = f"largest gap {number(b.largest_gap_pct, 3)} % of Mp"
    if b.moment_at_elastic_Mp_curvature_ratio is not None:
        bilinear += (
            f"; the curve has {number(b.moment_at_elastic_Mp_curvature_ratio)} Mp where two lines have Mp"
        )
    rows.append(("Two lines", bilinear))
    rows.append(
        (
            "Curve",
            f"to {k(result.curve.curvature[-1] * 1e3)}; "
            f"largest moment up to the limit {m(r.moments.largest_kNm)}",
        )
    )
    if r.rotation is not None:
        rows.append(
            (
                "Rotation",
                f"{r.rotation.setup}, span {number(s.show(r.rotation.span_m * 1e3, 'span'))} {s.span}; "
                f"theta_p {number(r.rotation.theta_p_mrad)} mrad over the whole region",
            )
        )
    cls = r.class_
    if cls.section is None:
        rows.append(("Class", f"{cls.code}: {result.classed.why_not}"))
    else:
        parts = ", ".join(
            f"{p.part} {number(p.ratio, 3)} {'>' if p.class_ == 4 else '<='} {number(p.limit, 3)}"
            for p in cls.parts
        )
        rows.append(("Class", f"{cls.section} by {cls.code} ({parts or 'nothing compressed'})"))
    rows.append(
        (
            "Error",
            f"{number(r.fibres.moment_error_pct, 2)} % of Mp over the whole curve, {r.fibres.count} fibres",
        )
    )
    lines += _rows(rows)
    lines += ["", *_limit_table(result)]
    for warning in r.warnings:
        lines += _labelled("Note", warning)
    if where:
        lines += _labelled("Written", where)
    lines += ["", *_wrapped(NOT_IN_MODEL, 98), CAUTION]
    return "\n".join(line.rstrip() for line in lines) + "\n"


def _answer(result: TraceResult) -> str:
    r = result.record
    mp = r.moments.Mp_kNm
    s = result.case.system
    text = (
        f"It yields first at {number(r.moments.first_yield_kNm / mp, 3)} Mp and reaches Mp = "
        f"{number(s.show(mp * 1e6, 'moment'))} {s.moment} "
    )
    text += "only in the limit" if r.moments.largest_kNm < mp else "within the trace"
    governs = result.governs
    if governs is None:
        return text + "; no limit that applies says how far it can turn."
    r_text = number(governs.rotation_capacity or 0.0, 3)
    if governs.rotation is None:
        assert governs.curvature is not None or governs.rotation_capacity is not None
        if governs.curvature is not None:
            return text + f"; {governs.method} ends it at {number(governs.curvature * 1e3)} 1/m."
        return text + f"; {governs.method} gives R = {r_text}, with no region to turn over."
    return (
        text + f"; it can turn {number(1e3 * governs.rotation)} mrad (R = {r_text}), "
        f"then {governs.method} ends it."
    )


def _axial(case: Case) -> str:
    n = case.bending.axial
    if n == 0.0:
        return ""
    kind = "compression" if n < 0.0 else "tension"
    return f", {number(case.system.show(abs(n), 'force'))} {case.system.force} {kind}"


def _with_axial(case: Case) -> str:
    return " (Mp with the axial force, My without)" if case.bending.axial else ""


def _steel(result: TraceResult) -> str:
    r, s = result.record.steel, result.case.system
    text = f"{number(s.show(r.yield_MPa, 'stress'))} {s.stress}, {r.law}; {r.source}"
    for part, fy in r.parts.items():
        text += f"; {part} {number(s.show(fy, 'stress'))} {s.stress}"
    return text


def _residual(result: TraceResult) -> str:
    r, s = result.record.residual, result.case.system
    assert r is not None
    return (
        f"{r.pattern} x {number(r.scale, 3)}: {number(s.show(r.peak_compression_MPa, 'stress'), 3)} to "
        f"+{number(s.show(r.peak_tension_MPa, 'stress'), 3)} {s.stress}; "
        f"balanced by {number(r.correction_force_pct, 2)} % "
        f"of the squash load and {number(abs(round(r.correction_moment_pct, 9)), 2)} % of My"
    )


def _limit_table(result: TraceResult) -> list[str]:
    s = result.case.system
    header = (
        "Limit",
        "strain %",
        f"curv. {s.curvature}",
        f"moment {s.moment}",
        "rotation mrad",
        "plastic mrad",
        "R",
        "",
    )
    body = []
    notes: list[str] = []
    for l in result.limits:
        if not l.applies:
            notes += _labelled(l.method, f"does not apply: {l.why_not}", width=98)
            continue
        body.append(
            (
                l.method,
                _maybe(l.strain, 100.0),
                _maybe(None if l.curvature is None else s.show(l.curvature, "curvature")),
                _maybe(None if l.moment is None else s.show(l.moment, "moment")),
                _maybe(l.rotation, 1e3),
                _maybe(l.plastic_rotation, 1e3),
                _maybe(l.rotation_capacity),
                "governs" if l.governs else "",
            )
        )
        if l.warning:
            notes += _labelled(l.method, l.warning, width=98)
    return [*(table([header, *body]) if body else []), *notes]


def _maybe(value: float | None, factor: float = 1.0) -> str:
    return "-" if value is None else number(value * factor, 4)


def table(rows: Sequence[Sequence[str]]) -> list[str]:
    """Rows of text in columns: the first to the left, the others to the right."""
    widths = [max(len(row[i]) for row in rows) for i in range(len(rows[0]))]
    lines = []
    for row in rows:
        cells = [
            cell.ljust(w) if i == 0 else cell.rjust(w)
            for i, (cell, w) in enumerate(zip(row, widths, strict=True))
        ]
        lines.append(("  " + "  ".join(cells)).rstrip())
    return lines


def left_table(rows: Iterable[Sequence[str]]) -> list[str]:
    """Rows of text in columns, all to the left."""
    every = [list(row) for row in rows]
    widths = [max(len(row[i]) for row in every) for i in range(len(every[0]))]
    return ["  ".join(cell.ljust(w) for cell, w in zip(row, widths, strict=True)).rstrip() for row in every]


def _rows(rows: Iterable[tuple[str, str]]) -> list[str]:
    return [line for label, text in rows for line in _labelled(label, text)]


def _labelled(label: str, text: str, *, width: int = 98) -> list[str]:
    pieces = wrap(text, width - 14) or [""]
    if len(label) > 11:
        return [f"  {label}: {pieces[0]}", *(f"    {p}" for p in pieces[1:])]
    return [f"  {label:<12}{pieces[0]}", *(f"  {'':<12}{p}" for p in pieces[1:])]


def _wrapped(text: str, width: int = 96) -> list[str]:
    return wrap(text, width)


def read_summary(case: Case) -> str:
    """A case as understood: every value with where it came from, and what it implies."""
    from fibremr.case.tables import bar_of

    bar, s = bar_of(case), case.system
    lines = [f"{case.title}: the case as understood", ""]
    rows = [("key", "value", "where from"), *((e.key, e.value, e.origin) for e in case.entries)]
    lines += [f"  {line}" for line in left_table(rows)]
    g = bar.geometry
    lines += ["", f"  What it implies, about the {case.bending.about} axis:"]
    thickness = {
        p.name: (
            f"{p.thickness:g} mm",
            f"{number(st.law.yield_stress)} MPa",
            p.steel or "steel",
            f"{number(p.moments.area)} mm2",
        )
        for p, st in zip(case.section.parts, case.steels, strict=True)
    }
    parts = [("part", "thickness", "yield", "of", "area"), *((n, *v) for n, v in thickness.items())]
    lines += [f"    {line}" for line in left_table(parts)]
    implied = [
        ("area", f"{number(g.area)} mm2"),
        ("centroid", f"{number(g.centroid - g.bottom)} mm from the lowest point"),
        ("second moment", f"{number(g.second_moment / 1e4)} cm4"),
        (
            "elastic moduli",
            f"{number(g.modulus_top / 1e3)} cm3 top, {number(g.modulus_bottom / 1e3)} cm3 bottom",
        ),
        (
            "plastic modulus",
            f"{number(bar.plastic_alone.modulus / 1e3)} cm3, "
            f"axis {number(bar.plastic_alone.axis - g.bottom)} mm from the lowest point",
        ),
        ("squash load", f"{number(s.show(bar.squash, 'force'))} {s.force}"),
        ("My", f"{number(s.show(bar.yield_moment, 'moment'))} {s.moment}"),
        ("Mp", f"{number(s.show(bar.plastic.moment, 'moment'))} {s.moment}{_with_axial(case)}"),
    ]
    lines += ["", *(f"    {line}" for line in left_table(implied))]
    for warning in case.warnings:
        lines += _labelled("Note", warning)
    return "\n".join(lines) + "\n"


def limit_line(limit: Limit) -> str:
    """A limit in a few words, for pictures."""
    text = limit.method
    if limit.rotation_capacity is not None:
        text += f" (R = {number(limit.rotation_capacity, 3)})"
    return text


def read_record(case: Case) -> dict[str, object]:
    """A case as understood, as plain data."""
    from fibremr.case.tables import bar_of

    bar = bar_of(case)
    return {
        "case": {"title": case.title, "sha256": case.sha256},
        "values": [{"key": e.key, "value": e.value, "origin": e.origin} for e in case.entries],
        "parts": [
            {
                "part": p.name,
                "thickness_mm": p.thickness,
                "area_mm2": p.moments.area,
                "yield_MPa": st.law.yield_stress,
                "law": st.law.name,
                "source": st.source,
            }
            for p, st in zip(case.section.parts, case.steels, strict=True)
        ],
        "implies": {
            "area_mm2": bar.geometry.area,
            "second_moment_mm4": bar.geometry.second_moment,
            "squash_load_kN": bar.squash / 1e3,
            "My_kNm": bar.yield_moment / 1e6,
            "Mp_kNm": bar.plastic.moment / 1e6,
        },
        "warnings": list(case.warnings),
    }


def profile_row(profile: Profile) -> dict[str, object]:
    """A profile and its exact properties, about both axes."""
    from math import pi

    from fibremr.section.properties import geometry, plastic

    section = profile.section()
    ones = [1.0] * len(section.parts)
    upright, lying = geometry(section), geometry(section.turned(pi / 2.0))
    return {
        "profile": profile.name,
        "h_mm": upright.top - upright.bottom,
        "b_mm": lying.top - lying.bottom,
        "A_cm2": upright.area / 1e2,
        "kg/m": profile.mass_kg_per_m,
        "Iy_cm4": upright.second_moment / 1e4,
        "Wel,y_cm3": min(upright.modulus_top, upright.modulus_bottom) / 1e3,
        "Wpl,y_cm3": plastic(section, ones).modulus / 1e3,
        "Iz_cm4": lying.second_moment / 1e4,
        "Wel,z_cm3": min(lying.modulus_top, lying.modulus_bottom) / 1e3,
        "Wpl,z_cm3": plastic(section.turned(pi / 2.0), ones).modulus / 1e3,
        "standard": profile.standard,
    }
