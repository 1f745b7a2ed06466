"""A case as understood: what was asked for, in N, mm, MPa and rad, and where each value came from."""

from __future__ import annotations

from dataclasses import dataclass

from fibremr.case.beam_table import BeamCase
from fibremr.case.table import Entry
from fibremr.case.units import System
from fibremr.residual import Pattern
from fibremr.rotation import Setup
from fibremr.section.parts import Part, Section
from fibremr.steel.law import Law


@dataclass(frozen=True)
class Steel:
    """The steel of one part: its law, ultimate strength [MPa] if known, density [kg/m3] and source.

    `carbon` is false for stainless steel and aluminium, which have laws and classes of their own;
    `elongation` is the least elongation after fracture [1], None where the table has none.
    """

    law: Law
    ultimate: float | None
    density: float
    source: str
    carbon: bool
    elongation: float | None


@dataclass(frozen=True)
class Bending:
    """How the section is bent: about `major` or `minor`, sense +1 or -1, axial force [N, tension +]."""

    about: str
    sense: int
    axial: float


@dataclass(frozen=True)
class Limits:
    """What ends the curve: the methods named, and limits of the user's own."""

    code: str
    methods: tuple[str, ...]
    strain: float | None
    rotation_capacity: float | None
    rotation_source: str


@dataclass(frozen=True)
class Case:
    """A case without faults.

    `steels` has one entry for each part of the section, `base` is that of [steel] itself; `to` is the
    end of the trace in multiples of Mp/(EI), None when the case does not say. `file` is its name as
    given and `sha256` that of its bytes.
    """

    file: str
    sha256: str
    title: str
    system: System
    section: Section
    steels: tuple[Steel, ...]
    base: Steel
    pattern: Pattern | None
    scale: float
    bending: Bending
    to: float | None
    setup: Setup | None
    limits: Limits
    beam: BeamCase | None
    entries: tuple[Entry, ...]
    warnings: tuple[str, ...]

    def steel_of(self, part: Part) -> Steel:
        """The steel of a part."""
        return self.steels[self.section.parts.index(part)]
