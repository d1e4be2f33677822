"""Finding rows that contradict each other, without comparing every two of them."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from pla.logic.cubes import Cover

__all__ = ["find_conflicts"]

_LEAF = 128
_PAIRS_AT_ONCE = 1 << 20


def find_conflicts(
    cubes: Cover, owner: NDArray[np.intp], values: NDArray[np.uint64], most: int
) -> list[tuple[int, int, int]]:
    """Rows with different values that have an input combination in common.

    The cubes are split on the input that parts them best until few are left, as in the unate
    recursive methods of `pla.logic.algebra`.

    Args:
        cubes: The input combinations.
        owner: ``intp[k]``, the row of each cube.
        values: ``uint64[rows, 3]``, what each row gives.
        most: How many conflicts are enough.

    Returns:
        (earlier row, later row, a common input combination), at most one for each two rows.
    """
    found: dict[tuple[int, int], int] = {}
    _, kind = np.unique(values, axis=0, return_inverse=True)
    kinds = kind.reshape(-1)[owner] if len(owner) else np.zeros(0, dtype=np.intp)
    stack = [np.arange(len(cubes))]
    while stack and len(found) < most:
        chosen = stack.pop()
        if len(chosen) < 2 or (kinds[chosen] == kinds[chosen[0]]).all():
            continue
        halves = _split(cubes, chosen) if len(chosen) > _LEAF else None
        if halves is None:
            _compare(cubes, owner, kinds, chosen, found, most)
        else:
            stack += halves
    return sorted((first, second, point) for (first, second), point in found.items())


def _split(cubes: Cover, chosen: NDArray[np.intp]) -> list[NDArray[np.intp]] | None:
    """The cubes on either side of an input; ``None`` if no input parts them well."""
    ones, zeros = cubes.ones[chosen], cubes.zeros[chosen]
    bits = np.arange(cubes.n_inputs, dtype=np.uint64)
    plus = np.array([np.count_nonzero(ones >> b & np.uint64(1)) for b in bits])
    minus = np.array([np.count_nonzero(zeros >> b & np.uint64(1)) for b in bits])
    best = int(np.minimum(plus, minus).argmax())
    if 4 * min(plus[best], minus[best]) < len(chosen):
        return None
    bit = np.uint64(1 << best)
    return [chosen[ones & bit == 0], chosen[zeros & bit == 0]]


def _compare(
    cubes: Cover,
    owner: NDArray[np.intp],
    kinds: NDArray[np.intp],
    chosen: NDArray[np.intp],
    found: dict[tuple[int, int], int],
    most: int,
) -> None:
    ones, zeros, kind = cubes.ones[chosen], cubes.zeros[chosen], kinds[chosen]
    step = max(1, _PAIRS_AT_ONCE // len(chosen))
    for start in range(0, len(chosen), step):
        here = slice(start, start + step)
        clash = kind[here, None] != kind[None, :]
        clash &= ((ones[here, None] | ones[None, :]) & (zeros[here, None] | zeros[None, :])) == 0
        for i, j in zip(*np.nonzero(clash), strict=True):
            a, b = chosen[start + i], chosen[j]
            first, second = sorted((int(owner[a]), int(owner[b])))
            found.setdefault((first, second), int(cubes.ones[a] | cubes.ones[b]))
            if len(found) >= most:
                return
