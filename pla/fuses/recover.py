"""What an array does, read from its fuses alone."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pla.device.model import Cell, Device, Line, Mode, Source
    from pla.fuses.fusemap import FuseMap

__all__ = ["Realised", "Row", "Sum", "recover"]


@dataclass(frozen=True, slots=True)
class Row:
    """A row of the AND array.

    Attributes:
        number: Counts from 0.
        lines: What the connected columns carry, in order of the columns, each once.
        floating: A column is connected that carries nothing as the cells are set.
        dropped: The row's drop link cuts it off.
    """

    number: int
    lines: tuple[Line, ...]
    floating: bool = False
    dropped: bool = False

    @property
    def dead(self) -> bool:
        """Whether the row is 0 whatever its lines carry.

        It is cut off, or a line and its complement are both connected.
        """
        # Each line stands here once, so that one with its complement shows in the number.
        return self.dropped or len({(x.kind, x.of) for x in self.lines}) < len(self.lines)


@dataclass(frozen=True, slots=True)
class Sum:
    """A cell and what its OR gate adds up.

    Attributes:
        cell: The cell.
        states: State of each of its configuration links.
        mode: How it is set; ``None`` where its configuration links select no mode.
        rows: Numbers of the rows that are joined to its sum, dead ones among them; ``None`` where
            they are rows of its own and no mode says which.
    """

    cell: Cell
    states: str
    mode: Mode | None
    rows: tuple[int, ...] | None


@dataclass(frozen=True)
class Realised:
    """The array as its fuses make it.

    Attributes:
        device: The device.
        rows: All rows of the AND array.
        sums: All cells, in order of the device.
        other_mode: Fuses that select another device-wide mode than this device's, as (fuse, state
            that the device needs). If there are any, the rest means nothing.
    """

    device: Device
    rows: tuple[Row, ...]
    sums: tuple[Sum, ...]
    other_mode: tuple[tuple[int, int], ...] = ()

    @cached_property
    def sum_of(self) -> dict[Source, Sum]:
        """Every cell by its key."""
        return {sum_.cell.key: sum_ for sum_ in self.sums}


def recover(device: Device, fuses: FuseMap) -> Realised:
    """Read rows, sums and modes from the fuses.

    Raises:
        ValueError: If the number of fuses is not the device's.
    """
    if len(fuses) != device.fuses:
        raise ValueError(f"{len(fuses)} fuses for a device with {device.fuses}")
    states = {cell.key: "".join(str(fuses[f]) for f in cell.links) for cell in device.cells}
    modes = {cell.key: cell.mode_of(states[cell.key]) for cell in device.cells}
    carried = device.lines({key: mode for key, mode in modes.items() if mode is not None})
    return Realised(
        device,
        _rows(device, fuses, carried),
        tuple(
            Sum(cell, states[cell.key], modes[cell.key], _joined(device, fuses, cell, modes))
            for cell in device.cells
        ),
        tuple((fuse, state) for fuse, state in device.mode_fuses if fuses[fuse] != state),
    )


def _rows(device: Device, fuses: FuseMap, carried: tuple[Line | None, ...]) -> tuple[Row, ...]:
    array, connected = device.and_array, device.links.connected
    dropped = set()
    if device.drop is not None:
        links = zip(device.drop.terms, device.drop.fuses, strict=True)
        dropped = {term for term, fuse in links if fuses[fuse] == device.drop.dropped}
    rows = []
    for term in range(device.terms):
        joined = [
            carried[column]
            for column, fuse in enumerate(array.fuses_of(term))
            # A link in a column with no line does nothing.
            if fuses[fuse] == connected and array.columns[column] is not None
        ]
        lines = tuple(dict.fromkeys(line for line in joined if line is not None))
        rows.append(Row(term, lines, None in joined, term in dropped))
    return tuple(rows)


def _joined(
    device: Device, fuses: FuseMap, cell: Cell, modes: dict[Source, Mode | None]
) -> tuple[int, ...] | None:
    column = device.or_column.get(cell.key)
    if column is None or device.or_array is None:
        mode = modes[cell.key]
        return None if mode is None else mode.terms
    return tuple(
        term
        for row, term in enumerate(device.or_array.terms)
        if fuses[device.or_array.fuse(row, column)] == device.links.connected
    )
