"""A good cover without listing all primes: expand, irredundant, reduce, and again.

The loop of R. K. Brayton et al., *Logic Minimization Algorithms for VLSI Synthesis*, Kluwer 1984,
chapter 4, on multi-output cubes in machine words. Every step is bounded by cubes, never by 2^n, so
it serves any number of inputs; it promises nothing about how near the minimum it ends.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pla.logic import algebra
from pla.logic.cubes import Cover, Cube

if TYPE_CHECKING:
    from pla.logic.effort import Effort

__all__ = ["MAX_ROUNDS", "expand", "heuristic_cover", "irredundant_cover", "reduce_cover"]

MAX_ROUNDS = 12
_WORK_PER_PAIR = 100


def heuristic_cover(on: Cover, off: Cover, n_outputs: int, effort: Effort | None = None) -> Cover:
    """A complete cover of primes in which no term and no link is superfluous.

    Args:
        on: What must be covered, for the outputs of each cube's mask.
        off: What no term may touch, likewise.
        n_outputs: How many outputs the masks speak of.
        effort: Paid from; when it is used up no further round is begun.

    Returns:
        The best of at most `MAX_ROUNDS` rounds; each begins from the last, reduced.
    """
    primes = expand(on.fed().absorbed(), off, n_outputs)
    best = irredundant_cover(primes, on, n_outputs)
    if effort is not None:
        effort.spend(len(primes), _WORK_PER_PAIR * (len(primes) + len(on)))
    current = best
    for _ in range(MAX_ROUNDS):
        if effort is not None:
            effort.spend(len(current), 2 * _WORK_PER_PAIR * (len(current) + len(on)))
            if effort.exhausted:
                break
        shrunk = reduce_cover(current, on, n_outputs)
        current = irredundant_cover(expand(shrunk, off, n_outputs), on, n_outputs)
        if (len(current), current.links) >= (len(best), best.links):
            break
        best = current
    return best


def expand(cover: Cover, off: Cover, n_outputs: int) -> Cover:
    """Make every cube prime, swallowing as many of the others as its choices allow.

    The cubes that the raised ones swallow are left out.
    """
    order = np.lexsort((np.arange(len(cover)), np.bitwise_count(cover.ones | cover.zeros)))
    waiting = cover.take(order)
    done: list[Cube] = []
    alive = np.ones(len(waiting), dtype=bool)
    for index, cube in enumerate(list(waiting)):
        if not alive[index]:
            continue
        alive[index] = False
        raised = _raise(cube, off, waiting.take(alive), n_outputs)
        done.append(raised)
        inside = (
            (waiting.ones & np.uint64(raised.ones) == raised.ones)
            & (waiting.zeros & np.uint64(raised.zeros) == raised.zeros)
            & (waiting.outputs & ~np.uint64(raised.outputs) == 0)
        )
        alive &= ~inside
    return Cover.of(cover.n_inputs, done).absorbed()


def _raise(cube: Cube, off: Cover, others: Cover, n_outputs: int) -> Cube:
    """A prime that contains the cube, led by what it can swallow of the others."""
    outputs = cube.outputs
    gain = _fit(cube, others)
    walls = off.take((off.outputs & np.uint64(outputs)) != 0)
    conflicts_one = walls.zeros & np.uint64(cube.ones)
    conflicts_zero = walls.ones & np.uint64(cube.zeros)
    kept_ones = kept_zeros = 0
    free_ones, free_zeros = cube.ones, cube.zeros
    open_walls = np.ones(len(walls), dtype=bool)
    while free_ones | free_zeros:
        one = conflicts_one[open_walls] & np.uint64(free_ones)
        zero = conflicts_zero[open_walls] & np.uint64(free_zeros)
        count = np.bitwise_count(one | zero)
        forced = count == 1
        if forced.any():
            need_one = int(np.bitwise_or.reduce(one[forced]))
            need_zero = int(np.bitwise_or.reduce(zero[forced]))
            kept_ones |= need_one
            kept_zeros |= need_zero
            free_ones &= ~need_one
            free_zeros &= ~need_zero
            open_walls &= (
                (conflicts_one & np.uint64(kept_ones)) | (conflicts_zero & np.uint64(kept_zeros))
            ) == 0
            continue
        if not open_walls.any():
            break
        # Give up the literal that the fewest walls need and that most cubes would profit from.
        ranked = []
        for i in range(off.n_inputs):
            bit = 1 << i
            if not (free_ones | free_zeros) & bit:
                continue
            needed = int((((one | zero) & np.uint64(bit)) != 0).sum())
            ranked.append((needed, -gain[i], i))
        _, _, i = min(ranked)
        free_ones &= ~(1 << i)
        free_zeros &= ~(1 << i)
    raised = Cube(kept_ones, kept_zeros, outputs)
    hit = int(np.bitwise_or.reduce(off.outputs[off.meeting(raised)], initial=np.uint64(0)))
    return raised._replace(outputs=((1 << n_outputs) - 1) & ~hit)


def _fit(cube: Cube, others: Cover) -> list[int]:
    """For each input, how many near cubes disagree with this one's literal."""
    want_one = np.uint64(cube.ones) & ~others.ones
    want_zero = np.uint64(cube.zeros) & ~others.zeros
    lacking = want_one | want_zero
    near = np.bitwise_count(lacking) <= 2
    lacking = lacking[near]
    return [int(((lacking >> np.uint64(i)) & np.uint64(1)).sum()) for i in range(others.n_inputs)]


def irredundant_cover(cover: Cover, on: Cover, n_outputs: int) -> Cover:
    """Without terms, then without links, that the rest of the cover makes superfluous."""
    needed = [on.of_output(j) for j in range(n_outputs)]
    current = cover
    order = sorted(
        range(len(cover)), key=lambda k: (-int(np.bitwise_count(cover.ones | cover.zeros)[k]), k)
    )
    masks = cover.outputs.copy()
    for k in order:
        cube = Cube(int(cover.ones[k]), int(cover.zeros[k]), int(masks[k]))
        spared = masks[k]
        masks[k] = 0
        current = Cover(cover.n_inputs, cover.ones, cover.zeros, masks.copy())
        missing = 0
        for j in range(n_outputs):
            if cube.outputs >> j & 1 and not _still_covered(cube, needed[j], current.of_output(j)):
                missing |= 1 << j
        masks[k] = spared & np.uint64(missing) if missing else 0
    return Cover(cover.n_inputs, cover.ones, cover.zeros, masks.copy()).fed()


def reduce_cover(cover: Cover, on: Cover, n_outputs: int) -> Cover:
    """Shrink each term to the smallest cube that still covers what only it covers."""
    needed = [on.of_output(j) for j in range(n_outputs)]
    size = np.bitwise_count(cover.ones | cover.zeros)
    ones, zeros, masks = cover.ones.copy(), cover.zeros.copy(), cover.outputs.copy()
    for k in np.lexsort((np.arange(len(cover)), size)):
        cube = Cube(int(ones[k]), int(zeros[k]), int(masks[k]))
        spared, masks[k] = masks[k], 0
        rest = Cover(cover.n_inputs, ones.copy(), zeros.copy(), masks.copy())
        common_ones = common_zeros = -1
        outputs = 0
        for j in range(n_outputs):
            if not cube.outputs >> j & 1:
                continue
            own = _inside(needed[j], cube)
            alone = algebra.difference(own, rest.of_output(j))
            if len(alone):
                outputs |= 1 << j
                common_ones &= int(np.bitwise_and.reduce(alone.ones))
                common_zeros &= int(np.bitwise_and.reduce(alone.zeros))
        if outputs:
            ones[k], zeros[k], masks[k] = common_ones, common_zeros, outputs
        else:
            masks[k] = 0 if _spare(cube, rest, needed, n_outputs) else spared
    return Cover(cover.n_inputs, ones, zeros, masks).fed()


def _spare(cube: Cube, rest: Cover, needed: list[Cover], n_outputs: int) -> bool:
    return all(
        _still_covered(cube, needed[j], rest.of_output(j))
        for j in range(n_outputs)
        if cube.outputs >> j & 1
    )


def _inside(cover: Cover, cube: Cube) -> Cover:
    """The part of a cover that lies in a cube."""
    near = cover.take(cover.meeting(cube))
    return Cover(
        cover.n_inputs,
        near.ones | np.uint64(cube.ones),
        near.zeros | np.uint64(cube.zeros),
        near.outputs,
    )


def _still_covered(cube: Cube, needed: Cover, rest: Cover) -> bool:
    return all(algebra.contains_cube(rest, part) for part in _inside(needed, cube))
