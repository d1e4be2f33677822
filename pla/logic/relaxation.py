"""Linear relaxation of cover selection with free polarity, and bounds that are exact all the same.

The program has a variable x for each prime and a variable y for each output that may be realised
in either polarity (1 true, 0 complement). A row of a true phase says ``sum of its primes >= y``,
one of a complemented phase ``>= 1 - y``. Polarities are decided by fixing y; the solver goes on
from its last basis, which is what makes the search over polarities cheap.

The bound does not rest on floating point. For any weights w >= 0 of the rows,

    sum over outputs of min over y of (y W_true + (1 - y) W_complement)
    + sum over primes of min(0, 1 - weight of the prime's rows)

is a lower bound on the number of terms (weak duality of linear programming). The solver's dual
values are taken as weights, rounded to integers over a common denominator, and the sum is done in
integers.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.logic.solver import Solver, interruptible

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from pla.logic.phases import Phase

__all__ = ["Decisions", "Relaxation", "Relaxed", "exact_loads"]

DENOMINATOR = 1 << 22

Decisions = tuple[bool | None, ...]
"""For each output: ``False`` true, ``True`` complemented, ``None`` not decided yet."""


@dataclass(frozen=True, slots=True, eq=False)
class Relaxed:
    """An optimum of the relaxation.

    Attributes:
        bound: Terms that every cover needs at least, verified in integers.
        x: ``float[P]``, share of each prime.
        true: ``float[outputs]``, share of the true polarity.
    """

    bound: int
    x: NDArray[np.float64]
    true: NDArray[np.float64]


class Relaxation:
    """The program over fixed columns; rows can be added, polarities fixed and freed."""

    def __init__(self, n_columns: int, phases: Sequence[Phase], n_outputs: int) -> None:
        self._n = n_columns
        self._outputs = n_outputs
        self._phases = tuple(phases)
        present = {(phase.output, phase.complemented) for phase in phases}
        self._allowed = [
            (float((j, True) not in present), float((j, False) in present))
            for j in range(n_outputs)
        ]
        self._starts: list[int] = [0]
        self._columns: list[NDArray[np.intp]] = []
        self._phase: list[int] = []
        self._solver = Solver()
        self._solver.option("presolve", "off")
        self._solver.option("solver", "simplex")
        cost = np.concatenate([np.ones(n_columns), np.zeros(n_outputs)])
        none = np.zeros(0)
        self._solver.load(
            cost,
            np.ones(n_columns + n_outputs),
            np.zeros(1, dtype=np.int32),
            np.zeros(0, dtype=np.int32),
            none,
            none,
        )
        self.work = 0

    def add_rows(self, rows: Sequence[NDArray[np.intp]], phases: Sequence[int]) -> None:
        """Demand that one of these columns be chosen, for each row if its phase is."""
        starts: list[int] = []
        lower: list[float] = []
        columns: list[NDArray[np.intp]] = []
        values: list[NDArray[np.float64]] = []
        filled = 0
        for row, phase in zip(rows, phases, strict=True):
            polarity = self._phases[phase]
            starts.append(filled)
            columns.extend((row, np.array([self._n + polarity.output])))
            values.extend((np.ones(len(row)), np.array([1.0 if polarity.complemented else -1.0])))
            lower.append(1.0 if polarity.complemented else 0.0)
            filled += len(row) + 1
        self._columns.extend(rows)
        self._phase.extend(phases)
        self._starts.extend(np.cumsum([len(r) for r in rows]) + self._starts[-1])
        self._solver.addRows(
            len(rows),
            np.array(lower),
            np.full(len(rows), np.inf),
            filled,
            np.array(starts, dtype=np.int32),
            np.concatenate(columns).astype(np.int32) if columns else np.zeros(0, dtype=np.int32),
            np.concatenate(values) if values else np.zeros(0),
        )

    def solve(self, decisions: Decisions) -> Relaxed:
        """The relaxation with these polarities fixed."""
        low, high = self._limits(decisions)
        where = np.arange(self._n, self._n + self._outputs, dtype=np.int32)
        self._solver.changeColsBounds(self._outputs, where, low, high)
        with interruptible(self._solver):
            self._solver.run()
        self.work += self._solver.work()
        solution = self._solver.getSolution()
        values = np.array(solution.col_value)
        if len(values) != self._n + self._outputs:
            values = np.concatenate([np.ones(self._n), (low + high) / 2])
        weights = np.array(solution.row_dual)
        if len(weights) != len(self._phase):
            weights = np.zeros(len(self._phase))
        return Relaxed(
            self._exact_bound(weights, low, high),
            np.clip(values[: self._n], 0.0, 1.0),
            np.clip(values[self._n :], 0.0, 1.0),
        )

    def _limits(self, decisions: Decisions) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        limits = [
            allowed if decided is None else (float(not decided),) * 2
            for allowed, decided in zip(self._allowed, decisions, strict=True)
        ]
        return np.array([a for a, _ in limits]), np.array([b for _, b in limits])

    def _exact_bound(
        self, weights: NDArray[np.float64], low: NDArray[np.float64], high: NDArray[np.float64]
    ) -> int:
        if not self._columns:
            return 0
        scaled = np.clip(np.nan_to_num(weights), 0.0, 1.0)
        whole = np.floor(scaled * DENOMINATOR).astype(np.int64)
        lengths = np.diff(self._starts)
        load = exact_loads(np.concatenate(self._columns), np.repeat(whole, lengths), self._n)
        total = int(np.minimum(0, DENOMINATOR - load).sum())
        phase_weight = np.zeros(len(self._phases), dtype=np.int64)
        np.add.at(phase_weight, np.array(self._phase), whole)
        true, complemented = [0] * self._outputs, [0] * self._outputs
        for phase, weight in zip(self._phases, phase_weight.tolist(), strict=True):
            (complemented if phase.complemented else true)[phase.output] = weight
        for j in range(self._outputs):
            ends = {int(low[j]), int(high[j])}
            total += min(true[j] if end else complemented[j] for end in ends)
        return max(0, -(-total // DENOMINATOR))


def exact_loads(
    columns: NDArray[np.intp], weights: NDArray[np.int64], n_columns: int
) -> NDArray[np.int64]:
    """``int64[n_columns]``: sum of the integer weights of the entries of each column."""
    load = np.zeros(n_columns, dtype=np.int64)
    np.add.at(load, columns, weights)
    return load
