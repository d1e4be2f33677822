"""Different roads to a cover: whole tables, rows on demand, cubes only, and a spent budget."""

from __future__ import annotations

import random

import numpy as np
import pytest
from making import COMPLEMENT, FREE, TRUE, cover_at, function_of, random_table, wrong_points
from oracles import cover_search
from oracles.functions import adder, count_of_ones, multiplier, parity, seven_segments, symmetric

from pla.logic import lazy
from pla.logic import minimize_block as block
from pla.logic.algebra import complement
from pla.logic.cubes import Cover, Cube
from pla.logic.effort import Effort
from pla.logic.function import Function
from pla.logic.heuristic import heuristic_cover
from pla.logic.independent import independent_bound, sample_points
from pla.logic.minimize import minimize
from pla.logic.phases import phase_function, phases_of
from pla.logic.wide import minimize_wide


def sample(seed, most_inputs=5, most_outputs=3):
    rng = random.Random(seed)
    inputs, outputs = rng.randint(1, most_inputs), rng.randint(1, most_outputs)
    impossible = rng.randint(1, 4) if seed % 3 == 0 else 0
    return random_table(rng, inputs, outputs, rng.choice((0.0, 0.2, 0.5)), 0.5, impossible)


@pytest.fixture
def _no_tables(monkeypatch):
    monkeypatch.setattr(block, "_table_fits", lambda *_: False)


def agree(table, polarities, expected):
    found = minimize(function_of(table), polarities)
    assert wrong_points(found.cover, found.complemented, table) == []
    assert found.lower_bound <= expected <= found.count
    if found.proven:
        assert found.count == expected
    return found


@pytest.mark.parametrize("seed", range(25))
def test_rows_on_demand_agree_with_whole_tables(seed, monkeypatch):
    table = sample(seed)
    for allowed in (TRUE, COMPLEMENT, FREE):
        polarities = [allowed] * table.outputs
        whole = minimize(function_of(table), polarities)
        assert whole.proven
        with monkeypatch.context() as patch:
            patch.setattr(block, "_table_fits", lambda *_: False)
            found = agree(table, polarities, whole.count)
        assert found.proven
        assert found.connections is None or not found.count
        assert found.primes == whole.primes


@pytest.mark.parametrize("seed", range(20))
@pytest.mark.usefixtures("_no_tables")
def test_rows_that_only_the_integer_answer_misses_are_added(seed, monkeypatch):
    # Without rounds of the relaxation, rows come from the covers that the integer programs give.
    monkeypatch.setattr(lazy, "ROUNDS", 0)
    monkeypatch.setattr(lazy, "ROWS_AT_ONCE", 2)
    table = sample(500 + seed, 4, 2)
    found = agree(table, [TRUE] * table.outputs, cover_search.fewest_terms(table))
    assert found.proven


@pytest.mark.parametrize(
    ("table", "allowed", "terms"),
    [
        pytest.param(count_of_ones(5), FREE, 22, id="rd53"),
        pytest.param(count_of_ones(7), TRUE, 127, id="rd73"),
        pytest.param(adder(4), TRUE, 75, id="adr4"),
        pytest.param(symmetric(9, range(3, 7)), FREE, 72, id="9sym"),
        pytest.param(seven_segments(), FREE, 8, id="seven segments"),
        pytest.param(parity(9), FREE, 256, id="parity"),
        pytest.param(multiplier(4), TRUE, 121, id="mlp4", marks=pytest.mark.slow),
        pytest.param(count_of_ones(8), FREE, 186, id="rd84", marks=pytest.mark.slow),
    ],
)
@pytest.mark.usefixtures("_no_tables")
def test_rows_on_demand_reach_known_minima(table, allowed, terms):
    found = agree(table, [allowed] * table.outputs, terms)
    assert found.proven


@pytest.mark.parametrize("seed", range(20))
def test_a_spent_budget_gives_a_complete_cover_and_an_honest_bound(seed, monkeypatch):
    table = sample(100 + seed)
    for allowed in (TRUE, FREE):
        polarities = [allowed] * table.outputs
        whole = minimize(function_of(table), polarities)
        for fits in (True, False):
            with monkeypatch.context() as patch:
                if not fits:
                    patch.setattr(block, "_table_fits", lambda *_: False)
                found = minimize(function_of(table), polarities, effort=Effort(work=0))
            assert wrong_points(found.cover, found.complemented, table) == []
            assert found.lower_bound <= whole.count <= found.count
            assert found.proven == (found.count == found.lower_bound)
            assert not found.clock


def test_the_clock_says_that_it_cut_in():
    found = minimize(function_of(adder(3)), effort=Effort(seconds=0))
    assert wrong_points(found.cover, found.complemented, adder(3)) == []
    assert found.clock


# At the last two the heuristic misses the minimum, so that a bound too high would show.
@pytest.mark.parametrize("seed", [*range(25), 151, 454])
def test_the_wide_road_is_complete_and_its_bound_holds(seed):
    table = sample(200 + seed, 4, 2)
    function = function_of(table)
    for allowed in (TRUE, COMPLEMENT, FREE):
        polarities = [allowed] * table.outputs
        found = minimize_wide(function, polarities, Effort())
        assert wrong_points(found.cover, found.complemented, table) == []
        if allowed == FREE:
            least = cover_search.fewest_terms_free(table)
        else:
            least = cover_search.fewest_terms(table.in_polarity([not allowed.true] * table.outputs))
        assert 0 <= found.exact <= found.trusted <= least <= len(found.cover)


@pytest.mark.parametrize("seed", range(30))
def test_a_heuristic_cover_is_complete_prime_and_irredundant(seed):
    table = sample(300 + seed)
    function = function_of(table)
    cover = heuristic_cover(function.on, function.off, table.outputs)
    none = [False] * table.outputs
    assert wrong_points(cover, none, table) == []
    cubes = list(cover)
    for k, cube in enumerate(cubes):
        for j in range(table.outputs):
            if cube.outputs >> j & 1:
                fewer = [*cubes[:k], cube._replace(outputs=cube.outputs ^ 1 << j), *cubes[k + 1 :]]
                assert wrong_points(Cover.of(table.inputs, fewer), none, table)
        for i in range(table.inputs):
            bit = 1 << i
            if (cube.ones | cube.zeros) & bit:
                raised = cube._replace(ones=cube.ones & ~bit, zeros=cube.zeros & ~bit)
                more = Cover.of(table.inputs, [*cubes[:k], raised, *cubes[k + 1 :]])
                assert wrong_points(more, none, table)


@pytest.mark.parametrize("seed", range(40))
@pytest.mark.parametrize("allowed", [FREE, TRUE, COMPLEMENT], ids=["free", "true", "complement"])
def test_combinations_that_need_terms_of_their_own(seed, allowed):
    """The bound holds for samples in any order, and for those that the program takes."""
    table = sample(400 + seed, 4, 2)
    function = function_of(table)
    phases = phases_of([allowed] * table.outputs)
    on, off = phase_function(function, phases)
    if allowed == FREE:
        least = cover_search.fewest_terms_free(table)
    else:
        least = cover_search.fewest_terms(table.in_polarity([not allowed.true] * table.outputs))
    every = [{} for _ in range(table.outputs)]
    taken = [{} for _ in range(table.outputs)]
    for bit, phase in enumerate(phases):
        wanted = table.off if phase.complemented else table.on
        points = [p for p in range(1 << table.inputs) if wanted[phase.output] >> p & 1]
        random.Random(seed).shuffle(points)
        every[phase.output][bit] = points
        cover = heuristic_cover(on.of_output(bit), off.of_output(bit), 1)
        taken[phase.output][bit] = sample_points(cover, on.of_output(bit))
        assert set(taken[phase.output][bit]) <= set(points)
    assert independent_bound(every, off) <= least
    assert independent_bound(taken, off) <= least
    assert independent_bound(taken[::-1], off) <= least


def test_an_address_decoder_of_18_inputs_has_a_telling_bound():
    """Eight selects of one term each; all complemented they share the seven single literals."""
    selects = [Cube.parse(f"{k:03b}" + "-" * 14 + "1", 1 << k) for k in range(8)]
    on = Cover.of(18, selects)
    sets = [(on.of_output(k), complement(on.of_output(k))) for k in range(8)]
    function = Function.of_outputs(18, sets)
    true = minimize_wide(function, [TRUE] * 8, Effort())
    assert (len(true.cover), true.exact) == (8, 8)
    free = minimize_wide(function, [FREE] * 8, Effort())
    assert len(free.cover) == 7
    assert 4 <= free.exact <= 7


@pytest.mark.parametrize(
    ("inputs", "seed"),
    [(18, 1), *(pytest.param(*case, marks=pytest.mark.slow) for case in ((20, 2), (24, 3)))],
)
def test_wide_sums_of_products_by_simulation(inputs, seed):
    rng = random.Random(seed)
    rows = []
    for _ in range(8):
        ones = zeros = 0
        for i in rng.sample(range(inputs), 5):
            if rng.random() < 0.5:
                ones |= 1 << i
            else:
                zeros |= 1 << i
        rows.append((ones, zeros, rng.choice((1, 2, 3))))
    made = Cover.of(inputs, rows)
    sets = [(made.of_output(j), complement(made.of_output(j))) for j in (0, 1)]
    function = Function.of_outputs(inputs, sets)
    found = minimize(function, [TRUE, TRUE])
    assert found.lower_bound <= found.count <= len(rows)
    points = np.random.default_rng(seed).integers(0, 1 << inputs, 50_000, dtype=np.uint64)
    assert (cover_at(found.cover, points) == cover_at(made, points)).all()
    free = minimize(function)
    inverted = np.uint64(sum(1 << j for j, c in enumerate(free.complemented) if c))
    assert ((cover_at(free.cover, points) ^ inverted) == cover_at(made, points)).all()
    assert free.lower_bound <= free.count <= found.count


def test_more_phases_than_a_mask_has_bits():
    """40 outputs in either polarity are 80 phases: the polarities are guessed, the rest exact."""
    table = sample(0, 4, 3)
    copies = 40 // table.outputs
    wide = type(table)(table.inputs, table.on * copies, table.off * copies)
    assert wide.outputs > 32
    polarities = [FREE] * wide.outputs
    found = minimize(function_of(wide), polarities)
    assert wrong_points(found.cover, found.complemented, wide) == []
    # Equal outputs cost no more than one of them.
    assert found.lower_bound <= cover_search.fewest_terms_free(table) <= found.count
