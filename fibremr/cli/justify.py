"""`fibremr justify`."""

from __future__ import annotations

import os
from pathlib import Path

import click

from fibremr.cli.options import analysis_options, case_argument, load, output_folder


@click.command()
@case_argument
@analysis_options
def justify(
    case: str,
    settings: tuple[str, ...],
    out: Path | None,
    as_json: bool,
    quiet: bool,
    no_figures: bool,
    strict: bool,
) -> None:
    """May plastic hinges be assumed in this beam?

    For the continuous beam in CASE: the ladder of load factors, the rotation that every hinge requires
    against what is available, the checks of the code for plastic analysis, and two lines of verdict.
    """
    from contextlib import ExitStack
    from dataclasses import replace

    from fibremr import output, report
    from fibremr.hinge_verdict import JUSTIFIED
    from fibremr.justification import justify as run

    read = load(case, settings)
    writes = not as_json or out is not None
    where = output_folder(case, out)
    with ExitStack() as stack:
        folder = stack.enter_context(output.Folder(where)) if writes else None
        result = run(read)
        if folder is not None:
            folder.write("beam.csv", output.csv_text(result.columns()))
            for name, columns in result.section.tables.items():
                folder.write(f"{name}.csv", output.csv_text(columns))
            if not no_figures:
                os.environ["MPLBACKEND"] = "agg"  # whatever the user's shell says: there is no window here
                from fibremr import figures

                figures.write_all(result, folder.stage)
            folder.write("report.html", report.justify_report(result, folder.pictures()))
            files = tuple(sorted([*(p.name for p in folder.stage.iterdir()), output.LIST]))
            result = replace(result, files=files)
            folder.write(output.LIST, output.json_text(result.as_dict()))
            folder.commit()
    if as_json:
        click.echo(output.json_text(result.as_dict()), nl=False)
    elif not quiet:
        from fibremr.beam_summary import justify_summary

        click.echo(justify_summary(result, where=f"{where}/ ({len(result.files)} files)"), nl=False)
    if strict and result.verdict != JUSTIFIED:
        raise click.exceptions.Exit(4)
