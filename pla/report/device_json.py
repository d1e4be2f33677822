"""A device as a document for other programs."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from pla.report.device_draw import owner_of

if TYPE_CHECKING:
    from pla.device.model import Cell, Device, Drop, Enable, Line, Mode, OrArray, Signature

__all__ = ["describe", "summarize"]


def summarize(device: Device) -> dict[str, Any]:
    """The few figures by which a device is chosen."""
    return {
        "name": device.name,
        "family": device.family,
        "summary": device.summary,
        "technology": device.technology,
        "pins": device.pins,
        "fuses": device.fuses,
        "inputs": len(device.input_pins),
        "terms": len(device.term_rows),
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
        "enable_pins": list(device.enable_pins),
        "links": {
            "blank": device.links.blank,
            "connected": device.links.connected,
            "unused_term": device.links.unused_term,
            "unused_enable": device.links.unused_enable,
        },
        "blank_row": device.blank_row,
        "and": {
            "columns": [str(line) if line else None for line in device.and_array.columns],
            "rows": list(device.and_array.rows),
            "column_step": device.and_array.column_step,
        },
        "or": None if device.or_array is None else _or_array(device.or_array),
        "drop": None if device.drop is None else _drop(device.drop),
        "row_uses": [owner_of(device, row) for row in range(device.terms)],
        "cells": [_cell(device, cell) for cell in device.cells],
        "mode_fuses": {str(fuse): state for fuse, state in device.mode_fuses},
        "signature": None if device.signature is None else _signature(device.signature),
        "timing": {
            key: None if time is None else float(time)
            for key, time in (
                ("tpd", device.timing.tpd),
                ("tfb", device.timing.tfb),
                ("ten", device.timing.ten),
                ("tdis", device.timing.tdis),
            )
        },
        "spare": [[fuses[0], fuses[-1]] for fuses in device.spare],
        "warnings": [warning.as_json() for warning in device.warnings],
    }


def _one_or_all(pins: tuple[int, ...]) -> int | list[int]:
    return pins[0] if len(pins) == 1 else list(pins)


def _or_array(array: OrArray) -> dict[str, Any]:
    return {
        "columns": list(array.sums),
        "terms": list(array.terms),
        "rows": list(array.rows),
        "column_step": array.column_step,
    }


def _drop(drop: Drop) -> dict[str, Any]:
    return {"dropped": drop.dropped, "terms": list(drop.terms), "fuses": list(drop.fuses)}


def _signature(signature: Signature) -> dict[str, Any]:
    return {
        "first_fuse": signature.first_fuse,
        "bits": signature.bits,
        "order": signature.order,
        "ones": signature.ones,
    }


def _cell(device: Device, cell: Cell) -> dict[str, Any]:
    return {
        "pin": cell.pin,
        "name": cell.name,
        "kind": cell.kind,
        "links": dict(zip(cell.bits, cell.links, strict=True)),
        "rows": list(cell.rows),
        "modes": [_mode(mode) for mode in cell.modes],
        "unused": device.idle_mode(cell).set,
    }


def _mode(mode: Mode) -> dict[str, Any]:
    return {
        "set": mode.set,
        "pin": mode.pin,
        "feedback": mode.feedback,
        "terms": list(mode.terms),
        "enable": _enable(mode.enable),
        "columns": {str(column): _line(line) for column, line in mode.lines},
    }


def _enable(enable: Enable) -> str | dict[str, Any]:
    if enable.kind == "row":
        return {"row": enable.row}
    if enable.kind == "pin":
        return {"pin": enable.pin, "active": "low" if enable.active_low else "high"}
    return "always"


def _line(line: Line | None) -> dict[str, Any] | None:
    if line is None:
        return None
    return {"carries": line.kind, "of": line.of, "complement": line.complement}
