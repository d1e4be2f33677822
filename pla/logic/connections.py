"""The second objective: of all covers with the fewest terms, one with the fewest connections.

A connection is a literal or an OR link. A term may feed fewer outputs than it could; so every link
is a variable of its own, and a term that feeds a set of outputs is always best as a prime whose
outputs include that set, since raising a literal only saves. Polarities may still be free here:
then the choice is over every cover of the given size in any of them.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.logic.cubes import Cover
from pla.logic.dense import cube_slices
from pla.logic.solver import Solver, solve_integer

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from pla.logic.covering import Table
    from pla.logic.effort import Effort
    from pla.logic.phases import Phase
    from pla.logic.relaxation import Decisions

__all__ = ["Connected", "fewest_connections", "without_superfluous_links"]

MAX_LINKS = 2_000
MAX_FREE_LINKS = 200
MAX_NODES = 1


@dataclass(frozen=True, slots=True, eq=False)
class Connected:
    """A cover with its links settled.

    Attributes:
        cover: As many terms as were allowed; output masks speak of phases.
        complemented: Polarity of each output.
        proven: No cover of so many terms in the polarities that were open has fewer connections,
            by the solver's word.
    """

    cover: Cover
    complemented: tuple[bool, ...]
    proven: bool


def fewest_connections(
    primes: Cover,
    table: Table,
    phases: Sequence[Phase],
    start: Connected,
    open_polarities: Decisions,
    effort: Effort,
) -> Connected:
    """The fewest connections with as many terms as a given smallest cover has.

    Args:
        primes: All primes, feeding phases.
        table: What must be covered, with a column for each prime.
        phases: What the bits of the masks stand for.
        start: A smallest cover without superfluous links, taken from `primes`.
        open_polarities: Outputs whose polarity is settled have it here, the others ``None``.
        effort: What may be spent.
    """
    if not len(start.cover):
        return Connected(start.cover, start.complemented, True)
    model = _Model(primes, table, phases, open_polarities, len(start.cover))
    free = any(d is None for d in open_polarities)
    if model.links > (MAX_FREE_LINKS if free else MAX_LINKS):
        return start
    outcome = solve_integer(model.load(), model.start(start), MAX_NODES, effort.seconds_left)
    effort.spend(outcome.work, model.size, clock=outcome.clock)
    best = start
    if outcome.x is not None:
        found = model.answer(outcome.x)
        small = len(found.cover) <= len(start.cover) and found.cover.links < start.cover.links
        if small and model.holds(outcome.x):
            best = found
    proven = outcome.optimal and int(np.ceil(outcome.bound - 1e-6)) >= best.cover.links
    return Connected(best.cover, best.complemented, proven)


def without_superfluous_links(cover: Cover, demanded: Sequence[NDArray[np.bool_]]) -> Cover:
    """Unlink terms from outputs that their other terms cover, largest terms kept longest.

    Args:
        cover: A complete cover.
        demanded: For each bit of the output masks a dense array of what must be covered; bits that
            are past its end are dropped.
    """
    outputs = cover.outputs & np.uint64((1 << len(demanded)) - 1)
    smallest_first = np.argsort(
        -np.bitwise_count(cover.ones | cover.zeros).astype(np.int64), kind="stable"
    )
    places = [cube_slices(cover, k) for k in range(len(cover))]
    for bit, wanted in enumerate(demanded):
        mask = np.uint64(1 << bit)
        fed = [int(k) for k in smallest_first if outputs[k] & mask]
        count = np.where(wanted, 0, 2).astype(np.int32)
        for k in fed:
            count[places[k]] += 1
        for k in fed:
            if (count[places[k]] > 1).all():
                count[places[k]] -= 1
                outputs[k] &= ~mask
    return Cover(cover.n_inputs, cover.ones, cover.zeros, outputs).fed()


class _Model:
    """Variables: literals of each prime, then every useful link, then the free polarities."""

    def __init__(
        self,
        primes: Cover,
        table: Table,
        phases: Sequence[Phase],
        polarities: Decisions,
        terms: int,
    ) -> None:
        self._phases, self._polarities, self._terms = tuple(phases), polarities, terms
        live = np.array([polarities[p.output] in (None, p.complemented) for p in phases])
        mask = np.uint64(sum(1 << bit for bit, alive in enumerate(live) if alive))
        self._kept = _maximal(primes, mask)
        self._primes = primes.take(self._kept)
        rows = live[table.phase]
        self._matrix = table.matrix[rows][:, self._kept]
        self._row_phase = table.phase[rows]
        useful = np.zeros((len(phases), len(self._kept)), dtype=bool)
        for bit in range(len(phases)):
            useful[bit] = self._matrix[self._row_phase == bit].any(axis=0)
        self._link_phase, self._link_prime = np.nonzero(useful)
        self._link = np.full(useful.shape, -1)
        self._link[useful] = len(self._kept) + np.arange(len(self._link_phase))
        self._open = [j for j, d in enumerate(polarities) if d is None]
        self._first_open = len(self._kept) + self.links
        self.size = self._first_open + len(self._open)

    @property
    def links(self) -> int:
        return len(self._link_phase)

    def load(self) -> Solver:
        n, place = len(self._kept), {j: self._first_open + k for k, j in enumerate(self._open)}
        columns: list[NDArray[np.intp]] = []
        values: list[NDArray[np.float64]] = []
        lower: list[float] = []
        for row, bit in zip(self._matrix, self._row_phase, strict=True):
            entries = self._link[bit, np.flatnonzero(row)]
            factors = np.ones(len(entries))
            phase = self._phases[bit]
            if phase.output in place:
                entries = np.append(entries, place[phase.output])
                factors = np.append(factors, 1.0 if phase.complemented else -1.0)
            columns.append(entries)
            values.append(factors)
            lower.append(0.0 if phase.output in place and not phase.complemented else 1.0)
        for k, p in enumerate(self._link_prime):
            columns.append(np.array([p, n + k]))
            values.append(np.array([1.0, -1.0]))
            lower.append(0.0)
        columns.append(np.arange(n))
        values.append(-np.ones(n))
        lower.append(-float(self._terms))
        literals = np.bitwise_count(self._primes.ones | self._primes.zeros).astype(np.float64)
        solver = Solver()
        solver.load(
            np.concatenate([literals, np.ones(self.links), np.zeros(len(self._open))]),
            np.ones(self.size),
            np.concatenate([[0], np.cumsum([len(c) for c in columns])]).astype(np.int32),
            np.concatenate(columns).astype(np.int32),
            np.concatenate(values),
            np.array(lower),
            integer=np.ones(self.size, dtype=bool),
        )
        return solver

    def start(self, start: Connected) -> NDArray[np.float64] | None:
        """The variables of a cover, or ``None`` if it has a term that is not among the primes."""
        index = {(c.ones, c.zeros): p for p, c in enumerate(self._primes)}
        x = np.zeros(self.size)
        for cube in start.cover:
            p = index.get((cube.ones, cube.zeros))
            if p is None:
                return None
            x[p] = 1.0
            for bit in range(len(self._phases)):
                if cube.outputs >> bit & 1 and self._link[bit, p] >= 0:
                    x[self._link[bit, p]] = 1.0
        for k, j in enumerate(self._open):
            x[self._first_open + k] = 0.0 if start.complemented[j] else 1.0
        return x

    def answer(self, x: NDArray[np.int64]) -> Connected:
        complemented = self._complemented(x)
        outputs = np.zeros(len(self._kept), dtype=np.uint64)
        for k, (bit, p) in enumerate(zip(self._link_phase, self._link_prime, strict=True)):
            phase = self._phases[bit]
            wanted = complemented[phase.output] == phase.complemented
            if wanted and x[len(self._kept) + k] > 0:
                outputs[p] |= np.uint64(1 << int(bit))
        primes = self._primes
        cover = Cover(primes.n_inputs, primes.ones, primes.zeros, outputs).fed()
        return Connected(cover, complemented, False)

    def holds(self, x: NDArray[np.int64]) -> bool:
        """Whether every row of the chosen polarities has a link: the solver is not trusted."""
        complemented = self._complemented(x)
        linked = np.zeros(self._link.shape, dtype=bool)
        useful = self._link >= 0
        linked[useful] = x[self._link[useful]] > 0
        wanted = np.array([complemented[p.output] == p.complemented for p in self._phases])
        rows = wanted[self._row_phase]
        covered = (self._matrix & linked[self._row_phase]).any(axis=1)
        return bool(covered[rows].all())

    def _complemented(self, x: NDArray[np.int64]) -> tuple[bool, ...]:
        chosen = [bool(d) for d in self._polarities]
        for k, j in enumerate(self._open):
            chosen[j] = not x[self._first_open + k]
        return tuple(chosen)


def _maximal(primes: Cover, mask: np.uint64) -> NDArray[np.intp]:
    """Primes that are not inside another one as far as the phases of the mask go."""
    outputs = primes.outputs & mask
    kept = np.flatnonzero(outputs)
    order = kept[
        np.argsort(np.bitwise_count(primes.ones[kept] | primes.zeros[kept]), kind="stable")
    ]
    alive = np.ones(len(order), dtype=bool)
    ones, zeros, fed = primes.ones[order], primes.zeros[order], outputs[order]
    for i in range(len(order)):
        if alive[i]:
            inside = (ones[i] & ~ones == 0) & (zeros[i] & ~zeros == 0) & (fed & ~fed[i] == 0)
            inside[i] = False
            alive &= ~inside
    return np.sort(order[alive])
