"""An exercise made from a wrong description, burnt into a part that the true one describes.

The part is simulated by the oracle from the true device file. Every slip in the description must
show at the pins, at a step for which the wrong description expects something else.
"""

# ruff: noqa: E501 - edits quote whole lines of device files

import shutil
from pathlib import Path

import pytest
from oracles.device_description import read_device_file
from oracles.fuse_file import read_transmission
from simulated_part import measured, surely_differ

from pla.device.catalogue import find_device
from pla.errors import InputError
from pla.exercise.fuse_file import exercise_file
from pla.exercise.program import exercise

DEVICES = Path(__file__).parents[2] / "devices"


def slip(device, what, *edits):
    # Its exercise takes some seconds.
    slow = device == "shared-10x28x4" and what not in {
        "or-columns",
        "empty-column-and-complement-line",
    }
    marks = [pytest.mark.slow] if slow else []
    return pytest.param(device, edits, id=f"{device}-{what}", marks=marks)


# Each edit is (text of the true file, text of the wrong one); the first place is changed.
SLIPS = [
    # columns
    slip("shared-8x16x4", "columns-of-two-pins", ('"1 1\' 2 2\'', '"2 2\' 1 1\'')),
    slip("shared-8x16x4", "complement-first", ("4 4'", "4' 4")),
    slip("gate-9x6", "lines-of-two-pins", ("5 5' 6 6'", "5 6' 6 5'")),
    slip("gate-9x6", "columns-from-the-other-end",
         ("1 1' 2 2' 3 3' 4 4' 5 5' 6 6' 7 7' 8 8' 10 10'",
          "10' 10 8' 8 7' 7 6' 6 5' 5 4' 4 3' 3 2' 2 1' 1")),
    slip("own-9x5", "columns-of-a-cell-and-a-pin", ("14 14' 4 4'", "4 4' 14 14'")),
    slip("own-9x5", "columns-of-two-cells", ("14 14' 4 4' 13 13'", "13 13' 4 4' 14 14'")),
    slip("modal-8x4-plain", "two-true-lines", ('"1 2 3 4 5', '"1 2 4 3 5')),
    slip("modal-8x4-gated", "true-and-complement-blocks",
         ("1 2 3 4 5 6 8 9 10 11 12 13 1' 2' 3' 4' 5' 6' 8' 9' 10' 11' 12' 13'",
          "1' 2' 3' 4' 5' 6' 8' 9' 10' 11' 12' 13' 1 2 3 4 5 6 8 9 10 11 12 13")),
    slip("shared-10x28x4", "empty-column-and-complement-line", (". c'", "c' .")),
    slip("shared-10x28x4", "true-line-for-complement-line", ("c'\"", 'c"')),
    slip("joint-10x27x6", "pin-and-sum-of-a-cell", ("12 12' u u'", "u u' 12 12'")),
    # polarity
    slip("gate-9x6", "polarity-of-a-kind",
         ('modes = [ { set = "1", pin = "sum" }, { set = "0", pin = "sum\'" } ]',
          'modes = [ { set = "0", pin = "sum" }, { set = "1", pin = "sum\'" } ]')),
    slip("own-9x5", "active-low-for-active-high",
         ('{ set = "", pin = "sum\'" }', '{ set = "", pin = "sum" }')),
    slip("shared-10x24x6", "sense-of-every-output", ('pin = "sum\'"', 'pin = "sum"')),
    # feedback
    slip("shared-10x28x4", "feedback-of-buried-sums", ('set = "", feedback = "sum"', 'set = "", feedback = "sum\'"')),
    slip("modal-8x4-plain", "feedback-sense",
         ('pin = "sum\'", feedback = "sum\'"', 'pin = "sum\'", feedback = "sum"'),
         ('pin = "sum",  feedback = "sum"', 'pin = "sum",  feedback = "sum\'"')),
    slip("modal-8x4-split", "feedback-sense",
         ('set = "0", pin = "sum\'", feedback = "sum"', 'set = "0", pin = "sum\'", feedback = "sum\'"')),
    slip("joint-10x27x6", "feedback-sense", ('"sum",  feedback = "sum"', '"sum",  feedback = "sum\'"'),
         ('pin = "sum\'", feedback = "sum"', 'pin = "sum\'", feedback = "sum\'"')),
    # rows and steps
    slip("modal-8x4-plain", "rows-of-two-cells",
         ('{ pin = 13, rows = "0..5",', '{ pin = 13, rows = "18..23",'),
         ('{ pin = 10, rows = "18..23",', '{ pin = 10, rows = "0..5",')),
    slip("own-9x5", "rows-of-two-cells",
         ('pin = 14, enable = 6,  terms = "7..11"', 'pin = 14, enable = 12,  terms = "13..17"'),
         ('pin = 13, enable = 12, terms = "13..17"', 'pin = 13, enable = 6, terms = "7..11"')),
    slip("gate-9x6", "cells-from-the-other-end",
         ('pin = 12, terms = "0..3"', 'pin = 14, terms = "0..3"'),
         ('pin = 14, terms = "8..11"', 'pin = 12, terms = "8..11"')),
    slip("swap-8x4", "a-cell's-rows-shifted",
         ("0, 20, 40, 60, 80, 100, ", "20, 40, 60, 80, 100, 0, ")),
    slip("shared-10x28x4", "enable-rows-shifted",
         ("1064, 1096, 1128, 1160", "1096, 1128, 1160, 1064")),
    slip("shared-8x16x4", "or-links-first",
         ("[and]", "[and] #"), ("first_fuse = 0", "first_fuse = 4"),
         ("first_fuse = 16", "first_fuse = 0")),
    slip("shared-10x24x6", "rows-and-columns-exchanged",
         ("term_step = 20\ncolumn_step = 1", "term_step = 1\ncolumn_step = 24")),
    slip("shared-10x24x6", "or-rows-and-columns-exchanged",
         ("term_step = 6\ncolumn_step = 1", "term_step = 1\ncolumn_step = 24")),
    slip("gate-9x6", "rows-and-columns-exchanged",
         ("term_step = 1\ncolumn_step = 24", "term_step = 18\ncolumn_step = 1")),
    slip("joint-10x27x6", "columns-one-way-for-the-other",
         ("first_fuse = 85\nterm_step = 26\ncolumn_step = -1",
          "first_fuse = 60\nterm_step = 26\ncolumn_step = 1")),
    slip("modal-8x4-plain", "first-fuse-one-off",
         ("first_fuse = 6\n", "first_fuse = 5\n"), ("links = [5]", "links = [581]")),
    # links
    slip("gate-9x6", "joining-state", ("connected = 0", "connected = 1")),
    slip("shared-10x24x6", "joining-state", ("connected = 0", "connected = 1")),
    slip("modal-8x4-plain", "dropping-state", ("dropped = 0", "dropped = 1")),
    # cells
    slip("gate-9x6", "polarity-links-of-two-cells",
         ("links = [437]", "links = [436]"), ('"4..7",  links = [436]', '"4..7",  links = [437]')),
    slip("shared-10x28x4", "polarity-links-of-two-cells",
         ("links = [1195]", "links = [1192]"), ("28, links = [1192]", "28, links = [1195]")),
    slip("shared-8x16x4", "or-columns", ('"13 12 11 10"', '"10 11 12 13"')),
    slip("joint-10x27x6", "or-columns", ('"17 16 15 14"', '"16 17 15 14"')),
    # enables
    slip("gate-9x6", "active-level-of-an-enable-pin", ('active = "low"', 'active = "high"')),
    slip("gate-9x6", "enable-pins-of-two-kinds",
         ("enable = { pin = 11 }\nmodes", 'enable = { pin = 10, active = "low" }  \nmodes'),
         ('{ pin = 10, active = "low" }\nmodes', "{ pin = 11 }\nmodes")),
    slip("modal-8x4-split", "active-level-of-an-enable-pin", ('active = "low"', 'active = "high"')),
    slip("own-9x5", "enable-row-and-a-term",
         ('pin = 15, enable = 0,  terms = "1..5"', 'pin = 15, enable = 5,  terms = "0..4"')),
    slip("modal-8x4-gated", "enable-rows-last",
         ('enable = 0, terms = "1..5"', 'enable = 5, terms = "0..4"')),
    slip("shared-10x28x4", "enable-rows-of-two-cells",
         ("pin = 12, enable = 31", "pin = 12, enable = 30"),
         ("pin = 13, enable = 30", "pin = 13, enable = 31")),
]  # fmt: skip

# The cells of the first part are not set in a way in which these would show.
SLIPS_OF_LATER_PARTS = [
    slip("shared-10x28x4", "or-columns-of-buried-cells", ("13 12 b c", "13 12 c b")),
    slip("swap-8x4", "links-of-a-cell", ("links = [120, 121]", "links = [121, 120]")),
    slip("swap-8x4", "neighbouring-columns", ("4 4' 11 11'", "4 11 4' 11'")),
    slip("swap-8x4", "polarity-of-one-mode",
         ('{ set = "01", pin = "sum",  columns = "8 8\'"', '{ set = "01", pin = "sum\'",  columns = "8 8\'"'),
         ('{ set = "11", pin = "sum\'", columns = "8 8\'"', '{ set = "11", pin = "sum", columns = "8 8\'"')),
    slip("modal-8x4-gated", "feedback-from-the-sum",
         ('pin = "sum\'", feedback = "pin"', 'pin = "sum\'", feedback = "sum\'"'),
         ('pin = "sum",  feedback = "pin"', 'pin = "sum",  feedback = "sum"')),
]  # fmt: skip


def wrong_file(folder, device, edits):
    """The device files with the edits in the first of the two (it or what it extends) that fits."""
    for path in DEVICES.glob("*.toml"):
        shutil.copy(path, folder)
    path = folder / f"{device}.toml"
    text = path.read_text("utf-8")
    base = folder / "modal-8x4-plain.toml"
    for old, new in edits:
        if old in text:
            text = text.replace(old, new, 1)
            continue
        assert old in base.read_text("utf-8"), old
        base.write_text(base.read_text("utf-8").replace(old, new, 1), "utf-8")
    path.write_text(text, "utf-8")
    return path


def exercised(path, most=1):
    """For each part of the command's exercise its expected readings, steps and fuse file."""
    for number, own in enumerate(exercise(find_device(str(path)), most).parts, 1):
        data = exercise_file(own, number, "exercise.jed", with_vectors=True)
        steps = [dict(step.levels) for step in own.part.steps]
        yield own.expected, steps, read_transmission(data).states


@pytest.mark.parametrize(("device", "edits"), SLIPS)
def test_a_slip_shows_at_the_pins(device, edits, tmp_path):
    path = wrong_file(tmp_path, device, edits)
    truth = read_device_file(DEVICES / f"{device}.toml")
    ((expected, steps, states),) = exercised(path)
    assert surely_differ(expected, measured(truth, states, steps))


@pytest.mark.parametrize(("device", "edits"), SLIPS_OF_LATER_PARTS)
def test_a_slip_shows_at_one_of_some_parts(device, edits, tmp_path):
    path = wrong_file(tmp_path, device, edits)
    truth = read_device_file(DEVICES / f"{device}.toml")
    assert any(
        surely_differ(expected, measured(truth, states, steps))
        for expected, steps, states in exercised(path, most=4)
    )


@pytest.mark.parametrize("device", sorted({param.values[0] for param in SLIPS}))
def test_nothing_shows_where_the_description_is_true(device):
    path = DEVICES / f"{device}.toml"
    for expected, steps, states in exercised(path):
        assert measured(read_device_file(path), states, steps) == expected


REFUSED = [
    slip("own-9x5", "joining-state", ("connected = 0 ", "connected = 1 ")),
    slip("shared-8x16x4", "row-step-one-off", ("term_step = 20 ", "term_step = 21 ")),
    slip("shared-10x24x6", "or-step-one-off", ("term_step = 6", "term_step = 5")),
    slip("own-9x5", "first-fuse-one-off", ("first_fuse = 0", "first_fuse = 1")),
    slip("gate-9x6", "column-step-one-off", ("column_step = 24", "column_step = 23")),
    slip("joint-10x27x6", "or-block-one-off", ("first_fuse = 0", "first_fuse = 1")),
    slip("swap-8x4", "a-row-one-off", ("[0, 20,", "[0, 21,")),
    slip("gate-9x6", "links-twice", ("links = [437]", "links = [436]")),
    slip("own-9x5", "a-row-twice", ('enable = 6,  terms = "7..11"', 'enable = 5,  terms = "7..11"')),
    slip("shared-8x16x4", "an-or-column-twice", ('"13 12 11 10"', '"13 12 11 11"')),
]  # fmt: skip


@pytest.mark.parametrize(("device", "edits"), REFUSED)
def test_a_slip_that_the_reader_refuses(device, edits, tmp_path):
    path = wrong_file(tmp_path, device, edits)
    with pytest.raises(InputError) as refused:
        find_device(str(path))
    assert all(d.location is not None for d in refused.value.diagnostics)


def test_there_are_thirty_slips():
    assert len(SLIPS) >= 30
