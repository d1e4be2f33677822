"""What a design asks for, free of the way in which it was written down."""

from __future__ import annotations

from dataclasses import dataclass, field
from types import MappingProxyType
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from collections.abc import Mapping
    from fractions import Fraction

    from pla.errors import Diagnostic, Location
    from pla.logic.cubes import Cover
    from pla.logic.function import Function

__all__ = ["Behaviour", "DontCareSource", "Enabling", "Form", "Inner", "Input", "Output", "Place"]

Form = Literal["cases", "minterms", "logic", "address_map"]


@dataclass(frozen=True, slots=True)
class Input:
    """One input bit.

    Attributes:
        name: ``start``, or ``step[3]`` for a bit of a bus.
        active_low: The pin carries the complement of the asserted value.
        location: Where it is declared.
        read_from: For the level of a bidirectional pin, the output that drives the pin.
    """

    name: str
    active_low: bool
    location: Location
    read_from: str | None = None


@dataclass(frozen=True, slots=True)
class Enabling:
    """When a three-state output drives its pin.

    Attributes:
        on: Input combinations in which it drives.
        off: Those in which it does not. Together with `on` all combinations, unless the design
            leaves the impossible ones open.
        text: The expression as written.
        location: Where it stands.
    """

    on: Cover
    off: Cover
    text: str
    location: Location


@dataclass(frozen=True, slots=True)
class Output:
    """One output bit.

    Attributes:
        name: ``fan``, or ``segment[6]`` for a bit of a bus.
        active_low: The pin carries the complement of the asserted value.
        impossible: Asserted value demanded for impossible inputs; ``None`` leaves them free.
        location: Where it is declared.
        described: Where its logic is given.
        form: By what kind of section.
        enable: When it drives its pin; ``None`` for always.
        reads: The input that is the level at its pin, for a bidirectional pin.
        max_delay: The longest delay from any input to it, in ns; ``None`` where nothing is asked.
    """

    name: str
    active_low: bool
    impossible: Literal[0, 1] | None
    location: Location
    described: Location
    form: Form
    enable: Enabling | None = None
    reads: str | None = None
    max_delay: Fraction | None = None


@dataclass(frozen=True, slots=True)
class Inner:
    """One bit of a signal that needs no pin.

    Attributes:
        name: ``armed``, or ``state[1]`` for a bit of a bus.
        location: Where it is declared.
        described: Where its logic is given.
        form: By what kind of section.
    """

    name: str
    location: Location
    described: Location
    form: Form


@dataclass(frozen=True, slots=True)
class DontCareSource:
    """Input combinations that some outputs do not care about, and why.

    Attributes:
        reason: ``never``, ``others``, ``x`` (rows that say so), ``dont_care`` (minterm lists),
            ``elsewhere`` (address maps) or ``disabled`` (the output does not drive its pin).
        cubes: The combinations; the output mask of each cube tells the outputs concerned. The
            sources of one output have no combination in common, and together are exactly the
            combinations that `Behaviour.function` leaves open for it.
    """

    reason: Literal["never", "others", "x", "dont_care", "elsewhere", "disabled"]
    cubes: Cover


@dataclass(frozen=True, slots=True)
class Place:
    """A pin that is decided beforehand."""

    signal: str
    pin: int
    location: Location


@dataclass(frozen=True, slots=True)
class Behaviour:
    """A checked design.

    Bit ``i`` of a cube's words belongs to ``inputs[i]``, bit ``j`` of its output mask to
    ``outputs[j]``; buses stand as bits from the highest down. All values are asserted values,
    whatever the pins carry.

    Attributes:
        name: Title of the design.
        revision: As the user counts them; ``""`` if not given.
        file: The design file as named by the user.
        inputs: In order of declaration; behind them those that are read from bidirectional pins.
        outputs: In order of declaration.
        function: ON-set and OFF-set of all outputs, with inner signals folded in.
        never: Impossible inputs (output masks mean nothing).
        dont_cares: Where the freedom comes from.
        places: For each device name, the pins decided beforehand.
        warnings: What is doubtful in the design, in order of place.
        inner: Signals without a pin, in order of declaration.
        inner_function: ON-set and OFF-set of these, over the same inputs.
        named: For each output and inner signal whose description or enable names others, these
            others (outputs and inner signals, not inputs), in order of declaration. There is no
            ring among them: what an enable names in a ring is left out here, and folded in.
        signature: Text for the device's signature fuses; ``None`` if not given.
        signature_at: Where it stands; ``None`` if the design file does not give it.
        max_delay: The longest delay of any output, in ns; ``None`` where nothing is asked.
    """

    name: str
    revision: str
    file: str
    inputs: tuple[Input, ...]
    outputs: tuple[Output, ...]
    function: Function
    never: Cover
    dont_cares: tuple[DontCareSource, ...]
    places: Mapping[str, tuple[Place, ...]] = field(default_factory=lambda: MappingProxyType({}))
    warnings: tuple[Diagnostic, ...] = ()
    inner: tuple[Inner, ...] = ()
    inner_function: Function | None = None
    named: Mapping[str, tuple[str, ...]] = field(default_factory=lambda: MappingProxyType({}))
    signature: str | None = None
    signature_at: Location | None = None
    max_delay: Fraction | None = None

    @property
    def input_names(self) -> tuple[str, ...]:
        return tuple(i.name for i in self.inputs)

    @property
    def output_names(self) -> tuple[str, ...]:
        return tuple(o.name for o in self.outputs)
