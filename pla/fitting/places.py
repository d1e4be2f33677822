"""Pins that the design decides beforehand."""

from __future__ import annotations

import difflib
from typing import TYPE_CHECKING

from pla.errors import Diagnostic, Diagnostics

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.behaviour.model import Behaviour, Place
    from pla.device.model import Device

__all__ = ["places_elsewhere", "places_nowhere", "settled_places", "wrong_places"]


def settled_places(behaviour: Behaviour, device: Device) -> dict[str, int]:
    """The pin of every signal that ``[place]`` of this device decides.

    Raises:
        InputError: For every pin that cannot carry its signal, with its location.
    """
    problems = Diagnostics(list(wrong_places(behaviour, device).values()))
    problems.stop_on_error()
    return {place.signal: place.pin for place in behaviour.places.get(device.name, ())}


def wrong_places(behaviour: Behaviour, device: Device) -> dict[Place, Diagnostic]:
    """The places for this device whose pin cannot carry the signal, each with its error."""
    is_input = {signal.name for signal in behaviour.inputs if signal.read_from is None}
    readable = tuple(sorted({*device.readable_pins, *device.enable_pins}))
    wrong = {}
    for place in behaviour.places.get(device.name, ()):
        wanted = readable if place.signal in is_input else device.output_pins
        if place.pin not in wanted:
            kind = "an input" if place.signal in is_input else "an output"
            wrong[place] = Diagnostic(
                "PLACE-PIN",
                f"{place.signal} is {kind}, but {_role(device, place.pin)} on {device.name}",
                place.location,
                f"pins for {kind[3:]}s: {_listed(wanted)}",
            )
    return wrong


def places_elsewhere(behaviour: Behaviour, device: Device) -> tuple[Diagnostic, ...]:
    """A warning where a design decides pins, but none on this device: perhaps a misspelt name."""
    if not behaviour.places or device.name in behaviour.places:
        return ()
    names = list(behaviour.places)
    return (
        _elsewhere(
            behaviour,
            names,
            f"no pins are decided for {device.name}; the design decides them for "
            f"{' and '.join(names)}",
            f"if they are meant for this device, write [place.{device.name}]",
        ),
    )


def places_nowhere(behaviour: Behaviour, devices: Sequence[Device]) -> tuple[Diagnostic, ...]:
    """A warning for every device that a design decides pins on and that is none of these."""
    known = [device.name for device in devices]
    return tuple(
        _elsewhere(
            behaviour,
            [name],
            f"pins are decided for {name}, which is none of the devices compared",
            _near(name, known),
        )
        for name in behaviour.places
        if name not in known
    )


def _elsewhere(behaviour: Behaviour, names: Sequence[str], message: str, hint: str) -> Diagnostic:
    first = next((place for name in names for place in behaviour.places[name]), None)
    at = first.location if first else None
    return Diagnostic("PLACE-ELSEWHERE", message, at, hint, "warning")


def _near(name: str, known: Sequence[str]) -> str:
    near = difflib.get_close_matches(name, known, n=1)
    return f"did you mean {near[0]!r}?" if near else f"there are: {', '.join(known)}"


def _role(device: Device, pin: int) -> str:
    if pin > device.pins:
        return f"there is no pin {pin}; the highest is {device.pins}"
    roles = [
        (device.input_pins, "is an input"),
        (device.output_pins, "is an output"),
        (device.enable_pins, "is an enable pin"),
        (device.ground, "is ground"),
        (device.power, "is the supply"),
        (device.unconnected, "has no connection"),
    ]
    return next(
        (f"pin {pin} {role}" for pins, role in roles if pin in pins), f"pin {pin} is unused"
    )


def _listed(pins: tuple[int, ...]) -> str:
    return ", ".join(str(pin) for pin in pins)
