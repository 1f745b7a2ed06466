"""Short ways to a bar and its curve, for tests."""

from __future__ import annotations

from collections.abc import Sequence
from math import pi
from typing import Any

import numpy as np

from fibremr.bending import Bar, Curve, trace_curve
from fibremr.residual import Pattern, Residual
from fibremr.section import shapes
from fibremr.section.parts import Section
from fibremr.steel.bilinear import Bilinear
from fibremr.steel.law import Law


def section_of(kind: dict[str, Any]) -> Section:
    """A section from the description used in checks.toml."""
    match kind["kind"]:
        case "rectangle":
            return shapes.build(shapes.RectangleShape(kind["b"], kind["h"]))
        case "round":
            return shapes.build(shapes.RoundShape(kind["D"]))
        case "tube":
            return shapes.build(shapes.TubeShape(kind["D"], kind["t"]))
        case "diamond":
            d = kind["side"] * 2.0**0.5
            corners = ((0.0, 0.0), (d / 2, d / 2), (0.0, d), (-d / 2, d / 2))
            return shapes.build(shapes.OutlineShape(corners))
        case "triangle":
            b, h = kind["b"], kind["h"]
            return shapes.build(shapes.OutlineShape(((-b / 2, 0.0), (b / 2, 0.0), (0.0, h))))
        case "box":
            wall = shapes.Web(kind["t"])
            return shapes.build(shapes.BoxShape(kind["h"], kind["b"], wall, wall))
        case "T":
            flange = shapes.Flange(kind["b"], kind["tf"])
            return shapes.build(shapes.TShape(kind["h"], shapes.Web(kind["tw"]), flange, kind.get("r", 0.0)))
        case "I":
            top = shapes.Flange(kind["b"], kind["tf"])
            bottom = shapes.Flange(kind.get("b_bottom", kind["b"]), kind.get("tf_bottom", kind["tf"]))
            return shapes.build(
                shapes.IShape(kind["h"], shapes.Web(kind["tw"]), top, bottom, kind.get("r", 0.0))
            )
    raise KeyError(kind["kind"])


def bar(
    section: Section, law: Law | Sequence[Law], *, axial: float = 0.0, sense: int = 1, minor: bool = False
) -> Bar:
    """A bar of one law, or one for each part."""
    laws = tuple(law) if isinstance(law, Sequence) else (law,) * len(section.parts)
    return Bar(section.turned(pi / 2.0 if minor else 0.0), laws, axial, sense)


def plastic_steel(fy: float = 355.0, modulus: float = 210e3) -> Bilinear:
    """Elastic–perfectly plastic steel [MPa]."""
    return Bilinear(modulus, fy)


def curve_through(
    of: Bar, curvatures: Sequence[float], *, pattern: Pattern | None = None, scale: float = 1.0
) -> tuple[Curve, np.ndarray]:
    """A curve, and its moments [Nmm] at given curvatures [1/mm]."""
    residual: Residual | None = of.residual(pattern, scale) if pattern else None
    curve = trace_curve(of, residual, stops=sorted(curvatures))
    return curve, np.array([curve.event(curve.at_curvature(k)).moment for k in curvatures])
