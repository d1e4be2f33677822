"""Outputs that would hold each other through their pins: each message, and every point by hand.

The evaluator of random designs knows nothing of cubes: it tries every input combination.
"""

from __future__ import annotations

import itertools
import random
import re

import pytest
from test_random_enables import meaning, outcome, tree, written

HINT = "outputs that read each other need enables of which never more than one is 1"
PAIR = """[inputs]
e = 1
f = 1
s = 1
[outputs]
a = {{ enable = "{}", reads = "ra" }}
b = {{ enable = "{}", reads = "rb" }}
[logic]
a = "{}"
b = "{}"
"""
NEVER = PAIR + '[never]\nwhen = "{}"\n'


def pair(*texts):
    return (NEVER if len(texts) == 5 else PAIR).format(*texts)


WHERE = "where each depends on the level at the pin of the next, and all of them drive at once"

BUSES = """[inputs]
e = 1
f = 1
[outputs]
left = { bits = 3, enable = "e", reads = "from_left" }
right = { bits = 3, enable = "f", reads = "from_right" }
[[cases]]
rows = '''
from_right | left
0          | 7
1          | 6
2          | 5
3          | 4
4..7       | 0b0xx
'''
[[cases]]
rows = '''
from_left | right
0..3      | 0
4..7      | 0b1xx
'''
"""


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        pytest.param(
            pair("e", "f", "rb", "ra"),
            f"9:1 error a and b hold each other: a -> b -> a, {WHERE}, for example at e = 1, f = 1",
            id="values",
        ),
        pytest.param(
            pair("rb", "f", "s", "ra"),
            "6:16 error a and b hold each other: a -> b -> a, "
            f"{WHERE}, for example at f = 1, rb = 1",
            id="through-an-enable",
        ),
        pytest.param(
            pair("rb e", "ra'", "s", "s"),
            "6:16 error a and b hold each other: a -> b -> a, "
            f"{WHERE}, for example at e = 1, ra = 0, rb = 1",
            id="through-two-enables",
        ),
        pytest.param(
            pair("e", "f", "rb + s", "ra", "e f s'"),
            None,
            id="the-rest-is-impossible",
        ),
        pytest.param(
            pair("e", "f", "rb", "ra", "e f"),
            "9:1 warning at inputs that should never occur a and b would hold each other: "
            f"a -> b -> a, {WHERE} then, for example at e = 1, f = 1",
            id="impossible",
        ),
        pytest.param(pair("e", "e'", "rb", "ra"), None, id="exclusive-enables"),
        pytest.param(pair("e", "f", "rb s", "ra s'"), None, id="never-both-at-once"),
        pytest.param(pair("e", "f", "rb", "s"), None, id="one-way"),
        pytest.param(
            BUSES,
            "9:14 error left[2] and right[2] hold each other: left[2] -> right[2] -> left[2], "
            f"{WHERE}, for example at e = 1, f = 1, from_left[2] = 1, from_right = 6",
            id="one-of-the-bits",
        ),
        pytest.param(
            BUSES.replace('"f", reads', '"e\'", reads'), None, id="buses-with-exclusive-enables"
        ),
        pytest.param(
            "[inputs]\ne = 1\nf = 1\n[outputs]\n"
            "left = { bits = 3, enable = 'e', reads = 'from_left' }\n"
            "right = { bits = 3, enable = 'f', reads = 'from_right' }\n"
            "[logic]\n"
            + "".join(
                f'"{one}[{bit}]" = "from_{other}[{bit}]"\n'
                for one, other in (("left", "right"), ("right", "left"))
                for bit in range(3)
            ),
            "10:1 error left[2] and right[2] hold each other: left[2] -> right[2] -> left[2], "
            f"{WHERE}, for example at e = 1, f = 1; so do 2 more rings of their bits",
            id="bit-by-bit",
        ),
        pytest.param(
            "[inputs]\ne = 1\n[outputs]\n"
            + "".join(f"{n} = {{ enable = 'e', reads = 'r{n}' }}\n" for n in "abc")
            + "[logic]\na = 'rb'\nb = 'rc'\nc = 'ra'\n",
            "8:1 error a, b and c hold each other: a -> b -> c -> a, "
            f"{WHERE}, for example at e = 1",
            id="three",
        ),
        pytest.param(
            # While c drives, its pin has the level that makes a deaf to b.
            "[inputs]\ne = 1\ns = 1\n[outputs]\n"
            + "".join(f"{n} = {{ enable = 'e', reads = 'r{n}' }}\n" for n in "abc")
            + "[logic]\na = 'rb rc'\nb = \"ra s'\"\nc = 's'\n",
            None,
            id="a-driven-pin-has-the-level-that-drives-it",
        ),
    ],
)
def test_rings(text, expected):
    behaviour, found = outcome(text)
    found = [*found, *(behaviour.warnings if behaviour is not None else ())]
    shown = [
        f"{d.location.line}:{d.location.column} {d.severity} {d.message}"
        for d in found
        if "hold each other" in d.message
    ]
    assert shown == ([] if expected is None else [expected])
    if expected is None:
        assert behaviour is not None
    elif "warning" in expected:
        assert [d.code for d in found if "each other" in d.message] == ["HOLDS-IMPOSSIBLE"]
    else:
        assert behaviour is None
        assert [(d.code, d.hint) for d in found] == [("HOLDS-ITSELF", HINT)]


def test_rings_of_bits_that_hold_themselves_are_not_told_twice():
    _, found = outcome(pair("e", "f", "ra ⊕ rb", "ra ⊕ rb"))
    assert [d.location.line for d in found] == [9, 10]
    assert not any("each other" in d.message for d in found)


NAMES = ["s", "t", "ra", "rb", "rc"]
PLACES = list(itertools.product((0, 1), repeat=5))


def random_design(rng):
    """Three bidirectional outputs of which none reads its own pin."""
    logic, enables = {}, {}
    for name in "abc":
        others = [n for n in NAMES if n != f"r{name}"]
        logic[name] = tree(rng, others, depth=2)
        enables[name] = tree(rng, others if rng.random() < 0.4 else ["s", "t"], depth=2)
    return logic, enables, rng.choice([None, tree(rng, ["s", "t"], depth=1)])


def rings_at(place, drives, values):
    """The outputs that are in a ring, by definition: those that reach themselves."""
    edges = set()
    for one, other in itertools.permutations("abc", 2):
        at = NAMES.index(f"r{other}")
        flipped = tuple(bit ^ (k == at) for k, bit in enumerate(place))
        changes = drives[one][place] != drives[one][flipped] or (
            values[one][place] != values[one][flipped]
        )
        if drives[one][place] and drives[other][place] and changes:
            edges.add((one, other))
    reached = set(edges)
    for _ in "abc":
        reached |= {(i, m) for i, j in reached for k, m in edges if j == k}
    return {one for one, other in reached if one == other}


@pytest.mark.parametrize("seed", range(100))
def test_random_rings(seed):
    rng = random.Random(seed)
    logic, enables, never = random_design(rng)
    text = "[inputs]\ns = 1\nt = 1\n[outputs]\n" + "".join(
        f'{name} = {{ enable = "{written(enables[name])}", reads = "r{name}" }}\n' for name in "abc"
    )
    text += "[logic]\n" + "".join(f'{name} = "{written(logic[name])}"\n' for name in "abc")
    text += "" if never is None else f'[never]\nwhen = "{written(never)}"\n'

    def at(node):
        return {place: meaning(node, dict(zip(NAMES, place, strict=True)).get) for place in PLACES}

    drives, values = ({n: at(node) for n, node in part.items()} for part in (enables, logic))
    impossible = dict.fromkeys(PLACES, 0) if never is None else at(never)
    behaviour, found = outcome(text)
    if all(impossible.values()) or any(not any(drives[name].values()) for name in "abc"):
        assert behaviour is None
        return
    expected = set()
    for place in PLACES:
        if impossible[place]:
            continue
        ring = rings_at(place, drives, values)
        settled = all(
            place[NAMES.index(f"r{name}")] == values[name][place]
            for name in "abc"
            if drives[name][place] and name not in ring
        )
        expected |= ring if settled else set()
    told = [d for d in found if d.code == "HOLDS-ITSELF"]
    assert bool(told) == bool(expected)
    assert (behaviour is None) == bool(expected)
    named = {n for d in told for n in re.findall(r"\b[abc]\b", d.message.split(" hold each")[0])}
    assert named <= expected
