"""The generator of device files and the oracle, held against each other."""

import random

import pytest
from device_classes import CLASSES, random_class_device
from oracles.device_description import read_device_file


@pytest.mark.parametrize("which", CLASSES)
@pytest.mark.parametrize("seed", range(60))
def test_every_fuse_has_one_use_and_every_pin_one_role(which, seed, tmp_path):
    made = random_class_device(random.Random(f"{which} {seed}"), which)
    main = made.write(tmp_path)
    for path in tmp_path.rglob("*.toml"):
        device = read_device_file(path)
        fuses, pins = device.role_counts()
        assert fuses == dict.fromkeys(range(device.fuses), 1)
        assert pins == dict.fromkeys(range(1, device.pins + 1), 1)
    assert read_device_file(main).name == made.name


def devices(which, folder):
    for seed in range(60):
        made = random_class_device(random.Random(f"{which} {seed}"), which)
        yield read_device_file(made.write(folder / str(seed)))


def modes(device):
    return [mode for cell in device.cells.values() for mode in cell.modes.values()]


# What makes a class, and that it really comes about: in how many of 60 devices.
MARKS = [
    pytest.param("fixed", lambda d: {m.shows for m in modes(d)} == {"sum'"}, 60, id="active-low"),
    pytest.param(
        "fixed", lambda d: any(m.enable[0] == "row" for m in modes(d)), 40, id="enable-rows"
    ),
    pytest.param(
        "fixed",
        lambda d: 0 < len({c for c in d.columns if isinstance(c, int)}) < len(d.cells),
        60,
        id="feedback-on-some",
    ),
    pytest.param(
        "modes", lambda d: d.mode_fuses and len(d.drop) == len(d.links), 60, id="drop-links"
    ),
    pytest.param("modes", lambda d: d.signature is not None, 60, id="signature"),
    pytest.param(
        "cells",
        lambda d: all(len({m.terms for m in c.modes.values()}) == 2 for c in d.cells.values()),
        60,
        id="rows-by-mode",
    ),
    pytest.param(
        "buried", lambda d: any(c.pin is None for c in d.cells.values()), 60, id="buried-cells"
    ),
    pytest.param("buried", lambda d: d.columns.count("c") == 1, 60, id="one-complement-line"),
    pytest.param("enable-pin", lambda d: d.enable_pins, 60, id="enable-pin"),
    pytest.param(
        "enable-pin", lambda d: set(d.enable_pins) & set(d.input_pins), 15, id="enable-and-input"
    ),
    pytest.param("enable-pin", lambda d: d.sums, 15, id="shared-with-enable-pin"),
    pytest.param(
        "columns",
        lambda d: any(
            len({m.columns[i] for m in c.modes.values()}) > 1
            for c in d.cells.values()
            for i in next(iter(c.modes.values())).columns
        ),
        60,
        id="columns-by-mode",
    ),
    pytest.param("mixed", lambda d: 0 < len(d.sums) < len(d.cells), 60, id="own-and-shared"),
]


@pytest.mark.parametrize(("which", "mark", "least"), MARKS)
def test_the_marks_of_the_classes(which, mark, least, tmp_path):
    assert sum(bool(mark(device)) for device in devices(which, tmp_path)) >= least
