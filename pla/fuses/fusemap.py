"""The state of every link of a device."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

__all__ = ["FuseMap"]


@dataclass(frozen=True, slots=True)
class FuseMap:
    """One state for each fuse: 0 closed, 1 open.

    Attributes:
        states: One byte for each fuse, 0 or 1; fuse 0 first.

    Raises:
        ValueError: For any other state.
    """

    states: bytes

    def __post_init__(self) -> None:
        if self.states.translate(None, b"\0\1"):
            raise ValueError("a fuse is 0 or 1")

    @classmethod
    def filled(cls, size: int, state: int) -> FuseMap:
        return cls(bytes([state]) * size)

    def __len__(self) -> int:
        return len(self.states)

    def __getitem__(self, fuse: int) -> int:
        return self.states[fuse]

    def changed(self, states: Mapping[int, int] | Iterable[tuple[int, int]]) -> FuseMap:
        """A copy with some fuses in other states.

        Raises:
            IndexError: For a fuse that the device does not have.
        """
        copy = bytearray(self.states)
        for fuse, state in dict(states).items():
            if not 0 <= fuse < len(copy):
                raise IndexError(f"fuse {fuse} of {len(copy)}")
            copy[fuse] = state
        return FuseMap(bytes(copy))

    def text(self, first: int = 0, size: int | None = None) -> str:
        """The states of `size` fuses from `first`, by default to the last, as ``0`` and ``1``."""
        end = len(self.states) if size is None else first + size
        return self.states[first:end].translate(bytes.maketrans(b"\0\1", b"01")).decode("ascii")

    @property
    def checksum(self) -> int:
        """JESD3 fuse checksum: eight fuses to a byte, fuse 0 in bit 0, summed modulo 2^16."""
        packed = np.packbits(np.frombuffer(self.states, dtype=np.uint8), bitorder="little")
        return int(packed.sum(dtype=np.uint64)) & 0xFFFF

    @property
    def opened(self) -> int:
        """How many links are open."""
        return self.states.count(1)

    @property
    def closed(self) -> int:
        """How many links are closed."""
        return self.states.count(0)
