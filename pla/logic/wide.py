"""Blocks too wide for the lattice: a heuristic cover and an honest lower bound, all by cubes."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pla.logic.block_minimum import BlockMinimum
from pla.logic.cubes import Cover
from pla.logic.heuristic import heuristic_cover
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
    preferred, floor = _preferred(function, polarities)
    starts = [
        preferred,
        *([p.complement and (wish or not p.true) for p in polarities] for wish in (False, True)),
    ]
    choices = dict.fromkeys(_feasible_choice(start, feasible) for start in starts)
    covers = [(choice, _cover(function, choice)) for choice in choices]
    choice, best = min(covers, key=lambda pair: (len(pair[1]), pair[1].links))
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
    floor = min(floor, len(best))
    return BlockMinimum(best, choice, floor, floor, None, None)


def _preferred(function: Function, polarities: Sequence[Polarity]) -> tuple[list[bool], int]:
    """For each output the polarity that serves it best alone, and a bound over all polarities."""
    phases = phases_of(polarities)
    on, off = phase_function(function, phases)
    samples: list[Samples] = [{} for _ in polarities]
    sizes: list[dict[bool, int]] = [{} for _ in polarities]
    for bit, phase in enumerate(phases):
        cover = heuristic_cover(on.of_output(bit), off.of_output(bit), 1)
        sizes[phase.output][phase.complemented] = len(cover)
        samples[phase.output][bit] = sample_points(cover, on.of_output(bit))
    preferred = [min(size, key=lambda c: (size[c], c)) for size in sizes]
    alone = max((independent_bound([own], off) for own in samples), default=0)
    together = max(independent_bound(order, off) for order in (samples, samples[::-1]))
    return preferred, max(alone, together)


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
