# ruff: noqa: E501, ISC004 - sentences stand on one line, as they are shown
"""What is said of own OR gates, enables, feedback, modes, drop links, signature and timing."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from full_device import FULL, device

from pla.cli.main import run
from pla.device.catalogue import find_device
from pla.report.device_draw import owner_of
from pla.report.device_text import draw, explain, fuse_table, pin_table

GOLDEN = Path(__file__).parent / "golden"


def sentences(found):
    return explain(found).replace("\n    ", " ").replace("\n      ", " ").replace("  ", " ")


@pytest.mark.parametrize(
    ("name", "found"),
    [
        pytest.param("full", device(), id="full"),
        *(
            pytest.param(name, find_device(name), id=name)
            for name in ("own-9x5", "modal-8x4-gated", "swap-8x4")
        ),
    ],
)
def test_the_whole_text_of_a_device(name, found):
    golden = (GOLDEN / f"{name}.txt").read_text(encoding="utf-8")
    assert f"{explain(found)}\n{draw(found)}" == golden


WORDS = [
    pytest.param(
        [('unused_enable = "off"', 'unused_enable = "on"')],
        [
            "The enable row of a cell that no output uses is joined to no line, always 1: its pin is driven.",
            "An output that a design does not use has a sum of 0: its pin is low.",
        ],
        id="enable-on",
    ),
    pytest.param(
        [('unused_enable = "off"', 'unused_enable = "blank"')],
        [
            "The enable row of a cell that no output uses is left blank: always 1, so its pin is driven."
        ],
        id="enable-blank-true",
    ),
    pytest.param(
        [('unused_enable = "off"', 'unused_enable = "blank"'), ("blank = 1", "blank = 0")],
        [
            "Blank rows 8..11 are cut off by their drop links, and count as 0.",
            "Any other blank row is dead, always 0: line and complement of pins 1..3 and cell s are joined to it.",
            "In the OR gate of a cell it adds nothing to the sum.",
            "As an output enable it turns the pin off.",
            "The enable row of a cell that no output uses is left blank: always 0, so its pin is not driven (high impedance).",
            "On a blank part the sum is 0, and the pin is not driven (high impedance).",
        ],
        id="enable-blank-dead",
    ),
    pytest.param(
        [("erasable", "one-time")],
        [
            "It can take no term later: what is joined stays so. The rows of a sum that nothing uses stay blank, and can take terms later.",
            "An output that a design does not use has blank rows, so that its sum is 1: its pin is low while pin 4 is low, else high impedance.",
        ],
        id="one-time",
    ),
    pytest.param(
        [("dropped = 0", "dropped = 1")],
        [
            "Rows 8..11 have each a link that drops it: open (1) cuts the row off, so that it counts as 0.",
            "Blank rows 8..11 are cut off by their drop links, and count as 0.",
            "Any other blank row is always 1",
        ],
        id="dropped-when-blank",
    ),
    pytest.param(
        [('active = "low"', 'active = "high"')],
        [
            "driven while pin 4 is high.",
            "its pin is high while pin 4 is high, else high impedance.",
        ],
        id="enable-pin-high",
    ),
    pytest.param(
        [
            (
                '{ set = "1", pin = "none", feedback = "pin" }',
                '{ set = "1", pin = "none", feedback = "none" }',
            )
        ],
        ["1 (blank): the pin shows nothing; its columns in the AND array carry nothing."],
        id="nothing-fed-back",
    ),
    pytest.param(
        [("159 = 1\n", "159 = 1\n177 = 0\n"), ('"176..177"', "176")],
        [
            "Fuse 159 is 1, fuse 177 is 0. These fuses select the mode of the whole device.",
            "is for another mode of the family fuller.",
        ],
        id="two-mode-fuses",
    ),
    pytest.param(
        [('order = "least', 'order = "most'), ("ones = 0\n", "")],
        [
            "2 characters of text in fuses 160..175; in each the most significant bit first; 1 stands for a bit that is 1."
        ],
        id="signature",
    ),
    pytest.param(
        [("tfb = 10\n", "")],
        ["Each further pass through a feedback line adds 12.5 ns."],
        id="feedback-time-from-tpd",
    ),
]


@pytest.mark.parametrize(("edits", "expected"), WORDS)
def test_in_words(edits, expected):
    text = sentences(device(*edits))
    for sentence in expected:
        assert sentence in text, text


CELLS = """\
name = "mixed"
technology = "erasable"
pins = 9
fuses = 36
ground = 4
power = 8
unconnected = [9]

[links]
blank = 1
connected = 0
unused_term = "dead"

[and]
columns = "1 1' 2 2' 5 5' 6 6' 7 3' 3 ."
terms = 3
first_fuse = 0
term_step = 12

[kind.out]
modes = [ { pin = "sum", feedback = "pin" } ]
cells = [
  { pin = 5, terms = "0" },
  { pin = 6, terms = "1" },
  { pin = 7, terms = "2" },
]
"""
GATED = '{{ pin = {}, terms = "{}", enable = {{ pin = 3 }} }}'


@pytest.mark.parametrize("driven", [5, 6, 7])
def test_cells_of_a_kind_that_are_driven_in_different_ways(driven):
    edits = [
        (f'{{ pin = {pin}, terms = "{row}" }}', GATED.format(pin, row))
        for row, pin in enumerate((5, 6, 7))
        if pin != driven
    ]
    found = device(*edits, ("7 3' 3 .", "7 7' 3 ."), text=CELLS)
    text = sentences(found)
    gated = {5: "6..7", 6: "5, 7", 7: "5..6"}[driven]
    shows = "nothing to set. The pin shows the sum: high when one of its terms is 1, else low;"
    fed_back = (
        "its unprimed column carries the level of the pin, the primed the complement of that level."
    )
    idle = "An output that a design does not use has a sum of 0: its pin is low"
    assert (
        f"Pin {driven} (kind 'out'): {shows} always driven; {fed_back} "
        f"On a blank part the sum is 1, and the pin is high. {idle}."
    ) in " ".join(text.split())
    assert (
        f"Pins {gated} (kind 'out'): {shows} driven while pin 3 is high; {fed_back} "
        "On a blank part the sum is 1, and the pin is high while pin 3 is high, else high "
        f"impedance. {idle} while pin 3 is high, else high impedance."
    ) in " ".join(text.split())


def test_cells_of_a_kind_of_which_some_are_not_fed_back():
    found = device(("7 3' 3 .", ". 3' 3 ."), text=CELLS)
    text = " ".join(explain(found).split())
    assert (
        "Pins 5..6 (kind 'out'): nothing to set. The pin shows the sum: high when one of its terms is 1, else low; its unprimed"
        in text
    )
    assert (
        "Pin 7 (kind 'out'): nothing to set. The pin shows the sum: high when one of its terms is 1, else low. On a"
        in text
    )


def test_columns_that_cells_of_a_kind_hand_over():
    found = device(
        ('{ pin = "sum", feedback = "pin" }', """{ pin = "sum", columns = "9 9'" }"""),
        ("7 3' 3 .", ". 3' 3 ."),
        ("unconnected = [9]", "unconnected = []"),
        text=CELLS,
    )
    text = " ".join(explain(found).split())
    assert "Pins 5..6 (kind 'out'): nothing to set." in text
    assert (
        "else low; columns 4, 6 carry pin 9, columns 5, 7 carry the complement of pin 9. On a"
        in text
    )
    assert "Pin 7 (kind 'out'): nothing to set." in text
    assert pin_table(found)[8] == ("9", "input", "true in columns 4, 6, complement in columns 5, 7")


def test_nothing_is_said_of_what_a_device_has_not():
    text = explain(find_device("shared-8x16x4"))
    for word in ("enable", "Signature", "Timing", "Device-wide", "family", "feed", "Cells without"):
        assert word not in text


OWNERS = [
    pytest.param(0, "enable or term 1 of pin 7", id="row-of-two-uses"),
    pytest.param(2, "term 2 or 3 of pin 7", id="term-that-moves"),
    pytest.param(6, "term 3 of pin 8", id="term"),
    pytest.param(7, "enable of pin 9", id="enable"),
    pytest.param(8, "shared term", id="shared"),
]


@pytest.mark.parametrize(("row", "owner"), OWNERS)
def test_whose_a_row_is(row, owner):
    assert owner_of(device(), row) == owner


def test_the_row_that_no_mode_uses():
    found = device(
        ('terms = "0..3", enable = "always"', 'terms = "1..2", enable = "always"'),
        ('"sum",  feedback = "pin",  terms = "1..3"', '"sum",  feedback = "pin",  terms = "1..2"'),
        ('feedback = "sum\'", terms = "1..3"', 'feedback = "sum\'", terms = "1..2"'),
    )
    assert owner_of(found, 3) == "unused row of pin 7"


def test_pins():
    pins = {int(pin): (role, place) for pin, role, place in pin_table(device())}
    assert pins[4] == ("enable", "")
    assert pins[5][0] == pins[6][0] == "ground"
    assert pins[7] == (
        "output",
        "rows 0..3, columns 6..7 as its mode says, use is fuse 156, polarity is fuse 157",
    )
    assert pins[9] == (
        "output",
        "cell s, sum in OR column 0, row 7, level true in column 8, fed back unprimed in column 9, "
        "primed in column 10, sense is fuse 158",
    )
    by_mode = device(('columns = "3\' ."', 'columns = "10 ."'), ("[10, 11]", "[11]"))
    assert pin_table(by_mode)[9] == ("10", "input", "in some modes true in column 6")


def test_fuses():
    assert fuse_table(device())[2:] == [
        ("152..155", "4", "drop links"),
        ("156..158", "3", "configuration"),
        ("159..159", "1", "mode"),
        ("160..175", "16", "signature"),
        ("176..177", "2", "spare"),
    ]


def test_as_json(tmp_path, capsys):
    path = tmp_path / "full.toml"
    path.write_text(FULL, encoding="utf-8")
    assert run(["device", "check", str(path), "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["ground"] == [5, 6]
    assert document["power"] == 12
    assert document["terms"] == 11
    assert document["family"] == "fuller"
    assert document["enable_pins"] == [4]
    assert document["links"]["unused_enable"] == "off"
    assert document["or"]["terms"] == [8, 9, 10, 11]
    assert document["drop"] == {
        "dropped": 0,
        "terms": [8, 9, 10, 11],
        "fuses": [152, 153, 154, 155],
    }
    assert document["mode_fuses"] == {"159": 1}
    assert document["signature"]["bits"] == 16
    assert document["timing"] == {"tpd": 12.5, "tfb": 10.0, "ten": 15.0, "tdis": 15.0}
    assert document["row_uses"][7:9] == ["enable of pin 9", "shared term"]
    own, gated, shared, buried = document["cells"]
    assert own["modes"][0] == {
        "set": "00",
        "pin": "sum",
        "feedback": "pin",
        "terms": [1, 2, 3],
        "enable": {"row": 0},
        "columns": {
            "6": {"carries": "pin", "of": 7, "complement": False},
            "7": {"carries": "pin", "of": 7, "complement": True},
        },
    }
    assert own["modes"][2]["columns"]["7"] is None
    assert gated["modes"][0]["enable"] == {"pin": 4, "active": "low"}
    assert (shared["pin"], shared["name"]) == (9, "s")
    assert (buried["pin"], buried["name"]) == (None, "b")


def test_no_or_array_as_json(capsys):
    assert run(["device", "show", "own-9x5", "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["or"] is None
    assert document["drop"] is None
    assert document["signature"] is None


def test_list_names_the_family(capsys):
    assert run(["device", "list"]) == 0
    shown = capsys.readouterr().out
    assert "a mode or" in shown
    assert max(map(len, shown.splitlines())) <= 100
