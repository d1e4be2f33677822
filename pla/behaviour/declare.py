"""Reading ``[inputs]``, ``[outputs]`` and ``[inner]``."""

from __future__ import annotations

from fractions import Fraction
from math import isfinite
from typing import TYPE_CHECKING, Literal

from pla.behaviour.clocking import CONTROLS, REGISTER_KEYS, check_register
from pla.behaviour.declaring import check_name, report_twice
from pla.behaviour.present import with_present_values
from pla.behaviour.read_back import read_back
from pla.behaviour.signals import Role, Signal, Signals
from pla.behaviour.unsupported import refuse_unsupported
from pla.behaviour.widths import MOST_BITS, read_bits

if TYPE_CHECKING:
    from collections.abc import Container

    from pla.behaviour.machines import MachineHead
    from pla.tomlfile import Section

__all__ = ["read_delay", "read_signals"]

_SECTION = {"input": "inputs", "output": "outputs", "inner": "inner"}
_EXAMPLE = {"input": "start = 1", "output": "fan = 1"}
_MEANT = {
    "active_low": 'did you mean active = "low"?',
    "active_high": 'did you mean active = "high"?',
    "width": "did you mean 'bits'?",
}
_KEYS = {
    "input": ("active", "bits", "asynchronous"),
    "output": (
        *("active", "bits", "impossible", "enable", "never_too", "reads", "max_delay"),
        *REGISTER_KEYS,
    ),
    "inner": ("bits", "never_too", *REGISTER_KEYS),
}
_LONGEST_DELAY = 1_000_000  # ns
_OF_PINS = ("active", "impossible", "enable", "never_too", "reads", "max_delay")


def read_signals(top: Section, misspelt: Container[str] = ()) -> Signals:
    """All declarations; what is wrong goes to the section's diagnostics.

    Args:
        top: The file.
        misspelt: Keys that were meant by unknown ones, which have been reported.
    """
    broken: set[str] = set()
    taken: dict[str, Signal] = {}
    inputs = _read_role(top, "input", broken, taken, misspelt)
    outputs = _read_role(top, "output", broken, taken, misspelt)
    n_outputs = sum(s.size for s in outputs)
    inner = _read_role(top, "inner", broken, taken, misspelt, n_outputs)
    heads: list[MachineHead] = []
    if "state_table" in top:
        from pla.behaviour.machines import declare_states  # noqa: PLC0415 - few designs need it

        heads, outputs, inner = declare_states(top, outputs, inner, broken, taken)
    outputs, read = read_back(top, inputs, outputs, broken, taken)
    inputs = with_present_values(top, inputs + read, outputs + inner)
    return Signals(tuple(inputs), tuple(outputs), tuple(inner), frozenset(broken), tuple(heads))


def read_delay(section: Section, key: str) -> Fraction | None:
    """A time above 0 in ns, as exactly as it is written."""
    value = section.raw(key)
    if value is None:
        return None
    good = isinstance(value, int | float) and not isinstance(value, bool)
    if not good or not isfinite(value) or value <= 0 or value > _LONGEST_DELAY:
        section.wrong(f"a time in ns, above 0 and at most {_LONGEST_DELAY}", key)
        return None
    return Fraction(str(value))


def _read_role(
    top: Section,
    role: Role,
    broken: set[str],
    taken: dict[str, Signal],
    misspelt: Container[str],
    first: int = 0,
) -> list[Signal]:
    """The signals of one section; their names go to `taken` or `broken`."""
    key = _SECTION[role]
    if key not in top and (key in misspelt or role == "inner"):
        return []
    section = top.section(
        key,
        required=True,
        hint=f"begin a section [{key}] with lines such as: {_EXAMPLE.get(role)}",
    )
    if section is None:
        return []
    found: list[Signal] = []
    start = first
    for name in section:
        signal = _read_signal(section, role, name, first)
        if signal is None:
            broken.add(name)
            continue
        if name in taken:
            broken.add(name)
            report_twice(section, signal, taken[name], section.key_at(name))
            continue
        taken[name] = signal
        found.append(signal)
        first += signal.size
    if not section.data and role != "inner":
        section.error(f"NO-{role.upper()}S", f"[{key}] is empty, expected at least one {role}")
    if start <= MOST_BITS[role] < first:
        bits = "output and inner" if role == "inner" else role
        section.error(
            "TOO-MANY-OUTPUTS" if role == "inner" else f"TOO-MANY-{role.upper()}S",
            f"{first} {bits} bits are declared, at most {MOST_BITS[role]} are possible",
        )
    return found


def _read_signal(section: Section, role: Role, name: str, first: int) -> Signal | None:
    if not check_name(section, name, role, section.key_at(name)):
        return None
    value = section.raw(name)
    active_low = False
    impossible: Literal[0, 1] | None = None
    max_delay: Fraction | None = None
    bits: tuple[int, int, bool] | None = (0, 0, False)
    refused: tuple[str, ...] = ()
    registered = asynchronous = False
    table = section.section(name) if isinstance(value, dict) else None
    if table is not None:
        refused = refuse_unsupported(table, role)
        pins = _refuse_pins(table) if role == "inner" else ()
        meant = table.unknown_keys((*_KEYS[role], *refused, *pins), _MEANT)
        if role == "input":
            asynchronous = table.flag("asynchronous", default=False)
        else:
            registered = check_register(table, meant)
        if role != "inner":
            active_low = table.choice("active", ("high", "low"), default="high") == "low"
        if role == "output":
            impossible = table.choice("impossible", (0, 1))
            max_delay = read_delay(table, "max_delay")
            _check_enable(table, meant)
        if "bits" in table:
            bits = read_bits(table, role, "bits")
    else:
        bits = read_bits(section, role, name)
    if bits is None:
        return None
    high, low, is_bus = bits
    return Signal(
        name=name,
        role=role,
        first=first,
        high=high,
        low=low,
        is_bus=is_bus,
        active_low=active_low,
        impossible=impossible,
        location=section.key_at(name),
        deferred=bool(refused),
        max_delay=max_delay,
        registered=registered,
        asynchronous=asynchronous,
    )


def _refuse_pins(table: Section) -> tuple[str, ...]:
    """Report every key of an inner signal that speaks of a pin, and return these keys."""
    allowed = ("never_too",) if any(key in table for key in CONTROLS) else ()
    refused = tuple(key for key in _OF_PINS if key in table and key not in allowed)
    for key in refused:
        table.error(
            "INNER-PIN",
            f"{key!r} in {table.title}: an inner signal has no pin",
            table.key_at(key),
            "leave it out, or declare the signal under [outputs]",
        )
    return refused


def _check_enable(table: Section, meant: Container[str]) -> None:
    """Report keys that say more about an enable, reset or preset that is not there."""
    table.flag("never_too")
    if "enable" in table or "enable" in meant:
        return
    for key, why in (
        ("reads", "a pin that is always driven reads nothing but its own output"),
        ("never_too", "there is no enable that [never] could hold for"),
    ):
        controlled = key == "never_too" and any(control in table for control in CONTROLS)
        if key in table and not controlled:
            table.error(
                "ENABLE-MISSING",
                f"{key!r} without 'enable': {why}",
                table.key_at(key),
                'add enable = "…", an equation that is 1 while the output drives its pin',
            )
