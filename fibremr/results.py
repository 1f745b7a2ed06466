"""The result record of `trace`: the same names as results.json, in the units that end them.

A quantity that does not exist for a case is None. Curvature and moment are positive in the sense asked
for.
"""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import Any

SCHEMA = "fibremr-trace-1"


@dataclass(frozen=True)
class SectionRecord:
    """Geometry about the bending axis, heights from the lowest point."""

    name: str
    source: str
    area_mm2: float
    centroid_z_mm: float
    second_moment_mm4: float
    elastic_modulus_top_mm3: float
    elastic_modulus_bottom_mm3: float
    plastic_modulus_mm3: float
    plastic_neutral_axis_z_mm: float
    mass_kg_per_m: float


@dataclass(frozen=True)
class SteelRecord:
    """The steel of [steel]; `parts` has those of parts with another yield strength."""

    yield_MPa: float
    ultimate_MPa: float | None
    modulus_MPa: float
    law: str
    source: str
    parts: dict[str, float]


@dataclass(frozen=True)
class FibresRecord:
    """How many fibres, and the estimated error of the moment over the whole curve as a share of Mp."""

    count: int
    moment_error_pct: float


@dataclass(frozen=True)
class ResidualRecord:
    """The residual-stress pattern, what it lacked for balance and what is left; tension positive."""

    pattern: str
    scale: float
    source: str
    correction_force_pct: float
    correction_moment_pct: float
    out_of_balance_force_pct: float
    out_of_balance_moment_pct: float
    peak_compression_MPa: float
    peak_tension_MPa: float


@dataclass(frozen=True)
class MomentsRecord:
    """Moments; see the definitions in the README."""

    first_yield_kNm: float
    My_kNm: float
    Mp_kNm: float
    largest_kNm: float


@dataclass(frozen=True)
class CurvaturesRecord:
    """Curvatures that go with the moments."""

    first_yield_per_m: float
    elastic_at_My_per_m: float
    elastic_at_Mp_per_m: float
    largest_per_m: float


@dataclass(frozen=True)
class BilinearRecord:
    """The curve against two straight lines."""

    stiffness_kNm2: float
    plateau_kNm: float
    largest_gap_pct: float
    moment_at_elastic_Mp_curvature_ratio: float | None
    equal_energy_plateau_kNm: float | None


@dataclass(frozen=True)
class RotationRecord:
    """Set-up and elastic rotation at Mp over the whole hinge region."""

    setup: str
    span_m: float
    theta_p_mrad: float
    definition: str


@dataclass(frozen=True)
class PartRecord:
    """Class of one compressed part."""

    part: str
    ratio: float
    limit: float | None
    class_: int
    source: str


@dataclass(frozen=True)
class ClassRecord:
    """Class of the section; None where the code has no rule for the shape."""

    code: str
    section: int | None
    parts: tuple[PartRecord, ...]


@dataclass(frozen=True)
class LimitRecord:
    """One limit on the curve."""

    method: str
    applies: bool
    why_not: str
    verified: bool
    governs: bool
    quantity: str
    strain_pct: float | None
    curvature_per_m: float | None
    moment_kNm: float | None
    rotation_mrad: float | None
    plastic_rotation_mrad: float | None
    rotation_capacity: float | None
    warning: str
    source: str


@dataclass(frozen=True)
class GoverningRecord:
    """The limit that governs."""

    method: str
    rotation_mrad: float | None
    rotation_capacity: float | None


@dataclass(frozen=True)
class CaseRecord:
    """Title, file's SHA-256."""

    title: str
    sha256: str


@dataclass(frozen=True)
class TraceRecord:
    """Everything that results.json says of a trace, in its order."""

    schema: str
    fibremr: str
    written: str
    case: CaseRecord
    files: tuple[str, ...]
    warnings: tuple[str, ...]
    section: SectionRecord
    steel: SteelRecord
    fibres: FibresRecord
    residual: ResidualRecord | None
    moments: MomentsRecord
    curvatures: CurvaturesRecord
    shape_factor: float
    bilinear: BilinearRecord
    rotation: RotationRecord | None
    class_: ClassRecord
    limits: tuple[LimitRecord, ...]
    governing: GoverningRecord | None

    def as_dict(self) -> dict[str, Any]:
        """Plain data with the keys of results.json."""
        return {k.removesuffix("_"): _keys(v) for k, v in asdict(self).items()}


def _keys(value: Any) -> Any:
    """Nested data with `class_` written as the word it stands for."""
    if isinstance(value, dict):
        return {k.removesuffix("_"): _keys(v) for k, v in value.items()}
    if isinstance(value, list | tuple):
        return [_keys(v) for v in value]
    return value
