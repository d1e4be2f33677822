"""What switches: equations that hold for impossible inputs too, unless the design says otherwise.

A bus fight or a register that is reset at the wrong time is not a don't care. So a signal that
such an equation names must be known for impossible inputs as well.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.logic import algebra

if TYPE_CHECKING:
    from pla.behaviour.conditions import Condition
    from pla.behaviour.description import Solver
    from pla.behaviour.equations import Sets
    from pla.behaviour.signals import Signals
    from pla.errors import Diagnostics, Location
    from pla.logic.cubes import Cover

__all__ = ["Switch", "switched"]


@dataclass(frozen=True, slots=True)
class Switch:
    """An equation that switches something.

    Attributes:
        condition: What it says.
        location: Where.
        never_too: Impossible inputs are don't cares of it.
        code: Of the error that it is not known for impossible inputs.
        what: What happens while it is 1, in words: ``bus drives its pin``.
    """

    condition: Condition
    location: Location
    never_too: bool
    code: str
    what: str


def switched(
    switch: Switch, never: Cover, solver: Solver, signals: Signals, diagnostics: Diagnostics
) -> Sets | None:
    """Where it is 1 and where it is 0.

    Args:
        switch: The equation.
        never: Impossible inputs.
        solver: Knows the signals that it names.
        signals: For the words of messages.
        diagnostics: Takes an equation that is not known everywhere.

    Returns:
        ``None`` if something is wrong, which has been reported.
    """
    ready = [solver.ready(bit, at) for bit, at in switch.condition.needs().items()]
    if not all(ready):
        return None
    sets = switch.condition.value(solver.sets if switch.never_too else solver.whole_sets)
    if sets is None:
        return None
    if switch.never_too:
        on, off = (algebra.difference(cover, never) for cover in sets)
    elif _report_unknown(switch, sets, never, solver, signals, diagnostics):
        return None
    else:
        on, off = sets
    return algebra.compact(on.feeding(1)), algebra.compact(off.feeding(1))


def _report_unknown(
    switch: Switch,
    sets: Sets,
    never: Cover,
    solver: Solver,
    signals: Signals,
    diagnostics: Diagnostics,
) -> bool:
    """Report impossible inputs for which nobody says what the equation is."""
    unknown = algebra.difference(never, sets[0] + sets[1])
    if not len(unknown):
        return False
    names = [signals.described_names[bit] for bit in solver.silent(switch.condition.needs())]
    if not names:
        return True  # one of them is too large, which was reported
    cube = next(iter(unknown))
    example = signals.show_point(cube.ones, cube.ones | cube.zeros)
    shown = " and ".join(filter(None, (", ".join(names[:-1]), names[-1])))
    diagnostics.error(
        switch.code,
        f"whether {switch.what} is open for impossible inputs, for example "
        f"{example}: the description of {shown} says nothing about them",
        switch.location,
        f"describe {shown} by an equation; or say never_too = true, if nothing else can drive the "
        "line then"
        if switch.code == "ENABLE-OPEN"
        else f"describe {shown} by an equation; or say never_too = true, if it does not matter",
    )
    return True
