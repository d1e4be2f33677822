"""How the cells of an exercised part are set."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pla.device.model import Cell, Device, Mode, Source

__all__ = ["modes_of"]


def modes_of(device: Device, turn: int) -> dict[Source, Mode]:
    """A mode for every cell, so that cells differ and take turns.

    Cells with equally many modes are numbered through. In the turns behind those in which every
    cell has had every mode, cells that were set alike up to then are set differently. In the first
    turn modes that show nothing are kept to the last cells of a kind, so that as many sums as
    possible can be seen.
    """
    numbers: dict[int, int] = {}
    found: dict[Source, Mode] = {}
    for cell in device.cells:
        count = len(cell.modes)
        i = numbers.get(count, 0)
        numbers[count] = i + 1
        chosen = (i + turn) % count
        if turn == 0:
            chosen = _seen(device, cell, i)
        elif turn >= count > 1:
            chosen = (i + i // count ** (turn - count + 1)) % count
        found[cell.key] = cell.modes[chosen]
    return found


def _seen(device: Device, cell: Cell, number: int) -> int:
    """Which mode a cell has in the first turn."""
    speaking = [k for k, m in enumerate(cell.modes) if cell.pin is None or m.pin != "none"]
    silent = [k for k in range(len(cell.modes)) if k not in speaking]
    if not speaking:
        return silent[number % len(silent)]
    alike = [other for other in device.cells if other.kind == cell.kind]
    place = alike.index(cell)
    from_end = len(alike) - 1 - place
    if from_end < len(silent) and place >= len(speaking):
        return silent[from_end]
    return speaking[number % len(speaking)]
