"""An incompletely specified multi-output function, as cubes."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from pla.logic import algebra
from pla.logic.cubes import Cover

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["Function"]


@dataclass(frozen=True)
class Function:
    """Where each output must be 1 and where it must be 0; everywhere else it does not care.

    Attributes:
        n_inputs: At most 64.
        n_outputs: At most 64.
        on: Input combinations where the outputs of each cube's mask are 1.
        off: The same for 0. For each output, `on` and `off` have no combination in common.
    """

    n_inputs: int
    n_outputs: int
    on: Cover
    off: Cover

    @classmethod
    def of_outputs(cls, n_inputs: int, sets: Sequence[tuple[Cover, Cover]]) -> Function:
        """From one single-output (on, off) pair for each output in order."""
        on = Cover.joined(n_inputs, (pair[0].feeding(1 << j) for j, pair in enumerate(sets)))
        off = Cover.joined(n_inputs, (pair[1].feeding(1 << j) for j, pair in enumerate(sets)))
        return cls(n_inputs, len(sets), on.merged(), off.merged())

    @cached_property
    def dont_care(self) -> tuple[Cover, ...]:
        """For each output the input combinations that are in neither set."""
        return tuple(
            algebra.complement(self.on.of_output(j) + self.off.of_output(j))
            for j in range(self.n_outputs)
        )

    def conflict(self) -> tuple[int, int, int] | None:
        """(output, index of an on cube, index of an off cube) that contradict, or ``None``.

        The indexes count within ``on.of_output(output)`` and ``off.of_output(output)``.
        """
        for j in range(self.n_outputs):
            pair = algebra.find_common(self.on.of_output(j), self.off.of_output(j))
            if pair is not None:
                return (j, *pair)
        return None
