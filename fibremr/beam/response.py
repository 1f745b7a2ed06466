"""Curvature of a section for a moment of either sign, from traced curves, with its integrals."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fibremr.bending import Curve

Array = NDArray[np.float64]

SOFTNESS = 200.0  # radians of concentrated turning for an excess of the largest moment by itself


@dataclass(frozen=True)
class Branch:
    """One sense: rising moments [Nmm] and curvatures [1/mm] from (0, 0), and the integrals of curvature.

    `first` is the integral of kappa dM and `second` that of kappa M dM, both exact for the polygon.
    """

    moment: Array
    curvature: Array
    first: Array
    second: Array

    @staticmethod
    def of(curve: Curve) -> Branch:
        """The branch of a traced curve."""
        m, k = curve.moment, curve.curvature
        keep = np.concatenate([[True], np.diff(np.maximum.accumulate(m)) > 1e-13 * m[-1]])
        m, k = m[keep], k[keep]
        step = np.diff(m)
        first = np.concatenate([[0.0], np.cumsum(step * (k[:-1] + k[1:]) / 2.0)])
        weighted = step * (k[:-1] * (2 * m[:-1] + m[1:]) + k[1:] * (m[:-1] + 2 * m[1:])) / 6.0
        return Branch(m, k, first, np.concatenate([[0.0], np.cumsum(weighted)]))

    @property
    def largest(self) -> float:
        """The largest moment of the branch [Nmm]."""
        return float(self.moment[-1])

    def at(self, moment: Array) -> tuple[Array, Array, Array, Array]:
        """Curvature, its slope, and both integrals at moments from zero up; beyond the last it stays."""
        m = np.minimum(moment, self.largest)
        i = np.clip(np.searchsorted(self.moment, m, side="right") - 1, 0, self.moment.size - 2)
        width = self.moment[i + 1] - self.moment[i]
        slope = (self.curvature[i + 1] - self.curvature[i]) / width
        d = m - self.moment[i]
        k0 = self.curvature[i]
        k = k0 + slope * d
        first = self.first[i] + d * (k0 + k) / 2.0
        m0 = self.moment[i]
        second = self.second[i] + d * (k0 * (2 * m0 + m) + k * (m0 + 2 * m)) / 6.0
        first = first + k * (moment - m)
        second = second + k * (moment**2 - m**2) / 2.0
        return k, np.where(moment < self.largest, slope, 0.0), first, second


@dataclass(frozen=True)
class Response:
    """Both senses of a section: sagging and hogging."""

    sagging: Branch
    hogging: Branch

    @property
    def stiffness(self) -> float:
        """E I [Nmm2], from the first step of the sagging branch."""
        return float(self.sagging.moment[1] / self.sagging.curvature[1])

    def at(self, moment: Array) -> tuple[Array, Array, Array, Array]:
        """Curvature (signed), slope dkappa/dM, integral of kappa dM, of kappa M dM (signed) from zero."""
        size = np.abs(moment)
        up, down = self.sagging.at(size), self.hogging.at(size)
        sag = moment >= 0.0
        sign = np.where(sag, 1.0, -1.0)
        k, slope, first, second = (np.where(sag, a, b) for a, b in zip(up, down, strict=True))
        return sign * k, slope, first, sign * second

    def turning(self, moment: Array) -> tuple[Array, Array]:
        """Concentrated turning beyond the largest moment [rad], signed, and its slope per Nmm.

        Perfect plasticity leaves a gap that no finite curvature closes: a section at its largest moment
        goes on turning. An excess of a ten-thousandth of that moment turns 20 mrad.
        """
        most = np.where(moment >= 0.0, self.sagging.largest, self.hogging.largest)
        excess = np.abs(moment) - most
        over = excess > 0.0
        slope = np.where(over, SOFTNESS / most, 0.0)
        return np.where(over, np.sign(moment) * excess * slope, 0.0), slope
