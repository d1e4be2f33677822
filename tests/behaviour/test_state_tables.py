"""State tables against their meaning, state by state and input by input."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from point_values import check_sources, inner_value, points, read, reasons, value
from state_machines import STYLES, design_of, machines

from pla.behaviour.encode import codes_of

GATE = """\
[inputs]
request = 1
limit = 1
clk = 1
clear = 1
[outputs]
motor = 1
lamp = 1
[[state_table]]
of = "gate"
clock = "clk'"
states = ["shut", "opening", "open"]
start = "opening"
reset = "clear"
codes = { shut = "00", opening = "01", open = "11" }
unused = "start"
rows = \"\"\"
state   | request limit | then    | motor lamp
shut    | 1 -           | opening | 1 0
shut    | 0 -           | shut    | 0 0
opening | - 1           | open    | 0 1
opening | - 0           | opening | 1 x
open    | 1 -           | open    | 0 1
open    | 0 -           | shut    | 0 0
\"\"\"
"""


def number(signals, names):
    return int("".join(str(signals[name]) for name in names) or "0", 2)


def compare(behaviour, machine, *, as_output):
    """Every output and every bit of the next state, at every input and every code."""
    width = len(machine.codes[0])
    bits = [f"m[{k}]" for k in range(width - 1, -1, -1)] if width > 1 else ["m"]
    output_names, inner_names = behaviour.output_names, [i.name for i in behaviour.inner]
    assert (output_names if as_output else inner_names)[-width:] == tuple(bits) or (
        not as_output and inner_names == bits
    )
    for point, signals in points(behaviour):
        code = format(signals["m"], f"0{width}b")
        then, outputs = machine.at(code, number(signals, machine.inputs))
        for name, wanted in zip(bits, then, strict=True):
            found = (
                value(behaviour, point, output_names.index(name))
                if as_output
                else inner_value(behaviour, point, name)
            )
            assert str(found) == wanted, (signals, name)
        for k, wanted in enumerate(outputs):
            assert str(value(behaviour, point, output_names.index(f"y{k}"))) == wanted, signals


@pytest.mark.parametrize("style", STYLES)
@settings(max_examples=25, deadline=None)
@given(st.data(), st.integers(0, 2), st.booleans())
def test_random_tables(style, data, layout, as_output):
    machine = data.draw(machines(styles=(style,)))
    behaviour = read(design_of(machine, layout, as_output=as_output))
    compare(behaviour, machine, as_output=as_output)
    check_sources(behaviour)
    (table,) = behaviour.machines
    assert list(table.codes) == machine.codes
    assert table.style == style
    start = [bit.register.start for bit in behaviour.registered]
    assert "".join(map(str, start)) == machine.codes[machine.start]


@settings(max_examples=25, deadline=None)
@given(machines(most_inputs=3), st.integers(0, 7))
def test_impossible_inputs_ask_for_nothing(machine, impossible):
    """[never] frees the next state and the outputs, in codes of states and in others."""
    if not machine.n_inputs:
        return
    gone = impossible % 2**machine.n_inputs
    names = zip(machine.inputs, machine.bits(gone), strict=True)
    product = " ".join(name if bit == "1" else f"{name}'" for name, bit in names)
    never = f"[never]\nwhen = '''{product}'''\n" + design_of(machine, 1)
    behaviour = read(never)
    width = len(machine.codes[0])
    for point, signals in points(behaviour):
        code = format(signals["m"], f"0{width}b")
        at = number(signals, machine.inputs)
        then, outputs = machine.at(code, at)
        if at == gone:
            then, outputs = "x" * len(then), "x" * len(outputs)
        for bit, wanted in zip(behaviour.inner, then, strict=True):
            assert str(inner_value(behaviour, point, bit.name)) == wanted
        for k, wanted in enumerate(outputs):
            assert str(value(behaviour, point, 1 + k)) == wanted
            if at == gone:
                assert reasons(behaviour, point, 1 + k) == ["never"]


def test_gate_by_hand():
    behaviour = read(GATE)
    assert behaviour.input_names == ("request", "limit", "clk", "clear", "gate[1]", "gate[0]")
    assert [i.present_of for i in behaviour.inputs] == [None] * 4 + ["gate[1]", "gate[0]"]
    wanted = {  # (code, request, limit): next code, motor, lamp; 10 is as opening (01)
        ("00", 0, 0): ("00", 0, 0),
        ("00", 0, 1): ("00", 0, 0),
        ("00", 1, 0): ("01", 1, 0),
        ("00", 1, 1): ("01", 1, 0),
        ("01", 0, 0): ("01", 1, "x"),
        ("01", 0, 1): ("11", 0, 1),
        ("01", 1, 0): ("01", 1, "x"),
        ("01", 1, 1): ("11", 0, 1),
        ("10", 0, 0): ("01", 1, "x"),
        ("10", 0, 1): ("11", 0, 1),
        ("10", 1, 0): ("01", 1, "x"),
        ("10", 1, 1): ("11", 0, 1),
        ("11", 0, 0): ("00", 0, 0),
        ("11", 0, 1): ("00", 0, 0),
        ("11", 1, 0): ("11", 0, 1),
        ("11", 1, 1): ("11", 0, 1),
    }
    for point, signals in points(behaviour):
        code = format(signals["gate"], "02b")
        then, motor, lamp = wanted[code, signals["request"], signals["limit"]]
        assert value(behaviour, point, 0) == motor
        assert value(behaviour, point, 1) == lamp
        assert inner_value(behaviour, point, "gate[1]") == int(then[0])
        assert inner_value(behaviour, point, "gate[0]") == int(then[1])


def test_a_reset_leads_to_the_start():
    """opening is 01: the reset clears the high bit and sets the low one."""
    high, low = (bit.register for bit in read(GATE).inner)
    assert (high.start, low.start) == (0, 1)
    assert high.preset is None
    assert low.reset is None
    for control in (high.reset, low.preset):
        assert control.text == "clear"
        assert [cube.text(6) for cube in control.on] == ["---1--"]
        assert [cube.text(6) for cube in control.off] == ["---0--"]
    assert (high.kind, high.clock, high.falling) == ("any", "clk", True)
    assert high.reset_asynchronous
    assert low.preset_asynchronous


def test_a_reset_at_the_clock():
    behaviour = read(GATE.replace('"clear"\n', '"clear limit"\nreset_when = "clock"\n'))
    high, low = (bit.register for bit in behaviour.inner)
    assert not high.reset_asynchronous
    assert not low.preset_asynchronous


def test_the_table_is_kept_for_other_codes():
    """What a search for codes needs: states, moves and outputs without any code."""
    (table,) = read(GATE).machines
    assert (table.states, table.start) == (("shut", "opening", "open"), 1)
    assert table.outputs == ("motor", "lamp")
    found = {}
    for row in table.rows:
        for cube in row.inputs:
            assert not (cube.ones | cube.zeros) >> 4  # nothing of the state in it
            for point in range(4):
                if not cube.ones & ~point & 3 and not cube.zeros & point & 3:
                    found[row.state, point] = (row.then, row.on, row.off)
    assert found[0, 0b01] == (1, 0b01, 0b10)  # shut, request: opening, motor and no lamp
    assert found[1, 0b00] == (1, 0b01, 0b00)  # opening: the lamp is free
    assert len(found) == 12


@pytest.mark.parametrize(
    ("style", "n", "codes"),
    [
        ("counting", 3, ("00", "01", "10")),
        ("gray", 4, ("00", "01", "11", "10")),
        ("gray", 6, ("000", "001", "011", "010", "110", "111")),
        ("one-hot", 3, ("001", "010", "100")),
        ("counting", 2, ("0", "1")),
    ],
)
def test_codes(style, n, codes):
    """Reflected Gray code: F. Gray, US patent 2 632 058 (1953), table of figure 1 (memory)."""
    assert codes_of(style, n) == codes


def test_rows_for_every_state_and_others():
    behaviour = read(
        """\
[inputs]
clk = 1
go = 1
stop = 1
speed = 2
[outputs]
run = 1
[[state_table]]
of = "drive"
clock = "clk"
states = ["rest", "slow", "fast"]
start = "rest"
codes = "counting"
unused = "x"
rows = \"\"\"
state | go stop speed | then | run
-     | -  1    -     | rest | 0
rest  | 1  0    1..2  | slow | x
slow  | -  0    3     | fast | 1
rest  | others        | rest | 0
others                | slow | 1
\"\"\"
"""
    )
    for point, s in points(behaviour):
        code = s["drive"]
        if code == 3:
            then, run = "x", "x"
        elif s["stop"]:
            then, run = 0, 0
        elif code == 0:
            then, run = (1, "x") if s["go"] and s["speed"] in (1, 2) else (0, 0)
        elif code == 1 and s["speed"] == 3:
            then, run = 2, 1
        else:
            then, run = 1, 1
        assert value(behaviour, point, 0) == run
        bits = [inner_value(behaviour, point, f"drive[{k}]") for k in (1, 0)]
        assert bits == (["x", "x"] if then == "x" else [then >> 1, then & 1])
        if run == "x":
            assert reasons(behaviour, point, 0) == ["unused" if code == 3 else "x"]


def test_one_machine_reads_another():
    """The present state of one table may be an input column of another."""
    behaviour = read(
        """\
[inputs]
clk = 1
[outputs]
carry = 1
[[state_table]]
of = "units"
clock = "clk"
states = ["a", "b", "c"]
start = "a"
codes = "counting"
unused = "start"
rows = "state | then\\na | b\\nb | c\\nc | a"
[[state_table]]
of = "tens"
clock = "clk"
states = ["low", "high"]
start = "low"
rows = \"\"\"
state | units | then | carry
low   | 2     | high | 0
low   | 0..1  | low  | 0
low   | 3     | low  | x
high  | 0b10  | low  | 1
high  | others | high | 0
\"\"\"
"""
    )
    assert behaviour.input_names == ("clk", "units[1]", "units[0]", "tens")
    for point, s in points(behaviour):
        units = (0 if s["units"] == 3 else s["units"]) + 1
        for k in (1, 0):
            wanted = units % 3 >> k & 1
            assert inner_value(behaviour, point, f"units[{k}]") == wanted
        turn = s["units"] == 2
        assert inner_value(behaviour, point, "tens") == s["tens"] ^ turn
        carry = "x" if not s["tens"] and s["units"] == 3 else int(s["tens"] and turn)
        assert value(behaviour, point, 0) == carry
