"""An array simulated pin by pin, from the links of a fuse file alone.

Shares no code with the program that it checks. A set of cases is a whole number whose bit ``k``
stands for case ``k``, so that one run answers for many input combinations. Logic has three values:
what is neither surely 1 nor surely 0 is unknown, and a 0 in an AND decides it whatever the rest.
"""

from collections.abc import Mapping
from dataclasses import dataclass

from oracles.device_description import Description, Line, Mode, Source
from oracles.fuse_file import UnreadableError


class LoopError(Exception):
    """Sums and pins that depend on themselves through connected lines."""


@dataclass(frozen=True)
class Logic:
    """The cases in which something is surely 1, and those in which it is surely 0."""

    high: int
    low: int

    @property
    def inverse(self) -> "Logic":
        return Logic(self.low, self.high)


@dataclass(frozen=True)
class Level:
    """The cases in which a pin is high, low, and at high impedance; in all others it is undefined.

    Undefined is a pin that is driven from two sides at different levels, or of which it cannot be
    said whether or where to it is driven.
    """

    high: int
    low: int
    floating: int

    def at(self, case: int) -> str:
        for sign, cases in (("1", self.high), ("0", self.low), ("Z", self.floating)):
            if cases >> case & 1:
                return sign
        return "?"

    def text(self, cases: int) -> str:
        return "".join(self.at(case) for case in range(cases))


@dataclass(frozen=True)
class Simulation:
    """Levels of all pins that the part or somebody else may drive, and every sum by its entry."""

    pins: dict[int, Level]
    sums: dict[Source, Logic]


@dataclass(frozen=True)
class Configured:
    """A device with its links set: what is left is rows, sums and pins.

    `rows[row]` holds the lines that the row is the AND of; ``None`` for a row that is 0 in any
    case. Among the lines ``None`` stands for a column that carries nothing. `terms` holds the rows
    of each sum, by its entry.
    """

    device: Description
    modes: dict[Source, Mode]
    rows: list[list[Line | None] | None]
    terms: dict[Source, list[int]]


def configured(device: Description, states: list[int]) -> Configured:
    if len(states) != device.fuses:
        raise UnreadableError(f"{len(states)} fuses for a device of {device.fuses}")
    for fuse, state in device.mode_fuses.items():
        if states[fuse] != state:
            raise UnreadableError(f"mode fuse {fuse} is {states[fuse]}: another device-wide mode")
    modes = {}
    columns = [column if isinstance(column, Line) else None for column in device.columns]
    for key, cell in device.cells.items():
        setting = "".join(str(states[fuse]) for fuse in cell.links)
        if setting not in cell.modes:
            name = f"pin {cell.pin}" if cell.pin is not None else key
            raise UnreadableError(f"the cell of {name} is set to {setting!r}, which is no mode")
        modes[key] = cell.modes[setting]
        for column, line in modes[key].columns.items():
            columns[column] = line
    rows = []
    for row, fuses in enumerate(device.links):
        joined = {
            columns[index]
            for index, fuse in enumerate(fuses)
            if device.columns[index] is not None and states[fuse] == device.connected
        }
        cut = row in device.drop and states[device.drop[row]] == device.dropped
        dead = any(line is not None and line.inverse in joined for line in joined)
        rows.append(None if cut or dead else sorted(joined, key=str))
    terms = {}
    for key, mode in modes.items():
        for entry, own in zip(device.cells[key].entries, (mode.terms, mode.second), strict=False):
            if own is not None:
                terms[entry] = list(own)
            else:
                fuse_of = device.sums[entry]
                terms[entry] = [row for row, f in fuse_of.items() if states[f] == device.connected]
    return Configured(device, modes, rows, terms)


def simulate(
    device: Description,
    states: list[int],
    drivers: Mapping[int, tuple[int, int]],
    cases: int,
) -> Simulation:
    """Every pin's level in each of `cases` cases.

    Args:
        device: The device.
        states: State of each fuse.
        drivers: For a pin that is driven from outside: the cases in which it is, and those in
            which it is driven high.
        cases: How many.

    Raises:
        UnreadableError: The states are not those of this device in this mode.
        LoopError: A sum depends on itself.
    """
    return _Run(configured(device, states), drivers, (1 << cases) - 1).all()


class _Run:
    """Values as they are needed; what is being worked out stands on the way, to notice a ring.

    A register of which `state` does not speak holds nobody knows what.
    """

    def __init__(self, array: Configured, drivers, everywhere, state=None):
        self.array, self.drivers, self.everywhere = array, drivers, everywhere
        self.state: Mapping[Source, Logic] = state or {}
        self.known: dict[Line, Logic] = {}
        self.rows: dict[int, Logic] = {}
        self.levels: dict[int, Level] = {}
        self.way: list[Line] = []
        device = array.device
        self.cell_of_pin = {c.pin: c for c in device.cells.values() if c.pin is not None}
        strange = set(drivers) & {*device.supplies, *device.unconnected}
        if strange or not all(1 <= pin <= device.pins for pin in drivers):
            raise UnreadableError(f"pins {sorted(drivers)} are driven from outside")

    def all(self) -> Simulation:
        sums = {entry: self.value(Line("sum", entry)) for entry in self.array.terms}
        for pin in sorted({*self.cell_of_pin, *self.drivers}):
            self.value(Line("pin", pin))
        return Simulation(dict(sorted(self.levels.items())), sums)

    def value(self, line: Line) -> Logic:
        if line.kind == "q":
            held = self.state.get(line.of, Logic(0, 0))
            return held.inverse if line.complement else held
        plain = Line(line.kind, line.of)
        if plain not in self.known:
            if plain in self.way:
                ring = [*self.way[self.way.index(plain) :], plain]
                raise LoopError(" <- ".join(f"{x.kind} {x.of}" for x in ring))
            self.way.append(plain)
            self.known[plain] = self.sum(line.of) if line.kind == "sum" else self.read(line.of)
            self.way.pop()
        found = self.known[plain]
        return found.inverse if line.complement else found

    def row(self, row: int) -> Logic:
        if row not in self.rows:
            self.rows[row] = self.product(row)
        return self.rows[row]

    def product(self, row: int) -> Logic:
        if self.array.rows[row] is None:
            return Logic(0, self.everywhere)
        high, low = self.everywhere, 0
        for line in self.array.rows[row]:
            part = Logic(0, 0) if line is None else self.value(line)
            high &= part.high
            low |= part.low
        return Logic(high, low)

    def sum(self, key: Source) -> Logic:
        high, low = 0, self.everywhere
        for row in self.array.terms[key]:
            part = self.row(row)
            high |= part.high
            low &= part.low
        return Logic(high, low)

    def read(self, pin: int) -> Logic:
        """The level at a pin as a line of the array sees it."""
        self.levels[pin] = level = self.level(pin)
        return Logic(level.high, level.low)

    def level(self, pin: int) -> Level:
        driven, high = self.drivers.get(pin, (0, 0))
        driven &= self.everywhere
        outside = Logic(driven & high, driven & ~high)
        if pin not in self.cell_of_pin:
            return Level(outside.high, outside.low, self.everywhere & ~driven)
        drives = self.drives(self.cell_of_pin[pin].key)
        part = self.shown(self.cell_of_pin[pin].key, drives)
        alone, free = drives.high & ~driven, drives.low
        both = driven & ~free
        return Level(
            alone & part.high | free & outside.high | both & part.high & outside.high,
            alone & part.low | free & outside.low | both & part.low & outside.low,
            free & ~driven,
        )

    def drives(self, key: Source) -> Logic:
        """Whether the cell drives its pin."""
        mode = self.array.modes[key]
        if mode.shows == "none":
            return Logic(0, self.everywhere)
        kind, *what = mode.enable
        if kind == "row":
            return self.row(what[0])
        if kind == "pin":
            return self.value(Line("pin", what[0], complement=what[1] == 0))
        return Logic(self.everywhere, 0)

    def shown(self, key: Source, drives: Logic) -> Logic:
        # A pin that is off in any case does not depend on the sum behind it.
        if drives.low == self.everywhere:
            return Logic(0, 0)
        shows = self.array.modes[key].shows
        return self.value(Line(shows.removesuffix("'"), key, complement=shows.endswith("'")))


def signature_text(device: Description, states: list[int]) -> str:
    """The text in the signature fuses, without the blank ones behind it."""
    signature = device.signature
    if signature is None:
        raise UnreadableError("the device has no signature")
    found = []
    for first in range(signature.fuses.start, signature.fuses.stop, 8):
        bits = [int(states[fuse] == signature.ones) for fuse in range(first, first + 8)]
        if not signature.first_is_highest:
            bits.reverse()
        found.append(int("".join(map(str, bits)), 2))
    blank = 255 if device.blank == signature.ones else 0
    while found and found[-1] == blank:
        found.pop()
    if any(not 32 <= code < 127 for code in found):
        raise UnreadableError(f"signature {found} is no text")
    return "".join(map(chr, found))


def every_case(pins: list[int]) -> dict[int, int]:
    """Levels of all combinations: in case ``k`` the first pin carries bit 0 of ``k``, and so on."""
    cases = 1 << len(pins)
    return {
        pin: sum(1 << case for case in range(cases) if case >> index & 1)
        for index, pin in enumerate(pins)
    }
