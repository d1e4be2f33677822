"""Dividing a cover by another into disjoint cubes, both parts at once."""

from __future__ import annotations

import numpy as np

from pla.logic import points
from pla.logic.algebra import compact
from pla.logic.cubes import Cover, Cube

__all__ = ["partition"]

_FEW_INPUTS = 10  # whole arrays over so few inputs are quicker than recursion


def partition(cover: Cover, by: Cover) -> tuple[Cover, Cover]:
    """The part of `cover` inside `by`, and the part outside it.

    Shannon expansion on the input that most cubes depend on, until a branch depends on few inputs
    or is settled. The cubes of a part have no input combination in common. Output masks of the
    arguments are ignored and the results feed output 0.
    """
    n = cover.n_inputs
    inside: list[Cover] = []
    outside: list[Cover] = []
    todo = [(Cube(0, 0), cover.feeding(1), by.feeding(1))]
    while todo:
        path, held, divisor = todo.pop()
        if not len(held):
            continue
        if len(held) == 1:
            (cube,) = held
            divisor = divisor.take(divisor.meeting(cube))
            if not len(divisor) or any(other.contains(cube) for other in divisor):
                (inside if len(divisor) else outside).append(_along(held, path))
                continue
        bits = points.support(held, divisor)
        if bits.bit_count() <= _FEW_INPUTS:
            a, b = (points.points_of_cover(c, bits) for c in (held, divisor))
            for part, kept in ((inside, a & b), (outside, a & ~b)):
                part.append(_along(points.cover_of_points(n, kept, bits), path))
            continue
        variable = _most_used(held, divisor)
        for branch in (Cube(1 << variable, 0), Cube(0, 1 << variable)):
            along = Cube(path.ones | branch.ones, path.zeros | branch.zeros)
            todo.append((along, _cofactor(held, branch), _cofactor(divisor, branch)))
    return _joined(n, inside), _joined(n, outside)


def _joined(n_inputs: int, parts: list[Cover]) -> Cover:
    parts = [part for part in parts if len(part)]
    if not parts:
        return Cover.of(n_inputs)
    # What comes from points is joined already as far as it goes.
    return parts[0] if len(parts) == 1 else compact(Cover.joined(n_inputs, parts))


def _cofactor(cover: Cover, branch: Cube) -> Cover:
    """The cubes as seen from a branch; one alone where it holds all of the branch."""
    near = cover.take(cover.meeting(branch))
    free = ~np.uint64(branch.ones | branch.zeros)
    seen = Cover(cover.n_inputs, near.ones & free, near.zeros & free, near.outputs)
    whole = np.flatnonzero((seen.ones | seen.zeros) == 0)
    return seen.take(whole[:1]) if len(whole) else seen


def _along(cover: Cover, path: Cube) -> Cover:
    return Cover(
        cover.n_inputs,
        cover.ones | np.uint64(path.ones),
        cover.zeros | np.uint64(path.zeros),
        cover.outputs,
    )


def _most_used(*covers: Cover) -> int:
    """The input that most cubes have a literal of; the first of several."""
    literals = np.concatenate([cover.ones | cover.zeros for cover in covers])
    bits = np.arange(covers[0].n_inputs, dtype=np.uint64)
    return int((literals[:, None] >> bits & np.uint64(1)).sum(axis=0).argmax())
