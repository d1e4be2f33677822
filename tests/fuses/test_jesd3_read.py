"""The reader: what it accepts with which warning, and what it refuses with which words."""

import re
import time

import pytest
from jesd3_bytes import GOLDEN, GOLDEN_STATES, SAMPLE, STX, sum_of_bytes, transmission

from pla.errors import InputError
from pla.fuses.jesd3 import FuseFileError, departures, read_fuse_file


def read(data):
    return read_fuse_file(data, "a.jed")


def test_sample_of_the_standard():
    # Sample file in JEDEC Standard No. 3-A.
    file = read(transmission(SAMPLE))
    assert file.diagnostics == ()
    assert departures(file) == ()
    assert (file.pins, file.vector_limit, file.default) == (20, 8, 0)
    assert file.given_checksum == file.fuses.checksum == 0x124E
    assert file.given_sum == file.computed_sum
    assert [v.number for v in file.vectors] == [1, 2, 3, 4, 5, 6, 7, 8]
    assert file.vectors[0].conditions == "000000XXXNXXXHHHLXXN"
    assert file.vectors[7].conditions == "111110XXXNXXXHHHHXXN"
    assert file.fuses.text(336, 28) == "0101011101110111111111111111"
    assert file.fuses.text(364) == "0" * 84


def test_worked_example_of_manuals():
    # Worked example that manuals give with JEDEC Standard No. 3-A.
    file = read(transmission(b"x*QF1004* F0* L0 01010101* L8 01010111* L1000 0101*C019E*"))
    assert file.given_checksum == file.fuses.checksum == 0x019E
    # The same with K, in the bit order that makes `L0 01010101` and `K0 55` the same.
    hexadecimal = read(transmission(b"x*QF1004*F0*K0 55*K8 57*K1000 5*C019E*"))
    assert hexadecimal.fuses == file.fuses
    assert [d.code for d in hexadecimal.diagnostics] == ["HEXADECIMAL-LIST"] * 3


def test_golden_file_field_by_field():
    file = read(GOLDEN)
    assert file.design == "Grain dryer"
    assert file.notes == ("rev A",)
    assert file.fuses.text() == GOLDEN_STATES
    assert (file.pins, file.vector_limit, file.security, file.default_condition) == (6, 1, 0, 0)
    assert [(f.identifier, f.offset) for f in file.fields][:4] == [
        ("", 1),
        ("N", 15),
        ("QP", 25),
        ("QF", 31),
    ]
    assert file.fields[3].body == b"12"
    assert GOLDEN[file.fields[3].offset :].startswith(b"QF12*")
    assert departures(file) == ()


def test_kernel_file():
    # The reduced form: fuses only, 0000 for a sum that was not computed.
    file = read(b"\x02x*QF4*L0 1010*\x030000")
    assert file.fuses.text() == "1010"
    assert (file.given_sum, file.pins, file.default, file.vectors) == (0, None, None, ())
    assert departures(file) == ()


@pytest.mark.parametrize(
    "data",
    [
        pytest.param(b"\x02x*QF8*F0*L0 01\r\n 10  1\n01\r0*\x030000", id="in a list"),
        pytest.param(b"\x02x*\r\n \n QF8*  F0*\r\rL0\r\n01101010*\r\n\x030000", id="before fields"),
    ],
)
def test_white_space_means_nothing(data):
    assert read(data).fuses.text() == "01101010"


def test_default_fills_what_no_list_names():
    assert read(transmission(b"x*QF9*F1*L3 00*L7 0*")).fuses.text() == "111001101"
    assert read(transmission(b"x*QF9*F0*L3 11*L7 1*")).fuses.text() == "000110010"


def test_pin_sequence():
    file = read(transmission(b"x*QP3*QF1*QV1*F0*P 3 1 2*V1 0HL*"))
    assert file.pin_order == (3, 1, 2)
    assert file.at_pins(file.vectors[0]) == {3: "0", 1: "H", 2: "L"}
    plain = read(transmission(b"x*QP3*QF1*QV1*F0*V1 0HL*"))
    assert plain.at_pins(plain.vectors[0]) == {1: "0", 2: "H", 3: "L"}


def test_vectors_apply_in_order_of_number():
    file = read(transmission(b"x*QP2*QF1*QV3*F0*V3 LL*V1 00*V2 11*V1 HH*"))
    assert [(v.number, v.conditions) for v in file.vectors] == [(1, "HH"), (2, "11"), (3, "LL")]
    assert [d.code for d in file.diagnostics] == ["VECTOR-AGAIN"]


@pytest.mark.parametrize("parity", ["even", "odd", "mark"])
def test_bytes_with_parity(parity):
    def with_parity(byte):
        odd = byte.bit_count() % 2 == 1
        high = {"even": odd, "odd": not odd, "mark": True}[parity]
        return byte | (0x80 if high else 0)

    file = read(bytes(map(with_parity, GOLDEN)) + b"\r\n")
    assert file.fuses.text() == GOLDEN_STATES
    assert [d.code for d in file.diagnostics] == ["PARITY"]
    assert file.given_sum == file.computed_sum == 0x1550


# Offsets count from 0, lines and columns from 1; the body begins behind STX, at offset 1.
WARNINGS = [
    pytest.param(b"x*QF1*F0*\x030000", "NO-STX", (1, 1, 0), "no STX", id="no STX"),
    pytest.param(b"\x02x*QF1*F0*\r\n0250", "NO-ETX", (2, 1, 12), "no ETX", id="no ETX, but a sum"),
    pytest.param(b"\x02x*QF1*F0*\r\n", "NO-ETX", (1, 11, 10), "no ETX", id="no ETX, no sum"),
    pytest.param(
        b"\x02x*QF1*F0*\r\n\x031234",
        "WRONG-SUM",
        (2, 2, 13),
        "given as 1234, but the bytes add up to 0250",
        id="sum",
    ),
    pytest.param(
        b"\x02x*QF1*F0*\r\n\x03xyz", "NO-SUM", (2, 2, 13), "four hexadecimal digits", id="no sum"
    ),
    pytest.param(
        b"ab\x02x*QF1*F0*\x030000", "BYTES-BEFORE", (1, 1, 0), "'ab' before STX", id="before"
    ),
    pytest.param(
        b"\xef\xbb\xbf\x02x*QF1*F0*\x030000",
        "BYTES-BEFORE",
        (1, 1, 0),
        "'<EF><BB><BF>' before STX",
        id="byte-order mark",
    ),
    pytest.param(
        b"\x02x*QF1*F0*\x030000\r\nend", "BYTES-AFTER", (2, 1, 17), "'end' after", id="after"
    ),
    pytest.param(
        b"\x02x*QF1*F0*\x030000\x02y*QF2*F0*\x030000",
        "BYTES-AFTER",
        (1, 16, 15),
        "a second transmission",
        id="a second transmission",
    ),
    pytest.param(
        b"\x02x*QF1*F0*\r\nW1*\x030000",
        "UNKNOWN-FIELD",
        (2, 1, 12),
        "field 'W': no such identifier",
        id="unknown",
    ),
    pytest.param(
        b"\x02x*QF1*F0*\r\nf1*\x030000",
        "UNKNOWN-FIELD",
        (2, 1, 12),
        "field 'f': no such identifier",
        id="small letter",
    ),
    pytest.param(b"\x02x*QF1*F0*\nD1*\x030000", "OBSOLETE-FIELD", (2, 1, 11), "obsolete", id="D"),
    pytest.param(
        b"\x02x*QF1*F0**\x030000", "EMPTY-FIELD", (1, 11, 10), "closes nothing", id="empty field"
    ),
    pytest.param(
        b"\x02x*QF1*\x00\x07F0*\x030000",
        "STRAY-BYTES",
        (1, 8, 7),
        "'<00><07>' outside all fields",
        id="stray bytes",
    ),
    pytest.param(
        b"\x02x*QF1*F0*\r\n\x8d\x030000",
        "STRAY-BYTES",
        (2, 1, 12),
        "'<8D>' outside all fields",
        id="stray byte before ETX",
    ),
    pytest.param(
        b"\x02x*L0 1*\r\nQF1*\x030000",
        "FIELD-ORDER",
        (2, 1, 10),
        "field QF: comes after L0 at byte 3",
        id="L before QF",
    ),
    pytest.param(
        b"\x02x*QF1*L0 1*F0*C0001*\x030000",
        "LATE-DEFAULT",
        (1, 13, 12),
        "default comes after the first fuse list (L0); taken for the fuses in no list",
        id="F after L, confirmed by C",
    ),
    pytest.param(
        b"\x02x*QF4*F0*L0 1010*\r\nL1 11*\x030000",
        "FUSE-AGAIN",
        (2, 4, 23),
        "fuse 1 and 1 more was in a list before; the last state counts (1 get another state)",
        id="fuse twice",
    ),
    pytest.param(
        b"\x02x*QF1*QF1*F0*\x030000", "REPEATED-FIELD", (1, 8, 7), "QF1 is said", id="QF twice"
    ),
    pytest.param(
        b"\x02x*QF8*F0*K0 A5*\x030000", "HEXADECIMAL-LIST", (1, 11, 10), "field K0", id="K"
    ),
    pytest.param(
        b"\x02x*QF1*F0*N caf\xc3\xa9*\x030000",
        "NOT-ASCII",
        (1, 16, 15),
        "field N: '<C3><A9>' is not ASCII",
        id="accent in a note",
    ),
    pytest.param(
        b"\x02caf\xe9*QF1*F0*\x030000",
        "NOT-ASCII",
        (1, 5, 4),
        "field design specification: '<E9>'",
        id="accent in the design specification",
    ),
    pytest.param(
        b"\x02x*QF1*F0*N a\x1b[2J*\x030000",
        "CONTROL-CHARACTER",
        (1, 14, 13),
        "'<1B>' is a control character",
        id="escape in a note",
    ),
    pytest.param(
        b"\x02x*QF4*F0*N lost star\r\nL0 1010*\x030000",
        "FIELD-IN-TEXT",
        (2, 1, 23),
        "'L0 1' at the start of a line looks like a field",
        id="note swallows a list",
    ),
    pytest.param(
        b"\x02x\r\nQP20*QF1*F0*\x030000",
        "FIELD-IN-TEXT",
        (2, 1, 4),
        "'QP20' at the start of a line",
        id="design specification swallows a field",
    ),
    pytest.param(
        b"\x02x*QF1*F0*V1 01*\x030000",
        "NO-QP",
        (1, 11, 10),
        "2, as of this one, is taken",
        id="no QP",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*QV9*F0*V1 01*V3 01*\x030000",
        "VECTOR-NUMBERS",
        (1, 25, 24),
        "3 found, 2 expected",
        id="gap in vectors",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*QV9*F0*V0 01*\x030000",
        "VECTOR-NUMBERS",
        (1, 19, 18),
        "0 found, 1 expected",
        id="vector 0",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*QV1*F0*V1 01*V2 01*\x030000",
        "VECTOR-COUNT",
        (1, 25, 24),
        "QV1 promises at most 1 vectors, and there are 2",
        id="more vectors than QV",
    ),
    pytest.param(
        b"\x02x*QF1*F0*Afast*\x030000", "BAD-FIELD", (1, 12, 11), "'fast' found", id="access time"
    ),
    pytest.param(
        b"\x02x*QF1*F0*UHXY*\x030000", "BAD-FIELD", (1, 13, 12), "field UH: 'XY'", id="user data"
    ),
]


@pytest.mark.parametrize(("data", "code", "place", "words"), WARNINGS)
def test_accepted_with_a_warning(data, code, place, words):
    file = read(data)
    found = [d for d in file.diagnostics if d.code == code]
    assert len(found) == 1
    line, column, offset = place
    at = found[0].location
    assert (at.file, at.line, at.column, found[0].offset) == ("a.jed", line, column, offset)
    assert words in found[0].message
    assert f"byte {offset}" in found[0].message
    assert found[0].severity == "warning"
    assert found[0] in departures(file)


ERRORS = [
    pytest.param(b"", "EMPTY-FILE", (1, 1), "holds nothing", id="empty file"),
    pytest.param(b"\r\n\x1a", "EMPTY-FILE", (1, 1), "holds nothing", id="only an end mark"),
    pytest.param(b"hello", "NOT-A-FUSE-FILE", (1, 1), "no JESD3 fuse file", id="no fuse file"),
    pytest.param(b"\x02\x030000", "NOT-A-FUSE-FILE", (1, 1), "no field closed", id="no fields"),
    pytest.param(b"\x02x*F0*\x030000", "NO-QF", (1, 2), "no QF field", id="no QF"),
    pytest.param(b"\x02QF4*F0*\x030000", "NO-QF", (1, 2), "no QF field", id="no design text"),
    pytest.param(b"\x02x*QF*F0*\x030000", "BAD-VALUE", (1, 6), "nothing found", id="QF empty"),
    pytest.param(
        b"\x02x*QF4a*F0*\x030000",
        "BAD-VALUE",
        (1, 6),
        "'4a' found, a decimal number expected",
        id="QF no number",
    ),
    pytest.param(b"\x02x*QF-4*F0*\x030000", "BAD-VALUE", (1, 6), "'-4' found", id="QF negative"),
    pytest.param(
        b"\x02x*QF4\r\nF0*\x030000",
        "BAD-VALUE",
        (1, 6),
        "'4<0D><0A>F0' found",
        id="no star after QF",
    ),
    pytest.param(b"\x02x*QF0*F0*\x030000", "FUSE-COUNT", (1, 6), "'0' fuses; from 1 to", id="QF0"),
    pytest.param(
        b"\x02x*QF999999999*F0*\x030000",
        "FUSE-COUNT",
        (1, 6),
        "from 1 to 16000000 are read",
        id="QF too large",
    ),
    pytest.param(
        b"\x02x*QF" + b"9" * 10000 + b"*F0*\x030000",
        "FUSE-COUNT",
        (1, 6),
        "from 1 to 16000000",
        id="QF with ten thousand digits",
    ),
    pytest.param(
        b"\x02x*QF4*QF5*F0*\x030000",
        "CONFLICT",
        (1, 8),
        "'5' contradicts QF4 at byte 3",
        id="QF twice",
    ),
    pytest.param(
        b"\x02x*QF4*F0*F1*\x030000",
        "CONFLICT",
        (1, 11),
        "'1' contradicts F0 at byte 7",
        id="F twice",
    ),
    pytest.param(
        b"\x02x*QF4*F2*\x030000", "BAD-VALUE", (1, 9), "'2' found, 0 or 1 expected", id="F2"
    ),
    pytest.param(
        b"\x02x*QF4*F0*\r\nG2*\x030000", "BAD-VALUE", (2, 2), "field G: '2' found", id="G2"
    ),
    pytest.param(
        b"\x02x*QF4*F0*X*\x030000", "BAD-VALUE", (1, 12), "field X: nothing found", id="X empty"
    ),
    pytest.param(
        b"\x02x*QF4*F0*C00D*\x030000",
        "BAD-VALUE",
        (1, 12),
        "'00D' found, four hexadecimal digits expected",
        id="C too short",
    ),
    pytest.param(
        b"\x02x*QF4*L0 1010*C0006*\x030000",
        "WRONG-CHECKSUM",
        (1, 17),
        "given as 0006, but the fuses add up to 0005",
        id="wrong C",
    ),
    pytest.param(
        b"\x02x*QF4*L0 1010*C0000*\x030000",
        "WRONG-CHECKSUM",
        (1, 17),
        "given as 0000, but the fuses add up to 0005",
        id="C0000 is no placeholder",
    ),
    pytest.param(
        b"\x02x*QF4*F0*\r\nL0 10\r\n102*\x030000",
        "BAD-CHARACTER",
        (3, 3),
        "field L0: '2' found among the fuse states, 0 or 1 expected",
        id="2 in a list",
    ),
    pytest.param(
        b"\x02x*QF4*F0*L0 10\x0010*\x030000",
        "BAD-CHARACTER",
        (1, 16),
        "'<00>' found among the fuse states",
        id="zero byte in a list",
    ),
    pytest.param(
        b"\x02x*QF8*F0*L0 1010\r\nL4 1010*\x030000",
        "BAD-CHARACTER",
        (2, 1),
        "'L' found among the fuse states",
        id="no star between lists",
    ),
    pytest.param(
        b"\x02x*QF4*F0*L*\x030000", "BAD-NUMBER", (1, 12), "nothing found", id="no address"
    ),
    pytest.param(
        b"\x02x*QF4*F0*Lx 10*\x030000",
        "BAD-NUMBER",
        (1, 12),
        "'x' found, a decimal number expected",
        id="address no number",
    ),
    pytest.param(
        b"\x02x*QF4*F0*L0,10*\x030000",
        "BAD-CHARACTER",
        (1, 13),
        "',' found among the fuse states, white space expected",
        id="comma after the address",
    ),
    pytest.param(
        b"\x02x*QF4*F0*L01010*\x030000",
        "EMPTY-LIST",
        (1, 11),
        "no fuse states after the number",
        id="no white space after the address",
    ),
    pytest.param(
        b"\x02x*QF4*F0*L2\r\n0 1\r\n1*\x030000",
        "NO-SUCH-FUSE",
        (3, 1),
        "fuse 4 does not exist: QF4 means fuses 0 to 3, and 3 states stand here",
        id="list past QF",
    ),
    pytest.param(
        b"\x02x*QF4*F0*L4 0*\x030000",
        "NO-SUCH-FUSE",
        (1, 11),
        "fuse 4 does not exist",
        id="address at QF",
    ),
    pytest.param(
        b"\x02x*QF4*F0*L99999999999999999999 0*\x030000",
        "NO-SUCH-FUSE",
        (1, 11),
        "a fuse past 999999999 does not exist",
        id="address without end",
    ),
    pytest.param(
        b"\x02x*QF6*F0*K0 AG*\x030000",
        "BAD-CHARACTER",
        (1, 15),
        "'G' found among the hexadecimal digits",
        id="K with a G",
    ),
    pytest.param(
        b"\x02x*QF6*F0*K0 A1*\x030000",
        "NO-SUCH-FUSE",
        (1, 15),
        "fuse 6 does not exist",
        id="K past QF",
    ),
    pytest.param(
        b"\x02x*QF20*\r\nL0 1111*L5 1*L8 00*L12 0*L14 0*L16 0*\x030000",
        "UNLISTED-FUSES",
        (1, 4),
        "10 of 20 fuses are in no list: 4, 6 to 7, 10 to 11, 13, 15, ...",
        id="unlisted fuses without F",
    ),
    pytest.param(
        b"\x02x*QF4*L0 1010*\r\nF0*\x030000",
        "LATE-DEFAULT",
        (2, 1),
        "no C field tells",
        id="F after L",
    ),
    pytest.param(
        b"\x02x*QF4*F0*\r\nL0 1010\r\n\x030000",
        "MISSING-STAR",
        (2, 1),
        "'L0 1010<0D><0A>' is not closed by *",
        id="last star missing",
    ),
    pytest.param(
        b"\x02x*QF4*F0*\r\nL0 10",
        "MISSING-STAR",
        (2, 1),
        "'L0 10' is not closed by *",
        id="cut off",
    ),
    pytest.param(
        b"\x02x*QP3*QF1*F0*V1 01*\x030000",
        "VECTOR-LENGTH",
        (1, 17),
        "2 test conditions found, 3 expected (QP3)",
        id="vector too short",
    ),
    pytest.param(
        b"\x02x*QF1*F0*V1 01*V2 011*\x030000",
        "VECTOR-LENGTH",
        (1, 19),
        "3 test conditions found, 2 expected as in the first vector",
        id="vectors of two lengths",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*V1 0h*\x030000",
        "BAD-CHARACTER",
        (1, 19),
        "'h' found among the test conditions",
        id="condition in a small letter",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*V1 0.*\x030000",
        "BAD-CHARACTER",
        (1, 19),
        "'.' found among the test conditions",
        id="no condition",
    ),
    pytest.param(
        b"\x02x*QP0*QF1*F0*\x030000",
        "BAD-VALUE",
        (1, 6),
        "'0' found, a number from 1 to 999999999 expected",
        id="QP0",
    ),
    pytest.param(
        b"\x02x*QV12345678901*QF1*F0*\x030000",
        "BAD-VALUE",
        (1, 6),
        "'12345678901' found, a number from 0",
        id="QV without end",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*V12345678901 01*\x030000",
        "BAD-NUMBER",
        (1, 16),
        "number is larger than 999999999",
        id="vector number without end",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*V 01*\x030000",
        "EMPTY-LIST",
        (1, 15),
        "no test conditions after the number",
        id="vector without number",
    ),
    pytest.param(
        b"\x02x*QPtwo*QF1*F0*\x030000", "BAD-VALUE", (1, 6), "field QP: 'two'", id="QP no number"
    ),
    pytest.param(
        b"\x02x*QVx*QF1*F0*\x030000", "BAD-VALUE", (1, 6), "field QV: 'x'", id="QV no number"
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*V1 01*P 1 2*\x030000",
        "LATE-PIN-SEQUENCE",
        (1, 21),
        "comes after the first vector (V1)",
        id="P after V",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*P 1 1*V1 01*\x030000",
        "PIN-SEQUENCE",
        (1, 15),
        "pin 1 stands here twice",
        id="P with a pin twice",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*P 1 2 3*\x030000",
        "PIN-SEQUENCE",
        (1, 15),
        "3 pins found, 2 expected",
        id="P too long",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*P 0 1*\x030000", "PIN-SEQUENCE", (1, 15), "pins count from 1", id="pin 0"
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*P 1 2*P 2 1*\x030000",
        "CONFLICT",
        (1, 21),
        "contradicts the pin sequence",
        id="P twice",
    ),
    pytest.param(
        b"\x02x*QP2*QF1*F0*P 1,2*\x030000",
        "BAD-VALUE",
        (1, 16),
        "pin numbers with white space",
        id="P with a comma",
    ),
]


@pytest.mark.parametrize(("data", "code", "place", "words"), ERRORS)
def test_refused(data, code, place, words):
    with pytest.raises(InputError) as caught:
        read(data)
    assert [d.code for d in caught.value.diagnostics] == [code]
    (found,) = caught.value.diagnostics
    assert (found.location.file, found.location.line, found.location.column) == ("a.jed", *place)
    assert words in found.message
    assert found.severity == "error"
    offset = re.match(r"byte (\d+)", found.message)
    if offset:
        before = data[: int(offset[1])]
        assert before.count(b"\n") + 1 == place[0]
        assert len(before) - (before.rfind(b"\n") + 1) + 1 == place[1]


def test_all_errors_in_one_go():
    data = b"\x02x*QFmany*F7*\r\nL0 12*\r\nC12*\r\nV1 q*\r\nL9\r\n\x030000"
    with pytest.raises(FuseFileError) as caught:
        read(data)
    codes = [(d.code, d.location.line) for d in caught.value.diagnostics]
    assert codes == [
        ("BAD-VALUE", 1),
        ("BAD-VALUE", 1),
        ("BAD-CHARACTER", 2),
        ("BAD-VALUE", 3),
        ("BAD-CHARACTER", 4),
        ("MISSING-STAR", 5),
    ]


def test_errors_keep_the_warnings():
    with pytest.raises(FuseFileError) as caught:
        read(b"\x02x*QF4*F0*W*L9 0*\x031111")
    assert [d.code for d in caught.value.refused.diagnostics] == ["UNKNOWN-FIELD", "WRONG-SUM"]


@pytest.mark.parametrize(
    ("sent", "arrived", "words"),
    [
        (b"\r\n", b"\n", "converted to LF on the way"),
        (b"\n", b"\r\n", "converted to CR LF on the way"),
    ],
    ids=["to LF", "to CR LF"],
)
def test_sum_spoiled_by_line_ends(sent, arrived, words):
    data = transmission(SAMPLE.replace(b"\r\n", sent)).replace(sent, arrived)
    (found,) = read(data).diagnostics
    assert found.code == "WRONG-SUM"
    assert words in found.hint


def test_sum_that_counts_high_bits():
    data = b"\x02caf\xe9*QF1*F0*\x03"
    data += f"{sum(data):04X}".encode()
    found = {d.code: d for d in read(data).diagnostics}
    assert "highest bit" in found["WRONG-SUM"].hint
    # JESD3 leaves the parity bit out of the sum.
    assert read(data[:-4] + sum_of_bytes(data[:-4])).given_sum == read(data).computed_sum


def test_lost_frame_is_still_in_the_sum():
    assert [d.code for d in read(GOLDEN[1:]).diagnostics] == ["NO-STX"]
    assert [d.code for d in read(GOLDEN.replace(b"\x03", b"")).diagnostics] == ["NO-ETX"]


@pytest.mark.parametrize(
    ("data", "code", "place"),
    [
        pytest.param(b"\r\n" + GOLDEN, "BYTES-BEFORE", (1, 1), id="line end before"),
        pytest.param(GOLDEN + b"\r\n", "BYTES-AFTER", (13, 6), id="line end after"),
        pytest.param(GOLDEN + b"\x1a", "BYTES-AFTER", (13, 6), id="end mark after"),
        pytest.param(
            b"\x02x*QF1*F0*\x03\r\n0000", "WHITE-SPACE", (1, 12), id="line end before the sum"
        ),
        pytest.param(b"\x02y*QF1*F0*\x03023a", "LOWER-CASE", (1, 12), id="sum in small letters"),
        pytest.param(
            b"\x02x*QF4*F0*L0 0101*C000a*\x030000", "LOWER-CASE", (1, 23), id="C in small letters"
        ),
        pytest.param(b"\x02x*QF1*\tF0*\x030000", "TAB", (1, 8), id="tab between fields"),
        pytest.param(b"\x02x\t*QF1*F0*\x030000", "TAB", (1, 3), id="tab in text"),
        pytest.param(b"\x02x*QF 1*F0*\x030000", "WHITE-SPACE", (1, 6), id="blank in QF"),
        pytest.param(b"\x02x*QF1*F0*L 0 1*\x030000", "WHITE-SPACE", (1, 12), id="L address"),
        pytest.param(
            b"\x02x*QP2*QF1*QV1*F0*V1 0 1*\x030000", "WHITE-SPACE", (1, 23), id="in a vector"
        ),
        pytest.param(b"\x02x*QP2*QF1*F0*V1 01*\x030000", "NO-QV", (1, 15), id="no QV"),
    ],
)
def test_strict_mode_lists_what_the_reader_lets_pass(data, code, place):
    file = read(data)
    assert file.diagnostics == ()
    (found,) = departures(file)
    assert (found.code, found.location.line, found.location.column) == (code, *place)
    assert f"byte {found.offset}" in found.message
    assert found.severity == "warning"


def test_departures_in_order_of_place():
    file = read(b"ab\x02x*QF4*\tF0*W*K0 a*\x03000a\r\n")
    offsets = [d.offset for d in departures(file)]
    assert offsets == sorted(offsets)
    assert len(offsets) == 8


@pytest.mark.parametrize(("end", "lines"), [(b"\n", 3), (b"\r\n", 3), (b"\r", 3)])
def test_every_line_end_counts_once(end, lines):
    with pytest.raises(InputError) as caught:
        read(b"\x02x*QF1*" + end + b"F0*" + end + b"  L7 0*\x030000")
    at = caught.value.diagnostics[0].location
    assert (at.line, at.column, at.source) == (lines, 3, "  L7 0*.0000")


def test_many_faults_of_a_kind_are_summed_up():
    with pytest.raises(FuseFileError) as caught:
        read(b"\x02x*QF4*F0*" + b"L9 0*" * 5000 + b"W*" * 5000 + b"\x030000")
    assert len(caught.value.diagnostics) == 21
    assert "4980 more of this kind" in caught.value.diagnostics[-1].message
    assert len(caught.value.refused.diagnostics) == 21


@pytest.mark.parametrize(
    "data",
    [
        pytest.param(b"\x02x*QF8000000*L0 " + b"01" * 4000000 + b"*\x030000", id="one long list"),
        pytest.param(b"\x02x*QF16000000*F1*\x030000", id="most fuses"),
        pytest.param(
            b"\x02x*QF99999*F0*" + b"".join(b"L%d 1*" % i for i in range(99999)) + b"\x030000",
            id="many lists",
        ),
        pytest.param(b"\x02x*QF1*F0*N" + b"\r\n " * 2000000 + b"*\x030000", id="long blank note"),
        pytest.param(b"\x02x*QF1*F0*" + b" " * 6000000 + b"N*\x030000", id="blanks"),
    ],
)
def test_time_is_linear(data):
    begin = time.perf_counter()
    read(data)
    # Anything quadratic would take hours; the margin is for a busy machine.
    assert time.perf_counter() - begin < 20


@pytest.mark.parametrize(
    "data",
    [
        pytest.param(STX + b"x" * (64 * 2**20), id="bytes"),
        pytest.param(STX + b"*" * 1_000_002, id="fields"),
    ],
)
def test_too_large_is_said(data):
    with pytest.raises(InputError, match="the most that is read"):
        read(data)
