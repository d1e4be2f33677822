"""Devices of the catalogue that would hold a design."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.fit import fit
from pla.logic.effort import Effort

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.device.model import Device
    from pla.fitting.model import Fit, PolarityWish
    from pla.logic.minimize import Minimum
    from pla.logic.phases import Polarity

__all__ = ["holders"]

HOLDER_EFFORT = 100_000.0


def holders(behaviour: Behaviour, devices: Iterable[Device], wish: PolarityWish) -> tuple[Fit, ...]:
    """The fits of all devices that hold a design, in the order given.

    Devices that lack pins are left out before anything is minimized for them.
    """
    found = []
    for device in devices:
        if len(device.output_pins) < len(behaviour.outputs):
            continue
        tried = fit(behaviour, device, wish, Effort(work=HOLDER_EFFORT, nodes=200))
        if tried.fits:
            found.append(tried)
    return tuple(found)
