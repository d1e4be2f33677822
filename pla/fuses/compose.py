"""The logic of cubes: what an array makes of its inputs, without listing their combinations."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from pla.logic import algebra
from pla.logic.cubes import Cover, Cube

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

__all__ = ["Cubes", "Known"]


@dataclass(frozen=True, eq=False)
class Known:
    """Where a signal is known to be 1 and where it is known to be 0.

    A sum of few products may take very many for its complement; so both covers are made when
    they are asked for, and not before.

    Attributes:
        make_one: Makes the cover of where it is 1; ``None`` for wherever it is not 0.
        make_zero: Makes the cover of where it is 0; ``None`` for wherever it is not 1. One of the
            two is given.
        total: Whether it is known everywhere by the way in which it was made.
    """

    make_one: Callable[[], Cover] | None
    make_zero: Callable[[], Cover] | None
    total: bool

    @cached_property
    def one(self) -> Cover:
        return algebra.complement(self.zero) if self.make_one is None else self.make_one()

    @cached_property
    def zero(self) -> Cover:
        return algebra.complement(self.one) if self.make_zero is None else self.make_zero()

    def where(self, value: int) -> Cover:
        return self.one if value else self.zero

    def is_direct(self, value: int) -> bool:
        """Whether the cover of where it has this value takes no complementing."""
        return (self.make_one if value else self.make_zero) is not None


@dataclass(frozen=True, slots=True)
class Cubes:
    """The logic of covers over the same inputs (see `pla.fuses.evaluate.Logic`)."""

    n_inputs: int

    def constant(self, value: bool) -> Known:
        everywhere, nowhere = Cover.universe(self.n_inputs), Cover.of(self.n_inputs)
        return _known(everywhere, nowhere) if value else _known(nowhere, everywhere)

    @property
    def unknown(self) -> Known:
        nowhere = Cover.of(self.n_inputs)
        return Known(lambda: nowhere, lambda: nowhere, False)

    def variable(self, index: int) -> Known:
        """Of the inputs the one with this index."""
        one = Cover.of(self.n_inputs, [Cube(1 << index, 0)])
        return _known(one, Cover.of(self.n_inputs, [Cube(0, 1 << index)]))

    def inverse(self, value: Known) -> Known:
        return Known(
            None if value.make_zero is None else lambda: value.zero,
            None if value.make_one is None else lambda: value.one,
            value.total,
        )

    def conjunction(self, values: Sequence[Known]) -> Known:
        parts = tuple(values)
        total = all(value.total for value in parts)
        return Known(
            lambda: self._common([value.one for value in parts]),
            None if total else lambda: self._union([value.zero for value in parts]),
            total,
        )

    def disjunction(self, values: Sequence[Known]) -> Known:
        parts = tuple(values)
        total = all(value.total for value in parts)
        return Known(
            lambda: self._union([value.one for value in parts]),
            None if total else lambda: self._common([value.zero for value in parts]),
            total,
        )

    def same(self, one: Known, other: Known) -> bool:
        return one.one == other.one and one.zero == other.zero

    def _union(self, covers: Sequence[Cover]) -> Cover:
        return algebra.union(self.n_inputs, *covers)

    def _common(self, covers: Sequence[Cover]) -> Cover:
        """The common part; single cubes, of which most rows consist, are put together first."""
        ones = zeros = 0
        rest = []
        for cover in covers:
            if len(cover) == 1:
                (cube,) = cover
                ones, zeros = ones | cube.ones, zeros | cube.zeros
            else:
                rest.append(cover)
        if ones & zeros:
            return Cover.of(self.n_inputs)
        common = Cover.of(self.n_inputs, [Cube(ones, zeros)])
        for cover in sorted(rest, key=len):
            common = algebra.intersection(common, cover)
        return common


def _known(one: Cover, zero: Cover) -> Known:
    return Known(lambda: one, lambda: zero, True)
