"""Functions that fall apart, constants, and other borders of the minimizer."""

from __future__ import annotations

import random

import numpy as np
import pytest
from making import COMPLEMENT, FREE, TRUE, cover_at, function_of, random_table, wrong_points
from oracles import cover_search
from oracles.functions import Table, tabulate

from pla.logic.blocks import blocks_of, supports
from pla.logic.cubes import Cover, Cube
from pla.logic.effort import Effort
from pla.logic.equivalence import find_difference
from pla.logic.function import Function
from pla.logic.minimize import minimize
from pla.logic.phases import Polarity


def side_by_side(a: Table, b: Table) -> Table:
    """Both tables over inputs of their own."""

    def widened(points: int, low: int, high: int, shift: int) -> int:
        n = low + high
        return sum(1 << p for p in range(1 << n) if points >> (p >> shift & ((1 << low) - 1)) & 1)

    n, m = a.inputs, b.inputs
    return Table(
        n + m,
        tuple(widened(s, n, m, 0) for s in a.on) + tuple(widened(s, m, n, n) for s in b.on),
        tuple(widened(s, n, m, 0) for s in a.off) + tuple(widened(s, m, n, n) for s in b.off),
    )


def least(table, polarities=None):
    """The program's minimum, complete and proven."""
    found = minimize(function_of(table), polarities)
    assert wrong_points(found.cover, found.complemented, table) == []
    assert found.proven
    assert found.lower_bound == found.count
    for polarity, complemented in zip(polarities or [], found.complemented, strict=False):
        assert polarity.complement if complemented else polarity.true
    return found


@pytest.mark.parametrize("seed", range(40))
def test_parts_side_by_side_against_exhaustive_search(seed):
    rng = random.Random(seed)
    parts = [
        random_table(rng, rng.randint(1, 2), rng.randint(1, 2), rng.choice((0.0, 0.3)), 0.6)
        for _ in range(2)
    ]
    table = side_by_side(*parts)
    joint = least(table, [TRUE] * table.outputs)
    assert joint.count == cover_search.fewest_terms(table)
    assert joint.cover.links == cover_search.fewest_connections(table, joint.count)
    free = least(table)
    assert free.count == cover_search.fewest_terms_free(table)
    constant = [j for j in range(table.outputs) if not table.off[j]]
    if not constant:
        alone = [least(part, [TRUE] * part.outputs).count for part in parts]
        assert joint.count == sum(alone)


@pytest.mark.parametrize(
    ("rules", "terms"),
    [
        pytest.param("1 a a'", 2, id="served by a signal and its complement"),
        pytest.param("1 a b", 3, id="needs a term of its own"),
        pytest.param("1 1 a", 2, id="two constants share one term"),
        pytest.param("1 a a' b b'", 4, id="either pair would serve"),
        pytest.param("1 0 0", 1, id="beside nothing"),
        pytest.param("1", 1, id="alone"),
        pytest.param("0", 0, id="constant 0"),
        pytest.param("1 a+b a'b'", 3, id="served by three terms together"),
        pytest.param("a a' b", 3, id="no constant"),
    ],
)
def test_terms_of_other_outputs_may_serve_a_constant(rules, terms):
    formulas = {
        "1": lambda _a, _b: 1,
        "0": lambda _a, _b: 0,
        "a": lambda a, _b: a,
        "a'": lambda a, _b: 1 - a,
        "b": lambda _a, b: b,
        "b'": lambda _a, b: 1 - b,
        "a+b": lambda a, b: a | b,
        "a'b'": lambda a, b: 1 - (a | b),
    }
    names = rules.split()
    table = tabulate(
        2,
        len(names),
        lambda p: sum(formulas[name](p & 1, p >> 1) << j for j, name in enumerate(names)),
    )
    assert least(table, [TRUE] * len(names)).count == terms == cover_search.fewest_terms(table)
    # The complements of the complements are the same sums.
    inverse = table.in_polarity([True] * len(names))
    assert least(inverse, [COMPLEMENT] * len(names)).count == terms


@pytest.mark.parametrize("seed", range(60))
def test_mixed_polarities_with_constants_against_exhaustive_search(seed):
    rng = random.Random(500 + seed)
    n, outputs = rng.randint(1, 3), 3
    table = random_table(rng, n, outputs, 0.2)
    everything = (1 << (1 << n)) - 1
    on, off = list(table.on), list(table.off)
    on[0], off[0] = rng.choice([(everything, 0), (0, everything), (on[0], 0), (0, off[0]), (0, 0)])
    if rng.random() < 0.5:
        on[2], off[2] = off[1], on[1]
    table = Table(n, tuple(on), tuple(off))
    allowed = [rng.choice((TRUE, COMPLEMENT, FREE)) for _ in range(outputs)]
    choices = [
        c
        for c in cover_search.polarities(outputs)
        if all(p.complement if x else p.true for p, x in zip(allowed, c, strict=True))
    ]
    expected = min(cover_search.fewest_terms(table.in_polarity(c)) for c in choices)
    assert least(table, allowed).count == expected


def test_parts_are_found():
    table = side_by_side(tabulate(2, 2, int.bit_count), tabulate(3, 1, lambda p: p.bit_count() & 1))
    parts = blocks_of(function_of(table), [TRUE] * 3)
    assert [(part.inputs, part.outputs) for part in parts] == [((0, 1), (0, 1)), ((2, 3, 4), (2,))]
    assert supports(function_of(table)) == ((0, 1), (0, 1), (2, 3, 4))


def test_parts_beyond_sixteen_inputs_are_settled_exactly():
    # Twelve parities of two inputs each: 24 inputs, two terms each, none shared.
    cubes = {True: [], False: []}
    for j in range(12):
        for a in (0, 1):
            for b in (0, 1):
                ones = a << 2 * j | b << 2 * j + 1
                cubes[bool(a ^ b)].append((ones, 3 << 2 * j & ~ones, 1 << j))
    function = Function(24, 12, Cover.of(24, cubes[True]), Cover.of(24, cubes[False]))
    found = minimize(function)
    assert (found.count, found.proven_by) == (24, "certificate")


def test_a_constant_stays_apart_from_outputs_that_can_all_be_0():
    # Outputs 0 to 9 are pairs of 20 inputs and can all be 0; 10 and 11 are an input and its
    # complement, so one of them has an active term always; 12 is 1 everywhere.
    on = [(3 << 2 * j, 0, 1 << j) for j in range(10)]
    off = [(0, bit << 2 * j, 1 << j) for j in range(10) for bit in (1, 2)]
    on += [(1 << 20, 0, 1 << 10), (0, 1 << 20, 1 << 11), (0, 0, 1 << 12)]
    off += [(0, 1 << 20, 1 << 10), (1 << 20, 0, 1 << 11)]
    function = Function(21, 13, Cover.of(21, on), Cover.of(21, off))
    parts = blocks_of(function, [TRUE] * 13)
    assert [part.outputs for part in parts] == [*((j,) for j in range(10)), (10, 11, 12)]
    found = minimize(function, [TRUE] * 13)
    assert (found.count, found.proven_by) == (12, "certificate")
    # A constant that only the terms of free polarities could serve is counted once as well.
    free = minimize(function, [FREE] * 12 + [TRUE])
    assert free.lower_bound <= 12 <= free.count <= 13


@pytest.mark.parametrize(
    ("on", "off", "allowed", "count", "complemented"),
    [
        pytest.param(0, 15, TRUE, 0, False, id="constant 0"),
        pytest.param(15, 0, TRUE, 1, False, id="constant 1"),
        pytest.param(15, 0, FREE, 0, True, id="constant 1 as the complement of nothing"),
        pytest.param(0, 15, COMPLEMENT, 1, True, id="constant 0 as the complement of 1"),
        pytest.param(0, 0, TRUE, 0, False, id="no care"),
        pytest.param(0, 0, COMPLEMENT, 0, True, id="no care, complement only"),
        pytest.param(1, 0, TRUE, 1, False, id="without OFF-set"),
        pytest.param(0, 1, TRUE, 0, False, id="without ON-set"),
        pytest.param(0, 1, COMPLEMENT, 1, True, id="without ON-set, complement only"),
    ],
)
def test_constant_outputs(on, off, allowed, count, complemented):
    found = least(Table(2, (on,), (off,)), [allowed])
    assert (found.count, found.complemented) == (count, (complemented,))
    assert found.cover.literals == 0
    assert found.proven_by == "certificate"
    assert found.connections == "all polarities"


@pytest.mark.parametrize(("on", "off", "terms"), [(1, 0, 1), (0, 1, 0), (0, 0, 0)])
def test_no_inputs(on, off, terms):
    found = least(Table(0, (on, off), (off, on)), [TRUE, COMPLEMENT])
    assert found.count == terms
    assert least(Table(0, (on,), (off,))).count == 0


def test_no_outputs():
    found = minimize(Function(3, 0, Cover.of(3), Cover.of(3)))
    assert (found.count, found.proven_by, found.complemented) == (0, "certificate", ())


@pytest.mark.parametrize(("on", "off"), [(a, b) for a in range(4) for b in range(4) if not a & b])
def test_one_input(on, off):
    table = Table(1, (on,), (off,))
    found = least(table, [TRUE])
    assert found.count == cover_search.fewest_terms(table)
    assert found.cover.links == cover_search.fewest_connections(table, found.count)


@pytest.mark.parametrize("seed", range(10))
def test_duplicate_outputs_cost_only_links(seed):
    table = random_table(random.Random(seed), 4, 1, 0.1)
    twice = Table(4, table.on * 3, table.off * 3)
    one, three = least(table, [TRUE]), least(twice, [TRUE] * 3)
    assert three.count == one.count
    assert all(cube.outputs == 7 for cube in three.cover)


@pytest.mark.parametrize("seed", range(10))
def test_complements_of_each_other_share_all_terms(seed):
    table = random_table(random.Random(seed), 4, 1, 0.1)
    both = Table(4, table.on + table.off, table.off + table.on)
    found = least(both)
    assert found.count == least(table).count
    if table.on[0] and table.off[0]:
        assert found.complemented[0] != found.complemented[1]


def cube_of(value, bits, lowest=0):
    """All bits of a bus fixed."""
    mask = (1 << bits) - 1
    return value << lowest, (~value & mask) << lowest


@pytest.mark.parametrize(
    ("polarity", "terms"),
    [
        pytest.param(TRUE, 3, id="true"),
        pytest.param(COMPLEMENT, 4 + 6 + 16, id="complement", marks=pytest.mark.slow),
    ],
)
def test_address_decoder_of_sixteen_bits(polarity, terms):
    # Blocks of 4 KiB, 1 KiB and one address: each a cube, the complement of many.
    selects = [(0x8, 4, 12), (0x25, 6, 10), (0x7FFF, 16, 0)]
    on, off = [], []
    for j, (value, bits, lowest) in enumerate(selects):
        on.append((*cube_of(value, bits, lowest), 1 << j))
        ones, zeros, _ = on[-1]
        fixed = 0, 0
        for i in range(16):
            bit = 1 << i
            if ones & bit:
                off.append((fixed[0], fixed[1] | bit, 1 << j))
                fixed = fixed[0] | bit, fixed[1]
            elif zeros & bit:
                off.append((fixed[0] | bit, fixed[1], 1 << j))
                fixed = fixed[0], fixed[1] | bit
    function = Function(16, 3, Cover.of(16, on), Cover.of(16, off))
    found = minimize(function, [polarity] * 3)
    assert found.lower_bound <= found.count <= terms
    assert find_difference(found.cover, found.complemented, function) is None
    if polarity == TRUE:
        assert (found.count, found.proven) == (3, True)
        assert found.cover.literals == 4 + 6 + 16


def comparison(bits: int, reverse: bool) -> tuple[list, list]:
    """Cubes of a < b and of a >= b for two numbers, bit i of a and b side by side."""
    less, not_less = [], []
    # From the highest bit: equal so far is one of 2^k cubes, so fix both bits at each.
    equal = [(0, 0)]
    for i in reversed(range(bits)):
        a, b = 1 << 2 * i, 1 << 2 * i + 1
        less += [(ones | b, zeros | a, 1) for ones, zeros in equal]
        not_less += [(ones | a, zeros | b, 1) for ones, zeros in equal]
        equal = [(o | a | b, z) for o, z in equal] + [(o, z | a | b) for o, z in equal]
    not_less += [(o, z, 1) for o, z in equal]
    return (not_less, less) if reverse else (less, not_less)


@pytest.mark.parametrize("reverse", [False, True], ids=["a < b", "a >= b"])
@pytest.mark.parametrize("bits", [2, 5, 7, pytest.param(8, marks=pytest.mark.slow)])
def test_comparator(bits, reverse):
    # Any textbook's recursion: a < b is a'b at the highest bit, or (a' + b) and the rest below, so
    # T(n) = 1 + 2 T(n-1) from T(1) = 1; for a >= b from T(1) = 2 (a + b'). All are essential.
    on, off = comparison(bits, reverse)
    n = 2 * bits
    found = minimize(Function(n, 1, Cover.of(n, on), Cover.of(n, off)), [TRUE])
    assert found.count == (3 if reverse else 2) * (1 << (bits - 1)) - 1
    assert found.proven


@pytest.mark.parametrize("inputs", [20, 30, 40])
def test_wide_covers_by_simulation(inputs):
    rng = random.Random(inputs)
    n_outputs = 4
    # ON and OFF are told apart by an input each: every ON cube has it at 1, every OFF cube at 0.
    on, off = [], []
    for side, cubes in ((1, on), (0, off)):
        for _ in range(40):
            j = rng.randrange(n_outputs)
            ones = zeros = 0
            for i in rng.sample(range(inputs), 7):
                if rng.random() < 0.5:
                    ones |= 1 << i
                else:
                    zeros |= 1 << i
            ones &= ~(1 << j)
            zeros &= ~(1 << j)
            cubes.append((ones | side << j, zeros | (1 - side) << j, 1 << j))
    function = Function(inputs, n_outputs, Cover.of(inputs, on), Cover.of(inputs, off))
    found = minimize(function, effort=Effort(seconds=20))
    assert found.lower_bound <= found.count <= n_outputs
    draw = np.random.default_rng(inputs)
    points = draw.integers(0, 1 << inputs, 20_000, dtype=np.uint64)
    inside = [_inside(draw, Cube(*c)) for c in on + off for _ in range(20)]
    points = np.concatenate([points, np.array(inside, dtype=np.uint64) & np.uint64(2**inputs - 1)])
    inverted = np.uint64(sum(1 << j for j, c in enumerate(found.complemented) if c))
    realised = cover_at(found.cover, points) ^ inverted
    assert not (cover_at(function.on, points) & ~realised).any()
    assert not (cover_at(function.off, points) & realised).any()
    assert cover_at(function.on, points).any()


def _inside(draw, cube):
    point = int(draw.integers(0, 2**63))
    return (point | cube.ones) & ~cube.zeros


def test_an_output_needs_a_polarity():
    with pytest.raises(ValueError, match="needs a polarity"):
        Polarity(true=False, complement=False)
