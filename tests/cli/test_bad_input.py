"""Wrong cases and wrong folders: every fault at once, each with its place; nothing written, no traceback."""

from __future__ import annotations

import json
import os
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from cli.runner import process, run

GOOD = """\
title = "a"
[section]
shape = "I"
height = "300 mm"
web = "8 mm"
flange = { width = "150 mm", thickness = "12 mm" }
root_radius = "10 mm"
[steel]
grade = "S355"
law = "quad-linear"
[residual]
pattern = "ECCS rolled"
scale = 1.0
[bending]
about = "major"
sense = "sagging"
compression = "100 kN"
[trace]
to = 12
[rotation]
setup = "three-point"
span = "5 m"
[limits]
strain = "2 %"
rotation_capacity = 3.0
rotation_source = "tests at the quay"
methods = ["class rotation"]
"""


@pytest.fixture(autouse=True)
def in_a_folder_of_its_own(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)


def faults(capsys: pytest.CaptureFixture[str], text: str | bytes) -> list[dict[str, object]]:
    """The errors of a case, after making sure of everything that holds for all of them."""
    data = text.encode() if isinstance(text, str) else text
    Path("case.toml").write_bytes(data)
    ran = run(capsys, "trace", "case.toml", "--json")
    assert ran.status == 2, ran.out
    assert ran.err == ""
    plain = run(capsys, "trace", "case.toml")
    assert plain.status == 2
    assert plain.out == ""
    assert "Traceback" not in plain.err
    found: list[dict[str, object]] = json.loads(ran.out)["errors"]
    assert len(plain.err.splitlines()) == len(found)
    for fault in found:
        assert set(fault) == {"code", "message", "file", "line", "key", "found", "allowed", "suggestion"}
    assert [p.name for p in Path().iterdir()] == ["case.toml"]
    return found


def changed(old: str, new: str) -> tuple[str, int]:
    """The good case with one line replaced, and the number of that line."""
    lines = GOOD.splitlines()
    at = next(i for i, line in enumerate(lines) if line.startswith(old))
    lines[at] = new
    return "\n".join(lines) + "\n", at + 1


def test_the_good_case_is_good(capsys: pytest.CaptureFixture[str]) -> None:
    Path("case.toml").write_text(GOOD)
    assert run(capsys, "trace", "case.toml", "--no-figures").status == 0


def flange(thickness: str, more: str) -> str:
    return f'flange = {{ width = "150 mm", thickness = "{thickness}", {more} }}'


@pytest.mark.parametrize(
    ("old", "new", "key", "code"),
    [
        ("title", "title = 5", "title", "type"),
        ("title", 'units = "imperial"', "units", "unknown-name"),
        ("title", 'tittle = "a"', "tittle", "unknown-key"),
        ("title", "beem = {}", "beem", "unknown-key"),
        ("shape", 'shape = "H"', "section.shape", "unknown-name"),
        ("shape", 'shape = "round"', "section.diameter", "missing"),
        ("shape", 'profile = "IPE 450"', "section.height", "unknown-key"),
        ("height", 'height = "0 mm"', "section.height", "range"),
        ("height", 'height = "-3 m"', "section.height", "range"),
        ("height", 'height = "nan mm"', "section.height", "not-finite"),
        ("height", 'height = "inf mm"', "section.height", "not-finite"),
        ("height", "height = 300", "section.height", "unit-missing"),
        ("height", "height = nan", "section.height", "not-finite"),
        ("height", "height = true", "section.height", "type"),
        ("height", 'height = ["300 mm"]', "section.height", "type"),
        ("height", 'height = "300,5 mm"', "section.height", "decimal-comma"),
        ("height", 'height = "300 kN"', "section.height", "unit-kind"),
        ("height", 'height = "300 MM"', "section.height", "unit-unknown"),
        ("height", 'height = "20 mm"', "section.flange.thickness", "value"),
        ("web", 'web = "160 mm"', "section.web", "value"),
        ("flange", "flange = 12", "section.flange", "type"),
        ("flange", 'flange = { width = "150 mm" }', "section.flange.thickness", "missing"),
        ("flange", flange("12 mm", "depth = 3"), "section.flange.depth", "unknown-key"),
        ("flange", flange("12 mm", 'steel = "top"'), "section.flange.steel", "unknown-name"),
        ("flange", flange("151 mm", 'steel = "x"'), "section.flange.thickness", "value"),
        ("root_radius", 'root_radius = "90 mm"', "section.root_radius", "value"),
        ("root_radius", 'rooot_radius = "10 mm"', "section.rooot_radius", "unknown-key"),
        ("grade", 'grade = "S356"', "steel.grade", "unknown-name"),
        ("grade", 'grade = "EN AW-6082 T6"', "steel.law", "value"),
        ("grade", 'yield = "355 MPa"', "steel.ultimate", "missing"),
        ("grade", 'yield = "10 MPa"', "steel.yield", "range"),
        ("grade", 'grade = "S355"\nultimate = "300 MPa"', "steel.ultimate", "range"),
        ("grade", 'grade = "S355"\nyield = "500 MPa"', "steel.yield", "range"),
        ("grade", 'grade = "S355"\nstandard = "ASTM"', "steel.standard", "unknown-name"),
        ("law", 'law = "quadrilateral"', "steel.law", "unknown-name"),
        ("law", 'law = "coupon"', "steel.law", "not-available"),
        ("law", 'law = "bilinear"\nhardening = "E/0"', "steel.hardening", "value"),
        ("law", 'law = "bilinear"\nhardening = "300 GPa"', "steel.hardening", "range"),
        ("pattern", 'pattern = "ECSS"', "residual.pattern", "unknown-name"),
        ("pattern", 'pattern = "Young"', "residual.pattern", "not-available"),
        ("pattern", 'pattern = "points"', "residual.point", "missing"),
        ("scale", "scale = -0.5", "residual.scale", "range"),
        ("scale", "scale = inf", "residual.scale", "not-finite"),
        ("scale", 'scale = "1"', "residual.scale", "type"),
        ("scale", "scale = 5.0", "residual.scale", "value"),
        ("scale", 'compare = ["none"]', "residual.compare", "not-available"),
        ("about", 'about = "x"', "bending.about", "unknown-name"),
        ("about", 'about = "30 deg"', "bending.about", "not-available"),
        ("sense", 'sense = "saging"', "bending.sense", "unknown-name"),
        ("compression", 'compression = "9 MN"', "bending.compression", "range"),
        ("compression", 'tension = "9 MN"', "bending.tension", "range"),
        ("compression", 'compression = "-5 kN"', "bending.compression", "range"),
        ("compression", 'compression = "5 kN"\ntension = "5 kN"', "bending.tension", "value"),
        ("compression", 'shear = "5 kN"', "bending.shear", "not-available"),
        ("compression", 'temperature = "500 degC"', "bending.temperature", "not-available"),
        ("to", "to = 0", "trace.to", "range"),
        ("to", "to = -4", "trace.to", "range"),
        ("to", "to = 1e9", "trace.to", "range"),
        ("to", "path = [1, -1]", "trace.path", "not-available"),
        ("setup", 'setup = "five-point"', "rotation.setup", "unknown-name"),
        ("setup", 'setup = "four-point"', "rotation.shear_span", "missing"),
        ("setup", 'setup = "four-point"\nshear_span = "2.6 m"', "rotation.shear_span", "range"),
        ("setup", 'setup = "cantilever"\nshear_span = "1 m"', "rotation.shear_span", "value"),
        ("span", 'span = "5"', "rotation.span", "unit-missing"),
        ("strain", "strain = 0.02", "limits.strain", "unit-missing"),
        ("strain", 'strain = "80 %"', "limits.strain", "range"),
        ("rotation_capacity", "rotation_capacity = 0", "limits.rotation_capacity", "range"),
        ("rotation_source", 'code = "EN 1993-1-1:2005"', "limits.rotation_source", "missing"),
        ("rotation_source", 'rotation_source = ""', "limits.rotation_source", "type"),
        ("methods", 'methods = ["clas rotation"]', "limits.methods[0]", "unknown-name"),
        ("methods", "methods = []", "limits.methods", "type"),
        ("methods", 'code = "AISC 360-22"', "limits.code", "not-available"),
    ],
)  # fmt: skip
def test_one_fault(old: str, new: str, key: str, code: str, capsys: pytest.CaptureFixture[str]) -> None:
    text, line = changed(old, new)
    found = faults(capsys, text)
    mine = [f for f in found if f["key"] == key]
    assert mine, found
    assert mine[0]["code"] == code
    assert mine[0]["file"] == "case.toml"
    assert mine[0]["line"] is not None
    within = range(line, line + 1 + new.count("\n"))
    if key.split(".")[1:2] == [new.split(" ")[0]]:  # the fault is one of the line that was changed
        assert mine[0]["line"] in within


def test_many_faults_at_once(capsys: pytest.CaptureFixture[str]) -> None:
    text = GOOD
    for old, new in (
        ('height = "300 mm"', 'height = "-300 mm"'),
        ('web = "8 mm"', 'web = "8,1 mm"'),
        ('grade = "S355"', 'grade = "S356"'),
        ('law = "quad-linear"', 'law = "qaud"'),
        ("scale = 1.0", "scale = nan"),
        ('sense = "sagging"', 'sense = "up"'),
        ('compression = "100 kN"', 'compression = "100 kn"'),
        ("to = 12", "too = 12"),
        ('span = "5 m"', "span = 5"),
        ('strain = "2 %"', 'strain = "2"'),
        ('methods = ["class rotation"]', 'methods = ["klass"]'),
    ):
        assert old in text
        text = text.replace(old, new)
    found = faults(capsys, text)
    assert {f["line"] for f in found} == {4, 5, 9, 10, 13, 16, 17, 19, 22, 24, 27}
    assert [f["line"] for f in found] == sorted(f["line"] for f in found)  # type: ignore[type-var]


def test_a_wrong_shape_does_not_hide_the_faults_beside_it(capsys: pytest.CaptureFixture[str]) -> None:
    text = GOOD.replace('shape = "I"', 'shape = "J"').replace('web = "8 mm"', 'web = "8,1 mm"')
    assert {f["key"] for f in faults(capsys, text)} == {"section.shape", "section.web"}


@pytest.mark.parametrize(
    ("text", "line", "words"),
    [
        ("[section\n", 1, "not valid TOML"),
        ('title = "a"\n[section]\nheight = 300 mm\n', 3, 'write height = "300 mm"'),
        ('title = "a"\nx = 5,5\n', 2, "decimal comma"),
        ('a = 1\na = 2\n', 2, "not valid TOML"),
        ("", None, "empty"),
        ("   \n\n", None, "empty"),
        (b"\xff\xfe\x00", 1, "UTF-8"),
        (b"title = 'a'\n# \xe9\n", 2, "UTF-8"),
    ],
)  # fmt: skip
def test_files_that_are_no_case(
    text: str | bytes, line: int | None, words: str, capsys: pytest.CaptureFixture[str]
) -> None:
    found = faults(capsys, text)
    assert len(found) == 1
    assert found[0]["line"] == line
    assert words in str(found[0]["message"]) + str(found[0]["suggestion"])


def test_bom_and_windows_line_ends_are_no_fault(capsys: pytest.CaptureFixture[str]) -> None:
    Path("case.toml").write_bytes(b"\xef\xbb\xbf" + GOOD.replace("\n", "\r\n").encode())
    assert run(capsys, "trace", "case.toml", "--no-figures").status == 0


def test_paths_that_are_no_file(capsys: pytest.CaptureFixture[str]) -> None:
    Path("folder.toml").mkdir()
    for name, words in (
        ("folder.toml", "a directory"),
        ("none.toml", "no such file"),
        ("a\0b", "cannot be read"),
    ):
        ran = run(capsys, "trace", name)
        assert ran.status == 2
        assert words in ran.err
    assert [p.name for p in Path().iterdir()] == ["folder.toml"]


@pytest.mark.parametrize(
    "name", ["with blanks.toml", "ümläut.toml", "-dash.toml", "quote's.toml", "no-ending"]
)
def test_odd_file_names(name: str, capsys: pytest.CaptureFixture[str]) -> None:
    Path(name).write_text(GOOD)
    assert run(capsys, "trace", "--no-figures", "--", name).status == 0
    assert (Path("out") / Path(name).stem / "results.json").exists()


@given(st.sampled_from(GOOD.splitlines()), st.text('0123456789.,-+eEmkNPa %"[]{}=_x\n', max_size=12))
def test_random_damage_never_shows_a_traceback(line: str, damage: str) -> None:
    """A line of the good case spoilt in any way: a curve, or faults; never an exception of another kind."""
    from fibremr.case.reader import parse_case
    from fibremr.errors import CaseError

    key, equals, value = line.partition("=")
    for spoilt in (f"{key}={damage}", f"{key}{equals}{value}{damage}", damage):
        text = GOOD.replace(line, spoilt, 1)
        try:
            parse_case(text.encode(), name="case.toml")
        except CaseError as error:
            found = error.faults()
        else:
            continue
        assert found


# --- output folders ---------------------------------------------------------------------------------


def traced(capsys: pytest.CaptureFixture[str], *more: str) -> int:
    Path("case.toml").write_text(GOOD)
    return run(capsys, "trace", "case.toml", "--quiet", *more).status


def names(folder: str) -> set[str]:
    return {p.name for p in Path(folder).iterdir()}


def test_a_later_run_replaces_just_its_own_files(capsys: pytest.CaptureFixture[str]) -> None:
    assert traced(capsys, "--out", "o") == 0
    assert "section.svg" in names("o")
    assert traced(capsys, "--out", "o", "--no-figures") == 0
    assert names("o") == {"results.json", "report.html", "moment-curvature.csv", "moment-rotation.csv"}


@pytest.mark.parametrize("foreign", ["note.txt", "moment-curvature.xlsx", "sub"])
def test_a_file_of_the_users_own_is_never_touched(foreign: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert traced(capsys, "--out", "o", "--no-figures") == 0
    before = {p.name: p.read_bytes() for p in Path("o").iterdir()}
    if foreign == "sub":
        (Path("o") / foreign).mkdir()
    else:
        (Path("o") / foreign).write_text("mine")
    Path("case.toml").write_text(GOOD.replace("S355", "S275"))
    ran = run(capsys, "trace", "case.toml", "--out", "o", "--no-figures")
    assert ran.status == 2
    assert foreign in ran.err
    assert {n: (Path("o") / n).read_bytes() for n in before} == before
    assert [p.name for p in Path().iterdir() if p.name.startswith(".")] == []


def test_a_folder_without_a_list_is_refused(capsys: pytest.CaptureFixture[str]) -> None:
    Path("o").mkdir()
    (Path("o") / "results.json").write_text('{"files": ["results.json"]}')
    assert traced(capsys, "--out", "o") == 2
    assert (Path("o") / "results.json").read_text() == '{"files": ["results.json"]}'


def test_an_empty_folder_and_a_new_deep_one_are_taken(capsys: pytest.CaptureFixture[str]) -> None:
    Path("empty").mkdir()
    assert traced(capsys, "--out", "empty", "--no-figures") == 0
    assert traced(capsys, "--out", "a/b/c", "--no-figures") == 0
    assert "results.json" in names("a/b/c")


def test_the_working_folder_itself(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    Path("here").mkdir()
    Path("case.toml").write_text(GOOD)
    monkeypatch.chdir("here")
    assert run(capsys, "trace", "../case.toml", "--out", ".", "--no-figures", "--quiet").status == 0
    assert names(".") == {"results.json", "report.html", "moment-curvature.csv", "moment-rotation.csv"}


def test_a_file_where_a_folder_is_wanted(capsys: pytest.CaptureFixture[str]) -> None:
    Path("o").write_text("mine")
    assert traced(capsys, "--out", "o") == 2
    assert traced(capsys, "--out", "o/deeper") == 2
    assert Path("o").read_text() == "mine"


def test_a_read_only_folder(capsys: pytest.CaptureFixture[str]) -> None:
    Path("o").mkdir()
    Path("o").chmod(0o555)
    try:
        assert traced(capsys, "--out", "o") == 2
        assert traced(capsys, "--out", "o/deeper") == 2
        assert names("o") == set()
    finally:
        Path("o").chmod(0o755)


def test_a_dangling_link(capsys: pytest.CaptureFixture[str]) -> None:
    Path("o").symlink_to("nowhere")
    assert traced(capsys, "--out", "o") == 2
    assert os.readlink("o") == "nowhere"  # noqa: PTH115


def test_a_failed_run_leaves_the_old_results(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    assert traced(capsys, "--out", "o", "--no-figures") == 0
    before = {p.name: p.read_bytes() for p in Path("o").iterdir()}
    code = (
        "import fibremr.output\nfrom fibremr.cli import run\n"
        "def stop(*a):\n    raise KeyboardInterrupt\n"
        "fibremr.output.csv_text = stop\n"
        "raise SystemExit(run(['trace', 'case.toml', '--out', 'o', '--no-figures']))\n"
    )
    assert process(cwd=tmp_path, code=code).status == 130
    assert {p.name: p.read_bytes() for p in Path("o").iterdir()} == before
    assert sorted(p.name for p in Path().iterdir()) == ["case.toml", "o"]


# --- found by breaking it ---------------------------------------------------------------------------

HEAD = '[section]\nprofile = "IPE 450"\n[steel]\ngrade = "S355"\n'


@pytest.mark.parametrize(
    ("text", "keys"),
    [
        # faults of one table do not hide those of another, nor of the same one
        ('[section]\nprofile = "UPE 2000"\n[steel]\ngrade = "S999"\n', {"section.profile", "steel.grade"}),
        (HEAD.replace("S355", "S999") + 'yield = "-3 MPa"\n', {"steel.yield", "steel.grade"}),
        (
            '[section]\nshape = "I"\nheight = "300"\nweb = "8 mm"\n'
            'flange = { width = "90 mm", thickness = "9 mm", steel = "no" }\n[steel]\ngrade = "S355"\n',
            {"section.height", "section.flange.steel"},
        ),
        (
            '[section]\nprofile = "IPE 450"\n[steel]\nyield = "355 MPa"\nultimate = "300 MPa"\n'
            'law = "bilinear"\nhardening = "250 GPa"\n',
            {"steel.ultimate", "steel.hardening"},
        ),
        (
            '[section]\nprofile = "UPE 200"\n[steel]\ngrade = "S999"\n[residual]\npattern = "ECCS rolled"\n',
            {"steel.grade", "residual.pattern"},
        ),
        (
            '[section]\nprofile = "UPE 200"\n[steel]\ngrade = "S355"\n[residual]\npattern = "ECCS rolled"\n'
            '[bending]\ncompression = "9 MN"\nsense = "x"\n',
            {"bending.sense", "bending.compression", "residual.pattern"},
        ),
        (
            HEAD + '[residual]\npattern = "points"\npoint = [ { part = "a", at = 0, stress = "1 MPa" },\n'
            '  { part = "b", at = 0, stress = "1 MPa" } ]\n',
            {"residual.point[0].part", "residual.point[1].part"},
        ),
        (HEAD + '[limits]\nrotation_capacity = 3.0\nrotation_source = ""\n', {"limits.rotation_source"}),
    ],
)  # fmt: skip
def test_no_fault_hides_another(text: str, keys: set[str], capsys: pytest.CaptureFixture[str]) -> None:
    assert {f["key"] for f in faults(capsys, text)} == keys


@pytest.mark.parametrize(
    ("text", "key", "line"),
    [
        ('"a[x]" = 1\n' + HEAD, '"a[x]"', 1),
        (HEAD + '"a.b" = 1\n', 'steel."a.b"', 5),
        (HEAD + '"" = 1\n', 'steel.""', 5),
        (HEAD + "[[trace]]\nto = 5\n", "trace", 5),
        (HEAD + '# \u2028 in a remark\nlaw = "x"\n', "steel.law", 6),
        (HEAD + "[trace]\nto = " + "9" * 400 + "\n", "trace.to", 6),
        (HEAD + '[residual]\npattern = "points"\npoint = [{ part = "web", at = 0, stress = "9 GPa" }]\n',
         "residual.point", 7),
        (HEAD.replace('profile = "IPE 450"', 'shape = "rectangle"\nwidth = "1e-9 mm"\nheight = "9 mm"'),
         "section.width", 3),
        (HEAD.replace('profile = "IPE 450"', 'shape = "tube"\ndiameter = "1e300 m"\nthickness = "9 mm"'),
         "section.diameter", 3),
        (HEAD + '[rotation]\nsetup = "cantilever"\nspan = "1e300 m"\n', "rotation.span", 7),
        ('title = "\\u001b[31m"\n' + HEAD, "title", 1),
    ],
)  # fmt: skip
def test_odd_keys_and_absurd_sizes(
    text: str, key: str, line: int, capsys: pytest.CaptureFixture[str]
) -> None:
    found = [f for f in faults(capsys, text) if f["key"] == key]
    assert found
    assert found[0]["line"] == line


@pytest.mark.parametrize(
    ("value", "hint"),
    [
        ("1,234.5 mm", 'write "1234.5 mm"'),
        ("6,000 mm", 'write "6.000 mm" or "6000 mm"'),
        ("1.234,5 mm", 'write "1234.5 mm"'),
        ("1,234,567 mm", 'write "1234567 mm"'),
        ("0,450 m", 'write "0.450 m"'),
    ],
)
def test_commas(value: str, hint: str, capsys: pytest.CaptureFixture[str]) -> None:
    found = faults(capsys, changed("height", f'height = "{value}"')[0])
    assert hint in str(found[0]["suggestion"])


@pytest.mark.parametrize(
    "settings", [["..=1"], ["x=" + "[" * 5000], ["steel..grade=S355"], ["a[0]=1"], ["bogus", "steel"]]
)
def test_settings_that_are_none(settings: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    Path("case.toml").write_text(HEAD)
    ran = run(capsys, "trace", "case.toml", *(x for s in settings for x in ("--set", s)))
    assert ran.status == 2
    assert "Traceback" not in ran.err
    assert len(ran.err.splitlines()) == len(settings)


def test_deeply_nested(capsys: pytest.CaptureFixture[str]) -> None:
    assert faults(capsys, "a" + ".a" * 3000 + " = 1\n" + HEAD)


@pytest.mark.parametrize("degrees", ["20 degC", "20.0 degC", "293.15 K", "68 degF", "20 °C"])
def test_room_temperature_in_every_unit(degrees: str, capsys: pytest.CaptureFixture[str]) -> None:
    Path("case.toml").write_text(HEAD + f'[bending]\ntemperature = "{degrees}"\n')
    assert run(capsys, "read", "case.toml").status == 0


@pytest.mark.parametrize("code", ["EN 1993-1-1", "en1993-1-1:2005", "EN 1993-1-1:2005"])
def test_spellings_of_the_code(code: str, capsys: pytest.CaptureFixture[str]) -> None:
    Path("case.toml").write_text(HEAD + f'[limits]\ncode = "{code}"\n')
    assert run(capsys, "read", "case.toml").status == 0


@pytest.mark.parametrize("share", [0.2, 0.5, 0.62, 0.9, 0.99999])
@pytest.mark.parametrize("kind", ["tension", "compression"])
@pytest.mark.parametrize("profile", ["IPE 450", "RHS 200x100x8", "T IPE 300 half"])
def test_any_axial_force_gives_a_record(
    profile: str, kind: str, share: float, capsys: pytest.CaptureFixture[str]
) -> None:
    from fibremr.section.catalogue import find
    from fibremr.section.properties import geometry

    load = share * 355.0 * geometry(find(profile).section()).area / 1e3
    Path("case.toml").write_text(
        HEAD.replace("IPE 450", profile)
        + f'[bending]\n{kind} = "{load!r} kN"\n[rotation]\nsetup = "cantilever"\nspan = "2 m"\n'
    )
    ran = run(capsys, "trace", "case.toml", "--json")
    assert ran.status == 0, ran.err + ran.out
    assert "Infinity" not in ran.out
    assert "NaN" not in ran.out


@pytest.mark.parametrize("title", ["$\\\\frac{$", "C:$\\\\dir$", "R$100, R$ 50 less", "桟橋 ☃"])
def test_titles_are_text_and_not_mathematics(title: str, capsys: pytest.CaptureFixture[str]) -> None:
    Path("case.toml").write_text(f'title = "{title}"\n' + HEAD, encoding="utf-8")
    ran = run(capsys, "trace", "case.toml", "--quiet")
    assert (ran.status, ran.err) == (0, "")


def test_no_residual_stress_after_all(capsys: pytest.CaptureFixture[str]) -> None:
    Path("case.toml").write_text(HEAD + '[residual]\npattern = "ECCS rolled"\nscale = 0\n')
    ran = run(capsys, "trace", "case.toml", "--quiet")
    assert (ran.status, ran.err) == (0, "")


def test_part_steels_may_cover_every_part(capsys: pytest.CaptureFixture[str]) -> None:
    Path("case.toml").write_text(
        '[section]\nshape = "box"\nheight = "200 mm"\nwidth = "100 mm"\n'
        'web = { thickness = "8 mm", steel = "a" }\nflange = { thickness = "9 mm", steel = "a" }\n'
        '[steel.a]\ngrade = "S275"\n'
    )
    ran = run(capsys, "trace", "case.toml", "--json")
    assert ran.status == 0, ran.out
    assert json.loads(ran.out)["steel"]["yield_MPa"] == 275.0


def test_a_folder_under_a_read_only_one(capsys: pytest.CaptureFixture[str]) -> None:
    Path("p/q").mkdir(parents=True)
    Path("p").chmod(0o555)
    try:
        assert traced(capsys, "--out", "p/q", "--no-figures") == 0
        assert names("p/q") == {"results.json", "report.html", "moment-curvature.csv", "moment-rotation.csv"}
        assert traced(capsys, "--out", "p/q", "--no-figures") == 0
    finally:
        Path("p").chmod(0o755)


def test_links_that_lead_to_each_other(capsys: pytest.CaptureFixture[str]) -> None:
    Path("a").symlink_to("b")
    Path("b").symlink_to("a")
    for out in ("a", "a/x"):
        assert traced(capsys, "--out", out) == 2


def test_streams_that_are_closed_or_full(tmp_path: Path) -> None:
    import subprocess
    import sys

    Path("case.toml").write_text(HEAD)
    environment = {**os.environ, "PYTHONPATH": str(Path(__file__).resolve().parents[2])}
    python = f"{sys.executable} -m fibremr"
    for command, status in (
        (f"{python} trace - <&-", 2),
        (f"{python} read case.toml >&-", 0),
        (f"{python} profiles >/dev/full", 2),
        (f"{python} --help >/dev/full", 2),
        (f"{python} read case.toml | true", 0),
        (f"{python} trace nofile --json | true", 2),
        (f"{python} methods | true", 0),
    ):
        done = subprocess.run(
            ["bash", "-c", f"set -o pipefail; {command}"], cwd=tmp_path, env=environment, capture_output=True
        )
        assert done.returncode == status, (command, done.stderr)
        assert b"Traceback" not in done.stderr, command
        assert b"Exception ignored" not in done.stderr, command


def test_names_that_are_no_text(tmp_path: Path) -> None:
    import subprocess
    import sys

    environment = {**os.environ, "PYTHONPATH": str(Path(__file__).resolve().parents[2])}
    name = b"\xff.toml"
    (tmp_path / os.fsdecode(name)).write_text(HEAD)
    done = subprocess.run(
        [sys.executable, "-m", "fibremr", "trace", "--no-figures", os.fsdecode(name)],
        cwd=tmp_path, env=environment, capture_output=True,
    )  # fmt: skip
    assert done.returncode == 0, done.stderr


def test_terminated_runs_leave_nothing(tmp_path: Path) -> None:
    code = (
        "import os, signal, fibremr.tracing\nimport sys\nfrom fibremr.cli import main\n"
        "def stop(*a, **k):\n    os.kill(os.getpid(), signal.SIGTERM)\n"
        "fibremr.tracing.trace_curve = stop\n"
        "sys.argv = ['fibremr', 'trace', 'case.toml', '--out', 'o']\nmain()\n"
    )
    Path("case.toml").write_text(HEAD)
    ran = process(cwd=tmp_path, code=code)
    assert ran.status == 143
    assert [p.name for p in Path().iterdir()] == ["case.toml"]
