"""Cutting the bytes of a fuse file into transmission, fields and surroundings, and naming places.

Nothing here knows what a field means. Every function takes time linear in the file.
"""

from __future__ import annotations

import re
from collections import Counter
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Literal

import numpy as np

from pla.errors import InputError, Location
from pla.fuses.jesd3_model import MAX_BYTES, MAX_FIELDS, Field, Frame, FuseDiagnostic

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["ETX", "STX", "Findings", "cut", "transmission_sum"]

STX = 0x02
ETX = 0x03

_SUM = re.compile(rb"[ \t\r\n]*([0-9A-Fa-f]{4})")
_SUM_ALONE = re.compile(rb"[ \t\r\n]*([0-9A-Fa-f]{4})[ \t\r\n\x1a]*\Z")
# Anything that is no printable character cannot begin a field; what it is doing there is the
# reader's concern.
_BEFORE_IDENTIFIER = re.compile(rb"[^\x21-\x7e]*")
_IDENTIFIER = re.compile(rb"Q[FPV]|U[AH]|[\x21-\x7e]?")

_ODD = np.array([n.bit_count() & 1 for n in range(256)], dtype=bool)
_SHOWN_LINE = 160
_SHOWN_OF_A_KIND = 20


def transmission_sum(data: bytes) -> int:
    """Sum of all bytes modulo 2^16, the parity bit excluded."""
    low = np.frombuffer(data, dtype=np.uint8) & 0x7F
    return int(low.sum(dtype=np.uint64)) & 0xFFFF


def cut(raw: bytes, file: str) -> Frame:
    """Find the transmission in a file and its fields.

    Raises:
        InputError: If there is nothing to cut, or too much.
    """
    if len(raw) > MAX_BYTES:
        message = f"larger than {MAX_BYTES} bytes, the most that is read"
        raise InputError([FuseDiagnostic("FILE-TOO-LARGE", message, Location(file))])
    if not raw.strip(b"\0\t\r\n \x1a"):
        message = "holds nothing; expected STX, a design specification, fields, ETX"
        raise InputError([FuseDiagnostic("EMPTY-FILE", message, Location(file, 1, 1))])
    parity = _parity(raw)
    data = bytes(np.frombuffer(raw, dtype=np.uint8) & 0x7F) if parity else raw

    found = data.find(STX)
    start = max(found, 0)
    stop = data.find(ETX, start)
    has_end = stop >= 0
    if not has_end:
        stop = len(data)
    first = start + 1 if found >= 0 else start
    closed = data.rfind(b"*", first, stop) + 1
    if not closed:
        message = "byte 0: no field closed by * was found; this is no JESD3 fuse file"
        hint = "expected STX, a design specification, fields closed by *, ETX and four digits"
        at = Location(file, 1, 1)
        raise InputError([FuseDiagnostic("NOT-A-FUSE-FILE", message, at, hint)])

    digits = _SUM.match(data, stop + 1) if has_end else _SUM_ALONE.match(data, closed)
    if not has_end:
        # A lost ETX stood right before the digits, behind the last line end.
        stop = digits.start(1) if digits else len(data.rstrip(b"\0\t\r\n \x1a"))
    left = closed + len(_BEFORE_IDENTIFIER.match(data[closed:stop])[0])  # type: ignore[index]
    end_of_sum = digits.end(1) if digits else stop + has_end
    return Frame(
        data=data,
        raw=raw,
        parity=parity,
        start=start,
        has_start=found >= 0,
        end=stop,
        has_end=has_end,
        sum_offset=digits.start(1) if digits else end_of_sum,
        sum_digits=digits[1].decode("ascii") if digits else None,
        after=end_of_sum,
        fields=tuple(_fields(data, first, closed, file)),
        unclosed=left if left < stop else None,
    )


def _fields(data: bytes, position: int, stop: int, file: str) -> Iterator[Field]:
    """The fields from `position` to `stop`, which is just behind a ``*``."""
    if data.count(b"*", position, stop) > MAX_FIELDS:
        message = f"more than {MAX_FIELDS} fields, the most that is read"
        raise InputError([FuseDiagnostic("TOO-MANY-FIELDS", message, Location(file))])
    close = data.index(b"*", position)
    yield Field("", position, data[position:close])
    while close + 1 < stop:
        position = close + 1
        close = data.index(b"*", position)
        begin = _BEFORE_IDENTIFIER.match(data, position, close).end()  # type: ignore[union-attr]
        identifier = _IDENTIFIER.match(data, begin, close)[0].decode("ascii")  # type: ignore[index]
        yield Field(identifier, begin, data[begin + len(identifier) : close])


def _parity(raw: bytes) -> Literal["even", "odd", "mark"] | None:
    """Which parity bit every byte carries, if they do (line ends at the file's end apart)."""
    octets = np.frombuffer(raw.rstrip(b"\0\r\n\x1a"), dtype=np.uint8)
    high = octets >= 0x80
    if not high.any():
        return None
    if high.all():
        return "mark"
    odd = _ODD[octets]
    if odd.all():
        return "odd"
    return None if odd.any() else "even"


@dataclass(slots=True)
class Findings:
    """Collects what is wrong with a fuse file, each with line, column, byte offset and field.

    Of one kind only the first few are kept, and the rest counted: a damaged file of a million
    fields must not give a million messages.
    """

    file: str
    data: bytes
    found: list[FuseDiagnostic] = field(default_factory=list)
    count: Counter[tuple[str, str]] = field(default_factory=Counter)
    left_out: dict[tuple[str, str], FuseDiagnostic] = field(default_factory=dict)

    def error(
        self, code: str, offset: int, field: str | None, message: str, hint: str | None = None
    ) -> None:
        self._add(code, offset, field, message, hint, "error")

    def warning(
        self, code: str, offset: int, field: str | None, message: str, hint: str | None = None
    ) -> None:
        self._add(code, offset, field, message, hint, "warning")

    def _add(
        self,
        code: str,
        offset: int,
        field: str | None,
        message: str,
        hint: str | None,
        severity: Literal["error", "warning"],
    ) -> None:
        kind = (code, severity)
        self.count[kind] += 1
        if self.count[kind] > _SHOWN_OF_A_KIND + 1:
            return
        where = f"byte {offset}, field {field}: " if field else f"byte {offset}: "
        at = self.location(offset)
        made = FuseDiagnostic(code, where + message, at, hint, severity, offset, field)
        if self.count[kind] > _SHOWN_OF_A_KIND:
            self.left_out[kind] = made
        else:
            self.found.append(made)

    def location(self, offset: int) -> Location:
        """Line and column of a byte; CR LF, LF and CR each end a line."""
        data = self.data
        stop = offset
        if offset and data[offset - 1 : offset + 1] == b"\r\n":
            stop -= 1
        line = (
            1
            + data.count(b"\n", 0, stop)
            + data.count(b"\r", 0, stop)
            - data.count(b"\r\n", 0, stop)
        )
        begin = max(data.rfind(b"\n", 0, stop), data.rfind(b"\r", 0, stop)) + 1
        window = data[begin : begin + _SHOWN_LINE + 1]
        text = re.split(rb"[\r\n]", window, maxsplit=1)[0]
        source = None
        if len(text) <= _SHOWN_LINE:
            source = "".join(chr(b) if 0x20 <= b < 0x7F else "." for b in text)
        return Location(self.file, line, offset - begin + 1, source)

    def sorted(self) -> tuple[FuseDiagnostic, ...]:
        """All findings in order of place; what was left out is summed up at its end."""
        rest = []
        for kind, made in self.left_out.items():
            number = self.count[kind] - _SHOWN_OF_A_KIND
            message = f"byte {made.offset}: from here on {number} more of this kind"
            rest.append(
                FuseDiagnostic(kind[0], message, made.location, None, made.severity, made.offset)
            )
        return tuple(sorted((*self.found, *rest), key=lambda d: d.offset))
