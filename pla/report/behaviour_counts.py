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
        one = algebra.size(function.on.of_output(j))
        zero = algebra.size(function.off.of_output(j))
        sizes = [(s.reason, algebra.size(s.cubes.of_output(j))) for s in behaviour.dont_cares]
        reasons = tuple((reason, size) for reason, size in sizes if size)
        found.append(OutputCounts(one, zero, total - one - zero, total, reasons))
    return tuple(found)
