"""The table [section]: a profile, or a shape with its dimensions."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import partial

from fibremr.case.table import Path, Table
from fibremr.case.units import LENGTH, System, quantity
from fibremr.errors import ValueFault
from fibremr.section import drawn, shapes
from fibremr.section.catalogue import find
from fibremr.section.parts import Section

_SIZES = ("height", "width", "thickness", "diameter", "root_radius", "corner_radius")
_FLANGES = ("flange", "top_flange", "bottom_flange", "web")
_SHAPES = ("I", "T", "channel", "angle", "box", "tube", "rectangle", "round", "plates", "outline")
_LATER_SECTION_KEYS = ("plate", "add", "opening")


def read_section(table: Table, system: System) -> Section | None:
    """The section of a case, named in the units asked for, or None after a fault."""
    table.refuse_later(_LATER_SECTION_KEYS)
    by_profile, by_shape = table.has("profile"), table.has("shape")
    if by_profile and by_shape:
        table.fail("shape", ValueFault("a section has a profile or a shape, not both"))
    if by_profile:
        name = table.text("profile")
        table.finish(owner="a section by profile, whose dimensions come from the tables")
        try:
            if name is None:
                return None
            profile = find(name)
            origin = f"table of profiles, {profile.standard} (from memory)"
            table.notes.entry((*table.path, "dimensions"), f"{profile.name}: {profile.dimensions}", origin)
            return profile.section()
        except ValueFault as error:
            table.fail("profile", error)
            return None
    if not by_shape:
        table.fail(
            "",
            ValueFault(
                "neither a profile nor a shape",
                allowed='profile = "IPE 450", or shape and dimensions',
                code="missing",
            ),
        )
        shape_name = None
    else:
        shape_name = table.choice("shape", _SHAPES)
    if shape_name is None:
        _any_sizes(table)
        return None
    shape = _READERS[shape_name](table)
    table.finish(owner=f'shape = "{shape_name}"')
    if shape is None or not table.sound:
        return None
    found = list(shapes.faults(shape))
    for fault in found:
        table.fail(_written(fault.key, table), fault)
    if found:
        return None
    name = shapes.describe(shape, system.length, LENGTH[system.length])
    return shapes.build(shape, name=name, source="dimensions given in the case")


def _written(key: str, table: Table) -> str:
    """A key of a shape as it stands in the table, where web and thickness may be written in two ways."""
    head, _, tail = key.partition(".")
    if head in table.data:
        if tail and not isinstance(table.data[head], dict):
            return head
        if not tail and isinstance(table.data[head], dict):
            return f"{head}.thickness"
        return key
    return "thickness" if "thickness" in table.data else head


def _any_sizes(table: Table) -> None:
    """Check what can be checked of a section whose shape is not known."""
    for key in _SIZES:
        if key in table.data:
            table.quantity(key, "length", zero=key.endswith("radius"))
    for key in _FLANGES:
        if isinstance(table.data.get(key), dict):
            inner = table.table(key)
            for size in ("width", "thickness"):
                if inner and size in inner.data:
                    inner.quantity(size, "length")
        elif key in table.data:
            table.quantity(key, "length")
    table.known += [*_SIZES, *_FLANGES]
    table.finish()


def _web(table: Table, key: str = "web") -> shapes.Web | None:
    if isinstance(table.data.get(key), dict):
        inner = table.table(key)
        if inner is None:
            return None
        thickness = inner.quantity("thickness", "length", required=True)
        steel = inner.text("steel", default="") if inner.has("steel") else ""
        inner.finish()
        table.sound &= inner.sound
        return None if thickness is None else shapes.Web(thickness, steel or "")
    thickness = table.quantity(key, "length", required=True)
    return None if thickness is None else shapes.Web(thickness)


def _flange(table: Table, key: str) -> shapes.Flange | None:
    inner = table.table(key, required=True, kind='{ width = "200 mm", thickness = "15 mm" }')
    if inner is None:
        return None
    width = inner.quantity("width", "length", required=True)
    thickness = inner.quantity("thickness", "length", required=True)
    steel = inner.text("steel") if inner.has("steel") else ""
    inner.finish()
    table.sound &= inner.sound
    return None if width is None or thickness is None else shapes.Flange(width, thickness, steel or "")


def _radius(table: Table, key: str) -> float:
    return table.quantity(key, "length", zero=True, default=0.0, text="0 mm") or 0.0


def _i(table: Table) -> shapes.Shape | None:
    height = table.quantity("height", "length", required=True)
    web = _web(table)
    if table.has("flange"):
        top = bottom = _flange(table, "flange")
        for key in ("top_flange", "bottom_flange"):
            if table.has(key):
                table.fail(key, ValueFault("flange already gives both flanges"))
    elif table.has("top_flange") or table.has("bottom_flange"):
        top, bottom = _flange(table, "top_flange"), _flange(table, "bottom_flange")
    else:
        top = bottom = _flange(table, "flange")
    radius = _radius(table, "root_radius")
    if height is None or web is None or top is None or bottom is None:
        return None
    return shapes.IShape(height, web, top, bottom, radius)


def _t_or_channel(kind: type[shapes.TShape] | type[shapes.ChannelShape], table: Table) -> shapes.Shape | None:
    height = table.quantity("height", "length", required=True)
    web, flange = _web(table), _flange(table, "flange")
    radius = _radius(table, "root_radius")
    if height is None or web is None or flange is None:
        return None
    return kind(height, web, flange, radius)


def _angle(table: Table) -> shapes.Shape | None:
    sizes = [table.quantity(k, "length", required=True) for k in ("height", "width", "thickness")]
    radius = _radius(table, "root_radius")
    height, width, thickness = sizes
    if height is None or width is None or thickness is None:
        return None
    return shapes.AngleShape(height, width, thickness, radius)


def _box(table: Table) -> shapes.Shape | None:
    height = table.quantity("height", "length", required=True)
    width = table.quantity("width", "length", required=True)
    web: shapes.Web | None
    flange: shapes.Web | None
    if table.has("thickness") or not (table.has("web") or table.has("flange")):
        thickness = table.quantity("thickness", "length", required=True)
        web = flange = None if thickness is None else shapes.Web(thickness)
        for key in ("web", "flange"):
            if table.has(key):
                table.fail(key, ValueFault("thickness already gives all walls"))
    else:
        web, flange = _web(table), _web(table, "flange")
    radius = _radius(table, "corner_radius")
    if height is None or width is None or web is None or flange is None:
        return None
    inner = max(radius - max(web.thickness, flange.thickness), 0.0)
    return shapes.BoxShape(height, width, web, flange, radius, inner)


def _tube(table: Table) -> shapes.Shape | None:
    diameter = table.quantity("diameter", "length", required=True)
    thickness = table.quantity("thickness", "length", required=True)
    if diameter is None or thickness is None:
        return None
    return shapes.TubeShape(diameter, thickness)


def _rectangle(table: Table) -> shapes.Shape | None:
    width = table.quantity("width", "length", required=True)
    height = table.quantity("height", "length", required=True)
    return None if width is None or height is None else shapes.RectangleShape(width, height)


def _round(table: Table) -> shapes.Shape | None:
    diameter = table.quantity("diameter", "length", required=True)
    return None if diameter is None else drawn.RoundShape(diameter)


def _plates(table: Table) -> shapes.Shape | None:
    kind = '[ { width = "200 mm", thickness = "12 mm", centre = ["0 mm", "100 mm"] }, ... ]'
    items = table.tables("part", kind=kind)
    if items is None:
        if "part" not in table.data:
            table.fail("part", ValueFault("missing", allowed=kind, code="missing"))
        return None
    found = []
    for item in items:
        width = item.quantity("width", "length", required=True)
        thickness = item.quantity("thickness", "length", required=True)
        if not item.has("centre"):
            item.fail("centre", ValueFault("missing", allowed='["0 mm", "100 mm"]', code="missing"))
            centre = None
        else:
            centre = _point(item, ("centre",), item.data["centre"])
            item.note("centre")
        angle = item.quantity("angle", "angle", signed=True, default=0.0, text="0 deg")
        steel = item.text("steel") if item.has("steel") else ""
        item.finish()
        table.sound &= item.sound
        if width is not None and thickness is not None and centre is not None and angle is not None:
            found.append(drawn.PlacedPlate(width, thickness, centre, angle, steel or ""))
    return drawn.PlatesShape(tuple(found)) if len(found) == len(items) else None


def _outline(table: Table) -> shapes.Shape | None:
    points = None
    if not table.has("points"):
        kind = '[["0 mm", "0 mm"], ["200 mm", "0 mm"], ...]'
        table.fail("points", ValueFault("missing", allowed=kind, code="missing"))
    else:
        points = _ring(table, ("points",), table.data["points"])
        table.note("points")
    holes: list[drawn.Ring | None] = []
    if table.has("holes"):
        given = table.data["holes"]
        if isinstance(given, list):
            holes = [_ring(table, ("holes", i), hole) for i, hole in enumerate(given)]
            table.note("holes")
        else:
            table.fail("holes", ValueFault("not a list of outlines", allowed="[[[y, z], ...]]", code="type"))
    kept = [hole for hole in holes if hole is not None]
    if points is None or len(kept) < len(holes):
        return None
    return drawn.OutlineShape(points, tuple(kept))


def _ring(table: Table, path: Path, value: object) -> drawn.Ring | None:
    """The corners of an outline; a last one that repeats the first is left out."""
    if not isinstance(value, list):
        table.fail(path, ValueFault("not a list of corners", allowed="[[y, z], ...]", code="type"))
        return None
    found = [_point(table, (*path, i), corner) for i, corner in enumerate(value)]
    corners = [p for p in found if p is not None]
    if len(corners) < len(found):
        return None
    return tuple(corners[:-1] if len(corners) > 1 and corners[0] == corners[-1] else corners)


def _point(table: Table, path: Path, value: object) -> tuple[float, float] | None:
    """A place as [y, z]."""
    if not isinstance(value, list) or len(value) != 2:
        table.fail(path, ValueFault("not a place", allowed='[y, z], such as ["0 mm", "100 mm"]', code="type"))
        return None
    found = []
    for i, text in enumerate(value):
        try:
            size = quantity(text, "length")
            if abs(size) > 20e3:
                raise ValueFault("not a possible place", allowed="up to 20 m from the origin", code="range")
            found.append(size)
        except ValueFault as error:
            table.fail((*path, i), error)
    return (found[0], found[1]) if len(found) == 2 else None


_READERS: Mapping[str, Callable[[Table], shapes.Shape | None]] = {
    "I": _i, "T": partial(_t_or_channel, shapes.TShape),
    "channel": partial(_t_or_channel, shapes.ChannelShape), "angle": _angle, "box": _box, "tube": _tube,
    "rectangle": _rectangle, "round": _round, "plates": _plates, "outline": _outline,
}  # fmt: skip
