"""Fuse checksums against outside values."""

import pytest
from hypothesis import given
from hypothesis import strategies as st
from jesd3_bytes import sum_of_fuses

from pla.fuses.fusemap import FuseMap


def fuses(size, lists):
    states = [0] * size
    for first, text in lists.items():
        for i, state in enumerate(text):
            states[first + i] = int(state)
    return FuseMap(bytes(states))


@pytest.mark.parametrize(
    ("size", "lists", "checksum"),
    [
        # Worked example that manuals give with JEDEC Standard No. 3-A; by hand AA + EA + 0A.
        pytest.param(1004, {0: "01010101", 8: "01010111", 1000: "0101"}, 0x019E, id="example"),
        # Sample file in JEDEC Standard No. 3-A, a memory decoder.
        pytest.param(
            448,
            {
                0: "1111101111111111111111111111",
                28: "1011111111111111111111111111",
                56: "1110111111111111111111111111",
                112: "0101011101111011111111111111",
                224: "0101011110111011111111111111",
                336: "0101011101110111111111111111",
            },
            0x124E,
            id="sample",
        ),
    ],
)
def test_worked_checksums(size, lists, checksum):
    assert fuses(size, lists).checksum == checksum


# By the rule of JEDEC Standard No. 3-A, recomputed by a separate program.
@pytest.mark.parametrize(
    ("size", "checksum"),
    [(966, 0x77C7), (1452, 0xB45A), (2048, 0xFF00), (2194, 0x10F1), (5828, 0xD537), (5892, 0xDD2F)],
)
def test_all_open(size, checksum):
    assert FuseMap.filled(size, 1).checksum == checksum
    assert FuseMap.filled(size, 0).checksum == 0


@given(st.lists(st.integers(0, 1), min_size=1, max_size=200))
def test_checksum_bit_by_bit(states):
    fusemap = FuseMap(bytes(states))
    assert fusemap.checksum == sum_of_fuses(states)
    assert (fusemap.opened, fusemap.closed) == (states.count(1), states.count(0))
    assert fusemap.text() == "".join(map(str, states))


def test_checksum_wraps_at_two_bytes():
    # 300 full bytes: 300 * 255 = 76500 = 65536 + 10964.
    assert FuseMap.filled(2400, 1).checksum == 10964


def test_changed_leaves_the_original():
    blank = FuseMap.filled(5, 0)
    assert blank.changed({1: 1, 4: 1}).text() == "01001"
    assert blank.text(1, 3) == "000"
    assert blank.changed({1: 1})[1] == 1


@pytest.mark.parametrize("fuse", [-1, 5])
def test_no_such_fuse(fuse):
    with pytest.raises(IndexError, match=f"fuse {fuse} of 5"):
        FuseMap.filled(5, 0).changed({fuse: 1})


def test_a_state_is_0_or_1():
    with pytest.raises(ValueError, match="0 or 1"):
        FuseMap(b"\0\2")
