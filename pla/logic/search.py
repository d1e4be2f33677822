"""Exact search over output polarities: branch and bound, best bound first.

A node has some polarities decided; its bound is the relaxation's with the others left free
(`pla.logic.relaxation`). The node with the smallest bound is taken up next, of those the deepest,
so that the first complete cover is found soon and nearly every other branch is cut by it.
"""

from __future__ import annotations

import heapq
from dataclasses import dataclass, replace
from itertools import count
from typing import TYPE_CHECKING, Protocol

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from pla.logic.relaxation import Decisions, Relaxed

__all__ = ["Feasible", "Program", "Selection", "Settled", "search_polarities"]


class Feasible(Protocol):
    """Whether partly decided polarities can still be completed on the device."""

    def __call__(self, decisions: Decisions, /) -> bool: ...


@dataclass(frozen=True, slots=True, eq=False)
class Settled:
    """The best cover for one complete choice of polarities.

    Attributes:
        columns: Chosen primes, ascending.
        exact: Lower bound for this choice, verified in integers.
        trusted: Lower bound for this choice that rests on the solver; at least `exact`.
    """

    columns: NDArray[np.intp]
    exact: int
    trusted: int


class Program(Protocol):
    """Cover selection over the primes of all phases."""

    @property
    def exhausted(self) -> bool:
        """Whether the budget of work is used up."""

    def relax(self, decisions: Decisions) -> Relaxed:
        """Bound and shares with some polarities decided."""

    def settle(self, decisions: tuple[bool, ...], relaxed: Relaxed) -> Settled:
        """The best cover with all polarities decided."""

    def guess(self, decisions: tuple[bool, ...], relaxed: Relaxed) -> NDArray[np.intp]:
        """Some cover, quickly."""

    def renew(self) -> bool:
        """Allow the work that is kept back for a first answer; whether there was any."""


_Node = tuple[int, int, float, int, "Decisions", "Relaxed | None"]
"""Bound, minus depth, how far the relaxation leans the other way, number, decisions, relaxation."""


@dataclass(frozen=True, slots=True, eq=False)
class Selection:
    """The outcome of the search.

    Attributes:
        columns: Chosen primes, ascending.
        complemented: Polarity of each output.
        exact: Lower bound over all polarities, verified in integers.
        trusted: Lower bound that also rests on what the solver claimed.
    """

    columns: NDArray[np.intp]
    complemented: tuple[bool, ...]
    exact: int
    trusted: int


def search_polarities(
    program: Program,
    n_outputs: int,
    allowed: Decisions,
    feasible: Feasible,
    limit: int | None = None,
) -> Selection:
    """The smallest cover over all allowed polarities, or the best found within the budget.

    Args:
        program: Bounds and covers.
        n_outputs: How many outputs there are.
        allowed: Outputs that have a single polarity have it here; ``None`` for the others.
        feasible: Cuts polarities that the device cannot give together.
        limit: Only covers of fewer terms than this are looked for; the bounds then say no more than
            whether there can be one.
    """
    root = program.relax(allowed)
    best = _first_guess(program, allowed, root, feasible)
    answered = False
    exact_floor = trusted_floor = _worth(best, limit)
    order = count()
    queue: list[_Node] = [(root.bound, 0, 0.0, next(order), allowed, root)]
    while queue:
        bound, depth, lean, number, decisions, relaxed = heapq.heappop(queue)
        if bound >= _worth(best, limit):
            break
        if program.exhausted:
            exact_floor, trusted_floor = min(exact_floor, bound), min(trusted_floor, bound)
            if not answered and program.renew():
                best = _answer(program, best)
            break
        if relaxed is None:
            # Until now it stood here with its parent's bound; many never come to be looked at.
            relaxed = program.relax(decisions)
            if relaxed.bound > bound:
                heapq.heappush(queue, (relaxed.bound, depth, lean, number, decisions, relaxed))
                continue
        open_outputs = [j for j in range(n_outputs) if decisions[j] is None]
        if not open_outputs:
            complete = tuple(bool(d) for d in decisions)
            settled = program.settle(complete, relaxed)
            answered = True
            exact_floor = min(exact_floor, max(settled.exact, bound))
            trusted_floor = min(trusted_floor, max(settled.trusted, bound))
            if len(settled.columns) < len(best.columns):
                best = Selection(settled.columns, complete, 0, 0)
            continue
        undecided = np.minimum(relaxed.true, 1 - relaxed.true)
        branch = max(open_outputs, key=lambda j: (round(float(undecided[j]), 6), -j))
        for complemented in (False, True):
            child = (*decisions[:branch], complemented, *decisions[branch + 1 :])
            if feasible(child):
                share = round(float(relaxed.true[branch]), 6)
                against = share if complemented else 1 - share
                node = (bound, depth - 1, against, next(order), child, None)
                heapq.heappush(queue, node)
    size = len(best.columns)
    return Selection(
        best.columns, best.complemented, min(size, exact_floor), min(size, trusted_floor)
    )


def _worth(best: Selection, limit: int | None) -> int:
    """From how many terms on a cover is of no use."""
    return len(best.columns) if limit is None else min(limit, len(best.columns))


def _first_guess(
    program: Program, allowed: Decisions, root: Relaxed, feasible: Feasible
) -> Selection:
    """The better of two quick covers: as the relaxation leans, and true wherever possible."""
    true = replace(root, true=np.ones_like(root.true))
    choices = dict.fromkeys(_completed(allowed, leaning, feasible) for leaning in (root, true))
    covers = [(program.guess(choice, root), choice) for choice in choices]
    columns, complemented = min(covers, key=lambda cover: len(cover[0]))
    return Selection(columns, complemented, 0, 0)


def _answer(program: Program, guessed: Selection) -> Selection:
    """The guess's polarities settled as well as the rest of the budget allows."""
    relaxed = program.relax(guessed.complemented)
    settled = program.settle(guessed.complemented, relaxed)
    if len(settled.columns) < len(guessed.columns):
        return replace(guessed, columns=settled.columns)
    return guessed


def _completed(decisions: Decisions, relaxed: Relaxed, feasible: Feasible) -> tuple[bool, ...]:
    """All polarities decided the way the relaxation leans, as far as the device goes along."""
    complete: list[bool | None] = list(decisions)
    for j, decided in enumerate(decisions):
        if decided is None:
            preferred = bool(relaxed.true[j] < 0.5)
            complete[j] = preferred
            if not feasible(tuple(complete)):
                complete[j] = not preferred
    return tuple(bool(d) for d in complete)
