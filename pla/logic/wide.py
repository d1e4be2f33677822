"""Blocks too wide for the lattice: a heuristic cover and an honest lower bound, all by cubes."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pla.logic.block_minimum import BlockMinimum
from pla.logic.cubes import Cover
from pla.logic.heuristic import heuristic_cover
from pla.logic.independent import independent_bound, sample_points

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.effort import Effort
    from pla.logic.function import Function
    from pla.logic.phases import Polarity
    from pla.logic.search import Feasible

__all__ = ["minimize_wide"]


def minimize_wide(
    function: Function,
    polarities: Sequence[Polarity],
    effort: Effort,
    feasible: Feasible | None = None,
) -> BlockMinimum:
    """A good cover and a bound; polarities by each output alone, then by trying single changes."""
    choice, floor = _first_choice(function, polarities, feasible)
    best = _cover(function, choice)
    movable = [j for j, p in enumerate(polarities) if p.true and p.complement]
    if any(not (p.true and p.complement) for p in polarities) or len(function.on) <= 2_000:
        for j in movable:
            changed = (*choice[:j], not choice[j], *choice[j + 1 :])
            if effort.exhausted or (feasible is not None and not feasible(changed)):
                continue
            effort.spend(len(function.on), len(function.off))
            cover = _cover(function, changed)
            if (len(cover), cover.links) < (len(best), best.links):
                best, choice = cover, changed
    if not movable:
        on, off = _in_polarity(function, choice)
        samples = sample_points(best, on, function.n_outputs)
        floor = max(floor, independent_bound(samples, off))
    floor = min(floor, len(best))
    return BlockMinimum(best, choice, floor, floor, None, None)


def _first_choice(
    function: Function, polarities: Sequence[Polarity], feasible: Feasible | None
) -> tuple[tuple[bool, ...], int]:
    """For each output the polarity that serves it best alone, and a bound over all polarities.

    Every cover holds a cover of each output, so the largest bound of an output alone, in the
    polarity where that is smallest, holds for all outputs together.
    """
    preferred: list[bool] = []
    floor = 0
    for j, allowed in enumerate(polarities):
        sizes: list[tuple[int, bool]] = []
        bounds: list[int] = []
        for complemented in (False, True):
            if not (allowed.complement if complemented else allowed.true):
                continue
            on, off = function.on.of_output(j), function.off.of_output(j)
            if complemented:
                on, off = off, on
            cover = heuristic_cover(on, off, 1)
            sizes.append((len(cover), complemented))
            bounds.append(independent_bound(sample_points(cover, on, 1), off))
        preferred.append(min(sizes)[1])
        floor = max(floor, min(bounds))
    return _feasible_choice(preferred, feasible), floor


def _feasible_choice(preferred: Sequence[bool], feasible: Feasible | None) -> tuple[bool, ...]:
    if feasible is None:
        return tuple(preferred)
    decided: list[bool | None] = [None] * len(preferred)
    for j, wish in enumerate(preferred):
        decided[j] = wish
        if not feasible(tuple(decided)):
            decided[j] = not wish
    return tuple(bool(d) for d in decided)


def _in_polarity(function: Function, complemented: Sequence[bool]) -> tuple[Cover, Cover]:
    inverted = np.uint64(sum(1 << j for j, c in enumerate(complemented) if c))
    parts: tuple[list[Cover], list[Cover]] = ([], [])
    for cover, (kept, moved) in ((function.on, parts), (function.off, parts[::-1])):
        for target, mask in ((kept, cover.outputs & ~inverted), (moved, cover.outputs & inverted)):
            target.append(Cover(cover.n_inputs, cover.ones, cover.zeros, mask).fed())
    on, off = (Cover.joined(function.n_inputs, part).merged() for part in parts)
    return on, off


def _cover(function: Function, complemented: Sequence[bool]) -> Cover:
    on, off = _in_polarity(function, complemented)
    return heuristic_cover(on, off, function.n_outputs)
