"""The smallest set of shared product terms for a function, with the proof that it is smallest."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np

from pla.errors import Diagnostic, InternalError
from pla.logic.blocks import blocks_of
from pla.logic.cubes import Cover, Cube
from pla.logic.effort import Effort
from pla.logic.equivalence import find_difference
from pla.logic.minimize_block import minimize_block
from pla.logic.phases import Polarity

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.block_minimum import BlockMinimum, Scope
    from pla.logic.function import Function
    from pla.logic.search import Feasible

__all__ = ["Minimum", "minimize", "ordered_terms"]

_RANK = str.maketrans("10-", "012")


@dataclass(frozen=True, slots=True)
class Minimum:
    """A cover and what is known about how good it is.

    Attributes:
        cover: The product terms, most outputs first, then by their literals in order of inputs.
        complemented: Outputs whose sum is the complement of the asserted function.
        lower_bound: No cover, in any allowed polarities, has fewer terms.
        proven_by: ``certificate`` where the bound was checked in exact arithmetic, ``solver`` where
            it rests on floating point, ``None`` where count and bound do not meet.
        connections: Where no cover of so many terms has fewer literals and OR links, by the
            solver's word: in any polarities or in these; ``None`` where that is not known.
        primes: Prime implicants of all allowed polarities together; ``None`` if not all were made.
        clock: Whether the safety net of the clock cut in, so that the answer may not repeat.
    """

    cover: Cover
    complemented: tuple[bool, ...]
    lower_bound: int
    proven_by: Literal["certificate", "solver"] | None
    connections: Scope | None
    primes: int | None
    clock: bool

    @property
    def count(self) -> int:
        return len(self.cover)

    @property
    def proven(self) -> bool:
        return self.proven_by is not None


def minimize(
    function: Function,
    polarities: Sequence[Polarity] | None = None,
    *,
    feasible: Feasible | None = None,
    effort: Effort | None = None,
    connections: bool = True,
) -> Minimum:
    """Find the fewest product terms, then the fewest connections.

    Args:
        function: What is wanted; its ON-set and OFF-set do not overlap.
        polarities: What each output may be realised as; by default either.
        feasible: Which polarities the outputs can have together, where the device limits that;
            a partly decided choice is feasible when it can be completed.
        effort: The budget; by default enough for all that is practical.
        connections: Whether the second objective matters; without it only the count is sought.

    Returns:
        The best cover, always complete and checked, and its lower bound.

    Raises:
        InternalError: If the cover fails the check against the function.
    """
    budget = effort or Effort()
    allowed = tuple(polarities or [Polarity()] * function.n_outputs)
    parts = blocks_of(function, allowed)
    answers = [
        minimize_block(
            part.function, [allowed[j] for j in part.outputs], budget, connections=connections
        )
        for part in parts
    ]
    complemented = [False] * function.n_outputs
    for part, answer in zip(parts, answers, strict=True):
        for j, inverted in zip(part.outputs, answer.complemented, strict=True):
            complemented[j] = inverted
    if feasible is not None and not feasible(tuple(complemented)):
        # The device ties the outputs' polarities together: no part can be settled alone.
        whole = minimize_block(function, allowed, budget, feasible, connections=connections)
        answers, complemented = [whole], list(whole.complemented)
        cover = whole.cover
    else:
        cover = Cover.joined(
            function.n_inputs,
            (p.widened(a.cover, function.n_inputs) for p, a in zip(parts, answers, strict=True)),
        )
    _check(cover, complemented, function)
    return Minimum(
        ordered_terms(cover),
        tuple(complemented),
        sum(a.trusted for a in answers),
        _proof(answers),
        _scope(answers),
        None if any(a.primes is None for a in answers) else sum(a.primes or 0 for a in answers),
        budget.clock,
    )


def ordered_terms(cover: Cover) -> Cover:
    """Most outputs first, then by literals in order of the inputs: 1 before 0 before dash."""

    def key(cube: Cube) -> tuple[int, str]:
        text = cube.text(cover.n_inputs)
        return (-cube.outputs.bit_count(), text.translate(_RANK))

    cubes: list[Cube] = sorted(cover, key=key)
    return Cover.of(cover.n_inputs, cubes)


def _proof(answers: Sequence[BlockMinimum]) -> Literal["certificate", "solver"] | None:
    if all(len(a.cover) == a.exact for a in answers):
        return "certificate"
    if all(len(a.cover) == a.trusted for a in answers):
        return "solver"
    return None


def _scope(answers: Sequence[BlockMinimum]) -> Scope | None:
    scopes = {a.connections for a in answers}
    if None in scopes:
        return None
    return "these polarities" if "these polarities" in scopes else "all polarities"


def _check(cover: Cover, complemented: Sequence[bool], function: Function) -> None:
    wrong = find_difference(cover, complemented, function)
    if wrong is not None:
        place = np.binary_repr(wrong.point, function.n_inputs)[::-1]
        message = f"the minimized cover breaks output {wrong.output} at inputs {place}"
        raise InternalError([Diagnostic("COVER", message)])
