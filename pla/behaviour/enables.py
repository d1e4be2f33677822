"""When three-state outputs drive their pins: reading and working out ``enable``.

A bus fight is not a don't care. So an enable holds for impossible inputs too, unless the design
says ``never_too``.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.behaviour.conditions import read_condition
from pla.behaviour.model import Enabling
from pla.behaviour.switching import Switch, switched
from pla.logic import algebra

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.behaviour.conditions import Condition
    from pla.behaviour.description import Solver
    from pla.behaviour.signals import Signal, Signals
    from pla.errors import Diagnostics, Location
    from pla.logic.cubes import Cover
    from pla.tomlfile import Section

__all__ = ["EnableText", "read_enables", "solve_enables"]


@dataclass(frozen=True, slots=True)
class EnableText:
    """An enable as written and checked.

    Attributes:
        signal: The output.
        text: The equation.
        condition: What it says.
        location: Where.
        never_too: Impossible inputs are don't cares of it.
    """

    signal: Signal
    text: str
    condition: Condition
    location: Location
    never_too: bool


def read_enables(top: Section, signals: Signals) -> list[EnableText]:
    """The enables of all outputs; what is wrong goes to the section's diagnostics."""
    found = []
    section = top.section("outputs")
    for signal in signals.outputs if section is not None else ():
        if section is None or not isinstance(section.raw(signal.name), dict):
            continue
        table = section.section(signal.name)
        if table is None or "enable" not in table:
            continue
        text = table.raw("enable")
        if not isinstance(text, str):
            table.wrong("an equation in quotes", "enable")
            continue
        condition = read_condition(table, (*table.path, "enable"), text, signals)
        if condition is not None:
            never_too = table.data.get("never_too") is True
            found.append(EnableText(signal, text, condition, table.at("enable"), never_too))
    return found


def solve_enables(
    enables: Iterable[EnableText],
    never: Cover,
    solver: Solver,
    signals: Signals,
    diagnostics: Diagnostics,
) -> dict[str, Enabling]:
    """Where each output drives its pin.

    Args:
        enables: As written.
        never: Impossible inputs.
        solver: Knows the signals that they name.
        signals: For the words of messages.
        diagnostics: Takes enables that never turn on or are not known everywhere (errors), and
            those that never turn off (warnings).

    Returns:
        For the name of each output that has one; what is wrong is left out.
    """
    found = {}
    for enable in enables:
        drives = f"{enable.signal.name} drives its pin"
        switch = Switch(enable.condition, enable.location, enable.never_too, "ENABLE-OPEN", drives)
        sets = switched(switch, never, solver, signals, diagnostics)
        if sets is not None and _check_use(enable, *sets, never, diagnostics):
            found[enable.signal.name] = Enabling(*sets, enable.text, enable.location)
    return found


def _check_use(
    enable: EnableText, on: Cover, off: Cover, never: Cover, diagnostics: Diagnostics
) -> bool:
    name = enable.signal.name
    if not len(on):
        diagnostics.error(
            "ENABLE-NEVER",
            f"{name} never drives its pin: its enable is 0 for every "
            f"{'possible ' if enable.never_too and len(never) else ''}input",
            enable.location,
            "mend the equation, or leave the output out",
        )
        return False
    if not len(off):
        diagnostics.warning(
            "ENABLE-ALWAYS",
            f"{name} always drives its pin: its enable is 1 for every "
            f"{'possible ' if enable.never_too and len(never) else ''}input",
            enable.location,
            "leave the enable out",
        )
    elif not enable.never_too and len(never) and not len(algebra.difference(on, never)):
        diagnostics.warning(
            "ENABLE-IMPOSSIBLE",
            f"{name} drives its pin for impossible inputs only",
            enable.location,
            "mend the equation or [never]",
        )
    return True
