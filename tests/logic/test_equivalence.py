"""Whether a cover realises a function: both roads against brute force."""

from __future__ import annotations

import random

import pytest
from making import function_of, random_cover, random_table, wrong_points

from pla.logic import equivalence
from pla.logic.algebra import complement
from pla.logic.cubes import Cover, Cube
from pla.logic.equivalence import find_difference
from pla.logic.function import Function
from pla.logic.minimize import minimize

ROADS = pytest.mark.parametrize(
    "road", [equivalence._by_combinations, equivalence._by_cubes], ids=["combinations", "cubes"]
)


def check(difference, wrong, table):
    if not wrong:
        assert difference is None
        return
    assert difference is not None
    place = (difference.output, difference.point)
    assert place in wrong
    assert difference.output == min(j for j, _ in wrong)
    sets = table.on if difference.expected else table.off
    assert sets[difference.output] >> difference.point & 1


@ROADS
@pytest.mark.parametrize("seed", range(60))
def test_any_cover_against_brute_force(road, seed):
    rng = random.Random(seed)
    inputs, outputs = rng.randint(1, 5), rng.randint(1, 4)
    table = random_table(rng, inputs, outputs, rng.choice((0.0, 0.3, 0.9)))
    cover = random_cover(rng, inputs, rng.randint(0, 6), outputs)
    complemented = [rng.random() < 0.5 for _ in range(outputs)]
    difference = road(cover, complemented, function_of(table))
    check(difference, wrong_points(cover, complemented, table), table)


@ROADS
@pytest.mark.parametrize("seed", range(20))
def test_planted_differences_are_found(road, seed):
    rng = random.Random(100 + seed)
    table = random_table(rng, 4, 3, 0.2)
    function = function_of(table)
    found = minimize(function)
    assert road(found.cover, found.complemented, function) is None
    cubes = list(found.cover)
    for k, cube in enumerate(cubes):
        planted = [cubes[:k] + cubes[k + 1 :]]
        for i in range(4):
            bit = 1 << i
            if cube.ones & bit:
                planted.append(
                    [
                        *cubes[:k],
                        cube._replace(ones=cube.ones ^ bit, zeros=cube.zeros | bit),
                        *cubes[k + 1 :],
                    ]
                )
            if (cube.ones | cube.zeros) & bit:
                planted.append(
                    [
                        *cubes[:k],
                        cube._replace(ones=cube.ones & ~bit, zeros=cube.zeros & ~bit),
                        *cubes[k + 1 :],
                    ]
                )
        planted += [
            [*cubes[:k], cube._replace(outputs=cube.outputs ^ 1 << j), *cubes[k + 1 :]]
            for j in range(3)
        ]
        for other in planted:
            cover = Cover.of(4, other).fed()
            wrong = wrong_points(cover, found.complemented, table)
            check(road(cover, found.complemented, function), wrong, table)
    for j in range(3):
        inverted = list(found.complemented)
        inverted[j] = not inverted[j]
        wrong = wrong_points(found.cover, inverted, table)
        check(road(found.cover, inverted, function), wrong, table)


@pytest.mark.parametrize("inputs", [17, 30, 64])
def test_one_missing_combination_of_a_wide_function_is_found(inputs):
    rng = random.Random(inputs)
    # Few cubes with few literals: the sum must meet the walls only where one is planted.
    made = random_cover(rng, inputs, 5, 1, 4 / inputs)
    off = complement(made)
    function = Function(inputs, 1, made.feeding(1), off.feeding(1))
    assert find_difference(made, [False], function) is None
    assert find_difference(off, [True], function) is None
    point = rng.getrandbits(inputs)
    hole = Cube(point, ~point & ((1 << inputs) - 1))
    expected = made.value_at(point)
    spoilt = complement(complement(made) + Cover.of(inputs, [hole]))
    if not expected:
        spoilt = made + Cover.of(inputs, [hole])
    difference = find_difference(spoilt, [False], function)
    assert difference is not None
    assert (difference.output, difference.point, difference.expected) == (0, point, expected)
