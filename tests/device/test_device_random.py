"""Random devices of the class: right ones are read right, spoilt ones are refused."""

from __future__ import annotations

import random
import re

import pytest
from device_factory import random_device, random_device_toml
from hypothesis import assume, given
from hypothesis import strategies as st

from pla.device.blocks import role_of
from pla.device.reader import device_from
from pla.errors import InputError
from pla.report.device_text import draw, explain, fuse_table, pin_table
from pla.tomlfile import parse_toml

SEEDS = st.integers(0, 10**9)


def read(text):
    return device_from(parse_toml(text, "random.toml"))


def as_truth(device, fuse):
    role = role_of(device, fuse)
    if role.kind == "and":
        line = role.line
        return ("and", role.term, line and line.source, bool(line and line.complement))
    if role.kind == "or":
        return ("or", role.term, role.pin)
    if role.kind == "cell":
        return ("cell", role.pin, device.cell_of_pin[role.pin].bits.index(role.bit))
    return ("spare",)


@given(SEEDS)
def test_every_fuse_does_what_the_layout_says(seed):
    made = random_device(random.Random(seed))
    device = read(made.text)
    assert {fuse: as_truth(device, fuse) for fuse in range(device.fuses)} == made.roles
    assert list(device.input_pins) == made.inputs
    assert list(device.output_pins) == made.outputs
    assert device.terms == made.terms
    assert device.blank_row == ("dead" if made.blank == made.connected else "true")


@given(SEEDS)
def test_lookups_agree_with_the_fuse_numbers(seed):
    made = random_device(random.Random(seed))
    device = read(made.text)
    for (pin, complement), column in device.column_of.items():
        for term in range(device.terms):
            fuse = device.and_array.fuse(term, column)
            assert made.roles[fuse] == ("and", term, pin, complement)
    for column, pin in enumerate(device.or_array.sums):
        for term in range(device.terms):
            assert made.roles[device.or_array.fuse(term, column)] == ("or", term, pin)


@given(SEEDS)
def test_blocks_list_every_fuse_once_in_order(seed):
    device = read(random_device_toml(random.Random(seed)))
    listed = [f for b in device.blocks() for f in range(b.first, b.first + b.size)]
    assert listed == list(range(device.fuses))


@given(SEEDS)
def test_row_wise_arrays_have_one_block_a_row(seed):
    device = read(random_device_toml(random.Random(seed)))
    assume(abs(device.and_array.column_step) == 1)
    starts = {b.first: b for b in device.blocks()}
    for term in range(device.terms):
        fuses = set(device.and_array.fuses_of(term))
        holding = [b for b in starts.values() if fuses & set(range(b.first, b.first + b.size))]
        assert [b.what for b in holding] == [f"term {term}"]


@given(SEEDS)
def test_any_device_can_be_explained_and_drawn(seed):
    device = read(random_device_toml(random.Random(seed)))
    assert device.name in explain(device)
    assert len(pin_table(device)) == device.pins
    assert sum(int(row[1]) for row in fuse_table(device)) == device.fuses
    assert max(map(len, draw(device).splitlines())) <= 100


def substituted(pattern, change, text, after=""):
    """The text with the first match of a pattern changed, looking only after a header."""
    start = text.index(after)
    match = re.compile(pattern).search(text, start)
    if match is None:
        return None
    return text[: match.start()] + change(match) + text[match.end() :]


def shifted_rows(header):
    def spoil(text):
        section = text.index(header)
        end = text.index("\n[", section + 1)
        body = text[section:end]
        if "first_fuse" in body:
            body = re.sub(r"first_fuse = (\d+)", lambda m: f"first_fuse = {int(m[1]) + 1}", body)
        else:
            body = re.sub(
                r"rows = \[([^]]*)\]",
                lambda m: f"rows = {[int(n) + 1 for n in m[1].split(',')]}",
                body,
            )
        return text[:section] + body + text[end:]

    return spoil


def first_link_doubled(text):
    """A cell's link becomes fuse 0 or 1, whichever it was not: used twice, and a gap."""
    return substituted(
        r"links = \[(\d+)", lambda m: f"links = [{1 if m[1] == '0' else 0}", text, "[kind."
    )


SPOILS = [
    pytest.param(
        lambda t: substituted(r"fuses = (\d+)", lambda m: f"fuses = {int(m[1]) + 1}", t),
        {"FUSE-GAP"},
        id="one-fuse-more",
    ),
    pytest.param(
        lambda t: substituted(r"fuses = (\d+)", lambda m: f"fuses = {int(m[1]) - 1}", t),
        {"FUSE-RANGE", "FUSE-COUNT"},
        id="one-fuse-fewer",
    ),
    pytest.param(
        lambda t: substituted(r"spare = .*\n", lambda _: "", t), {"FUSE-GAP"}, id="spare-forgotten"
    ),
    pytest.param(shifted_rows("[and]"), {"FUSE-OVERLAP", "FUSE-RANGE", "FUSE-GAP"}, id="and-moved"),
    pytest.param(shifted_rows("[or]"), {"FUSE-OVERLAP", "FUSE-RANGE", "FUSE-GAP"}, id="or-moved"),
    pytest.param(first_link_doubled, {"FUSE-OVERLAP"}, id="link-doubled"),
    pytest.param(
        lambda t: substituted(r"terms = (\d+)", lambda m: f"terms = {int(m[1]) + 1}", t),
        # Where there was one term, its step said nothing; with two it may be too small.
        {"FUSE-OVERLAP", "FUSE-COUNT", "FUSE-RANGE", "ROWS-COUNT", "TERM-STEP"},
        id="one-term-more",
    ),
    pytest.param(
        lambda t: substituted(r"pins = (\d+)", lambda m: f"pins = {int(m[1]) + 1}", t),
        {"PIN-IDLE"},
        id="one-pin-more",
    ),
    pytest.param(
        lambda t: substituted(r"pins = (\d+)", lambda m: f"pins = {int(m[1]) - 1}", t),
        {"PIN-RANGE"},
        id="one-pin-fewer",
    ),
    pytest.param(
        lambda t: substituted(
            r" pin = (\d+)", lambda m: f" pin = {int(m[1]) + 50}", t, "cells = ["
        ),
        {"PIN-RANGE"},
        id="cell-elsewhere",
    ),
]


@pytest.mark.parametrize(("spoil", "codes"), SPOILS)
@given(SEEDS)
def test_spoilt_devices_are_refused(spoil, codes, seed):
    text = spoil(random_device_toml(random.Random(seed)))
    assume(text is not None)
    with pytest.raises(InputError) as caught:
        read(text)
    assert codes & {d.code for d in caught.value.diagnostics}
    assert all(d.location.line for d in caught.value.diagnostics)
