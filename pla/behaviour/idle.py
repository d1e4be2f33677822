"""Warnings of signals that nothing depends on."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.logic import algebra

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from pla.behaviour.assemble import Assembled
    from pla.behaviour.model import Enabling, Registering
    from pla.behaviour.naming import Needs
    from pla.behaviour.signals import Signals
    from pla.errors import Diagnostics
    from pla.logic.function import Function

__all__ = ["warn_of_idle_inner", "warn_of_idle_inputs"]


def warn_of_idle_inputs(
    whole: Assembled,
    enables: Mapping[str, Enabling],
    registers: Mapping[str, Registering],
    signals: Signals,
    diagnostics: Diagnostics,
) -> None:
    """Warn of inputs from outside that no output depends on, nor any register."""
    used = _support_of_outputs(whole, enables)
    clocks = {register.clock for register in registers.values()}
    for register in registers.values():
        for control in (register.reset, register.preset):
            used |= algebra.support(control.on, control.off) if control else 0
    if whole.inner is not None:
        for place, name in enumerate(signals.described_names[signals.n_outputs :]):
            used |= _support_of(whole.inner, place) if name in registers else 0
    for signal in signals.outside:
        names = signals.input_names
        bits = signal.positions
        idle = [bit for bit in bits if not used >> bit & 1 and names[bit] not in clocks]
        if not idle:
            continue
        shown = signal.name if len(idle) == len(bits) else ", ".join(names[bit] for bit in idle)
        diagnostics.warning("INPUT-UNUSED", f"no output depends on {shown}", signal.location)


def warn_of_idle_inner(
    needs: Sequence[Needs],
    whole: Assembled,
    enables: Mapping[str, Enabling],
    registers: Mapping[str, Registering],
    signals: Signals,
    diagnostics: Diagnostics,
) -> None:
    """Warn of inner signals that nothing names, and of registers that no output depends on."""
    named = {bit for _, bits in needs for bit in bits}
    named |= _live(whole, enables, registers, signals)
    for signal in signals.inner:
        idle = [bit for bit in signal.positions if bit not in named]
        if not idle:
            continue
        names = ", ".join(signals.described_names[bit] for bit in idle)
        shown = signal.name if len(idle) == signal.size else names
        diagnostics.warning(
            "INNER-UNUSED",
            f"no output depends on the registered inner signal {shown}"
            if signal.registered
            else f"nothing names the inner signal {shown}",
            signal.location,
        )


def _live(
    whole: Assembled,
    enables: Mapping[str, Enabling],
    registers: Mapping[str, Registering],
    signals: Signals,
) -> set[int]:
    """Positions of the registered bits whose present value can make a difference to an output."""
    following = {
        position: bit
        for name, signal in signals.present.items()
        for position, bit in zip(signal.positions, signals.by_name[name].positions, strict=True)
    }
    used = _support_of_outputs(whole, enables)
    found: set[int] = set()
    waiting = [bit for bit in range(signals.n_outputs) if signals.described_names[bit] in registers]
    seen = set[int](waiting)
    while True:
        for bit in waiting:
            register = registers.get(signals.described_names[bit])
            for control in (register.reset, register.preset) if register else ():
                used |= algebra.support(control.on, control.off) if control else 0
            if bit >= signals.n_outputs and whole.inner is not None:
                used |= _support_of(whole.inner, bit - signals.n_outputs)
        found |= {bit for position, bit in following.items() if used >> position & 1}
        waiting = sorted(found - seen)
        seen |= found
        if not waiting:
            return found


def _support_of_outputs(whole: Assembled, enables: Mapping[str, Enabling]) -> int:
    covers = [cover for enable in enables.values() for cover in (enable.on, enable.off)]
    return algebra.support(whole.outputs.on, whole.outputs.off, *covers)


def _support_of(function: Function, place: int) -> int:
    return algebra.support(function.on.of_output(place), function.off.of_output(place))
