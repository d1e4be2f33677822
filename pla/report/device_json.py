"""A device as a document for other programs."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from pla.device.model import Cell, Device

__all__ = ["describe", "summarize"]


def summarize(device: Device) -> dict[str, Any]:
    """The few figures by which a device is chosen."""
    return {
        "name": device.name,
        "summary": device.summary,
        "technology": device.technology,
        "pins": device.pins,
        "fuses": device.fuses,
        "inputs": len(device.input_pins),
        "terms": device.terms,
        "outputs": len(device.output_pins),
    }


def describe(device: Device) -> dict[str, Any]:
    """Everything the device file says, with the fuse of every row, and what follows from it."""
    return {
        **summarize(device),
        "ground": _one_or_all(device.ground),
        "power": _one_or_all(device.power),
        "unconnected": list(device.unconnected),
        "input_pins": list(device.input_pins),
        "output_pins": list(device.output_pins),
        "links": {
            "blank": device.links.blank,
            "connected": device.links.connected,
            "unused_term": device.links.unused_term,
        },
        "blank_row": device.blank_row,
        "and": {
            "columns": [str(line) if line else None for line in device.and_array.columns],
            "rows": list(device.and_array.rows),
            "column_step": device.and_array.column_step,
        },
        "or": {
            "columns": list(device.or_array.sums),
            "rows": list(device.or_array.rows),
            "column_step": device.or_array.column_step,
        },
        "cells": [_cell(device, cell) for cell in device.cells],
        "spare": [[fuses[0], fuses[-1]] for fuses in device.spare],
        "warnings": [warning.as_json() for warning in device.warnings],
    }


def _one_or_all(pins: tuple[int, ...]) -> int | list[int]:
    return pins[0] if len(pins) == 1 else list(pins)


def _cell(device: Device, cell: Cell) -> dict[str, Any]:
    return {
        "pin": cell.pin,
        "kind": cell.kind,
        "links": dict(zip(cell.bits, cell.links, strict=True)),
        "modes": [{"set": mode.set, "pin": mode.pin} for mode in cell.modes],
        "unused": device.idle_mode(cell).set,
    }
