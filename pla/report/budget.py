"""What a design takes of a device."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.notation import plural
from pla.report.table import Table
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.behaviour.model import Behaviour
    from pla.device.model import Device
    from pla.fitting.model import Fit, Usage
    from pla.fuses.fusemap import FuseMap

__all__ = ["budget_table", "links_sentence", "own_pin_inputs"]


def budget_table(fit: Fit, fuses: FuseMap | None = None) -> Table:
    """Terms, inputs and outputs: used, available, spare or missing; links programmed."""
    return Table(
        "Budget",
        ("resource", "used", "available", "spare"),
        (
            _row("product terms", fit.terms, known=fit.minimum is not None),
            _row("input pins", fit.inputs),
            _row("output cells", fit.outputs),
        ),
        aligned="lrrr",
        remarks=tuple(_remarks(fit, fuses)),
    )


def _remarks(fit: Fit, fuses: FuseMap | None) -> Iterator[str]:
    idle = len(own_pin_inputs(fit.behaviour)) - fit.inputs.used
    if idle > 0 and fit.minimum is not None:
        counted = "is not counted" if idle == 1 else "are not counted"
        yield f"{plural(idle, 'input')} that no term needs {counted}."
    if fit.minimum is None:
        barred = [
            name
            for name, polarity in zip(fit.behaviour.output_names, fit.polarities, strict=True)
            if polarity is None
        ]
        why = f"no polarity is left for {listed(barred)}" if barred else "see above"
        yield f"Not minimized: {why}, so how many product terms it takes was not worked out."
    if fuses is not None:
        yield links_sentence(fit.device, fuses)


def own_pin_inputs(behaviour: Behaviour) -> tuple[str, ...]:
    """Inputs that are not read from the pin of an output."""
    return tuple(signal.name for signal in behaviour.inputs if signal.read_from is None)


def links_sentence(device: Device, fuses: FuseMap) -> str:
    """How many links are not left as a blank part has them."""
    state, count = ("closed", fuses.closed) if device.links.blank else ("opened", fuses.opened)
    return f"{count} of {len(fuses)} links are programmed ({state}), the others stay blank."


def _row(what: str, usage: Usage, *, known: bool = True) -> tuple[str, str, str, str]:
    if not known:
        return what, "not minimized", str(usage.available), ""
    spare = f"{usage.over} too few" if usage.over else str(usage.available - usage.used)
    return what, str(usage.used), str(usage.available), spare
