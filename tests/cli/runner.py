"""Runs the command line in this process, and in a process of its own where that matters."""

from __future__ import annotations

import os
import subprocess
import sys
from dataclasses import dataclass
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]


@dataclass(frozen=True)
class Ran:
    """What a run left behind."""

    status: int
    out: str
    err: str


def run(capsys: pytest.CaptureFixture[str], *arguments: str | Path) -> Ran:
    """Run in this process."""
    from fibremr.cli import run as command

    status = command([str(a) for a in arguments])
    captured = capsys.readouterr()
    return Ran(status, captured.out, captured.err)


def process(*arguments: str, cwd: Path, code: str | None = None, stdin: bytes = b"") -> Ran:
    """Run in a process of its own."""
    command = [sys.executable, "-c", code] if code else [sys.executable, "-m", "fibremr"]
    environment = {**os.environ, "PYTHONPATH": str(ROOT)}
    done = subprocess.run([*command, *arguments], cwd=cwd, input=stdin, capture_output=True, env=environment)
    return Ran(done.returncode, done.stdout.decode(), done.stderr.decode())
