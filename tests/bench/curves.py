"""Times of the parts of a trace as ratios in one run: python tests/bench/curves.py [repeats].

Prints the median of each and its ratio to a yardstick (a plain numpy pass over the same fibres), so that
two machines, or two days on one, can be compared. Never part of the tests.
"""

from __future__ import annotations

import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from statistics import median

import numpy as np

ROOT = Path(__file__).resolve().parents[2]
SCRATCH = tempfile.TemporaryDirectory()
sys.path[:0] = [str(ROOT), str(ROOT / "tests")]

import builders  # noqa: E402

from fibremr import justify, read_case, trace  # noqa: E402
from fibremr.beam.solve import solve  # noqa: E402
from fibremr.bending import fibres, trace_curve  # noqa: E402
from fibremr.residual import EccsRolled  # noqa: E402
from fibremr.section.catalogue import profile  # noqa: E402
from fibremr.steel.bilinear import Bilinear  # noqa: E402
from fibremr.steel.quad_linear import QuadLinear  # noqa: E402


def timed(function: Callable[[], object], repeats: int) -> float:
    """Median time of a call [ms]."""
    function()
    found = []
    for _ in range(repeats):
        start = time.perf_counter()
        function()
        found.append(1e3 * (time.perf_counter() - start))
    return median(found)


def cold(*arguments: str) -> Callable[[], object]:
    """A command in a process of its own."""
    command = [sys.executable, "-m", "fibremr", *arguments]
    return lambda: subprocess.run(
        command, cwd=SCRATCH.name, env={"PYTHONPATH": str(ROOT)}, check=True, capture_output=True
    )


def main(repeats: int) -> None:
    """Print the table."""
    out = sys.stdout
    section = profile("IPE 450")
    plastic = builders.bar(section, Bilinear(210e3, 355.0))
    quad = builders.bar(section, QuadLinear(210e3, 355.0, 490.0), axial=-300e3)
    residual = quad.residual(EccsRolled(), 1.0)
    made = fibres(plastic, None, 5e-4 / 40.0, 12)
    z, area = made.z, made.area

    def yardstick() -> object:
        total = 0.0
        for k in np.linspace(0.0, 2e-4, 200):
            total += float(np.vecdot(area.T, np.clip(210e3 * k * z, -355.0, 355.0).T)[0])
        return total

    end = [20.0 * plastic.unit_curvature]
    quad_end = [20.0 * quad.unit_curvature]
    case = str(ROOT / "cases" / "deck-beam.toml")
    pictureless = ("trace", case, "--no-figures", "--out", "trace")
    read = read_case(case)
    deck = str(ROOT / "cases" / "deck-three-supports.toml")
    beam_case = read_case(deck)
    judged = justify(beam_case)
    twice = ("justify", deck, "--no-figures", "--out", "justify")
    rows = [
        ("yardstick: 200 passes over the fibres", yardstick, repeats),
        ("curve, plastic, 20 Mp/(EI)", lambda: trace_curve(plastic, None, stops=end), repeats),
        ("curve, quad-linear, N, ECCS", lambda: trace_curve(quad, residual, stops=quad_end), repeats),
        ("trace of the deck beam, warm", lambda: trace(read), repeats),
        ("one solve of two spans", lambda: solve(judged.stations, judged.response, 1.0), repeats),
        ("justify of two spans, warm", lambda: justify(beam_case), repeats),
        ("fibremr justify --no-figures, cold", cold(*twice), repeats),
        ("python -c pass", lambda: subprocess.run([sys.executable, "-c", "pass"], check=True), repeats),
        ("fibremr --help, cold", cold("--help"), repeats),
        ("fibremr trace --no-figures, cold", cold(*pictureless), repeats),
        ("fibremr trace, cold", cold("trace", case, "--out", "pictures"), max(3, repeats // 3)),
    ]  # fmt: skip
    base = 0.0
    for name, function, n in rows:
        found = timed(function, n)
        base = base or found
        out.write(f"{name:42s} {found:9.2f} ms   {found / base:8.1f} x yardstick\n")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 9)
