# ruff: noqa: ISC004 - messages stand on one line, as they are shown
"""Bad designs: what is wrong, where, and that everything is said in one go."""

from __future__ import annotations

import pytest

from pla.behaviour.reader import behaviour_of
from pla.errors import InputError
from pla.tomlfile import parse_toml

INPUTS = """\
[inputs]
step = 4
addr = "15:8"
hatch = { active = "low" }
start = 1
"""
OUTPUTS = """\
[outputs]
lamp = 1
code = 3
"""
HEAD = INPUTS + OUTPUTS  # lines 1 to 8
# With everything described but `lamp`, whose equation follows on line 10.
LOGIC = HEAD + "[logic]\n"
REST = '\n"code[0]" = "0"\n"code[1]" = "start"\n"code[2]" = "step[1]"\n'


def errors_of(text):
    with pytest.raises(InputError) as caught:
        behaviour_of(parse_toml(text, "d.toml"))
    return caught.value.diagnostics


def lamp(equation):
    return f'{LOGIC}lamp = "{equation}"{REST}'


def table(rows, columns="step start | lamp code", rest=""):
    """A table whose header stands on line 11."""
    return f'{HEAD}[[cases]]\nrows = """\n{columns}\n{rows}\n"""\n{rest}'


def minterms(body):
    """Lists of `lamp` from line 10 on."""
    return HEAD + "[minterms.lamp]\n" + body + "\n[logic]" + REST


def addresses(body):
    """A map from line 10 on."""
    return HEAD + "[[address_map]]\n" + body + "\n[logic]" + REST


BAD = [
    # --- the file as a whole
    pytest.param(
        'nam = "x"\n' + lamp("start"),
        (1, 1, "KEY-UNKNOWN", "unknown key 'nam' in the file"),
        id="top-key",
    ),
    pytest.param(
        "name = 3\n" + lamp("start"), (1, 8, "VALUE", "'name' is the number 3"), id="name"
    ),
    pytest.param('name = "a\\nb"\n' + lamp("start"), (1, 8, "TITLE", "one line"), id="name-lines"),
    pytest.param(
        'revision = ""\n' + lamp("start"),
        (1, 12, "TITLE", "expected one line"),
        id="revision-empty",
    ),
    pytest.param(
        "[outputs]\nf = 1\n[logic]\nf = '1'", (1, 1, "KEY-MISSING", "'inputs'"), id="no-in"
    ),
    pytest.param("[inputs]\na = 1\n", (1, 1, "KEY-MISSING", "has no 'outputs'"), id="no-out"),
    pytest.param(
        "[inputs]\n[outputs]\nf = 1\n[logic]\nf = '1'",
        (1, 1, "NO-INPUTS", "at least one input"),
        id="in-0",
    ),
    pytest.param(
        lamp("start") + "[inner]\narmed = 1\n",
        (15, 1, "NOT-DESCRIBED", "nothing says what the inner signal armed does"),
        id="inner",
    ),
    pytest.param(
        lamp("start") + "[state_table]\nrows = ''\n",
        (14, 1, "VALUE", "'state_table' is a table, expected a list of tables"),
        id="state-table",
    ),
    pytest.param(
        "[cases]\n" + lamp("1"), (1, 1, "VALUE", "expected a list of tables"), id="cases-1"
    ),
    # --- declarations
    pytest.param(
        "[inputs]\nstep = 0\n[outputs]\nf = 1\n[logic]\nf = 'step == 1'",
        (2, 8, "WIDTH", "'step' has 0 bits, expected 1 to 64"),
        id="width-0",
    ),
    pytest.param(
        "[inputs]\nstep = true\n[outputs]\nf = 1\n[logic]\nf = 'step'",
        (2, 8, "VALUE", "'step' is true, expected a number of bits from 1 to 64"),
        id="width-true",
    ),
    pytest.param(
        "[inputs]\na = 40\nb = 40\n[outputs]\nf = 1\n[logic]\nf = '1'",
        (1, 1, "TOO-MANY-INPUTS", "80 input bits are declared, at most 64"),
        id="inputs-80",
    ),
    pytest.param(
        '[inputs]\na = 1\n[outputs]\nf = 60\ng = 5\n[[cases]]\nrows = "a | f g\\nothers | x x"\n',
        (3, 1, "TOO-MANY-OUTPUTS", "65 output bits are declared, at most 64"),
        id="outputs-65",
    ),
    pytest.param(
        "[inputs]\na = '8:15'\n[outputs]\nf = 1\n[logic]\nf = 'a == 0'",
        (2, 5, "PART-REVERSED", "runs from low to high"),
        id="span-reversed",
    ),
    pytest.param(
        "[inputs]\na = '15-8'\n[outputs]\nf = 1\n[logic]\nf = '1'",
        (2, 5, "VALUE", '"high:low"'),
        id="span-syntax",
    ),
    pytest.param(
        "[inputs]\n'é' = 1\n[outputs]\nf = 1\n[logic]\nf = '1'",
        (2, 1, "NAME-SYNTAX", "letters A to Z"),
        id="name-accent",
    ),
    pytest.param(
        "[inputs]\n2a = 1\n[outputs]\nf = 1\n[logic]\nf = '1'",
        (2, 1, "NAME-SYNTAX", "do not start with a digit"),
        id="name-digit",
    ),
    pytest.param(
        "[inputs]\nxor = 1\n[outputs]\nf = 1\n[logic]\nf = '1'",
        (2, 1, "NAME-RESERVED", "'xor' is a reserved word"),
        id="name-reserved",
    ),
    pytest.param(
        "[inputs]\na = 1\n[outputs]\na = 1\n",
        (4, 1, "NAME-TWICE", "declared as an input and as an output"),
        id="name-twice",
    ),
    pytest.param(
        "[inputs]\na = { active = 'lo' }\n[outputs]\nf = 1\n[logic]\nf = 'a'",
        (2, 16, "VALUE", """'active' is the text 'lo', expected "high" or "low\""""),
        id="active",
    ),
    pytest.param(
        "[inputs]\na = { asynchronous = 1 }\n[outputs]\nf = 1\n[logic]\nf = 'a'",
        (2, 22, "VALUE", "'asynchronous' is the number 1, expected true or false"),
        id="asynchronous",
    ),
    pytest.param(
        "[inputs]\na = { activ = 'low' }\n[outputs]\nf = 1\n[logic]\nf = 'a'",
        (2, 7, "KEY-UNKNOWN", "unknown key 'activ' in [inputs.a]"),
        id="input-key",
    ),
    pytest.param(
        "[inputs]\na = 1\n[outputs]\nf = { impossible = 2 }\n[logic]\nf = 'a'",
        (4, 20, "VALUE", "'impossible' is the number 2, expected 0 or 1"),
        id="impossible",
    ),
    *(
        pytest.param(
            f"[inputs]\na = 1\n[outputs]\nf = {{ {key} = 1 }}\n[logic]\nf = 'a'",
            (4, 7, code, f"{key!r}{rest}"),
            id=f"output-{key}",
        )
        for key, code, rest in (
            ("glitch_free", "NOT-SUPPORTED-YET", ": "),
            *(
                (key, "REGISTER-MISSING", " without 'register'")
                for key in ("clock", "reset", "reset_when", "preset", "preset_when", "start")
            ),
        )
    ),
    pytest.param(
        "[inputs]\na = 1\n[outputs]\nf = '7:4'\n[logic]\nf = 'a'",
        (4, 5, "VALUE", "'f' is the text '7:4', expected a number of bits"),
        id="output-span",
    ),
    pytest.param(
        HEAD + '[logic]\nlamp = "start"\n',
        (8, 1, "NOT-DESCRIBED", "nothing says what the output code does"),
        id="not-described",
    ),
    pytest.param(
        HEAD + '[logic]\nlamp = "start"\n"code[1]" = "0"\n',
        (8, 1, "NOT-DESCRIBED", "nothing says what the output code[2], code[0] does"),
        id="not-described-bits",
    ),
    # --- equations
    pytest.param(lamp(""), (10, 9, "EQUATION-EMPTY", "the equation is empty"), id="eq-empty"),
    pytest.param(lamp("start +"), (10, 16, "EQUATION-SYNTAX", "the equation ends"), id="eq-ends"),
    pytest.param(
        lamp("(start"), (10, 15, "EQUATION-SYNTAX", "the equation ends, expected )"), id="eq-open"
    ),
    pytest.param(
        lamp("start = hatch"), (10, 15, "EQUATION-SYNTAX", "'=' has no meaning"), id="eq-equals"
    ),
    pytest.param(
        lamp("start & hatch"), (10, 15, "EQUATION-SYNTAX", "'&' has no meaning"), id="eq-ampersand"
    ),
    pytest.param(
        lamp("start''"), (10, 15, "EQUATION-SYNTAX", 'found "\'", expected'), id="eq-two-primes"
    ),
    pytest.param(
        lamp("step == start"),
        (10, 17, "EQUATION-SYNTAX", "found 'start', expected a number"),
        id="eq-compare-signal",
    ),
    pytest.param(
        lamp("7 == step"), (10, 11, "EQUATION-SYNTAX", "found '=='"), id="eq-compare-turned"
    ),
    pytest.param(
        lamp("step == 7'"), (10, 18, "EQUATION-SYNTAX", 'found "\'"'), id="eq-prime-on-comparison"
    ),
    pytest.param(
        lamp("xor start"), (10, 9, "EQUATION-SYNTAX", "found 'xor', expected a name"), id="eq-xor"
    ),
    pytest.param(
        lamp("step[1"),
        (10, 15, "EQUATION-SYNTAX", "the equation ends, expected ] or :"),
        id="eq-bit",
    ),
    pytest.param(
        lamp("(" * 10_000 + "start" + ")" * 10_000),
        (10, 9, "EQUATION-DEEP", "at most 100"),
        id="eq-parentheses",
    ),
    pytest.param(
        lamp("(" * 10_000),
        (10, 10_009, "EQUATION-SYNTAX", "the equation ends"),
        id="eq-hostile-open",
    ),
    pytest.param(
        lamp("not " * 10_000 + "start"), (10, 9, "EQUATION-DEEP", "at most 100"), id="eq-nots"
    ),
    pytest.param(
        lamp("start 2"), (10, 15, "CONSTANT", "the constants are 0 and 1"), id="eq-constant"
    ),
    pytest.param(
        lamp("start + strat"),
        (10, 17, "NAME-UNKNOWN", "there is no input or output 'strat'"),
        id="eq-unknown",
    ),
    pytest.param(
        lamp("start AND hatch"),
        (10, 15, "NAME-UNKNOWN", "there is no input or output 'AND'"),
        id="AND",
    ),
    pytest.param(
        lamp("start + step"), (10, 17, "BUS-AS-BIT", "'step' has 4 bits where one bit"), id="eq-bus"
    ),
    pytest.param(lamp("step[2:1]'"), (10, 9, "BUS-AS-BIT", "'step[2:1]' has 2 bits"), id="eq-part"),
    pytest.param(
        lamp("start == 1"), (10, 9, "BIT-COMPARED", "'start' is one bit"), id="eq-bit-compared"
    ),
    pytest.param(
        lamp("step[4]"), (10, 9, "BIT-RANGE", "there is no bit 4 in step[3:0]"), id="eq-bit-range"
    ),
    pytest.param(
        lamp("start[0]"),
        (10, 9, "NAME-NOT-BUS", "start is a single bit, not a bus"),
        id="eq-not-bus",
    ),
    pytest.param(
        lamp("step[0:1] == 1"),
        (10, 9, "PART-REVERSED", "runs from low to high"),
        id="eq-part-turned",
    ),
    pytest.param(
        lamp("addr[7]"), (10, 9, "BIT-UNREACHED", "only bits 15 down to 8 reach"), id="eq-unreached"
    ),
    pytest.param(
        lamp("step > 16"),
        (10, 16, "NUMBER-RANGE", "16 does not fit step, which has 4 bits"),
        id="eq-16",
    ),
    pytest.param(
        lamp("step == 07"),
        (10, 17, "NUMBER", "'07' is a decimal number with a leading zero"),
        id="07",
    ),
    pytest.param(
        lamp("step == 0b12"), (10, 17, "NUMBER", "'0b12' is not a number"), id="eq-number"
    ),
    pytest.param(
        lamp("step in 9..3"),
        (10, 17, "RANGE-REVERSED", "the range 9..3 runs backwards"),
        id="eq-range",
    ),
    pytest.param(
        lamp("addr >= 0xC080"),
        (10, 17, "GRANULE", "boundary inside the granule 0xC000..0xC0FF of addr"),
        id="eq-granule",
    ),
    pytest.param(
        lamp("addr <= 0xC000"), (10, 17, "GRANULE", "granule 0xC000..0xC0FF"), id="eq-granule-le"
    ),
    pytest.param(
        lamp("addr in 0x4000..0x40FE"),
        (10, 25, "GRANULE", "granule 0x4000..0x40FF"),
        id="granule-in",
    ),
    pytest.param(lamp("addr != 0x4001"), (10, 17, "GRANULE", "0x4000..0x40FF"), id="granule-ne"),
    pytest.param(
        LOGIC + "lamp = 1" + REST,
        (10, 8, "VALUE", "'lamp' is the number 1, expected an eq"),
        id="eq-1",
    ),
    pytest.param(
        HEAD + '[logic]\nlamp = "start"\ncode = "start"\n',
        (11, 1, "BUS-AS-BIT", "'code' has 3 bits, expected one output bit"),
        id="eq-output-bus",
    ),
    pytest.param(
        lamp("start") + 'start = "hatch"\n',
        (14, 1, "NAME-ROLE", "'start' is an input, expected an output"),
        id="eq-input-described",
    ),
    pytest.param(
        lamp("code[0] lamp"),
        (10, 17, "CYCLE", "without a register: lamp -> lamp"),
        id="cycle-1",
    ),
    pytest.param(
        HEAD + '[logic]\nlamp = "code[0] start"\n"code[0]" = "code[2]\'"\n"code[1]" = "0"\n'
        '"code[2]" = "hatch + lamp"\n',
        (13, 22, "CYCLE", "lamp -> code[0] -> code[2] -> lamp"),
        id="cycle-3",
    ),
    pytest.param(
        "[inputs]\na = 2\n[outputs]\nf = 1\ng = 1\n[minterms.f]\nof = 'a'\non = [1]\n"
        'dont_care = [2]\nothers = 0\n[logic]\ng = "f + a[0]"\n',
        (
            12,
            6,
            "FREE-OUTPUT-NAMED",
            "'f' may not be named here: it has don't cares outside [never]",
        ),
        id="free-output",
    ),
    # --- [never]
    pytest.param(
        lamp("start") + '[never]\nwhen = ["step > 9", "lamp"]\n',
        (15, 22, "NAME-ROLE", "'lamp' is an output, expected an input"),
        id="never-output",
    ),
    pytest.param(
        lamp("start") + '[never]\nwhen = "start + start\'"\n',
        (15, 8, "NEVER-ALWAYS", "every input combination impossible"),
        id="never-always",
    ),
    pytest.param(
        lamp("1") + "[never]\n", (14, 1, "KEY-MISSING", "[never] has no 'when'"), id="never-0"
    ),
    pytest.param(
        lamp("1") + "[never]\nwhen = [1]\n",
        (15, 9, "VALUE", "expected text in quotes"),
        id="never-1",
    ),
    pytest.param(
        lamp("1") + "[never]\nif = 'start'\nwhen = '0'\n",
        (15, 1, "KEY-UNKNOWN", "unknown key 'if' in [never]"),
        id="never-key",
    ),
    # --- tables
    pytest.param(
        HEAD + "[[cases]]\n[logic]" + REST,
        (9, 1, "CASES-SOURCE", "found neither"),
        id="cases-neither",
    ),
    pytest.param(
        table("", columns=""), (11, 1, "TABLE-EMPTY", "the table is empty"), id="table-empty"
    ),
    pytest.param(table(""), (11, 1, "TABLE-EMPTY", "a header but no rows"), id="table-no-rows"),
    pytest.param(
        table("0 | 0 0", columns="stop | lamp code"),
        (11, 1, "NAME-UNKNOWN", "there is no input or output 'stop'"),
        id="table-column",
    ),
    pytest.param(
        table("0 0 | 0 0", columns="step step | lamp code"),
        (11, 6, "COLUMN-TWICE", "stands twice"),
        id="table-column-twice",
    ),
    pytest.param(
        table("0 0 | 0 0", columns="step step[3:2] | lamp code"),
        (11, 6, "COLUMN-TWICE", "'step[3:2]' shares bits with the column 'step'"),
        id="table-column-part-twice",
    ),
    pytest.param(
        table("0 0 0", columns="step lamp code"),
        (11, 6, "HEADER", "a bar is missing between the inputs and the output 'lamp'"),
        id="table-bar",
    ),
    pytest.param(
        table("0 | 0", columns="lamp code | step"),
        (11, 13, "HEADER", "the input 'step' stands behind outputs"),
        id="table-order",
    ),
    pytest.param(
        table("0 | 0", columns="lamp | code"),
        (11, 12, "HEADER", "names no input"),
        id="table-no-in",
    ),
    pytest.param(
        table("0 | 0", columns="step | start"),
        (11, 13, "HEADER", "names no output"),
        id="table-no-out",
    ),
    pytest.param(
        table("0 0 | 1\nothers | x x"),
        (12, 8, "ROW-LENGTH", "the row has 3 cells, expected 4: step start | lamp code"),
        id="row-short",
    ),
    pytest.param(
        table("0 0 | 1 1 1\nothers | x x"), (12, 11, "ROW-LENGTH", "has 5 cells"), id="row-long"
    ),
    pytest.param(
        table("0 | 0 1 1\nothers | x x"),
        (12, 5, "ROW-BARS", "otherwise than the header"),
        id="row-bars",
    ),
    pytest.param(
        table("0011 0 | 1 1\nothers | x x"),
        (12, 1, "NUMBER", "'0011' is a decimal number with a leading zero"),
        id="cell-leading-zero",
    ),
    pytest.param(
        table("0b011 0 | 1 1\nothers | x x"),
        (12, 1, "PATTERN-WIDTH", "'0b011' has 3 bits, but step has 4"),
        id="cell-width",
    ),
    pytest.param(
        table("x 0 | 1 1\nothers | x x"), (12, 1, "CELL", "x is for outputs"), id="cell-x-input"
    ),
    pytest.param(
        table("0b0x11 0 | 1 1\nothers | x x"),
        (12, 1, "CELL", "an input that may be either is -"),
        id="cell-x-in-pattern",
    ),
    pytest.param(
        table("- 0 | - 1\nothers | x x"), (12, 7, "CELL", "- is for inputs"), id="cell-dash-output"
    ),
    pytest.param(
        table("- 0 | 1 0b1-0\nothers | x x"),
        (12, 9, "CELL", "a don't care is x"),
        id="cell-dash-bits",
    ),
    pytest.param(
        table("16 0 | 1 1\nothers | x x"),
        (12, 1, "NUMBER-RANGE", "16 does not fit step"),
        id="cell-16",
    ),
    pytest.param(
        table("0 2 | 1 1\nothers | x x"),
        (12, 3, "NUMBER-RANGE", "2 does not fit start, which has 1 bit: expected 0 to 1"),
        id="cell-bit-2",
    ),
    pytest.param(
        table("0 0 | 1 8\nothers | x x"),
        (12, 9, "NUMBER-RANGE", "8 does not fit code"),
        id="cell-out-8",
    ),
    pytest.param(
        table("7..3 0 | 1 1\nothers | x x"),
        (12, 1, "RANGE-REVERSED", "runs backwards"),
        id="cell-range",
    ),
    pytest.param(
        table("0 0 | 1 1..2\nothers | x x"),
        (12, 9, "CELL", "'1..2' means nothing for code"),
        id="out-..",
    ),
    pytest.param(
        table("on 0 | 1 1\nothers | x x"),
        (12, 1, "CELL", "'on' means nothing for step"),
        id="cell-word",
    ),
    pytest.param(
        table("0 0 | X 1\nothers | x x"), (12, 7, "CELL", "'X' means nothing for lamp"), id="cell-X"
    ),
    pytest.param(
        table("0 0 | keep 1\nothers | x x"),
        (12, 7, "NOT-SUPPORTED-YET", "'keep': kept outputs are not supported yet"),
        id="cell-keep",
    ),
    pytest.param(
        table("0x4010 | 1 1\nothers | x x", columns="addr | lamp code"),
        (12, 1, "GRANULE", "granule 0x4000..0x40FF of addr"),
        id="cell-granule",
    ),
    pytest.param(
        table("0b0100000000000001 | 1 1\nothers | x x", columns="addr | lamp code"),
        (12, 1, "GRANULE", "asks for a 1 on a bit of addr that does not reach the device"),
        id="cell-granule-pattern",
    ),
    pytest.param(
        table("others | x x\nothers | 0 0"),
        (13, 1, "OTHERS", "others stands twice"),
        id="others-twice",
    ),
    pytest.param(
        table("0 - | 1 1\nOTHERS | x x"),
        (13, 1, "OTHERS", "'OTHERS' does not start a row"),
        id="others-capitals",
    ),
    pytest.param(
        table("others - | x x"),
        (12, 8, "OTHERS", "others stands for all inputs"),
        id="others-cells",
    ),
    pytest.param(
        table("others | x"),
        (12, 11, "ROW-LENGTH", "has 1 cell for outputs, expected 2"),
        id="others-1",
    ),
    pytest.param(
        table("0..8 - | 1 2\n7 1 | 1 3\nothers | x x"),
        (
            13,
            1,
            "ROW-CONFLICT",
            "'code[0]' gets two values for step = 7, start = 1: 1 from this row, "
            "0 from the row at d.toml:12:1",
        ),
        id="rows-conflict",
    ),
    pytest.param(
        table("0..8 - | 1 2\n7 1 | x 2\nothers | x x"),
        (
            13,
            1,
            "ROW-CONFLICT",
            "'lamp' gets two values for step = 7, start = 1: x from this row, 1",
        ),
        id="rows-conflict-x",
    ),
    pytest.param(
        table("0..8 - | 1 2"),
        (
            11,
            1,
            "OPEN-INPUTS",
            "14 possible input combinations are not listed (of step, start), for "
            "example step = 9, start = 0",
        ),
        id="rows-open",
    ),
    pytest.param(
        table("0..9 - | 1 2", rest='[never]\nwhen = "step > 10"\n'),
        (11, 1, "OPEN-INPUTS", "2 possible input combinations are not listed"),
        id="rows-open-never",
    ),
    pytest.param(
        table("others | x x", rest='[logic]\nlamp = "start"\n'),
        (15, 1, "DESCRIBED-TWICE", "'lamp' is described twice: here and at d.toml:11:14"),
        id="described-twice",
    ),
    pytest.param(
        table("others | x x", rest="[[cases]]\nrows = '''\nstart | code[1]\nothers | 0'''\n"),
        (16, 9, "DESCRIBED-TWICE", "'code[1]' is described twice"),
        id="described-twice-bit",
    ),
    # --- minterm lists
    pytest.param(minterms("on = [1]\nothers = 0"), (9, 1, "KEY-MISSING", "no 'of'"), id="min-of"),
    pytest.param(
        minterms("of = 'stop'\non = [1]\nothers = 0"),
        (10, 6, "NAME-UNKNOWN", "no input 'stop'"),
        id="mo",
    ),
    pytest.param(
        minterms("of = ['start', 'lamp']\non = [1]\nothers = 0"),
        (10, 16, "NAME-ROLE", "'lamp' is an output, expected an input"),
        id="minterms-of-output",
    ),
    pytest.param(
        minterms("of = ['start', 'start']\non = [1]\nothers = 0"),
        (10, 16, "COLUMN-TWICE", "stands twice in 'of'"),
        id="minterms-of-twice",
    ),
    pytest.param(
        minterms("of = ['start', 'addr']\non = [1]\nothers = 0"),
        (10, 16, "GRANULE", "bits that do not reach the device"),
        id="minterms-of-partial",
    ),
    pytest.param(
        minterms("of = 'step'\non = [1, 16]\nothers = 0"),
        (11, 10, "VALUE", "'on' is the number 16, expected a whole number from 0 to 15"),
        id="minterms-16",
    ),
    pytest.param(
        minterms("of = 'step'\non = ['3..1']\nothers = 0"),
        (11, 7, "RANGE-REVERSED", "the range '3..1' runs backwards"),
        id="minterms-range",
    ),
    pytest.param(
        minterms("of = 'step'\non = [1]\ndont_care = ['0..3']\nothers = 0"),
        (12, 14, "ROW-CONFLICT", "'lamp' gets two values for step = 1: x from this entry, 1 from"),
        id="minterms-conflict",
    ),
    pytest.param(
        minterms("of = 'step'\non = [1]"),
        (10, 1, "OPEN-INPUTS", "15 possible input combinations are not listed (of step)"),
        id="minterms-open",
    ),
    pytest.param(
        minterms("of = 'step'\non = [1]\nothers = 2"),
        (12, 10, "VALUE", "'others' is the number 2, expected"),
        id="minterms-others",
    ),
    pytest.param(
        minterms("of = 'step'\nothers = 0"),
        (9, 1, "MINTERMS-EMPTY", "lists nothing"),
        id="min-empty",
    ),
    pytest.param(
        HEAD + "[minterms.code]\nof = 'step'\non = [1]\nothers = 0\n[logic]\nlamp = '0'",
        (9, 11, "BUS-AS-BIT", "'code' has 3 bits, expected one output bit"),
        id="minterms-bus",
    ),
    # --- address maps
    pytest.param(
        addresses("bus = 'addr'\nselect = { lamp = '0x0000..0x3FFE' }\nelsewhere = 0"),
        (11, 19, "GRANULE", "granule 0x3F00..0x3FFF of addr"),
        id="map-granule",
    ),
    pytest.param(
        addresses("bus = 'addr'\nselect = { lamp = '0x0000..0x3FFF' }"),
        (11, 1, "OPEN-INPUTS", "192 possible input combinations are not listed"),
        id="map-open",
    ),
    pytest.param(
        addresses("bus = 'start'\nselect = { lamp = 1 }\nelsewhere = 0"),
        (10, 7, "VALUE", "expected a bus or a part of one"),
        id="map-bus",
    ),
    pytest.param(
        addresses("bus = 'addr'\nselect = { lmap = '0x0000..0x3FFF' }\nelsewhere = 0"),
        (11, 12, "NAME-UNKNOWN", "there is no output 'lmap'"),
        id="map-output",
    ),
    pytest.param(
        HEAD + "[[address_map]]\nbus = 'addr'\nelsewhere = 0\n[address_map.select]\n"
        "lamp = '0x0000..0x3FFF'\n\"code[0]\" = ['0x8000..0xFFFF', '0x3000..0x4FFF']\n"
        "[[cases]]\nrows = '''\nstart | code[2] code[1]\nothers | 0 1'''\n",
        (
            14,
            32,
            "SELECT-OVERLAP",
            "lamp and code[0] overlap at 0x3000..0x3FFF, for example at addr = 0x3000: code[0] is "
            "selected here, lamp at d.toml:13:8",
        ),
        id="map-overlap",
    ),
    pytest.param(
        addresses("bus = 'addr'\nselect = { lamp = 'all' }\nelsewhere = 0"),
        (11, 19, "VALUE", "'all' in 'lamp' is not a number"),
        id="map-word",
    ),
    pytest.param(
        addresses("bus = 'addr'\nselect = { lamp = 0x10000 }\nelsewhere = 0"),
        (11, 19, "VALUE", "'lamp' is the number 0x10000, expected a whole number from 0 to 0xFFFF"),
        id="map-too-high",
    ),
    pytest.param(
        addresses(
            "bus = 'addr'\nwhen = 'lamp'\nselect = { lamp = '0x0000..0x3FFF' }\nelsewhere = 0"
        ),
        (11, 9, "CYCLE", "lamp -> lamp"),
        id="map-cycle",
    ),
    # --- places
    pytest.param(
        lamp("1") + "[place.some-device]\nlamp = 0\n",
        (15, 8, "VALUE", "of at least 1"),
        id="place-0",
    ),
    pytest.param(
        lamp("1") + "[place.some-device]\nlamp = 3\nstart = 3\n",
        (16, 9, "PIN-TWICE", "pin 3 is given to start and to lamp"),
        id="place-pin-twice",
    ),
    pytest.param(
        lamp("1") + "[place.some-device]\nlump = 3\n",
        (15, 1, "NAME-UNKNOWN", "there is no input or output 'lump'"),
        id="place-name",
    ),
    pytest.param(
        lamp("1") + "[place.some-device]\nstep = 3\n",
        (15, 1, "BUS-AS-BIT", "4 bits"),
        id="place-bus",
    ),
    pytest.param(
        lamp("1") + "[place]\nlamp = 3\n",
        (15, 8, "VALUE", "'lamp' is the number 3, expected a table of pins for each device"),
        id="place-no-device",
    ),
    pytest.param(
        lamp("1") + "[place]\nlamp = 3\nstart = 4\n",
        (15, 8, "VALUE", "expected a table of pins for each device"),
        id="place-no-device-twice",
    ),
]


@pytest.mark.parametrize(("text", "expected"), BAD)
def test_bad_design(text, expected):
    line, column, code, message = expected
    (found,) = errors_of(text)
    assert (found.location.file, found.location.line, found.location.column) == (
        "d.toml",
        line,
        column,
    )
    assert found.code == code
    assert message in found.message
    assert found.location.source == text.split("\n")[line - 1]


def test_all_errors_of_a_file_at_once():
    text = """\
nam = "x"
[inputs]
a = 0
b = { activ = "low" }
[outputs]
f = { register = "D" }
g = 2
[never]
when = ["b +", "c"]
[[cases]]
rows = \'\'\'
b | g[0]
2 | 1
0 | 3\'\'\'
[minterms.f]
of = ["b"]
on = [2]
others = 0
[logic]
"g[1]" = "b & b"
f = "b"
[place.some-device]
f = "one"
"""
    found = [(d.location.line, d.code) for d in errors_of(text)]
    assert found == [
        (1, "KEY-UNKNOWN"),
        (3, "WIDTH"),
        (4, "KEY-UNKNOWN"),
        (6, "KEY-MISSING"),
        (9, "EQUATION-SYNTAX"),
        (9, "NAME-UNKNOWN"),
        (13, "NUMBER-RANGE"),
        (14, "NUMBER-RANGE"),
        (17, "VALUE"),
        (20, "EQUATION-SYNTAX"),
        (21, "DESCRIBED-TWICE"),
        (23, "VALUE"),
    ]


SMALL = "[inputs]\nlow = 1\nhigh = 1\n[outputs]\nf = 1\n"
ROWS = '[[cases]]\nrows = """\nlow high | f\n0 0 | 1\n1 - | 0\n"""\n'
ALL_ROWS = ROWS.replace("1 - | 0", "1 - | 0\nothers | x")


# One mistake, one error: nothing is said of what only follows from it.
@pytest.mark.parametrize(
    ("text", "expected", "hint"),
    [
        pytest.param(
            SMALL.replace("inputs", "input") + ROWS + "[logic]\nf = 'low high'\n",
            "1:2 KEY-UNKNOWN unknown key 'input' in the file",
            "did you mean 'inputs'?",
            id="inputs-misspelt",
        ),
        pytest.param(
            SMALL.replace("outputs", "Output") + ROWS + "[place.d]\nf = 3\n",
            "4:2 KEY-UNKNOWN unknown key 'Output' in the file",
            "did you mean 'outputs'?",
            id="outputs-misspelt",
        ),
        pytest.param(
            "[outputs]\nf = 1\n" + ROWS,
            "1:1 KEY-MISSING the file has no 'inputs'",
            "begin a section [inputs] with lines such as: start = 1",
            id="no-inputs",
        ),
        pytest.param(
            "[inputs]\nlow = 1\nhigh = 1\n" + ROWS,
            "1:1 KEY-MISSING the file has no 'outputs'",
            "begin a section [outputs] with lines such as: fan = 1",
            id="no-outputs",
        ),
        pytest.param(
            "inputs = 3\n[outputs]\nf = 1\n" + ROWS,
            "1:10 VALUE 'inputs' is the number 3, expected a table",
            None,
            id="inputs-number",
        ),
        pytest.param(
            "",
            "1:1 DESIGN-EMPTY the file declares nothing, expected a design",
            "begin with a section [inputs] with lines such as: start = 1",
            id="empty",
        ),
        pytest.param(
            "# later\n",
            "1:1 DESIGN-EMPTY the file declares nothing, expected a design",
            "begin with a section [inputs] with lines such as: start = 1",
            id="comments",
        ),
        pytest.param(
            SMALL.replace("high = 1", "high = 0") + ROWS,
            "3:8 WIDTH 'high' has 0 bits, expected 1 to 64",
            None,
            id="width-of-a-column",
        ),
        pytest.param(
            SMALL.replace("high = 1", "high = '1:8'") + ROWS,
            '3:8 PART-REVERSED "1:8" runs from low to high, expected the higher bit first',
            'write "8:1"',
            id="span-of-a-column",
        ),
        pytest.param(
            SMALL.replace("low = 1", "low = 4").replace("high = 1", "high = 0")
            + "[[address_map]]\nbus = 'low'\nwhen = 'high'\nselect.f = 3\n",
            "3:8 WIDTH 'high' has 0 bits, expected 1 to 64",
            None,
            id="width-of-a-condition",
        ),
        pytest.param(
            SMALL + ROWS.replace("1 - | 0", "1 1 | 0") + '[nevr]\nwhen = "low high\'"\n',
            "12:2 KEY-UNKNOWN unknown key 'nevr' in the file",
            "did you mean 'never'?",
            id="never-misspelt",
        ),
        pytest.param(
            SMALL + "[logc]\nf = 'low'\n",
            "6:2 KEY-UNKNOWN unknown key 'logc' in the file",
            "did you mean 'logic'?",
            id="logic-misspelt",
        ),
        pytest.param(
            SMALL + ALL_ROWS.replace("[[cases]]", "[cases]"),
            "6:1 VALUE 'cases' is a table, expected a list of tables",
            "write [[cases]] with two brackets",
            id="one-bracket",
        ),
        pytest.param(
            SMALL + "[iner]\narmed = 1\n[logic]\nf = 'armed'\narmed = 'low'\n",
            "6:2 KEY-UNKNOWN unknown key 'iner' in the file",
            "did you mean 'inner'?",
            id="inner-misspelt",
        ),
        pytest.param(
            SMALL.replace("f = 1", "f = { register = 'D' }\ng = 1")
            + "[logic]\nf = 'f + low'\ng = 'f high'\n",
            "5:5 KEY-MISSING [outputs.f] has no 'clock'",
            'add clock = "clk", the name of an input, or "clk\'" for its falling edge',
            id="register-fed-back",
        ),
        pytest.param(
            SMALL.replace("low = 1", "low = { active_low = true }") + ALL_ROWS,
            "2:9 KEY-UNKNOWN unknown key 'active_low' in [inputs.low]",
            'did you mean active = "low"?',
            id="active-low",
        ),
    ],
)
def test_one_mistake_is_one_error(text, expected, hint):
    (found,) = errors_of(text)
    at = found.location
    assert f"{at.line}:{at.column} {found.code} {found.message}" == expected
    assert found.hint == hint


def test_a_broken_name_hides_no_error_elsewhere():
    text = SMALL.replace("high = 1", "high = 0").replace("f = 1", "f = 1\ng = 1")
    text += ROWS.replace("1 - | 0", "2 - | 0") + '[[cases]]\nrows = """\nlow | g\n0 | 1\n"""\n'
    assert [(d.location.line, d.code) for d in errors_of(text)] == [
        (3, "WIDTH"),
        (15, "OPEN-INPUTS"),
    ]


def test_uses_of_a_badly_declared_name_are_not_reported_too():
    text = '[inputs]\na = 99\nb = 1\n[outputs]\nf = 1\n[logic]\nf = "a b"\n'
    assert [d.code for d in errors_of(text)] == ["WIDTH"]


def test_uses_of_a_name_declared_twice_are_not_reported_too():
    text = '[inputs]\na = 1\n[outputs]\na = 1\nf = 1\n[logic]\na = "f"\nf = "a"\n'
    assert [d.code for d in errors_of(text)] == ["NAME-TWICE"]


def test_unknown_names_get_a_proposal():
    (found,) = errors_of(lamp("strat"))
    assert found.hint == "did you mean 'start'?"


@pytest.mark.parametrize(
    ("text", "column", "hint"),
    [
        pytest.param(
            addresses("bus = 'addr'\nselect = { lamp = 'C000..FFFF' }\nelsewhere = 0"),
            19,
            'did you mean "0xC000..0xFFFF"?',
            id="map",
        ),
        pytest.param(
            addresses("bus = 'addr'\nselect = { lamp = '0xC000-0xFFFF' }\nelsewhere = 0"),
            19,
            'a range is written "0xC000..0xFFFF"',
            id="map-dash",
        ),
        pytest.param(
            addresses("bus = 'addr'\nselect = { lamp = '0xFFFF..0xC000' }\nelsewhere = 0"),
            19,
            'write "0xC000..0xFFFF"',
            id="map-reversed",
        ),
        pytest.param(
            addresses("bus = 'addr'\nselect.lamp = 0\nelsewhere = 0\nwhen = 'addr < 8000h'"),
            16,
            "did you mean 0x8000?",
            id="equation",
        ),
        pytest.param(
            table("C000..FFFF | 1 1\nothers | x x", columns="addr | lamp code"),
            1,
            "did you mean 0xC000?",
            id="cell",
        ),
        pytest.param(
            table("C000 | 1 1\nothers | x x", columns="addr | lamp code"),
            1,
            "did you mean 0xC000?",
            id="cell-single",
        ),
    ],
)
def test_numbers_in_another_notation_get_a_hint(text, column, hint):
    (found,) = errors_of(text)
    assert (found.location.column, found.hint) == (column, hint)


def test_conflict_shows_the_other_row():
    (found,) = errors_of(table("0..8 - | 1 2\n7 1 | 1 3\nothers | x x"))
    assert found.location.source == "7 1 | 1 3"
    assert found.hint == "the other is: 0..8 - | 1 2"


def test_a_hundred_errors_of_a_table_are_enough():
    found = errors_of(table("\n".join(["16 0 | 1 1"] * 300)))
    assert len(found) == 101
    assert found[-1].code == "TOO-MANY-ERRORS"
    assert "100 were" in found[-1].message


def test_an_equation_too_large_for_cubes_is_refused():
    names = [f"i{k}" for k in range(40)]
    declared = "".join(f"{name} = 1\n" for name in names)
    text = f'[inputs]\n{declared}[outputs]\nf = 1\n[logic]\nf = "{" xor ".join(names)}"\n'
    (found,) = errors_of(text)
    assert (found.code, found.location.line, found.location.column) == ("EQUATION-LARGE", 45, 6)
