"""Section classes of EN 1993-1-1:2005, Table 5.2: largest width-to-thickness ratios of classes 1 to 3.

Plain numbers in and out. The ratios for parts in bending, in compression and in both were seen in
copies of the table; the buckling factors for outstands (EN 1993-1-5:2006 Table 4.2) are from
memory. A limit of infinity means that the table asks for nothing.
"""

from __future__ import annotations

from math import inf, sqrt

NAME = "EN 1993-1-1:2005"
INTERNAL = f"{NAME} Table 5.2, internal compression part"
OUTSTAND = f"{NAME} Table 5.2, outstand flange"
TUBULAR = f"{NAME} Table 5.2, tubular section"

Three = tuple[float, float, float]


def epsilon(yield_strength: float) -> float:
    """The factor sqrt(235/fy) for a yield strength [MPa]."""
    return sqrt(235.0 / yield_strength)


def internal(alpha: float, psi: float, eps: float) -> Three:
    """Limits of c/t of an internal part for classes 1, 2 and 3 (Table 5.2, sheet 1).

    `alpha` is the share of the width compressed at full plasticity, 0 to 1; `psi` the ratio of the
    stresses at the ends in the elastic range, the compressed end in the denominator (1 for uniform
    compression, -1 for pure bending); `eps` is sqrt(235/fy).
    """
    if alpha <= 0.0:
        one = two = inf
    elif alpha > 0.5 + 1e-9:
        one, two = 396.0 * eps / (13.0 * alpha - 1.0), 456.0 * eps / (13.0 * alpha - 1.0)
    else:
        one, two = 36.0 * eps / alpha, 41.5 * eps / alpha
    if psi > -1.0 + 1e-9:
        three = 42.0 * eps / (0.67 + 0.33 * psi)
    elif psi > -1.0 - 1e-9:
        three = 124.0 * eps
    else:
        three = 62.0 * eps * (1.0 - psi) * sqrt(-psi)
    return one, two, three


def outstand(alpha: float, psi: float, eps: float, *, tip_compressed: bool) -> Three:
    """Limits of c/t of an outstand part for classes 1, 2 and 3 (Table 5.2, sheet 2).

    `alpha` is the share of the width compressed at full plasticity; `psi` the ratio of the smaller to
    the larger compression at the ends in the elastic range; `tip_compressed` says that the larger one is
    at the tip. With psi = 1 this is the row for uniform compression.
    """
    if psi >= 1.0 - 1e-9:
        three = 14.0 * eps
    else:
        three = 21.0 * eps * sqrt(outstand_factor(psi, tip_compressed=tip_compressed))
    if alpha <= 0.0:
        return inf, inf, three
    power = alpha if tip_compressed else alpha * sqrt(alpha)
    return 9.0 * eps / power, 10.0 * eps / power, three


def outstand_factor(psi: float, *, tip_compressed: bool) -> float:
    """Buckling factor of an outstand under linear stress, EN 1993-1-5:2006 Table 4.2 (from memory).

    Below psi = -1 (largest compression at the root) or -3 (at the tip) the end value is kept: safe.
    """
    if tip_compressed:
        p = max(psi, -3.0)
        return 0.57 - 0.21 * p + 0.07 * p * p
    p = max(psi, -1.0)
    return 0.578 / (p + 0.34) if p >= 0.0 else 1.7 - 5.0 * p + 17.1 * p * p


def tube(eps: float) -> Three:
    """Limits of d/t of a tube in bending or compression for classes 1, 2 and 3 (Table 5.2, sheet 3)."""
    return 50.0 * eps**2, 70.0 * eps**2, 90.0 * eps**2


def class_of(ratio: float, limits: Three) -> int:
    """Class 1 to 4 of a ratio, and so of a part; a ratio at a limit still belongs to its class."""
    for number, limit in enumerate(limits, start=1):
        if ratio <= limit * (1.0 + 1e-9):
            return number
    return 4
