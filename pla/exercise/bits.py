"""Numbers that look random and are the same on every machine and in every version.

G. L. Steele, D. Lea, C. H. Flood, "Fast splittable pseudorandom number generators", Proc. OOPSLA
2014 (the mixing function of SplitMix64).
"""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeVar

if TYPE_CHECKING:
    from collections.abc import Iterable

__all__ = ["Bits"]

T = TypeVar("T")
_MASK = (1 << 64) - 1


class Bits:
    """A sequence of numbers that its seed decides."""

    def __init__(self, seed: int) -> None:
        self._state = seed & _MASK

    def word(self) -> int:
        """64 bits."""
        self._state = (self._state + 0x9E3779B97F4A7C15) & _MASK
        z = self._state
        z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & _MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & _MASK
        return z ^ (z >> 31)

    def wide(self, count: int) -> int:
        """So many bits."""
        value = 0
        for _ in range(0, count, 64):
            value = value << 64 | self.word()
        return value & ((1 << count) - 1)

    def flip(self) -> bool:
        return bool(self.word() >> 63)

    def shuffled(self, things: Iterable[T]) -> list[T]:
        """The same things in another order."""
        left = list(things)
        for last in range(len(left) - 1, 0, -1):
            other = self.word() % (last + 1)
            left[last], left[other] = left[other], left[last]
        return left
