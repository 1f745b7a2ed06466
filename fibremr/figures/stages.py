"""Stress through the depth at stages of the curve."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from fibremr.figures.style import GREY, RUST, new_figure
from fibremr.summary import number

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from fibremr import kernel
    from fibremr.tracing import TraceResult

BAND = "#7d8789"


def _stages(result: TraceResult) -> list[tuple[str, kernel.State]]:
    """States at first yield, My, 90 % of Mp and the end of what may be used of the curve, in their order."""
    c, bar, governs = result.curve, result.bar, result.governs
    end = float(c.curvature[-1])
    last = ("end of the trace", end)
    if governs is not None and governs.curvature is not None and governs.curvature <= end * (1 + 1e-9):
        last = (f"at the limit, {governs.method}", min(governs.curvature, end))
    places = [("first yield", result.record.curvatures.first_yield_per_m / 1e3)]
    for text, target in (("M = My", bar.yield_moment), ("M = 0.9 Mp", 0.9 * bar.plastic.moment)):
        state = c.first(c.moment - target, lambda s, m=target: c.event(s).moment - m)  # type: ignore[misc]
        if state is not None:
            places.append((text, c.event(state).curvature))
    found: list[tuple[str, float]] = []
    for text, k in sorted((p for p in places if p[1] < last[1]), key=lambda place: place[1]):
        if found and k <= found[-1][1] * (1 + 1e-6):
            found[-1] = (f"{found[-1][0]}, {text}", found[-1][1])
        else:
            found.append((text, k))
    return [(text, c.at_curvature(k)) for text, k in (*found, last)]


def stress_stages(result: TraceResult) -> Figure:
    """Stress through the depth at first yield, My, 90 % of Mp and the end."""
    s, c, bar = result.case.system, result.curve, result.bar
    stages = _stages(result)
    figure = new_figure(result, 8.4, 3.8, "stress through the depth")
    every = figure.subplots(
        1,
        len(stages),
        sharey=True,
        squeeze=False,
        gridspec_kw={"left": 0.085, "right": 0.985, "bottom": 0.19, "top": 0.75, "wspace": 0.09},
    )[0]
    z = c.fibres.z[:, 0] + bar.geometry.centroid - bar.geometry.bottom
    order = np.argsort(z, kind="stable")
    heights, starts = np.unique(np.round(z[order], 6), return_index=True)
    scale_z, scale_s = s.show(1.0, "length"), s.show(1.0, "stress")
    widest = max(float(np.abs(state.stress).max()) for _, state in stages) * scale_s
    for axes, (text, state) in zip(every, stages, strict=True):
        stress = state.stress[order, 0] * scale_s
        least, most = np.minimum.reduceat(stress, starts), np.maximum.reduceat(stress, starts)
        axes.fill_betweenx(heights * scale_z, least, most, facecolor=BAND, edgecolor=BAND, linewidth=0.9)
        axes.axvline(0.0, color=GREY, linewidth=0.7)
        for fy in sorted({law.yield_stress for law in bar.laws}):
            for sign in (-1.0, 1.0):
                axes.axvline(sign * fy * scale_s, color=RUST, linewidth=0.8, linestyle=(0, (3, 2)))
        event = c.event(state)
        axes.set_title(
            f"{text}\nM = {number(s.show(event.moment, 'moment'))} {s.moment}\n"
            f"curvature {number(s.show(event.curvature, 'curvature'), 3)} {s.curvature}",
            fontsize=7.5, loc="left",
        )  # fmt: skip
        axes.set_xlim(-1.12 * widest, 1.12 * widest)
        axes.set_xlabel(f"stress [{s.stress}]")
        tick = 10.0 ** np.floor(np.log10(widest))
        tick *= np.floor(widest / tick)
        axes.set_xticks([-tick, 0.0, tick])
    across = (
        "depth, from the lowest point"
        if result.case.bending.about == "major"
        else "width, from the left edge"
    )
    every[0].set_ylabel(f"along the {across} [{s.length}]")
    strengths = sorted({law.yield_stress for law in bar.laws})
    caption = "compression negative; dashed: yield strength " + " and ".join(
        f"{number(fy * scale_s, 3)} {s.stress}" for fy in strengths
    )
    if c.residual is not None:
        caption += "; a band spans the stresses at one height, which residual stress makes differ"
    figure.text(0.012, 0.02, caption, fontsize=7.5, color=GREY)
    return figure
