"""Reading the rows of ``[[state_table]]``: state, inputs, next state, outputs."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import partial
from itertools import product
from typing import TYPE_CHECKING

from pla.behaviour.cells import input_cell, output_cell
from pla.behaviour.problem import Problem
from pla.behaviour.signals import RESERVED
from pla.behaviour.sources import InlineRows, read_inline
from pla.errors import InputError
from pla.wording import did_you_mean

if TYPE_CHECKING:
    from collections.abc import Callable

    from pla.behaviour.description import Claims
    from pla.behaviour.listing import Values
    from pla.behaviour.machines import MachineHead
    from pla.behaviour.signals import Field, Signals
    from pla.behaviour.values import Masks
    from pla.errors import Diagnostics, Location

__all__ = ["StateTableText", "TransitionText", "read_state_rows"]

_OTHERS = RESERVED[-1]
_ANY = "-"
_EXAMPLE = "state | request limit | then | motor"
_MOST_CUBES = 1 << 20


@dataclass(frozen=True, slots=True)
class TransitionText:
    """One row.

    Attributes:
        state: Index of the state; ``None`` for every state.
        cubes: Input combinations; ``None`` for those that no other row lists.
        then: Index of the next state.
        values: Masks of the outputs that are 1, 0 and don't care, over the described bits.
        place: Where it stands.
    """

    state: int | None
    cubes: tuple[Masks, ...] | None
    then: int
    values: Values
    place: Callable[[], Location]


@dataclass(frozen=True, slots=True)
class StateTableText:
    """All rows, and the outputs that they describe."""

    inputs: tuple[Field, ...]
    outputs: tuple[Field, ...]
    rows: tuple[TransitionText, ...]


def read_state_rows(head: MachineHead, signals: Signals, claims: Claims) -> StateTableText | None:
    """The rows of one state table.

    What is wrong goes to the section's diagnostics; then there is no result.
    """
    section = head.section
    text = section.text("rows")
    if text is None:
        claims.incomplete = True
        return None
    try:
        source = read_inline(text, lambda offset: section.inside("rows", offset))
    except InputError as fault:
        section.diagnostics.found.extend(fault.diagnostics)
        claims.incomplete = True
        return None
    table = _Rows(head, source, signals, section.diagnostics)
    if not table.read_header(claims):
        return None
    table.read_rows()
    if not table.good:
        return None
    return StateTableText(tuple(table.inputs), tuple(table.outputs), tuple(table.rows))


@dataclass(slots=True)
class _Rows:
    head: MachineHead
    source: InlineRows
    signals: Signals
    diagnostics: Diagnostics
    inputs: list[Field] = field(default_factory=list)
    outputs: list[Field] = field(default_factory=list)
    rows: list[TransitionText] = field(default_factory=list)
    seen_others: dict[int | None, int] = field(default_factory=dict)
    sizes: list[int] = field(default_factory=list)
    then_group: int = 2
    good: bool = True

    def error(self, problem: Problem, row: int, cell: int) -> None:
        self.good = False
        if not problem.known:
            at = self.source.at(row, cell)
            self.diagnostics.error(problem.code, problem.message, at, problem.hint)

    def read_header(self, claims: Claims) -> bool:
        groups = self.source.header
        self.sizes = [len(group) for group in groups]
        if groups[0] != ["state"]:
            claims.incomplete = True
            found = " ".join(groups[0]) or "nothing"
            text = f"the first column of a state table is state, with a bar behind it, not {found}"
            self.error(Problem("HEADER", text, _EXAMPLE), -1, 0)
            return False
        at = [g for g, group in enumerate(groups) if group == ["then"]]
        if not at or at[0] > 2 or len(groups) > at[0] + 2:
            claims.incomplete = True
            text = (
                "expected the columns state, inputs, then (the next state) and outputs, with bars "
                "between these"
            )
            self.error(Problem("HEADER", text, _EXAMPLE), -1, 0)
            return False
        self.then_group = at[0]
        cell = 1
        for name in groups[1] if self.then_group == 2 else ():
            self.read_column(name, cell, claims)
            cell += 1
        cell += 1
        for name in groups[self.then_group + 1] if len(groups) > self.then_group + 1 else ():
            self.read_column(name, cell, claims, is_output=True)
            cell += 1
        if self.good and not self.source.rows:
            text = "the table has a header but no rows"
            self.error(Problem("TABLE-EMPTY", text), -1, 0)
        return self.good

    def read_column(self, name: str, cell: int, claims: Claims, *, is_output: bool = False) -> None:
        try:
            column = self.signals.find(name, "output" if is_output else "input")
            self.check_column(name, column, is_output=is_output)
        except Problem as problem:
            claims.incomplete |= is_output
            self.error(problem, -1, cell)
            return
        if is_output:
            claims.claim(column, self.source.at(-1, cell), "state_table")
            self.outputs.append(column)
        else:
            self.inputs.append(column)

    def check_column(self, name: str, column: Field, *, is_output: bool) -> None:
        """Refuse what cannot be a column.

        Raises:
            Problem: If it is there already, the state itself, or a registered output.
        """
        base = name.partition("[")[0]
        if base == self.head.name and not self.head.whole:
            raise Problem("HEADER", f"{name!r} holds no state", known=True)
        if not is_output and base == self.head.name:
            text = f"{name!r} is the state of this table, the first column tells it"
            raise Problem("HEADER", text, "leave the column out")
        if is_output and self.signals.by_name[base].registered:
            text = f"{name!r} is registered, but a state table gives outputs of the present state"
            hint = (
                "give the column to a signal without a register, and name that in the equation of "
                f"{base}"
            )
            raise Problem("STATE-OUTPUT", text, hint)
        columns = self.outputs if is_output else self.inputs
        twin = next((c for c in columns if c.mask & column.mask), None)
        if twin is not None:
            text = f"the column {name!r} shares bits with the column {twin.name!r}"
            if twin.name == name:
                text = f"the column {name!r} stands twice"
            raise Problem("COLUMN-TWICE", text)

    def read_rows(self) -> None:
        for row, groups in enumerate(self.source.rows):
            cells = [cell for group in groups for cell in group]
            is_short = groups[0] == [_OTHERS] and len(groups) == len(self.sizes) - 1
            is_others = groups[0] == [_OTHERS] or (
                self.then_group == 2 and len(groups) > 1 and groups[1] == [_OTHERS]
            )
            shape = list(self.sizes)
            if is_others and self.then_group == 2:
                shape[1:2] = [] if is_short else [len(groups[1])]
            if [len(group) for group in groups] != shape:
                self.report_shape(row, groups, cells, shape)
                continue
            between = set(cells[1 : 1 + self.n_inputs(shape)]) - {_ANY, _OTHERS}
            if groups[0] == [_OTHERS] and between:
                text = "others stands for all inputs that no row lists, expected a bar behind it"
                hint = f"{_OTHERS} | {self.head.states[self.head.start]} | …"
                self.error(Problem("OTHERS", text, hint), row, 1)
                continue
            self.read_row(row, cells, is_others=is_others, shape=shape)

    def n_inputs(self, shape: list[int]) -> int:
        """How many cells of a row of this shape stand between the state and the next state."""
        return shape[1] if len(shape) == len(self.sizes) and self.then_group == 2 else 0

    def report_shape(
        self, row: int, groups: list[list[str]], cells: list[str], shape: list[int]
    ) -> None:
        header = " | ".join(" ".join(group) for group in self.source.header)
        if len(cells) != sum(shape):
            many = "1 cell" if len(cells) == 1 else f"{len(cells)} cells"
            text = f"the row has {many}, expected {sum(shape)}: {header}"
            self.error(Problem("ROW-LENGTH", text), row, min(len(cells), sum(shape)))
            return
        text = f"the bars part the row otherwise than the header: {header}"
        at = 0
        for group, size in zip(groups, shape, strict=False):
            at += min(len(group), size)
            if len(group) != size:
                break
        self.error(Problem("ROW-BARS", text), row, min(at, len(cells) - 1))

    def read_row(self, row: int, cells: list[str], *, is_others: bool, shape: list[int]) -> None:
        n_inputs = self.n_inputs(shape)
        state, then = (
            self.state(row, 0, cells[0]),
            self.then(row, 1 + n_inputs, cells[1 + n_inputs]),
        )
        cubes = None if is_others else self.cubes(row, cells[1 : 1 + n_inputs])
        values = self.values(row, cells, 2 + n_inputs)
        if not (state and then is not None and values and (is_others or cubes is not None)):
            return
        if is_others:
            earlier = self.seen_others.get(state[0])
            if earlier is not None:
                text = f"others stands twice: here and at {self.source.at(earlier, 0)}"
                self.error(Problem("OTHERS", text), row, 0)
                return
            self.seen_others[state[0]] = row
        place = partial(self.source.at, row, 0)
        self.rows.append(TransitionText(state[0], cubes, then, values, place))

    def state(self, row: int, cell: int, text: str) -> tuple[int | None] | None:
        """The state of a row, ``(None,)`` for every one; ``None`` if it is wrong."""
        if text in (_ANY, _OTHERS):
            return (None,)
        return self.known_state(row, cell, text, "a row for every state has - in this column")

    def then(self, row: int, cell: int, text: str) -> int | None:
        found = self.known_state(row, cell, text, "every row leads to one state")
        return None if found is None else found[0]

    def known_state(self, row: int, cell: int, text: str, hint: str) -> tuple[int] | None:
        states = self.head.states
        if text in states:
            return (states.index(text),)
        if text[:1].isalpha():
            hint = did_you_mean(text, states)
        self.error(Problem("STATE-UNKNOWN", f"there is no state {text!r}", hint), row, cell)
        return None

    def cubes(self, row: int, cells: list[str]) -> tuple[Masks, ...] | None:
        parts: list[list[Masks]] = []
        count = 1
        for index, (column, text) in enumerate(zip(self.inputs, cells, strict=True)):
            try:
                parts.append(input_cell(column, text))
            except Problem as problem:
                self.error(problem, row, 1 + index)
                count = 0
                continue
            count *= len(parts[-1])
        if count > _MOST_CUBES:
            text = "the ranges of this row make too many cubes"
            self.error(Problem("ROW-LARGE", text, "split the row"), row, 0)
            return None
        if not count:
            return None
        return tuple(
            (sum(ones for ones, _ in masks), sum(zeros for _, zeros in masks))
            for masks in product(*parts)
        )

    def values(self, row: int, cells: list[str], first: int) -> Values | None:
        on = off = free = 0
        good = True
        for index, column in enumerate(self.outputs, first):
            try:
                values = output_cell(column, cells[index])
            except Problem as problem:
                self.error(problem, row, index)
                good = False
                continue
            on, off, free = on | values[0], off | values[1], free | values[2]
        return (on, off, free) if good else None
