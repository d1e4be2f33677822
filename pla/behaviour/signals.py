"""The declared inputs, outputs and inner signals, and what names stand for."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING, Literal

from pla.behaviour.problem import Problem
from pla.logic.cubes import MAX_INPUTS, MAX_OUTPUTS
from pla.wording import did_you_mean

if TYPE_CHECKING:
    from collections.abc import Iterator
    from fractions import Fraction

    from pla.behaviour.machines import MachineHead
    from pla.errors import Location

__all__ = ["RESERVED", "Field", "Role", "Signal", "Signals", "Wanted", "split_name"]

Role = Literal["input", "output", "inner"]

Wanted = Literal["input", "outside", "output"]
"""What a name is wanted for: to be looked at, present values included; to be looked at and to come
from outside; or to be described, as inner signals are, too."""

RESERVED = ("in", "not", "and", "or", "xor", "others")

_BIT = r"(0|[1-9][0-9]{0,5})"
_NAME = re.compile(rf"([A-Za-z_][A-Za-z0-9_]*)(?:\[{_BIT}(?::{_BIT})?\])?")


_CALLED = {"input": "an input", "output": "an output", "inner": "an inner signal"}


@dataclass(frozen=True, slots=True)
class Signal:
    """An input, output or inner signal as declared: a single bit or a bus.

    Attributes:
        name: Without brackets.
        role: Which of these.
        first: Position of its highest bit among all input bits, or among all described bits: those
            of the outputs and behind them those of inner signals.
        high: Highest bit; 0 for a single bit.
        low: Lowest bit that reaches the device; bits below it read 0.
        is_bus: Whether its bits have numbers.
        active_low: The pins carry the complement.
        impossible: Value demanded of an output for impossible inputs.
        location: Where it is declared.
        deferred: It asks for what is not supported yet, which has been reported.
        read_from: For an input that is the level at an output's pin, the output.
        reads: For such an output, the input.
        max_delay: The longest delay of an output, in ns.
        registered: It is clocked; a name that is looked at then means the present value.
        present_of: For an input that is the present value of a registered signal of the same name,
            that name.
        asynchronous: An input that may change close to a clock edge.
    """

    name: str
    role: Role
    first: int
    high: int
    low: int
    is_bus: bool
    active_low: bool
    impossible: Literal[0, 1] | None
    location: Location
    deferred: bool = False
    read_from: str | None = None
    reads: str | None = None
    max_delay: Fraction | None = None
    registered: bool = False
    present_of: str | None = None
    asynchronous: bool = False

    @property
    def called(self) -> str:
        """Its role in words: ``an input``."""
        return _CALLED[self.role]

    @property
    def size(self) -> int:
        """How many bits reach the device."""
        return self.high - self.low + 1

    @property
    def positions(self) -> range:
        """Of its bits, from the highest down."""
        return range(self.first, self.first + self.size)

    @property
    def span(self) -> str:
        """As a bus is written in full: ``step[3:0]``."""
        return f"{self.name}[{self.high}:{self.low}]" if self.is_bus else self.name

    def bit_name(self, bit: int) -> str:
        return f"{self.name}[{bit}]" if self.is_bus else self.name

    def bit_names(self) -> Iterator[str]:
        """From the highest down."""
        return (self.bit_name(bit) for bit in range(self.high, self.low - 1, -1))

    def index(self, bit: int) -> int | None:
        """Position, see `first`; ``None`` if the bit does not reach the device."""
        return None if bit < self.low else self.first + self.high - bit


@dataclass(frozen=True, slots=True)
class Field:
    """Bits that together carry a number.

    Attributes:
        name: As written.
        role: What they are.
        bits: For each bit, most significant first, its position (see `Signal.first`); ``None`` for
            a bit that does not reach the device and reads 0.
        is_bit: It was written as one bit, not as a bus or part of one.
    """

    name: str
    role: Role
    bits: tuple[int | None, ...]
    is_bit: bool

    @property
    def is_input(self) -> bool:
        """Whether they are looked at; otherwise they are described."""
        return self.role == "input"

    @property
    def width(self) -> int:
        return len(self.bits)

    @property
    def unreached(self) -> int:
        """How many of the lowest bits do not reach the device."""
        return self.bits.count(None)

    @property
    def mask(self) -> int:
        """The bits that reach the device, as a mask."""
        return sum(1 << i for i in self.bits if i is not None)


def split_name(text: str) -> tuple[str, int | None, int | None] | None:
    """Take ``bus``, ``bus[i]`` or ``bus[h:l]`` apart; ``None`` if it is none of these."""
    found = _NAME.fullmatch(text)
    if not found:
        return None
    name, high, low = found.groups()
    return name, None if high is None else int(high), None if low is None else int(low)


@dataclass(frozen=True)
class Signals:
    """All signals of a design.

    Attributes:
        inputs: In order of declaration, behind them those that are read from bidirectional pins,
            and last the present values of registered signals.
        outputs: In order of declaration.
        inner: In order of declaration; behind them the states of state tables.
        broken: Names whose declaration is wrong.
        machines: The heads of the state tables.
    """

    inputs: tuple[Signal, ...]
    outputs: tuple[Signal, ...]
    inner: tuple[Signal, ...] = ()
    broken: frozenset[str] = field(default_factory=frozenset)
    machines: tuple[MachineHead, ...] = ()

    @cached_property
    def by_name(self) -> dict[str, Signal]:
        """The declared signals; present values are in `present`."""
        return {s.name: s for s in (*self.described, *self.outside)}

    @cached_property
    def present(self) -> dict[str, Signal]:
        """The present values of registered signals, by the names of these."""
        return {s.name: s for s in self.inputs if s.present_of is not None}

    @property
    def outside(self) -> tuple[Signal, ...]:
        """Inputs that come from outside."""
        return tuple(s for s in self.inputs if s.present_of is None)

    @property
    def described(self) -> tuple[Signal, ...]:
        """What descriptions are about: outputs and inner signals."""
        return self.outputs + self.inner

    @cached_property
    def input_names(self) -> tuple[str, ...]:
        return tuple(name for s in self.inputs for name in s.bit_names())

    @cached_property
    def described_names(self) -> tuple[str, ...]:
        """Bits of the outputs, and behind them those of inner signals."""
        return tuple(name for s in self.described for name in s.bit_names())

    @property
    def n_inputs(self) -> int:
        return len(self.input_names)

    @property
    def n_outputs(self) -> int:
        return sum(s.size for s in self.outputs)

    @property
    def n_inner(self) -> int:
        return sum(s.size for s in self.inner)

    @property
    def too_many(self) -> bool:
        """Whether there are more bits than covers can hold; the declarations have that error."""
        return self.n_inputs > MAX_INPUTS or len(self.described_names) > MAX_OUTPUTS

    def names(self, wanted: Wanted | None = None) -> list[str]:
        """Names to choose from, for messages."""
        if wanted == "input":
            return [s.name for s in self.inputs]
        inputs = () if wanted == "output" else self.outside
        return [s.name for s in (*inputs, *(() if wanted == "outside" else self.described))]

    def find(self, text: str, wanted: Wanted | None = None) -> Field:
        """What a written name stands for.

        Args:
            text: ``bus``, ``bus[i]``, ``bus[h:l]`` or the name of a single bit.
            wanted: What for; ``None`` for either.

        Raises:
            Problem: If it stands for nothing, or for something else.
        """
        parts = split_name(text)
        if parts is None:
            raise Problem(
                "NAME-SYNTAX",
                f"{text!r} is not a name, expected name, bus[bit] or bus[high:low]",
                "names are made of the letters A to Z and a to z, digits and underscores",
            )
        return self.select(*parts, wanted=wanted)

    def select(
        self, name: str, high: int | None, low: int | None, *, wanted: Wanted | None = None
    ) -> Field:
        """The same from a name and bit numbers; see `find`."""
        signal = self.by_name.get(name)
        if signal is None:
            raise Problem(
                "NAME-UNKNOWN",
                f"there is no {self._called(wanted)} {name!r}",
                did_you_mean(name, self.names(wanted)),
                known=name in self.broken,
            )
        if wanted is None or wanted == "input":
            signal = self.present.get(name, signal)
        if wanted is not None and (signal.role == "input") != (wanted != "output"):
            hint = did_you_mean(name, self.names(wanted))
            if wanted == "outside" and signal.registered:
                hint = f"what a register holds does not come from outside; {hint}"
            raise Problem(
                "NAME-ROLE",
                f"{name!r} is {signal.called}, expected an {self._called(wanted)}",
                hint,
                known=name in self.broken,
            )
        if high is None:
            if not signal.is_bus:
                return Field(name, signal.role, (signal.first,), is_bit=True)
            return self._field(name, signal, signal.high, 0, is_bit=False)
        text = f"{name}[{high}]" if low is None else f"{name}[{high}:{low}]"
        if not signal.is_bus:
            raise Problem(
                "NAME-NOT-BUS",
                f"{text!r}: {name} is a single bit, not a bus",
                f"write {name}",
            )
        if low is not None and high < low:
            raise Problem(
                "PART-REVERSED",
                f"the part {text!r} runs from low to high, expected the higher bit first",
                f"write {name}[{low}:{high}]",
            )
        if high > signal.high:
            raise Problem(
                "BIT-RANGE",
                f"{text!r}: there is no bit {high} in {signal.span}",
                f"its bits are {signal.high} down to {signal.low}",
            )
        if high < signal.low:
            raise Problem(
                "BIT-UNREACHED",
                f"{text!r}: only bits {signal.high} down to {signal.low} reach the device",
            )
        return self._field(text, signal, high, high if low is None else low, is_bit=low is None)

    def _called(self, wanted: Wanted | None) -> str:
        """What there may be, in words: ``input or output``."""
        looked_at = wanted in ("input", "outside")
        words = ["input"] if looked_at else ["output"] if wanted else ["input", "output"]
        if self.inner and not looked_at:
            words.append("inner signal")
        return " or ".join(filter(None, (", ".join(words[:-1]), words[-1])))

    @staticmethod
    def _field(text: str, signal: Signal, high: int, low: int, *, is_bit: bool) -> Field:
        bits = tuple(signal.index(bit) for bit in range(high, low - 1, -1))
        return Field(text, signal.role, bits, is_bit=is_bit)

    def show_point(self, point: int, mask: int) -> str:
        """An input combination in words, as far as `mask` goes: ``step = 12, start = 0``."""
        shown = []
        for signal in self.inputs:
            held = [
                bit
                for bit in range(signal.high, signal.low - 1, -1)
                if mask >> (signal.first + signal.high - bit) & 1
            ]
            if not held:
                continue
            values = {b: point >> (signal.first + signal.high - b) & 1 for b in held}
            if len(held) == signal.size:
                number = sum(value << bit for bit, value in values.items())
                text = f"0x{number:0{(signal.high + 4) // 4}X}" if signal.high > 7 else str(number)
                shown.append(f"{signal.name} = {text}")
            else:
                shown += [f"{signal.bit_name(bit)} = {value}" for bit, value in values.items()]
        return ", ".join(shown) or "any input"

    def show_names(self, mask: int) -> str:
        """The inputs of a mask in words, whole buses by their name."""
        shown = []
        for signal in self.inputs:
            held = [
                bit
                for bit in range(signal.high, signal.low - 1, -1)
                if mask >> (signal.first + signal.high - bit) & 1
            ]
            if len(held) == signal.size:
                shown.append(signal.name)
            else:
                shown += [signal.bit_name(bit) for bit in held]
        return ", ".join(shown)
