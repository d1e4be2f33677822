"""Whether a fuse file has the fuses and pins of a device, and is made for its device-wide mode."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.fuses.signature import read_signature

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.device.model import Device
    from pla.fuses.jesd3_model import FuseFile, RefusedFile
    from pla.fuses.signature import SignatureText

__all__ = ["CatalogueMatch", "SizeMatch", "match_catalogue", "match_size"]


@dataclass(frozen=True, slots=True)
class SizeMatch:
    """A fuse file held against a device.

    Attributes:
        device: The device.
        differences: What differs of QF and QP, in words.
        untold: What could not be compared since the file does not say it, in words.
        other_mode: The fuses that select another device-wide mode, in words.
        signature: What the signature fuses hold; ``None`` where the device has none, or the fuses
            are not known to be its own.
    """

    device: Device
    differences: tuple[str, ...]
    untold: tuple[str, ...]
    other_mode: tuple[str, ...] = ()
    signature: SignatureText | None = None

    @property
    def matches(self) -> bool | None:
        """``None`` where nothing differs, but not everything could be compared."""
        if self.differences or self.other_mode:
            return False
        return None if self.untold else True


@dataclass(frozen=True, slots=True)
class CatalogueMatch:
    """The devices that a fuse file may be for.

    Attributes:
        devices: Those with as many fuses, and as many pins where the file says so, whose mode
            fuses are as the file has them.
        other_modes: Those of the right size that are set to another device-wide mode.
    """

    devices: tuple[Device, ...]
    other_modes: tuple[SizeMatch, ...]


def match_size(file: FuseFile | RefusedFile, device: Device) -> SizeMatch:
    """Hold QF, QP and the fuses that select a device-wide mode against a device."""
    differences, untold = [], []
    for field, said, has, what in (
        ("QF", file.size, device.fuses, "fuses"),
        ("QP", file.pins, device.pins, "pins"),
    ):
        if said is None:
            untold.append(f"the file does not give {field}, and the device has {has} {what}")
        elif said != has:
            differences.append(f"{field} is {said}, but the device has {has} {what}")
    fuses = file.fuses
    if fuses is None or len(fuses) != device.fuses:
        if device.mode_fuses and file.size == device.fuses:
            untold.append("the states of the fuses that select the mode are not known")
        return SizeMatch(device, tuple(differences), tuple(untold))
    other_mode = tuple(
        f"fuse {fuse} is {fuses[fuse]}, not {state}"
        for fuse, state in device.mode_fuses
        if fuses[fuse] != state
    )
    signature = read_signature(device, fuses)
    return SizeMatch(device, tuple(differences), tuple(untold), other_mode, signature)


def match_catalogue(
    file: FuseFile | RefusedFile, devices: Iterable[Device]
) -> CatalogueMatch | None:
    """The devices that a fuse file may be for; ``None`` if it does not say how many fuses."""
    if file.size is None:
        return None
    sized = [m for m in (match_size(file, device) for device in devices) if not m.differences]
    return CatalogueMatch(
        tuple(match.device for match in sized if not match.other_mode),
        tuple(match for match in sized if match.other_mode),
    )
