"""What is known about the minimum of one block."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from pla.logic.cubes import Cover

__all__ = ["BlockMinimum", "Scope"]

Scope = Literal["all polarities", "these polarities"]


@dataclass(frozen=True, slots=True)
class BlockMinimum:
    """The answer for one block.

    Attributes:
        cover: Terms over the block's inputs; output masks speak of the block's outputs.
        complemented: Polarity of each output.
        exact: Lower bound verified in integers.
        trusted: Lower bound that may rest on the solver; at least `exact`.
        connections: Where no cover of so many terms has fewer literals and OR links, by the
            solver's word: in any polarities or in these; ``None`` where that is not known.
        primes: How many primes there are; ``None`` if they were not all made.
    """

    cover: Cover
    complemented: tuple[bool, ...]
    exact: int
    trusted: int
    connections: Scope | None
    primes: int | None
