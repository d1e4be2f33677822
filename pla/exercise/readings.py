"""What is measured at the pins of an exercised part."""

from __future__ import annotations

from typing import TYPE_CHECKING, Literal

import numpy as np

from pla.fuses.evaluate import Outside
from pla.fuses.recover import recover
from pla.fuses.simulate import Signal, simulate

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.device.model import Device
    from pla.exercise.part import Part, Step

__all__ = ["Reading", "differences", "readings"]

Reading = Literal["H", "L", "Z", "?", "-"]
"""High, low, high impedance, not known; ``-`` where the pin is set from outside."""


def readings(device: Device, part: Part) -> dict[int, str]:
    """For each cell's pin one `Reading` a step, if the part really is this device.

    Raises:
        ValueError: If the device has another number of fuses.
    """
    realised = recover(device, part.fuses)
    size = -(-len(part.steps) // 8)
    pins = sorted({pin for step in part.steps for pin in step.levels})
    outside = {pin: Outside(_given(part.steps, pin), "yields") for pin in pins}
    found = simulate(realised, outside, size)
    shown: dict[int, str] = {}
    for pin in sorted(device.cell_of_pin):
        driven, level = found.driven[pin], found.shown[pin]
        on, off, high, low = (
            np.unpackbits(bits, bitorder="little")[: len(part.steps)].astype(bool)
            for bits in (driven.high, driven.low, level.high, level.low)
        )
        shown[pin] = "".join(
            "-" if pin in step.levels
            else "Z" if off[k]
            else "H" if on[k] and high[k]
            else "L" if on[k] and low[k]
            else "?"
            for k, step in enumerate(part.steps)
        )  # fmt: skip
    return shown


def differences(expected: dict[int, str], measured: dict[int, str]) -> list[tuple[int, int]]:
    """Steps and pins, from 0 and by number, at which what is measured is surely not as expected."""
    return [
        (step, pin)
        for pin, own in expected.items()
        for step, (one, other) in enumerate(zip(own, measured.get(pin, ""), strict=False))
        if one != other and one in "HLZ" and other in "HLZ"
    ]


def _given(steps: Sequence[Step], pin: int) -> Signal:
    high = np.array([step.levels.get(pin) is True for step in steps], dtype=bool)
    low = np.array([step.levels.get(pin) is False for step in steps], dtype=bool)
    return Signal(np.packbits(high, bitorder="little"), np.packbits(low, bitorder="little"))
