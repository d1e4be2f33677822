"""What the pins of a clocked design have to do clock by clock, from its truth tables.

Nothing here reads the text of a design, and nothing of the program is used.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import random

    from random_designs import Signal

Z = "Z"


@dataclass(frozen=True)
class Acting:
    """When a reset or preset acts: at every point of the inputs."""

    where: list[bool]
    asynchronous: bool


@dataclass
class Machine:
    """A state table by numbers of states; points are those of the inputs alone.

    `outputs[name][state][point]` is 1, 0 or `FREE`.
    """

    name: str
    states: list[str]
    start: int
    then: list[list[int]] = field(default_factory=list)
    outputs: dict[str, list[list[int | None]]] = field(default_factory=dict)
    reset: Acting | None = None


@dataclass
class ClockedDesign:
    """A design file and the truth about it.

    Point ``p`` has bit ``i`` of ``p`` on the input with bit number ``i``; the present values of the
    registered outputs and of the inner registers follow. `table[name][point]` is the next value of
    a registered signal and the value of any other output: 1, 0 or `FREE`.
    """

    inputs: list[Signal]
    clock: Signal
    registered: list[Signal]
    plain: list[Signal]
    inner: list[Signal]
    machine: Machine | None = None
    text: str = ""
    table: dict[str, list[int | None]] = field(default_factory=dict)
    resets: dict[str, Acting] = field(default_factory=dict)
    presets: dict[str, Acting] = field(default_factory=dict)
    starts: dict[str, int | None] = field(default_factory=dict)
    drives: dict[str, list[bool]] = field(default_factory=dict)
    never: list[bool] = field(default_factory=list)

    @property
    def input_names(self) -> list[str]:
        """Without the clock."""
        return [name for signal in self.inputs for name in signal.names]

    @property
    def output_names(self) -> list[str]:
        return [name for signal in (*self.registered, *self.plain) for name in signal.names]

    @property
    def registered_names(self) -> list[str]:
        """In order of their bits in a point."""
        return [name for signal in (*self.registered, *self.inner) for name in signal.names]

    @property
    def points(self) -> int:
        return 1 << len(self.input_names) + len(self.registered_names)

    @property
    def input_points(self) -> int:
        return 1 << len(self.input_names)

    @property
    def active_low(self) -> dict[str, bool]:
        signals = (*self.inputs, self.clock, *self.registered, *self.plain)
        return {n: s.active_low for s in signals for n in s.names}

    def random_inputs(self, rng: random.Random, before: int | None = None) -> int:
        """A possible point of the inputs, often near the one before."""
        while True:
            point = rng.randrange(self.input_points)
            if before is not None and rng.random() < 0.6:
                point = before ^ (1 << rng.randrange(len(self.input_names)))
            if not self.never[point]:
                return point


class Follower:
    """One run of a design: what it holds and what its outputs have to be, in asserted values.

    `held` and `state` are ``None`` where the design leaves it open; what is then seen at a pin may
    be told by `observe`. Inputs are points of the inputs alone.
    """

    def __init__(self, design: ClockedDesign, point: int, *, starts: bool = True):
        self.design, self.point = design, point
        self.held: dict[str, int | None] = {
            name: design.starts[name] if starts else None for name in design.registered_names
        }
        self.state = design.machine.start if design.machine and starts else None
        self._act()

    def apply(self, point: int) -> None:
        """The inputs change; the clock does not."""
        self.point = point
        self._act()

    def clock(self) -> None:
        """The edge, at the inputs as they are."""
        design, point = self.design, self.point
        taken = {}
        for name in design.registered_names:
            reset, preset = (self._acts(of.get(name)) for of in (design.resets, design.presets))
            if reset or preset:
                # Where both do, one of them is asynchronous and wins below.
                taken[name] = int(preset)
            else:
                taken[name] = self._value(name)
        if design.machine is not None:
            machine = design.machine
            if self._acts(machine.reset):
                self.state = machine.start
            elif self.state is not None:
                self.state = None if design.never[point] else machine.then[self.state][point]
        self.held = taken
        self._act()

    def wanted(self) -> dict[str, int | str | None]:
        """Of each output 0, 1, ``None`` if that is left open, or `Z`."""
        design, found = self.design, {}
        for name in design.output_names:
            if not design.drives.get(name, [True] * design.input_points)[self.point]:
                found[name] = Z
            elif name in self.held:
                found[name] = self.held[name]
            elif design.machine is not None and name in design.machine.outputs:
                found[name] = self._of_state(design.machine.outputs[name])
            else:
                found[name] = self._value(name)
        return found

    def observe(self, name: str, value: int) -> None:
        """What a pin shows that may show anything: a registered output holds it from then on."""
        if name in self.held and self.held[name] is None:
            self.held[name] = value

    def _acts(self, acting: Acting | None, *, asynchronous: bool | None = None) -> bool:
        if acting is None or asynchronous not in {None, acting.asynchronous}:
            return False
        return acting.where[self.point]

    def _act(self) -> None:
        design = self.design
        for name in design.registered_names:
            reset, preset = (
                self._acts(of.get(name), asynchronous=True)
                for of in (design.resets, design.presets)
            )
            if reset or preset:
                self.held[name] = int(preset)
        if design.machine is not None and self._acts(design.machine.reset, asynchronous=True):
            self.state = design.machine.start

    def _value(self, name: str) -> int | None:
        """The table's entry, if it is the same for all that may be held."""
        points = [self.point]
        for bit, held in enumerate(self.held.values(), len(self.design.input_names)):
            here = [0, 1] if held is None else [held]
            points = [point | level << bit for point in points for level in here]
        values = {self.design.table[name][point] for point in points}
        return values.pop() if len(values) == 1 else None

    def _of_state(self, by_state: list[list[int | None]]) -> int | None:
        states = range(len(by_state)) if self.state is None else [self.state]
        values = {by_state[state][self.point] for state in states}
        return values.pop() if len(values) == 1 else None
