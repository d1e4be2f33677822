"""The present values of registered signals, as inputs of everything that names them."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from pla.logic.cubes import MAX_INPUTS

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.signals import Signal
    from pla.tomlfile import Section

__all__ = ["with_present_values"]


def with_present_values(
    top: Section, inputs: Sequence[Signal], described: Sequence[Signal]
) -> list[Signal]:
    """The inputs, and behind them a present value for each registered signal.

    Args:
        top: Takes the error if there are too many.
        inputs: All other inputs.
        described: Outputs and behind them inner signals.
    """
    found = list(inputs)
    first = sum(signal.size for signal in inputs)
    few = first <= MAX_INPUTS
    for signal in described:
        if not signal.registered:
            continue
        found.append(
            replace(
                signal,
                role="input",
                first=first,
                active_low=False,
                impossible=None,
                reads=None,
                max_delay=None,
                registered=False,
                present_of=signal.name,
            )
        )
        first += signal.size
        if few and first > MAX_INPUTS:
            few = False
            top.error(
                "TOO-MANY-INPUTS",
                f"with the present value of {signal.name} there are {first} input bits, at most "
                f"{MAX_INPUTS} are possible",
                signal.location,
            )
    return found
