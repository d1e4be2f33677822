"""Codes of states, and what a state table asks of the bits that hold them."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pla.behaviour.listing import Solved
from pla.logic import algebra
from pla.logic.cubes import Cover, Cube

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.listing import Reason
    from pla.behaviour.model import CodeStyle, StateTable

__all__ = ["chosen_codes", "codes_of", "encoded", "width_of"]


def width_of(style: CodeStyle, n_states: int) -> int:
    """How many bits hold a state; free codes are as short as can be."""
    return n_states if style == "one-hot" else max(1, (n_states - 1).bit_length())


def codes_of(style: CodeStyle, n_states: int) -> tuple[str, ...]:
    """Codes in order of the states, highest bit first.

    Counting is binary from 0; Gray is the reflected binary code (F. Gray, US patent 2 632 058,
    1953); one-hot has the bit of the state's number.

    Raises:
        ValueError: For a style that does not settle the codes.
    """
    width = width_of(style, n_states)
    numbers = range(n_states)
    if style == "counting":
        return tuple(f"{number:0{width}b}" for number in numbers)
    if style == "gray":
        return tuple(f"{number ^ number >> 1:0{width}b}" for number in numbers)
    if style == "one-hot":
        return tuple(f"{1 << number:0{width}b}" for number in numbers)
    raise ValueError(style)


def chosen_codes(machine: StateTable) -> tuple[str, ...]:
    """The codes of a state table that leaves them free: counting."""
    return codes_of("counting", len(machine.states))


def encoded(
    machine: StateTable,
    codes: Sequence[str],
    present: Sequence[int],
    following: Sequence[int],
    outputs: Sequence[int],
    never: Cover,
) -> Solved:
    """What a state table asks of its bits and outputs once its states have codes.

    Args:
        machine: The table.
        codes: For each state, highest bit first.
        present: Positions of the present values among the inputs, highest bit first.
        following: Positions of the state's bits among the described bits, likewise.
        outputs: Positions of `StateTable.outputs` among the described bits.
        never: Impossible inputs.
    """
    n = never.n_inputs
    at = [_masks(code, present) for code in codes]
    sets: dict[str, list[Cover]] = {"on": [], "off": [], "x": []}
    everything = sum(1 << bit for bit in outputs)
    used = Cover.of(n, (Cube(*masks) for masks in at))
    unused = algebra.complement(used)
    for row in machine.rows:
        next_on, next_off = _masks(codes[row.then], following)
        on = next_on | _moved(row.on, outputs)
        off = next_off | _moved(row.off, outputs)
        places = [_inside(row.inputs, *at[row.state])]
        if machine.unused_start and row.state == machine.start:
            places += [_inside(row.inputs, cube.ones, cube.zeros) for cube in unused]
        for place in places:
            sets["on"].append(place.feeding(on).fed())
            sets["off"].append(place.feeding(off).fed())
            sets["x"].append(place.feeding(everything & ~(on | off)).fed())
    on_set, off_set, free = (algebra.compact(Cover.joined(n, covers)) for covers in sets.values())
    open_: list[tuple[Reason, Cover]] = [("x", free)]
    if not machine.unused_start:
        mask = everything | sum(1 << bit for bit in following)
        open_.append(("unused", algebra.difference(unused, never).feeding(mask)))
    return Solved(on_set, off_set, tuple(part for part in open_ if len(part[1])))


def _masks(code: str, positions: Sequence[int]) -> tuple[int, int]:
    """Bits that are 1 and bits that are 0 in a code."""
    ones = sum(1 << bit for sign, bit in zip(code, positions, strict=True) if sign == "1")
    zeros = sum(1 << bit for sign, bit in zip(code, positions, strict=True) if sign == "0")
    return ones, zeros


def _moved(mask: int, positions: Sequence[int]) -> int:
    return sum(1 << bit for place, bit in enumerate(positions) if mask >> place & 1)


def _inside(cover: Cover, ones: int, zeros: int) -> Cover:
    """The part of a cover inside a cube, whose inputs it has no literals of."""
    return Cover(
        cover.n_inputs, cover.ones | np.uint64(ones), cover.zeros | np.uint64(zeros), cover.outputs
    )
