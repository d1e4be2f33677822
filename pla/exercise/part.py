"""The fuses of a part that shows by its behaviour how it is built.

Every row is a product of all inputs: it is 1 at one step of the exercise and 0 at all others, so
that each step asks for certain rows, and every link of these rows counts. Which rows belong to
which step differs from sum to sum. A row also reads the feedback of cells whose sums the step has
settled before; so each feedback line is read in the sense that it has then. One more step for each
input, with that input alone changed, shows that no row does without it.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from pla.device.model import Line
from pla.exercise.bits import Bits
from pla.exercise.settings import modes_of
from pla.fuses.fillings import live_row
from pla.fuses.fusemap import FuseMap
from pla.fuses.signature import encode_signature

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from pla.device.model import Device, Mode, Source

__all__ = ["Part", "Step", "make_part"]

_TEXT = "EXERCISE"
_ROWS_AT_ONCE = 3
_LEAST_STEPS = 16
_BASES = 2
_BLOCKED_EACH, _DROPPED_EACH = 3, 5
_PAIR = 2  # a row that makes a sum 1, and one that its line keeps at 0


@dataclass(frozen=True, slots=True)
class Step:
    """Levels that are set at pins; all others are measured.

    Attributes:
        levels: For each pin that is driven from outside, its level.
        neighbour: The pin that alone differs from an earlier step, for the last steps.
    """

    levels: Mapping[int, bool]
    neighbour: int | None = None


@dataclass(frozen=True)
class Part:
    """One programmed part and what is done with it.

    Attributes:
        number: Counts from 1.
        device: What it is described as.
        modes: How each cell is set.
        fuses: Its links.
        steps: What is set at its pins, one step after the other.
        contents: For each row what it is for, in words.
    """

    number: int
    device: Device
    modes: Mapping[Source, Mode]
    fuses: FuseMap
    steps: tuple[Step, ...]
    contents: tuple[str, ...]


def make_part(device: Device, number: int, variant: int = 0) -> Part:
    """The part with this number; each has its cells set differently.

    Args:
        device: A checked description.
        number: Counts from 1.
        variant: Other contents of the rows and other steps for the same settings.
    """
    modes = modes_of(device, number - 1)
    return _Maker(device, modes, number, variant).part()


@dataclass(frozen=True, slots=True)
class _Row:
    """A row at the step at which it is 1.

    Attributes:
        number: Row of the AND array.
        sums: Keys of the cells that it is joined to.
        owner: What it is, in words.
        dropped: Its drop link cuts it off.
        blocked: One of its lines is 0 at the step, so that the row is 0 because of it.
        watched: The sum whose line that shall be, if it matters.
    """

    number: int
    sums: frozenset[Source]
    owner: str
    dropped: bool = False
    blocked: bool = False
    watched: Source | None = None

    @property
    def targets(self) -> frozenset[Source]:
        """Keys of the cells whose sums it makes 1."""
        return frozenset() if self.dropped or self.blocked else self.sums


@dataclass(frozen=True)
class _Maker:
    device: Device
    modes: Mapping[Source, Mode]
    number: int
    variant: int

    @cached_property
    def bits(self) -> Bits:
        return Bits(self.number + (self.variant << 32))

    @cached_property
    def turns(self) -> dict[Line, int]:
        """How often each line has blocked a row so far."""
        return {}

    @cached_property
    def column_of(self) -> dict[Line, int]:
        """The first column of each line, as the cells are set."""
        found: dict[Line, int] = {}
        for column, line in enumerate(self.device.lines(self.modes)):
            if line is not None:
                found.setdefault(line, column)
        return found

    @cached_property
    def outside(self) -> list[int]:
        """Pins that are set from outside at every step."""
        cells = self.device.cell_of_pin.items()
        silent = [pin for pin, cell in cells if self.modes[cell.key].pin == "none"]
        return sorted({*self.device.input_pins, *self.device.enable_pins, *silent})

    @cached_property
    def asked(self) -> list[int]:
        """Those of them that rows depend on."""
        return [pin for pin in self.outside if self._readable(pin)]

    @cached_property
    def switches(self) -> dict[Source, tuple[int, bool] | None]:
        """For each cell whose pin is switched the pin that switches it, and at which level.

        ``None`` where the enable row has no input to depend on.
        """
        found: dict[Source, tuple[int, bool] | None] = {}
        for place, cell in enumerate(self.device.cells):
            enable = self.modes[cell.key].enable
            if enable.row is not None:
                pin = self.asked[(place + self.number) % len(self.asked)] if self.asked else None
                found[cell.key] = None if pin is None else (pin, self._level_for(pin))
            elif enable.pin is not None:
                found[cell.key] = (enable.pin, not enable.active_low)
        return found

    def part(self) -> Part:
        patterns = self.patterns
        rows = self._dealt(patterns)
        levels = [self._levels(pattern) for pattern in patterns]
        links: dict[int, int] = {**dict(self.device.mode_fuses)}
        words = ["not used: a line and its complement"] * self.device.terms
        for number in range(self.device.terms):
            links.update(live_row(self.device, number, range(len(self.device.and_array.columns))))
        for number, (columns, what) in self._enable_rows().items():
            links.update(live_row(self.device, number, columns))
            words[number] = what
        for step, own in enumerate(rows):
            for place, row in enumerate(own):
                # Blocked rows too: nothing that a row reads may depend on it.
                later = frozenset(key for r in own[place:] if not r.dropped for key in r.sums)
                settled = _targets(own[:place])
                columns = self._columns(levels[step], settled, later)
                if row.blocked:
                    columns = self._blocked(row, columns, levels[step], settled, later)
                links.update(live_row(self.device, row.number, columns))
                if row.dropped and self.device.drop is not None:
                    links[self.device.drop.fuses[self.device.drop.terms.index(row.number)]] = (
                        self.device.drop.dropped
                    )
                how = " cut off" if row.dropped else " blocked" if row.blocked else ""
                words[row.number] = f"{row.owner}{how}, step {step + 1}"
        links.update(self._or_links(rows))
        for cell in self.device.cells:
            links.update(zip(cell.links, map(int, self.modes[cell.key].set), strict=True))
        if self.device.signature is not None:
            links.update(encode_signature(self.device, _TEXT[: self.device.signature.length]))
        steps = [Step(own) for own in levels]
        return Part(
            self.number,
            self.device,
            self.modes,
            FuseMap.filled(self.device.fuses, self.device.links.blank).changed(links),
            (*steps, *self._neighbours(patterns)),
            tuple(words),
        )

    def _readable(self, pin: int) -> bool:
        return any(Line("pin", pin, sense) in self.column_of for sense in (False, True))

    def _level_for(self, pin: int) -> bool:
        """A level of a pin for which there is a line."""
        senses = [level for level in (False, True) if Line("pin", pin, not level) in self.column_of]
        return senses[self.bits.word() % len(senses)]

    @cached_property
    def patterns(self) -> list[dict[int, bool]]:
        """Levels of the outside pins at each step; no two alike in what rows depend on."""
        most_own = max((len(cell.rows) for cell in self.device.cells), default=0)
        shared = -(-len(self.device.shared_rows) // _ROWS_AT_ONCE)
        wanted = max(_LEAST_STEPS, 3 * most_own, shared + 4)
        wanted = min(wanted, 1 << min(len(self.asked), 20))
        found: dict[tuple[bool, ...], dict[int, bool]] = {}
        while len(found) < wanted:
            word = self.bits.wide(len(self.outside))
            pattern = {pin: bool(word >> k & 1) for k, pin in enumerate(self.outside)}
            found.setdefault(tuple(pattern[pin] for pin in self.asked), pattern)
        return list(found.values())

    def _drives(self, key: Source, pattern: Mapping[int, bool]) -> bool:
        """Whether the part drives the pin of a cell."""
        if self.modes[key].pin == "none":
            return False
        switch = self.switches.get(key)
        return switch is None or pattern[switch[0]] == switch[1]

    def _dealt(self, patterns: Sequence[Mapping[int, bool]]) -> list[list[_Row]]:
        """The rows that are 1 at each step, in the order in which they may read each other."""
        dealt: list[list[_Row]] = [[] for _ in patterns]
        for cell in self.device.cells:
            mode = self.modes[cell.key]
            everything = self.bits.shuffled(range(len(patterns)))
            seen = [
                k for k in everything if cell.pin is None or self._drives(cell.key, patterns[k])
            ]
            for place, number in enumerate(mode.terms):
                # By place and not by chance: some row of every cell makes its sum 1.
                dropped = place % _DROPPED_EACH == 1 and self._can_drop(number)
                blocked = place % _BLOCKED_EACH == _BLOCKED_EACH - 1
                if not seen:
                    break
                at = seen.pop()
                everything.remove(at)
                own = frozenset([cell.key])
                dealt[at].append(_Row(number, own, f"term of {cell}", dropped, blocked))
            idle = [r for r in cell.rows if r not in mode.terms and r != mode.enable.row]
            for spare, at in zip(idle, everything, strict=False):
                dealt[at].append(_Row(spare, frozenset(), f"{cell}, no use in this mode"))
        self._deal_shared(dealt)
        # A row that is blocked comes last, so that any of the sums of the step can block it.
        return [sorted(self.bits.shuffled(own), key=lambda row: row.blocked) for own in dealt]

    def _deal_shared(self, dealt: list[list[_Row]]) -> None:
        array = self.device.or_array
        if array is None:
            return
        steps = self.bits.shuffled(list(range(len(dealt))) * _ROWS_AT_ONCE)
        numbers = list(array.terms)
        for key in self._lone_sums():
            at = next((k for k in steps if self._watched(k, dealt, key)), None)
            if at is None or len(numbers) < _PAIR:
                continue
            steps = [k for k in steps if k != at]
            watched = frozenset(self._watched(at, dealt, key)[:1])
            dealt[at].append(_Row(numbers.pop(), frozenset([key]), "shared term"))
            blocked = _Row(numbers.pop(), watched, "shared term", blocked=True, watched=key)
            dealt[at].append(blocked)
        for number in numbers:
            if not steps:
                break
            at = steps.pop()
            # A sum that another row makes 1 would hide a row that must be 0.
            taken = {key for row in dealt[at] for key in row.sums}
            free = [key for key in array.sums if key not in taken]
            sums = frozenset(key for key in free if self.bits.word() % _ROWS_AT_ONCE == 0)
            sums = sums or frozenset(self.bits.shuffled(free)[:1])
            dropped = self._can_drop(number) and self.bits.word() % _DROPPED_EACH == 0
            stopped = self.bits.word() % 5 < 2
            dealt[at].append(_Row(number, sums, "shared term", dropped, stopped))

    def _lone_sums(self) -> list[Source]:
        """Shared sums of which one sense only runs back: a line that is 0 tells them best."""
        lines = [line for line in self.column_of if line.kind == "sum"]
        return [
            line.of
            for line in lines
            if line.inverse not in self.column_of and line.of in self.device.or_column
        ]

    def _watched(self, step: int, dealt: Sequence[Sequence[_Row]], key: Source) -> list[Source]:
        """Other shared sums that are seen at a step and that nothing makes 1 there."""
        taken = {own for row in dealt[step] for own in row.sums} | {key}
        return [
            other
            for other in self.device.or_column
            if other not in taken
            and self.device.cell_of[other].pin is not None
            and self._drives(other, self.patterns[step])
        ]

    def _can_drop(self, number: int) -> bool:
        return self.device.drop is not None and number in self.device.drop.terms

    def _levels(self, pattern: Mapping[int, bool]) -> dict[int, bool]:
        """What is set from outside, with some of the pins that the part lets go of."""
        levels = dict(pattern)
        for pin, cell in self.device.cell_of_pin.items():
            loose = pin not in levels and not self._drives(cell.key, pattern)
            if loose and self.bits.flip():
                levels[pin] = self.bits.flip()
        return dict(sorted(levels.items()))

    def _columns(
        self, levels: Mapping[int, bool], ones: frozenset[Source], later: frozenset[Source]
    ) -> set[int]:
        """The lines that are 1 at a step, those of sums left out that are not settled.

        Args:
            levels: What is set from outside.
            ones: Cells whose sum is 1 by now; that of all others is 0.
            later: Cells whose sum depends on the row.
        """
        true = {Line("pin", pin, not levels[pin]) for pin in self.asked}
        for cell in self.device.cells:
            if cell.key in later:
                continue
            value = cell.key in ones
            true.add(Line("sum", cell.key, not value))
            if cell.pin is None or cell.pin in self.asked:
                continue
            level = levels.get(cell.pin)
            if level is None and self._drives(cell.key, levels):
                level = value != (self.modes[cell.key].pin == "sum'")
            if level is not None:
                true.add(Line("pin", cell.pin, not level))
        return {column for line, column in self.column_of.items() if line in true}

    def _blocked(
        self,
        row: _Row,
        columns: set[int],
        levels: Mapping[int, bool],
        ones: frozenset[Source],
        later: frozenset[Source],
    ) -> set[int]:
        """The same with one line that is 0 in place of its inverse, each line in its turn."""
        line_of = {column: line for line, column in self.column_of.items()}
        every = [line_of[column] for column in sorted(columns)]
        silent = [line.inverse for line in every if line.inverse in self.column_of]
        # A line that has no inverse can be 0 without another one being 1.
        alone = self._columns(levels, ones ^ frozenset(self.modes), later) - columns
        silent += [line_of[column] for column in sorted(alone) if line_of[column] not in silent]
        if not silent:
            return set(range(len(self.device.and_array.columns)))
        fed = [line for line in silent if line.kind == "sum" and line.of == row.watched]
        fed = fed or [line for line in silent if line.kind == "sum" or line.of not in self.asked]
        # One without an inverse shows in no other way that it is there.
        chosen = min(
            fed or silent,
            key=lambda line: (self.turns.get(line, 0), line.inverse in self.column_of),
        )
        self.turns[chosen] = self.turns.get(chosen, 0) + 1
        kept = {c for c in columns if line_of[c] != chosen.inverse}
        return kept | {self.column_of[chosen]}

    def _enable_rows(self) -> dict[int, tuple[set[int], str]]:
        found = {}
        for cell in self.device.cells:
            row, switch = self.modes[cell.key].enable.row, self.switches.get(cell.key)
            if row is None:
                continue
            columns = set()
            words = "always"
            if switch is not None:
                columns.add(self.column_of[Line("pin", switch[0], not switch[1])])
                words = f"while pin {switch[0]} is {'high' if switch[1] else 'low'}"
            found[row] = (columns, f"enable of {cell}: {words}")
        return found

    def _or_links(self, rows: Sequence[Sequence[_Row]]) -> Iterator[tuple[int, int]]:
        array, connected = self.device.or_array, self.device.links.connected
        if array is None:
            return
        sums = {row.number: row.sums for own in rows for row in own}
        for at, number in enumerate(array.terms):
            for column, key in enumerate(array.sums):
                joined = key in sums.get(number, frozenset())
                yield array.fuse(at, column), connected if joined else 1 - connected

    def _neighbours(self, patterns: Sequence[Mapping[int, bool]]) -> Iterator[Step]:
        """Steps that differ from one before in one input only."""
        known = {tuple(pattern[pin] for pin in self.asked) for pattern in patterns}
        for turn in range(_BASES):
            for place, pin in enumerate(self.asked):
                for shift in range(len(patterns)):
                    base = patterns[(place * _BASES + turn + shift) % len(patterns)]
                    changed = {**base, pin: not base[pin]}
                    if tuple(changed[p] for p in self.asked) not in known:
                        yield Step(dict(sorted(changed.items())), pin)
                        break


def _targets(rows: Sequence[_Row]) -> frozenset[Source]:
    return frozenset(key for row in rows for key in row.targets)
