# ruff: noqa: E501, ISC004 - messages stand on one line, as they are shown
"""Bad device files: what is wrong and where, all of it in one go."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from pla.device.reader import device_from, read_device
from pla.errors import InputError
from pla.tomlfile import parse_toml

# 4 rows of 8 fuses (6 AND, 2 OR), 2 polarity links at 32 and 33, 2 spare fuses.
TINY = """\
name = "tiny"
technology = "one-time"
pins = 8
fuses = 36
ground = 4
power = 8
unconnected = [3]
spare = ["34..35"]

[links]
blank = 0
connected = 0
unused_term = "blank"

[and]
columns = "1 1' 2 2' 5 5'"
terms = 4
first_fuse = 0
term_step = 8
column_step = 1

[or]
columns = "6 7"
first_fuse = 6
term_step = 8

[kind.out]
bits = ["polarity"]
modes = [ { set = "0", pin = "sum" }, { set = "1", pin = "sum'" } ]
cells = [
  { pin = 6, links = [32] },
  { pin = 7, links = [33] },
]
"""


def edited(edits):
    text = TINY
    for old, new in edits:
        assert text.count(old) >= 1, old
        text = text.replace(old, new, 1)
    return text


def errors_of(text):
    with pytest.raises(InputError) as caught:
        device_from(parse_toml(text, "tiny.toml"))
    assert all(d.location.file == "tiny.toml" for d in caught.value.diagnostics)
    return [
        f"{d.location.line}:{d.location.column} {d.code} {d.message}"
        for d in caught.value.diagnostics
    ]


def refusal(text):
    """The diagnostics with which a text is refused; ``None`` if it is taken."""
    try:
        device_from(parse_toml(text, "tiny.toml"))
    except InputError as caught:
        return caught.diagnostics
    return None


def test_the_file_that_the_cases_spoil_is_good():
    device = device_from(parse_toml(TINY, "tiny.toml"))
    assert (device.name, device.terms, device.fuses) == ("tiny", 4, 36)
    assert device.warnings == ()


CASES = [
    pytest.param(
        [('name = "tiny"\n', "")], ["1:1 KEY-MISSING the file has no 'name'"], id="no-name"
    ),
    pytest.param(
        [('"tiny"', '"tiny array"')],
        [
            "1:8 DEVICE-NAME the name 'tiny array' is not usable, expected letters, digits, and . _ - between them"
        ],
        id="bad-name",
    ),
    pytest.param(
        [('technology = "one-time"\n', "")],
        ["1:1 KEY-MISSING the file has no 'technology'"],
        id="no-technology",
    ),
    pytest.param(
        [('"one-time"', '"flash"')],
        ["2:14 VALUE 'technology' is the text 'flash', expected \"one-time\" or \"erasable\""],
        id="technology",
    ),
    pytest.param(
        [("pins = 8", 'pins = "8"')],
        ["3:8 VALUE 'pins' is the text '8', expected a whole number from 1 to 1000"],
        id="pins-text",
    ),
    pytest.param(
        [("pins = 8", "pins = 0")],
        ["3:8 VALUE 'pins' is the number 0, expected a whole number from 1 to 1000"],
        id="pins-0",
    ),
    pytest.param(
        [("pins = 8", "pins = true")],
        ["3:8 VALUE 'pins' is true, expected a whole number from 1 to 1000"],
        id="pins-true",
    ),
    pytest.param(
        [("fuses = 36\n", "")], ["1:1 KEY-MISSING the file has no 'fuses'"], id="no-fuses"
    ),
    pytest.param(
        [("fuses = 36", "fuses = 99999999")],
        ["4:9 VALUE 'fuses' is the number 99999999, expected a whole number from 1 to 1000000"],
        id="fuses-huge",
    ),
    pytest.param(
        [("fuses = 36", "fuses = 40")],
        ["4:9 FUSE-GAP 4 of 40 fuses have no use: 36..39"],
        id="fuses-more",
    ),
    pytest.param(
        [("fuses = 36", "fuses = 33")],
        [
            "8:10 FUSE-RANGE spare 34..35 does not exist as a whole: fuses go from 0 to 32, as 'fuses' says (line 4 of the file)",
            "32:23 FUSE-RANGE fuse 33, link 'polarity' of the cell on pin 7, does not exist: fuses go from 0 to 32, as 'fuses' says (line 4 of the file)",
        ],
        id="fuses-fewer",
    ),
    pytest.param(
        [("fuses = 36", "fuses = 30"), ('spare = ["34..35"]\n', "")],
        [
            "4:9 FUSE-COUNT 4 terms with 6 AND links and 2 OR links each are 32 fuses, but the device has 30"
        ],
        id="fuses-far-fewer",
    ),
    pytest.param(
        [("fuses = 36", "fuses = 37")], ["4:9 FUSE-GAP 1 of 37 fuses has no use: 36"], id="one-more"
    ),
    pytest.param(
        [("ground = 4", "ground = 4\ntechnologie = 1")],
        ["6:1 KEY-UNKNOWN unknown key 'technologie' in the file"],
        id="unknown-key",
    ),
    pytest.param(
        [("term_step = 8\ncolumn_step", "terms_step = 8\ncolumn_step")],
        [
            "15:1 KEY-MISSING [and] has no 'term_step'",
            "19:1 KEY-UNKNOWN unknown key 'terms_step' in [and]",
        ],
        id="unknown-key-and",
    ),
    pytest.param(
        [("ground = 4", "ground = 8")],
        [
            "3:8 PIN-IDLE 1 of 8 pins has no role: 4; expected an input column, a cell or a supply",
            "6:9 PIN-TWICE pin 8 is ground (line 5 of the file) and power",
        ],
        id="ground-twice",
    ),
    pytest.param(
        [("ground = 4", "ground = 9")],
        [
            "3:8 PIN-IDLE 1 of 8 pins has no role: 4; expected an input column, a cell or a supply",
            "5:10 PIN-RANGE pin 9, ground, does not exist: pins go from 1 to 8, as 'pins' says (line 3 of the file)",
        ],
        id="ground-out",
    ),
    pytest.param(
        [("ground = 4", "ground = 5")],
        [
            "3:8 PIN-IDLE 1 of 8 pins has no role: 4; expected an input column, a cell or a supply",
            "16:22 PIN-TWICE pin 5 is ground (line 5 of the file) and an input with column 4 of [and]",
        ],
        id="ground-is-input",
    ),
    pytest.param(
        [("power = 8", "power = 7")],
        [
            "3:8 PIN-IDLE 1 of 8 pins has no role: 8; expected an input column, a cell or a supply",
            "32:11 PIN-TWICE pin 7 is power (line 6 of the file) and an output",
        ],
        id="power-output",
    ),
    pytest.param(
        [("[3]", "[3, 3]")],
        ["7:19 PIN-TWICE pin 3 is unconnected (line 7 of the file) and here again"],
        id="unconnected-twice",
    ),
    pytest.param(
        [("[3]", "[3, 2]")],
        [
            "16:17 PIN-TWICE pin 2 is unconnected (line 7 of the file) and an input with column 2 of [and]"
        ],
        id="unconnected-input",
    ),
    pytest.param(
        [("[3]", "[3, 12]")],
        [
            "7:19 PIN-RANGE pin 12, unconnected, does not exist: pins go from 1 to 8, as 'pins' says (line 3 of the file)"
        ],
        id="unconnected-far",
    ),
    pytest.param(
        [("[3]", '[3, "4"]')],
        ["7:19 VALUE 'unconnected' is the text '4', expected a whole number of at least 1"],
        id="unconnected-text",
    ),
    pytest.param(
        [("unconnected = [3]\n", "")],
        ["3:8 PIN-IDLE 1 of 8 pins has no role: 3; expected an input column, a cell or a supply"],
        id="idle",
    ),
    pytest.param(
        [('"34..35"', '"33..35"')],
        [
            "32:23 FUSE-OVERLAP fuse 33 is spare (line 8 of the file) and link 'polarity' of the cell on pin 7"
        ],
        id="spare-overlaps-cell",
    ),
    pytest.param(
        [('"34..35"', '"30..35"')],
        [
            "24:14 FUSE-OVERLAP fuse 30 is spare (line 8 of the file) and OR row 3 column 0 for pin 6; likewise 1 more fuse",
            "31:23 FUSE-OVERLAP fuse 32 is spare (line 8 of the file) and link 'polarity' of the cell on pin 6",
            "32:23 FUSE-OVERLAP fuse 33 is spare (line 8 of the file) and link 'polarity' of the cell on pin 7",
        ],
        id="spare-overlaps-row",
    ),
    pytest.param(
        [('"34..35"', '"35..34"')],
        ["8:10 RANGE-REVERSED the range '35..34' runs backwards"],
        id="spare-backwards",
    ),
    pytest.param(
        [('"34..35"', '"34..36"')],
        [
            "8:10 FUSE-RANGE spare 34..36 does not exist as a whole: fuses go from 0 to 35, as 'fuses' says (line 4 of the file)"
        ],
        id="spare-far",
    ),
    pytest.param(
        [('"34..35"', '"34 to 35"')],
        [
            "8:10 VALUE '34 to 35' in 'spare' is not a number, expected a whole number of at least 0, or a range \"a..b\" of such"
        ],
        id="spare-words",
    ),
    pytest.param(
        [('"34..35"', "35")], ["4:9 FUSE-GAP 1 of 36 fuses has no use: 34"], id="spare-gap"
    ),
    pytest.param(
        [('[links]\nblank = 0\nconnected = 0\nunused_term = "blank"\n', "")],
        ["1:1 KEY-MISSING the file has no [links]"],
        id="no-links",
    ),
    pytest.param(
        [("blank = 0", "blank = 2")],
        ["11:9 VALUE 'blank' is the number 2, expected 0 or 1"],
        id="blank-2",
    ),
    pytest.param(
        [("blank = 0", "blank = true")],
        ["11:9 VALUE 'blank' is true, expected 0 or 1"],
        id="blank-true",
    ),
    pytest.param(
        [("connected = 0", 'connected = "closed"')],
        ["12:13 VALUE 'connected' is the text 'closed', expected 0 or 1"],
        id="connected",
    ),
    pytest.param(
        [('"blank"', '"nothing"')],
        ['13:15 VALUE \'unused_term\' is the text \'nothing\', expected "blank", "dead" or "drop"'],
        id="unused",
    ),
    pytest.param(
        [('"blank"', '"drop"')],
        ["13:15 DROP-MISSING unused_term is 'drop', but the file has no [drop]"],
        id="drop",
    ),
    pytest.param(
        [("1 1' 2 2' 5 5'", "1 2 5' . . .")],
        [
            "13:15 ROW-LIVE unused_term is 'blank', but a blank row is not dead: all its lines are connected, no pin has both a true and a complement line, and its OR links are connected; every unused row would add the AND of all lines to every sum"
        ],
        id="row-live",
    ),
    pytest.param(
        [("1 1' 2 2' 5 5'", "1 2 5' . . ."), ('"blank"', '"dead"'), ("blank = 0", "blank = 1")],
        [
            "13:15 ROW-NOT-DEAD unused_term is 'dead', but no pin has both a true and a complement line, so no row can be made dead"
        ],
        id="row-not-dead",
    ),
    pytest.param(
        [("1 1' 2 2' 5 5'", "1 1' 2 2' 5 5' .")],
        [
            "16:11 COLUMNS-EXTRA 7 columns of [and] are 1 too many: fuse 6 would be both AND row 0 column 6 with no line and OR row 0 column 0 for pin 6; with 6 each of the 36 fuses has one use"
        ],
        id="and-none",
    ),
    pytest.param(
        [("5 5'", "5 5’")],
        [
            "16:24 COLUMN column 5 of [and] is '5’', expected a pin such as 5 or the name of a cell such as b1, the complement of one such as 5', or . for a column with no line"
        ],
        id="col-primes",
    ),
    pytest.param(
        [("5 5'", "5 /5")],
        [
            "16:24 COLUMN column 5 of [and] is '/5', expected a pin such as 5 or the name of a cell such as b1, the complement of one such as 5', or . for a column with no line"
        ],
        id="col-slash",
    ),
    pytest.param(
        [("5 5'", "5, 5'")],
        [
            "16:22 COLUMN column 4 of [and] is '5,', expected a pin such as 5 or the name of a cell such as b1, the complement of one such as 5', or . for a column with no line"
        ],
        id="col-comma",
    ),
    pytest.param(
        [("5 5'", "0 5'")],
        [
            "16:22 COLUMN column 4 of [and] is '0', expected a pin such as 5 or the name of a cell such as b1, the complement of one such as 5', or . for a column with no line"
        ],
        id="col-zero",
    ),
    pytest.param(
        [("2 2' 5 5'", "2 2' 2 5'")],
        ["16:22 COLUMN-TWICE column 4 of [and] is line 2, and so is column 2"],
        id="col-twice",
    ),
    pytest.param(
        [("5 5'", "9 9'")],
        [
            "3:8 PIN-IDLE 1 of 8 pins has no role: 5; expected an input column, a cell or a supply",
            "16:22 PIN-RANGE pin 9, an input with column 4 of [and], does not exist: pins go from 1 to 8, as 'pins' says (line 3 of the file)",
        ],
        id="col-pin-far",
    ),
    pytest.param(
        [("\"1 1' 2 2' 5 5'\"", '"  "')],
        ["16:11 COLUMNS-EMPTY 'columns' of [and] is empty"],
        id="col-empty",
    ),
    pytest.param(
        [("\"1 1' 2 2' 5 5'\"", '". . . . . ."')],
        ["16:11 COLUMNS-EMPTY no column of [and] has a line"],
        id="col-no-lines",
    ),
    pytest.param(
        [("\"1 1' 2 2' 5 5'\"", "[1, 2, 5]")],
        ["16:11 VALUE 'columns' is a list, expected text in quotes"],
        id="col-list",
    ),
    pytest.param(
        [("columns = \"1 1' 2 2' 5 5'\"\n", "")],
        ["15:1 KEY-MISSING [and] has no 'columns'"],
        id="col-none",
    ),
    pytest.param(
        [("5 5'", "6 6'"), ("[3]", "[3, 5]")],
        [
            "29:11 FEEDBACK-MISSING kind.out.modes[0] has no 'feedback', but the cell on pin 6 has columns 4..5 of [and]",
            "29:39 FEEDBACK-MISSING kind.out.modes[1] has no 'feedback', but the cell on pin 6 has columns 4..5 of [and]",
        ],
        id="feedback",
    ),
    pytest.param(
        [("terms = 4", "terms = 0")],
        ["17:9 VALUE 'terms' is the number 0, expected a whole number from 1 to 65536"],
        id="terms-0",
    ),
    pytest.param(
        [("terms = 4", "terms = -4")],
        ["17:9 VALUE 'terms' is the number -4, expected a whole number from 1 to 65536"],
        id="terms-neg",
    ),
    pytest.param(
        [("terms = 4", "terms = 3")],
        ["4:9 FUSE-GAP 8 of 36 fuses have no use: 24..31"],
        id="terms-3",
    ),
    pytest.param(
        [("terms = 4", "terms = 5")],
        [
            "4:9 FUSE-COUNT 5 terms with 6 AND links and 2 OR links each are 40 fuses, but the device has 36"
        ],
        id="terms-5",
    ),
    pytest.param(
        [("terms = 4", "terms = 60000")],
        [
            "4:9 FUSE-COUNT 60000 terms with 6 AND links and 2 OR links each are 480000 fuses, but the device has 36"
        ],
        id="terms-huge",
    ),
    pytest.param([("terms = 4\n", "")], ["15:1 KEY-MISSING [and] has no 'terms'"], id="no-terms"),
    pytest.param(
        [("term_step = 8\ncolumn", "term_step = 0\ncolumn")],
        ["19:13 VALUE 'term_step' is the number 0, expected a whole number other than 0"],
        id="step-0",
    ),
    pytest.param(
        [("term_step = 8\ncolumn", "term_step = 7\ncolumn")],
        [
            "19:13 TERM-STEP term_step = 7 of [and] does not fit: fuse 7 would be both AND row 1 column 0 for 1 and OR row 0 column 1 for pin 7; with 8 each of the 36 fuses has one use"
        ],
        id="step-7",
    ),
    pytest.param(
        [("column_step = 1", "column_step = 0")],
        ["20:15 VALUE 'column_step' is the number 0, expected a whole number other than 0"],
        id="colstep-0",
    ),
    pytest.param(
        [("column_step = 1", "column_step = 2")],
        [
            "4:9 FUSE-GAP 12 of 36 fuses have no use: 1, 3, 5, 9, 11, 13, 17, 19, and 4 more ranges",
            "18:14 FUSE-OVERLAP fuse 8 is AND row 0 column 4 for 5 (line 18 of the file) and AND row 1 column 0 for 1; likewise 5 more fuses",
            "18:14 FUSE-OVERLAP fuse 34 is spare (line 8 of the file) and AND row 3 column 5 for 5'",
            "24:14 FUSE-OVERLAP fuse 6 is AND row 0 column 3 for 2' (line 18 of the file) and OR row 0 column 0 for pin 6; likewise 3 more fuses",
            "31:23 FUSE-OVERLAP fuse 32 is AND row 3 column 4 for 5 (line 18 of the file) and link 'polarity' of the cell on pin 6",
        ],
        id="colstep-2",
    ),
    pytest.param(
        [("first_fuse = 0", "first_fuse = 1")],
        [
            "4:9 FUSE-GAP 4 of 36 fuses have no use: 0, 8, 16, 24",
            "24:14 FUSE-OVERLAP fuse 6 is AND row 0 column 5 for 5' (line 18 of the file) and OR row 0 column 0 for pin 6; likewise 3 more fuses",
        ],
        id="shift",
    ),
    pytest.param(
        [("first_fuse = 6", "first_fuse = 5")],
        [
            "4:9 FUSE-GAP 4 of 36 fuses have no use: 7, 15, 23, 31",
            "24:14 FUSE-OVERLAP fuse 5 is AND row 0 column 5 for 5' (line 18 of the file) and OR row 0 column 0 for pin 6; likewise 3 more fuses",
        ],
        id="or-shift",
    ),
    pytest.param(
        [("first_fuse = 0", "first_fuse = -1")],
        ["18:14 VALUE 'first_fuse' is the number -1, expected a whole number of at least 0"],
        id="neg-first",
    ),
    pytest.param(
        [("first_fuse = 0", "rows = [0, 8, 16, 24]\nfirst_fuse = 0")],
        [
            "19:1 ROWS-TWICE [and] has 'rows' and 'first_fuse'; expected either 'rows' or 'first_fuse' with 'term_step'"
        ],
        id="rows-both",
    ),
    pytest.param(
        [("first_fuse = 0\nterm_step = 8", "rows = [0, 8, 16]")],
        ["18:8 ROWS-COUNT 'rows' of [and] lists 3 first fuses for 4 terms"],
        id="rows-3",
    ),
    pytest.param(
        [("first_fuse = 0\nterm_step = 8", 'rows = [0, 8, "16", 24]')],
        ["18:15 VALUE 'rows' is the text '16', expected a whole number of at least 0"],
        id="rows-text",
    ),
    pytest.param(
        [("first_fuse = 0\nterm_step = 8", "rows = [0, 8, 8, 24]")],
        [
            "4:9 FUSE-GAP 6 of 36 fuses have no use: 16..21",
            "18:15 FUSE-OVERLAP fuse 8 is AND row 1 column 0 for 1 (line 18 of the file) and AND row 2 column 0 for 1; likewise 5 more fuses",
        ],
        id="rows-dup",
    ),
    pytest.param(
        [("first_fuse = 0\nterm_step = 8\n", "")],
        ["15:1 KEY-MISSING [and] does not say where its rows begin"],
        id="rows-none",
    ),
    pytest.param(
        [("first_fuse = 0\nterm_step = 8\n", "first_fuse = 0\n")],
        ["15:1 KEY-MISSING [and] has no 'term_step'"],
        id="rows-nostep",
    ),
    pytest.param(
        [("[and]", "[end]")],
        ["1:1 KEY-MISSING the file has no [and]", "15:2 KEY-UNKNOWN unknown key 'end' in the file"],
        id="no-and",
    ),
    pytest.param(
        [('[or]\ncolumns = "6 7"\nfirst_fuse = 6\nterm_step = 8\n', "")],
        [
            "1:1 KEY-MISSING the file has no [or], and the cell on pin 6 (line 27 of the file) has no terms of its own; likewise 1 more cell"
        ],
        id="no-or",
    ),
    pytest.param(
        [('"6 7"', '"6 7\'"')],
        [
            '23:14 COLUMN column 1 of [or] is "7\'", expected a cell: its pin such as 14, or its name such as b1'
        ],
        id="or-prime",
    ),
    pytest.param(
        [('"6 7"', '"6 ."')],
        [
            "23:14 COLUMN column 1 of [or] is '.', expected a cell: its pin such as 14, or its name such as b1"
        ],
        id="or-dot",
    ),
    pytest.param(
        [('"6 7"', '"6 6"')],
        [
            "23:14 COLUMN-TWICE OR column 1 is for pin 6, and so is OR column 0 (line 23 of the file)",
            "32:11 CELL-NO-SUM the cell on pin 7 has no column in [or] and no terms of its own; columns are for: 6",
        ],
        id="or-twice",
    ),
    pytest.param(
        [('"6 7"', '"6 5"')],
        [
            "23:14 SUM-NO-CELL OR column 1 is for pin 5, which has no cell; cells are on: 6..7",
            "32:11 CELL-NO-SUM the cell on pin 7 has no column in [or] and no terms of its own; columns are for: 6, 5",
        ],
        id="or-nocell",
    ),
    pytest.param(
        [('"6 7"', '"6"')],
        [
            "23:11 FUSE-GAP 1 column of [or] and 6 of [and] do not fill term_step = 8: behind the columns of [or] 1 fuse of each row has no use: 7, 15, 23, 31",
            "32:11 CELL-NO-SUM the cell on pin 7 has no column in [or] and no terms of its own; columns are for: 6",
        ],
        id="cell-nosum",
    ),
    pytest.param(
        [("[kind.out]", "[kinds.out]")],
        [
            "1:1 KEY-MISSING the file has no [kind.NAME]",
            "27:2 KEY-UNKNOWN unknown key 'kinds' in the file",
        ],
        id="no-kind",
    ),
    pytest.param(
        [('["polarity"]', '["polarity", "polarity"]')],
        ["28:21 BIT-TWICE bits 0 and 1 of [kind.out] are both named 'polarity'"],
        id="bits-twice",
    ),
    pytest.param(
        [('["polarity"]', "[1]")],
        ["28:9 VALUE 'bits' is the number 1, expected text in quotes"],
        id="bits-number",
    ),
    pytest.param(
        [("[33]", "[33, 34]")],
        [
            "32:22 LINKS-COUNT the cell on pin 7 has 2 links, expected 1 (polarity) as 'bits' of its kind says"
        ],
        id="links-count",
    ),
    pytest.param(
        [(", links = [33]", "")],
        ["32:3 KEY-MISSING kind.out.cells[1] has no 'links'"],
        id="links-none",
    ),
    pytest.param(
        [("[33]", "[32]")],
        [
            "4:9 FUSE-GAP 1 of 36 fuses has no use: 33",
            "32:23 FUSE-OVERLAP fuse 32 is link 'polarity' of the cell on pin 6 (line 31 of the file) and link 'polarity' of the cell on pin 7",
        ],
        id="links-overlap",
    ),
    pytest.param(
        [("[33]", "[31]")],
        [
            "4:9 FUSE-GAP 1 of 36 fuses has no use: 33",
            "32:23 FUSE-OVERLAP fuse 31 is OR row 3 column 1 for pin 7 (line 24 of the file) and link 'polarity' of the cell on pin 7",
        ],
        id="links-row",
    ),
    pytest.param(
        [("[33]", "[133]")],
        [
            "4:9 FUSE-GAP 1 of 36 fuses has no use: 33",
            "32:23 FUSE-RANGE fuse 133, link 'polarity' of the cell on pin 7, does not exist: fuses go from 0 to 35, as 'fuses' says (line 4 of the file)",
        ],
        id="links-far",
    ),
    pytest.param(
        [("[33]", "[-33]")],
        ["32:23 VALUE 'links' is the number -33, expected a whole number of at least 0"],
        id="links-neg",
    ),
    pytest.param(
        [("pin = 7, ", "pin = 6, ")],
        [
            "3:8 PIN-IDLE 1 of 8 pins has no role: 7; expected an input column, a cell or a supply",
            "23:14 SUM-NO-CELL OR column 1 is for pin 7, which has no cell; cells are on: 6",
            "32:11 PIN-TWICE pin 6 is an output (line 31 of the file) and here again",
        ],
        id="cell-twice",
    ),
    pytest.param(
        [("pin = 7, ", "pin = 5, ")],
        [
            "3:8 PIN-IDLE 1 of 8 pins has no role: 7; expected an input column, a cell or a supply",
            "23:14 SUM-NO-CELL OR column 1 is for pin 7, which has no cell; cells are on: 5..6",
            "29:11 FEEDBACK-MISSING kind.out.modes[0] has no 'feedback', but the cell on pin 5 has columns 4..5 of [and]",
            "29:39 FEEDBACK-MISSING kind.out.modes[1] has no 'feedback', but the cell on pin 5 has columns 4..5 of [and]",
            "32:11 CELL-NO-SUM the cell on pin 5 has no column in [or] and no terms of its own; columns are for: 6, 7",
        ],
        id="cell-input",
    ),
    pytest.param(
        [("pin = 7, ", "")],
        ["32:3 KEY-MISSING kind.out.cells[1] has no 'pin' and no 'name'"],
        id="cell-nopin",
    ),
    pytest.param(
        [("pin = 7, ", "pin = 7, enable = 0, ")],
        [
            "4:9 FUSE-GAP 2 of 36 fuses have no use: 30..31",
            "10:1 KEY-MISSING [links] has no 'unused_enable', but the cell on pin 7 (line 32 of the file) has an enable row, 0",
        ],
        id="cell-enable",
    ),
    pytest.param(
        [("pin = 7, ", "pin = 7, link = 0, ")],
        ["32:14 KEY-UNKNOWN unknown key 'link' in kind.out.cells[1]"],
        id="cell-key",
    ),
    pytest.param(
        [
            (
                "cells = [\n  { pin = 6, links = [32] },\n  { pin = 7, links = [33] },\n]\n",
                "cells = []\n",
            )
        ],
        ["30:9 KIND-EMPTY [kind.out] has no cells"],
        id="no-cells",
    ),
    pytest.param(
        [
            (
                "cells = [\n  { pin = 6, links = [32] },\n  { pin = 7, links = [33] },\n]\n",
                "cells = { pin = 6 }\n",
            )
        ],
        ["30:9 VALUE 'cells' is a table, expected a list of tables"],
        id="cells-table",
    ),
    pytest.param(
        [('modes = [ { set = "0", pin = "sum" }, { set = "1", pin = "sum\'" } ]\n', "")],
        ["27:1 KEY-MISSING [kind.out] has no 'modes'"],
        id="no-modes",
    ),
    pytest.param(
        [
            (
                'modes = [ { set = "0", pin = "sum" }, { set = "1", pin = "sum\'" } ]\n',
                "modes = []\n",
            )
        ],
        ["29:9 KIND-EMPTY [kind.out] has no modes"],
        id="modes-empty",
    ),
    pytest.param(
        [('set = "1"', 'set = "0"')],
        [
            '29:47 MODE-TWICE two modes of [kind.out] have set = "0": this one and the one on line 29 of the file'
        ],
        id="set-equal",
    ),
    pytest.param(
        [('set = "1"', 'set = "10"')],
        ["29:47 MODE-SET 'set' has 2 states, expected 1 (polarity) as 'bits' of its kind says"],
        id="set-long",
    ),
    pytest.param(
        [('set = "1"', 'set = "x"')],
        ["29:48 MODE-SET 'set' has 'x' where a link is 0 (closed) or 1 (open)"],
        id="set-char",
    ),
    pytest.param(
        [('set = "1"', "set = 1")],
        ["29:47 VALUE 'set' is the number 1, expected text in quotes"],
        id="set-int",
    ),
    pytest.param(
        [('set = "1", ', "")],
        ["29:39 KEY-MISSING kind.out.modes[1] has no 'set'"],
        id="set-missing",
    ),
    pytest.param(
        [('set = "1", pin = "sum\'"', 'set = "1"')],
        ["29:39 KEY-MISSING kind.out.modes[1] has no 'pin'"],
        id="mode-nopin",
    ),
    pytest.param(
        [('"sum\'"', '"sums"')],
        ['29:58 VALUE \'pin\' is the text \'sums\', expected "sum", "sum\'" or "none"'],
        id="mode-pin",
    ),
    pytest.param(
        [('"sum\'"', '"q"')],
        ['29:58 NOT-YET pin = "q": registers are not supported yet'],
        id="mode-q",
    ),
    pytest.param(
        [('pin = "sum\'"', 'pin = "sum\'", feedback = "pin"')],
        [
            "29:66 FEEDBACK-IDLE kind.out.modes[1] has 'feedback', but no cell of [kind.out] has a column in [and]"
        ],
        id="mode-fb",
    ),
    pytest.param(
        [('"sum\'"', '"none"'), ('"sum"', '"none"')],
        ["29:9 MODE-NONE no mode of [kind.out] shows the sum at the pin"],
        id="mode-none",
    ),
    pytest.param(
        [("[kind.out]", "[register]\npower_up = 0\n\n[kind.out]")],
        ["27:2 NOT-YET key 'register' in the file: registers are not supported yet"],
        id="register",
    ),
    pytest.param(
        [("ground = 4", 'ground = 4\nextends = "x.toml"')],
        ["6:11 NO-SUCH-FILE x.toml: no such file"],
        id="extends",
    ),
    pytest.param(
        [
            ("pins = 8", 'pins = "8"'),
            ("terms = 4", "terms = 0"),
            ('set = "1"', 'set = "x"'),
            ("blank = 0", "blank = 3"),
        ],
        [
            "3:8 VALUE 'pins' is the text '8', expected a whole number from 1 to 1000",
            "11:9 VALUE 'blank' is the number 3, expected 0 or 1",
            "17:9 VALUE 'terms' is the number 0, expected a whole number from 1 to 65536",
            "29:48 MODE-SET 'set' has 'x' where a link is 0 (closed) or 1 (open)",
        ],
        id="several",
    ),
    pytest.param(
        [("ground = 4", "ground = 5"), ("[33]", "[31]"), ('"6 7"', '"6 5"')],
        [
            "3:8 PIN-IDLE 1 of 8 pins has no role: 4; expected an input column, a cell or a supply",
            "4:9 FUSE-GAP 1 of 36 fuses has no use: 33",
            "16:22 PIN-TWICE pin 5 is ground (line 5 of the file) and an input with column 4 of [and]",
            "23:14 SUM-NO-CELL OR column 1 is for pin 5, which has no cell; cells are on: 6..7",
            "32:11 CELL-NO-SUM the cell on pin 7 has no column in [or] and no terms of its own; columns are for: 6, 5",
            "32:23 FUSE-OVERLAP fuse 31 is OR row 3 column 1 for pin 5 (line 24 of the file) and link 'polarity' of the cell on pin 7",
        ],
        id="several2",
    ),
]


@pytest.mark.parametrize(("edits", "expected"), CASES)
def test_every_error_with_its_place(edits, expected):
    assert errors_of(edited(edits)) == expected


HINTS = [
    pytest.param([("ground = 4", "grounds = 4")], "did you mean 'ground'?", id="near-key"),
    pytest.param([("5 5'", "5 /5")], "write 5' for the complement", id="slash"),
    pytest.param([("5 5'", "5, 5'")], "separate columns by blanks", id="comma"),
    pytest.param([("fuses = 36", "fuses = 37")], 'spare = ["34..36"]', id="gap"),
    pytest.param([("unconnected = [3]\n", "")], "unconnected = [3]", id="idle-pin"),
    pytest.param([('"6 7"', '"6 5"')], "add 7 to the columns of [or]", id="no-sum"),
    pytest.param([("[links]", "[linked]")], "add [links]", id="no-links"),
]


@pytest.mark.parametrize(("edits", "hint"), HINTS)
def test_errors_say_how_to_mend_them(edits, hint):
    with pytest.raises(InputError) as caught:
        device_from(parse_toml(edited(edits), "tiny.toml"))
    assert any(hint in (d.hint or "") for d in caught.value.diagnostics)


WARNINGS = [
    pytest.param(
        [("2 2' 5 5'", "2 2' . 5'")],
        [
            "16:24 LINE-SINGLE pin 5 has a complement line but no true line: "
            "a term can ask only for the pin low"
        ],
        id="complement-only",
    ),
    pytest.param(
        [("2 2' 5 5'", "2 2' 5 .")],
        [
            "16:22 LINE-SINGLE pin 5 has a true line but no complement line: "
            "a term can ask only for the pin high"
        ],
        id="true-only",
    ),
    pytest.param(
        [('"sum\'"', '"sum"')],
        ['29:58 MODE-SAME modes "0" and "1" of [kind.out] do the same: the pin shows sum'],
        id="same-mode",
    ),
    pytest.param(
        [('"sum\'"', '"sum"'), ("1 1' 2 2' 5 5'", "1 1' 2 . 5 .")],
        [
            "16:17 LINE-SINGLE pin 2 has a true line but no complement line: a term can ask only for the pin high",
            "16:21 LINE-SINGLE pin 5 has a true line but no complement line: a term can ask only for the pin high",
            '29:58 MODE-SAME modes "0" and "1" of [kind.out] do the same: the pin shows sum',
        ],
        id="several-in-order",
    ),
]


@pytest.mark.parametrize(("edits", "expected"), WARNINGS)
def test_doubtful_files_are_read_with_a_warning(edits, expected):
    device = device_from(parse_toml(edited(edits), "tiny.toml"))
    assert [
        f"{w.location.line}:{w.location.column} {w.code} {w.message}" for w in device.warnings
    ] == expected


@pytest.mark.parametrize("blank", [0, 1])
@pytest.mark.parametrize("connected", [0, 1])
@pytest.mark.parametrize("unused", ["blank", "dead"])
def test_all_senses_with_paired_lines_are_safe(blank, connected, unused):
    edits = [
        ("blank = 0", f"blank = {blank}"),
        ("connected = 0", f"connected = {connected}"),
        ('"blank"', f'"{unused}"'),
    ]
    device = device_from(parse_toml(edited(edits), "tiny.toml"))
    assert device.blank_row == ("dead" if blank == connected else "true")


@pytest.mark.parametrize("blank", [0, 1])
@pytest.mark.parametrize("connected", [0, 1])
@pytest.mark.parametrize("unused", ["blank", "dead"])
def test_without_pairs_only_an_unconnected_blank_row_is_safe(blank, connected, unused):
    text = edited(
        [
            ("1 1' 2 2' 5 5'", "1 2 5 . . ."),
            ("blank = 0", f"blank = {blank}"),
            ("connected = 0", f"connected = {connected}"),
            ('"blank"', f'"{unused}"'),
        ]
    )
    if unused == "blank" and blank != connected:
        assert device_from(parse_toml(text, "tiny.toml")).blank_row == "true"
    else:
        code = "ROW-NOT-DEAD" if unused == "dead" else "ROW-LIVE"
        assert [e.split()[1] for e in errors_of(text)] == [code]


def test_a_missing_file_is_an_error_with_its_name(tmp_path):
    path = tmp_path / "nowhere.toml"
    with pytest.raises(InputError, match=r"nowhere\.toml"):
        read_device(str(path))


def test_a_long_list_of_gaps_is_cut_short():
    text = edited([("column_step = 1", "column_step = 2")])
    assert any("and 4 more ranges" in e for e in errors_of(text))


def test_huge_ranges_are_refused_at_once():
    text = edited([('"34..35"', '"34..99999999999999"')])
    assert errors_of(text) == [
        "8:10 FUSE-RANGE spare 34..99999999999999 does not exist as a whole: fuses go from 0 to "
        "35, as 'fuses' says (line 4 of the file)"
    ]


ODD_VALUES = [
    "true",
    "1.5",
    "-1",
    '""',
    '"x"',
    "[]",
    "[[]]",
    "[{}]",
    "{}",
    "{ a = 1 }",
    "1979-05-27",
    "0",
    str(10**30),
]


@pytest.mark.parametrize("odd", ODD_VALUES)
def test_no_odd_value_gets_past_or_brings_the_reader_down(odd):
    """Each value of the file in turn becomes something else; it is refused in words."""
    lines = TINY.splitlines()
    for number, line in enumerate(lines):
        key, equals, value = line.partition(" = ")
        if not equals or key.lstrip().startswith("{") or value in (odd, "["):
            continue
        text = "\n".join([*lines[:number], f"{key} = {odd}", *lines[number + 1 :]])
        if (key, odd) in {("unconnected", "[]"), ("blank", "0"), ("bits", "[]")}:
            continue
        found = refusal(text)
        if found is None:
            assert (key, odd) == ("name", '"x"'), line
        else:
            assert all(d.location.line is not None for d in found)


@given(st.integers(0, len(TINY) - 1), st.sampled_from("0123456789\"'[]{}=.,x \n#-"))
def test_no_slip_of_a_key_brings_the_reader_down(position, character):
    text = TINY[:position] + character + TINY[position + 1 :]
    assert refusal(text) != ()
