"""The AND array and the OR array of a device file."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.device.consistency import FuseClaim, PinClaim
from pla.device.limits import known_keys
from pla.device.model import AndArray, Column, OrArray

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.errors import Location
    from pla.tomlfile import Section

__all__ = ["MAX_TERMS", "ReadAndArray", "ReadOrArray", "read_and_array", "read_or_array"]

MAX_TERMS = 65_536
_LINE = re.compile(r"([1-9][0-9]{0,5})('?)")


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

    def pin_claims(self) -> list[PinClaim]:
        """One for each pin with a line, at its first column."""
        first: dict[int, PinClaim] = {}
        for index, column in enumerate(self.array.columns):
            if column is not None and isinstance(column.source, int) and column.source not in first:
                first[column.source] = PinClaim(
                    column.source,
                    f"an input with column {index} of [and]",
                    lambda index=index: self.at_column(index),  # type: ignore[misc]
                )
        return list(first.values())

    def single_lines(self) -> Iterator[tuple[int, Column]]:
        """Lines whose pin has no line in the other sense, with their columns."""
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

    def claims(self) -> Iterator[FuseClaim]:
        for term in range(len(self.array.rows)):
            yield FuseClaim(
                self.array.fuses_of(term),
                "OR",
                lambda column, term=term: (  # type: ignore[misc]
                    f"OR row {term} column {column} for pin {self.array.sums[column]}"
                ),
                lambda term=term: _at_row(self.section, term),  # type: ignore[misc]
            )

    def pin_claims(self) -> list[PinClaim]:
        """One for each column."""
        return [
            PinClaim(
                pin,
                f"OR column {column}",
                lambda column=column: self.section.inside("columns", self.offsets[column]),  # type: ignore[misc]
            )
            for column, pin in enumerate(self.array.sums)
        ]


def read_and_array(section: Section) -> ReadAndArray | None:
    """The AND array, or ``None`` if something in it is wrong; its errors are reported."""
    known_keys(
        section,
        ["columns", "terms", "first_fuse", "term_step", "rows", "column_step"],
        {},
    )
    columns = _read_lines(section)
    terms = section.integer("terms", low=1, high=MAX_TERMS, required=True)
    rows = _read_rows(section, terms)
    step = _read_step(section, "column_step", default=1)
    if columns is None or rows is None or step is None:
        return None
    lines, offsets = columns
    return ReadAndArray(AndArray(lines, rows, step), section, offsets)


def read_or_array(section: Section, terms: int | None) -> ReadOrArray | None:
    """The OR array of so many rows, or ``None`` if something in it is wrong.

    `terms` is ``None`` if their number is not known; what is wrong with that is reported elsewhere.
    """
    known_keys(section, ["columns", "first_fuse", "term_step", "rows", "column_step"], {})
    columns = _read_sums(section)
    rows = _read_rows(section, terms)
    step = _read_step(section, "column_step", default=1)
    if columns is None or rows is None or step is None:
        return None
    pins, offsets = columns
    return ReadOrArray(OrArray(pins, tuple(range(len(rows))), rows, step), section, offsets)


def _split(section: Section) -> list[tuple[str, int]] | None:
    text = section.text("columns", required=True)
    if text is None:
        return None
    found = [(match[0], match.start()) for match in re.finditer(r"\S+", text)]
    if not found:
        section.error(
            "COLUMNS-EMPTY", f"'columns' of {section.title} is empty", section.at("columns")
        )
        return None
    return found


def _read_lines(
    section: Section,
) -> tuple[tuple[Column | None, ...], tuple[int, ...]] | None:
    words = _split(section)
    if words is None:
        return None
    lines: list[Column | None] = []
    good = True
    first: dict[Column, int] = {}
    for index, (word, offset) in enumerate(words):
        match = _LINE.fullmatch(word)
        if word == ".":
            lines.append(None)
        elif match is None:
            good = False
            section.error(
                "COLUMN",
                f"column {index} of [and] is {word!r}, expected a pin such as 5, "
                "the complement of a pin such as 5', or . for a column with no line",
                section.inside("columns", offset),
                _mend_line(word),
            )
        else:
            line = Column(int(match[1]), match[2] == "'")
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


def _read_sums(section: Section) -> tuple[tuple[int, ...], tuple[int, ...]] | None:
    words = _split(section)
    if words is None:
        return None
    pins: list[int] = []
    good = True
    for index, (word, offset) in enumerate(words):
        match = _LINE.fullmatch(word)
        if match is None or match[2]:
            good = False
            hint = None
            if match is not None:
                hint = "whether a pin shows the sum or its complement is said by the cell's modes"
            elif word == ".":
                hint = "leave the column out, and declare its fuses spare"
            section.error(
                "COLUMN",
                f"column {index} of [or] is {word!r}, expected an output pin such as 14",
                section.inside("columns", offset),
                hint,
            )
        else:
            pins.append(int(match[1]))
    return (tuple(pins), tuple(offset for _, offset in words)) if good else None


def _mend_line(word: str) -> str | None:
    plain = re.sub('[’′`´"]', "'", word)
    if _LINE.fullmatch(plain):
        return f"write {plain} with the plain quote"
    if re.fullmatch("[/!~-][0-9]+", word):
        return f"write {word[1:]}' for the complement"
    if "," in word:
        return "separate columns by blanks"
    return None


def _read_rows(section: Section, terms: int | None) -> tuple[int, ...] | None:
    """First fuse of each row; `terms` is ``None`` if it is not known."""
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
        if rows is None or terms is None:
            return None
        if len(rows) != terms:
            section.error(
                "ROWS-COUNT",
                f"'rows' of {section.title} lists {len(rows)} first fuses "
                f"for {terms} term{'s' if terms > 1 else ''}",
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
    step = _read_step(section, "term_step")
    if first is None or step is None or terms is None:
        return None
    return tuple(range(first, first + terms * step, step))


def _read_step(section: Section, key: str, default: int | None = None) -> int | None:
    if default is not None and key not in section:
        return default
    step = section.integer(key, required=True)
    if step == 0:
        section.wrong("a whole number other than 0", key)
        return None
    return step


def _at_row(section: Section, term: int) -> Location:
    return section.at("rows", term) if "rows" in section else section.at("first_fuse")
