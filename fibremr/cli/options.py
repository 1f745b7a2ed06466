"""Options that the analysing commands share, and where they read and write."""

from __future__ import annotations

import sys
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import click

if TYPE_CHECKING:
    from fibremr.case.records import Case

F = TypeVar("F", bound=Callable[..., Any])


def case_argument(function: F) -> F:
    """The case and how single values of it are overridden."""
    function = click.option(
        "--set", "settings", metavar="KEY=VALUE", multiple=True,
        help="Override one value of the case, e.g. --set steel.grade=S275; may be repeated.",
    )(function)  # fmt: skip
    return click.argument("case", metavar="CASE")(function)


def json_option(function: F) -> F:
    """--json."""
    return click.option(
        "--json", "as_json", is_flag=True,
        help="The result record on standard output, nothing else there; no files unless --out is given.",
    )(function)  # fmt: skip


def rows_option(function: F) -> F:
    """--json for commands that only show something."""
    return click.option("--json", "as_json", is_flag=True, help="The same as JSON on standard output.")(
        function
    )


def analysis_options(function: F) -> F:
    """Where results go and how much is said."""
    for option in (
        click.option("--strict", is_flag=True, help="Exit with 4 when a verdict is not `justified`."),
        click.option("--no-figures", is_flag=True, help="Write no pictures."),
        click.option("--quiet", is_flag=True, help="Say nothing on standard output."),
        json_option,
        click.option(
            "--out", type=click.Path(path_type=Path), metavar="DIR",
            help="Folder for the results; default out/<name of the case file>.",
        ),
    ):  # fmt: skip
        function = option(function)
    return function


def load(case: str, settings: tuple[str, ...]) -> Case:
    """The case of a file, or of standard input for `-`."""
    from fibremr.case.reader import parse_case, read_case
    from fibremr.errors import CaseError, Fault

    if case == "-":
        if sys.stdin is None:
            raise CaseError([Fault("file", "standard input is closed", file="-")])
        return parse_case(sys.stdin.buffer.read(), name="-", settings=settings)
    return read_case(case, settings=settings)


def output_folder(case: str, out: Path | None) -> Path:
    """Where results go when nothing else is said."""
    if out is not None:
        return out
    stem = Path(case).stem.strip(".")
    return Path("out") / ("stdin" if case == "-" else stem or "case")
