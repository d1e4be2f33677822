"""A lower bound that needs no primes: required combinations of which no two share a term.

Two combinations can be covered by one term only if the smallest cube that holds both touches
nothing that an output of the term must not have. A set of combinations that are pairwise apart in
this sense needs as many terms as it has members.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.logic.cubes import Cover

__all__ = ["independent_bound", "sample_points"]

MAX_SAMPLES = 600


def independent_bound(samples: Iterable[tuple[int, int]], off: Cover) -> int:
    """The size of a set of (combination, output) pairs that pairwise need terms of their own.

    Taken greedily in the given order, so the bound is valid but not the best of its kind.
    """
    chosen: list[tuple[int, int]] = []
    for point, output in samples:
        if all(_apart(point, output, *other, off) for other in chosen):
            chosen.append((point, output))
    return len(chosen)


def sample_points(cover: Cover, on: Cover, n_outputs: int) -> list[tuple[int, int]]:
    """Combinations that few terms of a cover reach, for each output; fewest first."""
    found: list[tuple[int, int, int]] = []
    for j in range(n_outputs):
        terms = cover.of_output(j)
        for cube in on.of_output(j):
            for point in {cube.ones, ~cube.zeros & ((1 << on.n_inputs) - 1)}:
                x = np.uint64(point)
                reach = int((((terms.ones & ~x) | (terms.zeros & x)) == 0).sum())
                found.append((reach, point, j))
    return [(point, j) for _, point, j in sorted(found)[:MAX_SAMPLES]]


def _apart(a: int, output_a: int, b: int, output_b: int, off: Cover) -> bool:
    differ = np.uint64(a ^ b)
    at = np.uint64(a)
    touched = (((off.ones & ~at) | (off.zeros & at)) & ~differ) == 0
    forbidden = np.uint64(1 << output_a | 1 << output_b)
    return bool((off.outputs[touched] & forbidden).any())
