"""What an array does, read from its fuses alone."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pla.device.model import Cell, Device, Mode
    from pla.fuses.fusemap import FuseMap

__all__ = ["Realised", "Row", "Sum", "recover"]


@dataclass(frozen=True, slots=True)
class Row:
    """A row of the AND array.

    Attributes:
        number: Counts from 0.
        lines: Connected lines as (pin, complement).
        dead: A line and its complement are both connected: the product is 0.
    """

    number: int
    lines: frozenset[tuple[int, bool]]

    @property
    def dead(self) -> bool:
        return any((pin, not complement) in self.lines for pin, complement in self.lines)


@dataclass(frozen=True, slots=True)
class Sum:
    """An output cell.

    Attributes:
        cell: The cell.
        mode: How it is set; ``None`` where its configuration links select no mode.
        rows: Numbers of the rows that are connected to its sum, dead ones among them.
    """

    cell: Cell
    mode: Mode | None
    rows: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Realised:
    """The array as its fuses make it."""

    device: Device
    rows: tuple[Row, ...]
    sums: tuple[Sum, ...]


def recover(device: Device, fuses: FuseMap) -> Realised:
    """Read rows, sums and modes from the fuses.

    Raises:
        ValueError: If the number of fuses is not the device's.
    """
    if len(fuses) != device.fuses:
        raise ValueError(f"{len(fuses)} fuses for a device with {device.fuses}")
    connected = device.links.connected
    array, sums = device.and_array, device.or_array
    rows = tuple(
        Row(
            term,
            frozenset(
                (line.pin, line.complement)
                for column, line in enumerate(array.columns)
                if line is not None and fuses[array.fuse(term, column)] == connected
            ),
        )
        for term in range(device.terms)
    )
    column_of = {pin: column for column, pin in enumerate(sums.pins)}
    return Realised(
        device,
        rows,
        tuple(
            Sum(
                cell,
                cell.mode_of("".join(str(fuses[f]) for f in cell.links)),
                tuple(
                    term
                    for term in range(device.terms)
                    if fuses[sums.fuse(term, column_of[cell.pin])] == connected
                ),
            )
            for cell in device.cells
        ),
    )
