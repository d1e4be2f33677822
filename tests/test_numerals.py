"""Numbers and ranges as people write them."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from pla.numerals import is_hexadecimal, parse_number, parse_span, proposal


@pytest.mark.parametrize(
    ("text", "value"), [("0", 0), ("12", 12), ("0x1F", 31), ("0xff", 255), ("0b101", 5)]
)
def test_numbers(text, value):
    assert parse_number(text) == value


@pytest.mark.parametrize("text", ["", "00", "0x", "0b2", "1_0", "-1", "1.5", "٣", "0X1", "1" * 101])
def test_no_numbers(text):
    with pytest.raises(ValueError, match="number"):
        parse_number(text)


@pytest.mark.parametrize(
    ("text", "ends"), [("7", (7, 7)), ("5..0x3", (5, 3)), ("0b1 .. 2", (1, 2))]
)
def test_spans(text, ends):
    assert parse_span(text) == ends


@pytest.mark.parametrize(
    ("text", "fault"),
    [
        ("a..b", "not a range"),
        ("1..", "not a range"),
        ("1..2..3", "not a range"),
        ("07..9", "a decimal number with a leading zero"),
        ("seven", "not a number"),
    ],
)
def test_no_spans(text, fault):
    with pytest.raises(ValueError, match=f"^{fault}$"):
        parse_span(text)


# Hexadecimal in other notations: common practice, no source.
@pytest.mark.parametrize(
    ("text", "meant"),
    [
        ("9F000", "0x9F000"),
        ("9F000..9FFFF", "0x9F000..0x9FFFF"),
        ("4000..7FFF", "0x4000..0x7FFF"),
        ("0x9F000..9FFFF", "0x9F000..0x9FFFF"),
        ("0x9F000-0x9FFFF", "0x9F000..0x9FFFF"),
        ("0x10 to 0x20", "0x10..0x20"),
        ("9F000h..9FFFFh", "0x9F000..0x9FFFF"),
        ("$9F000", "0x9F000"),
        ("&H80", "0x80"),
        ("0X1F", "0x1F"),
        ("0x9F_000", "0x9F000"),
        ("1-3", "1..3"),
        ("1...4", "1..4"),
        ("007", "7"),
        ("1..3", None),
        ("0x10", None),
        ("0b12", None),
        ("a..b", None),
        ("all", None),
        ("-1", None),
        ("1-2-3", None),
        ("", None),
    ],
)
def test_other_notations(text, meant):
    assert proposal(text) == meant


@given(st.text(alphabet="0123456789abcdefxhABCDEF.-:_$# to", max_size=12))
def test_a_proposal_can_be_read(text):
    meant = proposal(text)
    if meant is not None:
        parse_span(meant)
        assert proposal(meant) is None


@pytest.mark.parametrize(
    ("text", "expected"), [("0x10", True), ("9F", True), ("10", False), ("a..b", False)]
)
def test_hexadecimal(text, expected):
    assert is_hexadecimal(text) is expected
