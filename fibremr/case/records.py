"""A case as understood: what was asked for, in N, mm, MPa and rad, and where each value came from."""

from __future__ import annotations

from dataclasses import dataclass

from fibremr.case.units import System
from fibremr.residual import Pattern
from fibremr.rotation import Setup
from fibremr.section.parts import Part, Section
from fibremr.steel.law import Law


@dataclass(frozen=True)
class Entry:
    """One value of the case: its key, the value as text, and where it came from."""

    key: str
    value: str
    origin: str


@dataclass(frozen=True)
class Steel:
    """The steel of one part: its law, ultimate strength [MPa] if known, density [kg/m3] and source.

    `carbon` is false for stainless steel and aluminium, which have laws and classes of their own.
    """

    law: Law
    ultimate: float | None
    density: float
    source: str
    carbon: bool


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
    entries: tuple[Entry, ...]
    warnings: tuple[str, ...]

    def steel_of(self, part: Part) -> Steel:
        """The steel of a part."""
        return self.steels[self.section.parts.index(part)]
