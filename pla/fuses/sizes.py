"""Whether a fuse file has the fuses and pins of a device."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.device.model import Device
    from pla.fuses.jesd3_model import FuseFile, RefusedFile

__all__ = ["SizeMatch", "devices_of_size", "match_size"]


@dataclass(frozen=True, slots=True)
class SizeMatch:
    """QF and QP of a fuse file held against a device.

    Attributes:
        device: The device.
        differences: What differs, in words.
        untold: What could not be compared since the file does not say it, in words.
    """

    device: Device
    differences: tuple[str, ...]
    untold: tuple[str, ...]

    @property
    def matches(self) -> bool | None:
        """``None`` where nothing differs, but not everything could be compared."""
        if self.differences:
            return False
        return None if self.untold else True


def match_size(file: FuseFile | RefusedFile, device: Device) -> SizeMatch:
    """Hold QF and QP against a device."""
    differences, untold = [], []
    for field, said, has, what in (
        ("QF", file.size, device.fuses, "fuses"),
        ("QP", file.pins, device.pins, "pins"),
    ):
        if said is None:
            untold.append(f"the file does not give {field}, and the device has {has} {what}")
        elif said != has:
            differences.append(f"{field} is {said}, but the device has {has} {what}")
    return SizeMatch(device, tuple(differences), tuple(untold))


def devices_of_size(
    file: FuseFile | RefusedFile, devices: Iterable[Device]
) -> tuple[str, ...] | None:
    """Names of the devices with as many fuses, and as many pins where the file says so.

    ``None`` if the file does not say how many fuses.
    """
    if file.size is None:
        return None
    return tuple(device.name for device in devices if not match_size(file, device).differences)
