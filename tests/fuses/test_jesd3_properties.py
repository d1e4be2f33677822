"""Round trips, and what damage does."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from jesd3_bytes import GOLDEN, GOLDEN_STATES, SAMPLE, transmission

from pla.device.model import Block
from pla.errors import InputError
from pla.fuses.fusemap import FuseMap
from pla.fuses.jesd3 import departures, read_fuse_file, write_fuse_file
from pla.fuses.jesd3_write import PLAIN_CONDITIONS

WORDS = st.lists(
    st.text(st.characters(codec="ascii", categories=["L", "N", "P", "S"], exclude_characters="*")),
    max_size=6,
)
LINES = WORDS.map(lambda words: " ".join(" ".join(words).split())[:76].strip())


@st.composite
def layouts(draw):
    """A fuse map with a partition of its fuses into blocks."""
    sizes = draw(st.lists(st.integers(1, 150), min_size=1, max_size=8))
    blocks, first = [], 0
    for size in sizes:
        blocks.append(Block(first, size, "block"))
        first += size
    bits = draw(st.integers(0, 2**first - 1))
    return FuseMap(bytes(bits >> i & 1 for i in range(first))), blocks


@st.composite
def vector_lists(draw):
    pins = draw(st.integers(1, 100))
    vector = st.text(PLAIN_CONDITIONS, min_size=pins, max_size=pins)
    return pins, draw(st.lists(vector, max_size=5))


@given(LINES, st.lists(LINES, max_size=4), layouts(), vector_lists(), st.booleans())
@settings(max_examples=60)
def test_what_is_written_is_read(design, notes, layout, tests, security):
    (fuses, blocks), (pins, vectors) = layout, tests
    data = write_fuse_file(design, notes, pins, fuses, blocks, vectors, security=security)
    file = read_fuse_file(data, "a")
    assert departures(file) == ()
    assert (file.design, list(file.notes)) == (design, notes)
    assert file.fuses == fuses
    assert (file.pins, file.vector_limit) == (pins, len(vectors) or None)
    assert [v.number for v in file.vectors] == list(range(1, len(vectors) + 1))
    assert [v.conditions for v in file.vectors] == vectors
    assert file.security == security
    assert file.given_sum == file.computed_sum


@given(st.text(max_size=300), st.lists(st.text(max_size=200), max_size=3), layouts())
def test_any_text_gives_a_strict_file_and_a_fixed_point(design, notes, layout):
    fuses, blocks = layout
    data = write_fuse_file(design, notes, 4, fuses, blocks)
    assert set(data) <= {*range(0x20, 0x7F), 0x0D, 0x0A, 0x02, 0x03}
    assert all(len(line) <= 80 for line in data.split(b"\r\n"))
    assert data.count(b"\n") == data.count(b"\r") == data.count(b"\r\n")
    file = read_fuse_file(data, "a")
    assert departures(file) == ()
    assert len(file.notes) == len(notes)
    assert write_fuse_file(file.design, file.notes, 4, file.fuses, blocks) == data


def outcome(data):
    """Read; all that may come out is a fuse file or an error with words and a place."""
    try:
        file = read_fuse_file(data, "a.jed")
    except InputError as refused:
        file, found = None, refused.diagnostics
        errors = [d.severity == "error" and d.location.file == "a.jed" for d in found]
    else:
        errors = [True]
        found = departures(file)
    assert errors
    assert all(errors)
    if file is None:
        return None
    for d in found:
        assert d.severity == "warning"
        assert 0 <= d.offset <= len(data)
        assert d.location.line >= 1
        assert d.location.column >= 1
        assert d.lines()
    return file, found


@given(st.binary(max_size=300))
def test_any_bytes(data):
    outcome(data)


PIECES = st.sampled_from(
    [
        *b"\x02 \x03 * QF QP QV F L K C V P N G 0 1 9 10 X H A UH \xff 0000".split(b" "),
        *(b" ", b"\r\n", b"\t", b"x*QF8*F0*", b"L0 01010101*", b"V1 01*", b"C00AA*"),
    ]
)


@given(st.lists(PIECES, max_size=40))
def test_any_sequence_of_pieces(pieces):
    outcome(b"\x02" + b"".join(pieces))


@given(
    st.lists(st.tuples(st.integers(0, 1000), st.integers(0, 3), st.binary(max_size=3)), min_size=1)
)
def test_mutated_sample(changes):
    data = bytearray(transmission(SAMPLE))
    for place, cut, put in changes:
        at = place % (len(data) + 1)
        data[at : at + cut] = put
    outcome(bytes(data))


@pytest.mark.parametrize("bit", range(8))
def test_every_flipped_bit_is_caught(bit):
    """With a transmission sum no flipped bit goes unseen, and none changes a fuse."""
    for at in range(len(GOLDEN)):
        data = bytearray(GOLDEN)
        data[at] ^= 1 << bit
        result = outcome(bytes(data))
        if result is None:
            continue
        file, found = result
        assert found, f"bit {bit} of byte {at}"
        assert file.fuses.text()[:12] == GOLDEN_STATES, f"bit {bit} of byte {at}"


@pytest.mark.parametrize("bit", range(8))
def test_every_flipped_bit_is_caught_or_harmless_without_transmission_sum(bit):
    """The fuse checksum alone still guards every fuse."""
    for at in range(len(GOLDEN) - 4):
        data = bytearray(GOLDEN[:-4] + b"0000")
        data[at] ^= 1 << bit
        result = outcome(bytes(data))
        if result is not None:
            assert result[0].fuses.text()[:12] == GOLDEN_STATES, f"bit {bit} of byte {at}"


def test_every_cut_is_caught():
    for length in range(len(GOLDEN)):
        result = outcome(GOLDEN[:length])
        if result is not None:
            assert result[1], length
