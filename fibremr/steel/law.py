"""The contract of a steel law, and the one way in which a curve with history unloads and reverses."""

from __future__ import annotations

from collections.abc import Callable
from typing import Protocol, TypeAlias

import numpy as np
from numpy.typing import NDArray

Array: TypeAlias = NDArray[np.float64]
History: TypeAlias = tuple[Array, ...]


class Law(Protocol):
    """Uniaxial stress from strain, with history; odd in strain on first loading.

    Attributes, all on engineering stress and strain:

    name            as in the case file
    modulus         elastic modulus [MPa]
    yield_stress    stress of first yield [MPa]
    largest_stress  stress that the law never exceeds on first loading [MPa]; infinity if it has no end
    largest_strain  strain at which the law ends [1]; infinity if it has no end
    kinks           strains on first loading at which the slope jumps [1]
    source          where the law comes from
    """

    @property
    def name(self) -> str: ...  # noqa: D102

    @property
    def modulus(self) -> float: ...  # noqa: D102

    @property
    def yield_stress(self) -> float: ...  # noqa: D102

    @property
    def largest_stress(self) -> float: ...  # noqa: D102

    @property
    def largest_strain(self) -> float: ...  # noqa: D102

    @property
    def kinks(self) -> tuple[float, ...]: ...  # noqa: D102

    @property
    def source(self) -> str: ...  # noqa: D102

    def words(self, stress: Callable[[float], str]) -> str:
        """The law in words, for a reader; `stress` writes a stress [MPa] with its unit."""
        ...

    def start(self, shape: tuple[int, ...]) -> History:
        """History of virgin steel for arrays of that shape, usually `(fibre, sample)`."""
        ...

    def advance(self, strain: Array, history: History) -> tuple[Array, Array, History]:
        """Stress [MPa], tangent [MPa] and new history at a strain [1] reached from a history.

        All arrays have the shape given to `start`. The history passed in is not changed; the way from
        it to the new strain is taken as monotonic.
        """
        ...


class Curve:
    """A law that follows a stress–strain curve and remembers how far it went, per fibre.

    A fibre unloads with the elastic modulus and reloads in the same sense back onto the curve where it
    had left it. In the opposite sense it yields when the stress has gone back by twice the yield stress
    (kinematic), and then follows the same curve again in plastic strain counted from the reversal. This
    rule is a choice of this project: a curve with a plateau has no published one of its own.

    A subclass provides `curve`. History: origin and shift of the curve now followed (strain [1], stress
    [MPa]), furthest strain on it [1], and its sense (+1 or -1).
    """

    modulus: float
    yield_stress: float

    def curve(self, strain: Array) -> tuple[Array, Array]:
        """Stress and slope [MPa] on first loading for strains not below first yield."""
        raise NotImplementedError

    def start(self, shape: tuple[int, ...]) -> History:
        """History of virgin steel."""
        zeros = np.zeros(shape)
        return zeros, zeros, np.full(shape, self.yield_stress / self.modulus), np.ones(shape)

    def advance(self, strain: Array, history: History) -> tuple[Array, Array, History]:
        """Stress [MPa], tangent [MPa] and new history; see `Law.advance`."""
        origin, shift, peak, sense = history
        first = self.yield_stress / self.modulus
        along = sense * (strain - origin)
        back = along < peak - 2.0 * first
        if back.any():
            reached, _ = self.curve(peak)
            shift = np.where(back, shift + sense * (reached - self.yield_stress), shift)
            origin = np.where(back, origin + sense * (peak - first), origin)
            sense = np.where(back, -sense, sense)
            peak = np.where(back, first, peak)
            along = sense * (strain - origin)
        furthest = np.maximum(peak, along)
        stress, slope = self.curve(furthest)
        stress = shift + sense * (stress - self.modulus * (furthest - along))
        tangent = np.where(along < peak, self.modulus, slope)
        return stress, tangent, (origin, shift, furthest, sense)
