"""The generator of device files, the oracle and the reader, held against each other."""

import random

import pytest
from device_classes import CLASSES, random_class_device
from oracles.device_description import read_device_file

from pla.device.catalogue import find_device


@pytest.mark.parametrize("which", CLASSES)
@pytest.mark.parametrize("seed", range(25))
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
    for seed in range(30):
        made = random_class_device(random.Random(f"{which} {seed}"), which)
        yield read_device_file(made.write(folder / str(seed)))


def modes(device):
    return [mode for cell in device.cells.values() for mode in cell.modes.values()]


# What makes a class, and that it really comes about: in how many of 30 devices.
MARKS = [
    pytest.param("fixed", lambda d: {m.shows for m in modes(d)} == {"sum'"}, 30, id="active-low"),
    pytest.param(
        "fixed", lambda d: any(m.enable[0] == "row" for m in modes(d)), 20, id="enable-rows"
    ),
    pytest.param(
        "fixed",
        lambda d: 0 < len({c for c in d.columns if isinstance(c, int)}) < len(d.cells),
        30,
        id="feedback-on-some",
    ),
    pytest.param(
        "modes", lambda d: d.mode_fuses and len(d.drop) == len(d.links), 30, id="drop-links"
    ),
    pytest.param("modes", lambda d: d.signature is not None, 30, id="signature"),
    pytest.param(
        "cells",
        lambda d: all(len({m.terms for m in c.modes.values()}) == 2 for c in d.cells.values()),
        30,
        id="rows-by-mode",
    ),
    pytest.param(
        "buried", lambda d: any(c.pin is None for c in d.cells.values()), 30, id="buried-cells"
    ),
    pytest.param("buried", lambda d: d.columns.count("c") == 1, 30, id="one-complement-line"),
    pytest.param("enable-pin", lambda d: d.enable_pins, 30, id="enable-pin"),
    pytest.param(
        "enable-pin", lambda d: set(d.enable_pins) & set(d.input_pins), 7, id="enable-and-input"
    ),
    pytest.param("enable-pin", lambda d: d.sums, 7, id="shared-with-enable-pin"),
    pytest.param(
        "columns",
        lambda d: any(
            len({m.columns[i] for m in c.modes.values()}) > 1
            for c in d.cells.values()
            for i in next(iter(c.modes.values())).columns
        ),
        30,
        id="columns-by-mode",
    ),
    pytest.param("mixed", lambda d: 0 < len(d.sums) < len(d.cells), 30, id="own-and-shared"),
]


@pytest.mark.parametrize(("which", "mark", "least"), MARKS)
def test_the_marks_of_the_classes(which, mark, least, tmp_path):
    assert sum(bool(mark(device)) for device in devices(which, tmp_path)) >= least


def line_of(line):
    return None if line is None else (line.kind, line.of, line.complement)


def enable_of(enable):
    return {
        "always": ("always",),
        "row": ("row", enable.row),
        "pin": ("pin", enable.pin, 0 if enable.active_low else 1),
    }[enable.kind]


@pytest.mark.parametrize("which", CLASSES)
@pytest.mark.parametrize("seed", range(20))
def test_the_reader_sees_what_the_oracle_sees(which, seed, tmp_path):
    made = random_class_device(random.Random(f"{which} {seed}"), which)
    path = made.write(tmp_path)
    device, true = find_device(str(path)), read_device_file(path)
    assert not device.warnings
    assert [list(device.and_array.fuses_of(row)) for row in range(device.terms)] == true.links
    assert (device.links.blank, device.links.connected) == (true.blank, true.connected)
    sums = {}
    for key, column in device.or_column.items():
        by_row = enumerate(device.or_array.terms)
        sums[key] = {term: device.or_array.fuse(row, column) for row, term in by_row}
    assert sums == true.sums
    assert dict(device.mode_fuses) == true.mode_fuses
    drop = device.drop
    assert (dict(zip(drop.terms, drop.fuses, strict=True)) if drop else {}) == true.drop
    assert (drop.dropped if drop else None) == true.dropped
    assert list(device.input_pins) == true.input_pins
    assert list(device.enable_pins) == true.enable_pins
    assert [line_of(line) for line in device.fixed_lines] == [
        None if line is None or not hasattr(line, "kind") else line_of(line)
        for line in true.columns
    ]
    for cell in device.cells:
        its = true.cells[cell.key]
        assert (cell.pin, cell.name, list(cell.links)) == (its.pin, its.name, its.links)
        assert {mode.set for mode in cell.modes} == set(its.modes)
        for mode in cell.modes:
            other = its.modes[mode.set]
            assert mode.pin == other.shows
            assert mode.terms == (other.terms or ())
            assert enable_of(mode.enable) == other.enable
            assert {c: line_of(line) for c, line in mode.lines} == {
                c: line_of(line) for c, line in other.columns.items()
            }
    if true.signature is not None:
        assert device.signature.fuses == true.signature.fuses
        assert device.signature.ones == true.signature.ones
        assert device.signature.order.startswith("most") == true.signature.first_is_highest
