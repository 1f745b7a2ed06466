"""Where the shipped tables and cases lie: inside the installed package, or in the source tree."""

from __future__ import annotations

import csv
from functools import cache
from importlib.resources import files
from importlib.resources.abc import Traversable
from pathlib import Path


def folder(name: str) -> Traversable:
    """The folder `profiles` or `cases`, as shipped."""
    inside = files("fibremr") / "_data" / name
    return inside if inside.is_dir() else Path(__file__).resolve().parent.parent / name


@cache
def rows(name: str) -> tuple[dict[str, str], ...]:
    """The rows of a table in `profiles/`, as text by column name."""
    text = (folder("profiles") / name).read_text(encoding="utf-8")
    return tuple(csv.DictReader(text.splitlines()))
