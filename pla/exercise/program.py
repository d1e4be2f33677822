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

__all__ = ["Exercise", "Exercised", "exercise"]

_IN_VAIN = 3
_VARIANTS = 4
_LARGE = 2_000


@dataclass(frozen=True, slots=True)
class Exercised:
    """A part, what its pins should show, and what it tells.

    Attributes:
        part: The part.
        expected: For each cell's pin a `pla.exercise.readings.Reading` a step.
        told: How many slips show at it and at no part before it.
        open: Slips that show neither at it nor at a part before it.
    """

    part: Part
    expected: dict[int, str]
    told: int
    open: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Exercise:
    """The parts in order, the most telling first.

    Attributes:
        device: What they are described as.
        tried: How many slips were tried.
        parts: The parts.
    """

    device: Device
    tried: int
    parts: tuple[Exercised, ...]


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
        part, expected, hidden = _best(device, number, left)
        if found and len(hidden) == len(left):
            vain += 1
            continue
        vain = 0
        told, left = len(left) - len(hidden), hidden
        found.append(Exercised(part, expected, told, tuple(s.what for s in left)))
    return Exercise(device, len(every), tuple(found))


def _best(
    device: Device, number: int, left: Sequence[Slip]
) -> tuple[Part, dict[int, str], list[Slip]]:
    """The variant of a part at which most slips show; a large device has one only."""
    links = device.terms * len(device.and_array.columns)
    found: tuple[Part, dict[int, str], list[Slip]] | None = None
    for variant in range(_VARIANTS if links < _LARGE else 1):
        part = make_part(device, number, variant)
        expected = readings(device, part)
        hidden = [s for s in left if not differences(expected, readings(s.device, part))]
        if found is None or len(hidden) < len(found[2]):
            found = part, expected, hidden
        if not hidden:
            break
    if found is None:  # pragma: no cover - there is one variant at least
        raise AssertionError
    return found
