"""The `beam` part of results.json from a justified beam."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from fibremr.beam.effects import reactions

if TYPE_CHECKING:
    from fibremr.hinge_verdict import HingeVerdict
    from fibremr.justification import JustifyResult


def beam_record(result: JustifyResult) -> dict[str, Any]:
    """Plain data with the contract's keys; hogging moments negative."""
    from fibremr.justification import ASSUMPTIONS, NOT_CHECKED

    ladder, simple = result.ladder, result.simple
    service = result.beam.service
    deflection = result.deflection
    return {
        "ladder": {
            "first_yield": ladder.first_yield,
            "first_hinge": ladder.first_hinge,
            "rotation_limit": ladder.rotation_limit,
            "simple_plastic_collapse": ladder.simple_plastic_collapse,
            "largest_traced": ladder.largest_traced,
        },
        "load_factor_shown": result.shown.factor,
        "mechanism": mechanism_words(result),
        "mechanism_hinges": [{"at_m": x / 1e3, "sense": _sense(s)} for x, s in simple.hinges],
        "hinges": [_hinge(h, result) for h in result.hinges],
        "code": {
            "verdict": result.code_verdict,
            "checks": [
                {
                    "check": c.check,
                    "at_m": None if c.at is None else c.at / 1e3,
                    "value": c.value,
                    "allowed": c.allowed,
                    "verdict": c.verdict,
                    "source": c.source,
                }
                for c in result.checks
            ],
        },
        "rotation": {"verdict": result.rotation_verdict, "why": result.rotation_why},
        "not_checked": list(NOT_CHECKED),
        "assumptions": list(ASSUMPTIONS),
        "redistribution_pct": None if result.redistribution is None else 100.0 * result.redistribution,
        "deflection": None
        if deflection is None
        else {
            "largest_mm": deflection.largest,
            "at_m": deflection.at / 1e3,
            "span": deflection.span + 1,
            "limit_mm": deflection.limit,
            "verdict": deflection.verdict,
        },
        "yields_at_service": None if service is None else service > ladder.first_yield,
        "reactions_kN": [r / 1e3 for r in reactions(result.shown)],
        "arrangements": [],
        "sensitivity": [],
        "verdict": result.verdict,
    }


def _hinge(h: HingeVerdict, result: JustifyResult) -> dict[str, Any]:
    hinge, sense = h.hinge, h.hinge.sense
    return {
        "at_m": hinge.at / 1e3,
        "where": where(h),
        "sense": _sense(sense),
        "moment_kNm": sense * hinge.moment / 1e6,
        "Mp_kNm": hinge.plastic / 1e6,
        "region_m": [hinge.region[0] / 1e3, hinge.region[1] / 1e3],
        "theta_p_mrad": 1e3 * hinge.theta_p,
        "required_mrad": _milli(h.required),
        "required_by": {
            "case_law_mrad": _milli(h.case_law),
            "elastic_plastic_mrad": _milli(h.elastic_plastic),
        },
        "available": [
            {
                "method": a.method,
                "mrad": _milli(a.rotation),
                "rotation_capacity": a.capacity,
                "why_not": a.why_not,
            }
            for a in h.available
        ],
        "available_mrad": None if h.governing is None else _milli(h.governing.rotation),
        "use": h.use,
        "governing": None if h.governing is None else h.governing.method,
        "class": h.classed.number,
        "verdict": h.verdict,
    }


def where(h: HingeVerdict) -> str:
    """A hinge's place in words."""
    if h.hinge.support is not None:
        return f"support {h.hinge.support + 1}"
    return f"span {h.hinge.span + 1}"


def mechanism_words(result: JustifyResult) -> str:
    """The mechanism of simple plastic collapse in words."""
    simple = result.simple
    places = ", ".join(f"{result.case.system.place(x)} ({_sense(s)})" for x, s in simple.hinges)
    name = "several spans together" if simple.span is None else f"span {simple.span + 1}"
    return f"{name}: hinges at {places}"


def _sense(sense: int) -> str:
    return "sagging" if sense > 0 else "hogging"


def _milli(value: float | None) -> float | None:
    return None if value is None else 1e3 * value
