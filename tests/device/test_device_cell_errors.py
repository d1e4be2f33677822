# ruff: noqa: E501 - messages stand on one line, as they are shown
"""Bad files of devices with own OR gates, enables, feedback and the rest: what is wrong and where."""

from __future__ import annotations

from pathlib import Path

import pytest
from full_device import FULL, device
from hypothesis import given
from hypothesis import strategies as st

from pla.device.reader import device_from
from pla.errors import InputError
from pla.tomlfile import parse_toml


def shown(diagnostics):
    return [f"{d.location.line}:{d.location.column} {d.code} {d.message}" for d in diagnostics]


CASES = [
    pytest.param(
        [('rows = "0..3"', 'rows = "0..4"')],
        [
            "49:30 ROW-TWICE row 4 belongs to the cell on pin 7 (line 44 of the file) and to the cell on pin 8"
        ],
        id="row-twice",
    ),
    pytest.param(
        [
            ('terms = "4..6"', 'terms = "4..5"'),
            ("terms = 12\nfirst", "terms = 12\nfirst"),
            ("term_step = 2\n", 'term_step = 2\nterms = "8..11"\n'),
        ],
        ["22:9 ROW-IDLE 1 of 12 rows has no use: 6; no cell owns it and [or] does not list it"],
        id="row-idle",
    ),
    pytest.param(
        [("term_step = 2\n", 'term_step = 2\nterms = "7..10"\n')],
        [
            "22:9 ROW-IDLE 1 of 12 rows has no use: 11; no cell owns it and [or] does not list it",
            "58:43 ROW-TWICE row 7 belongs to [or] (line 30 of the file) and to the cell on pin 9",
        ],
        id="or-terms-overlap",
    ),
    pytest.param(
        [("term_step = 2\n", 'term_step = 2\nterms = "8..12"\n')],
        [
            "30:9 ROW-RANGE row 12 in 'terms' of [or] does not exist: rows go from 0 to 11, as 'terms' of [and] says (line 22 of the file)"
        ],
        id="or-terms-range",
    ),
    pytest.param(
        [('terms = "4..6"', 'terms = "4..16"')],
        [
            "49:30 ROW-RANGE row 16 in 'terms' of kind.gated.cells[0] does not exist: rows go from 0 to 11, as 'terms' of [and] says (line 22 of the file)"
        ],
        id="row-range",
    ),
    pytest.param(
        [('terms = "4..6"', 'terms = ["4..6", 5]')],
        ["49:39 ROW-TWICE 'terms' of kind.gated.cells[0] names row 5 twice"],
        id="row-dup",
    ),
    pytest.param(
        [('terms = "0..3", enable = "always"', 'terms = "0..4", enable = "always"')],
        [
            "42:58 ROW-OUTSIDE row 4 in 'terms' of mode \"11\" does not exist for the cell on pin 7: it has 4 rows (line 44 of the file)"
        ],
        id="mode-out",
    ),
    pytest.param(
        [
            (
                'terms = "1..3", enable = 0 },\n  { set = "01"',
                'terms = "1..3", enable = 4 },\n  { set = "01"',
            )
        ],
        [
            "40:75 ROW-OUTSIDE row 4 in 'enable' of mode \"00\" does not exist for the cell on pin 7: it has 4 rows (line 44 of the file)"
        ],
        id="mode-enable-out",
    ),
    pytest.param(
        [
            (
                'terms = "1..3", enable = 0 },\n  { set = "01"',
                'terms = "0..3", enable = 0 },\n  { set = "01"',
            )
        ],
        [
            '40:75 ENABLE-IS-TERM row 0 of the cell on pin 7 is its enable and one of its terms in mode "00"'
        ],
        id="enable-is-term",
    ),
    pytest.param(
        [('{ pin = 8, terms = "4..6" }', '{ pin = 8, terms = "4..6", enable = 4 }')],
        [
            "3:8 PIN-IDLE 1 of 12 pins has no role: 4; expected an input column, a cell or a supply",
            "49:47 ENABLE-IS-TERM row 4 of the cell on pin 8 is its enable and one of its terms in its only mode",
        ],
        id="enable-is-term-cell",
    ),
    pytest.param(
        [('{ pin = 8, terms = "4..6" }', '{ pin = 8, rows = "4..5", terms = "4..6" }')],
        [
            "49:45 ROW-OUTSIDE row 6 in 'terms' of kind.gated.cells[0] is not among its 'rows' (line 49 of the file): 4..5"
        ],
        id="terms-out-of-rows",
    ),
    pytest.param(
        [('{ pin = 8, terms = "4..6" }', '{ pin = 8, rows = "4..6", terms = "4..6", enable = 7 }')],
        [
            "49:62 ROW-OUTSIDE row 7 in 'enable' of kind.gated.cells[0] is not among its 'rows' (line 49 of the file): 4..6"
        ],
        id="enable-out-of-rows",
    ),
    pytest.param(
        [('"s b"', '"s 8"')],
        [
            "49:30 CELL-TWO-SUMS the cell on pin 8 has terms of its own, and a column in [or]",
            "61:20 CELL-NO-SUM cell b has no column in [or] and no terms of its own; columns are for: 9, 8",
        ],
        id="two-sums",
    ),
    pytest.param(
        [(', terms = "4..6"', "")],
        [
            "49:19 CELL-NO-SUM the cell on pin 8 has no column in [or] and no terms of its own; columns are for: 9, b"
        ],
        id="no-sum",
    ),
    pytest.param(
        [('"s b"', '"s c"')],
        [
            "27:14 SUM-NO-CELL OR column 1 is for cell c, which does not exist; cells are on: 7..9, b",
            "61:20 CELL-NO-SUM cell b has no column in [or] and no terms of its own; columns are for: 9, c",
        ],
        id="no-cell",
    ),
    pytest.param(
        [("s s' b'", "t t' b'")],
        [
            "21:34 COLUMN-UNKNOWN column 9 of [and] is t, but no cell is named 't'",
            "54:30 FEEDBACK-IDLE kind.shared.modes[0] has 'feedback', but no cell of [kind.shared] has a column in [and]",
            "55:30 FEEDBACK-IDLE kind.shared.modes[1] has 'feedback', but no cell of [kind.shared] has a column in [and]",
        ],
        id="unknown-name",
    ),
    pytest.param(
        [('name = "b"', 'name = "s"')],
        [
            "21:39 COLUMN-UNKNOWN column 11 of [and] is b', but no cell is named 'b'",
            "27:14 SUM-NO-CELL OR column 1 is for cell b, which does not exist; cells are on: 7..9",
            "61:20 CELL-NAME two cells are named 's': this one and another one (line 57 of the file)",
            "61:20 CELL-NO-SUM cell s has no column in [or] and no terms of its own; columns are for: 9, b",
        ],
        id="name-twice",
    ),
    pytest.param(
        [('name = "b"', 'name = "b-1"')],
        [
            "61:20 CELL-NAME the name 'b-1' is not usable, expected letters, digits and _, a letter first"
        ],
        id="bad-name",
    ),
    pytest.param(
        [('modes = [ { feedback = "sum" } ]', "modes = [ {} ]")],
        [
            "60:11 FEEDBACK-MISSING kind.buried.modes[0] has no 'feedback', but cell b has column 11 of [and]"
        ],
        id="no-fb",
    ),
    pytest.param(
        [(', feedback = "sum" },', " },"), (', feedback = "pin" },\n]', " },\n]")],
        [
            "54:3 FEEDBACK-MISSING kind.shared.modes[0] has no 'feedback', but the cell on pin 9 has columns 9..10 of [and]",
            "55:3 FEEDBACK-MISSING kind.shared.modes[1] has no 'feedback', but the cell on pin 9 has columns 9..10 of [and]",
        ],
        id="no-fb-two",
    ),
    pytest.param(
        [('{ pin = "sum\'" }', '{ pin = "sum\'", feedback = "pin" }')],
        [
            "48:27 FEEDBACK-IDLE kind.gated.modes[0] has 'feedback', but no cell of [kind.gated] has a column in [and]"
        ],
        id="fb-idle",
    ),
    pytest.param(
        [('modes = [ { feedback = "sum" } ]', 'modes = [ { feedback = "pin" } ]')],
        ['60:24 FEEDBACK-NO-PIN feedback = "pin" in kind.buried.modes[0], but cell b has no pin'],
        id="fb-buried",
    ),
    pytest.param(
        [('feedback = "pin",  terms', 'feedback = "pin", columns = "1 1\'", terms')],
        [
            "40:49 FEEDBACK-TWICE kind.own.modes[0] has 'columns' and 'feedback'; expected one of them"
        ],
        id="fb-both",
    ),
    pytest.param(
        [('"3\' ."', '"3\'"')],
        [
            "42:41 MODE-COLUMNS 'columns' of kind.own.modes[2] has 1 word, but the cell on pin 7 has 2 in [and]: columns 6..7"
        ],
        id="mode-cols",
    ),
    pytest.param(
        [('"3\' ."', '"s /3"')],
        [
            "42:42 COLUMN column 0 of kind.own.modes[2] is 's', expected a pin such as 5, its complement such as 5', or . for nothing",
            "42:44 COLUMN column 1 of kind.own.modes[2] is '/3', expected a pin such as 5, its complement such as 5', or . for nothing",
        ],
        id="mode-cols-word",
    ),
    pytest.param(
        [('{ feedback = "sum" }', '{ feedback = "sum", pin = "sum" }')],
        ["60:37 MODE-NO-PIN no cell of [kind.buried] has a pin that could show the sum"],
        id="buried-pin",
    ),
    pytest.param(
        [('{ name = "b" }', '{ name = "b", enable = 7 }')],
        ["61:25 ENABLE-NO-PIN kind.buried.cells[0] has 'enable', but no pin that could be driven"],
        id="buried-enable",
    ),
    pytest.param(
        [('{ name = "b" }', "{ links = [] }")],
        ["61:11 KEY-MISSING kind.buried.cells[0] has no 'pin' and no 'name'"],
        id="cell-none",
    ),
    pytest.param(
        [('{ pin = 8, terms = "4..6" }', '{ pin = 8, terms = "4..6", enable = "never" }')],
        [
            "49:47 VALUE 'enable' is the text 'never', expected a row from 0 to 11, \"always\", or { pin = … }"
        ],
        id="enable-bad",
    ),
    pytest.param(
        [('pin = 4, active = "low"', 'pin = 4, active = "down"')],
        ["47:30 VALUE 'active' is the text 'down', expected \"high\" or \"low\""],
        id="enable-bad2",
    ),
    pytest.param(
        [('pin = 4, active = "low"', 'active = "low"')],
        ["47:10 KEY-MISSING [kind.gated.enable] has no 'pin'"],
        id="enable-bad3",
    ),
    pytest.param(
        [("pin = 4, active", "pin = 7, active"), ("[10, 11]", "[4, 10, 11]")],
        ["47:18 PIN-TWICE pin 7 is an output (line 44 of the file) and an enable pin"],
        id="enable-pin-cell",
    ),
    pytest.param(
        [("pin = 4, active", "pin = 6, active"), ("[10, 11]", "[4, 10, 11]")],
        ["47:18 PIN-TWICE pin 6 is ground (line 5 of the file) and an enable pin"],
        id="enable-pin-ground",
    ),
    pytest.param(
        [("pin = 4, active", "pin = 40, active")],
        [
            "3:8 PIN-IDLE 1 of 12 pins has no role: 4; expected an input column, a cell or a supply",
            "47:18 PIN-RANGE pin 40, an enable pin, does not exist: pins go from 1 to 12, as 'pins' says (line 3 of the file)",
        ],
        id="enable-pin-far",
    ),
    pytest.param(
        [('unused = "00"', 'unused = "10"')],
        ['38:10 UNUSED-MODE unused = "10" of [kind.own] is none of its modes: 00, 01, 11'],
        id="unused",
    ),
    pytest.param(
        [('unused_enable = "off"\n', "")],
        [
            "14:1 KEY-MISSING [links] has no 'unused_enable', but the cell on pin 7 (line 43 of the file) has an enable row, 0"
        ],
        id="no-unused-enable",
    ),
    pytest.param(
        [('unused_term = "dead"', 'unused_term = "blank"')],
        [
            "17:15 ROW-TRUE unused_term is 'blank', but a blank row is always 1: no line is connected to it; rows 0..6 go straight to the OR gate of a cell, whose sum would be 1"
        ],
        id="unused-blank",
    ),
    pytest.param(
        [('unused_term = "dead"', 'unused_term = "drop"')],
        ["17:15 DROP-MISSING unused_term is 'drop', but rows 0..6 have no link in [drop]"],
        id="unused-drop",
    ),
    pytest.param(
        [
            ('unused_term = "dead"', 'unused_term = "drop"'),
            ('[drop]\ndropped = 0\nfirst_fuse = 152\nterms = "8..11"\n', ""),
            ('"176..177"', '"176..177", "152..155"'),
        ],
        ["17:15 DROP-MISSING unused_term is 'drop', but the file has no [drop]"],
        id="no-drop",
    ),
    pytest.param(
        [("first_fuse = 152", "fuses = [152]")],
        ["33:9 ROWS-COUNT 'fuses' of [drop] lists 1 for 4 rows"],
        id="drop-count",
    ),
    pytest.param(
        [("first_fuse = 152", "first_fuse = 152\nfuses = [152]")],
        [
            "33:1 ROWS-TWICE [drop] has 'fuses' and 'first_fuse'; expected either 'fuses' or 'first_fuse'"
        ],
        id="drop-both",
    ),
    pytest.param(
        [("first_fuse = 152", "first_fuse = 153")],
        [
            "4:9 FUSE-GAP 1 of 178 fuses has no use: 152",
            "44:46 FUSE-OVERLAP fuse 156 is the link that drops row 11 (line 33 of the file) and link 'use' of the cell on pin 7",
        ],
        id="drop-overlap",
    ),
    pytest.param(
        [("159 = 1", "0x9f = 1")],
        ["12:1 SET-FUSE key '0x9f' in [set] is no fuse, expected the number of one"],
        id="set-key",
    ),
    pytest.param(
        [("159 = 1", "159 = 2")],
        ["12:7 VALUE '159' is the number 2, expected 0 or 1"],
        id="set-val",
    ),
    pytest.param(
        [("159 = 1", "259 = 1")],
        [
            "4:9 FUSE-GAP 1 of 178 fuses has no use: 159",
            "12:1 FUSE-RANGE fuse 259, a mode fuse, does not exist: fuses go from 0 to 177, as 'fuses' says (line 4 of the file)",
        ],
        id="set-range",
    ),
    pytest.param(
        [("159 = 1", "158 = 1")],
        [
            "4:9 FUSE-GAP 1 of 178 fuses has no use: 159",
            "57:55 FUSE-OVERLAP fuse 158 is a mode fuse (line 12 of the file) and link 'sense' of the cell on pin 9",
        ],
        id="set-overlap",
    ),
    pytest.param(
        [("bits = 16", "bits = 15")],
        [
            "65:8 SIGNATURE-BITS 'bits' of [signature] is 15, expected a multiple of 8: a character has 8 bits"
        ],
        id="sig-bits",
    ),
    pytest.param(
        [('"least significant bit first"', '"lsb"')],
        [
            "66:9 VALUE 'order' is the text 'lsb', expected \"most significant bit first\" or \"least significant bit first\""
        ],
        id="sig-order",
    ),
    pytest.param(
        [("first_fuse = 160", "first_fuse = 159")],
        [
            "4:9 FUSE-GAP 1 of 178 fuses has no use: 175",
            "64:14 FUSE-OVERLAP fuse 159 is a mode fuse (line 12 of the file) and bit 0 of the signature",
        ],
        id="sig-overlap",
    ),
    pytest.param(
        [("tpd = 12.5", "tpd = 0")],
        [
            "70:7 VALUE 'tpd' is the number 0, expected a time in ns, a number above 0 and up to 1000000000"
        ],
        id="time",
    ),
    pytest.param(
        [
            ("enable = 7", "enable = 17"),
            ('"176..177"', '"175..177"'),
            ("tpd = 12.5", 'tpd = "12"'),
            ("ones = 0", "ones = 2"),
        ],
        [
            "57:43 VALUE 'enable' is the number 17, expected a row from 0 to 11, \"always\", or { pin = … }",
            "67:8 VALUE 'ones' is the number 2, expected 0 or 1",
            "70:7 VALUE 'tpd' is the text '12', expected a time in ns, a number above 0 and up to 1000000000",
        ],
        id="several",
    ),
    pytest.param(
        [("tpd = 12.5", "tpd = inf\ntco = 1")],
        [
            "70:7 VALUE 'tpd' is the number inf, expected a time in ns, a number above 0 and up to 1000000000",
            "71:1 NOT-YET key 'tco' in [timing]: registers are not supported yet",
        ],
        id="time2",
    ),
    pytest.param(
        [("[5, 6]", "[]")],
        ["5:10 VALUE 'ground' is a list, expected a pin or a list of pins"],
        id="ground-empty",
    ),
    pytest.param(
        [("[5, 6]", "[5, 5]")],
        [
            "3:8 PIN-IDLE 1 of 12 pins has no role: 6; expected an input column, a cell or a supply",
            "5:14 PIN-TWICE pin 5 is ground (line 5 of the file) and here again",
        ],
        id="ground-twice",
    ),
    pytest.param(
        [('"fuller"', '""')],
        [
            "9:10 VALUE 'family' is the text '', expected the name that the modes and variants of one part share"
        ],
        id="family",
    ),
    pytest.param(
        [
            ('columns = "s b"', 'columns = "s b"'),
            ('{ pin = 8, terms = "4..6" }', '{ pin = 8, terms = "4..6", rows = "4..6" }'),
            ("enable = 7, links", 'rows = "7..11", enable = 7, links'),
        ],
        ["26:1 ROWS-NONE no row is left for [or]: cells own each row of the AND array"],
        id="no-rows-left",
    ),
    pytest.param(
        [(" b'", " .")],
        [
            "60:13 FEEDBACK-IDLE kind.buried.modes[0] has 'feedback', but no cell of [kind.buried] has a column in [and]"
        ],
        id="nowhere",
    ),
    pytest.param(
        [("1 1' 2 2' 3 3' 7 7' 9 s s' b'", "1 . 2 . 3' . 7 7' 9 s . b'")],
        [
            "17:15 ROW-NOT-DEAD unused_term is 'dead', but no pin has both a true and a complement line, so no row can be made dead",
            "18:17 ROW-NOT-DEAD unused_enable is 'off', but enable rows 0, 7 cannot be made 0: no source has both a true and a complement line",
        ],
        id="no-pairs",
    ),
    pytest.param(
        [('enable = { pin = 4, active = "low" }', "enable = 7"), ("[10, 11]", "[4,10, 11]")],
        [
            "57:43 ROW-TWICE row 7 belongs to the cell on pin 8 (line 49 of the file) and to the cell on pin 9"
        ],
        id="kind-enable-shared",
    ),
    pytest.param(
        [('{ pin = "sum\'" }', '{ pin = "none" }')],
        ["48:9 MODE-NONE no mode of [kind.gated] shows the sum at the pin"],
        id="all-none",
    ),
    pytest.param(
        [(', terms = "4..6"', ", terms = []")],
        [
            "33:14 FUSE-OVERLAP fuse 152 is OR row 4 column 0 for pin 9 (line 28 of the file) and the link that drops row 8; likewise 3 more fuses",
            "44:46 FUSE-OVERLAP fuse 156 is OR row 6 column 0 for pin 9 (line 28 of the file) and link 'use' of the cell on pin 7",
            "44:51 FUSE-OVERLAP fuse 157 is OR row 6 column 1 for cell b (line 28 of the file) and link 'polarity' of the cell on pin 7",
        ],
        id="terms-empty",
    ),
    pytest.param(
        [
            (
                '{ set = "1", pin = "none", feedback = "pin" }',
                '{ set = "1", d = "sum", pin = "q", feedback = "q" }',
            )
        ],
        [
            "55:16 NOT-YET key 'd' in kind.shared.modes[1]: registers are not supported yet",
            '55:33 NOT-YET pin = "q": registers are not supported yet',
            '55:49 NOT-YET feedback = "q": registers are not supported yet',
        ],
        id="register",
    ),
]


@pytest.mark.parametrize(("edits", "expected"), CASES)
def test_every_error_with_its_place(edits, expected):
    with pytest.raises(InputError) as caught:
        device(*edits)
    assert shown(caught.value.diagnostics) == expected


WARNINGS = [
    pytest.param(
        [('"sum\'", feedback = "sum\'"', '"sum", feedback = "pin"')],
        ['41:23 MODE-SAME modes "00" and "01" of [kind.own] do the same: the pin shows sum'],
        id="modes-same",
    ),
    pytest.param(
        [
            ('terms = "0..3", enable = "always"', 'terms = "1..2", enable = "always"'),
            (
                'terms = "1..3", enable = 0 },\n  { set = "01"',
                'terms = "1..2", enable = 0 },\n  { set = "01"',
            ),
            ('"sum\'", terms = "1..3"', '"sum\'", terms = "1..2"'),
        ],
        ["44:29 ROW-UNUSED row 3 of the cell on pin 7 is neither term nor enable in any mode"],
        id="row-unused",
    ),
]


@pytest.mark.parametrize(("edits", "expected"), WARNINGS)
def test_doubtful_files_are_read_with_a_warning(edits, expected):
    assert shown(device(*edits).warnings) == expected


OWN = (Path(__file__).parents[2] / "devices" / "own-9x5.toml").read_text(encoding="utf-8")

OWN_CASES = [
    pytest.param(
        [('terms = "25..29"', 'terms = "25..28"')],
        ["20:9 ROW-IDLE 1 of 30 rows has no use: 29; no cell owns it and there is no [or] with it"],
        id="idle-row",
    ),
    pytest.param(
        [("terms = 30", "terms = 31")],
        [
            "8:9 FUSE-COUNT 31 terms with 24 AND links each are 744 fuses, but the device has 720",
            "20:9 ROW-IDLE 1 of 31 rows has no use: 30; no cell owns it and there is no [or] with it",
        ],
        id="far-too-many",
    ),
    pytest.param(
        [(', terms = "25..29"', "")],
        [
            "20:9 ROW-IDLE 5 of 30 rows have no use: 25..29; no cell owns them and there is no [or] with them",
            "29:19 CELL-NO-SUM the cell on pin 11 has no terms of its own",
        ],
        id="no-terms",
    ),
    pytest.param(
        [('terms = "25..29"', 'terms = "24..29"')],
        [
            "29:32 ENABLE-IS-TERM row 24 of the cell on pin 11 is its enable and one of its terms in its only mode"
        ],
        id="enable-among-the-terms",
    ),
]


@pytest.mark.parametrize(("edits", "expected"), OWN_CASES)
def test_errors_where_no_or_array_is(edits, expected):
    with pytest.raises(InputError) as caught:
        device(*edits, text=OWN)
    assert shown(caught.value.diagnostics) == expected


@pytest.mark.parametrize("blank", [0, 1])
@pytest.mark.parametrize("connected", [0, 1])
@pytest.mark.parametrize("unused", ["blank", "dead"])
def test_blank_rows_of_own_or_gates_must_be_dead(blank, connected, unused):
    edits = [
        ("blank = 1", f"blank = {blank}"),
        ("connected = 0", f"connected = {connected}"),
        ('unused_term = "dead"', f'unused_term = "{unused}"'),
    ]
    if unused == "blank" and blank != connected:
        with pytest.raises(InputError) as caught:
            device(*edits)
        assert [d.code for d in caught.value.diagnostics] == ["ROW-TRUE"]
    else:
        assert device(*edits).blank_row == ("dead" if blank == connected else "true")


def test_a_blank_row_that_its_drop_link_cuts_off_is_dead_too():
    """All rows have one, and blank ones are cut off: none can make a sum 1."""
    edits = [
        ('unused_term = "dead"', 'unused_term = "blank"'),
        ("dropped = 0", "dropped = 1"),
        ('first_fuse = 152\nterms = "8..11"', "first_fuse = 178"),
        ("fuses = 178", "fuses = 190"),
        ('"176..177"', '"176..177", "152..155"'),
    ]
    assert device(*edits).blank_row == "dead"


ODD_VALUES = ["true", "1.5", "-1", '""', '"x"', "[]", "[{}]", "{}", "1979-05-27", "0", str(10**30)]

# Values that the odd one may well have.
FINE = {
    ("name", '"x"'),
    ("family", '"x"'),
    ("159", "0"),
    ("blank", "0"),
    ("connected", "0"),
    ("unconnected", "[]"),
    ("dropped", "0"),
    ("tpd", "1.5"),
    ("tfb", "1.5"),
    ("ten", "1.5"),
    ("tdis", "1.5"),
    ("ones", "0"),
    ("first_fuse", "0"),
}


@pytest.mark.parametrize("odd", ODD_VALUES)
def test_no_odd_value_gets_past_or_brings_the_reader_down(odd):
    lines = FULL.splitlines()
    for number, line in enumerate(lines):
        key, equals, value = line.partition(" = ")
        if not equals or key.lstrip().startswith("{") or value in (odd, "[") or (key, odd) in FINE:
            continue
        text = "\n".join([*lines[:number], f"{key} = {odd}", *lines[number + 1 :]])
        with pytest.raises(InputError) as caught:
            device_from(parse_toml(text, "full.toml"))
        assert all(d.location.line is not None for d in caught.value.diagnostics)


def refusal(text):
    """The diagnostics with which a text is refused; ``None`` if it is taken."""
    try:
        device_from(parse_toml(text, "full.toml"))
    except InputError as caught:
        return caught.diagnostics
    return None


@given(st.integers(0, len(FULL) - 1), st.sampled_from("0123456789\"'[]{}=.,x \n#-"))
def test_no_slip_of_a_key_brings_the_reader_down(position, character):
    assert refusal(FULL[:position] + character + FULL[position + 1 :]) != ()


HINTS = [
    pytest.param([("s s' b'", "s s' latch'")], "valid are: s, b", id="name-of-a-cell"),
    pytest.param([('{ name = "b" }', "{ }")], 'name = "b1"', id="neither-pin-nor-name"),
    pytest.param([(', terms = "4..6"', "")], "add 8 to the columns of [or], or terms", id="no-sum"),
    pytest.param([("159 = 1", "fuse159 = 1")], "as in 2048 = 0", id="mode-fuse"),
    pytest.param(
        [("unused_enable", "unused_enables")], "did you mean 'unused_enable'?", id="near-key"
    ),
    pytest.param(
        [("3' 7 7'", "3' X7 7'")],
        "valid are: s, b; a pin is written as a plain number: 7",
        id="pin-with-a-letter",
    ),
    pytest.param(
        [('columns = "3\' ."', 'columns = "X3\' ."')],
        "a pin is written as a plain number: 3'",
        id="pin-with-a-letter-in-a-mode",
    ),
    pytest.param(
        [('columns = "s b"', 'columns = "s b X8"')],
        "; a pin is written as a plain number: 8",
        id="pin-with-a-letter-in-or",
    ),
    pytest.param(
        [("pins = 12", "pins = 13"), ("[10, 11]", "[10]")],
        "say unconnected = [10, 11, 13]",
        id="unconnected-keeps-what-is-listed",
    ),
    pytest.param(
        [("fuses = 178", "fuses = 180"), ('"176..177"', '"176"')],
        'say so: spare = ["176..179"]',
        id="spare-names-all",
    ),
    pytest.param([("active = ", "activ = ")], "did you mean 'active'?", id="near-key-of-an-enable"),
]


@pytest.mark.parametrize(("edits", "hint"), HINTS)
def test_errors_say_how_to_mend_them(edits, hint):
    with pytest.raises(InputError) as caught:
        device(*edits)
    assert any(hint in (d.hint or "") for d in caught.value.diagnostics)
