"""A programmable array as its data sheet's logic diagram shows it.

Only structure and fuse numbers stand here; how a file says them is `pla.device.reader`'s concern.
Registers, output enables, feedback and terms of a cell's own have their place in the model: a
`Mode` says what its pin shows and what it feeds back, a `Cell` may have terms of its own instead of
a column of the shared OR array.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from collections.abc import Iterator

    from pla.errors import Diagnostic, Location

__all__ = [
    "AndArray",
    "BlankRow",
    "Block",
    "Cell",
    "Column",
    "Device",
    "Links",
    "Mode",
    "OrArray",
    "Shows",
]

Shows = Literal["sum", "sum'", "none"]
"""What a pin shows or a feedback line carries in a mode."""

BlankRow = Literal["dead", "true", "live"]
"""What a row of a blank part is worth: ``dead`` always 0, ``true`` always 1, ``live`` neither."""


@dataclass(frozen=True, slots=True)
class Links:
    """What the states of a link mean. JESD3 writes 0 for a closed link and 1 for an open one.

    Attributes:
        blank: State of every link of an unprogrammed part.
        connected: State that joins a line to a term, and a term to a sum.
        unused_term: How a row without a term is left: ``blank`` untouched, or ``dead`` with every
            line and its complement connected.
    """

    blank: Literal[0, 1]
    connected: Literal[0, 1]
    unused_term: Literal["blank", "dead"]

    @property
    def blank_connected(self) -> bool:
        """Whether the links of an unprogrammed part join."""
        return self.blank == self.connected


@dataclass(frozen=True, slots=True)
class Column:
    """A line that crosses the AND array: the level of a pin, or its complement."""

    pin: int
    complement: bool

    def __str__(self) -> str:
        return f"{self.pin}'" if self.complement else str(self.pin)


@dataclass(frozen=True, slots=True)
class AndArray:
    """Rows are product terms, columns are lines; a link where they cross.

    Attributes:
        columns: ``None`` is a column with no line, whose links do nothing.
        rows: First fuse of each term.
        column_step: Fuses from one column to the next.
    """

    columns: tuple[Column | None, ...]
    rows: tuple[int, ...]
    column_step: int

    def fuse(self, term: int, column: int) -> int:
        return self.rows[term] + column * self.column_step

    def fuses_of(self, term: int) -> range:
        """The links of one row, in order of the columns."""
        return _strided(self.rows[term], len(self.columns), self.column_step)


@dataclass(frozen=True, slots=True)
class OrArray:
    """Rows are product terms, columns are sums; a link where they cross.

    Attributes:
        pins: The output pin whose cell each column's sum belongs to.
        rows: First fuse of each term's OR links.
        column_step: Fuses from one column to the next.
    """

    pins: tuple[int, ...]
    rows: tuple[int, ...]
    column_step: int

    def fuse(self, term: int, column: int) -> int:
        return self.rows[term] + column * self.column_step

    def fuses_of(self, term: int) -> range:
        """The links of one row, in order of the columns."""
        return _strided(self.rows[term], len(self.pins), self.column_step)


def _strided(first: int, count: int, step: int) -> range:
    return range(first, first + count * step, step)


@dataclass(frozen=True, slots=True)
class Mode:
    """One setting of a cell's configuration links.

    Attributes:
        set: State of each configuration link, in the order of `Cell.links`; ``""`` if it has none.
        pin: What the pin shows.
    """

    set: str
    pin: Shows


@dataclass(frozen=True, slots=True)
class Cell:
    """An output cell.

    Attributes:
        pin: Its output pin.
        kind: Name of its kind in the device file.
        links: Its configuration links.
        modes: The settings that are allowed.
        bits: Names of the configuration links, in the order of `links`.
    """

    pin: int
    kind: str
    links: tuple[int, ...]
    modes: tuple[Mode, ...]
    bits: tuple[str, ...] = ()

    def mode_of(self, states: str) -> Mode | None:
        """The mode that these states of the configuration links select, if they select one."""
        return next((mode for mode in self.modes if mode.set == states), None)


@dataclass(frozen=True, slots=True)
class Block:
    """Fuses that stand together in a fuse file, as one list."""

    first: int
    size: int
    what: str


@dataclass(frozen=True)
class Device:
    """A checked device description: every fuse has exactly one use, every pin exactly one role.

    Attributes:
        name: Catalogue name.
        summary: One line for people.
        technology: ``one-time`` links are programmed once; ``erasable`` ones any number of times.
        pins: Number of pins; they count from 1.
        fuses: Number of fuses; they count from 0.
        ground: Ground pin.
        power: Supply pin.
        unconnected: Pins with no connection.
        links: What the states mean.
        and_array: Product terms.
        or_array: Sums of a shared OR array.
        cells: Output cells in order of the file.
        spare: Fuses that do nothing, as ranges; they stay blank.
        location: Where it was read from.
        warnings: What is doubtful in the description, in order of place.
    """

    name: str
    summary: str
    technology: Literal["one-time", "erasable"]
    pins: int
    fuses: int
    ground: int
    power: int
    unconnected: tuple[int, ...]
    links: Links
    and_array: AndArray
    or_array: OrArray
    cells: tuple[Cell, ...]
    spare: tuple[range, ...]
    location: Location
    warnings: tuple[Diagnostic, ...] = ()

    @property
    def terms(self) -> int:
        return len(self.and_array.rows)

    @cached_property
    def cell_of_pin(self) -> dict[int, Cell]:
        return {cell.pin: cell for cell in self.cells}

    @cached_property
    def input_pins(self) -> tuple[int, ...]:
        """Pins with a line in the AND array that are no cell's, ascending."""
        lines = {c.pin for c in self.and_array.columns if c is not None}
        return tuple(sorted(lines - set(self.cell_of_pin)))

    @cached_property
    def output_pins(self) -> tuple[int, ...]:
        return tuple(sorted(self.cell_of_pin))

    @cached_property
    def column_of(self) -> dict[tuple[int, bool], int]:
        """Index of the column that carries (pin, complement)."""
        return {
            (c.pin, c.complement): i for i, c in enumerate(self.and_array.columns) if c is not None
        }

    @cached_property
    def paired_pins(self) -> tuple[int, ...]:
        """Pins that have both a true and a complement line, ascending."""
        return tuple(
            sorted(
                pin for pin, prime in self.column_of if not prime and (pin, True) in self.column_of
            )
        )

    @property
    def blank_row(self) -> BlankRow:
        """What a row of a blank part is worth.

        A row without a connected line is the empty product, 1. A row with a line and its
        complement connected is 0. A row that connects no such pair depends on its inputs.
        """
        if not self.links.blank_connected or not self.column_of:
            return "true"
        return "dead" if self.paired_pins else "live"

    def blank_mode(self, cell: Cell) -> Mode | None:
        """The mode of a cell whose configuration links are all blank, if that is one."""
        return cell.mode_of(str(self.links.blank) * len(cell.links))

    def idle_mode(self, cell: Cell) -> Mode:
        """The mode of a cell that no output uses: blank if that is a mode, else its first one."""
        return self.blank_mode(cell) or cell.modes[0]

    def blocks(self) -> Iterator[Block]:
        """The fuse lists of a fuse file: together every fuse once, in order of address.

        One for each row of the AND array, with its OR links where they follow at once; then one
        for each further region that stands together: OR rows apart, configuration links, spare
        fuses. In an array whose rows do not stand together the columns make the blocks, and
        where neither does, the array as a whole.
        """
        from pla.device.blocks import blocks_of  # noqa: PLC0415 - `blocks` builds on this module

        return blocks_of(self)
