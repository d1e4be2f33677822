"""Codes of the states of a machine: which are alike, which there are, and which are next to which.

A different order of the state bits is the same codes for every purpose here. Where a state bit may
be realised as well complemented as true, complementing it in all codes makes no difference either:
its next-state sum and its literals are complemented along with it.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import permutations
from math import factorial, perm
from typing import TYPE_CHECKING, NamedTuple

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.logic.phases import Polarity

__all__ = ["Assignment", "Codes", "Space", "sorted_bits"]

Codes = tuple[int, ...]
"""For each state its code; bit ``i`` is state bit ``i``."""


class Assignment(NamedTuple):
    """Codes, and the outputs whose sums are of the complement."""

    codes: Codes
    complemented: tuple[bool, ...]


@dataclass(frozen=True, slots=True)
class Space:
    """All codes of one length that a machine may have.

    Attributes:
        n_states: How many states need a code.
        bits: The length.
        start: The state at power-up.
        start_code: Its code, where that is given; then no other is allowed for it.
        state_polarity: What the sums of the state bits may be.
        output_polarities: What the sums of the outputs may be.
    """

    n_states: int
    bits: int
    start: int
    start_code: int | None
    state_polarity: Polarity
    output_polarities: tuple[Polarity, ...]

    @property
    def mirrored(self) -> bool:
        """Whether complementing a bit in all codes makes no difference."""
        return self.state_polarity.true and self.state_polarity.complement

    @property
    def polarities(self) -> tuple[Polarity, ...]:
        """Of the state bits, then of the outputs."""
        return (self.state_polarity,) * self.bits + self.output_polarities

    def moved(self, codes: Codes, start_code: int) -> Codes:
        """The codes with those bits complemented that give the start state this code."""
        mask = codes[self.start] ^ start_code
        return tuple(code ^ mask for code in codes)

    def admitted(self, codes: Codes) -> Codes:
        """The codes themselves or, where they give the start state a wrong code, moved."""
        return codes if self.start_code is None else self.moved(codes, self.start_code)

    def representative(self, codes: Codes) -> Codes:
        """The one that stands for all codes alike."""
        if not self._any_order:
            return codes
        return sorted_bits(self.moved(codes, 0) if self.mirrored else codes, self.bits)

    def size(self) -> int:
        """How many there are, or fewer: some codes are left as they are by an order of bits."""
        free = self.mirrored or self.start_code is not None
        chosen = perm((1 << self.bits) - free, self.n_states - free)
        return chosen // (factorial(self.bits) if self._any_order else 1)

    def representatives(self) -> Iterator[Codes]:
        """One of all codes that are alike, in a fixed order."""
        fixed = 0 if self.mirrored else self.start_code
        if fixed is None:
            every: Iterator[Codes] = permutations(range(1 << self.bits), self.n_states)
        else:
            others = [code for code in range(1 << self.bits) if code != fixed]
            every = (
                (*rest[: self.start], fixed, *rest[self.start :])
                for rest in permutations(others, self.n_states - 1)
            )
        if not self._any_order:
            yield from every
            return
        yield from (codes for codes in every if sorted_bits(codes, self.bits) == codes)

    @property
    def _any_order(self) -> bool:
        """Whether the order of bits is free; a start code of unlike bits ties them down."""
        code = 0 if self.mirrored or self.start_code is None else self.start_code
        return code in (0, (1 << self.bits) - 1)

    def neighbours(self, at: Assignment) -> Iterator[Assignment]:
        """One state moved to another code or two exchanged, one bit or one output complemented."""
        codes, complemented = at
        holder = {code: state for state, code in enumerate(codes)}
        fixed = None if self.mirrored else self.start_code
        for state, own in enumerate(codes):
            for code in range(1 << self.bits):
                other = holder.get(code)
                if other is not None and other <= state:
                    continue
                if fixed is not None and self.start in (state, other):
                    continue
                changed = list(codes)
                changed[state] = code
                if other is not None:
                    changed[other] = own
                yield Assignment(tuple(changed), complemented)
        if self.mirrored:
            for bit in range(self.bits):
                yield Assignment(tuple(code ^ 1 << bit for code in codes), complemented)
        for j, inverted_now in enumerate(complemented):
            polarity = self.output_polarities[j]
            if polarity.true and polarity.complement:
                inverted = (*complemented[:j], not inverted_now, *complemented[j + 1 :])
                yield Assignment(codes, inverted)


def sorted_bits(codes: Codes, bits: int) -> Codes:
    """The codes with their bits in a fixed order, in which counting is as it should be."""
    columns = sorted(
        (
            sum((code >> bit & 1) << place for place, code in enumerate(reversed(codes)))
            for bit in range(bits)
        ),
        reverse=True,
    )
    return tuple(
        sum((column >> place & 1) << bit for bit, column in enumerate(columns))
        for place in reversed(range(len(codes)))
    )
