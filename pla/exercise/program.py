"""As many exercised parts as it takes to tell every slip from the description."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.exercise.part import make_part
from pla.exercise.readings import differences, readings
from pla.exercise.slips import slips

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.device.model import Device
    from pla.exercise.part import Part
    from pla.exercise.slips import Slip

__all__ = ["Exercise", "Exercised", "Telling", "exercise"]

_IN_VAIN = 3
_VARIANTS = 4
_LARGE = 2_000


@dataclass(frozen=True, slots=True)
class Telling:
    """A slip that a part shows.

    Attributes:
        what: In words.
        where: Steps, from 0, and pins at which the readings differ.
    """

    what: str
    where: tuple[tuple[int, int], ...]


@dataclass(frozen=True, slots=True)
class Exercised:
    """A part, what its pins should show, and what it tells.

    Attributes:
        part: The part.
        expected: For each cell's pin a `pla.exercise.readings.Reading` a step.
        shown: Slips that show at it and at no part before it.
        open: Slips that show neither at it nor at a part before it.
    """

    part: Part
    expected: dict[int, str]
    shown: tuple[Telling, ...]
    open: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Exercise:
    """The parts in order, the most telling first.

    Attributes:
        device: What they are described as.
        tried: How many slips were tried.
        kinds: Of which kinds they are, in words.
        parts: The parts.
    """

    device: Device
    tried: int
    kinds: tuple[str, ...]
    parts: tuple[Exercised, ...]

    @property
    def told(self) -> int:
        """How many slips show at one of the parts."""
        return sum(len(part.shown) for part in self.parts)


def exercise(device: Device, most: int | None = None) -> Exercise:
    """Make parts until every slip that can show has shown.

    Args:
        device: A checked description.
        most: No more parts than that.
    """
    every = list(slips(device))
    left = every
    found: list[Exercised] = []
    number = vain = 0
    while (left or not found) and vain < _IN_VAIN and (most is None or len(found) < most):
        number += 1
        part, expected, shown = _best(device, number, left)
        if found and not shown:
            vain += 1
            continue
        vain = 0
        left = [slip for k, slip in enumerate(left) if k not in shown]
        tellings = tuple(shown.values())
        found.append(Exercised(part, expected, tellings, tuple(slip.what for slip in left)))
    kinds = tuple(dict.fromkeys(slip.kind for slip in every))
    return Exercise(device, len(every), kinds, tuple(found))


def _best(
    device: Device, number: int, left: Sequence[Slip]
) -> tuple[Part, dict[int, str], dict[int, Telling]]:
    """The variant of a part at which most slips show, by their place among `left`.

    A large device has one variant only.
    """
    links = device.terms * len(device.and_array.columns)
    found: tuple[Part, dict[int, str], dict[int, Telling]] | None = None
    for variant in range(_VARIANTS if links < _LARGE else 1):
        part = make_part(device, number, variant)
        expected = readings(device, part)
        shown = {}
        for place, slip in enumerate(left):
            where = differences(expected, readings(slip.device, part))
            if where:
                shown[place] = Telling(slip.what, tuple(where))
        if found is None or len(shown) > len(found[2]):
            found = part, expected, shown
        if len(shown) == len(left):
            break
    if found is None:  # pragma: no cover - there is one variant at least
        raise AssertionError
    return found
