"""What a device file says of cells, rows and columns, resolved for each cell and mode."""

from __future__ import annotations

from fractions import Fraction

import pytest
from full_device import device

from pla.device.blocks import role_of
from pla.device.model import ALWAYS, Drop, Enable, Line, OrArray, Signature, Timing

FULL = device()


def mode(key, states):
    return FULL.cell_of[key].mode_of(states)


def test_a_full_file_is_read_without_a_warning():
    assert FULL.warnings == ()
    assert [str(cell) for cell in FULL.cells] == [
        "the cell on pin 7",
        "the cell on pin 8",
        "the cell on pin 9",
        "cell b",
    ]


@pytest.mark.parametrize(
    ("key", "states", "shows", "terms", "enable"),
    [
        pytest.param(7, "00", "sum", (1, 2, 3), Enable("row", 0), id="enable-row"),
        pytest.param(7, "01", "sum'", (1, 2, 3), Enable("row", 0), id="complement"),
        pytest.param(7, "11", "sum", (0, 1, 2, 3), ALWAYS, id="enable-row-as-term"),
        pytest.param(8, "", "sum'", (4, 5, 6), Enable("pin", None, 4, True), id="enable-pin"),
        pytest.param(9, "0", "sum'", (), Enable("row", 7), id="shared-with-enable-row"),
        pytest.param(9, "1", "none", (), Enable("row", 7), id="not-driven"),
        pytest.param("b", "", "none", (), ALWAYS, id="buried"),
    ],
)
def test_modes(key, states, shows, terms, enable):
    found = mode(key, states)
    assert (found.pin, found.terms, found.enable) == (shows, terms, enable)


@pytest.mark.parametrize(
    ("key", "states", "lines"),
    [
        pytest.param(
            7, "00", {6: Line("pin", 7), 7: Line("pin", 7, complement=True)}, id="from-the-pin"
        ),
        pytest.param(
            7, "01", {6: Line("sum", 7, complement=True), 7: Line("sum", 7)}, id="complement-of-sum"
        ),
        pytest.param(7, "11", {6: Line("pin", 3, complement=True), 7: None}, id="by-mode"),
        pytest.param(8, "", {}, id="no-columns"),
        pytest.param(
            9, "0", {9: Line("sum", 9), 10: Line("sum", 9, complement=True)}, id="by-its-name"
        ),
        pytest.param(
            9, "1", {9: Line("pin", 9), 10: Line("pin", 9, complement=True)}, id="name-from-pin"
        ),
        pytest.param("b", "", {11: Line("sum", "b", complement=True)}, id="complement-line-alone"),
    ],
)
def test_what_the_columns_of_a_cell_carry(key, states, lines):
    assert dict(mode(key, states).lines) == lines


def test_columns_that_no_mode_decides():
    fixed = FULL.fixed_lines
    assert fixed[:6] == tuple(
        Line("pin", pin, complement) for pin in (1, 2, 3) for complement in (False, True)
    )
    assert fixed[8] == Line("pin", 9), "a cell with a pin and a name: the level of the pin"
    assert [index for index, line in enumerate(fixed) if line is None] == [6, 7, 9, 10, 11]


def test_rows_and_their_owners():
    assert [cell.rows for cell in FULL.cells] == [(0, 1, 2, 3), (4, 5, 6), (7,), ()]
    assert FULL.or_array == OrArray((9, "b"), (8, 9, 10, 11), (144, 146, 148, 150), 1)
    assert FULL.term_rows == (0, 1, 2, 3, 4, 5, 6, 8, 9, 10, 11)
    assert FULL.cell_of[7].capacity == 4


def test_what_stands_beside_the_arrays():
    assert FULL.drop == Drop((8, 9, 10, 11), (152, 153, 154, 155), 0)
    assert FULL.mode_fuses == ((159, 1),)
    assert FULL.signature == Signature(160, 16, "least significant bit first", 0)
    assert FULL.timing == Timing(*(Fraction(text) for text in ("12.5", "10", "15", "15")))
    assert FULL.family == "fuller"
    assert (FULL.ground, FULL.power, FULL.unconnected) == ((5, 6), (12,), (10, 11))


def test_roles_of_pins():
    assert FULL.input_pins == (1, 2, 3)
    assert FULL.output_pins == (7, 8, 9)
    assert FULL.enable_pins == (4,)


def test_settings_of_unused_cells():
    assert FULL.idle_mode(FULL.cell_of[7]).set == "00", "as 'unused' says"
    assert FULL.idle_mode(FULL.cell_of[9]).set == "1", "blank, for want of another word"


def test_blank_rows_and_pairs():
    # Blank links are apart, so a row is the empty product.
    assert {FULL.blank_row_at(row) for row in range(12)} == {"true"}
    # 7 and 7' are no opposites in mode 11; b' and 9 have no partner.
    assert FULL.paired_sources == (1, 2, 3, "s")
    dropped = device(("dropped = 0", "dropped = 1"))
    assert [dropped.blank_row_at(row) for row in (7, 8, 11)] == ["true", "dead", "dead"]
    assert dropped.blank_row == "true"
    joined = device(("connected = 0", "connected = 1"))
    assert joined.blank_row == "dead"


ROLES = [
    # Row R begins at 12 R; column C is C further.
    pytest.param(0, "joins line 1 to term 0", id="first"),
    pytest.param(4 * 12 + 8, "joins line 9 to term 4", id="level-of-a-named-cell"),
    pytest.param(4 * 12 + 10, "joins line s' to term 4", id="feedback-of-a-named-cell"),
    pytest.param(11 * 12 + 11, "joins line b' to term 11", id="last-of-and"),
    # OR row R of 4 begins at 144 + 2 R and belongs to row 8 + R of the AND array.
    pytest.param(144 + 2 * 1 + 0, "joins term 9 to the sum of pin 9", id="or-of-a-pin"),
    pytest.param(144 + 2 * 3 + 1, "joins term 11 to the sum of cell b", id="or-of-a-buried-cell"),
    pytest.param(154, "is the link that drops term 10", id="drop"),
    pytest.param(157, "is link 'polarity' of the cell on pin 7", id="configuration"),
    pytest.param(159, "selects the device-wide mode: it is 1", id="mode"),
    pytest.param(160, "is bit 0 of the signature", id="signature"),
    pytest.param(176, "is spare", id="spare"),
]


@pytest.mark.parametrize(("fuse", "words"), ROLES)
def test_what_single_fuses_do(fuse, words):
    assert str(role_of(FULL, fuse)) == words


def test_roles_name_the_cell():
    role = role_of(FULL, 151)
    assert (role.kind, role.term, role.column, role.key, role.pin) == ("or", 11, 1, "b", None)
    role = role_of(FULL, 158)
    assert (role.kind, role.key, role.pin, role.bit) == ("cell", 9, 9, "sense")


def test_lists_of_fuses():
    assert [(b.first, b.size, b.what) for b in FULL.blocks()] == [
        *((12 * row, 12, f"term {row}") for row in range(12)),
        *((144 + 2 * row, 2, f"OR links of term {8 + row}") for row in range(4)),
        (152, 4, "drop links"),
        (156, 3, "configuration"),
        (159, 1, "mode"),
        (160, 16, "signature"),
        (176, 2, "spare"),
    ]


def test_or_rows_that_follow_their_own_row_at_once_are_one_list():
    rows = [*range(0, 96, 12), *range(96, 152, 14)]
    found = device(
        ("first_fuse = 0\nterm_step = 12", f"rows = {rows}"),
        ("first_fuse = 144\nterm_step = 2", "first_fuse = 108\nterm_step = 14"),
    )
    assert [(b.first, b.size, b.what) for b in found.blocks()][8:10] == [
        (96, 14, "term 8"),
        (110, 14, "term 9"),
    ]


def test_rows_in_a_mode_count_in_the_order_of_the_cell():
    found = device(('rows = "0..3"', 'rows = ["3", "0..2"]'))
    first = found.cell_of[7]
    assert first.rows == (0, 1, 2, 3)
    assert first.modes[0].enable == Enable("row", 3)
    assert first.modes[0].terms == (0, 1, 2)


FREED = ("unconnected = [10, 11]", "unconnected = [4, 10, 11]")


def test_an_enable_of_the_mode_goes_before_that_of_the_cell_and_the_kind():
    found = device(FREED, ('{ pin = "sum\'" }', '{ pin = "sum\'", enable = "always" }'))
    assert found.cell_of[8].modes[0].enable == ALWAYS
    found = device(
        FREED, ('{ pin = 8, terms = "4..6" }', '{ pin = 8, terms = "4..6", enable = "always" }')
    )
    assert found.cell_of[8].modes[0].enable == ALWAYS
    assert found.enable_pins == ()


def test_an_enable_of_the_cell_goes_before_that_of_the_kind():
    found = device(
        FREED,
        ('terms = "4..6"', 'rows = "4..6", terms = "4..5", enable = 6'),
    )
    assert found.cell_of[8].modes[0].enable == Enable("row", 6)


def test_a_pin_that_only_a_mode_names_is_an_input():
    found = device(('columns = "3\' ."', 'columns = "10 ."'), ("[10, 11]", "[11]"))
    assert found.input_pins == (1, 2, 3, 10)


def test_an_enable_pin_may_be_an_input_as_well():
    found = device(("pin = 4, active", "pin = 3, active"), FREED)
    assert found.enable_pins == (3,)
    assert 3 in found.input_pins


def test_drop_links_listed_one_by_one():
    found = device(("first_fuse = 152", "fuses = [155, 154, 153, 152]"))
    assert found.drop.fuse(8) == 155
    assert found.drop.fuse(7) is None


def test_times_are_exact():
    assert device(("tpd = 12.5", "tpd = 0.1")).timing.tpd == Fraction(1, 10)
