"""Select lines that answer to one address: bus contention, within a map and across maps."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations, product
from typing import TYPE_CHECKING

from pla.behaviour.values import shown_number, span_cubes
from pla.logic import algebra
from pla.logic.cubes import Cover, Cube

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from pla.behaviour.signals import Field, Signals
    from pla.errors import Diagnostics, Location

__all__ = ["AddressMap", "Select", "report_overlaps", "warn_of_contention"]

_MOST_SHOWN = 10


@dataclass(frozen=True, slots=True)
class Select:
    """A range of addresses to which one output answers.

    Attributes:
        output: The output's name.
        mask: The output as a mask.
        span: The addresses.
        at: Where that is said.
    """

    output: str
    mask: int
    span: range
    at: Location


@dataclass(frozen=True, slots=True)
class AddressMap:
    """One address map, as far as its selects may meet.

    Attributes:
        where: The heading.
        bus: The bits that carry the address.
        selects: In order of the text.
        when: Where the map is enabled (a single-output cover).
        may_overlap: The user wants several outputs to answer.
    """

    where: Location
    bus: Field
    selects: tuple[Select, ...]
    when: Cover
    may_overlap: bool

    def shows(self) -> int:
        """The inputs that the map looks at, as a mask."""
        return self.bus.mask | algebra.support(self.when)


def report_overlaps(
    addresses: AddressMap, never: Cover, signals: Signals, diagnostics: Diagnostics
) -> bool:
    """Report every two outputs of one map that answer to one possible address.

    Returns:
        Whether there are none.
    """
    if addresses.may_overlap:
        return True
    found = 0
    common = algebra.difference(addresses.when, never)
    for first, second in _meeting(addresses.selects):
        if first.mask == second.mask:
            continue
        overlap = _Overlap.of(first, second, addresses.bus, addresses.bus, common)
        if overlap is None:
            continue
        found += 1
        diagnostics.error(
            "SELECT-OVERLAP",
            overlap.message(signals, addresses.shows()),
            overlap.second.at,
            'mend the ranges; overlap = "allow" in the map is for outputs that shall both answer',
        )
        if found == _MOST_SHOWN:
            break
    return not found


def warn_of_contention(
    maps: Iterable[AddressMap], never: Cover, signals: Signals, diagnostics: Diagnostics
) -> None:
    """Warn of outputs of two maps on one bus that answer to one possible address.

    Two maps may well describe one bus for different accesses, so this is doubtful, not wrong.
    """
    found = 0
    ordered = sorted(maps, key=lambda m: (m.where.line or 0, m.where.column or 0))
    for one, two in combinations(ordered, 2):
        if one.may_overlap or two.may_overlap or not one.bus.mask & two.bus.mask:
            continue
        common = algebra.difference(algebra.intersection(one.when, two.when), never)
        for first, second in _meeting_across(one, two) if len(common) else ():
            overlap = _Overlap.of(first, second, one.bus, two.bus, common)
            if overlap is None:
                continue
            if found == _MOST_SHOWN:
                diagnostics.warning(
                    "SELECT-OVERLAP", "more selects of two address maps overlap", second.at
                )
                return
            found += 1
            diagnostics.warning(
                "SELECT-OVERLAP",
                overlap.message(signals, one.shows() | two.shows()),
                overlap.second.at,
                "mend the ranges or 'when', list under [never] what cannot occur together, or say "
                'overlap = "allow" in one of the maps if both shall answer',
            )


@dataclass(frozen=True, slots=True)
class _Overlap:
    """Two selects that meet, in order of the text; `span` is shown if both count alike."""

    first: Select
    second: Select
    span: str
    example: int

    @classmethod
    def of(
        cls, one: Select, two: Select, one_bus: Field, two_bus: Field, common: Cover
    ) -> _Overlap | None:
        """``None`` if they do not meet at an input combination in `common`."""
        n = common.n_inputs
        alike = one_bus.bits == two_bus.bits
        if alike:
            span = range(max(one.span.start, two.span.start), min(one.span.stop, two.span.stop))
            meeting = algebra.intersection(_addresses(one_bus, span, n), common)
        else:
            span = range(0)
            meeting = algebra.intersection(
                _addresses(one_bus, one.span, n), _addresses(two_bus, two.span, n)
            )
            meeting = algebra.intersection(meeting, common)
        if not len(meeting):
            return None
        # The first input is the most significant: the smallest as people count.
        example = min((cube.ones for cube in meeting), key=lambda p: f"{p:0{n}b}"[::-1])
        shown = f" at {_shown_span(one_bus, span)}" if alike else ""
        first, second = sorted((one, two), key=_place)
        return cls(first, second, shown, example)

    def message(self, signals: Signals, mask: int) -> str:
        first, second = self.first, self.second
        return (
            f"{first.output} and {second.output} overlap{self.span}, for example at "
            f"{signals.show_point(self.example, mask)}: {second.output} is selected here, "
            f"{first.output} at {first.at}"
        )


def _place(select: Select) -> tuple[int, int]:
    return select.at.line or 0, select.at.column or 0


def _meeting(selects: Iterable[Select]) -> Iterator[tuple[Select, Select]]:
    """Every two selects whose ranges meet, from the lowest address up."""
    active: list[Select] = []
    for select in sorted(selects, key=lambda s: s.span.start):
        active = [earlier for earlier in active if earlier.span.stop > select.span.start]
        yield from ((earlier, select) for earlier in active)
        active.append(select)


def _meeting_across(one: AddressMap, two: AddressMap) -> Iterator[tuple[Select, Select]]:
    """Selects of two maps that may meet, the first map's first."""
    if one.bus.bits != two.bus.bits:
        yield from product(one.selects, two.selects)
        return
    of_one = {id(select) for select in one.selects}
    for a, b in _meeting((*one.selects, *two.selects)):
        if (id(a) in of_one) != (id(b) in of_one):
            yield (a, b) if id(a) in of_one else (b, a)


def _addresses(bus: Field, span: range, n_inputs: int) -> Cover:
    return Cover.of(n_inputs, (Cube(*masks) for masks in span_cubes(bus, span[0], span[-1])))


def _shown_span(bus: Field, span: range) -> str:
    first, last = (shown_number(bus, address) for address in (span[0], span[-1]))
    return first if first == last else f"{first}..{last}"
