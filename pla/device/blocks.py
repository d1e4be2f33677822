"""The fuses of a device in lists that a fuse file can hold, and what each fuse does."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Literal

from pla.device.model import Block

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import AndArray, Cell, Column, Device, OrArray

__all__ = ["FuseRole", "blocks_of", "role_of"]


@dataclass(frozen=True, slots=True)
class FuseRole:
    """What one fuse does.

    Attributes:
        kind: ``and`` joins a line to a term, ``or`` a term to a sum, ``cell`` sets an output
            cell, ``spare`` does nothing.
        term: Row of the link; ``None`` outside the arrays.
        column: Column of the link; ``None`` outside the arrays.
        line: The line of an AND link; ``None`` elsewhere and in a column with no line.
        pin: Output pin of an OR link's sum, or of a configuration link's cell.
        bit: Name of a configuration link.
    """

    kind: Literal["and", "or", "cell", "spare"]
    term: int | None = None
    column: int | None = None
    line: Column | None = None
    pin: int | None = None
    bit: str | None = None

    def __str__(self) -> str:
        if self.kind == "and":
            if self.line is None:
                return f"crosses term {self.term} in column {self.column}, which has no line"
            return f"joins line {self.line} to term {self.term}"
        if self.kind == "or":
            return f"joins term {self.term} to the sum of pin {self.pin}"
        if self.kind == "cell":
            return f"is link {self.bit!r} of the cell on pin {self.pin}"
        return "is spare"


def role_of(device: Device, fuse: int) -> FuseRole:
    """What a fuse of a checked device does.

    Raises:
        IndexError: If the device has no such fuse.
    """
    if not 0 <= fuse < device.fuses:
        raise IndexError(f"fuse {fuse} of {device.fuses}")
    for term in range(device.terms):
        lines, sums = device.and_array.fuses_of(term), device.or_array.fuses_of(term)
        if fuse in lines:
            column = lines.index(fuse)
            return FuseRole("and", term, column, line=device.and_array.columns[column])
        if fuse in sums:
            column = sums.index(fuse)
            return FuseRole("or", term, column, pin=device.or_array.pins[column])
    for cell in device.cells:
        if fuse in cell.links:
            return FuseRole("cell", pin=cell.pin, bit=_bit_name(cell, fuse))
    return FuseRole("spare")


def _bit_name(cell: Cell, fuse: int) -> str:
    return cell.bits[cell.links.index(fuse)]


def blocks_of(device: Device) -> Iterator[Block]:
    """See `Device.blocks`."""
    owner = [""] * device.fuses
    for spare in device.spare:
        for fuse in spare:
            owner[fuse] = "spare"
    for cell in device.cells:
        for fuse in cell.links:
            owner[fuse] = "configuration"
    _mark_or_array(owner, device)
    _mark_and_array(owner, device)
    first = 0
    for fuse in range(1, device.fuses + 1):
        if fuse == device.fuses or owner[fuse] != owner[first]:
            yield Block(first, fuse - first, owner[first])
            first = fuse


def _mark_and_array(owner: list[str], device: Device) -> None:
    array = device.and_array
    grain = _grain(array)
    for term in range(device.terms):
        for column, fuse in enumerate(array.fuses_of(term)):
            line = array.columns[column]
            owner[fuse] = {
                "row": f"term {term}",
                "column": f"line {line}" if line else f"column {column}",
                "array": "AND and OR array" if grain == _grain(device.or_array) else "AND array",
            }[grain]


def _mark_or_array(owner: list[str], device: Device) -> None:
    array = device.or_array
    grain = _grain(array)
    adjoining = grain == "row" and _grain(device.and_array) == "row"
    for term in range(device.terms):
        fuses = array.fuses_of(term)
        joined = adjoining and _adjoin(device.and_array.fuses_of(term), fuses)
        for column, fuse in enumerate(fuses):
            owner[fuse] = {
                "row": f"term {term}" if joined else f"OR links of term {term}",
                "column": f"sum of pin {array.pins[column]}",
                "array": "AND and OR array" if grain == _grain(device.and_array) else "OR array",
            }[grain]


def _grain(array: AndArray | OrArray) -> Literal["row", "column", "array"]:
    """By what the links of an array stand together."""
    count = len(array.fuses_of(0))
    if abs(array.column_step) == 1 or count == 1:
        return "row"
    if len(array.rows) > 1 and _consecutive(array.rows):
        return "column"
    return "array"


def _consecutive(rows: Sequence[int]) -> bool:
    return {abs(b - a) for a, b in pairwise(rows)} == {1} and len(set(rows)) == len(rows)


def _adjoin(one: range, other: range) -> bool:
    """Whether two rows follow each other without a fuse between them."""
    low, high = sorted((one, other), key=min)
    return max(low) + 1 == min(high)
