"""Moment against curvature and against rotation."""

from __future__ import annotations

from collections.abc import Sequence
from textwrap import wrap
from typing import TYPE_CHECKING, Any

import numpy as np

from fibremr.figures.style import GREY, INK, PALE, RUST, new_figure
from fibremr.summary import limit_line

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from fibremr.bending import Event
    from fibremr.tracing import TraceResult

TWO_LINES = (0, (1, 1.5))
PLAIN = (0, (5, 2))
LIMIT = (0, (4, 2, 1, 2))


def moment_curvature(result: TraceResult) -> Figure:
    """Moment against curvature: the knee at the left, the whole curve at the right."""
    s, c, bar = result.case.system, result.curve, result.bar
    figure = new_figure(result, 8.4, 4.5, "moment and curvature")
    knee, whole = figure.subplots(
        1,
        2,
        sharey=True,
        width_ratios=(1.0, 1.25),
        gridspec_kw={"left": 0.075, "right": 0.985, "bottom": 0.225, "top": 0.82, "wspace": 0.08},
    )
    per_k, per_m = s.show(1.0, "curvature"), s.show(1.0, "moment")
    mp, kp = bar.plastic.moment, bar.plastic.moment / bar.elastic.bending
    end = float(c.curvature[-1])
    last = min(end, 3.2 * kp)
    top = 1.08 * max(mp, float(c.moment.max()), bar.yield_moment)
    for axes, upto in ((knee, last), (whole, end)):
        axes.plot(
            np.array([0, kp, upto]) * per_k, np.array([0, mp, mp]) * per_m,
            color=GREY, linewidth=0.9, linestyle=TWO_LINES, label="two straight lines, EI and Mp",
        )  # fmt: skip
        if result.plain is not c:
            _line(
                axes, result.plain.curvature * per_k, result.plain.moment * per_m,
                color=RUST, linewidth=1.1, linestyle=PLAIN, label="without residual stress",
            )  # fmt: skip
        _line(
            axes, c.curvature * per_k, c.moment * per_m, color=INK, linewidth=1.6, label=_curve_label(result)
        )
        axes.set_xlim(0, upto * per_k * 1.02)
        axes.set_ylim(0, top * per_m)
        axes.set_xlabel(f"curvature [{s.curvature}]")
        axes.locator_params(axis="x", nbins=5)
        axes.axhline(bar.yield_moment * per_m, color=PALE, linewidth=0.9, zorder=0)
    knee.set_ylabel(f"moment [{s.moment}]")
    knee.set_title("up to the knee", fontsize=8, loc="left", color=GREY)
    whole.set_title("the whole trace", fontsize=8, loc="left", color=GREY)
    for text, m, where in (("My", bar.yield_moment, "bottom"), ("Mp", mp, "bottom")):
        knee.annotate(
            text, (last * per_k, m * per_m), fontsize=7.5, color=GREY, ha="right", va=where, clip_on=True
        )  # fmt: skip
    marks = [
        (text, e.curvature * per_k, e.moment * per_m) for text, e in _events(result) if e.curvature <= last
    ]
    _mark(knee, marks, right=0.52 * last * per_k)
    limits = [
        (limit_line(l), l.curvature * per_k, (l.moment or 0.0) * per_m, l.governs)
        for l in result.limits
        if l.curvature is not None
    ]
    _limits(figure, whole, limits, end=1.02 * end * per_k)
    return figure


def moment_rotation(result: TraceResult) -> Figure:
    """Moment against rotation over the hinge region."""
    s, turn = result.case.system, result.turn
    assert turn is not None
    c, bar = result.curve, result.bar
    figure = new_figure(result, 6.6, 4.9, "moment and rotation")
    axes = figure.subplots(gridspec_kw={"left": 0.105, "right": 0.97, "bottom": 0.205, "top": 0.79})
    mp, per_m = bar.plastic.moment, s.show(1.0, "moment")
    theta_p = 1e3 * turn.theta_p
    governs = result.governs
    last = 1e3 * float(turn.rotation[-1])
    if governs is not None and governs.rotation is not None:
        last = max(last, 1.06e3 * governs.rotation)
    axes.plot(
        [0, theta_p, max(last, theta_p)], np.array([0, mp, mp]) * per_m,
        color=GREY, linewidth=0.9, linestyle=TWO_LINES, label="two straight lines, theta_p and Mp",
    )  # fmt: skip
    plain = result.plain_turn
    if plain is not None and result.plain is not c:
        axes.plot(
            1e3 * plain.rotation, result.plain.moment * per_m,
            color=RUST, linewidth=1.1, linestyle=PLAIN, label="without residual stress",
        )  # fmt: skip
    axes.plot(1e3 * turn.rotation, c.moment * per_m, color=INK, linewidth=1.6, label=_curve_label(result))
    axes.set_ylim(0, 1.10 * max(mp, float(c.moment.max())) * per_m)
    axes.set_xlim(0, 1.03 * last)
    if theta_p <= 1e3 * turn.rotation[-1]:
        at_theta_p = float(np.interp(theta_p, 1e3 * turn.rotation, c.moment)) * per_m
        _mark(axes, [("theta_p", theta_p, at_theta_p)], right=theta_p + 0.05 * last)
    limits = []
    for l in result.limits:
        if l.rotation is not None:
            text = limit_line(l) + (
                "" if l.moment is not None else " (the curve of this law does not get there)"
            )
            limits.append((text, 1e3 * l.rotation, (l.moment or mp) * per_m, l.governs))
    _limits(figure, axes, limits, end=1.03 * last)
    one_sided = turn.setup.kind in ("cantilever", "end moment")
    region = "one side of the peak" if one_sided else "both sides of the peak"
    axes.set_xlabel(f"rotation over the hinge region, {region} [mrad]; {turn.setup.kind}")
    axes.set_ylabel(f"moment [{s.moment}]")
    over = axes.secondary_xaxis(
        "top", functions=(lambda x: np.asarray(x) / theta_p, lambda x: np.asarray(x) * theta_p)
    )
    over.set_xlabel("rotation / theta_p", fontsize=7.5, color=GREY)
    return figure


def _line(axes: Axes, x: Any, y: Any, **style: Any) -> None:
    axes.plot(x, y, **style)


def _curve_label(result: TraceResult) -> str:
    residual = result.curve.residual
    return "this section" if residual is None else f"with residual stress, {residual.name}"


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
    found: list[tuple[str, Event]] = []
    for text, k in places:
        if k is None or not 0.0 < k <= last:
            continue
        if found and abs(k / found[-1][1].curvature - 1.0) < 1e-3:  # two names for one place
            found[-1] = (f"{found[-1][0]}, {text}", found[-1][1])
        else:
            found.append((text, curve.event(curve.at_curvature(k))))
    return found


def _mark(axes: Axes, marks: Sequence[tuple[str, float, float]], *, right: float) -> None:
    """Open circles on the curve, with words beside it on lines that lead to them."""
    low, high = axes.get_ylim()
    gap = (high - low) * 0.065
    heights = _spread([y - 0.10 * (high - low) for _, _, y in marks], gap)
    shift = max(0.0, low + 0.04 * (high - low) - min(heights, default=low))
    for (text, x, y), height in zip(marks, heights, strict=True):
        axes.annotate(
            text, (x, y), (right, height + shift), fontsize=7.5, va="center", ha="left",
            arrowprops={"arrowstyle": "-", "color": GREY, "linewidth": 0.6, "shrinkA": 1, "shrinkB": 2.5},
        )  # fmt: skip
        _circle(axes, x, y)


def _circle(axes: Axes, x: float, y: float) -> None:
    axes.plot(
        [x], [y], marker="o", markersize=4.5, markerfacecolor="white", markeredgecolor=INK, linestyle="none"
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


def _limits(
    figure: Figure, axes: Axes, limits: Sequence[tuple[str, float, float, bool]], *, end: float
) -> None:
    """A numbered line at each limit, and below the axes the legend and the key to the numbers.

    Each limit is its words, position, moment and whether it governs; what lies beyond the one that
    governs is hatched.
    """
    words = []
    left = 0.0
    for i, (text, x, y, governs) in enumerate(sorted(limits, key=lambda limit: limit[1]), start=1):
        if x > end:
            words.append(f"{i} {text} (off the picture)")
            continue
        words.append(f"{i} {text}")
        axes.axvline(x, color=RUST, linewidth=0.9, linestyle=LIMIT)
        _circle(axes, x, y)
        left = max(x, left + 0.025 * end)  # numbers of neighbours side by side
        axes.annotate(
            f"{i}", (left, 1.0), xycoords=("data", "axes fraction"), fontsize=8, ha="right", va="top",
            color=RUST, xytext=(-2, -1), textcoords="offset points",
        )  # fmt: skip
        if governs and x < end:
            axes.axvspan(x, end, facecolor="none", edgecolor=PALE, hatch="////", linewidth=0.0, zorder=0)
            words[-1] += " (hatched beyond)"
    handles, labels = axes.get_legend_handles_labels()
    width, height = figure.get_size_inches()
    figure.legend(
        handles, labels, loc="lower left", bbox_to_anchor=(0.008, 0.085 * 4.5 / height), fontsize=7.5,
        ncols=len(labels), borderpad=0.0, columnspacing=1.6, handlelength=2.4,
    )  # fmt: skip
    key = wrap("Limits: " + "; ".join(words) if words else "No limit lies on this curve.", int(16.4 * width))
    figure.text(0.012, 0.075 * 4.5 / height, "\n".join(key[:2]), fontsize=7.5, va="top", color=INK)
