"""What each output will really do where the design leaves it open."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.logic.cubes import Cover
from pla.logic.partition import partition

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.behaviour.model import Behaviour
    from pla.logic.cubes import Cube
    from pla.logic.minimize import Minimum

__all__ = ["Settled", "Together", "asserted_on", "audit", "open_together"]

_MOST_TOGETHER = 64


@dataclass(frozen=True, slots=True)
class Settled:
    """Input combinations that the design leaves open, and what an output does there.

    Attributes:
        output: Index of the output.
        reason: Why it is open (see `pla.behaviour.model.DontCareSource`).
        value: Asserted value that the output really has.
        cubes: The combinations, as cubes that have none in common; not empty.
    """

    output: int
    reason: str
    value: int
    cubes: Cover

    @property
    def size(self) -> int:
        """How many combinations."""
        return sum(1 << (self.cubes.n_inputs - cube.literals) for cube in self.cubes)


@dataclass(frozen=True, slots=True)
class Together:
    """Open inputs at which no output changes.

    Attributes:
        cube: The inputs.
        values: Asserted value of each output.
    """

    cube: Cube
    values: tuple[int, ...]


def audit(behaviour: Behaviour, minimum: Minimum) -> tuple[Settled, ...]:
    """Every open combination of every output exactly once, by output, source and value."""
    return tuple(_settled(behaviour, minimum))


def open_together(behaviour: Behaviour, minimum: Minimum) -> tuple[Together, ...] | None:
    """What all outputs do where inputs are impossible or any output is open.

    Returns:
        Every such combination exactly once, with demanded values as well; ``None`` where that
        takes more than 64 cubes.
    """
    open_ = Cover.joined(
        len(behaviour.inputs), [behaviour.never, *(s.cubes for s in behaviour.dont_cares)]
    )
    sums = [minimum.cover.of_output(j) for j in range(len(behaviour.outputs))]
    pieces: list[tuple[Cover, tuple[int, ...]]] = [(open_, ())]
    for sum_, complemented in zip(sums, minimum.complemented, strict=True):
        pieces = [
            (half, (*values, value))
            for cubes, values in pieces
            for value, half in asserted_on(cubes, sum_, complemented=complemented)
        ]
        if sum(len(cubes) for cubes, _ in pieces) > _MOST_TOGETHER:
            return None
    found = [Together(cube, values) for cubes, values in pieces for cube in cubes]
    n = len(behaviour.inputs)
    return tuple(sorted(found, key=lambda together: _order(together.cube, n)))


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


def _settled(behaviour: Behaviour, minimum: Minimum) -> Iterator[Settled]:
    for j, complemented in enumerate(minimum.complemented):
        sum_ = minimum.cover.of_output(j)
        for source in behaviour.dont_cares:
            concerned = source.cubes.of_output(j)
            for value, cubes in asserted_on(concerned, sum_, complemented=complemented):
                yield Settled(j, source.reason, value, cubes)


def _ordered(cover: Cover) -> Cover:
    """The same cubes in order of their lowest combination."""
    n = cover.n_inputs
    cubes: list[Cube] = sorted(cover, key=lambda cube: _order(cube, n))
    return Cover.of(n, cubes)


def _order(cube: Cube, n_inputs: int) -> tuple[str, int]:
    """Lowest combination first, the first input most significant."""
    return cube.text(n_inputs).replace("-", "0"), cube.literals
