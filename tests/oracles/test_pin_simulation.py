"""The oracle's own tests: small devices of every class, whose levels can be read off the drawing.

A device file here is written so that one row of links stands as one word in `FUSES` texts.
"""

import pytest
from oracles.device_description import read_device
from oracles.fuse_file import UnreadableError
from oracles.pin_simulation import LoopError, every_case, signature_text, simulate


def states(text):
    return [int(state) for state in text if state in "01"]


def run(text, fuses, inputs, others=None, load=None):
    """Levels as text by pin; `inputs` count up, `others` are driven as `01Z` text says."""
    device = read_device(text, load)
    cases = 1 << len(inputs)
    everywhere = (1 << cases) - 1
    drivers = {pin: (everywhere, level) for pin, level in every_case(inputs).items()}
    for pin, levels in (others or {}).items():
        assert len(levels) == cases
        drivers[pin] = (
            sum(1 << k for k, sign in enumerate(levels) if sign != "Z"),
            sum(1 << k for k, sign in enumerate(levels) if sign == "1"),
        )
    found = simulate(device, states(fuses), drivers, cases)
    return {pin: level.text(cases) for pin, level in found.pins.items() if pin in device.cell_pins}


# Inputs 1 and 2; cell 4: enable row 0, terms 1 and 2, shows the complement, feedback from the pin;
# cell 5: terms 3 and 4, no enable, no feedback. Open (1) is unconnected. Rows: 1 1' 2 2' 4 4'.
OWN = """
name = "own"
technology = "one-time"
pins = 6
fuses = 30
ground = 3
power = 6
[links]
blank = 1
connected = 0
unused_term = "dead"
unused_enable = "off"
[and]
columns = "1 1' 2 2' 4 4'"
terms = 5
first_fuse = 0
term_step = 6
[kind.fed]
bits = []
modes = [ { set = "", pin = "sum'", feedback = "pin" } ]
cells = [ { pin = 4, links = [], enable = 0, terms = "1..2" } ]
[kind.plain]
bits = []
modes = [ { set = "", pin = "sum'" } ]
cells = [ { pin = 5, links = [], terms = ["3", 4] } ]
"""
DEAD = "001111"


@pytest.mark.parametrize(
    ("rows", "four", "five"),
    [
        # Cases: (pin 1, pin 2) = 00, 10, 01, 11.
        pytest.param(["111111", "010111", DEAD, "011111", "110111"], "1110", "1000", id="sums"),
        pytest.param(["110111", "011111", DEAD, DEAD, DEAD], "ZZ10", "1111", id="enable-row"),
        pytest.param([DEAD, "011111", DEAD, DEAD, DEAD], "ZZZZ", "1111", id="dead-enable"),
        pytest.param(["111111", "011111", DEAD, "111101", DEAD], "1010", "0101", id="feedback"),
        pytest.param(
            ["110111", "011111", DEAD, "111110", DEAD], "ZZ10", "??10", id="read-floating"
        ),
        # 1' in the AND is 0 in cases 10 and 11, whatever the floating pin 4 is.
        pytest.param(
            ["110111", "011111", DEAD, "101110", DEAD], "ZZ10", "?111", id="0-decides-an-and"
        ),
        # A term that is 1 decides the OR likewise.
        pytest.param(
            ["110111", "011111", DEAD, "111110", "011111"], "ZZ10", "?010", id="1-decides-an-or"
        ),
        pytest.param([DEAD, DEAD, DEAD, "111100", DEAD], "ZZZZ", "1111", id="dead-by-floating"),
    ],
)
def test_own_or_gates_and_enable_rows(rows, four, five):
    assert run(OWN, " ".join(rows), [1, 2]) == {4: four, 5: five}


@pytest.mark.parametrize(
    ("outside", "four", "five"),
    [
        # The part drives pin 4 in cases 01 and 11 with 1 and 0; term 3 is pin 4, term 4 dead.
        pytest.param("00ZZ", "0010", "1101", id="while-disabled"),
        pytest.param("1ZZZ", "1Z10", "0?01", id="once"),
        pytest.param("0010", "0010", "1101", id="both-at-one-level"),
        pytest.param("0001", "00??", "11??", id="contention"),
    ],
)
def test_a_pin_driven_from_outside(outside, four, five):
    fuses = f"110111 011111 {DEAD} 111101 {DEAD}"
    assert run(OWN, fuses, [1, 2], {4: outside}) == {4: four, 5: five}


def test_an_input_that_nobody_drives():
    # Term 1 is 1·2, term 3 is 1: pin 2 floats.
    fuses = f"111111 010111 {DEAD} 011111 {DEAD}"
    assert run(OWN, fuses, [1]) == {4: "1?", 5: "10"}


@pytest.mark.parametrize(
    "rows",
    [
        pytest.param(["111111", "111101", DEAD, DEAD, DEAD], id="sum-of-itself"),
        pytest.param(["111110", "011111", DEAD, DEAD, DEAD], id="enable-of-itself"),
    ],
)
def test_loops(rows):
    with pytest.raises(LoopError, match="pin 4"):
        run(OWN, " ".join(rows), [1, 2])


@pytest.mark.parametrize(
    "rows",
    [
        pytest.param(["111111", "001101", DEAD, DEAD, DEAD], id="through-a-dead-row"),
        pytest.param([DEAD, "111101", DEAD, DEAD, DEAD], id="through-a-pin-that-is-off"),
    ],
)
def test_rings_without_effect(rows):
    assert run(OWN, " ".join(rows), [1, 2])[5] == "1111"


# Two device-wide modes: fuse 20 is 0 in the one, 1 in the other. Cell 3 owns rows 0 to 2, cell 4
# rows 3 and 4. A drop link of 0 cuts its row off. The signature is at 21. Rows: 1 1' 3 3' and the
# drop links of rows 0 to 4 from fuse 33 down.
BASE = """
name = "base"
technology = "erasable"
pins = 5
fuses = 35
ground = 2
power = 5
spare = [34]
[set]
20 = 0
[links]
blank = 1
connected = 0
unused_term = "drop"
[and]
columns = "1 1' 3 3'"
terms = 5
first_fuse = 0
term_step = 4
[drop]
dropped = 0
first_fuse = 33
term_step = -1
[kind.three]
bits = []
modes = [ { set = "", pin = "sum", terms = "0..2", feedback = "sum" } ]
cells = [ { pin = 3, links = [], rows = "0..2" } ]
[kind.four]
bits = []
modes = [ { set = "", pin = "sum'" } ]
cells = [ { pin = 4, links = [], terms = "3..4" } ]
[signature]
first_fuse = 21
bits = 8
order = "most significant bit first"
"""

OTHER = """
name = "other"
extends = "sub/base.toml"
[set]
20 = 1
[links]
unused_enable = "on"
[kind.three]
modes = [ { set = "", pin = "sum'", terms = "1..2", enable = 0, feedback = "pin" } ]
"""


def load(path):
    assert path == "sub/base.toml"
    return BASE


@pytest.mark.parametrize(
    ("text", "fuses", "three", "four"),
    [
        # Row 0: 1. Rows 1, 2 cut off. Row 3: 3. Row 4 cut off.
        pytest.param(
            BASE, "0111 1111 1111 1101 1111 0 01000001 01001 1", "01", "10", id="one-mode"
        ),
        # The same rows with row 0 as enable; row 1 in, with no line: 1; pin 3 shows its complement.
        pytest.param(
            OTHER, "0111 1111 1111 1101 1111 1 01000001 01011 1", "Z0", "?1", id="other-mode"
        ),
        # The enable row cut off.
        pytest.param(
            OTHER, "0111 1111 1111 0111 1111 1 01000001 01010 1", "ZZ", "10", id="enable-dropped"
        ),
    ],
)
def test_device_wide_modes_and_drop_links(text, fuses, three, four):
    assert run(text, fuses, [1], load=load) == {3: three, 4: four}


def test_a_fuse_file_of_another_mode():
    with pytest.raises(UnreadableError, match="mode fuse 20 is 1"):
        run(BASE, "0" * 20 + "1" + "0" * 14, [1])
    with pytest.raises(UnreadableError, match="mode fuse 20 is 0"):
        run(OTHER, "0" * 35, [1], load=load)


@pytest.mark.parametrize(
    ("order", "ones", "fuses", "text"),
    [
        pytest.param("most", 1, "01000001", "A", id="high-first"),
        pytest.param("least", 1, "10000010", "A", id="low-first"),
        pytest.param("most", 0, "10111110", "A", id="closed-is-1"),
        pytest.param("most", 1, "11111111", "", id="blank"),
    ],
)
def test_signature(order, ones, fuses, text):
    changed = BASE.replace('order = "most', f'ones = {ones}\norder = "{order}')
    device = read_device(changed)
    assert signature_text(device, states("0" * 21 + fuses + "0" * 6)) == text


def test_signature_that_is_no_text():
    with pytest.raises(UnreadableError, match="no text"):
        signature_text(read_device(BASE), states("0" * 21 + "00000001" + "0" * 6))


# One cell with three links: polarity, source of the feedback, and whether its first row is an
# enable or a term. Pin 1 in; cell 2 owns rows 0 to 2; cell 3 shows row 3. Rows: 1 1' 2 2'.
MODES = """
name = "modes"
technology = "erasable"
pins = 5
fuses = 19
ground = 4
power = 5
[links]
blank = 0
connected = 1
unused_term = "dead"
unused_enable = "blank"
[and]
columns = "1 1' 2 2'"
terms = 4
first_fuse = 3
term_step = 4
[kind.io]
bits = ["polarity", "feedback", "row"]
modes = [
  { set = "000", pin = "sum", feedback = "sum", terms = "0..2", enable = "always" },
  { set = "100", pin = "sum'", feedback = "sum", terms = "0..2", enable = "always" },
  { set = "010", pin = "sum", feedback = "sum'", terms = "0..2", enable = "always" },
  { set = "001", pin = "sum", feedback = "pin", terms = "1..2", enable = 0 },
  { set = "101", pin = "sum'", feedback = "none", terms = "1..2", enable = 0 },
  { set = "111", pin = "none", feedback = "sum'", terms = "1..2", enable = 0 },
]
cells = [ { pin = 2, links = [2, 0, 1], rows = "0..2" } ]
[kind.seen]
bits = []
modes = [ { set = "", pin = "sum" } ]
cells = [ { pin = 3, links = [], terms = 3 } ]
"""


@pytest.mark.parametrize(
    ("setting", "two", "three"),
    [
        # Row 0: 1. Rows 1 and 2 dead, or row 1: 1'. Row 3: the unprimed column.
        pytest.param("000", "01", "01", id="sum"),
        pytest.param("100", "10", "01", id="sum-before-polarity"),
        pytest.param("010", "01", "10", id="complement-of-the-sum"),
        pytest.param("001", "Z0", "?0", id="enable-row-and-pin"),
        pytest.param("101", "Z1", "??", id="column-that-carries-nothing"),
        pytest.param("111", "ZZ", "11", id="pin-off-sum-still-there"),
    ],
)
def test_rows_and_feedback_by_mode(setting, two, three):
    # `links` = [2, 0, 1]: fuse 0 is the second bit of the setting.
    links = setting[1] + setting[2] + setting[0]
    fuses = f"{links} 1000 1100 1100 0010"
    assert run(MODES, fuses, [1]) == {2: two, 3: three}


def test_setting_that_is_no_mode():
    with pytest.raises(UnreadableError, match="pin 2 is set to '011'"):
        run(MODES, "110 1000 1100 1100 0010", [1])


# Shared rows 1 to 4; row 0 is the enable of pin 4. Buried cell b with both lines and polarity in
# nothing; cell c has a complement line only. Rows: 1 1' 2 2' b b' c', then (rows 1 to 4) 4 b c.
SHARED = """
name = "shared"
technology = "one-time"
pins = 5
fuses = 47
ground = 3
power = 5
[links]
blank = 0
connected = 1
unused_term = "blank"
unused_enable = "on"
[and]
columns = "1 1' 2 2' b b' c'"
terms = 5
rows = [0, 7, 17, 27, 37]
[or]
columns = "4 b c"
rows = [14, 24, 34, 44]
[kind.out]
bits = []
enable = "always"
modes = [ { set = "", pin = "sum" } ]
cells = [ { pin = 4, links = [], enable = 0 } ]
[kind.buried]
bits = []
modes = [ { set = "", feedback = "sum" } ]
cells = [ { name = "b", links = [] }, { name = "c", links = [] } ]
"""


@pytest.mark.parametrize(
    ("enable", "rows", "four"),
    [
        # Cases: (pin 1, pin 2) = 00, 10, 01, 11. b = 1·2, pin 4 = b'.
        pytest.param("0000000", ["1010000 010", "0000010 100"], "1110", id="buried"),
        # c = 1 + 2, pin 4 = c'.
        pytest.param(
            "0000000", ["1000000 001", "0010000 001", "0000001 100"], "1000", id="complement-line"
        ),
        # b = 1, c = b·2; pin 4 = c', enabled by b.
        pytest.param(
            "0000100", ["1000000 010", "0010100 001", "0000001 100"], "Z1Z0", id="two-levels"
        ),
        pytest.param("1100000", ["1000000 100"], "ZZZZ", id="dead-enable"),
    ],
)
def test_buried_cells_and_complement_line(enable, rows, four):
    rows = rows + ["0000000 000"] * (4 - len(rows))
    assert run(SHARED, " ".join([enable, *rows]), [1, 2]) == {4: four}


def test_loop_through_buried_cells():
    with pytest.raises(LoopError, match="sum b"):
        run(SHARED, "0000000 0000001 010 0000100 001 0000000 000 0000000 000", [1, 2])


def test_cut_ring_through_buried_cells():
    # The ring stands in rows that are joined to no sum.
    fuses = "0000000 0000001 000 0000100 001 1000000 100 0000000 000"
    assert run(SHARED, fuses, [1, 2]) == {4: "0101"}


# Pin 1 is an array input and enables pin 3 while it is low; pin 4 always drives its own row; the
# column named `x` of cell 3 carries the sum, its pin number the pin. Rows: 1 1' 3 3' x x'.
PIN_ENABLE = """
name = "pin-enable"
technology = "erasable"
pins = 5
fuses = 12
ground = 2
power = 5
[links]
blank = 0
connected = 1
unused_term = "dead"
[and]
columns = "1 1' 3 3' x x'"
terms = 2
first_fuse = 11
term_step = -6
column_step = -1
[kind.three]
bits = []
enable = { pin = 1, active = "low" }
modes = [ { set = "", pin = "sum", feedback = "sum'" } ]
cells = [ { pin = 3, name = "x", links = [], terms = 0 } ]
[kind.four]
bits = []
modes = [ { set = "", pin = "sum" } ]
cells = [ { pin = 4, links = [], terms = 1 } ]
"""


@pytest.mark.parametrize(
    ("row_0", "row_1", "outside", "three", "four"),
    [
        pytest.param("010000", "000000", "ZZ", "1Z", "11", id="enable-pin-low"),
        pytest.param("010000", "001000", "Z1", "11", "11", id="pin-from-outside"),
        pytest.param("010000", "001000", "ZZ", "1Z", "1?", id="pin-floats"),
        pytest.param("010000", "000010", "ZZ", "1Z", "01", id="sum-inverted"),
        pytest.param("010000", "000001", "Z1", "11", "10", id="sum"),
        pytest.param("010000", "000110", "Z0", "10", "01", id="pin-and-sum"),
    ],
)
def test_enable_pin_and_cell_with_two_names(row_0, row_1, outside, three, four):
    fuses = (row_1[::-1] + row_0[::-1]).replace(" ", "")
    found = run(PIN_ENABLE, fuses, [1], {3: outside})
    assert found == {3: three, 4: four}


def test_enable_pin_that_floats():
    found = run(PIN_ENABLE, "000000 000000", [])
    assert found == {3: "?", 4: "1"}


# The columns of cell 3 carry its pin, pin 2 or nothing, as its two links say. Rows: 1 1' 3 3'.
BY_MODE = """
name = "by-mode"
technology = "erasable"
pins = 6
fuses = 10
ground = 4
power = [5]
unconnected = [6]
[links]
blank = 0
connected = 1
unused_term = "dead"
[and]
columns = "1 3' 3"
terms = 2
first_fuse = 0
term_step = 3
[or]
columns = "3"
terms = ["0..1"]
first_fuse = 8
term_step = 1
[kind.three]
bits = ["a", "b"]
modes = [
  { set = "00", pin = "sum", columns = "3' 3" },
  { set = "01", pin = "sum", columns = "2 ." },
  { set = "10", pin = "none", columns = "2' 1'" },
]
cells = [ { pin = 3, links = [6, 7] } ]
"""


@pytest.mark.parametrize(
    ("fuses", "three"),
    [
        # Cases: (pin 1, pin 2) = 00, 10, 01, 11.
        pytest.param("100 000 00 10", "0101", id="own-pin-unused"),
        pytest.param("010 000 01 10", "0011", id="pin-2-in-the-first-column"),
        pytest.param("110 000 01 10", "0001", id="both"),
        pytest.param("101 000 01 10", "0?0?", id="carries-nothing"),
        pytest.param("001 000 10 10", "ZZZZ", id="off"),
    ],
)
def test_columns_by_mode(fuses, three):
    assert run(BY_MODE, fuses, [1, 2]) == {3: three}
    assert read_device(BY_MODE).input_pins == [1, 2]


def test_loop_in_one_mode_only():
    with pytest.raises(LoopError):
        run(BY_MODE, "001 000 00 10", [1, 2])


# Cell 4 has rows of its own, cell 3 a column of the OR array.
MIXED = """
name = "mixed"
technology = "one-time"
pins = 5
fuses = 8
ground = 2
power = 5
[links]
blank = 1
connected = 0
unused_term = "dead"
[and]
columns = "1 1'"
terms = 3
first_fuse = 0
term_step = 2
[or]
columns = "3"
first_fuse = 6
term_step = 1
[kind.out]
bits = []
modes = [ { set = "", pin = "sum" } ]
cells = [ { pin = 3, links = [] }, { pin = 4, links = [], terms = [1] } ]
"""


@pytest.mark.parametrize(
    ("fuses", "three", "four"),
    [
        pytest.param("01 10 00 01", "01", "10", id="own-row-between-shared-ones"),
        pytest.param("01 00 10 10", "10", "00", id="second-shared-row"),
        pytest.param("01 01 10 00", "11", "01", id="both-shared-rows"),
    ],
)
def test_own_and_shared(fuses, three, four):
    assert run(MIXED, fuses, [1]) == {3: three, 4: four}


@pytest.mark.parametrize(
    "text",
    [
        pytest.param(OWN, id="own"),
        pytest.param(BASE, id="base"),
        pytest.param(OTHER, id="extended"),
        pytest.param(MODES, id="modes"),
        pytest.param(SHARED, id="shared"),
        pytest.param(PIN_ENABLE, id="pin-enable"),
        pytest.param(BY_MODE, id="by-mode"),
        pytest.param(MIXED, id="mixed"),
    ],
)
def test_every_fuse_and_pin_of_these_devices_is_used_once(text):
    device = read_device(text, load)
    fuses, pins = device.role_counts()
    assert fuses == dict.fromkeys(range(device.fuses), 1)
    assert pins == dict.fromkeys(range(1, device.pins + 1), 1)


@pytest.mark.parametrize(
    ("text", "old", "new"),
    [
        pytest.param(OWN, "[links]", "[register]\nclocks = 1\n[links]", id="register-keys"),
        pytest.param(OWN, 'pin = "sum\'", f', 'pin = "q", f', id="register-on-a-pin"),
        pytest.param(OWN, ', feedback = "pin"', "", id="feedback-not-said"),
        pytest.param(
            OWN, "term_step = 6", "term_step = 6\nrows = [0, 6, 12, 18, 24]", id="two-ways"
        ),
        pytest.param(OWN, 'terms = ["3", 4]', "rows = [3, 4]", id="no-terms"),
        pytest.param(SHARED, 'columns = "4 b c"', 'columns = "4 b d"', id="sum-of-no-cell"),
        pytest.param(SHARED, "b b' c'", "b b' d'", id="column-of-no-cell"),
        pytest.param(SHARED, 'feedback = "sum"', 'feedback = "pin"', id="pin-of-a-buried-cell"),
        pytest.param(MIXED, "{ pin = 3,", "{ pin = 3, terms = 0,", id="own-and-shared"),
        pytest.param(BY_MODE, '"2 ."', '"2"', id="columns-missing"),
        pytest.param(OTHER, 'name = "other"', "", id="extends-without-a-name"),
    ],
)
def test_devices_that_the_oracle_does_not_vouch_for(text, old, new):
    assert text.count(old) >= 1
    with pytest.raises(UnreadableError):
        read_device(text.replace(old, new), load)
