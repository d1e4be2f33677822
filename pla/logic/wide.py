"""Blocks too wide for the lattice: a heuristic cover and an honest lower bound, all by cubes."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pla.logic.block_minimum import BlockMinimum
from pla.logic.cubes import MAX_OUTPUTS, Cover
from pla.logic.heuristic import expand, heuristic_cover
from pla.logic.independent import independent_bound, sample_points
from pla.logic.phases import phase_function, phases_of

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.effort import Effort
    from pla.logic.function import Function
    from pla.logic.independent import Samples
    from pla.logic.phases import Polarity
    from pla.logic.search import Feasible

__all__ = ["minimize_wide"]

_HOPELESS = 4


def minimize_wide(
    function: Function,
    polarities: Sequence[Polarity],
    effort: Effort,
    feasible: Feasible | None = None,
) -> BlockMinimum:
    """A good cover and a bound.

    Polarities begin from the best of three: each output as serves it alone, all true, all
    complemented (which pays where the complements have terms in common, as those of a decoder do);
    then single changes are tried.
    """
    sizes, floor = _sizes_alone(function, polarities, effort)
    starts = [[min(size, key=lambda c: (size[c], c)) for size in sizes]]
    starts += [[max(size) if wish else min(size) for size in sizes] for wish in (False, True)]
    choices = dict.fromkeys(_feasible_choice(start, feasible) for start in starts)
    best, choice = None, next(iter(choices))
    for tried in choices:
        if best is None or (not effort.exhausted and _promising(tried, choice, sizes)):
            cover = _cover(function, tried, effort)
            if best is None or (len(cover), cover.links) < (len(best), best.links):
                best, choice = cover, tried
    if best is None:  # pragma: no cover - there is always a first choice
        raise ValueError("no polarity to choose")
    for j, size in enumerate(sizes):
        changed = (*choice[:j], not choice[j], *choice[j + 1 :])
        if len(size) < 2 or effort.exhausted or not _promising(changed, choice, sizes):
            continue
        if feasible is not None and not feasible(changed):
            continue
        cover = _cover(function, changed, effort)
        if (len(cover), cover.links) < (len(best), best.links):
            best, choice = cover, changed
    floor = min(floor, len(best))
    return BlockMinimum(best, choice, floor, floor, None, None)


def _sizes_alone(
    function: Function, polarities: Sequence[Polarity], effort: Effort
) -> tuple[list[dict[bool, int]], int]:
    """For each output its terms alone in each polarity, and a bound over all polarities.

    Of a polarity that begins with far more primes than the other needs terms, only those are
    counted: it will hardly be chosen.
    """
    sizes: list[dict[bool, int]] = [{} for _ in polarities]
    samples: list[dict[bool, list[int]]] = [{} for _ in polarities]
    alone = 0
    for j, polarity in enumerate(polarities):
        sets = (function.on.of_output(j), function.off.of_output(j))
        ways = [c for c in (False, True) if (polarity.complement if c else polarity.true)]
        for complemented in sorted(ways, key=lambda c: len(sets[c])):
            wanted, walls = sets[complemented], sets[not complemented]
            cover = expand(wanted.absorbed(), walls, 1)
            known = min(sizes[j].values(), default=len(cover))
            if len(cover) <= _HOPELESS * known:
                cover = heuristic_cover(wanted, walls, 1, effort)
            sizes[j][complemented] = len(cover)
            samples[j][complemented] = sample_points(cover, wanted)
        bounds = [independent_bound([{0: samples[j][c]}], sets[not c]) for c in ways]
        alone = max(alone, min(bounds))
    return sizes, max(alone, _bound_together(function, polarities, samples))


def _bound_together(
    function: Function,
    polarities: Sequence[Polarity],
    samples: Sequence[dict[bool, list[int]]],
) -> int:
    """A bound over all polarities that counts what the outputs cannot share."""
    phases = phases_of(polarities)
    if len(phases) > MAX_OUTPUTS:
        return 0
    _, off = phase_function(function, phases)
    by_phase: list[Samples] = [{} for _ in polarities]
    for bit, phase in enumerate(phases):
        by_phase[phase.output][bit] = samples[phase.output][phase.complemented]
    return max(independent_bound(order, off) for order in (by_phase, by_phase[::-1]))


def _promising(
    tried: Sequence[bool], standing: Sequence[bool], sizes: Sequence[dict[bool, int]]
) -> bool:
    """Whether sharing could make up for what other polarities cost the outputs alone."""
    new, old = (
        sum(size[c] for size, c in zip(sizes, choice, strict=True)) for choice in (tried, standing)
    )
    return new <= _HOPELESS * max(1, old)


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


def _cover(function: Function, complemented: Sequence[bool], effort: Effort) -> Cover:
    on, off = _in_polarity(function, complemented)
    return heuristic_cover(on, off, function.n_outputs, effort)
