"""Bad designs with inner signals, enables, bidirectional pins, signatures and delays."""

from __future__ import annotations

import pytest

from pla.behaviour.reader import behaviour_of
from pla.errors import InputError
from pla.tomlfile import parse_toml

# Lines 1 to 4; what `armed` is stands on the last line.
INPUTS = "[inputs]\nrd = 1\nwr = 1\nkey = 2\n"
INNER = "[inner]\narmed = 1\n"


def outputs(table, equation="rd", rest=""):
    """The output `f` on line 6, its equation on line 8."""
    return f'{INPUTS}[outputs]\nf = {{ {table} }}\n[logic]\nf = "{equation}"\n{rest}'


def inner(table, equation="rd"):
    """The inner signal on line 8, its equation on line 11."""
    return (
        f"{INPUTS}[outputs]\nf = 1\n[inner]\narmed = {table}\n"
        f'[logic]\nf = "armed"\narmed = "{equation}"\n'
    )


def errors_of(text):
    with pytest.raises(InputError) as caught:
        behaviour_of(parse_toml(text, "d.toml"))
    return caught.value.diagnostics


ONE = [
    # --- inner signals
    *(
        pytest.param(
            inner(f"{{ {key} = {value} }}"),
            f"8:11 INNER-PIN '{key}' in [inner.armed]: an inner signal has no pin",
            "leave it out, or declare the signal under [outputs]",
            id=f"inner-{key}",
        )
        for key, value in (
            ("active", '"low"'),
            ("impossible", 0),
            ("enable", '"rd"'),
            ("never_too", "true"),
            ("reads", '"x"'),
            ("max_delay", 5),
        )
    ),
    *(
        pytest.param(
            inner(f"{{ {key} = 1 }}"),
            f"8:11 NOT-SUPPORTED-YET '{key}': {what} inner signals are not supported yet",
            "this version plans combinational outputs",
            id=f"inner-{key}",
        )
        for key, what in (("keep", "kept"), ("glitch_free", "glitch-free"))
    ),
    pytest.param(
        inner("{ bit = 1 }"),
        "8:11 KEY-UNKNOWN unknown key 'bit' in [inner.armed]",
        "did you mean 'bits'?",
        id="inner-key",
    ),
    pytest.param(
        inner("'7:0'"),
        "8:9 VALUE 'armed' is the text '7:0', expected a number of bits from 1 to 64, or a "
        "table { … }",
        None,
        id="inner-span",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = 1\n[inner]\nor = 1\n[logic]\nf = 'rd'\n",
        "8:1 NAME-RESERVED 'or' is a reserved word and cannot name an inner signal",
        "reserved are: in, not, and, or, xor, others",
        id="inner-reserved",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = 1\n[inner]\nf = 1\n[logic]\nf = 'rd'\n",
        "8:1 NAME-TWICE 'f' is declared as an output and as an inner signal",
        "the output is declared at d.toml:6:1",
        id="inner-output",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = 1\n[inner]\nwr = 1\n[logic]\nf = 'wr'\n",
        "8:1 NAME-TWICE 'wr' is declared as an input and as an inner signal",
        "the input is declared at d.toml:3:1",
        id="inner-input",
    ),
    pytest.param(
        "inner = 3\n" + outputs("bits = 1", "armed"),
        "1:9 VALUE 'inner' is the number 3, expected a table",
        None,
        id="inner-number",
    ),
    pytest.param(
        "[inputs]\na = 1\n[outputs]\nf = 60\n[inner]\ng = 5\n[[cases]]\n"
        'rows = "a | f g\\nothers | 0 0"\n',
        "5:1 TOO-MANY-OUTPUTS 65 output and inner bits are declared, at most 64 are possible",
        None,
        id="inner-65",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = 1\n[inner]\nstate = 3\n[logic]\nf = 'state[0]'\n"
        "'state[0]' = 'rd'\n",
        "8:1 NOT-DESCRIBED nothing says what the inner signal state[2], state[1] does",
        "describe it in [[cases]], [minterms], [logic] or [[address_map]]",
        id="inner-not-described",
    ),
    pytest.param(
        inner("1") + "[minterms.armed]\nof = 'key'\non = 1\nothers = 0\n",
        "11:1 DESCRIBED-TWICE 'armed' is described twice: here and at d.toml:12:11",
        "each signal is described once, over all sections",
        id="inner-twice",
    ),
    pytest.param(
        inner("1", "f"),
        "11:10 CYCLE signals depend on themselves without a register: f -> armed -> f",
        "an arrow points to what is named in an equation; break the ring at one of them",
        id="inner-cycle",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = 1\n[inner]\narmed = 1\n[logic]\nf = 'armed wr'\n"
        "[minterms.armed]\nof = 'key'\non = 1\ndont_care = 3\nothers = 0\n",
        "10:6 FREE-OUTPUT-NAMED 'armed' may not be named here: it has don't cares outside "
        "[never] (dont_care), for example key = 3; what it will be there is decided only by the "
        "minimizer",
        "give armed values for all 4 of these input combinations, or describe this output from "
        "inputs alone",
        id="inner-free",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = 1\n[inner]\narmed = 1\n[never]\nwhen = 'armed'\n"
        "[logic]\nf = 'armed'\narmed = 'rd'\n",
        "10:9 NAME-ROLE 'armed' is an inner signal, expected an input",
        "valid are: rd, wr, key",
        id="inner-in-never",
    ),
    pytest.param(
        inner("1", "rd wx"),
        "11:13 NAME-UNKNOWN there is no input, output or inner signal 'wx'",
        "valid are: rd, wr, key, f, armed",
        id="inner-unknown",
    ),
    pytest.param(
        inner("1") + "arned = 'rd'\n",
        "12:1 NAME-UNKNOWN there is no output or inner signal 'arned'",
        "did you mean 'armed'?",
        id="inner-unknown-description",
    ),
    pytest.param(
        inner("1") + "[place.some-device]\narmed = 3\n",
        "13:1 PLACE-PINLESS 'armed' is an inner signal and has no pin",
        "leave it out, or declare the signal under [outputs]",
        id="inner-placed",
    ),
    # --- enables
    pytest.param(
        outputs("enable = 3"),
        "6:16 VALUE 'enable' is the number 3, expected an equation in quotes",
        None,
        id="enable-number",
    ),
    pytest.param(
        outputs('enable = "rd & wr"'),
        "6:20 EQUATION-SYNTAX '&' has no meaning in an equation",
        "AND is a space, · or and",
        id="enable-syntax",
    ),
    pytest.param(
        outputs('enable = ""'),
        "6:17 EQUATION-EMPTY the equation is empty",
        "the constants are 0 and 1",
        id="enable-empty",
    ),
    pytest.param(
        outputs('enable = "wr + rx"'),
        "6:22 NAME-UNKNOWN there is no input or output 'rx'",
        "valid are: rd, wr, key, f",
        id="enable-name",
    ),
    pytest.param(
        outputs('enable = "rd key"'),
        "6:20 BUS-AS-BIT 'key' has 2 bits where one bit is wanted",
        "name a bit, such as key[0], or compare: key == 0",
        id="enable-bus",
    ),
    pytest.param(
        outputs('enable = "0"'),
        "6:16 ENABLE-NEVER f never drives its pin: its enable is 0 for every input",
        "mend the equation, or leave the output out",
        id="enable-0",
    ),
    pytest.param(
        outputs('enable = "rd rd\'"'),
        "6:16 ENABLE-NEVER f never drives its pin: its enable is 0 for every input",
        "mend the equation, or leave the output out",
        id="enable-contradiction",
    ),
    pytest.param(
        outputs('enable = "rd wr", never_too = true', rest="[never]\nwhen = 'rd wr'\n"),
        "6:16 ENABLE-NEVER f never drives its pin: its enable is 0 for every possible input",
        "mend the equation, or leave the output out",
        id="enable-only-impossible",
    ),
    pytest.param(
        outputs('enable = "rd", never_too = 1'),
        "6:34 VALUE 'never_too' is the number 1, expected true or false",
        None,
        id="never-too-1",
    ),
    pytest.param(
        outputs("never_too = true"),
        "6:7 ENABLE-MISSING 'never_too' without 'enable': there is no enable that [never] could "
        "hold for",
        'add enable = "…", an equation that is 1 while the output drives its pin',
        id="never-too-alone",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = 1\n[minterms.f]\nof = 'key'\non = 1\nothers = 0\n"
        "never_too = true\n",
        "11:1 KEY-UNKNOWN unknown key 'never_too' in [minterms.f]",
        "it stands in [outputs], in the table of an output with an enable",
        id="never-too-misplaced",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = { enable = 'armed' }\n[inner]\narmed = 1\n"
        "[never]\nwhen = 'rd wr'\n[logic]\nf = 'rd'\n"
        "[minterms.armed]\nof = ['rd', 'wr']\non = 2\nothers = 0\n",
        "6:16 ENABLE-OPEN whether f drives its pin is open for impossible inputs, for example "
        "rd = 1, wr = 1: the description of armed says nothing about them",
        "describe armed by an equation; or say never_too = true, if nothing else can drive the "
        "line then",
        id="enable-open",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = { enable = 'a b' }\n[inner]\na = 1\nb = 1\nc = 1\n"
        "[never]\nwhen = 'rd wr'\n[logic]\nf = 'rd'\na = 'c'\n"
        "[minterms.b]\nof = ['rd', 'wr']\non = [2, 3]\nothers = 0\n"
        "[minterms.c]\nof = ['rd', 'wr']\non = 2\nothers = 0\n",
        "6:16 ENABLE-OPEN whether f drives its pin is open for impossible inputs, for example "
        "rd = 1, wr = 1: the description of b and c says nothing about them",
        "describe b and c by an equation; or say never_too = true, if nothing else can drive "
        "the line then",
        id="enable-open-two",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = { enable = 'g' }\ng = 1\n[logic]\nf = 'rd'\n"
        "[minterms.g]\nof = 'key'\non = 1\ndont_care = 3\nothers = 0\n",
        "6:17 FREE-OUTPUT-NAMED 'g' may not be named here: it has don't cares outside [never] "
        "(dont_care), for example key = 3; what it will be there is decided only by the minimizer",
        "give g values for all 4 of these input combinations, or describe this output from "
        "inputs alone",
        id="enable-free",
    ),
    # --- bidirectional pins
    pytest.param(
        outputs('reads = "back"'),
        "6:7 ENABLE-MISSING 'reads' without 'enable': a pin that is always driven reads nothing "
        "but its own output",
        'add enable = "…", an equation that is 1 while the output drives its pin',
        id="reads-alone",
    ),
    pytest.param(
        outputs('reads = "back"', "rd back"),
        "6:7 ENABLE-MISSING 'reads' without 'enable': a pin that is always driven reads nothing "
        "but its own output",
        'add enable = "…", an equation that is 1 while the output drives its pin',
        id="reads-alone-used",
    ),
    pytest.param(
        outputs('enabel = "wr", reads = "back"', "rd back"),
        "6:7 KEY-UNKNOWN unknown key 'enabel' in [outputs.f]",
        "did you mean 'enable'?",
        id="enable-misspelt",
    ),
    pytest.param(
        outputs('enable = "wr", reads = 3'),
        "6:30 VALUE 'reads' is the number 3, expected text in quotes",
        None,
        id="reads-number",
    ),
    pytest.param(
        outputs('bits = 2, enable = "wr", reads = "back[1:0]"')
        .replace("\nf =", "\nf=", 1)
        .replace(
            '[logic]\nf = "rd"',
            "[minterms.'f[0]']\nof = 'key'\non = 1\nothers = 0\n"
            "[minterms.'f[1]']\nof = 'key'\non = 1\nothers = 0\n",
        ),
        "6:39 NAME-SYNTAX 'back[1:0]' is not a name: names are made of the letters A to Z and "
        "a to z, digits and underscores, and do not start with a digit",
        None,
        id="reads-part",
    ),
    pytest.param(
        outputs('enable = "wr", reads = "not"'),
        "6:30 NAME-RESERVED 'not' is a reserved word and cannot name an input",
        "reserved are: in, not, and, or, xor, others",
        id="reads-reserved",
    ),
    pytest.param(
        outputs('enable = "wr", reads = "rd"'),
        "6:30 NAME-TWICE 'rd' is declared as an input and as what the output f reads",
        "the input is declared at d.toml:2:1",
        id="reads-input",
    ),
    pytest.param(
        outputs('enable = "wr", reads = "f"'),
        "6:30 NAME-TWICE 'f' is declared as an output and as what the output f reads",
        "the output is declared at d.toml:6:1",
        id="reads-itself",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = { enable = 'wr', reads = 'x' }\n"
        "g = { enable = 'wr', reads = 'x' }\n[logic]\nf = 'rd'\ng = 'x'\n",
        "7:30 NAME-TWICE 'x' is declared as what the output f reads and as what the output g reads",
        "the input is declared at d.toml:6:30",
        id="reads-twice",
    ),
    pytest.param(
        "[inputs]\na = 60\n[outputs]\nf = { bits = 5, enable = 'a[0]', reads = 'x' }\n"
        '[[cases]]\nrows = "a | f\\nothers | 0"\n',
        "4:42 TOO-MANY-INPUTS with what f reads there are 65 input bits, at most 64 are possible",
        None,
        id="reads-65",
    ),
    pytest.param(
        outputs('bits = 0, enable = "wr", reads = "back"', rest="g = 'back'\n").replace(
            "[logic]\n", "g = 1\n[logic]\n"
        ),
        "6:14 WIDTH 'bits' has 0 bits, expected 1 to 64",
        None,
        id="reads-of-a-broken-output",
    ),
    pytest.param(
        outputs('enable = "wr", reads = "back"', "rd back"),
        "8:1 HOLDS-ITSELF the value of f depends on back, the level at its own pin, for example "
        "at rd = 1, wr = 1: driven, the pin would hold itself or swing",
        "an output may depend on what other pins read, and on its own pin only while it does not "
        "drive it",
        id="holds-itself",
    ),
    pytest.param(
        outputs('enable = "wr back\'", reads = "back"'),
        "6:16 HOLDS-ITSELF the enable of f depends on back, the level at its own pin, for "
        "example at wr = 1: driven, the pin would hold itself or swing",
        "an output may depend on what other pins read, and on its own pin only while it does not "
        "drive it",
        id="holds-its-enable",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = { enable = 'wr', reads = 'x' }\n[inner]\ng = 1\n"
        "[logic]\nf = 'g rd'\ng = 'x ⊕ key[1]'\n",
        "10:1 HOLDS-ITSELF the value of f depends on x, the level at its own pin, for example at "
        "rd = 1, wr = 1, key[1] = 1: driven, the pin would hold itself or swing",
        "an output may depend on what other pins read, and on its own pin only while it does not "
        "drive it",
        id="holds-itself-through-inner",
    ),
    pytest.param(
        INPUTS + "[outputs]\nf = { bits = 2, enable = 'wr', reads = 'x' }\n"
        '[[cases]]\nrows = """\nx | f\n1 | 3\n2 | 1\nothers | 0\n"""\n',
        "9:5 HOLDS-ITSELF the value of f[1], f[0] depends on x[1], x[0], the level at their own "
        "pin, for example at wr = 1, x[0] = 1: driven, the pin would hold itself or swing",
        "an output may depend on what other pins read, and on its own pin only while it does not "
        "drive it",
        id="holds-itself-table",
    ),
    pytest.param(
        outputs('enable = "wr", reads = "back"') + "[place.some-device]\nback = 4\n",
        "10:1 PLACE-PINLESS 'back' is read at the pin of the output f and has no pin of its own",
        "give the pin to f",
        id="reads-placed",
    ),
    # --- signature and delays
    pytest.param(
        "signature = 7\n" + outputs("bits = 1"),
        "1:13 VALUE 'signature' is the number 7, expected text in quotes",
        None,
        id="signature-number",
    ),
    pytest.param(
        'signature = "Größe"\n' + outputs("bits = 1"),
        "1:16 SIGNATURE 'ö' in 'signature' cannot stand in a device, expected one line of "
        "printable ASCII characters",
        None,
        id="signature-umlaut",
    ),
    pytest.param(
        'signature = "A\\tB"\n' + outputs("bits = 1"),
        "1:15 SIGNATURE '\\t' in 'signature' cannot stand in a device, expected one line of "
        "printable ASCII characters",
        None,
        id="signature-tab",
    ),
    pytest.param(
        'signature = " "\n' + outputs("bits = 1"),
        "1:13 SIGNATURE 'signature' is empty, expected text",
        None,
        id="signature-blank",
    ),
    *(
        pytest.param(
            f"max_delay = {value}\n" + outputs("bits = 1"),
            f"1:13 VALUE 'max_delay' is {shown}, expected a time in ns, above 0 and at most "
            "1000000",
            None,
            id=f"delay-{value}",
        )
        for value, shown in (
            ("0", "the number 0"),
            ("-2.5", "the number -2.5"),
            ("inf", "the number inf"),
            ("nan", "the number nan"),
            ("true", "true"),
            ("'25 ns'", "the text '25 ns'"),
            ("1000001", "the number 1000001"),
        )
    ),
    pytest.param(
        outputs('max_delay = "fast"'),
        "6:19 VALUE 'max_delay' is the text 'fast', expected a time in ns, above 0 and at most "
        "1000000",
        None,
        id="delay-of-output",
    ),
]


@pytest.mark.parametrize(("text", "expected", "hint"), ONE)
def test_one_mistake_is_one_error(text, expected, hint):
    (found,) = errors_of(text)
    at = found.location
    assert f"{at.line}:{at.column} {found.code} {found.message}" == expected
    assert found.hint == hint


def test_everything_is_said_in_one_go():
    text = """\
signature = "a\\nb"
max_delay = 0
[inputs]
rd = 1
key = 2
[outputs]
f = { enable = "0", max_delay = -1 }
g = { enable = "rd x", reads = "x" }
h = { reads = "rd" }
[inner]
i = { active = "low" }
rd = 1
[logic]
f = "i"
g = "rd &"
h = "y"
i = "key"
"""
    assert [(d.location.line, d.location.column, d.code) for d in errors_of(text)] == [
        (1, 15, "SIGNATURE"),
        (2, 13, "VALUE"),
        (7, 16, "ENABLE-NEVER"),
        (7, 33, "VALUE"),
        (8, 16, "HOLDS-ITSELF"),
        (9, 7, "ENABLE-MISSING"),
        (11, 7, "INNER-PIN"),
        (12, 1, "NAME-TWICE"),
        (15, 9, "EQUATION-SYNTAX"),
        (16, 6, "NAME-UNKNOWN"),
        (17, 6, "BUS-AS-BIT"),
    ]


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        pytest.param(
            outputs('enable = "1"'),
            "6:16 ENABLE-ALWAYS f always drives its pin: its enable is 1 for every input",
            id="always",
        ),
        pytest.param(
            outputs("enable = \"rd' + wr'\", never_too = true", rest="[never]\nwhen = 'rd wr'\n"),
            "6:16 ENABLE-ALWAYS f always drives its pin: its enable is 1 for every possible input",
            id="always-possible",
        ),
        pytest.param(
            outputs('enable = "rd wr"', rest="[never]\nwhen = 'rd wr'\n"),
            "6:16 ENABLE-IMPOSSIBLE f drives its pin for impossible inputs only",
            id="impossible",
        ),
        pytest.param(
            inner("1").replace('f = "armed"', 'f = "rd"'),
            "8:1 INNER-UNUSED nothing names the inner signal armed",
            id="inner",
        ),
        pytest.param(
            inner("2")
            .replace('f = "armed"', 'f = "armed[1]"')
            .replace("\narmed =", "\n'armed[1]' =")
            .replace("\n'armed[1]' = 2", "\narmed = 2")
            + "'armed[0]' = 'wr'\n",
            "8:1 INNER-UNUSED nothing names the inner signal armed[0]",
            id="inner-bit",
        ),
        pytest.param(
            outputs('enable = "wr", reads = "back"'),
            "6:30 INPUT-UNUSED no output depends on back",
            id="reads",
        ),
    ],
)
def test_doubtful_designs_are_read_with_a_warning(text, expected):
    behaviour = behaviour_of(parse_toml(text, "d.toml"))
    shown = [
        f"{w.location.line}:{w.location.column} {w.code} {w.message}"
        for w in behaviour.warnings
        if w.code != "INPUT-UNUSED" or "back" in w.message
    ]
    assert shown == [expected]


def test_an_input_that_only_an_enable_names_is_used():
    behaviour = behaviour_of(parse_toml(outputs('enable = "wr"'), "d.toml"))
    assert [w.message for w in behaviour.warnings] == ["no output depends on key"]
