"""Known functions, rebuilt from their definitions as truth tables.

Nothing here imports the program. A table is a list with an entry for each input combination: the
number whose bit ``j`` is output ``j``, or ``None`` where no output cares. Bit ``i`` of the place in
the list is input ``i``.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import factorial
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Callable


@dataclass(frozen=True)
class Table:
    """A completely known behaviour: for each output its ON-set and OFF-set as bit masks.

    Bit ``p`` of a set is input combination ``p``; a combination in neither set is a don't care.
    """

    inputs: int
    on: tuple[int, ...]
    off: tuple[int, ...]

    @property
    def outputs(self) -> int:
        return len(self.on)

    def in_polarity(self, complemented) -> Table:
        pairs = list(zip(self.on, self.off, complemented, strict=True))
        return Table(
            self.inputs,
            tuple(b if c else a for a, b, c in pairs),
            tuple(a if c else b for a, b, c in pairs),
        )


def tabulate(inputs: int, outputs: int, rule: Callable[[int], int | None]) -> Table:
    on, off = [0] * outputs, [0] * outputs
    for point in range(1 << inputs):
        value = rule(point)
        if value is None:
            continue
        for j in range(outputs):
            (on if value >> j & 1 else off)[j] |= 1 << point
    return Table(inputs, tuple(on), tuple(off))


def count_of_ones(inputs: int) -> Table:
    """rd53, rd73, rd84: the number of ones among the inputs, as a binary number."""
    return tabulate(inputs, inputs.bit_length(), int.bit_count)


def adder(bits: int) -> Table:
    """adr4 with 4 bits: the sum of two numbers, carry out included."""
    low = (1 << bits) - 1
    return tabulate(2 * bits, bits + 1, lambda p: (p & low) + (p >> bits))


def multiplier(bits: int) -> Table:
    """mlp4 with 4 bits: the product of two numbers."""
    low = (1 << bits) - 1
    return tabulate(2 * bits, 2 * bits, lambda p: (p & low) * (p >> bits))


def square(bits: int) -> Table:
    """sqr6 with 6 bits: the square of a number."""
    return tabulate(bits, 2 * bits, lambda p: p * p)


def symmetric(inputs: int, ones) -> Table:
    """1 when the number of ones among the inputs is one of `ones`; 9sym with 9 inputs, 3 to 6."""
    return tabulate(inputs, 1, lambda p: int(p.bit_count() in ones))


def life() -> Table:
    """Conway's Game of Life: input 0 is the cell, 1 to 8 its neighbours; the cell's next state."""

    def next_state(point: int) -> int:
        neighbours = (point >> 1).bit_count()
        return int(neighbours == 3 or (neighbours == 2 and point & 1))

    return tabulate(9, 1, next_state)


SEGMENTS = ("abcdef", "bc", "abdeg", "abcdg", "bcfg", "acdfg", "acdefg", "abc", "abcdefg", "abcdfg")
"""Segments lit for each digit, 6 and 9 with tails (common practice, no source)."""


def seven_segments() -> Table:
    """A decimal digit in four bits to the segments a to g; 10 to 15 do not occur."""

    def lit(digit: int) -> int | None:
        if digit > 9:
            return None
        return sum(1 << j for j, name in enumerate("abcdefg") if name in SEGMENTS[digit])

    return tabulate(4, 7, lit)


def gray(bits: int) -> Table:
    """Binary to reflected Gray code."""
    return tabulate(bits, bits, lambda b: b ^ b >> 1)


def parity(bits: int) -> Table:
    return tabulate(bits, 1, lambda p: p.bit_count() & 1)


def full_adder() -> Table:
    """Sum (output 0) and carry (output 1) of three bits."""
    return tabulate(3, 2, int.bit_count)


def minterms(inputs: int, *lists) -> Table:
    """Outputs as lists of minterms over inputs of which the first is the most significant."""

    def value(point: int) -> int:
        number = int(f"{point:0{inputs}b}"[::-1], 2)
        return sum(1 << j for j, listed in enumerate(lists) if number in listed)

    return tabulate(inputs, len(lists), value)


def symmetric_primes(n: int, a: int, b: int) -> int:
    """How many primes the function has that is 1 for a to b ones out of n.

    Each fixes a inputs to 1 and n - b to 0 and leaves b - a open.
    """
    return factorial(n) // (factorial(a) * factorial(n - b) * factorial(b - a))
