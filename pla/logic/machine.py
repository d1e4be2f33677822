"""A state machine as a symbolic table, and the function that it becomes once its states have codes.

The states are numbers; what they are called is the business of the reader. State bit ``i`` becomes
input ``n_inputs + i`` and its next value becomes output ``i``; the machine's own outputs follow.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, NamedTuple

import numpy as np

from pla.logic import algebra
from pla.logic.cubes import MAX_INPUTS, MAX_OUTPUTS, Cover, Cube
from pla.logic.function import Function

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["Machine", "Transition", "Unused", "counting", "encoded", "fewest_bits"]

Unused = Literal["start", "x"]


class Transition(NamedTuple):
    """From `state`, at the inputs of a cube (its output mask is not looked at), to `then`."""

    state: int
    when: Cube
    then: int


@dataclass(frozen=True, slots=True)
class Machine:
    """What follows upon each state, and what the outputs are in it.

    Input combinations of a state that no transition names do not care for the next state; those in
    neither cover of a state do not care for its outputs.

    Attributes:
        n_inputs: Inputs of the machine, without the state.
        n_states: At least one; states are ``0 … n_states - 1``.
        start: The state at power-up.
        transitions: Transitions of one state to different states have no combination in common.
        n_outputs: Outputs of the machine, without the next state.
        on: For each state the combinations where the outputs of each cube's mask are 1.
        off: The same for 0.
        unused: What follows upon a code that no state has: the start state, with the outputs of the
            start state, or anything.
    """

    n_inputs: int
    n_states: int
    start: int
    transitions: tuple[Transition, ...]
    n_outputs: int
    on: tuple[Cover, ...]
    off: tuple[Cover, ...]
    unused: Unused

    def __post_init__(self) -> None:
        named = {self.start, *(t.state for t in self.transitions)}
        named |= {t.then for t in self.transitions}
        if not named <= set(range(self.n_states)):
            raise ValueError(f"a state is not among 0 to {self.n_states - 1}")
        if not len(self.on) == len(self.off) == self.n_states:
            raise ValueError("every state needs a cover of its outputs' 1 and one of their 0")


def fewest_bits(n_states: int) -> int:
    """The length of the shortest codes that tell so many states apart; at least one bit."""
    return max(1, (n_states - 1).bit_length())


def counting(machine: Machine) -> tuple[int, ...]:
    """The codes 0, 1, 2 … in order of the states."""
    return tuple(range(machine.n_states))


def encoded(machine: Machine, codes: Sequence[int], bits: int) -> Function:
    """The next values of the state bits, then the outputs, over the inputs and the state bits.

    Args:
        machine: The symbolic table.
        codes: A code for each state; bit ``i`` is state bit ``i``.
        bits: How many state bits there are.

    Raises:
        ValueError: If there is not one code of this length for each state, all different, or the
            function would have more inputs or outputs than masks hold.
    """
    if len(codes) != machine.n_states or len(set(codes)) != len(codes):
        raise ValueError("every state needs a code of its own")
    if not all(0 <= code < 1 << bits for code in codes):
        raise ValueError(f"a code has more than {bits} bits")
    n = machine.n_inputs + bits
    if n > MAX_INPUTS or machine.n_outputs + bits > MAX_OUTPUTS:
        raise ValueError(f"at most {MAX_INPUTS} inputs and {MAX_OUTPUTS} outputs, state included")
    every = (1 << bits) - 1
    at = [Cube(code << machine.n_inputs, (every & ~code) << machine.n_inputs) for code in codes]
    on: list[Cover] = []
    off: list[Cover] = []
    sides = ((on, machine.on, 0), (off, machine.off, every))
    for joined, outputs, inverted in sides:
        moves = [
            Cube(
                at[t.state].ones | t.when.ones,
                at[t.state].zeros | t.when.zeros,
                codes[t.then] ^ inverted,
            )
            for t in machine.transitions
        ]
        joined.append(Cover.of(n, moves))
        joined.extend(
            _placed(cover, cube, n, bits) for cube, cover in zip(at, outputs, strict=True)
        )
    if machine.unused == "start":
        for free in algebra.complement(Cover.of(n, at)):
            for joined, outputs, inverted in sides:
                joined.append(Cover.of(n, [free._replace(outputs=codes[machine.start] ^ inverted)]))
                joined.append(_placed(outputs[machine.start], free, n, bits))
    sets = (Cover.joined(n, joined).fed().merged() for joined in (on, off))
    return Function(n, bits + machine.n_outputs, *sets)


def _placed(cover: Cover, state: Cube, n_inputs: int, bits: int) -> Cover:
    """Outputs of a state, inside the cube of its code."""
    return Cover(
        n_inputs,
        cover.ones | np.uint64(state.ones),
        cover.zeros | np.uint64(state.zeros),
        cover.outputs << np.uint64(bits),
    )
