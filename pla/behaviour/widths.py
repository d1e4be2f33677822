"""Reading how many bits a signal has."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from pla.logic.cubes import MAX_INPUTS, MAX_OUTPUTS

if TYPE_CHECKING:
    from pla.behaviour.signals import Role
    from pla.tomlfile import Section

__all__ = ["MOST_BITS", "read_bits"]

MOST_BITS = {"input": MAX_INPUTS, "output": MAX_OUTPUTS, "inner": MAX_OUTPUTS}
"""How many bits all signals of one role may have together."""

_SPAN = re.compile(r"([0-9]+):([0-9]+)")
_HIGHEST_BIT = 255


def read_bits(section: Section, role: Role, key: str) -> tuple[int, int, bool] | None:
    """(high, low, is a bus) from a width or, for inputs, ``"high:low"``."""
    value = section.raw(key)
    most = MOST_BITS[role]
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
