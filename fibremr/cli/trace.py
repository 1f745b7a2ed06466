"""`fibremr trace`."""

from __future__ import annotations

import os
from pathlib import Path

import click

from fibremr.cli.options import analysis_options, case_argument, load, output_folder


@click.command()
@case_argument
@analysis_options
def trace(
    case: str,
    settings: tuple[str, ...],
    out: Path | None,
    as_json: bool,
    quiet: bool,
    no_figures: bool,
    strict: bool,
) -> None:
    """How does this section bend, and how far can it turn?

    Moment against curvature and rotation of the section in CASE (a TOML file, or - for standard input),
    with first yield, My, Mp, the shape factor, the curve against two straight lines, and what ends it.
    A trace gives no verdict, so --strict changes nothing here.
    """
    from contextlib import ExitStack
    from dataclasses import replace

    from fibremr import output, report
    from fibremr.tracing import trace as run

    read = load(case, settings)
    writes = not as_json or out is not None
    where = output_folder(case, out)
    with ExitStack() as stack:
        folder = stack.enter_context(output.Folder(where)) if writes else None
        result = run(read)
        if folder is not None:
            for name, columns in result.tables.items():
                folder.write(f"{name}.csv", output.csv_text(columns))
            if not no_figures:
                os.environ["MPLBACKEND"] = "agg"  # whatever the user's shell says: there is no window here
                from fibremr import figures

                figures.write_all(result, folder.stage)
            folder.write("report.html", report.trace_report(result, folder.pictures()))
            files = tuple(sorted([*(p.name for p in folder.stage.iterdir()), output.LIST]))
            result = replace(result, record=replace(result.record, files=files))
            folder.write(output.LIST, output.json_text(result.record.as_dict()))
            folder.commit()
    if as_json:
        click.echo(output.json_text(result.record.as_dict()), nl=False)
    elif not quiet:
        from fibremr.summary import trace_summary

        click.echo(trace_summary(result, where=f"{where}/ ({len(result.record.files)} files)"), nl=False)
