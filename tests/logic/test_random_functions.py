"""Random incompletely specified functions against minimizers of another origin."""

from __future__ import annotations

import math
import random
from dataclasses import replace
from functools import cache

import pytest
from making import TRUE, function_of, random_table, wrong_points
from oracles import cover_search
from oracles.second_opinion import heuristic_covers

from pla.logic import connections
from pla.logic.cubes import Cover
from pla.logic.minimize import minimize

ALL = 300


def batches(every_day):
    first = pytest.param(0, every_day, id=f"first-{every_day}")
    rest = pytest.param(every_day, ALL, id=f"to-{ALL}", marks=pytest.mark.slow)
    return pytest.mark.parametrize(("first", "end"), [first, rest])


@pytest.fixture
def _terms_only(monkeypatch):
    """Leave the second objective out of larger blocks: it takes longest and has its own tests."""
    monkeypatch.setattr(connections, "MAX_LINKS", 150)
    monkeypatch.setattr(connections, "MAX_FREE_LINKS", 150)


@cache
def table_number(seed):
    """3 to 7 inputs, 1 to 5 outputs; in each third one inputs that never occur."""
    rng = random.Random(seed)
    inputs, outputs = rng.randint(3, 7), rng.randint(1, 5)
    impossible = rng.randint(1, 4) if seed % 3 == 0 else 0
    dont_care, ones = rng.choice((0.0, 0.1, 0.4, 0.7)), rng.choice((0.2, 0.5, 0.8))
    return random_table(rng, inputs, outputs, dont_care, ones, impossible)


@batches(50)
@pytest.mark.usefixtures("_terms_only")
def test_random_functions_against_a_heuristic(first, end):
    tables = [table_number(seed) for seed in range(first, end)]
    references = heuristic_covers(tables)
    assert sum(r is None for r in references) <= len(tables) // 20
    for seed, table, reference in zip(range(first, end), tables, references, strict=True):
        found = minimize(function_of(table), [TRUE] * table.outputs)
        assert wrong_points(found.cover, found.complemented, table) == [], seed
        assert found.complemented == (False,) * table.outputs
        assert found.lower_bound == found.count or not found.proven, seed
        if reference is not None:
            other = Cover.of(table.inputs, reference)
            assert wrong_points(other, found.complemented, table) == [], seed
            assert found.count <= len(other), seed
            assert found.lower_bound <= len(other), seed


@batches(12)
@pytest.mark.usefixtures("_terms_only")
def test_random_functions_with_free_polarity(first, end):
    for seed in range(first, end):
        table = table_number(seed)
        found = minimize(function_of(table))
        assert wrong_points(found.cover, found.complemented, table) == [], seed
        chosen = table.in_polarity(found.complemented)
        again = minimize(function_of(chosen), [TRUE] * table.outputs)
        assert found.count == again.count or not (found.proven and again.proven), seed


def small_table(seed):
    rng = random.Random(1000 + seed)
    inputs, outputs = rng.randint(1, 4), rng.randint(1, 2)
    impossible = rng.randint(1, 4) if seed % 3 == 0 else 0
    return random_table(rng, inputs, outputs, rng.choice((0.0, 0.2, 0.5)), 0.5, impossible)


@pytest.mark.parametrize("seed", range(80))
def test_small_functions_against_exhaustive_search(seed):
    table = small_table(seed)
    function = function_of(table)
    true = minimize(function, [TRUE] * table.outputs)
    free = minimize(function)
    for found in (true, free):
        assert wrong_points(found.cover, found.complemented, table) == []
        assert found.proven
        assert found.lower_bound == found.count
    assert true.count == cover_search.fewest_terms(table)
    assert free.count == cover_search.fewest_terms_free(table)


def tiny_table(seed):
    rng = random.Random(2000 + seed)
    inputs, outputs = rng.randint(1, 3), rng.randint(1, 2)
    return random_table(rng, inputs, outputs, rng.choice((0.0, 0.2, 0.5)))


@pytest.mark.parametrize("seed", range(120))
def test_tiny_functions_have_the_fewest_connections(seed):
    table = tiny_table(seed)
    function = function_of(table)
    true = minimize(function, [TRUE] * table.outputs)
    assert true.connections == "all polarities"
    assert true.cover.links == cover_search.fewest_connections(table, true.count)
    free = minimize(function)
    assert free.connections == "all polarities"
    assert free.cover.links == cover_search.fewest_connections_free(table, free.count)


@pytest.mark.parametrize("seed", range(40))
def test_connections_are_claimed_fewest_only_where_they_are(seed, monkeypatch):
    # A program that gives back its start unchanged proves nothing.
    genuine = connections.solve_integer

    def idle(solver, start, *rest):
        outcome = genuine(solver, start, *rest)
        x = None if start is None else start.astype(int)
        return replace(outcome, x=x, bound=-math.inf, optimal=False)

    monkeypatch.setattr(connections, "solve_integer", idle)
    table = tiny_table(seed)
    for polarities in ([TRUE] * table.outputs, None):
        found = minimize(function_of(table), polarities)
        assert wrong_points(found.cover, found.complemented, table) == []
        assert found.connections is None or not found.count


@pytest.mark.parametrize("seed", range(12))
def test_single_outputs_against_sympy(seed):
    from sympy import SOPform, symbols
    from sympy.logic.boolalg import Or

    rng = random.Random(3000 + seed)
    table = random_table(rng, rng.randint(3, 5), 1, 0.2)
    on, off = table.on[0], table.off[0]
    if not on or not off:
        return
    names = symbols(f"x:{table.inputs}")
    every = range(1 << table.inputs)

    def point(p):
        return [p >> i & 1 for i in range(table.inputs)]

    form = SOPform(
        names,
        [point(p) for p in every if on >> p & 1],
        [point(p) for p in every if not (on | off) >> p & 1],
    )
    for p in every:
        if (on | off) >> p & 1:
            value = form.subs(dict(zip(names, point(p), strict=True)))
            assert bool(value) == bool(on >> p & 1)
    terms = len(form.args) if isinstance(form, Or) else 1
    assert minimize(function_of(table), [TRUE]).count <= terms
