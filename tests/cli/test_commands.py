"""The commands as a user runs them: outputs, options, exit statuses, what is imported."""

from __future__ import annotations

import csv
import json
import re
from pathlib import Path

import numpy as np
import pytest

from cli.runner import ROOT, process, run

CASES = sorted((ROOT / "cases").glob("*.toml"))
COMMANDS = ["trace", "justify", "read", "new", "profiles", "steels", "patterns", "methods"]
CURVATURE = (
    "curvature_per_m,moment_kNm,axial_kN,strain_centroid,strain_top,strain_bottom,stiffness_kNm2,yielded_pct"
)
ROTATION = "moment_kNm,rotation_mrad,plastic_rotation_mrad,curvature_per_m,deflection_mm"


@pytest.fixture(autouse=True)
def in_a_folder_of_its_own(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)


def table(file: Path) -> dict[str, np.ndarray]:
    with file.open(newline="") as open_file:
        rows = list(csv.DictReader(open_file))
    return {k: np.array([float(r[k]) for r in rows]) for k in rows[0]}


def bracket_by_hand() -> tuple[float, float]:
    """My and Mp with 300 kN of the fender bracket from rectangles and one triangle [kNm]."""
    area = 70 * 200 - 30 * 90 + 30 * 20 + 50 * 20 + 500
    first = 14000 * 100 - 2700 * 105 + 600 * 190 + 1000 * 10 + 500 * (20 + 20 / 3)
    second = (70 * 200**3 - 30 * (150**3 - 60**3) + 30 * (200**3 - 180**3) + 50 * 20**3) / 3
    second += 50 * 20**3 / 36 + 500 * (20 + 20 / 3) ** 2
    centre = first / area
    my = 335e-6 * (second - area * centre**2) / (200 - centre)
    below = (area - 300e3 / 335) / 2  # pulled area, up to the axis in the slot's height, 40 mm wide there
    rise = (below - (70 * 60 + 1500)) / 40
    pulled = 70 * 60 * 30 + 1000 * 10 + 500 * (20 + 20 / 3) + 40 * rise * (60 + rise / 2)
    return my, 2 * 335e-6 * (below * centre - pulled)


# headline numbers of the shipped cases: My and Mp [kNm] by hand or closed form, class, what governs
HEADLINES = {
    "deck-beam": (355e-6 * 1499686.3, 355e-6 * 1701793.1, 1, "class rotation"),
    "starter-trace": (355e-6 * 1499686.3, 355e-6 * 1701793.1, 1, "class rotation"),
    "hand-check-bar": (20.0, 30.0, None, "own strain"),
    # web edge at 275 MPa; flanges 460 A (h - t), web 275 t h^2/4
    "hybrid-girder": (
        275e-6 * (260 * 700**3 - 246 * 656**3) / 12 / 328,
        460e-6 * 260 * 22 * 678 + 275e-6 * 14 * 656**2 / 4,
        1,
        "own strain",
    ),
    "plated-girder": (None, None, 3, "own strain"),
    "fender-bracket": (*bracket_by_hand(), None, "own strain"),
    "deck-three-supports": (355e-6 * 1499686.3, 355e-6 * 1701793.1, 1, "class rotation"),
    "deck-fins-left-out": (355e-6 * 1499686.3, 355e-6 * 1701793.1, 1, "class rotation"),
    "starter-justify": (355e-6 * 1499686.3, 355e-6 * 1701793.1, 1, "class rotation"),
}


@pytest.mark.parametrize("case", CASES, ids=lambda c: c.stem)
def test_shipped_cases(case: Path, capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "trace", case, "--no-figures")
    assert ran.status == 0, ran.err
    record = json.loads((Path("out") / case.stem / "results.json").read_text())
    my, mp, number, governs = HEADLINES[case.stem]
    if my is not None:
        assert record["moments"]["My_kNm"] == pytest.approx(my, rel=1e-6)
        assert record["moments"]["Mp_kNm"] == pytest.approx(mp, rel=1e-6)
    assert record["class"]["section"] == number
    assert record["governing"]["method"] == governs
    assert record["fibres"]["moment_error_pct"] <= 0.05


def test_files_and_record(capsys: pytest.CaptureFixture[str]) -> None:
    case = ROOT / "cases" / "deck-beam.toml"
    ran = run(capsys, "trace", case, "--out", "res")
    assert ran.status == 0
    there = {p.name for p in Path("res").iterdir()}
    pictures = {"section", "moment-curvature", "moment-rotation", "stress-stages"}
    assert there == {
        "results.json", "report.html", "moment-curvature.csv", "moment-rotation.csv",
        *(f"{p}.{e}" for p in pictures for e in ("svg", "png")),
    }  # fmt: skip
    record = json.loads(Path("res/results.json").read_text())
    assert set(record["files"]) == there
    assert (Path("res") / "moment-curvature.csv").read_text().splitlines()[0] == CURVATURE
    assert (Path("res") / "moment-rotation.csv").read_text().splitlines()[0] == ROTATION
    curve, turn = table(Path("res/moment-curvature.csv")), table(Path("res/moment-rotation.csv"))
    assert curve["curvature_per_m"][0] == curve["moment_kNm"][0] == 0.0
    assert np.all(np.diff(curve["curvature_per_m"]) > 0.0)
    # what the record says stands in the tables
    first = record["curvatures"]["first_yield_per_m"]
    assert np.min(np.abs(curve["curvature_per_m"] - first)) < 1e-9
    at = int(np.argmin(np.abs(curve["curvature_per_m"] - first)))
    assert curve["moment_kNm"][at] == pytest.approx(record["moments"]["first_yield_kNm"], rel=1e-8)
    limit = record["limits"][-1]
    assert turn["rotation_mrad"][-1] == pytest.approx(limit["rotation_mrad"], rel=1e-8)
    assert limit["rotation_mrad"] == pytest.approx(4.0 * record["rotation"]["theta_p_mrad"], rel=1e-8)
    elastic = limit["moment_kNm"] / record["moments"]["Mp_kNm"] * record["rotation"]["theta_p_mrad"]
    assert limit["plastic_rotation_mrad"] == pytest.approx(limit["rotation_mrad"] - elastic, rel=1e-8)
    assert turn["moment_kNm"][-1] == pytest.approx(limit["moment_kNm"], rel=1e-8)


KEYS = {
    "": "schema fibremr written case files warnings section steel fibres residual moments curvatures "
    "shape_factor bilinear rotation class limits governing",
    "section": "area_mm2 centroid_z_mm second_moment_mm4 elastic_modulus_top_mm3 elastic_modulus_bottom_mm3 "
    "plastic_modulus_mm3 plastic_neutral_axis_z_mm mass_kg_per_m",
    "steel": "yield_MPa ultimate_MPa modulus_MPa law source",
    "fibres": "count moment_error_pct",
    "residual": "pattern correction_force_pct correction_moment_pct out_of_balance_force_pct "
    "out_of_balance_moment_pct peak_compression_MPa peak_tension_MPa",
    "moments": "first_yield_kNm My_kNm Mp_kNm largest_kNm",
    "curvatures": "first_yield_per_m elastic_at_My_per_m elastic_at_Mp_per_m largest_per_m",
    "bilinear": "stiffness_kNm2 plateau_kNm largest_gap_pct moment_at_elastic_Mp_curvature_ratio "
    "equal_energy_plateau_kNm",
    "rotation": "setup span_m theta_p_mrad definition",
    "class": "code section parts",
    "governing": "method rotation_mrad rotation_capacity",
}
LIMIT = (
    "method applies why_not verified governs quantity strain_pct curvature_per_m moment_kNm rotation_mrad "
    "plastic_rotation_mrad rotation_capacity warning source"
)


def test_keys_of_the_record(capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "trace", ROOT / "cases" / "deck-beam.toml", "--json")
    record = json.loads(ran.out)
    assert ran.err == ""
    assert not Path("out").exists()
    for group, keys in KEYS.items():
        part = record[group] if group else record
        assert set(keys.split()) <= set(part), group
    assert set(record["class"]["parts"][0]) == {"part", "ratio", "limit", "class", "source"}
    assert set(record["limits"][0]) == set(LIMIT.split())
    assert record["case"]["sha256"]


def test_two_runs_differ_in_nothing_but_the_time(capsys: pytest.CaptureFixture[str]) -> None:
    case = ROOT / "cases" / "hybrid-girder.toml"
    for name in ("a", "b"):
        assert run(capsys, "trace", case, "--out", name).status == 0
    for file in Path("a").iterdir():
        one, two = file.read_bytes(), (Path("b") / file.name).read_bytes()
        if file.name == "report.html":  # the time stands at its end, and nowhere else
            one, two = (re.sub(rb"\d{4}-\d\d-\d\dT[\d:]+\+00:00", b"", x) for x in (one, two))
        if file.name == "results.json":
            one, two = (json.dumps({**json.loads(x), "written": ""}).encode() for x in (one, two))
        assert one == two, file.name


def test_json_with_out_writes_as_well(capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "trace", ROOT / "cases" / "hand-check-bar.toml", "--json", "--out", "x", "--no-figures")
    assert json.loads(ran.out)["files"] == [
        "moment-curvature.csv", "moment-rotation.csv", "report.html", "results.json",
    ]  # fmt: skip
    assert {p.name for p in Path("x").iterdir()} == set(json.loads(ran.out)["files"])


def test_summary_fits_one_screen_and_says_what_matters(capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "trace", ROOT / "cases" / "deck-beam.toml", "--no-figures")
    lines = ran.out.splitlines()
    assert len(lines) <= 32
    assert max(map(len, lines)) <= 100
    for word in ("604.1 kNm", "532.4", "1.135", "102.3 mrad", "R = 3.00", "theta_p", "An aid for qualified"):
        assert word in ran.out


def test_us_units(capsys: pytest.CaptureFixture[str]) -> None:
    Path("us.toml").write_text(
        'units = "US"\n[section]\nprofile = "W18x50"\n[steel]\nyield = "50 ksi"\nmodulus = "29000 ksi"\n'
        '[rotation]\nsetup = "three-point"\nspan = "20 ft"\n'
    )
    ran = run(capsys, "trace", "us.toml")
    assert ran.status == 0, ran.err
    for word in ("kip ft", "50.00 ksi", "1/in", "20 ft"):
        assert word in ran.out
    assert "kNm" not in ran.out
    record = json.loads(Path("out/us/results.json").read_text())
    assert record["moments"]["Mp_kNm"] / 1.355817948 == pytest.approx(421.0, rel=0.005)


def test_quiet_and_strict(capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "trace", ROOT / "cases" / "hand-check-bar.toml", "--quiet", "--strict", "--no-figures")
    assert (ran.status, ran.out, ran.err) == (0, "", "")


def test_standard_input(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    text = (ROOT / "cases" / "hand-check-bar.toml").read_bytes()
    ran = process("trace", "-", "--no-figures", "--quiet", cwd=tmp_path, stdin=text)
    assert ran.status == 0, ran.err
    assert Path("out/stdin/results.json").exists()


def test_set(capsys: pytest.CaptureFixture[str]) -> None:
    case = ROOT / "cases" / "deck-beam.toml"
    ran = run(capsys, "trace", case, "--json", "--set", "steel.grade=S275", "--set", "residual.scale=0.5")
    record = json.loads(ran.out)
    assert record["steel"]["yield_MPa"] == 275.0
    assert record["residual"]["scale"] == 0.5
    ran = run(capsys, "trace", case, "--set", "steel.grade=S999", "--set", "rotation.span=6,0 m")
    assert ran.status == 2
    assert "--set: steel.grade" in ran.err
    assert 'write "6.0 m"' in ran.err


@pytest.mark.parametrize("bad", ["steel", "=x", "steel.grade[0]=1", "a[x]=1", "section.flange.x.y[2]=1"])
def test_set_misused(bad: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert run(capsys, "trace", ROOT / "cases" / "deck-beam.toml", "--set", bad).status == 2


def test_new_runs_as_it_is(capsys: pytest.CaptureFixture[str]) -> None:
    assert run(capsys, "new", "my case.toml").status == 0
    assert run(capsys, "trace", "my case.toml", "--no-figures").status == 0
    assert (Path("out") / "my case" / "results.json").exists()
    before = Path("my case.toml").read_text()
    ran = run(capsys, "new", "my case.toml")
    assert ran.status == 2
    assert "left as it is" in ran.err
    assert Path("my case.toml").read_text() == before


def test_read(capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "read", ROOT / "cases" / "hybrid-girder.toml")
    assert ran.status == 0
    for words in (
        "steel.flange.grade",
        "S460N/NL, EN 1993-1-1:2005 Table 3.1",
        "default",
        "given",
        "1379 kNm",
        "top flange",
    ):
        assert words in ran.out
    record = json.loads(run(capsys, "read", ROOT / "cases" / "hybrid-girder.toml", "--json").out)
    assert record["implies"]["My_kNm"] == pytest.approx(1378.8, rel=1e-4)
    assert not Path("out").exists()


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (("profiles", "ipe450"), ("IPE 450", "1702", "33743", "EN 10365")),
        (("profiles",), ("IPE 80", "W12x14", "L 200x200x24", "CHS")),
        (("steels", "S355"), ("EN 1993-1-1:2005 Table 3.1", "EN 10025-2", "335")),
        (("steels", "ASTM"), ("A992", "A572 Gr 50")),
        (("patterns",), ("ECCS rolled", "points", "1984")),
        (("methods",), ("class rotation", "own strain", "own rotation capacity")),
    ],
)
def test_tables(
    arguments: tuple[str, ...], words: tuple[str, ...], capsys: pytest.CaptureFixture[str]
) -> None:
    ran = run(capsys, *arguments)
    assert ran.status == 0
    for word in words:
        assert word in ran.out
    rows = json.loads(run(capsys, *arguments, "--json").out)["rows"]
    assert rows


def test_tables_without_a_match(capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "profiles", "IPX 450")
    assert ran.status == 2
    assert 'did you mean "IPE 450"?' in ran.err


@pytest.mark.parametrize("command", COMMANDS)
def test_help(command: str, capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, command, "--help")
    assert ran.status == 0
    assert "Usage: fibremr" in ran.out
    assert (
        f"`fibremr {command}" in (ROOT / "README.md").read_text()
        or command in (ROOT / "README.md").read_text()
    )


def test_root(capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, "--help")
    for command in COMMANDS:
        assert command in ran.out
    assert run(capsys, "--version").out.startswith("fibremr, version ")


@pytest.mark.parametrize(
    "arguments", [("trce", "x"), ("trace",), ("trace", "x.toml", "--nope"), ("trace", "a", "b"), ("new",)]
)
def test_wrong_command_lines(arguments: tuple[str, ...], capsys: pytest.CaptureFixture[str]) -> None:
    ran = run(capsys, *arguments)
    assert ran.status == 2
    assert ran.err
    assert "Traceback" not in ran.err


def test_help_imports_nothing_heavy(tmp_path: Path) -> None:
    code = (
        "import sys\nfrom fibremr.cli import run\n"
        "for words in (['--help'], *([c, '--help'] for c in "
        f"{COMMANDS!r})):\n    run(words)\n"
        "heavy = {'numpy', 'scipy', 'matplotlib', 'jinja2'} & set(sys.modules)\nassert not heavy, heavy\n"
    )
    ran = process(cwd=tmp_path, code=code)
    assert ran.status == 0, ran.err


def test_trace_without_pictures_imports_no_scipy_and_no_matplotlib(tmp_path: Path) -> None:
    case = ROOT / "cases" / "deck-beam.toml"
    code = (
        "import sys\nfrom fibremr.cli import run\n"
        f"assert run(['trace', {str(case)!r}, '--no-figures', '--quiet']) == 0\n"
        "heavy = {'scipy', 'matplotlib'} & set(sys.modules)\nassert not heavy, heavy\n"
    )
    ran = process(cwd=tmp_path, code=code)
    assert ran.status == 0, ran.err


def test_import_is_cheap_and_lazy(tmp_path: Path) -> None:
    code = (
        "import sys, fibremr\nassert 'numpy' not in sys.modules\n"
        "for name in fibremr.__all__:\n    getattr(fibremr, name)\n"
    )
    assert process(cwd=tmp_path, code=code).status == 0


def test_a_reader_that_leaves_early_is_no_error(tmp_path: Path) -> None:
    import subprocess
    import sys

    command = f"{sys.executable} -m fibremr profiles | head -1"
    done = subprocess.run(
        ["bash", "-c", f"set -o pipefail; {command}"], cwd=tmp_path, capture_output=True,
        env={**__import__("os").environ, "PYTHONPATH": str(ROOT)},
    )  # fmt: skip
    assert done.returncode == 0, done.stderr
    assert done.stderr == b""


def test_interrupt(tmp_path: Path) -> None:
    code = (
        "import fibremr.tracing\nfrom fibremr.cli import run\n"
        "def stop(*a, **k):\n    raise KeyboardInterrupt\n"
        "fibremr.tracing.trace_curve = stop\n"
        f"raise SystemExit(run(['trace', {str(ROOT / 'cases' / 'deck-beam.toml')!r}]))\n"
    )
    ran = process(cwd=tmp_path, code=code)
    assert ran.status == 130
    assert "interrupted" in ran.err
    assert list(tmp_path.iterdir()) == []


def test_an_analysis_that_fails_says_how_far_it_came(tmp_path: Path) -> None:
    code = (
        "import fibremr.kernel\nfrom fibremr.cli import run\n"
        "fibremr.kernel.MOST = 1\n"  # the axial force of this case needs more
        f"raise SystemExit(run(['trace', {str(ROOT / 'cases' / 'plated-girder.toml')!r}]))\n"
    )
    ran = process(cwd=tmp_path, code=code)
    assert ran.status == 3
    assert ran.out == ""
    assert "axial equilibrium not reached" in ran.err
    assert "N left after 1 iterations" in ran.err
    assert "Traceback" not in ran.err
    assert list(tmp_path.iterdir()) == []
