"""Levels at all pins for levels from outside, for many input combinations at once."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.fuses.evaluate import evaluate

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import NDArray

    from pla.fuses.evaluate import Evaluated, Outside
    from pla.fuses.recover import Realised

    Levels = NDArray[np.uint8]

__all__ = ["Packed", "Signal", "all_combinations", "simulate"]


@dataclass(frozen=True, slots=True, eq=False)
class Signal:
    """A level in many combinations; where it is neither high nor low it is unknown.

    Attributes:
        high: ``uint8[size]``, packed eight combinations to a byte (little-endian): where it is 1.
        low: The same for 0.
    """

    high: Levels
    low: Levels

    @classmethod
    def of(cls, levels: Levels) -> Signal:
        """One that is known everywhere."""
        return cls(levels, ~levels)

    @property
    def known(self) -> Levels:
        return self.high | self.low


@dataclass(frozen=True, slots=True)
class Packed:
    """The logic of signals of `size` bytes (see `pla.fuses.evaluate.Logic`)."""

    size: int

    def constant(self, value: bool) -> Signal:
        return Signal.of(np.full(self.size, 255 if value else 0, dtype=np.uint8))

    @property
    def unknown(self) -> Signal:
        nowhere = np.zeros(self.size, dtype=np.uint8)
        return Signal(nowhere, nowhere)

    def inverse(self, value: Signal) -> Signal:
        return Signal(value.low, value.high)

    def conjunction(self, values: Sequence[Signal]) -> Signal:
        high = np.full(self.size, 255, dtype=np.uint8)
        low = np.zeros(self.size, dtype=np.uint8)
        for value in values:
            high &= value.high
            low |= value.low
        return Signal(high, low)

    def disjunction(self, values: Sequence[Signal]) -> Signal:
        return self.inverse(self.conjunction([self.inverse(value) for value in values]))

    def same(self, one: Signal, other: Signal) -> bool:
        return bool(np.array_equal(one.high, other.high) and np.array_equal(one.low, other.low))


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
    realised: Realised, outside: Mapping[int, Outside[Signal]], size: int
) -> Evaluated[Signal]:
    """Every sum and pin of the array.

    Args:
        realised: The array.
        outside: What comes to pins from outside. A pin that is not listed, and that the part does
            not drive, is at an unknown level.
        size: Bytes of each packed sequence.
    """
    return evaluate(realised, Packed(size), outside)
