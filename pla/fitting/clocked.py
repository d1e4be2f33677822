"""Designs with registers: they are read and minimized, but not laid onto devices yet."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.errors import Diagnostic, RefusalError

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour

__all__ = ["refuse_registers"]


def refuse_registers(behaviour: Behaviour) -> None:
    """Refuse a design that has any.

    Raises:
        RefusalError: With one diagnostic, at the first registered signal.
    """
    registered = behaviour.registered
    if not registered:
        return
    names = list(dict.fromkeys(bit.name.partition("[")[0] for bit in registered))
    shown = ", ".join(names[:8]) + (f" and {len(names) - 8} more" if len(names) > 8 else "")
    raise RefusalError(
        [
            Diagnostic(
                "REGISTERS",
                f"the design has registers ({shown}): registers are planned by a later version",
                registered[0].location,
                "'check' and 'terms' read and minimize such a design",
            )
        ]
    )
