"""``fuseplan check``: output, exit codes, and the document for programs."""

from __future__ import annotations

import json
from fractions import Fraction
from pathlib import Path

import pytest
from point_values import points, value

from pla.behaviour.reader import read_behaviour
from pla.cli.main import run
from pla.report.behaviour_counts import count_outputs

GOLDEN = Path(__file__).parent / "golden"


@pytest.fixture(autouse=True)
def in_golden(monkeypatch):
    monkeypatch.chdir(GOLDEN)
    monkeypatch.delenv("FORCE_COLOR", raising=False)


def test_text(capsys):
    assert run(["check", "dryer.toml"]) == 0
    out, err = capsys.readouterr()
    assert out == (GOLDEN / "dryer.txt").read_text(encoding="utf-8")
    assert err == (GOLDEN / "dryer.err").read_text(encoding="utf-8")


def test_many_inputs_are_shown_as_shares(capsys, tmp_path):
    # 40 inputs: 1 where both bits are, a quarter; impossible where the first is without the other.
    design = tmp_path / "wide.toml"
    design.write_text(
        "[inputs]\nbus = 40\n[outputs]\nf = 1\n[never]\n"
        'when = ["bus[1] bus[0]\'"]\n[logic]\nf = "bus[1] bus[0]"\n',
        encoding="utf-8",
    )
    assert run(["-q", "check", str(design)]) == 0
    out = capsys.readouterr().out
    assert f"of {1 << 40} in all;" in out
    assert out.splitlines()[-3].split() == [
        "f",
        "equation,",
        "line",
        "8",
        "1",
        "2",
        "1",
        "4",
        "impossible",
        "1/4",
    ]


def test_document(capsys):
    assert run(["check", "dryer.toml", "--json"]) == 0
    out, err = capsys.readouterr()
    assert out == (GOLDEN / "dryer.json").read_text(encoding="utf-8")
    assert err == (GOLDEN / "dryer.err").read_text(encoding="utf-8")
    document = json.loads(out)
    assert document["schema_version"] == 1
    assert document["name"] == "Grain dryer panel"
    assert document["revision"] == "B"
    assert document["inputs"][:2] == ["step[3]", "step[2]"]
    assert document["outputs"][3:] == ["burner", "fan", "armed"]
    assert document["active_low"] == ["hatch", "burner"]
    assert document["places"] == {"some-device": {"burner": 14}}
    assert [(w["line"], w["column"], w["code"]) for w in document["warnings"]] == [
        (9, 1, "INPUT-UNUSED"),
        (26, 1, "ROW-IMPOSSIBLE"),
    ]


def test_counts_are_those_of_all_points():
    behaviour = read_behaviour("dryer.toml")
    every = [point for point, _ in points(behaviour)]
    for position, count in enumerate(count_outputs(behaviour)):
        signs = [value(behaviour, point, position) for point in every]
        assert (count.one, count.zero, count.free, count.total) == (
            signs.count(1),
            signs.count(0),
            signs.count("x"),
            len(every),
        )
        assert sum(size for _, size in count.reasons) == count.free


def test_share_of_the_impossible():
    # By hand: six of sixteen steps, and a quarter of the other ten sixteenths.
    counts = count_outputs(read_behaviour("dryer.toml"))
    impossible = dict(counts[0].reasons)["never"]
    assert Fraction(impossible, counts[0].total) == Fraction(6, 16) + Fraction(10, 16) / 4


def test_quiet(capsys):
    assert run(["-q", "check", "dryer.toml"]) == 0
    assert capsys.readouterr().err == ""
    run(["check", "dryer.toml"])  # the choice holds for one run only
    assert capsys.readouterr().err != ""


def test_wrong_design(tmp_path, capsys):
    path = tmp_path / "bad.toml"
    path.write_text("[inputs]\na = 1\n[outputs]\nf = 1\n[logic]\nf = 'a + b'\n", encoding="utf-8")
    assert run(["check", str(path)]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err == (
        f"{path}:6:10: error: there is no input or output 'b' [NAME-UNKNOWN]\n"
        "  | f = 'a + b'\n"
        "  |          ^\n"
        "  hint: valid are: a, f\n"
    )
    assert run(["check", str(path), "--json"]) == 2
    assert json.loads(capsys.readouterr().out) == {
        "schema_version": 1,
        "errors": [
            {
                "file": str(path),
                "line": 6,
                "column": 10,
                "code": "NAME-UNKNOWN",
                "message": "there is no input or output 'b'",
                "hint": "valid are: a, f",
            }
        ],
    }


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (["check"], "Missing argument 'DESIGN'"),
        (["check", "nowhere.toml"], "nowhere.toml: error: no such file"),
        (["check", "."], "is a folder"),
        (["check", "dryer.toml", "--jso"], "No such option"),
    ],
)
def test_wrong_calls(arguments, message, capsys):
    assert run(arguments) == 2
    assert message in capsys.readouterr().err


def test_help_has_an_example(capsys):
    assert run(["check", "--help"]) == 0
    assert "fuseplan check dryer.toml" in capsys.readouterr().out
