"""A lower bound that needs no primes: required combinations of which no two share a term.

Two combinations can be covered by one term only if the smallest cube that holds both touches
nothing that a phase of the term must not have. A set of combinations that are pairwise apart in
this sense needs as many terms as it has members. Where polarities are free, an output brings a set
for each of its phases, apart from all sets of the other outputs: whatever polarities are chosen,
the smaller set of each output counts.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.cubes import Cover, Words

__all__ = ["independent_bound", "sample_points"]

MAX_SAMPLES = 400

Samples = dict[int, list[int]]
"""For each phase of an output (by its bit) required combinations, the most telling first."""


def independent_bound(outputs: Sequence[Samples], off: Cover) -> int:
    """Terms that every cover needs in any of the polarities.

    The sets are taken greedily in the given order, so the bound is valid but not the best of its
    kind.

    Args:
        outputs: The samples of each output.
        off: What no term may touch; output masks speak of phases.
    """
    settled: list[tuple[int, int]] = []
    total = 0
    for phases in outputs:
        sets = {
            bit: _apart_from_each_other(points, bit, settled, off) for bit, points in phases.items()
        }
        size = min((len(points) for points in sets.values()), default=0)
        settled += [(point, bit) for bit, points in sets.items() for point in points[:size]]
        total += size
    return total


def sample_points(cover: Cover, on: Cover) -> list[int]:
    """Required combinations of one output, those first that fewest terms of a cover reach."""
    everything = (1 << on.n_inputs) - 1
    found: set[tuple[int, int]] = set()
    for cube in on:
        for point in (cube.ones, ~cube.zeros & everything):
            x = np.uint64(point)
            reach = int((((cover.ones & ~x) | (cover.zeros & x)) == 0).sum())
            found.add((reach, point))
    return [point for _, point in sorted(found)[:MAX_SAMPLES]]


def _apart_from_each_other(
    points: Sequence[int], bit: int, settled: Sequence[tuple[int, int]], off: Cover
) -> list[int]:
    """Points of one phase that are pairwise apart, and apart from what is settled."""
    own = off.take((off.outputs & np.uint64(1 << bit)) != 0)
    of_phase = {bit: own}
    for _, other in settled:
        if other not in of_phase:
            mask = np.uint64(1 << bit | 1 << other)
            of_phase[other] = off.take((off.outputs & mask) != 0)
    others = [
        (walls, np.array([p for p, o in settled if o == other], dtype=np.uint64))
        for other, walls in of_phase.items()
    ]
    chosen: list[int] = []
    for point in points:
        if _apart(point, np.array(chosen, dtype=np.uint64), own) and all(
            _apart(point, there, walls) for walls, there in others
        ):
            chosen.append(point)
    return chosen


def _apart(point: int, others: Words, walls: Cover) -> bool:
    """Whether a wall stands in the smallest cube of the point and each of the others."""
    if not len(others):
        return True
    at = np.uint64(point)
    blocking = (walls.ones & ~at) | (walls.zeros & at)
    # A wall meets the smallest cube where the inputs on which it differs are free there.
    return bool(((blocking & ~(others ^ at)[:, None]) == 0).any(axis=1).all())
