"""The clocked oracle's own tests: small parts whose levels can be followed by hand, step by step.

A link that reads 1 joins. What registers do: D takes its input, T toggles on 1, J sets and K
resets and both toggle, S sets and R resets (any textbook).
"""

import random

import pytest
from oracles.clocked_simulation import held, pulsed, run
from oracles.device_description import read_device
from oracles.fuse_file import UnreadableError
from oracles.pin_simulation import LoopError

# Clock 1; inputs 2 and 3; cell 5 with rows 0 and 1 for its sum (or 0 and 1 for its two); row 2
# resets, row 3 presets, row 4 enables. Columns: 2 2' 3 3' and the two of the cell.
ONE = """
name = "one"
technology = "erasable"
pins = 8
fuses = 30
ground = 7
power = 8
unconnected = [4, 6]
[links]
blank = 0
connected = 1
unused_term = "dead"
unused_enable = "off"
unused_control = "off"
[and]
columns = "2 2' 3 3' 5 5'"
terms = 5
first_fuse = 0
term_step = 6
[register]
clock = { pin = 1 }
power_up = 0
reset = { term = 2, when = "asynchronous" }
preset = { term = 3, when = "asynchronous" }
[kind.io]
bits = []
modes = [ { set = "", d = "sum", pin = "q", feedback = "q" } ]
cells = [ { pin = 5, enable = 4, terms = "0..1", links = [] } ]
"""

DEAD, TRUE = "110000", "000000"
A, NOT_A, B, NOT_B, Q, NOT_Q = "100000", "010000", "001000", "000100", "000010", "000001"
TWO = ('terms = "0..1"', 'j = "0", k = "1"'), ('d = "sum"', 'j = "sum", k = "sum"')
SR = ('terms = "0..1"', 's = "0", r = [1]'), ('d = "sum"', 's = "sum", r = "sum"')
BY_CLOCK = ('when = "asynchronous"', 'when = "clock"')


def changed(text, *changes):
    for old, new in changes:
        assert old in text, old
        text = text.replace(old, new)
    return text


def trace(text, rows, levels):
    """Levels of each cell's pin as text, one sign a step; `levels` of the other pins likewise."""
    device = read_device(text)
    states = [int(state) for state in "".join(rows).replace(" ", "")]
    (steps,) = {len(signs) for signs in levels.values()}
    sequence = [held({pin: signs[k] for pin, signs in levels.items()}) for k in range(steps)]
    found = run(device, states, sequence, 1)
    return {
        pin: "".join(snapshot.pins[pin].at(0) for snapshot in found) for pin in device.cell_pins
    }


# Rows 0 and 1 (the sums), reset, preset, enable.
def rows(*sums, reset=DEAD, preset=DEAD, enable=TRUE):
    return [*(*sums, DEAD, DEAD)[:2], reset, preset, enable]


def pulses(text, links, levels, pin=5, rest=0):
    """The level of a pin at power-up and after each pulse of pin 1; `levels` are one a pulse."""
    device = read_device(text)
    states = [int(state) for state in "".join(links)]
    (steps,) = {len(signs) for signs in levels.values()}
    sequence = [held({p: signs[k] for p, signs in levels.items()}) for k in range(steps)]
    found = run(device, states, pulsed(1, sequence, 1, rest), 1)
    return "".join(snapshot.pins[pin].at(0) for snapshot in [found[0], *found[2::3]])


UP_1, UNKNOWN = ("power_up = 0", "power_up = 1"), ("power_up = 0", 'power_up = "unknown"')
AFTER, BEFORE = ('pin = "q"', 'pin = "q\'"'), ('d = "sum"', 'd = "sum\'"')
T, T_BEFORE = ('d = "sum"', 't = "sum"'), ('d = "sum"', 't = "sum\'"')


@pytest.mark.parametrize(
    ("changes", "links", "a", "b", "shown"),
    [
        pytest.param([], rows(A), "1101", "0000", "01101", id="d"),
        pytest.param([], rows(A, B), "1001", "0100", "01101", id="sum-of-rows"),
        pytest.param([], rows(), "1111", "1111", "00000", id="sum-of-none"),
        pytest.param([UP_1], rows(A), "010", "000", "1010", id="power-up-1"),
        pytest.param([UNKNOWN], rows(A), "010", "000", "?010", id="power-up-unknown"),
        pytest.param([], rows(NOT_Q), "0000", "0000", "01010", id="q-fed-back"),
        pytest.param(
            [('feedback = "q"', 'feedback = "q\'"')],
            rows(Q),
            "000",
            "000",
            "0101",
            id="q'-fed-back",
        ),
        pytest.param([UNKNOWN], rows(NOT_Q), "000", "000", "????", id="unknown-stays"),
        pytest.param([AFTER], rows(A), "1101", "0000", "10010", id="polarity-after"),
        pytest.param([BEFORE], rows(A), "1101", "0000", "00010", id="polarity-before"),
        pytest.param([BEFORE, AFTER], rows(A), "1101", "0000", "11101", id="both-polarities"),
        pytest.param(
            [AFTER, ('feedback = "q"', 'feedback = "pin"')],
            rows(Q),
            "000",
            "000",
            "1010",
            id="feedback-of-the-pin-behind-the-polarity",
        ),
        pytest.param([T], rows(A), "1101", "0000", "01001", id="t"),
        pytest.param([T_BEFORE], rows(A), "1101", "0000", "00011", id="t-complement"),
        pytest.param([T, UNKNOWN], rows(A), "0101", "0000", "?????", id="t-of-unknown"),
        # Pulses: set, keep, reset, keep, toggle, toggle.
        pytest.param([*TWO], rows(A, B), "100011", "001011", "0110010", id="jk"),
        pytest.param([*TWO, UNKNOWN], rows(A, B), "0101", "0110", "???01", id="jk-unknown"),
        pytest.param(
            [TWO[0], ('d = "sum"', 'j = "sum\'", k = "sum"')],
            rows(A, B),
            "1011",
            "0010",
            "00100",
            id="j-complement",
        ),
        pytest.param([*SR], rows(A, B), "1000", "0010", "01100", id="sr"),
        # Both at once, then reset and set again.
        pytest.param([*SR], rows(A, B), "1101", "0110", "01?01", id="sr-both"),
        pytest.param([*SR, UNKNOWN], rows(A, B), "0001", "0010", "???01", id="sr-unknown"),
    ],
)
def test_what_registers_take(changes, links, a, b, shown):
    assert pulses(changed(ONE, *changes), links, {2: a, 3: b}) == shown


@pytest.mark.parametrize(
    ("change", "shown"),
    [
        pytest.param(UNKNOWN, [("1", "0"), ("0", "1")], id="unknown"),
        pytest.param(UP_1, [("1", "1"), ("0", "0")], id="known"),
    ],
)
def test_power_up_as_it_happens(change, shown):
    device = read_device(changed(ONE, change))
    states = [int(state) for state in "".join(rows(NOT_Q))]
    sequence = [held({1: "0", 2: "0", 3: "0"}, 2), held({1: "1"}, 2)]
    found = run(device, states, sequence, 2, {5: 0b01})
    assert [tuple(snapshot.pins[5].text(2)) for snapshot in found] == shown


FALLING = ("{ pin = 1 }", '{ pin = 1, edge = "falling" }')


@pytest.mark.parametrize(
    ("changes", "links", "clock", "shown"),
    [
        pytest.param([], rows(NOT_Q), "0110010", "0111100", id="rising"),
        pytest.param([FALLING], rows(NOT_Q), "0110010", "0001110", id="falling"),
        pytest.param([], rows(NOT_Q), "1101", "0001", id="no-edge-at-power-up"),
        pytest.param([FALLING], rows(NOT_Q), "0010", "0001", id="no-falling-edge-at-power-up"),
        pytest.param([], rows(NOT_Q), "Z1", "0?", id="from-nobody-knows-where"),
        pytest.param([], rows(NOT_Q), "0Z", "0?", id="to-nobody-knows-where"),
        pytest.param([], rows(NOT_Q), "1Z0", "000", id="no-rising-edge-from-1"),
        pytest.param([FALLING], rows(NOT_Q), "0Z1", "000", id="no-falling-edge-from-0"),
        pytest.param([], rows(Q), "0Z101", "00000", id="an-edge-that-changes-nothing"),
    ],
)
def test_edges(changes, links, clock, shown):
    # Each step is one level of the clock.
    levels = {1: clock, 2: "0" * len(clock), 3: "0" * len(clock)}
    assert trace(changed(ONE, *changes), links, levels)[5] == shown


def test_what_moves_with_the_clock_moves_before_it():
    levels = {1: "0101", 2: "0110", 3: "0000"}
    assert trace(ONE, rows(A), levels)[5] == "0110"


def test_a_clock_that_is_an_input_too_is_read_before_the_edge():
    text = changed(ONE, ("2 2' 3", "1 1' 3"))
    levels = {1: "0101", 3: "0000"}
    assert trace(text, rows(A), levels)[5] == "0000"
    assert trace(text, rows(NOT_A), levels)[5] == "0111"
    assert trace(text, rows(NOT_A, enable=A), levels)[5] == "Z1Z1"
    # Reset while the clock is high.
    assert trace(text, rows(TRUE, reset=A), levels)[5] == "0000"


PRESET_BY_CLOCK = (
    'preset = { term = 3, when = "asynchronous" }',
    'preset = { term = 3, when = "clock" }',
)


@pytest.mark.parametrize(
    ("changes", "links", "clock", "a", "b", "shown"),
    [
        pytest.param([], rows(TRUE, reset=A), "010101", "001100", "000000", "010001", id="reset"),
        pytest.param([], rows(preset=B), "010101", "000000", "001100", "001110", id="preset"),
        pytest.param([], rows(TRUE, reset=A), "001", "110", "000", "001", id="from-power-up-on"),
        pytest.param(
            [BY_CLOCK],
            rows(TRUE, reset=A),
            "010101",
            "001100",
            "000000",
            "011001",
            id="reset-by-clock",
        ),
        pytest.param(
            [BY_CLOCK], rows(preset=B), "010101", "000000", "001100", "000110", id="preset-by-clock"
        ),
        pytest.param(
            [],
            rows(TRUE, reset=A, preset=B),
            "000010",
            "011000",
            "001000",
            "00??11",
            id="both-at-once",
        ),
        pytest.param(
            [], rows(TRUE, reset=A, preset=B), "0000", "0110", "0010", "00??", id="released"
        ),
        pytest.param(
            [], rows(TRUE, reset=A, preset=B), "0000", "0100", "0110", "0?11", id="preset-outlasts"
        ),
        pytest.param(
            [BY_CLOCK],
            rows(reset=A, preset=B),
            "010101",
            "001100",
            "001100",
            "000??0",
            id="both-at-one-clock",
        ),
        pytest.param(
            [PRESET_BY_CLOCK],
            rows(reset=A, preset=B),
            "0101",
            "0011",
            "0011",
            "0000",
            id="asynchronous-reset-wins",
        ),
        pytest.param(
            [PRESET_BY_CLOCK], rows(reset=A, preset=B), "0101", "0000", "0011", "0001", id="alone"
        ),
        pytest.param([], rows(TRUE, reset=A), "010", "00Z", "000", "01?", id="reset-of-1-unknown"),
        pytest.param([], rows(reset=A), "010", "00Z", "000", "000", id="reset-of-0-unknown"),
        pytest.param([], rows(TRUE, reset=A), "01", "ZZ", "00", "0?", id="clocked-while-unknown"),
        pytest.param([BY_CLOCK], rows(TRUE, reset=A), "01", "0Z", "00", "0?", id="1-or-reset"),
        pytest.param([BY_CLOCK], rows(reset=A), "01", "0Z", "00", "00", id="0-or-reset"),
        pytest.param([], rows(TRUE, reset=Q), "0101", "0000", "0000", "0000", id="resets-itself"),
        pytest.param([], rows(reset=Q, preset=NOT_Q), "00", "00", "00", "??", id="never-at-rest"),
        pytest.param([], rows(TRUE, reset=TRUE), "0101", "0000", "0000", "0000", id="for-ever"),
        pytest.param(
            [('feedback = "q"', 'feedback = "q", reset = "none"')],
            rows(TRUE, reset=A, preset=B),
            "0100",
            "0111",
            "0000",
            "0111",
            id="not-in-this-mode",
        ),
        pytest.param(
            [("bits = []", 'register = { preset = "none" }\nbits = []')],
            rows(preset=B),
            "000",
            "000",
            "011",
            "000",
            id="not-for-this-kind",
        ),
        # Reset is q = 0: the pin shows its complement.
        pytest.param([AFTER], rows(TRUE, reset=A), "010", "001", "000", "101", id="complement"),
    ],
)
def test_reset_and_preset(changes, links, clock, a, b, shown):
    assert trace(changed(ONE, *changes), links, {1: clock, 2: a, 3: b})[5] == shown


@pytest.mark.parametrize(
    ("active", "signs", "shown"),
    [
        pytest.param(', active = "low"', "110011", "010001", id="low"),
        pytest.param(', active = "high"', "001100", "010001", id="high"),
        pytest.param("", "001100", "010001", id="not-said"),
    ],
)
def test_reset_by_a_pin(active, signs, shown):
    text = changed(ONE, ("reset = { term = 2,", f"reset = {{ pin = 4{active},"), ("[4, 6]", "[6]"))
    levels = {1: "010101", 2: "000000", 3: "000000", 4: signs}
    assert trace(text, rows(TRUE), levels)[5] == shown
    fuses, pins = read_device(text).role_counts()
    assert set(pins.values()) == set(fuses.values()) == {1}


@pytest.mark.parametrize(
    ("changes", "enable", "levels", "shown"),
    [
        # The register goes on while its pin is off.
        pytest.param([], A, {2: "001", 4: "000"}, "ZZ1", id="row"),
        pytest.param([], DEAD, {2: "001", 4: "000"}, "ZZZ", id="never"),
        pytest.param([], A, {2: "01Z", 4: "000"}, "Z1?", id="unknown"),
        pytest.param([], Q, {2: "000", 4: "000"}, "Z11", id="by-its-own-state"),
        pytest.param(
            [("enable = 4", "enable = { pin = 4 }")], A, {2: "0" * 3, 4: "011"}, "Z11", id="pin"
        ),
        pytest.param(
            [("enable = 4", 'enable = { pin = 4, active = "low" }')],
            A,
            {2: "000", 4: "011"},
            "0ZZ",
            id="pin-low",
        ),
        pytest.param([], A, {2: "001", 4: "000", 5: "10Z"}, "101", id="driven-from-outside"),
        pytest.param([], A, {2: "111", 4: "000", 5: "010"}, "01?", id="contention"),
    ],
)
def test_enables_and_high_impedance(changes, enable, levels, shown):
    device = read_device(changed(ONE, ("[4, 6]", "[6]"), *changes))
    levels = {1: "010", 3: "000", **levels}
    states = [int(state) for state in "".join(rows(TRUE, enable=enable))]
    sequence = [held({pin: signs[k] for pin, signs in levels.items()}) for k in range(3)]
    found = run(device, states, sequence, 1)
    assert "".join(snapshot.pins[5].at(0) for snapshot in found) == shown
    assert [snapshot.q[5].high for snapshot in found] == [0, 1, 1]


def test_a_register_whose_pin_is_an_input():
    text = changed(ONE, ('feedback = "q"', 'feedback = "pin"'))
    states = [int(state) for state in "".join(rows(Q, enable=DEAD))]
    levels = {1: "0101", 2: "0000", 3: "0000", 5: "0110"}
    sequence = [held({pin: signs[k] for pin, signs in levels.items()}) for k in range(4)]
    assert [x.q[5].high for x in run(read_device(text), states, sequence, 1)] == [0, 1, 1, 0]


def test_a_setting_without_links_need_not_be_said():
    text = changed(ONE, ('set = "", ', ""), ("bits = []\n", ""), (", links = []", ""))
    levels = {1: "0101", 2: "0110", 3: "0000"}
    assert trace(text, rows(A), levels)[5] == "0110"


BYPASS = changed(
    ONE,
    ("fuses = 30", "fuses = 32"),
    ("bits = []", 'bits = ["register", "sense"]'),
    (
        'modes = [ { set = "", d = "sum", pin = "q", feedback = "q" } ]',
        """modes = [ { set = "00", pin = "sum", feedback = "pin" },
  { set = "01", pin = "sum'", feedback = "pin" },
  { set = "10", d = "sum", pin = "q", feedback = "q" },
  { set = "11", d = "sum", pin = "q'", feedback = "q" } ]""",
    ),
    ("links = []", "links = [30, 31]"),
)


@pytest.mark.parametrize(
    ("setting", "shown"),
    [
        pytest.param("00", "0110", id="bypass"),
        pytest.param("01", "1001", id="bypass-complement"),
        pytest.param("10", "0111", id="register"),
        pytest.param("11", "1000", id="register-complement"),
    ],
)
def test_bypass_by_mode(setting, shown):
    levels = {1: "0100", 2: "0110", 3: "0000"}
    assert trace(BYPASS, [*rows(A), setting], levels)[5] == shown


def test_a_ring_is_one_only_without_a_register_between():
    levels = {1: "01", 2: "00", 3: "00"}
    assert trace(BYPASS, [*rows(NOT_Q), "10"], levels)[5] == "01"
    with pytest.raises(LoopError, match="pin 5"):
        trace(BYPASS, [*rows(NOT_Q), "00"], levels)


# A shared OR array: J-K at pin 5 on the rising edge of pin 1, the buried S-R b on the falling edge
# of pin 2 with row 4 as its reset, and a complement line c'. Rows 0 to 3: 3 3' 5 5' b b' c', then
# 5.j 5.k b.s b.r c; row 4 has no OR links.
SEQUENCER = """
name = "sequencer"
technology = "one-time"
pins = 6
fuses = 55
ground = 4
power = 6
[links]
blank = 0
connected = 1
unused_term = "dead"
unused_control = "off"
[and]
columns = "3 3' 5 5' b b' c'"
terms = 5
rows = [0, 12, 24, 36, 48]
[or]
columns = "5.j 5.k b.s b.r c"
first_fuse = 7
term_step = 12
[register]
clock = { pin = 1 }
power_up = 0
[kind.pin]
bits = []
modes = [ { set = "", j = "sum", k = "sum", pin = "q", feedback = "q" } ]
cells = [ { pin = 5, links = [] } ]
[kind.buried]
register = { reset = { term = 4, when = "asynchronous" } }
bits = []
modes = [ { set = "", s = "sum", r = "sum", feedback = "q" } ]
cells = [ { name = "b", links = [], clock = { pin = 2, edge = "falling" } } ]
[kind.complement]
bits = []
modes = [ { set = "", feedback = "sum" } ]
cells = [ { name = "c", links = [] } ]
"""


def states_of_two(text, links, levels):
    device = read_device(text)
    states = [int(state) for state in links if state in "01"]
    steps = len(next(iter(levels.values())))
    sequence = [held({pin: signs[k] for pin, signs in levels.items()}) for k in range(steps)]
    found = run(device, states, sequence, 1)
    return tuple("".join(str(x.q[key].high) for x in found) for key in (5, "b"))


# 5 follows pin 3 (j: 3, k: 3'), b follows 5 (s: 5; r: c', where c sums 5).
FOLLOW = "1000000 10000 0100000 01000 0010000 00101 0000001 00010"


def test_two_clocks_a_complement_line_and_a_buried_register():
    # In the fifth step both clocks move: b takes what 5 was.
    levels = {1: "0110111", 2: "1101010", 3: "1110000"}
    assert states_of_two(SEQUENCER, f"{FOLLOW} 1100000", levels) == ("0111000", "0011110")


def test_reset_of_one_cell_alone():
    levels = {1: "0110111", 2: "1101010", 3: "1110000"}
    assert states_of_two(SEQUENCER, f"{FOLLOW} 0100000", levels) == ("0111000", "0010000")


def test_a_reset_that_the_edge_ends_has_held_the_register():
    text = changed(SEQUENCER, (', clock = { pin = 2, edge = "falling" }', ""))
    # b is set at every edge and reset while 5 is 0.
    links = "1000000 10000 0100000 01000 0000000 00100 1100000 00000 0001000"
    levels = {1: "010101", 3: "111100"}
    assert states_of_two(text, links, levels) == ("011110", "000110")


def test_rows_of_the_sums_leave_out_the_reset_row():
    device = read_device(SEQUENCER)
    assert device.control_rows == [4]
    assert set(device.sums) == {"5.j", "5.k", "b.s", "b.r", "c"}
    assert all(list(by_row) == [0, 1, 2, 3] for by_row in device.sums.values())


@pytest.mark.parametrize("text", [ONE, BYPASS, SEQUENCER], ids=["one", "bypass", "sequencer"])
def test_every_fuse_and_pin_is_used_once(text):
    device = read_device(text)
    fuses, pins = device.role_counts()
    assert fuses == dict.fromkeys(range(device.fuses), 1)
    assert pins == dict.fromkeys(range(1, device.pins + 1), 1)


@pytest.mark.parametrize("seed", range(10))
def test_many_sequences_at_once_are_each_alone(seed):
    rng = random.Random(seed)
    device, cases, steps = read_device(SEQUENCER), 9, 40
    rows_of_it = [
        "".join(rng.choice("0001") for _ in range(7)) + "".join(rng.choice("001") for _ in range(5))
        for _ in range(4)
    ]
    states = [int(state) for state in "".join(rows_of_it) + "0101000"]
    signs = [
        {pin: "".join(rng.choice("0101Z") for _ in range(cases)) for pin in (1, 2, 3)}
        for _ in range(steps)
    ]
    try:
        together = run(device, states, [held(levels, cases) for levels in signs], cases)
    except LoopError:
        together = None
    for case in range(cases):
        alone = [held({pin: text[case] for pin, text in levels.items()}) for levels in signs]
        if together is None:
            with pytest.raises(LoopError):
                run(device, states, alone, 1)
            continue
        found = run(device, states, alone, 1)
        for one, many in zip(found, together, strict=True):
            assert one.pins[5].at(0) == many.pins[5].at(case)
            for key in (5, "b"):
                assert (one.q[key].high, one.q[key].low) == tuple(
                    part >> case & 1 for part in (many.q[key].high, many.q[key].low)
                )


@pytest.mark.parametrize(
    ("text", "old", "new"),
    [
        pytest.param(ONE, "clock = { pin = 1 }", "", id="no-clock"),
        pytest.param(ONE, "power_up = 0", "", id="power-up-not-said"),
        pytest.param(ONE, "power_up = 0", "power_up = 2", id="power-up"),
        pytest.param(ONE, "{ pin = 1 }", '{ pin = 1, edge = "up" }', id="edge"),
        pytest.param(ONE, "{ pin = 1 }", "{ pin = 5 }", id="clock-at-a-cell"),
        pytest.param(ONE, "term = 2,", "", id="reset-by-nothing"),
        pytest.param(ONE, "term = 2,", "term = 2, pin = 4,", id="reset-by-two"),
        pytest.param(ONE, "term = 2,", 'term = 2, active = "low",', id="active-row"),
        pytest.param(ONE, "{ term = 2,", "{ term = 1,", id="reset-row-in-a-sum"),
        pytest.param(ONE, "{ term = 2,", "{ term = 4,", id="reset-row-that-enables"),
        pytest.param(ONE, 'd = "sum"', 'd = "q"', id="register-input"),
        pytest.param(ONE, 'd = "sum"', 'd = "sum", t = "sum"', id="two-kinds"),
        pytest.param(ONE, 'd = "sum"', 'j = "sum"', id="half-a-kind"),
        pytest.param(ONE, 'd = "sum"', 'j = "sum", k = "sum"', id="one-gate-for-two"),
        pytest.param(ONE, 'd = "sum", ', "", id="q-without-a-register"),
        pytest.param(ONE, 'd = "sum", pin = "q"', 'pin = "sum"', id="q-fed-back-without-one"),
        pytest.param(ONE, 'pin = "q"', 'pin = "q", reset = "row"', id="reset-of-a-mode"),
        pytest.param(ONE, 'terms = "0..1"', 'terms = "0", j = 1', id="gate-without-a-use"),
        pytest.param(BYPASS, 'pin = "sum", f', 'pin = "q", f', id="q-of-a-bypass"),
        pytest.param(SEQUENCER, "5.j 5.k", "5 5.k", id="which-gate"),
        pytest.param(SEQUENCER, "5.j 5.k", "5.s 5.r", id="gate-of-another-kind"),
        pytest.param(SEQUENCER, "5.j 5.k", "5.j 5.j", id="gate-twice"),
        pytest.param(SEQUENCER, "b.r c", "b.r c.j", id="gate-of-a-plain-cell"),
        pytest.param(SEQUENCER, 's = "sum", r = "sum"', 'd = "sum"', id="two-gates-for-one"),
        pytest.param(SEQUENCER, 'pin = "q"', 'pin = "sum"', id="which-sum"),
        pytest.param(
            SEQUENCER,
            'k = "sum", pin = "q", feedback = "q" }',
            'k = "sum", pin = "q", feedback = "q" }, { set = "", pin = "none", feedback = "none" }',
            id="two-gates-and-none",
        ),
    ],
)
def test_devices_that_the_oracle_does_not_vouch_for(text, old, new):
    with pytest.raises(UnreadableError):
        read_device(changed(text, (old, new)))
