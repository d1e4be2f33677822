"""Outputs with the polarities that they may be realised in.

A *phase* of an output is the function that its sum of products realises: the asserted function or
its complement. The minimizer treats every phase that is allowed as an output of its own, of which
one per output is wanted.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.logic.cubes import Cover

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.function import Function

__all__ = ["Phase", "Polarity", "phase_function", "phases_of"]


@dataclass(frozen=True, slots=True)
class Polarity:
    """Which polarities an output may be realised in; at least one."""

    true: bool = True
    complement: bool = True

    def __post_init__(self) -> None:
        if not (self.true or self.complement):
            raise ValueError("an output needs a polarity")


@dataclass(frozen=True, slots=True)
class Phase:
    """One output in one polarity."""

    output: int
    complemented: bool


def phases_of(polarities: Sequence[Polarity]) -> tuple[Phase, ...]:
    """The allowed phases, all true ones first, each in order of the outputs."""
    true = [Phase(j, False) for j, p in enumerate(polarities) if p.true]
    return tuple(true + [Phase(j, True) for j, p in enumerate(polarities) if p.complement])


def phase_function(function: Function, phases: Sequence[Phase]) -> tuple[Cover, Cover]:
    """(on, off) covers whose output masks speak of phases instead of outputs."""
    n = function.n_inputs
    on: list[Cover] = []
    off: list[Cover] = []
    for bit, phase in enumerate(phases):
        wanted, unwanted = (function.on, function.off)[:: -1 if phase.complemented else 1]
        on.append(wanted.of_output(phase.output).feeding(1 << bit))
        off.append(unwanted.of_output(phase.output).feeding(1 << bit))
    return Cover.joined(n, on).merged(), Cover.joined(n, off).merged()
