"""``check``, ``terms``, ``plan`` and ``budget`` on a design with registers and a state table."""

from __future__ import annotations

import json
from itertools import product
from pathlib import Path

import pytest

from pla.cli.main import run

GOLDEN = Path(__file__).parent / "golden"


@pytest.fixture(autouse=True)
def in_golden(monkeypatch):
    monkeypatch.chdir(GOLDEN)
    monkeypatch.delenv("FORCE_COLOR", raising=False)


def hoist(up, top, bell, wait, lift):
    """What hoist.toml asks of its registers and outputs: by hand; x is free."""
    if top and not up:
        return dict.fromkeys(("motor", "bell", "wait[1]", "wait[0]", "lift[1]", "lift[0]"), "x")
    then, motor = {
        0: ("01", 0) if up and not top else ("00", 0),
        1: ("10", "x") if top else ("01", 1),
        2: ("00", 0) if wait == 3 else ("10", 0),
        3: ("xx", "x"),
    }[lift]
    following = (wait + 1) % 4
    return {
        "motor": motor,
        "bell": int(not bell and wait == 3),
        "wait[1]": following >> 1,
        "wait[0]": following & 1,
        "lift[1]": then[0],
        "lift[0]": then[1],
    }


def sum_at(terms, output, values):
    return int(
        any(
            output in term["outputs"]
            and all(
                sign in ("-", value) for sign, value in zip(term["inputs"], values, strict=True)
            )
            for term in terms
        )
    )


@pytest.mark.parametrize("polarity", ["true", "free"])
def test_terms_are_what_the_registers_take(polarity, capsys):
    assert run(["terms", "hoist.toml", "--json", "--require-proof", "--polarity", polarity]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    found = json.loads(out)
    names = ["clk", "up", "top", "stop", "mute", "bell", "wait[1]", "wait[0]", "lift[1]", "lift[0]"]
    assert found["inputs"] == names
    assert found["outputs"] == ["motor", "bell", "wait[1]", "wait[0]", "lift[1]", "lift[0]"]
    assert polarity == "free" or found["complemented"] == []
    for values in product("01", repeat=len(names)):
        s = dict(zip(names, map(int, values), strict=True))
        wait, lift = (2 * s[f"{name}[1]"] + s[f"{name}[0]"] for name in ("wait", "lift"))
        for output, wanted in hoist(s["up"], s["top"], s["bell"], wait, lift).items():
            value = sum_at(found["terms"], output, values) ^ (output in found["complemented"])
            assert str(wanted) in ("x", str(value)), (s, output)


def test_terms_of_controls(capsys):
    assert run(["terms", "hoist.toml", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert found["present"] == found["inputs"][5:]
    assert found["controls"] == [
        {
            "sets": {"bell": 0},
            "when": "asynchronous",
            "text": "stop + mute",
            "terms": 2,
            "proven": True,
            "sum": ["---1------", "----1-----"],
        },
        {
            "sets": {"bell": 1},
            "when": "asynchronous",
            "text": "top stop' mute'",
            "terms": 1,
            "proven": True,
            "sum": ["--100-----"],
        },
        {
            "sets": {"wait[1]": 0, "wait[0]": 0},
            "when": "clock",
            "text": "stop",
            "terms": 1,
            "proven": True,
            "sum": ["---1------"],
        },
        {
            "sets": {"lift[1]": 0, "lift[0]": 0},
            "when": "asynchronous",
            "text": "stop",
            "terms": 1,
            "proven": True,
            "sum": ["---1------"],
        },
    ]


def test_terms_say_what_was_not_tried(capsys):
    assert run(["terms", "hoist.toml"]) == 0
    text = " ".join(capsys.readouterr().out.split())
    for sentence in (
        "Of bell, wait[1:0] and lift[1:0] the next value is minimized, as D registers take it;",
        "Other registers than D were not tried: bell (T) and lift[1:0] (any).",
        "Free codes (lift) count in binary; no other codes were tried.",
        "The inner signal is folded into the sums that name it: done.",
        "Of bell, wait[1], wait[0], lift[1] and lift[0] the present values are among the inputs",
        "These terms are not among the product terms above. A control row of a device takes one",
    ):
        assert sentence in text


def test_check_text(capsys):
    assert run(["check", "hoist.toml"]) == 0
    out, err = capsys.readouterr()
    assert out == (GOLDEN / "hoist.txt").read_text(encoding="utf-8")
    assert err == ""


def test_check_document(capsys):
    assert run(["check", "hoist.toml", "--json"]) == 0
    assert capsys.readouterr().out == (GOLDEN / "hoist.json").read_text(encoding="utf-8")


def test_designs_without_registers_say_nothing_of_them(capsys):
    for command in ("check", "terms"):
        assert run(["-q", command, "dryer.toml", "--json"]) == 0
        found = json.loads(capsys.readouterr().out)
        assert {"present", "registers", "state_tables", "controls", "asynchronous"}.isdisjoint(
            found
        )


@pytest.mark.parametrize(
    "command",
    [
        pytest.param(["plan", "hoist.toml", "--device", "shared-14x40x8", "-o"], id="plan"),
        pytest.param(["budget", "hoist.toml"], id="budget"),
    ],
)
def test_no_plan_yet(command, tmp_path, capsys):
    arguments = [*command, str(tmp_path / "out")] if command[0] == "plan" else command
    assert run(arguments) == 1
    out, err = capsys.readouterr()
    assert out == ""
    assert err.splitlines()[0] == (
        "hoist.toml:12:1: error: the design has registers (bell, wait, lift): registers are "
        "planned by a later version [REGISTERS]"
    )
    assert run([*arguments, "--json"]) == 1
    (found,) = json.loads(capsys.readouterr().out)["errors"]
    assert (found["line"], found["column"], found["code"]) == (12, 1, "REGISTERS")
    assert not (tmp_path / "out").exists()
