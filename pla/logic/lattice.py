"""All multi-output prime implicants of a dense function, read off the lattice of its cubes.

Every cube over n inputs is a point of the ternary lattice 3^n (0, 1, dash on each axis). With each
is kept the mask of outputs that are nowhere 0 on the whole cube: an implicant of those outputs. The
mask of a cube with a dash is the AND of the masks of its two halves, so one AND an axis fills the
lattice. A cube is a multi-output prime exactly when raising any of its literals loses an output.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from pla.logic.cubes import Cover
from pla.logic.dense import MAX_DENSE_INPUTS, fed_outputs, smallest_type

if TYPE_CHECKING:
    from numpy.typing import NDArray

__all__ = ["dense_primes"]


def dense_primes(off: Cover, n_outputs: int) -> Cover:
    """All multi-output prime implicants of the functions that are 0 exactly on `off`.

    Args:
        off: For each output the combinations where it must be 0; at most 16 inputs.
        n_outputs: At most 64.

    Returns:
        The primes, sorted, each with the mask of all outputs of which it is an implicant. Primes
        that cover nothing but don't cares are among them.

    Raises:
        ValueError: For more than 16 inputs.
    """
    n = off.n_inputs
    if n > MAX_DENSE_INPUTS:
        raise ValueError(f"the lattice holds at most {MAX_DENSE_INPUTS} inputs, not {n}")
    everything = np.uint64((1 << n_outputs) - 1)
    lattice: NDArray[Any] = (fed_outputs(off) ^ everything).astype(smallest_type(n_outputs))
    for axis in range(n):
        low, high = (lattice.take(value, axis) for value in (0, 1))
        lattice = np.stack((low, high, low & high), axis)
    beaten = np.asarray(lattice == 0)
    for axis in range(n):
        values, losers = np.moveaxis(lattice, axis, 0), np.moveaxis(beaten, axis, 0)
        losers[:2] |= values[:2] == values[2]
    return _cubes(lattice, ~beaten)


def _cubes(lattice: NDArray[Any], chosen: NDArray[np.bool_]) -> Cover:
    n = lattice.ndim
    flat = np.flatnonzero(chosen)
    outputs = lattice.reshape(-1)[flat].astype(np.uint64)
    ones, zeros = np.zeros_like(outputs), np.zeros_like(outputs)
    for axis in reversed(range(n)):
        flat, digit = np.divmod(flat, 3)
        bit = np.uint64(1 << axis)
        ones[digit == 1] |= bit
        zeros[digit == 0] |= bit
    return Cover(n, ones, zeros, outputs).merged()
