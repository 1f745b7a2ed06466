"""A case as understood, in words and as plain data; nothing is analysed."""

from __future__ import annotations

from textwrap import wrap
from typing import TYPE_CHECKING

from fibremr.summary import WIDTH, Words, axis_words, labelled, left_table

if TYPE_CHECKING:
    from fibremr.case.records import Case


def read_summary(case: Case) -> str:
    """A case as understood: every value with where it came from, and what it implies."""
    from fibremr.case.tables import bar_of

    bar, say = bar_of(case), Words(case)
    lines = [*wrap(f"{case.title}: the case as understood", WIDTH), ""]
    rows = [("key", "value", "where from")]
    rows += [(e.key, _short(e.value, 44), e.origin) for e in case.entries]
    lines += [f"  {line}" for line in left_table(rows)]
    g = bar.geometry
    up = "the lowest point" if case.bending.about == "major" else "the left edge"
    upper, lower = ("top", "bottom") if case.bending.about == "major" else ("right", "left")
    lines += ["", f"  What it implies, bent {axis_words(case)}:"]
    parts = [("part", "thickness", "yield", "table", "area")]
    for p, st in zip(case.section.parts, case.steels, strict=True):
        if not p.joins:
            table_name = f"steel.{p.steel}" if p.steel else "steel"
            parts.append(
                (p.name, say.length(p.thickness), say.stress(st.law.yield_stress), table_name,
                 say.power(p.moments.area, 2))
            )  # fmt: skip
    corners = [p for p in case.section.parts if p.joins]
    if corners:
        area = sum(p.moments.area for p in corners)
        parts.append((f"{len(corners)} fillets or corners", "", "", "", say.power(area, 2)))
    lines += [f"    {line}" for line in left_table(parts)]
    implied = [
        ("law", case.base.law.words(say.stress)),
        ("area", say.power(g.area, 2)),
        ("centroid", f"{say.length(g.centroid - g.bottom)} from {up}"),
        ("second moment", say.power(g.second_moment, 4)),
        (
            "elastic moduli",
            f"{say.power(g.modulus_top, 3)} {upper}, {say.power(g.modulus_bottom, 3)} {lower}",
        ),
        (
            "plastic modulus",
            f"{say.power(bar.plastic_alone.modulus, 3)}, "
            f"plastic axis {say.length(bar.plastic_alone.axis - g.bottom)} from {up}",
        ),
        ("squash load", say.force(bar.squash)),
        ("My", say.moment(bar.yield_moment / 1e6)),
        ("Mp", say.moment(bar.plastic_alone.moment / 1e6)),
    ]
    if case.bending.axial:
        implied.append(("Mp with N", say.moment(bar.plastic.moment / 1e6)))
    lines += ["", *(f"    {line}" for line in left_table(implied))]
    if case.setup is not None:
        lines += ["", *(f"    {line}" for line in wrap(case.setup.definition, WIDTH - 4))]
    if case.warnings:
        lines.append("")
    for warning in case.warnings:
        lines += labelled("Note", warning)
    return "\n".join(lines) + "\n"


def _short(text: str, most: int) -> str:
    return text if len(text) <= most else text[: most - 4] + " ..."


def read_record(case: Case) -> dict[str, object]:
    """A case as understood, as plain data."""
    from fibremr.case.tables import bar_of

    bar = bar_of(case)
    return {
        "case": {"title": case.title, "sha256": case.sha256},
        "values": [{"key": e.key, "value": e.value, "origin": e.origin} for e in case.entries],
        "parts": [
            {
                "part": p.name,
                "thickness_mm": p.thickness,
                "area_mm2": p.moments.area,
                "yield_MPa": st.law.yield_stress,
                "law": st.law.name,
                "source": st.source,
            }
            for p, st in zip(case.section.parts, case.steels, strict=True)
        ],
        "implies": {
            "area_mm2": bar.geometry.area,
            "second_moment_mm4": bar.geometry.second_moment,
            "squash_load_kN": bar.squash / 1e3,
            "My_kNm": bar.yield_moment / 1e6,
            "Mp_kNm": bar.plastic.moment / 1e6,
        },
        "warnings": list(case.warnings),
    }
