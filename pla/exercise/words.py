"""Levels at some tens of steps at once, each set of steps a whole number.

So few steps are sooner done so than with arrays, whose calls cost more than what they do.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["Word", "Words"]

Word: TypeAlias = tuple[int, int]
"""Steps at which a level is surely high, and surely low; bit ``k`` is step ``k``, from 0."""


@dataclass(frozen=True, slots=True)
class Words:
    """The logic of so many steps (see `pla.fuses.evaluate.Logic`)."""

    steps: int

    def constant(self, value: bool) -> Word:
        every = (1 << self.steps) - 1
        return (every, 0) if value else (0, every)

    @property
    def unknown(self) -> Word:
        return 0, 0

    def inverse(self, value: Word) -> Word:
        return value[1], value[0]

    def conjunction(self, values: Sequence[Word]) -> Word:
        high, low = (1 << self.steps) - 1, 0
        for one, zero in values:
            high &= one
            low |= zero
        return high, low

    def disjunction(self, values: Sequence[Word]) -> Word:
        high, low = 0, (1 << self.steps) - 1
        for one, zero in values:
            high |= one
            low &= zero
        return high, low

    def same(self, one: Word, other: Word) -> bool:
        return one == other
