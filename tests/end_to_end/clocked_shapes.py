"""Sizes of clocked designs that mostly fit a device, from what the oracle reads of its file."""

from __future__ import annotations

from typing import TYPE_CHECKING

from random_clocked_designs import ClockedShape

if TYPE_CHECKING:
    import random

    from oracles.device_description import Control, Description


def random_clocked_shape(rng: random.Random, device: Description) -> ClockedShape:
    """A size that mostly fits, with the clock edge, resets and presets that the part has."""
    cells = list(device.cells.values())
    clocked = [c for c in cells if any(m.register for m in c.modes.values())]
    plain = [
        c for c in cells if any(not m.register and m.shows != "none" for m in c.modes.values())
    ]
    shown = [c for c in clocked if c.pin is not None]
    buried = len(clocked) - len(shown)
    never_clocked = len([c for c in plain if c not in shown])
    # State bits go to buried cells first, outputs to cells without registers.
    states = rng.choice([0, 0, 2, 3, 4]) if plain and len(clocked) > 1 else 0
    bits = (states - 1).bit_length() if states else 0
    most = never_clocked + (len(plain) - never_clocked) // 2
    outputs = rng.randint(min(most, int(states > 0)), min(most, 3))
    room = len(shown) - max(0, bits - buried) - max(0, outputs - never_clocked)
    registered = rng.randint(min(1, room), min(4, room))
    left = room - registered + max(0, buried - bits)
    own = [len(m.terms) for c in cells for m in c.modes.values() if m.terms is not None]
    read = set(device.input_pins) - set(device.clock_pins) - set(device.control_pins)
    registers = device.registers
    reset = _acting(rng, [register.reset for register in registers])
    preset = _acting(rng, [register.preset for register in registers])
    pins = {m.enable for c in shown for m in c.modes.values() if m.register}
    enable = next(iter(pins))[2] if len(pins) == 1 and next(iter(pins))[0] == "pin" else None
    return ClockedShape(
        inputs=rng.randint(2, max(2, min(4, len(read)))),
        registered=registered,
        plain=outputs,
        inner=rng.randint(0, max(0, min(2, left))),
        states=states,
        span=3 if own and min(own) < 5 else 4,
        kinds=("any", *sorted({register.kind.upper() for register in registers})),
        falling=registers[0].falling,
        reset=reset[0],
        reset_level=reset[1],
        preset=preset[0],
        preset_level=preset[1],
        enable_level=enable,
        starts=all(register.power_up is not None for register in registers),
    )


def _acting(rng, controls: list[Control | None]) -> tuple[str | None, int | None]:
    """When the part can reset or preset all registers alike, and the level of a pin that does."""
    said = set(controls)
    if len(said) != 1 or None in said or rng.random() < 0.25:
        return (None, None) if rng.random() < 0.7 else ("clock", None)
    (control,) = said
    level = control.by[2] if control.by[0] == "pin" else None
    return ("asynchronous" if control.asynchronous else "clock"), level
