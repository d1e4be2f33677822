"""Reading ``[inputs]``, ``[outputs]`` and ``[inner]``."""

from __future__ import annotations

import re
from dataclasses import replace
from fractions import Fraction
from math import isfinite
from typing import TYPE_CHECKING, Literal

from pla.behaviour.signals import RESERVED, Role, Signal, Signals
from pla.behaviour.unsupported import refuse_unsupported
from pla.logic.cubes import MAX_INPUTS, MAX_OUTPUTS

if TYPE_CHECKING:
    from collections.abc import Container

    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = ["read_delay", "read_signals"]

_NAME = re.compile(r"[A-Za-z_][A-Za-z0-9_]*")
_SPAN = re.compile(r"([0-9]+):([0-9]+)")
_SECTION = {"input": "inputs", "output": "outputs", "inner": "inner"}
_MOST = {"input": MAX_INPUTS, "output": MAX_OUTPUTS, "inner": MAX_OUTPUTS}
_EXAMPLE = {"input": "start = 1", "output": "fan = 1"}
_HIGHEST_BIT = 255
_MEANT = {
    "active_low": 'did you mean active = "low"?',
    "active_high": 'did you mean active = "high"?',
    "width": "did you mean 'bits'?",
}
_KEYS = {
    "input": ("active", "bits"),
    "output": ("active", "bits", "impossible", "enable", "never_too", "reads", "max_delay"),
    "inner": ("bits",),
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
    outputs, read = _read_back(top, inputs, outputs, broken, taken)
    return Signals(tuple(inputs + read), tuple(outputs), tuple(inner), frozenset(broken))


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
            _report_twice(section, signal, taken[name], section.key_at(name))
            continue
        taken[name] = signal
        found.append(signal)
        first += signal.size
    if not section.data and role != "inner":
        section.error(f"NO-{role.upper()}S", f"[{key}] is empty, expected at least one {role}")
    if start <= _MOST[role] < first:
        bits = "output and inner" if role == "inner" else role
        section.error(
            "TOO-MANY-OUTPUTS" if role == "inner" else f"TOO-MANY-{role.upper()}S",
            f"{first} {bits} bits are declared, at most {_MOST[role]} are possible",
        )
    return found


def _report_twice(section: Section, signal: Signal, earlier: Signal, at: Location) -> None:
    first, second = (
        f"what the output {s.read_from} reads" if s.read_from else s.called
        for s in (earlier, signal)
    )
    section.error(
        "NAME-TWICE",
        f"{signal.name!r} is declared as {first} and as {second}",
        at,
        f"the {earlier.called.partition(' ')[2]} is declared at {earlier.location}",
    )


def _read_signal(section: Section, role: Role, name: str, first: int) -> Signal | None:
    if not _check_name(section, name, role, section.key_at(name)):
        return None
    value = section.raw(name)
    active_low = False
    impossible: Literal[0, 1] | None = None
    max_delay: Fraction | None = None
    bits: tuple[int, int, bool] | None = (0, 0, False)
    refused: tuple[str, ...] = ()
    table = section.section(name) if isinstance(value, dict) else None
    if table is not None:
        refused = refuse_unsupported(table, role)
        pins = _refuse_pins(table) if role == "inner" else ()
        meant = table.unknown_keys((*_KEYS[role], *refused, *pins), _MEANT)
        if role != "inner":
            active_low = table.choice("active", ("high", "low"), default="high") == "low"
        if role == "output":
            impossible = table.choice("impossible", (0, 1))
            max_delay = read_delay(table, "max_delay")
            _check_enable(table, meant)
        if "bits" in table:
            bits = _read_bits(table, role, "bits")
    else:
        bits = _read_bits(section, role, name)
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
    )


def _check_name(section: Section, name: str, role: Role, at: Location) -> bool:
    if not _NAME.fullmatch(name):
        section.error(
            "NAME-SYNTAX",
            f"{name!r} is not a name: names are made of the letters A to Z and a to z, digits and "
            "underscores, and do not start with a digit",
            at,
        )
        return False
    if name in RESERVED:
        called = "an inner signal" if role == "inner" else f"an {role}"
        section.error(
            "NAME-RESERVED",
            f"{name!r} is a reserved word and cannot name {called}",
            at,
            f"reserved are: {', '.join(RESERVED)}",
        )
        return False
    return True


def _refuse_pins(table: Section) -> tuple[str, ...]:
    """Report every key of an inner signal that speaks of a pin, and return these keys."""
    refused = tuple(key for key in _OF_PINS if key in table)
    for key in refused:
        table.error(
            "INNER-PIN",
            f"{key!r} in {table.title}: an inner signal has no pin",
            table.key_at(key),
            "leave it out, or declare the signal under [outputs]",
        )
    return refused


def _check_enable(table: Section, meant: Container[str]) -> None:
    """Report keys that say more about an enable that is not there."""
    table.flag("never_too")
    if "enable" in table or "enable" in meant:
        return
    for key, why in (
        ("reads", "a pin that is always driven reads nothing but its own output"),
        ("never_too", "there is no enable that [never] could hold for"),
    ):
        if key in table:
            table.error(
                "ENABLE-MISSING",
                f"{key!r} without 'enable': {why}",
                table.key_at(key),
                'add enable = "…", an equation that is 1 while the output drives its pin',
            )


def _read_back(
    top: Section,
    inputs: list[Signal],
    outputs: list[Signal],
    broken: set[str],
    taken: dict[str, Signal],
) -> tuple[list[Signal], list[Signal]]:
    """The outputs with what their pins are read as, and these inputs."""
    first = sum(s.size for s in inputs)
    few = first <= MAX_INPUTS
    done: list[Signal] = []
    read: list[Signal] = []
    for output in outputs:
        table = _table_of(top, output)
        signal = None if table is None else _read_input(table, output, first)
        if table is None or signal is None:
            done.append(output)
            continue
        if signal.name in taken:
            _report_twice(table, signal, taken[signal.name], signal.location)
            done.append(output)
            continue
        taken[signal.name] = signal
        done.append(replace(output, reads=signal.name))
        read.append(signal)
        first += signal.size
        if few and first > MAX_INPUTS:
            few = False
            table.error(
                "TOO-MANY-INPUTS",
                f"with what {output.name} reads there are {first} input bits, at most "
                f"{MAX_INPUTS} are possible",
                signal.location,
            )
    broken.update(_named_to_read(top) - {s.name for s in read})
    return done, read


def _table_of(top: Section, output: Signal) -> Section | None:
    """The table of an output, if it is declared by one."""
    section = top.section("outputs")
    if section is None or not isinstance(section.raw(output.name), dict):
        return None
    return section.section(output.name)


def _named_to_read(top: Section) -> set[str]:
    """Whatever names are given for the levels at pins, so that none is unknown where it is used."""
    outputs = top.data.get("outputs")
    tables = outputs.values() if isinstance(outputs, dict) else ()
    names = (table.get("reads") for table in tables if isinstance(table, dict))
    return {name for name in names if isinstance(name, str)}


def _read_input(table: Section, output: Signal, first: int) -> Signal | None:
    """The input that an output's table names as the level at its pin."""
    name = table.text("reads")
    if name is None:
        return None
    at = table.at("reads")
    if not _check_name(table, name, "input", at) or "enable" not in table:
        return None
    return replace(
        output,
        name=name,
        role="input",
        first=first,
        impossible=None,
        location=at,
        deferred=False,
        read_from=output.name,
        max_delay=None,
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
