"""The map of DEVELOPERS.md is a contract: rooms import only what it allows, and modules stay small."""

from __future__ import annotations

import ast
import re
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
PACKAGE = ROOT / "fibremr"
TOP = {"README.md", "DEVELOPERS.md", "pyproject.toml", "fibremr", "profiles", "cases", "tests", "figures"}


def rooms() -> dict[str, set[str]]:
    """Room -> rooms it may use, from the table in DEVELOPERS.md."""
    text = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    rows = re.findall(r"^\| `(\w+)` \|[^|]*\|([^|]*)\|$", text, flags=re.MULTILINE)
    return {name: {u.strip() for u in uses.split(",") if u.strip()} for name, uses in rows}


MAP = rooms()
MODULES = sorted(PACKAGE.rglob("*.py"))


def room_of(module: Path) -> str:
    return module.relative_to(PACKAGE).parts[0].removesuffix(".py")


def imported(module: Path) -> set[str]:
    """Rooms of fibremr that a module imports anywhere, type checking included."""
    found = set()
    for node in ast.walk(ast.parse(module.read_text(encoding="utf-8"))):
        if isinstance(node, ast.ImportFrom) and node.module and node.module.split(".")[0] == "fibremr":
            steps = node.module.split(".")[1:]
            found |= {steps[0]} if steps else {alias.name for alias in node.names}
        elif isinstance(node, ast.Import):
            for alias in node.names:
                steps = alias.name.split(".")
                if steps[0] == "fibremr" and len(steps) > 1:
                    found.add(steps[1])
    return found


def test_the_map_names_every_room_and_no_other() -> None:
    there = {room_of(m) for m in MODULES} - {"__init__", "__main__"}
    assert there == set(MAP)


@pytest.mark.parametrize("module", MODULES, ids=lambda m: str(m.relative_to(PACKAGE)))
def test_imports_follow_the_map(module: Path) -> None:
    room = room_of(module)
    if room in ("__init__", "__main__"):
        return
    used = imported(module) - {room, "__version__"}
    assert used <= MAP[room], f"{room} imports {sorted(used - MAP[room])}"


def test_the_map_has_no_idle_permission() -> None:
    for room, allowed in MAP.items():
        used = set().union(*(imported(m) for m in MODULES if room_of(m) == room))
        assert allowed <= used, f"{room} does not use {sorted(allowed - used)}"


@pytest.mark.parametrize("module", MODULES, ids=lambda m: str(m.relative_to(PACKAGE)))
def test_modules_stay_small(module: Path) -> None:
    assert len(module.read_text(encoding="utf-8").splitlines()) <= 620


def test_top_level() -> None:
    there = {p.name for p in ROOT.iterdir() if not p.name.startswith(".")}
    made = {"out", "dist", "build"}  # ignored by git
    assert there - made - {p for p in there if p.endswith(".egg-info")} == TOP


def test_nothing_imports_pyplot() -> None:
    for module in MODULES:
        assert "pyplot" not in re.sub(r'"""[\s\S]*?"""', "", module.read_text(encoding="utf-8"))
