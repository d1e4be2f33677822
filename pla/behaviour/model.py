"""What a design asks for, free of the way in which it was written down."""

from __future__ import annotations

from dataclasses import dataclass, field
from types import MappingProxyType
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from collections.abc import Mapping

    from pla.errors import Diagnostic, Location
    from pla.logic.cubes import Cover
    from pla.logic.function import Function

__all__ = ["Behaviour", "DontCareSource", "Input", "Output", "Place"]


@dataclass(frozen=True, slots=True)
class Input:
    """One input bit.

    Attributes:
        name: ``start``, or ``step[3]`` for a bit of a bus.
        active_low: The pin carries the complement of the asserted value.
        location: Where it is declared.
    """

    name: str
    active_low: bool
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
    """

    name: str
    active_low: bool
    impossible: Literal[0, 1] | None
    location: Location
    described: Location
    form: Literal["cases", "minterms", "logic", "address_map"]


@dataclass(frozen=True, slots=True)
class DontCareSource:
    """Input combinations that some outputs do not care about, and why.

    Attributes:
        reason: ``never``, ``others``, ``x`` (rows that say so), ``dont_care`` (minterm lists) or
            ``elsewhere`` (address maps).
        cubes: The combinations; the output mask of each cube tells the outputs concerned. The
            sources of one output have no combination in common, and together are exactly the
            combinations that `Behaviour.function` leaves open for it.
    """

    reason: Literal["never", "others", "x", "dont_care", "elsewhere"]
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
        inputs: In order of declaration.
        outputs: In order of declaration.
        function: ON-set and OFF-set of all outputs.
        never: Impossible inputs (output masks mean nothing).
        dont_cares: Where the freedom comes from.
        places: For each device name, the pins decided beforehand.
        warnings: What is doubtful in the design, in order of place.
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

    @property
    def input_names(self) -> tuple[str, ...]:
        return tuple(i.name for i in self.inputs)

    @property
    def output_names(self) -> tuple[str, ...]:
        return tuple(o.name for o in self.outputs)
