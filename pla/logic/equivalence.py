"""Whether a cover realises a function: by all combinations where they are few, else by cubes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.logic import algebra
from pla.logic.dense import MAX_DENSE_INPUTS, coordinates, fed_outputs

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.cubes import Cover
    from pla.logic.function import Function

__all__ = ["Difference", "find_difference"]


@dataclass(frozen=True, slots=True)
class Difference:
    """An input combination at which an output is not what it must be.

    Attributes:
        output: Index of the output.
        point: Input combination; bit ``i`` is input ``i``.
        expected: The asserted value that the function demands.
    """

    output: int
    point: int
    expected: int


def find_difference(
    cover: Cover, complemented: Sequence[bool], function: Function
) -> Difference | None:
    """The first output, and for it some combination, where the cover breaks the function.

    Args:
        cover: Sums of products; output masks speak of outputs.
        complemented: Outputs whose asserted value is the complement of their sum.
        function: What is demanded.
    """
    finder = _by_combinations if function.n_inputs <= MAX_DENSE_INPUTS else _by_cubes
    return finder(cover, complemented, function)


def _by_combinations(
    cover: Cover, complemented: Sequence[bool], function: Function
) -> Difference | None:
    inverted = np.uint64(sum(1 << j for j, c in enumerate(complemented) if c))
    realised = fed_outputs(cover) ^ inverted
    wrong_on = fed_outputs(function.on) & ~realised
    wrong_off = fed_outputs(function.off) & realised
    for j in range(function.n_outputs):
        for wrong, expected in ((wrong_on, 1), (wrong_off, 0)):
            places = np.asarray(wrong >> np.uint64(j) & np.uint64(1)).astype(bool)
            if places.any():
                return Difference(j, int(coordinates(places)[0]), expected)
    return None


def _by_cubes(cover: Cover, complemented: Sequence[bool], function: Function) -> Difference | None:
    for j in range(function.n_outputs):
        realised = cover.of_output(j)
        inside, outside = function.on.of_output(j), function.off.of_output(j)
        if complemented[j]:
            inside, outside = outside, inside
        for cube in inside:
            point = algebra.find_outside(cube, realised)
            if point is not None:
                return Difference(j, point, int(not complemented[j]))
        pair = algebra.find_common(outside, realised)
        if pair is not None:
            a, b = list(outside)[pair[0]], list(realised)[pair[1]]
            return Difference(j, a.ones | b.ones, int(complemented[j]))
    return None
