"""Reading ``[inputs]`` and ``[outputs]``."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Literal

from pla.behaviour.signals import RESERVED, Role, Signal, Signals
from pla.behaviour.unsupported import refuse_unsupported
from pla.logic.cubes import MAX_INPUTS, MAX_OUTPUTS

if TYPE_CHECKING:
    from collections.abc import Container

    from pla.tomlfile import Section

__all__ = ["read_signals"]

_NAME = re.compile(r"[A-Za-z_][A-Za-z0-9_]*")
_SPAN = re.compile(r"([0-9]+):([0-9]+)")
_MOST = {"input": MAX_INPUTS, "output": MAX_OUTPUTS}
_EXAMPLE = {"input": "start = 1", "output": "fan = 1"}
_HIGHEST_BIT = 255
_MEANT = {
    "active_low": 'did you mean active = "low"?',
    "active_high": 'did you mean active = "high"?',
    "width": "did you mean 'bits'?",
}
_KEYS = {"input": ("active", "bits"), "output": ("active", "bits", "impossible")}


def read_signals(top: Section, misspelt: Container[str] = ()) -> Signals:
    """All declarations; what is wrong goes to the section's diagnostics.

    Args:
        top: The file.
        misspelt: Keys that were meant by unknown ones, which have been reported.
    """
    inner = top.data.get("inner")
    # Inner signals are refused as a whole, so that their names are no riddle.
    broken: set[str] = set(inner) if isinstance(inner, dict) else set()
    inputs = _read_role(top, "input", broken, {}, misspelt)
    outputs = _read_role(top, "output", broken, {s.name: s for s in inputs}, misspelt)
    return Signals(tuple(inputs), tuple(outputs), frozenset(broken))


def _read_role(
    top: Section,
    role: Role,
    broken: set[str],
    taken: dict[str, Signal],
    misspelt: Container[str],
) -> list[Signal]:
    key = f"{role}s"
    if key not in top and key in misspelt:
        return []
    section = top.section(
        key, required=True, hint=f"begin a section [{key}] with lines such as: {_EXAMPLE[role]}"
    )
    if section is None:
        return []
    found: list[Signal] = []
    first = 0
    for name in section:
        signal = _read_signal(section, role, name, first)
        if signal is None:
            broken.add(name)
            continue
        if name in taken:
            broken.add(name)
            section.error(
                "NAME-TWICE",
                f"{name!r} is declared as an input and as an output",
                section.key_at(name),
                f"the input is declared at {taken[name].location}",
            )
            continue
        found.append(signal)
        first += signal.size
    if not section.data:
        section.error(f"NO-{role.upper()}S", f"[{key}] is empty, expected at least one {role}")
    if first > _MOST[role]:
        section.error(
            f"TOO-MANY-{role.upper()}S",
            f"{first} {role} bits are declared, at most {_MOST[role]} are possible",
        )
    return found


def _read_signal(section: Section, role: Role, name: str, first: int) -> Signal | None:
    if not _NAME.fullmatch(name):
        section.error(
            "NAME-SYNTAX",
            f"{name!r} is not a name: names are made of the letters A to Z and a to z, digits and "
            "underscores, and do not start with a digit",
            section.key_at(name),
        )
        return None
    if name in RESERVED:
        section.error(
            "NAME-RESERVED",
            f"{name!r} is a reserved word and cannot name an {role}",
            section.key_at(name),
            f"reserved are: {', '.join(RESERVED)}",
        )
        return None
    value = section.raw(name)
    active_low = False
    impossible: Literal[0, 1] | None = None
    bits: tuple[int, int, bool] | None = (0, 0, False)
    refused: tuple[str, ...] = ()
    table = section.section(name) if isinstance(value, dict) else None
    if table is not None:
        refused = refuse_unsupported(table, role)
        table.unknown_keys((*_KEYS[role], *refused), _MEANT)
        active_low = table.choice("active", ("high", "low"), default="high") == "low"
        if role == "output":
            impossible = table.choice("impossible", (0, 1))
        if "bits" in table:
            bits = _read_bits(table, role, "bits")
    else:
        bits = _read_bits(section, role, name)
    if bits is None:
        return None
    high, low, is_bus = bits
    at = section.key_at(name)
    return Signal(
        name, role, first, high, low, is_bus, active_low, impossible, at, deferred=bool(refused)
    )


def _read_bits(section: Section, role: Role, key: str) -> tuple[int, int, bool] | None:
    """(high, low, is a bus) from a width or, for inputs, ``"high:low"``."""
    value = section.raw(key)
    most = _MOST[role]
    if isinstance(value, int) and not isinstance(value, bool):
        if 1 <= value <= most:
            return value - 1, 0, value > 1
        section.error(
            "WIDTH",
            f"{key!r} has {value} bits, expected 1 to {most}",
            section.at(key),
        )
        return None
    if isinstance(value, str) and role == "input":
        return _read_span(section, key, value)
    wanted = f"a number of bits from 1 to {most}"
    if role == "input":
        wanted += ', or "high:low" for a bus of which only these bits reach the device'
    section.wrong(wanted + ", or a table { … }" if key != "bits" else wanted, key)
    return None


def _read_span(section: Section, key: str, value: str) -> tuple[int, int, bool] | None:
    found = _SPAN.fullmatch(value.strip())
    if not found or len(value) > 20:
        section.wrong('a number of bits, or "high:low" such as "15:8"', key)
        return None
    high, low = int(found[1]), int(found[2])
    if high < low:
        section.error(
            "PART-REVERSED",
            f'"{value}" runs from low to high, expected the higher bit first',
            section.at(key),
            f'write "{low}:{high}"',
        )
        return None
    if high > _HIGHEST_BIT or high - low + 1 > MAX_INPUTS:
        section.error(
            "WIDTH",
            f'"{value}" is too wide: at most {MAX_INPUTS} bits reach the device, and the highest '
            f"bit is at most {_HIGHEST_BIT}",
            section.at(key),
        )
        return None
    return high, low, True
