"""Tables drawn with characters, at most 96 columns wide where that can be."""

from __future__ import annotations

import textwrap
from dataclasses import dataclass
from itertools import chain
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from pla.report.table import Strip, Table

__all__ = ["WIDTH", "broken", "drawn"]

WIDTH = 96
_GAP = 2  # blanks between columns
_PART_GAP = 4  # blanks between inputs and outputs
_NARROWEST = 24  # a column is not broken into lines shorter than this


@dataclass(slots=True)
class _Column:
    """A column of text.

    Attributes:
        head: Lines above the rule.
        cells: For each row its lines.
        right: Whether they end below each other.
        name: What hangs above the head, and may be longer than the column is wide.
        gap: Blanks before it.
        wrapped: Whether it may be broken into more lines.
    """

    head: list[str]
    cells: list[list[str]]
    right: bool = False
    name: str = ""
    gap: int = _GAP
    wrapped: bool = False

    @property
    def width(self) -> int:
        return max(map(len, chain(self.head, *self.cells)), default=0)

    def aligned(self, line: str, width: int) -> str:
        return " " * self.gap + (line.rjust(width) if self.right else line.ljust(width))


def drawn(table: Table) -> str:
    """Headings, a rule and the rows.

    Where there is not room for all names side by side, columns of single characters are set close,
    and their names above them in steps. A table that is too wide even so is split: further blocks
    repeat the columns at the left.
    """
    columns = list(_columns(table))
    if _width(columns) <= WIDTH or not table.strips:
        _narrow(columns)
        return _block(columns)
    columns = list(_close_columns(table))
    _narrow(columns)
    front = min(strip.first for strip in table.strips)
    return "\n\n".join(map(_block, _blocks(columns[:front], columns[front:])))


def broken(text: str, width: int) -> list[str]:
    """Text in lines; a name that is longer than a line is broken behind an underscore."""
    pieces: list[str] = []
    for word in text.split(" "):
        rest = word
        while len(rest) > width:
            cut = rest.rfind("_", 0, width) + 1 or width
            pieces.append(rest[:cut])
            rest = rest[cut:]
        pieces.append(rest)
    lines = textwrap.wrap(" ".join(pieces), width, break_long_words=False, break_on_hyphens=False)
    return lines or [""]


def _columns(table: Table) -> Iterator[_Column]:
    """Every strip is a column as wide as its name."""
    rows = list(table.shown_rows())
    strips = {strip.first: strip for strip in table.strips}
    heights = _heights(table, downwards=False)
    before: Strip | None = None
    number = 0
    while number < len(table.headings):
        if number not in strips:
            yield _plain(table, rows, number, heights)
            number += 1
            continue
        strip = strips[number]
        column = _strip(table, rows, strip, heights, downwards=False)
        column.head.insert(0, strip.name)
        column.gap = _PART_GAP if before and before.part != strip.part else _GAP
        yield column
        before, number = strip, strip.columns.stop


def _close_columns(table: Table) -> Iterator[_Column]:
    """Single characters stand close together, and names hang above."""
    rows = list(table.shown_rows())
    strips = {strip.first: strip for strip in table.strips}
    heights = _heights(table, downwards=True)
    before: Strip | None = None
    number = 0
    while number < len(table.headings):
        if number not in strips:
            column = _plain(table, rows, number, heights)
            if number > min(strips) and not column.right:
                column.name = column.head.pop()
                column.head.append("")
            yield column
            before, number = None, number + 1
            continue
        strip = strips[number]
        column = _strip(table, rows, strip, heights, downwards=True)
        column.name = strip.name
        if before is not None and before.part != strip.part:
            column.gap = _PART_GAP
        elif before is not None and len(before.marks) == len(strip.marks) == 1:
            column.gap = 1
        yield column
        before, number = strip, strip.columns.stop


def _plain(
    table: Table, rows: Sequence[tuple[str, ...]], number: int, heights: Sequence[int]
) -> _Column:
    head = []
    if heights[0]:
        head = ["" if number else "bit", *[""] * (heights[0] - 1)]
    for row, height in zip(table.under, heights[1:], strict=True):
        head += [row[number], *[""] * (height - 1)]
    return _Column(
        [*head, table.headings[number]],
        [[row[number]] for row in rows],
        right=table.aligned[number] == "r",
        wrapped=number in table.wrapped,
    )


def _strip(
    table: Table,
    rows: Sequence[tuple[str, ...]],
    strip: Strip,
    heights: Sequence[int],
    *,
    downwards: bool,
) -> _Column:
    head: list[str] = []
    own = (strip.marks, *(row[strip.columns] for row in table.under))
    for cells, height in zip(own, heights, strict=True):
        head += _lines(cells, height, downwards=downwards)
    if table.under:
        head.append("")
    return _Column(head, [[" ".join(row[strip.columns])] for row in rows])


def _heights(table: Table, *, downwards: bool) -> list[int]:
    """Lines that the marks and each row under the headings take.

    Args:
        table: Whose.
        downwards: Whether a cell that is alone in its strip is read downwards too.
    """
    strips = [s for s in table.strips if downwards or len(s.marks) > 1]
    marks = max((len(mark) for strip in strips for mark in strip.marks), default=0)
    under = (
        max((len(cell) for strip in strips for cell in row[strip.columns]), default=1) or 1
        for row in table.under
    )
    return [marks, *under]


def _lines(cells: Sequence[str], height: int, *, downwards: bool) -> list[str]:
    """Short cells beside each other, each read downwards, or one that is written across."""
    if len(cells) == 1 and not downwards:
        return [*cells, *[""] * (height - 1)][:height]
    read = zip(*(cell.ljust(height) for cell in cells), strict=True)
    return [" ".join(line) for line in read]


def _width(columns: Sequence[_Column]) -> int:
    return sum(column.gap + column.width for column in columns) - columns[0].gap


def _narrow(columns: Sequence[_Column]) -> None:
    """Break what can be broken into lines until all fits, if it can."""
    flexible = sorted((c for c in columns if c.wrapped), key=lambda column: column.width)
    left = WIDTH - _overhang(columns) - _width(columns) + sum(c.width for c in flexible)
    for number, column in enumerate(flexible):
        # What a narrow column does not need is left to the others.
        share = max(left // (len(flexible) - number), _NARROWEST)
        if column.width > share:
            column.cells = [broken(cell, share) for (cell,) in column.cells]
        left -= column.width


def _overhang(columns: Sequence[_Column]) -> int:
    """How far names stick out at the right."""
    most = beside = 0
    for column in reversed(columns):
        beside += column.width
        most = max(most, len(column.name) - beside)
        beside += column.gap
    return most


def _blocks(front: list[_Column], others: Sequence[_Column]) -> Iterator[list[_Column]]:
    """As many columns as there is room for, their names included, behind those at the left."""
    block, at = list(front), _width(front) if front else 0
    for column in others:
        name_width = max(column.width, len(column.name))
        if len(block) > len(front) and at + column.gap + name_width > WIDTH:
            yield block
            block, at = list(front), _width(front) if front else 0
        block.append(column)
        at += column.gap + column.width
    yield block


def _block(columns: Sequence[_Column]) -> str:
    widths = [column.width for column in columns]
    margin = columns[0].gap

    def line(cells: Sequence[str]) -> str:
        aligned = (c.aligned(cell, w) for c, cell, w in zip(columns, cells, widths, strict=True))
        return "".join(aligned)[margin:].rstrip()

    height = max(len(column.head) for column in columns)
    heads = [[""] * (height - len(column.head)) + column.head for column in columns]
    above = [line(cells) for cells in zip(*heads, strict=True)]
    body = []
    for row in zip(*(column.cells for column in columns), strict=True):
        deep = max(map(len, row))
        padded = ([*cell, *[""] * (deep - len(cell))] for cell in row)
        body += [line(cells) for cells in zip(*padded, strict=True)]
    rule = "-" * max(map(len, (*above, *body)))
    return "\n".join([*_steps(columns), *above, rule, *body])


def _steps(columns: Sequence[_Column]) -> list[str]:
    """Names above their columns; one that reaches over others stands higher, with a line down."""
    places: list[tuple[int, str, int]] = []
    at = -columns[0].gap
    starts = []
    for column in columns:
        starts.append(at + column.gap)
        at += column.gap + column.width
    for start, column in zip(reversed(starts), reversed(columns), strict=True):
        if column.name:
            end = start + len(column.name) + 1
            level = max((1 + lower for other, _, lower in places if other < end), default=0)
            places.append((start, column.name, level))
    lines = []
    for step in reversed(range(1 + max((level for *_, level in places), default=-1))):
        line = ""
        for start, name, level in reversed(places):
            if level >= step:
                line = line.ljust(start) + (name if level == step else "|")
        lines.append(line)
    return lines
