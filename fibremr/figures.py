"""Pictures of a trace: result in, picture out; no analysis of its own beyond reading the curve.

They speak by line style, hatching and words, in one ink, one second colour and greys that differ in
print as well; `Figure` and its canvas only, never pyplot.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

import matplotlib as mpl
import numpy as np
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.patches import PathPatch, Polygon
from matplotlib.path import Path as Trail

from fibremr.section.mesh import Points
from fibremr.section.outline import Outline
from fibremr.section.parts import Plate, Section
from fibremr.summary import number

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from fibremr import kernel
    from fibremr.tracing import TraceResult

INK, RUST, GREY, PALE = "#1c2326", "#9a4a1f", "#6f7a7d", "#dfe3e0"

STYLE: dict[str, Any] = {
    "font.size": 8.5,
    "font.family": "DejaVu Sans",
    "axes.edgecolor": GREY,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.7,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "xtick.color": GREY,
    "ytick.color": GREY,
    "xtick.labelcolor": INK,
    "ytick.labelcolor": INK,
    "text.color": INK,
    "hatch.linewidth": 0.5,
    "legend.frameon": False,
    "svg.hashsalt": "fibremr",
    "svg.fonttype": "path",
    "figure.dpi": 100,
}


def names(result: TraceResult) -> tuple[str, ...]:
    """The pictures that a result has."""
    turning = ("moment-rotation",) if result.turn is not None else ()
    return ("section", "moment-curvature", *turning, "stress-stages")


def draw(result: TraceResult, name: str) -> Figure:
    """A picture by name. Raises KeyError for a picture that the result does not have."""
    makers: dict[str, Callable[[TraceResult], Figure]] = {
        "section": section,
        "moment-curvature": moment_curvature,
        "moment-rotation": moment_rotation,
        "stress-stages": stress_stages,
    }
    if name not in names(result):
        raise KeyError(f"no picture {name!r}; there are {', '.join(names(result))}")
    with mpl.rc_context(STYLE):  # type: ignore[arg-type]
        return makers[name](result)


def write_all(result: TraceResult, folder: Path) -> None:
    """Write every picture of a result into a folder, as SVG and PNG."""
    for name in names(result):
        figure = draw(result, name)
        for ending in ("svg", "png"):
            save(figure, folder / f"{name}.{ending}")


def save(figure: Figure, file: Path) -> None:
    """Write a picture as SVG or PNG, by the ending of the file; the bytes repeat from run to run."""
    with mpl.rc_context(STYLE):  # type: ignore[arg-type]
        if file.suffix == ".svg":
            figure.savefig(file, metadata={"Date": None, "Creator": "fibremr"})
        else:
            figure.savefig(file, dpi=144, metadata={"Software": "fibremr"}, pil_kwargs={"compress_level": 3})


def _figure(result: TraceResult, width: float, height: float, what: str) -> Figure:
    figure = Figure(figsize=(width, height))
    FigureCanvasAgg(figure)
    r, case = result.record, result.case
    sense = "sagging" if case.bending.sense > 0 else "hogging"
    axial = ""
    if case.bending.axial:
        kind = "compression" if case.bending.axial < 0 else "tension"
        axial = f", {number(case.system.show(abs(case.bending.axial), 'force'))} {case.system.force} {kind}"
    figure.text(0.012, 0.985, case.title, fontsize=10, va="top")
    under = f"{what}: {r.section.name}, {case.bending.about} axis, {sense}{axial}"
    figure.text(0.012, 0.985 - 0.20 / height, under, fontsize=8, va="top", color=GREY)
    return figure


def _curve_label(result: TraceResult) -> str:
    residual = result.curve.residual
    return "fibres" if residual is None else f"with residual stress, {residual.name}"


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


def _events(result: TraceResult) -> list[tuple[str, float]]:
    """Words and curvature [1/mm] of what happens along the curve."""
    c = result.record.curvatures
    found = [("first yield", c.first_yield_per_m / 1e3)]
    my = result.curve.first(
        result.curve.moment - result.bar.yield_moment,
        lambda s: result.curve.event(s).moment - result.bar.yield_moment,
    )
    if my is not None:
        found.append(("M = My", result.curve.event(my).curvature))
    found.append(("Mp/(EI)", c.elastic_at_Mp_per_m / 1e3))
    return [(text, k) for text, k in found if 0.0 < k <= result.curve.curvature[-1] * (1 + 1e-9)]


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


def moment_curvature(result: TraceResult) -> Figure:
    """Moment against curvature: the knee at the left, the whole curve at the right."""
    s, c, bar = result.case.system, result.curve, result.bar
    figure = _figure(result, 8.4, 4.0, "moment and curvature")
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
        (text, k * scale_k, float(np.interp(k, c.curvature, c.moment)) * scale_m)
        for text, k in _events(result)
        if k <= last
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


def moment_rotation(result: TraceResult) -> Figure:
    """Moment against rotation over the hinge region."""
    s, turn = result.case.system, result.turn
    assert turn is not None
    c, bar = result.curve, result.bar
    figure = _figure(result, 6.6, 4.2, "moment and rotation")
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
    if result.plain_turn is not None and result.plain is not result.curve:
        axes.plot(
            1e3 * result.plain_turn.rotation,
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


def _trail(outline: Outline, scale: float) -> Trail:
    """The boundary of a part as a path to be drawn; arcs as short chords."""
    pieces: list[tuple[tuple[float, float], list[tuple[float, float]]]] = [
        ((l.v1, l.u1), [(l.v1, l.u1), (l.v2, l.u2)]) for l in outline.lines
    ]
    for a in outline.arcs:
        angles = np.linspace(a.start, a.end, 40)
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
    case, bar, residual = result.case, result.bar, result.curve.residual
    s = case.system
    figure = _figure(result, 6.0, 4.6, "section")
    axes = figure.subplots(gridspec_kw={"left": 0.1, "right": 0.97, "bottom": 0.19, "top": 0.83})
    scale = s.show(1.0, "length")
    drawn: Section = case.section
    for part in drawn.parts:
        face = "#c9d0ce" if not part.steel else "#a9b3b2"
        axes.add_patch(PathPatch(_trail(part.outline, scale), facecolor=face, edgecolor=face, linewidth=0.4))
    low, high = drawn.extent
    turned = drawn.turned(-np.pi / 2.0)
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
    g = bar.geometry
    if case.bending.about == "major":
        lines = [("centroid", g.centroid, 0), ("plastic axis", bar.plastic.axis, 1)]
        for text, z, i in lines:
            axes.axhline(
                z * scale, color=(GREY, INK)[i], linewidth=0.8, linestyle=((0, (6, 2, 1, 2)), (0, (2, 2)))[i]
            )
            axes.annotate(
                text,
                (1.0, z * scale),
                xycoords=("axes fraction", "data"),
                fontsize=7.5,
                ha="right",
                va=("bottom", "top")[i],
                color=(GREY, INK)[i],
            )
    else:
        for text, y, i in [("centroid", g.centroid, 0), ("plastic axis", bar.plastic.axis, 1)]:
            axes.axvline(
                y * scale, color=(GREY, INK)[i], linewidth=0.8, linestyle=((0, (6, 2, 1, 2)), (0, (2, 2)))[i]
            )
            axes.annotate(
                text,
                (y * scale, 1.0),
                xycoords=("data", "axes fraction"),
                fontsize=7.5,
                va="bottom",
                ha=("right", "left")[i],
                color=(GREY, INK)[i],
            )
    pad = 0.28 * size
    middle = (left + right) / 2.0
    half = max((right - left) / 2.0 + pad, 0.75 * (high - low) / 2.0 + pad)
    axes.set_xlim((middle - half) * scale, (middle + half) * scale)
    axes.set_ylim((low - 0.22 * size) * scale, (high + 0.22 * size) * scale)
    axes.set_aspect("equal")
    axes.set_xlabel(f"y [{s.length}]")
    axes.set_ylabel(f"z [{s.length}]")
    return figure


def _residual_diagrams(axes: Axes, result: TraceResult, reach: float, scale: float) -> tuple[float, float]:
    """Stress along each plate as a curve beside it; returns the extremes [MPa]."""
    case, bar, residual = result.case, result.bar, result.curve.residual
    assert residual is not None
    peak = max(abs(residual.peak_compression), residual.peak_tension)
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


def _stages(result: TraceResult) -> list[tuple[str, kernel.State]]:
    """States at first yield, My, 90 % of Mp and the end of what may be used of the curve."""
    c, bar = result.curve, result.bar
    found: list[tuple[str, kernel.State]] = []
    first = result.record.curvatures.first_yield_per_m / 1e3
    if first <= c.curvature[-1]:
        found.append(("first yield", c.at_curvature(first)))
    for text, target in (("M = My", bar.yield_moment), ("M = 0.9 Mp", 0.9 * bar.plastic.moment)):
        state = c.first(c.moment - target, lambda s, m=target: c.event(s).moment - m)  # type: ignore[misc]
        if state is not None:
            found.append((text, state))
    governs = result.governs
    if (
        governs is not None
        and governs.curvature is not None
        and governs.curvature <= c.curvature[-1] * (1 + 1e-9)
    ):
        found.append((f"at the limit, {governs.method}", c.at_curvature(governs.curvature)))
    else:
        found.append(("end of the trace", c.states[-1]))
    return found


def stress_stages(result: TraceResult) -> Figure:
    """Stress through the depth at first yield, My, 90 % of Mp and the end."""
    s, c, bar = result.case.system, result.curve, result.bar
    stages = _stages(result)
    figure = _figure(result, 8.4, 3.8, "stress through the depth")
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
        axes.fill_betweenx(heights * scale_z, least, most, facecolor=PALE, edgecolor=INK, linewidth=1.1)
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
        axes.locator_params(axis="x", nbins=4, prune="both")
    across = "depth" if result.case.bending.about == "major" else "width"
    every[0].set_ylabel(f"along the {across}, from the lowest point [{s.length}]")
    figure.supxlabel(
        "compression negative; dashed: yield strength; the band spans the stresses at one height, "
        "which residual stress makes differ" if result.curve.residual is not None
        else "compression negative; dashed: yield strength",
        fontsize=7.5, color=GREY,
    )  # fmt: skip
    return figure
