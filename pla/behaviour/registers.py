"""How registers are clocked, reset and preset: from what is written to what every bit does.

A reset holds for impossible inputs too, as an enable does: see `pla.behaviour.switching`.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Literal

from pla.behaviour.model import Enabling, Registering
from pla.behaviour.switching import Switch, switched
from pla.logic import algebra

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.behaviour.clocking import ControlText, RegisterText
    from pla.behaviour.description import Solver
    from pla.behaviour.model import StateTable
    from pla.behaviour.signals import Signal, Signals
    from pla.errors import Diagnostics
    from pla.logic.cubes import Cover

__all__ = ["solve_registers", "warn_of_races", "with_start_codes"]


def solve_registers(
    texts: Iterable[RegisterText],
    to_start: Iterable[RegisterText],
    never: Cover,
    solver: Solver,
    signals: Signals,
    diagnostics: Diagnostics,
) -> dict[str, Registering]:
    """How every registered bit is clocked.

    Args:
        texts: The registers of [outputs] and [inner].
        to_start: Those that hold states, with the codes of their states at power-up: a reset takes
            them there, so that it is a preset of the bits that are 1 in it.
        never: Impossible inputs.
        solver: Knows the signals that resets and presets name.
        signals: For the words of messages.
        diagnostics: Takes resets that never or always act, or that are not known everywhere, and
            those that can act together with a preset (errors).

    Returns:
        For the name of each bit; what is wrong is left out.
    """
    found: dict[str, Registering] = {}
    for register in texts:
        acting = _acting(register, never, solver, signals, diagnostics)
        if acting is not None and _apart(register, acting, signals, diagnostics):
            found |= _bits(register, acting)
    for register in to_start:
        acting = _acting(register, never, solver, signals, diagnostics)
        if acting is not None:
            found |= _bits(register, acting, to_start=True)
    return found


def with_start_codes(
    registers: Iterable[RegisterText], machines: Iterable[StateTable]
) -> list[RegisterText]:
    """The registers that hold states, with the codes of their states at power-up.

    Tables that were not worked out are left out.
    """
    codes = {machine.name: machine.codes[machine.start] for machine in machines if machine.codes}
    return [
        replace(register, start=int(codes[register.signal.name], 2))
        for register in registers
        if register.signal.name in codes
    ]


def warn_of_races(
    registers: dict[str, Registering], signals: Signals, diagnostics: Diagnostics
) -> None:
    """Warn of asynchronous resets and presets that are made of present values.

    While registers change one after another, such an equation may be 1 for a moment.
    """
    present = sum(1 << bit for signal in signals.present.values() for bit in signal.positions)
    for name, register in _first_bits(registers):
        for kind, enabling, at_once in (
            ("reset", register.reset, register.reset_asynchronous),
            ("preset", register.preset, register.preset_asynchronous),
        ):
            read = algebra.support(enabling.on, enabling.off) & present if enabling else 0
            if enabling is None or not at_once or not read:
                continue
            diagnostics.warning(
                "RESET-DECODED",
                f"the asynchronous {kind} of {name} depends on present values "
                f"({signals.show_names(read)}): while these change one after another, it may act "
                "for a moment",
                enabling.location,
                f'say {kind}_when = "clock", or put it into the next value',
            )


def _first_bits(registers: dict[str, Registering]) -> Iterable[tuple[str, Registering]]:
    """The first bit of every signal, under the name of the signal."""
    seen = set[str]()
    for bit, register in registers.items():
        name = bit.partition("[")[0]
        if name not in seen:
            seen.add(name)
            yield name, register


def _acting(
    register: RegisterText,
    never: Cover,
    solver: Solver,
    signals: Signals,
    diagnostics: Diagnostics,
) -> dict[str, tuple[ControlText, Enabling]] | None:
    """When the controls of a register act; ``None`` if something is wrong."""
    found: dict[str, tuple[ControlText, Enabling]] = {}
    for control in register.controls:
        what = f"{register.signal.name} is {control.kind}"
        switch = Switch(
            control.condition, control.location, control.never_too, "CONTROL-OPEN", what
        )
        sets = switched(switch, never, solver, signals, diagnostics)
        if sets is None or not _check_use(register.signal, control, *sets, diagnostics):
            continue
        found[control.kind] = control, Enabling(*sets, control.text, control.location)
    return found if len(found) == len(register.controls) else None


def _check_use(
    signal: Signal, control: ControlText, on: Cover, off: Cover, diagnostics: Diagnostics
) -> bool:
    """Whether a control acts at some times and not at others."""
    if len(on) and len(off):
        return True
    kind = control.kind
    diagnostics.error(
        "CONTROL-NEVER" if not len(on) else "CONTROL-ALWAYS",
        f"{signal.name} is never {kind}: the equation is 0 for every input"
        if not len(on)
        else f"the {kind} holds {signal.name} for ever: the equation is 1 for every input",
        control.location,
        "mend the equation, or leave it out",
    )
    return False


def _apart(
    register: RegisterText,
    acting: dict[str, tuple[ControlText, Enabling]],
    signals: Signals,
    diagnostics: Diagnostics,
) -> bool:
    """Whether reset and preset never act together, or one of them clearly wins."""
    if len(acting) < 2:
        return True
    (reset, resets), (preset, presets) = acting["reset"], acting["preset"]
    if reset.asynchronous != preset.asynchronous:
        return True
    both = algebra.find_common(resets.on, presets.on)
    if both is None:
        return True
    one, two = list(resets.on)[both[0]], list(presets.on)[both[1]]
    ones, zeros = one.ones | two.ones, one.zeros | two.zeros
    name = register.signal.name
    diagnostics.error(
        "CONTROL-CONFLICT",
        f"{name} is reset and preset at once, for example at "
        f"{signals.show_point(ones, ones | zeros)}: the reset stands at {reset.location}",
        preset.location,
        f'let one of them win, such as: preset = "({preset.text}) ({reset.text})\'"',
    )
    return False


def _bits(
    register: RegisterText,
    acting: dict[str, tuple[ControlText, Enabling]],
    *,
    to_start: bool = False,
) -> dict[str, Registering]:
    """Each bit of a register by its name."""
    signal, found = register.signal, {}
    reset, preset = (acting.get(kind) for kind in ("reset", "preset"))
    for place, name in enumerate(signal.bit_names()):
        start: Literal[0, 1] | None = None
        if register.start is not None:
            start = 1 if register.start >> (signal.size - 1 - place) & 1 else 0
        cleared, made = reset, preset
        if to_start and start == 1:
            cleared, made = None, reset
        found[name] = Registering(
            kind=register.wish,
            clock=register.clock,
            falling=register.falling,
            start=start,
            reset=cleared[1] if cleared else None,
            preset=made[1] if made else None,
            reset_asynchronous=cleared[0].asynchronous if cleared else True,
            preset_asynchronous=made[0].asynchronous if made else True,
        )
    return found
