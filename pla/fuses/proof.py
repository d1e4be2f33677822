"""Whether an array, read from its fuses alone, does what a design asks for."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np

from pla.fuses.recover import recover
from pla.fuses.simulate import all_combinations, simulate
from pla.logic.cubes import Cover, Cube
from pla.logic.dense import MAX_DENSE_INPUTS
from pla.logic.equivalence import find_difference

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from pla.behaviour.model import Behaviour
    from pla.fitting.model import PlacedInput, PlacedOutput, Plan
    from pla.fuses.fusemap import FuseMap
    from pla.fuses.recover import Realised

__all__ = ["Counterexample", "Proof", "prove"]


@dataclass(frozen=True, slots=True)
class Counterexample:
    """An input combination at which the array is not what the design asks for.

    Attributes:
        output: Name of the output.
        point: Asserted values of the inputs, bit ``i`` for input ``i``; ``None`` if the output
            depends on something that is no input of the design.
        expected: Asserted value that the design demands, if there is one combination.
        text: In words.
    """

    output: str
    point: int | None
    expected: int | None
    text: str


@dataclass(frozen=True, slots=True)
class Proof:
    """The outcome of comparing fuses with a design.

    Attributes:
        method: ``simulation`` of every input combination, or ``cubes``.
        cases: Input combinations simulated, or cubes compared.
        counterexample: ``None`` if they are equal on all that is specified.
    """

    method: Literal["simulation", "cubes"]
    cases: int
    counterexample: Counterexample | None

    @property
    def equal(self) -> bool:
        return self.counterexample is None


def prove(plan: Plan, fuses: FuseMap) -> Proof:
    """Compare the array that the fuses make with the design of the plan.

    Up to 16 inputs the array is simulated pin by pin on every input combination; beyond that,
    its terms are compared with the design as cubes. Of the plan only the behaviour, the device and
    the pins are looked at, never the cover.
    """
    realised = recover(plan.device, fuses)
    if len(plan.inputs) <= MAX_DENSE_INPUTS:
        return _by_simulation(plan, realised)
    return _by_cubes(plan, realised)


def _by_simulation(plan: Plan, realised: Realised) -> Proof:
    count = len(plan.inputs)
    combinations = 1 << count
    levels = {}
    for placed in plan.inputs:
        if placed.pin is not None:
            asserted = all_combinations(count, placed.index)
            levels[placed.pin] = ~asserted if placed.active_low else asserted
    size = max(1, combinations >> 3)
    shown = simulate(realised, levels, size)
    function = plan.behaviour.function
    for output in plan.outputs:
        level = shown[output.pin]
        if level is None:
            return Proof("simulation", combinations, _undefined(output))
        asserted = ~level if output.active_low else level
        bits = np.unpackbits(asserted, bitorder="little")[:combinations].astype(bool)
        for cover, expected in ((function.on, 1), (function.off, 0)):
            demanded = _combinations_of(cover.of_output(output.index))
            wrong = demanded & (bits != bool(expected))
            if wrong.any():
                point = int(wrong.argmax())
                return Proof(
                    "simulation",
                    combinations,
                    _wrong(plan.behaviour, plan.inputs, output, point, expected),
                )
    return Proof("simulation", combinations, None)


def _combinations_of(cover: Cover) -> NDArray[np.bool_]:
    """``bool[2^n]``: which combinations the cover holds; index bit ``i`` is input ``i``."""
    n = cover.n_inputs
    held = np.zeros((2,) * n, dtype=bool)
    for cube in cover:
        # Index bit i is the i-th axis from the end.
        place = tuple(
            1 if cube.ones >> i & 1 else 0 if cube.zeros >> i & 1 else slice(None)
            for i in reversed(range(n))
        )
        held[place] = True
    return held.reshape(-1)


def _by_cubes(plan: Plan, realised: Realised) -> Proof:
    signal_at = {p.pin: p for p in plan.inputs if p.pin is not None}
    function = plan.behaviour.function
    cubes: list[Cube] = []
    sums = {sum_.cell.pin: sum_ for sum_ in realised.sums}
    live = {row.number: row for row in realised.rows if not row.dead}
    complemented = []
    for output in plan.outputs:
        sum_ = sums[output.pin]
        if sum_.mode is None or sum_.mode.pin == "none":
            return Proof("cubes", len(cubes), _undefined(output))
        complemented.append((sum_.mode.pin == "sum'") != output.active_low)
        for number in sum_.rows:
            if number not in live:
                continue
            ones = zeros = 0
            for pin, complement in live[number].lines:
                placed = signal_at.get(pin)
                if placed is None:
                    return Proof("cubes", len(cubes), _undefined(output))
                if placed.active_low == complement:
                    ones |= 1 << placed.index
                else:
                    zeros |= 1 << placed.index
            cubes.append(Cube(ones, zeros, 1 << output.index))
    cover = Cover.of(function.n_inputs, cubes).merged()
    difference = find_difference(cover, complemented, function)
    cases = len(cover) + len(function.on) + len(function.off)
    if difference is None:
        return Proof("cubes", cases, None)
    output = plan.outputs[difference.output]
    return Proof(
        "cubes",
        cases,
        _wrong(plan.behaviour, plan.inputs, output, difference.point, difference.expected),
    )


def _undefined(output: PlacedOutput) -> Counterexample:
    text = (
        f"pin {output.pin} ({output.name}) depends on a pin that carries no input of the design, "
        "or its cell is in no mode that shows its sum"
    )
    return Counterexample(output.name, None, None, text)


def _wrong(
    behaviour: Behaviour,
    inputs: Sequence[PlacedInput],
    output: PlacedOutput,
    point: int,
    expected: int,
) -> Counterexample:
    values = " ".join(f"{p.name}={point >> p.index & 1}" for p in inputs)
    text = f"{output.name} is {1 - expected} where {behaviour.name or 'the design'} says {expected}"
    return Counterexample(output.name, point, expected, f"{text}, at {values}")
