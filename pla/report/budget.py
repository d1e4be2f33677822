"""What a design takes of a device."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.table import Table

if TYPE_CHECKING:
    from pla.device.model import Device
    from pla.fitting.model import Fit, Usage
    from pla.fuses.fusemap import FuseMap

__all__ = ["budget_table", "programmed"]


def budget_table(fit: Fit, fuses: FuseMap | None = None) -> Table:
    """Terms, inputs and outputs: used, available, spare or missing; links programmed."""
    rows = [
        _row("product terms", fit.terms, known=fit.minimum is not None),
        _row("input pins", fit.inputs),
        _row("output cells", fit.outputs),
    ]
    remarks: tuple[str, ...] = ()
    if fuses is not None:
        count = programmed(fit.device, fuses)
        state = "closed" if fit.device.links.blank else "opened"
        remarks = (
            f"{count} of {len(fuses)} links are to be programmed ({state}), "
            f"{len(fuses) - count} stay blank.",
        )
    return Table(
        "Budget",
        ("resource", "used", "available", "spare"),
        tuple(rows),
        remarks=remarks,
        aligned="lrrr",
    )


def programmed(device: Device, fuses: FuseMap) -> int:
    """How many links are not in the state that a blank part has."""
    return fuses.closed if device.links.blank else fuses.opened


def _row(what: str, usage: Usage, *, known: bool = True) -> tuple[str, str, str, str]:
    if not known:
        return what, "not known", str(usage.available), "not known"
    spare = usage.available - usage.used
    return (
        what,
        str(usage.used),
        str(usage.available),
        str(spare) if spare >= 0 else f"{-spare} too few",
    )
