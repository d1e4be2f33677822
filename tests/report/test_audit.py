"""The don't-care audit against every combination looked at by itself."""

from __future__ import annotations

import re
import tempfile
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from report_designs import asserted, designs, holds

from pla.behaviour.reader import read_behaviour
from pla.fitting.prices import Count, SafetyPrice
from pla.logic.cubes import Cube
from pla.logic.minimize import minimize
from pla.report.audit import audit, open_together
from pla.report.audit_tables import detail_table, summary_table, together_table
from pla.report.cases import joined_cases
from pla.report.gates import GroupPrice
from pla.report.notation import groups_of
from pla.report.outcome import outcomes_of_minimum


def read(design):
    with tempfile.TemporaryDirectory() as folder:
        return design.read(Path(folder))


@settings(max_examples=60, deadline=None)
@given(designs())
def test_every_open_combination_is_listed_once_with_the_value_that_the_cover_gives(design):
    behaviour, minimum = read(design)
    found = audit(behaviour, outcomes_of_minimum(minimum))
    points = range(len(design.never))
    for j, values in enumerate(design.values):
        for p in points:
            entries = [
                (s.reason, s.value)
                for s in found
                if s.output == j
                for cube in s.cubes
                if holds(cube, p)
            ]
            expected = (values[p], asserted(minimum.cover, minimum.complemented, j, p))
            assert entries == ([expected] if values[p] not in "01" else [])
    for settled in found:
        assert settled.size == sum(any(holds(cube, p) for cube in settled.cubes) for p in points)


@settings(max_examples=60, deadline=None)
@given(designs())
def test_open_inputs_side_by_side(design):
    behaviour, minimum = read(design)
    together = open_together(behaviour, outcomes_of_minimum(minimum))
    assert together is not None
    for p, impossible in enumerate(design.never):
        is_open = impossible or any(values[p] not in "01" for values in design.values)
        entries = [t.values for t in together if holds(t.cube, p)]
        expected = tuple(
            asserted(minimum.cover, minimum.complemented, j, p) for j in range(len(design.values))
        )
        assert entries == ([expected] if is_open else [])


@settings(max_examples=40, deadline=None)
@given(designs())
def test_what_the_tables_say_is_what_was_found(design):
    behaviour, minimum = read(design)
    found = audit(behaviour, outcomes_of_minimum(minimum))
    groups = groups_of(behaviour.input_names)
    reasons = {"impossible": "never", "others": "others", "x in a row": "x"}
    seen = set()
    for name, reason, value, combinations, inputs in detail_table(behaviour, found).rows:
        j = behaviour.output_names.index(name)
        points = [p for p in range(len(design.never)) if matches(inputs, p, groups)]
        assert len(points) == int(combinations)
        for p in points:
            assert design.values[j][p] == reasons[reason]
            assert asserted(minimum.cover, minimum.complemented, j, p) == int(value)
            assert (j, p) not in seen
            seen.add((j, p))
    assert seen == {
        (j, p)
        for j, values in enumerate(design.values)
        for p, value in enumerate(values)
        if value not in "01"
    }
    for name, reason, total, ones, zeros in summary_table(behaviour, found, ()).rows:
        assert int(total) == int(ones) + int(zeros)
        own = design.values[behaviour.output_names.index(name)]
        if reason in reasons:
            assert int(total) == own.count(reasons[reason])


def matches(text, point, groups):
    """Whether a point is among the inputs that a line of the audit names."""
    if text == "any":
        return True
    named = dict(part.split("=") for part in text.split(" "))
    for group in groups:
        if group.name not in named:
            continue
        value = 0
        for k in range(group.size):
            value = value << 1 | (point >> (group.first + k) & 1)
        value <<= group.bits[-1] if group.bits else 0
        if not any(has(said, value) for said in named[group.name].split(",")):
            return False
    return True


def has(said, value):
    """Whether a number, a range or bits with dashes hold a value."""
    if said.startswith("0b"):
        width = len(said) - 2
        return re.fullmatch(said[2:].replace("-", "[01]"), f"{value:0{width}b}") is not None
    first, _, last = said.partition("..")
    return int(first, 0) <= value <= int(last or first, 0)


STEP = [f"step[{k}]" for k in (3, 2, 1, 0)]
PART = [*STEP, "hatch", "addr[15]", "addr[14]", "addr[13]"]
BYTE = ["go", *(f"data[{k}]" for k in range(7, -1, -1))]
WIDE = [f"addr[{k}]" for k in range(19, 9, -1)]


@pytest.mark.parametrize(
    ("names", "cubes", "texts"),
    [
        pytest.param(PART, ["--------"], ["any"], id="all"),
        pytest.param(PART, ["1010----"], ["step=10"], id="fixed bus"),
        pytest.param(PART, ["101-----"], ["step=10..11"], id="range"),
        pytest.param(
            PART, ["1-1----0"], ["step=10..11,14..15 addr=0b--0-------------"], id="scattered bits"
        ),
        pytest.param(PART, ["----0---"], ["hatch=0"], id="signal"),
        pytest.param(PART, ["-----110"], ["addr=0xC000..0xDFFF"], id="part of an address"),
        pytest.param(PART, ["0000111-"], ["step=0 hatch=1 addr=0xC000..0xFFFF"], id="several"),
        pytest.param(STEP, ["1101", "111-"], ["step=13..15"], id="neighbours"),
        pytest.param(STEP, ["1100", "1-11", "1010"], ["step=10..12,15"], id="with a gap"),
        pytest.param(STEP, ["0---", "1---"], ["any"], id="joined to all"),
        pytest.param(
            PART,
            ["0000----", "00010---", "00011---", "0010----", "0011----", "01100---"],
            ["step=0..3", "step=6 hatch=0"],
            id="joined in two directions",
        ),
        pytest.param(
            PART,
            ["0000----", "00010---"],
            ["step=0", "step=1 hatch=0"],
            id="not joined where another differs",
        ),
        pytest.param(STEP, ["---1"], ["step=0b---1"], id="too scattered for ranges"),
        pytest.param(
            STEP,
            ["0--1", "1--1"],
            ["step=1,3,5,7", "step=9,11,13,15"],
            id="no more than four ranges in a line",
        ),
        pytest.param(BYTE, ["-00000101"], ["data=0x05"], id="a byte in hexadecimal"),
        pytest.param(BYTE, ["1-----0-1"], ["go=1 data=0b-----0-1"], id="scattered byte"),
        pytest.param(
            WIDE,
            ["0---------", "1000------", "10010-----", "100110----", "1001110---", "10011110--"],
            ["addr=0x00000..0x9EFFF"],
            id="address decoder",
        ),
    ],
)
def test_cases_are_written_by_bus(names, cubes, texts):
    found = joined_cases(map(Cube.parse, cubes), groups_of(names))
    assert [case.text for case in found] == texts
    assert sum(case.size for case in found) == sum(2 ** cube.count("-") for cube in cubes)


@settings(max_examples=60, deadline=None)
@given(st.lists(st.text("01--", min_size=8, max_size=8), max_size=9))
def test_joining_keeps_every_combination(texts):
    """Buses of eight bits with some missing, so that all three notations occur."""
    names = [f"code[{k}]" for k in range(8, 2, -1)] + ["hatch", "jam"]
    groups = groups_of(names)
    cubes = []
    for cube in map(Cube.parse, texts):
        if not any(meets(cube, other) for other in cubes):
            cubes.append(cube)
    found = joined_cases(cubes, groups)
    assert len(found) <= len(cubes)
    for p in range(256):
        held = sum(matches(case.text, p, groups) for case in found)
        assert held == sum(holds(cube, p) for cube in cubes)


def meets(one, other):
    return not (one.ones & other.zeros or one.zeros & other.ones)


DRYER = """
name = "Dryer"
[inputs]
step = 2
[outputs]
fan = {{ impossible = {impossible} }}
[never]
when = ["step == 3"]
[logic]
fan = "step == 1"
"""


def behaviour_of(tmp_path, text):
    path = tmp_path / "design.toml"
    path.write_text(text)
    return read_behaviour(str(path))


@pytest.mark.parametrize(
    ("freed", "proven", "words"),
    [
        pytest.param(0, True, "costs 1 term: the design has 1, and would have 0", id="a term"),
        pytest.param(1, True, "costs no term: the design has 1", id="nothing"),
        pytest.param(0, False, "(best sets found, not proven smallest)", id="not proven"),
        pytest.param(None, False, "of fan costs was not computed", id="not computed"),
    ],
)
def test_the_price_of_safety_is_told(tmp_path, freed, proven, words):
    behaviour = behaviour_of(tmp_path, DRYER.format(impossible=0))
    minimum = minimize(behaviour.function)
    price = SafetyPrice(0, 0, None if freed is None else Count(freed, proven))
    found = audit(behaviour, outcomes_of_minimum(minimum))
    table = summary_table(behaviour, found, [GroupPrice(price, minimum.count, minimum.proven)])
    assert any(words in remark for remark in table.remarks)
    assert table.rows == (("fan", "impossible, demanded 0", "1", "0", "1"),)


def test_no_price_where_no_input_is_impossible(tmp_path):
    text = 'name = "Sure"\n[inputs]\na = 1\n[outputs]\nf = { impossible = 0 }\n[logic]\nf = "a"\n'
    behaviour = behaviour_of(tmp_path, text)
    minimum = minimize(behaviour.function)
    price = GroupPrice(SafetyPrice(0, 0, Count(1, True)), minimum.count, minimum.proven)
    table = summary_table(behaviour, audit(behaviour, outcomes_of_minimum(minimum)), [price])
    assert not any("impossible" in remark for remark in table.remarks)


def test_a_design_without_freedom_says_so(tmp_path):
    text = 'name = "Plain"\n[inputs]\na = 1\n[outputs]\nf = 1\n[logic]\nf = "a"\n'
    behaviour = behaviour_of(tmp_path, text)
    minimum = minimize(behaviour.function)
    table = summary_table(behaviour, audit(behaviour, outcomes_of_minimum(minimum)), ())
    assert table.rows == ()
    assert "No output is left open anywhere" in table.remarks[0]
    assert "Don't cares are freedom, not safety" in table.lead[0]
    assert together_table(behaviour, open_together(behaviour, outcomes_of_minimum(minimum))) is None


def test_a_long_list_side_by_side_is_left_out_and_says_so(tmp_path):
    names = [f"s{k}" for k in range(8)]
    parity = " ⊕ ".join(names)  # 128 cubes, none of which can be joined with another
    text = (
        'name = "Parity"\n[inputs]\nbad = 1\n'
        + "".join(f"{name} = 1\n" for name in names)
        + '[outputs]\nf = 1\n[never]\nwhen = ["bad"]\n'
        + f'[logic]\nf = "{parity}"\n'
    )
    behaviour = behaviour_of(tmp_path, text)
    minimum = minimize(behaviour.function)
    assert open_together(behaviour, outcomes_of_minimum(minimum)) is None
    table = together_table(behaviour, None)
    assert table is not None
    assert table.rows == ()
    assert "Left out" in table.lead[0]
    assert sum(s.size for s in audit(behaviour, outcomes_of_minimum(minimum))) == 256
