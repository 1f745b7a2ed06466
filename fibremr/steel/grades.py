"""Steel grades of `profiles/steels.csv`: nominal strengths by standard, product and thickness."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import cache
from math import inf

from fibremr.errors import ValueFault, closest
from fibremr.tables import rows


@dataclass(frozen=True)
class Strength:
    """One band of a grade: strengths and modulus [MPa] for thicknesses above `above` up to `upto` [mm].

    `density` is in kg/m3, `elongation` the least elongation after fracture [1], None where not known.
    """

    grade: str
    standard: str
    product: str
    above: float
    upto: float
    yield_stress: float
    ultimate: float
    modulus: float
    density: float
    elongation: float | None
    note: str

    @property
    def carbon(self) -> bool:
        """Whether it is carbon steel, and not stainless steel or aluminium."""
        return not self.standard.startswith(("EN 1993-1-4", "EN 1999"))

    @property
    def source(self) -> str:
        """Grade, table and band in words."""
        upto = f" to {self.upto:g}" if self.upto < inf else ""
        band = f"over {self.above:g}{upto} mm" if self.above else f"up to {self.upto:g} mm"
        if self.upto == inf and not self.above:
            band = "any thickness"
        return f"{self.grade}, {self.standard}, {self.product}, {band} (table from memory)"


HOLLOW = "hollow"
ROUND = "round hollow"
ROLLED = "rolled"
PLATED = "plated"

# what the product column may say, most fitting first, for each way a section is made
_PRODUCTS = {
    HOLLOW: ("hot-finished hollow", "square and rectangular", "cold-formed welded", "cold-rolled strip"),
    ROUND: ("hot-finished hollow", "round tubes", "cold-formed welded", "cold-rolled strip"),
    ROLLED: ("hot-rolled sections", "sections", "shapes", "long products"),
    PLATED: ("plate", "hot-rolled"),
}

TABLE_3_1 = ("EN 1993-1-1:2005",)  # the standards to look in first, by their beginnings


def spelling(text: str) -> str:
    """A grade's name without case, blanks and hyphens; `Grade` is as good as `Gr`."""
    return re.sub(r"[\s_\-]+", "", text.upper()).replace("GRADE", "GR")


@cache
def strengths() -> tuple[Strength, ...]:
    """Every band of the table, in its order."""
    return tuple(
        Strength(
            grade=row["grade"],
            standard=row["standard"],
            product=row["product"],
            above=float(row["t_min_mm"] or 0.0),
            upto=float(row["t_max_mm"] or inf),
            yield_stress=float(row["fy_MPa"]),
            ultimate=float(row["fu_MPa"]),
            modulus=float(row["E_GPa"]) * 1e3,
            density=float(row["density_kg_per_m3"]),
            elongation=float(row["elongation_min_pct"]) / 100 if row["elongation_min_pct"] else None,
            note=row["note_source"],
        )
        for row in rows("steels.csv")
    )


def names(grade: str) -> set[str]:
    """The spellings under which a grade of the table is found: parts around a slash, without subgrade."""
    found = set()
    head, *others = grade.split("/")
    for name in (head, *(head[:4] + tail for tail in others)):
        plain = spelling(name)
        found |= {plain, re.sub(r"^(S\d{3})(JR|J0|J2|K2)$", r"\1", plain)}
    return found


def matching(grade: str) -> list[Strength]:
    """Every band of a grade, by any standard. Raises ValueFault for an unknown grade."""
    wanted = spelling(grade)
    bare = re.sub(r"^(S\d{3})(JR|J0|J2|K2)$", r"\1", wanted)
    found = [s for s in strengths() if wanted in names(s.grade)]
    found = found or [s for s in strengths() if bare in names(s.grade)]
    if not found and re.fullmatch(r"S\d{3}", wanted):  # S460 for S460N or S460M, which is then named
        found = [s for s in strengths() if s.grade.startswith(wanted) and "H" not in s.grade]
    if not found:
        known = list(dict.fromkeys(s.grade for s in strengths()))
        raise ValueFault(
            "no such grade in the table",
            key="grade",
            allowed="a grade that `fibremr steels` lists, or yield given directly",
            suggestion=closest(grade, known),
            code="unknown-name",
        )
    return found


def find(grade: str, thickness: float, *, made: str, standards: tuple[str, ...], strict: bool) -> Strength:
    """The band of a grade for a thickness [mm].

    `standards` are preferred in their order (beginnings of names suffice); with `strict` no other will do.
    `made` is how the section is made: ROLLED, PLATED, HOLLOW or ROUND.

    Raises ValueFault for an unknown grade or standard, or a thickness beyond the table.
    """
    bands = matching(grade)

    def preference(s: Strength) -> int:
        plain = spelling(s.standard)
        for i, standard in enumerate(standards):
            if plain.startswith(spelling(standard)):
                return i
        return len(standards)

    if strict:
        kept = [s for s in bands if preference(s) < len(standards)]
        if not kept:
            have = sorted({s.standard for s in bands})
            raise ValueFault(
                f"the table has no {grade} by that standard",
                key="standard",
                allowed=", ".join(have),
                suggestion=closest(standards[0], have),
                code="unknown-name",
            )
        bands = kept

    def fitness(s: Strength) -> int:
        wants = _PRODUCTS[made]
        return next((i for i, want in enumerate(wants) if want in s.product), len(wants))

    best = min(bands, key=lambda s: (preference(s), fitness(s)))
    bands = [s for s in bands if (s.standard, s.product) == (best.standard, best.product)]
    for band in bands:
        if band.above < thickness <= band.upto:
            return band
    raise ValueFault(
        f"no strength for a thickness of {thickness:g} mm in {best.standard}, {best.product}",
        key="grade",
        allowed=f"up to {max(b.upto for b in bands):g} mm, or yield given directly",
    )


def elongation(strength: Strength) -> float | None:
    """Least elongation of a grade in whatever band of the tables gives one [1]: the smallest of them."""
    same = [s for s in strengths() if names(s.grade) & names(strength.grade) and s.elongation is not None]
    return min((s.elongation for s in same if s.elongation is not None), default=None)
