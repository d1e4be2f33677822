"""Programming table and sharing read back from their text, and counted by hand."""

from __future__ import annotations

import re
import tempfile
from pathlib import Path

import pytest
from hypothesis import given, settings
from report_designs import designs

from pla.behaviour.reader import read_behaviour
from pla.fitting.prices import alone_counts
from pla.logic.cubes import Cover, Cube
from pla.logic.minimize import minimize
from pla.logic.phases import Polarity
from pla.report.layout import broken
from pla.report.markdown import escaped, table_markdown
from pla.report.notation import groups_of, product
from pla.report.programming_table import programming_table
from pla.report.sharing import output_table, shares, term_table
from pla.report.table import Strip, Table
from pla.report.text import WIDTH, filled, one_line, table_text


def read(design):
    with tempfile.TemporaryDirectory() as folder:
        return design.read(Path(folder))


def cover_of(lines, n, m):
    """The cover that lines of a programming table say: number, inputs, outputs."""
    cubes = []
    for number, line in enumerate(lines, 1):
        term, *cells = line
        assert int(term) == number
        assert len(cells) == n + m
        inputs = "".join(cells[:n]).replace("–", "-")
        outputs = sum(1 << j for j, cell in enumerate(cells[n:]) if cell == "1")
        assert set(cells[n:]) <= {"1", "–"}
        cubes.append(Cube.parse(inputs, outputs))
    return Cover.of(n, cubes)


@settings(max_examples=40, deadline=None)
@given(designs())
def test_text_reads_back_as_the_cover(design):
    behaviour, minimum = read(design)
    n, m = len(behaviour.inputs), len(behaviour.outputs)
    lines = table_text(programming_table(behaviour, minimum)).split("\n")
    if not minimum.count:
        assert "There is no product term: every sum is 0." in lines
        return
    rule = [k for k, line in enumerate(lines) if set(line) == {"-"}][1]
    body = lines[rule + 1 :][: minimum.count]
    assert cover_of([line.split() for line in body], n, m) == minimum.cover
    senses = next(line.split() for line in lines[:rule] if line.split()[:1] == ["sum"])
    assert senses[1:] == ["C" if c else "T" for c in minimum.complemented]
    levels = next(line.split() for line in lines[:rule] if line.split()[:1] == ["active"])
    signals = (*behaviour.inputs, *behaviour.outputs)
    assert levels[1:] == ["L" if s.active_low else "H" for s in signals]


@settings(max_examples=40, deadline=None)
@given(designs())
def test_markdown_reads_back_as_the_cover(design):
    behaviour, minimum = read(design)
    n, m = len(behaviour.inputs), len(behaviour.outputs)
    lines = table_markdown(programming_table(behaviour, minimum)).split("\n")
    rows = [[c.strip() for c in line.strip("|").split("|")] for line in lines if line[:1] == "|"]
    if not minimum.count:
        assert not rows
        return
    assert rows[0] == ["term", *behaviour.input_names, *behaviour.output_names]
    body = [row for row in rows if row[0].isdigit()]
    assert cover_of(body, n, m) == minimum.cover


@settings(max_examples=40, deadline=None)
@given(designs())
def test_sharing_is_what_counting_gives(design):
    behaviour, minimum = read(design)
    terms = list(minimum.cover)
    for j, share in enumerate(shares(minimum.cover, len(behaviour.outputs))):
        own = [k for k, cube in enumerate(terms) if cube.outputs & 1 << j]
        assert share.terms == tuple(k + 1 for k in own)
        others = [k + 1 for k in own if terms[k].outputs == 1 << j]
        assert share.private == tuple(others)
    alone = alone_counts(behaviour.function, [Polarity()] * len(behaviour.outputs))
    table = output_table(behaviour, minimum, alone)
    for row, count in zip(table.rows, alone, strict=True):
        assert int(row[2]) == int(row[3]) + int(row[4])
        assert row[5] == str(count.terms)
    saved = sum(count.terms for count in alone) - minimum.count
    said = "sharing saves nothing." if not saved else f"sharing saves {saved}."
    assert table.remarks[1].endswith(said)
    literals = sum((c.ones | c.zeros).bit_count() for c in terms)
    links = sum(c.outputs.bit_count() for c in terms)
    numbers = [int(n) for n in re.findall(r"\d+", table.remarks[2])]
    assert numbers == [literals + links, literals, links]
    for number, row in enumerate(term_table(behaviour, minimum).rows):
        cube = terms[number]
        assert row[1] == product(cube, behaviour.input_names)
        assert int(row[2]) == (cube.ones | cube.zeros).bit_count()
        names = [n for j, n in enumerate(behaviour.output_names) if cube.outputs & 1 << j]
        assert (row[3], row[4]) == (str(len(names)), " ".join(names))


@settings(max_examples=25, deadline=None)
@given(designs())
def test_products_are_equations_with_the_same_meaning(design):
    """Every term is read back by the reader of equations."""
    behaviour, minimum = read(design)
    if not minimum.count:
        return
    inputs = "\n".join(f"{g.name} = {g.size}" for g in groups_of(behaviour.input_names))
    terms = [product(cube, behaviour.input_names) for cube in minimum.cover]
    outputs = "\n".join(f"t{k} = 1" for k in range(len(terms)))
    logic = "\n".join(f't{k} = "{text}"' for k, text in enumerate(terms))
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "terms.toml"
        path.write_text(f'name = "T"\n[inputs]\n{inputs}\n[outputs]\n{outputs}\n[logic]\n{logic}\n')
        back = read_behaviour(str(path)).function
    for k, cube in enumerate(minimum.cover):
        (only,) = back.on.of_output(k)
        assert (only.ones, only.zeros) == (cube.ones, cube.zeros)


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        pytest.param("a|b", r"a\|b", id="bar"),
        pytest.param("lamp_ready", "lamp_ready", id="underscore in a word"),
        pytest.param("_lamp_", r"\_lamp\_", id="underscore at an edge"),
        pytest.param("*x* <b> `c` \\", r"\*x\* \<b\> \`c\` " + "\\" * 2, id="markup"),
        pytest.param("step[3]", "step[3]", id="bit of a bus"),
        pytest.param("[a](b)", r"[a]\(b)", id="link"),
        pytest.param("a & b", "a &amp; b", id="entity"),
    ],
)
def test_markdown_shows_text_as_it_is(text, shown):
    assert escaped(text) == shown


def test_bars_in_cells_do_not_make_columns():
    table = Table("T|", ("a|b", "c"), (("1|2", "3"),), "lr", lead=("x|y",), remarks=("z|",))
    lines = table_markdown(table).split("\n")
    rows = [line for line in lines if line.startswith("|")]
    assert {len(re.findall(r"(?<!\\)\|", row)) for row in rows} == {3}
    assert r"x\|y" in lines
    assert r"## T\|" in lines


def wide_table(names, body, parts=None):
    columns = len(names)
    return Table(
        "Wide",
        ("term", *names),
        (("1", *body),),
        "r" + "l" * columns,
        under=(("pin", *map(str, range(1, columns + 1))),),
        strips=tuple(
            Strip(k, name, ("",), int(k > (parts or columns))) for k, name in enumerate(names, 1)
        ),
    )


def read_blocks(text):
    """Name, pin and cell of every column, by the place where its name stands and its line ends."""
    found = []
    for block in text.split("\n\n")[1:]:
        lines = block.split("\n")
        rule = next(k for k, line in enumerate(lines) if set(line) == {"-"})
        heads, (body,) = lines[:rule], lines[rule + 1 :]
        named = [
            (match.start(), match[0], k)
            for k, line in enumerate(heads)
            for match in re.finditer(r"[a-z]\w*", line)
            if match[0] not in ("pin", "term")
        ]
        for at, name, k in sorted(named):
            below = "".join(line[at : at + 1] for line in heads[k + 1 :]).replace(" ", "")
            found.append((name, int(below.replace("|", "")), body[at]))
    return found


@pytest.mark.parametrize(
    ("count", "length", "blocks"),
    [
        pytest.param(20, 9, 1, id="twenty"),
        pytest.param(20, 46, 1, id="long names"),
        pytest.param(20, 64, 2, id="names longer than half the width"),
        pytest.param(64, 9, 2, id="sixty-four"),
    ],
)
def test_names_in_wide_tables_are_horizontal_and_within_the_width(count, length, blocks):
    names = [f"s{'_' * (length - 3)}{k:02}" for k in range(count)]
    body = ("10–1" * count)[:count]
    text = table_text(wide_table(names, body, count - 4))
    assert max(map(len, text.split("\n"))) <= WIDTH
    expected = [(name, k, body[k - 1]) for k, name in enumerate(names, 1)]
    assert read_blocks(text) == expected
    assert text.count("term") == blocks


def test_names_stand_no_higher_than_they_need():
    long = "lamp_that_tells_the_operator_of_the_press_to_step_back_now"
    names = ["hatch", "b", "c", "guard", f"{long}_a", f"{long}_b", "bell"]
    expected = f"""\
            guard
            |    {long}_a
      hatch |    | {long}_b
      | b c |    | | bell
 pin  1 2 3 4    5 6 7
term
----------------------
   1  1 0 – 1    1 – 1"""
    assert table_text(wide_table(names, "10–11–1", 4)).split("\n\n")[1] == expected


def test_long_cells_are_broken_between_words():
    words = " ".join(f"addr[{k}]'" for k in range(40))
    table = Table("Long", ("n", "product", "of"), (("1", words, "rom"),), "rll", wrapped=(1, 2))
    text = table_text(table)
    assert max(map(len, text.split("\n"))) <= WIDTH
    assert [w for w in text.split() if w.startswith("addr")] == words.split()


@pytest.mark.parametrize(
    ("text", "lines"),
    [
        pytest.param("", [""], id="nothing"),
        pytest.param("one two three", ["one two", "three"], id="between words"),
        pytest.param("lamp_that_warns on", ["lamp_", "that_", "warns on"], id="behind underscores"),
        pytest.param("abcdefghijklmn", ["abcdefghi", "jklmn"], id="anywhere if there is no other"),
    ],
)
def test_long_names_are_broken_behind_underscores(text, lines):
    assert broken(text, 9) == lines


def test_repeated_cells_are_left_empty_only_under_their_like():
    rows = (("f", "x", "1"), ("f", "x", "1"), ("f", "y", "1"), ("g", "y", "1"))
    table = Table("R", ("a", "b", "c"), rows, "lll", repeated=2)
    assert list(table.shown_rows()) == [
        ("f", "x", "1"),
        ("", "", "1"),
        ("", "y", "1"),
        ("g", "y", "1"),
    ]


def test_titles_are_one_line_and_obey_no_control_character():
    assert one_line(" Kiln\n\tcar \x1b[31m") == "Kiln car \ufffd[31m"


def test_a_paragraph_is_broken_within_the_width():
    assert max(map(len, filled("word " * 100).split("\n"))) <= WIDTH


def test_no_term_at_all(tmp_path):
    path = tmp_path / "zero.toml"
    path.write_text('name = "Z"\n[inputs]\na = 1\n[outputs]\nf = 1\n[logic]\nf = "0"\n')
    behaviour = read_behaviour(str(path))
    minimum = minimize(behaviour.function, [Polarity(complement=False)])
    table = programming_table(behaviour, minimum)
    assert table.rows == ()
    assert table.remarks[0] == "There is no product term: every sum is 0."
    assert product(Cube(0, 0), behaviour.input_names) == "1"
