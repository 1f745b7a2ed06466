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
        names = [p.name for p in profiles()]
        raise ValueFault(
            "no such profile in the tables",
            key="profile",
            allowed="a name that `fibremr profiles` lists",
            suggestion=closest(text, names),
            code="unknown-name",
        )
    return found


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
        yield Profile(row["designation"], row["kind"], shape, float(row["mass_kg_per_m"]), row["standard"])
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
