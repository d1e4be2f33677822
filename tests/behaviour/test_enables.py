"""Inner signals, enables and bidirectional pins: hand-worked designs, and what commands show."""

from __future__ import annotations

import json
from fractions import Fraction
from pathlib import Path

import pytest
from point_values import check_sources, driving, inner_value, points, read, reasons, value

from pla.behaviour.reader import read_behaviour
from pla.cli.main import run

GOLDEN = Path(__file__).parent / "golden"
EXAMPLES = Path(__file__).parents[2] / "examples"

CARD = """\
signature = "CARD 7"
max_delay = 0.1
[inputs]
rd = { active = "low" }
wr = 1
[outputs]
bus = { bits = 2, active = "low", enable = "rd wr'", reads = "back", max_delay = 12 }
store = 1
[inner]
hit = 1
[never]
when = "rd wr"
[logic]
"bus[1]" = "hit"
"bus[0]" = "back[1]"
hit = "rd"
store = "wr back == 2"
"""


def test_everything_that_stands_in_the_model():
    behaviour = read(CARD)
    assert behaviour.input_names == ("rd", "wr", "back[1]", "back[0]")
    assert [i.read_from for i in behaviour.inputs] == [None, None, "bus[1]", "bus[0]"]
    assert [i.active_low for i in behaviour.inputs] == [True, False, True, True]
    assert [o.reads for o in behaviour.outputs] == ["back[1]", "back[0]", None]
    assert [o.max_delay for o in behaviour.outputs] == [12, 12, None]
    assert behaviour.max_delay == Fraction(1, 10)
    assert behaviour.signature == "CARD 7"
    assert [(i.name, i.form, i.location.line, i.described.line) for i in behaviour.inner] == [
        ("hit", "logic", 10, 16)
    ]
    assert behaviour.named == {"bus[1]": ("hit",)}
    first, second, third = (o.enable for o in behaviour.outputs)
    assert first is second
    assert third is None
    assert (first.text, first.location.line, first.location.column) == ("rd wr'", 7, 44)
    assert behaviour.function.n_outputs == 3
    assert behaviour.inner_function.n_outputs == 1


def test_every_combination_of_the_card():
    behaviour = read(CARD)
    for point, s in points(behaviour):
        never, on = s["rd"] and s["wr"], s["rd"] and not s["wr"]
        for position, described in enumerate((s["rd"], s["back"] >> 1)):
            # The lines stay off when both strobes come, although that is impossible.
            assert driving(behaviour, point, position) == on
            assert value(behaviour, point, position) == (described if on else "x")
            why = [] if on else ["never" if never else "disabled"]
            assert reasons(behaviour, point, position) == why
        assert value(behaviour, point, 2) == ("x" if never else s["wr"] and s["back"] == 2)
        assert inner_value(behaviour, point, "hit") == ("x" if never else s["rd"])
    check_sources(behaviour)


def test_an_equation_sees_what_an_output_is_described_to_be():
    behaviour = read(
        "[inputs]\na = 1\nb = 1\n[outputs]\nf = { enable = 'b' }\ng = 1\nh = { enable = 'f' }\n"
        "[logic]\nf = 'a'\ng = \"f'\"\nh = 'b'\n"
    )
    for point, s in points(behaviour):
        assert value(behaviour, point, 0) == (s["a"] if s["b"] else "x")
        assert value(behaviour, point, 1) == 1 - s["a"]
        assert driving(behaviour, point, 2) == s["a"]


def test_never_too_frees_the_enable_and_impossible_holds_where_it_is_not_off():
    behaviour = read(
        "[inputs]\na = 1\nb = 1\n[outputs]\n"
        "f = { enable = 'a', impossible = 0 }\n"
        "g = { enable = 'a', impossible = 0, never_too = true }\n"
        "[never]\nwhen = 'b'\n[logic]\nf = '1'\ng = '1'\n"
    )
    for point, s in points(behaviour):
        off, never = not s["a"], s["b"]
        assert driving(behaviour, point, 0) == s["a"]
        assert driving(behaviour, point, 1) == ("x" if never else s["a"])
        assert value(behaviour, point, 0) == ("x" if off else 0 if never else 1)
        assert value(behaviour, point, 1) == (0 if never else "x" if off else 1)
        assert reasons(behaviour, point, 0) == (["never" if never else "disabled"] if off else [])
        assert reasons(behaviour, point, 1) == (["disabled"] if off and not never else [])


@pytest.mark.parametrize(
    "described",
    [
        pytest.param('[logic]\nsel = "a[1] a[0]\'"\n', id="equation"),
        pytest.param('[minterms.sel]\nof = "a"\non = 2\nothers = 0\n', id="minterms"),
        pytest.param('[[cases]]\nrows = "a | sel\\n2 | 1\\nothers | 0"\n', id="table"),
        pytest.param(
            '[[address_map]]\nbus = "a"\nselect.sel = 2\nelsewhere = 0\n', id="address-map"
        ),
    ],
)
def test_inner_signals_are_described_in_every_section(described):
    behaviour = read(
        "[inputs]\na = 2\nb = 1\n[outputs]\nf = { enable = 'sel' }\n[inner]\nsel = 1\n"
        + described.replace("[logic]\n", "[logic]\nf = 'b sel'\n")
        + ("" if "[logic]" in described else "[logic]\nf = 'b sel'\n")
    )
    for point, s in points(behaviour):
        assert inner_value(behaviour, point, "sel") == driving(behaviour, point, 0)
        assert driving(behaviour, point, 0) == (s["a"] == 2)
        assert value(behaviour, point, 0) == (s["b"] if s["a"] == 2 else "x")


def test_one_table_may_describe_outputs_and_inner_signals():
    behaviour = read(
        "[inputs]\na = 2\n[outputs]\nf = 1\ng = 1\n[inner]\nstate = 2\n"
        '[[cases]]\nrows = """\na | state f\n0 | 1 1\n3 | 2 0\nothers | 0 x\n"""\n'
        "[logic]\ng = 'state == 2'\n"
    )
    assert [i.name for i in behaviour.inner] == ["state[1]", "state[0]"]
    for point, s in points(behaviour):
        assert value(behaviour, point, 0) == {0: 1, 3: 0}.get(s["a"], "x")
        assert value(behaviour, point, 1) == (s["a"] == 3)
        bits = [inner_value(behaviour, point, f"state[{bit}]") for bit in (1, 0)]
        assert bits == [s["a"] == 3, s["a"] == 0]
    assert behaviour.named == {"g": ("state[1]", "state[0]")}


def test_two_sides_of_a_buffer_may_read_each_other():
    # A cycle on paper only: never do both sides drive.
    behaviour = read(
        "[inputs]\nto_b = 1\nselect = 1\n[outputs]\n"
        "a = { bits = 2, enable = \"select to_b'\", reads = 'a_in' }\n"
        "b = { bits = 2, enable = 'select to_b', reads = 'b_in' }\n[logic]\n"
        + "".join(f"'a[{i}]' = 'b_in[{i}]'\n'b[{i}]' = 'a_in[{i}]'\n" for i in (0, 1))
    )
    assert behaviour.warnings == ()
    for point, s in points(behaviour):
        on = s["select"] and not s["to_b"]
        assert value(behaviour, point, 0) == (s["b_in"] >> 1 if on else "x")


def test_a_value_may_follow_its_own_pin_while_the_pin_is_not_driven():
    behaviour = read(
        "[inputs]\nrd = 1\nkey = 1\n[outputs]\nf = { enable = 'rd', reads = 'x' }\ng = 1\n"
        "[logic]\nf = \"rd key + rd' x\"\ng = 'x'\n"
    )
    for point, s in points(behaviour):
        assert value(behaviour, point, 0) == (s["key"] if s["rd"] else "x")


def test_an_enable_of_a_ring_is_not_named():
    behaviour = read(
        "[inputs]\na = 1\nb = 1\n[outputs]\nf = { enable = 'f + g' }\ng = { enable = 'f' }\n"
        "[logic]\nf = 'a'\ng = 'b'\n"
    )
    assert behaviour.named == {"f": ("g",)}
    assert all(driving(behaviour, point, 1) == s["a"] for point, s in points(behaviour))


# --- what the commands show


@pytest.fixture
def in_examples(monkeypatch):
    monkeypatch.chdir(EXAMPLES)
    monkeypatch.delenv("FORCE_COLOR", raising=False)


@pytest.mark.usefixtures("in_examples")
@pytest.mark.parametrize("name", ["clamp-card", "cabinet-fans"])
def test_check_text(name, capsys):
    assert run(["check", f"{name}.toml"]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    assert out == (GOLDEN / f"{name}.txt").read_text(encoding="utf-8")


@pytest.mark.usefixtures("in_examples")
def test_terms_text(capsys):
    assert run(["terms", "clamp-card.toml"]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    folded = "The inner signals are folded into the sums that name them: reading and writing.\n"
    assert folded in out
    assert out.endswith(
        """
Enables
-------

output                              drives its pin while  terms  as the smallest sum
------------------------------------------------------------------------------------
line[3], line[2], line[1], line[0]  reading                   1  card read write'

These terms are not among the product terms above. A cell with an enable row takes one term; an
enable of more terms has to be made by a cell and fed back.
"""
    )


@pytest.mark.usefixtures("in_examples")
def test_check_document(capsys):
    """By hand: 13 inputs; the lines are driven for one eighth, half of all has both strobes off."""
    assert run(["check", "clamp-card.toml", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert [inner["name"] for inner in found["inner"]] == ["reading", "writing"]
    assert found["inner"][1]["named_by"] == ["drawer_strobe"]
    assert set(found["enables"]) == {f"line[{i}]" for i in range(4)}
    assert found["enables"]["line[2]"] == {
        "text": "reading",
        "line": 19,
        "combinations": {"on": 1024, "off": 7168, "dont_care": 0, "total": 8192},
    }
    assert found["reads"] == {f"line[{i}]": f"line_in[{i}]" for i in range(4)}
    assert found["signature"] == "CLAMP"
    assert found["max_delay"] == 40
    # addr 0 and the clamp shut (an eighth of an eighth), or addr 3 (a quarter of an eighth)
    assert found["descriptions"][0]["combinations"]["one"] == 8192 // 64 + 8192 // 32
    assert found["descriptions"][0]["dont_care"] == {"never": 2048, "disabled": 5120}


@pytest.mark.usefixtures("in_examples")
def test_check_document_of_a_call_line(capsys):
    assert run(["check", "cabinet-fans.toml", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert found["max_delays"] == {"call": 1000}
    assert "max_delay" not in found
    assert "reads" not in found


def test_documents_without_the_new_keys_are_as_before(capsys, monkeypatch):
    monkeypatch.chdir(GOLDEN)
    new = {"inner", "enables", "reads", "signature", "max_delay", "max_delays"}
    for command in ("check", "terms"):
        assert run(["-q", command, "dryer.toml", "--json"]) == 0
        assert not new & set(json.loads(capsys.readouterr().out))


@pytest.mark.usefixtures("in_examples")
def test_terms_of_enables(capsys):
    assert run(["terms", "clamp-card.toml", "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    wanted = {"text": "reading", "terms": 1, "proven": True, "sum": ["1--10--------"]}
    assert found["enables"] == {f"line[{i}]": wanted for i in range(4)}
    assert found["outputs"] == [*(f"line[{i}]" for i in (3, 2, 1, 0)), "drawer_strobe"]


def test_terms_of_an_enable_that_may_be_anything_for_impossible_inputs(tmp_path, capsys):
    # By hand: a b + a' c takes two terms; where b and c differ by [never], one literal does.
    design = (
        '[inputs]\na = 1\nb = 1\nc = 1\n[outputs]\nf = {{ enable = "a b + a\' c"{} }}\n'
        "[never]\nwhen = 'b xor c'\n[logic]\nf = 'a'\n"
    )
    for option, terms in (("", 2), (", never_too = true", 1)):
        path = tmp_path / "d.toml"
        path.write_text(design.format(option), encoding="utf-8")
        assert run(["terms", str(path), "--json"]) == 0
        assert json.loads(capsys.readouterr().out)["enables"]["f"]["terms"] == terms


def test_free_enables_are_marked(tmp_path, capsys):
    path = tmp_path / "d.toml"
    path.write_text(
        "[inputs]\na = 1\nb = 1\n[outputs]\nf = { enable = 'a', never_too = true }\n"
        "[never]\nwhen = 'b'\n[logic]\nf = 'a'\n",
        encoding="utf-8",
    )
    run(["-q", "check", str(path)])
    assert "a; free at impossible inputs" in capsys.readouterr().out


@pytest.mark.parametrize("name", ["clamp-card", "cabinet-fans"])
def test_examples_are_what_they_say(name):
    behaviour = read_behaviour(str(EXAMPLES / f"{name}.toml"))
    assert behaviour.warnings == ()
    if name == "clamp-card":
        for point, s in points(behaviour):
            on = s["card"] and s["read"] and not s["write"]
            shown = {0: s["clamp"], 3: 0b1010}.get(s["addr"], 0)
            for position in range(4):
                assert driving(behaviour, point, position) == on
                bit = shown >> 3 - position & 1
                assert value(behaviour, point, position) == (bit if on else "x")
            written = s["card"] and s["write"] and not s["read"] and s["addr"] == 2
            assert value(behaviour, point, 4) == (written and 1 <= s["line_in"] <= 10)
        return
    for point, s in points(behaviour):
        broken = s["hot"] and not s["warm"]
        demand, air = s["warm"] or s["test"], not s["smoke"] and not s["door"]
        fan_a = air and ((demand and (not s["lead_b"] or s["still_b"])) or s["hot"])
        trouble = s["smoke"] or (s["hot"] and s["door"])
        trouble |= demand and (s["still_a"] or s["still_b"])
        assert value(behaviour, point, 0) == (0 if broken else int(fan_a))
        assert value(behaviour, point, 4) == (1 if broken else int(trouble))
        assert driving(behaviour, point, 5) == (1 if broken else int(trouble))
