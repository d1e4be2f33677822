"""What the outputs of a laid-out design really do, told over the inputs of the design alone."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.logic import algebra
from pla.logic.cubes import Cover, Cube

if TYPE_CHECKING:
    from pla.device.model import Source
    from pla.fitting.model import Plan
    from pla.logic.minimize import Minimum

__all__ = ["Outcome", "outcomes_of_minimum", "outcomes_of_plan"]


@dataclass(frozen=True, slots=True)
class Outcome:
    """What one output does at every input combination of the design.

    Attributes:
        sum: Where its sum is 1.
        complemented: The sum is the complement of the asserted function.
        drives: Where it drives its pin; ``None`` for everywhere.
    """

    sum: Cover
    complemented: bool
    drives: Cover | None = None


def outcomes_of_minimum(minimum: Minimum) -> tuple[Outcome, ...]:
    """For each output in order, where no signal is fed back and no output switched off."""
    return tuple(
        Outcome(minimum.cover.of_output(j), complemented)
        for j, complemented in enumerate(minimum.complemented)
    )


def outcomes_of_plan(plan: Plan) -> tuple[Outcome, ...]:
    """For each output of the design in order; fed-back signals are followed to the inputs."""
    composed = _Composed(plan)
    return tuple(
        Outcome(
            composed.over_inputs(plan.minimum.cover.of_output(placed.index)),
            placed.complemented,
            None
            if placed.enable is None
            else composed.over_inputs(Cover.of(len(plan.inputs), [placed.enable.cube])),
        )
        for placed in plan.outputs[: len(plan.design.outputs)]
    )


class _Composed:
    """Covers over inputs and fed-back signals, rewritten over the inputs of the design."""

    def __init__(self, plan: Plan) -> None:
        self._plan = plan
        self._n = len(plan.design.inputs)
        self._asserted: dict[Source, tuple[Cover, Cover]] = {}
        self._output_in = {placed.cell.key: placed for placed in plan.outputs}

    def over_inputs(self, cover: Cover) -> Cover:
        if len(self._plan.inputs) == self._n:
            return cover.feeding(1)
        return algebra.union(self._n, *map(self._product, cover))

    def _product(self, cube: Cube) -> Cover:
        own = (1 << self._n) - 1
        found = Cover.of(self._n, [Cube(cube.ones & own, cube.zeros & own)])
        for placed in self._plan.inputs[self._n :]:
            bit = 1 << placed.index
            if (cube.ones | cube.zeros) & bit and placed.fed_by is not None:
                one, zero = self._fed(placed.fed_by)
                found = algebra.intersection(found, one if cube.ones & bit else zero)
        return found

    def _fed(self, key: Source) -> tuple[Cover, Cover]:
        """Where the signal in a cell is asserted, and where it is not."""
        if key not in self._asserted:
            placed = self._output_in[key]
            sum_ = self.over_inputs(self._plan.minimum.cover.of_output(placed.index))
            rest = algebra.complement(sum_)
            self._asserted[key] = (rest, sum_) if placed.complemented else (sum_, rest)
        return self._asserted[key]
