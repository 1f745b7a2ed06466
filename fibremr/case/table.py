"""One table of a case file being read: typed access to its keys, faults and origins collected."""

from __future__ import annotations

import json
import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from math import isfinite
from typing import Any, TypeVar

from fibremr.case.units import quantity
from fibremr.errors import Fault, ValueFault, closest

Path = tuple[str | int, ...]
T = TypeVar("T")


def dotted(path: Path) -> str:
    """A path as it is written: beam.spans[2]."""
    text = ""
    for step in path:
        if isinstance(step, int):
            text += f"[{step}]"
        else:
            name = (
                step
                if re.fullmatch(r"[A-Za-z0-9_()\-. ]*[A-Za-z0-9_()\-]", step) and "." not in step
                else shown(step)
            )
            text += f".{name}" if text else name
    return text


def shown(value: Any) -> str:
    """A value as it stands in a case."""
    if isinstance(value, str):
        return json.dumps(value, ensure_ascii=False)
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{k} = {shown(v)}" for k, v in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(shown(v) for v in value) + "]"
    return str(value)


@dataclass(frozen=True)
class Entry:
    """One value of the case: its key, the value as text, and where it came from."""

    key: str
    value: str
    origin: str


@dataclass
class Notes:
    """What is gathered while a case is read: faults by path, entries, warnings."""

    faults: list[tuple[Path, Fault]] = field(default_factory=list)
    entries: list[Entry] = field(default_factory=list)
    warnings: list[str] = field(default_factory=list)
    origins: dict[Path, str] = field(default_factory=dict)

    def fault(self, path: Path, error: ValueFault, found: str = "") -> None:
        """Keep a fault that belongs to a path."""
        self.faults.append(
            (
                path,
                Fault(
                    code=error.code,
                    message=error.message,
                    key=dotted(path),
                    found=found,
                    allowed=error.allowed,
                    suggestion=error.suggestion,
                ),
            )
        )

    def entry(self, path: Path, value: str, origin: str) -> None:
        """Keep where a value came from."""
        self.entries.append(Entry(dotted(path), value, origin))


class Table:
    """A table of the case; each reading method returns None after a fault, and the fault is kept."""

    def __init__(self, notes: Notes, path: Path, data: dict[str, Any]) -> None:
        self.notes = notes
        self.path = path
        self.data = data
        self.known: list[str] = []
        self.later: list[str] = []
        self.sound = True

    def fail(self, key: str | Path, error: ValueFault) -> None:
        """Keep a fault of a key: a path below this table, or a text such as `flange.thickness`."""
        self.sound = False
        path, value = self.path, self.data
        steps = _steps(key) if isinstance(key, str) else key
        for step in steps:
            path = (*path, step)
            try:
                value = value[step]  # type: ignore[index]
            except (KeyError, IndexError, TypeError):
                value = None  # type: ignore[assignment]
        found = shown(value) if value is not None and steps else ""
        self.notes.fault(path, error, found if len(found) <= 60 else found[:56] + " ...")

    def has(self, key: str) -> bool:
        """Whether the key is given; it then counts as known."""
        self.known.append(key)
        return key in self.data

    def _given(self, key: str, read: Callable[[Any], T]) -> T | None:
        try:
            value = read(self.data[key])
        except ValueFault as error:
            self.fail(key, error)
            return None
        self.notes.entry((*self.path, key), shown(self.data[key]), self._origin(key))
        return value

    def note(self, key: str) -> None:
        """Keep where a value came from that was read by other means than those above."""
        self.notes.entry((*self.path, key), shown(self.data[key]), self._origin(key))

    def _origin(self, key: str) -> str:
        return self.notes.origins.get((*self.path, key), "given")

    def _value(
        self, key: str, read: Callable[[Any], T], default: T | None, text: str, required: bool, kind: str
    ) -> T | None:
        if self.has(key):
            return self._given(key, read)
        if required:
            self.fail(key, ValueFault("missing", allowed=kind, code="missing"))
            return None
        if default is not None:
            self.notes.entry((*self.path, key), text, "default")
        return default

    def quantity(
        self,
        key: str,
        kind: str,
        *,
        required: bool = False,
        default: float | None = None,
        text: str = "",
        least: float | None = None,
        most: float | None = None,
        zero: bool = False,
        signed: bool = False,
    ) -> float | None:
        """A dimensional value in N, mm, MPa, rad; positive, or not negative with `zero`, or `signed`.

        `text` is how the default, or the range from `least` to `most`, is said.
        """

        def read(value: Any) -> float:
            found = quantity(value, kind)
            low, high, said = least, most, text
            if kind == "length" and least is None and most is None:
                low, high, said = (0.0 if zero else 0.1), 20e3, "0.1 mm to 20 m"
            if not signed and (found < 0.0 or (found == 0.0 and not zero)):
                allowed = "zero or more" if zero else "more than zero"
                raise ValueFault(f"not a possible {kind}", allowed=allowed, code="range")
            if (low is not None and found < low) or (high is not None and found > high):
                raise ValueFault(f"not a possible {kind} here", allowed=said, code="range")
            return found

        return self._value(key, read, default, text, required, f'a {kind}, such as "{_EXAMPLE[kind]}"')

    def number(
        self, key: str, *, default: float | None = None, least: float, most: float, above: bool = False
    ) -> float | None:
        """A bare number within bounds; `above` excludes the lower one."""

        def read(value: Any) -> float:
            if isinstance(value, bool) or not isinstance(value, int | float):
                raise ValueFault("not a number", allowed="a bare number, without unit or quotes", code="type")
            if isinstance(value, float) and not isfinite(value):
                raise ValueFault("not a finite number", allowed="a finite number", code="not-finite")
            if value > most or value < least or (above and value == least):
                low = "above" if above else "from"
                raise ValueFault("out of range", allowed=f"{low} {least:g} to {most:g}", code="range")
            return float(value)

        return self._value(key, read, default, f"{default:g}" if default is not None else "", False, "")

    def text(self, key: str, *, required: bool = False, default: str | None = None) -> str | None:
        """A text that is not empty."""

        def read(value: Any) -> str:
            if not isinstance(value, str) or not value.strip():
                raise ValueFault("not a text", allowed="a text in quotes that is not empty", code="type")
            if any(ord(c) < 32 or 127 <= ord(c) < 160 or 0xD800 <= ord(c) < 0xE000 for c in value):
                raise ValueFault("a control character in a text", allowed="printed characters", code="type")
            return value

        return self._value(key, read, default, shown(default), required, "a text")

    def flag(self, key: str, *, default: bool) -> bool | None:
        """true or false."""

        def read(value: Any) -> bool:
            if not isinstance(value, bool):
                raise ValueFault("neither true nor false", allowed="true or false", code="type")
            return value

        return self._value(key, read, default, shown(default), False, "true or false")

    def choice(
        self,
        key: str,
        allowed: Sequence[str],
        *,
        default: str | None = None,
        required: bool = False,
        later: Sequence[str] = (),
        also: Mapping[str, str] | None = None,
    ) -> str | None:
        """One of some words, in any case and with or without hyphens and blanks.

        `later` are words of the interface that this version does not serve yet, `also` other spellings.
        """

        def read(value: Any) -> str:
            if not isinstance(value, str):
                raise ValueFault("not a word", allowed=", ".join(allowed), code="type")
            plain = {_plain(word): word for word in allowed}
            plain |= {_plain(spelled): word for spelled, word in (also or {}).items()}
            if _plain(value) in plain:
                return plain[_plain(value)]
            if _plain(value) in {_plain(word) for word in later}:
                raise ValueFault(
                    "not available in this version", allowed=", ".join(allowed), code="not-available"
                )
            raise ValueFault(
                "not one of the words known here",
                allowed=", ".join(allowed),
                suggestion=closest(value, allowed),
                code="unknown-name",
            )

        return self._value(key, read, default, shown(default), required, ", ".join(allowed))

    def table(self, key: str, *, required: bool = False, kind: str = "a table") -> Table | None:
        """A table inside this one."""
        if not self.has(key):
            if required:
                self.fail(key, ValueFault("missing", allowed=kind, code="missing"))
            return None
        value = self.data[key]
        if not isinstance(value, dict):
            self.fail(key, ValueFault("not a table", allowed=kind, code="type"))
            return None
        return Table(self.notes, (*self.path, key), value)

    def tables(self, key: str, *, kind: str) -> list[Table] | None:
        """A list of tables; None where there is none or it is not one."""
        if not self.has(key):
            return None
        value = self.data[key]
        if not isinstance(value, list) or not value or not all(isinstance(v, dict) for v in value):
            self.fail(key, ValueFault("not a list of tables", allowed=kind, code="type"))
            return None
        return [Table(self.notes, (*self.path, key, i), v) for i, v in enumerate(value)]

    def texts(self, key: str) -> list[str] | None:
        """A list of texts; a single text is taken as a list of one."""
        if not self.has(key):
            return None
        value = self.data[key]
        items = [value] if isinstance(value, str) else value
        if not isinstance(items, list) or not all(isinstance(v, str) for v in items):
            self.fail(
                key, ValueFault("not a list of texts", allowed='such as ["class rotation"]', code="type")
            )
            return None
        if not items:
            self.fail(key, ValueFault("an empty list; leave the key out for the default", code="type"))
            return None
        self.notes.entry((*self.path, key), shown(value), self._origin(key))
        return items

    def refuse_later(self, keys: Sequence[str]) -> None:
        """Keys of the interface that this version does not serve yet."""
        for key in keys:
            if key in self.data:
                self.later.append(key)
                self.fail(key, ValueFault("not available in this version", code="not-available"))

    def finish(self, *, owner: str = "") -> None:
        """Report the keys that nothing has asked for."""
        for key in self.data:
            if key not in self.known and key not in self.later:
                where = owner or (f"[{dotted(self.path)}]" if self.path else "a case")
                self.fail(
                    (key,),
                    ValueFault(
                        f"not a key of {where}",
                        allowed=", ".join(dict.fromkeys(self.known)),
                        suggestion=closest(key, self.known),
                        code="unknown-key",
                    ),
                )


_EXAMPLE = {
    "length": "200 mm", "force": "200 kN", "stress": "355 MPa", "strain": "3 %", "angle": "30 deg",
    "line load": "38 kN/m", "moment": "120 kNm",
}  # fmt: skip


def _plain(word: str) -> str:
    """What a word is compared by: "3-point" is as good as "Three point"."""
    plain = "".join(c for c in word.lower() if c.isalnum() or c == ":")
    return plain.replace("3", "three").replace("4", "four")


def _steps(key: str) -> list[str | int]:
    steps: list[str | int] = []
    for piece in key.split(".") if key else []:
        name, *indices = piece.replace("]", "").split("[")
        steps += [name, *(int(i) for i in indices)]
    return steps
