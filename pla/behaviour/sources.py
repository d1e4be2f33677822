"""Where the rows of a truth table come from: text in the design file, or a CSV file."""

from __future__ import annotations

import csv
import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, Protocol

from pla.errors import Diagnostic, InputError, Location
from pla.textfile import SourceText

if TYPE_CHECKING:
    from collections.abc import Callable

__all__ = ["CsvRows", "InlineRows", "RowSource", "read_csv", "read_inline"]

_CELL = re.compile(r"[^\s|]+")
# Spreadsheets may write a first line that tells the separator, with empty cells behind it.
_SAID = re.compile(r'"?sep=(.)"?[,;\t]*', re.IGNORECASE)
_SEPARATORS = {",": "comma", ";": "semicolon", "\t": "tab"}
_SEPARATOR_NAMES = "a comma, a semicolon or a tab"


class RowSource(Protocol):
    """Cells in rows, and their places."""

    @property
    def header(self) -> list[list[str]]:
        """The column names, in groups that bars part; one group if there are no bars."""

    @property
    def rows(self) -> list[list[list[str]]]:
        """The cells of each row, in groups likewise."""

    @property
    def has_bars(self) -> bool:
        """Whether groups mean something."""

    def at(self, row: int, cell: int) -> Location:
        """The place of a cell, counted over all groups; row -1 is the header.

        Past the last cell it is the end of the row.
        """


@dataclass(frozen=True, slots=True)
class InlineRows:
    """A table in a string: columns parted by blanks, inputs and outputs by a bar.

    Attributes:
        header: See `RowSource`.
        rows: See `RowSource`.
        lines: (offset, text) of the header's line and of each row's.
        place: The place of a character of the string.
    """

    header: list[list[str]]
    rows: list[list[list[str]]]
    lines: list[tuple[int, str]]
    place: Callable[[int], Location]
    has_bars: bool = True

    def at(self, row: int, cell: int) -> Location:
        offset, text = self.lines[row + 1]
        starts = [found.start() for found in _CELL.finditer(text)]
        return self.place(offset + (starts[cell] if cell < len(starts) else len(text.rstrip())))


@dataclass(frozen=True, slots=True)
class CsvRows:
    """A CSV file.

    Attributes:
        header: See `RowSource`.
        rows: See `RowSource`.
        lines: 1-based line on which the header and each row start.
        source: The text of the file.
        separator: ``,``, ``;`` or a tab.
    """

    header: list[list[str]]
    rows: list[list[list[str]]]
    lines: list[int]
    source: SourceText
    separator: str
    has_bars: bool = False

    def at(self, row: int, cell: int) -> Location:
        line = self.lines[row + 1]
        text = "\n".join(self.source.lines[line - 1 :])
        start = quoted = count = 0
        for offset, sign in enumerate(text):
            if sign == '"':
                quoted = not quoted
            elif not quoted and sign == self.separator and count < cell:
                count, start = count + 1, offset + 1
            elif not quoted and sign == "\n":
                text = text[:offset]
                break
        if count < cell:
            start = len(text)
        else:
            while text[start : start + 1] in (" ", "\t") and text[start] != self.separator:
                start += 1
        before = text[:start]
        column = start - (before.rfind("\n") + 1) + 1
        return self.source.location_of(line + before.count("\n"), column)


def read_inline(text: str, place: Callable[[int], Location]) -> InlineRows:
    """The rows of a table in a string; blank lines are left out.

    Raises:
        InputError: If there is nothing in it.
    """
    lines: list[tuple[int, str]] = []
    offset = 0
    for line in text.split("\n"):
        if line.strip():
            lines.append((offset, line))
        offset += len(line) + 1
    cells = [[_CELL.findall(group) for group in line.split("|")] for _, line in lines]
    if not cells:
        raise InputError([_empty(place(0))])
    return InlineRows(cells[0], cells[1:], lines, place)


def read_csv(source: SourceText) -> CsvRows:
    """The rows of a CSV file as spreadsheets save it: comma, semicolon or tab, quotes.

    The header tells the separator, unless a line such as ``sep=;`` stands before it. A carriage
    return alone ends a line too. Empty rows, and empty cells behind the last column, are left out.

    Raises:
        InputError: If there is nothing in it, the separator is not clear, or quotes do not match.
    """
    source = SourceText(source.file, source.text.replace("\r", "\n"))
    separator, start = _separator(source)
    reader = csv.reader(
        (f"{line}\n" for line in source.lines[start:]),
        delimiter=separator,
        skipinitialspace=True,
        strict=True,
    )
    rows: list[list[str]] = []
    lines: list[int] = []
    before = 0
    try:
        for row in reader:
            cells = [cell.strip() for cell in row]
            if any(cells):
                rows.append(cells)
                lines.append(start + before + 1)
            before = reader.line_num
    except csv.Error as fault:
        at = source.location_of(min(start + before + 1, len(source.lines)), 1)
        hint = "a cell in quotes ends with a quote in front of the next separator"
        message = f"not CSV: {_reason(fault, separator)}"
        raise InputError([Diagnostic("CSV-SYNTAX", message, at, hint)]) from None
    width = len(rows[0])
    while not rows[0][width - 1]:
        width -= 1
    for row in rows:
        while len(row) > width and not row[-1]:
            row.pop()
    return CsvRows([rows[0]], [[row] for row in rows[1:]], lines, source, separator)


def _separator(source: SourceText) -> tuple[str, int]:
    """The separator, and how many lines stand in front of the header.

    Raises:
        InputError: If there is no header, or it has more than one kind of separator.
    """
    filled = [i for i, line in enumerate(source.lines) if line.strip(" \t,;")]
    said = _SAID.fullmatch(source.lines[filled[0]].strip()) if filled else None
    if said and said[1] not in _SEPARATORS:
        at = source.location_of(filled[0] + 1, 1)
        message = f"the separator {said[1]!r} is not supported, expected {_SEPARATOR_NAMES}"
        raise InputError([Diagnostic("CSV-SEPARATOR", message, at)])
    if said:
        del filled[0]
    if not filled:
        raise InputError([_empty(source.location(0))])
    if said:
        return said[1], filled[0]
    bare = re.sub(r'"[^"]*"', "", source.lines[filled[0]])
    if ";" in bare and "," in bare:
        at = source.location_of(filled[0] + 1, 1)
        message = "the header has commas and semicolons, expected one kind of separator"
        raise InputError([Diagnostic("CSV-SEPARATOR", message, at)])
    # Beside a comma or semicolon a tab is a blank.
    return next((sign for sign in ";,\t" if sign in bare), ","), filled[0]


def _reason(fault: csv.Error, separator: str) -> str:
    """The fault of a CSV file in the words of this program."""
    text = str(fault)
    if "expected after" in text:
        shown = _SEPARATORS[separator]
        return f"something stands between a closing quote and the next {shown}"
    if "unexpected end" in text:
        return "a quote is not closed before the end of the file"
    if "field limit" in text:
        return f"a cell has more than {csv.field_size_limit()} characters, is a quote not closed?"
    return text


def _empty(at: Location) -> Diagnostic:
    hint = "the first row names the columns, inputs before outputs"
    return Diagnostic("TABLE-EMPTY", "the table is empty, expected a header and rows", at, hint)
