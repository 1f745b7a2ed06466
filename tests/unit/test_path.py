"""The driver on plain functions: it knows no steel."""

from __future__ import annotations

from math import sqrt

import numpy as np
import pytest

from fibremr.solve.path import Readings, march

READ = Readings[float](
    position=lambda x: x, value=lambda x: sqrt(x + 1.0), slope=lambda x: 0.5 / sqrt(x + 1.0)
)


def steps(tolerance: float, **more: object) -> list[float]:
    return march(lambda _, x: x, 0.0, READ, stops=[1.0, 2.5, 8.0], tolerance=tolerance,
                 largest=lambda x: 4.0, **more)  # type: ignore[arg-type]  # fmt: skip


def test_stops_are_met_exactly() -> None:
    states = steps(1e-3)
    assert {1.0, 2.5, 8.0} <= set(states)
    assert states == sorted(states)


def test_chords_stay_within_the_tolerance() -> None:
    for tolerance in (1e-2, 1e-3, 1e-4):
        x = np.array(steps(tolerance))
        fine = np.linspace(0.0, 8.0, 4001)
        chord = np.interp(fine, x, np.sqrt(x + 1.0))
        assert np.max(np.abs(chord - np.sqrt(fine + 1.0))) <= 1.05 * tolerance
    assert len(steps(1e-4)) < 8 * len(steps(1e-2))


def test_ends_where_until_turns_positive() -> None:
    states = steps(1e-3, until=lambda x: x - 3.21)
    assert states[-1] == pytest.approx(3.21, abs=1e-11)


def test_a_kink_is_met_by_short_steps() -> None:
    read = Readings[float](lambda x: x, lambda x: min(x, 1.0), lambda x: 1.0 if x < 1.0 else 0.0)
    states = march(lambda _, x: x, 0.0, read, stops=[3.0], tolerance=1e-4, largest=lambda x: 1.0)
    around = [x for x in states if abs(x - 1.0) < 1e-2]
    assert around
