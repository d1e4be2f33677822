"""The generator of device files with registers, held against the oracle."""

import random
from functools import cache

import pytest
from clocked_classes import CLOCKED_CLASSES, random_clocked_device
from oracles.device_description import read_device, read_device_file


def made_device(which, seed, folder):
    made = random_clocked_device(random.Random(f"{which} {seed}"), which)
    return made, read_device_file(made.write(folder))


@pytest.mark.parametrize("which", CLOCKED_CLASSES)
@pytest.mark.parametrize("seed", range(25))
def test_every_fuse_has_one_use_and_every_pin_one_role(which, seed, tmp_path):
    made, device = made_device(which, seed, tmp_path)
    fuses, pins = device.role_counts()
    assert device.name == made.name
    assert fuses == dict.fromkeys(range(device.fuses), 1)
    assert pins == dict.fromkeys(range(1, device.pins + 1), 1)
    assert device.registers
    assert (not device.control_rows) == ("unused_control" not in next(iter(made.files.values())))


@pytest.mark.parametrize("which", CLOCKED_CLASSES)
def test_the_same_seed_gives_the_same_file(which):
    first, again = (random_clocked_device(random.Random(3), which) for _ in range(2))
    assert first.files == again.files


@cache
def devices(which):
    made = (random_clocked_device(random.Random(f"{which} {seed}"), which) for seed in range(40))
    return [read_device(text) for device in made for text in device.files.values()]


def modes(device):
    return [mode for cell in device.cells.values() for mode in cell.modes.values()]


def kinds(device):
    return {register.kind for register in device.registers}


def controls(device, **said):
    return [c for c in device.controls if all(getattr(c, k) == v for k, v in said.items())]


EVERY = [*CLOCKED_CLASSES]

# What makes a class, and that it really comes about: in how many of 40 devices.
MARKS = [
    pytest.param(["fixed-d"], lambda d: kinds(d) == {"d"} and not d.sums, 40, id="d-own-gates"),
    pytest.param(["fixed-d"], lambda d: len(d.enable_pins) == 1, 40, id="enable-pin"),
    pytest.param(
        ["bypass"],
        lambda d: all(
            len({m.register is None for m in c.modes.values()}) == 2 for c in d.cells.values()
        ),
        40,
        id="register-or-bypass",
    ),
    pytest.param(["bypass"], lambda d: {"q", "q'"} <= {m.shows for m in modes(d)}, 40, id="after"),
    pytest.param(["bypass"], lambda d: len(d.control_rows) == 2, 15, id="reset-and-preset-rows"),
    pytest.param(
        ["before"],
        lambda d: {r.inverted for r in d.registers} == {(False,), (True,)},
        40,
        id="before",
    ),
    pytest.param(["before"], lambda d: d.sums, 10, id="before-shared"),
    pytest.param(["before"], lambda d: not d.sums, 10, id="before-own"),
    pytest.param(["toggle"], lambda d: "t" in kinds(d), 15, id="t"),
    pytest.param(["toggle"], lambda d: "jk" in kinds(d), 15, id="jk"),
    pytest.param(["toggle"], lambda d: kinds(d) == {"t", "jk"}, 5, id="t-and-jk"),
    pytest.param(["toggle"], lambda d: any(".j" in str(k) for k in d.sums), 8, id="shared-jk"),
    pytest.param(["toggle"], lambda d: any(m.second for m in modes(d)), 8, id="own-jk"),
    pytest.param(["sequencer"], lambda d: kinds(d) == {"sr"}, 40, id="sr"),
    pytest.param(
        ["sequencer"],
        lambda d: any(c.pin is None and c.gates for c in d.cells.values()),
        40,
        id="buried-registers",
    ),
    pytest.param(["sequencer"], lambda d: d.columns.count("c") == 1, 40, id="complement-line"),
    pytest.param(
        ["t-or-d"],
        lambda d: all(
            {"d", "t"} <= {m.register.kind for m in c.modes.values() if m.register}
            for c in d.cells.values()
        ),
        40,
        id="t-or-d",
    ),
    pytest.param(EVERY, lambda d: set(d.clock_pins) & set(d.input_pins), 60, id="clock-read"),
    pytest.param(EVERY, lambda d: set(d.clock_pins) - set(d.input_pins), 90, id="clock-alone"),
    pytest.param(EVERY, lambda d: any(r.falling for r in d.registers), 40, id="falling"),
    pytest.param(EVERY, lambda d: any(r.power_up == 1 for r in d.registers), 40, id="up-1"),
    pytest.param(
        EVERY, lambda d: any(r.power_up is None for r in d.registers), 20, id="up-unknown"
    ),
    pytest.param(EVERY, lambda d: controls(d, asynchronous=True), 90, id="asynchronous"),
    pytest.param(EVERY, lambda d: controls(d, asynchronous=False), 40, id="at-the-clock"),
    pytest.param(EVERY, lambda d: d.control_pins, 40, id="control-pin"),
    pytest.param(
        EVERY, lambda d: any(c.by[0] == "pin" and c.by[2] == 0 for c in d.controls), 15, id="low"
    ),
    pytest.param(
        EVERY,
        lambda d: any(line and line.kind == "q" for m in modes(d) for line in m.columns.values()),
        150,
        id="q-fed-back",
    ),
    pytest.param(
        EVERY,
        lambda d: any(
            line and line.kind == "pin"
            for m in modes(d)
            if m.register
            for line in m.columns.values()
        ),
        15,
        id="pin-fed-back",
    ),
]


@pytest.mark.parametrize(("classes", "mark", "least"), MARKS)
def test_the_marks_of_the_classes(classes, mark, least):
    assert sum(bool(mark(device)) for which in classes for device in devices(which)) >= least
