"""What a fuse file says, as one JSON document."""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fuses.jesd3 import FuseDiagnostic, FuseFile

__all__ = ["inspection"]


def inspection(
    file: FuseFile, departures: Sequence[FuseDiagnostic], devices: Sequence[str]
) -> dict[str, Any]:
    """The document of ``inspect --json``; offsets count from 0, lines and columns from 1."""
    counts = Counter(field.identifier for field in file.fields[1:])
    return {
        "file": file.name,
        "design": file.design,
        "notes": list(file.notes),
        "fuses": len(file.fuses),
        "pins": file.pins,
        "vector_limit": file.vector_limit,
        "default": file.default,
        "security": file.security,
        "default_condition": file.default_condition,
        "fuse_checksum": f"{file.fuses.checksum:04X}",
        "fuse_checksum_given": _hexadecimal(file.given_checksum),
        "transmission_sum": f"{file.computed_sum:04X}",
        "transmission_sum_given": _hexadecimal(file.given_sum),
        "links": {"open": file.fuses.opened, "closed": file.fuses.closed},
        "pin_order": None if file.pin_order is None else list(file.pin_order),
        "vectors": [{"number": v.number, "conditions": v.conditions} for v in file.vectors],
        "fields": dict(sorted(counts.items())),
        "devices": list(devices),
        "departures": [{**d.as_json(), "offset": d.offset, "field": d.field} for d in departures],
    }


def _hexadecimal(value: int | None) -> str | None:
    return None if value is None else f"{value:04X}"
