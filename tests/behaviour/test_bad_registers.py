# ruff: noqa: E501, ISC004 - messages stand on one line, as they are shown
"""Registers that are declared badly: what is wrong, where, and how to mend it."""

from __future__ import annotations

import pytest
from point_values import read

from pla.behaviour.reader import read_behaviour
from pla.errors import InputError

SOUND = """\
[inputs]
clk = 1
a = 2
b = 1
[outputs]
q = { register = "D", clock = "clk" }
y = 1
[inner]
n = { bits = 2, register = "D", clock = "clk" }
[never]
when = "a == 3"
[logic]
q = "a[1] + q"
y = "n[0] b"
"n[1]" = "a[1]"
"n[0]" = "n[1] n[0]"
"""
Q = 'q = { register = "D", clock = "clk" }'
N = 'n = { bits = 2, register = "D", clock = "clk" }'
NO_CLOCK = 'add clock = "clk", the name of an input, or "clk\'" for its falling edge'
NO_REGISTER = 'add register = "D", or "any" for what the device offers'
CLOCKS = "a clock comes from an input; what a register holds does not come from outside; valid are: clk, a, b"
PRESENT = "what a register holds does not come from outside; valid are: clk, a, b"


def q(keys, *expected, id):  # noqa: A002 - as pytest calls it
    """A declaration of q with these keys behind its register and clock."""
    return pytest.param(Q, Q.replace(" }", f", {keys} }}"), expected, id=id)


def clock(text, *expected, id):  # noqa: A002 - as pytest calls it
    return pytest.param(Q, Q.replace('"clk"', text), expected, id=id)


BAD = [
    pytest.param(
        '"D"',
        '"d"',
        [
            (
                '6:18 VALUE \'register\' is the text \'d\', expected "D", "T", "JK", "SR" or "any"',
                None,
            )
        ],
        id="kind",
    ),
    pytest.param(
        ', clock = "clk" }\ny',
        " }\ny",
        [("6:5 KEY-MISSING [outputs.q] has no 'clock'", NO_CLOCK)],
        id="clock-missing",
    ),
    pytest.param(
        'clock = "clk" }\ny',
        'clk = "clk" }\ny',
        [("6:23 KEY-UNKNOWN unknown key 'clk' in [outputs.q]", "did you mean 'clock'?")],
        id="clock-misspelt",
    ),
    pytest.param(
        "{ register",
        "{ regster",
        [("6:7 KEY-UNKNOWN unknown key 'regster' in [outputs.q]", "did you mean 'register'?")],
        id="register-misspelt",
    ),
    pytest.param(
        Q,
        "q = { start = 1 }",
        [
            (
                "6:7 REGISTER-MISSING 'start' without 'register': a signal without a register has none",
                NO_REGISTER,
            )
        ],
        id="register-missing",
    ),
    clock(
        '"a"',
        (
            "6:31 BUS-AS-BIT 'a' has 2 bits, expected one input as the clock",
            "name a bit, such as a[0]",
        ),
        id="clock-bus",
    ),
    clock(
        '"a[5]\'"',
        ("6:31 BIT-RANGE 'a[5]': there is no bit 5 in a[1:0]", "its bits are 1 down to 0"),
        id="clock-bit",
    ),
    clock(
        '"n[0]"', ("6:31 NAME-ROLE 'n' is an inner signal, expected an input", CLOCKS), id="ripple"
    ),
    clock('"q"', ("6:31 NAME-ROLE 'q' is an output, expected an input", CLOCKS), id="clock-itself"),
    q(
        "start = 2",
        ("6:46 VALUE 'start' is the number 2, expected a whole number from 0 to 1", None),
        id="start",
    ),
    pytest.param(
        N,
        N.replace(" }", ", start = 0b100 }"),
        [("9:56 VALUE 'start' is the number 4, expected a whole number from 0 to 3", None)],
        id="start-of-a-bus",
    ),
    q(
        'reset = "b +"',
        ("6:50 EQUATION-SYNTAX the equation ends, expected a name, 0, 1, ( or not", None),
        id="reset-syntax",
    ),
    q(
        'reset = "zz"',
        (
            "6:47 NAME-UNKNOWN there is no input, output or inner signal 'zz'",
            "valid are: clk, a, b, q, y, n",
        ),
        id="reset-name",
    ),
    q(
        "reset = 1",
        ("6:46 VALUE 'reset' is the number 1, expected an equation in quotes", None),
        id="reset-number",
    ),
    q(
        'preset_when = "clock"',
        (
            "6:38 CONTROL-MISSING 'preset_when' without 'preset'",
            'add preset = "…", an equation, or leave it out',
        ),
        id="preset-missing",
    ),
    q(
        'reset = "b", reset_when = "now"',
        ("6:64 VALUE 'reset_when' is the text 'now', expected \"asynchronous\" or \"clock\"", None),
        id="reset-when",
    ),
    q(
        'reset = "b", preset = "b a[0]"',
        (
            "6:60 CONTROL-CONFLICT q is reset and preset at once, for example at a[0] = 1, b = 1: the reset stands at d.toml:6:46",
            'let one of them win, such as: preset = "(b a[0]) (b)\'"',
        ),
        id="both",
    ),
    q(
        'reset = "b", preset = "b a == 3"',
        (
            "6:60 CONTROL-CONFLICT q is reset and preset at once, for example at a = 3, b = 1: the reset stands at d.toml:6:46",
            'let one of them win, such as: preset = "(b a == 3) (b)\'"',
        ),
        id="both-though-impossible",
    ),
    q(
        'reset = "b a == 3", never_too = true',
        (
            "6:46 CONTROL-NEVER q is never reset: the equation is 0 for every input",
            "mend the equation, or leave it out",
        ),
        id="never-too",
    ),
    pytest.param(
        N,
        N.replace(" }", ", never_too = true }"),
        [
            (
                "9:48 INNER-PIN 'never_too' in [inner.n]: an inner signal has no pin",
                "leave it out, or declare the signal under [outputs]",
            )
        ],
        id="never-too-alone",
    ),
    pytest.param(
        '"a == 3"',
        '["a == 3", "n == 2"]',
        [("11:20 NAME-ROLE 'n' is an inner signal, expected an input", PRESENT)],
        id="never-of-a-present-value",
    ),
    pytest.param(
        'y = "n[0] b"',
        'y = "n b"',
        [
            (
                "14:6 BUS-AS-BIT 'n' has 2 bits where one bit is wanted",
                "name a bit, such as n[0], or compare: n == 0",
            )
        ],
        id="present-value-as-bit",
    ),
    pytest.param(
        'y = "n[0] b"',
        'y = "y b"',
        [
            (
                "14:6 CYCLE outputs depend on themselves without a register: y -> y",
                'a clocked signal may name its present value: declare it with register = "D" and clock = "…"; latches without a clock are not supported yet',
            )
        ],
        id="latch",
    ),
    pytest.param(
        "[logic]",
        '[place.x]\n"n[0]" = 3\nq = 4\n[logic]',
        [
            (
                "13:1 PLACE-PINLESS 'n[0]' is an inner signal and has no pin",
                "leave it out, or declare the signal under [outputs]",
            )
        ],
        id="place",
    ),
]


@pytest.mark.parametrize(("right", "wrong", "expected"), BAD)
def test_bad_register(right, wrong, expected):
    """Each pair is a slip in a sound design; every error of the file is found, and no more."""
    assert right in SOUND
    with pytest.raises(InputError) as caught:
        read(SOUND.replace(right, wrong, 1))
    found = [
        (f"{d.location.line}:{d.location.column} {d.code} {d.message}", d.hint)
        for d in caught.value.diagnostics
    ]
    assert found == list(expected)


GOOD = [
    pytest.param(SOUND, [], id="sound"),
    pytest.param(
        SOUND.replace(" }\ny", ', reset = "b", preset = "b a[0]", preset_when = "clock" }\ny'),
        [],
        id="the-asynchronous-one-wins",
    ),
    pytest.param(
        SOUND.replace(" }\ny", ', reset = "n == 2" }\ny'),
        [
            "6:46 RESET-DECODED the asynchronous reset of q depends on present values (n): while "
            "these change one after another, it may act for a moment"
        ],
        id="decoded",
    ),
    pytest.param(
        SOUND.replace('y = "n[0] b"', 'y = "b"'),
        ["9:1 INNER-UNUSED no output depends on the registered inner signal n"],
        id="register-unused",
    ),
    pytest.param(
        SOUND.replace('y = "n[0] b"', 'y = "b n[1]"'),
        ["9:1 INNER-UNUSED no output depends on the registered inner signal n[0]"],
        id="bit-unused",
    ),
]


@pytest.mark.parametrize(("text", "expected"), GOOD)
def test_warnings(text, expected):
    found = [
        f"{w.location.line}:{w.location.column} {w.code} {w.message}" for w in read(text).warnings
    ]
    assert found == expected


def test_a_control_has_to_be_known_for_impossible_inputs():
    text = SOUND.replace(" }\ny", ', reset = "y" }\ny').replace('y = "n[0] b"\n', "")
    text += '[[cases]]\nrows = "b | y\\n1 | 1\\n0 | 0"\n'
    with pytest.raises(InputError) as caught:
        read(text)
    (found,) = caught.value.diagnostics
    assert found.code == "CONTROL-OPEN"
    assert found.message == (
        "whether q is reset is open for impossible inputs, for example a = 3: the description of "
        "y says nothing about them"
    )
    assert found.hint == (
        "describe y by an equation; or say never_too = true, if it does not matter"
    )


def test_columns_of_a_csv_file_that_do_not_tell(tmp_path):
    (tmp_path / "t.csv").write_text("a;q;n[0]\nothers;;x\n")
    design = tmp_path / "d.toml"
    text = SOUND.replace('q = "a[1] + q"\n', "").replace('"n[0]" = "n[1] n[0]"\n', "")
    design.write_text(text + '[[cases]]\nfile = "t.csv"\n', encoding="utf-8")
    with pytest.raises(InputError) as caught:
        read_behaviour(str(design))
    (found,) = caught.value.diagnostics
    assert (found.location.line, found.location.column, found.code) == (1, 3, "HEADER")
    assert "may be the present or the next value" in found.message
    assert "there is no bar that tells" in found.message
