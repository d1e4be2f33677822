"""Enable pins and rows, bidirectional pins, cells as inputs, columns that differ by mode."""

import os
import subprocess
import sys

import pytest
from small_devices import design, proven

from pla.device.catalogue import find_device
from pla.fitting.fit import fit

LOW = '{ active = "low" }'


def written(folder, inputs, outputs, logic, extra="", top=""):
    """A design; inputs as names, outputs and inner signals with what is said of them."""
    lines = ['name = "Switching"', top, "[inputs]", *(f"{name} = 1" for name in inputs)]
    lines += ["[outputs]", *(f"{name} = {how}" for name, how in outputs.items()), extra]
    lines += ["[logic]", *(f'{name} = "{how}"' for name, how in logic.items()), ""]
    return design(folder, "\n".join(lines))


def fitted(behaviour, name):
    found = fit(behaviour, find_device(name))
    assert found.fits, found.reasons
    assert proven(found.plan)
    return found.plan


@pytest.mark.parametrize(
    ("name", "enable", "where", "cells"),
    [
        # gate-9x6: pin 10 enables 12 to 14 while low, pin 11 enables 15 to 17 while high
        pytest.param("gate-9x6", "oe'", 10, {12, 13, 14}, id="while low"),
        pytest.param("gate-9x6", "oe", 11, {15, 16, 17}, id="while high"),
        pytest.param("modal-8x4-split", "oe'", 9, {11, 12}, id="the middle cells"),
    ],
)
def test_an_enable_pin_carries_the_signal(tmp_path, name, enable, where, cells):
    behaviour = written(
        tmp_path, ["oe", "a", "b"], {"f": f'{{ enable = "{enable}" }}'}, {"f": "a b'"}
    )
    plan = fitted(behaviour, name)
    assert plan.pins["oe"] == where
    assert plan.pins["f"] in cells
    (output,) = plan.outputs
    assert (output.enable.pin, output.enable.row) == (where, None)
    assert where not in dict(plan.tied)


def test_an_active_low_input_switches_the_other_group(tmp_path):
    text = """
name = "Active low"
[inputs]
oe = { active = "low" }
a = 1
[outputs]
f = { enable = "oe" }
[logic]
f = "a"
"""
    assert fitted(design(tmp_path, text), "gate-9x6").pins["oe"] == 10


def test_an_enable_pin_is_held_where_outputs_always_drive(tmp_path):
    names = [f"o{k}" for k in range(6)]
    logic = {name: f"a {'b' if k % 2 else 'c'}" for k, name in enumerate(names)}
    behaviour = written(tmp_path, ["a", "b", "c"], dict.fromkeys(names, 1), logic)
    plan = fitted(behaviour, "gate-9x6")
    assert plan.tied == ((10, 0), (11, 1))
    assert {10, 11}.isdisjoint(plan.pins.values())
    one = fitted(written(tmp_path, ["a", "b"], {"f": 1}, {"f": "a b"}), "gate-9x6")
    front = one.pins["f"] in {12, 13, 14}
    assert one.tied == (((10, 0),) if front else ((11, 1),))  # nothing uses the other group


def test_an_enable_pin_may_be_a_plain_input(tmp_path):
    """Nine inputs need pin 10, so no output can be on the cells that it enables."""
    nine = list("abcdeghkm")
    three = {"f": 1, "p": 1, "q": 1}
    logic = {"f": "a b c d", "p": "e g h", "q": "k m"}
    plan = fitted(written(tmp_path, nine, three, logic), "gate-9x6")
    assert 10 in plan.pins.values()
    assert {plan.pins[name] for name in three} == {15, 16, 17}
    assert plan.tied == ((11, 1),)
    four = written(tmp_path, nine, {**three, "r": 1}, {**logic, "r": "a m"})
    found = fit(four, find_device("gate-9x6"))
    assert found.reasons


def test_an_enabling_signal_that_terms_need_too(tmp_path):
    """Pin 10 has lines, pin 11 has none."""
    inputs, logic = ["oe", "a"], {"f": "a", "p": "oe ⊕ a"}
    low = written(tmp_path, inputs, {"f": '{ enable = "oe\'" }', "p": 1}, logic)
    plan = fitted(low, "gate-9x6")
    assert plan.pins["oe"] == 10
    assert plan.pins["p"] in {15, 16, 17}
    high = written(tmp_path, inputs, {"f": '{ enable = "oe" }', "p": 1}, logic)
    found = fit(high, find_device("gate-9x6"))
    assert found.reasons == (
        (
            "oe would have to be on enable pin 11, and terms need oe too, but that pin has no line "
            "for them in the AND array: give them an input of its own that is wired to the same "
            "signal"
        ),
    )


@pytest.mark.parametrize(
    ("name", "enable", "reason"),
    [
        pytest.param(
            "gate-9x6",
            "a b",
            "the enable of f is not one input alone, and cells are enabled by pins 10 and 11 only",
            id="by pin only",
        ),
        pytest.param(
            "shared-12x32x6", "a", "no cell has an output enable, which f would need", id="none"
        ),
        pytest.param(
            "own-9x5",
            "a + b",
            "the enable of f needs 2 product terms, and no cell has more than one for it",
            id="two terms",
        ),
    ],
)
def test_enables_that_no_cell_has(tmp_path, name, enable, reason):
    behaviour = written(tmp_path, ["a", "b", "c"], {"f": f'{{ enable = "{enable}" }}'}, {"f": "c"})
    found = fit(behaviour, find_device(name))
    assert not found.fits
    assert found.reasons == (reason,)


def test_an_enable_of_several_terms_by_an_inner_signal(tmp_path):
    """The row takes one literal of what is fed back."""
    behaviour = written(
        tmp_path,
        ["a", "b", "c"],
        {"f": '{ enable = "on" }'},
        {"f": "c", "on": "a + b"},
        extra="[inner]\non = 1",
    )
    plan = fitted(behaviour, "varied-11x5")
    (on,) = (signal for signal in plan.inputs if signal.name == "on")
    assert on.fed_by is not None
    assert plan.outputs[0].enable.cube.literals == 1
    assert plan.passes == (2, 1)


def test_enable_rows(tmp_path):
    behaviour = written(
        tmp_path,
        ["a", "b", "c"],
        {"f": '{ enable = "a b\'" }', "p": 1},
        {"f": "c", "p": "a c"},
    )
    device = find_device("own-9x5")
    plan = fitted(behaviour, "own-9x5")
    f, p = plan.outputs
    assert f.enable.row == f.cell.modes[0].enable.row
    assert f.enable.pin is None
    assert p.enable is None
    assert len(set(plan.rows)) == len(plan.rows)
    assert set(plan.rows).isdisjoint(row for cell in device.cells for row in cell.enable_rows)


READ = """
name = "Read"
[inputs]
oe = 1
a = 1
[outputs]
line = { enable = "oe", reads = "line_in" }
f = 1
[logic]
line = "a"
f = "line_in a' + oe"
"""


def test_a_pin_that_is_read_needs_a_cell_that_reads_it(tmp_path):
    plan = fitted(design(tmp_path, READ), "own-9x5")
    assert plan.pins["line"] in {12, 13, 14}  # the outer pins cannot be read
    assert plan.pins["line_in"] == plan.pins["line"]
    placed = design(tmp_path, f"{READ}[place.own-9x5]\nline = 15\n")
    found = fit(placed, find_device("own-9x5"))
    assert found.reasons == ("the cell on pin 15 does not read its pin back, as is asked for line",)
    assert [place.signal for place in found.released] == ["line"]
    elsewhere = design(tmp_path, f"{READ}[place.own-9x5]\nline = 13\n")
    assert fitted(elsewhere, "own-9x5").pins["line_in"] == 13


def test_cells_serve_as_inputs_where_pins_run_short(tmp_path):
    """own-9x5 has nine input pins and three cells whose pins run back."""
    names = [f"x{k}" for k in range(13)]
    first_six = " ".join(names[:6])
    twelve = written(
        tmp_path, names[:12], {"f": LOW, "p": LOW}, {"f": first_six, "p": " ".join(names[6:12])}
    )
    plan = fitted(twelve, "own-9x5")
    assert {12, 13, 14} < set(plan.pins.values())
    assert plan.input_cells == {12, 13, 14}
    assert {plan.pins["f"], plan.pins["p"]} == {11, 15}
    thirteen = written(tmp_path, names, {"f": LOW}, {"f": " ".join(names)})
    found = fit(thirteen, find_device("own-9x5"))
    assert found.reasons == ("13 inputs are needed, the device has 12 input pins: 1 too many",)
    three = written(
        tmp_path,
        names[:12],
        {"f": LOW, "p": LOW, "q": 1},
        {"f": first_six, "p": " ".join(names[6:12]), "q": "x0"},
    )
    found = fit(three, find_device("own-9x5"))
    assert found.reasons == ("12 inputs and 3 outputs need 15 pins, the device has 14: 1 too many",)


def test_columns_that_a_mode_hands_to_another_pin(tmp_path):
    """swap-8x4: the lines of pin 8 are those of the cell on pin 13 while it always drives."""
    names = [f"x{k}" for k in range(8)]
    eight = written(
        tmp_path,
        names,
        {f"o{k}": 1 for k in range(4)},
        {"o0": " ".join(names), "o1": "x0 x1", "o2": "x2 + x3", "o3": "x4 x5'"},
    )
    plan = fitted(eight, "swap-8x4")
    assert {8, 9} < set(plan.pins.values())
    assert plan.modes[13].enable.kind == plan.modes[10].enable.kind == "always"
    # An enable takes the row, so pin 13 or 10 that has one keeps its lines; seven inputs remain.
    outputs = {f"o{k}": '{ enable = "x0" }' for k in range(3)}
    logic = {"o0": " ".join(names[:7]), "o1": "x1", "o2": "x2"}
    plan = fitted(written(tmp_path, names[:7], outputs, logic), "swap-8x4")
    kinds = sorted(plan.modes[pin].enable.kind for pin in (13, 12, 11, 10))
    assert kinds.count("row") >= 3
    four = written(
        tmp_path, names, {**outputs, "o3": '{ enable = "x1" }'}, {**logic, "o3": names[7]}
    )
    found = fit(four, find_device("swap-8x4"))
    assert found.reasons


def test_a_signature_that_is_too_long(tmp_path):
    device = find_device("modal-8x4-plain")
    for text, fits in (("ABCD", True), ("ABCDE", False)):
        behaviour = written(tmp_path, ["a"], {"f": 1}, {"f": "a"}, top=f'signature = "{text}"')
        found = fit(behaviour, device)
        assert found.fits == fits
        if fits:
            assert proven(found.plan)
        else:
            assert found.reasons == ("the signature 'ABCDE' has 5 characters, the device holds 4",)
    none = fit(behaviour, find_device("own-9x5"))
    assert none.fits
    assert [doubt.code for doubt in none.warnings] == ["SIGNATURE-NONE"]


SCRIPT = """
import sys
from pla.behaviour.reader import read_behaviour
from pla.device.catalogue import find_device
from pla.fitting.fit import fit
for name in sys.argv[2:]:
    found = fit(read_behaviour(sys.argv[1]), find_device(name))
    plan = found.plan
    print(name, found.reasons)
    if plan is not None:
        print(plan.pins, plan.rows, {k: m.set for k, m in plan.modes.items()}, plan.tied)
        print([c.text(plan.minimum.cover.n_inputs) for c in plan.minimum.cover])
"""


def test_the_same_plan_whatever_the_order_of_sets(tmp_path):
    (tmp_path / "design.toml").write_text(READ, encoding="utf-8")
    names = ["own-9x5", "shared-10x28x4", "swap-8x4", "joint-10x27x6", "varied-11x5"]
    told = {
        subprocess.run(
            [sys.executable, "-c", SCRIPT, str(tmp_path / "design.toml"), *names],
            env={**os.environ, "PYTHONHASHSEED": seed},
            capture_output=True,
            text=True,
            check=True,
        ).stdout
        for seed in ("1", "2", "3")
    }
    assert len(told) == 1
    assert told.pop().count("\n") > 10
