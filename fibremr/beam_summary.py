"""A justified beam in words: the one screen that says whether hinges may be assumed, and why."""

from __future__ import annotations

from textwrap import wrap
from typing import TYPE_CHECKING

from fibremr import code_line
from fibremr.beam.effects import reactions
from fibremr.beam_record import mechanism_words, where
from fibremr.summary import CAUTION, WIDTH, labelled, number, typed

if TYPE_CHECKING:
    from fibremr.case.units import System
    from fibremr.hinge_verdict import HingeVerdict
    from fibremr.justification import JustifyResult


def justify_summary(result: JustifyResult, *, where: str = "") -> str:
    """A justified beam on one screen."""
    case, s = result.case, result.case.system
    lines = wrap(f"Is a plastic hinge assumption justified?  {case.title}", WIDTH)
    lines += [f"  {line}" for line in wrap(f"{result.verdict.upper()}: {reason(result)}", WIDTH - 2)]
    lines.append("")
    lines += labelled("Code", f"{result.code_verdict} ({_count(result)})")
    lines += labelled("Rotation", f"{result.rotation_verdict}: {result.rotation_why}")
    lines += labelled("Load factor", ladder_words(result))
    lines += labelled("Collapse", mechanism_words(result))
    if not result.hinges:
        lines += labelled("Hinges", f"none at load factor {number(result.shown.factor, 3)}")
    for h in result.hinges:
        lines += labelled("Hinge", hinge_words(result, h))
    lines += labelled("Checks", "; ".join(_check(c, s) for c in result.checks))
    unknown = [c.check for c in result.checks if c.verdict == code_line.UNKNOWN]
    if unknown:
        lines += labelled("To be shown", f"{', '.join(unknown)}: not known from the case or its table")
    if (deflection := deflection_words(result)) is not None:
        lines += labelled("Deflection", deflection)
    forces = ", ".join(number(s.show(r, "force")) for r in reactions(result.shown))
    lines += labelled("Reactions", f"{forces} {s.force}; {redistribution_words(result)}")
    lines += labelled("Section", f"{result.section.record.section.name}; {case.base.source}")
    held = f"top flange held {result.beam.top.words}, bottom flange {result.beam.bottom.words}"
    lines += labelled("Restraints", held)
    for warning in dict.fromkeys([*result.section.record.warnings, *result.warnings]):
        lines += labelled("Note", warning)
    from fibremr.justification import ASSUMPTIONS, NOT_CHECKED

    lines += labelled("Assumed", "; ".join(ASSUMPTIONS))
    lines += labelled("Not checked", "; ".join(NOT_CHECKED))
    r = result.section.record
    lines += labelled(
        "Fibres",
        f"{r.fibres.count}; error of the curve at most {number(r.fibres.moment_error_pct, 2)} % of Mp",
    )
    if where:
        lines += labelled("Written", where)
    lines += ["", CAUTION]
    return "\n".join(line.rstrip() for line in lines) + "\n"


def reason(result: JustifyResult) -> str:
    """The one reason to say first."""
    from fibremr.hinge_verdict import JUSTIFIED, NOT

    failed = [c for c in result.checks if c.verdict == code_line.FAILS]
    outside = [c for c in result.checks if c.verdict == code_line.OUTSIDE]
    if result.rotation_verdict == NOT and not (failed and result.simple.factor > 1.0):
        return f"{result.rotation_why}."
    if failed or outside:
        c = (failed or outside)[0]
        place = "" if c.at is None else f" at {result.case.system.place(c.at)}"
        allowed = f"; allowed {c.allowed}" if c.allowed else ""
        return f"{c.check}{place}: {c.value}{allowed}."
    if result.verdict == JUSTIFIED:
        return f"{result.rotation_why}, and every check of the code line passes."
    return f"{result.rotation_why}."


def ladder_words(result: JustifyResult) -> str:
    """The ladder of load factors on one line."""
    ladder = result.ladder
    service = result.beam.service
    rungs = [("first yield", ladder.first_yield), ("first hinge", ladder.first_hinge)]
    if service is not None:
        rungs.append(("service", service))
    rungs += [
        ("asked for", 1.0),
        ("rotation limit", ladder.rotation_limit),
        ("collapse", ladder.simple_plastic_collapse),
    ]
    there = sorted(((n, f) for n, f in rungs if f is not None), key=lambda rung: rung[1])
    return " | ".join(f"{n} {f:.3f}" for n, f in there)


def hinge_words(result: JustifyResult, h: HingeVerdict) -> str:
    """A hinge on one line."""
    s, hinge = result.case.system, h.hinge
    moment = number(s.show(hinge.sense * hinge.moment, "moment"))
    sense = "sagging" if hinge.sense > 0 else "hogging"
    text = f"at {s.place(hinge.at)} ({where(h)}), {sense}: {moment} {s.moment}"
    needs = "more than the beam can give" if h.required is None else f"{1e3 * h.required:.2f} mrad"
    text += f", needs {needs}"
    if h.governing is not None and h.governing.rotation is not None:
        text += f", has {1e3 * h.governing.rotation:.1f} mrad by {h.governing.method}"
    if h.use is not None:
        text += f", use {h.use:.2f}"
    both = [("case law", h.case_law), ("elastic-plastic", h.elastic_plastic)]
    shown = ", ".join(f"{n} {1e3 * r:.2f}" for n, r in both if r is not None)
    laws = f" ({shown})" if shown else ""
    return f"{text}; theta_p {1e3 * hinge.theta_p:.2f} mrad{laws}: {h.verdict}"


def deflection_words(result: JustifyResult) -> str | None:
    """The largest deflection against its limit; None when it was not asked for."""
    d, s = result.deflection, result.case.system
    if d is None:
        return None
    text = f"{number(s.show(d.largest, 'length'), 3)} {s.length} in span {d.span + 1}"
    text += f" at service factor {typed(result.beam.service or 0.0)}"
    if d.limit is None:
        return text
    return f"{text}, {number(s.show(d.limit, 'length'), 3)} {s.length} allowed: {d.verdict}"


def redistribution_words(result: JustifyResult) -> str:
    """How much of the largest elastic support moment is redistributed."""
    if result.redistribution is None:
        return "no support moment to redistribute"
    return f"{100 * result.redistribution:.1f} % of the largest elastic support moment is redistributed"


def _count(result: JustifyResult) -> str:
    verdicts = [c.verdict for c in result.checks]
    parts = [
        f"{n} {words if n == 1 else several}"
        for verdict, words, several in (
            (code_line.FAILS, "fails", "fail"),
            (code_line.OUTSIDE, "is outside the methods", "are outside the methods"),
            (code_line.UNKNOWN, "is not known", "are not known"),
        )
        if (n := verdicts.count(verdict))
    ]
    return f"{len(verdicts)} checks: {', '.join(parts) or 'all pass'}"


def _check(c: code_line.Check, s: System) -> str:
    place = "" if c.at is None else f" at {s.place(c.at)}"
    verdict = c.verdict.upper() if c.verdict == code_line.FAILS else c.verdict
    if c.verdict == code_line.OK:
        return f"{c.check}{place} {c.value} ok"
    allowed = f", allowed {c.allowed}" if c.allowed else ""
    return f"{c.check}{place} {c.value}{allowed}: {verdict}"
