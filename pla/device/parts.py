"""What a programmable array is made of: links, lines, rows, sums, cells and their modes.

Only structure and fuse numbers stand here. A row of the AND array is a product term of a shared OR
array, a term or the output enable of one cell. A cell's modes are resolved for the cell: their rows
are rows of the device, and what the cell's columns carry is said mode by mode. Registers have their
place in `Mode`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias

if TYPE_CHECKING:
    from fractions import Fraction

__all__ = [
    "ALWAYS",
    "AndArray",
    "BlankRow",
    "Block",
    "Carries",
    "Cell",
    "Column",
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

Source: TypeAlias = "int | str"
"""A pin, or the name of a cell."""

Shows = Literal["sum", "sum'", "none"]
"""What a pin shows in a mode; ``none`` is high impedance."""

Carries = Literal["sum", "sum'", "pin", "none"]
"""What a feedback line carries in a mode."""

BlankRow = Literal["dead", "true", "live"]
"""What a row of a blank part is worth: ``dead`` always 0, ``true`` always 1, ``live`` neither."""


@dataclass(frozen=True, slots=True)
class Links:
    """What the states of a link mean. JESD3 writes 0 for a closed link and 1 for an open one.

    Attributes:
        blank: State of every link of an unprogrammed part.
        connected: State that joins a line to a term, and a term to a sum.
        unused_term: How a row without a term is left: ``blank`` untouched, ``dead`` with every
            line and its complement connected, ``drop`` cut off by its drop link.
        unused_enable: How the enable row of a cell that no output uses is left: ``blank``
            untouched, ``off`` dead, ``on`` with no line connected; ``None`` where no cell has one.
    """

    blank: Literal[0, 1]
    connected: Literal[0, 1]
    unused_term: Literal["blank", "dead", "drop"]
    unused_enable: Literal["blank", "off", "on"] | None = None

    @property
    def blank_connected(self) -> bool:
        """Whether the links of an unprogrammed part join."""
        return self.blank == self.connected


@dataclass(frozen=True, slots=True)
class Column:
    """A line that crosses the AND array, as the device file names it, or its complement.

    Attributes:
        source: A pin, or the name of a cell.
        complement: Whether it is the complement line.
    """

    source: Source
    complement: bool

    def __str__(self) -> str:
        return f"{self.source}'" if self.complement else str(self.source)


@dataclass(frozen=True, slots=True)
class Line:
    """What a column really carries once all cells are set.

    Attributes:
        kind: The level of a pin, or the sum of a cell before its pin's polarity and enable.
        of: The pin, or the key of the cell.
        complement: Whether it is the complement of that.
    """

    kind: Literal["pin", "sum"]
    of: Source
    complement: bool = False

    @property
    def inverse(self) -> Line:
        return Line(self.kind, self.of, not self.complement)

    def __str__(self) -> str:
        what = f"pin {self.of}" if self.kind == "pin" else f"the sum of {self.of}"
        return f"the complement of {what}" if self.complement else what


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
        sums: The key of the cell that each column's sum belongs to.
        terms: The row of the AND array that each row here belongs to.
        rows: First fuse of each row's links.
        column_step: Fuses from one column to the next.
    """

    sums: tuple[Source, ...]
    terms: tuple[int, ...]
    rows: tuple[int, ...]
    column_step: int

    def fuse(self, row: int, column: int) -> int:
        """The link of the `row`-th row here, not of the AND array."""
        return self.rows[row] + column * self.column_step

    def fuses_of(self, row: int) -> range:
        """The links of one row, in order of the columns."""
        return _strided(self.rows[row], len(self.sums), self.column_step)


def _strided(first: int, count: int, step: int) -> range:
    return range(first, first + count * step, step)


@dataclass(frozen=True, slots=True)
class Drop:
    """Links that cut a whole row off, so that it counts as 0.

    Attributes:
        terms: The rows that have such a link.
        fuses: The link of each of them.
        dropped: The state that cuts the row off.
    """

    terms: tuple[int, ...]
    fuses: tuple[int, ...]
    dropped: Literal[0, 1]

    def fuse(self, term: int) -> int | None:
        """The drop link of a row, if it has one."""
        return dict(zip(self.terms, self.fuses, strict=True)).get(term)


@dataclass(frozen=True, slots=True)
class Enable:
    """When the pin of a cell is driven.

    Attributes:
        kind: ``always``; while a ``row`` is 1; or by the level of a ``pin``.
        row: Row of the AND array.
        pin: Enable pin.
        active_low: The enable pin enables while it is low.
    """

    kind: Literal["always", "row", "pin"] = "always"
    row: int | None = None
    pin: int | None = None
    active_low: bool = False


ALWAYS = Enable()


@dataclass(frozen=True, slots=True)
class Mode:
    """One setting of a cell's configuration links, with the rows of this cell.

    Attributes:
        set: State of each configuration link, in the order of `Cell.links`; ``""`` if it has none.
        pin: What the pin shows while it is driven; ``none`` for a cell without a pin.
        feedback: What the unprimed column of the cell carries; ``None`` if the cell has no
            columns, or `lines` are given one by one.
        terms: Rows of the cell's own OR gate, ascending; empty if its sum is a column of the OR
            array.
        enable: When the pin is driven.
        lines: What each of the cell's own columns in the AND array carries in this mode, as
            (column, line); ``None`` for nothing.
    """

    set: str
    pin: Shows
    feedback: Carries | None = None
    terms: tuple[int, ...] = ()
    enable: Enable = ALWAYS
    lines: tuple[tuple[int, Line | None], ...] = ()


@dataclass(frozen=True, slots=True)
class Cell:
    """A cell: a sum, its pin if it has one, its feedback if it has any.

    Attributes:
        key: What names it: its pin, or its name if it is buried.
        pin: Its pin; ``None`` for a buried cell.
        kind: Name of its kind in the device file.
        links: Its configuration links.
        modes: The settings that are allowed.
        bits: Names of the configuration links, in the order of `links`.
        name: Its name, if it has one; columns of that name carry its feedback.
        rows: Rows of the AND array that are its own in any mode, ascending.
        unused: The setting for a cell that no output uses, if the file says so.
    """

    key: Source
    pin: int | None
    kind: str
    links: tuple[int, ...]
    modes: tuple[Mode, ...]
    bits: tuple[str, ...] = ()
    name: str | None = None
    rows: tuple[int, ...] = ()
    unused: str | None = None

    def __str__(self) -> str:
        return f"the cell on pin {self.pin}" if self.pin is not None else f"cell {self.name}"

    def mode_of(self, states: str) -> Mode | None:
        """The mode that these states of the configuration links select, if they select one."""
        return next((mode for mode in self.modes if mode.set == states), None)

    @property
    def capacity(self) -> int:
        """The most terms that its own OR gate has in any mode; 0 if its OR gate is shared."""
        return max(len(mode.terms) for mode in self.modes)

    @property
    def enable_rows(self) -> tuple[int, ...]:
        """The rows that are an output enable in some mode, ascending."""
        return tuple(sorted({m.enable.row for m in self.modes if m.enable.row is not None}))


@dataclass(frozen=True, slots=True)
class Signature:
    """Fuses that hold a text of the user's.

    Attributes:
        first_fuse: Of the first byte.
        bits: Number of fuses, a multiple of 8.
        order: Which bit of each byte stands first.
        ones: The state that stands for a bit that is 1.
    """

    first_fuse: int
    bits: int
    order: Literal["most significant bit first", "least significant bit first"]
    ones: Literal[0, 1] = 1

    @property
    def fuses(self) -> range:
        return range(self.first_fuse, self.first_fuse + self.bits)

    @property
    def length(self) -> int:
        """Characters that it holds."""
        return self.bits // 8


@dataclass(frozen=True, slots=True)
class Timing:
    """Delays from the data sheet, in ns; ``None`` where it gives none.

    Attributes:
        tpd: From an input to an output, one pass through the array.
        tfb: Added by each further pass through a feedback line; `tpd` if not given.
        ten: From an input to an output that is enabled.
        tdis: From an input to an output that is disabled.
    """

    tpd: Fraction | None = None
    tfb: Fraction | None = None
    ten: Fraction | None = None
    tdis: Fraction | None = None


@dataclass(frozen=True, slots=True)
class Block:
    """Fuses that stand together in a fuse file, as one list."""

    first: int
    size: int
    what: str
