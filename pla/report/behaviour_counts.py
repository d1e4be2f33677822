"""How many input combinations ask an output for what."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.logic import algebra

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour

__all__ = ["OutputCounts", "count_outputs"]


@dataclass(frozen=True, slots=True)
class OutputCounts:
    """Numbers of input combinations.

    Attributes:
        one: Where the output must be 1.
        zero: Where it must be 0.
        free: Where it does not care.
        total: All.
        reasons: What `free` consists of.
    """

    one: int
    zero: int
    free: int
    total: int
    reasons: tuple[tuple[str, int], ...]


def count_outputs(behaviour: Behaviour) -> tuple[OutputCounts, ...]:
    """Exact numbers for each output in order."""
    function = behaviour.function
    total = 1 << function.n_inputs
    found = []
    for j in range(function.n_outputs):
        covers = [function.on.of_output(j), function.off.of_output(j)]
        covers += [source.cubes.of_output(j) for source in behaviour.dont_cares]
        # They part the input combinations, so the one with most cubes need not be counted.
        lengths = [len(cover) for cover in covers]
        longest = lengths.index(max(lengths))
        sizes = [0 if i == longest else algebra.size(cover) for i, cover in enumerate(covers)]
        sizes[longest] = total - sum(sizes)
        reasons = tuple(
            (source.reason, size)
            for source, size in zip(behaviour.dont_cares, sizes[2:], strict=True)
            if size
        )
        found.append(OutputCounts(sizes[0], sizes[1], sum(sizes[2:]), total, reasons))
    return tuple(found)
