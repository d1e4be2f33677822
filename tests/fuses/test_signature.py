"""Text in signature fuses."""

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st
from small_array import small_array

from pla.device.model import Signature
from pla.fuses.fusemap import FuseMap
from pla.fuses.signature import encode_signature, read_signature

MSB, LSB = "most significant bit first", "least significant bit first"


@pytest.fixture(scope="module")
def device(tmp_path_factory):
    return small_array(tmp_path_factory.mktemp("array"))


def with_signature(device, order=MSB, ones=1, blank=1):
    return replace(
        device,
        links=replace(device.links, blank=blank),
        signature=Signature(242, 16, order, ones),
    )


@pytest.mark.parametrize(
    ("order", "ones", "blank", "states"),
    [
        # C is 0x43 = 01000011 in ASCII.
        pytest.param(MSB, 1, 1, "0100001111111111", id="most-significant-first"),
        pytest.param(LSB, 1, 1, "1100001011111111", id="least-significant-first"),
        pytest.param(MSB, 0, 1, "1011110011111111", id="inverted"),
        pytest.param(MSB, 1, 0, "0100001100000000", id="blank-0"),
        pytest.param(LSB, 0, 0, "0011110100000000", id="inverted-blank-0"),
    ],
)
def test_by_hand(device, order, ones, blank, states):
    changed = with_signature(device, order, ones, blank)
    fuses = FuseMap.filled(260, blank).changed(encode_signature(changed, "C"))
    assert fuses.text(242, 16) == states
    assert read_signature(changed, fuses).text == "C"


@given(
    text=st.text(st.characters(min_codepoint=0x20, max_codepoint=0x7E), max_size=2),
    order=st.sampled_from([MSB, LSB]),
    ones=st.integers(0, 1),
    blank=st.integers(0, 1),
)
def test_what_goes_in_comes_out(device, text, order, ones, blank):
    changed = with_signature(device, order, ones, blank)
    fuses = FuseMap.filled(260, blank).changed(encode_signature(changed, text))
    assert read_signature(changed, fuses).text == text


def test_bytes_that_are_no_text(device):
    fuses = FuseMap.filled(260, 1).changed({242: 1, **dict.fromkeys(range(243, 250), 0)})
    found = read_signature(device, fuses)
    assert (found.data, found.text) == (b"\x80\xff", None)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        pytest.param("ABC", "3 characters for a signature of 2", id="too-long"),
        pytest.param("é", "not printable ASCII", id="not-ascii"),
        pytest.param("\n", "not printable ASCII", id="control"),
    ],
)
def test_refused(device, text, message):
    with pytest.raises(ValueError, match=message):
        list(encode_signature(device, text))


def test_a_device_without(device):
    without = replace(device, signature=None)
    assert list(encode_signature(without, "")) == []
    assert read_signature(without, FuseMap.filled(260, 1)) is None
    with pytest.raises(ValueError, match="has no signature fuses"):
        list(encode_signature(without, "A"))
