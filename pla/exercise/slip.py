"""Something that may be wrong in a description."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pla.device.model import Device

__all__ = ["Slip"]


@dataclass(frozen=True, slots=True)
class Slip:
    """Something that may be wrong in a description.

    Attributes:
        what: In words.
        device: What the part would really be then.
        kind: Of which kind it is, in words.
    """

    what: str
    device: Device
    kind: str = ""
