"""From declared signals to the bits of a `Behaviour`."""

from __future__ import annotations

from itertools import repeat
from typing import TYPE_CHECKING

from pla.behaviour.model import Inner, Input, Output

if TYPE_CHECKING:
    from collections.abc import Mapping

    from pla.behaviour.description import Claims
    from pla.behaviour.model import Enabling, Registering
    from pla.behaviour.signals import Signals

__all__ = ["inner_bits", "input_bits", "output_bits"]


def input_bits(signals: Signals) -> tuple[Input, ...]:
    """Every bit that is looked at, present values last."""
    found = []
    for signal in signals.inputs:
        output = signals.by_name[signal.read_from] if signal.read_from else None
        pins = output.bit_names() if output else repeat(None)
        for name, pin in zip(signal.bit_names(), pins, strict=False):
            found.append(
                Input(
                    name,
                    signal.active_low,
                    signal.location,
                    pin,
                    present_of=name if signal.present_of is not None else None,
                    asynchronous=signal.asynchronous,
                )
            )
    return tuple(found)


def output_bits(
    signals: Signals,
    claims: Claims,
    enables: Mapping[str, Enabling],
    registers: Mapping[str, Registering],
) -> tuple[Output, ...]:
    """Every bit that has a pin."""
    found = []
    for signal in signals.outputs:
        read = signals.by_name[signal.reads].bit_names() if signal.reads else repeat(None)
        bits = zip(signal.positions, signal.bit_names(), read, strict=False)
        for bit, name, reads in bits:
            described, form = claims.places[bit]
            found.append(
                Output(
                    name=name,
                    active_low=signal.active_low,
                    impossible=signal.impossible,
                    location=signal.location,
                    described=described,
                    form=form,
                    enable=enables.get(signal.name),
                    reads=reads,
                    max_delay=signal.max_delay,
                    register=registers.get(name),
                )
            )
    return tuple(found)


def inner_bits(
    signals: Signals, claims: Claims, registers: Mapping[str, Registering]
) -> tuple[Inner, ...]:
    """Every bit that has none."""
    return tuple(
        Inner(name, signal.location, *claims.places[bit], register=registers.get(name))
        for signal in signals.inner
        for bit, name in zip(signal.positions, signal.bit_names(), strict=True)
    )
