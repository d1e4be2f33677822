"""Input combinations by signals, as few lines as values of buses can be joined to."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import chain
from math import prod
from typing import TYPE_CHECKING

from pla.report.notation import span

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Sequence

    from pla.logic.cubes import Cube
    from pla.report.notation import Group

__all__ = ["Case", "joined_cases"]

_SPANS = 4  # more ranges of one bus than this are not written side by side,
_LONG_SPANS = 2  # of hexadecimal numbers fewer
_SCATTERED = 64  # a bus with more separate values than this stays as bits

Spans = tuple[tuple[int, int], ...]
"""First and last value of each range, ascending, with a gap between any two."""


@dataclass(frozen=True, slots=True)
class Case:
    """A box of input combinations: for each signal or bus the values that it may have.

    Attributes:
        groups: The signals and buses.
        values: For each of them its ranges; or ``1``, ``0`` and ``-`` for each bit where the values
            are too scattered for that. Missing low bits of a bus do not count here.
    """

    groups: tuple[Group, ...]
    values: tuple[Spans | str, ...]

    @property
    def size(self) -> int:
        """How many combinations."""
        return prod(
            1 << held.count("-") if isinstance(held, str) else sum(b - a + 1 for a, b in held)
            for held in self.values
        )

    @property
    def text(self) -> str:
        """In the notation of tables: ``step=10..11,14 hatch=1``.

        Numbers are those of the whole bus; bits ``0b1-1-``, where ``-`` is either value, stand for
        scattered values. Signals that do not matter are left out; nothing is left of all
        combinations, which are called ``any``.
        """
        parts = [
            f"{group.name}={_value(held, group)}"
            for group, held in zip(self.groups, self.values, strict=True)
            if held != _all(group)
        ]
        return " ".join(parts) or "any"

    @property
    def lowest(self) -> tuple[int, ...]:
        """The lowest value of each group, the first group most significant."""
        return tuple(
            int(held.replace("-", "0"), 2) if isinstance(held, str) else held[0][0]
            for held in self.values
        )


def joined_cases(cubes: Iterable[Cube], groups: Sequence[Group]) -> tuple[Case, ...]:
    """Cubes as cases; values of one bus are joined where all else is equal.

    Args:
        cubes: They have no input combination in common.
        groups: All signals and buses.

    Returns:
        The same combinations, each in one case, in order of the lowest. There are never more cases
        than cubes.
    """
    found = [_case(cube, tuple(groups)) for cube in cubes]
    before = len(found) + 1
    while len(found) < before:
        before = len(found)
        for place in sorted(range(len(groups)), key=lambda at: groups[at].size):
            found = _joined_at(place, found)
    return tuple(sorted(found, key=lambda case: case.lowest))


def _case(cube: Cube, groups: tuple[Group, ...]) -> Case:
    text = cube.text(max((group.first + group.size for group in groups), default=0))
    patterns = (text[group.first : group.first + group.size] for group in groups)
    return Case(groups, tuple(map(_held, patterns, groups)))


def _held(bits: str, group: Group) -> Spans | str:
    """The values of a pattern as ranges, unless they would be too many for one line."""
    return tuple(_spans_of(bits)) if _pieces(bits) <= _most(group) else bits


def _most(group: Group) -> int:
    return _LONG_SPANS if group.hexadecimal else _SPANS


def _joined_at(place: int, cases: Sequence[Case]) -> list[Case]:
    """The cases with the values of one group joined where all others are equal."""
    alike: dict[tuple[Spans | str, ...], list[Case]] = {}
    for case in cases:
        rest = case.values[:place] + case.values[place + 1 :]
        alike.setdefault(rest, []).append(case)
    return [case for own in alike.values() for case in _joined(place, own)]


def _joined(place: int, cases: list[Case]) -> Iterator[Case]:
    values = [case.values[place] for case in cases]
    most = _most(cases[0].groups[place])
    lists = _lines((held for held in values if not isinstance(held, str)), most)
    bits = [held for held in values if isinstance(held, str)]
    if bits and sum(map(_pieces, bits)) <= _SCATTERED:
        each = (tuple(_spans_of(v)) if isinstance(v, str) else v for v in values)
        every = _lines(each, most)
        if len(every) <= len(lists) + len(bits):
            lists, bits = every, []
    shown: list[Spans | str] = [*lists, *bits]
    before, after = cases[0].values[:place], cases[0].values[place + 1 :]
    for held in shown:
        yield replace(cases[0], values=(*before, held, *after))


def _lines(parts: Iterable[Spans], most: int) -> list[Spans]:
    """Ranges in order, neighbours joined, not many more than `most` side by side.

    Half as many more are put up with where a line less will do then; lines are filled evenly.
    """
    joined: list[tuple[int, int]] = []
    for first, last in sorted(chain.from_iterable(parts)):
        if joined and joined[-1][1] == first - 1:
            joined[-1] = (joined[-1][0], last)
        else:
            joined.append((first, last))
    lines = max(1, -(-len(joined) // (most + most // 2)))
    each = max(1, -(-len(joined) // lines))
    return [tuple(joined[at : at + each]) for at in range(0, len(joined), each)]


def _pieces(bits: str) -> int:
    """How many ranges the values of a pattern make."""
    return 1 << bits.rstrip("-").count("-")


def _spans_of(bits: str) -> Iterator[tuple[int, int]]:
    head = bits.rstrip("-")
    low = len(bits) - len(head)
    free = [len(head) - 1 - at for at, bit in enumerate(head) if bit == "-"][::-1]
    base = int(head.replace("-", "0") or "0", 2)
    for number in range(1 << len(free)):
        value = base | sum(1 << bit for k, bit in enumerate(free) if number >> k & 1)
        yield value << low, (value + 1 << low) - 1


def _all(group: Group) -> Spans:
    return ((0, (1 << group.size) - 1),)


def _value(held: Spans | str, group: Group) -> str:
    low = group.bits[-1] if group.bits else 0
    if isinstance(held, str):
        return f"0b{held}{'-' * low}"
    return ",".join(span(a << low, (b + 1 << low) - 1, group) for a, b in held)
