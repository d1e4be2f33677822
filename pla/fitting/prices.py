"""What outputs, sharing and safety cost in product terms."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.logic import algebra
from pla.logic.blocks import blocks_of
from pla.logic.dense import MAX_DENSE_INPUTS
from pla.logic.effort import Effort
from pla.logic.function import Function
from pla.logic.minimize import minimize

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour
    from pla.logic.minimize import Minimum
    from pla.logic.phases import Polarity

__all__ = ["Count", "SafetyPrice", "alone_counts", "counts_without", "safety_prices"]

SIDE_EFFORT = 20_000.0
"""Work that one question beside the main one may cost (see `pla.logic.effort`)."""


@dataclass(frozen=True, slots=True)
class Count:
    """A number of terms, and whether it is proven smallest."""

    terms: int
    proven: bool


@dataclass(frozen=True, slots=True)
class SafetyPrice:
    """What it costs that an output has a demanded value for impossible inputs.

    Attributes:
        output: Index of the output.
        demanded: Its asserted value for impossible inputs.
        freed: The whole design's terms if this output did not care; ``None`` if that was not
            computed, since the design is wide and its own minimum not proven.
    """

    output: int
    demanded: int
    freed: Count | None


def alone_counts(function: Function, polarities: Sequence[Polarity]) -> tuple[Count, ...]:
    """Terms of each output minimized alone, in the best polarity that it may have."""
    return tuple(_count(_part(function, [j]), [polarities[j]]) for j in range(function.n_outputs))


def counts_without(function: Function, polarities: Sequence[Polarity]) -> tuple[Count, ...]:
    """For each output, the terms of the design without it."""
    counts = []
    for j in range(function.n_outputs):
        rest = [k for k in range(function.n_outputs) if k != j]
        counts.append(_count(_part(function, rest), [polarities[k] for k in rest]))
    return tuple(counts)


def safety_prices(
    behaviour: Behaviour, polarities: Sequence[Polarity], minimum: Minimum
) -> tuple[SafetyPrice, ...]:
    """The price of every ``impossible = 0`` or ``1``, one output at a time.

    Args:
        behaviour: The design.
        polarities: What each output may be realised as.
        minimum: Its terms. Where they are not proven fewest and more inputs belong together than
            can be listed, comparing two guesses would cost much and tell nothing: no price then.
    """
    return tuple(
        SafetyPrice(j, output.impossible, _freed_count(behaviour, j, polarities, minimum))
        for j, output in enumerate(behaviour.outputs)
        if output.impossible is not None
    )


def _freed_count(
    behaviour: Behaviour, output: int, polarities: Sequence[Polarity], minimum: Minimum
) -> Count | None:
    function = _freed(behaviour, output)
    if not minimum.proven and any(
        part.function.n_inputs > MAX_DENSE_INPUTS for part in blocks_of(function, polarities)
    ):
        return None
    return _count(function, polarities)


def _count(function: Function, polarities: Sequence[Polarity]) -> Count:
    if not function.n_outputs:
        return Count(0, True)
    found: Minimum = minimize(
        function, polarities, effort=Effort(work=SIDE_EFFORT, nodes=100), connections=False
    )
    return Count(found.count, found.proven)


def _part(function: Function, outputs: Sequence[int]) -> Function:
    return Function.of_outputs(
        function.n_inputs,
        [(function.on.of_output(j), function.off.of_output(j)) for j in outputs],
    )


def _freed(behaviour: Behaviour, output: int) -> Function:
    """The function with impossible inputs left open for one output."""
    function = behaviour.function
    sets = []
    for j in range(function.n_outputs):
        on, off = function.on.of_output(j), function.off.of_output(j)
        if j == output:
            on, off = (algebra.difference(cover, behaviour.never) for cover in (on, off))
        sets.append((on, off))
    return Function.of_outputs(function.n_inputs, sets)
