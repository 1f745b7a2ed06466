"""`fibremr profiles`, `steels`, `patterns` and `methods`: what the tables and libraries hold."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import click

from fibremr.cli.options import rows_option

if TYPE_CHECKING:
    from fibremr.section.catalogue import Profile


def _show(rows: list[dict[str, Any]], as_json: bool, *, heading: str = "", footing: str = "") -> None:
    if as_json:
        from fibremr.output import json_text

        click.echo(json_text({"rows": rows}), nl=False)
        return
    from fibremr.summary import table

    if heading:
        click.echo(heading)
    if rows:
        cells = [list(rows[0]), *([_cell(v) for v in row.values()] for row in rows)]
        click.echo("\n".join(table(cells)))
    if footing:
        click.echo(footing)


def _cell(value: object) -> str:
    if value is None:
        return "-"
    if isinstance(value, float) and value == round(value, 1) and abs(value) < 1e4:
        return f"{value:g}"
    return (
        f"{value:.4g}"
        if isinstance(value, float) and abs(value) < 1e4
        else (f"{value:.0f}" if isinstance(value, float) else str(value))
    )


@click.command()
@click.argument("words", nargs=-1, metavar="[TEXT]")
@rows_option
def profiles(words: tuple[str, ...], as_json: bool) -> None:
    """Profiles of the tables whose name holds TEXT (all of them without it), with exact properties.

    Dimensions and properties in mm and cm, y about the horizontal axis, z about the vertical one.
    """
    from fibremr.errors import CaseError, Fault
    from fibremr.section import catalogue

    text = " ".join(words)
    wanted = catalogue.spelling(text)
    every = catalogue.profiles()
    found = [p for p in every if any(wanted in catalogue.spelling(n) for n in (p.name, *p.also))]
    exact = [p for p in found if wanted in {catalogue.spelling(n) for n in (p.name, *p.also)}]
    if not found:
        fault = Fault(
            "unknown-name", f'no profile has "{text}" in its name', suggestion=catalogue.nearest(text)
        )
        raise CaseError([fault])
    _show(
        [_profile_row(p) for p in exact or found],
        as_json,
        footing="Properties are exact for the dimensions, root fillets and corner radii included. The\n"
        "tables are from memory of the standards named; each row was checked by its mass and, where known,\n"
        "its printed properties. A tee `T IPE 300 half` is half an IPE 300 with its flange on top.",
    )


@click.command()
@click.argument("words", nargs=-1, metavar="[TEXT]")
@rows_option
def steels(words: tuple[str, ...], as_json: bool) -> None:
    """Steel grades of the table whose name or standard holds TEXT, with strengths by thickness."""
    from fibremr.errors import CaseError, Fault
    from fibremr.steel import grades

    text = " ".join(words)
    wanted = grades.spelling(text)

    def spellings(s: grades.Strength) -> set[str]:
        return {*grades.names(s.grade), grades.spelling(s.grade), grades.spelling(s.standard)}

    found = [s for s in grades.strengths() if any(wanted in name for name in spellings(s))]
    if not found:
        from fibremr.errors import closest

        names = list(dict.fromkeys(s.grade for s in grades.strengths()))
        raise CaseError(
            [
                Fault(
                    "unknown-name",
                    f'no grade has "{text}" in its name or standard',
                    suggestion=closest(text, names),
                )
            ]
        )
    _show(
        [
            {
                "grade": s.grade, "over_mm": s.above, "to_mm": None if s.upto == float("inf") else s.upto,
                "yield_MPa": s.yield_stress, "ultimate_MPa": s.ultimate, "modulus_GPa": s.modulus / 1e3,
                "standard": s.standard, "product": s.product,
            }
            for s in found
        ],
        as_json,
        footing="From memory of the standards named: compare with the printed standard before use.\n"
        "A case takes EN 1993-1-1 Table 3.1 where it has the grade, unless [steel] says otherwise, as by\n"
        'standard = "EN 10025-2".',
    )  # fmt: skip


@click.command()
@rows_option
def patterns(as_json: bool) -> None:
    """Residual-stress patterns, with source and validity."""
    from fibremr.residual import PATTERNS

    rows = [{"pattern": p.name, "form": p.form, "source": p.source, "validity": p.validity} for p in PATTERNS]
    _words(rows, as_json)


@click.command()
@rows_option
def methods(as_json: bool) -> None:
    """Methods that limit the rotation of a section, with what they give, source and validity."""
    from fibremr.limits import METHODS

    _words([dict(m) for m in METHODS], as_json)


def _words(rows: list[dict[str, str]], as_json: bool) -> None:
    if as_json:
        _show(rows, True)
        return
    from textwrap import indent, wrap

    for row in rows:
        name, *rest = row.items()
        click.echo(name[1])
        for key, text in rest:
            click.echo(indent("\n".join(wrap(f"{key}: {text}", 94)), "    "))


def _profile_row(profile: Profile) -> dict[str, object]:
    """A profile and its exact properties, about both axes."""
    from math import pi

    from fibremr.section.properties import geometry, plastic

    section = profile.section()
    ones = [1.0] * len(section.parts)
    upright, lying = geometry(section), geometry(section.turned(pi / 2.0))
    web, flange, radius = profile.thicknesses
    return {
        "profile": profile.name,
        "h_mm": round(upright.top - upright.bottom, 6),
        "b_mm": round(lying.top - lying.bottom, 6),
        "tw_mm": web,
        "tf_mm": flange,
        "r_mm": radius,
        "A_cm2": upright.area / 1e2,
        "mass_kg_per_m": profile.mass_kg_per_m,
        "Iy_cm4": upright.second_moment / 1e4,
        "Wely_cm3": min(upright.modulus_top, upright.modulus_bottom) / 1e3,
        "Wply_cm3": plastic(section, ones).modulus / 1e3,
        "Iz_cm4": lying.second_moment / 1e4,
        "Welz_cm3": min(lying.modulus_top, lying.modulus_bottom) / 1e3,
        "Wplz_cm3": plastic(section.turned(pi / 2.0), ones).modulus / 1e3,
        "standard": profile.standard,
    }
