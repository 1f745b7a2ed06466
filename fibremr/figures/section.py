"""The section as drawn, with its neutral axes and its residual stress."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from matplotlib.patches import PathPatch, Polygon
from matplotlib.path import Path as Trail

from fibremr.figures.style import GREY, INK, RUST, new_figure
from fibremr.section.mesh import Points
from fibremr.section.outline import Outline
from fibremr.section.parts import Plate, Section
from fibremr.summary import number

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from fibremr.tracing import TraceResult


def _trail(outline: Outline, scale: float) -> Trail:
    """The boundary of a part as a path to be drawn; arcs as short chords."""
    pieces: list[tuple[tuple[float, float], list[tuple[float, float]]]] = [
        ((l.v1, l.u1), [(l.v1, l.u1), (l.v2, l.u2)]) for l in outline.lines
    ]
    for a in outline.arcs:
        angles = np.linspace(a.start, a.end, max(24, int(abs(a.end - a.start) / 0.02)))
        points = list(zip(a.v + a.radius * np.cos(angles), a.u + a.radius * np.sin(angles), strict=True))
        pieces.append((points[0], points))
    vertices: list[tuple[float, float]] = []
    codes: list[int] = []
    left = [points for _, points in pieces]
    while left:
        run = list(left.pop(0))
        grown = True
        while grown:
            grown = False
            for i, points in enumerate(left):
                if np.hypot(points[0][0] - run[-1][0], points[0][1] - run[-1][1]) < 1e-6:
                    run += points[1:]
                    left.pop(i)
                    grown = True
                    break
        vertices += [*run, run[0]]
        codes += [1, *([2] * (len(run) - 1)), 79]  # move, lines, close: the codes of Path
    return Trail(np.array(vertices) * scale, codes)


def section(result: TraceResult) -> Figure:
    """The section as drawn, with its neutral axes and its residual stress along the plates."""
    case, residual = result.case, result.curve.residual
    s = case.system
    figure = new_figure(result, 6.0, 4.6, "section")
    axes = figure.subplots(gridspec_kw={"left": 0.1, "right": 0.97, "bottom": 0.19, "top": 0.83})
    scale = s.show(1.0, "length")
    drawn: Section = case.section
    for part in drawn.parts:
        face = "#c9d0ce" if not part.steel else "#a9b3b2"
        axes.add_patch(PathPatch(_trail(part.outline, scale), facecolor=face, edgecolor=face, linewidth=0.4))
    low, high = drawn.extent
    turned = drawn.turned(np.pi / 2.0)
    left, right = turned.extent
    size = max(high - low, right - left)
    if residual is not None:
        extremes = _residual_diagrams(axes, result, 0.16 * size, scale)
        low_stress, high_stress = (number(s.show(x, "stress"), 3) for x in extremes)
        axes.plot([], [], color=INK, linewidth=1.0, label="residual stress, to the right or upwards: tension")
        axes.plot(
            [],
            [],
            color=RUST,
            linewidth=1.0,
            linestyle=(0, (3, 1.5)),
            label="to the left or downwards: compression",
        )
        axes.legend(loc="upper center", bbox_to_anchor=(0.5, -0.12), fontsize=7.5, ncols=2)
        axes.set_title(
            f"{residual.name}: {low_stress} to +{high_stress} {s.stress}",
            fontsize=8, loc="left", color=GREY,
        )  # fmt: skip
    _axes_lines(axes, result, scale, size)
    pad = 0.28 * size
    middle = (left + right) / 2.0
    half = max((right - left) / 2.0 + pad, 0.75 * (high - low) / 2.0 + pad)
    axes.set_xlim((middle - half) * scale, (middle + half) * scale)
    axes.set_ylim((low - 0.22 * size) * scale, (high + 0.22 * size) * scale)
    axes.set_aspect("equal")
    axes.set_xlabel(f"y [{s.length}]")
    axes.set_ylabel(f"z [{s.length}]")
    return figure


def _axes_lines(axes: Axes, result: TraceResult, scale: float, size: float) -> None:
    """The centroid and the plastic neutral axis, and which edge is compressed."""
    g, case = result.bar.geometry, result.case
    upright = case.bending.about == "major"
    places = [("centroid", g.centroid), ("plastic axis", result.bar.plastic.axis)]
    if abs(places[0][1] - places[1][1]) < 0.015 * size:
        places = [("centroid and plastic axis", places[0][1])]
    places.sort(key=lambda place: place[1])
    for i, (text, at) in enumerate(places):
        style = (0, (6, 2, 1, 2)) if text.startswith("centroid") else (0, (2, 2))
        line = axes.axhline if upright else axes.axvline
        line(at * scale, color=GREY, linewidth=0.8, linestyle=style)
        upper = i == len(places) - 1
        if upright:
            axes.annotate(
                text, (0.0, at * scale), xycoords=("axes fraction", "data"), fontsize=7.5, ha="left",
                va="bottom" if upper else "top",
            )  # fmt: skip
        else:
            axes.annotate(
                text, (at * scale, 0.0), xycoords=("data", "axes fraction"), fontsize=7.5, va="bottom",
                ha="left" if upper else "right", xytext=(2 if upper else -2, 1), textcoords="offset points",
            )  # fmt: skip
    compressed = g.top if case.bending.sense > 0 else g.bottom
    for text, edge in (("compressed", compressed), ("pulled", g.top + g.bottom - compressed)):
        outside = 3 if edge == g.top else -3
        if upright:
            axes.annotate(
                text, (0.0, edge * scale), xycoords=("axes fraction", "data"), fontsize=7.5, color=GREY,
                va="center", xytext=(4, 0), textcoords="offset points",
            )  # fmt: skip
        else:
            axes.annotate(
                text, (edge * scale, 1.0), xycoords=("data", "axes fraction"), fontsize=7.5, color=GREY,
                va="top", ha="left" if outside > 0 else "right", xytext=(outside, -2),
                textcoords="offset points",
            )  # fmt: skip


def _residual_diagrams(axes: Axes, result: TraceResult, reach: float, scale: float) -> tuple[float, float]:
    """Stress along each plate as a curve beside it; returns the extremes [MPa]."""
    case, bar, residual = result.case, result.bar, result.curve.residual
    assert residual is not None
    peak = max(abs(residual.peak_compression), residual.peak_tension) or 1.0
    for part, turned in zip(case.section.parts, bar.section.parts, strict=True):
        body = part.body
        if not isinstance(body, Plate) or not isinstance(turned.body, Plate):
            continue
        at = np.unique(
            np.concatenate(
                [
                    np.linspace(0.0, 1.0, 81),
                    *(np.array(residual.along[part.name].at) for _ in (0,) if part.name in residual.along),
                ]
            )
        )
        at = np.clip(at, 0.0, 1.0)
        index = bar.section.parts.index(turned)
        centre = [turned.body.point(float(a), 0.0) for a in at]
        points = Points(
            np.array([p[0] for p in centre]), np.array([p[1] for p in centre]), np.zeros(at.size),
            np.full(at.size, index, dtype=np.intp), at,
        )  # fmt: skip
        stress = residual.strain(points, bar.section, bar.moduli) * bar.moduli[index]
        ev, eu = body.along
        if abs(eu) <= abs(ev):
            middle = sum(case.section.extent) / 2.0
            offset = reach * 0.55 * (1.0 if body.start[1] > middle else -1.0)
            base = [(x, z + offset) for x, z in (body.point(float(a), 0.0) for a in at)]
            normal = (0.0, 1.0)
        else:
            offset = body.thickness / 2.0 + reach * 0.9
            base = [(x + offset, z) for x, z in (body.point(float(a), 0.0) for a in at)]
            normal = (1.0, 0.0)
        start = np.array(base) * scale
        tips = start + np.outer(stress / peak * 0.55 * reach * scale, normal)
        axes.plot(start[:, 0], start[:, 1], color=GREY, linewidth=0.6)
        for sign, colour, hatch, style in ((1.0, INK, "", "solid"), (-1.0, RUST, "/////", (0, (3, 1.5)))):
            there = stress * sign > 0.0
            edges = np.flatnonzero(np.diff(there.astype(int)))
            bounds = [0, *(edges + 1), at.size]
            for a, b in zip(bounds, bounds[1:], strict=False):
                if b - a < 2 or not there[a]:
                    continue
                shape = np.concatenate([tips[a:b], start[a:b][::-1]])
                axes.add_patch(
                    Polygon(shape, facecolor="none", edgecolor=colour, hatch=hatch, linewidth=0.0, alpha=0.7)
                )
                axes.plot(tips[a:b, 0], tips[a:b, 1], color=colour, linewidth=1.0, linestyle=style)
    return residual.peak_compression, residual.peak_tension
