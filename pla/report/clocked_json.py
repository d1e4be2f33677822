"""Registers and state tables for programs."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pla.report.clocked import edge_of

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour, Enabling, Registering, StateTable

__all__ = ["clocked_document"]


def clocked_document(behaviour: Behaviour) -> dict[str, Any]:
    """What documents say of registers; nothing for a design without any."""
    if not behaviour.registered:
        return {}
    return {
        "present": [i.name for i in behaviour.inputs if i.present_of is not None],
        "registers": {
            bit.name: _register(bit.register) for bit in behaviour.registered if bit.register
        },
        "state_tables": [_table(machine) for machine in behaviour.machines],
    }


def _register(register: Registering) -> dict[str, Any]:
    return {
        "register": register.kind,
        "clock": register.clock,
        "edge": edge_of(register),
        "start": register.start,
        "reset": _control(register.reset, at_once=register.reset_asynchronous),
        "preset": _control(register.preset, at_once=register.preset_asynchronous),
    }


def _control(control: Enabling | None, *, at_once: bool) -> dict[str, Any] | None:
    if control is None:
        return None
    return {
        "text": control.text,
        "line": control.location.line,
        "when": "asynchronous" if at_once else "clock",
    }


def _table(machine: StateTable) -> dict[str, Any]:
    codes = machine.codes or (None,) * len(machine.states)
    return {
        "of": machine.name,
        "bits": list(machine.bits),
        "states": list(machine.states),
        "start": machine.states[machine.start],
        "style": machine.style,
        "codes": dict(zip(machine.states, codes, strict=True)),
        "unused": "start" if machine.unused_start else "x",
        "outputs": list(machine.outputs),
        "line": machine.location.line,
    }
