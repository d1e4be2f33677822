"""Whether a column of a truth table is the present or the next value of a registered signal."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.behaviour.problem import Problem

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.signals import Signals, Wanted

__all__ = ["registered_column"]


def registered_column(
    index: int, names: Sequence[str], groups: Sequence[int] | None, signals: Signals
) -> Wanted | None:
    """What the name of a column is wanted for; ``None`` if it is not registered.

    Inputs stand in front of outputs. So a registered name is the present value in the first group
    of columns, in front of an input, and where it stands once more; otherwise the next value.

    Args:
        index: Which column.
        names: Of all columns.
        groups: For each column the group that bars part; ``None`` if there are no bars.
        signals: What is declared.

    Raises:
        Problem: If the columns of a table without bars do not tell.
    """
    name = names[index]
    if not _is_registered(name, signals):
        return None
    earlier, later = names[:index], names[index + 1 :]
    if any(_has_role(n, signals, "input") for n in later):
        return "input"
    if groups is not None:
        return "input" if groups[index] == 0 else "output"
    if index == 0 or name in later:
        return "input"
    behind = any(_has_role(n, signals, "output", "inner") for n in earlier)
    again = any(n in earlier[:place] for place, n in enumerate(earlier))
    if name in earlier or behind or again or not later:
        return "output"
    raise Problem(
        "HEADER",
        f"the column {name!r} may be the present or the next value of a registered signal: there "
        "is no bar that tells",
        "put the present value in front of an input, or the next value behind an output that is "
        'not registered; or write the table into the design file, rows = """…"""',
    )


def _is_registered(name: str, signals: Signals) -> bool:
    return name.partition("[")[0] in signals.present


def _has_role(name: str, signals: Signals, *roles: str) -> bool:
    """Whether a name is a signal of some role that is not registered."""
    signal = signals.by_name.get(name.partition("[")[0])
    return signal is not None and signal.role in roles and not signal.registered
