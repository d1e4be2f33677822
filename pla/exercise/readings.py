"""What is measured at the pins of an exercised part."""

from __future__ import annotations

from typing import TYPE_CHECKING, Literal

from pla.exercise.words import Words
from pla.fuses.evaluate import Outside, evaluate
from pla.fuses.recover import recover

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.device.model import Device
    from pla.exercise.part import Part, Step
    from pla.exercise.words import Word
    from pla.fuses.evaluate import Evaluated
    from pla.fuses.recover import Realised

__all__ = ["Reading", "differences", "readings", "worth"]

Reading = Literal["H", "L", "Z", "?", "-"]
"""High, low, high impedance, not known; ``-`` where the pin is set from outside."""


def readings(device: Device, part: Part) -> dict[int, str]:
    """For each cell's pin one `Reading` a step, if the part really is this device.

    Raises:
        ValueError: If the device has another number of fuses.
    """
    _, found = worth(device, part)
    shown: dict[int, str] = {}
    for pin in sorted(device.cell_of_pin):
        (on, off), (high, low) = found.driven[pin], found.shown[pin]
        shown[pin] = "".join(
            "-" if pin in step.levels
            else "Z" if off >> k & 1
            else "H" if (on & high) >> k & 1
            else "L" if (on & low) >> k & 1
            else "?"
            for k, step in enumerate(part.steps)
        )  # fmt: skip
    return shown


def worth(device: Device, part: Part) -> tuple[Realised, Evaluated[Word]]:
    """The array that the part is, and what each of its sums and pins is worth at each step."""
    realised = recover(device, part.fuses)
    pins = sorted({pin for step in part.steps for pin in step.levels})
    outside = {pin: Outside(_given(part.steps, pin), "yields") for pin in pins}
    return realised, evaluate(realised, Words(len(part.steps)), outside)


def differences(expected: dict[int, str], measured: dict[int, str]) -> list[tuple[int, int]]:
    """Steps and pins, from 0 and by number, at which what is measured is surely not as expected."""
    return [
        (step, pin)
        for pin, own in expected.items()
        for step, (one, other) in enumerate(zip(own, measured.get(pin, ""), strict=False))
        if one != other and one in "HLZ" and other in "HLZ"
    ]


def _given(steps: Sequence[Step], pin: int) -> Word:
    high = low = 0
    for k, step in enumerate(steps):
        level = step.levels.get(pin)
        high |= (level is True) << k
        low |= (level is False) << k
    return high, low
