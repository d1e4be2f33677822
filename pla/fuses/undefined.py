"""Why an output has no value, in words."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeVar

from pla.device.model import Line
from pla.fuses.network import reached

if TYPE_CHECKING:
    from collections.abc import Container, Iterator, Sequence

    from pla.device.model import Cell, Source
    from pla.fitting.model import PlacedOutput
    from pla.fuses.evaluate import Evaluated
    from pla.fuses.recover import Realised, Row

__all__ = ["nearest_ring", "why_undefined"]

V = TypeVar("V")


def why_undefined(
    realised: Realised, made: Evaluated[V], given: Container[int], output: PlacedOutput
) -> str:
    """What keeps an output from having a value.

    Args:
        realised: The array.
        made: What was made of it.
        given: Pins that have a level from outside.
        output: The output.
    """
    what = f"pin {output.pin} ({output.name})"
    sum_ = realised.sum_of[output.cell.key]
    if sum_.mode is None:
        return f"{what} is undefined: the links of its cell are {sum_.states}, which is no mode"
    if sum_.mode.pin == "none":
        return f"{what} shows nothing in the mode that its cell is set to"
    ring = nearest_ring(realised, made, output)
    if ring is not None:
        return f"{what} depends on a ring that feeds itself: {ring}"
    return f"{what} depends on {_without_level(realised, made, given, output)}"


def nearest_ring(realised: Realised, made: Evaluated[V], output: PlacedOutput) -> str | None:
    """The cells of the ring nearest to an output or to its enable, in words."""
    nodes = reached(made.needs, Line("sum", output.cell.key))
    if output.pin is not None:
        nodes = (*nodes, *reached(made.needs, Line("pin", output.pin)))
    for node in nodes:
        for ring in made.rings:
            if node in ring:
                keys = {_key(realised, line) for line in ring}
                return _cells([cell for cell in realised.device.cells if cell.key in keys])
    return None


def _cells(cells: Sequence[Cell]) -> str:
    """Such as "cell b1 and the cells on pins 14 and 15"."""
    pins = [str(cell.pin) for cell in cells if cell.pin is not None]
    named = [str(cell) for cell in cells if cell.pin is None]
    if pins:
        several = f"the cells on pins {', '.join(pins[:-1])} and {pins[-1]}"
        named.append(several if len(pins) > 1 else f"the cell on pin {pins[0]}")
    return " and ".join(named)


def _without_level(
    realised: Realised, made: Evaluated[V], given: Container[int], output: PlacedOutput
) -> str:
    for node in reached(made.needs, Line("sum", output.cell.key)):
        sum_ = realised.sum_of[_key(realised, node)]
        if sum_.mode is None:
            return f"{sum_.cell}, whose links are {sum_.states}, which is no mode"
        for row in _rows(realised, node):
            if row.floating:
                return f"row {row.number}, joined to a column that carries nothing"
            for line in row.lines:
                outer = line.kind == "pin" and line.of not in made.levels
                if outer and line.of not in given:
                    return f"pin {line.of}, which carries no input of the design"
        if node.kind == "pin":
            return f"the level at pin {node.of} while the part does not drive it"
    return "a level that is not known"


def _rows(realised: Realised, node: Line) -> Iterator[Row]:
    """The rows that a sum is made from, or that enable a pin, without dead ones."""
    sum_ = realised.sum_of[_key(realised, node)]
    numbers = sum_.rows or ()
    if node.kind == "pin":
        row = None if sum_.mode is None else sum_.mode.enable.row
        numbers = () if row is None else (row,)
    return (realised.rows[number] for number in numbers if not realised.rows[number].dead)


def _key(realised: Realised, node: Line) -> Source:
    """The cell of a sum or of a pin."""
    if node.kind == "sum":
        return node.of
    return realised.device.cell_of_pin[int(node.of)].key
