"""Truth tables in CSV files, as spreadsheets save them."""

from __future__ import annotations

import time

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from point_values import check, points, value

from pla.behaviour.reader import read_behaviour
from pla.errors import InputError

DESIGN = """\
[inputs]
step = 3
go = 1
[outputs]
code = 2
lamp = 1
[[cases]]
file = "rows.csv"
"""
ROWS = "step,go,code,lamp\n0,1,3,1\n1..5,-,0b0x,0\n0b11-,0,2,x\nothers,,x,1\n"


def saved(folder, content, design=DESIGN):
    (folder / "rows.csv").write_bytes(content.encode() if isinstance(content, str) else content)
    path = folder / "design.toml"
    path.write_text(design, encoding="utf-8")
    return str(path)


def high(step, go):
    if step == 0 and go:
        return 1
    if 1 <= step <= 5:
        return 0
    return 1 if step >= 6 and not go else "x"


def low(step, go):
    if step == 0 and go:
        return 1
    if 1 <= step <= 5:
        return "x"
    return 0 if step >= 6 and not go else "x"


def lamp(step, go):
    if 1 <= step <= 5:
        return 0
    return "x" if step >= 6 and not go else 1


@pytest.mark.parametrize(
    "content",
    [
        pytest.param(ROWS, id="commas"),
        pytest.param(ROWS.replace(",", ";"), id="semicolons"),
        pytest.param(ROWS.replace("\n", "\r\n"), id="crlf"),
        pytest.param(ROWS.replace("\n", "\r"), id="cr"),
        pytest.param(ROWS.replace(",", "\t"), id="tabs"),
        pytest.param(
            "\n".join("\t".join(f'"{c}"' for c in line.split(",")) for line in ROWS.split("\n")),
            id="tabs-quotes",
        ),
        pytest.param(ROWS.replace(",", ",\t"), id="tabs-as-blanks"),
        pytest.param("sep=;\n" + ROWS.replace(",", ";"), id="sep-semicolon"),
        pytest.param("\ufeffsep=,\r\n" + ROWS.replace("\n", "\r\n"), id="sep-comma"),
        pytest.param('"SEP=\t"\t\t\n' + ROWS.replace(",", "\t"), id="sep-tab"),
        pytest.param("\ufeff" + ROWS, id="byte-order-mark"),
        pytest.param(ROWS.rstrip("\n"), id="no-last-newline"),
        pytest.param(ROWS.replace("\n", "\n\n"), id="blank-lines"),
        pytest.param("\n\n" + ROWS, id="blank-lines-first"),
        pytest.param(ROWS.replace("\n", "\n,,,\n"), id="empty-rows"),
        pytest.param(ROWS.replace("\n", ",,\n"), id="empty-columns"),
        pytest.param(ROWS.replace(",", " , "), id="blanks"),
        pytest.param(ROWS.replace("others,,", "others,-,"), id="others-dash"),
        pytest.param(
            "\n".join(
                ",".join(f'"{c}"' for c in line.split(",")) for line in ROWS.split("\n")[:-1]
            ),
            id="quotes",
        ),
        pytest.param(
            "step,lamp,code\n".replace("step", "go,step").replace("lamp,code", "code,lamp")
            + "1,0,3,1\n-,1..5,0b0x,0\n0,0b11-,2,x\nothers,,x,1\n",
            id="other-order",
        ),
    ],
)
def test_variants(tmp_path, content):
    behaviour = read_behaviour(saved(tmp_path, content))
    check(behaviour, {"code[1]": high, "code[0]": low, "lamp": lamp})
    assert behaviour.outputs[0].described.file == str(tmp_path / "rows.csv")


@pytest.mark.parametrize(
    ("content", "expected"),
    [
        pytest.param("", (1, 1, "TABLE-EMPTY", "the table is empty"), id="empty"),
        pytest.param("\n ;;\n", (1, 1, "TABLE-EMPTY", "the table is empty"), id="blank"),
        pytest.param("step,go,code,lamp\n", (1, 1, "TABLE-EMPTY", "no rows"), id="no-rows"),
        pytest.param(
            "step;go,code;lamp\n", (1, 1, "CSV-SEPARATOR", "commas and semicolons"), id="separators"
        ),
        pytest.param(
            "step,go,code,lamp\n0,1,3\n", (2, 6, "ROW-LENGTH", "3 cells, expected 4"), id="short"
        ),
        pytest.param(
            "step,go,code,lamp\n0,1,3,1,1\n", (2, 9, "ROW-LENGTH", "5 cells, expected 4"), id="long"
        ),
        pytest.param(
            'step,go,code,lamp\n"0",  "1", 4,1\n',
            (2, 12, "NUMBER-RANGE", "4 does not fit code"),
            id="value",
        ),
        pytest.param(
            "step,go,code,lamp\r\n0,1,3,1\r\n\r\n011,1,1,1\r\n",
            (4, 1, "NUMBER", "leading zero"),
            id="leading-zero",
        ),
        pytest.param(
            "step,go,code,lamp\n0,,3,1\n",
            (2, 3, "CELL-EMPTY", "the cell of go is empty"),
            id="cell",
        ),
        pytest.param(
            "step;go;kode;lamp\n0;1;3;1\n",
            (1, 9, "NAME-UNKNOWN", "there is no input or output 'kode'"),
            id="column",
        ),
        pytest.param(
            "step,,code,lamp\n0,1,3,1\n", (1, 6, "HEADER", "a column has no name"), id="no-name"
        ),
        pytest.param(
            "step,go,code,lamp\n0,1,3,1\nothers,1,x,x\n",
            (3, 8, "OTHERS", "expected an empty cell, found '1'"),
            id="others",
        ),
        pytest.param(
            'step,go,code,lamp\n0,1,3,"1"x\n',
            (2, 1, "CSV-SYNTAX", "something stands between a closing quote and the next comma"),
            id="quote",
        ),
        pytest.param(
            'sep=;\n\nstep;go;code;lamp\n0;1;3;"1"x\n',
            (4, 1, "CSV-SYNTAX", "something stands between a closing quote and the next semicolon"),
            id="quote-behind-sep",
        ),
        pytest.param(
            'step,go,code,lamp\n0,1,3,"1\n',
            (2, 1, "CSV-SYNTAX", "a quote is not closed before the end of the file"),
            id="open",
        ),
        pytest.param(
            'step,go,code,lamp\n0,1,3,"' + "1" * 200_000,
            (2, 1, "CSV-SYNTAX", "a cell has more than 131072 characters, is a quote not closed?"),
            id="long-cell",
        ),
        pytest.param(
            "sep=|\nstep|go|code|lamp\n",
            (1, 1, "CSV-SEPARATOR", "the separator '|' is not supported, expected a comma"),
            id="sep-other",
        ),
        pytest.param("sep=;\n", (1, 1, "TABLE-EMPTY", "the table is empty"), id="sep-alone"),
        pytest.param(
            "step\tgo\tcode\tlamp\n0\t\t3\t1\n",
            (2, 3, "CELL-EMPTY", "the cell of go is empty"),
            id="tabs-cell",
        ),
        pytest.param(
            "step,go,code,lamp\r0,1,3,1\r011,1,1,1\r",
            (3, 1, "NUMBER", "leading zero"),
            id="cr-line",
        ),
        pytest.param(
            "step,go,|,code,lamp\n0,1,|,3,1\n",
            (1, 9, "HEADER", "'|' is not the name of a column: a CSV file has no bars, its first"),
            id="bar-column",
        ),
        pytest.param(
            "step go | code lamp\n0 1 | 3 1\n",
            (1, 1, "HEADER", "'step go | code lamp' is not the name of a column: a CSV file has"),
            id="inline-layout",
        ),
        pytest.param(
            "step go code lamp\n0 1 3 1\n",
            (1, 1, "HEADER", "'step go code lamp' is not the name of a column"),
            id="blanks-for-separators",
        ),
        pytest.param(
            "step,go,code,lamp\n0,1,3,1\nOthers,,x,x\n",
            (3, 1, "OTHERS", "'Others' does not start a row"),
            id="others-capital",
        ),
        pytest.param(
            "step,go,code,lamp\n0,1,3,1\n0,-,2,1\nothers,,x,x\n",
            (3, 1, "ROW-CONFLICT", "'code[0]' gets two values for step = 0, go = 1"),
            id="conflict",
        ),
        pytest.param(
            "step,go,code,lamp\n0,1,3,1\n1..7,-,2,1\n",
            (1, 1, "OPEN-INPUTS", "1 possible input combination is not listed"),
            id="open-inputs",
        ),
        pytest.param(
            b"step,go,code,lamp\n0,1,3,\xe9\n",
            (2, 7, "FILE-NOT-UTF8", "not UTF-8 text: byte 0xE9 at byte offset 24"),
            id="latin-1",
        ),
        pytest.param(
            "step,go,code,lamp\n".encode("utf-16"),
            (1, 1, "FILE-NOT-UTF8", "not UTF-8 text: byte 0xFF at byte offset 0"),
            id="utf-16",
        ),
    ],
)
def test_errors_stand_at_the_cell(tmp_path, content, expected):
    path = saved(tmp_path, content)
    with pytest.raises(InputError) as caught:
        read_behaviour(path)
    (found,) = caught.value.diagnostics
    line, column, code, message = expected
    assert (found.code, found.location.file) == (code, str(tmp_path / "rows.csv"))
    assert (found.location.line, found.location.column) == (line, column)
    assert message in found.message


@pytest.mark.parametrize("name", ["nowhere.csv", ".", "a\\u0000b"])
def test_a_file_that_cannot_be_read_is_reported_where_it_is_named(tmp_path, name):
    path = saved(tmp_path, ROWS, DESIGN.replace("rows.csv", name))
    with pytest.raises(InputError) as caught:
        read_behaviour(path)
    (found,) = caught.value.diagnostics
    assert (found.location.file, found.location.line, found.location.column) == (path, 8, 8)


@settings(max_examples=60, deadline=None)
@given(st.permutations(range(16)), st.lists(st.sampled_from("01x"), min_size=16, max_size=16))
def test_random_rows_in_any_order(tmp_path_factory, order, wanted):
    folder = tmp_path_factory.mktemp("rows")
    rows = "".join(f"{n >> 1},{n & 1},x,{wanted[n]}\n" for n in order)
    behaviour = read_behaviour(saved(folder, "step,go,code,lamp\n" + rows))
    for point, signals in points(behaviour):
        sign = wanted[signals["step"] << 1 | signals["go"]]
        assert str(value(behaviour, point, 2)) == sign


def test_a_long_table_is_read_in_seconds(tmp_path):
    """16 inputs, all 65,536 rows, 8 outputs."""
    outputs = "".join(f"f{k} = 1\n" for k in range(8))
    header = "a," + ",".join(f"f{k}" for k in range(8))
    rows = [f"{x}," + ",".join(str(hash_bit(x, k)) for k in range(8)) for x in range(65536)]
    path = saved(
        tmp_path,
        "\n".join((header, *rows)),
        f'[inputs]\na = 16\n[outputs]\n{outputs}[[cases]]\nfile = "rows.csv"\n',
    )
    started = time.process_time()
    behaviour = read_behaviour(path)
    assert time.process_time() - started < 20  # about 3 s of processor time
    for x in range(0, 65536, 257):
        point = int(f"{x:016b}"[::-1], 2)
        expected = sum(hash_bit(x, k) << k for k in range(8))
        assert behaviour.function.on.value_at(point) == expected
        assert behaviour.function.off.value_at(point) == 255 & ~expected


def hash_bit(x, k):
    return (x * 2654435761 >> 7 + 2 * k) & 1
