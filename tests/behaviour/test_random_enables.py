"""Random designs with inner signals and enables, at every input combination, by definition.

The evaluator here knows nothing of cubes: it walks the trees from which the equations were written.
Values that nobody gives are ``None``, and gates pass them on as three-valued logic has it (S. C.
Kleene, *Introduction to Metamathematics*, 1952, section 64).
"""

from __future__ import annotations

import itertools
import random

import pytest
from point_values import check_sources, driving, inner_value, points, read, reasons, value

from pla.errors import InputError

INPUTS = ["a", "b", "c", "n[1]", "n[0]"]


def tree(rng, names, compared=(), depth=3):
    """An equation over these bits and numbers of these buses."""
    kind = rng.choice(["bit", "not", "and", "or", "xor"] if depth else ["bit"])
    if kind == "bit":
        if compared and rng.random() < 0.2:
            return ("equal", rng.choice(compared), rng.randrange(4))
        return ("bit", rng.choice(names))
    parts = 1 if kind == "not" else 2
    return (kind, *(tree(rng, names, compared, depth - 1) for _ in range(parts)))


def written(node):
    kind = node[0]
    if kind == "bit":
        return node[1]
    if kind == "equal":
        return f"({node[1]} == {node[2]})"
    if kind == "not":
        return f"({written(node[1])})'"
    return f"({written(node[1])} {kind} {written(node[2])})"


def meaning(node, lookup):
    """1, 0 or None; `lookup` gives the value of a bit."""
    kind = node[0]
    if kind == "bit":
        return lookup(node[1])
    if kind == "equal":
        bits = [lookup(f"{node[1]}[{bit}]") for bit in (1, 0)]
        return int(2 * bits[0] + bits[1] == node[2])
    values = [meaning(part, lookup) for part in node[1:]]
    values = [None if v == "x" else v for v in values]
    if kind == "not":
        return None if values[0] is None else 1 - values[0]
    if kind == "xor":
        return None if None in values else values[0] ^ values[1]
    wins = 0 if kind == "and" else 1
    if wins in values:
        return wins
    return None if None in values else 1 - wins


def description(rng, names, compared=("n",), signs=(0, 1)):
    """An equation, or a minterm list of the bus `n`: for each number 0, 1 or x."""
    if rng.random() < 0.4:
        return ("listed", tuple(rng.choice(signs) for _ in range(4)))
    return tree(rng, names, compared)


def design_of(seed):
    rng = random.Random(seed)
    both = ("n", "t")
    everything = [*INPUTS, "t[1]", "s", "g", "f"]
    never = ("and", ("bit", rng.choice(INPUTS)), tree(rng, INPUTS, ("n",)))
    return {
        "logic": {
            "t[1]": tree(rng, INPUTS, ("n",)),
            "t[0]": tree(rng, INPUTS, ("n",)),
            "s": description(rng, [*INPUTS, "t[1]"]),
            "g": description(rng, [*INPUTS, "t[0]", "s"], both),
            "f": description(rng, [*INPUTS, "s", "g"], both, (0, 1, rng.choice([0, "x"]))),
        },
        "never": rng.choice([None, never, never]),
        "enables": {
            name: (tree(rng, everything, both), rng.random() < 0.3)
            for name in ("g", "f")
            if rng.random() < 0.7
        },
        "impossible": {name: rng.choice([None, None, 0, 1]) for name in ("g", "f")},
    }


def text_of(design):
    lines = ["[inputs]", "a = 1", "b = 1", "c = 1", "n = 2", "[outputs]"]
    for name in ("f", "g"):
        keys = []
        if design["impossible"][name] is not None:
            keys.append(f"impossible = {design['impossible'][name]}")
        if name in design["enables"]:
            node, never_too = design["enables"][name]
            keys.append(f'enable = "{written(node)}"')
            if never_too:
                keys.append("never_too = true")
        lines.append(f"{name} = {{ {', '.join(keys)} }}")
    lines += ["[inner]", "s = 1", "t = 2"]
    if design["never"] is not None:
        lines += ["[never]", f'when = "{written(design["never"])}"']
    lines.append("[logic]")
    lists = []
    for name, node in design["logic"].items():
        if node[0] == "listed":
            free = [number for number, sign in enumerate(node[1]) if sign == "x"]
            on = [number for number, sign in enumerate(node[1]) if sign == 1]
            lists += [f"[minterms.{name}]", 'of = "n"', f"on = {on}", f"dont_care = {free}"]
            lists.append("others = 0")
        else:
            lines.append(f'"{name}" = "{written(node)}"')
    return "\n".join([*lines, *lists]) + "\n"


def point_lookup(design, signals, *, never):
    """The described value of every bit at a point; ``None`` for what an impossible one leaves."""

    def lookup(name):
        if name in INPUTS:
            base, _, bit = name.partition("[")
            return signals[base] >> int(bit[:-1] if bit else 0) & 1
        demanded = design["impossible"].get(name)
        if never and demanded is not None:
            return demanded
        node = design["logic"][name]
        if node[0] != "listed":
            return meaning(node, lookup)
        return None if never else node[1][signals["n"]]

    return lookup


def expected_point(design, signals):
    never = bool(
        design["never"] and meaning(design["never"], point_lookup(design, signals, never=False))
    )
    lookup = point_lookup(design, signals, never=never)
    found = {"never": never, "inner": {}, "drives": {}, "value": {}}
    for name in ("s", "t[1]", "t[0]"):
        found["inner"][name] = "x" if never else lookup(name)
    for name in ("f", "g"):
        drives = 1
        if name in design["enables"]:
            node, never_too = design["enables"][name]
            drives = "x" if never and never_too else meaning(node, lookup)
        found["drives"][name] = drives
        if drives == 0:
            found["value"][name] = "x", ["never" if never else "disabled"]
        elif never and design["impossible"][name] is None:
            found["value"][name] = "x", ["never"]
        elif never:
            found["value"][name] = design["impossible"][name], []
        else:
            found["value"][name] = lookup(name), ["dont_care"] if lookup(name) == "x" else []
    return found


def names_free_values(design, expected):
    """Whether an enable names `f` although that is free at a possible input."""
    free = [
        design["logic"]["f"][0] == "listed" and design["logic"]["f"][1][signals["n"]] == "x"
        for signals, at in zip(all_points(), expected, strict=True)
        if not at["never"]
    ]
    return [name for name, (node, _) in design["enables"].items() if "f" in bits_of(node)] * any(
        free
    )


def all_points():
    for a, b, c, n in itertools.product((0, 1), (0, 1), (0, 1), range(4)):
        yield {"a": a, "b": b, "c": c, "n": n}


def outcome(text):
    """A behaviour and no errors, or none and the errors."""
    try:
        return read(text), ()
    except InputError as fault:
        return None, fault.diagnostics


@pytest.mark.parametrize("seed", range(150))
def test_every_combination(seed):
    design = design_of(seed)
    expected = [expected_point(design, signals) for signals in all_points()]
    codes = set()
    spoilt = names_free_values(design, expected)
    if spoilt:
        codes.add("FREE-OUTPUT-NAMED")
    for name in set(design["enables"]) - set(spoilt):
        drives = [at["drives"][name] for at in expected]
        if None in drives:
            codes.add("ENABLE-OPEN")
        elif 1 not in drives:
            codes.add("ENABLE-NEVER")
    if all(at["never"] for at in expected):
        codes = {"NEVER-ALWAYS"}
    behaviour, found = outcome(text_of(design))
    assert {diagnostic.code for diagnostic in found} == codes
    if behaviour is None:
        return
    for point, signals in points(behaviour):
        wanted = expected_point(design, signals)
        for position, output in enumerate(behaviour.outputs):
            shown = value(behaviour, point, position), reasons(behaviour, point, position)
            assert shown == wanted["value"][output.name], (output.name, signals)
            assert driving(behaviour, point, position) == wanted["drives"][output.name]
        for name, inner in wanted["inner"].items():
            assert inner_value(behaviour, point, name) == inner, (name, signals)
    check_sources(behaviour)


def bits_of(node):
    if node[0] == "bit":
        return {node[1]}
    if node[0] == "equal":
        return {f"{node[1]}[{bit}]" for bit in (1, 0)}
    return set() if node[0] == "listed" else {bit for part in node[1:] for bit in bits_of(part)}


@pytest.mark.parametrize("seed", range(150, 190))
def test_named(seed):
    design = design_of(seed)
    behaviour, _ = outcome(text_of(design))
    if behaviour is None:
        return
    order = ["f", "g", "s", "t[1]", "t[0]"]
    assert list(behaviour.output_names) + [i.name for i in behaviour.inner] == order
    described = {name: bits_of(node) & set(order) for name, node in design["logic"].items()}
    enabled = {name: bits_of(node) & set(order) for name, (node, _) in design["enables"].items()}
    for name in order:
        named = set(behaviour.named.get(name, ()))
        assert list(behaviour.named.get(name, ())) == [n for n in order if n in named]
        assert described[name] <= named <= described[name] | enabled.get(name, set())
        # Left out is only what reaches back to the name.
        for missing in enabled.get(name, set()) - named:
            assert name in reached(missing, behaviour.named)
        assert all(name not in reached(other, behaviour.named) for other in named)
    assert all(behaviour.named.values())


def reached(name, named):
    return {name}.union(*(reached(other, named) for other in named.get(name, ())))


BACK = ["a", "b", "r[1]", "r[0]"]


@pytest.mark.parametrize("seed", range(100))
def test_outputs_that_hold_themselves(seed):
    rng = random.Random(seed)
    first, second = tree(rng, BACK), tree(rng, BACK)
    enable = tree(rng, BACK[: rng.choice([2, 2, 3, 4])])
    text = (
        "[inputs]\na = 1\nb = 1\n[outputs]\n"
        f'd = {{ bits = 2, enable = "{written(enable)}", reads = "r" }}\n'
        f'[logic]\n"d[1]" = "{written(first)}"\n"d[0]" = "{written(second)}"\n'
    )
    places = list(itertools.product((0, 1), repeat=4))

    def at(node, place):
        return meaning(node, dict(zip(BACK, place, strict=True)).get)

    expected = set()
    for own, node, line in ((2, first, 7), (3, second, 8)):
        for place in places:
            other = tuple(bit ^ (k == own) for k, bit in enumerate(place))
            if at(enable, place) != at(enable, other):
                expected.add(5)
            elif at(enable, place) and at(node, place) != at(node, other):
                expected.add(line)
    _, found = outcome(text)
    if not any(at(enable, place) for place in places):
        assert [diagnostic.code for diagnostic in found] == ["ENABLE-NEVER"]
        return
    assert {diagnostic.code for diagnostic in found} <= {"HOLDS-ITSELF"}
    own = [diagnostic for diagnostic in found if "hold each other" not in diagnostic.message]
    assert {diagnostic.location.line for diagnostic in own} == expected
