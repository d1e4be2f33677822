"""Pins that the design decides beforehand."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.errors import Diagnostic, Diagnostics

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour
    from pla.device.model import Device

__all__ = ["places_elsewhere", "settled_places"]


def settled_places(behaviour: Behaviour, device: Device) -> dict[str, int]:
    """The pin of every signal that ``[place]`` of this device decides.

    Raises:
        InputError: For every pin that cannot carry its signal, with its location.
    """
    problems = Diagnostics()
    is_input = set(behaviour.input_names)
    settled: dict[str, int] = {}
    for place in behaviour.places.get(device.name, ()):
        wanted = device.input_pins if place.signal in is_input else device.output_pins
        if place.pin not in wanted:
            kind = "an input" if place.signal in is_input else "an output"
            problems.error(
                "PLACE-PIN",
                f"{place.signal} is {kind}, but {_role(device, place.pin)} on {device.name}",
                place.location,
                f"pins for {kind[3:]}s: {_listed(wanted)}",
            )
        settled[place.signal] = place.pin
    problems.stop_on_error()
    return settled


def places_elsewhere(behaviour: Behaviour, device: Device) -> tuple[Diagnostic, ...]:
    """A warning where a design decides pins, but none on this device: perhaps a misspelt name."""
    if not behaviour.places or device.name in behaviour.places:
        return ()
    names = list(behaviour.places)
    first = next((place for name in names for place in behaviour.places[name]), None)
    return (
        Diagnostic(
            "PLACE-ELSEWHERE",
            f"no pins are decided for {device.name}; the design decides them for "
            f"{' and '.join(names)}",
            first.location if first else None,
            f"if they are meant for this device, write [place.{device.name}]",
            "warning",
        ),
    )


def _role(device: Device, pin: int) -> str:
    if pin > device.pins:
        return f"there is no pin {pin}; the highest is {device.pins}"
    roles = [
        (device.input_pins, "is an input"),
        (device.output_pins, "is an output"),
        ((device.ground,), "is ground"),
        ((device.power,), "is the supply"),
        (device.unconnected, "has no connection"),
    ]
    return next(
        (f"pin {pin} {role}" for pins, role in roles if pin in pins), f"pin {pin} is unused"
    )


def _listed(pins: tuple[int, ...]) -> str:
    return ", ".join(str(pin) for pin in pins)
