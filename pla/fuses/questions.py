"""Two roads to the same answers: all input combinations one by one, or cubes.

Both say whether a signal of an array is what is demanded of it on a set of input combinations, and
name one at which it is not.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Literal, Protocol, TypeVar

import numpy as np

from pla.fuses.compose import Cubes
from pla.fuses.simulate import Packed, Signal, all_combinations
from pla.logic import algebra

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from pla.fuses.compose import Known
    from pla.fuses.evaluate import Logic
    from pla.logic.cubes import Cover

__all__ = ["ByCubes", "BySimulation", "Questions"]

V = TypeVar("V")


class Questions(Protocol[V]):
    """A logic in which what is demanded can be held against what is there."""

    @property
    def method(self) -> Literal["simulation", "cubes"]: ...

    @property
    def cases(self) -> int:
        """Input combinations simulated, or cubes compared so far."""
        ...

    @property
    def logic(self) -> Logic[V]: ...

    def variable(self, index: int, /) -> V:
        """The input with this index."""
        ...

    def failure(self, demanded: Cover, value: V, expected: int, /) -> int | None:
        """One of the combinations demanded at which the value is not known to be the expected.

        If there are any, one at which it is known to be the other.
        """
        ...

    def unsettled(self, demanded: Cover, value: V, excepted: V, /) -> int | None:
        """One of the combinations demanded at which the value is unknown.

        Those at which the other value is known to be 1 are not looked at.
        """
        ...

    def at(self, value: V, point: int, /) -> int | None:
        """The value at one combination; ``None`` where it is unknown."""
        ...


class BySimulation:
    """Every combination of the inputs, packed eight to a byte."""

    method: Literal["simulation"] = "simulation"

    def __init__(self, n_inputs: int) -> None:
        self.n_inputs = n_inputs
        self.logic = Packed(max(1, 1 << n_inputs >> 3))

    @property
    def cases(self) -> int:
        return 1 << self.n_inputs

    def variable(self, index: int) -> Signal:
        return Signal.of(all_combinations(self.n_inputs, index))

    def failure(self, demanded: Cover, value: Signal, expected: int) -> int | None:
        held = _combinations_of(demanded)
        right, wrong = (value.high, value.low) if expected else (value.low, value.high)
        point = _first(held & wrong)
        return _first(held & ~right) if point is None else point

    def unsettled(self, demanded: Cover, value: Signal, excepted: Signal) -> int | None:
        return _first(_combinations_of(demanded) & ~value.known & ~excepted.high)

    def at(self, value: Signal, point: int) -> int | None:
        byte, bit = divmod(point, 8)
        if value.high[byte] >> bit & 1:
            return 1
        return 0 if value.low[byte] >> bit & 1 else None


def _first(packed: NDArray[np.uint8]) -> int | None:
    bytes_ = np.flatnonzero(packed)
    if not len(bytes_):
        return None
    byte = int(packed[bytes_[0]])
    return int(bytes_[0]) * 8 + (byte & -byte).bit_length() - 1


def _combinations_of(cover: Cover) -> NDArray[np.uint8]:
    """Packed: which combinations the cover holds; bit ``i`` of their number is input ``i``."""
    n = cover.n_inputs
    held = np.zeros((2,) * n, dtype=bool)
    for cube in cover:
        # Bit i of the number is the i-th axis from the end.
        place = tuple(
            1 if cube.ones >> i & 1 else 0 if cube.zeros >> i & 1 else slice(None)
            for i in reversed(range(n))
        )
        held[place] = True
    return np.packbits(held.reshape(-1), bitorder="little")


class ByCubes:
    """Covers, for inputs whose combinations are too many to list."""

    method: Literal["cubes"] = "cubes"

    def __init__(self, n_inputs: int) -> None:
        self.logic = Cubes(n_inputs)
        self.cases = 0

    def variable(self, index: int) -> Known:
        return self.logic.variable(index)

    def failure(self, demanded: Cover, value: Known, expected: int) -> int | None:
        self.cases += len(demanded)
        if value.is_direct(1 - expected):
            wrong = value.where(1 - expected)
            self.cases += len(wrong)
            pair = algebra.find_common(demanded, wrong)
            if pair is not None:
                a, b = list(demanded)[pair[0]], list(wrong)[pair[1]]
                return a.ones | b.ones
            if value.total:
                return None
        right = value.where(expected)
        self.cases += len(right)
        return _outside(demanded, right)

    def unsettled(self, demanded: Cover, value: Known, excepted: Known) -> int | None:
        if value.total:
            return None
        settled = algebra.union(self.logic.n_inputs, value.one, value.zero, excepted.one)
        return _outside(demanded, settled)

    def at(self, value: Known, point: int) -> int | None:
        for state in (1, 0):
            if value.is_direct(state) and value.where(state).value_at(point):
                return state
        if not value.total:
            return None
        return 0 if value.is_direct(1) else 1


def _outside(demanded: Cover, held: Cover) -> int | None:
    for cube in demanded:
        point = algebra.find_outside(cube, held)
        if point is not None:
            return point
    return None
