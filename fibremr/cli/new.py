"""`fibremr new`."""

from __future__ import annotations

import shlex
from pathlib import Path

import click

STARTERS = {"trace": "starter-trace.toml", "justify": "starter-justify.toml"}


@click.command()
@click.argument("file", type=click.Path(path_type=Path), metavar="FILE")
@click.option(
    "--for", "purpose", type=click.Choice(list(STARTERS)), default="trace", show_default=True,
    help="The command that the case is for.",
)  # fmt: skip
def new(file: Path, purpose: str) -> None:
    """Write a commented case to start from; it runs as it is. An existing file is left alone."""
    from fibremr.errors import OutputError
    from fibremr.tables import folder

    if str(file) == "-":
        raise OutputError("-: name a file to write the case to")
    text = (folder("cases") / STARTERS[purpose]).read_text(encoding="utf-8")
    try:
        with file.open("x", encoding="utf-8", newline="\n") as target:
            target.write(text)
    except FileExistsError:
        raise OutputError(f"{file}: there already, and left as it is; name another file") from None
    except OSError as error:
        raise OutputError(f"{file}: cannot be written: {error.strerror}") from None
    name = str(file) if not str(file).startswith("-") else f"./{file}"
    click.echo(f"{file} written; next: fibremr {purpose} {shlex.quote(name)}")
