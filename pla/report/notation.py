"""Signals and cubes as people write them: products, and cases grouped by bus."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from pla.logic.cubes import Cube

__all__ = ["Group", "case", "groups_of", "listed", "plural", "product", "spans"]

_DECIMAL_BITS = 8  # buses of more bits are addresses, which are written in hexadecimal


@dataclass(frozen=True, slots=True)
class Group:
    """A signal, or the bits of a bus.

    Attributes:
        name: Without brackets.
        first: Index of the first bit among the inputs or outputs.
        bits: Bit numbers from the highest down; empty for a plain signal.
    """

    name: str
    first: int
    bits: tuple[int, ...]

    @property
    def size(self) -> int:
        return len(self.bits) or 1

    @property
    def text(self) -> str:
        """``start``, or ``step[3:0]``."""
        if not self.bits:
            return self.name
        ends = f"{self.bits[0]}:{self.bits[-1]}" if len(self.bits) > 1 else str(self.bits[0])
        return f"{self.name}[{ends}]"


def groups_of(names: Sequence[str]) -> tuple[Group, ...]:
    """The signals of names such as ``start`` and ``step[3]``; bits of a bus stand together."""
    found: list[Group] = []
    for index, name in enumerate(names):
        stem, bracket, bit = name.partition("[")
        if not bracket:
            found.append(Group(name, index, ()))
        elif found and found[-1].bits and found[-1].name == stem:
            last = found[-1]
            found[-1] = Group(stem, last.first, (*last.bits, int(bit[:-1])))
        else:
            found.append(Group(stem, index, (int(bit[:-1]),)))
    return tuple(found)


def product(cube: Cube, names: Sequence[str]) -> str:
    """A term in the notation of equations: ``hatch' armed``; ``1`` without literals."""
    literals = [
        name if cube.ones >> i & 1 else f"{name}'"
        for i, name in enumerate(names)
        if (cube.ones | cube.zeros) >> i & 1
    ]
    return " ".join(literals) or "1"


def case(cube: Cube, groups: Sequence[Group]) -> str:
    """Input combinations by signals, in the notation of tables: ``step=10..11 hatch=1``.

    A bus of which leading bits are fixed is written as a number or a range, any other as bits
    ``0b1-1-``, where ``-`` is either value. Signals that do not matter are left out; nothing is
    left of all combinations, which are called ``any``.
    """
    n = max((group.first + group.size for group in groups), default=0)
    text = cube.text(n)
    parts = []
    for group in groups:
        bits = text[group.first : group.first + group.size]
        if bits.strip("-"):
            parts.append(f"{group.name}={_value(bits, group)}")
    return " ".join(parts) or "any"


def _value(bits: str, group: Group) -> str:
    """The value of a signal or bus from ``1``, ``0`` and ``-`` for each of its bits."""
    if not group.bits:
        return bits
    low, high = group.bits[-1], group.bits[0]
    if "-" in bits.rstrip("-"):
        return f"0b{bits}{'-' * low}"
    first = int(bits.replace("-", "0"), 2) << low
    last = int(bits.replace("-", "1"), 2) << low | ((1 << low) - 1)
    if high < _DECIMAL_BITS:
        return f"{first}" if first == last else f"{first}..{last}"
    digits = high // 4 + 1
    start = f"0x{first:0{digits}X}"
    return start if first == last else f"{start}..0x{last:0{digits}X}"


def listed(words: Sequence[str]) -> str:
    """``a``, ``a and b``, ``a, b and c``."""
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"


def plural(number: int, word: str, words: str | None = None) -> str:
    """``1 term``, ``2 terms``."""
    return f"{number} {word if number == 1 else words or word + 's'}"


def spans(numbers: Iterable[int]) -> str:
    """Ascending numbers, neighbours joined: ``3, 5..7``."""
    parts: list[list[int]] = []
    for number in numbers:
        if parts and parts[-1][1] == number - 1:
            parts[-1][1] = number
        else:
            parts.append([number, number])
    return ", ".join(str(a) if a == b else f"{a}..{b}" for a, b in parts)
