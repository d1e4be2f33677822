"""Decisions about a device that have to be made before signals can be matched with its pins.

What an enable pin carries, and in which group of modes a cell is whose mode decides about the
columns of other pins, changes what every other pin and cell can do.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from itertools import islice, product
from typing import TYPE_CHECKING, Literal

from pla.device.model import Line

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Mapping, Sequence

    from pla.behaviour.model import Behaviour
    from pla.device.model import Cell, Device, Mode, Source

__all__ = [
    "Drive",
    "PinUse",
    "Scenario",
    "Switch",
    "has_single_lines",
    "scenarios",
    "taken_apart",
]

MOST_SCENARIOS = 256


@dataclass(frozen=True, slots=True)
class Switch:
    """An input that switches outputs by its pin.

    Attributes:
        index: Which input.
        value: Its asserted value while the outputs drive.
    """

    index: int
    value: bool


@dataclass(frozen=True, slots=True)
class PinUse:
    """What an enable pin carries.

    Attributes:
        level: The level at which it is held; ``None`` if it carries a signal or is free.
        index: The input that it carries, to switch outputs.
    """

    level: Literal[0, 1] | None = None
    index: int | None = None


FREE = PinUse()

Drive = Literal["always", "row", "never", "unknown"]
"""When a pin is driven: by a row, as the row is filled; ``unknown`` as a pin has it."""


@dataclass(frozen=True)
class Scenario:
    """One way to decide these things.

    Attributes:
        device: Whose pins and cells they are.
        design: Whose inputs.
        enable_pins: What each enable pin carries.
        modes: For each cell the modes that are left to it.
        split: Cells that have a name beside their pin and are taken apart: the cell holds an inner
            signal, its pin serves as an input.
    """

    device: Device
    design: Behaviour
    enable_pins: Mapping[int, PinUse]
    modes: Mapping[Source, tuple[Mode, ...]]
    split: frozenset[Source] = frozenset()

    def drive(self, mode: Mode) -> Drive | Switch:
        """When the pin of a cell in this mode is driven."""
        enable = mode.enable
        if mode.pin == "none":
            return "never"
        if enable.pin is None:
            return "row" if enable.kind == "row" else "always"
        use = self.enable_pins[enable.pin]
        active = 0 if enable.active_low else 1
        if use.level is not None:
            return "always" if use.level == active else "never"
        if use.index is None:
            return "unknown"
        return Switch(use.index, bool(active) != self.design.inputs[use.index].active_low)

    @cached_property
    def passed(self) -> frozenset[Line]:
        """Lines that no cell's mode changes any more: fixed, or passed on for another pin."""
        lines = {line for line in self.device.fixed_lines if line is not None}
        for cell in self.device.cells:
            lines.update(_foreign(cell, self.modes[cell.key][0]))
        return frozenset(lines)

    @cached_property
    def pin_lines(self) -> dict[int, frozenset[bool]]:
        """For each pin that is no cell's the lines it has: ``True`` for the complement."""
        return {
            pin: frozenset(
                line.complement for line in self.passed if line.kind == "pin" and line.of == pin
            )
            for pin in self.device.input_pins
        }


def scenarios(
    device: Device, design: Behaviour, switches: Iterable[Switch], fixed: Mapping[int, int]
) -> list[Scenario]:
    """All ways to decide, the plainest first; no more than `MOST_SCENARIOS`.

    Args:
        device: Whose pins and cells they are.
        design: What is wanted.
        switches: Inputs that could switch outputs by a pin.
        fixed: Inputs whose pin is decided, as (input, pin).
    """
    wanted = list(dict.fromkeys(switches))
    uses = [list(_uses(pin, wanted, fixed)) for pin in device.enable_pins]
    cells = list(device.cells)
    groups = [_groups(cell) for cell in cells]
    ways = (
        Scenario(
            device,
            design,
            dict(zip(device.enable_pins, use, strict=True)),
            {cell.key: modes for cell, modes in zip(cells, group, strict=True)},
        )
        for group in product(*groups)
        for use in product(*uses)
        if _single([u.index for u in use])
    )
    return list(islice(ways, MOST_SCENARIOS))


def taken_apart(scenario: Scenario, inner: int) -> Iterator[Scenario]:
    """The same with more and more cells taken apart, as many as could be of use."""
    both = [c.key for c in scenario.device.cells if c.pin is not None and c.name is not None]
    for count in range(1, min(len(both), inner) + 1):
        yield Scenario(
            scenario.device,
            scenario.design,
            scenario.enable_pins,
            scenario.modes,
            frozenset(both[-count:]),
        )


def has_single_lines(device: Device) -> bool:
    """Whether some cell may be fed back by a line whose complement is not there."""
    fixed = {line for line in device.fixed_lines if line is not None}
    for cell in device.cells:
        elsewhere = {
            line for other in device.cells for mode in other.modes for line in _foreign(other, mode)
        }
        carried = [Line("sum", cell.key)]
        if cell.pin is not None:
            carried.append(Line("pin", cell.pin))
        for mode in cell.modes:
            lines = fixed.union(line for _, line in mode.lines if line is not None)
            if any((line in lines) != (line.inverse in lines) for line in carried):
                return True
        if any({line, line.inverse} & elsewhere for line in carried):
            return True
    return False


def _single(indexes: Sequence[int | None]) -> bool:
    """Whether no input would need two pins."""
    taken = [index for index in indexes if index is not None]
    return len(set(taken)) == len(taken)


def _uses(
    pin: int,
    switches: Sequence[Switch],
    fixed: Mapping[int, int],
) -> Iterator[PinUse]:
    placed = {at: index for index, at in fixed.items()}
    if pin not in placed:
        yield FREE
        yield PinUse(level=0)
        yield PinUse(level=1)
    elif placed[pin] not in {switch.index for switch in switches}:
        yield FREE
    for index in dict.fromkeys(switch.index for switch in switches):
        # An input on an enable pin that is placed elsewhere would need two pins.
        if fixed.get(index, pin) == pin and placed.get(pin, index) == index:
            yield PinUse(index=index)


def _groups(cell: Cell) -> list[tuple[Mode, ...]]:
    """Modes of a cell that leave the same lines to other pins."""
    found: dict[tuple[Line, ...], list[Mode]] = {}
    for mode in cell.modes:
        found.setdefault(tuple(_foreign(cell, mode)), []).append(mode)
    return [tuple(modes) for modes in found.values()]


def _foreign(cell: Cell, mode: Mode) -> list[Line]:
    """Lines of other pins that a cell passes on in this mode."""
    return [
        line
        for _, line in mode.lines
        if line is not None and line.kind == "pin" and line.of != cell.pin
    ]
