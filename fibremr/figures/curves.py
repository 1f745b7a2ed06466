"""Moment against curvature and against rotation."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import numpy as np

from fibremr.figures.style import GREY, INK, PALE, RUST, new_figure
from fibremr.summary import number

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from fibremr.bending import Event
    from fibremr.tracing import TraceResult


def moment_curvature(result: TraceResult) -> Figure:
    """Moment against curvature: the knee at the left, the whole curve at the right."""
    s, c, bar = result.case.system, result.curve, result.bar
    figure = new_figure(result, 8.4, 4.0, "moment and curvature")
    knee, whole = figure.subplots(
        1,
        2,
        sharey=True,
        width_ratios=(1.0, 1.25),
        gridspec_kw={"left": 0.075, "right": 0.985, "bottom": 0.12, "top": 0.81, "wspace": 0.08},
    )
    mp, ei = bar.plastic.moment, bar.elastic.bending
    kp = mp / ei
    end = float(c.curvature[-1])
    top = 1.08 * max(mp, float(c.moment.max()), bar.yield_moment) / 1.0
    for axes, last in ((knee, min(end, 3.2 * kp)), (whole, end)):

        def show(k: Any) -> Any:
            return np.asarray(k) * s.show(1.0, "curvature")

        def tall(m: Any) -> Any:
            return np.asarray(m) * s.show(1.0, "moment")

        axes.plot(
            show([0, kp, last]),
            tall([0, mp, mp]),
            color=GREY,
            linewidth=0.9,
            linestyle=(0, (1, 1.5)),
            label="two straight lines, E I and Mp",
        )
        if result.plain is not result.curve:
            within = result.plain.curvature <= last * 1.0001
            axes.plot(
                show(result.plain.curvature[within]),
                tall(result.plain.moment[within]),
                color=RUST,
                linewidth=1.1,
                linestyle=(0, (5, 2)),
                label="without residual stress",
            )
        within = c.curvature <= last * 1.0001
        label = _curve_label(result)
        axes.plot(show(c.curvature[within]), tall(c.moment[within]), color=INK, linewidth=1.6, label=label)
        axes.set_xlim(0, show(last) * 1.02)
        axes.set_ylim(0, tall(top))
        axes.set_xlabel(f"curvature [{s.curvature}]")
        axes.locator_params(axis="x", nbins=5)
        axes.axhline(tall(bar.yield_moment), color=PALE, linewidth=0.9, zorder=0)
    knee.set_ylabel(f"moment [{s.moment}]")
    knee.set_title("up to the knee", fontsize=8, loc="left", color=GREY)
    whole.set_title("the whole trace", fontsize=8, loc="left", color=GREY)
    scale_k, scale_m = s.show(1.0, "curvature"), s.show(1.0, "moment")
    last = min(end, 3.2 * kp)
    marks = [
        (text, e.curvature * scale_k, e.moment * scale_m)
        for text, e in _events(result)
        if e.curvature <= last
    ]
    _mark(knee, marks, right=0.58 * last * scale_k)
    knee.annotate(
        "My",
        (0.985 * last * scale_k, bar.yield_moment * scale_m),
        fontsize=7.5,
        color=GREY,
        ha="right",
        va="bottom",
    )
    limits = [
        (f"{l.method}{' (governs)' if l.governs else ''}", l.curvature * scale_k, (l.moment or 0.0) * scale_m)
        for l in result.limits
        if l.curvature is not None and l.curvature <= end * (1 + 1e-9)
    ]
    _limit_lines(whole, limits, width=end * scale_k)
    _beyond(whole, [l.curvature * scale_k for l in result.limits if l.governs and l.curvature], end * scale_k)
    knee.legend(loc="lower right", fontsize=7.5, borderaxespad=0.8)
    return figure


def moment_rotation(result: TraceResult) -> Figure:
    """Moment against rotation over the hinge region."""
    s, turn = result.case.system, result.turn
    assert turn is not None
    c, bar = result.curve, result.bar
    figure = new_figure(result, 6.6, 4.2, "moment and rotation")
    axes = figure.subplots(gridspec_kw={"left": 0.095, "right": 0.97, "bottom": 0.115, "top": 0.77})
    mp = bar.plastic.moment
    scale = s.show(1.0, "moment")
    governs = result.governs
    last = 1e3 * float(turn.rotation[-1])
    if governs is not None and governs.rotation is not None:
        last = max(last, 1.06e3 * governs.rotation)
    theta_p = 1e3 * turn.theta_p
    axes.plot(
        [0, theta_p, last],
        np.array([0, mp, mp]) * scale,
        color=GREY,
        linewidth=0.9,
        linestyle=(0, (1, 1.5)),
        label="two straight lines, theta_p and Mp",
    )
    plain = result.plain_turn
    if plain is not None and result.plain is not result.curve:
        axes.plot(
            1e3 * plain.rotation,
            result.plain.moment * scale,
            color=RUST,
            linewidth=1.1,
            linestyle=(0, (5, 2)),
            label="without residual stress",
        )
    label = _curve_label(result)
    axes.plot(1e3 * turn.rotation, c.moment * scale, color=INK, linewidth=1.6, label=label)
    axes.set_ylim(0, 1.10 * max(mp, float(c.moment.max())) * scale)
    axes.set_xlim(0, 1.03 * last)
    marks = [("theta_p", theta_p, float(np.interp(theta_p, 1e3 * turn.rotation, c.moment)) * scale)]
    limits = []
    for l in result.limits:
        if l.rotation is None or 1e3 * l.rotation > 1.02 * last:
            continue
        x = 1e3 * l.rotation
        r_text = "" if l.rotation_capacity is None else f", R = {number(l.rotation_capacity, 3)}"
        text = f"{l.method}{r_text}{' (governs)' if l.governs else ''}"
        if l.moment is None:
            text += "\nbeyond the curve of this steel law"
        height = (l.moment if l.moment is not None else mp) * scale
        limits.append((text, x, height))
    _mark(axes, marks, right=theta_p + 0.05 * last)
    _limit_lines(axes, limits, width=last)
    _beyond(axes, [1e3 * governs.rotation] if governs and governs.rotation else [], 1.03 * last)
    axes.set_xlabel(f"rotation over the whole hinge region [mrad], {turn.setup.kind}")
    axes.set_ylabel(f"moment [{s.moment}]")
    axes.legend(loc="lower center", fontsize=7.5)
    over = axes.secondary_xaxis(
        "top", functions=(lambda x: np.asarray(x) / theta_p, lambda x: np.asarray(x) * theta_p)
    )
    over.set_xlabel("rotation / theta_p", fontsize=7.5, color=GREY)
    return figure


def _curve_label(result: TraceResult) -> str:
    residual = result.curve.residual
    return "fibres" if residual is None else f"with residual stress, {residual.name}"


def _events(result: TraceResult) -> list[tuple[str, Event]]:
    """What happens along the curve, in words, and where."""
    curve, c = result.curve, result.record.curvatures
    target = result.bar.yield_moment
    my = curve.first(curve.moment - target, lambda s: curve.event(s).moment - target)
    places = [
        ("first yield", c.first_yield_per_m / 1e3),
        ("M = My", None if my is None else curve.event(my).curvature),
        ("Mp/(EI)", c.elastic_at_Mp_per_m / 1e3),
    ]
    last = curve.curvature[-1] * (1 + 1e-9)
    return [
        (text, curve.event(curve.at_curvature(k))) for text, k in places if k is not None and 0.0 < k <= last
    ]


def _mark(axes: Axes, marks: list[tuple[str, float, float]], *, right: float) -> None:
    """Open circles on the curve, with words beside it on lines that lead to them."""
    low, high = axes.get_ylim()
    gap = (high - low) * 0.065
    heights = _spread([y - 0.10 * (high - low) for _, _, y in marks], gap)
    lowest = min(heights, default=low)
    shift = max(0.0, low + 0.02 * (high - low) - lowest)
    for (text, x, y), height in zip(marks, heights, strict=True):
        axes.annotate(
            text, (x, y), (right, height + shift), fontsize=7.5, va="center", ha="left",
            arrowprops={"arrowstyle": "-", "color": GREY, "linewidth": 0.6, "shrinkA": 1, "shrinkB": 2.5},
        )  # fmt: skip
        axes.plot(
            [x],
            [y],
            marker="o",
            markersize=4.5,
            markerfacecolor="white",
            markeredgecolor=INK,
            linestyle="none",
        )


def _spread(places: Sequence[float], gap: float) -> list[float]:
    """Heights as near to the wanted ones as keeps them a gap apart."""
    order = np.argsort(places)
    kept = np.array(places, dtype=float)[order]
    for _ in range(60):
        close = np.flatnonzero(np.diff(kept) < gap * 0.999)
        if close.size == 0:
            break
        for i in close:
            push = (gap - (kept[i + 1] - kept[i])) / 2.0
            kept[i] -= push
            kept[i + 1] += push
    out = np.empty(len(places))
    out[order] = kept
    return list(out)


def _limit_lines(axes: Axes, limits: Sequence[tuple[str, float, float]], *, width: float) -> None:
    """A line at each limit, with words beside it below the curve and a circle where it meets the curve."""
    bottom, top = axes.get_ylim()
    for i, (text, x, y) in enumerate(sorted(limits, key=lambda limit: -limit[1])):
        axes.axvline(x, color=RUST, linewidth=0.9, linestyle=(0, (4, 2, 1, 2)))
        axes.plot(
            [x],
            [y],
            marker="o",
            markersize=4.5,
            markerfacecolor="white",
            markeredgecolor=INK,
            linestyle="none",
        )
        side = "right" if x > 0.45 * width else "left"
        axes.annotate(
            text, (x, bottom + (0.62 - 0.11 * (i % 5)) * (top - bottom)), (-5 if side == "right" else 5, 0),
            textcoords="offset points", fontsize=7.5, ha=side, va="center",
            bbox={"facecolor": "white", "edgecolor": "none", "pad": 1.0},
        )  # fmt: skip


def _beyond(axes: Axes, limits: list[float], end: float) -> None:
    """Hatch what lies beyond the governing limit."""
    for x in limits:
        if x < end:
            axes.axvspan(x, end, facecolor="none", edgecolor=PALE, hatch="////", linewidth=0.0, zorder=0)
