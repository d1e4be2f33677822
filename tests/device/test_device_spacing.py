"""One slip in the spacing of a device: the error points at the slip, not at its traces."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from pla.cli.main import run
from pla.device.reader import device_from
from pla.errors import InputError
from pla.tomlfile import parse_toml

DEVICES = Path(__file__).parents[2] / "devices"
ALTERNATE = "shared-12x32x6"  # rows of 24 AND links and 6 OR links, 30 in all, then 6 cells
OWN = "own-9x5"  # 30 rows of 24 AND links, terms and enables of five cells, no OR links
UPRIGHT = "gate-9x6"  # 18 columns of 24 AND links: column by column, no OR links
LISTED = "shared-10x28x4"  # 6 OR links and 32 AND links, rows of [and] listed one by one
APART = "shared-10x24x6"  # 24 rows of 20 AND links, then 24 rows of 6 OR links


def spoilt(name, *edits):
    text = (DEVICES / f"{name}.toml").read_text(encoding="utf-8")
    for pattern, new, occurrence in edits:
        found = list(re.finditer(pattern, text))
        at = found[occurrence]
        text = text[: at.start()] + new + text[at.end() :]
    return text


def refused(text):
    with pytest.raises(InputError) as caught:
        device_from(parse_toml(text, "spoilt.toml"))
    return caught.value.diagnostics


def step(value, occurrence):
    return (r"term_step = \d+", f"term_step = {value}", occurrence)


AND, OR = 0, 1


@pytest.mark.parametrize(
    ("name", "edits", "array", "right"),
    [
        pytest.param(ALTERNATE, [step(29, AND)], AND, 30, id="alternate-and-less"),
        pytest.param(ALTERNATE, [step(31, AND)], AND, 30, id="alternate-and-more"),
        pytest.param(ALTERNATE, [step(24, AND)], AND, 30, id="alternate-and-own-width"),
        pytest.param(ALTERNATE, [step(29, OR)], OR, 30, id="alternate-or-less"),
        pytest.param(ALTERNATE, [step(31, OR)], OR, 30, id="alternate-or-more"),
        pytest.param(ALTERNATE, [step(29, AND), step(29, OR)], AND, 30, id="alternate-both-less"),
        pytest.param(ALTERNATE, [step(31, AND), step(31, OR)], AND, 30, id="alternate-both-more"),
        pytest.param(APART, [step(19, AND)], AND, 20, id="apart-and-less"),
        pytest.param(APART, [step(21, AND)], AND, 20, id="apart-and-more"),
        pytest.param(APART, [step(5, OR)], OR, 6, id="apart-or-less"),
        pytest.param(APART, [step(7, OR)], OR, 6, id="apart-or-more"),
        pytest.param(OWN, [step(23, AND)], AND, 24, id="own-less"),
        pytest.param(OWN, [step(25, AND)], AND, 24, id="own-more"),
        pytest.param(LISTED, [step(39, 0)], 0, 38, id="or-beside-listed-rows"),
    ],
)
def test_a_wrong_step_is_one_error_at_the_step(name, edits, array, right):
    text = spoilt(name, *edits)
    (found,) = refused(text)
    lines = [n for n, line in enumerate(text.splitlines(), 1) if line.startswith("term_step")]
    assert (found.code, found.location.line, found.location.column) == (
        "TERM-STEP",
        lines[array],
        len("term_step = ") + 1,
    )
    assert f"with {right} each of the " in found.message
    assert f"the step is at least {right}" in found.hint.replace("its step", "the step")


def test_a_wrong_step_beside_another_slip_is_still_found_where_a_row_cannot_fit():
    more = (r"fuses = \d+", "fuses = 970", 0)
    found = refused(spoilt(ALTERNATE, more, step(29, AND)))
    assert [d.message for d in found] == [
        "term_step = 29 of [and] is smaller than a row, so that rows overlap; expected at least 30"
    ]
    found = refused(spoilt(ALTERNATE, more, step(31, OR)))
    (message,) = [d.message for d in found]
    assert message == (
        "term_step is 31 in [or] and 30 in [and] (line 18 of the file), but the rows of both "
        "alternate, so that they run into each other"
    )
    more = (r"fuses = \d+", "fuses = 630", 0)
    found = refused(spoilt(APART, more, step(19, AND)))
    assert [d.message for d in found] == [
        "term_step = 19 of [and] is smaller than a row, so that rows overlap; expected at least 20"
    ]


@pytest.mark.parametrize(
    ("name", "edit", "message", "hint"),
    [
        pytest.param(
            ALTERNATE,
            (r" 13'", "", 0),
            "23 columns of [and] and 6 of [or] do not fill term_step = 30: behind the columns of "
            "[and] 1 fuse of each row has no use: 23, 53, 83,",
            "perhaps a column is missing: pin 13 has a true line, but no 13'; only if the data "
            'sheet says that these fuses do nothing: spare = ["23", "53", …]',
            id="last",
        ),
        pytest.param(
            ALTERNATE,
            (r" 2 2'", " 2'", 0),
            "23 columns of [and] and 6 of [or] do not fill term_step = 30",
            "pin 2 has a complement line, but no 2;",
            id="in-the-middle",
        ),
        pytest.param(
            APART,
            (r" 10'", "", 0),
            "19 columns of [and] do not fill term_step = 20: behind the columns of [and] 1 fuse "
            "of each row has no use: 19, 39, 59,",
            "perhaps a column is missing: pin 10 has a true line, but no 10'",
            id="apart",
        ),
        pytest.param(
            ALTERNATE,
            (r" 9 9'", "", 0),
            "22 columns of [and] and 6 of [or] do not fill term_step = 30: behind the columns of "
            "[and] 2 fuses of each row have no use: 22..23, 52..53,",
            "perhaps a column is missing; only if",
            id="a-pair",
        ),
        pytest.param(
            APART,
            (r" 17\"", '"', 0),
            "5 columns of [or] do not fill term_step = 6: behind the columns of [or] 1 fuse of "
            "each row has no use: 485, 491,",
            "perhaps a column is missing; only if",
            id="sum",
        ),
        pytest.param(
            OWN,
            (r" 7'", "", 0),
            "23 columns of [and] do not fill term_step = 24: behind the columns of [and] 1 fuse of "
            "each row has no use: 23, 47, 71,",
            "perhaps a column is missing: pin 7 has a true line, but no 7'; only if",
            id="own",
        ),
        pytest.param(
            LISTED,
            (r" 11'", "", 0),
            "31 columns of [and] and 6 of [or] do not fill the array: behind the columns of [and] "
            "1 fuse of each row has no use: 37, 75,",
            "pin 11 has a true line, but no 11', cell c has a complement line, but no c; only if",
            id="beside-listed-rows",
        ),
    ],
)
def test_a_forgotten_column_is_not_taken_for_spare_fuses(name, edit, message, hint):
    text = spoilt(name, edit)
    (found,) = [d for d in refused(text) if d.code == "FUSE-GAP"]
    assert found.message.startswith(message)
    assert hint in found.hint
    assert text.splitlines()[found.location.line - 1].startswith("columns")


def test_a_wrong_step_between_columns_is_one_error():
    text = spoilt(UPRIGHT, (r"term_step = \d+", "term_step = 2", 0))
    (found,) = refused(text)
    assert found.message == (
        "term_step = 2 of [and] does not fit: fuse 24 would be both AND row 0 column 1 for 1' and "
        "AND row 12 column 0 for 1; with 1 each of the 438 fuses has one use"
    )


def test_a_step_that_cannot_be_right_is_found_without_an_or_array():
    more = (r"fuses = \d+", "fuses = 730", 0)
    (found,) = refused(spoilt(OWN, more, step(23, AND)))
    assert found.message == (
        "term_step = 23 of [and] is smaller than a row, so that rows overlap; expected at least 24"
    )


@pytest.mark.parametrize("name", [UPRIGHT, OWN, APART, ALTERNATE])
def test_a_pair_of_columns_too_many_is_one_error(name):
    with pytest.raises(InputError) as caught:
        device_from(parse_toml(spoilt(name, ('columns = "', "columns = \"99 99' ", 0)), "x.toml"))
    (found,) = [d for d in caught.value.diagnostics if not d.code.startswith("PIN")]
    assert found.code == "COLUMNS-EXTRA"
    assert "are 2 too many: fuse " in found.message
    assert found.hint == "perhaps 2 columns too many: compare them with the logic diagram"


def test_fuses_past_the_last_row_are_no_forgotten_column():
    (found,) = refused(spoilt(APART, (r"fuses = \d+", "fuses = 700", 0)))
    assert found.message == "76 of 700 fuses have no use: 624..699"
    assert found.hint == 'if they do nothing, say so: spare = ["624..699"]'


def test_gaps_beside_wrong_numbers_are_not_said_to_be_spare():
    found = refused(spoilt(ALTERNATE, (r"links = \[965\]", "links = [964]", 0)))
    assert [d.code for d in found] == ["FUSE-GAP", "FUSE-OVERLAP"]
    assert found[0].hint == "correct the other fuse numbers first: some of them may belong here"


DESIGN = """\
name = "Cistern"

[inputs]
low = 1
high = 1

[outputs]
pump = 1

[logic]
pump = "low high'"
"""


@pytest.mark.parametrize("command", [["device", "check"], ["device", "show"]])
def test_a_design_file_is_one_error(capsys, tmp_path, command):
    path = tmp_path / "cistern.toml"
    path.write_text(DESIGN, encoding="utf-8")
    assert run([*command, str(path)]) == 2
    err = capsys.readouterr().err
    assert err.count("error:") == 1
    assert "cistern.toml:3:2: error: this is a design file, with [inputs]; a device" in err


def test_a_device_with_a_stray_table_of_signals_is_still_a_device():
    found = refused(spoilt(APART, (r"\[links\]", "[inputs]\nlow = 1\n\n[links]", 0)))
    assert [d.code for d in found] == ["KEY-UNKNOWN"]
