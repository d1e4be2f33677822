"""Text files and places in them."""

from __future__ import annotations

from bisect import bisect_right
from dataclasses import dataclass, replace
from functools import cached_property

from pla.errors import Diagnostic, InputError, Location
from pla.files import read_bytes

__all__ = ["SourceText", "read_text"]


@dataclass(frozen=True)
class SourceText:
    """The text of a file, with line ends as ``\\n`` and without a byte-order mark.

    Attributes:
        file: Its name as the user gave it.
        text: Everything in it.
    """

    file: str
    text: str

    @cached_property
    def lines(self) -> tuple[str, ...]:
        return tuple(self.text.split("\n"))

    @cached_property
    def _starts(self) -> list[int]:
        starts = [0]
        for line in self.lines:
            starts.append(starts[-1] + len(line) + 1)
        return starts[:-1]

    def location(self, offset: int) -> Location:
        """The place of a character offset; offsets past the end give the end."""
        offset = max(0, min(offset, len(self.text)))
        index = bisect_right(self._starts, offset) - 1
        return self.location_of(index + 1, offset - self._starts[index] + 1)

    def location_of(self, line: int, column: int) -> Location:
        """The place of a 1-based line and column."""
        source = self.lines[line - 1] if 0 < line <= len(self.lines) else None
        return Location(self.file, line, column, source)


def read_text(path: str, *, named_at: Location | None = None) -> SourceText:
    """The text of a UTF-8 file; a byte-order mark and CR LF line ends are accepted.

    Args:
        path: Where it is.
        named_at: The place that names this file, if another file does.

    Raises:
        InputError: If it cannot be read or is not UTF-8.
    """
    try:
        raw = read_bytes(path)
    except InputError as fault:
        if named_at is None:
            raise
        raise InputError(
            replace(d, message=f"{path}: {d.message}", location=named_at) for d in fault.diagnostics
        ) from None
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as fault:
        # "utf-8-sig" counts its offset after the byte-order mark.
        start = fault.start + (3 if raw.startswith(b"\xef\xbb\xbf") else 0)
        before = raw[:start]
        line = before.count(b"\n") + 1
        # What stands before the offending byte on its line is valid.
        head = before[before.rfind(b"\n") + 1 :].removeprefix(b"\xef\xbb\xbf")
        column = len(head.decode("utf-8", "replace")) + 1
        message = f"not UTF-8 text: byte 0x{raw[start]:02X} at byte offset {start}"
        hint = "save the file with the encoding UTF-8"
        if raw.startswith((b"\xff\xfe", b"\xfe\xff")):
            hint = "the file looks like UTF-16; save it with the encoding UTF-8"
        at = Location(path, line, column)
        raise InputError([Diagnostic("FILE-NOT-UTF8", message, at, hint)]) from None
    return SourceText(path, text.replace("\r\n", "\n"))
