"""Line numbers of keys in TOML text, on files made at random."""

from __future__ import annotations

import tomllib

from hypothesis import given
from hypothesis import strategies as st

from fibremr.case.lines import line_numbers

EXAMPLE = '''# head
title = "a # b ] c"   # remark

[section]
shape = "I"
flange = { width = "200 mm",  thickness = "15 mm" }

[beam]
spans = [
  "8 m",   # first

  # a remark
  "10 m", "9 m",
]
loads = [
  { span = 1, uniform = "38 kN/m" },
  # another
  { span = 2, point = "60 kN", at = "4 m" },
]
numbers = [1,
  2,
  3]

[[load]]
a = 1
[[load]]
a.b = 2
[steel."odd [name]"]
x = """
[not.a.table]
y = 3
"""
z = 4
'''


def test_example() -> None:
    lines = line_numbers(EXAMPLE)
    assert lines["title",] == 2
    assert lines["section",] == 4
    assert lines["section", "flange", "thickness"] == 6
    assert [lines["beam", "spans", i] for i in range(3)] == [10, 13, 13]
    assert [lines["beam", "loads", i, "span"] for i in range(2)] == [16, 18]
    assert [lines["beam", "numbers", i] for i in range(3)] == [20, 21, 22]
    assert lines["load", 0, "a"] == 25
    assert lines["load", 1, "a", "b"] == 27
    assert lines["steel", "odd [name]"] == 28
    assert lines["steel", "odd [name]", "x"] == 29
    assert lines["steel", "odd [name]", "z"] == 33


strings = st.text("ab #[]{}=,'\"\\\n.", max_size=8)


@st.composite
def files(draw: st.DrawFn) -> tuple[str, dict[tuple[str, ...], int]]:
    """TOML text, and the line of each of its keys as it was written."""
    out: list[str] = []
    wanted: dict[tuple[str, ...], int] = {}

    def noise() -> None:
        for _ in range(draw(st.integers(0, 2))):
            out.append(draw(st.sampled_from(["", "# [not] a = table", '# """', "   "])))

    def literal(text: str) -> str:
        plain = text.replace("\\", "\\\\").replace('"', '\\"')
        if draw(st.booleans()):
            return '"' + plain.replace("\n", "\\n") + '"'
        return '"""' + plain + '"""'

    for t in range(draw(st.integers(1, 4))):
        noise()
        table = f"t{t}"
        wanted[table,] = len(out) + 1
        out.append(f"[{table}] # remark ]")
        for k in range(draw(st.integers(0, 4))):
            noise()
            key = f"k{k}"
            wanted[table, key] = len(out) + 1
            kind = draw(st.sampled_from(["text", "list", "inline", "number"]))
            if kind == "text":
                out += (f"{key} = " + literal(draw(strings)) + " # [").split("\n")
            elif kind == "list":
                items = draw(st.lists(strings, min_size=1, max_size=3))
                out += [
                    f"{key} = [",
                    *(f"  {line}" for x in items for line in (literal(x) + ", # ,").split("\n")),
                    "]",
                ]
            elif kind == "inline":
                out.append(f'{key} = {{ a = "]", b = "{{" }}')
            else:
                out.append(f"{key} = 12")
    return "\n".join(out) + "\n", wanted


@given(files())
def test_random_files(made: tuple[str, dict[tuple[str, ...], int]]) -> None:
    text, wanted = made
    tomllib.loads(text)
    lines = line_numbers(text)
    for path, line in wanted.items():
        assert lines[path] == line, (path, text)
