"""The cheapest way to give every member a partner of its own.

The Hungarian method: H. W. Kuhn, "The Hungarian method for the assignment problem", Naval Research
Logistics Quarterly 2, 1955, as shortest augmenting paths with potentials: J. Edmonds, R. M. Karp,
"Theoretical improvements in algorithmic efficiency for network flow problems", Journal of the ACM
19(2), 1972. Costs are whole numbers of any size, so that objectives of any number can be put one
above the other without rounding.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeVar

if TYPE_CHECKING:
    from collections.abc import Hashable, Mapping, Sequence

__all__ = ["cheapest_assignment"]

P = TypeVar("P", bound="Hashable")


def cheapest_assignment(costs: Sequence[Mapping[P, int]]) -> list[P] | None:
    """A partner for every member, each partner taken once, at the least total cost.

    Args:
        costs: For each member the partners that it could have, with the cost of each, at least 0.

    Returns:
        The partner of each member; ``None`` if some member has to go without.
    """
    partners = list(dict.fromkeys(partner for wishes in costs for partner in wishes))
    if len(partners) < len(costs):
        return None
    # A cost above that of every assignment stands for a partner that a member cannot have.
    barred = 1 + sum(max(wishes.values(), default=0) for wishes in costs)
    table = [[wishes.get(partner, barred) for partner in partners] for wishes in costs]
    member_of = _augmented(table, len(partners))
    found = {member: column for column, member in enumerate(member_of) if member is not None}
    if any(table[member][column] == barred for member, column in found.items()):
        return None
    return [partners[found[member]] for member in range(len(costs))]


def _augmented(table: Sequence[Sequence[int]], width: int) -> list[int | None]:
    """The member of each column in a cheapest assignment."""
    row_price = [0] * len(table)
    column_price = [0] * width
    member_of: list[int | None] = [None] * width
    for start in range(len(table)):
        distance: list[int | None] = [None] * width
        before: list[int | None] = [None] * width
        done = [False] * width
        member: int | None = start
        reached: int | None = None
        while member is not None:
            lowest: int | None = None
            nearest = -1
            row, price = table[member], row_price[member]
            for column in range(width):
                if done[column]:
                    continue
                length = row[column] - price - column_price[column]
                known = distance[column]
                if known is None or length < known:
                    distance[column] = known = length
                    before[column] = reached
                if lowest is None or known < lowest:
                    lowest, nearest = known, column
            if lowest is None:  # pragma: no cover - there are as many columns as rows
                raise AssertionError
            row_price[start] += lowest
            for column in range(width):
                if done[column]:
                    other = member_of[column]
                    if other is not None:
                        row_price[other] += lowest
                    column_price[column] -= lowest
                else:
                    distance[column] = (distance[column] or 0) - lowest
            done[nearest] = True
            reached = nearest
            member = member_of[nearest]
        while reached is not None:
            back = before[reached]
            member_of[reached] = start if back is None else member_of[back]
            reached = back
    return member_of
