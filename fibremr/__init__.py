"""fibremr: how a steel section bends, how far it can turn, and whether a plastic hinge is justified.

Units inside are N, mm, MPa and rad; axial force is positive in tension, sagging bending is positive.
The names below are loaded when they are first used, so that `import fibremr` stays cheap.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

__version__ = "0.1.0"

_WHERE = {
    "read_case": "fibremr.case.reader",
    "trace": "fibremr.tracing",
    "TraceResult": "fibremr.tracing",
    "justify": "fibremr.justification",
    "JustifyResult": "fibremr.justification",
    "Section": "fibremr.section.parts",
    "i_section": "fibremr.section.shapes",
    "build": "fibremr.section.shapes",
    "profile": "fibremr.section.catalogue",
    "Law": "fibremr.steel.law",
    "Bilinear": "fibremr.steel.bilinear",
    "QuadLinear": "fibremr.steel.quad_linear",
    "Pattern": "fibremr.residual",
    "EccsRolled": "fibremr.residual",
    "Points": "fibremr.residual",
    "FibremrError": "fibremr.errors",
    "CaseError": "fibremr.errors",
}

__all__ = ["__version__", *_WHERE]

if TYPE_CHECKING:
    from fibremr.case.reader import read_case as read_case
    from fibremr.justification import justify as justify
    from fibremr.tracing import trace as trace


def __getattr__(name: str) -> Any:
    if name in _WHERE:
        from importlib import import_module

        return getattr(import_module(_WHERE[name]), name)
    raise AttributeError(f"module 'fibremr' has no attribute {name!r}")
