"""Cubes, covers and their algebra, against sets of points made by definition."""

from __future__ import annotations

import itertools

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from pla.logic import algebra, points, small
from pla.logic import cubes as cubes_module
from pla.logic.cubes import Cover, Cube


def point_text(n, point):
    return "".join(str(point >> i & 1) for i in range(n))


def matches(text, point_string):
    return all(a in ("-", b) for a, b in zip(text, point_string, strict=True))


def held(cover):
    """{(point, output)} of everything that a cover holds, from the texts of its cubes."""
    n = cover.n_inputs
    texts = [(cube.text(n), cube.outputs) for cube in cover]
    return {
        (point, output)
        for point in range(1 << n)
        for text, outputs in texts
        if matches(text, point_text(n, point))
        for output in range(outputs.bit_length())
        if outputs >> output & 1
    }


def inside(cover):
    return {point for point, _ in held(cover)}


@st.composite
def covers(draw, n=None, most=14, outputs=1):
    """Covers of up to 7 inputs; few dashes or many."""
    n = draw(st.integers(0, 7)) if n is None else n
    signs = draw(st.sampled_from(["01", "01-", "01----"]))
    cube = st.tuples(
        st.text(alphabet=signs, min_size=n, max_size=n), st.integers(1, (1 << outputs) - 1)
    )
    return Cover.of(
        n, [Cube.parse(text, mask) for text, mask in draw(st.lists(cube, max_size=most))]
    )


@st.composite
def pairs(draw, most=14):
    n = draw(st.integers(0, 7))
    return draw(covers(n, most)), draw(covers(n, most))


@pytest.fixture(params=["recursive", "points", "integers"], autouse=True)
def road(request, monkeypatch):
    """All roads to a result: recursion on covers, arrays of points, recursion on integers."""
    if request.param == "points":
        monkeypatch.setattr(points, "_FEWEST_CUBES", 1)
        monkeypatch.setattr(points, "_POINTS_FOR_A_CUBE", 1 << 20)
        monkeypatch.setattr(algebra, "_PAIRS_AT_ONCE", 1)
        monkeypatch.setattr(cubes_module, "_KIND_COST", 0)
    else:
        monkeypatch.setattr(points, "WIDEST", -1)
        monkeypatch.setattr(cubes_module, "_KIND_COST", 1 << 30)
    if request.param != "integers":
        monkeypatch.setattr(small, "MOST", -1)
    return request.param


# The fixture sets constants for the whole test and holds nothing of an example.
relaxed = settings(
    max_examples=40,
    deadline=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)


@relaxed
@given(covers())
def test_complement(cover):
    everything = set(range(1 << cover.n_inputs))
    found = algebra.complement(cover)
    assert inside(found) == everything - inside(cover)
    # Disjoint, as `size` relies on.
    assert sum(1 << (cover.n_inputs - cube.literals) for cube in found) == len(inside(found))


@relaxed
@given(covers())
def test_size(cover):
    assert algebra.size(cover) == len(inside(cover))


@relaxed
@given(pairs())
def test_two_covers(two):
    a, b = two
    assert inside(algebra.union(a.n_inputs, a, b)) == inside(a) | inside(b)
    assert inside(algebra.intersection(a, b)) == inside(a) & inside(b)
    assert inside(algebra.difference(a, b)) == inside(a) - inside(b)


@relaxed
@given(covers())
def test_tautology(cover):
    assert algebra.is_tautology(cover) == (len(inside(cover)) == 1 << cover.n_inputs)


@relaxed
@given(covers(5), st.text(alphabet="01--", min_size=5, max_size=5))
def test_containment(cover, text):
    cube = Cube.parse(text)
    wanted = {p for p in range(32) if matches(text, point_text(5, p))}
    missing = wanted - inside(cover)
    assert algebra.contains_cube(cover, cube) == (not missing)
    point = algebra.find_outside(cube, cover)
    assert point in missing if missing else point is None


@relaxed
@given(pairs())
def test_common_cubes(two):
    a, b = two
    n = a.n_inputs
    expected = None
    for (i, x), (j, y) in itertools.product(enumerate(a), enumerate(b)):
        if inside(Cover.of(n, [x])) & inside(Cover.of(n, [y])):
            expected = (i, j)
            break
    assert algebra.find_common(a, b) == expected


@relaxed
@given(covers(outputs=3))
def test_compact(cover):
    found = algebra.compact(cover)
    assert held(found) == held(cover)
    assert len(found) <= len(cover)


def test_compact_joins_all_points_to_one_cube():
    for n in (1, 5, 10):
        every = (1 << n) - 1
        cover = Cover.of(n, [Cube(x, every & ~x, 5) for x in range(1 << n)])
        assert list(algebra.compact(cover)) == [Cube(0, 0, 5)]


@relaxed
@given(covers(outputs=3, most=20))
def test_absorbed(cover):
    n = cover.n_inputs
    listed = {}
    for cube in cover:
        listed[cube.text(n)] = listed.get(cube.text(n), 0) | cube.outputs
    expected = {
        (text, outputs)
        for text, outputs in listed.items()
        if not any(
            other != text and matches(other, text) and not outputs & ~wider
            for other, wider in listed.items()
        )
    }
    found = [(cube.text(n), cube.outputs) for cube in cover.absorbed()]
    assert set(found) == expected
    assert len(found) == len(expected)


@relaxed
@given(covers(outputs=3))
def test_covers_hold_what_their_texts_say(cover):
    n = cover.n_inputs
    points_held = held(cover)
    for point in range(1 << n):
        value = cover.value_at(point)
        assert {o for o in range(3) if value >> o & 1} == {o for p, o in points_held if p == point}
    for output in range(3):
        wanted = {p for p, o in points_held if o == output}
        assert inside(cover.of_output(output)) == wanted
    assert held(cover.merged()) == points_held
    assert len({(c.ones, c.zeros) for c in cover.merged()}) == len(cover.merged())
    assert cover.literals == sum(c.text(n).count("0") + c.text(n).count("1") for c in cover)


@given(st.text(alphabet="01-", max_size=64), st.text(alphabet="01-", max_size=64))
def test_cubes(first, second):
    n = min(len(first), len(second))
    first, second = first[:n], second[:n]
    a, b = Cube.parse(first), Cube.parse(second)
    assert a.text(n) == first
    assert a.literals == n - first.count("-")
    assert a.meets(b) == all(x == y or "-" in (x, y) for x, y in zip(first, second, strict=True))
    assert a.contains(b) == matches(first, second)
    cover = Cover.of(n, [b])
    assert cover.meeting(a).tolist() == [a.meets(b)]


def test_no_cube():
    with pytest.raises(ValueError, match="'x' is not 1, 0 or -"):
        Cube.parse("10x")


@relaxed
@given(covers())
def test_support(cover):
    n = cover.n_inputs
    texts = [cube.text(n) for cube in cover]
    used = {i for text in texts for i, sign in enumerate(text) if sign != "-"}
    assert algebra.support(cover) == sum(1 << i for i in used)


def test_sixty_four_inputs():
    high = Cube(1 << 63, 0)
    cover = Cover.of(64, [high, Cube(0, 1 << 63 | 1)])
    assert algebra.size(cover) == 2**63 + 2**62
    (outside,) = algebra.complement(cover)
    assert outside[:2] == (1, 1 << 63)
    assert algebra.is_tautology(cover + Cover.of(64, [outside]))
    assert list(algebra.difference(Cover.universe(64), Cover.of(64, [high]))) == [Cube(0, 1 << 63)]


def test_parity_of_eight():
    """2^(n-1) points, none of which join (any textbook)."""
    odd = Cover.of(8, [Cube(x, 255 & ~x) for x in range(256) if x.bit_count() % 2])
    even = algebra.complement(odd)
    assert len(even) == 128
    assert all(cube.literals == 8 for cube in even)
    assert algebra.size(odd) == 128
    assert algebra.find_common(odd, even) is None


@relaxed
@given(covers(6), st.integers(0, 20))
def test_complement_with_a_limit(cover, most):
    whole = algebra.complement(cover)
    if len(whole) <= most:
        assert algebra.complement(cover, most) == whole
    else:
        with pytest.raises(algebra.TooManyCubesError):
            algebra.complement(cover, most)


def test_complement_of_many_independent_terms_is_refused_soon():
    """The complement of k terms of 3 literals, none shared, has 3^k disjoint cubes."""
    terms = [Cube(7 << 3 * k, 0) for k in range(21)]
    assert len(algebra.complement(Cover.of(63, terms[:5]))) == 3**5
    with pytest.raises(algebra.TooManyCubesError):
        algebra.complement(Cover.of(63, terms), 500)
