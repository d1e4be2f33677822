"""Complements of short lists of cubes on plain integers: a private matter of `pla.logic.algebra`.

Below a few dozen cubes the calls of whole-array methods cost more than the work in them.
"""

from __future__ import annotations

__all__ = ["MOST", "Masks", "TooManyCubesError", "complement_masks"]

MOST = 24

Masks = tuple[int, int]
"""Inputs that must be 1, inputs that must be 0."""


class TooManyCubesError(Exception):
    """A cover would need more cubes than the caller wants."""


def complement_masks(cubes: list[Masks], most: int | None) -> list[Masks]:
    """Disjoint cubes of everything outside these cubes, by the unate recursive paradigm.

    Raises:
        TooManyCubesError: If there would be more than `most`.
    """
    if not cubes:
        return [(0, 0)]
    for ones, zeros in cubes:
        if not ones | zeros:
            return []
    if len(cubes) == 1:
        return _outside(*cubes[0])
    bit = _split_bit(cubes)
    low = complement_masks([(o, z & ~bit) for o, z in cubes if not o & bit], most)
    high = complement_masks([(o & ~bit, z) for o, z in cubes if not z & bit], most)
    in_low, in_high = set(low), set(high)
    found = [cube for cube in low if cube in in_high]
    found += [(o, z | bit) for o, z in low if (o, z) not in in_high]
    found += [(o | bit, z) for o, z in high if (o, z) not in in_low]
    if most is not None and len(found) > most:
        raise TooManyCubesError
    return found


def _outside(ones: int, zeros: int) -> list[Masks]:
    found = []
    done_ones = done_zeros = 0
    literals = ones | zeros
    while literals:
        bit = literals & -literals
        literals ^= bit
        if ones & bit:
            found.append((done_ones, done_zeros | bit))
            done_ones |= bit
        else:
            found.append((done_ones | bit, done_zeros))
            done_zeros |= bit
    return found


def _split_bit(cubes: list[Masks]) -> int:
    """The most binate input, else the one that most cubes depend on."""
    literals = 0
    for ones, zeros in cubes:
        literals |= ones | zeros
    best, best_weight = 0, -1
    while literals:
        bit = literals & -literals
        literals ^= bit
        plus = sum(1 for ones, _ in cubes if ones & bit)
        minus = sum(1 for _, zeros in cubes if zeros & bit)
        weight = min(plus, minus) * (2 * len(cubes) + 1) + plus + minus
        if weight > best_weight:
            best, best_weight = bit, weight
    return best
