"""Registers, their clocks and controls, and state tables: what a clocked design says, in words."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

from pla.report.notation import plural
from pla.report.table import Table
from pla.report.text import one_line

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

    from pla.behaviour.model import Behaviour, Enabling, Inner, Output, Registering, StateTable

__all__ = ["Bits", "RegisterGroup", "edge_of", "register_groups", "register_table", "state_tables"]

Bits: TypeAlias = "tuple[Output | Inner, ...]"

_STYLES = {
    "free": "free; until they are chosen they count in binary, other codes were not tried",
    "counting": "counting in binary",
    "gray": "reflected Gray",
    "one-hot": "one bit for each state",
    "table": "as given",
}


@dataclass(frozen=True, slots=True)
class RegisterGroup:
    """The bits of one registered signal.

    Attributes:
        name: With its ends: ``count[2:0]``.
        bits: From the highest down.
        machine: The state table whose state they hold.
    """

    name: str
    bits: Bits
    machine: StateTable | None

    @property
    def register(self) -> Registering:
        """How the first bit is clocked; kind and clock are the same for all.

        Raises:
            ValueError: If the bits are not registered.
        """
        register = self.bits[0].register
        if register is None:
            raise ValueError(self.name)
        return register

    @property
    def start(self) -> int | None:
        """The number that the bits hold at power-up."""
        values = [bit.register.start if bit.register else None for bit in self.bits]
        if any(value is None for value in values):
            return None
        return int("".join(map(str, values)), 2)


def register_groups(behaviour: Behaviour) -> tuple[RegisterGroup, ...]:
    """The registered signals in order of outputs and inner signals."""
    groups: dict[str, list[Output | Inner]] = {}
    for bit in behaviour.registered:
        groups.setdefault(bit.name.partition("[")[0], []).append(bit)
    machines = {machine.name: machine for machine in behaviour.machines}
    return tuple(
        RegisterGroup(_span(name, bits), tuple(bits), machines.get(name))
        for name, bits in groups.items()
    )


def edge_of(register: Registering) -> str:
    """``rising`` or ``falling``, of the asserted clock."""
    return "falling" if register.falling else "rising"


def register_table(behaviour: Behaviour, described: Callable[[Bits], str]) -> Table:
    """One row a registered signal: clock, value at power-up, reset and preset.

    Args:
        behaviour: The design.
        described: Says where the next values of some bits are given.
    """
    rows = []
    acts = any(r and (r.reset or r.preset) for r in (b.register for b in behaviour.registered))
    for group in register_groups(behaviour):
        register = group.register
        reset = _control(register.reset, at_once=register.reset_asynchronous)
        preset = _control(register.preset, at_once=register.preset_asynchronous)
        if group.machine is not None:
            reset, preset = _to_start(group), "–"
        rows.append(
            (
                group.name,
                register.kind,
                f"{register.clock}{', falling' if register.falling else ''}",
                _start(group),
                reset,
                preset,
                described(group.bits),
            )
        )
    return Table(
        "Registers",
        (
            "register",
            "kind",
            "clock",
            "at power-up",
            "reset while",
            "preset while",
            "next value by",
        ),
        tuple(rows),
        aligned="lllllll",
        wrapped=(0, 4, 5, 6),
        remarks=("A reset or preset acts at once, unless it says at the clock.",) if acts else (),
    )


def state_tables(behaviour: Behaviour) -> Iterator[Table]:
    """For each state table its states with codes and next states."""
    for machine in behaviour.machines:
        codes = machine.codes or ("?",) * len(machine.states)
        leads: dict[int, list[int]] = {}
        for row in machine.rows:
            following = leads.setdefault(row.state, [])
            if row.then not in following:
                following.append(row.then)
        yield Table(
            f"States of {machine.name}",
            (f"state of {machine.name}", _span(machine.name, machine.bits), "leads to"),
            tuple(
                (
                    f"{name} (start)" if state == machine.start else name,
                    codes[state],
                    ", ".join(machine.states[then] for then in leads.get(state, ())),
                )
                for state, name in enumerate(machine.states)
            ),
            aligned="lll",
            wrapped=(2,),
            remarks=tuple(_remarks(machine)),
        )


def _remarks(machine: StateTable) -> Iterator[str]:
    yield f"Codes of {machine.name}: {_STYLES[machine.style]}."
    left = (1 << len(machine.bits)) - len(machine.states)
    if not left:
        return
    start = machine.states[machine.start]
    many = plural(left, "code belongs", "codes belong")
    yield (
        f"{many} to no state: there everything is as in {start}."
        if machine.unused_start
        else f"{many} to no state: nothing is demanded there, not even a way out."
    )


def _span(name: str, bits: tuple[str, ...] | list[Output | Inner]) -> str:
    ends = [bit if isinstance(bit, str) else bit.name for bit in (bits[0], bits[-1])]
    if len(bits) == 1:
        return ends[0]
    first, last = (end[len(name) + 1 : -1] for end in ends)
    return f"{name}[{first}:{last}]"


def _start(group: RegisterGroup) -> str:
    if group.start is None:
        return "either"
    if group.machine is not None:
        return group.machine.states[group.machine.start]
    return str(group.start)


def _control(control: Enabling | None, *, at_once: bool) -> str:
    if control is None:
        return "–"
    return one_line(control.text) + ("" if at_once else ", at the clock")


def _to_start(group: RegisterGroup) -> str:
    register = group.register
    if register.reset is not None:
        return _control(register.reset, at_once=register.reset_asynchronous)
    return _control(register.preset, at_once=register.preset_asynchronous)
