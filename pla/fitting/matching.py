"""Matching in bipartite graphs by augmenting paths.

The method of C. Berge, "Two theorems in graph theory", Proc. National Academy of Sciences 43, 1957:
a matching is largest exactly when no augmenting path is left.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["can_match", "first_matching", "largest_matching"]


def largest_matching(choices: Sequence[Sequence[int]]) -> dict[int, int]:
    """As many members as possible, each with a partner of its own.

    Args:
        choices: For each member the partners that it could have, in order of preference.

    Returns:
        Partner of each matched member.
    """
    member_of: dict[int, int] = {}

    def place(member: int, seen: set[int]) -> bool:
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


def can_match(choices: Sequence[Sequence[int]]) -> bool:
    """Whether every member can have a partner of its own."""
    return len(largest_matching(choices)) == len(choices)


def first_matching(choices: Sequence[Sequence[int]]) -> list[int] | None:
    """The matching in which the first member has its most preferred partner possible, and so on.

    ``None`` if some member has to go without.
    """
    if not can_match(choices):
        return None
    settled: list[Sequence[int]] = list(choices)
    for member, wishes in enumerate(choices):
        for partner in wishes:
            settled[member] = [partner]
            if can_match(settled):
                break
    return [wish[0] for wish in settled]
