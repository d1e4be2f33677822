"""A fuse file made, read back and proven in one go."""

from dataclasses import replace

import pytest
from hand_plans import minimum
from small_array import small_array
from test_faults import passing

from pla.errors import InputError, InternalError
from pla.fitting.model import PlacedEnable, PlacedOutput
from pla.fuses.jesd3 import read_fuse_file
from pla.fuses.program import fuse_file
from pla.logic.cubes import Cover, Cube


@pytest.fixture(scope="module")
def device(tmp_path_factory):
    return small_array(tmp_path_factory.mktemp("array"))


def passing_plan(device, up_while, down_while, enables):
    """Two bidirectional pins in rows 1 and 4, with the enables given in rows 0 and 3."""
    made = passing(device, up_while, down_while)
    mode = device.cell_of[7].mode_of("10")
    outputs = tuple(
        replace(
            o, mode=mode if o.pin == 7 else o.mode, enable=PlacedEnable(row, None, Cube.parse(e))
        )
        for o, row, e in zip(made.outputs, (0, 3), enables, strict=True)
    )
    # Columns 10 to 13 are 7 7' 8 8'.
    inputs = (
        *made.inputs[:2],
        replace(made.inputs[2], columns=(10, 11)),
        replace(made.inputs[3], columns=(12, 13)),
    )
    modes = dict(made.modes) | {7: mode, 8: device.cell_of[8].mode_of("0")}
    cover = Cover.of(4, [Cube.parse("---1", 1), Cube.parse("--1-", 2)])
    return replace(
        made, inputs=inputs, outputs=outputs, modes=modes, minimum=minimum(cover), rows=(1, 4)
    )


def test_notes(device):
    made = passing_plan(device, {1}, {2}, ("10--", "01--"))
    cell = device.cell_of["b1"]
    inner = PlacedOutput(2, "armed", None, False, False, cell.modes[0], cell)
    cell = device.cell_of[9]
    shown = PlacedOutput(3, "ready", None, False, False, cell.modes[1], cell, None, 9)
    made = replace(
        made,
        outputs=(*made.outputs, inner, shown),
        tied=((5, 1),),
        modes=dict(made.modes) | {9: cell.modes[1]},
    )
    data = fuse_file(made, "panel.jed").data
    notes = read_fuse_file(data, "panel.jed").notes
    assert notes[1:] == (
        "device everything-5x11x6",
        "design panel",
        "pin 1 input a",
        "pin 2 input b",
        "pin 7 input up_in",
        "pin 7 output up, driven while rd",
        "pin 8 input down_in",
        "pin 8 output down, driven while rd",
        "pin 5 enables outputs, tie high",
        "cell b1 inner armed",
        "cell 9 inner ready, shows at pin 9",
    )


def test_a_design_that_holds_itself_is_refused(device):
    made = passing_plan(device, {1, 3}, {2, 3}, ("1---", "-1--"))
    with pytest.raises(InputError, match="up depends on itself by way of") as caught:
        fuse_file(made, "panel.jed")
    (found,) = caught.value.diagnostics
    assert found.code == "HOLDS-ITSELF"
    assert (found.location.file, found.location.line) == ("panel.toml", 1)
    assert "never more than one is 1" in found.hint


def test_a_plan_that_is_not_the_design_is_an_internal_fault(device):
    made = passing_plan(device, {1}, {2}, ("1---", "01--"))
    with pytest.raises(InternalError, match="not equal to the design: up drives pin 7 where"):
        fuse_file(made, "panel.jed")
