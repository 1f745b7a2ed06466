"""`fibremr read`."""

from __future__ import annotations

import click

from fibremr.cli.options import case_argument, load, rows_option


@click.command()
@case_argument
@rows_option
def read(case: str, settings: tuple[str, ...], as_json: bool) -> None:
    """The case as understood: every value with its unit, where it came from, and what it implies.

    Analyses nothing and writes nothing.
    """
    from fibremr import output
    from fibremr.reading import read_record, read_summary

    found = load(case, settings)
    click.echo(output.json_text(read_record(found)) if as_json else read_summary(found), nl=False)
