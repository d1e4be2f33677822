"""What this version cannot plan for yet, in one place."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Collection, Mapping

    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = [
    "CELL_LATER",
    "KIND_LATER",
    "LATER",
    "MODE_LATER",
    "REGISTERS",
    "SHOWS_LATER",
    "TIMING_LATER",
    "TOP_LATER",
    "known_keys",
    "not_yet",
]

LATER = "NOT-YET"

REGISTERS = "registers are"

TOP_LATER = {"register": REGISTERS}
KIND_LATER = dict.fromkeys(("register", "clock", "reset", "preset"), REGISTERS)
MODE_LATER = dict.fromkeys(("d", "t", "j", "k", "s", "r", "clock", "reset", "preset"), REGISTERS)
CELL_LATER = dict.fromkeys(("register", "clock", "reset", "preset"), REGISTERS)
TIMING_LATER = dict.fromkeys(("tco", "tsu", "th", "fmax"), REGISTERS)
SHOWS_LATER = ("q", "q'")


def not_yet(
    section: Section, what: str, location: Location, found: str, hint: str | None = None
) -> None:
    """Report something that a device file may say but this version cannot use.

    `what` is the subject with its verb, such as ``registers are``.
    """
    section.error(
        LATER,
        f"{found}: {what} not supported yet",
        location,
        hint or "this version plans for arrays with combinational outputs",
    )


def known_keys(section: Section, allowed: Collection[str], later: Mapping[str, str]) -> None:
    """Report keys that are unknown, and keys that are known but not supported yet."""
    section.unknown_keys([*allowed, *later])
    for key in section:
        if key in later and key not in allowed:
            not_yet(section, later[key], section.key_at(key), f"key {key!r} in {section.title}")
