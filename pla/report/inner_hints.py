"""Refused designs that a signal under [inner] might help."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.fitting.prices import alone_counts
from pla.logic.function import Function
from pla.logic.phases import Polarity
from pla.wording import listed

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.model import Cell, Device, Mode
    from pla.fitting.model import Fit

__all__ = ["inner_hints"]

_AS_WRITTEN = Polarity(True, False)


def inner_hints(fit: Fit) -> Iterator[str]:
    """One sentence for sums that are too large for their cells, one for enables of several terms.

    Nothing where the design has inner signals already, or no cell is left that could feed one back.
    """
    device, design = fit.device, fit.behaviour
    spare = len(device.cells) > len(design.outputs)
    if fit.fits or design.inner or not spare or not _feeds_back(device):
        return
    own = any(cell.key not in device.or_column for cell in device.cells)
    if own and fit.lacking and fit.minimum is not None:
        yield (
            "A part of an equation may stand under [inner] instead: it can be fed back from a cell "
            "of its own, so that a large sum is spread over two cells."
        )
    large = _large_enables(fit)
    if large:
        yield (
            f"An enable has one product term, and {listed(large)} would need more: put the same "
            "equation under [inner] and name that signal in enable, which then takes one term if a "
            "cell can feed it back."
        )


def _feeds_back(device: Device) -> bool:
    """Whether some cell can carry its own sum back into the AND array."""
    return any(_carries(device, cell, mode) for cell in device.cells for mode in cell.modes)


def _carries(device: Device, cell: Cell, mode: Mode) -> bool:
    lines = [line for _, line in mode.lines]
    if any(line is not None and line.kind == "sum" and line.of == cell.key for line in lines):
        return True
    levels = [*lines, *device.fixed_lines]
    return mode.pin != "none" and any(
        line is not None and line.kind == "pin" and line.of == cell.pin for line in levels
    )


def _large_enables(fit: Fit) -> list[str]:
    """Signals whose enables are no single product, on a device with rows for enables."""
    modes = (mode for cell in fit.device.cells for mode in cell.modes)
    if not any(mode.enable.kind == "row" for mode in modes):
        return []
    n = fit.behaviour.function.n_inputs
    switched = [(o.name, o.enable) for o in fit.behaviour.outputs if o.enable is not None]
    function = Function.of_outputs(n, [(enable.on, enable.off) for _, enable in switched])
    counts = alone_counts(function, [_AS_WRITTEN] * len(switched))
    return [name for (name, _), count in zip(switched, counts, strict=True) if count.terms > 1]
