"""From a plan to the state of every link."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.errors import Diagnostic, InternalError
from pla.fuses.fillings import dead_row, live_row, unused_enable_row, unused_row
from pla.fuses.fusemap import FuseMap
from pla.fuses.signature import encode_signature

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.model import Mode
    from pla.fitting.model import Plan
    from pla.logic.cubes import Cube

__all__ = ["columns_of", "link"]


def link(plan: Plan) -> FuseMap:
    """The links of a plan; whatever the plan does not use is left as the device file says.

    Raises:
        InternalError: If the plan asks for a line or a signature that the device does not have.
    """
    device = plan.device
    links: dict[int, int] = {**dict(device.mode_fuses), **dict(_signature(plan))}
    done: set[int] = set()
    for row, cube in zip(plan.rows, plan.minimum.cover, strict=True):
        links.update(live_row(device, row, columns_of(plan, cube)))
        links.update(_or_links(plan, row, cube))
        done.add(row)
    modes = _modes(plan)
    for row, filling in _enable_rows(plan, modes):
        links.update(filling)
        done.add(row)
    summed = {row for output in plan.outputs for row in output.mode.terms}
    for row in range(device.terms):
        if row not in done:
            links.update(unused_row(device, row, summed=row in summed))
    for cell in device.cells:
        links.update(zip(cell.links, map(int, modes[cell.key].set), strict=True))
    return FuseMap.filled(device.fuses, device.links.blank).changed(links)


def columns_of(plan: Plan, cube: Cube) -> frozenset[int]:
    """The columns of the AND array that a term connects.

    Raises:
        InternalError: If a literal has no column.
    """
    found = set()
    for placed in plan.inputs:
        for literals, column in zip((cube.ones, cube.zeros), placed.columns, strict=True):
            if not literals >> placed.index & 1:
                continue
            if column is None:
                message = f"{placed.name} has no line for a literal that a term has"
                raise InternalError([Diagnostic("NO-LINE", message)])
            found.add(column)
    return frozenset(found)


def _modes(plan: Plan) -> dict[int | str, Mode]:
    cells = plan.device.cells
    return {c.key: plan.modes.get(c.key) or plan.device.idle_mode(c) for c in cells}


def _or_links(plan: Plan, row: int, cube: Cube) -> Iterator[tuple[int, int]]:
    """Links of a shared row to all sums; a row of a cell's own has none."""
    array, connected = plan.device.or_array, plan.device.links.connected
    if array is None or row not in array.terms:
        return
    fed = {output.cell.key for output in plan.outputs if cube.outputs >> output.index & 1}
    at = array.terms.index(row)
    for column, key in enumerate(array.sums):
        yield array.fuse(at, column), connected if key in fed else 1 - connected


def _enable_rows(
    plan: Plan, modes: dict[int | str, Mode]
) -> Iterator[tuple[int, Iterator[tuple[int, int]]]]:
    """The enable row of each cell that has one as it is set, and its links.

    An output without an enable of its own always drives. The pin of a cell that serves as an input
    is off, and so is that of one that holds an inner signal, unless it is fed back from there.
    """
    device = plan.device
    output_of = {output.cell.key: output for output in plan.outputs}
    for cell in device.cells:
        row = modes[cell.key].enable.row
        if row is None:
            continue
        output = output_of.get(cell.key)
        if output is not None and (output.pin is not None or output.shown is not None):
            enable = output.enable
            wanted = frozenset() if enable is None else columns_of(plan, enable.cube)
            yield row, live_row(device, row, wanted)
        elif output is not None or cell.key in plan.input_cells:
            yield row, dead_row(device, row)
        else:
            yield row, unused_enable_row(device, row)


def _signature(plan: Plan) -> Iterator[tuple[int, int]]:
    if plan.device.signature is None:
        return  # the fit warns that the text is left out
    try:
        yield from encode_signature(plan.device, plan.design.signature or "")
    except ValueError as problem:
        raise InternalError([Diagnostic("SIGNATURE", str(problem))]) from problem
