"""Whether an array, read from its fuses alone, does what a design asks for."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Generic, Literal, TypeVar

from pla.fuses.evaluate import Outside, evaluate
from pla.fuses.questions import ByCubes, BySimulation
from pla.fuses.recover import recover
from pla.fuses.undefined import nearest_ring, why_undefined
from pla.logic.cubes import Cover
from pla.logic.dense import MAX_DENSE_INPUTS

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from pla.behaviour.model import Behaviour, Output
    from pla.fitting.model import PlacedOutput, Plan
    from pla.fuses.evaluate import Evaluated
    from pla.fuses.fusemap import FuseMap
    from pla.fuses.questions import Questions
    from pla.fuses.recover import Realised

__all__ = ["Counterexample", "Proof", "prove"]

V = TypeVar("V")

Fault = Literal["value", "drive", "undefined", "contention", "held", "reads", "mode"]


@dataclass(frozen=True, slots=True)
class Counterexample:
    """An input combination at which the array is not what the design asks for.

    Attributes:
        output: Name of the output, or of the input whose pin is at fault; ``""`` if all are.
        point: Asserted values of the inputs, bit ``i`` for input ``i``; ``None`` if the output
            depends on something that is no input of the design.
        expected: Asserted value that the design demands, if there is one combination and it is the
            value that is wrong.
        text: In words.
        fault: ``value``: a wrong value. ``drive``: the pin is driven where it must not be, or not
            driven where it must be. ``undefined``: there is no value. ``contention``: a pin that
            serves as an input is driven by the part. ``held``: it depends on itself by way of
            bidirectional pins. ``reads``: an input is not on the pin that it reads. ``mode``:
            the fuses select another device-wide mode.
    """

    output: str
    point: int | None
    expected: int | None
    text: str
    fault: Fault = "value"


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

    Up to 16 inputs the array is simulated pin by pin on every input combination; beyond that, its
    terms are put together as cubes and compared with the design. Of the plan only the design, the
    device and the pins are looked at, never the cover.

    The level at a bidirectional pin is what the design reads there. It is tried with both values
    also while the part drives the pin, when it really has only one of them; so a value that the
    design promises for either is shown for the true one.
    """
    realised = recover(plan.device, fuses)
    n = len(plan.design.inputs)
    if n <= MAX_DENSE_INPUTS:
        return _prove(plan, realised, BySimulation(n))
    return _prove(plan, realised, ByCubes(n))


def _prove(plan: Plan, realised: Realised, road: Questions[V]) -> Proof:
    found = next(_mistaken(plan, realised), None)
    if found is None:
        found = next(_Comparison(plan, realised, road).faults(), None)
    return Proof(road.method, road.cases, found)


def _mistaken(plan: Plan, realised: Realised) -> Iterator[Counterexample]:
    """What is wrong before any level is looked at."""
    for fuse, state in realised.other_mode:
        text = (
            f"fuse {fuse} is {1 - state}, which selects another device-wide mode than "
            f"{plan.device.name}; its own needs {state}"
        )
        yield Counterexample("", None, None, text, "mode")
    pin_of = {output.name: output.pin for output in plan.outputs}
    for signal, placed in zip(plan.design.inputs, plan.inputs, strict=False):
        output = signal.read_from
        if output is not None and placed.pin is not None and placed.pin != pin_of[output]:
            text = (
                f"{placed.name} reads pin {placed.pin}, but {output}, whose pin it is to read, "
                f"is on pin {pin_of[output]}"
            )
            yield Counterexample(placed.name, None, None, text, "reads")


@dataclass(frozen=True, slots=True)
class _Comparison(Generic[V]):
    plan: Plan
    realised: Realised
    road: Questions[V]

    def faults(self) -> Iterator[Counterexample]:
        """Everything that differs; first what may be the reason for the rest."""
        made = evaluate(self.realised, self.road.logic, self._outside("free"))
        design = self.plan.design
        placed = self.plan.outputs[: len(design.outputs)]
        yield from self._contention(made)
        for output in placed:
            yield from self._values(made, output)
        for asked, output in zip(design.outputs, placed, strict=True):
            yield from self._driving(made, asked, output)
        yield from self._held()

    def _outside(self, rule: Literal["free", "yields"]) -> dict[int, Outside[V]]:
        """The inputs at their pins, and `rule` where the part drives the pin as well."""
        outside = {
            pin: Outside(self.road.logic.constant(bool(level))) for pin, level in self.plan.tied
        }
        for signal, placed in zip(self.plan.design.inputs, self.plan.inputs, strict=False):
            if placed.pin is not None:
                level = self._level(placed.index)
                both = signal.read_from is not None
                outside[placed.pin] = Outside(level, rule if both else "holds")
        return outside

    def _level(self, index: int) -> V:
        """The level at the pin of an input."""
        asserted = self.road.variable(index)
        low = self.plan.design.inputs[index].active_low
        return self.road.logic.inverse(asserted) if low else asserted

    def _asserted(self, levels: Mapping[int, V], output: PlacedOutput) -> V:
        level = levels[_pin(output)]
        return self.road.logic.inverse(level) if output.active_low else level

    def _values(self, made: Evaluated[V], output: PlacedOutput) -> Iterator[Counterexample]:
        function = self.plan.design.function
        value = self._asserted(made.shown, output)
        for cover, expected in ((function.on, 1), (function.off, 0)):
            point = self.road.failure(cover.of_output(output.index), value, expected)
            if point is None:
                continue
            if self.road.at(value, point) is None:
                text = why_undefined(self.realised, made, self._outside("free"), output)
                at = self._at(point)
                yield Counterexample(output.name, None, None, text + at, "undefined")
            else:
                text = f"{output.name} is {1 - expected} where {self._design} says {expected}"
                yield Counterexample(output.name, point, expected, text + self._at(point))

    def _driving(
        self, made: Evaluated[V], asked: Output, output: PlacedOutput
    ) -> Iterator[Counterexample]:
        n = len(self.plan.design.inputs)
        driven = made.driven[_pin(output)]
        on, off = Cover.universe(n), Cover.of(n)
        if asked.enable is not None:
            on, off = asked.enable.on, asked.enable.off
        for cover, expected in ((on, 1), (off, 0)):
            point = self.road.failure(cover, driven, expected)
            if point is None:
                continue
            says = f"where {self._design} says that it does{'' if expected else ' not'}"
            actual = self.road.at(driven, point)
            if actual is None:
                does = "may or may not drive, by a level that is no input of the design,"
            else:
                does = "drives" if actual else "does not drive"
            text = f"{output.name} {does} pin {output.pin} {says}{self._at(point)}"
            yield Counterexample(output.name, point, None, text, "drive")

    def _contention(self, made: Evaluated[V]) -> Iterator[Counterexample]:
        everywhere = Cover.universe(len(self.plan.design.inputs))
        for signal, placed in zip(self.plan.design.inputs, self.plan.inputs, strict=False):
            if placed.pin not in made.driven or signal.read_from is not None:
                continue
            point = self.road.failure(everywhere, made.driven[placed.pin], 0)
            if point is not None:
                text = (
                    f"the part drives pin {placed.pin}, which {placed.name} drives from outside"
                    f"{self._at(point)}"
                )
                yield Counterexample(placed.name, point, None, text, "contention")

    def _held(self) -> Iterator[Counterexample]:
        """Rings that close by way of bidirectional pins while the part drives these.

        Each pin read alone is free of them. So the true levels are looked at as well: where the
        part drives, the outside lets go.
        """
        inputs = zip(self.plan.design.inputs, self.plan.inputs, strict=False)
        read = {p.pin: p.index for s, p in inputs if s.read_from is not None and p.pin is not None}
        if not read:
            return
        made = evaluate(self.realised, self.road.logic, self._outside("yields"))
        if not made.rings:
            return
        # Values of an input that its pin cannot have while the part drives it.
        logic, untrue = self.road.logic, []
        for pin, index in read.items():
            level, given = made.levels[pin], self._level(index)
            untrue.append(logic.conjunction([level, logic.inverse(given)]))
            untrue.append(logic.conjunction([logic.inverse(level), given]))
        excepted = logic.disjunction(untrue)
        function = self.plan.design.function
        for asked, output in zip(self.plan.design.outputs, self.plan.outputs, strict=False):
            valued = function.on.of_output(output.index) + function.off.of_output(output.index)
            switched = valued if asked.enable is None else asked.enable.on + asked.enable.off
            pin = _pin(output)
            for demanded, level in ((valued, made.shown[pin]), (switched, made.driven[pin])):
                point = self.road.unsettled(demanded, level, excepted)
                if point is not None:
                    ring = nearest_ring(self.realised, made, output) or "bidirectional pins"
                    text = (
                        f"{output.name} depends on itself by way of {ring}, which drive each other "
                        f"at the same time{self._at(point)}"
                    )
                    yield Counterexample(output.name, point, None, text, "held")

    @property
    def _design(self) -> str:
        return self.plan.design.name or "the design"

    def _at(self, point: int) -> str:
        return _point(self.plan.design, point)


def _pin(output: PlacedOutput) -> int:
    if output.pin is None:  # pragma: no cover - outputs of a design have pins
        raise ValueError(f"{output.name} has no pin")
    return output.pin


def _point(design: Behaviour, point: int) -> str:
    if not design.inputs:
        return ""
    values = " ".join(f"{s.name}={point >> i & 1}" for i, s in enumerate(design.inputs))
    return f", at {values}"
