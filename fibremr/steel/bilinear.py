"""Elastic–perfectly plastic steel and linear hardening."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from math import inf

import numpy as np

from fibremr.steel.law import Array, History


@dataclass(frozen=True)
class Bilinear:
    """Two straight lines with kinematic hardening; without hardening, elastic–perfectly plastic.

    modulus, yield_stress [MPa]; `hardening` is the slope after yield [MPa], 0 up to below the modulus.

    Source: EN 1993-1-5 C.6(1) a and c (from memory); kinematic rule of Prager. Under kinematic linear
    hardening the stress stays between two fixed parallel lines, so one step is a clip between them.
    History: plastic strain [1].
    """

    modulus: float
    yield_stress: float
    hardening: float = 0.0
    largest_strain: float = field(default=inf, init=False)

    @property
    def name(self) -> str:
        """As in the case file."""
        return "bilinear" if self.hardening else "elastic-plastic"

    @property
    def largest_stress(self) -> float:
        """The yield stress, or infinity with hardening [MPa]."""
        return inf if self.hardening else self.yield_stress

    @property
    def kinks(self) -> tuple[float, ...]:
        """The yield strain [1]."""
        return (self.yield_stress / self.modulus,)

    @property
    def source(self) -> str:
        """Where the law comes from."""
        if self.hardening:
            return "EN 1993-1-5 C.6(1)c: linear strain hardening (from memory)"
        return "EN 1993-1-5 C.6(1)a: elastic-plastic without strain hardening (from memory)"

    def words(self, stress: Callable[[float], str]) -> str:
        """The law in words."""
        if not self.hardening:
            return f"elastic-plastic, E = {stress(self.modulus)}"
        slope = f"{stress(self.hardening)} (E/{self.modulus / self.hardening:.4g})"
        return f"bilinear, E = {stress(self.modulus)}, hardening {slope}"

    def start(self, shape: tuple[int, ...]) -> History:
        """History of virgin steel."""
        return (np.zeros(shape),)

    def advance(self, strain: Array, history: History) -> tuple[Array, Array, History]:
        """Stress [MPa], tangent [MPa] and new history; see `Law.advance`."""
        (plastic,) = history
        trial = self.modulus * (strain - plastic)
        reach = self.yield_stress * (1.0 - self.hardening / self.modulus)
        if self.hardening:
            middle = self.hardening * strain
            stress = np.minimum(np.maximum(trial, middle - reach), middle + reach)
        else:
            stress = np.minimum(np.maximum(trial, -reach), reach)
        tangent = np.where(stress == trial, self.modulus, self.hardening)
        return stress, tangent, (strain - stress / self.modulus,)
