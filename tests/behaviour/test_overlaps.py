"""Selects that answer to one address: an error within a map, a warning across maps."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from point_values import points, read

from pla.errors import InputError

HEAD = """\
[inputs]
a = 20
rd = 1
wr = 1
[outputs]
rom = 1
uart = 1
"""  # lines 1 to 7


def two_maps(one="when = 'rd'", two="when = 'rd + wr'", rest="", bus="a", span="0x9F000..0x9FFFF"):
    """`rom` on line 10, `uart` on line 15."""
    return (
        f"{HEAD}[[address_map]]\nbus = 'a'\nselect = {{ rom = '0x9F000..0xFFFFF' }}\n"
        f"elsewhere = 0\n{one}\n"
        f"[[address_map]]\nbus = '{bus}'\nselect = {{ uart = '{span}' }}\nelsewhere = 0\n{two}\n"
        f"{rest}"
    )


def one_map(select, more=""):
    """The selects on line 10."""
    return f"{HEAD}[[address_map]]\nbus = 'a'\nselect = {{ {select} }}\nelsewhere = 0\n{more}"


def overlap_warnings(text):
    return [w for w in read(text).warnings if w.code == "SELECT-OVERLAP"]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        pytest.param(
            two_maps(),
            "rom and uart overlap at 0x9F000..0x9FFFF, for example at a = 0x9F000, rd = 1, "
            "wr = 0: uart is selected here, rom at d.toml:10:18",
            id="conditions-that-hold-together",
        ),
        pytest.param(
            two_maps(one="", two=""),
            "rom and uart overlap at 0x9F000..0x9FFFF, for example at a = 0x9F000: uart is "
            "selected here, rom at d.toml:10:18",
            id="no-conditions",
        ),
        pytest.param(
            two_maps(two="when = 'wr'"),
            "overlap at 0x9F000..0x9FFFF, for example at a = 0x9F000, rd = 1, wr = 1:",
            id="conditions-of-different-inputs",
        ),
        pytest.param(
            two_maps(rest="[never]\nwhen = ['a < 0x9F800']\n"),
            "overlap at 0x9F000..0x9FFFF, for example at a = 0x9F800, rd = 1, wr = 0:",
            id="partly-impossible",
        ),
        pytest.param(
            two_maps(span="0xFFFFF..0xFFFFF"), "overlap at 0xFFFFF, for example", id="one-address"
        ),
        pytest.param(
            two_maps(bus="a[19:12]", span="0x9F..0xA0"),
            "rom and uart overlap, for example at a = 0x9F000, rd = 1, wr = 0: uart is selected",
            id="a-part-of-the-bus",
        ),
    ],
)
def test_across_maps(text, message):
    (found,) = overlap_warnings(text)
    assert (found.severity, found.location.line, found.location.column) == ("warning", 15, 19)
    assert message in found.message
    assert found.hint.startswith("mend the ranges or 'when'")


@pytest.mark.parametrize(
    "text",
    [
        pytest.param(two_maps(two='when = "wr rd\'"'), id="conditions-that-exclude-each-other"),
        pytest.param(two_maps(two="when = 'wr'", rest="[never]\nwhen = 'rd wr'\n"), id="never"),
        pytest.param(two_maps(span="0x9E000..0x9EFFF"), id="ranges-apart"),
        pytest.param(two_maps(one="when = 'rd'\noverlap = 'allow'"), id="first-allows"),
        pytest.param(two_maps(two="overlap = 'allow'"), id="second-allows"),
        pytest.param(
            two_maps().replace("wr = 1", "wr = 1\nb = 20").replace("bus = 'a'", "bus = 'b'", 1),
            id="other-bus",
        ),
    ],
)
def test_no_warning_across_maps(text):
    assert overlap_warnings(text) == []


def test_ten_warnings_are_enough():
    listed = ", ".join(f"'{k}'" for k in range(0, 40, 2))
    text = two_maps().replace("'0x9F000..0xFFFFF'", f"[{listed}]")
    found = overlap_warnings(text.replace("'0x9F000..0x9FFFF'", "'0..0xFFFFF'"))
    assert len(found) == 11
    assert found[-1].message == "more selects of two address maps overlap"


@pytest.mark.parametrize(
    ("text", "column", "message"),
    [
        pytest.param(
            one_map("rom = '0x9F000..0xFFFFF', uart = '0x90000..0x9FFFF'"),
            45,
            "rom and uart overlap at 0x9F000..0x9FFFF, for example at a = 0x9F000: uart is "
            "selected here, rom at d.toml:10:18",
            id="later-place",
        ),
        pytest.param(
            one_map("rom = 5, uart = '0..9'", 'when = "rd wr\'"\n'),
            28,
            "overlap at 0x5, for example at a = 0x00005, rd = 1, wr = 0:",
            id="condition",
        ),
    ],
)
def test_within_a_map(text, column, message):
    with pytest.raises(InputError) as caught:
        read(text)
    (found,) = caught.value.diagnostics
    assert (found.code, found.location.line, found.location.column) == (
        "SELECT-OVERLAP",
        10,
        column,
    )
    assert message in found.message
    assert found.hint == (
        'mend the ranges; overlap = "allow" in the map is for outputs that shall both answer'
    )


@pytest.mark.parametrize(
    "text",
    [
        pytest.param(one_map("rom = 5, uart = '0..9'", "overlap = 'allow'\n"), id="allowed"),
        pytest.param(
            one_map("rom = 5, uart = '0..9'", "[never]\nwhen = 'a == 5'\n"), id="impossible"
        ),
        pytest.param(one_map("rom = ['0..7', '3..9'], uart = 10"), id="same-output"),
    ],
)
def test_no_error_within_a_map(text):
    assert overlap_warnings(text) == []


SPANS = st.tuples(st.integers(0, 15), st.integers(0, 15)).map(sorted)
CONDITIONS = st.sampled_from(["c", "d", "c'", "c + d", "c d'", "b >= 9", "b[0] d", "1"])


@settings(max_examples=60, deadline=None)
@given(SPANS, SPANS, CONDITIONS, CONDITIONS, st.sampled_from(["c d", "b > 10", "d", "b == 3"]))
def test_a_warning_exactly_when_both_answer_to_a_possible_input(one, two, when, also, never):
    text = "[inputs]\nb = 4\nc = 1\nd = 1\n[outputs]\nf = 1\ng = { impossible = 0 }\n"
    text = text.replace("f = 1", "f = { impossible = 0 }")
    text += f'[never]\nwhen = "{never}"\n'
    for name, (first, last), condition in (("f", one, when), ("g", two, also)):
        text += f"[[address_map]]\nbus = 'b'\nselect = {{ {name} = '{first}..{last}' }}\n"
        text += f'elsewhere = 0\nwhen = "{condition}"\n'
    behaviour = read(text)
    both = [p for p, _ in points(behaviour) if behaviour.function.on.value_at(p) == 3]
    found = [w for w in behaviour.warnings if w.code == "SELECT-OVERLAP"]
    assert len(found) == bool(both)
