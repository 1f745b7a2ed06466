"""Shapes with their dimensions [mm], what makes them impossible, and how each is built from parts.

As drawn: y to the right, z upwards, the lowest point at z = 0; sections with a vertical axis of symmetry
have it at y = 0. A channel's web and an angle's upright leg stand at the left.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from math import pi
from typing import TypeAlias

from fibremr.errors import ValueFault
from fibremr.section import drawn
from fibremr.section.drawn import OutlineShape, PlatesShape, RoundShape
from fibremr.section.outline import Line, Outline
from fibremr.section.parts import Part, Plate, Region, Section, box_corner, corner_reach, fillet, ring


@dataclass(frozen=True)
class Flange:
    """A flange: width and thickness [mm], and the steel table it is made of."""

    width: float
    thickness: float
    steel: str = ""


@dataclass(frozen=True)
class Web:
    """A web or wall: thickness [mm], and the steel table it is made of."""

    thickness: float
    steel: str = ""


@dataclass(frozen=True)
class IShape:
    """I or H section with two flanges that may differ; all overall dimensions in mm."""

    height: float
    web: Web
    top_flange: Flange
    bottom_flange: Flange
    root_radius: float = 0.0

    @property
    def symmetric(self) -> bool:
        """Whether both flanges are alike."""
        return self.top_flange == self.bottom_flange


@dataclass(frozen=True)
class TShape:
    """T section with its flange on top."""

    height: float
    web: Web
    flange: Flange
    root_radius: float = 0.0


@dataclass(frozen=True)
class ChannelShape:
    """Channel with parallel flanges and its web at the left."""

    height: float
    web: Web
    flange: Flange
    root_radius: float = 0.0


@dataclass(frozen=True)
class AngleShape:
    """Angle with its upright leg at the left; `toe_radius` rounds the inner edge of both toes."""

    height: float
    width: float
    thickness: float
    root_radius: float = 0.0
    toe_radius: float = 0.0


@dataclass(frozen=True)
class BoxShape:
    """Rectangular hollow section; flanges are the horizontal walls, the radii those of its corners."""

    height: float
    width: float
    web: Web
    flange: Web
    corner_radius: float = 0.0
    inner_radius: float = 0.0


@dataclass(frozen=True)
class TubeShape:
    """Circular hollow section."""

    diameter: float
    thickness: float


@dataclass(frozen=True)
class RectangleShape:
    """Solid rectangle."""

    width: float
    height: float


Shape: TypeAlias = (
    IShape | TShape | ChannelShape | AngleShape | BoxShape | TubeShape | RectangleShape | drawn.Drawn
)


def i_section(
    height: float,
    width: float,
    web: float,
    flange: float,
    root_radius: float = 0.0,
    *,
    name: str = "I section",
) -> Section:
    """A doubly symmetric I or H section from its dimensions [mm]."""
    both = Flange(width, flange)
    return build(IShape(height, Web(web), both, both, root_radius), name=name)


def build(
    shape: Shape,
    *,
    name: str = "",
    source: str = "dimensions given",
    rolled: bool | None = None,
    mass_kg_per_m: float | None = None,
) -> Section:
    """The section of a shape.

    `rolled` says whether it is one piece; without it a section with root or corner radii, a tube, a
    solid bar and an outline are taken as one piece, and any other as welded from plates.

    Raises ValueFault (the first of `faults`) for dimensions that cannot be.
    """
    for fault in faults(shape):
        raise fault
    parts = tuple(_BUILDERS[type(shape)](shape))
    if rolled is None:
        rolled = isinstance(shape, TubeShape | RectangleShape | RoundShape | OutlineShape) or (
            getattr(shape, "root_radius", 0.0) > 0.0 or getattr(shape, "corner_radius", 0.0) > 0.0
        )
    return Section(name or describe(shape), parts, shape, rolled, source, mass_kg_per_m)


def faults(shape: Shape) -> Iterator[ValueFault]:
    """Everything about a shape's dimensions that cannot be, with the key it concerns."""
    if isinstance(shape, IShape):
        top, bottom = shape.top_flange, shape.bottom_flange
        flange_key = "flange" if shape.symmetric else "top_flange"
        yield from _flange_faults(shape.web, top, flange_key)
        if not shape.symmetric:
            yield from _flange_faults(shape.web, bottom, "bottom_flange")
        clear = shape.height - top.thickness - bottom.thickness
        yield from _depth_faults(clear, shape.root_radius, f"{flange_key}.thickness", both=True)
        narrow = min(top.width, bottom.width)
        yield from _root_faults(shape.root_radius, (narrow - shape.web.thickness) / 2.0)
    elif isinstance(shape, TShape):
        yield from _flange_faults(shape.web, shape.flange, "flange")
        clear = shape.height - shape.flange.thickness
        yield from _depth_faults(clear, shape.root_radius, "flange.thickness", both=False)
        yield from _root_faults(shape.root_radius, (shape.flange.width - shape.web.thickness) / 2.0)
    elif isinstance(shape, ChannelShape):
        yield from _flange_faults(shape.web, shape.flange, "flange")
        clear = shape.height - 2.0 * shape.flange.thickness
        yield from _depth_faults(clear, shape.root_radius, "flange.thickness", both=True)
        yield from _root_faults(shape.root_radius, shape.flange.width - shape.web.thickness)
    elif isinstance(shape, AngleShape):
        short = min(shape.height, shape.width)
        if shape.thickness >= short:
            yield ValueFault(
                "the legs overlap", key="thickness", allowed=f"less than the shorter leg, {short:g} mm"
            )
        elif shape.root_radius + shape.toe_radius > short - shape.thickness:
            yield ValueFault(
                "the root radius does not fit into the shorter leg",
                key="root_radius",
                allowed=f"up to {short - shape.thickness - shape.toe_radius:g} mm",
            )
    elif isinstance(shape, BoxShape):
        if 2.0 * shape.web.thickness >= shape.width:
            yield ValueFault(
                "the webs overlap", key="web", allowed=f"less than half the width, {shape.width / 2:g} mm"
            )
        if 2.0 * shape.flange.thickness >= shape.height:
            yield ValueFault(
                "the flanges overlap",
                key="flange",
                allowed=f"less than half the height, {shape.height / 2:g} mm",
            )
        reach = corner_reach(
            shape.flange.thickness, shape.web.thickness, shape.corner_radius, shape.inner_radius
        )
        if shape.corner_radius > 0.0 and (2 * reach[0] > shape.width or 2 * reach[1] > shape.height):
            yield ValueFault(
                "the corners overlap",
                key="corner_radius",
                allowed=f"up to half the shorter side, {min(shape.width, shape.height) / 2:g} mm",
            )
    elif isinstance(shape, drawn.Drawn):
        yield from drawn.faults(shape)
    elif isinstance(shape, TubeShape) and 2.0 * shape.thickness >= shape.diameter:
        yield ValueFault(
            "the wall is thicker than the tube",
            key="thickness",
            allowed=f"less than half the diameter, {shape.diameter / 2:g} mm",
        )


def _flange_faults(web: Web, flange: Flange, key: str) -> Iterator[ValueFault]:
    if web.thickness >= flange.width:
        yield ValueFault(
            "the web is not thinner than the flange is wide",
            key="web",
            allowed=f"less than the width of the {key.replace('_', ' ')}, {flange.width:g} mm",
        )


def _depth_faults(clear: float, radius: float, key: str, *, both: bool) -> Iterator[ValueFault]:
    if clear <= 0.0:
        yield ValueFault(
            "the flanges overlap or leave no web" if both else "the flange leaves no web",
            key=key,
            allowed="flanges that together stay thinner than the height" if both else "less than the height",
        )
    elif radius * (2.0 if both else 1.0) > clear:
        yield ValueFault(
            "the root fillets do not fit between the flanges" if both else "the root fillet is too large",
            key="root_radius",
            allowed=f"up to {clear / (2.0 if both else 1.0):g} mm",
        )


def _root_faults(radius: float, outstand: float) -> Iterator[ValueFault]:
    if radius > outstand > 0.0:
        yield ValueFault(
            "the root fillet is wider than the flange's outstand",
            key="root_radius",
            allowed=f"up to {outstand:g} mm",
        )


def describe(shape: Shape, unit: str = "mm", size: float = 1.0) -> str:
    """A shape and its dimensions in words, in a unit of `size` mm."""
    lengths: tuple[float, ...]
    match shape:
        case IShape():
            kind = "I" if shape.symmetric else "I, unequal flanges,"
            lengths = (shape.height, shape.top_flange.width)
        case TShape():
            kind, lengths = "T", (shape.height, shape.flange.width)
        case ChannelShape():
            kind, lengths = "channel", (shape.height, shape.flange.width)
        case AngleShape():
            kind, lengths = "angle", (shape.height, shape.width, shape.thickness)
        case BoxShape():
            kind, lengths = "box", (shape.height, shape.width)
        case TubeShape():
            kind, lengths = "tube", (shape.diameter, shape.thickness)
        case RectangleShape():
            kind, lengths = "rectangle", (shape.width, shape.height)
        case RoundShape():
            kind, lengths = "round bar", (shape.diameter,)
        case PlatesShape():
            return f"{len(shape.plates)} plates"
        case OutlineShape():
            sides = (max(p[i] for p in shape.points) - min(p[i] for p in shape.points) for i in (0, 1))
            kind, lengths = "outline", tuple(sides)
    return f"{kind} {' x '.join(f'{round(x / size, 3):g}' for x in lengths)} {unit}"


def _i_parts(s: IShape) -> Iterator[Part]:
    top, bottom, web = s.top_flange, s.bottom_flange, s.web
    z_top, z_bottom = s.height - top.thickness, bottom.thickness
    yield _flange_part("top flange", top, -top.width / 2.0, s.height - top.thickness / 2.0)
    yield _flange_part("bottom flange", bottom, -bottom.width / 2.0, bottom.thickness / 2.0)
    yield Part("web", Plate((0.0, z_bottom), (0.0, z_top), web.thickness), web.thickness, web.steel)
    if s.root_radius > 0.0:
        half = web.thickness / 2.0
        for name, corner, angle, flange, at in (
            ("top left fillet", (-half, z_top), pi, "top flange", 1.0),
            ("top right fillet", (half, z_top), -pi / 2.0, "top flange", 1.0),
            ("bottom left fillet", (-half, z_bottom), pi / 2.0, "bottom flange", 0.0),
            ("bottom right fillet", (half, z_bottom), 0.0, "bottom flange", 0.0),
        ):
            joins = ((flange, 0.5), ("web", at))
            yield Part(name, fillet(corner, s.root_radius, angle), web.thickness, web.steel, joins)


def _t_parts(s: TShape) -> Iterator[Part]:
    flange, web = s.flange, s.web
    z_top = s.height - flange.thickness
    yield _flange_part("top flange", flange, -flange.width / 2.0, s.height - flange.thickness / 2.0)
    yield Part("web", Plate((0.0, 0.0), (0.0, z_top), web.thickness), web.thickness, web.steel)
    if s.root_radius > 0.0:
        half = web.thickness / 2.0
        for name, corner, angle in (
            ("top left fillet", (-half, z_top), pi),
            ("top right fillet", (half, z_top), -pi / 2.0),
        ):
            joins = (("top flange", 0.5), ("web", 1.0))
            yield Part(name, fillet(corner, s.root_radius, angle), web.thickness, web.steel, joins)


def _channel_parts(s: ChannelShape) -> Iterator[Part]:
    flange, web = s.flange, s.web
    z_top, z_bottom = s.height - flange.thickness, flange.thickness
    yield _flange_part("top flange", flange, 0.0, s.height - flange.thickness / 2.0)
    yield _flange_part("bottom flange", flange, 0.0, flange.thickness / 2.0)
    middle = web.thickness / 2.0
    yield Part("web", Plate((middle, z_bottom), (middle, z_top), web.thickness), web.thickness, web.steel)
    if s.root_radius > 0.0:
        at_flange = middle / flange.width
        for name, corner, angle, part, at in (
            ("top fillet", (web.thickness, z_top), -pi / 2.0, "top flange", 1.0),
            ("bottom fillet", (web.thickness, z_bottom), 0.0, "bottom flange", 0.0),
        ):
            joins = ((part, at_flange), ("web", at))
            yield Part(name, fillet(corner, s.root_radius, angle), web.thickness, web.steel, joins)


def _angle_parts(s: AngleShape) -> Iterator[Part]:
    t, toe = s.thickness, min(s.toe_radius, s.thickness)
    upright = Plate((t / 2.0, 0.0), (t / 2.0, s.height - toe), t)
    yield Part("upright leg", upright, t)
    lying = Plate((t, t / 2.0), (s.width - toe, t / 2.0), t)
    yield Part("lying leg", lying, t)
    if toe > 0.0:
        yield Part(
            "upright toe", _toe((0.0, s.height - toe), t, toe, turn=False), t, joins=(("upright leg", 1.0),)
        )
        yield Part("lying toe", _toe((s.width - toe, 0.0), t, toe, turn=True), t, joins=(("lying leg", 1.0),))
    if s.root_radius > 0.0:
        joins = (("upright leg", t / (s.height - toe)), ("lying leg", 0.0))
        yield Part("root fillet", fillet((t, t), s.root_radius, 0.0), t, joins=joins)


def _toe(corner: tuple[float, float], thickness: float, radius: float, *, turn: bool) -> Region:
    """The end of a leg, `radius` long, whose inner edge is rounded by that radius."""
    from fibremr.section.outline import Arc

    x, y = corner
    flat = thickness - radius
    if turn:
        lines = [Line(x, y, x + radius, y), Line(x, y + thickness, x, y)]
        if flat > 0.0:
            lines.append(Line(x + radius, y, x + radius, y + flat))
        arc = Arc(x, y + flat, radius, 0.0, pi / 2.0)
    else:
        lines = [Line(x, y, x + thickness, y), Line(x, y + radius, x, y)]
        if flat > 0.0:
            lines.append(Line(x + flat, y + radius, x, y + radius))
        arc = Arc(x + flat, y, radius, 0.0, pi / 2.0)
    return Region(Outline(tuple(lines), (arc,)))


def _box_parts(s: BoxShape) -> Iterator[Part]:
    tw, tf = s.web.thickness, s.flange.thickness
    right, top = s.width / 2.0, s.height
    if s.corner_radius > 0.0:
        across, up = corner_reach(tf, tw, s.corner_radius, s.inner_radius)
    else:
        across, up = 0.0, tf
    for name, z in (("top flange", top - tf / 2.0), ("bottom flange", tf / 2.0)):
        if right - across > 0.0:
            yield Part(name, Plate((-right + across, z), (right - across, z), tf), tf, s.flange.steel)
    for name, y in (("left web", -right + tw / 2.0), ("right web", right - tw / 2.0)):
        if top - 2.0 * up > 0.0:
            yield Part(name, Plate((y, up), (y, top - up), tw), tw, s.web.steel)
    if s.corner_radius > 0.0:
        for name, corner, angle, along_flange, joins in (
            ("bottom left corner", (-right, 0.0), 0.0, True, (("bottom flange", 0.0), ("left web", 0.0))),
            (
                "bottom right corner",
                (right, 0.0),
                pi / 2,
                False,
                (("bottom flange", 1.0), ("right web", 0.0)),
            ),
            ("top right corner", (right, top), pi, True, (("top flange", 1.0), ("right web", 1.0))),
            ("top left corner", (-right, top), -pi / 2, False, (("top flange", 0.0), ("left web", 1.0))),
        ):
            body = box_corner(
                corner,
                angle,
                first=tf if along_flange else tw,
                second=tw if along_flange else tf,
                outer=s.corner_radius,
                inner=s.inner_radius,
            )
            yield Part(name, body, max(tw, tf), s.web.steel, joins)


def _tube_parts(s: TubeShape) -> Iterator[Part]:
    outer = s.diameter / 2.0
    yield Part("wall", ring(outer - s.thickness, outer, (0.0, outer)), s.thickness)


def _rectangle_parts(s: RectangleShape) -> Iterator[Part]:
    yield Part("bar", Plate((0.0, 0.0), (0.0, s.height), s.width), min(s.width, s.height))


def _flange_part(name: str, flange: Flange, left: float, z: float) -> Part:
    plate = Plate((left, z), (left + flange.width, z), flange.thickness)
    return Part(name, plate, flange.thickness, flange.steel)


_BUILDERS: dict[type, Callable[..., Iterator[Part]]] = {
    IShape: _i_parts,
    TShape: _t_parts,
    ChannelShape: _channel_parts,
    AngleShape: _angle_parts,
    BoxShape: _box_parts,
    TubeShape: _tube_parts,
    RectangleShape: _rectangle_parts,
    RoundShape: drawn.parts,
    PlatesShape: drawn.parts,
    OutlineShape: drawn.parts,
}
