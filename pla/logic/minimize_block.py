"""Minimizing one connected block: exactly where the lattice fits, else by heuristic and bound."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from pla.logic.block_minimum import BlockMinimum, Scope
from pla.logic.connections import (
    Connected,
    fewest_connections,
    without_superfluous_links,
)
from pla.logic.covering import MAX_COMPARED
from pla.logic.cubes import MAX_OUTPUTS, Cover
from pla.logic.dense import MAX_DENSE_INPUTS, coordinates, fed_outputs
from pla.logic.lattice import dense_primes
from pla.logic.lazy import LazyProgram
from pla.logic.phases import Polarity, phase_function, phases_of
from pla.logic.search import search_polarities
from pla.logic.selection import TableProgram, table_of
from pla.logic.wide import minimize_wide

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from pla.logic.cubes import Words
    from pla.logic.effort import Effort
    from pla.logic.function import Function
    from pla.logic.phases import Phase
    from pla.logic.search import Feasible, Program

__all__ = ["minimize_block"]

MAX_PRODUCTS = 60_000_000_000
MAX_ENTRIES = 120_000_000


def minimize_block(
    function: Function,
    polarities: Sequence[Polarity],
    effort: Effort,
    feasible: Feasible | None = None,
    *,
    connections: bool = True,
) -> BlockMinimum:
    """The fewest terms for a block over all allowed polarities, then the fewest connections."""
    if function.n_outputs == 1 and polarities[0].true and polarities[0].complement:
        return _better_polarity(function, effort, feasible, connections=connections)
    phases = phases_of(polarities)
    if function.n_inputs <= MAX_DENSE_INPUTS and len(phases) <= MAX_OUTPUTS:
        return _by_primes(function, polarities, phases, effort, feasible, connections)
    rough = minimize_wide(function, polarities, effort, feasible)
    if function.n_inputs > MAX_DENSE_INPUTS or len(polarities) == len(phases):
        return rough
    # Too many phases for one mask, so the polarities are guessed; in these the cover is exact.
    settled = [Polarity(not c, c) for c in rough.complemented]
    exact = _by_primes(function, settled, phases_of(settled), effort, None, connections)
    floor = min(rough.exact, len(exact.cover))
    scope: Scope | None = "these polarities" if exact.connections else None
    return replace(exact, exact=floor, trusted=floor, connections=scope)


def _better_polarity(
    function: Function, effort: Effort, feasible: Feasible | None, *, connections: bool
) -> BlockMinimum:
    """A single output shares nothing, so its polarities are two problems of their own."""
    answers = [
        minimize_block(function, [only], effort, connections=connections)
        for only in (Polarity(complement=False), Polarity(true=False))
        if feasible is None or feasible((only.complement,))
    ]
    best = min(answers, key=lambda a: (len(a.cover), a.cover.links))
    every = None not in {a.connections for a in answers}
    primes = [a.primes for a in answers]
    return replace(
        best,
        exact=min(a.exact for a in answers),
        trusted=min(a.trusted for a in answers),
        connections="all polarities" if every else None,
        primes=None if None in primes else sum(p or 0 for p in primes),
    )


def _by_primes(
    function: Function,
    polarities: Sequence[Polarity],
    phases: Sequence[Phase],
    effort: Effort,
    feasible: Feasible | None,
    connections: bool,
) -> BlockMinimum:
    on, off = phase_function(function, phases)
    primes = dense_primes(off, len(phases))
    primes = primes.take(np.argsort(np.bitwise_count(primes.ones | primes.zeros), kind="stable"))
    fed = fed_outputs(on)
    demanded = [
        np.asarray(fed >> np.uint64(b) & np.uint64(1)).astype(bool) for b in range(len(phases))
    ]
    required = [coordinates(d) for d in demanded]
    literals = np.bitwise_count(primes.ones | primes.zeros).astype(np.float64)
    table = table_of(primes, required) if _table_fits(primes, required) else None
    program: Program
    if table is not None:
        program = TableProgram(table, literals, phases, function.n_outputs, effort)
    else:
        program = LazyProgram(primes, demanded, literals, phases, function.n_outputs, effort)
    only = tuple(None if p.true and p.complement else p.complement for p in polarities)
    found = search_polarities(program, function.n_outputs, only, feasible or (lambda _: True))
    start = _linked(primes.take(found.columns), demanded, phases, found.complemented)
    connected = start
    scope: Scope | None = None
    if table is not None and connections:
        if feasible is None:
            connected = fewest_connections(primes, table, phases, start, only, effort)
            scope = "all polarities" if connected.proven else None
        settled = connected.complemented
        if scope is None and (None in only or feasible is not None):
            connected = fewest_connections(primes, table, phases, connected, settled, effort)
            scope = "these polarities" if connected.proven else None
    return BlockMinimum(
        _by_output(connected.cover, phases, connected.complemented),
        connected.complemented,
        found.exact,
        found.trusted,
        scope,
        len(primes),
    )


def _table_fits(primes: Cover, required: Sequence[Words]) -> bool:
    """Whether comparing all rows and all columns of the table with each other is affordable."""
    if len(primes) > MAX_COMPARED or any(len(points) > MAX_COMPARED for points in required):
        return False
    rows = [len(points) for points in required]
    columns = [
        int((primes.outputs >> np.uint64(b) & np.uint64(1)).sum()) for b in range(len(required))
    ]
    products = sum(r * r * p for r, p in zip(rows, columns, strict=True))
    return products <= MAX_PRODUCTS and sum(rows) * len(primes) <= MAX_ENTRIES


def _linked(
    chosen: Cover,
    demanded: Sequence[NDArray[np.bool_]],
    phases: Sequence[Phase],
    complemented: tuple[bool, ...],
) -> Connected:
    """A cover that feeds only the chosen phases, and those by no link too many."""
    live = sum(1 << b for b, p in enumerate(phases) if complemented[p.output] == p.complemented)
    outputs = chosen.outputs & np.uint64(live)
    cover = Cover(chosen.n_inputs, chosen.ones, chosen.zeros, outputs).fed()
    return Connected(without_superfluous_links(cover, demanded), complemented, False)


def _by_output(cover: Cover, phases: Sequence[Phase], complemented: Sequence[bool]) -> Cover:
    """The cover with masks that speak of outputs instead of phases."""
    outputs = np.zeros_like(cover.outputs)
    for bit, phase in enumerate(phases):
        if complemented[phase.output] == phase.complemented:
            outputs |= (cover.outputs >> np.uint64(bit) & np.uint64(1)) << np.uint64(phase.output)
    return Cover(cover.n_inputs, cover.ones, cover.zeros, outputs).fed()
