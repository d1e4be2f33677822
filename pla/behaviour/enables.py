"""When three-state outputs drive their pins: reading and working out ``enable``.

A bus fight is not a don't care. So an enable holds for impossible inputs too, unless the design
says ``never_too``; and a signal that an enable names must be known for impossible inputs as well.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.behaviour.conditions import read_condition
from pla.behaviour.model import Enabling
from pla.logic import algebra

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.behaviour.conditions import Condition
    from pla.behaviour.description import Solver
    from pla.behaviour.equations import Sets
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
        ready = [solver.ready(bit, at) for bit, at in enable.condition.needs().items()]
        if not all(ready):
            continue
        sets = enable.condition.value(solver.sets if enable.never_too else solver.whole_sets)
        if sets is None:
            continue
        if enable.never_too:
            on, off = (algebra.difference(cover, never) for cover in sets)
        elif _report_unknown(enable, sets, never, solver, signals, diagnostics):
            continue
        else:
            on, off = sets
        on, off = algebra.compact(on.feeding(1)), algebra.compact(off.feeding(1))
        if _check_use(enable, on, off, never, diagnostics):
            found[enable.signal.name] = Enabling(on, off, enable.text, enable.location)
    return found


def _report_unknown(
    enable: EnableText,
    sets: Sets,
    never: Cover,
    solver: Solver,
    signals: Signals,
    diagnostics: Diagnostics,
) -> bool:
    """Report impossible inputs for which nobody says whether the output drives."""
    unknown = algebra.difference(never, sets[0] + sets[1])
    if not len(unknown):
        return False
    names = [signals.described_names[bit] for bit in solver.silent(enable.condition.needs())]
    if not names:
        return True  # one of them is too large, which was reported
    cube = next(iter(unknown))
    example = signals.show_point(cube.ones, cube.ones | cube.zeros)
    shown = " and ".join(filter(None, (", ".join(names[:-1]), names[-1])))
    diagnostics.error(
        "ENABLE-OPEN",
        f"whether {enable.signal.name} drives its pin is open for impossible inputs, for example "
        f"{example}: the description of {shown} says nothing about them",
        enable.location,
        f"describe {shown} by an equation; or say never_too = true, if nothing else can drive the "
        "line then",
    )
    return True


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
