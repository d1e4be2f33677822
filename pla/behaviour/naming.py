"""Which outputs and inner signals name which others."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable

    from pla.behaviour.signals import Signals

__all__ = ["Needs", "named_by"]

Needs = tuple[tuple[int, ...], tuple[int, ...]]
"""Described bits by position, and the bits that all of them name."""


def named_by(
    descriptions: Iterable[Needs], enables: Iterable[Needs], signals: Signals
) -> dict[str, tuple[str, ...]]:
    """For each bit that names others, these in order of declaration, without rings.

    Descriptions make no rings, else they could not be worked out. An enable may: it speaks of what
    an output is described to be, whether or not that drives its pin. What would close a ring is
    left out, so that everything that is named can be had before the bit that names it.
    """
    found: dict[int, set[int]] = {}
    for bits, needs in descriptions:
        for bit in bits if needs else ():
            found.setdefault(bit, set()).update(needs)
    for bits, needs in enables:
        for bit in bits:
            for needed in needs:
                if bit not in _reached(needed, found):
                    found.setdefault(bit, set()).add(needed)
    names = signals.described_names
    return {names[bit]: tuple(names[n] for n in sorted(found[bit])) for bit in sorted(found)}


def _reached(start: int, named: dict[int, set[int]]) -> set[int]:
    """A bit and all that it names, directly or not."""
    waiting, seen = [start], set[int]()
    while waiting:
        bit = waiting.pop()
        if bit not in seen:
            seen.add(bit)
            waiting += named.get(bit, ())
    return seen
