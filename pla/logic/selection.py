"""Cover selection with every row of the table in memory."""

from __future__ import annotations

from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from pla.logic.covering import (
    Table,
    greedy_cover,
    incidence,
    reduce_to_core,
    without_column_dominance,
    without_row_dominance,
)
from pla.logic.relaxation import Relaxation, Relaxed
from pla.logic.search import Settled
from pla.logic.solver import Solver, solve_integer

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from pla.logic.covering import Matrix
    from pla.logic.cubes import Cover, Words
    from pla.logic.effort import Effort
    from pla.logic.phases import Phase
    from pla.logic.relaxation import Decisions

__all__ = ["TableProgram", "smallest_cover", "table_of"]


def table_of(primes: Cover, required: Sequence[Words]) -> Table:
    """The covering table of all phases; rows that another row of their phase implies are left out.

    Args:
        primes: Output masks speak of phases.
        required: For each phase the combinations that must be covered.
    """
    parts = []
    for phase, points in enumerate(required):
        matrix = incidence(primes, points, phase)
        parts.append(matrix[without_row_dominance(matrix)] if len(matrix) else matrix)
    sizes = [len(part) for part in parts]
    return Table(np.concatenate(parts), np.repeat(np.arange(len(parts)), sizes))


class TableProgram:
    """`pla.logic.search.Program` over a whole table."""

    def __init__(
        self,
        table: Table,
        cost: NDArray[np.float64],
        phases: Sequence[Phase],
        n_outputs: int,
        effort: Effort,
    ) -> None:
        self._phases = tuple(phases)
        self._kept = without_column_dominance(table.matrix, cost)
        self._cost = cost[self._kept]
        self._table = Table(table.matrix[:, self._kept], table.phase)
        self._effort = effort
        self._n_outputs = n_outputs

    @cached_property
    def _relaxation(self) -> Relaxation:
        # Made on first use: many small tables are decided by dominance alone.
        relaxation = Relaxation(len(self._kept), self._phases, self._n_outputs)
        relaxation.add_rows(
            [np.flatnonzero(row) for row in self._table.matrix], self._table.phase.tolist()
        )
        return relaxation

    @property
    def exhausted(self) -> bool:
        return self._effort.exhausted

    def renew(self) -> bool:
        return self._effort.renew()

    def relax(self, decisions: Decisions) -> Relaxed:
        if None not in decisions:
            core = reduce_to_core(self._demanded(decisions), self._cost)
            if not len(core.columns):
                # Dominance and essential columns are exact: no cover has fewer terms.
                share = np.zeros(len(self._kept))
                share[core.chosen] = 1.0
                return Relaxed(len(core.chosen), share, ~np.array(decisions, dtype=bool) * 1.0)
        before = self._relaxation.work
        relaxed = self._relaxation.solve(decisions)
        self._effort.spend(self._relaxation.work - before, sum(self._table.matrix.shape))
        return relaxed

    def guess(self, decisions: tuple[bool, ...], relaxed: Relaxed) -> NDArray[np.intp]:
        return self._kept[greedy_cover(self._demanded(decisions), relaxed.x)]

    def settle(self, decisions: tuple[bool, ...], relaxed: Relaxed) -> Settled:
        matrix = self._demanded(decisions)
        chosen, trusted = smallest_cover(matrix, self._cost, relaxed.x, relaxed.bound, self._effort)
        return Settled(self._kept[chosen], relaxed.bound, trusted)

    def _demanded(self, decisions: Decisions) -> Matrix:
        active = np.array([decisions[p.output] == p.complemented for p in self._phases])
        return self._table.demanded_by(active)


def smallest_cover(
    matrix: Matrix,
    cost: NDArray[np.float64],
    share: NDArray[np.float64],
    bound: int,
    effort: Effort,
) -> tuple[NDArray[np.intp], int]:
    """A smallest cover of a table, and the lower bound that speaks for it.

    Args:
        matrix: ``bool[R, P]``; every row has a column.
        cost: Breaks ties between equal columns.
        share: The relaxation's values, as a guide for the first cover.
        bound: What is known already; a cover of this size ends the search.
        effort: What may be spent.

    Returns:
        Columns, ascending, and a bound that may rest on the solver.
    """
    core = reduce_to_core(matrix, cost)
    inner = greedy_cover(core.matrix, share[core.columns])
    chosen = np.sort(np.concatenate([core.chosen, core.columns[inner]]))
    if not len(core.columns):
        return chosen, len(chosen)
    if len(chosen) <= bound:
        return chosen, bound
    rows, columns = core.matrix.shape
    solver = Solver()
    entries = np.nonzero(core.matrix)
    solver.load(
        np.ones(columns),
        np.ones(columns),
        np.concatenate([[0], np.cumsum(core.matrix.sum(axis=1))]).astype(np.int32),
        entries[1].astype(np.int32),
        np.ones(len(entries[1])),
        np.ones(rows),
        integer=np.ones(columns, dtype=bool),
    )
    start = np.zeros(columns)
    start[inner] = 1.0
    outcome = solve_integer(solver, start, effort.nodes_for(rows + columns), effort.seconds_left)
    effort.spend(outcome.work, rows + columns, clock=outcome.clock)
    trusted = bound
    if outcome.x is not None:
        picked = np.flatnonzero(outcome.x > 0)
        if core.matrix[:, picked].any(axis=1).all() and len(picked) < len(inner):
            inner = picked
            chosen = np.sort(np.concatenate([core.chosen, core.columns[inner]]))
    claimed = outcome.bound
    if np.isfinite(claimed):
        trusted = max(trusted, len(core.chosen) + int(np.ceil(claimed - 1e-6)))
    return chosen, min(trusted, len(chosen))
