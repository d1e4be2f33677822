"""Parts of the design file that are not read, or not here: each is refused by name."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pla.tomlfile import Section

__all__ = ["MISPLACED", "refuse_unsupported"]

MISPLACED = {"never_too": "it stands in [outputs], in the table of an output with an enable"}
"""For keys of descriptions that belong elsewhere, the hint."""

_NOT_YET: dict[str, dict[str, str]] = {
    "input": {},
    "output": {"glitch_free": "glitch-free outputs", "keep": "kept outputs"},
    "inner": {
        "glitch_free": "glitch-free inner signals",
        "keep": "kept inner signals",
    },
    "table": {"keep": "kept outputs"},
}


def refuse_unsupported(section: Section, kind: str) -> tuple[str, ...]:
    """Report every key that is not supported yet, and return these keys.

    Args:
        section: Where to look.
        kind: ``input``, ``output``, ``inner`` or ``table``.
    """
    refused = tuple(key for key in _NOT_YET[kind] if key in section)
    for key in refused:
        section.error(
            "NOT-SUPPORTED-YET",
            f"{key!r}: {_NOT_YET[kind][key]} are not supported yet",
            section.key_at(key),
            "this version plans combinational outputs",
        )
    return refused
