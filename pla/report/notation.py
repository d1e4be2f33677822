"""Signals, products and numbers as people write them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

    from pla.logic.cubes import Cube

__all__ = ["Group", "groups_of", "plural", "product", "span"]

_LOWEST_HEXADECIMAL = 7  # buses that reach this bit are bytes and addresses


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
    def hexadecimal(self) -> bool:
        """Whether numbers of it are written so: it has a bit 7 or a higher one."""
        return bool(self.bits) and self.bits[0] >= _LOWEST_HEXADECIMAL

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


def span(first: int, last: int, group: Group) -> str:
    """A value of a bus, or a range: ``3``, ``2..5``, ``0xC000..0xDFFF``."""
    if group.hexadecimal:
        digits = group.bits[0] // 4 + 1
        ends = [f"0x{value:0{digits}X}" for value in (first, last)]
    else:
        ends = [str(first), str(last)]
    return ends[0] if first == last else "..".join(ends)


def plural(number: int, word: str, words: str | None = None) -> str:
    """``1 term``, ``2 terms``."""
    return f"{number} {word if number == 1 else words or word + 's'}"
