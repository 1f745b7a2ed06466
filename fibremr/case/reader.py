"""Reads a case file, and lists everything that is wrong with it at once, each fault with its line."""

from __future__ import annotations

import hashlib
import os
import re
import tomllib
from collections.abc import Sequence
from copy import deepcopy
from itertools import pairwise
from pathlib import Path as FilePath
from typing import Any

from fibremr.case.records import Case
from fibremr.case.table import Notes, Path, Table, dotted
from fibremr.case.tables import read_tables
from fibremr.errors import CaseError, Fault, ValueFault


def read_case(file: str | FilePath, *, settings: Sequence[str] = ()) -> Case:
    """The case of a TOML file; `settings` are texts KEY=VALUE that override single values.

    Raises CaseError with all faults of the case.
    """
    name = os.fsencode(file).decode("utf-8", "replace")
    try:
        data = FilePath(file).read_bytes()
    except IsADirectoryError:
        raise _unreadable(name, "a directory, not a case file") from None
    except FileNotFoundError:
        raise _unreadable(name, "no such file", "`fibremr new FILE` writes one to start from") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        raise _unreadable(name, f"cannot be read: {reason}") from None
    return parse_case(data, name=name, settings=settings)


def parse_case(data: bytes, *, name: str, settings: Sequence[str] = ()) -> Case:
    """The case of the bytes of a TOML file; see `read_case`."""
    try:
        text = data.decode("utf-8-sig").replace("\r\n", "\n")
    except UnicodeDecodeError as error:
        line = data[: error.start].count(b"\n") + 1
        fault = Fault("encoding", "not a text in UTF-8", file=name, line=line)
        raise CaseError([fault]) from None
    if not text.strip():
        raise _unreadable(name, "the file is empty", "`fibremr new FILE` writes a case to start from")
    try:
        values = tomllib.loads(text)
    except (ValueError, RecursionError) as error:
        raise CaseError([_syntax(name, text, str(error))]) from None
    notes = Notes()
    digest = hashlib.sha256(data)
    for setting in settings:
        digest.update(b"\0--set " + setting.encode(errors="replace"))
        try:
            values = _overridden(values, setting, notes)
        except ValueFault as error:
            notes.fault(("--set", setting), error)
    try:
        case = read_tables(Table(notes, (), values), file=name, sha256=digest.hexdigest())
    except RecursionError:
        raise _unreadable(name, "tables nested too deeply to be read") from None
    if notes.faults or case is None:
        raise CaseError(_with_lines(notes, text, name))
    return case


def _unreadable(name: str, message: str, suggestion: str = "") -> CaseError:
    return CaseError([Fault("file", message, file=name, suggestion=suggestion)])


def _syntax(name: str, text: str, message: str) -> Fault:
    """A fault of the TOML itself, with its line and what most often is behind it."""
    match = re.search(r"\(at line (\d+), column (\d+)\)", message)
    line = int(match[1]) if match else len(text.split("\n")) if "end of document" in message else None
    reason = re.sub(r"\s*\(at .*\)", "", message)
    found = text.split("\n")[line - 1].strip() if line and line <= len(text.split("\n")) else ""
    hint = ""
    bare = re.fullmatch(r"([\w.\-]+)\s*=\s*(-?\d[\d.,]*\s*[A-Za-z%/][\w/ ]*)\s*(#.*)?", found)
    if bare:
        hint = f'a value with a unit stands in quotes: write {bare[1]} = "{bare[2].strip()}"'
    elif re.search(r"=\s*-?\d+,\d+", found):
        hint = "a decimal comma; TOML writes a point"
    quoted = f": {found}" if found else ""
    return Fault("toml", f"not valid TOML{quoted} ({reason})", file=name, line=line, suggestion=hint)


_SETTING = re.compile(r"[^\s.\[\]=]+(\[[0-9]+\])*(\.[^\s.\[\]=]+(\[[0-9]+\])*)*")


def _overridden(values: dict[str, Any], setting: str, notes: Notes) -> dict[str, Any]:
    """The values of a case with one of them replaced."""
    key, equals, text = (part.strip() for part in setting.partition("="))
    if not equals or not _SETTING.fullmatch(key):
        raise ValueFault(
            f"--set {setting!r} is not KEY=VALUE", allowed="such as --set steel.grade=S275", code="usage"
        )
    try:
        parsed = tomllib.loads(f"x = {text}")
        value = parsed["x"] if len(parsed) == 1 else text
    except (ValueError, RecursionError):
        value = text
    path: list[Any] = []
    for piece in key.split("."):
        name, *indices = piece.split("[")
        path += [name, *(int(index[:-1]) for index in indices)]
    changed: Any = deepcopy(values)
    target = changed
    fault = ValueFault(f"--set {setting!r}: the case has no {dotted(tuple(path))}", code="usage")
    for step, following in pairwise(path):
        if isinstance(step, str) and isinstance(target, dict):
            if step not in target and isinstance(following, int):
                raise fault
            target = target.setdefault(step, {})
        elif isinstance(step, int) and isinstance(target, list) and step < len(target):
            target = target[step]
        else:
            raise fault
    last = path[-1]
    by_name = isinstance(target, dict) and isinstance(last, str)
    by_place = isinstance(target, list) and isinstance(last, int) and last < len(target)
    if not by_name and not by_place:
        raise fault
    target[last] = value
    notes.origins[tuple(path)] = "--set"
    return dict(changed)


def _with_lines(notes: Notes, text: str, name: str) -> list[Fault]:
    """The faults with file and line, in the order of their lines, each but once."""
    from dataclasses import replace

    from fibremr.case.lines import line_numbers

    lines = line_numbers(text)

    def line_of(path: Path) -> int | None:
        if any(path[: len(p)] == p for p in notes.origins):
            return None
        while path:
            if path in lines:
                return lines[path]
            path = path[:-1]
        return None

    placed = []
    for path, fault in notes.faults:
        usage = path[:1] == ("--set",)
        given = usage or any(path[: len(p)] == p for p in notes.origins)
        given |= path not in lines and any(p[: len(path)] == path for p in notes.origins if path)
        file = "--set" if given else name
        key = "" if usage else fault.key
        placed.append(replace(fault, file=file, line=line_of(path), key=key))
    unique = list(dict.fromkeys(placed))
    return sorted(unique, key=lambda f: f.line or 0)
