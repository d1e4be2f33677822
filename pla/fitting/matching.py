"""Matching in bipartite graphs by augmenting paths.

The method of C. Berge, "Two theorems in graph theory", Proc. National Academy of Sciences 43, 1957:
a matching is largest exactly when no augmenting path is left.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeVar

if TYPE_CHECKING:
    from collections.abc import Hashable, Sequence

__all__ = ["can_match", "deficient", "largest_matching"]

P = TypeVar("P", bound="Hashable")


def largest_matching(choices: Sequence[Sequence[P]]) -> dict[int, P]:
    """As many members as possible, each with a partner of its own.

    Args:
        choices: For each member the partners that it could have, in order of preference.

    Returns:
        Partner of each matched member.
    """
    member_of: dict[P, int] = {}

    def place(member: int, seen: set[P]) -> bool:
        for partner in choices[member]:
            if partner in seen:
                continue
            seen.add(partner)
            if partner not in member_of or place(member_of[partner], seen):
                member_of[partner] = member
                return True
        return False

    for member in range(len(choices)):
        place(member, set())
    return {member: partner for partner, member in member_of.items()}


def can_match(choices: Sequence[Sequence[P]]) -> bool:
    """Whether every member can have a partner of its own."""
    return len(largest_matching(choices)) == len(choices)


def deficient(choices: Sequence[Sequence[P]]) -> tuple[frozenset[int], frozenset[P]] | None:
    """Members that have fewer partners between them than they are; ``None`` if all can be matched.

    By the theorem of P. Hall, "On representatives of subsets", Journal of the London Mathematical
    Society 10, 1935, there are such members whenever some member has to go without.

    Returns:
        These members, and all partners that any of them could have.
    """
    matching = largest_matching(choices)
    left = next((m for m in range(len(choices)) if m not in matching), None)
    if left is None:
        return None
    member_of = {partner: member for member, partner in matching.items()}
    members, partners = {left}, set[P]()
    waiting = [left]
    while waiting:
        for partner in choices[waiting.pop()]:
            if partner in partners:
                continue
            partners.add(partner)
            member = member_of[partner]  # a free partner would have been an augmenting path
            if member not in members:
                members.add(member)
                waiting.append(member)
    return frozenset(members), frozenset(partners)
