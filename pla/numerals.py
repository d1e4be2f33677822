"""Numbers and ranges as people write them in design and device files."""

from __future__ import annotations

import re

__all__ = ["is_hexadecimal", "parse_number", "parse_span", "proposal"]

_NUMBER = re.compile(r"0x[0-9A-Fa-f]+|0b[01]+|0|[1-9][0-9]*")
_MAX_DIGITS = 100

# Other notations for "from … to …" and for hexadecimal, to tell a user what was meant.
_BETWEEN = re.compile(r"\s*(?:\.{2,}|…|-|–|—|:|\bto\b)\s*")
_HEXADECIMAL = re.compile(
    r"(?:0[xX]|\$|#|&[hH])(?P<behind>[0-9A-Fa-f]+)"
    r"|(?P<before>[0-9A-Fa-f]+)[hH]"
    r"|(?!0b)(?P<bare>[0-9A-F]{2,}|(?=.*[0-9])[0-9A-Fa-f]{2,})"
)


def parse_number(text: str) -> int:
    """A whole number in decimal without leading zeros, ``0x…`` or ``0b…``.

    Raises:
        ValueError: With a message that completes "… is": for anything else.
    """
    if not text:
        raise ValueError("not a number")
    if not _NUMBER.fullmatch(text):
        if text.isascii() and text.isdecimal():
            raise ValueError("a decimal number with a leading zero")
        raise ValueError("not a number")
    if len(text) > _MAX_DIGITS:
        raise ValueError("too long for a number")
    return int(text, 0)


def parse_span(text: str) -> tuple[int, int]:
    """The ends of a range ``a..b``, in the order written; a single number is both.

    Raises:
        ValueError: With a message that completes "… is".
    """
    head, dots, tail = text.partition("..")
    try:
        first = parse_number(head.strip())
        return first, parse_number(tail.strip()) if dots else first
    except ValueError as fault:
        if dots and str(fault) == "not a number":
            raise ValueError("not a range") from None
        raise


def proposal(text: str) -> str | None:
    """How a number or range in another notation is written here; ``None`` if nobody can tell.

    Such as ``0x9F000..0x9FFFF`` for ``9F000-9FFFF``.
    """
    parts = [part.replace("_", "") for part in _BETWEEN.split(text.strip())]
    if len(text) > _MAX_DIGITS or len(parts) > 2:
        return None
    for reading in (_plain, _hexadecimal):
        numbers = [number for part in parts if (number := reading(part)) is not None]
        if len(numbers) == len(parts):
            meant = "..".join(numbers)
            return None if meant == text else meant
    return None


def is_hexadecimal(text: str) -> bool:
    """Whether a number or range is written in hexadecimal, or seems to be meant so."""
    return "0x" in text or "0x" in (proposal(text) or "")


def _plain(part: str) -> str | None:
    if part.isascii() and part.isdecimal():
        return part.lstrip("0") or "0"
    return part if _NUMBER.fullmatch(part) else None


def _hexadecimal(part: str) -> str | None:
    found = _HEXADECIMAL.fullmatch(part)
    return f"0x{found[found.lastgroup]}" if found and found.lastgroup else None
