"""The rolled and hollow profiles of `profiles/`, by name in forgiving spelling."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache

from fibremr.errors import ValueFault, closest
from fibremr.section.parts import Section
from fibremr.section.shapes import (
    AngleShape,
    BoxShape,
    ChannelShape,
    Flange,
    IShape,
    Shape,
    TShape,
    TubeShape,
    Web,
    build,
)
from fibremr.tables import rows


@dataclass(frozen=True)
class Profile:
    """One row of the tables: its name, series, shape [mm], printed mass [kg/m] and standard."""

    name: str
    series: str
    shape: Shape
    mass_kg_per_m: float
    standard: str
    also: tuple[str, ...] = ()

    @property
    def thicknesses(self) -> tuple[float, float | None, float | None]:
        """Thickness of web or wall, of flange, and root or outer corner radius [mm]; None: there is none."""
        match self.shape:
            case IShape() as s:
                return s.web.thickness, s.top_flange.thickness, s.root_radius
            case ChannelShape() | TShape() as s:
                return s.web.thickness, s.flange.thickness, s.root_radius
            case BoxShape() as s:
                return s.web.thickness, s.flange.thickness, s.corner_radius
            case AngleShape() as s:
                return s.thickness, s.thickness, s.root_radius
            case TubeShape() as s:
                return s.thickness, None, None
        raise TypeError(self.shape)

    @property
    def dimensions(self) -> str:
        """The dimensions in words [mm]."""
        web, flange, radius = self.thicknesses
        match self.shape:
            case IShape() as s:
                h, b = s.height, s.top_flange.width
            case ChannelShape() | TShape() as s:
                h, b = s.height, s.flange.width
            case BoxShape() | AngleShape() as s:
                h, b = s.height, s.width
            case TubeShape() as s:
                return f"diameter {s.diameter:g}, wall {web:g} mm"
            case _:
                raise TypeError(self.shape)
        return f"h {h:g}, b {b:g}, tw {web:g}, tf {flange:g}, r {radius:g} mm"

    def section(self) -> Section:
        """The section with this profile's dimensions."""
        source = f"table of profiles, {self.standard}"
        return build(self.shape, name=self.name, source=source, rolled=True, mass_kg_per_m=self.mass_kg_per_m)


def profiles() -> tuple[Profile, ...]:
    """All profiles, series by series in the order of the tables."""
    return tuple(_index()[0])


def find(text: str) -> Profile:
    """The profile of a name, however spelled: "IPE 450", "ipe450" or "IPE-450".

    Raises ValueFault with the closest name when there is none.
    """
    by_key = _index()[1]
    found = by_key.get(spelling(text))
    if found is None:
        raise ValueFault(
            "no such profile in the tables",
            key="profile",
            allowed="a name that `fibremr profiles` lists",
            suggestion=nearest(text),
            code="unknown-name",
        )
    return found


def nearest(text: str) -> str:
    """A suggestion for an unknown name: the nearest size of its series, or the nearest name."""
    wanted = spelling(text)
    series, sizes = re.sub(r"[^A-Z].*", "", wanted), _sizes(wanted)
    family = [p for p in profiles() if re.sub(r"[^A-Z].*", "", spelling(p.name)) == series]
    if not series or not family or not sizes:
        return closest(text, [p.name for p in profiles()])

    def distance(p: Profile) -> tuple[float, ...]:
        return tuple(abs(a - b) for a, b in zip(_sizes(spelling(p.name)), sizes, strict=False))

    return f'did you mean "{min(family, key=distance).name}"?'


def _sizes(name: str) -> list[float]:
    return [float(x) for x in re.findall(r"\d+(?:\.\d+)?", name)]


def profile(text: str) -> Section:
    """The section of a profile by name; see `find`."""
    return find(text).section()


def spelling(text: str) -> str:
    """A name with what people spell differently taken out: case, blanks, hyphens, the sign for times."""
    plain = re.sub(r"[\s_\-]+", "", text.upper().replace("×", "X").replace("*", "X").replace(",", "."))
    european = re.fullmatch(r"HE(\d+)([ABM])", plain)
    if european:
        return f"HE{european[2]}{european[1]}"
    british = re.fullmatch(r"(\d[\dX.]*)(UB|UC|PFC)", plain)
    if british:
        return f"{british[2]}{british[1]}"
    return plain


@cache
def _index() -> tuple[list[Profile], dict[str, Profile]]:
    every = list(_read())
    by_key: dict[str, Profile] = {}
    for p in every:
        for name in (p.name, *p.also):
            by_key.setdefault(spelling(name), p)
    return every, by_key


def _read() -> Iterator[Profile]:
    inches = {row["designation"]: row for row in rows("w_shapes_inch.csv")}
    for row in rows("i_sections.csv"):
        name = row["designation"]
        if name in inches:
            # the standard gives inches: use them exactly, not the rounded millimetres
            inch = inches[name]
            d = {k: float(inch[f"{k}_in"]) * 25.4 for k in ("h", "b", "tw", "tf", "r")}
            also: tuple[str, ...] = (inch["other_name"],)
        else:
            d = {k: float(row[f"{k}_mm"]) for k in ("h", "b", "tw", "tf", "r")}
            also = ()
        flange = Flange(d["b"], d["tf"])
        shape: Shape = IShape(d["h"], Web(d["tw"]), flange, flange, d["r"])
        yield Profile(name, row["series"], shape, float(row["mass_kg_per_m"]), row["standard"], also)
    for row in rows("channels.csv"):
        flange = Flange(float(row["b_mm"]), float(row["tf_mm"]))
        shape = ChannelShape(float(row["h_mm"]), Web(float(row["tw_mm"])), flange, float(row["r_mm"]))
        yield Profile(row["designation"], row["series"], shape, float(row["mass_kg_per_m"]), row["standard"])
    for row in rows("hollow_and_tubes.csv"):
        t = float(row["t_mm"])
        if row["kind"] == "CHS":
            shape = TubeShape(float(row["d_mm"]), t)
        else:
            shape = BoxShape(
                float(row["h_mm"]),
                float(row["b_mm"]),
                Web(t),
                Web(t),
                float(row["ro_mm"]),
                float(row["ri_mm"]),
            )
        square = (f"SHS {row['b_mm']}x{row['t_mm']}",) if row["kind"] == "SHS" else ()
        mass = float(row["mass_kg_per_m"])
        yield Profile(row["designation"], row["kind"], shape, mass, row["standard"], square)
    for row in rows("tees_angles.csv"):
        mass, standard = float(row["mass_kg_per_m"]), row["standard"]
        h, b, tf = float(row["h_mm"]), float(row["b_mm"]), float(row["tf_mm"])
        if row["kind"] == "tee":
            shape = TShape(h, Web(float(row["tw_mm"])), Flange(b, tf), float(row["r_mm"]))
            parent = row["designation"].removeprefix("T ").removesuffix(" half")
            yield Profile(row["designation"], "T", shape, mass, standard, (f"half {parent}", f"T {parent}"))
        else:
            shape = AngleShape(h, b, tf, float(row["r_mm"]), float(row["r2_mm"]))
            yield Profile(row["designation"], "L", shape, mass, standard)
