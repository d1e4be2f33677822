"""What each output will really do where the design leaves it open."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

from pla.logic.cubes import Cover
from pla.logic.partition import partition

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.behaviour.model import Behaviour
    from pla.logic.cubes import Cube
    from pla.report.outcome import Outcome

__all__ = [
    "AtImpossible",
    "Level",
    "Settled",
    "Together",
    "asserted_on",
    "at_impossible",
    "audit",
    "open_together",
]

_MOST_TOGETHER = 64

Level: TypeAlias = "int | None"
"""An asserted value, 0 or 1; ``None`` while the pin is at high impedance."""


@dataclass(frozen=True, slots=True)
class Settled:
    """Input combinations that the design leaves open, and what an output does there.

    Attributes:
        output: Index of the output.
        reason: Why it is open (see `pla.behaviour.model.DontCareSource`); never ``disabled``,
            since a value that is not shown is none.
        value: Asserted value that the output really has, or high impedance.
        cubes: The combinations, as cubes that have none in common; not empty.
    """

    output: int
    reason: str
    value: Level
    cubes: Cover

    @property
    def size(self) -> int:
        """How many combinations."""
        return _size(self.cubes)


@dataclass(frozen=True, slots=True)
class Together:
    """Open inputs at which no output changes.

    Attributes:
        cube: The inputs.
        values: Asserted value of each output, or high impedance.
    """

    cube: Cube
    values: tuple[Level, ...]


@dataclass(frozen=True, slots=True)
class AtImpossible:
    """Impossible inputs, and whether an output drives its pin there.

    Attributes:
        output: Index of the output.
        drives: Whether it drives.
        cubes: The combinations, as cubes that have none in common; not empty.
    """

    output: int
    drives: bool
    cubes: Cover

    @property
    def size(self) -> int:
        """How many combinations."""
        return _size(self.cubes)


def audit(behaviour: Behaviour, outcomes: Sequence[Outcome]) -> tuple[Settled, ...]:
    """Every open combination of every output exactly once, by output, source and value.

    Args:
        behaviour: The design.
        outcomes: What each of its outputs really does.
    """
    return tuple(_settled(behaviour, outcomes))


def open_together(behaviour: Behaviour, outcomes: Sequence[Outcome]) -> tuple[Together, ...] | None:
    """What all outputs do where inputs are impossible or any output is open.

    Inputs at which outputs are merely switched off do not count as open.

    Args:
        behaviour: The design.
        outcomes: What each of its outputs really does.

    Returns:
        Every such combination exactly once, with demanded values as well; ``None`` where that
        takes more than 64 cubes.
    """
    sources = (s.cubes for s in behaviour.dont_cares if s.reason != "disabled")
    open_ = Cover.joined(len(behaviour.inputs), [behaviour.never, *sources])
    pieces: list[tuple[Cover, tuple[Level, ...]]] = [(open_, ())]
    for outcome in outcomes:
        pieces = [
            (part, (*values, value))
            for cubes, values in pieces
            for value, part in _levels_on(cubes, outcome)
        ]
        if sum(len(cubes) for cubes, _ in pieces) > _MOST_TOGETHER:
            return None
    found = [Together(cube, values) for cubes, values in pieces for cube in cubes]
    n = len(behaviour.inputs)
    return tuple(sorted(found, key=lambda together: _order(together.cube, n)))


def at_impossible(behaviour: Behaviour, outcomes: Sequence[Outcome]) -> tuple[AtImpossible, ...]:
    """For every output that can be switched off, every impossible combination exactly once.

    Args:
        behaviour: The design.
        outcomes: What each of its outputs really does.
    """
    return tuple(
        AtImpossible(j, drives, _ordered(part))
        for j, outcome in enumerate(outcomes)
        if outcome.drives is not None
        for drives, part in zip(
            (True, False), partition(behaviour.never, outcome.drives), strict=True
        )
        if len(part)
    )


def asserted_on(cubes: Cover, sum_: Cover, *, complemented: bool) -> Iterator[tuple[int, Cover]]:
    """The combinations at which an output is 0, then those at which it is 1, as disjoint cubes.

    Args:
        cubes: The combinations that are asked about; cubes may overlap.
        sum_: The terms of the output's sum.
        complemented: The sum is the complement of the asserted function.
    """
    inside, outside = partition(cubes, sum_)
    for value, held in enumerate((inside, outside) if complemented else (outside, inside)):
        if len(held):
            yield value, _ordered(held)


def _levels_on(cubes: Cover, outcome: Outcome) -> Iterator[tuple[Level, Cover]]:
    """As `asserted_on`, and last the combinations at which the pin is at high impedance."""
    if outcome.drives is None:
        yield from asserted_on(cubes, outcome.sum, complemented=outcome.complemented)
        return
    driven, floating = partition(cubes, outcome.drives)
    yield from asserted_on(driven, outcome.sum, complemented=outcome.complemented)
    if len(floating):
        yield None, _ordered(floating)


def _settled(behaviour: Behaviour, outcomes: Sequence[Outcome]) -> Iterator[Settled]:
    for j, outcome in enumerate(outcomes):
        for source in behaviour.dont_cares:
            if source.reason == "disabled":
                continue
            for value, cubes in _levels_on(source.cubes.of_output(j), outcome):
                yield Settled(j, source.reason, value, cubes)


def _size(disjoint: Cover) -> int:
    return sum(1 << (disjoint.n_inputs - cube.literals) for cube in disjoint)


def _ordered(cover: Cover) -> Cover:
    """The same cubes in order of their lowest combination."""
    n = cover.n_inputs
    cubes: list[Cube] = sorted(cover, key=lambda cube: _order(cube, n))
    return Cover.of(n, cubes)


def _order(cube: Cube, n_inputs: int) -> tuple[str, int]:
    """Lowest combination first, the first input most significant."""
    return cube.text(n_inputs).replace("-", "0"), cube.literals
