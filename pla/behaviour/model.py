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

__all__ = [
    "Behaviour",
    "CodeStyle",
    "DontCareSource",
    "Enabling",
    "Form",
    "Inner",
    "Input",
    "Output",
    "Place",
    "RegisterWish",
    "Registering",
    "StateRow",
    "StateTable",
]

Form = Literal["cases", "minterms", "logic", "address_map", "state_table"]

RegisterWish = Literal["D", "T", "JK", "SR", "any"]
"""What a design asks for; ``any``: what the cell offers and takes fewest terms."""

CodeStyle = Literal["free", "counting", "gray", "one-hot", "table"]


@dataclass(frozen=True, slots=True)
class Input:
    """One input bit.

    Attributes:
        name: ``start``, or ``step[3]`` for a bit of a bus.
        active_low: The pin carries the complement of the asserted value.
        location: Where it is declared.
        read_from: For the level of a bidirectional pin, the output that drives the pin.
        present_of: For the present value of a registered output or inner signal, that signal; it
            has the same name, and the value is the asserted one.
        asynchronous: It may change at any time, also close to a clock edge.
    """

    name: str
    active_low: bool
    location: Location
    read_from: str | None = None
    present_of: str | None = None
    asynchronous: bool = False


@dataclass(frozen=True, slots=True)
class Enabling:
    """When a three-state output drives its pin, or a register is reset or preset.

    Attributes:
        on: Input combinations in which it does.
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
class Registering:
    """How one bit is clocked. All values are asserted values.

    Attributes:
        kind: The register asked for.
        clock: Name of the input bit.
        falling: At which edge of the asserted clock the next value is taken: the one to 0.
        start: Value at power-up; ``None`` if nobody cares.
        reset: When the value is made 0.
        preset: When it is made 1. Of one kind, asynchronous or at the clock, it is never 1
            together with `reset`; where the kinds differ, the asynchronous one wins.
        reset_asynchronous: At once; otherwise at the clock edge.
        preset_asynchronous: Likewise.
    """

    kind: RegisterWish
    clock: str
    falling: bool
    start: Literal[0, 1] | None
    reset: Enabling | None = None
    preset: Enabling | None = None
    reset_asynchronous: bool = True
    preset_asynchronous: bool = True


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
        register: How it is clocked; ``None`` for a combinational output.
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
    register: Registering | None = None


@dataclass(frozen=True, slots=True)
class Inner:
    """One bit of a signal that needs no pin.

    Attributes:
        name: ``armed``, or ``state[1]`` for a bit of a bus.
        location: Where it is declared.
        described: Where its logic is given.
        form: By what kind of section.
        register: How it is clocked; ``None`` for a combinational signal.
    """

    name: str
    location: Location
    described: Location
    form: Form
    register: Registering | None = None


@dataclass(frozen=True, slots=True)
class DontCareSource:
    """Input combinations that some outputs do not care about, and why.

    Attributes:
        reason: ``never``, ``others``, ``x`` (rows that say so), ``dont_care`` (minterm lists),
            ``elsewhere`` (address maps), ``unused`` (codes that no state has) or ``disabled`` (the
            output does not drive its pin).
        cubes: The combinations; the output mask of each cube tells the outputs concerned. The
            sources of one output have no combination in common, and together are exactly the
            combinations that `Behaviour.function` leaves open for it.
    """

    reason: Literal["never", "others", "x", "dont_care", "elsewhere", "unused", "disabled"]
    cubes: Cover


@dataclass(frozen=True, slots=True)
class StateRow:
    """What happens in one state for some input combinations.

    Attributes:
        state: Index of the state.
        inputs: The possible combinations, over all inputs of the design, without literals of the
            present values that hold this state.
        then: Index of the next state.
        on: Mask of the outputs that are 1 meanwhile; bit ``j`` belongs to
            `StateTable.outputs` ``[j]``.
        off: Mask of those that are 0. The rest does not matter.
        location: Where the row stands.
    """

    state: int
    inputs: Cover
    then: int
    on: int
    off: int
    location: Location


@dataclass(frozen=True, slots=True)
class StateTable:
    """A finite state machine: next states and combinational outputs of states and inputs.

    For every state the rows hold all possible input combinations; rows that have one in common
    say the same.

    Attributes:
        name: Of the state as a whole.
        bits: Names of the registered bits that hold it, from the highest down.
        states: Names in order of declaration.
        start: Index of the state at power-up.
        style: How the codes were asked for.
        codes: One text of ``0`` and ``1`` for each state, highest bit first; ``None``: free, and
            not yet chosen. Those of style ``free`` that are not ``None`` were chosen.
        unused_start: In codes that no state has, everything is as in the state at power-up;
            otherwise nothing is demanded there.
        rows: All that happens.
        outputs: Names of the output and inner bits that the table describes besides the state.
        location: Where the table stands.
    """

    name: str
    bits: tuple[str, ...]
    states: tuple[str, ...]
    start: int
    style: CodeStyle
    codes: tuple[str, ...] | None
    unused_start: bool
    rows: tuple[StateRow, ...]
    outputs: tuple[str, ...]
    location: Location


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
        inputs: In order of declaration; behind them those that are read from bidirectional pins,
            and last the present values of registered signals, in order of outputs and then inner
            signals.
        outputs: In order of declaration.
        function: ON-set and OFF-set of all outputs, with combinational inner signals folded in. Of
            a registered output it is the next value.
        never: Impossible inputs (output masks mean nothing).
        dont_cares: Where the freedom comes from.
        places: For each device name, the pins decided beforehand.
        warnings: What is doubtful in the design, in order of place.
        inner: Signals without a pin, in order of declaration.
        inner_function: ON-set and OFF-set of these, over the same inputs; next values likewise.
        named: For each output and inner signal whose description or enable names others, these
            others (outputs and inner signals, not inputs), in order of declaration. There is no
            ring among them: what an enable names in a ring is left out here, and folded in.
        signature: Text for the device's signature fuses; ``None`` if not given.
        signature_at: Where it stands; ``None`` if the design file does not give it.
        max_delay: The longest delay of any output, in ns; ``None`` where nothing is asked.
        machines: State tables, with the codes that `function` rests on.
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
    machines: tuple[StateTable, ...] = ()

    @property
    def registered(self) -> tuple[Output | Inner, ...]:
        """The clocked bits, in the order in which their present values follow the inputs."""
        bits: tuple[Output | Inner, ...] = (*self.outputs, *self.inner)
        return tuple(bit for bit in bits if bit.register is not None)

    @property
    def input_names(self) -> tuple[str, ...]:
        return tuple(i.name for i in self.inputs)

    @property
    def output_names(self) -> tuple[str, ...]:
        return tuple(o.name for o in self.outputs)
