"""Set operations on covers, looking only at their inputs.

Everything here works on cubes and never lists 2^n input combinations. The recursive methods split
on the variable that most cubes depend on (the unate recursive paradigm of Brayton et al., *Logic
Minimization Algorithms for VLSI Synthesis*, 1984, chapter 4). Arguments are single-output covers;
output masks of arguments are ignored and results feed output 0 (mask 1).
"""

from __future__ import annotations

import numpy as np

from pla.logic import points, small
from pla.logic.cubes import Cover, Cube
from pla.logic.small import TooManyCubesError

__all__ = [
    "TooManyCubesError",
    "compact",
    "complement",
    "contains_cube",
    "difference",
    "find_common",
    "find_outside",
    "intersection",
    "is_tautology",
    "size",
    "support",
    "union",
]

_PAIRS_AT_ONCE = 1 << 20


def union(n_inputs: int, *covers: Cover) -> Cover:
    """All cubes of all covers, without those that lie in another."""
    return Cover.joined(n_inputs, covers).feeding(1).absorbed()


def intersection(a: Cover, b: Cover) -> Cover:
    """Cubes whose union is the common part of `a` and `b`."""
    if len(a) * len(b) > _PAIRS_AT_ONCE:
        bits = points.support(a, b)
        if points.pays(bits, a, b):
            held = points.points_of_cover(a, bits) & points.points_of_cover(b, bits)
            return points.cover_of_points(a.n_inputs, held, bits)
    parts: list[Cover] = []
    step = max(1, _PAIRS_AT_ONCE // max(1, len(b)))
    for start in range(0, len(a), step):
        ones = a.ones[start : start + step, None] | b.ones[None, :]
        zeros = a.zeros[start : start + step, None] | b.zeros[None, :]
        live = (ones & zeros) == 0
        found = ones[live]
        parts.append(Cover(a.n_inputs, found, zeros[live], np.ones(len(found), dtype=np.uint64)))
    return Cover.joined(a.n_inputs, parts).absorbed()


def difference(a: Cover, b: Cover) -> Cover:
    """Cubes whose union is the part of `a` outside `b`."""
    if not len(a) or not len(b):
        return a.feeding(1)
    bits = points.support(a, b)
    if points.pays(bits, a, b):
        held = points.points_of_cover(a, bits) & ~points.points_of_cover(b, bits)
        return points.cover_of_points(a.n_inputs, held, bits)
    parts: list[Cover] = []
    for cube in a:
        near = b.take(b.meeting(cube))
        if not len(near):
            parts.append(Cover.of(a.n_inputs, [cube]).feeding(1))
            continue
        outside = _complement(_cofactor(near, cube.ones, cube.zeros))
        if len(outside):
            size = len(outside)
            parts.append(
                Cover(
                    a.n_inputs,
                    outside.ones | np.uint64(cube.ones),
                    outside.zeros | np.uint64(cube.zeros),
                    np.ones(size, dtype=np.uint64),
                )
            )
    return Cover.joined(a.n_inputs, parts).absorbed()


def complement(cover: Cover, most: int | None = None) -> Cover:
    """Disjoint cubes whose union is every input combination outside `cover`.

    Raises:
        TooManyCubesError: If `most` is given and more cubes than that would be needed.
    """
    found = _complement(cover.feeding(1).absorbed(), most)
    if most is not None and len(found) > most:
        raise TooManyCubesError
    return found


def support(*covers: Cover) -> int:
    """Mask of the inputs that any cube has a literal of."""
    return points.support(*covers)


def size(cover: Cover) -> int:
    """How many input combinations the cubes hold together, each counted once."""
    outside = _complement(cover.feeding(1).absorbed())
    n = cover.n_inputs
    return (1 << n) - sum(1 << (n - cube.literals) for cube in outside)


def compact(cover: Cover) -> Cover:
    """Join cubes that differ in one literal only and feed the same outputs, input by input.

    Quick and not a minimum: it takes the bulk out of lists of single input combinations. Output
    masks are kept, and for each output the input combinations that the cubes hold.
    """
    joined = cover.merged()
    for place in range(cover.n_inputs):
        bit = np.uint64(1 << place)
        literal = (joined.ones & bit != 0) | (joined.zeros & bit != 0)
        if np.count_nonzero(literal) < 2:
            continue
        plain = joined.take(~literal)
        held = joined.take(literal)
        positive = held.ones & bit != 0
        ones, zeros = held.ones & ~bit, held.zeros & ~bit
        order = np.lexsort((positive, ones, zeros, held.outputs))
        keys = (ones[order], zeros[order], held.outputs[order])
        first = np.concatenate((np.logical_and.reduce([k[1:] == k[:-1] for k in keys]), [False]))
        second = np.concatenate(([False], first[:-1]))
        raised = Cover(cover.n_inputs, *(k[first] for k in keys))
        joined = (plain + held.take(order[~(first | second)]) + raised).merged()
    return joined


def is_tautology(cover: Cover) -> bool:
    """Whether the cubes together hold every input combination."""
    return _uncovered(cover) is None


def contains_cube(cover: Cover, cube: Cube) -> bool:
    """Whether every input combination of `cube` is in `cover`."""
    return find_outside(cube, cover) is None


def find_outside(cube: Cube, cover: Cover) -> int | None:
    """An input combination of `cube` that is not in `cover`, or ``None``."""
    near = cover.take(cover.meeting(cube))
    point = _uncovered(_cofactor(near, cube.ones, cube.zeros))
    return None if point is None else (point & ~cube.zeros) | cube.ones


def find_common(a: Cover, b: Cover) -> tuple[int, int] | None:
    """Indexes of a cube of `a` and a cube of `b` that meet, the first by order, or ``None``."""
    if not len(a) or not len(b):
        return None
    step = max(1, _PAIRS_AT_ONCE // len(b))
    for start in range(0, len(a), step):
        ones = a.ones[start : start + step, None] | b.ones[None, :]
        zeros = a.zeros[start : start + step, None] | b.zeros[None, :]
        live = (ones & zeros) == 0
        if live.any():
            i, j = divmod(int(live.argmax()), len(b))
            return start + i, j
    return None


def _cofactor(cover: Cover, ones: int, zeros: int) -> Cover:
    """The cubes of `cover` as seen inside a cube that all of them meet."""
    fixed = np.uint64(~(ones | zeros) & (2**64 - 1))
    return Cover(cover.n_inputs, cover.ones & fixed, cover.zeros & fixed, cover.outputs)


def _split_variable(cover: Cover) -> int | None:
    """The most binate variable, else the one most cubes depend on; ``None`` without literals."""
    bits = np.arange(cover.n_inputs, dtype=np.uint64)
    one = np.uint64(1)
    plus = ((cover.ones[:, None] >> bits) & one).sum(axis=0).astype(np.int64)
    minus = ((cover.zeros[:, None] >> bits) & one).sum(axis=0).astype(np.int64)
    weight = np.minimum(plus, minus) * (2 * len(cover) + 1) + plus + minus
    best = int(weight.argmax()) if cover.n_inputs else 0
    return best if cover.n_inputs and weight[best] else None


def _halves(cover: Cover, variable: int) -> tuple[Cover, Cover]:
    bit = np.uint64(1 << variable)
    low = cover.take(cover.ones & bit == 0)
    high = cover.take(cover.zeros & bit == 0)
    return _cofactor(low, 0, 1 << variable), _cofactor(high, 1 << variable, 0)


def _uncovered(cover: Cover) -> int | None:
    """A point in no cube of the cover, or ``None`` for a tautology."""
    if not len(cover):
        return 0
    literals = cover.ones | cover.zeros
    if (literals == 0).any():
        return None
    # Too few points in all cubes together to fill the space.
    share = float(np.ldexp(1.0, -np.bitwise_count(literals).astype(np.int64)).sum())
    variable = _split_variable(cover)
    if variable is None:  # pragma: no cover - a cube without literals was found above
        return None
    bit = 1 << variable
    plus = (cover.ones & np.uint64(bit)) != 0
    minus = (cover.zeros & np.uint64(bit)) != 0
    if not (plus.any() and minus.any()):
        # Unate in every variable: a tautology only with a cube without literals.
        low_all = int(np.bitwise_or.reduce(cover.ones))
        return int(np.bitwise_or.reduce(cover.zeros)) & ~low_all
    low, high = _halves(cover, variable)
    first, second = (low, 0), (high, bit)
    if share < 1.0 and len(high) < len(low):
        first, second = second, first
    for half, value in (first, second):
        point = _uncovered(half)
        if point is not None:
            return (point & ~bit) | value
    return None


def _complement(cover: Cover, most: int | None = None) -> Cover:
    """Disjoint cubes that hold every input combination outside `cover`."""
    n = cover.n_inputs
    if not len(cover):
        return Cover.universe(n)
    if ((cover.ones | cover.zeros) == 0).any():
        return Cover.of(n)
    if len(cover) <= small.MOST:
        listed = list(zip(cover.ones.tolist(), cover.zeros.tolist(), strict=True))
        return Cover.of(n, [Cube(*masks) for masks in small.complement_masks(listed, most)])
    bits = points.support(cover)
    if points.pays(bits, cover):
        return points.cover_of_points(n, ~points.points_of_cover(cover, bits), bits)
    variable = _split_variable(cover)
    if variable is None:  # pragma: no cover - handled by the universal cube above
        return Cover.of(n)
    low, high = (_complement(half.merged(), most) for half in _halves(cover, variable))
    found = _merge_halves(low, high, variable)
    if most is not None and len(found) > most:
        raise TooManyCubesError
    return found


def _merge_halves(low: Cover, high: Cover, variable: int) -> Cover:
    """Join the complements of both halves; cubes that stand in both lose the variable."""
    n = low.n_inputs
    bit = np.uint64(1 << variable)
    mark_low = Cover(n, low.ones, low.zeros, np.full(len(low), 1, dtype=np.uint64))
    mark_high = Cover(n, high.ones, high.zeros, np.full(len(high), 2, dtype=np.uint64))
    both = (mark_low + mark_high).merged()
    only_low, only_high = both.outputs == 1, both.outputs == 2
    zeros = np.where(only_low, both.zeros | bit, both.zeros)
    ones = np.where(only_high, both.ones | bit, both.ones)
    return Cover(n, ones, zeros, np.ones(len(both), dtype=np.uint64))
