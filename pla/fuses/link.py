"""From a plan to the state of every link."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fuses.fusemap import FuseMap

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.model import Device
    from pla.fitting.model import Plan
    from pla.logic.cubes import Cube

__all__ = ["lines_of", "link"]


def link(plan: Plan) -> FuseMap:
    """The links of a plan; whatever the plan does not use is left as the device file says."""
    device = plan.device
    states: dict[int, int] = {}
    for row, cube in zip(plan.rows, plan.minimum.cover, strict=True):
        states.update(_used_row(plan, row, cube))
    if device.links.unused_term == "dead":
        for row in set(range(device.terms)) - set(plan.rows):
            states.update(_dead_row(device, row))
    mode_of = {output.pin: output.mode for output in plan.outputs}
    for cell in device.cells:
        mode = mode_of.get(cell.pin) or device.idle_mode(cell)
        states.update(zip(cell.links, map(int, mode.set), strict=True))
    return FuseMap.filled(device.fuses, device.links.blank).changed(states)


def lines_of(plan: Plan, cube: Cube) -> frozenset[tuple[int, bool]]:
    """The lines (pin, complement) that a term connects.

    The literal of an active-low input is true while its pin is low: the complement line.
    """
    return frozenset(
        (placed.pin, placed.active_low != complement)
        for placed in plan.inputs
        for complement, literals in ((False, cube.ones), (True, cube.zeros))
        if placed.pin is not None and literals >> placed.index & 1
    )


def _used_row(plan: Plan, row: int, cube: Cube) -> Iterator[tuple[int, int]]:
    device = plan.device
    connected = device.links.connected
    wanted = lines_of(plan, cube)
    for column, line in enumerate(device.and_array.columns):
        if line is not None:
            joined = (line.pin, line.complement) in wanted
            yield device.and_array.fuse(row, column), connected if joined else 1 - connected
    fed = {output.pin for output in plan.outputs if cube.outputs >> output.index & 1}
    for column, pin in enumerate(device.or_array.pins):
        yield device.or_array.fuse(row, column), connected if pin in fed else 1 - connected


def _dead_row(device: Device, row: int) -> Iterator[tuple[int, int]]:
    for column, line in enumerate(device.and_array.columns):
        if line is not None:
            yield device.and_array.fuse(row, column), device.links.connected
