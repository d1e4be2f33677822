"""Tables and text for terminals and plain files, at most 96 columns wide where that can be."""

from __future__ import annotations

import textwrap
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.report.table import Strip, Table

__all__ = ["WIDTH", "filled", "kept_together", "one_line", "table_text"]

WIDTH = 96
_GAP = 2  # blanks between columns
_NARROWEST = 24  # a column is not broken into lines shorter than this
_KEEP = "\u00a0"  # a blank at which no line is broken
_BLANK = "\ue000"  # stands for a blank that must not be stripped from the edge of a cell
_ALIGN = {"l": "left", "r": "right"}


@dataclass(frozen=True, slots=True)
class _Column:
    """A column of text: lines above the rule, and for each row the cell."""

    head: list[str]
    cells: list[str]
    align: str
    wrapped: bool = False

    @property
    def width(self) -> int:
        return max(map(len, (*self.head, *self.cells)), default=0)

    def narrowed(self, width: int) -> list[list[str]]:
        """The lines of each cell."""
        if not self.wrapped:
            return [[cell] for cell in self.cells]
        return [
            textwrap.wrap(c, width, break_long_words=False, break_on_hyphens=False) or [""]
            for c in self.cells
        ]


def one_line(text: str) -> str:
    """A user's text as a title: no line breaks, nothing that a terminal would obey."""
    return "".join(c if c.isprintable() else "\ufffd" for c in " ".join(text.split()))


def kept_together(text: str) -> str:
    """Text in which `filled` does not break a line."""
    return text.replace(" ", _KEEP)


def filled(paragraph: str) -> str:
    """A paragraph broken into lines."""
    lines = textwrap.fill(paragraph, WIDTH, break_long_words=False, break_on_hyphens=False)
    return lines.replace(_KEEP, " ")


def table_text(table: Table) -> str:
    """Title, paragraphs and table; no newline at the end."""
    parts = [f"{table.title}\n{'-' * len(table.title)}", *map(filled, table.lead)]
    if table.rows:
        parts.append(_drawn(table))
    parts += map(filled, table.remarks)
    return "\n\n".join(parts)


def _drawn(table: Table) -> str:
    columns = list(_columns(table, upright=False))
    if _width(columns) > WIDTH and table.strips:
        columns = list(_columns(table, upright=True))
    from tabulate import tabulate  # noqa: PLC0415 - slow to import

    height = max(len(column.head) for column in columns)
    room = _room(columns)
    lines: list[list[str]] = [
        [""] * (height - len(column.head)) + column.head for column in columns
    ]
    for cells in zip(*(column.narrowed(room) for column in columns), strict=True):
        for own, column in zip(_padded(cells), lines, strict=True):
            column.extend(own)
    drawn = tabulate(
        [[cell.replace(" ", _BLANK) for cell in row] for row in zip(*lines, strict=True)],
        tablefmt="plain",
        disable_numparse=True,
        colalign=[column.align for column in columns],
    )
    rows = [line.replace(_BLANK, " ").rstrip() for line in drawn.split("\n")]
    return "\n".join([*rows[:height], "-" * max(map(len, rows)), *rows[height:]])


def _padded(cells: Sequence[list[str]]) -> list[list[str]]:
    """The cells of one row with equally many lines."""
    height = max(map(len, cells))
    return [[*cell, *[""] * (height - len(cell))] for cell in cells]


def _width(columns: Sequence[_Column]) -> int:
    return sum(column.width for column in columns) + _GAP * (len(columns) - 1)


def _room(columns: Sequence[_Column]) -> int:
    """How wide columns that can be broken into lines may be."""
    flexible = sorted(column.width for column in columns if column.wrapped)
    left = WIDTH - _width(columns) + sum(flexible)
    for number, width in enumerate(flexible):
        # What a narrow column does not need is left to the others.
        share = left // (len(flexible) - number)
        if width > share:
            return max(share, _NARROWEST)
        left -= width
    return WIDTH


def _columns(table: Table, *, upright: bool) -> Iterator[_Column]:
    strips = {strip.first: strip for strip in table.strips}
    rows = list(table.shown_rows())
    heights = _heights(table)
    marked = max((len(mark) for strip in table.strips for mark in strip.marks), default=0)
    part = None
    number = 0
    while number < len(table.headings):
        align = _ALIGN[table.aligned[number]]
        if number not in strips:
            head = [] if not marked else ["" if number else "bit", *[""] * (marked - 1)]
            for row, height in zip(table.under, heights, strict=True):
                head += [row[number], *[""] * (height - 1)]
            head.append(table.headings[number])
            yield _Column(head, [row[number] for row in rows], align, number in table.wrapped)
            number += 1
            continue
        close = [strips[number]]
        while upright and _upright_together(close[-1], strips.get(close[-1].columns.stop)):
            close.append(strips[close[-1].columns.stop])
        if part is not None and part != close[0].part:
            yield _Column([""], [""] * len(rows), "left")
        part = close[0].part
        columns = slice(number, close[-1].columns.stop)
        head = _name_lines(close, upright=upright)
        head += _lines([mark for strip in close for mark in strip.marks], marked, upright=upright)
        for row, height in zip(table.under, heights, strict=True):
            head += _lines(row[columns], height, upright=upright)
        if table.under:
            head.append("")
        yield _Column(head, [" ".join(row[columns]) for row in rows], align)
        number = columns.stop


def _upright_together(one: Strip, other: Strip | None) -> bool:
    """Whether two strips are set close, each name read downwards above a single column."""
    return other is not None and len(one.marks) == len(other.marks) == 1 and one.part == other.part


def _heights(table: Table) -> list[int]:
    """Lines that each row under the headings takes: digits stand one above the other."""
    return [
        max((len(c) for strip in table.strips for c in row[strip.columns]), default=1) or 1
        for row in table.under
    ]


def _name_lines(close: Sequence[Strip], *, upright: bool) -> list[str]:
    """The names above strips; upright where they are too wide and room is scarce."""
    name = close[0].name
    if not upright or (len(close) == 1 and len(name) <= 2 * len(close[0].marks) - 1):
        return [name]
    if len(close) == 1:
        return list(name)
    height = max(len(strip.name) for strip in close)
    return _lines([strip.name.rjust(height) for strip in close], height, upright=True)


def _lines(cells: Sequence[str], height: int, *, upright: bool) -> list[str]:
    """Short cells beside each other, each read downwards; one alone is written across."""
    if not height:
        return []
    if len(cells) == 1 and not upright:
        return [*cells, *[""] * (height - 1)]
    downwards = zip(*(cell.ljust(height) for cell in cells), strict=True)
    return [" ".join(line) for line in downwards]
