"""The text that a device's signature fuses hold."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.model import Device, Signature
    from pla.fuses.fusemap import FuseMap

__all__ = ["SignatureText", "encode_signature", "read_signature"]


@dataclass(frozen=True, slots=True)
class SignatureText:
    """What the signature fuses say.

    Attributes:
        data: Every byte, padding included.
        padding: The byte that a blank part reads.
    """

    data: bytes
    padding: int

    @property
    def text(self) -> str | None:
        """The text before the padding, ``""`` for a blank one; ``None`` if it is not ASCII text."""
        said = self.data.rstrip(bytes([self.padding]))
        if any(not 0x20 <= byte < 0x7F for byte in said):
            return None
        return said.decode("ascii")


def encode_signature(device: Device, text: str) -> Iterator[tuple[int, int]]:
    """The state of every signature fuse that the text reaches; those behind it stay blank.

    Raises:
        ValueError: If the device has no signature fuses, or too few, or the text is not printable
            ASCII.
    """
    signature = device.signature
    if signature is None:
        if text:
            raise ValueError(f"{device.name} has no signature fuses")
        return
    if len(text) > signature.length:
        raise ValueError(f"{len(text)} characters for a signature of {signature.length}")
    if not (text.isascii() and text.isprintable()):
        raise ValueError(f"{text!r} is not printable ASCII")
    for place, byte in enumerate(text.encode("ascii")):
        for fuse, weight in zip(_fuses(signature, place), _weights(signature), strict=True):
            yield fuse, signature.ones if byte & weight else 1 - signature.ones


def read_signature(device: Device, fuses: FuseMap) -> SignatureText | None:
    """What the signature fuses hold; ``None`` if the device has none."""
    signature = device.signature
    if signature is None:
        return None
    weights = _weights(signature)
    data = bytes(
        sum(
            weight
            for fuse, weight in zip(_fuses(signature, place), weights, strict=True)
            if fuses[fuse] == signature.ones
        )
        for place in range(signature.length)
    )
    return SignatureText(data, 0xFF if device.links.blank == signature.ones else 0)


def _fuses(signature: Signature, place: int) -> range:
    first = signature.first_fuse + 8 * place
    return range(first, first + 8)


def _weights(signature: Signature) -> tuple[int, ...]:
    """The worth of each fuse of a byte, in order of their numbers."""
    rising = tuple(1 << bit for bit in range(8))
    return rising if signature.order == "least significant bit first" else rising[::-1]
