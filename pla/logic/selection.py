"""Cover selection with every row of the table in memory."""

from __future__ import annotations

from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from pla.logic.covering import (
    Core,
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

__all__ = ["TableProgram", "quick_cover", "smallest_cover", "table_of"]


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
        self._last_core: tuple[Decisions, Core] | None = None

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
            core = self._core(decisions)
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
        return self._kept[quick_cover(self._core(decisions), relaxed.x)]

    def settle(self, decisions: tuple[bool, ...], relaxed: Relaxed) -> Settled:
        core = self._core(decisions)
        chosen, trusted = smallest_cover(core, relaxed.x, relaxed.bound, self._effort)
        return Settled(self._kept[chosen], relaxed.bound, trusted)

    def _core(self, decisions: Decisions) -> Core:
        """What is open when all polarities are decided; the last one asked for is kept."""
        if self._last_core is None or self._last_core[0] != decisions:
            self._last_core = (decisions, reduce_to_core(self._demanded(decisions), self._cost))
        return self._last_core[1]

    def _demanded(self, decisions: Decisions) -> Matrix:
        active = np.array([decisions[p.output] == p.complemented for p in self._phases])
        return self._table.demanded_by(active)


def quick_cover(core: Core, share: NDArray[np.float64]) -> NDArray[np.intp]:
    """The columns of a cover by greed, led by the relaxation's shares; ascending."""
    inner = greedy_cover(core.matrix, share[core.columns])
    return np.sort(np.concatenate([core.chosen, core.columns[inner]]))


def smallest_cover(
    core: Core, share: NDArray[np.float64], bound: int, effort: Effort
) -> tuple[NDArray[np.intp], int]:
    """A smallest cover of a table, and the lower bound that speaks for it.

    Args:
        core: The table with everything forced decided.
        share: The relaxation's values, as a guide for the first cover.
        bound: What is known already; a cover of this size ends the search.
        effort: What may be spent.

    Returns:
        Columns of the table, ascending, and a bound that may rest on the solver.
    """
    chosen = quick_cover(core, share)
    if not len(core.columns):
        return chosen, len(chosen)
    if len(chosen) <= bound:
        return chosen, bound
    inner = np.flatnonzero(np.isin(core.columns, chosen))
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
