"""The fuses of a device in lists that a fuse file can hold, and what each fuse does."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import chain, pairwise
from typing import TYPE_CHECKING, Literal

from pla.device.model import Block

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.device.model import AndArray, Column, Device, OrArray, Source

__all__ = ["FuseRole", "blocks_of", "role_of"]


@dataclass(frozen=True, slots=True)
class FuseRole:
    """What one fuse does.

    Attributes:
        kind: ``and`` joins a line to a term, ``or`` a term to a sum, ``drop`` cuts a term off,
            ``cell`` sets a cell, ``mode`` selects a device-wide mode, ``signature`` holds a bit of
            the user's text, ``spare`` does nothing.
        term: Row of the AND array; ``None`` outside the arrays and the drop links.
        column: Column of the link in its array; for a signature its position from the first fuse.
        line: The line of an AND link; ``None`` elsewhere and in a column with no line.
        pin: Pin of that cell, if it has one.
        key: Key of the cell of an OR link's sum, or of a configuration link.
        bit: Name of a configuration link.
        state: State that a mode fuse must have.
    """

    kind: Literal["and", "or", "drop", "cell", "mode", "signature", "spare"]
    term: int | None = None
    column: int | None = None
    line: Column | None = None
    pin: int | None = None
    key: Source | None = None
    bit: str | None = None
    state: Literal[0, 1] | None = None

    def __str__(self) -> str:
        match self.kind:
            case "and" if self.line is None:
                return f"crosses term {self.term} in column {self.column}, which has no line"
            case "and":
                return f"joins line {self.line} to term {self.term}"
            case "or":
                return f"joins term {self.term} to the sum of {self._cell('pin')}"
            case "drop":
                return f"is the link that drops term {self.term}"
            case "cell":
                return f"is link {self.bit!r} of {self._cell('the cell on pin')}"
            case "mode":
                return f"selects the device-wide mode: it is {self.state}"
            case "signature":
                return f"is bit {self.column} of the signature"
            case _:
                return "is spare"

    def _cell(self, on: str) -> str:
        return f"{on} {self.pin}" if self.pin is not None else f"cell {self.key}"


def role_of(device: Device, fuse: int) -> FuseRole:
    """What a fuse of a checked device does.

    Raises:
        IndexError: If the device has no such fuse.
    """
    if not 0 <= fuse < device.fuses:
        raise IndexError(f"fuse {fuse} of {device.fuses}")
    return _array_role(device, fuse) or _other_role(device, fuse) or FuseRole("spare")


def _array_role(device: Device, fuse: int) -> FuseRole | None:
    for term in range(device.terms):
        lines = device.and_array.fuses_of(term)
        if fuse in lines:
            column = lines.index(fuse)
            return FuseRole("and", term, column, line=device.and_array.columns[column])
    if device.or_array is not None:
        for row, term in enumerate(device.or_array.terms):
            sums = device.or_array.fuses_of(row)
            if fuse in sums:
                column = sums.index(fuse)
                key = device.or_array.sums[column]
                return FuseRole("or", term, column, pin=device.cell_of[key].pin, key=key)
    return None


def _other_role(device: Device, fuse: int) -> FuseRole | None:
    for cell in device.cells:
        if fuse in cell.links:
            bit = cell.bits[cell.links.index(fuse)]
            return FuseRole("cell", pin=cell.pin, key=cell.key, bit=bit)
    if device.drop is not None and fuse in device.drop.fuses:
        return FuseRole("drop", device.drop.terms[device.drop.fuses.index(fuse)])
    state = dict(device.mode_fuses).get(fuse)
    if state is not None:
        return FuseRole("mode", state=state)
    if device.signature is not None and fuse in device.signature.fuses:
        return FuseRole("signature", column=device.signature.fuses.index(fuse))
    return None


def blocks_of(device: Device) -> Iterator[Block]:
    """See `Device.blocks`."""
    owner = [""] * device.fuses
    _mark_others(owner, device)
    if device.or_array is not None:
        _mark_or_array(owner, device, device.or_array)
    _mark_and_array(owner, device)
    first = 0
    for fuse in range(1, device.fuses + 1):
        if fuse == device.fuses or owner[fuse] != owner[first]:
            yield Block(first, fuse - first, owner[first])
            first = fuse


def _mark_others(owner: list[str], device: Device) -> None:
    marks = [
        ("spare", chain.from_iterable(device.spare)),
        ("configuration", chain.from_iterable(cell.links for cell in device.cells)),
        ("drop links", device.drop.fuses if device.drop else ()),
        ("mode", (fuse for fuse, _ in device.mode_fuses)),
        ("signature", device.signature.fuses if device.signature else ()),
    ]
    for what, fuses in marks:
        for fuse in fuses:
            owner[fuse] = what


def _mark_and_array(owner: list[str], device: Device) -> None:
    array, sums = device.and_array, device.or_array
    grain = _grain(array)
    both = sums is not None and grain == _grain(sums)
    for term in range(device.terms):
        for column, fuse in enumerate(array.fuses_of(term)):
            line = array.columns[column]
            owner[fuse] = {
                "row": f"term {term}",
                "column": f"line {line}" if line else f"column {column}",
                "array": "AND and OR array" if both else "AND array",
            }[grain]


def _mark_or_array(owner: list[str], device: Device, array: OrArray) -> None:
    grain = _grain(array)
    adjoining = grain == "row" and _grain(device.and_array) == "row"
    for row, term in enumerate(array.terms):
        fuses = array.fuses_of(row)
        joined = adjoining and _adjoin(device.and_array.fuses_of(term), fuses)
        for column, fuse in enumerate(fuses):
            owner[fuse] = {
                "row": f"term {term}" if joined else f"OR links of term {term}",
                "column": f"sum of {_named(device, array.sums[column])}",
                "array": "AND and OR array" if grain == _grain(device.and_array) else "OR array",
            }[grain]


def _named(device: Device, key: Source) -> str:
    pin = device.cell_of[key].pin
    return f"pin {pin}" if pin is not None else f"cell {key}"


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
