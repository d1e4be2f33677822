"""A programmable array as its data sheet's logic diagram shows it.

Only structure and fuse numbers stand here; how a file says them is `pla.device.reader`'s concern.
The parts of a device stand in `pla.device.parts`, and can be taken from here as well.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING, Literal

from pla.device.parts import (
    ALWAYS,
    AndArray,
    BlankRow,
    Block,
    Carries,
    Cell,
    Column,
    Drop,
    Enable,
    Line,
    Links,
    Mode,
    OrArray,
    Shows,
    Signature,
    Source,
    Timing,
)

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from pla.errors import Diagnostic, Location

__all__ = [
    "ALWAYS",
    "AndArray",
    "BlankRow",
    "Block",
    "Carries",
    "Cell",
    "Column",
    "Device",
    "Drop",
    "Enable",
    "Line",
    "Links",
    "Mode",
    "OrArray",
    "Shows",
    "Signature",
    "Source",
    "Timing",
]


@dataclass(frozen=True)
class Device:
    """A checked device description: every fuse has exactly one use, every pin exactly one role.

    Attributes:
        name: Catalogue name.
        summary: One line for people.
        technology: ``one-time`` links are programmed once; ``erasable`` ones any number of times.
        pins: Number of pins; they count from 1.
        fuses: Number of fuses; they count from 0.
        ground: Ground pins.
        power: Supply pins.
        unconnected: Pins with no connection.
        links: What the states mean.
        and_array: Rows and columns.
        or_array: Sums of a shared OR array; ``None`` where every OR gate has terms of its own.
        cells: Cells in order of the file.
        spare: Fuses that do nothing, as ranges; they stay blank.
        location: Where it was read from.
        warnings: What is doubtful in the description, in order of place.
        drop: Links that cut rows off.
        mode_fuses: Fuses that select this device-wide mode, as (fuse, state).
        family: What the modes and variants of one part have in common.
        signature: Fuses for a text.
        timing: Delays.
    """

    name: str
    summary: str
    technology: Literal["one-time", "erasable"]
    pins: int
    fuses: int
    ground: tuple[int, ...]
    power: tuple[int, ...]
    unconnected: tuple[int, ...]
    links: Links
    and_array: AndArray
    or_array: OrArray | None
    cells: tuple[Cell, ...]
    spare: tuple[range, ...]
    location: Location
    warnings: tuple[Diagnostic, ...] = ()
    drop: Drop | None = None
    mode_fuses: tuple[tuple[int, Literal[0, 1]], ...] = ()
    family: str = ""
    signature: Signature | None = None
    timing: Timing = field(default_factory=Timing)

    @property
    def terms(self) -> int:
        """Rows of the AND array, enable rows among them."""
        return len(self.and_array.rows)

    @cached_property
    def shared_rows(self) -> tuple[int, ...]:
        """Rows of the AND array that feed the OR array, in its order."""
        return () if self.or_array is None else self.or_array.terms

    @cached_property
    def term_rows(self) -> tuple[int, ...]:
        """Rows that are a term of some sum in some mode, ascending."""
        own = {row for cell in self.cells for mode in cell.modes for row in mode.terms}
        return tuple(sorted(own.union(self.shared_rows)))

    @cached_property
    def cell_of_pin(self) -> dict[int, Cell]:
        """Cells that have a pin, by it."""
        return {cell.pin: cell for cell in self.cells if cell.pin is not None}

    @cached_property
    def cell_of(self) -> dict[Source, Cell]:
        """Every cell by its key."""
        return {cell.key: cell for cell in self.cells}

    @cached_property
    def or_column(self) -> dict[Source, int]:
        """For the key of each cell with a shared OR gate, the column of its sum."""
        sums = () if self.or_array is None else self.or_array.sums
        return {key: column for column, key in enumerate(sums)}

    @cached_property
    def fixed_lines(self) -> tuple[Line | None, ...]:
        """What each column carries whatever the cells are set to; ``None`` where they decide."""
        by_mode = {column for cell in self.cells for column, _ in cell.modes[0].lines}
        return tuple(
            None
            if column is None or index in by_mode
            else Line("pin", column.source, column.complement)
            for index, column in enumerate(self.and_array.columns)
        )

    def lines(self, modes: Mapping[Source, Mode]) -> tuple[Line | None, ...]:
        """What each column carries when the cells with these keys are in these modes.

        Columns of cells that are not listed carry nothing.
        """
        lines = list(self.fixed_lines)
        for mode in modes.values():
            for column, line in mode.lines:
                lines[column] = line
        return tuple(lines)

    @cached_property
    def input_pins(self) -> tuple[int, ...]:
        """Pins that are no cell's and have a line in the AND array in some mode, ascending."""
        lines = {line.of for line in self.fixed_lines if line is not None}
        lines |= {
            line.of
            for cell in self.cells
            for mode in cell.modes
            for _, line in mode.lines
            if line is not None and line.kind == "pin"
        }
        return tuple(sorted(p for p in lines if isinstance(p, int) and p not in self.cell_of_pin))

    @cached_property
    def readable_pins(self) -> tuple[int, ...]:
        """Pins whose level a term can depend on in some mode, without the part driving them.

        The input pins, and pins of cells that can be switched off, ascending.
        """
        fixed = {line.of for line in self.fixed_lines if line is not None}
        quiet = {
            pin
            for pin, cell in self.cell_of_pin.items()
            for mode in cell.modes
            if (mode.pin == "none" or mode.enable.kind != "always")
            and (pin in fixed or any(line == Line("pin", pin) for _, line in mode.lines))
        }
        return tuple(sorted({*self.input_pins, *quiet}))

    @cached_property
    def output_pins(self) -> tuple[int, ...]:
        """Pins of cells that can show a sum, ascending."""
        return tuple(
            sorted(
                pin
                for pin, cell in self.cell_of_pin.items()
                if any(mode.pin != "none" for mode in cell.modes)
            )
        )

    @cached_property
    def enable_pins(self) -> tuple[int, ...]:
        """Pins that enable cells in some mode, ascending."""
        pins = {mode.enable.pin for cell in self.cells for mode in cell.modes}
        return tuple(sorted(pin for pin in pins if pin is not None))

    @cached_property
    def column_of(self) -> dict[tuple[Source, bool], int]:
        """Index of the column that the device file names (source, complement)."""
        return {
            (c.source, c.complement): i
            for i, c in enumerate(self.and_array.columns)
            if c is not None
        }

    @cached_property
    def paired_sources(self) -> tuple[Source, ...]:
        """Sources with a true and a complement column that are opposite in every mode.

        In order of the columns. A row that is connected to both is always 0.
        """
        return tuple(
            source
            for source, prime in self.column_of
            if not prime and (source, True) in self.column_of and self._opposite(source)
        )

    def _opposite(self, source: Source) -> bool:
        pair = self.column_of[source, False], self.column_of[source, True]
        for cell in self.cells:
            given = [dict(mode.lines) for mode in cell.modes]
            if any(column in lines for lines in given for column in pair):
                carried = [[lines.get(column) for column in pair] for lines in given]
                return all(a is not None and b == a.inverse for a, b in carried)
        return True

    @property
    def blank_row(self) -> BlankRow:
        """What a row of a blank part without a drop link is worth, or any if all rows have one.

        A row that its drop link cuts off is 0, and so is one with a line and its complement
        connected. A row without a connected line is the empty product, 1. A row that connects no
        such pair depends on its inputs.
        """
        drops = () if self.drop is None else self.drop.terms
        bare = next((row for row in range(self.terms) if row not in drops), 0)
        return self.blank_row_at(bare)

    def blank_row_at(self, row: int) -> BlankRow:
        """What this row of a blank part is worth; see `blank_row`."""
        drop = self.drop
        if drop is not None and drop.dropped == self.links.blank and drop.fuse(row) is not None:
            return "dead"
        if not self.links.blank_connected or not self.column_of:
            return "true"
        return "dead" if self.paired_sources else "live"

    def blank_mode(self, cell: Cell) -> Mode | None:
        """The mode of a cell whose configuration links are all blank, if that is one."""
        return cell.mode_of(str(self.links.blank) * len(cell.links))

    def idle_mode(self, cell: Cell) -> Mode:
        """The mode of a cell that no output uses.

        What the file says; else blank if that is a mode, else the first one.
        """
        said = cell.mode_of(cell.unused) if cell.unused is not None else None
        return said or self.blank_mode(cell) or cell.modes[0]

    def blocks(self) -> Iterator[Block]:
        """The fuse lists of a fuse file: together every fuse once, in order of address.

        One for each row of the AND array, with its OR links where they follow at once; then one
        for each further region that stands together: OR rows apart, drop links, configuration
        links, mode fuses, signature, spare fuses. In an array whose rows do not stand together the
        columns make the blocks, and where neither does, the array as a whole.
        """
        from pla.device.blocks import blocks_of  # noqa: PLC0415 - `blocks` builds on this module

        return blocks_of(self)
