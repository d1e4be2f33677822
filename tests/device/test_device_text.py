# ruff: noqa: E501 - sentences stand on one line, as they are shown
"""Devices in words, drawn, and as the command shows them."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from pla.cli.main import run
from pla.device.catalogue import find_device
from pla.device.reader import device_from
from pla.report.device_text import draw, explain, fuse_table
from pla.tomlfile import parse_toml

GOLDEN = Path(__file__).parent / "golden"

SMALL = """\
name = "small"
technology = "TECHNOLOGY"
pins = 6
fuses = 10
ground = 3
power = 6
unconnected = [5]

[links]
blank = BLANK
connected = CONNECTED
unused_term = "UNUSED"

[and]
columns = "1 1' 2 2'"
terms = 2
first_fuse = 0
term_step = 1
column_step = 2

[or]
columns = "4"
first_fuse = 8
term_step = 1

[kind.out]
modes = [ { pin = "sum" } ]
cells = [ { pin = 4 } ]
"""


OR_AMONG_AND = """\
columns = "4 5"
rows = [8, 9, 20, 21]
column_step = 2"""


def small(technology="one-time", blank=0, connected=0, unused="blank"):
    text = (
        SMALL.replace("TECHNOLOGY", technology)
        .replace("BLANK", str(blank))
        .replace("CONNECTED", str(connected))
        .replace("UNUSED", unused)
    )
    return device_from(parse_toml(text, "small.toml"))


@pytest.mark.parametrize("name", ["shared-12x32x6", "shared-20x96x12"])
def test_the_whole_text_of_a_device(name):
    device = find_device(name)
    golden = (GOLDEN / f"{name}.txt").read_text(encoding="utf-8")
    assert f"{explain(device)}\n{draw(device)}" == golden


@pytest.mark.parametrize(
    ("senses", "sentences"),
    [
        pytest.param(
            {"blank": 0, "connected": 0},
            [
                "Blank: every link is closed (0).",
                "A closed link (0) joins a line to a term",
                "Programming makes a link open (1). What is programmed cannot be undone.",
                "A blank row is dead, always 0: every line and its complement are joined to it.",
                "A row without a term is left blank. It can take a term later.",
                "its pin is low.",
            ],
            id="blank-closed-joins",
        ),
        pytest.param(
            {"blank": 1, "connected": 0},
            [
                "Blank: every link is open (1).",
                "A closed link (0) joins a line to a term",
                "Programming makes a link closed (0).",
                "A blank row is always 1: no line is joined to it",
                "its OR links are apart too, so it reaches no sum",
            ],
            id="blank-open-apart",
        ),
        pytest.param(
            {"blank": 0, "connected": 1},
            [
                "An open link (1) joins a line to a term",
                "A closed link (0) keeps them apart.",
                "A blank row is always 1",
            ],
            id="blank-closed-apart",
        ),
        pytest.param(
            {"blank": 1, "connected": 1, "technology": "erasable"},
            [
                "Programming makes a link closed (0). Erasing makes every link open again.",
                "A blank row is dead",
                "A row without a term is left blank.\n",
            ],
            id="blank-open-joins",
        ),
        pytest.param(
            {"blank": 1, "connected": 0, "unused": "dead"},
            [
                "A row without a term is made dead: every line and its complement are joined to it.",
                "It can take no term later",
            ],
            id="made-dead-once",
        ),
        pytest.param(
            {"blank": 0, "connected": 0, "unused": "dead"},
            ["It is so when blank. It can take a term later."],
            id="dead-when-blank",
        ),
        pytest.param(
            {"blank": 1, "connected": 0, "unused": "dead", "technology": "erasable"},
            [
                "A row without a term is made dead: every line and its complement are joined to it.\n"
            ],
            id="made-dead-erasable",
        ),
    ],
)
def test_senses_in_words(senses, sentences):
    text = explain(small(**senses)).replace("\n    ", " ")
    for sentence in sentences:
        assert sentence in text


def test_fuses_of_an_array_laid_out_by_columns():
    device = small()
    assert [b.what for b in device.blocks()] == [
        "line 1",
        "line 1'",
        "line 2",
        "line 2'",
        "OR links of term 0",
        "OR links of term 1",
    ]
    assert fuse_table(device)[0] == ("0..7", "8", "lines 1 to 2', 2 fuses each")
    assert "0..6 by 2" in draw(device)


@pytest.mark.parametrize(
    ("rows", "table"),
    [
        pytest.param(
            "rows = [0, 6, 12]",
            [
                ("0..17", "18", "terms 0 to 2, 4 fuses each: AND links; 2 spare after each"),
                ("18..20", "3", "OR links of terms 0 to 2, 1 fuse each"),
            ],
            id="padded",
        ),
        pytest.param(
            "rows = [12, 6, 0]",
            [
                ("0..17", "18", "terms 2 to 0, 4 fuses each: AND links; 2 spare after each"),
                ("18..20", "3", "OR links of terms 0 to 2, 1 fuse each"),
            ],
            id="backwards",
        ),
        pytest.param(
            "rows = [6, 0, 12]",
            [
                ("0..11", "12", "terms 1 to 0, 4 fuses each: AND links; 2 spare after each"),
                ("12..15", "4", "term 2: AND links"),
                ("16..17", "2", "spare"),
                ("18..20", "3", "OR links of terms 0 to 2, 1 fuse each"),
            ],
            id="out-of-order",
        ),
    ],
)
def test_fuse_table_of_padded_rows(rows, table):
    text = SMALL.replace("TECHNOLOGY", "one-time").replace("UNUSED", "blank")
    text = text.replace("BLANK", "0").replace("CONNECTED", "0").replace("fuses = 10", "fuses = 21")
    text = text.replace(
        "terms = 2\nfirst_fuse = 0\nterm_step = 1\ncolumn_step = 2", f"terms = 3\n{rows}"
    ).replace("first_fuse = 8", "first_fuse = 18")
    text = text.replace("ground = 3", 'ground = 3\nspare = ["4..5", "10..11", "16..17"]')
    assert fuse_table(device_from(parse_toml(text, "padded.toml"))) == table


def test_fuses_of_rows_that_alternate_are_one_list():
    text = SMALL.replace("TECHNOLOGY", "one-time").replace("UNUSED", "blank")
    text = text.replace("BLANK", "0").replace("CONNECTED", "0").replace("fuses = 10", "fuses = 20")
    text = text.replace(
        "terms = 2\nfirst_fuse = 0\nterm_step = 1", "terms = 4\nrows = [0, 1, 8, 9]"
    )
    text = text.replace("first_fuse = 8", "first_fuse = 16")
    device = device_from(parse_toml(text, "alternate.toml"))
    assert [(b.first, b.size, b.what) for b in device.blocks()] == [
        (0, 16, "AND array"),
        (16, 1, "OR links of term 0"),
        (17, 1, "OR links of term 1"),
        (18, 1, "OR links of term 2"),
        (19, 1, "OR links of term 3"),
    ]


def test_arrays_that_alternate_are_one_list():
    text = SMALL.replace("TECHNOLOGY", "one-time").replace("UNUSED", "blank")
    text = text.replace("BLANK", "0").replace("CONNECTED", "0").replace("fuses = 10", "fuses = 24")
    text = text.replace(
        "terms = 2\nfirst_fuse = 0\nterm_step = 1", "terms = 4\nrows = [0, 1, 12, 13]"
    )
    text = text.replace('columns = "4"\nfirst_fuse = 8\nterm_step = 1', OR_AMONG_AND)
    text = text.replace("unconnected = [5]\n", "").replace(
        "{ pin = 4 }", "{ pin = 4 }, { pin = 5 }"
    )
    device = device_from(parse_toml(text, "alternate.toml"))
    assert [(b.first, b.size, b.what) for b in device.blocks()] == [(0, 24, "AND and OR array")]


def test_list_shows_every_device(capsys):
    assert run(["device", "list"]) == 0
    shown = capsys.readouterr().out.splitlines()
    assert shown[0].split() == [
        "name",
        "inputs",
        "terms",
        "outputs",
        "pins",
        "fuses",
        "technology",
        "summary",
    ]
    (row,) = [line.split() for line in shown if line.startswith("shared-12x32x6 ")]
    assert row[:7] == ["shared-12x32x6", "12", "32", "6", "20", "966", "one-time"]
    assert max(map(len, shown)) <= 100


def test_list_as_json(capsys):
    assert run(["device", "list", "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["schema_version"] == 1
    terms = {d["name"]: d["terms"] for d in document["devices"]}
    shared = [terms[name] for name in terms if name.startswith("shared-")]
    assert shared == [16, 24, 28, 32, 40, 48, 96]
    assert terms["own-9x5"] == 25  # five cells with five terms; their enable rows do not count
    families = {d["family"] for d in document["devices"] if d["name"].startswith("modal-8x4")}
    assert families == {"modal-8x4"}


def test_show_explains_and_draws(capsys):
    assert run(["device", "show", "shared-12x32x6"]) == 0
    shown = capsys.readouterr()
    assert shown.out == (GOLDEN / "shared-12x32x6.txt").read_text(encoding="utf-8")
    assert shown.err == ""


def test_show_as_json(capsys):
    assert run(["device", "show", "shared-14x40x8", "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["and"]["columns"][13:17] == ["7'", None, None, "8"]
    assert document["and"]["rows"][:2] == [0, 38]
    assert document["or"]["columns"] == [22, 21, 20, 19, 18, 17, 16, 15]
    assert document["cells"][0] == {
        "pin": 15,
        "name": None,
        "kind": "out",
        "links": {"polarity": 1527},
        "rows": [],
        "modes": [
            {
                "set": states,
                "pin": shows,
                "feedback": None,
                "terms": [],
                "enable": "always",
                "columns": {},
            }
            for states, shows in (("1", "sum'"), ("0", "sum"))
        ],
        "unused": "1",
    }
    assert document["spare"] == [[1528, 1531]]
    assert document["blank_row"] == "dead"


def test_show_of_an_unknown_name(capsys):
    assert run(["device", "show", "shared-12x32x7"]) == 2
    shown = capsys.readouterr()
    assert shown.out == ""
    assert "no device 'shared-12x32x7' in the catalogue" in shown.err
    assert "did you mean 'shared-12x32x6'?" in shown.err


def test_check_of_a_good_file(tmp_path, capsys):
    path = tmp_path / "good.toml"
    path.write_text(Path(find_device("shared-8x16x4").location.file).read_text())
    assert run(["device", "check", str(path)]) == 0
    shown = capsys.readouterr()
    first = shown.out.splitlines()[0]
    assert first.endswith("consistent: each of 320 fuses has one use, each of 14 pins one role")
    assert "A blank row is dead" in shown.out
    assert shown.err == ""


def test_check_of_a_bad_file(tmp_path, capsys):
    path = tmp_path / "bad.toml"
    text = Path(find_device("shared-12x32x6").location.file).read_text()
    path.write_text(text.replace("links = [960]", "links = [930]"))
    assert run(["device", "check", str(path)]) == 2
    shown = capsys.readouterr()
    assert shown.out == ""
    assert (
        "error: fuse 930 is AND row 31 column 0 for 1 (line 17 of the file) and "
        "link 'polarity' of the cell on pin 14 [FUSE-OVERLAP]" in shown.err
    )
    assert "error: 1 of 966 fuses has no use: 960 [FUSE-GAP]" in shown.err


def test_check_of_a_bad_file_as_json(tmp_path, capsys):
    path = tmp_path / "bad.toml"
    path.write_text('name = "x"\n')
    assert run(["device", "check", str(path), "--json"]) == 2
    document = json.loads(capsys.readouterr().out)
    assert {e["file"] for e in document["errors"]} == {str(path)}
    assert "KEY-MISSING" in {e["code"] for e in document["errors"]}


def test_warnings_go_to_standard_error(tmp_path, capsys):
    path = tmp_path / "half.toml"
    text = SMALL.replace("TECHNOLOGY", "one-time").replace("BLANK", "0").replace("CONNECTED", "0")
    path.write_text(text.replace("UNUSED", "blank").replace("1 1' 2 2'", "1 1' 2 ."))
    assert run(["device", "check", str(path), "--json"]) == 0
    shown = capsys.readouterr()
    assert "warning: pin 2 has a true line but no complement line" in shown.err
    document = json.loads(shown.out)
    assert document["consistent"] is True
    assert [w["code"] for w in document["warnings"]] == ["LINE-SINGLE"]
