"""Values from outside the program: published tables, worked examples, laws."""

from __future__ import annotations

import random

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from making import COMPLEMENT, FREE, TRUE, function_of, random_table, wrong_points
from oracles import cover_search
from oracles.functions import (
    Table,
    adder,
    count_of_ones,
    full_adder,
    gray,
    life,
    minterms,
    multiplier,
    parity,
    seven_segments,
    square,
    symmetric,
    symmetric_primes,
)
from oracles.prime_counts import prime_counts_of_all_functions

from pla.logic.cubes import Cover
from pla.logic.equivalence import find_difference
from pla.logic.lattice import dense_primes
from pla.logic.minimize import minimize

# R. L. Rudell and A. Sangiovanni-Vincentelli, "Multiple-valued minimization for PLA optimization",
# IEEE Trans. CAD 6(5), 1987, and R. K. Brayton et al., Logic Minimization Algorithms for VLSI
# Synthesis, Kluwer 1984 (memory; all recomputed by a separate exact program). The functions are
# rebuilt from their arithmetic definition. Minima with free polarity: recomputed only.
PUBLISHED = {
    "rd53": (count_of_ones(5), 51, 31, 22),
    "rd73": (count_of_ones(7), 211, 127, 93),
    "rd84": (count_of_ones(8), 633, 255, 186),
    "adr4": (adder(4), 397, 75, 61),
    "mlp4": (multiplier(4), 606, 121, 107),
    "sqr6": (square(6), 205, 47, 39),
    "9sym": (symmetric(9, range(3, 7)), 1680, 84, 72),
    "life": (life(), 224, 84, 84),
}
SLOW_TRUE = {"sqr6"}
SLOW_FREE = {"adr4", "mlp4", "sqr6"}


def rows(slow):
    return [
        pytest.param(name, id=name, marks=[pytest.mark.slow] if name in slow else [])
        for name in PUBLISHED
    ]


def minimum(table, polarities=None):
    found = minimize(function_of(table), polarities)
    assert wrong_points(found.cover, found.complemented, table) == []
    return found


@pytest.mark.parametrize("name", PUBLISHED)
def test_primes_of_published_functions(name):
    table, primes, _, _ = PUBLISHED[name]
    assert len(dense_primes(function_of(table).off, table.outputs)) == primes


@pytest.mark.parametrize("name", rows(SLOW_TRUE))
def test_published_minimum_with_outputs_true(name):
    table, primes, terms, _ = PUBLISHED[name]
    found = minimum(table, [TRUE] * table.outputs)
    assert (found.count, found.lower_bound, found.proven) == (terms, terms, True)
    assert found.complemented == (False,) * table.outputs
    assert found.primes == primes


@pytest.mark.parametrize("name", rows(SLOW_FREE))
def test_minimum_with_free_polarity(name):
    table, _, _, terms = PUBLISHED[name]
    found = minimum(table)
    assert (found.count, found.lower_bound, found.proven) == (terms, terms, True)


def test_two_outputs_share_four_terms():
    # M. M. Mano, M. D. Ciletti, Digital Design, section on programmable logic arrays (memory;
    # recomputed): F1 = Σm(0,1,2,4), F2 = Σm(0,5,6,7) take four terms with one output complemented.
    table = minterms(3, (0, 1, 2, 4), (0, 5, 6, 7))
    found = minimum(table)
    assert (found.count, found.proven, sum(found.complemented)) == (4, True, 1)
    fixed = minimum(table, [TRUE, TRUE])
    assert (fixed.count, fixed.proven) == (6, True)


def test_seven_segments():
    # Recomputed; segment patterns are common practice.
    found = minimum(seven_segments())
    assert (found.count, found.lower_bound, found.proven) == (8, 8, True)


def test_a_decimal_digit_leaves_six_codes_unused():
    # Common practice, no source.
    function = function_of(seven_segments())
    for unused in function.dont_care:
        held = {p for cube in unused for p in range(16) if cube.contains(point_cube(p, 4))}
        assert held == {10, 11, 12, 13, 14, 15}


def point_cube(point, inputs):
    (cube,) = Cover.of(inputs, [(point, ~point & ((1 << inputs) - 1), 1)])
    return cube


@pytest.mark.parametrize(
    ("n", "a", "b"), [(n, a, b) for n in range(1, 8) for a in range(n + 1) for b in range(a, n + 1)]
)
def test_primes_of_symmetric_functions(n, a, b):
    # Follows from the definition; e.g. 9!/(3! 3! 3!) = 1680.
    table = symmetric(n, range(a, b + 1))
    assert len(dense_primes(function_of(table).off, 1)) == symmetric_primes(n, a, b)


def off_cover(inputs, on):
    everything = (1 << (1 << inputs)) - 1
    return function_of(Table(inputs, (on,), (everything & ~on,))).off


# A. K. Chandra, G. Markowsky, "On the number of prime implicants", Discrete Mathematics 24, 1978
# (memory): at most 6, 13 and 32 primes for one function of 3, 4 and 5 variables.


def test_no_function_of_three_variables_has_more_than_six_primes():
    counts = [len(dense_primes(off_cover(3, on), 1)) for on in range(256)]
    assert max(counts) == 6
    assert counts == [cover_search.count_primes(3, on) for on in range(256)]


def test_no_function_of_four_variables_has_more_than_thirteen_primes():
    expected = prime_counts_of_all_functions(4)
    assert int(expected.max()) == 13
    extreme = (-expected).argsort(kind="stable")[:80]
    rng = random.Random(4)
    chosen = {*extreme.tolist(), *(rng.getrandbits(16) for _ in range(220))}
    for on in sorted(chosen):
        assert len(dense_primes(off_cover(4, on), 1)) == expected[on]


FIVE_VARIABLES_32_PRIMES = 0xB6DBDB6D  # found by climbing from random functions


def test_a_function_of_five_variables_with_thirty_two_primes():
    assert len(dense_primes(off_cover(5, FIVE_VARIABLES_32_PRIMES), 1)) == 32


@given(
    st.integers(0, 2**32 - 1)
    | st.sets(st.integers(0, 31), max_size=3).map(
        lambda flips: FIVE_VARIABLES_32_PRIMES ^ sum(1 << p for p in flips)
    )
)
@settings(max_examples=60, deadline=None)
def test_no_function_of_five_variables_has_more_than_thirty_two_primes(on):
    primes = dense_primes(off_cover(5, on), 1)
    assert len(primes) <= 32
    assert len(primes) == cover_search.count_primes(5, on)


@pytest.mark.parametrize("seed", range(20))
def test_primes_of_several_outputs(seed):
    rng = random.Random(seed)
    table = random_table(rng, rng.randint(1, 5), rng.randint(1, 4))
    primes = dense_primes(function_of(table).off, table.outputs)
    assert len(primes) == cover_search.count_multiple_output_primes(table)


@pytest.mark.parametrize("n", range(1, 11))
@pytest.mark.parametrize("polarity", [TRUE, COMPLEMENT, FREE], ids=["true", "complement", "free"])
def test_parity_needs_every_combination(n, polarity):
    # Any textbook: 2^(n-1) terms in either polarity, no literal can be dropped.
    table = parity(n)
    found = minimum(table, [polarity])
    assert (found.count, found.proven) == (1 << (n - 1), True)
    assert all(cube.literals == n for cube in found.cover)
    function = function_of(table)
    for k, cube in enumerate(found.cover if n <= 6 else []):
        for i in range(n):
            bit = 1 << i
            cubes = list(found.cover)
            cubes[k] = cube._replace(ones=cube.ones & ~bit, zeros=cube.zeros & ~bit)
            assert find_difference(Cover.of(n, cubes), found.complemented, function)


@pytest.mark.parametrize("n", range(1, 8))
@pytest.mark.parametrize("polarity", [TRUE, COMPLEMENT, FREE], ids=["true", "complement", "free"])
def test_gray_code(n, polarity):
    # g = b ⊕ (b>>1): two terms for each bit but the highest, whose literal is one.
    found = minimum(gray(n), [polarity] * n)
    assert (found.count, found.proven) == (2 * (n - 1) + 1, True)


def test_full_adder():
    # Any textbook: sum of 4 terms, carry of 3; with free polarity recomputed.
    table = full_adder()
    alone = [minimum(Table(3, (table.on[j],), (table.off[j],)), [TRUE]).count for j in (0, 1)]
    assert alone == [4, 3]
    both = minimum(table, [TRUE, TRUE])
    assert (both.count, both.proven) == (7, True)
    free = minimum(table)
    assert (free.count, free.proven) == (5, True)
    assert cover_search.fewest_terms_free(table) == 5


def test_sharing_serves_a_shared_array_only():
    # F = Σm(0,1,3,5), G = Σm(1,3,5,6,7) (recomputed): alone 3 and 2 terms, together 4.
    lists = ((0, 1, 3, 5), (1, 3, 5, 6, 7))
    alone = [minimum(minterms(3, listed), [TRUE]).count for listed in lists]
    assert alone == [3, 2]
    assert minimum(minterms(3, *lists), [TRUE, TRUE]).count == 4
