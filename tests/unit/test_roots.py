"""The bracketed root finder: roots, work, and refusals."""

from __future__ import annotations

from math import cos, exp

import pytest

from fibremr.errors import NotConverged
from fibremr.solve.roots import find_root


@pytest.mark.parametrize(
    ("function", "low", "high", "root"),
    [
        (lambda x: x**3 - 2.0, 0.0, 2.0, 2.0 ** (1 / 3)),
        (lambda x: cos(x) - x, 0.0, 1.0, 0.7390851332151607),
        (lambda x: exp(-x) - 1e-6, 0.0, 100.0, 13.815510557964274),
        (lambda x: max(x - 1.0, 0.0) - 0.25, 0.0, 9.0, 1.25),
        (lambda x: -1.0 if x < 0.3 else 1.0, 0.0, 1.0, 0.3),
        (lambda x: x, 0.0, 1.0, 0.0),
    ],
)
def test_roots(function, low: float, high: float, root: float) -> None:  # type: ignore[no-untyped-def]
    calls = 0

    def counted(x: float) -> float:
        nonlocal calls
        calls += 1
        return function(x)

    assert find_root(counted, low, high, tolerance=1e-13) == pytest.approx(root, abs=2e-13)
    assert calls <= 60


def test_no_sign_change() -> None:
    with pytest.raises(NotConverged, match="no sign change between 1 and 2"):
        find_root(lambda x: x, 1.0, 2.0, tolerance=1e-9)


def test_too_few_evaluations() -> None:
    with pytest.raises(NotConverged, match="3 evaluations"):
        find_root(lambda x: cos(x) - x, 0.0, 1.0, tolerance=1e-15, most=3)
