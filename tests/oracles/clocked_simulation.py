"""A part with registers simulated pin by pin, clock by clock, from the links of a fuse file alone.

Shares no code with the program that it checks. As in `pin_simulation` a set of cases is a whole
number whose bit ``k`` stands for case ``k``; a case is here a whole sequence of pin levels, so that
one run answers for many independent sequences.

What the part does, step by step: the levels of all pins that are no clocks change first, and
whatever resets or presets asynchronously acts; then the clock pins move, all at once, and the
registers that see their edge take what their inputs said just before it. A register that something
holds reset or preset asynchronously does not hear its clock. Where it cannot be said whether there
was an edge or what a register took, it holds nobody knows what: after reset and preset at once,
after S and R at once, after an edge out of a level that is none.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from oracles.device_description import Control, Description, Line, Register, Source
from oracles.pin_simulation import Configured, Level, Logic, _Run, configured

__all__ = ["Drivers", "Snapshot", "held", "pulsed", "run"]

Drivers = Mapping[int, tuple[int, int]]


@dataclass(frozen=True)
class Snapshot:
    """After a step: the level at every pin that the part or somebody else may drive, every sum by
    its entry, and what the register of each cell holds.
    """

    pins: dict[int, Level]
    sums: dict[Source, Logic]
    q: dict[Source, Logic]


def run(
    device: Description,
    states: list[int],
    sequences: Sequence[Drivers],
    cases: int,
    power_up: Mapping[Source, int] | None = None,
) -> list[Snapshot]:
    """Levels after every step of `cases` independent sequences, from power-up on.

    Args:
        device: The device.
        states: State of each fuse.
        sequences: Of each step, for every pin that is driven from outside from then on: the cases
            in which it is, and those in which it is driven high. A pin that a step does not name
            stays as it was, at first driven by nobody. The first step is there at power-up: it
            makes no edges.
        cases: How many sequences.
        power_up: Of cells whose registers come up with nobody knows what: the cases in which that
            happens to be 1; in the others it is 0. Without it, it is unknown.

    Raises:
        UnreadableError: The states are not those of this device in this mode.
        LoopError: A sum depends on itself without a register between.
    """
    part = _Part(configured(device, states), (1 << cases) - 1, power_up or {})
    return [part.step(drivers) for drivers in sequences]


def held(levels: Mapping[int, str], cases: int = 1) -> dict[int, tuple[int, int]]:
    """Drivers from texts: a sign ``0``, ``1`` or ``Z`` for each case, or one for all."""
    found = {}
    for pin, text in levels.items():
        signs = text * cases if len(text) == 1 else text
        if len(signs) != cases or set(signs) - set("01Z"):
            raise ValueError(f"{text!r} for {cases} cases")
        found[pin] = (
            sum(1 << case for case, sign in enumerate(signs) if sign != "Z"),
            sum(1 << case for case, sign in enumerate(signs) if sign == "1"),
        )
    return found


def pulsed(clock: int, steps: Sequence[Drivers], cases: int, rest: int = 0) -> list[Drivers]:
    """Every step as three: its levels with the clock pin at rest, the pulse, and at rest again."""
    everywhere = (1 << cases) - 1
    low, high = ({clock: (everywhere, everywhere * level)} for level in (rest, 1 - rest))
    return [drivers for step in steps for drivers in ({**step, **low}, high, low)]


class _Part:
    """What the registers hold and what the pins are driven with, from step to step."""

    def __init__(self, array: Configured, everywhere: int, power_up: Mapping[Source, int]):
        self.array, self.everywhere = array, everywhere
        self.registers: dict[Source, Register] = {
            key: mode.register for key, mode in array.modes.items() if mode.register is not None
        }
        self.clocks = sorted({register.clock for register in self.registers.values()})
        self.drivers: dict[int, tuple[int, int]] = {}
        known = {0: Logic(0, everywhere), 1: Logic(everywhere, 0), None: Logic(0, 0)}
        self.q = {key: known[register.power_up] for key, register in self.registers.items()}
        for key, ones in power_up.items():
            if key in self.q and self.registers[key].power_up is None:
                self.q[key] = Logic(everywhere & ones, everywhere & ~ones)
        self.powered = False
        self.last: _Run | None = None

    def step(self, drivers: Drivers) -> Snapshot:
        moving = {pin: drivers[pin] for pin in self.clocks if pin in drivers}
        moving = {pin: to for pin, to in moving.items() if self.drivers.get(pin) != to}
        if not self.powered:
            self.powered, moving = True, {}
        self.drive({pin: to for pin, to in drivers.items() if pin not in moving})
        self.settle()
        if moving:
            self.clock(moving)
            self.settle()
        found = self.now().all()
        return Snapshot(found.pins, found.sums, dict(self.q))

    def drive(self, drivers: Drivers) -> None:
        if any(self.drivers.get(pin) != to for pin, to in drivers.items()):
            self.last = None
        self.drivers |= drivers

    def now(self) -> _Run:
        if self.last is None:
            self.last = _Run(self.array, self.drivers, self.everywhere, self.q)
        return self.last

    def hold(self, key: Source, value: Logic) -> None:
        if self.q[key] != value:
            # A run that is under way keeps the state that it began with.
            self.q, self.last = {**self.q, key: value}, None

    # --- asynchronous reset and preset ---

    def settle(self) -> None:
        """Until nothing changes; a register that would go on for ever holds nobody knows what."""
        patience = 2 * len(self.registers) + 2
        while True:
            before, array = self.q, self.now()
            for key, register in self.registers.items():
                forcing = self.forcing(array, register, asynchronous=True)
                value = _forced(before[key], *forcing)
                if patience < 0:
                    value = _either(value, before[key])
                self.hold(key, value)
            if self.q == before:
                return
            patience -= 1

    def forcing(self, array, register: Register, *, asynchronous: bool) -> tuple[Logic, Logic]:
        """Whether the register is reset, and whether it is preset."""
        return (
            self.acts(array, register.reset, asynchronous=asynchronous),
            self.acts(array, register.preset, asynchronous=asynchronous),
        )

    def acts(self, array, control: Control | None, *, asynchronous: bool) -> Logic:
        if control is None or control.asynchronous != asynchronous:
            return Logic(0, self.everywhere)
        kind, *what = control.by
        if kind == "row":
            return array.row(what[0])
        return array.value(Line("pin", what[0], complement=what[1] == 0))

    # --- the clock ---

    def clock(self, moving: Drivers) -> None:
        before = self.now()
        levels = {pin: before.value(Line("pin", pin)) for pin in moving}
        still = {pin: self.still(pin, to) for pin, to in moving.items()}
        taken = {}
        for key, register in self.registers.items():
            if register.clock in moving:
                reset, preset = self.forcing(before, register, asynchronous=True)
                free = _both(reset.inverse, preset.inverse)
                taken[key] = free, self.next(before, key, register)
        self.drive(moving)
        after = self.now()
        held = dict(self.q)
        for key, (free, value) in taken.items():
            register = self.registers[key]
            old, new = levels[register.clock], after.value(Line("pin", register.clock))
            if register.falling:
                old, new = old.inverse, new.inverse
            hears = _both(_both(old.inverse, new), free)
            hears = Logic(hears.high, hears.low | still[register.clock])
            self.hold(key, _chosen(hears, value, held[key]))

    def still(self, pin: int, to: tuple[int, int]) -> int:
        """The cases in which nothing happens at a pin; one that floats on is at rest."""
        (driven, high), (then, then_high) = self.drivers.get(pin, (0, 0)), to
        return self.everywhere & ~(driven ^ then | driven & (high ^ then_high))

    def next(self, array, key: Source, register: Register) -> Logic:
        entries = self.array.device.cells[key].entries
        inputs = [
            array.value(Line("sum", entry, complement))
            for entry, complement in zip(entries, register.inverted, strict=True)
        ]
        value = _NEXT[register.kind](self.q[key], *inputs)
        return _forced(value, *self.forcing(array, register, asynchronous=False))


# --- three-valued logic ---


def _both(a: Logic, b: Logic) -> Logic:
    return Logic(a.high & b.high, a.low | b.low)


def _either(a: Logic, b: Logic) -> Logic:
    """Known only where both are the same."""
    return Logic(a.high & b.high, a.low & b.low)


def _forced(value: Logic, reset: Logic, preset: Logic) -> Logic:
    """`value` where neither acts, what acts where one does; both at once: unknown.

    Where it is unknown whether one acts, the outcome is known if it is the same either way.
    """
    high = preset.high & reset.low | value.high & reset.low
    low = reset.high & preset.low | value.low & preset.low
    return Logic(high, low)


def _chosen(which: Logic, if_high: Logic, if_low: Logic) -> Logic:
    same = _either(if_high, if_low)
    return Logic(
        which.high & if_high.high | which.low & if_low.high | same.high,
        which.high & if_high.low | which.low & if_low.low | same.low,
    )


def _t(q: Logic, t: Logic) -> Logic:
    return Logic(q.high & t.low | q.low & t.high, q.high & t.high | q.low & t.low)


def _jk(q: Logic, j: Logic, k: Logic) -> Logic:
    """J sets, K resets, both toggle; what is the same whatever the unknown one is, is known."""
    return Logic(
        j.high & (q.low | k.low) | k.low & q.high, k.high & (q.high | j.low) | j.low & q.low
    )


def _sr(q: Logic, s: Logic, r: Logic) -> Logic:
    """S sets, R resets, neither keeps; both: unknown."""
    return Logic(r.low & (s.high | q.high), s.low & (r.high | q.low))


_NEXT = {"d": lambda _q, d: d, "t": _t, "jk": _jk, "sr": _sr}
