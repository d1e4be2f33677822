"""Parts of a function that can be minimized apart.

Outputs that have no input in common never gain by sharing: where one output must be 0 whatever the
inputs of the other are, the terms that both share are idle, so each needs as many of its own as if
it were alone. The argument needs a combination at which each is 0; outputs that may be constant 1
can share the term without literals, so they are kept in one block.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.logic.cubes import Cover
from pla.logic.dense import MAX_DENSE_INPUTS, fed_outputs
from pla.logic.function import Function

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.cubes import Words
    from pla.logic.phases import Polarity

__all__ = ["Block", "blocks_of", "supports"]


@dataclass(frozen=True, slots=True)
class Block:
    """Inputs and outputs of a part, ascending, and the part as a function of just those."""

    inputs: tuple[int, ...]
    outputs: tuple[int, ...]
    function: Function

    def widened(self, cover: Cover, n_inputs: int) -> Cover:
        """A cover of the part as cubes over all inputs and outputs."""
        return Cover(
            n_inputs,
            _scattered(cover.ones, self.inputs),
            _scattered(cover.zeros, self.inputs),
            _scattered(cover.outputs, self.outputs),
        )


def blocks_of(function: Function, polarities: Sequence[Polarity]) -> tuple[Block, ...]:
    """Split a function into parts that share neither inputs nor the constant 1; in output order."""
    support = supports(function)
    fed, unfed = (
        int(np.bitwise_or.reduce(c.outputs, initial=np.uint64(0)))
        for c in (function.on, function.off)
    )
    groups: list[tuple[set[int], set[int]]] = []
    constant: set[int] = set()
    for j in range(function.n_outputs):
        may_be_one = (polarities[j].true and not unfed >> j & 1) or (
            polarities[j].complement and not fed >> j & 1
        )
        may_be_free = (polarities[j].true and not fed >> j & 1) or (
            polarities[j].complement and not unfed >> j & 1
        )
        inputs, outputs = set(support[j]), {j}
        if may_be_one and not may_be_free:
            constant.add(j)
        rest = []
        for other_inputs, other_outputs in groups:
            if other_inputs & inputs or (j in constant and other_outputs & constant):
                inputs |= other_inputs
                outputs |= other_outputs
            else:
                rest.append((other_inputs, other_outputs))
        groups = [*rest, (inputs, outputs)]
    parts = [(tuple(sorted(i)), tuple(sorted(o))) for i, o in groups]
    return tuple(
        Block(inputs, outputs, _part(function, inputs, outputs))
        for inputs, outputs in sorted(parts, key=lambda part: part[1])
    )


def supports(function: Function) -> tuple[tuple[int, ...], ...]:
    """For each output the inputs that its ON-set or OFF-set depends on, ascending.

    Up to 16 inputs the sets themselves are looked at; beyond that, the literals of their cubes.
    """
    n = function.n_inputs
    depends = np.zeros(n, dtype=np.uint64)
    if n <= MAX_DENSE_INPUTS:
        for array in (fed_outputs(function.on), fed_outputs(function.off)):
            for i in range(n):
                low, high = array.take(0, i), array.take(1, i)
                depends[i] |= np.bitwise_or.reduce(np.asarray(low ^ high), axis=None)
    else:
        for cover in (function.on, function.off):
            for i in range(n):
                bit = np.uint64(1 << i)
                touched = ((cover.ones | cover.zeros) & bit) != 0
                depends[i] |= np.bitwise_or.reduce(cover.outputs[touched], initial=np.uint64(0))
    return tuple(
        tuple(i for i in range(n) if int(depends[i]) >> j & 1) for j in range(function.n_outputs)
    )


def _part(function: Function, inputs: tuple[int, ...], outputs: tuple[int, ...]) -> Function:
    if inputs == tuple(range(function.n_inputs)) and outputs == tuple(range(function.n_outputs)):
        return function
    on, off = (
        Cover(
            len(inputs),
            _gathered(cover.ones, inputs),
            _gathered(cover.zeros, inputs),
            _gathered(cover.outputs, outputs),
        )
        .fed()
        .merged()
        for cover in (function.on, function.off)
    )
    return Function(len(inputs), len(outputs), on, off)


def _gathered(words: Words, bits: tuple[int, ...]) -> Words:
    packed = np.zeros_like(words)
    for k, bit in enumerate(bits):
        packed |= (words >> np.uint64(bit) & np.uint64(1)) << np.uint64(k)
    return packed


def _scattered(words: Words, bits: tuple[int, ...]) -> Words:
    spread = np.zeros_like(words)
    for k, bit in enumerate(bits):
        spread |= (words >> np.uint64(k) & np.uint64(1)) << np.uint64(bit)
    return spread
