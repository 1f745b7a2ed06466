"""report.html: one page with nothing from outside, the question and its answer first."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import TYPE_CHECKING

from fibremr import summary
from fibremr.summary import CAUTION, NOT_IN_MODEL

if TYPE_CHECKING:
    from jinja2 import Template
    from markupsafe import Markup

    from fibremr.justification import JustifyResult
    from fibremr.tracing import TraceResult

Rows = list[tuple[str, ...]]


@dataclass(frozen=True)
class Part:
    """A part of the page: heading, paragraphs, a table whose first row is its head, pictures."""

    heading: str
    texts: tuple[str, ...] = ()
    rows: tuple[tuple[str, ...], ...] = ()
    pictures: tuple[Markup, ...] = ()


@cache
def _template() -> Template:
    from jinja2 import Environment, StrictUndefined

    environment = Environment(
        autoescape=True, undefined=StrictUndefined, trim_blocks=True, lstrip_blocks=True
    )
    return environment.from_string((files("fibremr") / "report.html.j2").read_text(encoding="utf-8"))


def trace_report(result: TraceResult, pictures: Mapping[str, str]) -> str:
    """The page of a trace; `pictures` are SVG texts by name, and may be empty."""
    r = result.record
    return _template().render(
        command="trace",
        question="How does this section bend, and how far can it turn?",
        title=result.case.title,
        verdict="",
        answer=summary.answer(result),
        lines=[],
        notes=r.warnings,
        parts=[*_section_parts(result, pictures), *_input_parts(result), _assumed(())],
        caution=CAUTION,
        version=r.fibremr,
        sha256=r.case.sha256,
        written=r.written,
    )


def justify_report(result: JustifyResult, pictures: Mapping[str, str]) -> str:
    """The page of a justified beam."""
    from fibremr import beam_summary
    from fibremr.justification import ASSUMPTIONS, NOT_CHECKED

    r = result.section.record
    notes = dict.fromkeys([*r.warnings, *result.warnings])
    return _template().render(
        command="justify",
        question="Is a plastic hinge assumption justified?",
        title=result.case.title,
        verdict=result.verdict,
        answer=beam_summary.reason(result),
        lines=[
            f"Code: {result.code_verdict}. Rotation: {result.rotation_verdict}; {result.rotation_why}.",
            f"Not checked: {'; '.join(NOT_CHECKED)}.",
        ],
        notes=list(notes),
        parts=[
            *_beam_parts(result, pictures),
            *_section_parts(result.section, pictures),
            *_input_parts(result.section),
            _assumed(ASSUMPTIONS),
        ],
        caution=CAUTION,
        version=r.fibremr,
        sha256=r.case.sha256,
        written=r.written,
    )


def _beam_parts(result: JustifyResult, pictures: Mapping[str, str]) -> Iterator[Part]:
    from fibremr import beam_summary
    from fibremr.beam.effects import reactions
    from fibremr.beam_record import mechanism_words, where

    s = result.case.system
    texts = [
        f"Load factors: {beam_summary.ladder_words(result)}.",
        f"Simple plastic collapse: {mechanism_words(result)}.",
        f"Top flange held {result.beam.top.words}, bottom flange {result.beam.bottom.words}.",
        beam_summary.redistribution_words(result).capitalize() + ".",
    ]
    if (deflection := beam_summary.deflection_words(result)) is not None:
        texts.append(f"Deflection: {deflection}.")
    forces = ", ".join(summary.number(s.show(f, "force")) for f in reactions(result.shown))
    texts.append(f"Reactions: {forces} {s.force}.")
    yield Part("Beam", tuple(texts), pictures=_shown(pictures, "beam", "ladder"))
    head = ("hinge", "sense", f"moment {s.moment}", "theta_p mrad", "required mrad, law of the case",
            "required mrad, elastic-plastic", "available mrad", "by", "use", "verdict")  # fmt: skip
    rows = [head]
    for h in result.hinges:
        hinge = h.hinge
        rows.append(
            (
                f"{s.place(hinge.at)}, {where(h)}",
                "sagging" if hinge.sense > 0 else "hogging",
                summary.number(s.show(hinge.sense * hinge.moment, "moment")),
                f"{1e3 * hinge.theta_p:.2f}",
                _milli(h.case_law),
                _milli(h.elastic_plastic),
                "-" if h.governing is None else _milli(h.governing.rotation),
                "-" if h.governing is None else h.governing.method,
                "-" if h.use is None else f"{h.use:.2f}",
                h.verdict,
            )
        )
    none = () if result.hinges else (f"No hinge forms up to load factor {result.shown.factor:.3g}.",)
    yield Part("Hinges", none, tuple(rows) if result.hinges else (), _shown(pictures, "hinges"))
    checks = [("check", "at", "value", "allowed", "verdict", "source")]
    checks += [
        (c.check, "" if c.at is None else s.place(c.at), c.value, c.allowed, c.verdict, c.source)
        for c in result.checks
    ]
    yield Part("Checks of the code line", (), tuple(checks))


def _section_parts(result: TraceResult, pictures: Mapping[str, str]) -> Iterator[Part]:
    rows = [("", ""), *summary.section_rows(result)]
    yield Part("Section and curve", (), tuple(rows), _shown(pictures, "section", "moment-curvature"))
    limits = summary.limit_rows(result)
    notes = tuple(f"{l.method}: {l.why_not or l.warning}" for l in result.limits if l.why_not or l.warning)
    sources = tuple(f"{l.method}: {l.source}." for l in result.limits)
    yield Part(
        "How far it can turn", (*notes, *sources), tuple(limits),
        _shown(pictures, "moment-rotation", "stress-stages"),
    )  # fmt: skip


def _input_parts(result: TraceResult) -> Iterator[Part]:
    rows = [("key", "value", "where from"), *((e.key, e.value, e.origin) for e in result.case.entries)]
    yield Part("The case as understood", (), tuple(rows))


def _assumed(more: tuple[str, ...]) -> Part:
    return Part("Assumptions", (NOT_IN_MODEL, *(f"{text[0].upper()}{text[1:]}." for text in more)))


def _milli(value: float | None) -> str:
    return "-" if value is None else f"{1e3 * value:.2f}"


def _shown(pictures: Mapping[str, str], *names: str) -> tuple[Markup, ...]:
    from markupsafe import Markup

    return tuple(Markup(_inline(pictures[name], name)) for name in names if name in pictures)


def _inline(svg: str, name: str) -> str:
    """An SVG to stand in a page beside others: no prolog, and its ids its own."""
    body = svg[svg.index("<svg") :]
    body = re.sub(r"<metadata>.*?</metadata>", "", body, flags=re.DOTALL)
    return re.sub(r'(\bid="|href="#|url\(#)', rf"\g<1>{name}-", body)
