"""Which primes cover which required combinations, and what can be decided without search.

A covering table has a row for each thing that must be covered and a column for each prime. Equal
rows are one row; a row that holds all columns of another is met whenever the other is (row
dominance); a column whose rows all lie in another column is never needed (column dominance, at
equal cost); a row with a single column makes that column essential. Published by E. J. McCluskey,
"Minimization of Boolean functions", Bell System Technical Journal 35, 1956.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from pla.logic.cubes import Cover, Words

__all__ = ["Core", "Table", "greedy_cover", "incidence", "irredundant", "reduce_to_core"]

Matrix = np.ndarray[tuple[int, int], np.dtype[np.bool_]]

MAX_COMPARED = 8_192
"""Rows or columns up to which each is compared with each; above, only equal ones are joined."""


@dataclass(frozen=True, slots=True, eq=False)
class Table:
    """Rows that belong to phases, over the columns of a list of primes.

    Attributes:
        matrix: ``bool[R, P]``.
        phase: ``intp[R]``, the phase that demands each row.
    """

    matrix: Matrix
    phase: NDArray[np.intp]

    def demanded_by(self, phases: NDArray[np.bool_]) -> Matrix:
        """The rows of the chosen phases (``bool[number of phases]``)."""
        return self.matrix[phases[self.phase]]


@dataclass(frozen=True, slots=True, eq=False)
class Core:
    """What is left of a table once everything forced has been decided.

    Attributes:
        chosen: Columns that are in some smallest cover, ascending.
        columns: Columns that are still open, ascending.
        matrix: ``bool[r, len(columns)]``: rows still to be covered, without dominance.
    """

    chosen: NDArray[np.intp]
    columns: NDArray[np.intp]
    matrix: Matrix


def incidence(primes: Cover, points: Words, phase: int) -> Matrix:
    """``bool[len(points), len(primes)]``: which prime covers which combination for a phase."""
    feeds = (primes.outputs >> np.uint64(phase) & np.uint64(1)).astype(bool)
    matrix = np.zeros((len(points), len(primes)), dtype=bool)
    columns = np.flatnonzero(feeds)
    ones, zeros = primes.ones[columns], primes.zeros[columns]
    step = max(1, (1 << 22) // max(1, len(columns)))
    for first in range(0, len(points), step):
        x = points[first : first + step, None]
        matrix[first : first + step, columns] = ((ones & ~x) | (zeros & x)) == 0
    return matrix


def without_row_dominance(matrix: Matrix) -> NDArray[np.intp]:
    """Indexes of the rows that matter: no row that holds all columns of another, ascending."""
    distinct = _distinct(matrix)
    if len(distinct) > MAX_COMPARED:
        return distinct
    held = matrix[distinct].astype(np.float32)
    size = held.sum(axis=1)
    common = held @ held.T
    within = common == size[:, None]
    np.fill_diagonal(within, False)
    return np.sort(distinct[~within.any(axis=0)])


def without_column_dominance(matrix: Matrix, cost: NDArray[np.float64]) -> NDArray[np.intp]:
    """Indexes of the columns that matter, ascending.

    Of columns with equal rows the cheapest stays, of those the first; columns without rows go. Cost
    only breaks ties here: a larger column wins over a cheaper one that it contains.
    """
    size = matrix.sum(axis=0)
    order = np.lexsort((np.arange(len(size)), cost, -size))
    order = order[size[order] > 0]
    order = order[_distinct(matrix[:, order].T)]
    if len(order) > MAX_COMPARED:
        return np.sort(order)
    held = matrix[:, order].astype(np.float32)
    common = held.T @ held
    within = common == held.sum(axis=0)[:, None]
    np.fill_diagonal(within, False)
    return np.sort(order[~within.any(axis=1)])


def reduce_to_core(matrix: Matrix, cost: NDArray[np.float64]) -> Core:
    """Apply essentials and both dominances until nothing moves any more.

    Args:
        matrix: ``bool[R, P]``; every row has a column.
        cost: ``float[P]``; breaks ties between columns that serve equally well.
    """
    columns = np.arange(matrix.shape[1])
    chosen: list[NDArray[np.intp]] = []
    while matrix.shape[0]:
        before = matrix.shape
        matrix = matrix[without_row_dominance(matrix)]
        kept = without_column_dominance(matrix, cost[columns])
        matrix, columns = matrix[:, kept], columns[kept]
        essential = np.flatnonzero(matrix[matrix.sum(axis=1) == 1].any(axis=0))
        if len(essential):
            chosen.append(columns[essential])
            matrix = matrix[~matrix[:, essential].any(axis=1)]
            open_ = np.delete(np.arange(len(columns)), essential)
            matrix, columns = matrix[:, open_], columns[open_]
        elif matrix.shape == before:
            break
    if not matrix.shape[0]:
        columns = columns[:0]
        matrix = np.zeros((0, 0), dtype=bool)
    forced = np.sort(np.concatenate(chosen)) if chosen else np.zeros(0, dtype=np.intp)
    return Core(forced, columns, matrix)


def greedy_cover(matrix: Matrix, preference: NDArray[np.float64]) -> NDArray[np.intp]:
    """A cover by taking the column with most open rows, ties by higher preference, then order.

    Columns that later ones made superfluous are left out again.
    """
    open_rows = np.ones(matrix.shape[0], dtype=bool)
    taken: list[int] = []
    gain = matrix.sum(axis=0).astype(np.float64)
    while open_rows.any():
        best = int(np.lexsort((-preference, -gain))[0])
        taken.append(best)
        newly = open_rows & matrix[:, best]
        gain -= matrix[newly].sum(axis=0)
        open_rows &= ~newly
    return irredundant(matrix, np.array(taken, dtype=np.intp))


def irredundant(matrix: Matrix, taken: NDArray[np.intp]) -> NDArray[np.intp]:
    """Leave out columns that the others make superfluous, the latest taken first; ascending."""
    count = matrix[:, taken].sum(axis=1)
    kept = []
    for column in taken[::-1]:
        rows = matrix[:, column]
        if (count[rows] > 1).all():
            count[rows] -= 1
        else:
            kept.append(int(column))
    return np.array(sorted(kept), dtype=np.intp)


def _distinct(matrix: Matrix) -> NDArray[np.intp]:
    """Index of the first of each group of equal rows, ascending."""
    if matrix.shape[0] < 2:
        return np.arange(matrix.shape[0])
    packed = np.ascontiguousarray(np.packbits(matrix, axis=1))
    as_bytes = packed.view(np.dtype((np.void, packed.shape[1]))).reshape(-1)
    _, first = np.unique(as_bytes, return_index=True)
    return np.sort(first)
