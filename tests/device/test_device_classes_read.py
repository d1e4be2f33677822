"""Random devices of every class: the reader and the oracle, which share no code, say the same."""

from __future__ import annotations

import random

import pytest
from device_classes import CLASSES, random_class_device
from oracles.device_description import read_device_file

from pla.device.blocks import role_of
from pla.device.reader import read_device
from pla.report.device_json import describe
from pla.report.device_text import draw, explain, fuse_table, pin_table


def pair(which, seed, folder):
    path = random_class_device(random.Random(f"{which} {seed}"), which).write(folder)
    return read_device(str(path)), read_device_file(path)


def enable(found):
    if found.kind == "pin":
        return ("pin", found.pin, 0 if found.active_low else 1)
    return ("row", found.row) if found.kind == "row" else ("always",)


def line(found):
    return None if found is None else (found.kind, found.of, found.complement)


@pytest.mark.parametrize("which", CLASSES)
@pytest.mark.parametrize("seed", range(12))
def test_cells_modes_and_columns(which, seed, tmp_path):
    device, expected = pair(which, seed, tmp_path)
    assert list(device.cell_of) == list(expected.cells)
    for cell, other in zip(device.cells, expected.cells.values(), strict=True):
        assert (cell.pin, cell.name, list(cell.links)) == (other.pin, other.name, other.links)
        assert cell.rows == tuple(sorted(other.rows))
        for mode in cell.modes:
            wanted = other.modes[mode.set]
            assert mode.pin == wanted.shows
            assert mode.terms == tuple(sorted(wanted.terms or ()))
            if cell.pin is not None:
                assert enable(mode.enable) == wanted.enable
            carried = {column: line(found) for column, found in mode.lines}
            assert carried == {column: line(found) for column, found in wanted.columns.items()}
    assert list(device.input_pins) == expected.input_pins
    assert list(device.enable_pins) == expected.enable_pins


@pytest.mark.parametrize("which", CLASSES)
@pytest.mark.parametrize("seed", range(12))
def test_what_every_fuse_does(which, seed, tmp_path):
    device, expected = pair(which, seed, tmp_path)
    wanted = dict.fromkeys(expected.spare, ("spare",))
    for row, fuses in enumerate(expected.links):
        wanted.update({fuse: ("and", row, column) for column, fuse in enumerate(fuses)})
    for key, by_row in expected.sums.items():
        wanted.update({fuse: ("or", row, key) for row, fuse in by_row.items()})
    for key, cell in expected.cells.items():
        wanted.update({fuse: ("cell", key, index) for index, fuse in enumerate(cell.links)})
    wanted.update({fuse: ("drop", row) for row, fuse in expected.drop.items()})
    wanted.update({fuse: ("mode", state) for fuse, state in expected.mode_fuses.items()})
    if expected.signature is not None:
        fuses = expected.signature.fuses
        wanted.update({fuse: ("signature", index) for index, fuse in enumerate(fuses)})

    def as_told(role):
        details = {
            "and": (role.term, role.column),
            "or": (role.term, role.key),
            "drop": (role.term,),
            "mode": (role.state,),
            "signature": (role.column,),
            "spare": (),
        }
        if role.kind == "cell":
            return ("cell", role.key, device.cell_of[role.key].bits.index(role.bit))
        return (role.kind, *details[role.kind])

    assert {fuse: as_told(role_of(device, fuse)) for fuse in range(device.fuses)} == wanted


@pytest.mark.parametrize("which", CLASSES)
@pytest.mark.parametrize("seed", range(12))
def test_any_device_can_be_explained_and_drawn(which, seed, tmp_path):
    device, _ = pair(which, seed, tmp_path)
    text = explain(device)
    assert max(map(len, text.splitlines())) <= 100
    assert max(map(len, draw(device).splitlines())) <= 100
    assert len(pin_table(device)) == device.pins
    assert sum(int(row[1]) for row in fuse_table(device)) == device.fuses
    assert len(describe(device)["row_uses"]) == device.terms
    listed = [f for b in device.blocks() for f in range(b.first, b.first + b.size)]
    assert listed == list(range(device.fuses))
