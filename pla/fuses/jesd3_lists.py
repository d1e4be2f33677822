"""Reading the fuses of a fuse file: lists, default state, fuse checksum."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from pla.fuses.fusemap import FuseMap
from pla.fuses.jesd3_model import MAX_FUSES
from pla.fuses.jesd3_values import (
    BEYOND,
    WHITE,
    bit,
    decimal,
    name_of,
    numbered_list,
    shown,
    single,
    word,
)

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fuses.jesd3_fields import Findings
    from pla.fuses.jesd3_model import Field

__all__ = ["Fuses", "read_fuses"]

_STATES = bytes.maketrans(b"01", b"\0\1")
_CHECKSUM = re.compile(rb"[0-9A-Fa-f]{4}")
_UNLISTED = re.compile(rb"\0+")
_RANGES_SHOWN = 5
_VARIANT = (
    "families come with and without signature fuses: is this the file and the QF of that variant?"
)


@dataclass(frozen=True, slots=True)
class Fuses:
    """What the programming fields say together.

    Attributes:
        size: How many, by QF; ``None`` if that is unknown.
        map: Every fuse as the lists and the default have it, also where the checksum disagrees;
            ``None`` if the lists leave open what is meant.
        default: State of the fuses in no list.
        given_checksum: As written.
    """

    size: int | None
    map: FuseMap | None
    default: int | None
    given_checksum: int | None


def read_fuses(findings: Findings, fields: Sequence[Field]) -> Fuses:
    """Fill every fuse from the lists and the default, and hold the result against ``C``."""
    errors = _errors(findings)
    size = _size(findings, fields)
    default = single(findings, fields, "F", bit)
    checksum = single(findings, fields, "C", _read_checksum)
    lists = [field for field in fields if field.identifier in {"L", "K"}]
    # Without a size the lists are still looked at, so that all errors are told in one go.
    states, listed = bytearray(size or 0), bytearray(size or 0)
    for field in lists:
        read = _read_list(findings, field, size)
        if read is not None and size is not None:
            _place(findings, field, read, states, listed)
    said = (default[0] if default else None, checksum[0] if checksum else None)
    if size is None or _errors(findings) > errors:
        return Fuses(size, None, *said)

    unlisted = listed.count(0)
    if unlisted and default is None:
        _unlisted(findings, fields, listed, unlisted)
        return Fuses(size, None, *said)
    if default is not None and default[0]:
        # A fuse in no list is 0 in both arrays so far.
        states = bytearray((np.frombuffer(states, np.uint8) | (1 - _octets(listed))).tobytes())
    fuses = FuseMap(bytes(states))
    if checksum is not None and checksum[0] != fuses.checksum:
        _wrong_checksum(findings, checksum[1], checksum[0], fuses.checksum)
        return Fuses(size, fuses, *said)
    if default is not None and lists and default[1].offset > lists[0].offset:
        _late_default(findings, default[1], lists[0], confirmed=checksum is not None)
        if checksum is None:
            return Fuses(size, None, *said)
    return Fuses(size, fuses, *said)


def _octets(data: bytearray) -> np.ndarray[tuple[int], np.dtype[np.uint8]]:
    return np.frombuffer(data, np.uint8)


def _errors(findings: Findings) -> int:
    return sum(n for (_, severity), n in findings.count.items() if severity == "error")


def _size(findings: Findings, fields: Sequence[Field]) -> int | None:
    """The number of fuses, bounded: a few bytes must not make the reader fill the memory."""
    size = single(findings, fields, "QF", decimal)
    if size is None:
        if not any(field.identifier == "QF" for field in fields):
            design = fields[0].body.strip(WHITE)
            hint = "QF gives the number of fuses, as in QF966*"
            if re.search(rb"QF[0-9]", design):
                hint = (
                    f"the design specification, which runs up to the first *, holds "
                    f"{shown(design)}: a * has to stand before QF"
                )
            findings.error(
                "NO-QF", fields[0].offset, None, "no QF field: how many fuses is unknown", hint
            )
        return None
    number, field = size
    if not 1 <= number <= MAX_FUSES:
        findings.error(
            "FUSE-COUNT",
            field.body_offset,
            "QF",
            f"{shown(field.body.strip(WHITE))} fuses; from 1 to {MAX_FUSES} are read",
        )
        return None
    return number


def _read_checksum(findings: Findings, field: Field) -> int | None:
    value = word(findings, field, _CHECKSUM, "four hexadecimal digits")
    return None if value is None else int(value, 16)


@dataclass(frozen=True, slots=True)
class _List:
    first: int
    states: bytes
    written: bytes
    offset: int
    fuses_to_a_digit: int

    def offset_of(self, index: int) -> int:
        """Where the state of the list's fuse `index` is written."""
        written = np.frombuffer(self.written, np.uint8)
        marks = np.flatnonzero(~np.isin(written, np.frombuffer(WHITE, np.uint8)))
        return self.offset + int(marks[index // self.fuses_to_a_digit])


def _read_list(findings: Findings, field: Field, size: int | None) -> _List | None:
    if field.identifier == "L":
        parts = numbered_list(findings, field, b"01", "fuse states")
        if parts is None:
            return None
        first, written, offset = parts
        return _List(first, written.translate(_STATES, WHITE), written, offset, 1)

    findings.warning(
        "HEXADECIMAL-LIST",
        field.offset,
        name_of(field),
        "read with the first fuse of each four in the most significant bit of the digit; "
        "not every program writes it so",
        "hold the fuse checksum against one computed elsewhere",
    )
    parts = numbered_list(findings, field, b"0123456789ABCDEFabcdef", "hexadecimal digits")
    if parts is None:
        return None
    first, written, offset = parts
    digits = written.translate(None, WHITE)
    octets = bytes.fromhex((digits + b"0" * (len(digits) & 1)).decode("ascii"))
    bits = np.unpackbits(np.frombuffer(octets, np.uint8)).tobytes()[: 4 * len(digits)]
    if size is not None and 0 < first + len(bits) - size < 4 and first < size:
        # The last digit may reach past the last fuse, if only zeros stick out.
        kept = bits[: size - first]
        if not any(bits[size - first :]):
            bits = kept
    return _List(first, bits, written, offset, 4)


def _place(
    findings: Findings, field: Field, read: _List, states: bytearray, listed: bytearray
) -> None:
    size, first = len(states), read.first
    end = first + len(read.states)
    name = name_of(field)
    if end > size:
        beyond = max(size - first, 0)
        # An address with more digits than any device has is not worth repeating.
        missing = f"fuse {first + beyond}" if first < BEYOND else "a fuse past 999999999"
        findings.error(
            "NO-SUCH-FUSE",
            read.offset_of(beyond) if beyond else field.offset,
            name,
            f"{missing} does not exist: QF{size} means fuses 0 to {size - 1}, "
            f"and {len(read.states)} states stand here",
            _VARIANT,
        )
        return
    again = listed.count(1, first, end)
    if again:
        fuse = listed.index(1, first, end)
        more = f" and {again - 1} more" if again > 1 else ""
        before = _octets(listed)[first:end] == 1
        old, new = _octets(states)[first:end], np.frombuffer(read.states, np.uint8)
        changed = int(np.count_nonzero(before & (old != new)))
        outcome = f"{changed} get another state" if changed else "the states are the same"
        findings.warning(
            "FUSE-AGAIN",
            read.offset_of(fuse - first),
            name,
            f"fuse {fuse}{more} was in a list before; the last state counts ({outcome})",
        )
    states[first:end] = read.states
    listed[first:end] = b"\1" * (end - first)


def _unlisted(
    findings: Findings, fields: Sequence[Field], listed: bytearray, unlisted: int
) -> None:
    ranges: list[str] = []
    for gap in _UNLISTED.finditer(listed):
        if len(ranges) == _RANGES_SHOWN:
            ranges.append("...")
            break
        first, last = gap.start(), gap.end() - 1
        ranges.append(f"{first}" if first == last else f"{first} to {last}")
    size = next(field for field in fields if field.identifier == "QF")
    findings.error(
        "UNLISTED-FUSES",
        size.offset,
        "QF",
        f"no F field gives a default state, and {unlisted} of {len(listed)} fuses are in no "
        f"list: {', '.join(ranges)}",
        "without F every fuse has to be listed",
    )


def _wrong_checksum(findings: Findings, field: Field, given: int, computed: int) -> None:
    hint = "fuses were lost or changed on the way, or QF is that of another variant"
    if given == 0:
        hint = "0000 stands for 'not computed' in the transmission sum only, never in C"
    findings.error(
        "WRONG-CHECKSUM",
        field.body_offset,
        "C",
        f"the fuse checksum is given as {given:04X}, but the fuses add up to {computed:04X}",
        hint,
    )


def _late_default(findings: Findings, field: Field, first: Field, *, confirmed: bool) -> None:
    """A default behind a list: for unlisted fuses only, or does it wipe what was listed?"""
    message = f"the default comes after the first fuse list ({name_of(first)})"
    if confirmed:
        message += "; taken for the fuses in no list, which the fuse checksum confirms"
        findings.warning("LATE-DEFAULT", field.offset, "F", message)
        return
    message += ", and no C field tells whether it is meant for the fuses before it too"
    hint = "F has to stand before the first L or K"
    findings.error("LATE-DEFAULT", field.offset, "F", message, hint)
