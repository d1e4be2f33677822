"""What every kind of row, link and fuse of a plan is set to."""

from dataclasses import replace

import pytest
from hand_plans import design, minimum, plan
from small_array import small_array

from pla.errors import InternalError
from pla.fitting.model import PlacedEnable, PlacedOutput
from pla.fuses.link import link
from pla.logic.cubes import Cover, Cube

INPUTS = [("a", False, None), ("b", True, None), ("c", False, None)]
PINS = {"a": 1, "b": 2, "c": 3}
ALL_LINES = "1 1' 2 2' 3 3' 4 4' 5 5' 7 7' 8 8' b1' io io' 9"


@pytest.fixture(scope="module")
def device(tmp_path_factory):
    return small_array(tmp_path_factory.mktemp("array"))


def laid_out(device, terms, outputs, settings=(), signature=None, enables=()):
    """A plan of terms (row, text over a b c, outputs fed) with outputs on pins.

    `settings` gives the setting of cells by key, `enables` the row and product of outputs by name.
    """
    wanted = design(
        INPUTS, [(name, False, [], [], None, None) for name in outputs], signature=signature
    )
    modes = {key: device.cell_of[key].mode_of(setting) for key, setting in dict(settings).items()}
    names = list(outputs)
    cubes = [
        Cube.parse(text, sum(1 << names.index(name) for name in fed)) for _, text, fed in terms
    ]
    made = plan(
        device,
        wanted,
        PINS | outputs,
        modes,
        minimum=minimum(Cover.of(3, cubes)),
        rows=tuple(row for row, _, _ in terms),
    )
    switched = {
        name: PlacedEnable(row, None, Cube.parse(text))
        for name, (row, text) in dict(enables).items()
    }
    return replace(
        made, outputs=tuple(replace(o, enable=switched.get(o.name)) for o in made.outputs)
    )


def row_words(device, fuses, row):
    """The lines that a row connects; its drop link where that cuts it off."""
    columns = device.and_array.columns
    joined = [
        str(columns[index])
        for index, fuse in enumerate(device.and_array.fuses_of(row))
        if fuses[fuse] == device.links.connected and columns[index] is not None
    ]
    dropped = device.drop is not None and fuses[device.drop.fuse(row)] == device.drop.dropped
    return " ".join(joined + ["dropped"] * dropped)


def or_words(device, fuses, row):
    links = device.or_array.fuses_of(device.or_array.terms.index(row))
    return [
        key
        for key, fuse in zip(device.or_array.sums, links, strict=True)
        if fuses[fuse] == device.links.connected
    ]


def test_a_literal_joins_the_line_that_is_1_with_it(device):
    made = laid_out(device, [(7, "100", ["fan"]), (9, "-1-", ["fan"])], {"fan": 11})
    fuses = link(made)
    # b is active low: its pin is low while it is 1.
    assert row_words(device, fuses, 7) == "1 2 3'"
    assert row_words(device, fuses, 9) == "2'"


def test_or_links_of_shared_terms(device):
    terms = [(7, "1--", ["fan", "lamp"]), (8, "-1-", ["lamp"])]
    fuses = link(laid_out(device, terms, {"fan": 11, "lamp": 10}))
    assert or_words(device, fuses, 7) == [10, 11]
    assert or_words(device, fuses, 8) == [10]
    assert or_words(device, fuses, 9) == []


def test_rows_of_a_cell_of_its_own(device):
    terms = [(1, "1--", ["fan"])]
    fuses = link(laid_out(device, terms, {"fan": 7}, {7: "10"}, enables={"fan": (0, "--1")}))
    assert row_words(device, fuses, 0) == "3"
    assert row_words(device, fuses, 1) == "1"
    assert row_words(device, fuses, 2) == ALL_LINES
    assert fuses.text(236, 2) == "10"


def test_an_output_without_an_enable_always_drives(device):
    fuses = link(laid_out(device, [(1, "1--", ["fan"])], {"fan": 7}, {7: "11"}))
    assert row_words(device, fuses, 0) == ""


def test_a_term_without_a_literal_joins_no_line(device):
    fuses = link(laid_out(device, [(7, "---", ["fan"])], {"fan": 11}))
    assert row_words(device, fuses, 7) == ""
    assert or_words(device, fuses, 7) == [11]


def test_a_column_with_no_line_stays_blank(device):
    fuses = link(laid_out(device, [(7, "1--", ["fan"])], {"fan": 11}))
    assert {fuses[device.and_array.fuse(row, 14)] for row in range(11)} == {device.links.blank}


@pytest.mark.parametrize(
    ("unused_enable", "words"),
    [
        pytest.param("off", ALL_LINES, id="off"),
        pytest.param("on", "", id="on"),
        # Every link of a blank part is open, the drop link too.
        pytest.param("blank", "", id="blank"),
    ],
)
def test_the_enable_row_of_a_cell_that_nothing_uses(device, unused_enable, words):
    changed = replace(device, links=replace(device.links, unused_enable=unused_enable))
    fuses = link(laid_out(changed, [(7, "1--", ["fan"])], {"fan": 11}))
    assert row_words(changed, fuses, 3) == words


def test_on_and_blank_differ_where_blank_links_join(device):
    links = replace(device.links, blank=0, unused_enable="on")
    changed = replace(device, links=links)
    terms = [(7, "1--", ["fan"])]
    assert row_words(changed, link(laid_out(changed, terms, {"fan": 11})), 3) == ""
    changed = replace(device, links=replace(links, unused_enable="blank"))
    fuses = link(laid_out(changed, terms, {"fan": 11}))
    assert row_words(changed, fuses, 3) == f"{ALL_LINES} dropped"


# Row 2 belongs to a sum in use, row 4 to a cell that nothing uses, row 9 to the shared sums.
OPEN = ("", "", "")
DEAD = (ALL_LINES,) * 3
DROPPED = ("dropped",) * 3


@pytest.mark.parametrize(
    ("technology", "blank", "unused_term", "words"),
    [
        pytest.param("erasable", 1, "dead", DEAD, id="dead"),
        pytest.param("erasable", 1, "drop", DROPPED, id="drop"),
        pytest.param("erasable", 1, "blank", (ALL_LINES, "", ""), id="blank-would-be-1-in-a-sum"),
        # Spare rows of a one-time part stay as they are, unless they would be 1 in a sum.
        pytest.param("one-time", 1, "dead", (ALL_LINES, "", ""), id="one-time-dead"),
        pytest.param("one-time", 1, "drop", ("dropped", "", ""), id="one-time-drop"),
        pytest.param(
            "one-time", 0, "dead", (ALL_LINES + " dropped",) * 3, id="one-time-dead-blank"
        ),
        pytest.param("erasable", 0, "dead", DEAD, id="dead-is-not-dropped"),
        pytest.param("erasable", 0, "blank", (ALL_LINES + " dropped",) * 3, id="dead-when-blank"),
    ],
)
def test_unused_rows(device, technology, blank, unused_term, words):
    links = replace(device.links, blank=blank, unused_term=unused_term)
    changed = replace(device, technology=technology, links=links)
    made = laid_out(changed, [(1, "1--", ["fan"]), (7, "1--", ["lamp"])], {"fan": 7, "lamp": 11})
    fuses = link(made)
    assert tuple(row_words(changed, fuses, row) for row in (2, 4, 9)) == words
    assert row_words(changed, fuses, 1) == row_words(changed, fuses, 7) == "1"


def test_without_drop_links_rows_are_dead(device):
    changed = replace(device, drop=None)
    fuses = link(laid_out(changed, [(7, "1--", ["fan"])], {"fan": 11}))
    assert row_words(changed, fuses, 9) == ALL_LINES


def test_cells_that_nothing_uses_are_idle(device):
    cell = device.cell_of[7]
    changed = replace(
        device, cells=tuple(replace(c, unused="00") if c is cell else c for c in device.cells)
    )
    fuses = link(laid_out(changed, [(7, "1--", ["fan"])], {"fan": 11}))
    assert fuses.text(236, 2) == "00"
    # Its first row is no enable in this mode.
    assert link(laid_out(device, [(7, "1--", ["fan"])], {"fan": 11})).text(236, 2) == "11"


def test_a_cell_whose_pin_is_an_input_is_off(device):
    on = replace(device, links=replace(device.links, unused_enable="on"))
    made = laid_out(on, [(7, "1--", ["fan"])], {"fan": 11})
    assert row_words(on, link(made), 3) == ""
    inputs = (replace(made.inputs[0], pin=8), *made.inputs[1:])
    assert row_words(on, link(replace(made, inputs=inputs)), 3) == ALL_LINES


@pytest.mark.parametrize(
    ("shown", "words"), [(None, ALL_LINES), (8, "")], ids=["hidden", "fed-back-from-the-pin"]
)
def test_an_inner_signal_in_a_cell_with_a_pin(device, shown, words):
    on = replace(device, links=replace(device.links, unused_enable="on"))
    made = laid_out(on, [(7, "1--", ["fan"]), (4, "1--", [])], {"fan": 11})
    cell = on.cell_of[8]
    inner = PlacedOutput(1, "armed", None, False, False, cell.modes[0], cell, None, shown)
    fuses = link(replace(made, outputs=(*made.outputs, inner)))
    assert row_words(on, fuses, 3) == words
    assert row_words(on, fuses, 4) == "1"
    assert row_words(on, fuses, 5) == ALL_LINES


def test_fuses_of_the_device_wide_mode(device):
    made = laid_out(device, [(7, "1--", ["fan"])], {"fan": 11})
    assert link(made)[241] == 0
    other = replace(device, mode_fuses=((241, 1),))
    assert link(replace(made, device=other))[241] == 1


def test_spare_fuses_stay_blank(device):
    assert link(laid_out(device, [(7, "1--", ["fan"])], {"fan": 11})).text(258) == "11"


@pytest.mark.parametrize(
    ("text", "states"),
    [
        # A is 0x41; what the text does not fill stays blank.
        pytest.param("A", "0100000111111111", id="padded"),
        pytest.param("A1", "0100000100110001", id="full"),
        pytest.param(None, "1" * 16, id="none"),
    ],
)
def test_the_signature(device, text, states):
    made = laid_out(device, [(7, "1--", ["fan"])], {"fan": 11}, signature=text)
    assert link(made).text(242, 16) == states


def test_a_signature_that_the_device_cannot_hold_is_an_internal_fault(device):
    made = laid_out(device, [(7, "1--", ["fan"])], {"fan": 11}, signature="ABC")
    with pytest.raises(InternalError, match="3 characters for a signature of 2"):
        link(made)


def test_a_literal_without_a_line_is_an_internal_fault(device):
    made = laid_out(device, [(7, "1--", ["fan"])], {"fan": 11})
    inputs = (replace(made.inputs[0], columns=(None, 1)), *made.inputs[1:])
    with pytest.raises(InternalError, match="a has no line"):
        link(replace(made, inputs=inputs))
