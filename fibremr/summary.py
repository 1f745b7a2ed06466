"""Results in words: the one screen that answers the engineer's question, and tables for the terminal."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from math import floor, log10
from textwrap import wrap
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from fibremr.available import Limit
    from fibremr.case.records import Case, Steel
    from fibremr.tracing import TraceResult

WIDTH = 98
CAUTION = "An aid for qualified engineers; it replaces neither the code in force nor their judgement."
NOT_IN_MODEL = (
    "Nominal strengths, no partial or resistance factor. The fibres know no local or lateral buckling, "
    "shear, fracture or connection: the curve cannot show a moment that falls."
)


def number(value: float, digits: int = 4) -> str:
    """A number with so many significant digits, written out in the range that engineers read."""
    if abs(value) < 1e-12:
        return "0"
    if not 1e-5 <= abs(value) < 1e7:
        return f"{value:.{digits - 1}e}"
    return f"{value:.{max(0, digits - 1 - floor(log10(abs(value))))}f}"


def typed(value: float) -> str:
    """A number that was given, without digits that nobody gave."""
    return f"{value:.6g}"


class Words:
    """Values in the units of a case."""

    def __init__(self, case: Case) -> None:
        self.system = case.system

    def moment(self, kilonewton_metres: float) -> str:
        """A moment given in kNm."""
        return f"{number(self.system.show(kilonewton_metres * 1e6, 'moment'))} {self.system.moment}"

    def curvature(self, per_metre: float) -> str:
        """A curvature given in 1/m."""
        return f"{number(self.system.show(per_metre / 1e3, 'curvature'))} {self.system.curvature}"

    def stress(self, megapascal: float, digits: int = 4) -> str:
        """A stress given in MPa."""
        return f"{number(self.system.show(megapascal, 'stress'), digits)} {self.system.stress}"

    def length(self, millimetres: float) -> str:
        """A length given in mm."""
        return f"{number(self.system.show(millimetres, 'length'))} {self.system.length}"

    def span(self, millimetres: float) -> str:
        """A span given in mm, as it was typed."""
        return f"{typed(self.system.show(millimetres, 'span'))} {self.system.span}"

    def force(self, newton: float) -> str:
        """A force given in N."""
        return f"{number(self.system.show(newton, 'force'))} {self.system.force}"

    def given_force(self, newton: float) -> str:
        """A force given in N, as it was typed."""
        return f"{typed(self.system.show(newton, 'force'))} {self.system.force}"

    def power(self, value: float, exponent: int) -> str:
        """An area, modulus or second moment: in mm2, cm3, cm4, or in inches."""
        if self.system.name == "US":
            return f"{number(value / 25.4**exponent)} in{exponent}"
        return f"{number(value)} mm2" if exponent == 2 else f"{number(value / 10.0**exponent)} cm{exponent}"


def axis_words(case: Case) -> str:
    """Which way the section is bent, and which edge is compressed."""
    sense = "sagging" if case.bending.sense > 0 else "hogging"
    if case.bending.about == "major":
        edge = "top" if case.bending.sense > 0 else "bottom"
        return f"about y-y (major), {sense}: {edge} compressed"
    edge = "right-hand" if case.bending.sense > 0 else "left-hand"
    return f"about z-z (minor), {sense}: {edge} edge compressed"


def axial_words(case: Case) -> str:
    """The axial force, or nothing when there is none."""
    n = case.bending.axial
    if n == 0.0:
        return ""
    return f"{Words(case).given_force(abs(n))} {'compression' if n < 0.0 else 'tension'}"


def trace_summary(result: TraceResult, *, where: str = "") -> str:
    """A trace on one screen."""
    r, case = result.record, result.case
    lines = wrap(f"How does this section bend, and how far can it turn?  {case.title}", WIDTH)
    lines += [f"  {line}" for line in wrap(answer(result), WIDTH - 2)]
    lines.append("")
    lines += _rows(section_rows(result))
    lines += ["", *_limit_table(result)]
    for warning in r.warnings:
        lines += labelled("Note", warning)
    if where:
        lines += labelled("Written", where)
    lines += ["", *wrap(NOT_IN_MODEL, WIDTH), CAUTION]
    return "\n".join(line.rstrip() for line in lines) + "\n"


def section_rows(result: TraceResult) -> list[tuple[str, str]]:
    """What a trace says of the section and its curve, as labels and texts."""
    r, case, say = result.record, result.case, Words(result.case)
    axial = axial_words(case)
    rows = [("Section", f"{r.section.name}, {axis_words(case)}{'; ' + axial if axial else ''}")]
    rows.append(("Steel", _steel(result)))
    if r.residual is not None:
        rows.append(("Residual", _residual(result)))
    rows += _moment_rows(result)
    rows.append(("Two lines", _two_lines(result)))
    if r.rotation is not None:
        rows.append(
            (
                "Rotation",
                f"{r.rotation.setup}, span {say.span(r.rotation.span_m * 1e3)}: "
                f"theta_p = {number(r.rotation.theta_p_mrad)} mrad, {_region(r.rotation.setup)}",
            )
        )
    rows.append(("Class", _class(result)))
    rows.append(
        (
            "Fibres",
            f"{r.fibres.count}; discretisation error at most {number(r.fibres.moment_error_pct, 2)} % of Mp "
            f"over the curve, traced to {say.curvature(result.curve.curvature[-1] * 1e3)}",
        )
    )
    return rows


def answer(result: TraceResult) -> str:
    """The headline: yielding, what the moment comes to, and how far it turns."""
    r, say, governs = result.record, Words(result.case), result.governs
    mp, first = r.moments.Mp_kNm, r.moments.first_yield_kNm
    limit = governs.curvature if governs is not None else None
    elastic = limit is not None and 1e3 * limit < r.curvatures.first_yield_per_m
    if elastic:
        assert governs is not None
        return (
            f"It is still elastic when {governs.method} ends it, at "
            f"{number((governs.moment or 0.0) / 1e6 / mp, 3)} Mp{_turns(governs)}."
        )
    if r.curvatures.first_yield_per_m == 0.0:
        text = "It yields under the axial force and residual stress alone"
    else:
        text = f"It yields first at {say.moment(first)} ({number(first / mp, 3)} Mp)"
    largest = r.moments.largest_kNm
    beyond = float(result.curve.moment.max()) / 1e6
    if largest >= mp:
        text += f" and passes Mp = {say.moment(mp)}"
    elif limit is not None and governs is not None:
        text += (
            f" and is at {number(largest / mp, 4)} Mp = {say.moment(largest)} when {governs.method} ends it"
        )
        if beyond >= mp:
            text += ", and would pass Mp beyond that"
    else:
        text += f" and comes to {number(largest / mp, 4)} Mp = {say.moment(largest)} by the end of the trace"
    if governs is None:
        return f"{text}. No limit that applies says how far it can turn."
    if governs.rotation is None:
        if governs.curvature is not None:
            return f"{text}; {governs.method} ends it at {say.curvature(1e3 * governs.curvature)}."
        r_text = _maybe(governs.rotation_capacity)
        return f"{text}; {governs.method} gives R = {r_text}, and there is no region to turn over."
    return f"{text}{_turns(governs)}."


def _turns(governs: Limit) -> str:
    if governs.rotation is None:
        return ""
    return f"; by {governs.method} it can turn {number(1e3 * governs.rotation)} mrad{_capacity(governs)}"


def _capacity(limit: Limit) -> str:
    r = limit.rotation_capacity
    if r is None:
        return ""
    return f" (R = {number(r, 3)})" if r >= 0.0 else " (less than theta_p)"


def _steel(result: TraceResult) -> str:
    case, say = result.case, Words(result.case)
    text = f"{say.stress(case.base.law.yield_stress)}, {case.base.law.words(say.stress)}; {case.base.source}"
    for names, steel in _special(case).items():
        text += f". {names}: {say.stress(steel.law.yield_stress)}, {steel.source}"
    return text


def _special(case: Case) -> dict[str, Steel]:
    """The parts whose steel is not that of [steel], by their joined names."""
    groups: dict[Steel, list[str]] = {}
    for part, steel in zip(case.section.parts, case.steels, strict=True):
        if steel != case.base and not part.joins:
            groups.setdefault(steel, []).append(part.name)
    return {" and ".join(names).capitalize(): steel for steel, names in groups.items()}


def _residual(result: TraceResult) -> str:
    r, say = result.record.residual, Words(result.case)
    assert r is not None
    scale = "" if r.scale == 1.0 else f" x {typed(r.scale)}"
    return (
        f"{r.pattern}{scale}: {say.stress(r.peak_compression_MPa, 3)} (compression) to "
        f"{say.stress(r.peak_tension_MPa, 3)} (tension) once balanced; as given it lacked "
        f"{number(abs(r.correction_force_pct), 2)} % of the squash load and "
        f"{number(abs(round(r.correction_moment_pct, 9)), 2)} % of My"
    )


def _moment_rows(result: TraceResult) -> list[tuple[str, str]]:
    r, bar, say = result.record, result.bar, Words(result.case)
    rows = []
    if r.curvatures.first_yield_per_m > 0.0:
        first = f"{say.moment(r.moments.first_yield_kNm)} at {say.curvature(r.curvatures.first_yield_per_m)}"
        rows.append(("First yield", f"{first}, in the {bar.first_to_yield(result.curve.residual)}"))
    my = f"{say.moment(r.moments.My_kNm)}"
    if result.case.bending.axial:
        rows.append(("My, Mp", f"{my}, {say.moment(bar.plastic_alone.moment / 1e6)} without axial force; "
                               f"shape factor {number(r.shape_factor)}"))  # fmt: skip
        rows.append(("Mp with N", say.moment(r.moments.Mp_kNm)))
    else:
        rows.append(
            ("My, Mp", f"{my}, {say.moment(r.moments.Mp_kNm)}; shape factor {number(r.shape_factor)}")
        )
    return rows


def _two_lines(result: TraceResult) -> str:
    b = result.record.bilinear
    side = "below" if result.gap_below else "above"
    text = f"the curve lies up to {number(b.largest_gap_pct, 3)} % of Mp {side} the lines EI and Mp"
    if b.moment_at_elastic_Mp_curvature_ratio is not None:
        text += f"; it has {number(b.moment_at_elastic_Mp_curvature_ratio, 3)} Mp at the curvature Mp/(EI)"
    return text


def _region(setup: str) -> str:
    if setup in ("cantilever", "end moment"):
        return "the rotation from the peak to the far end (one side)"
    return "the rotation between the ends of the span (both sides of the peak)"


def _class(result: TraceResult) -> str:
    c = result.record.class_
    if c.section is None:
        return f"none by {c.code}: {result.classed.why_not}"
    parts = []
    for p in c.parts:
        sign = ">" if p.class_ == 4 else "<="
        limit = "no limit" if p.limit is None else f"{number(p.ratio, 3)} {sign} {number(p.limit, 3)}"
        parts.append(f"{p.part} {p.class_}: {limit}")
    return f"{c.section} by {c.code} ({'; '.join(parts) or 'nothing compressed'})"


def limit_rows(result: TraceResult) -> list[tuple[str, ...]]:
    """The limits that apply, row by row under a head; nothing when none applies."""
    s = result.case.system
    header = (
        "Limit", "strain %", f"curv. {s.curvature}", f"moment {s.moment}", "rotation mrad", "plastic mrad",
        "R [-]", "",
    )  # fmt: skip
    body: list[tuple[str, ...]] = []
    end = float(result.curve.curvature[-1]) * (1.0 + 1e-9)
    for l in result.limits:
        if not l.applies:
            continue
        remark = "governs" if l.governs else ""
        if l.curvature is not None and l.curvature > end:
            remark = f"{remark} beyond the trace".strip()
        body.append(
            (
                l.method,
                _maybe(l.strain, 100.0),
                _maybe(None if l.curvature is None else s.show(l.curvature, "curvature")),
                _maybe(None if l.moment is None else s.show(l.moment, "moment")),
                _maybe(l.rotation, 1e3),
                _maybe(l.plastic_rotation, 1e3),
                "< 0" if (l.rotation_capacity or 0.0) < 0.0 else _maybe(l.rotation_capacity),
                remark,
            )
        )
    return [header, *body] if body else []


def _limit_table(result: TraceResult) -> list[str]:
    rows = limit_rows(result)
    notes: list[str] = []
    for l in result.limits:
        if not l.applies:
            notes += labelled(l.method, f"does not apply: {l.why_not}")
        elif l.warning:
            notes += labelled(l.method, l.warning)
    if result.case.limits.rotation_source:
        notes += labelled("R of own", f"from {result.case.limits.rotation_source}")
    return [*(table(rows) if rows else []), *notes]


def _maybe(value: float | None, factor: float = 1.0) -> str:
    return "-" if value is None else number(value * factor, 4)


def table(rows: Sequence[Sequence[str]]) -> list[str]:
    """Rows of text in columns: the first and an unheaded last one to the left, the others to the right."""
    widths = [max(len(row[i]) for row in rows) for i in range(len(rows[0]))]
    left = {0} | {i for i, head in enumerate(rows[0]) if not head}
    lines = []
    for row in rows:
        cells = [
            cell.ljust(w) if i in left else cell.rjust(w)
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
    return [line for label, text in rows for line in labelled(label, text)]


def labelled(label: str, text: str) -> list[str]:
    """A label and a text beside it, wrapped to the width of the screen."""
    pieces = wrap(text, WIDTH - 14) or [""]
    if len(label) > 11:
        pieces = wrap(f"{label}: {text}", WIDTH - 4)
        return [f"  {pieces[0]}", *(f"    {p}" for p in pieces[1:])]
    return [f"  {label:<12}{pieces[0]}", *(f"  {'':<12}{p}" for p in pieces[1:])]


def limit_line(limit: Limit) -> str:
    """A limit in a few words, for pictures."""
    text = limit.method
    if limit.rotation_capacity is not None and limit.rotation_capacity >= 0.0:
        text += f", R = {number(limit.rotation_capacity, 3)}"
    return text + (", governs" if limit.governs else "")
