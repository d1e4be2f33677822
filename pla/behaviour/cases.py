"""Reading ``[[cases]]``: truth tables in the design file or in a CSV file."""

from __future__ import annotations

import os
from dataclasses import dataclass, field
from functools import partial
from typing import TYPE_CHECKING

from pla.behaviour.cells import input_cell, output_cell
from pla.behaviour.columns import registered_column
from pla.behaviour.description import Claims, Description
from pla.behaviour.listing import Listing, ListingBuilder, Row, Values, resolve
from pla.behaviour.problem import Problem
from pla.behaviour.signals import RESERVED
from pla.behaviour.sources import RowSource, read_csv, read_inline
from pla.behaviour.unsupported import MISPLACED, refuse_unsupported
from pla.errors import Diagnostics, InputError
from pla.textfile import read_text

if TYPE_CHECKING:
    from pla.behaviour.signals import Field, Signals, Wanted
    from pla.behaviour.values import Masks
    from pla.tomlfile import Section

__all__ = ["read_cases"]

_OTHERS = RESERVED[-1]
_MOST_ERRORS = 100
_MOST_CUBES = 1 << 20


def read_cases(section: Section, signals: Signals, claims: Claims) -> Description | None:
    """One table. What is wrong goes to the section's diagnostics; then there is no result."""
    diagnostics = section.diagnostics
    before = len(diagnostics.errors)
    refused = refuse_unsupported(section, "table")
    section.unknown_keys(("rows", "file", *refused), MISPLACED)
    source = _source(section)
    if source is None:
        claims.incomplete = True
        return None
    table = _Table(source, signals, diagnostics)
    table.read_header(claims)
    if table.good:
        table.read_rows()
    if len(diagnostics.errors) > before or not table.good:
        return None
    return Description(
        outputs=tuple(bit for f in table.outputs for bit in f.bits if bit is not None),
        needs={},
        solve=lambda never, _: resolve(table.listing(), never, signals, diagnostics),
    )


def _source(section: Section) -> RowSource | None:
    if ("rows" in section) == ("file" in section):
        section.error(
            "CASES-SOURCE",
            'expected either rows = """…""" or file = "…", '
            + ("found both" if "rows" in section else "found neither"),
        )
        return None
    try:
        if "rows" in section:
            text = section.text("rows")
            if text is None:
                return None
            return read_inline(text, lambda offset: section.inside("rows", offset))
        name = section.text("file")
        if name is None:
            return None
        # Names stay as given; a plain "-" would mean standard input.
        folder = os.path.dirname(section.file.file)  # noqa: PTH120
        path = os.path.join(folder, name) if name != "-" else os.path.join(folder or ".", name)  # noqa: PTH118
        return read_csv(read_text(path, named_at=section.at("file")))
    except InputError as fault:
        section.diagnostics.found.extend(fault.diagnostics)
        return None


@dataclass(slots=True)
class _Table:
    source: RowSource
    signals: Signals
    diagnostics: Diagnostics
    inputs: list[Field] = field(default_factory=list)
    outputs: list[Field] = field(default_factory=list)
    builder: ListingBuilder = field(default_factory=ListingBuilder)
    others: Values | None = None
    others_row: int = -1
    good: bool = True
    errors: int = 0

    def error(self, problem: Problem, row: int, cell: int) -> None:
        self.good = False
        self.errors += 1
        at = self.source.at(row, cell)
        if not problem.known:
            self.diagnostics.error(problem.code, problem.message, at, problem.hint)

    def read_header(self, claims: Claims) -> None:
        names = [name for group in self.source.header for name in group]
        if not all(self.source.header):
            self.error(
                Problem("HEADER", "there is no column name beside a bar", "step | fan"),
                -1,
                0 if names else len(names),
            )
        group_of = [g for g, group in enumerate(self.source.header) for _ in group]
        groups = group_of if self.source.has_bars else None
        seen: dict[tuple[bool, int], str] = {}
        for index, name in enumerate(names):
            try:
                column = self.column(name, registered_column(index, names, groups, self.signals))
            except Problem as problem:
                claims.incomplete = True
                self.error(problem, -1, index)
                continue
            keys = [(column.is_input, bit) for bit in column.bits if bit is not None]
            earlier = next((seen[key] for key in keys if key in seen), None)
            if earlier is not None:
                text = f"the column {name!r} shares bits with the column {earlier!r}"
                if earlier == name:
                    text = f"the column {name!r} stands twice"
                self.error(Problem("COLUMN-TWICE", text), -1, index)
                continue
            seen |= dict.fromkeys(keys, name)
            if not column.is_input:
                claims.claim(column, self.source.at(-1, index), "cases")
                self.outputs.append(column)
            else:
                self.inputs.append(column)
                if self.outputs:
                    text = f"the input {name!r} stands behind outputs, expected inputs first"
                    self.error(Problem("HEADER", text), -1, index)
        if not self.good:
            return
        for role, columns in (("input", self.inputs), ("output", self.outputs)):
            if not columns:
                claims.incomplete = True
                example = "such as: step | fan" if self.source.has_bars else "such as: step,fan"
                text = f"the header names no {role}"
                self.error(Problem("HEADER", text, example), -1, len(names))
        first = len(self.inputs)
        if self.good and self.source.has_bars and group_of[first] == group_of[first - 1]:
            text = f"a bar is missing between the inputs and the output {names[first]!r}"
            self.error(Problem("HEADER", text, "step | fan"), -1, first)
        if self.good and not self.source.rows:
            text = "the table has a header but no rows"
            self.error(Problem("TABLE-EMPTY", text), -1, 0)

    def column(self, name: str, wanted: Wanted | None) -> Field:
        if not name:
            raise Problem("HEADER", "a column has no name, expected an input or output")
        if name == _OTHERS:
            raise Problem("HEADER", "'others' starts a row, the first row names the columns")
        if not self.source.has_bars:
            _check_csv_name(name)
        return self.signals.find(name, wanted)

    def read_rows(self) -> None:
        sizes = [len(group) for group in self.source.header]
        input_cache: list[dict[str, list[Masks]]] = [{} for _ in self.inputs]
        output_cache: list[dict[str, Values]] = [{} for _ in self.outputs]
        warned: set[int] = set()
        for row, groups in enumerate(self.source.rows):
            if self.errors >= _MOST_ERRORS:
                text = f"too many errors: the rows from here on were not checked ({row} were)"
                self.error(Problem("TOO-MANY-ERRORS", text), row, 0)
                return
            if groups[0][:1] == [_OTHERS]:
                self.read_others(row, groups, output_cache)
                continue
            if groups[0] and groups[0][0].lower() == _OTHERS:
                text = f"{groups[0][0]!r} does not start a row"
                self.error(
                    Problem("OTHERS", text, f"{_OTHERS} is written in small letters"), row, 0
                )
                continue
            cells = groups[0] if len(groups) == 1 else [c for group in groups for c in group]
            if not self.fits(row, groups, cells, sizes):
                continue
            cubes = self.input_cubes(row, cells, input_cache, warned)
            values = self.output_values(row, cells, len(self.inputs), output_cache)
            if cubes is not None and values is not None:
                self.builder.add(cubes, Row(values, partial(self.source.at, row, 0)))

    def fits(self, row: int, groups: list[list[str]], cells: list[str], sizes: list[int]) -> bool:
        """Whether a row has the cells that the header asks for."""
        wanted = sum(sizes)
        if len(cells) != wanted:
            names = self.show_header()
            text = f"the row has {_cells(len(cells))}, expected {wanted}: {names}"
            self.error(Problem("ROW-LENGTH", text), row, min(len(cells), wanted))
            return False
        if [len(group) for group in groups] != sizes:
            text = f"the bars part the row otherwise than the header: {self.show_header()}"
            at = 0
            for group, size in zip(groups, sizes, strict=False):
                at += min(len(group), size)
                if len(group) != size:
                    break
            self.error(Problem("ROW-BARS", text), row, min(at, len(cells) - 1))
            return False
        return True

    def show_header(self) -> str:
        if self.source.has_bars:
            return " | ".join(" ".join(group) for group in self.source.header)
        return ", ".join(self.source.header[0])

    def input_cubes(
        self, row: int, cells: list[str], caches: list[dict[str, list[Masks]]], warned: set[int]
    ) -> list[Masks] | None:
        fixed_ones = fixed_zeros = 0
        several: list[list[Masks]] = []
        count = 1
        for index, (column, cache) in enumerate(zip(self.inputs, caches, strict=True)):
            text = cells[index]
            masks = cache.get(text)
            if masks is None:
                try:
                    masks = cache[text] = input_cell(column, self.filled(text, column))
                except Problem as problem:
                    self.error(problem, row, index)
                    count = 0
                    continue
                if column.unreached and text.isalnum() and not text.startswith("0b"):
                    self.warn_of_granule(row, index, column, warned)
            if len(masks) == 1:
                fixed_ones |= masks[0][0]
                fixed_zeros |= masks[0][1]
            else:
                several.append(masks)
                count *= len(masks)
        if count > _MOST_CUBES:
            text = "the ranges of this row make too many cubes"
            self.error(Problem("ROW-LARGE", text, "split the table"), row, 0)
            count = 0
        if not count:
            return None
        cubes = [(fixed_ones, fixed_zeros)]
        for masks in several:
            cubes = [(a | ones, b | zeros) for a, b in cubes for ones, zeros in masks]
        return cubes

    def filled(self, text: str, column: Field) -> str:
        if not text:
            raise Problem("CELL-EMPTY", f"the cell of {column.name} is empty, expected a value")
        return text

    def warn_of_granule(self, row: int, index: int, column: Field, warned: set[int]) -> None:
        if index in warned:
            return
        warned.add(index)
        size = 1 << column.unreached
        self.diagnostics.warning(
            "GRANULE-POINT",
            f"a single number of {column.name} stands for {size} numbers, because its lowest "
            f"{column.unreached} bits do not reach the device",
            self.source.at(row, index),
            "write a range a..b to say so",
        )

    def output_values(
        self, row: int, cells: list[str], first: int, caches: list[dict[str, Values]]
    ) -> Values | None:
        """The values in the output cells, which start at cell `first`."""
        on = off = free = 0
        good = True
        for index, (column, cache) in enumerate(zip(self.outputs, caches, strict=True), first):
            text = cells[index]
            values = cache.get(text)
            if values is None:
                try:
                    values = cache[text] = output_cell(column, self.filled(text, column))
                except Problem as problem:
                    self.error(problem, row, index)
                    good = False
                    continue
            on, off, free = on | values[0], off | values[1], free | values[2]
        return (on, off, free) if good else None

    def read_others(
        self, row: int, groups: list[list[str]], caches: list[dict[str, Values]]
    ) -> None:
        cells = [cell for group in groups for cell in group]
        first = 1
        if not self.source.has_bars:
            # In a CSV file the row keeps the cells of the other inputs.
            first = len(self.inputs)
            for index, cell in enumerate(cells[1:first], 1):
                if cell not in ("", "-"):
                    text = f"others stands for all inputs, expected an empty cell, found {cell!r}"
                    self.error(Problem("OTHERS", text), row, index)
                    return
        elif len(groups[0]) > 1:
            text = "others stands for all inputs, expected a bar behind it"
            self.error(Problem("OTHERS", text, "others | x"), row, 1)
            return
        if len(cells) - first != len(self.outputs):
            found, wanted = max(0, len(cells) - first), len(self.outputs)
            text = f"the row of others has {_cells(found)} for outputs, expected {wanted}"
            self.error(Problem("ROW-LENGTH", text), row, min(len(cells), first + wanted))
            return
        if self.others_row >= 0:
            text = f"others stands twice: here and at {self.source.at(self.others_row, 0)}"
            self.error(Problem("OTHERS", text), row, 0)
            return
        self.others_row = row
        self.others = self.output_values(row, cells, first, caches)

    def listing(self) -> Listing:
        return self.builder.build(
            where=self.source.at(-1, 0),
            what="row",
            inputs=sum(column.mask for column in self.inputs),
            outputs=sum(column.mask for column in self.outputs),
            others=self.others,
            reasons=("x", "others"),
            others_key="a row that starts with others",
        )


def _check_csv_name(name: str) -> None:
    """Refuse a column name that comes of another layout than CSV.

    Raises:
        Problem: If there is a bar, or blanks part several names.
    """
    if "|" in name:
        raise Problem(
            "HEADER",
            f"{name!r} is not the name of a column: a CSV file has no bars, its first row names "
            "inputs and then outputs",
            "leave the bars out and part all columns alike, such as: step,fan",
        )
    if len(name.split()) > 1:
        raise Problem(
            "HEADER",
            f"{name!r} is not the name of a column",
            "columns are parted by a comma, a semicolon or a tab, such as: step,fan",
        )


def _cells(count: int) -> str:
    return "1 cell" if count == 1 else f"{count} cells"
