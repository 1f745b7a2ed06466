"""The table [section]: a profile, or a shape with its dimensions."""

from __future__ import annotations

from collections.abc import Callable, Mapping

from fibremr.case.table import Table
from fibremr.case.units import LENGTH, System
from fibremr.errors import ValueFault
from fibremr.section import shapes
from fibremr.section.catalogue import find
from fibremr.section.parts import Section

_SIZES = ("height", "width", "thickness", "diameter", "root_radius", "corner_radius")
_FLANGES = ("flange", "top_flange", "bottom_flange", "web")
_SHAPES = ("I", "T", "channel", "angle", "box", "tube", "rectangle")
_LATER_SHAPES = ("round", "plates", "outline")
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
        shape_name = table.choice("shape", _SHAPES, later=_LATER_SHAPES)
        if table.data["shape"] in _LATER_SHAPES:
            return None  # its keys are those of a later version
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


def _t(table: Table) -> shapes.Shape | None:
    height, web, flange = (
        table.quantity("height", "length", required=True),
        _web(table),
        _flange(table, "flange"),
    )
    radius = _radius(table, "root_radius")
    if height is None or web is None or flange is None:
        return None
    return shapes.TShape(height, web, flange, radius)


def _channel(table: Table) -> shapes.Shape | None:
    height, web, flange = (
        table.quantity("height", "length", required=True),
        _web(table),
        _flange(table, "flange"),
    )
    radius = _radius(table, "root_radius")
    if height is None or web is None or flange is None:
        return None
    return shapes.ChannelShape(height, web, flange, radius)


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


_READERS: Mapping[str, Callable[[Table], shapes.Shape | None]] = {
    "I": _i, "T": _t, "channel": _channel, "angle": _angle, "box": _box, "tube": _tube,
    "rectangle": _rectangle,
}  # fmt: skip
