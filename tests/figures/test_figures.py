"""What the pictures show: the data on their axes, their words and units; never just that a file exists."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from matplotlib.axes import Axes
from matplotlib.axis import Axis
from matplotlib.figure import Figure

from fibremr import justify, read_case, trace
from fibremr.figures import names
from fibremr.tracing import TraceResult

ROOT = Path(__file__).resolve().parents[2]


@pytest.fixture(scope="module")
def deck() -> TraceResult:
    return trace(read_case(ROOT / "cases" / "deck-beam.toml"))


def words(figure: Figure) -> str:
    """All text of a picture."""
    from matplotlib.text import Text

    return "\n".join(t.get_text() for t in figure.findobj(Text))


def line(axes: Axes, label: str) -> tuple[np.ndarray, np.ndarray]:
    found = next(l for l in axes.get_lines() if str(l.get_label()).startswith(label))
    return np.asarray(found.get_xdata(), dtype=float), np.asarray(found.get_ydata(), dtype=float)


def test_names(deck: TraceResult) -> None:
    assert names(deck) == ("section", "moment-curvature", "moment-rotation", "stress-stages")
    with pytest.raises(KeyError, match="no picture 'ladder'"):
        deck.figure("ladder")


def test_moment_curvature(deck: TraceResult) -> None:
    figure = deck.figure("moment-curvature")
    knee, whole = figure.axes[:2]
    x, y = line(whole, "with residual stress")
    np.testing.assert_allclose(x, deck.columns()["curvature_per_m"])
    np.testing.assert_allclose(y, deck.columns()["moment_kNm"])
    x0, y0 = line(whole, "without residual stress")
    # without residual stress the section is stiffer before it is plastic
    assert np.interp(0.0075, x0, y0) > np.interp(0.0075, x, y) + 5.0
    two_x, two_y = line(whole, "two straight lines")
    assert two_y[1] / two_x[1] == pytest.approx(deck.record.bilinear.stiffness_kNm2)
    assert two_y[-1] == pytest.approx(deck.record.moments.Mp_kNm)
    text = words(figure)
    for word in (
        *(deck.case.title, "IPE 450", "curvature [1/m]", "moment [kNm]", "first yield", "M = My", "Mp/(EI)"),
        "1 class rotation, R = 3.00, governs",
    ):
        assert word in text
    marks = [l for l in knee.get_lines() if l.get_marker() == "o"]
    assert {round(float(m.get_ydata()[0]), 3) for m in marks} >= {
        round(deck.record.moments.first_yield_kNm, 3),
        round(deck.record.moments.My_kNm, 3),
    }


def test_moment_rotation(deck: TraceResult) -> None:
    figure = deck.figure("moment-rotation")
    axes = figure.axes[0]
    x, y = line(axes, "with residual stress")
    np.testing.assert_allclose(x, deck.tables["moment-rotation"]["rotation_mrad"])
    np.testing.assert_allclose(y, deck.tables["moment-rotation"]["moment_kNm"])
    two_x, two_y = line(axes, "two straight lines")
    assert two_x[1] == pytest.approx(deck.record.rotation.theta_p_mrad)
    assert two_y[1] == pytest.approx(deck.record.moments.Mp_kNm)
    for word in ("rotation over the hinge region, both sides of the peak [mrad]", "theta_p", "R = 3.00"):
        assert word in words(figure)


def test_section(deck: TraceResult) -> None:
    figure = deck.figure("section")
    text = words(figure)
    for word in (
        "ECCS rolled: -73.2 to +67.8 MPa",
        "centroid",
        "plastic axis",
        "y [mm]",
        "z [mm]",
        "tension",
    ):
        assert word in text
    from matplotlib.patches import PathPatch

    outlines = [p for p in figure.axes[0].patches if isinstance(p, PathPatch)]
    assert len(outlines) == len(deck.case.section.parts)
    corners = np.concatenate([p.get_path().vertices for p in outlines])
    assert corners.min(axis=0) == pytest.approx([-95.0, 0.0])
    assert corners.max(axis=0) == pytest.approx([95.0, 450.0])


def test_stress_stages(deck: TraceResult) -> None:
    figure = deck.figure("stress-stages")
    text = words(figure)
    for word in (
        "first yield",
        "M = My",
        "M = 0.9 Mp",
        "at the limit, class rotation",
        "stress [MPa]",
        "dashed",
    ):
        assert word in text
    first = figure.axes[0].collections[0].get_paths()[0].vertices[:, 0]
    assert np.abs(first).max() == pytest.approx(355.0, rel=0.01)
    assert np.abs(first).max() <= 355.0 + 1e-9


def test_pictures_of_other_cases() -> None:
    """No residual stress, no rotation, minor axis, US units: only what exists is drawn, in its units."""
    bar = trace(
        read_case(
            ROOT / "cases" / "hand-check-bar.toml",
            settings=["units=US", "bending.about=minor", "limits.strain=1 %"],
        )
    )
    assert "moment [kip ft]" in words(bar.figure("moment-curvature"))
    assert "curvature [1/in]" in words(bar.figure("moment-curvature"))
    assert "stress [ksi]" in words(bar.figure("stress-stages"))
    assert "without residual stress" not in words(bar.figure("moment-curvature"))
    assert "y [in]" in words(bar.figure("section"))


def test_text_lies_inside_the_picture() -> None:
    """No word of any picture of the shipped cases is cut off at the edge."""
    from matplotlib.text import Text

    for case in ("deck-beam", "hybrid-girder", "plated-girder", "hand-check-bar", "deck-fins-left-out"):
        read = read_case(ROOT / "cases" / f"{case}.toml")
        result = trace(read) if read.beam is None else justify(read)
        for name in names(result):
            figure = result.figure(name)
            figure.canvas.draw()
            box = figure.bbox
            ticks = {t for axis in figure.findobj(Axis) for t in axis.get_ticklabels(which="both")}
            for text in set(figure.findobj(Text)) - ticks:  # ticks outside the axes are not drawn
                if not text.get_text().strip() or not text.get_visible():
                    continue
                e = text.get_window_extent()
                if e.width == 0.0:
                    continue
                assert e.x0 >= box.x0 - 1, (case, name, text.get_text())
                assert e.x1 <= box.x1 + 1, (case, name, text.get_text())
                assert e.y0 >= box.y0 - 1, (case, name, text.get_text())
                assert e.y1 <= box.y1 + 1, (case, name, text.get_text())


def test_shipped_pictures_are_those_of_the_shipped_cases(tmp_path: Path) -> None:
    """`figures/rebuild.py` makes the same set of files as stands in figures/, from the same data."""
    import importlib.util

    spec = importlib.util.spec_from_file_location("rebuild", ROOT / "figures" / "rebuild.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    module.main(tmp_path)
    made = {str(p.relative_to(tmp_path)) for p in tmp_path.rglob("*.png")}
    there = {str(p.relative_to(ROOT / "figures")) for p in (ROOT / "figures").rglob("*.png")}
    assert made == there


def test_beam_pictures() -> None:
    result = justify(read_case(ROOT / "cases" / "deck-three-supports.toml"))
    figure = result.figure("beam")
    axes = figure.axes[1]
    x, y = line(axes, "by the law of the case")
    np.testing.assert_allclose(x, result.columns()["x_m"])
    np.testing.assert_allclose(y, result.columns()["moment_kNm"])
    _, elastic = line(axes, "elastic beam")
    assert elastic.min() == pytest.approx(-752.0, abs=0.1)
    text = words(figure)
    for word in (
        "94 kN/m",
        "Mp hogging",
        "restraints: top continuously, bottom every 2 m",
        "justified",
        "[kNm]",
    ):
        assert word in text
    ladder = words(result.figure("ladder"))
    for word in ("0.708", "0.835", "1.171", "asked for", "simple plastic collapse"):
        assert word in ladder
    hinges = result.figure("hinges")
    widths = sorted(round(p.get_width(), 2) for p in hinges.axes[0].patches)
    assert widths == pytest.approx([9.60, 11.13, 39.11], abs=0.02)
