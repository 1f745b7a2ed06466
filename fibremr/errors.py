"""Every exception of fibremr, with the data it is about and its exit status."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import asdict, dataclass


@dataclass(frozen=True)
class Fault:
    """One thing that is wrong with a case or a command line.

    `code` is a short name for programs, `key` the dotted key as written, `line` its line in `file`
    (None where there is no line, as for a value given with --set), `found` the text that was met,
    `allowed` what may stand there and `suggestion` one thing to try.
    """

    code: str
    message: str
    file: str = ""
    line: int | None = None
    key: str = ""
    found: str = ""
    allowed: str = ""
    suggestion: str = ""

    def __str__(self) -> str:
        place = self.file
        if self.line is not None:
            place = f"{place}, line {self.line}" if place else f"line {self.line}"
        what = self.key
        if self.key and self.found:
            what = f"{self.key} = {self.found}"
        body = f"{what}: {self.message}" if what else self.message
        if self.allowed:
            body += f"; allowed: {self.allowed}"
        if self.suggestion:
            body += f"; {self.suggestion}"
        if not body.endswith((".", "?", "!")):
            body += "."
        return f"{place}: {body}" if place else body

    def record(self) -> dict[str, object]:
        """The fault as plain data for --json."""
        return asdict(self)


class FibremrError(Exception):
    """Base of all errors that are the user's to mend or to know of."""

    exit_status = 2

    def faults(self) -> Sequence[Fault]:
        """The faults behind this error, at least one."""
        return (Fault(code="error", message=str(self)),)


class CaseError(FibremrError):
    """A case with one fault or more: nothing was analysed and nothing written."""

    def __init__(self, faults: Sequence[Fault]) -> None:
        super().__init__("\n".join(str(fault) for fault in faults))
        self._faults = tuple(faults)

    def faults(self) -> Sequence[Fault]:
        """All faults of the case, in the order of their lines."""
        return self._faults


class ValueFault(FibremrError):
    """A value that its own function refuses; the reader of the case adds file, line and key.

    `key` is relative to the table that the function was given, e.g. `flange.thickness`.
    """

    def __init__(
        self, message: str, *, key: str = "", allowed: str = "", suggestion: str = "", code: str = "value"
    ) -> None:
        super().__init__(message)
        self.message = message
        self.key = key
        self.allowed = allowed
        self.suggestion = suggestion
        self.code = code

    def faults(self) -> Sequence[Fault]:
        """The one fault, without file and line."""
        return (
            Fault(
                code=self.code,
                message=self.message,
                key=self.key,
                allowed=self.allowed,
                suggestion=self.suggestion,
            ),
        )


class OutputError(FibremrError):
    """The output folder cannot or must not be written."""

    def faults(self) -> Sequence[Fault]:
        """The one fault."""
        return (Fault(code="output", message=str(self)),)


class NotConverged(FibremrError):
    """An analysis that could not be completed: the reason, and how far it came."""

    exit_status = 3

    def faults(self) -> Sequence[Fault]:
        """The one fault."""
        return (Fault(code="analysis", message=str(self)),)


def closest(word: str, names: Sequence[str]) -> str:
    """The name most like `word`, ready to be put into a message, or an empty text."""
    from difflib import get_close_matches

    lowered = {name.lower(): name for name in names}
    found = get_close_matches(word.lower(), list(lowered), n=1, cutoff=0.55)
    return f'did you mean "{lowered[found[0]]}"?' if found else ""
