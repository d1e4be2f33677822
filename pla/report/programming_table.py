"""The programming table in the textbook manner."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.notation import groups_of
from pla.report.table import Strip, Table
from pla.wording import listed, spans

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour
    from pla.fitting.model import Plan
    from pla.logic.minimize import Minimum
    from pla.report.rows import Left, ProgrammedRows

__all__ = ["programming_table"]

_CELL = {"1": "1", "0": "0", "-": "–"}


def programming_table(
    behaviour: Behaviour, minimum: Minimum, programmed: ProgrammedRows | None = None
) -> Table:
    """One row a product term, one column a signal; below them the rows that enable outputs.

    Args:
        behaviour: Whose signals they are, fed-back ones behind the inputs.
        minimum: The terms.
        programmed: Adds pins, the rows of the device, the enable rows, and how rows that are not
            used were left.
    """
    plan = programmed.plan if programmed else None
    n, m = len(behaviour.inputs), len(behaviour.outputs)
    front = ("term", "row") if plan else ("term",)
    rows = [
        (
            *((str(number), str(plan.rows[number - 1])) if plan else (str(number),)),
            *(_CELL[character] for character in cube.text(n)),
            *("1" if cube.outputs >> j & 1 else "–" for j in range(m)),
        )
        for number, cube in enumerate(minimum.cover, 1)
    ]
    if plan is not None:
        rows += _enable_rows(plan, n, m)
    return Table(
        "Programming table",
        (*front, *behaviour.input_names, *behaviour.output_names),
        tuple(rows),
        aligned="r" * len(front) + "l" * (n + m),
        remarks=tuple(_conventions(behaviour, minimum, programmed)),
        under=tuple(_under(behaviour, minimum, plan, ("",) * (len(front) - 1))),
        strips=(
            *_strips(behaviour.input_names, len(front), 0),
            *_strips(behaviour.output_names, len(front) + n, 1),
        ),
    )


def _enable_rows(plan: Plan, n: int, m: int) -> Iterator[tuple[str, ...]]:
    """The rows that switch the pins of outputs."""
    for placed in plan.outputs:
        row = placed.mode.enable.row
        if row is None or (placed.pin is None and placed.shown is None):
            continue
        text = placed.enable.cube.text(n) if placed.enable is not None else "-" * n
        yield (
            f"enable of {placed.name}",
            str(row),
            *(_CELL[character] for character in text),
            *("E" if j == placed.index else "–" for j in range(m)),
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
        keys = [i.fed_by if i.pin is None else i.pin for i in plan.inputs]
        keys += [o.cell.key if o.pin is None else o.pin for o in plan.outputs]
        yield "pin", *blank, *("" if key is None else str(key) for key in keys)
    # What a register holds has no pin of its own.
    inside = [i.present_of is not None for i in behaviour.inputs] + [False] * len(behaviour.outputs)
    marks = ("" if held else "L" if low else "H" for low, held in zip(lows, inside, strict=True))
    yield "active", *blank, *marks
    senses = ("C" if complemented else "T" for complemented in minimum.complemented)
    yield "sum", *blank, *("",) * len(behaviour.inputs), *senses


def _conventions(
    behaviour: Behaviour, minimum: Minimum, programmed: ProgrammedRows | None
) -> Iterator[str]:
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
    present = [i.name for i in behaviour.inputs if i.present_of is not None]
    if present:
        word = "value is" if len(present) == 1 else "values are"
        yield (
            f"Of {listed(present)} the present {word} among the inputs and the next among the "
            "outputs."
        )
    complement = (
        "; C: it is the complement, and the output is asserted where no term of its sum is 1"
        if any(minimum.complemented)
        else ""
    )
    yield f"Sum T: the sum is the asserted function{complement}."
    if programmed:
        yield from _on_cells(programmed.plan)
        yield from _on_rows(programmed)


def _on_cells(plan: Plan) -> Iterator[str]:
    """Signals without a pin of their own, and enable rows."""
    fed = [signal.name for signal in plan.inputs if signal.fed_by is not None]
    if fed:
        verb = "is" if len(fed) == 1 else "are"
        yield (
            f"Fed back inside the device, and therefore among the inputs, {verb} {listed(fed)}; "
            "instead of a pin the cell is named."
        )
    if next(_enable_rows(plan, 0, 0), None):
        yield (
            "E: the row feeds no sum, it enables the output: the pin is driven while the row is 1. "
            "One that is – everywhere is always 1."
        )


def _on_rows(programmed: ProgrammedRows) -> Iterator[str]:
    """How the rows of a shared OR array are left that no term needs."""
    plan = programmed.plan
    shared = plan.device.shared_rows
    unused = sorted(set(shared) - set(plan.rows))
    all_used = " All are used." if not unused and len(shared) == plan.device.terms else ""
    alike: dict[str, list[int]] = {}
    for row in unused:
        alike.setdefault(_LEFT[programmed.left(row)], []).append(row)
    left = "".join(
        f" Row{'' if len(rows) == 1 else 's'} {spans(rows)} {'is' if len(rows) == 1 else 'are'} "
        f"not used and {how}."
        for how, rows in alike.items()
    )
    yield f"Rows of the device count from 0.{all_used}{left}"


_LEFT: dict[Left, str] = {
    "left blank": "left blank",
    "dropped": "cut off by a drop link",
    "dead": "made dead, with every line and its complement connected",
    "always 1": "left with no line connected",
    "connected": "left with lines connected",
}
