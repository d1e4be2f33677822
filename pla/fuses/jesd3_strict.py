"""Every departure of a fuse file from the letter of the standard, also the harmless ones."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from pla.fuses.jesd3_fields import Findings
from pla.fuses.jesd3_values import WHITE, name_of, shown

if TYPE_CHECKING:
    from pla.fuses.jesd3_model import Field, Frame, FuseDiagnostic, FuseFileContents

__all__ = ["departures"]

_LOWER = re.compile(rb"[a-f]")
_NUMBERED = re.compile(rb"([ \t\r\n]*)([0-9]+)([ \t\r\n]+)")
_SINGLE = frozenset({"QF", "QP", "QV", "F", "C", "G", "X"})


def departures(file: FuseFileContents) -> tuple[FuseDiagnostic, ...]:
    """All departures from JESD3 in order of place: the reader's warnings, and what it let pass."""
    frame = file.frame
    findings = Findings(file.name, frame.data)
    _surroundings(findings, frame)
    for field in frame.fields[1:]:
        _field(findings, field)
    tab = frame.data.find(b"\t", frame.start, frame.end)
    if tab >= 0:
        number = frame.data.count(b"\t", frame.start, frame.end)
        more = f" and {number - 1} more" if number > 1 else ""
        findings.warning(
            "TAB", tab, None, f"a tab{more}; only printable ASCII, CR and LF may stand here"
        )
    if file.vectors and file.vector_limit is None:
        first = next(field for field in frame.fields if field.identifier == "V")
        message = "no QV field tells how many vectors there are at most"
        findings.warning("NO-QV", first.offset, name_of(first), message)
    return tuple(sorted((*file.diagnostics, *findings.sorted()), key=lambda d: d.offset))


def _surroundings(findings: Findings, frame: Frame) -> None:
    data = frame.data
    ignored = "is outside STX to ETX and four digits; readers ignore it"
    if frame.has_start and frame.start and not data[: frame.start].strip(b"\r\n\x1a"):
        message = f"{shown(data[: frame.start])} {ignored}"
        findings.warning("BYTES-BEFORE", 0, None, message)
    if frame.after < len(data) and not data[frame.after :].strip(b"\r\n\x1a"):
        message = f"{shown(data[frame.after :])} {ignored}"
        findings.warning("BYTES-AFTER", frame.after, None, message)
    if frame.sum_digits is None:
        return
    if frame.has_end and frame.sum_offset > frame.end + 1:
        message = "white space between ETX and the transmission sum"
        findings.warning("WHITE-SPACE", frame.end + 1, None, message)
    if frame.sum_digits != frame.sum_digits.upper():
        message = f"{frame.sum_digits} found; hexadecimal digits are capitals"
        findings.warning("LOWER-CASE", frame.sum_offset, None, message)


def _field(findings: Findings, field: Field) -> None:
    identifier, body, begin = field.identifier, field.body, field.body_offset
    if identifier in {"C", "UH", "K"}:
        lower = _LOWER.search(body)
        if lower:
            message = f"{shown(lower[0])} found; hexadecimal digits are capitals"
            findings.warning("LOWER-CASE", begin + lower.start(), name_of(field), message)
    if identifier in _SINGLE and body != body.strip(WHITE):
        message = f"{shown(body)} found; white space has no place in this field"
        findings.warning("WHITE-SPACE", begin, identifier, message)
    numbered = _NUMBERED.match(body) if identifier in {"L", "K", "V"} else None
    if numbered is None:
        return
    if numbered[1]:
        message = "white space between the identifier and its number"
        findings.warning("WHITE-SPACE", begin, name_of(field), message)
    blank = body.find(b" ", numbered.end())
    if identifier == "V" and blank >= 0:
        message = "white space among the test conditions"
        findings.warning("WHITE-SPACE", begin + blank, name_of(field), message)
