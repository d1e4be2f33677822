"""Minimizing one connected block: exactly where the lattice fits, else by heuristic and bound."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.logic.connections import fewest_connections
from pla.logic.dense import MAX_DENSE_INPUTS, coordinates, fed_outputs
from pla.logic.lattice import dense_primes, lattice_bytes
from pla.logic.phases import Phase, phase_function, phases_of
from pla.logic.search import search_polarities
from pla.logic.selection import TableProgram, table_of

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.cubes import Cover, Words
    from pla.logic.effort import Effort
    from pla.logic.function import Function
    from pla.logic.phases import Polarity
    from pla.logic.search import Feasible

__all__ = ["BlockMinimum", "minimize_block"]

MAX_PHASES = 64
MAX_LATTICE_BYTES = 1 << 29


@dataclass(frozen=True, slots=True)
class BlockMinimum:
    """The answer for one block.

    Attributes:
        cover: Terms over the block's inputs; output masks speak of the block's outputs.
        complemented: Polarity of each output.
        exact: Lower bound verified in integers.
        trusted: Lower bound that may rest on the solver; at least `exact`.
        connections_proven: See `pla.logic.minimize.Minimum`.
        primes: How many primes there are; ``None`` if they were not all made.
    """

    cover: Cover
    complemented: tuple[bool, ...]
    exact: int
    trusted: int
    connections_proven: bool
    primes: int | None


def minimize_block(
    function: Function,
    polarities: Sequence[Polarity],
    effort: Effort,
    feasible: Feasible | None = None,
) -> BlockMinimum:
    """The fewest terms for a block over all allowed polarities, then the fewest connections."""
    return _exact(function, polarities, effort, feasible)


def _exact(
    function: Function,
    polarities: Sequence[Polarity],
    effort: Effort,
    feasible: Feasible | None,
) -> BlockMinimum:
    phases = phases_of(polarities)
    on, off = phase_function(function, phases)
    primes = dense_primes(off, len(phases))
    required = _required(on, len(phases))
    literals = np.bitwise_count(primes.ones | primes.zeros).astype(np.float64)
    program = TableProgram(table_of(primes, required), literals, phases, function.n_outputs, effort)
    only = tuple(None if p.true and p.complement else p.complement for p in polarities)
    found = search_polarities(program, function.n_outputs, only, feasible or (lambda _: True))
    chosen, candidates, wanted = in_polarity(
        primes, primes.take(found.columns), required, phases, found.complemented
    )
    connected = fewest_connections(candidates, wanted, chosen, effort)
    return BlockMinimum(
        connected.cover,
        found.complemented,
        found.exact,
        found.trusted,
        connected.proven,
        len(primes),
    )


def in_polarity(
    primes: Cover,
    chosen: Cover,
    required: Sequence[Words],
    phases: Sequence[Phase],
    complemented: Sequence[bool],
) -> tuple[Cover, Cover, list[Words]]:
    """Chosen cubes, primes and required combinations in terms of outputs instead of phases."""
    number = {phase: bit for bit, phase in enumerate(phases)}
    bits = [number[Phase(j, bool(c))] for j, c in enumerate(complemented)]

    def renamed(cover: Cover) -> Cover:
        outputs = np.zeros_like(cover.outputs)
        for j, bit in enumerate(bits):
            outputs |= (cover.outputs >> np.uint64(bit) & np.uint64(1)) << np.uint64(j)
        return type(cover)(cover.n_inputs, cover.ones, cover.zeros, outputs).fed()

    return renamed(chosen), renamed(primes), [required[bit] for bit in bits]


def _required(on: Cover, n_phases: int) -> list[Words]:
    fed = fed_outputs(on)
    return [
        coordinates(np.asarray(fed >> np.uint64(bit) & np.uint64(1)).astype(bool))
        for bit in range(n_phases)
    ]
