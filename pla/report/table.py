"""Tables that know nothing of how they will be shown, and their forms as text and as Markdown."""

from __future__ import annotations

import re
import textwrap
from dataclasses import dataclass, field
from itertools import zip_longest
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Sequence

__all__ = ["WIDTH", "Strip", "Table", "as_markdown", "as_text", "escaped", "filled", "one_line"]

WIDTH = 96
_BLANK = "\ue000"  # a blank that must not be stripped from the edge of a cell
_MARKUP = re.compile(r"[\\`*<>|]|(?<![A-Za-z0-9])_|_(?![A-Za-z0-9])")
_SPACED = re.compile(r"\s+")


@dataclass(frozen=True, slots=True)
class Strip:
    """Neighbouring columns of single characters, such as the bits of a bus.

    Text sets them close together, under one name; Markdown gives each a column of its own.

    Attributes:
        first: Index of the first column.
        size: How many columns.
        name: What stands above all of them.
        marks: What stands above each, one for each column; all ``""`` where the name says it all.
    """

    first: int
    size: int
    name: str
    marks: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Table:
    """Rows under headings, with what has to be said about them.

    Attributes:
        title: One line.
        headings: One for each column.
        rows: As many cells each.
        lead: Paragraphs before the table.
        remarks: Paragraphs after it.
        aligned: ``l`` or ``r`` for each column; ``""`` for all to the left.
        under: Rows that belong to the headings, such as pins; the first cell names the row.
        strips: Columns that text sets close together.
        repeated: So many columns at the left are left empty where they repeat the row above.
    """

    title: str
    headings: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    lead: tuple[str, ...] = ()
    remarks: tuple[str, ...] = ()
    aligned: str = ""
    under: tuple[tuple[str, ...], ...] = ()
    strips: tuple[Strip, ...] = field(default=())
    repeated: int = 0


def one_line(text: str) -> str:
    """Text of a design as a title: no line breaks, nothing that a terminal would obey."""
    return "".join(c if c.isprintable() else "�" for c in _SPACED.sub(" ", text.strip()))


def filled(paragraph: str, indent: str = "", hanging: str | None = None) -> str:
    """A paragraph broken into lines."""
    return textwrap.fill(
        paragraph,
        WIDTH,
        initial_indent=indent,
        subsequent_indent=indent if hanging is None else hanging,
        break_long_words=False,
        break_on_hyphens=False,
    )


def escaped(text: str) -> str:
    """Text of which Markdown shows every character."""
    return _MARKUP.sub(lambda found: "\\" + found[0], text.replace("&", "&amp;"))


def as_markdown(table: Table, level: int = 2) -> str:
    """A heading of this level, the paragraphs, the table."""
    from tabulate import tabulate  # noqa: PLC0415 - slow to import

    parts = [f"{'#' * level} {escaped(table.title)}", *map(escaped, table.lead)]
    if table.rows:
        cells = [[escaped(c) for c in row] for row in (*table.under, *_thinned(table))]
        drawn = tabulate(
            cells,
            [escaped(h) for h in table.headings],
            tablefmt="pipe",
            disable_numparse=True,
            colalign=_alignment(table.aligned, len(table.headings)),
        )
        parts.append("\n".join(line.rstrip() for line in drawn.split("\n")))
    parts += map(escaped, table.remarks)
    return "\n\n".join(parts) + "\n"


def as_text(table: Table) -> str:
    """Title, paragraphs and table for a terminal or a plain file; ends with a newline."""
    parts = [f"{table.title}\n{'-' * len(table.title)}", *map(filled, table.lead)]
    if table.rows:
        parts.append(_drawn(table))
    parts += map(filled, table.remarks)
    return "\n\n".join(parts) + "\n"


def _alignment(aligned: str, columns: int) -> list[str]:
    words = {"l": "left", "r": "right"}
    return [words[c] for c in aligned] if aligned else ["left"] * columns


def _thinned(table: Table) -> Iterator[tuple[str, ...]]:
    """The rows, without what repeats the row above in the columns at the left."""
    above: tuple[str, ...] = ()
    for row in table.rows:
        same = 0
        while same < table.repeated and row[: same + 1] == above[: same + 1]:
            same += 1
        yield ("",) * same + row[same:]
        above = row


def _drawn(table: Table) -> str:
    from tabulate import tabulate  # noqa: PLC0415 - slow to import

    vertical = False
    while True:
        columns = list(_columns(table, vertical=vertical))
        heads = max(len(head) for head, _, _ in columns)
        full = [[""] * (heads - len(head)) + head + body for head, body, _ in columns]
        rows = list(zip(*full, strict=True))
        drawn = tabulate(
            [[cell.replace(" ", _BLANK) for cell in row] for row in rows],
            tablefmt="plain",
            disable_numparse=True,
            colalign=[align for _, _, align in columns],
        )
        lines = [line.replace(_BLANK, " ").rstrip() for line in drawn.split("\n")]
        if vertical or not table.strips or max(map(len, lines)) <= WIDTH:
            rule = "-" * max(map(len, lines))
            return "\n".join([*lines[:heads], rule, *lines[heads:]])
        vertical = True


def _columns(table: Table, *, vertical: bool) -> Iterator[tuple[list[str], list[str], str]]:
    """Columns of text as lines above the rule, lines below it, alignment."""
    strips = {strip.first: strip for strip in table.strips}
    rows = list(_thinned(table))
    heights = _heights(table)
    marked = max((len(mark) for s in table.strips for mark in s.marks), default=0)
    align = _alignment(table.aligned, len(table.headings))
    number = 0
    while number < len(table.headings):
        strip = strips.get(number)
        if strip is None:
            below = [_lines([row[number]], h) for row, h in zip(table.under, heights, strict=True)]
            heading = table.headings[number]
            # With rows under the headings, a plain column's own heading stands closest to its rows.
            head = [line for lines in below for line in lines] + [heading]
            if not table.under:
                head = [heading]
            yield head, [row[number] for row in rows], align[number]
            number += 1
            continue
        span = slice(number, number + strip.size)
        head = list(_name_lines(strip, vertical=vertical))
        head += _lines(strip.marks, marked)
        for row, height in zip(table.under, heights, strict=True):
            head += _lines(row[span], height)
        yield [*head, *([""] if table.under else [])], [" ".join(r[span]) for r in rows], "left"
        number += strip.size


def _heights(table: Table) -> list[int]:
    """How many lines each row under the headings takes: digits stand one above the other."""
    inside = [i for s in table.strips for i in range(s.first, s.first + s.size)]
    return [max((len(row[i]) for i in inside), default=1) or 1 for row in table.under]


def _name_lines(strip: Strip, *, vertical: bool) -> Iterable[str]:
    room = 2 * strip.size - 1
    if len(strip.name) <= room or not (vertical or strip.size > 1):
        return [strip.name]
    return list(strip.name) if vertical else [strip.name]


def _lines(cells: Sequence[str], height: int) -> list[str]:
    """Short cells beside each other, each read downwards; one alone is written as it is."""
    if len(cells) == 1:
        return [*cells, *[""] * (height - 1)]
    return [
        " ".join(c or " " for c in line)
        for line in zip_longest(*(cell.ljust(height) for cell in cells), fillvalue=" ")
    ]
