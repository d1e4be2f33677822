# ruff: noqa: E501, ISC004 - messages stand on one line, as they are shown
"""Bad state tables: what is wrong, where, and how to mend it; all of it in one go."""

from __future__ import annotations

import pytest
from point_values import read
from test_state_tables import GATE

from pla.errors import InputError

LAST = "open    | 0 -           | shut    | 0 0"
HEAD = "state   | request limit | then    | motor lamp"
CODES = 'codes = { shut = "00", opening = "01", open = "11" }'
LAMP = "lamp = 1\n"
TABLE = GATE[GATE.index("[[state") :]
BODY = GATE[GATE.index("clock =") :]
ROWS = GATE[GATE.index("rows =") :]
ALL_ROWS = GATE[GATE.index("shut    | 1") :]

BAD = [
    pytest.param(
        "shut    | 0 -           | shut    | 0 0\n",
        "",
        [
            (
                "12:11 STATE-OPEN no row says where state 'shut' leads for 2 possible combinations, for example request = 0, limit = 0",
                "add the rows, or one for all others: shut | others | …",
            ),
        ],
        id="transition-missing",
    ),
    pytest.param(
        "shut    | 0 -           | shut    | 0 0",
        "shut    | - 1           | shut    | 0 0",
        [
            (
                "20:1 STATE-CONFLICT in state 'shut' two rows differ for request = 1, limit = 1: on to 'shut' by this row, on to 'opening' by the row at d.toml:19:1",
                "the other is: shut    | 1 -           | opening | 1 0",
            ),
        ],
        id="rows-lead-apart",
    ),
    pytest.param(
        "opening | - 0           | opening | 1 x",
        "opening | - -           | open    | 1 x",
        [
            (
                "22:1 STATE-CONFLICT in state 'opening' two rows differ for request = 0, limit = 1: motor is 1 by this row, motor is 0 by the row at d.toml:21:1",
                "the other is: opening | - 1           | open    | 0 1",
            ),
        ],
        id="rows-give-apart",
    ),
    pytest.param(
        LAST,
        LAST + "\n- | 1 1 | open | 0 0",
        [
            (
                "25:1 STATE-CONFLICT in state 'shut' two rows differ for request = 1, limit = 1: on to 'open' by this row, on to 'opening' by the row at d.toml:19:1",
                "the other is: shut    | 1 -           | opening | 1 0",
            ),
            (
                "25:1 STATE-CONFLICT in state 'opening' two rows differ for request = 1, limit = 1: lamp is 0 by this row, lamp is 1 by the row at d.toml:21:1",
                "the other is: opening | - 1           | open    | 0 1",
            ),
            (
                "25:1 STATE-CONFLICT in state 'open' two rows differ for request = 1, limit = 1: lamp is 0 by this row, lamp is 1 by the row at d.toml:23:1",
                "the other is: open    | 1 -           | open    | 0 1",
            ),
        ],
        id="any-state-apart",
    ),
    pytest.param(
        LAST,
        "open    | 0 -           | shot    | 0 0",
        [
            ("24:27 STATE-UNKNOWN there is no state 'shot'", "did you mean 'shut'?"),
        ],
        id="next-state",
    ),
    pytest.param(
        LAST,
        "opne    | 0 -           | shut    | 0 0",
        [
            ("24:1 STATE-UNKNOWN there is no state 'opne'", "did you mean 'open'?"),
        ],
        id="state",
    ),
    pytest.param(
        LAST,
        "open    | 0 -           | -       | 0 0",
        [
            ("24:27 STATE-UNKNOWN there is no state '-'", "every row leads to one state"),
        ],
        id="next-state-any",
    ),
    pytest.param(
        LAST,
        "open    | 0             | shut    | 0 0",
        [
            (
                "24:40 ROW-LENGTH the row has 5 cells, expected 6: state | request limit | then | motor lamp",
                None,
            ),
        ],
        id="row-short",
    ),
    pytest.param(
        LAST,
        "open    | 0 | -         | shut    | 0 0",
        [
            (
                "24:15 ROW-BARS the bars part the row otherwise than the header: state | request limit | then | motor lamp",
                None,
            ),
        ],
        id="row-bars",
    ),
    pytest.param(
        LAST,
        "open    | 0 x           | shut    | - 0",
        [
            ("24:13 CELL x is for outputs, an input that may be either is -", "write -"),
            ("24:37 CELL - is for inputs, an output that may be either is x", "write x"),
        ],
        id="cells",
    ),
    pytest.param(
        LAST,
        "others  | 1 -           | shut    | 0 0",
        [
            (
                "24:11 OTHERS others stands for all inputs that no row lists, expected a bar behind it",
                "others | opening | …",
            ),
        ],
        id="others-and-inputs",
    ),
    pytest.param(
        LAST,
        "others  | shut    | 0 0\n- | others | open | 0 0",
        [
            ("25:1 OTHERS others stands twice: here and at d.toml:24:1", None),
        ],
        id="others-twice",
    ),
    pytest.param(
        "state   | request",
        "request",
        [
            (
                "18:1 HEADER the first column of a state table is state, with a bar behind it, not request limit",
                "state | request limit | then | motor",
            ),
        ],
        id="header-first",
    ),
    pytest.param(
        HEAD,
        "state   | request limit | next    | motor lamp",
        [
            (
                "18:1 HEADER expected the columns state, inputs, then (the next state) and outputs, with bars between these",
                "state | request limit | then | motor",
            ),
        ],
        id="header-then",
    ),
    pytest.param(
        HEAD,
        "state   | request gate  | then    | motor lampe",
        [
            (
                "18:19 HEADER 'gate' is the state of this table, the first column tells it",
                "leave the column out",
            ),
            (
                "18:43 NAME-UNKNOWN there is no output or inner signal 'lampe'",
                "did you mean 'lamp'?",
            ),
        ],
        id="header-names",
    ),
    pytest.param(
        HEAD,
        "state   | request request | then  | motor motor",
        [
            ("18:19 COLUMN-TWICE the column 'request' stands twice", None),
            ("18:43 COLUMN-TWICE the column 'motor' stands twice", None),
        ],
        id="header-twice",
    ),
    pytest.param(
        HEAD,
        "state   | request limit | then    | motor gate",
        [
            (
                "18:43 STATE-OUTPUT 'gate' is registered, but a state table gives outputs of the present state",
                "give the column to a signal without a register, and name that in the equation of gate",
            ),
        ],
        id="header-registered",
    ),
    pytest.param(
        HEAD,
        "state   | request motor | then    | motor limit",
        [
            (
                "18:19 NAME-ROLE 'motor' is an output, expected an input",
                "valid are: request, limit, clk, clear, gate",
            ),
            (
                "18:43 NAME-ROLE 'limit' is an input, expected an output or inner signal",
                "valid are: motor, lamp, gate",
            ),
        ],
        id="header-role",
    ),
    pytest.param(
        'start = "opening"',
        'start = "openning"',
        [
            ("13:9 STATE-UNKNOWN there is no state 'openning'", "did you mean 'opening'?"),
        ],
        id="start-unknown",
    ),
    pytest.param(
        'start = "opening"\n',
        "",
        [
            (
                "9:1 KEY-MISSING state_table[0] has no 'start'",
                'add start = "…", the state at power-up',
            ),
        ],
        id="start-missing",
    ),
    pytest.param(
        'unused = "start"\n',
        "",
        [
            (
                "15:1 UNUSED-CODES 1 code of 2 bits belongs to no state, and nothing says what happens there",
                'add unused = "start" (on to the state at power-up) or unused = "x" (whatever takes fewest terms, a standstill included)',
            ),
        ],
        id="unused-missing",
    ),
    pytest.param(
        'unused = "start"',
        'unused = "stop"',
        [
            ("16:10 VALUE 'unused' is the text 'stop', expected \"start\" or \"x\"", None),
        ],
        id="unused",
    ),
    pytest.param(
        '"opening", "open"]',
        '"opening", "shut"]',
        [
            ("12:30 NAME-TWICE the state 'shut' stands twice", None),
        ],
        id="state-twice",
    ),
    pytest.param(
        '"shut", "opening", "open"]',
        '"opening"]',
        [
            ("12:10 STATES-FEW 'states' names 1 state, expected at least two", None),
        ],
        id="states-few",
    ),
    pytest.param(
        '"open"]',
        '"open", "others", "x", "2a"]',
        [
            (
                "12:38 NAME-RESERVED 'others' is a reserved word and cannot name a state",
                "reserved are: in, not, and, or, xor, others",
            ),
            ("12:48 NAME-RESERVED 'x' has a meaning of its own and cannot name a state", None),
            (
                "12:53 NAME-SYNTAX '2a' is not a name: names are made of the letters A to Z and a to z, digits and underscores, and do not start with a digit",
                None,
            ),
        ],
        id="states-names",
    ),
    pytest.param(
        "codes = {",
        'codes = { shot = "10",',
        [
            ("15:11 STATE-UNKNOWN there is no state 'shot'", "did you mean 'shut'?"),
        ],
        id="code-unknown",
    ),
    pytest.param(
        'open = "11" }',
        'open = "01" }',
        [
            (
                "15:47 CODE-TWICE 'open' and 'opening' have the same code 01",
                "each state has a code of its own",
            ),
        ],
        id="code-twice",
    ),
    pytest.param(
        'open = "11" }',
        'open = "111" }',
        [
            (
                "15:47 CODE-WIDTH the code 111 has 3 bits, but that of shut has 2",
                "all codes have as many bits",
            ),
        ],
        id="code-width",
    ),
    pytest.param(
        ', open = "11" }',
        " }",
        [
            (
                "15:9 CODE-MISSING there is no code for open",
                'a table of codes, { shut = "00", open = "01" }',
            ),
        ],
        id="code-missing",
    ),
    pytest.param(
        '"11"',
        "11",
        [
            (
                "15:47 VALUE 'open' is the number 11, expected a code of 0 and 1 in quotes, such as \"01\"",
                None,
            ),
        ],
        id="code-number",
    ),
    pytest.param(
        CODES,
        'codes = "grey"',
        [
            (
                '15:9 VALUE \'codes\' is the text \'grey\', expected "free", "counting", "gray", "one-hot" or a table of codes, { shut = "00", open = "01" }',
                None,
            ),
        ],
        id="codes-style",
    ),
    pytest.param(
        CODES + '\nunused = "start"',
        'codes = "one-hot"',
        [
            (
                "15:1 UNUSED-CODES 5 codes of 3 bits belong to no state, and nothing says what happens there",
                'add unused = "start" (on to the state at power-up) or unused = "x" (whatever takes fewest terms, a standstill included)',
            ),
        ],
        id="codes-width",
    ),
    pytest.param(
        'of = "gate"',
        'of = "motor"',
        [
            (
                "10:6 STATE-WIDTH the states of 'motor' take 2 bits with these codes, but the output has 1 bit",
                "declare motor with 2 bits; it stands at d.toml:7:1",
            ),
        ],
        id="of-narrow",
    ),
    pytest.param(
        'of = "gate"',
        'of = "limit"',
        [
            (
                "10:6 NAME-TWICE 'limit' is declared as an input and by a state table",
                "the input is declared at d.toml:3:1; a state table declares its state itself, unless that is an output",
            ),
        ],
        id="of-input",
    ),
    pytest.param(
        'of = "gate"',
        'of = "ga te"',
        [
            (
                "10:6 NAME-SYNTAX 'ga te' is not a name: names are made of the letters A to Z and a to z, digits and underscores, and do not start with a digit",
                None,
            ),
        ],
        id="of-name",
    ),
    pytest.param(
        'of = "gate"\n',
        "",
        [
            ("9:1 KEY-MISSING state_table[0] has no 'of'", "add of = …"),
        ],
        id="of-missing",
    ),
    pytest.param(
        '"clk\'"',
        '"clk limit"',
        [
            (
                "11:9 NAME-SYNTAX 'clk limit' is not a name, expected name, bus[bit] or bus[high:low]",
                "a clock is the name of an input, with ' behind it for the falling edge",
            ),
        ],
        id="clock-name",
    ),
    pytest.param(
        '"clk\'"',
        '"motor"',
        [
            (
                "11:9 NAME-ROLE 'motor' is an output, expected an input",
                "a clock comes from an input; valid are: request, limit, clk, clear",
            ),
        ],
        id="clock-output",
    ),
    pytest.param(
        '"clk\'"',
        '"gate"',
        [
            (
                "11:9 NAME-ROLE 'gate' is an inner signal, expected an input",
                "a clock comes from an input; what a register holds does not come from outside; valid are: request, limit, clk, clear",
            ),
        ],
        id="clock-register",
    ),
    pytest.param(
        'clock = "clk\'"',
        'clk = "clk\'"',
        [
            ("11:1 KEY-UNKNOWN unknown key 'clk' in state_table[0]", "did you mean 'clock'?"),
        ],
        id="clock-misspelt",
    ),
    pytest.param(
        'clock = "clk\'"\n',
        "",
        [
            (
                "9:1 KEY-MISSING state_table[0] has no 'clock'",
                'add clock = "clk", the name of an input, or "clk\'" for its falling edge',
            ),
        ],
        id="clock-missing",
    ),
    pytest.param(
        'clock = "clk\'"',
        "clock = 1",
        [
            ("11:9 VALUE 'clock' is the number 1, expected text in quotes", None),
        ],
        id="clock-number",
    ),
    pytest.param(
        'reset = "clear"',
        'reset = "1"',
        [
            (
                "14:9 CONTROL-ALWAYS the reset holds gate for ever: the equation is 1 for every input",
                "mend the equation, or leave it out",
            ),
        ],
        id="reset-always",
    ),
    pytest.param(
        'reset = "clear"',
        'reset = "clear clear\'"',
        [
            (
                "14:9 CONTROL-NEVER gate is never reset: the equation is 0 for every input",
                "mend the equation, or leave it out",
            ),
        ],
        id="reset-never",
    ),
    pytest.param(
        'reset = "clear"',
        'preset = "clear"',
        [
            (
                "14:1 KEY-UNKNOWN unknown key 'preset' in state_table[0]",
                "a state table has a reset only, which leads to the state at power-up",
            ),
        ],
        id="preset",
    ),
    pytest.param(
        'reset = "clear"',
        'reset_when = "clock"',
        [
            (
                "14:1 CONTROL-MISSING 'reset_when' without 'reset'",
                'add reset = "…", an equation, or leave it out',
            ),
        ],
        id="reset-missing",
    ),
    pytest.param(
        'reset = "clear"',
        "never_too = true",
        [
            (
                "14:1 CONTROL-MISSING 'never_too' without 'reset': there is no reset that [never] could hold for",
                "leave it out",
            ),
        ],
        id="never-too",
    ),
    pytest.param(
        LAMP,
        LAMP + "gate = 3\n",
        [
            (
                "11:6 STATE-WIDTH the states of 'gate' take 2 bits with these codes, but the output has 3 bits",
                "declare gate with 2 bits; it stands at d.toml:9:1",
            ),
        ],
        id="declared-wider",
    ),
    pytest.param(
        LAMP,
        LAMP + 'gate = { bits = 2, register = "D" , clock = "clk" }\n',
        [
            (
                "9:20 STATE-REGISTER 'register' in [outputs.gate]: a state table says how gate is clocked",
                "leave it out here; the state table is at d.toml:10:1",
            ),
            (
                "9:37 STATE-REGISTER 'clock' in [outputs.gate]: a state table says how gate is clocked",
                "leave it out here; the state table is at d.toml:10:1",
            ),
        ],
        id="declared-clocked",
    ),
    pytest.param(
        LAMP,
        LAMP + '[inner]\ngate = 2\n[logic]\n"gate[0]" = "1"\n"gate[1]" = "1"\n',
        [
            (
                "15:6 NAME-TWICE 'gate' is declared as an inner signal and by a state table",
                "the inner signal is declared at d.toml:10:1; a state table declares its state itself, unless that is an output",
            ),
        ],
        id="declared-inner",
    ),
    pytest.param(
        LAMP,
        LAMP + '[logic]\n"gate[0]" = "limit"\n',
        [
            (
                "12:1 DESCRIBED-TWICE 'gate[0]' is described twice: here and at d.toml:10:1",
                "each signal is described once, over all sections",
            ),
        ],
        id="described-twice",
    ),
    pytest.param(
        LAMP,
        LAMP + '[never]\nwhen = "gate == 2"\n',
        [
            (
                "10:9 NAME-ROLE 'gate' is an inner signal, expected an input",
                "what a register holds does not come from outside; valid are: request, limit, clk, clear",
            ),
        ],
        id="never-names-it",
    ),
    pytest.param(
        ROWS,
        'rows = ""\n',
        [
            (
                "17:9 TABLE-EMPTY the table is empty, expected a header and rows",
                "the first row names the columns, inputs before outputs",
            ),
        ],
        id="rows-empty",
    ),
    pytest.param(
        ROWS,
        "",
        [
            ("9:1 KEY-MISSING state_table[0] has no 'rows'", "add rows = …"),
        ],
        id="rows-missing",
    ),
    pytest.param(
        ALL_ROWS,
        '"""\n',
        [
            ("18:1 TABLE-EMPTY the table has a header but no rows", None),
        ],
        id="rows-none",
    ),
    pytest.param(
        TABLE,
        TABLE * 2,
        [
            ("27:6 NAME-TWICE two state tables are of 'gate'", "the other is at d.toml:9:1"),
        ],
        id="table-twice",
    ),
    pytest.param(
        "request = 1",
        "request = 61",
        [
            (
                "10:6 TOO-MANY-INPUTS with the present value of gate there are 66 input bits, at most 64 are possible",
                None,
            ),
        ],
        id="too-many-inputs",
    ),
    pytest.param(
        BODY,
        'clock = "clock"\nstates = ["a", "b"]\nstart = "c"\nreset = "claer"\nrows = "state | then | motor\\na | d | 1\\nb | a | 2"\n',
        [
            ("11:9 NAME-UNKNOWN there is no input 'clock'", "did you mean 'clk'?"),
            ("13:9 STATE-UNKNOWN there is no state 'c'", "valid are: a, b"),
            ("14:10 NAME-UNKNOWN there is no input or output 'claer'", "did you mean 'clear'?"),
            ("15:35 STATE-UNKNOWN there is no state 'd'", "valid are: a, b"),
            ("15:50 NUMBER-RANGE 2 does not fit motor, which has 1 bit: expected 0 to 1", None),
        ],
        id="everything",
    ),
]


@pytest.mark.parametrize(("right", "wrong", "expected"), BAD)
def test_bad_table(right, wrong, expected):
    """Each pair is a slip in a sound design; every error of the file is found, and no more."""
    assert right in GATE
    with pytest.raises(InputError) as caught:
        read(GATE.replace(right, wrong, 1))
    found = [
        (f"{d.location.line}:{d.location.column} {d.code} {d.message}", d.hint)
        for d in caught.value.diagnostics
    ]
    assert found == expected


WARNED = [
    pytest.param(
        "opening | - 1           | open    | 0 1",
        "opening | - 1           | shut    | 0 1",
        ["12:30 STATE-UNREACHED nothing leads from 'opening', the state at power-up, to 'open'"],
        id="unreached",
    ),
    pytest.param(
        'reset = "clear"',
        'reset = "clear gate[1]"',
        [
            "14:9 RESET-DECODED the asynchronous reset of gate depends on present values "
            "(gate[1]): while these change one after another, it may act for a moment"
        ],
        id="reset-of-present-values",
    ),
    pytest.param(
        'reset = "clear"',
        'reset = "clear gate[1]"\nreset_when = "clock"',
        [],
        id="reset-at-the-clock",
    ),
    pytest.param(
        'reset = "clear"\n', "", ["5:1 INPUT-UNUSED no output depends on clear"], id="input-unused"
    ),
    pytest.param(
        "[[state_table]]",
        '[never]\nwhen = "request limit"\n[[state_table]]',
        [],
        id="impossible",
    ),
    pytest.param(
        "[[state_table]]",
        '[never]\nwhen = "limit"\n[[state_table]]',
        [
            "14:11 STATE-UNREACHED nothing leads from 'opening', the state at power-up, to 'shut'",
            "14:30 STATE-UNREACHED nothing leads from 'opening', the state at power-up, to 'open'",
            "23:1 ROW-IMPOSSIBLE this row is never used: all its inputs are impossible by [never]",
        ],
        id="impossible-row",
    ),
]


@pytest.mark.parametrize(("right", "doubtful", "expected"), WARNED)
def test_doubtful_table(right, doubtful, expected):
    assert right in GATE
    behaviour = read(GATE.replace(right, doubtful, 1))
    found = [
        f"{w.location.line}:{w.location.column} {w.code} {w.message}" for w in behaviour.warnings
    ]
    assert found == expected
