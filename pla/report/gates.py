"""Which outputs of a plan share product terms, and which have an OR gate of their own."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from pla.fitting.prices import safety_prices
from pla.logic.cubes import Cover
from pla.logic.function import Function
from pla.logic.phases import Polarity
from pla.report.text import kept_together
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour
    from pla.fitting.model import Fit, Plan
    from pla.fitting.prices import SafetyPrice
    from pla.logic.minimize import Minimum

__all__ = [
    "GroupPrice",
    "allowed_polarities",
    "group_prices",
    "headroom",
    "headroom_text",
    "own_gates",
]


@dataclass(frozen=True, slots=True)
class GroupPrice:
    """What a demanded value costs among the outputs that share terms with it.

    Attributes:
        price: The price.
        terms: Product terms of these outputs as the design is.
        proven: Whether these are the fewest.
        alone: Whether there is but this output, with an OR gate of its own.
    """

    price: SafetyPrice
    terms: int
    proven: bool
    alone: bool = False


def own_gates(plan: Plan) -> tuple[bool, ...]:
    """For each output, whether its OR gate has terms that no other sum can use."""
    shared = plan.device.or_column
    return tuple(placed.cell.key not in shared for placed in plan.outputs)


def headroom(plan: Plan) -> dict[str, tuple[int, int]]:
    """Terms used and terms that the cell has, for each signal with an OR gate of its own."""
    return {
        placed.name: (len(plan.minimum.cover.of_output(placed.index)), len(placed.mode.terms))
        for placed, own in zip(plan.outputs, own_gates(plan), strict=True)
        if own
    }


def headroom_text(plan: Plan) -> str:
    """``fan 3 of 8, burner 8 of 8``: what has least to spare first, of equals in order.

    Behind them those on shared OR gates together; empty if all are.
    """
    found = sorted(headroom(plan).items(), key=lambda entry: entry[1][1] - entry[1][0])
    alone = ", ".join(kept_together(f"{name} {used} of {has}") for name, (used, has) in found)
    shared = [p for p, own in zip(plan.outputs, own_gates(plan), strict=True) if not own]
    if not alone or not shared:
        return alone
    mask = np.uint64(sum(1 << placed.index for placed in shared))
    used = int(np.count_nonzero(plan.minimum.cover.outputs & mask))
    terms = kept_together(f"{used} of {len(plan.device.shared_rows)}")
    share = f"share{'s' if len(shared) == 1 else ''}"
    return f"{alone}; {listed([placed.name for placed in shared])} {share} {terms}"


def allowed_polarities(fit: Fit, plan: Plan) -> list[Polarity]:
    """For each output as laid out; inner signals that have a cell may be realised either way."""
    asked = [polarity or Polarity() for polarity in fit.polarities]
    count = len(plan.outputs)
    return (asked + [Polarity()] * (count - len(asked)))[:count]


def group_prices(plan: Plan, polarities: Sequence[Polarity]) -> tuple[GroupPrice, ...]:
    """The price of every demanded value, by output, within the outputs that share terms with it.

    Args:
        plan: The design on its device.
        polarities: What each output as laid out may be realised as.
    """
    own, minimum = own_gates(plan), plan.minimum
    behaviour = _with_never(plan.behaviour)
    shared = [j for j, alone in enumerate(own) if not alone]
    found = []
    for group in ([shared] if shared else []) + [[j] for j, alone in enumerate(own) if alone]:
        if any(behaviour.outputs[j].impossible is not None for j in group):
            found += _prices_within(behaviour, minimum, polarities, group, alone=own[group[0]])
    return tuple(sorted(found, key=lambda entry: entry.price.output))


def _prices_within(
    behaviour: Behaviour,
    minimum: Minimum,
    polarities: Sequence[Polarity],
    group: Sequence[int],
    *,
    alone: bool,
) -> list[GroupPrice]:
    mask = np.uint64(sum(1 << j for j in group))
    terms = int(np.count_nonzero(minimum.cover.outputs & mask))
    part = _restricted(behaviour, group) if len(group) < len(behaviour.outputs) else behaviour
    prices = safety_prices(part, [polarities[j] for j in group], minimum)
    return [
        GroupPrice(replace(price, output=group[price.output]), terms, minimum.proven, alone)
        for price in prices
    ]


def _with_never(behaviour: Behaviour) -> Behaviour:
    """The same with the impossible inputs as cubes over fed-back signals, too."""
    n, never = len(behaviour.inputs), behaviour.never
    if never.n_inputs == n:
        return behaviour
    return replace(behaviour, never=Cover(n, never.ones, never.zeros, never.outputs))


def _restricted(behaviour: Behaviour, group: Sequence[int]) -> Behaviour:
    """The same design with some of its outputs."""
    function = behaviour.function
    part = Function.of_outputs(
        function.n_inputs,
        [(function.on.of_output(j), function.off.of_output(j)) for j in group],
    )
    return replace(behaviour, outputs=tuple(behaviour.outputs[j] for j in group), function=part)
