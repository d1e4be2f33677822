"""How few terms a function needs, asked many times over: quick guesses, and proofs against a limit.

Where `pla.logic.minimize` looks for the best cover and its connections, a search over many
functions only asks whether one of them needs fewer terms than the best so far. Most are turned down
by a lower bound long before their minimum is known.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.logic.covering import Table, greedy_cover, reduce_to_core
from pla.logic.dense import coordinates, fed_outputs
from pla.logic.function import Function
from pla.logic.heuristic import heuristic_cover
from pla.logic.lattice import dense_primes
from pla.logic.minimize import minimize
from pla.logic.phases import Polarity, phase_function, phases_of
from pla.logic.search import search_polarities
from pla.logic.selection import TableProgram, table_of

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.cubes import Cover
    from pla.logic.effort import Effort
    from pla.logic.phases import Phase

__all__ = ["Need", "alone", "fewest_terms", "guessed_terms"]

MAX_TABLE_INPUTS = 10
MAX_TABLE_PRIMES = 3_000
MAX_TABLE_PHASES = 32
_GUESS = 100  # work of a guess, whatever its size


@dataclass(frozen=True, slots=True)
class Need:
    """What is known of the fewest terms of a function.

    Attributes:
        terms: Those of the best cover that was found; it may not be the smallest.
        exact: Lower bound verified in integers, or the limit where the bound is beyond it.
        trusted: The same, where it may rest on the solver; at least `exact`.
    """

    terms: int
    exact: int
    trusted: int

    def __add__(self, other: Need) -> Need:
        return Need(
            self.terms + other.terms, self.exact + other.exact, self.trusted + other.trusted
        )


def guessed_terms(
    function: Function, complemented: Sequence[bool], effort: Effort
) -> tuple[int, int]:
    """(terms, literals) of a good cover with these polarities; complete, but nothing is proven."""
    polarities = [Polarity(not c, c) for c in complemented]
    phases = phases_of(polarities)
    made = _table(function, phases)
    if made is None:
        on, off = phase_function(function, phases)
        cover = heuristic_cover(on, off, len(phases), effort)
        return len(cover), cover.literals
    primes, table = made
    literals = np.bitwise_count(primes.ones | primes.zeros).astype(np.float64)
    core = reduce_to_core(table.matrix, literals)
    inner = core.columns[greedy_cover(core.matrix, -literals[core.columns])]
    effort.spend(_GUESS - 1, 1000 + sum(table.matrix.shape))
    chosen = np.concatenate([core.chosen, inner])
    return len(chosen), int(literals[chosen].sum())


def fewest_terms(
    function: Function, polarities: Sequence[Polarity], limit: int | None, effort: Effort
) -> Need:
    """The fewest shared terms, or the knowledge that no cover has fewer than `limit`."""
    phases = phases_of(polarities)
    made = _table(function, phases)
    if made is None:
        found = minimize(function, polarities, effort=effort, connections=False)
        exact = found.lower_bound if found.proven_by == "certificate" else 0
        return Need(found.count, exact, found.lower_bound)
    primes, table = made
    literals = np.bitwise_count(primes.ones | primes.zeros).astype(np.float64)
    program = TableProgram(table, literals, phases, function.n_outputs, effort)
    only = tuple(None if p.true and p.complement else p.complement for p in polarities)
    best = search_polarities(program, function.n_outputs, only, lambda _: True, limit)
    return Need(len(best.columns), best.exact, best.trusted)


def alone(function: Function) -> tuple[Function, ...]:
    """Each output as a function of its own, as own OR gates see it."""
    return tuple(
        Function(function.n_inputs, 1, function.on.of_output(j), function.off.of_output(j))
        for j in range(function.n_outputs)
    )


def _table(function: Function, phases: Sequence[Phase]) -> tuple[Cover, Table] | None:
    """All primes and their covering table, where both are small enough to be made at every turn."""
    if function.n_inputs > MAX_TABLE_INPUTS or len(phases) > MAX_TABLE_PHASES:
        return None
    on, off = phase_function(function, phases)
    primes = dense_primes(off, len(phases))
    if len(primes) > MAX_TABLE_PRIMES:
        return None
    primes = primes.take(np.argsort(np.bitwise_count(primes.ones | primes.zeros), kind="stable"))
    fed = fed_outputs(on)
    required = [
        coordinates(np.asarray(fed >> np.uint64(b) & np.uint64(1)).astype(bool))
        for b in range(len(phases))
    ]
    return primes, table_of(primes, required)
