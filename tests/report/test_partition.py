"""Dividing covers, against points one by one and against the other set operations."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from report_designs import holds

from pla.logic import algebra
from pla.logic.cubes import Cover, Cube
from pla.logic.partition import partition


def covers(n, most):
    cube = st.text("01--", min_size=n, max_size=n)
    return st.lists(cube, max_size=most).map(
        lambda texts: Cover.of(n, [Cube.parse(text, 3) for text in texts])
    )


@settings(max_examples=100, deadline=None)
@given(st.integers(1, 5).flatmap(lambda n: st.tuples(covers(n, 6), covers(n, 6))))
def test_every_point_is_in_one_cube_of_the_right_part(pair):
    cover, by = pair
    inside, outside = partition(cover, by)
    for p in range(1 << cover.n_inputs):
        held = any(holds(cube, p) for cube in cover)
        divided = any(holds(cube, p) for cube in by)
        assert sum(holds(cube, p) for cube in inside) == (held and divided)
        assert sum(holds(cube, p) for cube in outside) == (held and not divided)


@settings(max_examples=30, deadline=None)
@given(st.tuples(covers(14, 5), covers(14, 5)))
def test_many_inputs_agree_with_intersection_and_difference(pair):
    cover, by = pair
    inside, outside = partition(cover, by)
    for part, expected in (
        (inside, algebra.intersection(cover, by)),
        (outside, algebra.difference(cover, by)),
    ):
        assert not len(algebra.difference(part, expected))
        assert not len(algebra.difference(expected, part))
        assert sum(1 << (14 - cube.literals) for cube in part) == algebra.size(expected)
        assert all(cube.outputs == 1 for cube in part)


@pytest.mark.parametrize("n", [3, 20])
def test_nothing_and_everything(n):
    nothing, everything = Cover.of(n), Cover.universe(n)
    assert [len(part) for part in partition(nothing, everything)] == [0, 0]
    assert [len(part) for part in partition(everything, nothing)] == [0, 1]
    assert [len(part) for part in partition(everything, everything)] == [1, 0]
