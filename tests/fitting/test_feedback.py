"""Signals fed back through the array, or folded in, whichever takes fewer terms.

What is expected is worked out from truth tables by exhaustive searches that share nothing with the
program: once with the signal folded in, once with it as one more input of what names it.
"""

import random
from itertools import combinations, product

import pytest
from logic.making import random_table
from oracles.cover_search import cubes, fewest_terms, fewest_terms_free
from oracles.functions import Table
from small_devices import design, device, proven

from pla.device.catalogue import find_device
from pla.fitting.fit import fit

# What names the inner signal s, and its value at s and the inputs.
USES = [
    ("s ⊕ x0", lambda s, x: s ^ x[0]),
    ("s' ⊕ x1 x2", lambda s, x: (1 - s) ^ (x[1] & x[2])),
    ("s x0 + s' x1", lambda s, x: x[0] if s else x[1]),
    ("s (x0 ⊕ x2)", lambda s, x: s & (x[0] ^ x[2])),
    ("s' x0 + x1' x2", lambda s, x: ((1 - s) & x[0]) | ((1 - x[1]) & x[2])),
    ("s x0 ⊕ s' x1 x2", lambda s, x: x[0] if s else x[1] & x[2]),
]


def design_with_inner(folder, table, use, low=False, extra=""):
    """s by its points, y by an equation."""
    names = [f"x{i}" for i in range(table.inputs)]
    of = ", ".join(f'"{name}"' for name in reversed(names))
    on = [p for p in range(1 << table.inputs) if table.on[0] >> p & 1]
    output = '{ active = "low" }' if low else "1"
    lines = ['name = "Inner"', extra, "[inputs]", *(f"{name} = 1" for name in names)]
    lines += ["[outputs]", f"y = {output}", "[inner]", "s = 1", "[minterms.s]", f"of = [{of}]"]
    lines += [f"on = {on}", "others = 0", "[logic]", f'y = "{use}"', ""]
    return design(folder, "\n".join(lines))


def folded(table, rule):
    """y as a function of the inputs."""
    n = table.inputs
    on = sum(1 << p for p in range(1 << n) if rule(table.on[0] >> p & 1, bits(p, n)))
    return Table(n, (on,), (((1 << (1 << n)) - 1) ^ on,))


def fed_back(table, rule):
    """s, and y with s as the last input; a value of s that cannot be is a don't care of y."""
    n = table.inputs
    sets = [[0, 0], [0, 0]]
    for point in range(2 << n):
        s, p = point >> n, point & (1 << n) - 1
        held = table.on[0] >> p & 1
        sets[0][1 - held] |= 1 << point
        if s == held:
            sets[1][0 if rule(s, bits(p, n)) else 1] |= 1 << point
    return Table(n + 1, *zip(*sets, strict=True))


def bits(point, inputs):
    return [point >> i & 1 for i in range(inputs)]


def only(table, output):
    return Table(table.inputs, (table.on[output],), (table.off[output],))


def specified(rng, inputs):
    """A function that is neither constant nor left open anywhere."""
    while True:
        table = random_table(rng, inputs, 1, dont_care=0)
        if table.on[0] and table.off[0]:
            return table


@pytest.mark.parametrize("use", range(len(USES)), ids=[text for text, _ in USES])
@pytest.mark.parametrize("name", ["shared-10x28x4", "varied-11x5"])
def test_folded_or_fed_back_whichever_costs_less(tmp_path, name, use):
    """On one device y and s share their terms, on the other each has an OR gate of its own."""
    rng = random.Random(f"{name} {use}")
    text, rule = USES[use]
    for _ in range(4):
        table = specified(rng, 3)
        behaviour = design_with_inner(tmp_path, table, text, rng.random() < 0.5)
        found = fit(behaviour, find_device(name))
        plain, fed = folded(table, rule), fed_back(table, rule)
        straight = fewest_terms_free(plain)
        if name.startswith("shared"):
            through = fewest_terms_free(fed)
        else:
            through = sum(fewest_terms_free(only(fed, j)) for j in (0, 1))
        assert found.fits
        assert found.minimum.count == min(straight, through)
        assert found.minimum.proven
        # Of equal numbers the way with fewer passes through the array.
        is_fed = any(signal.fed_by is not None for signal in found.plan.inputs)
        assert is_fed == (through < straight)
        assert max(found.plan.passes) == 1 + is_fed
        assert proven(found.plan)


def array_with_one_line(room, inner_room, feedback):
    """Three inputs, a cell with a pin, and a buried cell of which only the primed line is there."""
    rows = room + inner_room
    return f"""
name = "small"
summary = "one line runs back"
technology = "one-time"
pins = 6
fuses = {8 * rows + 1}
ground = 5
power = 6
[links]
blank = 0
connected = 0
unused_term = "blank"
[and]
columns = "1 1' 2 2' 3 3' . c'"
terms = {rows}
first_fuse = 0
term_step = 8
[kind.out]
bits = ["polarity"]
modes = [ {{ set = "0", pin = "sum" }}, {{ set = "1", pin = "sum'" }} ]
cells = [ {{ pin = 4, terms = "0..{room - 1}", links = [{8 * rows}] }} ]
[kind.inner]
bits = []
modes = [ {{ set = "", feedback = "{feedback}" }} ]
cells = [ {{ name = "c", terms = "{room}..{rows - 1}", links = [] }} ]
"""


def fewest_without(table, variable, value, most):
    """Terms of a smallest cover without one literal; ``None`` if that takes more than `most`."""
    on, off = table.on[0], table.off[0]
    usable = {
        points & on
        for (points, _), digits in zip(
            cubes(table.inputs), product((0, 1, 2), repeat=table.inputs), strict=True
        )
        if digits[variable] != value and not points & off
    }
    largest = [m for m in usable if not any(m != k and m & ~k == 0 for k in usable)]
    for size in range(most + 1):
        for chosen in combinations(largest, size):
            covered = 0
            for mask in chosen:
                covered |= mask
            if covered == on:
                return size
    return None


@pytest.mark.parametrize("feedback", ["sum", "sum'"])
def test_a_signal_of_which_one_line_runs_back(tmp_path, feedback):
    """Every polarity of s and of y, with the literal of s that cannot be read left out."""
    rng = random.Random(feedback)
    restricted = refused = 0
    for _ in range(30):
        table, (text, rule) = specified(rng, 3), rng.choice(USES)
        room, inner_room = rng.randint(1, 3), rng.randint(1, 4)
        plain, fed = folded(table, rule), fed_back(table, rule)
        straight = fewest_terms_free(plain)
        costs = [straight] if straight <= room else []
        for inverted, complemented in product((False, True), repeat=2):
            held = fewest_terms(only(fed, 0).in_polarity((inverted,)))
            # The line carries the complement of what the mode says: of s, or of its complement.
            readable = int(inverted == (feedback == "sum"))
            seen = only(fed, 1).in_polarity((complemented,))
            through = fewest_without(seen, table.inputs, 1 - readable, room)
            if held <= inner_room and through is not None:
                costs.append(held + through)
                restricted += costs[0] != straight
        behaviour = design_with_inner(tmp_path, table, text)
        small = device(tmp_path, array_with_one_line(room, inner_room, feedback))
        found = fit(behaviour, small)
        assert found.fits == bool(costs), (text, room, inner_room)
        if costs:
            assert found.minimum.count == min(costs)
            assert proven(found.plan)
        else:
            refused += 1
            assert found.reasons
    assert restricted
    assert 3 < refused < 27


INNER = """
name = "Inner"
[inputs]
{inputs}
[outputs]
f = {{ max_delay = {allowed} }}
[inner]
s = 1
[logic]
s = "{inner}"
f = "{logic}"
"""


def wide(folder, inner, logic, inputs, allowed=1000):
    declared = "\n".join(f"{name} = 1" for name in inputs)
    return design(folder, INNER.format(inputs=declared, inner=inner, logic=logic, allowed=allowed))


# Five terms; its complement would take 16.
OF_NINE = "a b + c d + e g + h k + m"


def test_a_cell_with_a_name_beside_its_pin_is_taken_apart(tmp_path):
    """Eleven inputs take the ten input pins and pin 12, whose cell is u. s and t need both cells
    that run back, so one of them stands inside u while the pin of u is an input.
    """
    text = f"""
name = "Two inner signals"
[inputs]
{"".join(f"{name} = 1{chr(10)}" for name in "abcdeghkmyz")}
[outputs]
f = 1
[inner]
s = 1
t = 1
[logic]
s = "{OF_NINE}"
t = "y z + a c + b d"
f = "s ⊕ t ⊕ z"
"""
    behaviour = design(tmp_path, text)
    found = fit(behaviour, find_device("joint-10x27x6"))
    assert found.fits
    plan = found.plan
    assert 12 in {plan.pins[signal.name] for signal in behaviour.inputs}
    inner = {output.name: output for output in plan.outputs if output.name != "f"}
    assert {output.cell.pin for output in inner.values()} == {12, 13}
    assert all(output.pin is None for output in inner.values())
    apart = next(output for output in inner.values() if output.cell.pin == 12)
    assert apart.shown is None
    assert found.minimum.count == 5 + 3 + 4  # parity of three takes 4 terms in either polarity
    assert proven(plan)


@pytest.mark.parametrize(
    ("allowed", "terms", "passes"),
    [
        # 28 ns for one pass through the array, 22 ns more for the second.
        pytest.param(50, 2 + 2, 2, id="fed back"),
        pytest.param(49, 6, 1, id="folded in, as it is faster"),
    ],
)
def test_what_is_late_may_be_folded_in(tmp_path, allowed, terms, passes):
    behaviour = wide(tmp_path, "a b + c d", "s ⊕ y", "abcdy", allowed)
    found = fit(behaviour, find_device("joint-10x27x6"))
    assert found.fits
    assert found.minimum.count == terms
    assert max(found.plan.passes) == passes
    assert proven(found.plan)


def test_too_late_whatever_is_done(tmp_path):
    slow = wide(tmp_path, OF_NINE, "s ⊕ w", "abcdeghkmw", 40)
    found = fit(slow, find_device("joint-10x27x6"))
    assert not found.fits
    assert found.reasons == (
        "with s fed back, f may take 50 ns, and 40 ns are allowed",
        (
            "with nothing fed back, the smallest set has 21 shared product terms, the device 15: "
            "6 too many"
        ),
    )
    fast = wide(tmp_path, "a b", "s + y", "aby", 27.5)
    found = fit(fast, find_device("joint-10x27x6"))
    assert found.reasons == ("f may take 28 ns, and 27.5 ns are allowed",)


def test_an_output_that_another_names_is_fed_back_too(tmp_path):
    """own-9x5 runs back the levels of its middle pins only, and has 5 terms a cell."""
    text = """
name = "Outputs"
[inputs]
a = 1
b = 1
c = 1
d = 1
e = 1
[outputs]
p = 1
q = 1
[logic]
p = "a ⊕ b ⊕ c"
q = "p ⊕ d ⊕ e"
"""
    found = fit(design(tmp_path, text), find_device("own-9x5"))
    assert found.fits
    assert found.minimum.count == 4 + 4  # parity of three each (any textbook)
    assert found.plan.pins["p"] in {12, 13, 14}
    assert found.plan.passes == (1, 2)
    assert proven(found.plan)


def test_polarity_true_does_not_bind_inner_signals(tmp_path):
    """The complement of s takes one term, s itself four: s is in nobody's sight."""
    behaviour = wide(tmp_path, "a + b + c + d", "s ⊕ (x y)", "abcdxy")
    for wish in ("free", "true"):
        found = fit(behaviour, find_device("varied-11x5"), wish)
        assert found.fits
        assert proven(found.plan)
    assert not any(
        inverted
        for output, inverted in zip(found.plan.outputs, found.minimum.complemented, strict=True)
        if output.pin is not None
    )
