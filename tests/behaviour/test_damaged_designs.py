"""Damaged design files: always a behaviour or errors in words, never anything else."""

from __future__ import annotations

from pathlib import Path

from hypothesis import given, settings
from hypothesis import strategies as st

from pla.behaviour.reader import behaviour_of
from pla.errors import InputError
from pla.tomlfile import parse_toml

WHOLE = (
    (Path(__file__).parent / "golden" / "dryer.toml").read_text(encoding="utf-8")
    + """
[[cases]]
rows = '''
hatch start | code
0 1 | 2
1 - | 0b0x
others | 3'''

[[address_map]]
bus = "addr[15:12]"
when = "start xor hatch"
select = { rom = ["0..3", 7], "ram" = 0x8 }
elsewhere = "x"
"""
)
WHOLE = "signature = 'DRYER'\nmax_delay = 35.5\n" + WHOLE.replace(
    "step = 4", 'step = 4\naddr = "15:11"'
).replace(
    "armed = 1",
    "armed = 1\ncode = 2\nrom = 1\nram = { active = 'low', impossible = 1 }\n"
    "data = { bits = 2, enable = 'start wide', reads = 'back', never_too = true }\n"
    "[inner]\nwide = 1",
)
WHOLE = WHOLE.replace(
    "[logic]\n",
    "[logic]\nwide = \"jam' + step[1]\"\n'data[0]' = 'jam back[1]'\n'data[1]' = 'wide step[0]'\n",
)
CLOCKED = """\
[inputs]
clk = 1
go = { asynchronous = true }
clear = { active = "low" }
step = 2
[outputs]
lamp = { register = "any", clock = "clk'", reset = "clear", start = 1 }
mode = 2
busy = { register = "JK", clock = "clk", preset = "go clear'", reset = "clear" }
[inner]
count = { bits = 2, register = "T", clock = "clk", reset = "mode == 1", reset_when = "clock" }
[never]
when = "step == 3"
[logic]
lamp = "busy + count[0] lamp'"
[[cases]]
rows = '''
count go | count busy
0..2 1 | 0b1x 1
others | x 0'''
[[state_table]]
of = "mode"
clock = "clk"
states = ["idle", "run", "halt"]
start = "idle"
codes = { idle = "00", run = "10", halt = "01" }
unused = "x"
reset = "clear"
rows = '''
state | go step count | then | open
idle | 1 0..1 - | run | 1
idle | others | idle | 0
run | - - 2..3 | halt | x
halt | - 2 0b1- | idle | 1
others | halt | 0'''
[[state_table]]
of = "gate"
clock = "clk"
states = ["shut", "wide"]
start = "shut"
rows = '''
state | mode | then
shut | 1..2 | wide
- | others | shut
wide | 0b1- | wide
wide | 1 | shut'''
"""
CLOCKED = CLOCKED.replace("mode = 2\n", "mode = 2\nopen = 1\n", 1)
SCRAPS = [
    *("", " ", "\n", "0", "1", "x", "-", "'", '"', "[", "]", "{", "}", "|", "=", ",", "..", ":"),
    *("others", "step", "wide", "back", "reads", "enable", "[inner]\n", "start", "0b1", "0x"),
    *("mode", "count", "clk", "then", "idle", "start", "unused", "codes", "register", "clock"),
    *("[[state_table]]\n", "wide", "state", "D", "free", "reset"),
    *("999", "true", "[never]\n", "when", "not", "+", "é"),
]


def test_whole_design():
    behaviour = behaviour_of(parse_toml(WHOLE, "d.toml"))
    assert len(behaviour.outputs) == 12


def test_clocked_design():
    behaviour = behaviour_of(parse_toml(CLOCKED, "d.toml"))
    assert [bit.name for bit in behaviour.registered] == [
        *("lamp", "mode[1]", "mode[0]", "busy"),
        *("count[1]", "count[0]", "gate"),
    ]


damage = st.tuples(st.integers(0, len(WHOLE) - 1), st.integers(0, 12), st.sampled_from(SCRAPS))
whole = st.sampled_from([WHOLE, CLOCKED, CLOCKED])


@settings(max_examples=300, deadline=None)
@given(whole, st.lists(damage, min_size=1, max_size=4))
def test_any_damage_is_explained(text, damages):
    for place, length, scrap in damages:
        start = place % len(text)
        text = text[:start] + scrap + text[start + length :]
    try:
        behaviour = behaviour_of(parse_toml(text, "d.toml"))
    except InputError as fault:
        lines = text.split("\n")
        for found in fault.diagnostics:
            assert found.message
            assert found.severity == "error"
            at = found.location
            assert at.line is not None
            assert 1 <= at.line <= len(lines)
            assert 1 <= at.column <= len(lines[at.line - 1]) + 1
            assert at.source == lines[at.line - 1]
        return
    assert behaviour.function.conflict() is None


@settings(max_examples=200, deadline=None)
@given(whole, st.lists(st.integers(0, WHOLE.count("\n")), min_size=1, max_size=6), st.booleans())
def test_lost_and_doubled_lines_are_explained(text, numbers, doubled):
    lines = text.split("\n")
    for number in numbers:
        at = number % len(lines)
        lines[at : at + 1] = [lines[at]] * 2 if doubled else []
    try:
        behaviour = behaviour_of(parse_toml("\n".join(lines), "d.toml"))
    except InputError as fault:
        found = fault.diagnostics
    else:
        assert behaviour.function.conflict() is None
        return
    assert all(d.location is not None and d.location.line is not None for d in found)
