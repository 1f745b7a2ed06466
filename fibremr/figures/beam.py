"""A justified beam: its moments, the ladder of load factors, and what its hinges need and have."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from fibremr.beam_record import where
from fibremr.figures.style import GREY, INK, PALE, RUST, headed
from fibremr.summary import number, typed

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from fibremr.justification import JustifyResult


def beam(result: JustifyResult) -> Figure:
    """The beam with loads and restraints, over its moments with Mp and the yielded stretches."""
    s = result.case.system
    per_x, per_m = s.show(1.0, "span"), s.show(1.0, "moment")
    factor = result.shown.factor
    under = f"beam and moments at load factor {factor:.3g}: {result.section.record.section.name}"
    figure = headed(result.case.title, f"{under}; {result.verdict}", 8.4, 5.0)
    top, axes = figure.subplots(
        2, 1, sharex=True, height_ratios=(1.0, 2.3),
        gridspec_kw={"left": 0.085, "right": 0.985, "bottom": 0.17, "top": 0.88, "hspace": 0.06},
    )  # fmt: skip
    _elevation(top, result, per_x)
    x = result.stations.x * per_x
    moment, elastic = result.shown.moment * per_m, result.elastic_moment * per_m
    axes.axhline(0.0, color=INK, linewidth=0.8)
    for sign, mp, text in ((1.0, result.plastic[0], "Mp sagging"), (-1.0, result.plastic[1], "Mp hogging")):
        axes.axhline(sign * mp * per_m, color=GREY, linewidth=0.9, linestyle=(0, (1, 1.5)))
        axes.annotate(
            text, (1.0, sign * mp * per_m), xycoords=("axes fraction", "data"), fontsize=7.5, color=GREY,
            ha="right", va="bottom" if sign < 0 else "top",
        )  # fmt: skip
    axes.plot(
        x, moment, color=INK, linewidth=1.7, label=f"by the law of the case, {result.case.base.law.name}"
    )
    axes.plot(x, elastic, color=RUST, linewidth=1.1, linestyle=(0, (5, 2)), label="elastic beam")
    stiffness = result.response.stiffness
    plastic = np.abs(result.shown.curvature - result.shown.moment / stiffness)
    yielded = plastic > 1e-3 * np.abs(result.plastic[0] / stiffness)
    for a, b in zip(result.stations.starts, result.stations.starts[1:], strict=False):
        axes.fill_between(
            x[a:b], 0.0, moment[a:b], where=yielded[a:b], facecolor=PALE, edgecolor=GREY, hatch="////",
            linewidth=0.0, label="yielded stretch" if a == 0 else None,
        )  # fmt: skip
    for h in result.hinges:
        axes.plot(
            [h.hinge.at * per_x], [h.hinge.sense * h.hinge.moment * per_m], marker="o", markersize=5,
            markerfacecolor="white", markeredgecolor=INK, linestyle="none",
        )  # fmt: skip
    axes.invert_yaxis()
    axes.set_ylabel(f"moment, sagging down [{s.moment}]")
    axes.set_xlabel(f"along the beam [{s.span}]")
    handles, labels = axes.get_legend_handles_labels()
    figure.legend(
        handles, labels, loc="lower left", bbox_to_anchor=(0.008, 0.012), fontsize=7.5, ncols=3, borderpad=0.0
    )
    return figure


def _elevation(axes: Axes, result: JustifyResult, per_x: float) -> None:
    """Supports, loads and restraints over the length."""
    s, case = result.case.system, result.beam
    supports = case.beam.supports * per_x
    length = supports[-1]
    axes.plot([0.0, length], [0.0, 0.0], color=INK, linewidth=2.6, solid_capstyle="butt")
    for i, x in enumerate(supports):
        fixed = (i == 0 and case.beam.ends[0] == "fixed") or (
            i == len(supports) - 1 and case.beam.ends[1] == "fixed"
        )
        if fixed:
            axes.plot([x, x], [-0.55, 0.55], color=INK, linewidth=2.0)
        else:
            axes.plot(
                [x, x - 0.011 * length, x + 0.011 * length, x],
                [-0.06, -0.55, -0.55, -0.06],
                color=INK,
                linewidth=0.9,
            )
    for span, size in enumerate(case.beam.spans):
        left = supports[span]
        uniform = sum(l.uniform for l in case.beam.loads if l.span == span)
        if uniform:
            right = left + size * per_x
            axes.fill_between([left, right], 0.18, 0.55, facecolor=PALE, edgecolor=GREY, linewidth=0.6)
            text = f"{typed(round(s.show(uniform, 'line_load'), 6))} {s.line_load}"
            # where no point load's arrow crosses it
            arrows = [left + l.at * per_x for l in case.beam.loads if l.span == span and l.point] or [left]
            free = [left + share * (right - left) for share in (0.5, 0.25, 0.75)]
            middle = max(free, key=lambda x: min(abs(x - arrow) for arrow in arrows))
            axes.annotate(text, (middle, 0.62), fontsize=7.5, ha="center", va="bottom")
        for load in case.beam.loads:
            if load.span == span and load.point:
                x = left + load.at * per_x
                text = f"{typed(round(s.show(load.point, 'force'), 6))} {s.force}"
                arrow = {"arrowstyle": "-|>", "color": INK, "linewidth": 0.9, "shrinkB": 0}
                axes.annotate(text, (x, 0.06), (x, 1.15), fontsize=7.5, ha="center", arrowprops=arrow)
    for flange, height in ((case.top, 0.10), (case.bottom, -0.10)):
        if flange.continuous:
            axes.plot([0.0, length], [height, height], color=RUST, linewidth=1.0, linestyle=(0, (1, 1)))
        for place in flange.places:
            axes.plot([place * per_x], [height], marker="|", markersize=5, color=RUST)
    axes.annotate(
        f"restraints: top {case.top.words}, bottom {case.bottom.words}", (0.0, 0.0), xycoords="axes fraction",
        fontsize=7.5, color=RUST, va="bottom",
    )  # fmt: skip
    axes.set_ylim(-1.15, 1.6)
    axes.axis("off")


def ladder(result: JustifyResult) -> Figure:
    """The ladder of load factors as lengths from zero."""
    figure = headed(
        result.case.title,
        f"ladder of load factors: {result.section.record.section.name}; {result.verdict}",
        6.6,
        3.2,
    )
    axes = figure.subplots(gridspec_kw={"left": 0.24, "right": 0.95, "bottom": 0.16, "top": 0.84})
    rungs = [("first yield", result.ladder.first_yield), ("first hinge", result.ladder.first_hinge)]
    if result.beam.service is not None:
        rungs.append(("service", result.beam.service))
    rungs += [
        ("rotation limit", result.ladder.rotation_limit),
        ("simple plastic collapse", result.ladder.simple_plastic_collapse),
    ]
    there = sorted(((n, f) for n, f in rungs if f is not None), key=lambda rung: rung[1])
    for i, (name, factor) in enumerate(there):
        full = name in ("simple plastic collapse", "rotation limit")
        axes.barh(
            i, factor, height=0.56, facecolor=GREY if full else PALE, edgecolor=INK, linewidth=0.7,
            hatch="" if full else "////",
        )  # fmt: skip
        axes.annotate(
            f"{factor:.3f}", (factor, i), (4, 0), textcoords="offset points", fontsize=8, va="center"
        )
    axes.axvline(1.0, color=RUST, linewidth=1.2, linestyle=(0, (4, 2, 1, 2)))
    axes.annotate(
        "asked for", (1.0, 1.0), xycoords=("data", "axes fraction"), fontsize=7.5, color=RUST, ha="center",
        va="bottom",
    )  # fmt: skip
    axes.set_yticks(range(len(there)), [name for name, _ in there])
    axes.set_xlim(0.0, 1.12 * max(1.0, *(f for _, f in there)))
    axes.set_xlabel("load factor on the design loads")
    return figure


def hinges(result: JustifyResult) -> Figure:
    """Required against available rotation at every hinge."""
    count = len(result.hinges)
    figure = headed(
        result.case.title,
        f"rotation required and available: {result.rotation_verdict}",
        6.6,
        1.9 + 0.75 * count,
    )
    height = 1.9 + 0.75 * count
    axes = figure.subplots(
        gridspec_kw={"left": 0.25, "right": 0.95, "bottom": 0.85 / height, "top": 1.0 - 0.62 / height}
    )
    most = 0.0
    for i, h in enumerate(result.hinges):
        y = count - 1 - i
        has = None if h.governing is None else h.governing.rotation
        if has is not None:
            axes.barh(y, 1e3 * has, height=0.5, facecolor="none", edgecolor=INK, linewidth=1.0,
                      label="available" if i == 0 else None)  # fmt: skip
            most = max(most, 1e3 * has)
        for law, value, hatch in (
            ("law of the case", h.case_law, ""),
            ("elastic-plastic", h.elastic_plastic, "////"),
        ):
            if value is None:
                continue
            shift = 0.11 if law == "law of the case" else -0.11
            axes.barh(
                y + shift, 1e3 * value, height=0.20, facecolor=PALE if hatch else GREY, edgecolor=INK,
                linewidth=0.5, hatch=hatch, label=f"required, {law}" if i == 0 else None,
            )  # fmt: skip
            most = max(most, 1e3 * value)
        use = "no available rotation" if h.use is None else f"use {number(h.use, 3)}"
        axes.annotate(use, (1.0, y), xycoords=("axes fraction", "data"), fontsize=8, ha="right", va="center")
    axes.set_yticks(
        range(count),
        [f"{result.case.system.place(h.hinge.at)}, {where(h)}" for h in reversed(result.hinges)],
    )
    axes.set_xlim(0.0, 1.22 * max(most, 1e-3))
    axes.set_ylim(-0.6, count - 0.4)
    axes.set_xlabel("plastic rotation over the hinge region [mrad]")
    handles, labels = axes.get_legend_handles_labels()
    figure.legend(handles, labels, loc="lower left", bbox_to_anchor=(0.008, 0.01), fontsize=7.5, ncols=3)
    return figure
