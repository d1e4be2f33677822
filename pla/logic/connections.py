"""The second objective: of all covers with the fewest terms, one with the fewest connections.

A connection is a literal or an OR link. A term may feed fewer outputs than it could; so every link
is a variable of its own, and a term that feeds a set of outputs is always best as a prime whose
outputs include that set, since raising a literal only saves.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.logic.covering import incidence, without_row_dominance
from pla.logic.cubes import Cover
from pla.logic.solver import Solver, solve_integer

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from pla.logic.covering import Matrix
    from pla.logic.cubes import Words
    from pla.logic.effort import Effort

__all__ = ["Connected", "fewest_connections"]

_MAX_ENTRIES = 4_000_000


@dataclass(frozen=True, slots=True, eq=False)
class Connected:
    """A cover with its links settled.

    Attributes:
        cover: As many terms as were allowed, no superfluous link.
        proven: Whether no cover of so many terms has fewer connections, by the solver's word.
    """

    cover: Cover
    proven: bool


def fewest_connections(
    primes: Cover, required: Sequence[Words], chosen: Cover, effort: Effort
) -> Connected:
    """The fewest connections with as many terms as a given smallest cover.

    Args:
        primes: All primes of the demanded outputs.
        required: For each output the combinations that must be covered.
        chosen: A smallest cover, taken from `primes`.
        effort: What may be spent.
    """
    trimmed = without_superfluous_links(chosen, required)
    candidates = Cover.joined(primes.n_inputs, [primes.absorbed()])
    rows = [_rows(candidates, points, j) for j, points in enumerate(required)]
    if sum(int(r.sum()) for r in rows) > _MAX_ENTRIES:
        return Connected(trimmed, False)
    model = _Model(candidates, rows, len(trimmed))
    outcome = solve_integer(
        model.load(),
        model.start(trimmed),
        min(effort.nodes, 500),
        effort.seconds_left,
    )
    effort.spend(outcome.work, model.size, clock=outcome.clock)
    if outcome.x is None:
        return Connected(trimmed, False)
    better = model.cover(outcome.x)
    usable = len(better) == len(trimmed) and _covers(better, required)
    best = better if usable and better.links < trimmed.links else trimmed
    proven = outcome.optimal and int(np.ceil(outcome.bound - 1e-6)) >= best.links
    return Connected(best, proven)


def without_superfluous_links(cover: Cover, required: Sequence[Words]) -> Cover:
    """Unlink terms from outputs that their other terms cover, largest terms kept longest."""
    outputs = cover.outputs.copy()
    size = np.bitwise_count(cover.ones | cover.zeros)
    for j, points in enumerate(required):
        matrix = incidence(cover, points, j)
        covered = matrix.sum(axis=1)
        for term in np.argsort(-size.astype(np.int64), kind="stable"):
            rows = matrix[:, term]
            if (outputs[term] >> np.uint64(j)) & np.uint64(1) and (covered[rows] > 1).all():
                covered[rows] -= 1
                outputs[term] &= ~np.uint64(1 << j)
    return Cover(cover.n_inputs, cover.ones, cover.zeros, outputs)


def _rows(primes: Cover, points: Words, output: int) -> Matrix:
    matrix = incidence(primes, points, output)
    return matrix[without_row_dominance(matrix)] if len(matrix) else matrix


def _covers(cover: Cover, required: Sequence[Words]) -> bool:
    return all(incidence(cover, points, j).any(axis=1).all() for j, points in enumerate(required))


class _Model:
    """Variables: one for each prime (its literals), then one for each useful link."""

    def __init__(self, primes: Cover, rows: Sequence[Matrix], terms: int) -> None:
        self._primes, self._rows, self._terms = primes, rows, terms
        pairs = [
            (int(p), j) for j, matrix in enumerate(rows) for p in np.flatnonzero(matrix.any(axis=0))
        ]
        n = len(primes)
        self._links = pairs
        self._link = {pair: n + k for k, pair in enumerate(pairs)}
        self.size = n + len(pairs)

    def load(self) -> Solver:
        n = len(self._primes)
        starts, columns, values, lower, upper = [0], [], [], [], []

        def row(entries: list[int], factors: list[float], least: float, most: float) -> None:
            columns.extend(entries)
            values.extend(factors)
            starts.append(len(columns))
            lower.append(least)
            upper.append(most)

        for j, matrix in enumerate(self._rows):
            for line in matrix:
                entries = [self._link[int(p), j] for p in np.flatnonzero(line)]
                row(entries, [1.0] * len(entries), 1.0, np.inf)
        for (p, _), k in self._link.items():
            row([p, k], [1.0, -1.0], 0.0, np.inf)
        row(list(range(n)), [1.0] * n, -np.inf, float(self._terms))
        literals = np.bitwise_count(self._primes.ones | self._primes.zeros).astype(np.float64)
        solver = Solver()
        solver.load(
            np.concatenate([literals, np.ones(len(self._links))]),
            np.ones(self.size),
            np.array(starts, dtype=np.int32),
            np.array(columns, dtype=np.int32),
            np.array(values),
            np.array(lower),
            np.array(upper),
            np.ones(self.size, dtype=bool),
        )
        return solver

    def start(self, cover: Cover) -> NDArray[np.float64] | None:
        index = {(c.ones, c.zeros): p for p, c in enumerate(self._primes)}
        x = np.zeros(self.size)
        for cube in cover:
            p = index.get((cube.ones, cube.zeros))
            if p is None:
                return None
            x[p] = 1.0
            for j in range(len(self._rows)):
                if cube.outputs >> j & 1 and (p, j) in self._link:
                    x[self._link[p, j]] = 1.0
        return x

    def cover(self, x: NDArray[np.int64]) -> Cover:
        n = len(self._primes)
        outputs = np.zeros(n, dtype=np.uint64)
        for k, (p, j) in enumerate(self._links):
            if x[n + k] > 0:
                outputs[p] |= np.uint64(1 << j)
        return Cover(self._primes.n_inputs, self._primes.ones, self._primes.zeros, outputs).fed()
