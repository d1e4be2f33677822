"""Cover selection whose rows are added as they are missed.

The table of a large block does not fit in memory, and most of its rows never matter. So the
relaxation starts without rows: it is solved, combinations that its answer leaves uncovered get a
row, and so on. Every stage gives a valid lower bound; the first complete cover that a minimum of
the current rows gives is a minimum of all.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pla.logic.covering import reduce_to_core
from pla.logic.dense import coordinates, cube_slices
from pla.logic.relaxation import Relaxation
from pla.logic.search import Settled
from pla.logic.selection import smallest_cover

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from numpy.typing import NDArray

    from pla.logic.covering import Matrix
    from pla.logic.cubes import Cover
    from pla.logic.effort import Effort
    from pla.logic.phases import Phase
    from pla.logic.relaxation import Decisions, Relaxed

__all__ = ["LazyProgram"]

ROWS_AT_ONCE = 96
ROUNDS = 60
_TOLERANCE = 1e-6


class LazyProgram:
    """`pla.logic.search.Program` over primes of up to 16 inputs, with rows on demand."""

    def __init__(
        self,
        primes: Cover,
        required: Sequence[NDArray[np.bool_]],
        cost: NDArray[np.float64],
        phases: Sequence[Phase],
        n_outputs: int,
        effort: Effort,
    ) -> None:
        """Take primes whose masks speak of phases, and for each phase a dense array of demands."""
        self._primes, self._required, self._cost = primes, tuple(required), cost
        self._phases, self._effort = tuple(phases), effort
        self._relaxation = Relaxation(len(primes), phases, n_outputs)
        self._rows: list[NDArray[np.intp]] = []
        self._row_phase: list[int] = []
        self._listed = [np.zeros(r.shape, dtype=bool) for r in required]

    @property
    def exhausted(self) -> bool:
        return self._effort.exhausted

    def renew(self) -> bool:
        return self._effort.renew()

    def relax(self, decisions: Decisions) -> Relaxed:
        relaxed = self._solve(decisions)
        for _ in range(ROUNDS):
            if self.exhausted or not self._add_missing(decisions, relaxed):
                break
            relaxed = self._solve(decisions)
        return relaxed

    def guess(self, decisions: tuple[bool, ...], relaxed: Relaxed) -> NDArray[np.intp]:
        chosen = np.flatnonzero(relaxed.x > 0.5)
        return self._complete(decisions, chosen)

    def settle(self, decisions: tuple[bool, ...], relaxed: Relaxed) -> Settled:
        trusted = relaxed.bound
        best = self._complete(decisions, np.flatnonzero(relaxed.x > 0.5))
        while len(best) > trusted and not self.exhausted:
            columns, matrix = self._matrix(decisions)
            share = relaxed.x[columns]
            core = reduce_to_core(matrix, self._cost[columns])
            chosen, bound = smallest_cover(core, share, trusted, self._effort)
            trusted = max(trusted, bound)
            picked = columns[chosen]
            complete = self._complete(decisions, picked)
            if len(complete) < len(best):
                best = complete
            if not self._add_uncovered(decisions, picked):
                break
        return Settled(best, relaxed.bound, min(trusted, len(best)))

    def _solve(self, decisions: Decisions) -> Relaxed:
        before = self._relaxation.work
        relaxed = self._relaxation.solve(decisions)
        self._effort.spend(self._relaxation.work - before, len(self._rows) + len(self._primes))
        return relaxed

    def _active(self, decisions: Decisions) -> list[int]:
        return [
            bit
            for bit, phase in enumerate(self._phases)
            if decisions[phase.output] in (None, phase.complemented)
        ]

    def _add_missing(self, decisions: Decisions, relaxed: Relaxed) -> bool:
        """Rows for the combinations that the relaxed answer covers least; whether there are any."""
        used = np.flatnonzero(relaxed.x > _TOLERANCE)
        added = False
        for bit in self._active(decisions):
            phase = self._phases[bit]
            share = relaxed.true[phase.output]
            wanted = 1 - share if phase.complemented else share
            if wanted <= _TOLERANCE:
                continue
            covered = np.zeros(self._required[bit].shape)
            for p in self._feeding(used, bit):
                covered[cube_slices(self._primes, p)] += relaxed.x[p]
            self._effort.spend(len(used) + covered.size // 100, 400)
            gap = np.where(self._required[bit] & ~self._listed[bit], wanted - covered, 0.0)
            added |= self._add_worst(bit, gap)
        return added

    def _add_uncovered(self, decisions: tuple[bool, ...], chosen: NDArray[np.intp]) -> bool:
        added = False
        for bit in self._active(decisions):
            open_ = self._uncovered(bit, chosen)
            added |= self._add_worst(bit, open_.astype(np.float64))
        return added

    def _add_worst(self, bit: int, gap: NDArray[np.float64]) -> bool:
        flat = gap.reshape(-1)
        missed = np.flatnonzero(flat > _TOLERANCE)
        if not len(missed):
            return False
        if len(missed) > ROWS_AT_ONCE:
            # Spread over the worst, so that one round does not only look at one corner.
            worst = missed[np.argsort(-flat[missed], kind="stable")][: 8 * ROWS_AT_ONCE]
            missed = np.sort(worst)[:: max(1, len(worst) // ROWS_AT_ONCE)]
        place = np.zeros(gap.shape, dtype=bool)
        place.reshape(-1)[missed] = True
        self._listed[bit] |= place
        rows = [self._row(int(point), bit) for point in coordinates(place)]
        self._rows.extend(rows)
        self._row_phase.extend([bit] * len(rows))
        self._relaxation.add_rows(rows, [bit] * len(rows))
        return True

    def _row(self, point: int, bit: int) -> NDArray[np.intp]:
        x = np.uint64(point)
        primes = self._primes
        inside = ((primes.ones & ~x) | (primes.zeros & x)) == 0
        feeds = (primes.outputs >> np.uint64(bit) & np.uint64(1)).astype(bool)
        return np.flatnonzero(inside & feeds)

    def _matrix(self, decisions: tuple[bool, ...]) -> tuple[NDArray[np.intp], Matrix]:
        active = set(self._active(decisions))
        rows = [r for r, bit in zip(self._rows, self._row_phase, strict=True) if bit in active]
        columns = np.unique(np.concatenate(rows)) if rows else np.zeros(0, dtype=np.intp)
        matrix = np.zeros((len(rows), len(columns)), dtype=bool)
        for i, row in enumerate(rows):
            matrix[i, np.searchsorted(columns, row)] = True
        return columns, matrix

    def _feeding(self, columns: NDArray[np.intp], bit: int) -> Iterable[int]:
        feeds = self._primes.outputs[columns] >> np.uint64(bit) & np.uint64(1)
        return [int(p) for p in columns[feeds.astype(bool)]]

    def _uncovered(self, bit: int, chosen: NDArray[np.intp]) -> NDArray[np.bool_]:
        open_ = self._required[bit].copy()
        for p in self._feeding(chosen, bit):
            open_[cube_slices(self._primes, p)] = False
        return open_

    def _complete(self, decisions: tuple[bool, ...], chosen: NDArray[np.intp]) -> NDArray[np.intp]:
        """A complete cover from a partial one, without columns that became superfluous."""
        active = self._active(decisions)
        taken = [int(p) for p in chosen]
        open_ = {bit: self._uncovered(bit, chosen) for bit in active}
        for bit in active:
            while open_[bit].any():
                first = np.zeros(open_[bit].shape, dtype=bool)
                first.reshape(-1)[int(open_[bit].reshape(-1).argmax())] = True
                near = self._row(int(coordinates(first)[0]), bit)
                best = max(near, key=lambda p: (self._gain(int(p), open_), -int(p)))
                taken.append(int(best))
                self._close(int(best), open_)
        return self._irredundant(active, taken)

    def _gain(self, p: int, open_: dict[int, NDArray[np.bool_]]) -> int:
        place, mask = cube_slices(self._primes, p), int(self._primes.outputs[p])
        return sum(int(left[place].sum()) for bit, left in open_.items() if mask >> bit & 1)

    def _close(self, p: int, open_: dict[int, NDArray[np.bool_]]) -> None:
        place, mask = cube_slices(self._primes, p), int(self._primes.outputs[p])
        for bit, left in open_.items():
            if mask >> bit & 1:
                left[place] = False

    def _irredundant(self, active: Sequence[int], taken: Sequence[int]) -> NDArray[np.intp]:
        count = {}
        for bit in active:
            array = np.where(self._required[bit], 0, 2).astype(np.int32)
            for p in self._feeding(np.array(taken, dtype=np.intp), bit):
                array[cube_slices(self._primes, p)] += 1
            count[bit] = array
        kept = []
        for p in reversed(taken):
            place, mask = cube_slices(self._primes, p), int(self._primes.outputs[p])
            fed = [bit for bit in active if mask >> bit & 1]
            if all((count[bit][place] > 1).all() for bit in fed):
                for bit in fed:
                    count[bit][place] -= 1
            else:
                kept.append(p)
        return np.array(sorted(kept), dtype=np.intp)
