"""Cubes and covers on machine words.

A cube is a product of literals. Input ``i`` has two bits, one in each of two 64-bit words: bit
``i`` of `ones` says that the literal is present, bit ``i`` of `zeros` that its complement is.
Neither bit set is a dash; both set would be an empty cube and never occurs in a `Cover`. So
intersection is OR, containment is a subset test, and a whole cover is one numpy expression.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from numpy.typing import NDArray

__all__ = ["MAX_INPUTS", "MAX_OUTPUTS", "Cover", "Cube", "Words"]

MAX_INPUTS = 64
MAX_OUTPUTS = 64

_KIND_COST = 4000  # comparing two kinds costs as much as so many pairs of cubes

Words = np.ndarray[tuple[int], np.dtype[np.uint64]]


class Cube(NamedTuple):
    """One product term as masks: inputs that must be 1, inputs that must be 0, outputs it feeds."""

    ones: int
    zeros: int
    outputs: int = 1

    def text(self, n_inputs: int) -> str:
        """``1``, ``0`` or ``-`` for each input in order."""
        return "".join(
            "1" if self.ones >> i & 1 else "0" if self.zeros >> i & 1 else "-"
            for i in range(n_inputs)
        )

    @classmethod
    def parse(cls, text: str, outputs: int = 1) -> Cube:
        """The cube of a string of ``1``, ``0`` and ``-``.

        Raises:
            ValueError: For any other character.
        """
        ones = zeros = 0
        for i, character in enumerate(text):
            if character == "1":
                ones |= 1 << i
            elif character == "0":
                zeros |= 1 << i
            elif character != "-":
                raise ValueError(f"{character!r} is not 1, 0 or -")
        return cls(ones, zeros, outputs)

    @property
    def literals(self) -> int:
        return (self.ones | self.zeros).bit_count()

    def meets(self, other: Cube) -> bool:
        """Whether the two have an input combination in common (outputs are not looked at)."""
        return not ((self.ones | other.ones) & (self.zeros | other.zeros))

    def contains(self, other: Cube) -> bool:
        """Whether every input combination of `other` is in this cube."""
        return not (self.ones & ~other.ones or self.zeros & ~other.zeros)


@dataclass(frozen=True, slots=True, eq=False)
class Cover:
    """An ordered list of cubes over the same inputs, each feeding a set of outputs.

    Attributes:
        n_inputs: At most 64.
        ones: ``uint64[k]``; bit ``i`` set where the literal of input ``i`` is present.
        zeros: ``uint64[k]``; bit ``i`` set where the complement of input ``i`` is.
        outputs: ``uint64[k]``; bit ``j`` set where the cube feeds output ``j``.
    """

    n_inputs: int
    ones: Words
    zeros: Words
    outputs: Words

    def __post_init__(self) -> None:
        for words in (self.ones, self.zeros, self.outputs):
            words.flags.writeable = False

    @classmethod
    def of(cls, n_inputs: int, cubes: Iterable[Cube | tuple[int, int, int]] = ()) -> Cover:
        listed = list(cubes)
        table = np.array(listed, dtype=np.uint64).reshape(len(listed), 3)
        columns = (np.ascontiguousarray(table[:, i]) for i in range(3))
        return cls(n_inputs, *columns)

    @classmethod
    def universe(cls, n_inputs: int, outputs: int = 1) -> Cover:
        return cls.of(n_inputs, [Cube(0, 0, outputs)])

    @classmethod
    def joined(cls, n_inputs: int, covers: Iterable[Cover]) -> Cover:
        parts = list(covers)
        if not parts:
            return cls.of(n_inputs)
        return cls(
            n_inputs,
            np.concatenate([c.ones for c in parts]),
            np.concatenate([c.zeros for c in parts]),
            np.concatenate([c.outputs for c in parts]),
        )

    def __len__(self) -> int:
        return int(self.ones.shape[0])

    def __iter__(self) -> Iterator[Cube]:
        rows = zip(self.ones.tolist(), self.zeros.tolist(), self.outputs.tolist(), strict=True)
        return (Cube(*row) for row in rows)

    def __eq__(self, other: object) -> bool:
        """The same cubes in the same order (not: the same function)."""
        if not isinstance(other, Cover):
            return NotImplemented
        return self.n_inputs == other.n_inputs and list(self) == list(other)

    def __hash__(self) -> int:
        return hash((self.n_inputs, tuple(self)))

    def __add__(self, other: Cover) -> Cover:
        return Cover.joined(self.n_inputs, (self, other))

    def __repr__(self) -> str:
        shown = ", ".join(f"{c.text(self.n_inputs)}:{c.outputs:b}" for c in list(self)[:8])
        return f"Cover({self.n_inputs}, {len(self)} cubes: {shown}{', …' if len(self) > 8 else ''})"

    def take(self, chosen: NDArray[np.bool_] | NDArray[np.intp] | slice) -> Cover:
        """The cubes that a mask, an index array or a slice picks."""
        return Cover(self.n_inputs, self.ones[chosen], self.zeros[chosen], self.outputs[chosen])

    def of_output(self, output: int) -> Cover:
        """The cubes that feed `output`, as a single-output cover (output mask 1)."""
        picked = self.take((self.outputs >> np.uint64(output) & np.uint64(1)).astype(bool))
        return picked.feeding(1)

    def feeding(self, outputs: int) -> Cover:
        """The same cubes, all feeding the outputs of this mask."""
        return Cover(
            self.n_inputs, self.ones, self.zeros, np.full(len(self), outputs, dtype=np.uint64)
        )

    def absorbed(self) -> Cover:
        """Without cubes that lie in another cube whose outputs include theirs; sorted."""
        ordered = self.merged()
        k = len(ordered)
        if k < 2:
            return ordered
        literals = ordered.ones | ordered.zeros
        kinds, kind = np.unique(literals, return_inverse=True)
        if len(kinds) ** 2 * _KIND_COST < k * k:
            return ordered.take(_outside_wider_kinds(ordered, kinds, kind))
        kept = np.ones(k, dtype=bool)
        for index in np.argsort(np.bitwise_count(literals), kind="stable"):
            if not kept[index]:
                continue
            ones, zeros, outs = (w[index] for w in (ordered.ones, ordered.zeros, ordered.outputs))
            inside = (
                (ones & ~ordered.ones == 0)
                & (zeros & ~ordered.zeros == 0)
                & (ordered.outputs & ~outs == 0)
            )
            inside[index] = False
            kept &= ~inside
        return ordered.take(kept)

    def merged(self) -> Cover:
        """Cubes with equal inputs joined into one that feeds the outputs of all; sorted."""
        if len(self) < 2:
            return self
        order = np.lexsort((self.ones, self.zeros))
        ones, zeros, outputs = self.ones[order], self.zeros[order], self.outputs[order]
        first = np.concatenate(([True], (ones[1:] != ones[:-1]) | (zeros[1:] != zeros[:-1])))
        starts = np.flatnonzero(first)
        return Cover(
            self.n_inputs, ones[starts], zeros[starts], np.bitwise_or.reduceat(outputs, starts)
        )

    def fed(self) -> Cover:
        """Without cubes that feed no output."""
        return self.take(self.outputs != 0)

    def meeting(self, cube: Cube) -> NDArray[np.bool_]:
        """``bool[k]``: which cubes have an input combination in common with `cube`."""
        ones, zeros = np.uint64(cube.ones), np.uint64(cube.zeros)
        live: NDArray[np.bool_] = ((self.ones | ones) & (self.zeros | zeros)) == 0
        return live

    def value_at(self, point: int) -> int:
        """Mask of the outputs that are fed at one input combination (bit ``i``: input ``i``)."""
        x = np.uint64(point)
        active = ((self.ones & ~x) | (self.zeros & x)) == 0
        return int(np.bitwise_or.reduce(self.outputs[active], initial=np.uint64(0)))

    @property
    def literals(self) -> int:
        return int(np.bitwise_count(self.ones | self.zeros).sum())

    @property
    def links(self) -> int:
        """Connections: literals plus OR links."""
        return self.literals + int(np.bitwise_count(self.outputs).sum())


def _outside_wider_kinds(
    cover: Cover, kinds: NDArray[np.uint64], kind: NDArray[np.intp]
) -> NDArray[np.bool_]:
    """``bool[k]``: which cubes lie in no other cube, by looking up the cubes of each wider kind.

    Args:
        cover: Cubes with different inputs.
        kinds: The sets of inputs that cubes have literals of, as masks.
        kind: Which of these each cube has.
    """
    kept = np.ones(len(cover), dtype=bool)
    members = [np.flatnonzero(kind == i) for i in range(len(kinds))]
    for wide, wide_mask in enumerate(kinds):
        # Cubes of one kind are told apart by their positive literals.
        wider = members[wide][np.argsort(cover.ones[members[wide]])]
        ones, outputs = cover.ones[wider], cover.outputs[wider]
        for narrow, narrow_mask in enumerate(kinds):
            if narrow == wide or wide_mask & ~narrow_mask:
                continue
            inner = members[narrow]
            wanted = cover.ones[inner] & wide_mask
            at = np.minimum(np.searchsorted(ones, wanted), len(ones) - 1)
            kept[inner[(ones[at] == wanted) & (cover.outputs[inner] & ~outputs[at] == 0)]] = False
    return kept
