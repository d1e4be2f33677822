"""A design laid onto a device."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from collections.abc import Mapping

    from pla.behaviour.model import Behaviour, Place
    from pla.device.model import Cell, Device, Line, Mode, Source
    from pla.errors import Diagnostic
    from pla.logic.cubes import Cube
    from pla.logic.minimize import Minimum
    from pla.logic.phases import Polarity

__all__ = [
    "Fit",
    "PlacedEnable",
    "PlacedInput",
    "PlacedOutput",
    "Plan",
    "PolarityWish",
    "Usage",
]

PolarityWish = Literal["true", "free"]
"""``true``: every sum is the asserted function; ``free``: true or complemented as serves best."""


@dataclass(frozen=True, slots=True)
class PlacedInput:
    """An input and its pin, or a fed-back signal and its cell.

    Attributes:
        index: Which of the inputs of the plan's behaviour.
        name: Its name.
        pin: Its pin; ``None`` if no term needs it and no pin was left for it, or if it is fed back
            inside the device.
        active_low: The pin carries the complement of the asserted value.
        used: Whether any term has a literal of it.
        columns: Of the AND array the column that is 1 while the signal is asserted, and the one
            that is 1 while it is not; ``None`` where there is no such line.
        fed_by: For a fed-back signal the key of its cell.
    """

    index: int
    name: str
    pin: int | None
    active_low: bool
    used: bool
    columns: tuple[int | None, int | None]
    fed_by: Source | None = None


@dataclass(frozen=True, slots=True)
class PlacedEnable:
    """How a three-state output is switched.

    Attributes:
        row: Row of the AND array that enables it; ``None`` where a pin does.
        pin: The enable pin; ``None`` where a row does.
        cube: The product that the row realises, over the inputs of the plan's behaviour; of an
            enable pin the product that is its level.
    """

    row: int | None
    pin: int | None
    cube: Cube


@dataclass(frozen=True, slots=True)
class PlacedOutput:
    """An output or inner signal and its cell.

    Attributes:
        index: Which of the outputs of the plan's behaviour.
        name: Its name.
        pin: The pin that shows it; ``None`` for an inner signal.
        active_low: The pin carries the complement of the asserted value.
        complemented: The sum is the complement of the asserted function.
        mode: How the cell is set.
        cell: The cell.
        enable: What switches the pin; ``None`` if it is always driven, or never.
        shown: The pin that an inner signal drives, where its cell cannot feed it back otherwise or
            cannot be switched off.
    """

    index: int
    name: str
    pin: int | None
    active_low: bool
    complemented: bool
    mode: Mode
    cell: Cell
    enable: PlacedEnable | None = None
    shown: int | None = None


@dataclass(frozen=True, slots=True)
class Usage:
    """What a design needs of one resource, and what the device has."""

    used: int
    available: int

    @property
    def over(self) -> int:
        return max(0, self.used - self.available)


@dataclass(frozen=True, slots=True)
class Plan:
    """A design that fits: every signal on a pin or in a cell, every term in a row.

    Attributes:
        design: What is wanted.
        behaviour: What is laid out: the design with its fed-back signals behind the inputs, and
            the inner signals that have a cell behind the outputs. Where neither is there, it is
            the design.
        device: What it is laid onto.
        minimum: The cover of `behaviour`. Its term ``k`` stands in row ``rows[k]`` of the device.
            A term of a cell with an OR gate of its own has one output only.
        inputs: In order of the behaviour.
        outputs: In order of the behaviour.
        rows: Row of each term.
        modes: For the key of every cell how it is set: cells with an output, cells whose pin
            serves as an input, and cells that nothing uses.
        tied: Enable pins that carry no signal, with the level at which they have to be held for
            the outputs that they switch.
        passes: For each output passes through the array on the longest way to it.
    """

    design: Behaviour
    behaviour: Behaviour
    device: Device
    minimum: Minimum
    inputs: tuple[PlacedInput, ...]
    outputs: tuple[PlacedOutput, ...]
    rows: tuple[int, ...]
    modes: Mapping[Source, Mode]
    tied: tuple[tuple[int, Literal[0, 1]], ...] = ()
    passes: tuple[int, ...] = ()

    @property
    def pins(self) -> dict[str, int]:
        """The pin of every signal that has one."""
        pins = {signal.name: signal.pin for signal in self.inputs if signal.pin is not None}
        return pins | {out.name: out.pin for out in self.outputs if out.pin is not None}

    @property
    def fed_back(self) -> tuple[str, ...]:
        """Names of the signals that are fed back through the array."""
        return tuple(signal.name for signal in self.inputs if signal.fed_by is not None)

    @property
    def lines(self) -> tuple[Line | None, ...]:
        """What every column of the AND array carries."""
        return self.device.lines(self.modes)

    @property
    def used_cells(self) -> frozenset[Source]:
        """Keys of the cells that hold an output or inner signal."""
        return frozenset(output.cell.key for output in self.outputs)

    @property
    def input_cells(self) -> frozenset[Source]:
        """Keys of the cells whose pin serves as an input and that hold nothing."""
        cells = self.device.cell_of_pin
        pins = {signal.pin for signal in self.inputs if signal.pin is not None}
        return frozenset(cells[pin].key for pin in pins if pin in cells) - self.used_cells


@dataclass(frozen=True, slots=True)
class Fit:
    """Whether a design fits a device, and what it needs.

    Attributes:
        behaviour: What is wanted.
        device: What it was tried on.
        polarities: What the device and the user leave to each output; ``None`` for nothing.
        minimum: The smallest cover within these; ``None`` if there are outputs without any. It is
            a cover of `laid_out`.
        plan: The design on the device; ``None`` if it does not fit.
        reasons: Why it does not fit, one sentence each; empty if it does.
        terms: Product terms.
        inputs: Input pins; of the inputs only those that a term or a place needs.
        outputs: Output cells.
        lacking: Terms that are missing, at least: of the shared OR array, and of cells with terms
            of their own when the outputs are on those where least is missing.
        released: The fewest places whose release would make it fit; empty if there are none.
        warnings: What is doubtful though it fits.
    """

    behaviour: Behaviour
    device: Device
    polarities: tuple[Polarity | None, ...]
    minimum: Minimum | None
    plan: Plan | None
    reasons: tuple[str, ...]
    terms: Usage
    inputs: Usage
    outputs: Usage
    lacking: int = 0
    released: tuple[Place, ...] = ()
    warnings: tuple[Diagnostic, ...] = ()

    @property
    def fits(self) -> bool:
        return self.plan is not None

    @property
    def laid_out(self) -> Behaviour:
        """What the minimum is a cover of: the design, with signals fed back where the plan does."""
        return self.behaviour if self.plan is None else self.plan.behaviour
