"""Parts of a function that can be minimized apart.

Outputs that have no input in common never gain by sharing: where one output must be 0 whatever the
inputs of the other are, the terms that both share are idle, so each needs as many of its own as if
it were alone. The argument needs a combination at which each is 0. An output that is nowhere 0 can
be fed by terms of any others: it stays apart only from outputs that some combination leaves without
a single term. (Between parts whose outputs each have such a combination, though not a common one,
it still holds: a shared term has a literal of either part, so it is active at half of the
combinations of each at most, and some pair of combinations has no more active terms, counted in
both, than there are shared ones.)
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.logic import algebra
from pla.logic.cubes import Cover
from pla.logic.dense import MAX_DENSE_INPUTS, fed_outputs
from pla.logic.function import Function

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.cubes import Words
    from pla.logic.phases import Polarity

__all__ = ["Block", "blocks_of", "supports"]

MAX_PAIRS = 1 << 24

_Group = tuple[set[int], set[int]]


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
    """Split a function into parts whose minima add up to that of the whole; in output order."""
    support = supports(function)
    fed, unfed = (
        int(np.bitwise_or.reduce(c.outputs, initial=np.uint64(0)))
        for c in (function.on, function.off)
    )
    groups: list[_Group] = []
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
    if constant:
        groups = _fed_by_others(function, polarities, groups, constant)
    parts = [(tuple(sorted(i)), tuple(sorted(o))) for i, o in groups]
    return tuple(
        Block(inputs, outputs, _part(function, inputs, outputs))
        for inputs, outputs in sorted(parts, key=lambda part: part[1])
    )


def _fed_by_others(
    function: Function,
    polarities: Sequence[Polarity],
    groups: Sequence[_Group],
    constant: set[int],
) -> list[_Group]:
    """Join the outputs that are nowhere 0 with the groups whose terms may together serve them."""
    inputs: set[int] = set()
    outputs: set[int] = set()
    rest = []
    for group in groups:
        if group[1] & constant or not _may_idle(function, polarities, group[1]):
            inputs |= group[0]
            outputs |= group[1]
        else:
            rest.append(group)
    return [*rest, (inputs, outputs)]


def _may_idle(function: Function, polarities: Sequence[Polarity], outputs: set[int]) -> bool:
    """Whether some combination is 0 for all of these outputs, whatever their polarities."""
    common = Cover.universe(function.n_inputs)
    for j in sorted(outputs):
        true, complement = (polarities[j].true, polarities[j].complement)
        off, on = function.off.of_output(j), function.on.of_output(j)
        if (true and not len(on)) or (complement and not len(off)):
            continue  # costs nothing in that polarity
        if (true and complement) or len(common) * len(off if true else on) > MAX_PAIRS:
            return False
        common = algebra.intersection(common, off if true else on)
    return len(common) > 0


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
