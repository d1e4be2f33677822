"""What every pin carries and what to do with those that carry nothing."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.notation import listed
from pla.report.table import Table

if TYPE_CHECKING:
    from pla.device.model import Device
    from pla.fitting.model import PlacedInput, PlacedOutput, Plan

__all__ = ["pin_list"]

_IDLE = {
    "sum": "leave open; the part drives it low",
    "sum'": "leave open; the part drives it high",
    "none": "leave open; the part does not drive it",
}
_TIE = "unused: tie to ground or supply"


def pin_list(plan: Plan) -> Table:
    """Every pin of the device in order."""
    device = plan.device
    inputs = {p.pin: p for p in plan.inputs if p.pin is not None}
    outputs = {p.pin: p for p in plan.outputs}
    rows = []
    for pin in range(1, device.pins + 1):
        if pin in inputs:
            rows.append((str(pin), *_input(inputs[pin])))
        elif pin in outputs:
            rows.append((str(pin), *_output(outputs[pin])))
        else:
            rows.append((str(pin), *_other(device, pin)))
    return Table(
        "Pin list",
        ("pin", "signal", "direction", "active", "remark"),
        tuple(rows),
        remarks=tuple(_remarks(plan)),
        aligned="rllll",
    )


def _input(placed: PlacedInput) -> tuple[str, str, str, str]:
    remark = "" if placed.used else "no term needs it; the pin must still have a defined level"
    return placed.name, "input", _active(placed), remark


def _output(placed: PlacedOutput) -> tuple[str, str, str, str]:
    return placed.name, "output", _active(placed), ""


def _active(placed: PlacedInput | PlacedOutput) -> str:
    return "low" if placed.active_low else "high"


def _other(device: Device, pin: int) -> tuple[str, str, str, str]:
    if pin == device.ground:
        return "ground", "supply", "", ""
    if pin == device.power:
        return "power", "supply", "", ""
    if pin in device.unconnected:
        return "", "none", "", "no connection inside the part"
    cell = device.cell_of_pin.get(pin)
    if cell is None:
        return "", "input", "", _TIE
    return "", "output", "", f"unused: {_IDLE[device.idle_mode(cell).pin]}"


def _remarks(plan: Plan) -> list[str]:
    device = plan.device
    said = []
    taken = {p.pin for p in plan.inputs}
    if any(pin not in taken for pin in device.input_pins):
        said.append(
            "No input may float: an open input picks up noise and wastes supply current. Tie "
            "unused inputs to a defined level, ground or supply, as the data sheet of the part "
            "has it."
        )
    needless = [p.name for p in plan.inputs if not p.used]
    if needless:
        said.append(f"No term needs {listed(needless)}: the outputs do not depend on it.")
    absent = [p.name for p in plan.inputs if p.pin is None]
    if absent:
        said.append(f"No pin was left for {listed(absent)}, which no term needs.")
    return said
