"""March along one variable in steps that keep a curve's chords close to it, stopping at set places.

Knows no steel and no section: it is given a way to advance a state and to read a position, a value and
a slope from it.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Generic, TypeVar

from fibremr.solve.roots import find_root

S = TypeVar("S")


@dataclass(frozen=True)
class Readings(Generic[S]):
    """How to read a state: its position, the value of the curve there, and the curve's slope."""

    position: Callable[[S], float]
    value: Callable[[S], float]
    slope: Callable[[S], float]


def march(
    advance: Callable[[S, float], S],
    start: S,
    read: Readings[S],
    *,
    stops: Sequence[float],
    tolerance: float,
    largest: Callable[[float], float],
    until: Callable[[S], float] | None = None,
) -> list[S]:
    """States from `start` to the last of the rising `stops`, all of which are met exactly.

    A step is taken back and shortened until the chord departs from the curve by no more than
    `tolerance` (in the unit of the value), judged by slopes and values at both ends; `largest` bounds
    the step at a position. When `until` turns positive, the place where it does is solved for and the
    march ends there.
    """
    states = [start]
    begin = read.position(start)
    total = stops[-1] - begin
    smallest = 1e-7 * total
    step = largest(begin)
    for stop in stops:
        while (x := read.position(states[-1])) < stop - 1e-13 * total:
            here = states[-1]
            step = min(step, largest(x))
            left = stop - x
            if left <= 1.001 * step:
                target = stop
            elif left < 2.0 * step:
                target = x + left / 2.0
            else:
                target = x + step
            there = advance(here, target)
            h = target - x
            a, b = read.slope(here), read.slope(there)
            rise = read.value(there) - read.value(here)
            miss = max(abs(b - a) * h / 8.0, abs(rise - (a + b) / 2.0 * h) / 2.0)
            if miss > tolerance and h > smallest:
                step = h * max(0.25, 0.9 * (tolerance / miss) ** 0.5)
                continue
            if until is not None and until(there) > 0.0:
                states.append(_ending(advance, here, x, target, until))
                return states
            states.append(there)
            step = h * min(2.0, 0.9 * (tolerance / miss) ** 0.5 if miss > 0.0 else 2.0)
    return states


def _ending(
    advance: Callable[[S, float], S], here: S, x: float, target: float, until: Callable[[S], float]
) -> S:
    if until(here) >= 0.0:
        return here
    place = find_root(lambda p: until(advance(here, p)), x, target, tolerance=1e-13 * target)
    return advance(here, place)
