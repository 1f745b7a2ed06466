"""On which line of a TOML text a key stands; used only once a fault has been found.

The text is cut into statements by one pattern of tokens (strings, comments, brackets), and each
statement is then read by `tomllib` itself, so that no second reader of TOML has to be trusted.
"""

from __future__ import annotations

import re
import tomllib
from typing import Any

Path = tuple[str | int, ...]

_TOKEN = re.compile(
    r'"""(?:\\.|[^\\])*?"""'
    r"|'''.*?'''"
    r'|"(?:\\.|[^"\\\n])*"'
    r"|'[^'\n]*'"
    r"|\#[^\n]*"
    r"|[\[\]{}]"
    r"|\n"
    r"|,",
    re.DOTALL,
)


def line_numbers(text: str) -> dict[Path, int]:
    """Line (from 1) of every table, key, list item and key of an inline table, by its path.

    The text must be valid TOML. A key in an inline table that spans lines gets the line it starts on.
    """
    found: dict[Path, int] = {}
    table: Path = ()
    counts: dict[Path, int] = {}
    for start, statement in _statements(text):
        if statement.startswith("["):
            table = _header(statement, counts)
            found.setdefault(table, start)
            if isinstance(table[-1], int):
                found.setdefault(table[:-1], start)
            continue
        try:
            parsed = tomllib.loads(statement)
        except tomllib.TOMLDecodeError:
            continue
        _record(parsed, table, start, found)
        path, value = _leaf(parsed, table)
        if isinstance(value, list | dict):
            _inside(statement, path, value, start, found)
    return found


def _statements(text: str) -> list[tuple[int, str]]:
    """Statements with the line they start on; comments and blank lines are left out."""
    result = []
    depth, begin = 0, 0
    text = text.replace("\r\n", "\n")
    header = False
    for token in _TOKEN.finditer(text):
        mark = token.group()
        if depth == 0 and mark == "[" and not text[begin : token.start()].strip():
            header = True
        if mark in ("[", "{"):
            depth += 1
        elif mark in ("]", "}"):
            depth -= 1
        elif mark == "\n" and (depth <= 0 or header):
            result.append((begin, text[begin : token.start()]))
            begin, depth, header = token.end(), 0, False
    result.append((begin, text[begin:]))
    out = []
    for offset, statement in result:
        bare = statement.lstrip()
        while bare.startswith("#"):
            bare = bare.partition("\n")[2].lstrip()
        if bare:
            out.append((text.count("\n", 0, offset + len(statement) - len(bare)) + 1, bare))
    return out


def _header(statement: str, counts: dict[Path, int]) -> Path:
    many = statement.startswith("[[")
    parsed: Any = tomllib.loads(statement)
    path: Path = ()
    while isinstance(parsed, dict) and parsed:
        key, parsed = next(iter(parsed.items()))
        path = (*path, key)
        if isinstance(parsed, list):
            last = not (parsed and isinstance(parsed[0], dict) and parsed[0])
            if many and last:
                counts[path] = counts.get(path, -1) + 1
                return (*path, counts[path])
            parsed = parsed[0]
        elif path in counts:
            path = (*path, counts[path])
    return path


def _leaf(parsed: dict[str, Any], table: Path) -> tuple[Path, Any]:
    """The path and value that one statement `a.b = value` sets."""
    path, value = table, parsed
    key, inner = next(iter(value.items()))
    path = (*path, key)
    while isinstance(inner, dict) and len(inner) == 1:
        # a dotted key and an inline table of one key look alike; both lie on the statement's lines
        key, inner = next(iter(inner.items()))
        path = (*path, key)
    return path, inner


def _record(value: Any, path: Path, line: int, found: dict[Path, int]) -> None:
    if path:
        found.setdefault(path, line)
    if isinstance(value, dict):
        for key, inner in value.items():
            _record(inner, (*path, key), line, found)
    elif isinstance(value, list):
        for i, inner in enumerate(value):
            _record(inner, (*path, i), line, found)


def _inside(statement: str, path: Path, value: Any, start: int, found: dict[Path, int]) -> None:
    """Lines of the items of a list that spans several lines."""
    if "\n" not in statement or not isinstance(value, list):
        return
    depth = item = 0
    for token in _TOKEN.finditer(statement, statement.index("=")):
        mark = token.group()
        opens = mark in ("[", "{") and depth == 0
        if mark in ("[", "{"):
            depth += 1
        elif mark in ("]", "}"):
            depth -= 1
        elif mark == "," and depth == 1:
            item += 1
            opens = True
        if opens and item < len(value):
            place = _first_mark(statement, token.end())
            line = start + statement.count("\n", 0, place)
            for key in [k for k in found if k[: len(path) + 1] == (*path, item)]:
                found[key] = line


def _first_mark(text: str, place: int) -> int:
    """The next place that is neither blank nor in a comment."""
    while place < len(text):
        if text[place] == "#":
            place = text.find("\n", place)
            if place < 0:
                return len(text)
        elif not text[place].isspace():
            return place
        place += 1
    return place
