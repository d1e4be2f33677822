"""The AND array and the OR array of a device file."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.device.consistency import FuseClaim, PinClaim
from pla.device.limits import known_keys
from pla.device.model import AndArray, Column, OrArray
from pla.device.words import (
    MAX_TERMS,
    mend_line,
    named,
    read_row_numbers,
    read_step,
    split_words,
    word_of,
)

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from pla.device.model import Source
    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = ["ReadAndArray", "ReadOrArray", "read_and_array", "read_or_array", "read_places"]


@dataclass(frozen=True, slots=True)
class ReadAndArray:
    """The AND array with the places that say what it is."""

    array: AndArray
    section: Section
    offsets: tuple[int, ...]

    def at_column(self, column: int) -> Location:
        return self.section.inside("columns", self.offsets[column])

    def claims(self) -> Iterator[FuseClaim]:
        for term in range(len(self.array.rows)):
            yield FuseClaim(
                self.array.fuses_of(term),
                "AND",
                lambda column, term=term: self._words(term, column),  # type: ignore[misc]
                lambda term=term: _at_row(self.section, term),  # type: ignore[misc]
            )

    def first_columns(self) -> dict[Source, int]:
        """For each source with a line the index of its first column."""
        first: dict[Source, int] = {}
        for index, column in enumerate(self.array.columns):
            if column is not None:
                first.setdefault(column.source, index)
        return first

    def pin_claims(self) -> list[PinClaim]:
        """One for each pin with a line, at its first column."""
        return [
            PinClaim(
                source,
                f"an input with column {index} of [and]",
                lambda index=index: self.at_column(index),  # type: ignore[misc]
            )
            for source, index in self.first_columns().items()
            if isinstance(source, int)
        ]

    def single_lines(self) -> Iterator[tuple[int, Column]]:
        """Lines whose source has no line in the other sense, with their columns."""
        lines = {line for line in self.array.columns if line is not None}
        for index, line in enumerate(self.array.columns):
            if line is not None and Column(line.source, not line.complement) not in lines:
                yield index, line

    def _words(self, term: int, column: int) -> str:
        line = self.array.columns[column]
        return f"AND row {term} column {column} {f'for {line}' if line else 'with no line'}"


@dataclass(frozen=True, slots=True)
class ReadOrArray:
    """The OR array with the places that say what it is."""

    array: OrArray
    section: Section
    offsets: tuple[int, ...]

    def at_column(self, column: int) -> Location:
        return self.section.inside("columns", self.offsets[column])

    def at_rows(self) -> Location:
        """The place that says which rows of the AND array it has."""
        return self.section.at("terms") if "terms" in self.section else self.section.where

    def claims(self) -> Iterator[FuseClaim]:
        for row in range(len(self.array.rows)):
            yield FuseClaim(
                self.array.fuses_of(row),
                "OR",
                lambda column, row=row: (  # type: ignore[misc]
                    f"OR row {row} column {column} for {named(self.array.sums[column])}"
                ),
                lambda row=row: _at_row(self.section, row),  # type: ignore[misc]
            )


def read_and_array(section: Section) -> ReadAndArray | None:
    """The AND array, or ``None`` if something in it is wrong; its errors are reported."""
    known_keys(section, ["columns", "terms", "first_fuse", "term_step", "rows", "column_step"], {})
    columns = _read_lines(section)
    terms = section.integer("terms", low=1, high=MAX_TERMS, required=True)
    rows = read_places(section, terms, "term")
    step = read_step(section, "column_step", default=1)
    if columns is None or rows is None or step is None:
        return None
    lines, offsets = columns
    return ReadAndArray(AndArray(lines, rows, step), section, offsets)


def read_or_array(
    section: Section,
    count: int | None,
    free: tuple[int, ...] | None,
    keys: Mapping[Source, Source],
    at_count: Location | None = None,
) -> ReadOrArray | None:
    """The OR array, or ``None`` if something in it is wrong; its errors are reported.

    Args:
        section: Where it stands.
        count: Rows of the AND array; ``None`` if not known, which is reported elsewhere.
        free: The rows that no cell owns: what it has if it does not say; ``None`` if not known.
        keys: The key of each cell by every word that names it.
        at_count: The place that says how many rows there are.
    """
    known_keys(section, ["columns", "terms", "first_fuse", "term_step", "rows", "column_step"], {})
    columns = _read_sums(section)
    terms = free
    if "terms" in section:
        terms = read_row_numbers(section, "terms", count, at_count)
    elif free == ():
        section.error(
            "ROWS-NONE",
            f"no row is left for {section.title}: cells own each row of the AND array",
            None,
            "a cell with a column in [or] has no terms of its own",
        )
        terms = None
    rows = read_places(section, None if terms is None else len(terms), "row")
    step = read_step(section, "column_step", default=1)
    if columns is None or terms is None or rows is None or step is None:
        return None
    sources, offsets = columns
    sums = tuple(keys.get(source, source) for source in sources)
    return ReadOrArray(OrArray(sums, terms, rows, step), section, offsets)


def _read_lines(
    section: Section,
) -> tuple[tuple[Column | None, ...], tuple[int, ...]] | None:
    words = split_words(section)
    if words is None:
        return None
    lines: list[Column | None] = []
    good = True
    first: dict[Column, int] = {}
    for index, (word, offset) in enumerate(words):
        line = word_of(word)
        if word == ".":
            lines.append(None)
        elif line is None:
            good = False
            section.error(
                "COLUMN",
                f"column {index} of [and] is {word!r}, expected a pin such as 5 or the name of a "
                "cell such as b1, the complement of one such as 5', or . for a column with no line",
                section.inside("columns", offset),
                mend_line(word),
            )
        else:
            if first.setdefault(line, index) != index:
                good = False
                section.error(
                    "COLUMN-TWICE",
                    f"column {index} of [and] is line {line}, and so is column {first[line]}",
                    section.inside("columns", offset),
                    "a line crosses the array once",
                )
            lines.append(line)
    if good and not first:
        good = False
        section.error("COLUMNS-EMPTY", "no column of [and] has a line", section.at("columns"))
    return (tuple(lines), tuple(offset for _, offset in words)) if good else None


def _read_sums(section: Section) -> tuple[tuple[Source, ...], tuple[int, ...]] | None:
    words = split_words(section)
    if words is None:
        return None
    sources: list[Source] = []
    good = True
    for index, (word, offset) in enumerate(words):
        line = word_of(word)
        if line is None or line.complement:
            good = False
            hint = None
            if line is not None:
                hint = "whether a pin shows the sum or its complement is said by the cell's modes"
            elif word == ".":
                hint = "leave the column out, and declare its fuses spare"
            section.error(
                "COLUMN",
                f"column {index} of [or] is {word!r}, expected a cell: its pin such as 14, or its "
                "name such as b1",
                section.inside("columns", offset),
                hint,
            )
        else:
            sources.append(line.source)
    return (tuple(sources), tuple(offset for _, offset in words)) if good else None


def read_places(section: Section, count: int | None, noun: str) -> tuple[int, ...] | None:
    """First fuse of each row; `count` is ``None`` if it is not known."""
    regular = [key for key in ("first_fuse", "term_step") if key in section]
    if "rows" in section:
        rows = section.integers("rows", low=0)
        if regular:
            section.error(
                "ROWS-TWICE",
                f"{section.title} has 'rows' and {regular[0]!r}; "
                "expected either 'rows' or 'first_fuse' with 'term_step'",
                section.key_at(regular[0]),
            )
            return None
        if rows is None or count is None:
            return None
        if len(rows) != count:
            section.error(
                "ROWS-COUNT",
                f"'rows' of {section.title} lists {len(rows)} first fuses "
                f"for {count} {noun}{'s' if count > 1 else ''}",
                section.at("rows"),
            )
            return None
        return tuple(rows)
    if not regular:
        section.error(
            "KEY-MISSING",
            f"{section.title} does not say where its rows begin",
            None,
            "add first_fuse = … and term_step = …, or rows = […] where the spacing is irregular",
        )
        return None
    first = section.integer("first_fuse", low=0, required=True)
    step = read_step(section, "term_step")
    if first is None or step is None or count is None:
        return None
    return tuple(range(first, first + count * step, step))


def _at_row(section: Section, row: int) -> Location:
    return section.at("rows", row) if "rows" in section else section.at("first_fuse")
