"""The looks that all pictures share: one ink, one second colour, greys that differ in print."""

from __future__ import annotations

from textwrap import shorten
from typing import TYPE_CHECKING, Any

from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from fibremr.summary import axial_words, axis_words

if TYPE_CHECKING:
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
    "text.parse_math": False,  # a dollar sign in a title is a dollar sign
    "svg.fonttype": "path",
    "figure.dpi": 100,
}


def new_figure(result: TraceResult, width: float, height: float, what: str) -> Figure:
    """An empty picture of a size [in] of a trace, headed by the case's title and what it shows."""
    case, record = result.case, result.record
    axial = axial_words(case)
    under = f"{what}: {record.section.name}, {axis_words(case)}{', ' + axial if axial else ''}"
    if record.class_.section is not None:
        under += f"; class {record.class_.section}"
    return headed(case.title, under, width, height)


def headed(title: str, under: str, width: float, height: float) -> Figure:
    """An empty picture of a size [in] with a title and a line under it, cut where they would not fit."""
    figure = Figure(figsize=(width, height))
    FigureCanvasAgg(figure)
    across = int(72 * width / 5.9)  # letters of the title's size that fit
    figure.text(0.012, 0.985, shorten(title, across, placeholder=" ..."), fontsize=10, va="top")
    under = shorten(under, int(72 * width / 4.7), placeholder=" ...")
    figure.text(0.012, 0.985 - 0.20 / height, under, fontsize=8, va="top", color=GREY)
    return figure
