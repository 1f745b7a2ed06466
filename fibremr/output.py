"""Output folders: what may be replaced, and how new files take the place of old ones all at once."""

from __future__ import annotations

import json
import os
import shutil
import signal
import tempfile
import threading
from collections.abc import Iterable, Iterator, Mapping
from contextlib import contextmanager
from pathlib import Path

from fibremr.errors import OutputError

LIST = "results.json"


class Folder:
    """An output folder that new files are laid beside until they are complete.

    Opening it finds out whether it may be written, and changes nothing; `commit` replaces the files of an
    earlier run, and only these. Use it as a context: what was not committed is taken away at the end.

    Raises OutputError for a folder that holds anything that an earlier run has not listed.
    """

    def __init__(self, path: Path) -> None:
        self.path = path
        try:
            self._old = _own_files(path)
            parent = path.resolve().parent
            existing = next(p for p in (path.resolve(), *path.resolve().parents) if p.exists())
            if not existing.is_dir():
                raise OutputError(f"{path}: {existing} is a file, and a folder is wanted there")
            _writable(existing, path)
            self._made = [p for p in (parent, *parent.parents) if not p.exists()]
            parent.mkdir(parents=True, exist_ok=True)
            beside = parent if _may_write(parent) else path.resolve()
            self._stage = Path(tempfile.mkdtemp(prefix=".fibremr-", dir=beside))
        except (OSError, RuntimeError) as error:  # RuntimeError: links that lead to each other
            reason = getattr(error, "strerror", None) or str(error)
            raise OutputError(f"{path}: the output folder cannot be written: {reason}") from None

    def __enter__(self) -> Folder:
        return self

    def __exit__(self, *_: object) -> None:
        shutil.rmtree(self._stage, ignore_errors=True)
        for made in self._made:  # folders that stayed empty, because nothing was committed
            try:
                made.rmdir()
            except OSError:
                break

    @property
    def stage(self) -> Path:
        """Where new files are laid until they are complete."""
        return self._stage

    def write(self, name: str, text: str) -> None:
        """Lay a text file."""
        (self._stage / name).write_text(text, encoding="utf-8", newline="\n")

    def pictures(self) -> dict[str, str]:
        """The SVG pictures laid so far, by name."""
        return {p.stem: p.read_text(encoding="utf-8") for p in sorted(self._stage.glob("*.svg"))}

    def commit(self) -> None:
        """Put the new files in the place of the old ones; an interrupt waits until that is done."""
        with _uninterrupted():
            self._commit()

    def _commit(self) -> None:
        new = sorted(p.name for p in self._stage.iterdir())
        try:
            self.path.mkdir(parents=True, exist_ok=True)
            if _own_files(self.path, besides=self._stage.name) != self._old:
                raise OutputError(
                    f"{self.path}: the folder has changed while the analysis ran; nothing was written"
                )
            for name in self._old - set(new):
                (self.path / name).unlink(missing_ok=True)
            for name in sorted(new, key=lambda n: n != LIST):  # the list first, so that it knows every file
                os.replace(self._stage / name, self.path / name)  # noqa: PTH105
        except OSError as error:
            reason = error.strerror or str(error)
            raise OutputError(f"{self.path}: the output folder cannot be written: {reason}") from None
        self._made = []


@contextmanager
def _uninterrupted() -> Iterator[None]:
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    kept = signal.getsignal(signal.SIGINT)
    pressed = []
    signal.signal(signal.SIGINT, lambda *_: pressed.append(True))
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, kept)
    if pressed:
        raise KeyboardInterrupt


def _writable(existing: Path, asked: Path) -> None:
    if not _may_write(existing):
        raise OutputError(f"{asked}: the output folder cannot be written: {existing} is read-only")


def _may_write(folder: Path) -> bool:
    """Whether a folder may be written; one without any write permission counts as read-only for all."""
    return bool(folder.stat().st_mode & 0o222) and os.access(folder, os.W_OK | os.X_OK)


def _own_files(path: Path, *, besides: str = "") -> set[str]:
    """The files of an earlier run in a folder; OutputError when it holds anything else but `besides`."""
    if not path.exists():
        if path.is_symlink():
            raise OutputError(f"{path}: a link that leads nowhere; name another output folder with --out")
        return set()
    if not path.is_dir():
        raise OutputError(f"{path}: a file, and an output folder is wanted; name another with --out")
    present = {p.name for p in path.iterdir()} - {besides}
    if not present:
        return set()
    listed: set[str] = set()
    if LIST in present:
        try:
            record = json.loads((path / LIST).read_text(encoding="utf-8"))
            if isinstance(record, dict) and str(record.get("schema", "")).startswith("fibremr-"):
                listed = {str(name) for name in record.get("files", [])} | {LIST}
        except (ValueError, OSError, TypeError, RecursionError):
            listed = set()
    foreign = sorted(present - listed) + sorted(n for n in present & listed if (path / n).is_dir())
    if foreign:
        named = ", ".join(foreign[:3]) + (", ..." if len(foreign) > 3 else "")
        raise OutputError(
            f"{path}: the folder holds what fibremr has not written ({named}), and nothing of yours is "
            "replaced; empty it, or name another output folder with --out"
        )
    return present & listed


def csv_text(columns: Mapping[str, Iterable[float]]) -> str:
    """Columns as CSV: one header line, commas, decimal points, ten digits; below 1e-15 is rounding."""
    lines = [",".join(columns)]
    lines += [",".join(_number(x) for x in row) for row in zip(*columns.values(), strict=True)]
    return "\n".join(lines) + "\n"


def _number(x: float) -> str:
    return "0" if abs(x) < 1e-15 else f"{float(x):.10g}"


def json_text(record: Mapping[str, object]) -> str:
    """A record as JSON; a number that is not finite is a defect and raises ValueError."""
    return json.dumps(record, indent=2, ensure_ascii=False, allow_nan=False) + "\n"
