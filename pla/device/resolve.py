"""Cells with their modes resolved: rows of the device, and what each of their columns carries."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from pla.device.model import ALWAYS, Cell, Line, Mode
from pla.device.words import beside, rows_in_words, spans

if TYPE_CHECKING:
    from collections.abc import Collection, Sequence

    from pla.device.arrays import ReadAndArray
    from pla.device.cells import RawCell, ReadKind
    from pla.device.model import Enable, Source
    from pla.device.modes import RawMode
    from pla.errors import Location

__all__ = ["ReadCell", "resolve"]

_LEVELS = {"sum": False, "sum'": True}


@dataclass(frozen=True, slots=True)
class ReadCell:
    """A cell with the place that says what it is."""

    cell: Cell
    raw: RawCell


@dataclass(slots=True)
class _Fault:
    """Something wrong with a mode for one cell, and for how many more."""

    code: str
    message: str
    at: Location
    hint: str | None
    more: int = 0


def resolve(
    kind: ReadKind, and_array: ReadAndArray, summed: Collection[Source] | None
) -> list[ReadCell] | None:
    """The cells of a kind, or ``None`` if their modes do not fit them.

    Args:
        kind: What was read.
        and_array: For the columns of each cell.
        summed: Keys of the cells with a column in the OR array; ``None`` if it is wrong.
    """
    resolver = _Resolver(kind, and_array, summed)
    cells = [resolver.cell(raw) for raw in kind.cells]
    resolver.judge_modes(cells)
    for fault in resolver.faults.values():
        also = f"; likewise {fault.more} more cell{'s' if fault.more > 1 else ''}"
        kind.section.error(
            fault.code, fault.message + (also if fault.more else ""), fault.at, fault.hint
        )
    if resolver.faults:
        return None
    return [ReadCell(cell, raw) for cell, raw in zip(cells, kind.cells, strict=True)]


class _Resolver:
    def __init__(
        self, kind: ReadKind, and_array: ReadAndArray, summed: Collection[Source] | None
    ) -> None:
        self.kind = kind
        self.summed = summed
        self.columns = and_array.array.columns
        self.faults: dict[tuple[str, str | None], _Fault] = {}
        self.own = {raw.key: self._own_columns(raw) for raw in kind.cells}
        self.any_columns = any(self.own.values())
        self.any_pin = any(raw.pin is not None for raw in kind.cells)

    def cell(self, raw: RawCell) -> Cell:
        modes = tuple(self._mode(raw, mode) for mode in self.kind.modes)
        rows = tuple(sorted(raw.rows))
        return Cell(
            raw.key,
            raw.pin,
            self.kind.name,
            raw.links,
            modes,
            self.kind.bits,
            raw.name,
            rows,
            self.kind.unused,
        )

    def judge_modes(self, cells: Sequence[Cell]) -> None:
        kind, first = self.kind, cells[0]
        if self.any_pin and not any(_does_something(m) for cell in cells for m in cell.modes):
            self._fault(
                None,
                "MODE-NONE",
                f"no mode of {kind.section.title} shows the sum at the pin",
                kind.section.at("modes"),
                'expected at least one with pin = "sum" or pin = "sum\'"',
            )
            return
        for index, mode in enumerate(first.modes):
            earlier = next((m for m in first.modes[:index] if _same(m, mode)), None)
            if earlier is not None:
                what = f"the pin shows {mode.pin}" if self.any_pin else "the feedback is the same"
                kind.section.diagnostics.warning(
                    "MODE-SAME",
                    f'modes "{earlier.set}" and "{mode.set}" of {kind.section.title} do the '
                    f"same: {what}",
                    kind.modes[index].where,
                    "is the sense of one of them wrong?",
                )
        self._warn_of_idle(cells)

    def _warn_of_idle(self, cells: Sequence[Cell]) -> None:
        for raw, cell in zip(self.kind.cells, cells, strict=True):
            used = {row for mode in cell.modes for row in mode.terms} | set(cell.enable_rows)
            idle = [row for row in cell.rows if row not in used]
            if idle and not self.faults:
                self.kind.section.diagnostics.warning(
                    "ROW-UNUSED",
                    f"{rows_in_words(idle)} of {raw} {'is' if len(idle) == 1 else 'are'} neither "
                    "term nor enable in any mode",
                    raw.at_rows,
                )
            if cell.pin is None and not self.own[cell.key]:
                self.kind.section.diagnostics.warning(
                    "CELL-NOWHERE",
                    f"{raw} has no pin, and no column of [and] carries its sum: it does nothing",
                    raw.where,
                    self._own_hint(raw),
                )

    def _fault(
        self, mode: RawMode | None, code: str, message: str, at: Location, hint: str | None = None
    ) -> None:
        """Something wrong; of the same with further cells only the number is told.

        `mode` is given where each cell may be at fault in its own way.
        """
        key = (code, f"{at.line}:{at.column}" if mode is None else mode.set)
        known = self.faults.get(key)
        if known is None:
            self.faults[key] = _Fault(code, message, at, hint)
        elif mode is not None:
            known.more += 1

    def _own_columns(self, raw: RawCell) -> tuple[int, ...]:
        """The columns whose lines the mode of the cell decides."""
        word = raw.name if raw.pin is not None and raw.name is not None else raw.key
        return tuple(
            index
            for index, column in enumerate(self.columns)
            if column is not None and column.source == word
        )

    def _mode(self, raw: RawCell, mode: RawMode) -> Mode:
        terms = self._terms(raw, mode)
        enable = self._enable(raw, mode)
        if enable.row is not None and enable.row in terms:
            at = mode.section.at("enable" if mode.enable else "terms")
            if mode.enable is None and mode.terms is None:
                at = raw.at_enable
            self._fault(
                mode if mode.enable or mode.terms is not None else None,
                "ENABLE-IS-TERM",
                f"row {enable.row} of {raw} is its enable and one of its terms in {_titled(mode)}",
                at,
                'a mode in which the pin is always driven says enable = "always"',
            )
        shows = mode.pin or "none"
        if not self.any_pin:
            if shows != "none":
                self._fault(
                    None,
                    "MODE-NO-PIN",
                    f"no cell of {self.kind.section.title} has a pin that could show the sum",
                    mode.section.at("pin"),
                    'leave pin out, or say "none"',
                )
            if mode.enable is not None:
                self._fault(
                    None,
                    "ENABLE-NO-PIN",
                    f"no cell of {self.kind.section.title} has a pin that could be driven",
                    mode.section.key_at("enable"),
                )
        shows = shows if raw.pin is not None else "none"
        self._judge_sum(raw, mode, shows)
        own = self.own[raw.key]
        lines = self._lines(raw, mode, own)
        feedback = mode.feedback if own else None
        return Mode(mode.set, shows, feedback, terms, enable, lines)

    def _terms(self, raw: RawCell, mode: RawMode) -> tuple[int, ...]:
        if mode.terms is None:
            return raw.terms or ()
        outside = [index for index in mode.terms if index >= len(raw.rows)]
        if outside:
            self._outside(raw, mode, rows_in_words(outside), "terms")
            return ()
        return tuple(sorted(raw.rows[index] for index in mode.terms))

    def _enable(self, raw: RawCell, mode: RawMode) -> Enable:
        if raw.pin is None:
            return ALWAYS
        if mode.enable is None:
            return raw.enable or ALWAYS
        if mode.enable.row is None:
            return mode.enable
        if mode.enable.row >= len(raw.rows):
            self._outside(raw, mode, f"row {mode.enable.row}", "enable")
            return ALWAYS
        return replace(mode.enable, row=raw.rows[mode.enable.row])

    def _outside(self, raw: RawCell, mode: RawMode, rows: str, key: str) -> None:
        number = len(raw.rows)
        has = f"{number} row{'' if number == 1 else 's'}" if number else "no rows of its own"
        said = raw.at_rows if number else raw.where
        verb = "do" if rows.startswith("rows ") else "does"
        self._fault(
            mode,
            "ROW-OUTSIDE",
            f"{rows} in {key!r} of {_titled(mode)} {verb} not exist for {raw}: it has {has}"
            f"{beside(said, mode.section.at(key))}",
            mode.section.at(key),
            "rows in a mode count within the rows of the cell, from 0",
        )

    def _judge_sum(self, raw: RawCell, mode: RawMode, shows: str) -> None:
        if self.summed is None:
            return
        at = raw.section.at("terms") if raw.terms is not None else mode.section.at("terms")
        has_terms = raw.terms is not None or mode.terms is not None
        if raw.key in self.summed and has_terms:
            self._fault(
                None,
                "CELL-TWO-SUMS",
                f"{raw} has terms of its own, and a column in [or]",
                at,
                "a cell has either a column in [or] or terms of its own",
            )
        needed = shows in _LEVELS or mode.feedback in _LEVELS
        if needed and raw.key not in self.summed and not has_terms:
            has, hint = "no terms of its own", 'add terms = "a..b" to the cell'
            if self.summed:
                there = ", ".join(map(str, dict.fromkeys(self.summed)))
                has = f"no column in [or] and no terms of its own; columns are for: {there}"
                hint = f"add {raw.key} to the columns of [or], or terms to the cell"
            fault = _Fault("CELL-NO-SUM", f"{raw} has {has}", raw.where, hint)
            self.faults.setdefault(("CELL-NO-SUM", str(raw.key)), fault)

    def _lines(
        self, raw: RawCell, mode: RawMode, own: tuple[int, ...]
    ) -> tuple[tuple[int, Line | None], ...]:
        if not own:
            if not self.any_columns and (mode.feedback or mode.columns is not None):
                key = "feedback" if mode.feedback else "columns"
                self._fault(
                    None,
                    "FEEDBACK-IDLE",
                    f"{mode.section.title} has {key!r}, but no cell of {self.kind.section.title} "
                    "has a column in [and]",
                    mode.section.key_at(key),
                    self._own_hint(raw),
                )
            return ()
        if mode.columns is not None:
            return self._listed_lines(raw, mode, own)
        if mode.feedback is None:
            self._fault(
                mode,
                "FEEDBACK-MISSING",
                f"{mode.section.title} has no 'feedback', but {raw} has {_columns(own)} of [and]",
                mode.section.where,
                'say what the unprimed column carries: "sum", "sum\'", "pin" or "none"',
            )
            return ()
        if mode.feedback == "pin" and raw.pin is None:
            self._fault(
                mode,
                "FEEDBACK-NO-PIN",
                f'feedback = "pin" in {mode.section.title}, but {raw} has no pin',
                mode.section.at("feedback"),
                'a cell without a pin feeds back its "sum" or "sum\'"',
            )
            return ()
        return tuple((index, self._line(raw, mode, index)) for index in own)

    def _own_hint(self, raw: RawCell) -> str | None:
        if raw.pin is None:
            return f"is {raw.key} or {raw.key}' missing among the columns of [and]?"
        if raw.name is None:
            return None
        return f"the columns of a cell with a pin and a name are those of its name, {raw.name}"

    def _line(self, raw: RawCell, mode: RawMode, index: int) -> Line | None:
        column = self.columns[index]
        primed = column is not None and column.complement
        if mode.feedback == "none":
            return None
        if mode.feedback == "pin":
            return Line("pin", raw.key, primed)
        return Line("sum", raw.key, primed != _LEVELS[mode.feedback or "sum"])

    def _listed_lines(
        self, raw: RawCell, mode: RawMode, own: tuple[int, ...]
    ) -> tuple[tuple[int, Line | None], ...]:
        listed = mode.columns or ()
        if len(listed) != len(own):
            self._fault(
                mode,
                "MODE-COLUMNS",
                f"'columns' of {mode.section.title} has {len(listed)} word"
                f"{'' if len(listed) == 1 else 's'}, but {raw} has {len(own)} in [and]: "
                f"{_columns(own)}",
                mode.section.at("columns"),
                "one word for each column of the cell in [and], in the order there",
            )
            return ()
        return tuple(
            (index, None if word is None else Line("pin", word.source, word.complement))
            for index, word in zip(own, listed, strict=True)
        )


def _titled(mode: RawMode) -> str:
    return f'mode "{mode.set}"' if mode.set else "its only mode"


def _columns(indices: Sequence[int]) -> str:
    return f"column{'' if len(indices) == 1 else 's'} {spans(indices)}"


def _does_something(mode: Mode) -> bool:
    return mode.pin != "none" or any(line is not None for _, line in mode.lines)


def _same(one: Mode, other: Mode) -> bool:
    return replace(one, set=other.set, feedback=other.feedback) == other
