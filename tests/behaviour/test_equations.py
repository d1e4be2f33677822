"""Equations: binding, every construct, and random ones against a tiny evaluator."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from point_values import points, read, value

from pla.behaviour.problem import Problem
from pla.behaviour.syntax import Comparison, Constant, Gate, Reference, parse_equation

HEAD = '[inputs]\na = 1\nb = 1\nc = 1\nn = 3\np = "4:2"\n[outputs]\nf = 1\n[logic]\n'
NUMBERS = {"n": 8, "p": 32, "n[2:1]": 4, "n[0:0]": 2, "p[4:3]": 4}


def shown(tree):
    """A tree with every operator in brackets: how the program understood the text."""
    if isinstance(tree, Constant):
        return tree.number.text
    if isinstance(tree, Comparison):
        last = f"..{tree.last.text}" if tree.operator == "in" else ""
        return f"[{shown(tree.reference)} {tree.operator} {tree.first.text}{last}]"
    if isinstance(tree, Reference):
        part = ":".join(number.text for number in (tree.high, tree.low) if number)
        return f"{tree.name}[{part}]" if part else tree.name
    assert isinstance(tree, Gate)
    return f"[{' '.join((tree.operator, *map(shown, tree.items)))}]"


@pytest.mark.parametrize(
    ("text", "understood"),
    [
        pytest.param("a b + c", "[or [and a b] c]", id="and-before-or"),
        pytest.param("a + b xor c d", "[or a [xor b [and c d]]]", id="or-xor-and"),
        pytest.param("a ⊕ b + c", "[or [xor a b] c]", id="xor-before-or"),
        pytest.param("a or b and c xor d", "[or a [xor [and b c] d]]", id="words"),
        pytest.param("a · b · c", "[and a b c]", id="dots"),
        pytest.param("a b and c · d", "[and a b c d]", id="all-ands"),
        pytest.param("not a b", "[and [not a] b]", id="not-before-and"),
        pytest.param("not not a", "[not [not a]]", id="not-not"),
        pytest.param("not a'", "[not [not a]]", id="prime-before-not"),
        pytest.param("not n == 3 a", "[and [not [n == 3]] a]", id="comparison-before-not"),
        pytest.param("n == 3 + n != 4", "[or [n == 3] [n != 4]]", id="comparison-before-or"),
        pytest.param("n[1]' n[2:1] >= 0b10", "[and [not n[1]] [n[2:1] >= 0b10]]", id="bit-part"),
        pytest.param("(a + b)' c", "[and [not [or a b]] c]", id="prime-on-parentheses"),
        pytest.param("(a)(b)", "[and a b]", id="parentheses-side-by-side"),
        pytest.param("n in 2..0x5 xor a", "[xor [n in 2..0x5] a]", id="in"),
        pytest.param("n<3 a", "[and [n < 3] a]", id="no-blanks"),
        pytest.param("inner nota order xora", "[and inner nota order xora]", id="words-in-names"),
        pytest.param("1 a + 0", "[or [and 1 a] 0]", id="constants"),
        pytest.param(" a\n\t+\n b ", "[or a b]", id="lines"),
    ],
)
def test_binding(text, understood):
    assert shown(parse_equation(text)) == understood


@pytest.mark.parametrize(
    ("text", "offset", "message"),
    [
        pytest.param("a +", 3, "the equation ends, expected a name, 0, 1, ( or not", id="operand"),
        pytest.param("a)", 1, "found ')', expected the end", id="closing"),
        pytest.param("(a", 2, "the equation ends, expected )", id="end-in-parentheses"),
        pytest.param("n == ", 4, "the equation ends, expected a number", id="number"),
        pytest.param("n in 3", 6, "the equation ends, expected ..", id="range"),
        pytest.param("n[", 2, "the equation ends, expected a number", id="bit"),
        pytest.param("a or or b", 5, "found 'or', expected a name, 0, 1, ( or not", id="or-or"),
        pytest.param("a / b", 2, "'/' has no meaning in an equation", id="slash"),
        pytest.param("a b’", 3, "'’' has no meaning in an equation", id="curly"),
    ],
)
def test_syntax_error(text, offset, message):
    with pytest.raises(Problem) as caught:
        parse_equation(text)
    assert caught.value.offset == offset
    assert message in caught.value.message


@pytest.mark.parametrize("sign", '=&*|,^!~/-’′`"≠≤≥é')
def test_foreign_signs_are_explained(sign):
    with pytest.raises(Problem) as caught:
        parse_equation(f"a {sign} b")
    assert caught.value.hint
    assert caught.value.offset == 2


def test_error_in_a_string_of_several_lines():
    from pla.errors import InputError

    with pytest.raises(InputError) as caught:
        read(HEAD + 'f = """\n  a b +\n  c d\u0027\n + (q + a"""\n')
    (found,) = caught.value.diagnostics
    assert (found.location.line, found.location.column) == (13, 10)
    assert found.location.source == ' + (q + a"""'


def atoms():
    bits = st.sampled_from(["a", "b", "c", "n[0]", "n[2]", "p[4]"])
    numbers = st.sampled_from(list(NUMBERS))

    @st.composite
    def comparison(draw):
        name = draw(numbers)
        granule = 4 if name == "p" else 1
        blocks = NUMBERS[name] // granule
        op = draw(st.sampled_from(["==", "!=", "<", "<=", ">", ">=", "in"]))
        first = draw(st.integers(0, blocks - 1))
        last = draw(st.integers(first, blocks - 1))
        low, high = first * granule, last * granule + granule - 1
        if op in ("<=", ">"):
            low = high
        return ("compare", name, op, low, high)

    return st.one_of(
        bits.map(lambda name: ("bit", name)),
        st.sampled_from([("constant", 0), ("constant", 1)]),
        comparison(),
    )


def trees():
    return st.recursive(
        atoms(),
        lambda inner: st.one_of(
            st.tuples(st.just("not"), inner),
            st.tuples(st.just("prime"), inner),
            st.tuples(
                st.sampled_from(["and", "xor", "or"]), st.lists(inner, min_size=2, max_size=3)
            ),
        ),
        max_leaves=12,
    )


TIGHTNESS = {
    "or": 0,
    "xor": 1,
    "and": 2,
    "not": 3,
    "compare": 4,
    "constant": 5,
    "bit": 5,
    "prime": 6,
}


def written(tree, signs):
    """Text with no more parentheses than the binding needs; `signs` picks the spelling."""
    kind = tree[0]
    if kind in ("bit", "constant"):
        return str(tree[1])
    if kind == "compare":
        _, name, op, low, high = tree
        spelling = [str, hex, bin][signs % 3]
        tail = f"..{spelling(high)}" if op == "in" else ""
        return f"{name} {op} {spelling(low)}{tail}"
    if kind == "prime":
        inner = written(tree[1], signs + 1)
        return f"{inner}'" if tree[1][0] == "bit" else f"({inner})'"
    inside = [tree[1]] if kind == "not" else tree[1]
    parts = []
    for index, item in enumerate(inside):
        text = written(item, signs + index + 1)
        looser = TIGHTNESS[item[0]] < TIGHTNESS[kind]
        parts.append(f"({text})" if looser else text)
    if kind == "not":
        return f"not {parts[0]}"
    spellings = {"and": [" ", " · ", " and "], "xor": [" ⊕ ", " xor "], "or": [" + ", " or "]}
    return spellings[kind][signs % len(spellings[kind])].join(parts)


def field(name, signals):
    base, _, rest = name.partition("[")
    if not rest:
        return signals[base]
    high, _, low = rest[:-1].partition(":")
    low = low or high
    return signals[base] >> int(low) & ((1 << int(high) - int(low) + 1) - 1)


def meaning(tree, signals):
    kind = tree[0]
    if kind == "constant":
        return tree[1]
    if kind == "bit":
        return field(tree[1], signals)
    if kind == "compare":
        _, name, op, low, high = tree
        number = field(name, signals)
        return int(
            {
                "==": number == low,
                "!=": number != low,
                "<": number < low,
                "<=": number <= low,
                ">": number > low,
                ">=": number >= low,
                "in": low <= number <= high,
            }[op]
        )
    if kind in ("not", "prime"):
        return 1 - meaning(tree[1], signals)
    found = [meaning(item, signals) for item in tree[1]]
    return {"and": min(found), "or": max(found), "xor": sum(found) % 2}[kind]


@settings(max_examples=120, deadline=None)
@given(trees(), st.integers(0, 5))
def test_random_equations(tree, signs):
    behaviour = read(f'{HEAD}f = "{written(tree, signs)}"\n')
    for point, signals in points(behaviour):
        assert value(behaviour, point, 0) == meaning(tree, signals)


@settings(max_examples=40, deadline=None)
@given(trees(), trees(), trees(), st.sampled_from([None, 0, 1]))
def test_random_equations_that_name_outputs(first, second, impossible, forced):
    demand = "" if forced is None else f", impossible = {forced}"
    text = (
        HEAD.replace("f = 1", f"f = {{ bits = 1{demand} }}\ng = 1")
        + f'f = "(g) + ({written(first, 0)})\' g\'"\ng = "{written(second, 1)}"\n'
        + f'[never]\nwhen = ["a b c (n == 0)", "({written(impossible, 2)}) a n[1]"]\n'
    )
    behaviour = read(text)
    for point, signals in points(behaviour):
        s = signals
        never = (s["a"] and s["b"] and s["c"] and s["n"] == 0) or (
            meaning(impossible, s) and s["a"] and s["n"] >> 1 & 1
        )
        g = meaning(second, s)
        f = int(g or (not meaning(first, s) and not g))
        free = "x" if forced is None else forced
        assert value(behaviour, point, 0) == (free if never else f)
        assert value(behaviour, point, 1) == ("x" if never else g)


@given(st.text(alphabet="abn01()[]:.'+ ⊕·=<>!xornti2é\n", max_size=30))
def test_any_text_is_read_or_refused(text):
    try:
        parse_equation(text)
    except Problem as problem:
        found = problem
    else:
        return
    assert 0 <= found.offset <= len(text)
    assert found.message
