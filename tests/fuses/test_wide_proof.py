"""Designs of more inputs than can be simulated one by one: planned, proven by cubes, spoilt."""

import random

import pytest
from point_by_point import Point, Wiring

from pla.behaviour.reader import read_behaviour
from pla.device.reader import read_device
from pla.errors import InputError
from pla.fitting.fit import fit
from pla.fuses.program import fuse_file
from pla.fuses.proof import prove

# Twenty inputs, sixteen bidirectional pins with three terms each, a buried sum of twelve.
INPUTS = range(1, 21)
CELLS = range(22, 38)
COLUMNS = 2 * (len(INPUTS) + len(CELLS) + 1)
ROWS = 4 * len(CELLS) + 12


def device_text():
    sources = [*map(str, INPUTS), *map(str, CELLS), "b1"]
    cells = "".join(
        f'  {{ pin = {pin}, enable = {4 * i}, terms = "{4 * i + 1}..{4 * i + 3}", links = [] }},\n'
        for i, pin in enumerate(CELLS)
    )
    return f"""
name = "wide-20x16"
summary = "for tests"
technology = "erasable"
pins = 38
ground = 21
power = 38
fuses = {ROWS * COLUMNS}
[links]
blank = 1
connected = 0
unused_term = "dead"
unused_enable = "off"
[and]
columns = "{" ".join(f"{s} {s}'" for s in sources)}"
terms = {ROWS}
first_fuse = 0
term_step = {COLUMNS}
column_step = 1
[kind.io]
bits = []
modes = [ {{ set = "", pin = "sum", feedback = "pin" }} ]
cells = [
{cells}]
[kind.buried]
bits = []
modes = [ {{ set = "", feedback = "sum" }} ]
cells = [ {{ name = "b1", terms = "{4 * len(CELLS)}..{ROWS - 1}", links = [] }} ]
"""


def passing(up, down):
    """Eight pairs of pins that pass levels on, up or down."""
    outputs = "".join(
        f'a{i} = {{ enable = "{up}", reads = "at_a{i}" }}\n'
        f'b{i} = {{ enable = "{down}", reads = "at_b{i}" }}\n'
        for i in range(8)
    )
    logic = "".join(f'a{i} = "at_b{i}"\nb{i} = "at_a{i}"\n' for i in range(8))
    return f'name = "card"\n[inputs]\ndir = 1\non = 1\n[outputs]\n{outputs}[logic]\n{logic}'


PAIRS = " + ".join(f"i[{2 * k}] i[{2 * k + 1}]" for k in range(4))
# Folded in, the complement of four products would take 16 terms, of which a cell has three.
ALARM = f"""
name = "alarm"
[inputs]
i = 18
go = 1
test = 1
[outputs]
calm = 1
loud = 1
[inner]
alarm = 1
[logic]
alarm = "{PAIRS}"
calm = "alarm' go + test"
loud = "alarm go'"
"""


def planned(folder, text):
    for name, content in (("wide-20x16.toml", device_text()), ("design.toml", text)):
        (folder / name).write_text(content, encoding="utf-8")
    device = read_device(str(folder / "wide-20x16.toml"))
    found = fit(read_behaviour(str(folder / "design.toml")), device)
    assert found.plan is not None, found.reasons
    return found.plan


@pytest.mark.parametrize(
    "text", [passing("on dir", "on dir'"), ALARM], ids=["bidirectional", "fed-back-complement"]
)
def test_proven_by_cubes_and_spoilt(tmp_path, text):
    plan = planned(tmp_path, text)
    made = fuse_file(plan, "design.jed")
    assert (made.proof.method, made.proof.equal) == ("cubes", True)
    rng = random.Random(1)
    device = plan.device
    faults = 0
    for row in plan.rows:
        fuse = rng.choice(device.and_array.fuses_of(row))
        changed = made.fuses.changed({fuse: 1 - made.fuses[fuse]})
        found = prove(plan, changed).counterexample
        if found is not None and found.point is not None:
            faults += 1
            assert level(plan, changed, found) == 1 - found.expected
    assert faults > 2


def level(plan, fuses, found):
    """The value of the output at the point of a counterexample; all these are active high."""
    outside = {
        p.pin: (found.point >> p.index & 1, "free" if s.read_from else "holds")
        for s, p in zip(plan.design.inputs, plan.inputs, strict=False)
        if p.pin is not None
    }
    (pin,) = [output.pin for output in plan.outputs if output.name == found.output]
    point = Point(Wiring(plan.device, fuses.states), outside)
    return point.shown(plan.device.cell_of_pin[pin])


def test_a_wide_design_that_holds_itself(tmp_path, monkeypatch):
    """The reader refuses such a design; the proof finds it without its help."""
    monkeypatch.setattr("pla.behaviour.reader.report_rings", lambda *_: None)
    plan = planned(tmp_path, passing("on dir", "on"))
    with pytest.raises(InputError, match="a0 depends on itself by way of the cells on pins"):
        fuse_file(plan, "design.jed")
