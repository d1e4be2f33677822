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


def holders(refused: Fit, devices: Iterable[Device], wish: PolarityWish) -> tuple[Fit, ...]:
    """The fits of all devices that hold a design, in the order given.

    Args:
        refused: The design on a device that does not hold it.
        devices: What to try. Those that lack output pins are left out before anything is
            minimized for them.
        wish: Polarities that the user allows.

    Raises:
        InputError: If a place in the design names a pin that cannot carry its signal.
    """
    behaviour = refused.behaviour
    minima: dict[tuple[Polarity, ...], Minimum] = {}
    if refused.minimum is not None:
        key = tuple(p for p in refused.polarities if p is not None)
        minima[key] = refused.minimum
    found = []
    for device in devices:
        if len(device.output_pins) < len(behaviour.outputs):
            continue
        tried = fit(behaviour, device, wish, Effort(work=HOLDER_EFFORT, nodes=200), minima)
        if tried.fits:
            found.append(tried)
    return tuple(found)
