"""The class of a section: which parts are flat and compressed, by how much, and what the code allows."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from math import hypot, inf, isfinite

from fibremr.bending import Bar
from fibremr.limits import en_1993_1_1_2005 as en
from fibremr.section import shapes
from fibremr.section.outline import Point
from fibremr.section.parts import Section


@dataclass(frozen=True)
class Flat:
    """The flat width of a part between its supported ends, or from its root to its free tip [mm].

    Points are in the section as drawn. `internal` parts are held at both ends; an outstand runs from
    `start` (root) to `end` (tip).
    """

    part: str
    start: Point
    end: Point
    thickness: float
    internal: bool

    @property
    def ratio(self) -> float:
        """c/t."""
        return hypot(self.end[0] - self.start[0], self.end[1] - self.start[1]) / self.thickness


@dataclass(frozen=True)
class PartClass:
    """Class of one part: ratio, the limit of its class (of class 3 for class 4), class and clause.

    The limit is None where the code asks for nothing, as for a part that is not compressed while elastic.
    """

    part: str
    ratio: float
    limit: float | None
    number: int
    source: str


@dataclass(frozen=True)
class SectionClass:
    """Class of a section by a code: the worst of its compressed parts; None where there is no rule."""

    code: str
    number: int | None
    parts: tuple[PartClass, ...]
    why_not: str = ""


def flats(section: Section) -> Iterator[Flat] | None:
    """The flat parts of a section as drawn, or None for a shape that the code's table does not treat."""
    match section.shape:
        case shapes.IShape():
            return _i_flats(section.shape)
        case shapes.TShape():
            return _t_flats(section.shape)
        case shapes.BoxShape():
            return _box_flats(section.shape)
        case _:
            return None


def _flange_flats(name: str, flange: shapes.Flange, web: float, radius: float, z: float) -> Iterator[Flat]:
    root, tip = web / 2.0 + radius, flange.width / 2.0
    if tip > root:
        for side in (-1.0, 1.0):
            yield Flat(name, (side * root, z), (side * tip, z), flange.thickness, internal=False)


def _i_flats(s: shapes.IShape) -> Iterator[Flat]:
    top, bottom, web, r = s.top_flange, s.bottom_flange, s.web.thickness, s.root_radius
    yield from _flange_flats("top flange", top, web, r, s.height - top.thickness / 2.0)
    yield from _flange_flats("bottom flange", bottom, web, r, bottom.thickness / 2.0)
    low, high = bottom.thickness + r, s.height - top.thickness - r
    if high > low:
        yield Flat("web", (0.0, low), (0.0, high), web, internal=True)


def _t_flats(s: shapes.TShape) -> Iterator[Flat]:
    flange, web, r = s.flange, s.web.thickness, s.root_radius
    yield from _flange_flats("top flange", flange, web, r, s.height - flange.thickness / 2.0)
    root = s.height - flange.thickness - r
    if root > 0.0:
        yield Flat("web", (0.0, root), (0.0, 0.0), web, internal=False)


def _box_flats(s: shapes.BoxShape) -> Iterator[Flat]:
    tw, tf = s.web.thickness, s.flange.thickness
    across, up = s.width / 2.0 - max(s.corner_radius, tw), max(s.corner_radius, tf)
    if across > 0.0:
        for name, z in (("top flange", s.height - tf / 2.0), ("bottom flange", tf / 2.0)):
            yield Flat(name, (-across, z), (across, z), tf, internal=True)
    if s.height > 2.0 * up:
        for name, y in (("left web", -(s.width - tw) / 2.0), ("right web", (s.width - tw) / 2.0)):
            yield Flat(name, (y, up), (y, s.height - up), tw, internal=True)


def classify(bar: Bar, section: Section, *, minor: bool) -> SectionClass:
    """The class of a section bent as `bar` says, by EN 1993-1-1:2005.

    `section` is the one as drawn. The compressed share is that of full plasticity with the axial force,
    the stress ratio that of the elastic distribution with the compressed edge at yield; both are the
    section's own, not those of an idealised one. The web of a hybrid girder goes by the strongest steel
    of the section (as EN 1993-1-5 4.3(6) has it for its effective width, from memory): the safe side.
    """
    if isinstance(section.shape, shapes.TubeShape):
        shape = section.shape
        limits = en.tube(en.epsilon(bar.yields[0]))
        ratio = shape.diameter / shape.thickness
        part = _class_of_part("wall", ratio, limits, en.TUBULAR)
        return SectionClass(en.NAME, part.number, (part,))
    found = flats(section)
    if found is None:
        return SectionClass(en.NAME, None, (), f"no rule here for the class of this shape ({section.name})")
    strength = {p.name: fy for p, fy in zip(section.parts, bar.yields, strict=True)}
    strongest = max(strength.values())
    worst: dict[str, PartClass] = {}
    for flat in found:
        # a web must take the strains of the flanges that it joins, in a hybrid girder those of stronger steel
        fy = strongest if "web" in flat.part else strength[flat.part]
        classed = _flat_class(bar, flat, fy, minor=minor)
        if classed is None:
            continue
        kept = worst.get(flat.part)
        if kept is None or _severity(classed) > _severity(kept):
            worst[flat.part] = classed
    number = max((c.number for c in worst.values()), default=1)
    return SectionClass(en.NAME, number, tuple(worst.values()))


def _severity(part: PartClass) -> tuple[int, float]:
    return part.number, part.ratio / part.limit if part.limit else 0.0


def _class_of_part(name: str, ratio: float, limits: en.Three, source: str) -> PartClass:
    number = en.class_of(ratio, limits)
    limit = limits[min(number, 3) - 1]
    return PartClass(name, ratio, limit if isfinite(limit) else None, number, source)


def _flat_class(bar: Bar, flat: Flat, strength: float, *, minor: bool) -> PartClass | None:
    """The class of a flat part, None when it is not compressed."""
    # turned by a right angle, a point (y, z) of the section as drawn stands at height y
    first, last = (flat.start[0], flat.end[0]) if minor else (flat.start[1], flat.end[1])
    alpha = _compressed_share(bar, first, last)
    at_first, at_last = (_compression(bar, h, strength) for h in (first, last))
    most = max(at_first, at_last)
    if alpha <= 0.0 and most <= 1e-9 * strength:
        return None
    eps = en.epsilon(strength)
    psi = min(at_first, at_last) / most if most > 1e-9 * strength else -inf
    if flat.internal:
        limits, source = en.internal(alpha, max(psi, -1e6), eps), en.INTERNAL
    else:
        tip = at_last >= at_first
        limits, source = en.outstand(alpha, psi, eps, tip_compressed=tip), en.OUTSTAND
    if psi == -inf:  # not compressed while elastic: nothing is asked for class 3
        limits = (*limits[:2], inf)
    found = _class_of_part(flat.part, flat.ratio, limits, source)
    if found.number == 4 and 0.0 < most < strength:
        # 5.5.2(9): class 4 may be treated as class 3 for the stress that there is (from memory)
        raised = (0.0, 0.0, limits[2] * (strength / most) ** 0.5)
        source += "; epsilon raised by 5.5.2(9) for the elastic stress in this part (from memory)"
        found = min(found, _class_of_part(flat.part, flat.ratio, raised, source), key=lambda p: p.number)
    return found


def _compressed_share(bar: Bar, first: float, last: float) -> float:
    """Share of a width between two heights that is compressed at full plasticity."""
    axis = bar.plastic.axis
    depth = bar.geometry.top - bar.geometry.bottom
    a, b = (bar.sense * (h - axis) for h in (first, last))
    if abs(a - b) <= 1e-9 * depth:
        return 1.0 if a > 1e-9 * depth else 0.0
    return min(1.0, max(0.0, max(a, b) / abs(a - b)))


def _compression(bar: Bar, height: float, strength: float) -> float:
    """Elastic compression at a height [MPa] when the most compressed edge of the section is at yield."""
    g = bar.geometry
    uniform = -bar.axial / g.area
    edge = g.top if bar.sense > 0 else g.bottom
    reach = bar.sense * (edge - g.centroid)
    per_height = (strength - uniform) / reach
    return uniform + per_height * bar.sense * (height - g.centroid)
