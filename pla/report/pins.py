"""What every pin carries, and what to do with those that carry nothing."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.report.notation import listed
from pla.report.table import Table
from pla.report.text import kept_together

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.device.model import Device
    from pla.fitting.model import Plan

__all__ = ["pin_list", "pin_summary"]

_IDLE = {
    "sum": "leave open: the part drives it low",
    "sum'": "leave open: the part drives it high",
    "none": "leave open: the part does not drive it",
}


def pin_list(plan: Plan) -> Table:
    """Every pin of the device in order."""
    device = plan.device
    used = {
        **{
            placed.pin: (
                placed.name,
                "input",
                _active(placed.active_low),
                "" if placed.used else "no term needs it",
            )
            for placed in plan.inputs
            if placed.pin is not None
        },
        **{
            placed.pin: (placed.name, "output", _active(placed.active_low), "")
            for placed in plan.outputs
        },
    }
    return Table(
        "Pin list",
        ("pin", "signal", "direction", "active", "remark"),
        tuple(
            (str(pin), *(used.get(pin) or _unused(device, pin)))
            for pin in range(1, device.pins + 1)
        ),
        aligned="rllll",
        wrapped=(1, 4),
        remarks=tuple(_remarks(plan)),
    )


def pin_summary(plan: Plan) -> list[str]:
    """The pins that carry signals, inputs and outputs on a line each."""
    sides = (("Inputs", plan.inputs), ("Outputs", plan.outputs))
    return [
        f"{side}: "
        + ", ".join(
            kept_together(
                f"{'no pin' if placed.pin is None else placed.pin} {placed.name}"
                f"{' (active low)' if placed.active_low else ''}"
            )
            for placed in signals
        )
        + "."
        for side, signals in sides
    ]


def _active(low: bool) -> str:
    return "low" if low else "high"


def _unused(device: Device, pin: int) -> tuple[str, str, str, str]:
    """Signal, direction, active level and remark of a pin that carries no signal."""
    if pin == device.ground:
        return "", "ground", "", ""
    if pin == device.power:
        return "", "power", "", ""
    if pin in device.unconnected:
        return "", "none", "", "no connection"
    cell = device.cell_of_pin.get(pin)
    if cell is None:
        return "", "input", "", "unused: tie to ground or power"
    return "", "output", "", f"unused, {_IDLE[device.idle_mode(cell).pin]}"


def _remarks(plan: Plan) -> Iterator[str]:
    taken = {placed.pin for placed in plan.inputs}
    if any(pin not in taken for pin in plan.device.input_pins):
        # Common practice, no source.
        yield (
            "No input may float: an open input picks up noise, and many parts draw more current "
            "then. Give every unused input a defined level, ground or power, in the way that the "
            "data sheet of the part allows."
        )
    needless = [p.name for p in plan.inputs if not p.used and p.pin is not None]
    if needless:
        yield (
            f"No output depends on {listed(needless)}: no term has a literal of "
            f"{'it, but its pin' if len(needless) == 1 else 'them, but each pin'} still needs a "
            "defined level."
        )
    absent = [p.name for p in plan.inputs if p.pin is None]
    if absent:
        yield (
            f"No pin was left for {listed(absent)}. No output depends on "
            f"{'it' if len(absent) == 1 else 'them'}, so nothing needs to be connected."
        )
