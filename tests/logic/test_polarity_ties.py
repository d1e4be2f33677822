"""Devices that tie the polarities of outputs together, against all polarity vectors."""

from __future__ import annotations

import random

import pytest
from making import FREE, function_of, random_table, wrong_points
from oracles import cover_search
from oracles.functions import full_adder

from pla.logic import minimize_block as block
from pla.logic.effort import Effort
from pla.logic.minimize import minimize
from pla.logic.wide import minimize_wide


def completable(allowed):
    """Whether partly decided polarities agree with one of the allowed vectors."""

    def feasible(decisions):
        return any(
            all(d is None or d == c for d, c in zip(decisions, choice, strict=True))
            for choice in allowed
        )

    return feasible


def random_ties(rng, outputs):
    every = list(cover_search.polarities(outputs))
    return rng.sample(every, rng.randint(1, len(every) - 1))


@pytest.mark.parametrize("seed", range(40))
def test_ties_against_all_polarity_vectors(seed):
    rng = random.Random(seed)
    table = random_table(rng, rng.randint(1, 3), rng.randint(2, 3), rng.choice((0.0, 0.3)))
    allowed = random_ties(rng, table.outputs)
    expected = min(cover_search.fewest_terms(table.in_polarity(c)) for c in allowed)
    found = minimize(function_of(table), feasible=completable(allowed))
    assert found.complemented in allowed
    assert wrong_points(found.cover, found.complemented, table) == []
    assert (found.count, found.proven) == (expected, True)
    if found.connections is not None:
        chosen = table.in_polarity(found.complemented)
        assert found.cover.links == cover_search.fewest_connections(chosen, found.count)
    if found.connections == "all polarities":
        least = [
            cover_search.fewest_connections(table.in_polarity(c), found.count) for c in allowed
        ]
        assert found.cover.links == min(k for k in least if k is not None)


@pytest.mark.parametrize("seed", range(20))
def test_ties_with_rows_on_demand(seed, monkeypatch):
    monkeypatch.setattr(block, "_table_fits", lambda *_: False)
    rng = random.Random(100 + seed)
    table = random_table(rng, 3, 3, 0.2)
    allowed = random_ties(rng, 3)
    expected = min(cover_search.fewest_terms(table.in_polarity(c)) for c in allowed)
    found = minimize(function_of(table), feasible=completable(allowed))
    assert found.complemented in allowed
    assert wrong_points(found.cover, found.complemented, table) == []
    assert (found.count, found.proven) == (expected, True)


@pytest.mark.parametrize("seed", range(20))
def test_ties_on_the_wide_road(seed):
    rng = random.Random(200 + seed)
    table = random_table(rng, 3, 3, 0.2)
    allowed = random_ties(rng, 3)
    expected = min(cover_search.fewest_terms(table.in_polarity(c)) for c in allowed)
    found = minimize_wide(function_of(table), [FREE] * 3, Effort(), completable(allowed))
    assert found.complemented in allowed
    assert wrong_points(found.cover, found.complemented, table) == []
    assert found.exact <= expected <= len(found.cover)


def test_one_polarity_link_for_both_outputs():
    # The free minimum of the full adder is 5 with one output complemented.
    found = minimize(
        function_of(full_adder()), feasible=completable([(False, False), (True, True)])
    )
    assert found.complemented in ((False, False), (True, True))
    assert found.count == 7
