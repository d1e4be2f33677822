"""Functions of the program made from truth tables and back, and checks by brute force."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from oracles.functions import Table

from pla.logic.cubes import Cover
from pla.logic.function import Function
from pla.logic.phases import Polarity

if TYPE_CHECKING:
    import random

TRUE = Polarity(complement=False)
COMPLEMENT = Polarity(true=False)
FREE = Polarity()


def function_of(table: Table) -> Function:
    """One cube for each combination and set."""
    whole = (1 << table.inputs) - 1

    def cover(sets) -> Cover:
        fed: dict[int, int] = {}
        for j, points in enumerate(sets):
            for p in range(1 << table.inputs):
                if points >> p & 1:
                    fed[p] = fed.get(p, 0) | 1 << j
        return Cover.of(table.inputs, [(p, whole & ~p, mask) for p, mask in sorted(fed.items())])

    return Function(table.inputs, table.outputs, cover(table.on), cover(table.off))


def values_of(cover: Cover, inputs: int) -> list[int]:
    """For every input combination the mask of outputs fed, cube by cube in plain integers."""
    values = [0] * (1 << inputs)
    for ones, zeros, outputs in cover:
        for p in range(1 << inputs):
            if p & ones == ones and not p & zeros:
                values[p] |= outputs
    return values


def wrong_points(cover: Cover, complemented, table: Table) -> list[tuple[int, int]]:
    """(output, combination) where the cover is not what the table demands."""
    inverted = sum(1 << j for j, c in enumerate(complemented) if c)
    values = [v ^ inverted for v in values_of(cover, table.inputs)]
    return [
        (j, p)
        for j in range(table.outputs)
        for p, value in enumerate(values)
        if (table.on[j] >> p & 1 and not value >> j & 1)
        or (table.off[j] >> p & 1 and value >> j & 1)
    ]


def random_table(
    rng: random.Random, inputs: int, outputs: int, dont_care=0.2, ones=0.5, impossible=0
):
    """A table with some don't cares, and common ones where `impossible` of 8 parts are given."""
    never = 0
    if impossible:
        never = sum(1 << p for p in range(1 << inputs) if rng.random() < impossible / 8)
    on, off = [0] * outputs, [0] * outputs
    for j in range(outputs):
        for p in range(1 << inputs):
            if never >> p & 1 or rng.random() < dont_care:
                continue
            (on if rng.random() < ones else off)[j] |= 1 << p
    return Table(inputs, tuple(on), tuple(off))


def random_cover(
    rng: random.Random, inputs: int, cubes: int, outputs: int = 1, literals: float = 0.5
) -> Cover:
    rows = []
    for _ in range(cubes):
        ones = zeros = 0
        for i in range(inputs):
            if rng.random() < literals:
                if rng.random() < 0.5:
                    ones |= 1 << i
                else:
                    zeros |= 1 << i
        rows.append((ones, zeros, rng.randrange(1, 1 << outputs)))
    return Cover.of(inputs, rows)


def cover_at(cover: Cover, points: np.ndarray) -> np.ndarray:
    """Masks fed at many combinations of a wide cover."""
    found = np.zeros(len(points), dtype=np.uint64)
    for cube in cover:
        ones, zeros = np.uint64(cube.ones), np.uint64(cube.zeros)
        found[(points & ones == ones) & (points & zeros == 0)] |= np.uint64(cube.outputs)
    return found
