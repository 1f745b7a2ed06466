"""The quad-linear law of hot-rolled carbon steel: elastic, plateau, two lines of hardening."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from fibremr.errors import ValueFault
from fibremr.steel.law import Array, Curve


@dataclass(frozen=True)
class QuadLinear(Curve):
    """Yun and Gardner's quad-linear stress–strain curve of hot-rolled carbon steel.

    modulus, yield_stress, ultimate [MPa]. The plateau ends at `plateau_end`, hardening changes slope at
    `knee`, and the law ends at `largest_strain`, where the ultimate strength is reached.

    Source: Yun and Gardner (2017), Journal of Constructional Steel Research 133, 36-46; coefficients
    from memory and checked for consistency. Valid for hot-rolled carbon steel, about S235 to S690,
    monotonic and quasi-static.

    Raises ValueFault when the ultimate strength does not exceed the yield strength.
    """

    modulus: float
    yield_stress: float
    ultimate: float
    name = "quad-linear"
    source = "Yun and Gardner (2017), J. Constr. Steel Res. 133, 36-46 (coefficients from memory)"

    def __post_init__(self) -> None:
        """Refuse strengths for which the curve does not exist."""
        if self.ultimate <= self.yield_stress:
            raise ValueFault(
                "the quad-linear law needs an ultimate strength above the yield strength",
                key="ultimate",
                allowed=f"more than {self.yield_stress:g} MPa",
            )
        if self.plateau_end <= self.yield_stress / self.modulus:
            raise ValueFault(
                "the quad-linear law does not exist for this yield strength and modulus: "
                "hardening would begin before first yield",
                key="yield",
                allowed="strengths of hot-rolled carbon steel, about S235 to S690",
            )

    @cached_property
    def largest_strain(self) -> float:
        """Strain at the ultimate strength [1]."""
        return max(0.6 * (1.0 - self.yield_stress / self.ultimate), 0.06)

    @cached_property
    def plateau_end(self) -> float:
        """Strain at which hardening begins [1]."""
        return min(max(0.1 * self.yield_stress / self.ultimate - 0.055, 0.015), 0.030)

    @cached_property
    def knee(self) -> float:
        """Strain at which the slope of hardening changes [1]."""
        return self.plateau_end + 0.25 * (self.largest_strain - self.plateau_end)

    @cached_property
    def hardening(self) -> float:
        """First slope of hardening [MPa]."""
        return (self.ultimate - self.yield_stress) / (0.4 * (self.largest_strain - self.plateau_end))

    @cached_property
    def _last_slope(self) -> float:
        at_knee = self.yield_stress + self.hardening * (self.knee - self.plateau_end)
        return (self.ultimate - at_knee) / (self.largest_strain - self.knee)

    def words(self, stress: Callable[[float], str]) -> str:
        """The law in words."""
        return (
            f"quad-linear, E = {stress(self.modulus)}: plateau to {100 * self.plateau_end:.3g} %, then "
            f"{stress(self.hardening)} to {100 * self.knee:.3g} %, {stress(self.ultimate)} at "
            f"{100 * self.largest_strain:.3g} %, where the law ends"
        )

    @property
    def largest_stress(self) -> float:
        """The ultimate strength [MPa]."""
        return self.ultimate

    @property
    def kinks(self) -> tuple[float, ...]:
        """Yield strain, end of the plateau, knee of the hardening [1]."""
        return (self.yield_stress / self.modulus, self.plateau_end, self.knee)

    def curve(self, strain: Array) -> tuple[Array, Array]:
        """Stress and slope [MPa]; level beyond the last strain, where the analysis ends anyway."""
        first = np.minimum(np.maximum(strain - self.plateau_end, 0.0), self.knee - self.plateau_end)
        second = np.minimum(np.maximum(strain - self.knee, 0.0), self.largest_strain - self.knee)
        stress = self.yield_stress + self.hardening * first + self._last_slope * second
        slope = np.where(
            strain < self.plateau_end,
            0.0,
            np.where(
                strain < self.knee,
                self.hardening,
                np.where(strain < self.largest_strain, self._last_slope, 0.0),
            ),
        )
        return stress, slope
