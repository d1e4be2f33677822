"""What a fuse file says, as one JSON document."""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING, Any

from pla.fuses.jesd3_model import RefusedFile

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fuses.jesd3 import FuseDiagnostic, FuseFile
    from pla.fuses.signature import SignatureText
    from pla.fuses.sizes import CatalogueMatch, SizeMatch

__all__ = ["inspection"]


def inspection(
    file: FuseFile | RefusedFile,
    departures: Sequence[FuseDiagnostic],
    devices: CatalogueMatch | None,
    match: SizeMatch | None = None,
) -> dict[str, Any]:
    """The document of ``inspect --json``; offsets count from 0, lines and columns from 1.

    A refused file has ``errors`` and ``warnings`` besides, and null for what is unknown.
    """
    fuses = file.fuses
    counts = Counter(field.identifier for field in file.fields[1:])
    document = {
        "file": file.name,
        "design": file.design,
        "notes": list(file.notes),
        "fuses": file.size,
        "pins": file.pins,
        "vector_limit": file.vector_limit,
        "default": file.default,
        "security": file.security,
        "default_condition": file.default_condition,
        "fuse_checksum": _hexadecimal(fuses.checksum if fuses is not None else None),
        "fuse_checksum_given": _hexadecimal(file.given_checksum),
        "transmission_sum": f"{file.computed_sum:04X}",
        "transmission_sum_given": _hexadecimal(file.given_sum),
        "links": {"open": fuses.opened, "closed": fuses.closed} if fuses is not None else None,
        "pin_order": None if file.pin_order is None else list(file.pin_order),
        "vectors": [{"number": v.number, "conditions": v.conditions} for v in file.vectors],
        "fields": dict(sorted(counts.items())),
        "device": None if match is None else _match(match),
        "devices": None if devices is None else [d.name for d in devices.devices],
        "other_modes": None
        if devices is None
        else [
            {"name": m.device.name, "family": m.device.family, "differences": list(m.other_mode)}
            for m in devices.other_modes
        ],
        "departures": [{**d.as_json(), "offset": d.offset, "field": d.field} for d in departures],
    }
    if isinstance(file, RefusedFile):
        document["errors"] = [d.as_json() for d in file.errors]
        document["warnings"] = [d.as_json() for d in departures]
    return document


def _match(match: SizeMatch) -> dict[str, Any]:
    return {
        "name": match.device.name,
        "fuses": match.device.fuses,
        "pins": match.device.pins,
        "matches": match.matches,
        "differences": [*match.differences, *match.other_mode],
        "family": match.device.family,
        "signature": None if match.signature is None else _signature(match.signature),
    }


def _signature(signature: SignatureText) -> dict[str, Any]:
    """The text (null if it is none), and every byte in hexadecimal, padding included."""
    return {"text": signature.text, "bytes": signature.data.hex().upper()}


def _hexadecimal(value: int | None) -> str | None:
    return None if value is None else f"{value:04X}"
