"""Parts of the design file that the program does not read yet: each is refused by name."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pla.tomlfile import Section

__all__ = ["refuse_unsupported"]

_NOT_YET = {
    "file": {
        "inner": "inner signals",
        "state_table": "state tables",
    },
    "input": {"asynchronous": "asynchronous inputs"},
    "output": {
        "register": "registered outputs",
        "clock": "registered outputs",
        "reset": "registered outputs",
        "preset": "registered outputs",
        "start": "registered outputs",
        "enable": "three-state outputs",
        "glitch_free": "glitch-free outputs",
        "never_too": "enables, clocks, resets and presets",
        "keep": "registered outputs",
    },
    "table": {"keep": "registered outputs", "never_too": "enables, clocks, resets and presets"},
}


def refuse_unsupported(section: Section, kind: str) -> tuple[str, ...]:
    """Report every key that is not supported yet, and return these keys.

    Args:
        section: Where to look.
        kind: ``file``, ``input``, ``output`` or ``table``.
    """
    refused = tuple(key for key in _NOT_YET[kind] if key in section)
    for key in refused:
        section.error(
            "NOT-SUPPORTED-YET",
            f"{key!r}: {_NOT_YET[kind][key]} are not supported yet",
            section.key_at(key),
            "this version plans combinational outputs on a shared OR array",
        )
    return refused
