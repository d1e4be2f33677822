"""Matching held against trying everything."""

from itertools import combinations, permutations

from hypothesis import given, settings
from hypothesis import strategies as st

from pla.fitting.matching import can_match, deficient, largest_matching

choices_lists = st.lists(
    st.lists(st.integers(0, 5), unique=True, max_size=5), min_size=1, max_size=5
)


def all_matchings(choices):
    """Every way to give each member a partner of its own."""
    for partners in permutations(range(6), len(choices)):
        if all(p in c for p, c in zip(partners, choices, strict=True)):
            yield list(partners)


@settings(deadline=None)
@given(choices_lists)
def test_largest_matching_leaves_out_as_few_as_possible(choices):
    found = largest_matching(choices)
    assert all(partner in choices[member] for member, partner in found.items())
    assert len(set(found.values())) == len(found)
    most = max(
        size
        for size in range(len(choices) + 1)
        if size == 0
        or any(
            next(all_matchings([choices[m] for m in members]), None)
            for members in combinations(range(len(choices)), size)
        )
    )
    assert len(found) == most


@settings(deadline=None)
@given(choices_lists)
def test_deficient_members_are_more_than_their_partners(choices):
    """P. Hall, "On representatives of subsets", Journal of the London Mathematical Society 10,
    1935: such members exist exactly where not everyone can have a partner.
    """
    found = deficient(choices)
    possible = next(all_matchings(choices), None) is not None
    assert can_match(choices) == possible
    assert (found is None) == possible
    if found is not None:
        members, partners = found
        assert partners == {p for m in members for p in choices[m]}
        assert len(members) == len(partners) + 1
