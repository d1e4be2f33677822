"""Registered outputs and inner signals: next values over inputs and present values."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from point_values import (
    check,
    check_sources,
    driving,
    held,
    inner_value,
    points,
    read,
    reasons,
    value,
)

from pla.behaviour.next_values import with_next_values
from pla.behaviour.reader import read_behaviour

LEAVES = ("a", "b", "f", "g", "h")  # inputs, registered outputs f and g, registered inner h


@st.composite
def trees(draw, depth=3):
    if depth == 0 or draw(st.integers(0, 3)) == 0:
        return draw(st.sampled_from(LEAVES))
    kind = draw(st.sampled_from(["not", "and", "or", "xor"]))
    if kind == "not":
        return (kind, draw(trees(depth=depth - 1)))
    return (kind, draw(trees(depth=depth - 1)), draw(trees(depth=depth - 1)))


def written(tree):
    if isinstance(tree, str):
        return tree
    if tree[0] == "not":
        return f"({written(tree[1])})'"
    return f"({written(tree[1])} {tree[0]} {written(tree[2])})"


def meaning(tree, signals):
    if isinstance(tree, str):
        return signals[tree]
    values = [meaning(item, signals) for item in tree[1:]]
    if tree[0] == "not":
        return 1 - values[0]
    return {"and": min(values), "or": max(values), "xor": sum(values) % 2}[tree[0]]


HEAD = """\
[inputs]
a = 1
clk = 1
b = { active = "low" }
[outputs]
f = { register = "D", clock = "clk" }
g = { register = "T", clock = "clk", active = "low" }
z = 1
[inner]
h = { register = "any", clock = "clk" }
k = 1
"""


@settings(max_examples=60, deadline=None)
@given(trees(), trees(), trees(), trees())
def test_random_next_values(first, second, third, fourth):
    """Equations that name registers mean present values; rings through registers are none."""
    behaviour = read(
        f'{HEAD}[logic]\nf = "{written(first)}"\ng = "{written(second)} + k"\n'
        f'h = "({written(third)}) k\'"\nk = "{written(fourth)}"\nz = "k ⊕ h"\n'
    )
    assert behaviour.input_names == ("a", "clk", "b", "f", "g", "h")
    assert [bit.name for bit in behaviour.registered] == ["f", "g", "h"]
    moved = with_next_values(behaviour)
    assert moved.output_names == ("f", "g", "z", "h")
    assert [inner.name for inner in moved.inner] == ["k"]
    for point, s in points(behaviour):
        k = meaning(fourth, s)
        wanted = {
            "f": meaning(first, s),
            "g": max(meaning(second, s), k),
            "z": k ^ s["h"],
            "h": min(meaning(third, s), 1 - k),
        }
        for position, name in enumerate(("f", "g", "z")):
            assert value(behaviour, point, position) == wanted[name], (name, s)
        assert inner_value(behaviour, point, "h") == wanted["h"]
        assert inner_value(behaviour, point, "k") == k
        for position, name in enumerate(moved.output_names):
            assert value(moved, point, position) == wanted[name]
        assert inner_value(moved, point, "k") == k


COUNTER = """\
[inputs]
clk = 1
go = 1
[outputs]
count = { bits = 2, register = "D", clock = "clk", start = 0b10, impossible = 0 }
last = 1
[never]
when = ["go clk"]
"""


def counted(count, go, clk, last):
    """The next count, and `last`; impossible inputs ask for 0 of the count."""
    n = 0 if go and clk else (count + go) % 3 if count < 3 else "x"
    bits = ["x", "x"] if n == "x" else [n >> 1 & 1, n & 1]
    return (*bits, last)


@pytest.mark.parametrize(
    "described",
    [
        pytest.param(
            """[[cases]]
rows = \"\"\"
count go | count last
0..2  0  | 0bxx  x
3     -  | x     0
0     1  | 1     0
1     1  | 2     0
2     1  | 0     1
\"\"\"
""",
            id="table",
        ),
        pytest.param(
            """[minterms."count[1]"]
of = ["count", "go"]
on = [3]
off = [1, 5]
others = "x"
[minterms."count[0]"]
of = ["count", "go"]
on = [1]
off = [3, 5]
others = "x"
[minterms.last]
of = ["count", "go"]
on = 5
off = [1, 3, 6, 7]
others = "x"
""",
            id="minterms",
        ),
    ],
)
def test_present_values_are_looked_at(described):
    behaviour = read(COUNTER + described)
    for point, s in points(behaviour):
        go, clk, count = s["go"], s["clk"], s["count"]
        wanted = counted(count, go, clk, "x")
        if not go and not (go and clk):
            wanted = ("x", "x", "x")
        if not (go and clk) and (go or count == 3):
            wanted = (*wanted[:2], int(count == 2))
        found = tuple(value(behaviour, point, k) for k in range(3))
        assert found == wanted, s
    assert [o.register.start if o.register else None for o in behaviour.outputs] == [1, 0, None]
    check_sources(behaviour)


def test_a_table_in_a_csv_file(tmp_path):
    """Twice the same name: first the present value, then the next."""
    (tmp_path / "next.csv").write_text(
        "go;count;count;last\n1;0;1;0\n1;1;2;0\n1;2;0;1\nothers;;x;x\n"
    )
    design = tmp_path / "d.toml"
    design.write_text(COUNTER + '[[cases]]\nfile = "next.csv"\n', encoding="utf-8")
    behaviour = read_behaviour(str(design))
    for point, s in points(behaviour):
        listed = s["go"] and s["count"] < 3
        wanted = counted(s["count"], s["go"], s["clk"], int(s["count"] == 2))
        if s["go"] and s["clk"]:
            wanted = (0, 0, "x")
        elif not listed:
            wanted = ("x", "x", "x")
        assert tuple(value(behaviour, point, k) for k in range(3)) == wanted, s


@pytest.mark.parametrize(
    ("header", "roles"),
    [
        pytest.param("count go | last", "iio", id="first-group"),
        pytest.param("go count | last", "iio", id="first-group-last"),
        pytest.param("go | count last", "ioo", id="behind-the-bar"),
        pytest.param("go | count | last", "ioo", id="two-bars"),
        pytest.param("count | go | last", "iio", id="inputs-in-two-groups"),
        pytest.param("count,go,last", "iio", id="csv-in-front-of-an-input"),
        pytest.param("go,last,count", "ioo", id="csv-behind-an-output"),
        pytest.param("count,last", "io", id="csv-first"),
        pytest.param("go,count", "io", id="csv-last"),
        pytest.param("go,count,count", "iio", id="csv-twice"),
    ],
)
def test_columns_of_registers(header, roles, tmp_path):
    """What a column means shows in what is described by the table."""
    names = [n for n in header.replace(",", " ").split() if n != "|"]
    outputs = {n for n, role in zip(names, roles, strict=True) if role == "o"}
    cells = ["-" if role == "i" else "0" for role in roles]
    text = COUNTER.replace('[never]\nwhen = ["go clk"]\n', "")
    if "," in header:
        (tmp_path / "t.csv").write_text(f"{header}\n{','.join(cells)}\n")
        text += '[[cases]]\nfile = "t.csv"\n'
    else:
        for place, sign in enumerate(header.split()):
            if sign == "|":
                cells.insert(place, "|")
        text += f'[[cases]]\nrows = """\n{header}\n{" ".join(cells)}\n"""\n'
    text += "[logic]\n"
    if "last" not in outputs:
        text += 'last = "go"\n'
    if "count" not in outputs:
        text += '"count[1]" = "go"\n"count[0]" = "go"\n'
    design = tmp_path / "d.toml"
    design.write_text(text, encoding="utf-8")
    behaviour = read_behaviour(str(design))
    for output in behaviour.outputs:
        described = output.name.partition("[")[0] in outputs
        assert (output.form == "cases") == described
        for point, s in points(behaviour):
            wanted = 0 if described else s["go"]
            assert value(behaviour, point, behaviour.output_names.index(output.name)) == wanted


def test_an_address_map_of_a_register():
    behaviour = read(
        """\
[inputs]
ad = "7:6"
ale = 1
[outputs]
page = { bits = 2, register = "D", clock = "ale'" }
rom = 1
ram = 1
[logic]
"page[1]" = "ad[7]"
"page[0]" = "ad[6]"
[[address_map]]
bus = "page"
select = { rom = 0, ram = "2..3" }
elsewhere = 0
"""
    )
    check(
        behaviour,
        {
            "page[1]": lambda ad, **_: ad >> 7,
            "page[0]": lambda ad, **_: ad >> 6 & 1,
            "rom": lambda page, **_: int(page == 0),
            "ram": lambda page, **_: int(page >= 2),
        },
    )
    register = behaviour.outputs[0].register
    assert (register.clock, register.falling, register.start) == ("ale", True, None)


ENABLED = """\
[inputs]
clk = 1
a = 1
oe = 1
[outputs]
q = { register = "D", clock = "clk", enable = "oe n[0]", reads = "bus" }
y = { enable = "oe" }
[inner]
n = { bits = 2, register = "D", clock = "clk" }
[never]
when = ["a oe"]
[logic]
q = "q ⊕ a bus"
y = "a + q"
"n[1]" = "n[0]"
"n[0]" = "a"
"""


def test_a_register_that_does_not_drive_its_pin_still_counts():
    """What is free while nobody sees it is a combinational output only."""
    behaviour = read(ENABLED)
    assert behaviour.input_names == ("clk", "a", "oe", "bus", "q", "n[1]", "n[0]")
    for point, s in points(behaviour):
        never = s["a"] and s["oe"]
        assert value(behaviour, point, 0) == ("x" if never else s["q"] ^ (s["a"] & s["bus"]))
        assert driving(behaviour, point, 0) == int(s["oe"] and s["n"] & 1)
        hidden = not s["oe"]
        assert value(behaviour, point, 1) == ("x" if never or hidden else s["a"] | s["q"])
        if hidden:
            assert reasons(behaviour, point, 1) == ["disabled"]
    check_sources(behaviour)
    assert [o.reads for o in behaviour.outputs] == ["bus", None]


CONTROLLED = """\
[inputs]
clk = 1
clear = { active = "low" }
set = { asynchronous = true }
a = 1
[outputs]
q = { bits = 2, register = "SR", clock = "clk", reset = "clear", preset = "set clear'", start = 1 }
r = { register = "JK", clock = "clk'", reset = "trip", reset_when = "clock", preset = "set" }
[inner]
p = { register = "D", clock = "clk", preset = "q[1] a", preset_when = "clock", never_too = true }
trip = 1
[never]
when = ["a set"]
[logic]
trip = "a clear + q[0]"
"q[1]" = "a"
"q[0]" = "p"
r = "r'"
p = "a + r"
"""


def test_resets_and_presets():
    behaviour = read(CONTROLLED)
    q1, q0, r = (output.register for output in behaviour.outputs)
    p = behaviour.inner[0].register
    assert [(x.kind, x.clock, x.falling) for x in (q1, q0, r, p)] == [
        ("SR", "clk", False),
        ("SR", "clk", False),
        ("JK", "clk", True),
        ("D", "clk", False),
    ]
    assert [x.start for x in (q1, q0, r, p)] == [0, 1, None, None]
    assert q1.reset is q0.reset
    assert p.reset is None
    assert [x.reset_asynchronous for x in (q1, r)] == [True, False]
    assert [x.preset_asynchronous for x in (q1, r, p)] == [True, True, False]
    assert [i.asynchronous for i in behaviour.inputs][:4] == [False, False, True, False]
    # trip is described by an equation, so it is known for impossible inputs as well.
    for point, s in points(behaviour):
        trip = (s["a"] and s["clear"]) or s["q"] & 1
        wanted = {
            (q1.reset): s["clear"],
            (q1.preset): s["set"] and not s["clear"],
            (r.reset): trip,
            (r.preset): s["set"],
        }
        for control, one in wanted.items():
            assert held(control.on, point, 0) == bool(one)
            assert held(control.off, point, 0) != bool(one)
        never = s["a"] and s["set"]
        one = s["q"] >> 1 and s["a"]
        assert held(p.preset.on, point, 0) == bool(one and not never)
        assert held(p.preset.off, point, 0) == bool(not one and not never)
    assert behaviour.named == {"r": ("trip",)}
    assert behaviour.warnings == ()


def test_designs_without_registers_have_none():
    behaviour = read("[inputs]\na = 1\n[outputs]\nf = 1\n[logic]\nf = 'a'\n")
    assert behaviour.registered == ()
    assert behaviour.machines == ()
    assert with_next_values(behaviour) is behaviour
