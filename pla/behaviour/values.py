"""Numbers, ranges and bit patterns as cubes over the bits of a field."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.behaviour.problem import Problem
from pla.numerals import parse_number, proposal

if TYPE_CHECKING:
    from pla.behaviour.signals import Field

__all__ = [
    "Masks",
    "check_boundary",
    "check_fits",
    "granule_span",
    "number_in",
    "number_masks",
    "pattern_masks",
    "shown_number",
    "span_cubes",
]

Masks = tuple[int, int]
"""Bits that must be 1 and bits that must be 0."""


def number_in(field: Field, text: str) -> int:
    """A written number that the field can hold.

    Raises:
        Problem: If it is not a number or does not fit.
    """
    try:
        value = parse_number(text)
    except ValueError as fault:
        meant = proposal(text)
        hint = f"did you mean {meant}?" if meant else None
        if "leading zero" in str(fault):
            digits = text.lstrip("0") or "0"
            hint = f"write {digits} for the decimal number"
            if not text.strip("01"):
                hint += f", 0b{text} for the bits"
        raise Problem(
            "NUMBER", f"{text!r} is {fault}, expected decimal, 0x… or 0b…", hint
        ) from None
    check_fits(field, value, text)
    return value


def check_fits(field: Field, value: int, text: str | None = None) -> None:
    """Refuse a number that needs more bits than the field has.

    Raises:
        Problem: If it does not fit.
    """
    if not 0 <= value < 1 << field.width:
        bits = "1 bit" if field.width == 1 else f"{field.width} bits"
        raise Problem(
            "NUMBER-RANGE",
            f"{text or value} does not fit {field.name}, which has {bits}: expected 0 to "
            f"{shown_number(field, (1 << field.width) - 1)}",
        )


def shown_number(field: Field, value: int) -> str:
    """A number of a field for messages: hexadecimal for wide fields, as people write addresses."""
    return f"0x{value:X}" if field.width > 8 else str(value)


def granule_span(field: Field, value: int, written: str) -> tuple[int, int]:
    """All numbers that a single one stands for: those that differ only in unreached bits.

    Bits that do not reach the device read 0, so the number must have 0 there.

    Raises:
        Problem: If it asks for a 1 on an unreached bit.
    """
    check_boundary(field, value, written)
    return value, value + (1 << field.unreached) - 1


def check_boundary(field: Field, boundary: int, written: str) -> None:
    """Refuse a range that starts, or ends just before, a number inside a granule.

    Raises:
        Problem: If the bits that would tell the two sides apart do not reach the device.
    """
    granule = 1 << field.unreached
    if boundary % granule == 0:
        return
    low = boundary - boundary % granule
    bits = "bit 0 does" if granule == 2 else f"bits {field.unreached - 1} to 0 do"
    raise Problem(
        "GRANULE",
        f"{written} makes a boundary inside the granule "
        f"{shown_number(field, low)}..{shown_number(field, low + granule - 1)} of {field.name}: "
        f"{bits} not reach the device",
        f"ranges start at multiples of {granule} ({shown_number(field, granule)}) and end just "
        "before",
    )


def span_cubes(field: Field, first: int, last: int) -> list[Masks]:
    """Cubes of all numbers from `first` to `last`: the fewest blocks of aligned powers of two.

    The boundaries must have passed `check_boundary`. An empty range has no cubes.
    """
    found = []
    while first <= last:
        size = (first & -first).bit_length() - 1 if first else field.width
        while first + (1 << size) - 1 > last:
            size -= 1
        found.append(number_masks(field, first, size))
        first += 1 << size
    return found


def number_masks(field: Field, value: int, free: int = 0) -> Masks:
    """The cube of a number whose lowest `free` bits are open."""
    ones = zeros = 0
    for place, index in enumerate(field.bits[: field.width - free]):
        if index is None:
            continue
        if value >> (field.width - 1 - place) & 1:
            ones |= 1 << index
        else:
            zeros |= 1 << index
    return ones, zeros


def pattern_masks(field: Field, text: str, free: str) -> tuple[Masks, int]:
    """The cube of ``0b`` with one sign a bit, `free` for an open one; and the mask of open bits.

    Raises:
        Problem: For a wrong sign or a wrong number of bits.
    """
    digits = text[2:]
    for sign in digits:
        if sign not in "01" + free:
            other = {"-": "x", "x": "-"}.get(sign)
            if other == free:
                wanted = "an input that may be either is -" if free == "-" else "a don't care is x"
                raise Problem("CELL", f"{sign!r} in {text!r}: {wanted}")
            raise Problem("CELL", f"{sign!r} in {text!r} is not 0, 1 or {free}")
    if len(digits) != field.width:
        raise Problem(
            "PATTERN-WIDTH",
            f"{text!r} has {len(digits)} {'bit' if len(digits) == 1 else 'bits'}, "
            f"but {field.name} has {field.width}",
        )
    ones = zeros = open_bits = 0
    for sign, index in zip(digits, field.bits, strict=True):
        if index is None:
            if sign == "1":
                raise Problem(
                    "GRANULE",
                    f"{text!r} asks for a 1 on a bit of {field.name} that does not reach the "
                    f"device and reads 0",
                    f"write {free} for its lowest {field.unreached} bits",
                )
        elif sign == "1":
            ones |= 1 << index
        elif sign == "0":
            zeros |= 1 << index
        else:
            open_bits |= 1 << index
    return (ones, zeros), open_bits
