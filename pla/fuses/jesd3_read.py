"""Reading a fuse file as programs in the field write them.

Tolerant where nothing can be misread, and with a warning for each departure it stumbles over; a
refusal wherever two readings would give different fuses. The standard: JEDEC JESD3-C (earlier
JEDEC Standard No. 3-A).
"""

from __future__ import annotations

import dataclasses
import re
from typing import TYPE_CHECKING, Any

from pla.errors import InputError
from pla.fuses.jesd3_fields import Findings, cut, transmission_sum
from pla.fuses.jesd3_lists import read_fuses
from pla.fuses.jesd3_model import (
    CONDITIONS,
    IDENTIFIERS,
    FuseFile,
    FuseFileContents,
    RefusedFile,
)
from pla.fuses.jesd3_values import WHITE, bit, name_of, shown, single
from pla.fuses.jesd3_vectors import read_tests

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.fuses.jesd3_model import Field, Frame

__all__ = ["FuseFileError", "read_fuse_file"]


class FuseFileError(InputError):
    """A fuse file that cannot be relied on.

    Attributes:
        refused: What it says, as far as it could be read.
    """

    def __init__(self, refused: RefusedFile) -> None:
        super().__init__(refused.errors)
        self.refused = refused


def read_fuse_file(data: bytes, file: str) -> FuseFile:
    """Read a JESD3 fuse file.

    Args:
        data: The whole file.
        file: Its name for messages.

    Returns:
        What the file says; its `diagnostics` are the warnings.

    Raises:
        FuseFileError: With every error of the file at once, an `InputError`.
        InputError: If the bytes are no fuse file at all.
    """
    frame = cut(data, file)
    findings = Findings(file, frame.data)
    computed = _check_frame(findings, frame)
    fields = frame.fields
    _check_fields(findings, frame)
    _check_order(findings, fields)
    fuses = read_fuses(findings, fields)
    tests = read_tests(findings, fields)
    security = single(findings, fields, "G", bit)
    level = single(findings, fields, "X", bit)
    found = findings.sorted()
    errors = tuple(d for d in found if d.severity == "error")
    contents = FuseFileContents(
        name=file,
        design=fields[0].text,
        notes=tuple(field.text for field in fields if field.identifier == "N"),
        pins=tests.pins,
        vector_limit=tests.limit,
        default=fuses.default,
        given_checksum=fuses.given_checksum,
        given_sum=None if frame.sum_digits is None else int(frame.sum_digits, 16),
        computed_sum=computed,
        security=security[0] if security else None,
        default_condition=level[0] if level else None,
        pin_order=tests.pin_order,
        vectors=tests.vectors,
        frame=frame,
        diagnostics=tuple(d for d in found if d.severity == "warning"),
    )
    if errors or fuses.map is None:
        refused = RefusedFile(
            size=fuses.size, fuses=fuses.map, errors=errors, **_as_arguments(contents)
        )
        raise FuseFileError(refused)
    return FuseFile(fuses=fuses.map, **_as_arguments(contents))


def _as_arguments(contents: FuseFileContents) -> dict[str, Any]:
    return {part.name: getattr(contents, part.name) for part in dataclasses.fields(contents)}


def _check_frame(findings: Findings, frame: Frame) -> int:
    """Everything outside the fields; returns the transmission sum."""
    data = frame.data
    if frame.parity:
        findings.warning(
            "PARITY",
            0,
            None,
            f"every byte has {frame.parity} parity in its highest bit; that bit is left out",
        )
    if not frame.has_start:
        findings.warning(
            "NO-STX", 0, None, "no STX (byte 02) begins the transmission; read from the first byte"
        )
    elif data[: frame.start].strip(b"\r\n\x1a"):
        skipped = data[: frame.start].lstrip(b"\r\n\x1a")
        findings.warning(
            "BYTES-BEFORE",
            frame.start - len(skipped),
            None,
            f"{shown(skipped)} before STX belongs to no transmission and is ignored",
        )
    if frame.unclosed is not None:
        hint = None
        if not frame.has_end:
            hint = "there is no ETX (byte 03) either: was the file cut off?"
        text = data[frame.unclosed : frame.end]
        message = f"{shown(text)} is not closed by *"
        findings.error("MISSING-STAR", frame.unclosed, None, message, hint)
    if not frame.has_end:
        findings.warning("NO-ETX", frame.end, None, "no ETX (byte 03) ends the transmission")
    computed = _check_sum(findings, frame)
    after = data[frame.after :].lstrip(b"\r\n\x1a")
    if after and frame.has_end:
        what = "a second transmission" if b"\x02" in after else shown(after)
        findings.warning(
            "BYTES-AFTER",
            len(data) - len(after),
            None,
            f"{what} after the end of the transmission is ignored",
        )
    return computed


def _check_sum(findings: Findings, frame: Frame) -> int:
    span = frame.data[frame.start : frame.end + frame.has_end]
    # The sum runs from STX through ETX: one that was lost on the way was in the sum.
    lost = (0 if frame.has_start else 2) + (0 if frame.has_end else 3)
    computed = (transmission_sum(span) + lost) & 0xFFFF
    if frame.sum_digits is None:
        if frame.has_end:
            message = f"four hexadecimal digits expected after ETX; the sum is {computed:04X}"
            findings.warning("NO-SUM", frame.sum_offset, None, message)
        return computed
    given = int(frame.sum_digits, 16)
    if given in {0, computed}:
        return computed
    pairs, feeds = span.count(b"\r\n"), span.count(b"\n")
    hint = "bytes were lost or changed on the way"
    if (computed + 13 * (feeds - pairs)) & 0xFFFF == given:
        hint = "it fits with CR LF line ends: they were converted to LF on the way"
    elif (computed - 13 * pairs) & 0xFFFF == given:
        hint = "it fits with LF line ends: they were converted to CR LF on the way"
    elif (sum(span) + lost) & 0xFFFF == given:
        hint = "it fits with the highest bit of each byte counted, which JESD3 leaves out"
    findings.warning(
        "WRONG-SUM",
        frame.sum_offset,
        None,
        f"the transmission sum is given as {given:04X}, but the bytes add up to {computed:04X}",
        hint,
    )
    return computed


_CONTROL = re.compile(rb"[\x00-\x08\x0b\x0c\x0e-\x1f\x7f]")
_HIGH = re.compile(rb"[\x80-\xff]+")
# A line that a program would hardly write into a note, but that stands there when the * before it
# was lost; only at the very start of a line, where fields are written.
_SWALLOWED = re.compile(
    rb"[\r\n](L[0-9]+[ \t\r\n]+[01]|K[0-9]+[ \t\r\n]+[0-9A-F]|V[0-9]+[ \t\r\n]+[0-9A-Z]"
    rb"|Q[FPV][0-9]+[ \t\r\n]*\Z|[FGX][01][ \t\r\n]*\Z|C[0-9A-F]{4}[ \t\r\n]*\Z|N[ \t])"
)
_CONDITIONS = re.escape("".join(CONDITIONS)).encode("ascii")
# Fields that change no fuse of the map: their text is kept as it is, and only held against this.
_EXPECTED: dict[str, tuple[re.Pattern[bytes], str]] = {
    "E": (re.compile(rb"[\x20-\x7e\r\n]+"), "printable characters"),
    "J": (re.compile(rb"[\x20-\x7e\r\n]+"), "printable characters"),
    "U": (re.compile(rb"[01 \r\n]+"), "binary digits"),
    "UA": (re.compile(rb"[\x20-\x7e\r\n]+"), "printable characters"),
    "UH": (re.compile(rb"[0-9A-Fa-f \r\n]+"), "hexadecimal digits"),
    "A": (re.compile(rb"[ \r\n]*[0-9]+[ \r\n]*"), "a decimal number"),
    "S": (re.compile(rb"[" + _CONDITIONS + rb" \r\n]+"), "test conditions"),
    "R": (re.compile(rb"[0-9A-Za-z \r\n]+"), "letters and digits"),
    "T": (re.compile(rb"[ \r\n]*[0-9]+[ \r\n]*"), "a decimal number"),
}


def _check_fields(findings: Findings, frame: Frame) -> None:
    """What can be said of each field without the others."""
    fields, data = frame.fields, frame.data
    close = fields[0].offset - 1
    for number, field in enumerate(fields):
        _check_between(findings, data, close + 1, field.offset)
        close = field.body_offset + len(field.body)
        identifier = field.identifier
        if number == 0 or identifier == "N":
            _check_text(findings, field, "N" if number else "design specification")
        elif not identifier:
            findings.warning("EMPTY-FIELD", field.offset, None, "a * that closes nothing")
        elif identifier not in IDENTIFIERS:
            hint = "identifiers are " + " ".join(sorted(i for i in IDENTIFIERS if i))
            if identifier.upper() in IDENTIFIERS or identifier == "q":
                hint = "identifiers are capital letters"
            findings.warning(
                "UNKNOWN-FIELD",
                field.offset,
                shown(identifier.encode("ascii")),
                "no such identifier; the field is ignored",
                hint,
            )
        elif identifier == "D":
            findings.warning("OBSOLETE-FIELD", field.offset, "D", "obsolete, and ignored")
        elif identifier in _EXPECTED:
            pattern, expected = _EXPECTED[identifier]
            if not pattern.fullmatch(field.body):
                message = f"{shown(field.body)} found, {expected} expected; the field is ignored"
                findings.warning("BAD-FIELD", field.body_offset, name_of(field), message)
    _check_between(
        findings, data, close + 1, frame.end if frame.unclosed is None else frame.unclosed
    )


def _check_between(findings: Findings, data: bytes, first: int, stop: int) -> None:
    between = data[first:stop].lstrip(WHITE)
    if between:
        message = f"{shown(between.rstrip(WHITE))} outside all fields means nothing and is ignored"
        findings.warning("STRAY-BYTES", stop - len(between), None, message)


def _check_text(findings: Findings, field: Field, name: str) -> None:
    for pattern, code, what in (
        (_HIGH, "NOT-ASCII", "is not ASCII; some programmers refuse it"),
        (_CONTROL, "CONTROL-CHARACTER", "is a control character; some programmers refuse it"),
    ):
        found = pattern.search(field.body)
        if found:
            message = f"{shown(found[0])} {what}"
            findings.warning(code, field.body_offset + found.start(), name, message)
    swallowed = _SWALLOWED.search(field.body)
    if swallowed:
        findings.warning(
            "FIELD-IN-TEXT",
            field.body_offset + swallowed.start(1),
            name,
            f"{shown(swallowed[1].strip(WHITE))} at the start of a line looks like a field",
            "is the * missing before it?",
        )


_VALUES = frozenset({"QF", "QP", "QV"})
_ANYWHERE = frozenset({"", "N", "D"})


def _check_order(findings: Findings, fields: Sequence[Field]) -> None:
    first: Field | None = None
    for field in fields[1:]:
        identifier = field.identifier
        if identifier in _VALUES:
            if first is not None:
                findings.warning(
                    "FIELD-ORDER",
                    field.offset,
                    identifier,
                    f"comes after {name_of(first)} at byte {first.offset}; value fields come "
                    "before every programming or testing field",
                )
        elif first is None and identifier in IDENTIFIERS and identifier not in _ANYWHERE:
            first = field
