"""A design laid onto a device."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias

if TYPE_CHECKING:
    from pla.behaviour.model import Behaviour
    from pla.device.model import Device, Mode
    from pla.fitting.polarity import Ties
    from pla.logic.minimize import Minimum
    from pla.logic.phases import Polarity

__all__ = ["Fit", "KnownMinima", "PlacedInput", "PlacedOutput", "Plan", "PolarityWish", "Usage"]

PolarityWish = Literal["true", "free"]
"""``true``: every sum is the asserted function; ``free``: true or complemented as serves best."""

KnownMinima: TypeAlias = "dict[tuple[tuple[Polarity, ...], Ties | None], Minimum]"
"""Minima of one behaviour by the polarities allowed and by how a device ties them together."""


@dataclass(frozen=True, slots=True)
class PlacedInput:
    """An input and its pin.

    Attributes:
        index: Which of the behaviour's inputs.
        name: Its name.
        pin: Its pin; ``None`` if no term needs it and no pin was left for it.
        active_low: The pin carries the complement of the asserted value.
        used: Whether any term has a literal of it.
    """

    index: int
    name: str
    pin: int | None
    active_low: bool
    used: bool


@dataclass(frozen=True, slots=True)
class PlacedOutput:
    """An output and its cell.

    Attributes:
        index: Which of the behaviour's outputs.
        name: Its name.
        pin: The pin of its cell.
        active_low: The pin carries the complement of the asserted value.
        complemented: The sum is the complement of the asserted function.
        mode: How the cell is set.
    """

    index: int
    name: str
    pin: int
    active_low: bool
    complemented: bool
    mode: Mode


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
    """A design that fits: every signal on a pin, every term in a row.

    Attributes:
        behaviour: What is wanted.
        device: What it is laid onto.
        minimum: The cover. Its term ``k`` stands in row ``rows[k]`` of the device.
        inputs: In order of the behaviour.
        outputs: In order of the behaviour.
        rows: Row of each term.
    """

    behaviour: Behaviour
    device: Device
    minimum: Minimum
    inputs: tuple[PlacedInput, ...]
    outputs: tuple[PlacedOutput, ...]
    rows: tuple[int, ...]

    @property
    def pins(self) -> dict[str, int]:
        """The pin of every signal that has one."""
        pins = {signal.name: signal.pin for signal in self.inputs if signal.pin is not None}
        return pins | {signal.name: signal.pin for signal in self.outputs}


@dataclass(frozen=True, slots=True)
class Fit:
    """Whether a design fits a device, and what it needs.

    Attributes:
        behaviour: What is wanted.
        device: What it was tried on.
        polarities: What the device and the user leave to each output; ``None`` for nothing.
        minimum: The smallest cover within these; ``None`` if there are outputs without any.
        plan: The design on the device; ``None`` if it does not fit.
        reasons: Why it does not fit, one sentence each; empty if it does.
        terms: Product terms.
        inputs: Input pins; of the inputs only those that a term or a place needs.
        outputs: Output cells.
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

    @property
    def fits(self) -> bool:
        return self.plan is not None
