"""Reading the fields that hold a single value, and the rules that several kinds of field share."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from pla.fuses.jesd3_fields import Findings
    from pla.fuses.jesd3_model import Field

__all__ = [
    "BEYOND",
    "WHITE",
    "as_number",
    "bit",
    "count",
    "decimal",
    "name_of",
    "numbered_list",
    "shown",
    "single",
    "word",
]

WHITE = b" \t\r\n"
_NUMBER = re.compile(rb"[ \t\r\n]*([0-9]+)")
BEYOND = 10**9
"""Stands for every number that is larger: no count or address of a real file gets there."""


def name_of(field: Field) -> str:
    """The field as messages call it: ``QF``, ``L0120``, ``V0003``."""
    if field.identifier in {"L", "K", "V"}:
        number = _NUMBER.match(field.body)
        if number and len(number[1]) <= 9:
            return field.identifier + number[1].decode("ascii")
    return field.identifier or "with no identifier"


def shown(octets: bytes) -> str:
    """Some bytes for a message: short, printable, quoted."""
    text = "".join(chr(b) if 0x20 <= b < 0x7F else f"<{b:02X}>" for b in octets[:24])
    return f"'{text}{'...' if len(octets) > 24 else ''}'"


def as_number(digits: bytes) -> int:
    """The value of decimal digits; everything from 10^9 on is 10^9, so that length is no attack."""
    significant = digits.lstrip(b"0")
    return int(significant or b"0") if len(significant) <= 9 else BEYOND


def word(
    findings: Findings, field: Field, pattern: re.Pattern[bytes], expected: str
) -> bytes | None:
    """The body without white space around it, if it is what was expected."""
    value = field.body.strip(WHITE)
    if pattern.fullmatch(value):
        return value
    found = shown(value) if value else "nothing"
    findings.error(
        "BAD-VALUE",
        field.body_offset,
        name_of(field),
        f"{found} found, {expected} expected",
        "is the * missing that closes this field?" if b"\n" in value else None,
    )
    return None


_DECIMAL = re.compile(rb"[0-9]+")
_BIT = re.compile(rb"[01]")


def decimal(findings: Findings, field: Field) -> int | None:
    """A number that the caller bounds: it may be `BEYOND`."""
    value = word(findings, field, _DECIMAL, "a decimal number")
    return None if value is None else as_number(value)


def count(findings: Findings, field: Field, least: int = 1) -> int | None:
    """A number that a device or a test can have."""
    value = decimal(findings, field)
    if value is None or least <= value < BEYOND:
        return value
    message = (
        f"{shown(field.body.strip(WHITE))} found, a number from {least} to {BEYOND - 1} expected"
    )
    findings.error("BAD-VALUE", field.body_offset, name_of(field), message)
    return None


def bit(findings: Findings, field: Field) -> int | None:
    value = word(findings, field, _BIT, "0 or 1")
    return None if value is None else int(value)


def single(
    findings: Findings,
    fields: Sequence[Field],
    identifier: str,
    read: Callable[[Findings, Field], int | None],
) -> tuple[int, Field] | None:
    """The value of a field that stands at most once, with the field.

    A repetition with the same value is a warning, one with another value an error.
    """
    kept: tuple[int, Field] | None = None
    for field in fields:
        if field.identifier != identifier:
            continue
        value = read(findings, field)
        if value is None:
            continue
        if kept is None:
            kept = value, field
            continue
        text, before = field.body.strip(WHITE), kept[1]
        earlier = f"{identifier}{before.body.strip(WHITE).decode('latin-1')[:24]}"
        if value == kept[0]:
            findings.warning(
                "REPEATED-FIELD", field.offset, identifier, f"{earlier} is said a second time"
            )
        else:
            findings.error(
                "CONFLICT",
                field.offset,
                identifier,
                f"{shown(text)} contradicts {earlier} at byte {before.offset}",
                "one of the two has to go",
            )
    return kept


def numbered_list(
    findings: Findings, field: Field, allowed: bytes, what: str
) -> tuple[int, bytes, int] | None:
    """The parts of a field such as ``L0120 0101…``: number, list, offset of the list.

    The list is as written, white space included; all else in it is one of `allowed`.
    """
    name = name_of(field)
    number = _NUMBER.match(field.body)
    if number is None:
        found = field.body.strip(WHITE)[:1]
        findings.error(
            "BAD-NUMBER",
            field.body_offset,
            name,
            f"{shown(found) if found else 'nothing'} found, a decimal number expected",
        )
        return None
    rest = field.body[number.end() :]
    offset = field.body_offset + number.end()
    if not rest.strip(WHITE):
        findings.error(
            "EMPTY-LIST",
            field.offset,
            name,
            f"no {what} after the number",
            "white space has to stand between the number and the list",
        )
        return None
    wrong = rest.translate(None, allowed + WHITE)
    if wrong or rest[0] not in WHITE:
        # The first byte that does not belong, for the caret.
        at = rest.index(wrong[0]) if wrong else 0
        if rest[0] not in WHITE:
            at = 0
        hint = None
        if rest[at : at + 1].isalpha() and b"\n" in rest[:at]:
            hint = "is the * missing that closes this field?"
        expected = "0 or 1" if allowed == b"01" else f"one of {allowed.decode('ascii')}"
        if at == 0:
            expected = "white space"
        findings.error(
            "BAD-CHARACTER",
            offset + at,
            name,
            f"{shown(rest[at : at + 1])} found among the {what}, {expected} expected",
            hint,
        )
        return None
    return as_number(number[1]), rest, offset
