"""Reading how a signal is clocked: ``register``, ``clock``, ``reset``, ``preset``, ``start``."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from pla.behaviour.conditions import read_condition
from pla.behaviour.problem import Problem

if TYPE_CHECKING:
    from collections.abc import Container

    from pla.behaviour.conditions import Condition
    from pla.behaviour.model import RegisterWish
    from pla.behaviour.signals import Signal, Signals
    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = [
    "CONTROLS",
    "REGISTER_KEYS",
    "RegisterText",
    "check_clock",
    "check_register",
    "read_clocking",
    "read_registers",
]

Control = Literal["reset", "preset"]

CONTROLS: tuple[Control, ...] = ("reset", "preset")
REGISTER_KEYS = ("register", "clock", "start", "reset", "reset_when", "preset", "preset_when")

_WISHES: tuple[RegisterWish, ...] = ("D", "T", "JK", "SR", "any")
_WHEN = ("asynchronous", "clock")
_CLOCK_HINT = 'add clock = "clk", the name of an input, or "clk\'" for its falling edge'
_SECTIONS = (("outputs", "output"), ("inner", "inner"))


@dataclass(frozen=True, slots=True)
class ControlText:
    """A reset or preset as written and checked.

    Attributes:
        kind: Which of the two.
        text: The equation.
        condition: What it says.
        location: Where.
        asynchronous: It acts at once, not at the clock edge.
        never_too: Impossible inputs are don't cares of it.
    """

    kind: Control
    text: str
    condition: Condition
    location: Location
    asynchronous: bool
    never_too: bool


@dataclass(frozen=True, slots=True)
class RegisterText:
    """How a signal is clocked, as written and checked.

    Attributes:
        signal: The signal.
        wish: The register asked for.
        clock: Name of the input bit.
        falling: At the edge to 0 of the asserted clock.
        start: Number that it holds at power-up; ``None`` if nobody cares.
        controls: Its reset and preset, as far as it has them.
        location: Where the clock is named.
    """

    signal: Signal
    wish: RegisterWish
    clock: str
    falling: bool
    start: int | None
    controls: tuple[ControlText, ...]
    location: Location


def check_register(table: Section, misspelt: Container[str]) -> bool:
    """Whether a declaration asks for a register; report keys that need one that is not there."""
    if "register" in table or "register" in misspelt:
        check_clock(table, misspelt)
        return True
    key = next((key for key in REGISTER_KEYS if key in table), None)
    if key is not None:
        table.error(
            "REGISTER-MISSING",
            f"{key!r} without 'register': a signal without a register has none",
            table.key_at(key),
            'add register = "D", or "any" for what the device offers',
        )
        return True  # it was meant to be one, so its name may be named in its own equation
    return False


def check_clock(table: Section, misspelt: Container[str]) -> None:
    """Report that there is no clock, unless that was misspelt."""
    if "clock" not in misspelt:
        table.raw("clock", required=True, hint=_CLOCK_HINT)


def read_registers(top: Section, signals: Signals) -> list[RegisterText]:
    """How the registered signals of [outputs] and [inner] are clocked.

    What is wrong goes to the section's diagnostics; such signals are left out.
    """
    found = []
    for key, role in _SECTIONS:
        section = top.section(key)
        for name in section if section is not None else ():
            signal = signals.by_name.get(name)
            if section is None or signal is None or signal.role != role:
                continue
            table = section.section(name) if isinstance(section.raw(name), dict) else None
            if table is None or "register" not in table:
                continue
            start = table.integer("start", low=0, high=(1 << signal.size) - 1)
            register = read_clocking(table, signal, signals, start, CONTROLS)
            if register is not None:
                found.append(register)
    return found


def read_clocking(
    table: Section,
    signal: Signal | None,
    signals: Signals,
    start: int | None,
    controls: tuple[Control, ...],
) -> RegisterText | None:
    """The keys that outputs, inner signals and state tables have alike.

    Args:
        table: Where they stand.
        signal: What is clocked; ``None`` if that cannot be told, which has been reported.
        signals: What is declared.
        start: What it holds at power-up.
        controls: Which of reset and preset there may be.

    Returns:
        ``None`` if something is wrong, which has been reported.
    """
    diagnostics = table.diagnostics
    before = len(diagnostics.errors)
    wish: RegisterWish = table.choice("register", _WISHES, default="any")
    clock, falling = _read_clock(table, signals)
    found = [_read_control(table, kind, signals) for kind in controls]
    if len(diagnostics.errors) > before or clock is None or signal is None:
        return None
    return RegisterText(
        signal,
        wish,
        clock,
        falling,
        start,
        tuple(control for control in found if control is not None),
        table.at("clock"),
    )


def _read_clock(table: Section, signals: Signals) -> tuple[str | None, bool]:
    """Name of the clock, and whether the edge to 0 counts."""
    text = table.text("clock")
    if text is None:
        return None, False
    name = text.strip()
    falling = name.endswith("'")
    name = name[:-1].rstrip() if falling else name
    at = table.at("clock")
    try:
        field = signals.find(name, "outside")
    except Problem as problem:
        if not problem.known:
            hint = problem.hint
            if problem.code == "NAME-ROLE":
                hint = f"a clock comes from an input; {hint}"
            elif problem.code == "NAME-SYNTAX":
                hint = "a clock is the name of an input, with ' behind it for the falling edge"
            table.error(problem.code, problem.message, at, hint)
        return None, False
    bit = field.bits[0]
    if not field.is_bit or bit is None:
        base = name.partition("[")[0]
        message = f"{name!r} has {field.width} bits, expected one input as the clock"
        table.error("BUS-AS-BIT", message, at, f"name a bit, such as {base}[0]")
        return None, False
    return signals.input_names[bit], falling


def _read_control(table: Section, kind: Control, signals: Signals) -> ControlText | None:
    when = table.choice(f"{kind}_when", _WHEN, default="asynchronous")
    if kind not in table:
        if f"{kind}_when" in table:
            table.error(
                "CONTROL-MISSING",
                f"'{kind}_when' without '{kind}'",
                table.key_at(f"{kind}_when"),
                f'add {kind} = "…", an equation, or leave it out',
            )
        return None
    text = table.raw(kind)
    if not isinstance(text, str):
        table.wrong("an equation in quotes", kind)
        return None
    condition = read_condition(table, (*table.path, kind), text, signals)
    if condition is None:
        return None
    never_too = table.data.get("never_too") is True
    at = table.at(kind)
    return ControlText(kind, text, condition, at, when == "asynchronous", never_too)
