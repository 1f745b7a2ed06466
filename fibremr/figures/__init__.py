"""Pictures of a trace: result in, picture out; no analysis of their own beyond reading the curve.

They speak by line style, hatching and words; `Figure` and its canvas only, never pyplot.
"""

from __future__ import annotations

import warnings
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

import matplotlib as mpl

from fibremr.figures.beam import beam, hinges, ladder
from fibremr.figures.curves import moment_curvature, moment_rotation
from fibremr.figures.section import section
from fibremr.figures.stages import stress_stages
from fibremr.figures.style import STYLE

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from fibremr.justification import JustifyResult
    from fibremr.tracing import TraceResult


def names(result: TraceResult | JustifyResult) -> tuple[str, ...]:
    """The pictures that a result has."""
    trace = _trace(result)
    turning = ("moment-rotation",) if trace.turn is not None else ()
    found = ("section", "moment-curvature", *turning, "stress-stages")
    if trace is result:
        return found
    return ("beam", "ladder", *(("hinges",) if getattr(result, "hinges", ()) else ()), *found)


def draw(result: TraceResult | JustifyResult, name: str) -> Figure:
    """A picture by name. Raises KeyError for a picture that the result does not have."""
    of_section: dict[str, Callable[[TraceResult], Figure]] = {
        "section": section,
        "moment-curvature": moment_curvature,
        "moment-rotation": moment_rotation,
        "stress-stages": stress_stages,
    }
    of_beam: dict[str, Callable[[JustifyResult], Figure]] = {"beam": beam, "ladder": ladder, "hinges": hinges}
    if name not in names(result):
        raise KeyError(f"no picture {name!r}; there are {', '.join(names(result))}")
    with mpl.rc_context(STYLE):  # type: ignore[arg-type]
        if name in of_beam:
            return of_beam[name](result)  # type: ignore[arg-type]
        return of_section[name](_trace(result))


def _trace(result: TraceResult | JustifyResult) -> TraceResult:
    """The trace of the section in a result of either kind."""
    from fibremr.tracing import TraceResult

    return result if isinstance(result, TraceResult) else result.section


def write_all(result: TraceResult | JustifyResult, folder: Path) -> None:
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
            figure.savefig(file, dpi=125, metadata={"Software": "fibremr"}, pil_kwargs={"compress_level": 3})
