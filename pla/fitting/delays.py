"""The longest ways through the array: passes, and how long they take."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterator
    from fractions import Fraction

    from pla.fitting.model import Plan
    from pla.logic.cubes import Cube

__all__ = ["LongestWays", "late_outputs"]


@dataclass(frozen=True)
class LongestWays:
    """The ways from the inputs to the outputs of a plan.

    A signal that is fed back lengthens the way of whatever reads it, and so does the level at a
    bidirectional pin, which is the output's own while that drives. Outputs that never drive at
    once do not wait for each other by way of their pins.

    Attributes:
        plan: The plan.
    """

    plan: Plan

    @cached_property
    def passes(self) -> tuple[int, ...]:
        """For each output of the laid out behaviour the passes through the array."""
        found: dict[int, int] = {}

        def visit(j: int, before: frozenset[int]) -> int:
            if j not in found:
                way = before | {j}
                further = [visit(k, way) for k, _ in self._sources(j) if k not in way]
                found[j] = 1 + max(further, default=0)
            return found[j]

        return tuple(visit(j, frozenset()) for j in range(len(self.plan.outputs)))

    @cached_property
    def worst(self) -> tuple[Fraction | None, ...]:
        """For each of them the longest time from an input, in ns; ``None`` without figures."""
        timing = self.plan.device.timing
        if timing.tpd is None:
            return (None,) * len(self.plan.outputs)
        found: dict[int, Fraction] = {}

        def visit(j: int, before: frozenset[int]) -> Fraction:
            if j not in found and timing.tpd is not None:
                way = before | {j}
                further = [
                    visit(k, way) + self._step(outside)
                    for k, outside in self._sources(j)
                    if k not in way
                ]
                found[j] = max([timing.tpd, *further])
            return found[j]

        return tuple(visit(j, frozenset()) for j in range(len(self.plan.outputs)))

    def switched(self, output: int, figure: Fraction | None) -> Fraction | None:
        """From an input to an output that is enabled or disabled.

        Args:
            output: An output with an enable.
            figure: What the device gives for one pass, in ns.
        """
        timing, placed = self.plan.device.timing, self.plan.outputs[output].enable
        if figure is None or placed is None:
            return None
        ways = [(k, outside) for k, outside in self._read_by(placed.cube) if k != output]
        if not ways:
            return figure
        if timing.tpd is None:
            return None
        starts = [self.worst[k] for k, _ in ways]
        return figure + max(
            (start or timing.tpd) + self._step(outside) - timing.tpd
            for start, (_, outside) in zip(starts, ways, strict=True)
        )

    def _step(self, outside: bool) -> Fraction:
        """What a further pass adds: by a feedback line, or out to a pin and in again."""
        timing = self.plan.device.timing
        if timing.tpd is None:  # pragma: no cover - nobody asks without figures
            raise ValueError("the device gives no figures")
        inside = timing.tfb if timing.tfb is not None else timing.tpd
        return max(inside, timing.tpd) if outside else inside

    def _sources(self, output: int) -> Iterator[tuple[int, bool]]:
        """Outputs that an output waits for, and whether by way of a pin."""
        placed = self.plan.outputs[output]
        own = placed.enable.cube if placed.enable is not None else None
        for cube in self.plan.minimum.cover.of_output(output):
            for k, outside in self._read_by(cube):
                other = self.plan.outputs[k].enable
                apart = own is not None and other is not None and not own.meets(other.cube)
                if k != output and not (apart and k in self._bidirectional):
                    yield k, outside
        if own is not None:
            yield from ((k, outside) for k, outside in self._read_by(own) if k != output)

    @cached_property
    def _bidirectional(self) -> frozenset[int]:
        names = {signal.read_from for signal in self.plan.behaviour.inputs}
        return frozenset(out.index for out in self.plan.outputs if out.name in names)

    def _read_by(self, cube: Cube) -> Iterator[tuple[int, bool]]:
        """Outputs whose sum or pin a term has a literal of, and whether of the pin."""
        holder = {out.cell.key: out.index for out in self.plan.outputs}
        named = {out.name: out.index for out in self.plan.outputs}
        lines = self.plan.lines
        for signal in self.plan.inputs:
            if not (cube.ones | cube.zeros) >> signal.index & 1:
                continue
            read_from = self.plan.behaviour.inputs[signal.index].read_from
            if read_from is not None:
                yield named[read_from], True
            elif signal.fed_by is not None:
                used = [lines[c] for c in signal.columns if c is not None]
                yield (
                    holder[signal.fed_by],
                    any(line is not None and line.kind == "pin" for line in used),
                )


def late_outputs(plan: Plan) -> list[tuple[str, Fraction, Fraction]]:
    """Outputs that may take longer than the design allows: name, longest time, what is allowed."""
    design, worst = plan.design, LongestWays(plan).worst
    found = []
    for j, output in enumerate(design.outputs):
        allowed = output.max_delay if output.max_delay is not None else design.max_delay
        needs = worst[j]
        if allowed is not None and needs is not None and needs > allowed:
            found.append((output.name, needs, allowed))
    return found
