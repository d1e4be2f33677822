"""Reading ``[place.DEVICE]``: pins that are decided beforehand."""

from __future__ import annotations

from typing import TYPE_CHECKING

from pla.behaviour.model import Place
from pla.behaviour.problem import Problem
from pla.wording import kind_of

if TYPE_CHECKING:
    from pla.behaviour.signals import Signals
    from pla.tomlfile import Section

__all__ = ["read_places"]


def read_places(section: Section | None, signals: Signals) -> dict[str, tuple[Place, ...]]:
    """The pins for each device; what is wrong goes to the section's diagnostics."""
    found: dict[str, tuple[Place, ...]] = {}
    if section is None:
        return found
    for device, value in section.data.items():
        if not isinstance(value, dict):
            section.error(
                "VALUE",
                f"{device!r} is {kind_of(value)}, expected a table of pins for each device",
                section.at(device),
                "write [place.DEVICE-NAME] with the name of the device above the pins",
            )
            break  # what follows is most likely the same
        table = section.section(device)
        if table is not None:
            found[device] = _read_device(table, signals)
    return found


def _refuse_pinless(table: Section, name: str, signals: Signals) -> bool:
    """Report a signal that has no pin of its own."""
    signal = signals.by_name[name.partition("[")[0]]
    if signal.role == "inner":
        hint = "leave it out, or declare the signal under [outputs]"
        message = f"{name!r} is an inner signal and has no pin"
        table.error("PLACE-PINLESS", message, table.key_at(name), hint)
        return True
    if signal.read_from is not None:
        output = name.replace(signal.name, signal.read_from, 1)
        table.error(
            "PLACE-PINLESS",
            f"{name!r} is read at the pin of the output {output} and has no pin of its own",
            table.key_at(name),
            f"give the pin to {output}",
        )
        return True
    return False


def _read_device(table: Section, signals: Signals) -> tuple[Place, ...]:
    places: list[Place] = []
    pins: dict[int, str] = {}
    for name in table:
        at = table.key_at(name)
        try:
            field = signals.find(name)
        except Problem as problem:
            if not problem.known:
                table.error(problem.code, problem.message, at, problem.hint)
            continue
        if not field.is_bit:
            bus = name.partition("[")[0]
            table.error(
                "BUS-AS-BIT",
                f"{name!r} has {field.width} bits, expected one bit for one pin",
                at,
                f'give each bit a pin: "{bus}[0]" = …',
            )
            continue
        if _refuse_pinless(table, name, signals):
            continue
        pin = table.integer(name, low=1)
        if pin is None:
            continue
        if pin in pins:
            table.error(
                "PIN-TWICE",
                f"pin {pin} is given to {name} and to {pins[pin]}",
                table.at(name),
                "each pin carries one signal",
            )
            continue
        pins[pin] = name
        places.append(Place(name, pin, at))
    return tuple(places)
