"""From a layout to a plan: rows, columns, and how every cell is set."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Literal

from pla.device.model import Line
from pla.fitting.delays import LongestWays
from pla.fitting.model import PlacedEnable, PlacedInput, PlacedOutput, Plan
from pla.fitting.offers import column_pair, fed_lines
from pla.fitting.scenario import Switch

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Mapping

    from pla.device.model import Mode, Source
    from pla.fitting.layout import Layout
    from pla.logic.cubes import Cube

__all__ = ["plan_of"]


def plan_of(layout: Layout) -> Plan:
    """Every signal, term and cell of a layout on the device."""
    problem = layout.problem
    netlist, device = problem.netlist, problem.device
    modes = _modes(layout)
    plan = Plan(
        netlist.design,
        netlist.behaviour,
        device,
        layout.minimum,
        tuple(_inputs(layout, modes)),
        tuple(_outputs(layout)),
        tuple(_rows(layout)),
        modes,
        tuple(_tied(layout)),
    )
    return replace(plan, passes=LongestWays(plan).passes)


def _modes(layout: Layout) -> dict[Source, Mode]:
    """How every cell is set, in order of the file."""
    device, scenario = layout.problem.device, layout.scenario
    used = {spot.cell.key: spot.mode for spot in layout.spots}
    modes: dict[Source, Mode] = {}
    for cell in device.cells:
        idle = device.idle_mode(cell)
        left = scenario.modes[cell.key]
        modes[cell.key] = (
            used.get(cell.key)
            or layout.input_modes.get(cell.key)
            or (idle if idle in left else left[0])
        )
    return modes


def _inputs(layout: Layout, modes: Mapping[Source, Mode]) -> Iterator[PlacedInput]:
    problem = layout.problem
    netlist, device = problem.netlist, problem.device
    lines = device.lines(modes)
    fed_by = {net.fed: net for net in netlist.nets if net.fed is not None}
    read_at = {net.reads: net for net in netlist.nets if net.reads is not None}
    enables = [cube for cube in problem.enables if cube is not None]
    literals = _literals([*layout.minimum.cover, *enables])
    for i, signal in enumerate(netlist.behaviour.inputs):
        asserted: list[Line] = []
        pin, source = layout.input_pins.get(i), None
        if i in fed_by:
            net = fed_by[i]
            spot = layout.spots[net.index]
            wish = problem.wish_of(net, layout.minimum.complemented[net.index])
            asserted = fed_lines(layout.scenario, spot.cell, spot.mode, wish, shows=spot.shows)
            source = spot.cell.key
        elif i in read_at:
            pin = layout.spots[read_at[i].index].cell.pin
        if pin is not None:
            asserted = [Line("pin", pin, signal.active_low)]
        yield PlacedInput(
            i,
            signal.name,
            pin,
            signal.active_low,
            bool(literals >> i & 1),
            column_pair(lines, asserted),
            source,
        )


def _literals(cubes: Iterable[Cube]) -> int:
    """Mask of the inputs that any cube has a literal of."""
    mask = 0
    for cube in cubes:
        mask |= cube.ones | cube.zeros
    return mask


def _outputs(layout: Layout) -> Iterator[PlacedOutput]:
    problem = layout.problem
    for net, spot in zip(problem.netlist.nets, layout.spots, strict=True):
        cube = problem.enables[net.index]
        enable = None
        if cube is not None:
            by_pin = isinstance(layout.scenario.drive(spot.mode), Switch)
            said = spot.mode.enable
            enable = PlacedEnable(None if by_pin else said.row, said.pin if by_pin else None, cube)
        yield PlacedOutput(
            net.index,
            net.name,
            None if net.inner else spot.cell.pin,
            net.active_low,
            layout.minimum.complemented[net.index],
            spot.mode,
            spot.cell,
            enable,
            spot.cell.pin if spot.shows else None,
        )


def _rows(layout: Layout) -> Iterator[int]:
    """Row of each term: the lowest free one of the shared rows or of the cell's own."""
    free = {
        net.index: iter(layout.spots[net.index].mode.terms) for net in layout.problem.netlist.nets
    }
    shared = iter(layout.problem.device.shared_rows)
    mask = sum(1 << j for j in layout.shared)
    for cube in layout.minimum.cover:
        if cube.outputs & mask:
            yield next(shared)
        else:
            yield next(free[cube.outputs.bit_length() - 1])


def _tied(layout: Layout) -> Iterator[tuple[int, Literal[0, 1]]]:
    """Enable pins that are held at a level for cells that are in use."""
    modes = [spot.mode for spot in layout.spots] + list(layout.input_modes.values())
    asked = {mode.enable.pin for mode in modes if mode.pin != "none"}
    for pin, use in sorted(layout.scenario.enable_pins.items()):
        if use.level is not None and pin in asked:
            yield pin, use.level
