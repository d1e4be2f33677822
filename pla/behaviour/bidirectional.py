"""Outputs that would hold themselves through what is read at their own pins."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from pla.behaviour.rings import where_it_matters

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from pla.behaviour.description import Claims
    from pla.behaviour.model import Enabling
    from pla.behaviour.signals import Signals
    from pla.errors import Diagnostics, Location
    from pla.logic.cubes import Cover
    from pla.logic.function import Function

__all__ = ["report_holding"]


@dataclass(frozen=True, slots=True)
class _Holding:
    """A bit whose value or enable changes with the level at its own pin.

    Attributes:
        what: ``value`` or ``enable``.
        output: The bit's name.
        reads: The name of what is read at its pin.
        example: An input combination at which it does, as far as it matters: point and mask.
        at: Where that is described.
    """

    what: str
    output: str
    reads: str
    example: tuple[int, int]
    at: Location


def report_holding(
    function: Function,
    enables: Mapping[str, Enabling],
    signals: Signals,
    claims: Claims,
    diagnostics: Diagnostics,
) -> frozenset[str]:
    """Report every bidirectional bit whose value or enable depends on its own pin.

    Args:
        function: The outputs, which are free while they do not drive their pins.
        enables: By the name of the output.
        signals: What is declared.
        claims: Where each output is described.
        diagnostics: Takes one error for the bits that are described at one place.

    Returns:
        The names of these bits.
    """
    groups: dict[tuple[str, Location], list[_Holding]] = {}
    for holding in _holding(function, enables, signals, claims):
        groups.setdefault((holding.what, holding.at), []).append(holding)
    for group in groups.values():
        first = group[0]
        bits = ", ".join(holding.output for holding in group)
        read = ", ".join(holding.reads for holding in group)
        its = "its" if len(group) == 1 else "their"
        diagnostics.error(
            "HOLDS-ITSELF",
            f"the {first.what} of {bits} depends on {read}, the level at {its} own pin, for "
            f"example at {signals.show_point(*first.example)}: driven, the pin would hold itself "
            "or swing",
            first.at,
            "an output may depend on what other pins read, and on its own pin only while it does "
            "not drive it",
        )
    return frozenset(holding.output for group in groups.values() for holding in group)


def _holding(
    function: Function, enables: Mapping[str, Enabling], signals: Signals, claims: Claims
) -> Iterator[_Holding]:
    for signal in signals.outputs:
        enable = enables.get(signal.name)
        if enable is None or signal.reads is None:
            continue
        reads = signals.by_name[signal.reads]
        names = zip(signal.positions, signal.bit_names(), strict=True)
        read = zip(reads.positions, reads.bit_names(), strict=True)
        for (bit, output), (position, pin) in zip(names, read, strict=True):
            sets = {
                "value": (function.on.of_output(bit), function.off.of_output(bit)),
                "enable": (enable.on, enable.off),
            }
            for what, (on, off) in sets.items():
                if what == "value" and signal.registered:
                    continue  # the pin follows at the clock edge only
                example = _change(on, off, position)
                if example is None:
                    continue
                at = enable.location
                if what == "value":
                    if bit not in claims.places:  # pragma: no cover - then it has no value
                        continue
                    at = claims.places[bit][0]
                yield _Holding(what, output, pin, example, at)


def _change(on: Cover, off: Cover, position: int) -> tuple[int, int] | None:
    """A combination of the other inputs at which one input alone turns 1 into 0: point and mask."""
    for cube in where_it_matters(on, off, position):
        return cube.ones, cube.ones | cube.zeros
    return None
