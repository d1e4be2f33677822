"""The programming table in the textbook manner."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.notation import groups_of, spans
from pla.report.table import Strip, Table

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour
    from pla.fitting.model import Plan
    from pla.logic.minimize import Minimum

__all__ = ["programming_table"]

_CELL = {"1": "1", "0": "0", "-": "–"}


def programming_table(behaviour: Behaviour, minimum: Minimum, plan: Plan | None = None) -> Table:
    """One row a product term, one column a signal.

    Args:
        behaviour: Whose signals they are.
        minimum: The terms.
        plan: Adds pins and the rows of the device.
    """
    n, m = len(behaviour.inputs), len(behaviour.outputs)
    front = ("term", "row") if plan else ("term",)
    rows = tuple(
        (
            *((str(number), str(plan.rows[number - 1])) if plan else (str(number),)),
            *(_CELL[character] for character in cube.text(n)),
            *("1" if cube.outputs >> j & 1 else "–" for j in range(m)),
        )
        for number, cube in enumerate(minimum.cover, 1)
    )
    return Table(
        "Programming table",
        (*front, *behaviour.input_names, *behaviour.output_names),
        rows,
        aligned="r" * len(front) + "l" * (n + m),
        remarks=tuple(_conventions(behaviour, minimum, plan)),
        under=tuple(_under(behaviour, minimum, plan, ("",) * (len(front) - 1))),
        strips=(
            *_strips(behaviour.input_names, len(front), 0),
            *_strips(behaviour.output_names, len(front) + n, 1),
        ),
    )


def _strips(names: Sequence[str], offset: int, part: int) -> Iterator[Strip]:
    for group in groups_of(names):
        marks = tuple(map(str, group.bits)) or ("",)
        yield Strip(group.first + offset, group.name, marks, part)


def _under(
    behaviour: Behaviour, minimum: Minimum, plan: Plan | None, blank: tuple[str, ...]
) -> Iterator[tuple[str, ...]]:
    lows = [i.active_low for i in behaviour.inputs] + [o.active_low for o in behaviour.outputs]
    if plan:
        pins = [i.pin for i in plan.inputs] + [o.pin for o in plan.outputs]
        yield "pin", *blank, *("" if pin is None else str(pin) for pin in pins)
    yield "active", *blank, *("L" if low else "H" for low in lows)
    senses = ("C" if complemented else "T" for complemented in minimum.complemented)
    yield "sum", *blank, *("",) * len(behaviour.inputs), *senses


def _conventions(behaviour: Behaviour, minimum: Minimum, plan: Plan | None) -> Iterator[str]:
    if not minimum.count:
        yield "There is no product term: every sum is 0."
    yield (
        "Inputs: 1 is the signal, 0 its complement, – not in the term. Outputs: 1 means that the "
        "term is in the sum, – that it is not."
    )
    lows = any(s.active_low for s in behaviour.inputs + behaviour.outputs)
    level = "asserted is a high level on the pin for H, a low one for L" if lows else "all are H"
    yield (
        "All values are asserted values: 1 means that the signal is asserted, whatever level its "
        f"pin has then. Active: {level}{'' if lows else ', asserted is a high level on the pin'}."
    )
    complement = (
        "; C: it is the complement, and the output is asserted where no term of its sum is 1"
        if any(minimum.complemented)
        else ""
    )
    yield f"Sum T: the sum is the asserted function{complement}."
    if plan:
        yield _on_rows(plan)


def _on_rows(plan: Plan) -> str:
    unused = sorted(set(range(plan.device.terms)) - set(plan.rows))
    first = "Rows of the device count from 0."
    if not unused:
        return f"{first} All are used."
    left = (
        "left blank"
        if plan.device.links.unused_term == "blank"
        else "made dead, with every line and its complement connected"
    )
    which = f"Row {spans(unused)} is" if len(unused) == 1 else f"Rows {spans(unused)} are"
    return f"{first} {which} not used and {left}."
