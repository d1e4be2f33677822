"""Ranges of numbers from TOML values as cubes."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.behaviour.values import check_boundary, granule_span, span_cubes

if TYPE_CHECKING:
    from pla.behaviour.signals import Field
    from pla.behaviour.values import Masks
    from pla.errors import Diagnostics, Location

__all__ = ["span_of", "widened"]


def widened(field: Field, span: range, at: Location, diagnostics: Diagnostics) -> range:
    """A range whose boundaries the device can tell apart; a single number gets its granule.

    Raises:
        Problem: If a boundary lies inside a granule.
    """
    if not field.unreached:
        return span
    first, last = span[0], span[-1]
    if first != last:
        check_boundary(field, first, f"0x{first:X}")
        check_boundary(field, last + 1, f"0x{last:X}")
        return span
    first, last = granule_span(field, first, f"0x{first:X}")
    diagnostics.warning(
        "GRANULE-POINT",
        f"the number 0x{first:X} of {field.name} stands for 0x{first:X}..0x{last:X}, because its "
        f"lowest {field.unreached} bits do not reach the device",
        at,
        "write the range to say so",
    )
    return range(first, last + 1)


def span_of(field: Field, span: range, at: Location, diagnostics: Diagnostics) -> list[Masks]:
    """The cubes of a range; see `widened`."""
    span = widened(field, span, at, diagnostics)
    return span_cubes(field, span[0], span[-1])
