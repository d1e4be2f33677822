"""The same input gives the same answer, however its cubes are ordered and wherever it runs."""

from __future__ import annotations

import json
import random
import subprocess
import sys
from pathlib import Path

import pytest
from making import FREE, TRUE, function_of, random_table, wrong_points
from oracles.functions import adder, count_of_ones, seven_segments

from pla.logic.algebra import compact
from pla.logic.cubes import Cover
from pla.logic.effort import Effort
from pla.logic.function import Function
from pla.logic.minimize import minimize, ordered_terms
from pla.logic.wide import minimize_wide

TABLES = {
    "seven segments": seven_segments(),
    "rd53": count_of_ones(5),
    "adr3": adder(3),
    "random": random_table(random.Random(1), 5, 3, 0.3),
    "random with common don't cares": random_table(random.Random(2), 5, 4, 0.1, 0.5, 3),
}


def answer(name, allowed):
    table = TABLES[name]
    found = minimize(function_of(table), [allowed] * table.outputs)
    return [
        [list(cube) for cube in found.cover],
        list(found.complemented),
        found.lower_bound,
        found.proven_by,
        found.connections,
        found.primes,
    ]


def all_answers():
    return {
        f"{name} {allowed}": answer(name, allowed) for name in TABLES for allowed in (TRUE, FREE)
    }


def test_the_same_answer_again_and_in_another_process():
    here = all_answers()
    assert all_answers() == here
    script = "import json, test_determinism as t; print(json.dumps(t.all_answers()))"
    folder = Path(__file__).parent
    paths = [str(folder), str(folder.parent), *sys.path]
    child = subprocess.run(
        [sys.executable, "-c", f"import sys; sys.path[:0] = {paths!r}; {script}"],
        capture_output=True,
        text=True,
        check=True,
        env={"PYTHONHASHSEED": "1"},
    )
    assert json.loads(child.stdout) == here


def shuffled(function, rng):
    def other(cover):
        order = list(cover)
        rng.shuffle(order)
        return Cover.of(cover.n_inputs, order)

    return Function(function.n_inputs, function.n_outputs, other(function.on), other(function.off))


@pytest.mark.parametrize("name", TABLES)
def test_the_order_of_cubes_does_not_matter(name):
    table = TABLES[name]
    function = function_of(table)
    first = minimize(function)
    rng = random.Random(name)
    for _ in range(2):
        again = minimize(shuffled(function, rng))
        assert (again.cover, again.complemented) == (first.cover, first.complemented)
        assert again.lower_bound == first.lower_bound
    joined = Function(table.inputs, table.outputs, compact(function.on), compact(function.off))
    again = minimize(joined)
    assert (again.cover, again.complemented) == (first.cover, first.complemented)


@pytest.mark.parametrize("name", TABLES)
def test_the_order_of_cubes_does_not_matter_on_the_wide_road(name):
    table = TABLES[name]
    allowed = [TRUE] * table.outputs
    function = function_of(table)
    first = minimize_wide(function, allowed, Effort())
    again = minimize_wide(shuffled(function, random.Random(name)), allowed, Effort())
    assert wrong_points(again.cover, again.complemented, table) == []
    assert (again.cover, again.exact) == (first.cover, first.exact)


@pytest.mark.parametrize("seed", range(10))
def test_terms_are_listed_in_a_fixed_order(seed):
    table = random_table(random.Random(seed), 4, 3, 0.2)
    cover = minimize(function_of(table)).cover
    order = {"1": 0, "0": 1, "-": 2}
    keys = [(-c.outputs.bit_count(), [order[x] for x in c.text(4)]) for c in cover]
    assert keys == sorted(keys)
    assert ordered_terms(Cover.of(4, list(cover)[::-1])) == cover
