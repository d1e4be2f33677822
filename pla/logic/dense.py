"""A function as an array over all its input combinations: a private matter of the dense minimizer.

An array over n inputs has the shape ``(2,) * n``; axis ``i`` is input ``i``.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from pla.logic.cubes import Cover, Words

__all__ = ["MAX_DENSE_INPUTS", "coordinates", "cube_slices", "fed_outputs", "smallest_type"]

MAX_DENSE_INPUTS = 16


def smallest_type(bits: int) -> type[np.unsignedinteger[Any]]:
    """The narrowest unsigned word that holds a mask of this many bits (at most 64)."""
    for size, kind in ((8, np.uint8), (16, np.uint16), (32, np.uint32)):
        if bits <= size:
            return kind
    return np.uint64


def fed_outputs(cover: Cover) -> NDArray[np.uint64]:
    """``uint64[2, … 2]``: for every input combination the mask of outputs that the cover feeds."""
    n = cover.n_inputs
    array = np.zeros((2,) * n, dtype=np.uint64)
    whole = np.bitwise_count(cover.ones | cover.zeros) == n
    points = cover.take(whole)
    np.bitwise_or.at(array.reshape(-1), _flat(points.ones, n), points.outputs)
    for k in np.flatnonzero(~whole):
        array[cube_slices(cover, int(k))] |= cover.outputs[k]
    return array


def cube_slices(cover: Cover, k: int) -> tuple[int | slice, ...]:
    """The index of a dense array that picks the combinations of the cover's cube `k`."""
    ones, zeros = int(cover.ones[k]), int(cover.zeros[k])
    everything = slice(None)
    return tuple(
        1 if ones >> i & 1 else 0 if zeros >> i & 1 else everything for i in range(cover.n_inputs)
    )


def coordinates(chosen: NDArray[np.bool_]) -> Words:
    """``uint64[k]``: the chosen input combinations of a dense array, as words (bit i: input i)."""
    n = chosen.ndim
    flat = np.flatnonzero(chosen).astype(np.uint64)
    words = np.zeros_like(flat)
    for i in range(n):
        words |= (flat >> np.uint64(n - 1 - i) & np.uint64(1)) << np.uint64(i)
    return words


def _flat(points: Words, n: int) -> NDArray[np.intp]:
    index = np.zeros(len(points), dtype=np.intp)
    for i in range(n):
        index |= (points >> np.uint64(i) & np.uint64(1)).astype(np.intp) << (n - 1 - i)
    return index
