"""The oracle's own tests: small arrays whose levels can be read off the drawing."""

import pytest
from oracles.array_oracle import (
    UnreadableError,
    every_case,
    output_levels,
    read_array,
    read_transmission,
)

# Two inputs (1, 2), two rows, two outputs (4, 5). A closed link joins. Row r: links to the lines
# 1, 1', 2, 2', then to the sums of 4 and of 5; then a polarity link for each output.
SMALL = """
name = "small"
technology = "one-time"
pins = 6
fuses = 14
ground = 3
power = 6
[links]
blank = 0
connected = 0
unused_term = "blank"
[and]
columns = "1 1' 2 2'"
terms = 2
first_fuse = 0
term_step = 6
[or]
columns = "4 5"
first_fuse = 4
term_step = 6
[kind.out]
bits = ["polarity"]
modes = [ { set = "0", pin = "sum" }, { set = "1", pin = "sum'" } ]
cells = [ { pin = 4, links = [12] }, { pin = 5, links = [13] } ]
"""

# The same function of every link, laid out in another way: OR links first and column by column,
# AND rows backwards from their last link, a column with no line, a joining link open (1).
SCATTERED = """
name = "scattered"
technology = "erasable"
pins = 6
fuses = 16
ground = 3
power = 6
spare = [15]
[links]
blank = 0
connected = 1
unused_term = "blank"
[and]
columns = "1 1' . 2 2'"
terms = 2
rows = [8, 13]
column_step = -1
[or]
columns = "4 5"
first_fuse = 0
term_step = 1
column_step = 2
[kind.a]
bits = []
modes = [ { set = "", pin = "sum" } ]
cells = [ { pin = 4, links = [] } ]
[kind.b]
bits = ["sense"]
modes = [ { set = "1", pin = "sum'" } ]
cells = [ { pin = 5, links = [14] } ]
"""


def levels(text, fuses):
    """The outputs at (pin 1, pin 2) = 00, 10, 01, 11, as text by output pin."""
    array = read_array(text)
    assert array.inputs == [1, 2]
    states = [int(state) for state in fuses if state in "01"]
    found = output_levels(array, states, every_case([1, 2]), 4)
    return {
        pin: "".join(str(value >> case & 1) for case in range(4)) for pin, value in found.items()
    }


@pytest.mark.parametrize(
    ("fuses", "four", "five"),
    [
        # Row 0: 1 and 2 joined, to sum 4. Row 1: 1' joined, to sum 5.
        pytest.param("0101 01  1011 10  00", "0001", "1010", id="two-products"),
        pytest.param("0101 00  1011 00  00", "1011", "1011", id="shared-by-both-sums"),
        pytest.param("0101 01  1011 10  10", "1110", "1010", id="one-polarity-link-open"),
        pytest.param("0101 01  1011 10  11", "1110", "0101", id="both-polarity-links-open"),
        pytest.param("0001 01  1011 10  00", "0000", "1010", id="line-and-complement-is-0"),
        pytest.param("0000 00  0000 00  00", "0000", "0000", id="blank-part-is-dead"),
        pytest.param("1111 00  0000 00  00", "1111", "1111", id="no-line-is-1"),
        pytest.param("1111 01  0000 00  00", "1111", "0000", id="constant-on-one-sum"),
        pytest.param("1111 11  1111 11  01", "0000", "1111", id="row-joined-to-no-sum"),
    ],
)
def test_links_of_a_drawn_array(fuses, four, five):
    assert levels(SMALL, fuses) == {4: four, 5: five}


@pytest.mark.parametrize(
    ("sums", "row_0", "row_1", "four", "five"),
    [
        # `sums`: 4-0 4-1 5-0 5-1; a row from its last link, 2' 2 . 1' 1.
        pytest.param("1001", "01001", "00010", "0001", "0101", id="two-products"),
        pytest.param("1111", "01001", "00010", "1011", "0100", id="shared-by-both-sums"),
        pytest.param("1001", "01101", "00110", "0001", "0101", id="column-with-no-line"),
        pytest.param("1010", "00000", "00000", "1111", "0000", id="no-line-is-1"),
        pytest.param("1010", "11000", "00000", "0000", "1111", id="line-and-complement-is-0"),
        pytest.param("0101", "11000", "00100", "1111", "0000", id="only-a-dot-is-1"),
    ],
)
def test_links_of_a_scattered_array(sums, row_0, row_1, four, five):
    assert levels(SCATTERED, f"{sums} {row_0} {row_1} 1 0") == {4: four, 5: five}


def test_setting_that_is_no_mode():
    with pytest.raises(UnreadableError, match="pin 5 is set to '0'"):
        levels(SCATTERED, "0000 00000 00000 0 0")


def test_other_size():
    with pytest.raises(UnreadableError, match="13 fuses"):
        levels(SMALL, "0" * 13)


@pytest.mark.parametrize(
    "change",
    [
        pytest.param(("[and]", "[register]\nclocks = 1\n[and]"), id="register-keys"),
        pytest.param(('pin = "sum\'"', 'pin = "q"'), id="register-on-a-pin"),
        pytest.param(
            (
                'modes = [ { set = "0",',
                'register = { clock = { pin = 1 }, power_up = 0 }\nmodes = [ {d="sum", set = "0",',
            ),
            id="registers",
        ),
        pytest.param(("1 1' 2 2'", "1 1' 4 4'"), id="feedback"),
        pytest.param(('columns = "4 5"', 'columns = "4 2"'), id="sum-without-cell"),
    ],
)
def test_arrays_beyond_the_oracle(change):
    assert SMALL.count(change[0]) == 1
    with pytest.raises(UnreadableError):
        read_array(SMALL.replace(*change))


def framed(body):
    data = b"\x02" + body + b"\x03"
    return data + b"%04X" % (sum(data) % 65536)


def test_worked_example_of_the_standard():
    # JEDEC Standard No. 3-A, as manuals give it: bytes AA, EA and 0A (fuse 0 in bit 0), sum 019E.
    read = read_transmission(framed(b"x*QF1004* F0* L0 01010101* L8 01010111* L1000 0101*C019E*"))
    assert [fuse for fuse, state in enumerate(read.states) if state] == [
        *(1, 3, 5, 7),
        *(9, 11, 13, 14, 15),
        *(1001, 1003),
    ]
    assert read.lists == [(0, 8), (8, 8), (1000, 4)]


def test_sample_file_of_the_standard():
    # Sample file in JEDEC Standard No. 3-A: fuse checksum 124E over 448 fuses.
    read = read_transmission(
        framed(
            b"memory decoder*\r\nN a note*\r\nQP20*\r\nQF448*\r\nF0*\r\n"
            b"L0000 1111101111111111111111111111*\r\n"
            b"L0028\r\n10111111111111\r\n11111111111111*\r\n"
            b"L0056 1110111111111111111111111111*\r\n"
            b"L0112 0101011101111011111111111111*\r\n"
            b"L0224 0101011110111011111111111111*\r\n"
            b"L0336 0101011101110111111111111111*\r\n"
            b"C124E*\r\n"
        )
    )
    assert (read.title, read.notes, read.pins) == ("memory decoder", ["a note"], 20)
    assert sum(read.states) == 150


@pytest.mark.parametrize(
    ("data", "why"),
    [
        pytest.param(
            framed(b"x*QF4*F0*L0 1010*C0005*")[:-1] + b"0",
            "transmission sum",
            id="transmission-sum",
        ),
        pytest.param(framed(b"x*QF4*F0*L0 1010*C0006*"), "computed 0005", id="fuse-checksum"),
        pytest.param(framed(b"x*QF4*F0*L0 1010*"), r"checksum \[\]", id="no-fuse-checksum"),
        pytest.param(framed(b"x*QF4*L0 101*C0005*"), "fuse 3 in no list", id="fuse-in-no-list"),
        pytest.param(framed(b"x*QF4*F0*L1 1010*C000A*"), "fuse list", id="fuse-past-the-last"),
        pytest.param(framed(b"x*QF4*F0*L0 1020*C0005*"), "fuse list", id="no-state"),
        pytest.param(framed(b"x*F0*L0 1010*C0005*"), "no QF", id="no-size"),
        pytest.param(framed(b"x*QF4*QF5*F0*L0 1010*C0005*"), "2 times", id="two-sizes"),
        pytest.param(framed(b"x*QF4*F0*L0 1010*C0005"), "after the last", id="no-star"),
        pytest.param(b"x*QF4*F0*L0 1010*C0005*", "framed", id="no-frame"),
    ],
)
def test_unreadable_fuse_files(data, why):
    with pytest.raises(UnreadableError, match=why):
        read_transmission(data)
