"""Tables that know nothing of how they will be shown."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["Strip", "Table"]


@dataclass(frozen=True, slots=True)
class Strip:
    """Neighbouring columns of single characters, such as the bits of a bus.

    Text sets them close together, under one name; Markdown gives each a column of its own.

    Attributes:
        first: Index of the first column.
        name: What stands above all of them.
        marks: What stands above each of them; ``""`` where the name says it all.
        part: Columns of different parts, inputs and outputs, are kept apart.
    """

    first: int
    name: str
    marks: tuple[str, ...]
    part: int = 0

    @property
    def columns(self) -> slice:
        return slice(self.first, self.first + len(self.marks))


@dataclass(frozen=True, slots=True)
class Table:
    """Rows under headings, with what has to be said about them.

    Attributes:
        title: One line.
        headings: One for each column.
        rows: As many cells each.
        lead: Paragraphs before the table.
        remarks: Paragraphs after it.
        aligned: ``l`` or ``r`` for each column.
        under: Rows that belong to the headings, such as pins; the first cell names the row.
        strips: Columns that text sets close together.
        wrapped: Columns that text breaks into lines where the table is too wide.
        repeated: So many columns at the left are left empty where they repeat the row above.
    """

    title: str
    headings: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    aligned: str
    lead: tuple[str, ...] = ()
    remarks: tuple[str, ...] = ()
    under: tuple[tuple[str, ...], ...] = ()
    strips: tuple[Strip, ...] = ()
    wrapped: tuple[int, ...] = ()
    repeated: int = 0

    def shown_rows(self) -> Iterator[tuple[str, ...]]:
        """The rows, without what repeats the row above in the columns at the left."""
        above: tuple[str, ...] = ()
        for row in self.rows:
            same = 0
            while same < self.repeated and row[: same + 1] == above[: same + 1]:
                same += 1
            yield ("",) * same + row[same:]
            above = row
