"""`fibremr justify` as a user runs it: verdicts, record, report, and beams that cannot be."""

from __future__ import annotations

import json
import re
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

import pytest

from cli.runner import ROOT, process, run

DECK = ROOT / "cases" / "deck-three-supports.toml"
FINS = ROOT / "cases" / "deck-fins-left-out.toml"
BEAM_CSV = (
    "x_m,moment_kNm,elastic_moment_kNm,shear_kN,curvature_per_m,deflection_mm,Mp_hogging_kNm,Mp_sagging_kNm"
)


@pytest.fixture(autouse=True)
def in_a_folder_of_its_own(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)


def record(capsys: pytest.CaptureFixture[str], *arguments: str | Path) -> dict[str, Any]:
    ran = run(capsys, "justify", *arguments, "--json")
    assert ran.status == 0, ran.out
    assert "Infinity" not in ran.out
    assert "NaN" not in ran.out
    found: dict[str, Any] = json.loads(ran.out)
    return found


KEYS = {
    "beam": "ladder mechanism hinges code rotation not_checked redistribution_pct deflection "
    "yields_at_service reactions_kN arrangements sensitivity verdict",
    "ladder": "first_yield first_hinge rotation_limit simple_plastic_collapse largest_traced",
    "hinge": "at_m where sense moment_kNm Mp_kNm region_m theta_p_mrad required_mrad required_by available "
    "available_mrad use governing verdict",
    "check": "check at_m value allowed verdict source",
    "deflection": "largest_mm at_m span limit_mm verdict",
}


def test_record(capsys: pytest.CaptureFixture[str]) -> None:
    found = record(capsys, DECK)
    beam = found["beam"]
    assert set(KEYS["beam"].split()) <= set(beam)
    assert set(beam["ladder"]) == set(KEYS["ladder"].split())
    assert set(KEYS["hinge"].split()) <= set(beam["hinges"][0])
    assert set(beam["hinges"][0]["required_by"]) == {"case_law_mrad", "elastic_plastic_mrad"}
    assert set(beam["code"]["checks"][0]) == set(KEYS["check"].split())
    assert set(beam["deflection"]) == set(KEYS["deflection"].split())
    assert beam["verdict"] == beam["code"]["verdict"] == beam["rotation"]["verdict"] == "justified"
    assert beam["hinges"][0]["moment_kNm"] == pytest.approx(-624.8, abs=0.1)  # hogging is negative
    assert sum(beam["reactions_kN"]) == pytest.approx(94.0 * 16.0, rel=1e-9)
    assert beam["redistribution_pct"] == pytest.approx(100.0 * (1.0 - 624.84 / 752.0), abs=0.01)
    assert beam["not_checked"]


def test_files(capsys: pytest.CaptureFixture[str]) -> None:
    assert run(capsys, "justify", DECK, "--out", "o").status == 0
    there = {p.name for p in Path("o").iterdir()}
    assert {"results.json", "report.html", "beam.csv", "beam.svg", "ladder.png", "hinges.svg"} <= there
    assert set(json.loads(Path("o/results.json").read_text())["files"]) == there
    lines = Path("o/beam.csv").read_text().splitlines()
    assert lines[0] == BEAM_CSV
    first, last = (
        dict(zip(BEAM_CSV.split(","), map(float, lines[i].split(",")), strict=True)) for i in (1, -1)
    )
    assert (first["x_m"], last["x_m"]) == (0.0, 16.0)
    assert first["shear_kN"] == pytest.approx(297.895, abs=0.01)
    assert last["shear_kN"] == pytest.approx(-297.895, abs=0.01)
    assert first["deflection_mm"] == last["deflection_mm"] == 0.0


def test_a_beam_that_is_not_justified(capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "justify", FINS, "--no-figures")
    assert ran.status == 0
    assert "NOT JUSTIFIED: restraint bottom" in ran.out
    assert "4.00 m" in ran.out
    assert max(map(len, ran.out.splitlines())) <= 100
    assert run(capsys, "justify", FINS, "--no-figures", "--strict", "--quiet").status == 4
    assert run(capsys, "justify", DECK, "--no-figures", "--strict", "--quiet").status == 0


def test_a_load_above_collapse_is_a_result(capsys: pytest.CaptureFixture[str]) -> None:
    for law in ("elastic-plastic", "quad-linear"):
        found = record(
            capsys,
            DECK,
            "--set",
            f"steel.law={law}",
            "--set",
            'beam.loads=[{span="all", uniform="130 kN/m"}]',
        )
        beam = found["beam"]
        assert beam["verdict"] == "not justified"
        assert beam["ladder"]["simple_plastic_collapse"] == pytest.approx(1.1706 * 94 / 130, abs=1e-3)
        assert "collapse" in beam["rotation"]["why"]
        assert all(h["required_by"]["elastic_plastic_mrad"] is None for h in beam["hinges"])


LIGHTER = 'beam.loads=[{span="all", uniform="60 kN/m"}]'


@pytest.mark.parametrize(
    ("settings", "verdict", "words"),
    [
        (['beam.loads=[{span="all", uniform="40 kN/m"}]'], "justified", "nothing needs to turn"),
        (["limits.strain=1 %"], "not justified", "own strain"),
        (["section.profile=HEA 320", LIGHTER], None, ""),
        (["section.profile=RHS 400x200x12.5"], "outside the methods", ""),
        (["bending.compression=100 kN"], "outside the methods", "axial force"),
        (["beam.stiffeners=false"], "not justified", ""),
        (["section.profile=UPE 400", LIGHTER], "outside the methods", ""),
    ],
)  # fmt: skip
def test_verdicts(
    settings: list[str], verdict: str | None, words: str, capsys: pytest.CaptureFixture[str]
) -> None:
    beam = record(capsys, DECK, *(x for s in settings for x in ("--set", s)))["beam"]
    assert beam["verdict"] in ("justified", "not justified", "outside the methods")
    if verdict is not None:
        assert beam["verdict"] == verdict
    assert words in beam["rotation"]["why"]


def test_class_3_without_a_hinge_allows_the_elastic_moment_only(capsys: pytest.CaptureFixture[str]) -> None:
    """HEA 300 in S355 is of class 3: My 447.2 kNm against w L2/8."""
    for load, verdict in ((50.0, "justified"), (57.0, "not justified")):
        beam = record(
            capsys, DECK, "--set", "section.profile=HEA 300",
            "--set", f'beam.loads=[{{span="all", uniform="{load} kN/m"}}]',
        )["beam"]  # fmt: skip
        assert beam["hinges"] == []
        assert beam["rotation"]["verdict"] == verdict


class Page(HTMLParser):
    """Tags, ids, links and text of a page."""

    def __init__(self) -> None:
        super().__init__()
        self.tags: list[str] = []
        self.ids: list[str] = []
        self.outside: list[str] = []
        self.text = ""

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        for name, value in attrs:
            if name == "id" and value:
                self.ids.append(value)
            if name in ("src", "href", "xlink:href") and value and not value.startswith("#"):
                self.outside.append(value)

    def handle_data(self, data: str) -> None:
        self.text += data


@pytest.mark.parametrize("command", ["trace", "justify"])
def test_report(command: str, capsys: pytest.CaptureFixture[str]) -> None:
    title = '<b>Harrow & Quay</b> "B12"'
    Path("case.toml").write_text(DECK.read_text().replace("title = ", "# ") + "")
    ran = run(capsys, command, "case.toml", "--set", f"title={title}", "--out", "o")
    assert ran.status == 0, ran.err
    text = Path("o/report.html").read_text()
    page = Page()
    page.feed(text)
    assert page.outside == []
    assert "<b>Harrow" not in text
    assert len(page.ids) == len(set(page.ids))
    assert page.tags.count("svg") == (3 if command == "justify" else 0) + 3
    assert not re.search(r'(src|href)="https?://|@import|url\(http', text)
    for word in (
        title,
        "S355, EN 1993-1-1:2005 Table 3.1",
        "604.1 kNm",
        "from memory",
        "An aid for qualified engineers",
    ):
        assert word in page.text
    if command == "justify":
        for word in ("Not checked", "11.13", "39.11", "6.3.5.3", "0.835", "justified"):
            assert word in page.text
    for target in re.findall(r'(?:href="|url\()#([^")]+)', text):
        assert target in page.ids


def test_report_without_pictures(capsys: pytest.CaptureFixture[str]) -> None:
    assert run(capsys, "justify", DECK, "--out", "o", "--no-figures").status == 0
    text = Path("o/report.html").read_text()
    assert "<svg" not in text
    assert "39.11" in text


def test_justify_without_figures_imports_no_matplotlib(tmp_path: Path) -> None:
    code = (
        "import sys\nfrom fibremr.cli import run\n"
        f"assert run(['justify', {str(DECK)!r}, '--no-figures', '--quiet']) == 0\n"
        "assert 'matplotlib' not in sys.modules\n"
    )
    assert process(cwd=tmp_path, code=code).status == 0


@pytest.mark.parametrize(
    ("settings", "key", "code"),
    [
        (["beam.spans=[]"], "beam.spans", "type"),
        (['beam.spans=["8 m", "0 m"]'], "beam.spans[1]", "range"),
        (['beam.spans=["8 m", "6,0 m"]'], "beam.spans[1]", "decimal-comma"),
        (['beam.spans=["8 m", 6]'], "beam.spans[1]", "unit-missing"),
        (['beam.ends=["pinned"]'], "beam.ends", "type"),
        (['beam.ends=["pinned", "free"]'], "beam.ends[1]", "not-available"),
        (['beam.ends=["pined", "fixed"]'], "beam.ends[0]", "unknown-name"),
        (["limits.resistance_factor=0.9"], "limits.resistance_factor", "not-available"),
        (['beam.deflection_limit="span/360"'], "beam.deflection_limit", "value"),
        (["beam.loads=[]"], "beam.loads", "type"),
        (['beam.loads=[{span=3, uniform="5 kN/m"}]'], "beam.loads[0].span", "range"),
        (['beam.loads=[{span=1, uniform="5 kN"}]'], "beam.loads[0].uniform", "unit-kind"),
        (['beam.loads=[{span=1, point="5 kN", at="9 m"}]'], "beam.loads[0].at", "range"),
        (['beam.loads=[{span=1, point="5 kN"}]'], "beam.loads[0].at", "missing"),
        (['beam.loads=[{span=1}]'], "beam.loads[0]", "value"),
        (['beam.loads=[{span=1, uniform="0 kN/m"}]'], "beam.loads", "value"),
        (['beam.loads=[{uniform="5 kN/m"}]'], "beam.loads[0].span", "missing"),
        (['beam.loads=[{span=1, uniform="5 kN/m", kind="x"}]'], "beam.loads[0].kind", "not-available"),
        (["beam.restraints=2 m"], "beam.restraints", "type"),
        (['beam.restraints={middle="2 m"}'], "beam.restraints.middle", "unknown-key"),
        (['beam.restraints={top="often"}'], "beam.restraints.top", "not-a-number"),
        (["beam.stiffeners=1"], "beam.stiffeners", "type"),
        (["beam.service_factor=0"], "beam.service_factor", "range"),
        (["beam.deflection_limit=L/0"], "beam.deflection_limit", "value"),
        (["beam.self_weight=true"], "beam.self_weight", "not-available"),
        (["beam.span=5"], "beam.span", "unknown-key"),
    ],
)  # fmt: skip
def test_beams_that_cannot_be(
    settings: list[str], key: str, code: str, capsys: pytest.CaptureFixture[str]
) -> None:
    ran = run(capsys, "justify", DECK, *(x for s in settings for x in ("--set", s)), "--json")
    assert ran.status == 2
    found = [f for f in json.loads(ran.out)["errors"] if f["key"] == key]
    assert found, ran.out
    assert found[0]["code"] == code
    assert list(Path().iterdir()) == []


def test_faults_of_a_beam_have_their_lines(capsys: pytest.CaptureFixture[str]) -> None:
    text = DECK.read_text().replace('"94 kN/m"', '"94 kN"').replace('"8 m", "8 m"', '"8 m", "0 m"')
    Path("case.toml").write_text(text)
    ran = run(capsys, "justify", "case.toml", "--json")
    lines = text.splitlines()
    wanted = {"beam.spans[1]": '"0 m"', "beam.loads[0].uniform": '"94 kN"'}
    found = {f["key"]: f["line"] for f in json.loads(ran.out)["errors"]}
    assert found == {k: 1 + next(i for i, line in enumerate(lines) if v in line) for k, v in wanted.items()}


def test_a_case_without_a_beam(capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "justify", ROOT / "cases" / "deck-beam.toml")
    assert ran.status == 2
    assert "beam" in ran.err
    assert list(Path().iterdir()) == []


def test_new_for_justify_runs(capsys: pytest.CaptureFixture[str]) -> None:
    assert run(capsys, "new", "b.toml", "--for", "justify").status == 0
    assert run(capsys, "justify", "b.toml", "--no-figures", "--strict", "--quiet").status == 0


def test_units_of_the_trade_overseas(capsys: pytest.CaptureFixture[str]) -> None:
    """With units = "US" no metric unit is left but in the user's own words and in the sources."""
    for command, case in (("justify", DECK), ("trace", ROOT / "cases" / "plated-girder.toml")):
        out = run(capsys, command, case, "--set", "units=US", "--no-figures").out
        ours = re.sub(r"sections and plates, up to 40 mm|flange every \S+ m", "", " ".join(out.split()))
        assert re.findall(r"\S+ (?:m|mm|MPa|kN|kNm)\b", ours) == []
        assert re.search(r"[0-9] kip\b", ours)
