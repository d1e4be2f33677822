"""Levels at the output pins for levels at the input pins, for many input combinations at once."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Mapping

    from numpy.typing import NDArray

    from pla.fuses.recover import Realised

    Levels = NDArray[np.uint8]

__all__ = ["all_combinations", "simulate"]


def all_combinations(count: int, number: int) -> Levels:
    """``uint8[2^count / 8]``, packed: level of signal `number` in each combination.

    Bit ``k`` of the sequence (little-endian in each byte) is combination ``k``, in which signal
    ``i`` is bit ``i`` of ``k``. With fewer than 3 signals the byte is filled up by repetition.
    """
    if number < 3:
        pattern = (0b10101010, 0b11001100, 0b11110000)[number]
        return np.full(max(1, (1 << count) >> 3), pattern, dtype=np.uint8)
    period = np.repeat(np.array([0, 255], dtype=np.uint8), 1 << (number - 3))
    return np.tile(period, 1 << (count - number - 1))


def simulate(
    realised: Realised, levels: Mapping[int, Levels], size: int
) -> dict[int, Levels | None]:
    """The level of every output pin.

    Args:
        realised: The array.
        levels: For each input pin its levels, packed eight combinations to a byte. A pin that is
            not listed is at an unknown level: rows that depend on it are taken to be open.
        size: Bytes of each sequence.

    Returns:
        For each output pin its levels, packed likewise; ``None`` where they depend on a pin whose
        level is unknown or the cell is in no mode that shows its sum.
    """
    products: dict[int, Levels | None] = {}
    for row in realised.rows:
        if row.dead:
            products[row.number] = np.zeros(size, dtype=np.uint8)
            continue
        product: Levels | None = np.full(size, 255, dtype=np.uint8)
        for pin, complement in sorted(row.lines):
            level = levels.get(pin)
            if level is None or product is None:
                product = None
                break
            product &= ~level if complement else level
        products[row.number] = product
    shown: dict[int, Levels | None] = {}
    for sum_ in realised.sums:
        parts = [products[row] for row in sum_.rows]
        known = [part for part in parts if part is not None]
        mode = sum_.mode
        if mode is None or mode.pin == "none" or len(known) < len(parts):
            shown[sum_.cell.pin] = None
            continue
        total = np.zeros(size, dtype=np.uint8)
        for part in known:
            total |= part
        shown[sum_.cell.pin] = ~total if mode.pin == "sum'" else total
    return shown
