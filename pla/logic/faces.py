"""Codes that keep together the states which product terms would like to speak of at once.

The method of G. De Micheli, R. K. Brayton and A. Sangiovanni-Vincentelli, "Optimal state assignment
for finite state machines", IEEE Trans. CAD 4(3), 1985: minimize the symbolic table first; every set
of states that a term of it stands for asks for codes whose smallest cube holds no other state (a
face constraint). Here the symbolic table is minimized with one bit for each state, all other codes
being don't cares, so that a set of states is a product of complements; and the codes are then found
by single moves and exchanges.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from pla.logic.code_space import Assignment
from pla.logic.cubes import MAX_INPUTS, MAX_OUTPUTS
from pla.logic.heuristic import heuristic_cover
from pla.logic.machine import encoded

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.code_space import Codes, Space
    from pla.logic.effort import Effort
    from pla.logic.machine import Machine

__all__ = ["Face", "codes_by_faces", "faces_of"]

_INTRUDER = 4  # a foreign state in a face is worse than so many dimensions of the face

Face = tuple[int, int]
"""States that should share a face, as a mask, and how many terms ask for it."""


def faces_of(machine: Machine, effort: Effort) -> tuple[Face, ...]:
    """The sets of two or more states that terms of the symbolic table stand for, ascending."""
    n = machine.n_states
    if n + machine.n_inputs > MAX_INPUTS or n + machine.n_outputs > MAX_OUTPUTS:
        return ()
    symbolic = encoded(replace(machine, unused="x"), [1 << k for k in range(n)], n)
    cover = heuristic_cover(symbolic.on, symbolic.off, symbolic.n_outputs, effort)
    found: dict[int, int] = {}
    for cube in cover:
        if cube.ones >> machine.n_inputs:
            continue
        states = ~(cube.zeros >> machine.n_inputs) & ((1 << n) - 1)
        if 1 < states.bit_count() < n:
            found[states] = found.get(states, 0) + 1
    return tuple(sorted(found.items()))


def codes_by_faces(space: Space, faces: Sequence[Face], begin: Codes) -> Codes:
    """Codes of few dimensions and intruders in all faces, by descent from the given ones."""
    best = begin
    cost = _cost(space, faces, best)
    improved = True
    while improved:
        improved = False
        for tried in space.neighbours(Assignment(best, ())):
            if (new := _cost(space, faces, tried.codes)) < cost:
                best, cost, improved = tried.codes, new, True
                break
    return best


def _cost(space: Space, faces: Sequence[Face], codes: Codes) -> int:
    total = 0
    for states, weight in faces:
        common, any_ = (1 << space.bits) - 1, 0
        for state, code in enumerate(codes):
            if states >> state & 1:
                common &= code
                any_ |= code
        free = any_ & ~common
        intruders = sum(
            not states >> state & 1 and code & ~free == common for state, code in enumerate(codes)
        )
        total += weight * (_INTRUDER * intruders + free.bit_count())
    return total
