"""State tables: every state knows what to do for every possible input, and says it once."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from pla.behaviour.conflicts import find_conflicts
from pla.behaviour.description import Claims, Description
from pla.behaviour.encode import chosen_codes, encoded
from pla.behaviour.listing import possible
from pla.behaviour.model import StateRow, StateTable
from pla.behaviour.state_rows import read_state_rows
from pla.logic import algebra
from pla.logic.cubes import Cover, Cube

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from numpy.typing import NDArray

    from pla.behaviour.equations import Sets
    from pla.behaviour.listing import Solved
    from pla.behaviour.machines import MachineHead
    from pla.behaviour.signals import Signals
    from pla.behaviour.state_rows import StateTableText, TransitionText
    from pla.errors import Diagnostics

__all__ = ["read_state_table"]

_MOST_CUBES = 1 << 18
_MOST_SHOWN = 10


def read_state_table(
    head: MachineHead, signals: Signals, claims: Claims, machines: list[StateTable]
) -> Description | None:
    """One table. What is wrong goes to the section's diagnostics; then there is no result.

    Args:
        head: Its states and codes.
        signals: What is declared.
        claims: Takes the state's bits and the outputs that it describes.
        machines: Takes the table, with codes, once it has been worked out.
    """
    if not head.whole:
        claims.incomplete = True
        if head.states and "rows" in head.section:
            read_state_rows(head, signals, claims)
        return None
    state = signals.find(head.name, "output")
    claims.claim(state, head.section.key_at("of"), "state_table")
    text = read_state_rows(head, signals, claims)
    if text is None:
        return None
    diagnostics = head.section.diagnostics
    present = signals.present[head.name].positions
    following = signals.by_name[head.name].positions
    outputs = [bit for column in text.outputs for bit in column.bits if bit is not None]

    def solve(never: Cover, _: Callable[[int], Sets]) -> Solved | None:
        rows = _Resolver(head, text, outputs, never, signals, diagnostics).run()
        if rows is None:
            return None
        machine = StateTable(
            name=head.name,
            bits=tuple(signals.by_name[head.name].bit_names()),
            states=head.states,
            start=head.start,
            style=head.style,
            codes=head.codes,
            unused_start=head.unused_start,
            rows=rows,
            outputs=tuple(signals.described_names[bit] for bit in outputs),
            location=head.section.where,
        )
        codes = machine.codes or chosen_codes(machine)
        machines.append(replace(machine, codes=codes))
        _warn_of_unreached(machine, head, diagnostics)
        return encoded(machine, codes, present, following, outputs, never)

    return Description((*following, *outputs), {}, solve)


@dataclass(slots=True)
class _Resolver:
    """From rows as written to what happens in every state."""

    head: MachineHead
    text: StateTableText
    outputs: Sequence[int]
    never: Cover
    signals: Signals
    diagnostics: Diagnostics

    def run(self) -> tuple[StateRow, ...] | None:
        """All rows of all states; ``None`` if some contradict each other or are missing."""
        alive = np.zeros(len(self.text.rows), dtype=bool)
        found: list[StateRow] = []
        shown: set[tuple[int, int]] = set()
        good = True
        for state in range(len(self.head.states)):
            rows = self.rows_of(state, alive, shown)
            good &= rows is not None
            found += rows or ()
        self.warn_of_idle_rows(alive)
        return tuple(found) if good else None

    def rows_of(
        self,
        state: int,
        alive: NDArray[np.bool_],
        shown: set[tuple[int, int]],
    ) -> list[StateRow] | None:
        """The rows of one state; rows that are used are marked as alive."""
        n = self.signals.n_inputs
        listed = [
            (index, row)
            for index, row in enumerate(self.text.rows)
            if row.cubes is not None and row.state in (state, None)
        ]
        cubes = Cover.of(n, (Cube(*masks) for _, row in listed for masks in row.cubes or ()))
        owner = np.array([index for index, row in listed for _ in row.cubes or ()], dtype=np.intp)
        cubes, owner = possible(cubes, owner, self.never)
        alive[owner] = True
        if not self.agree(state, cubes, owner, shown):
            return None
        try:
            rest = algebra.complement(cubes + self.never.feeding(1), _MOST_CUBES)
        except algebra.TooManyCubesError:
            self.diagnostics.error(
                "STATE-LARGE",
                f"the inputs that state {self.head.states[state]!r} does not list need more than "
                f"{_MOST_CUBES} cubes",
                self.head.section.at("rows"),
                "look at fewer inputs at once",
            )
            return None
        covers = {i: cubes.take(owner == i) for i in dict.fromkeys(owner.tolist())}
        if len(rest):
            others = self.others_of(state)
            if others is None:
                self.report_open(state, rest)
                return None
            alive[others] = True
            covers[others] = rest
        return [self.row(state, i, covers[i]) for i in sorted(covers)]

    def others_of(self, state: int) -> int | None:
        """The row for the inputs that no other row of a state lists: its own, else that of all."""
        own, every = (
            next(
                (i for i, r in enumerate(self.text.rows) if r.cubes is None and r.state == wanted),
                None,
            )
            for wanted in (state, None)
        )
        return every if own is None else own

    def row(self, state: int, index: int, inputs: Cover) -> StateRow:
        row = self.text.rows[index]
        on, off = (
            sum(1 << place for place, bit in enumerate(self.outputs) if mask >> bit & 1)
            for mask in row.values[:2]
        )
        place = row.place()
        return StateRow(state, algebra.compact(inputs.feeding(1)), row.then, on, off, place)

    def agree(
        self,
        state: int,
        cubes: Cover,
        owner: NDArray[np.intp],
        shown: set[tuple[int, int]],
    ) -> bool:
        """Whether no two rows of a state contradict each other; each two are reported once."""
        values = np.array([(*row.values, row.then) for row in self.text.rows], dtype=np.uint64)
        conflicts = find_conflicts(cubes, owner, values.reshape(-1, 4), _MOST_SHOWN)
        for first, second, point in conflicts:
            if (first, second) in shown:
                continue
            shown.add((first, second))
            one, two = self.text.rows[first], self.text.rows[second]
            what = self.difference(two, one)
            earlier = one.place()
            source = (earlier.source or "").strip()
            self.diagnostics.error(
                "STATE-CONFLICT",
                f"in state {self.head.states[state]!r} two rows differ for "
                f"{self.signals.show_point(point, self.inputs())}: {what[0]} by this row, "
                f"{what[1]} by the row at {earlier}",
                two.place(),
                f"the other is: {source}" if source else None,
            )
        return not conflicts

    def difference(self, *rows: TransitionText) -> list[str]:
        """What each of two rows says where they differ."""
        if rows[0].then != rows[1].then:
            return [f"on to {self.head.states[row.then]!r}" for row in rows]
        differ = next(
            bit
            for bit in self.outputs
            if any((a ^ b) >> bit & 1 for a, b in zip(rows[0].values, rows[1].values, strict=True))
        )
        name = self.signals.described_names[differ]
        return [
            f"{name} is "
            + ("1" if r.values[0] >> differ & 1 else "0" if r.values[1] >> differ & 1 else "x")
            for r in rows
        ]

    def inputs(self) -> int:
        """Mask of the inputs that the table looks at."""
        mask = 0
        for column in self.text.inputs:
            mask |= column.mask
        return mask

    def report_open(self, state: int, rest: Cover) -> None:
        mask = self.inputs() | algebra.support(rest)
        n = self.signals.n_inputs
        count = algebra.size(rest) >> (n - mask.bit_count())
        # The first input is the most significant: the smallest as people count.
        example = min((cube.ones for cube in rest), key=lambda p: f"{p:0{n}b}"[::-1])
        name = self.head.states[state]
        what = "1 possible input combination" if count == 1 else f"{count} possible combinations"
        self.diagnostics.error(
            "STATE-OPEN",
            f"no row says where state {name!r} leads for {what}, for example "
            f"{self.signals.show_point(example, mask)}"
            if mask
            else f"no row says where state {name!r} leads",
            self.head.section.at("states", state),
            f"add the rows, or one for all others: {name} | others | …",
        )

    def warn_of_idle_rows(self, alive: NDArray[np.bool_]) -> None:
        idle = [
            row
            for row, used in zip(self.text.rows, alive, strict=True)
            if not used and row.cubes is not None
        ]
        for row in idle[:_MOST_SHOWN]:
            self.diagnostics.warning(
                "ROW-IMPOSSIBLE",
                "this row is never used: all its inputs are impossible by [never]",
                row.place(),
                "[never] wins",
            )


def _warn_of_unreached(machine: StateTable, head: MachineHead, diagnostics: Diagnostics) -> None:
    """Warn of states that no possible input leads to."""
    leads: dict[int, set[int]] = {}
    for row in machine.rows:
        leads.setdefault(row.state, set()).add(row.then)
    reached, waiting = {machine.start}, [machine.start]
    while waiting:
        for state in sorted(leads.get(waiting.pop(), set()) - reached):
            reached.add(state)
            waiting.append(state)
    for state, name in enumerate(machine.states):
        if state not in reached:
            diagnostics.warning(
                "STATE-UNREACHED",
                f"nothing leads from {machine.states[machine.start]!r}, the state at power-up, to "
                f"{name!r}",
                head.section.at("states", state),
                "mend the rows, or leave the state out",
            )
