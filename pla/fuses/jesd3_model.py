"""What a fuse file says, free of how its bytes are laid out.

The format is the open standard JEDEC JESD3-C (earlier: JEDEC Standard No. 3-A), "Standard Data
Transfer Format Between Data Preparation System and Programmable Logic Device Programmer".
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.errors import Diagnostic

if TYPE_CHECKING:
    from collections.abc import Mapping

    from pla.fuses.fusemap import FuseMap

__all__ = [
    "CONDITIONS",
    "IDENTIFIERS",
    "MAX_BYTES",
    "MAX_FIELDS",
    "MAX_FUSES",
    "Field",
    "Frame",
    "FuseDiagnostic",
    "FuseFile",
    "FuseFileContents",
    "RefusedFile",
    "Vector",
]

MAX_FUSES = 16_000_000
MAX_BYTES = 64 * 2**20
MAX_FIELDS = 1_000_000

IDENTIFIERS: Mapping[str, str] = {
    "": "design specification",
    "N": "note",
    "QF": "fuses in the device",
    "QP": "pins or test conditions in a vector",
    "QV": "largest number of vectors",
    "F": "default fuse state",
    "L": "fuse list",
    "K": "fuse list in hexadecimal",
    "C": "fuse checksum",
    "G": "security fuse",
    "E": "electrical data",
    "U": "user data",
    "UA": "user data in ASCII",
    "UH": "user data in hexadecimal",
    "J": "device identification",
    "A": "access time",
    "X": "default test condition",
    "V": "test vector",
    "P": "pin sequence",
    "S": "signature test: starting vector",
    "R": "signature test: resulting vector",
    "T": "signature test: cycles",
    "D": "obsolete",
}

CONDITIONS: Mapping[str, str] = {
    "0": "drive low",
    "1": "drive high",
    **dict.fromkeys("23456789", "drive to a super voltage"),
    "B": "buried preload",
    "C": "clock low-high-low",
    "D": "fast low transition",
    "F": "float",
    "H": "expect high",
    "K": "clock high-low-high",
    "L": "expect low",
    "N": "power pin or pin not tested",
    "P": "preload",
    "U": "fast high transition",
    "X": "not tested, default level",
    "Z": "expect high impedance",
}


@dataclass(frozen=True, slots=True)
class FuseDiagnostic(Diagnostic):
    """A diagnostic that also knows its place as a programmer's hex view shows it.

    Attributes:
        offset: Byte in the file, from 0.
        field: The field concerned, such as ``L0120`` or ``QF``; ``None`` outside all fields.
    """

    offset: int = 0
    field: str | None = None


@dataclass(frozen=True, slots=True)
class Field:
    """One field of a transmission.

    Attributes:
        identifier: A key of `IDENTIFIERS`, or another letter (unknown); ``""`` for the design
            specification and for a field that holds nothing.
        offset: Byte of the identifier in the file, from 0.
        body: What follows the identifier, without the ``*``; parity bits are removed.
    """

    identifier: str
    offset: int
    body: bytes

    @property
    def body_offset(self) -> int:
        return self.offset + len(self.identifier)

    @property
    def text(self) -> str:
        """The body as text: lines without the white space around them, joined by line feeds."""
        try:
            text = self.body.decode("utf-8")
        except UnicodeDecodeError:
            text = self.body.decode("latin-1")
        lines = text.replace("\r\n", "\n").replace("\r", "\n").split("\n")
        return "\n".join(line for line in (raw.strip() for raw in lines) if line)


@dataclass(frozen=True, slots=True)
class Frame:
    """A file cut into transmission and surroundings; nothing is interpreted yet.

    Attributes:
        data: The whole file; parity bits are removed if every byte had one.
        raw: The whole file as it came.
        parity: ``even``, ``odd`` or ``mark`` where every byte carries a parity bit.
        start: Offset of STX, or 0.
        has_start: Whether STX is there.
        end: Offset of ETX, or of the first byte past the last field.
        has_end: Whether ETX is there.
        sum_offset: Where the four digits stand.
        sum_digits: The four digits as written; ``None`` if they are missing.
        after: Offset of what follows the four digits.
        fields: In order; the design specification first.
        unclosed: Offset of text after the last ``*``, which nothing closes.
    """

    data: bytes
    raw: bytes
    parity: str | None
    start: int
    has_start: bool
    end: int
    has_end: bool
    sum_offset: int
    sum_digits: str | None
    after: int
    fields: tuple[Field, ...]
    unclosed: int | None


@dataclass(frozen=True, slots=True)
class Vector:
    """A test vector: one condition for each position, in the order in which it is written."""

    number: int
    conditions: str


@dataclass(frozen=True, slots=True, kw_only=True)
class FuseFileContents:
    """What a fuse file says beside its fuses, whether or not it can be relied on.

    Attributes:
        name: Of the file.
        design: Design specification.
        notes: One for each ``N`` field.
        pins: QP: positions of a vector.
        vector_limit: QV: largest number of vectors.
        default: State of the fuses that no list names.
        given_checksum: Fuse checksum as written; the true one is `FuseMap.checksum`.
        given_sum: Transmission sum as written; 0 is a placeholder for one not computed.
        computed_sum: Transmission sum of the bytes that arrived (a missing STX or ETX counted).
        security: State that the security fuse shall get.
        default_condition: Level of the pins that a vector does not test.
        pin_order: Pin of each position of a vector, where the file has a pin sequence.
        vectors: In order of their number.
        frame: The bytes, cut up.
        diagnostics: Warnings: departures from the standard over which the reader stumbled.
    """

    name: str
    design: str
    notes: tuple[str, ...]
    pins: int | None
    vector_limit: int | None
    default: int | None
    given_checksum: int | None
    given_sum: int | None
    computed_sum: int
    security: int | None
    default_condition: int | None
    pin_order: tuple[int, ...] | None
    vectors: tuple[Vector, ...]
    frame: Frame
    diagnostics: tuple[FuseDiagnostic, ...]

    @property
    def fields(self) -> tuple[Field, ...]:
        return self.frame.fields


@dataclass(frozen=True, slots=True, kw_only=True)
class FuseFile(FuseFileContents):
    """A fuse file that was read and found to be consistent.

    Attributes:
        fuses: State of every fuse; its length is QF.
    """

    fuses: FuseMap

    @property
    def size(self) -> int:
        """QF: fuses in the device."""
        return len(self.fuses)

    def at_pins(self, vector: Vector) -> dict[int, str]:
        """The condition at each pin: position i is pin i unless a pin sequence says otherwise."""
        order = self.pin_order or range(1, len(vector.conditions) + 1)
        return dict(zip(order, vector.conditions, strict=True))


@dataclass(frozen=True, slots=True, kw_only=True)
class RefusedFile(FuseFileContents):
    """A fuse file that cannot be relied on, as far as it could be read.

    Good for looking at, never for use.

    Attributes:
        size: QF: fuses in the device; ``None`` if the file does not say.
        fuses: State of every fuse as the lists have it; ``None`` if the lists themselves are
            damaged.
        errors: Why it is refused, in order of place.
    """

    size: int | None
    fuses: FuseMap | None
    errors: tuple[FuseDiagnostic, ...]
