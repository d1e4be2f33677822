"""The programming table in the textbook manner."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.notation import groups_of
from pla.report.table import Strip, Table

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour
    from pla.fitting.model import Plan
    from pla.logic.minimize import Minimum
    from pla.report.notation import Group

__all__ = ["programming_table"]

_CELL = {"1": "1", "0": "0", "-": "–"}


def programming_table(behaviour: Behaviour, minimum: Minimum, plan: Plan | None = None) -> Table:
    """One row a product term, one column a signal.

    Args:
        behaviour: Whose signals they are.
        minimum: The terms.
        plan: Adds pins and rows of the device.
    """
    names = (*behaviour.input_names, *behaviour.output_names)
    n = len(behaviour.inputs)
    front = ("term", "row") if plan else ("term",)
    rows = []
    for k, cube in enumerate(minimum.cover):
        number = (str(k + 1), str(plan.rows[k])) if plan else (str(k + 1),)
        inputs = tuple(_CELL[c] for c in cube.text(n))
        outputs = tuple(
            "1" if cube.outputs >> j & 1 else "–" for j in range(len(behaviour.outputs))
        )
        rows.append(number + inputs + outputs)
    blank = ("",) * (len(front) - 1)
    signals = (*behaviour.inputs, *behaviour.outputs)
    under = []
    if plan:
        pins = [p.pin for p in (*plan.inputs, *plan.outputs)]
        under.append(("pin", *blank, *("" if pin is None else str(pin) for pin in pins)))
    if any(s.active_low for s in signals):
        under.append(("active", *blank, *("L" if s.active_low else "H" for s in signals)))
    senses = ("C" if c else "T" for c in minimum.complemented)
    under.append(("sum", *blank, *("",) * n, *senses))
    strips = [
        *_strips(groups_of(behaviour.input_names), len(front)),
        *_strips(groups_of(behaviour.output_names), len(front) + n),
    ]
    return Table(
        "Programming table",
        front + names,
        tuple(rows),
        lead=tuple(_conventions(behaviour, minimum, plan)),
        aligned="r" * len(front) + "l" * len(names),
        under=tuple(under),
        strips=tuple(strips),
    )


def _strips(groups: Sequence[Group], offset: int) -> list[Strip]:
    return [
        Strip(
            g.first + offset,
            g.size,
            g.name,
            tuple(map(str, g.bits)) or ("",),
        )
        for g in groups
    ]


def _conventions(behaviour: Behaviour, minimum: Minimum, plan: Plan | None) -> list[str]:
    said = [
        "Inputs: 1 the signal itself, 0 its complement, – not in the term. Outputs: 1 the term is "
        "in the sum, – it is not. All values are asserted values: 1 means that the signal is "
        "asserted, whatever level its pin has then."
    ]
    if any(s.active_low for s in (*behaviour.inputs, *behaviour.outputs)):
        said.append("Active H: asserted is high on the pin. Active L: asserted is low on the pin.")
    if any(minimum.complemented):
        said.append(
            "T: the sum is the asserted function. C: the sum is its complement, so the output is "
            "asserted where no term of its sum is 1."
        )
    else:
        said.append("T: the sum is the asserted function.")
    if plan:
        said.append("Rows of the device count from 0.")
    return said
