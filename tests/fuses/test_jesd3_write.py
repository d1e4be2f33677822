"""The writer: golden bytes, layout, filtered text, refusals."""

import re

import pytest
from jesd3_bytes import GOLDEN, GOLDEN_STATES, sum_of_bytes, sum_of_fuses

from pla.device.model import Block
from pla.fuses.fusemap import FuseMap
from pla.fuses.jesd3 import departures, read_fuse_file, write_fuse_file
from pla.fuses.jesd3_text import printable


def states(text):
    return FuseMap(bytes(int(c) for c in text))


def write(**changed):
    settings = {
        "design": "x",
        "notes": (),
        "pins": 20,
        "fuses": FuseMap.filled(4, 1),
        "blocks": (Block(0, 4, "all"),),
    }
    return write_fuse_file(**(settings | changed))


def test_golden_bytes():
    written = write_fuse_file(
        "Grain dryer",
        ["rev A"],
        6,
        states(GOLDEN_STATES),
        [Block(0, 6, "term 0"), Block(6, 6, "term 1")],
        ["01HLXN"],
    )
    assert written == GOLDEN


def test_no_vector_fields_without_vectors():
    text = write()
    assert re.findall(rb"(?m)^(QV|X|V)", text) == []
    assert b"C000F*\r\n\x03" in text


def test_security_only_on_request():
    assert b"G0*" in write()
    assert b"G1*" in write(security=True)
    assert read_fuse_file(write(security=True), "a").security == 1


def test_twin_without_vectors_has_the_same_checksum():
    with_vectors = read_fuse_file(write(vectors=["N" * 20]), "a")
    without = read_fuse_file(write(), "a")
    assert with_vectors.given_checksum == without.given_checksum
    assert with_vectors.fuses == without.fuses


def test_order_of_fields():
    file = read_fuse_file(write(notes=["a", "b"], vectors=["N" * 20, "0" * 20]), "a")
    found = [field.identifier for field in file.fields]
    assert found == ["", "N", "N", "QP", "QF", "QV", "G", "F", "X", "L", "C", "V", "V"]


@pytest.mark.parametrize(
    ("fuses", "first", "address"),
    [(10, 3, b"L3 "), (11, 3, b"L03 "), (1000, 7, b"L007 "), (1001, 7, b"L0007 ")],
)
def test_address_as_wide_as_the_largest(fuses, first, address):
    assert address in write(fuses=FuseMap.filled(fuses, 0), blocks=[Block(first, 2, "b")])


@pytest.mark.parametrize("size", [1, 71, 72, 73, 74, 75, 76, 128, 129, 1000])
def test_lists_wrap(size):
    fusemap = states("10" * (size // 2) + "1" * (size % 2))
    text = write(fuses=fusemap, blocks=[Block(0, size, "all")])
    assert max(map(len, text.split(b"\r\n"))) <= 80
    assert read_fuse_file(text, "a").fuses == fusemap


def test_long_vectors_wrap():
    vectors = ["01HLXNZ" * 30, "N" * 210]
    text = write(pins=210, vectors=vectors)
    assert max(map(len, text.split(b"\r\n"))) <= 80
    assert [v.conditions for v in read_fuse_file(text, "a").vectors] == vectors


@pytest.mark.parametrize("length", range(70, 84))
def test_text_wraps_at_80_characters(length):
    text = write(design="d" * length, notes=["n" * length, "m " * length])
    lines = text.split(b"\r\n")
    assert max(map(len, lines)) <= 80
    file = read_fuse_file(text, "a")
    assert departures(file) == ()
    assert file.design.replace("\n", "") == "d" * length
    assert file.notes[0].replace("\n", "") == "n" * length
    assert file.notes[1].split() == ["m"] * length


def test_sums_by_another_road():
    fusemap = states("0110100110010110" * 9)
    text = write(fuses=fusemap, blocks=[Block(0, 144, "all")])
    assert text[-4:] == sum_of_bytes(text[:-4])
    assert f"C{sum_of_fuses(list(fusemap.states)):04X}*".encode() in text


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        pytest.param("Trockner für Körner", "Trockner fur Korner", id="umlauts"),
        pytest.param("Größe, Łódź, smørrebrød", "Grosse, Lodz, smorrebrod", id="letters"),
        pytest.param("2*3\t4", "2 3 4", id="star and tab"),
        pytest.param("\ufeffpanel\u200b", "panel", id="byte-order mark"),
        pytest.param("a\x00b\x1b[2J\x02\x03", "ab[2J", id="control characters"),
        pytest.param("47 Ω, 10 µF, 85 °C", "47 Ohm, 10 uF, 85 degC", id="units"),
        pytest.param("“a” – ‘b’", "\"a\" - 'b'", id="quotes and dashes"),
        pytest.param("ﬁt", "fit", id="ligature"),
        pytest.param("wide\uff0astar", "wide star", id="wide star"),
        pytest.param("Дом 家", "??? ?", id="other scripts"),
        pytest.param("a\u00a0 \u2003b", "a b", id="kinds of blanks"),
    ],
)
def test_text_is_filtered(text, expected):
    shown = printable(text)
    assert shown.replace("85  deg", "85 deg").replace("85 deg C", "85 degC") == expected
    assert read_fuse_file(write(design=text, notes=[text]), "a").notes == (shown,)


def test_lines_of_a_note_are_kept_and_never_look_like_a_field():
    text = write(notes=["pins\nL0 0101\n\n  QF7", "C1234"], design="a\nF1\nN b")
    file = read_fuse_file(text, "a")
    assert file.notes == ("pins\nL0 0101\nQF7", "C1234")
    assert file.design == "a\nF1\nN b"
    assert departures(file) == ()
    assert len(file.fuses) == 4


@pytest.mark.parametrize(
    ("changed", "words"),
    [
        pytest.param({"blocks": [Block(2, 3, "row")]}, "'row' of 3 fuses from 2", id="past QF"),
        pytest.param({"blocks": [Block(-1, 2, "row")]}, "from -1", id="negative"),
        pytest.param({"blocks": [Block(1, 0, "row")]}, "of 0 fuses", id="empty block"),
        pytest.param(
            {"blocks": [Block(0, 3, "a"), Block(2, 2, "b")]}, "'b' from 2 overlaps", id="overlap"
        ),
        pytest.param({"blocks": [Block(0, 3, "a")]}, "fuse 3 is open", id="open and unlisted"),
        pytest.param({"vectors": ["N" * 19]}, "vector 1 has 19", id="short vector"),
        pytest.param(
            {"vectors": ["N" * 20, "N" * 19 + "9"]}, "vector 2 has the test condition '9'", id="9"
        ),
        pytest.param({"vectors": ["N" * 19 + "*"]}, "condition '\\*'", id="star"),
        pytest.param({"pins": 0}, "0 pins", id="no pins"),
        pytest.param({"fuses": FuseMap(b""), "blocks": []}, "0 fuses", id="no fuses"),
    ],
)
def test_contradictions_are_refused(changed, words):
    with pytest.raises(ValueError, match=words):
        write(**changed)


def test_closed_fuses_may_stay_unlisted():
    text = write(fuses=states("0110"), blocks=[Block(1, 2, "middle")])
    assert read_fuse_file(text, "a").fuses.text() == "0110"
