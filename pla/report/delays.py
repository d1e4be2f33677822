"""Passes through the array and delays of the outputs of a plan."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.fitting.delays import LongestWays
from pla.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence
    from fractions import Fraction

    from pla.fitting.model import PlacedOutput, Plan

__all__ = ["OutputDelay", "delay_table", "nanoseconds", "output_delays", "plain_number"]


@dataclass(frozen=True, slots=True)
class OutputDelay:
    """How long an output takes; all in ns.

    Attributes:
        output: Its name.
        passes: Passes through the array on the longest way to it.
        worst: From any input to the output; ``None`` where the device file gives no figure.
        asked: The longest delay that the design allows; ``None`` where it asks for none.
        enabled: From an input to the driven output, for one that can be switched off.
        disabled: From an input to high impedance, likewise.
    """

    output: str
    passes: int
    worst: Fraction | None
    asked: Fraction | None
    enabled: Fraction | None = None
    disabled: Fraction | None = None

    @property
    def late(self) -> bool:
        """Whether it is known to take longer than it may."""
        return self.worst is not None and self.asked is not None and self.worst > self.asked


def output_delays(plan: Plan) -> tuple[OutputDelay, ...]:
    """For each output of the design in order; inner signals are on the way to these."""
    return tuple(_delay_of(plan, placed) for placed in plan.outputs[: len(plan.design.outputs)])


def _delay_of(plan: Plan, placed: PlacedOutput) -> OutputDelay:
    design, timing = plan.design, plan.device.timing
    output = design.outputs[placed.index]
    passes, ways = _passes(plan, placed), LongestWays(plan)
    asked = output.max_delay if output.max_delay is not None else design.max_delay
    enabled = disabled = None
    if placed.enable is not None:
        enabled, disabled = (
            ways.switched(placed.index, figure) for figure in (timing.ten, timing.tdis)
        )
    return OutputDelay(output.name, passes, ways.worst[placed.index], asked, enabled, disabled)


def _passes(plan: Plan, placed: PlacedOutput) -> int:
    return plan.passes[placed.index] if plan.passes else 1


def delay_table(delays: Sequence[OutputDelay]) -> Table | None:
    """Passes and delay of each output; ``None`` where there is nothing to tell."""
    if all(d.passes == 1 and d.worst is None and d.asked is None for d in delays):
        return None
    switched = any(d.enabled is not None or d.disabled is not None for d in delays)
    width = None if switched else 4
    headings = ("output", "passes", "worst delay", "may be", "enable", "disable")
    return Table(
        "Passes through the array",
        headings[:width],
        tuple(
            (
                d.output,
                str(d.passes),
                _figure(d.worst),
                "–" if d.asked is None else _figure(d.asked),
                "–" if d.enabled is None else _figure(d.enabled),
                "–" if d.disabled is None else _figure(d.disabled),
            )[:width]
            for d in delays
        ),
        aligned="lrrrrr"[:width],
        remarks=tuple(_remarks(delays)),
        wrapped=(0,),
    )


def _remarks(delays: Sequence[OutputDelay]) -> Iterator[str]:
    yield (
        "Passes: how often the longest way from an input to the output goes through the array; "
        "each one after the first takes a feedback line. Delays from the figures of the device "
        "file, from any input to the pin."
    )
    if any(d.worst is None for d in delays):
        yield "The device file gives no delay (tpd), so delays are not known."
    late = [d.output for d in delays if d.late]
    if late:
        yield f"TOO SLOW: {', '.join(late)}."


def _figure(value: Fraction | None) -> str:
    return "not known" if value is None else nanoseconds(value)


def nanoseconds(value: Fraction) -> str:
    """``15 ns``, ``7.5 ns``."""
    return f"{plain_number(value)} ns"


def plain_number(value: Fraction) -> int | float:
    """A number without a fraction as an integer."""
    return int(value) if value.denominator == 1 else float(value)
