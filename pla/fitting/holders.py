"""Devices of the catalogue that would hold a design."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.budgets import fits_on
from pla.fitting.minima import Minima
from pla.logic.effort import Effort

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.device.model import Device
    from pla.fitting.model import Fit, PolarityWish

__all__ = ["holders"]

HOLDER_EFFORT = 100_000.0


def holders(
    refused: Fit,
    devices: Iterable[Device],
    wish: PolarityWish,
    minima: Minima | None = None,
) -> tuple[Fit, ...]:
    """The fits of all devices that hold a design, in the order given.

    Args:
        refused: The design on a device that does not hold it.
        devices: What to try. Those that lack output pins are left out before anything is
            minimized for them.
        wish: Polarities that the user allows.
        minima: Minima of this design, to be used again and added to.
    """
    behaviour = refused.behaviour
    candidates = [d for d in devices if len(d.output_pins) >= len(behaviour.outputs)]
    known = (minima or Minima()).within(_effort)
    tried = fits_on(behaviour, candidates, wish, known)
    return tuple(found for found in tried if found.fits)


def _effort() -> Effort:
    return Effort(work=HOLDER_EFFORT, nodes=200)
