"""What this version cannot plan for yet, in one place."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Collection, Mapping

    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = [
    "BURIED",
    "CELL_LATER",
    "DROP",
    "FEEDBACK",
    "KIND_LATER",
    "LATER",
    "MODE_LATER",
    "OWN_TERMS",
    "REGISTERS",
    "TOP_LATER",
    "known_keys",
    "not_yet",
]

LATER = "NOT-YET"

REGISTERS = "registers are"
OWN_TERMS = "cells with OR gates of their own are"
FEEDBACK = "feedback is"
DROP = "links that drop a whole term are"
BURIED = "cells without a pin are"
_ENABLES = "output enables are"
_BY_MODE = "columns that differ by mode are"

TOP_LATER = {
    "register": REGISTERS,
    "extends": "device files that extend another are",
    "set": "device-wide modes are",
    "signature": "signature fuses are",
    "timing": "timings are",
    "enable": _ENABLES,
    "drop": DROP,
}
KIND_LATER = {
    "register": REGISTERS,
    "enable": _ENABLES,
    "terms": OWN_TERMS,
    "columns": _BY_MODE,
    "drop": DROP,
}
MODE_LATER = {
    **dict.fromkeys("dtjksr", REGISTERS),
    "feedback": FEEDBACK,
    "terms": OWN_TERMS,
    "enable": _ENABLES,
    "columns": _BY_MODE,
}
CELL_LATER = {
    "enable": _ENABLES,
    "terms": OWN_TERMS,
    "clock": REGISTERS,
    "reset": REGISTERS,
    "preset": REGISTERS,
}


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
        hint or "this version plans for arrays with shared OR gates and combinational outputs",
    )


def known_keys(section: Section, allowed: Collection[str], later: Mapping[str, str]) -> None:
    """Report keys that are unknown, and keys that are known but not supported yet."""
    section.unknown_keys([*allowed, *later])
    for key in section:
        if key in later and key not in allowed:
            not_yet(section, later[key], section.key_at(key), f"key {key!r} in {section.title}")
