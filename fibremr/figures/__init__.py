"""Pictures of a trace: result in, picture out; no analysis of their own beyond reading the curve.

They speak by line style, hatching and words; `Figure` and its canvas only, never pyplot.
"""

from __future__ import annotations

import warnings
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

import matplotlib as mpl

from fibremr.figures.curves import moment_curvature, moment_rotation
from fibremr.figures.section import section
from fibremr.figures.stages import stress_stages
from fibremr.figures.style import STYLE

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from fibremr.tracing import TraceResult


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
    with mpl.rc_context(STYLE), warnings.catch_warnings():  # type: ignore[arg-type]
        warnings.filterwarnings("ignore", message="Glyph .* missing")  # a title may be in any script
        if file.suffix == ".svg":
            figure.savefig(file, metadata={"Date": None, "Creator": "fibremr"})
        else:
            figure.savefig(file, dpi=144, metadata={"Software": "fibremr"}, pil_kwargs={"compress_level": 3})
