"""TOML with places: every key and value is found where a search of the text finds it."""

from __future__ import annotations

import tomllib

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pla.errors import Diagnostics, InputError
from pla.tomlfile import Section, parse_toml, read_toml
from pla.tomlindex import decode_string
from pla.wording import did_you_mean

SAMPLE = '''\
name = "x"
a.b.'c d' = [1, 2, {x = 3, y = ["p", "q..3"]}]  # [comment]
[inputs]
  step = 4
"q r" = """
ab\\
   cd\\u0041 ""x"""""
lit = \'\'\'
one
 two'three\'\'\'
[[cases]]
rows = 1
[cases.sub]
z = 1
[[cases]]
rows = 2
[a.e]
'''


@pytest.mark.parametrize(
    ("path", "key", "value"),
    [
        (("name",), (1, 1), (1, 8)),
        (("a",), (2, 1), (2, 1)),
        (("a", "b"), (2, 3), (2, 3)),
        (("a", "b", "c d"), (2, 5), (2, 13)),
        (("a", "b", "c d", 1), (2, 17), (2, 17)),
        (("a", "b", "c d", 2, "x"), (2, 21), (2, 25)),
        (("a", "b", "c d", 2, "y", 1), (2, 38), (2, 38)),
        (("inputs",), (3, 2), (3, 1)),
        (("inputs", "step"), (4, 3), (4, 10)),
        (("inputs", "q r"), (5, 1), (5, 9)),
        (("inputs", "lit"), (8, 1), (8, 7)),
        (("cases",), (11, 3), (11, 1)),
        (("cases", 0, "rows"), (12, 1), (12, 8)),
        (("cases", 0, "sub"), (13, 8), (13, 1)),
        (("cases", 0, "sub", "z"), (14, 1), (14, 5)),
        (("cases", 1), (15, 3), (15, 1)),
        (("cases", 1, "rows"), (16, 1), (16, 8)),
        (("a", "e"), (17, 4), (17, 1)),
        (("inputs", "step", "nowhere"), (4, 3), (4, 10)),
        ((), (1, 1), (1, 1)),
    ],
)
def test_places(path, key, value):
    file = parse_toml(SAMPLE, "s.toml")
    assert (file.key_at(path).line, file.key_at(path).column) == key
    assert (file.at(path).line, file.at(path).column) == value
    assert file.at(path).source == SAMPLE.split("\n")[value[0] - 1]


@pytest.mark.parametrize(
    ("path", "offset", "place"),
    [
        (("name",), 0, (1, 9)),
        (("inputs", "q r"), 0, (6, 1)),
        (("inputs", "q r"), 2, (7, 4)),
        (("inputs", "q r"), 4, (7, 6)),
        (("inputs", "q r"), 5, (7, 12)),
        (("inputs", "lit"), 0, (9, 1)),
        (("inputs", "lit"), 4, (10, 1)),
        (("inputs", "lit"), 99, (10, 11)),
        (("inputs", "step"), 5, (4, 10)),
    ],
)
def test_places_inside_strings(path, offset, place):
    at = parse_toml(SAMPLE, "s.toml").inside(path, offset)
    assert (at.line, at.column) == place


def test_line_ends_and_byte_order_mark_do_not_move_places(tmp_path):
    plain = parse_toml(SAMPLE, "s.toml")
    path = tmp_path / "s.toml"
    path.write_bytes(b"\xef\xbb\xbf" + SAMPLE.replace("\n", "\r\n").encode())
    saved = read_toml(str(path))
    assert saved.data == plain.data
    assert saved.lines == plain.lines
    for key in plain.index.values:
        assert (saved.at(key).line, saved.at(key).column) == (
            plain.at(key).line,
            plain.at(key).column,
        )


@pytest.mark.parametrize(
    ("text", "place", "message"),
    [
        ("a = ", (1, 5), "invalid value before the end of the file"),
        ("a = [1\n", (2, 1), "unclosed array before the end of the file"),
        ("a = 1\nx y = 1", (2, 3), "expected '=' after a key"),
        ("a = 1\nb = 2\na.b = 2\n", (3, 8), "cannot overwrite a value"),
        ('a = "abc\n"', (1, 9), "illegal character '\\n'"),
        (
            "a = {b = 1}\n[a]\nc = 1\n",
            (2, 2),
            "'a' is given twice: as a section here, and with a value at s.toml:1:1",
        ),
        ("b = 1\r\na = 1\rc = 2\r", (2, 6), "a carriage return without a line feed, expected"),
        ("a = " + "[" * 5000, (None, None), "brackets are nested too deeply"),
        ("a = " + "9" * 5000, (None, None), "a number with too many digits"),
    ],
)
def test_syntax_errors(text, place, message):
    with pytest.raises(InputError) as caught:
        parse_toml(text, "s.toml")
    (found,) = caught.value.diagnostics
    assert found.code == "TOML-SYNTAX"
    assert (found.location.line, found.location.column) == place
    assert message in found.message
    assert "(at" not in found.message


@pytest.mark.parametrize(
    ("text", "place", "message", "hint"),
    [
        ("a = 1\n  a = 2\n", (2, 3), "key 'a' stands twice: here and at s.toml:1:1", "a = 1"),
        ("a = 1\na = 2", (2, 1), "key 'a' stands twice: here and at s.toml:1:1", "a = 1"),
        (
            "[x]\n'b c' = [1,\n2]\n[[y]]\n'b c' = 1\n[[y]]\n'b c' = 1\n\"b c\" = {d = 1}\n",
            (8, 1),
            "key 'b c' stands twice: here and at s.toml:7:1",
            "'b c' = 1",
        ),
        (
            "a = { b = 1, b = { c = 2 } }\n",
            (1, 14),
            "key 'b' stands twice: here and at s.toml:1:7",
            "a = { b = 1, b = { c = 2 } }",
        ),
        ("x.a = {b = 1}\nx.a = {b = 1}", (2, 3), "'a' stands twice: here and at s.toml:1:3", "x.a"),
        ("[a]\nx = 1\n[b]\n[a]\n", (4, 2), "section [a] stands twice: here and at s.toml:1:2", ""),
        ("[a.b]\nx = 1\n[a]\n[ a . b ]\n", (4, 7), "section [a.b] stands twice: here and at", ""),
    ],
)
def test_what_stands_twice_is_shown_with_the_first(text, place, message, hint):
    with pytest.raises(InputError) as caught:
        parse_toml(text, "s.toml")
    (found,) = caught.value.diagnostics
    assert (found.code, found.location.line, found.location.column) == ("TOML-SYNTAX", *place)
    assert message in found.message
    assert found.hint.startswith(f"the other is: {hint}" if hint else "put all its lines under")


def test_bits_as_keys_get_a_hint():
    with pytest.raises(InputError) as caught:
        parse_toml("[logic]\nstep[0] = 'a'\n", "s.toml")
    assert caught.value.diagnostics[0].hint == 'write the name of a bit in quotes: "step[0]" = …'


@pytest.mark.parametrize(
    ("content", "place", "message"),
    [
        (b"a = 1\nb = '\xff'\n", (2, 6), "byte 0xFF at byte offset 11"),
        (b"\xef\xbb\xbfa = '\xff'\n", (1, 6), "byte 0xFF at byte offset 8"),
        ("é = '".encode() + b"\x80'\n", (1, 6), "byte 0x80 at byte offset 6"),
        ("a = 1".encode("utf-16"), (1, 1), "byte 0xFF at byte offset 0"),
    ],
)
def test_not_utf8(tmp_path, content, place, message):
    path = tmp_path / "s.toml"
    path.write_bytes(content)
    with pytest.raises(InputError) as caught:
        read_toml(str(path))
    (found,) = caught.value.diagnostics
    assert (found.code, found.location.line, found.location.column) == ("FILE-NOT-UTF8", *place)
    assert message in found.message
    assert found.hint


@pytest.mark.parametrize(("name", "code"), [("none.toml", "NO-SUCH-FILE"), ("", "NOT-A-FILE")])
def test_no_file(tmp_path, name, code):
    with pytest.raises(InputError) as caught:
        read_toml(str(tmp_path / name))
    assert caught.value.diagnostics[0].code == code


# Every key, number and string occurs once in a generated text, so a search finds its place.


@st.composite
def documents(draw):
    count = 0

    def fresh(prefix):
        nonlocal count
        count += 1
        return f"{prefix}{1000 + count}"

    def key():
        name = fresh("k")
        return draw(st.sampled_from([name, f'"{name}"', f"'{name}'"]))

    def keys():
        gap = draw(st.sampled_from(["", " "]))
        return f"{gap}.{gap}".join(key() for _ in range(draw(st.integers(1, 3))))

    def blank():
        return draw(st.sampled_from(["", " ", "\n", " # ] } ' \"\n", "\t\n\n  "]))

    def scalar():
        kind = draw(st.sampled_from(["number", "date", '"', "'", '"""', "'''", '"""\n', "float"]))
        if kind == "number":
            return fresh("")
        if kind == "float":
            return fresh("") + ".5e3"
        if kind == "date":
            return f"{fresh('')}-05-27 07:32:00"
        extra = {'"': '# [\\"\\\\\\u00e9 ]', "'": '# ["\\'}.get(kind, "[\n'x # \" ]")
        quote = kind.rstrip("\n")
        return f"{kind}{fresh('s')}{extra}{quote}"

    def value(depth):
        kind = draw(st.sampled_from(["scalar", "array", "table"] if depth else ["scalar"]))
        if kind == "scalar":
            return scalar()
        inner = range(draw(st.integers(0, 3)))
        if kind == "table":
            pairs = ", ".join(f"{keys()} = {value(depth - 1)}" for _ in inner)
            return f"{{ {pairs} }}"
        elements = "".join(f"{blank()}{value(depth - 1)}{blank()}," for _ in inner)
        return f"[{elements}{blank()}]"

    lines = [f"{keys()} = {value(2)}" for _ in range(draw(st.integers(0, 3)))]
    for _ in range(draw(st.integers(0, 3))):
        name = keys()
        double = draw(st.booleans())
        for _ in range(draw(st.integers(1, 3)) if double else 1):
            lines.append(f"[[{name}]]" if double else f"[ {name} ]  # table")
            lines += [f"{keys()} = {value(2)}" for _ in range(draw(st.integers(0, 2)))]
            if double and draw(st.booleans()):
                lines += [f"[{name}.{keys()}]", f"{keys()}={value(1)}"]
    return "\n".join(lines) + "\n"


def leaves(data, path=()):
    if isinstance(data, dict):
        for key, value in data.items():
            yield (*path, key), value
            yield from leaves(value, (*path, key))
    elif isinstance(data, list):
        for index, value in enumerate(data):
            yield (*path, index), value
            yield from leaves(value, (*path, index))


def place_of(text, offset):
    before = text[:offset]
    return before.count("\n") + 1, offset - (before.rfind("\n") + 1) + 1


@settings(max_examples=150, deadline=None)
@given(documents())
def test_places_in_random_documents(text):
    file = parse_toml(text, "s.toml")
    assert file.data == tomllib.loads(text)
    for path, value in leaves(file.data):
        if isinstance(path[-1], str):
            offset = text.index(path[-1])
            offset -= text[offset - 1] in "\"'"
            at = file.key_at(path)
            assert (at.line, at.column) == place_of(text, offset), path
        at = file.at(path)
        if isinstance(value, str):
            offset = text.index(value[:5])
            inside = file.inside(path, 0)
            assert (inside.line, inside.column) == place_of(text, offset)
            opening = text[:offset].rstrip("\n")
            offset = len(opening.rstrip("\"'"))
            assert (at.line, at.column) == place_of(text, offset)
        elif not isinstance(value, dict | list):
            word = str(getattr(value, "year", value))[:4]
            assert (at.line, at.column) == place_of(text, text.index(word)), path


ESCAPED = {
    "\n": "\\n",
    "\t": "\\t",
    '"': '\\"',
    "\\": "\\\\",
    "\x07": "\\u0007",
    "é": "\\U000000e9",
}


@st.composite
def literals(draw):
    kind = draw(st.sampled_from(['"', "'", '"""', "'''"]))
    content = draw(st.text(alphabet="ab é'\"\\\n\t\x07", max_size=12))
    if kind[0] == "'":
        content = content.replace("'", "").replace("\x07", "")
        return kind + (content if len(kind) == 3 else content.replace("\n", "")) + kind
    pieces = []
    for character in content:
        plain = character not in '"\\\x07' and not (character == "\n" and len(kind) == 1)
        pieces.append(
            character if plain and draw(st.booleans()) else ESCAPED.get(character, character)
        )
        if len(kind) == 3 and draw(st.integers(0, 5)) == 0:
            pieces.append("\\ \n  \n ")
    return kind + "".join(pieces) + kind


@settings(max_examples=200, deadline=None)
@given(literals())
def test_strings_are_decoded_as_the_parser_does(literal):
    text = f"a = {literal} # end"
    value, offsets = decode_string(text, 4)
    assert value == tomllib.loads(text)["a"]
    assert len(offsets) == len(value) + 1
    for character, offset in zip(value, offsets, strict=False):
        assert text[offset] in (character, "\\")
    assert text[offsets[-1]] == literal[-1]


def section(text):
    diagnostics = Diagnostics()
    return Section.top(parse_toml(text, "s.toml"), diagnostics), diagnostics


def said(diagnostics):
    return [(d.location.line, d.location.column, d.message) for d in diagnostics.found]


@pytest.mark.parametrize(
    ("line", "take", "value", "message"),
    [
        ("k = 3", lambda s: s.integer("k", low=1, high=3), 3, None),
        ("k = 4", lambda s: s.integer("k", low=1, high=3), None, "a whole number from 1 to 3"),
        ("k = true", lambda s: s.integer("k"), None, "'k' is true, expected a whole number"),
        ("k = 1.0", lambda s: s.integer("k", default=7), 7, "'k' is the number 1.0"),
        ("k = 0", lambda s: s.integer("k", low=1), None, "a whole number of at least 1"),
        ("k = 9", lambda s: s.integer("k", high=8), None, "a whole number of at most 8"),
        ("j = 0", lambda s: s.integer("k", default=5), 5, None),
        ("k = 'x'", lambda s: s.text("k"), "x", None),
        ("k = 1", lambda s: s.text("k", default="d"), "d", "'k' is the number 1, expected text"),
        ("k = 'b'", lambda s: s.choice("k", ("a", "b")), "b", None),
        (
            "k = 'c'",
            lambda s: s.choice("k", ("a", "b")),
            None,
            'the text \'c\', expected "a" or "b"',
        ),
        ("k = true", lambda s: s.choice("k", (0, 1)), None, "'k' is true, expected 0 or 1"),
        ("k = 1", lambda s: s.choice("k", (0, 1, "x")), 1, None),
        ("k = false", lambda s: s.flag("k"), False, None),
        ("k = 0", lambda s: s.flag("k", default=True), True, "expected true or false"),
        ("k = [1, 2]", lambda s: s.integers("k"), [1, 2], None),
        ("k = 1", lambda s: s.integers("k"), None, "'k' is the number 1, expected a list"),
        ("k = ['a']", lambda s: s.texts("k"), ["a"], None),
        ("k = {}", lambda s: s.texts("k"), None, "'k' is a table, expected a list"),
        (
            "k = 1979-05-27",
            lambda s: s.section("k"),
            None,
            "'k' is a date or time, expected a table",
        ),
    ],
)
def test_values(line, take, value, message):
    top, diagnostics = section(line)
    assert take(top) == value
    if message is None:
        assert diagnostics.found == []
    else:
        (found,) = said(diagnostics)
        assert found[:2] == (1, 5)
        assert message in found[2]


def test_elements_are_reported_one_by_one():
    top, diagnostics = section("k = [1, true,\n 9]\nt = [1, 'a']")
    assert top.integers("k", low=0, high=5) is None
    assert top.texts("t") is None
    assert [(line, column) for line, column, _ in said(diagnostics)] == [(1, 9), (2, 2), (3, 6)]


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        ("7", [range(7, 8)]),
        ("'0x10'", [range(16, 17)]),
        ("[1, '3..5', '0b10..0x3']", [range(1, 2), range(3, 6), range(2, 4)]),
        ("'5..3'", "the range '5..3' runs backwards"),
        ("'a..b'", "'a..b' in 'k' is not a range, expected a whole number from 0 to 20"),
        ("'07'", "a decimal number with a leading zero"),
        ("21", "'k' is the number 21"),
        ("'15..21'", "'k' is the text '15..21'"),
        ("-1", "'k' is the number -1"),
        ("1.5", "'k' is the number 1.5, expected a whole number from 0 to 20, or a range"),
        ("''", "'' in 'k' is not a number"),
        ("0x15", "'k' is the number 0x15, expected a whole number from 0 to 0x14, or a range"),
        ("'0x15'", "'k' is the text '0x15', expected a whole number from 0 to 0x14, or a range"),
        ("'1A'", "'1A' in 'k' is not a number, expected a whole number from 0 to 0x14, or a range"),
    ],
)
def test_ranges(value, expected):
    top, diagnostics = section(f"k = {value}")
    found = top.ranges("k", low=0, high=20)
    if isinstance(expected, str):
        assert found is None
        ((line, column, message),) = said(diagnostics)
        assert (line, column) == (1, 5)
        assert expected in message
    else:
        assert [span for span, _ in found] == expected


@pytest.mark.parametrize(
    ("value", "hint"),
    [
        ("'0x5..0x3'", 'write "0x3..0x5"'),
        ("'5 .. 3'", 'write "3..5"'),
        ("'1A..1F'", 'did you mean "0x1A..0x1F"?'),
        ("'0x1A-0x1F'", 'a range is written "0x1A..0x1F"'),
        ("['1A']", 'did you mean "0x1A"?'),
        ("'07'", 'did you mean "7"?'),
        ("'all'", None),
    ],
)
def test_ranges_in_another_notation_get_a_hint(value, hint):
    top, diagnostics = section(f"k = {value}")
    assert top.ranges("k", low=0, high=20) is None
    assert [d.hint for d in diagnostics.found] == [hint]


def test_missing_and_unknown_keys():
    top, diagnostics = section("[links]\nblank = 0\nconected = 0\n")
    links = top.section("links")
    assert links.integer("connected", required=True) is None
    links.unknown_keys(("blank", "connected"))
    assert [
        (d.code, d.location.line, d.location.column, d.message, d.hint) for d in diagnostics.found
    ] == [
        ("KEY-MISSING", 1, 1, "[links] has no 'connected'", "add connected = …"),
        ("KEY-UNKNOWN", 3, 1, "unknown key 'conected' in [links]", "did you mean 'connected'?"),
    ]


def test_lists_of_tables():
    top, diagnostics = section("[[a]]\nx = 1\n[[a]]\n[b]\nc = [{ x = 2 }, 3]\n")
    assert [s.title for s in top.sections("a")] == ["a[0]", "a[1]"]
    assert top.sections("none") == []
    assert top.sections("b") == []
    (inner,) = top.section("b").sections("c")
    assert inner.title == "b.c[0]"
    assert inner.integer("x") == 2
    assert list(inner) == ["x"]
    assert [d.hint for d in diagnostics.found] == ["write [[b]] with two brackets", None]


def test_did_you_mean():
    assert did_you_mean("conected", ["blank", "connected"]) == "did you mean 'connected'?"
    assert did_you_mean("zzz", ["blank", "connected"]) == "valid are: blank, connected"
    assert did_you_mean("zzz", []) == "there is none to choose from"
    assert did_you_mean("zzz", [f"k{i}" for i in range(25)]).endswith("k19 and 5 more")
