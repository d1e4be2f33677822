"""Checks of a device description as a whole.

A wrong device file scraps parts: every fuse has exactly one use, every pin exactly one role, and
what contradicts itself is said with both places that do.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from itertools import chain
from typing import TYPE_CHECKING

from pla.device.words import beside, order, spans, spare_list

if TYPE_CHECKING:
    from collections.abc import Callable, Collection, Sequence

    from pla.errors import Diagnostics, Location

__all__ = [
    "FuseClaim",
    "PinClaim",
    "check_fuses",
    "check_pins",
    "each_once",
    "spans",
]


@dataclass(frozen=True, slots=True)
class FuseClaim:
    """Fuses that one part of the description says are its own.

    Attributes:
        fuses: Their numbers, unchecked.
        group: Claims of one group are at fault together: one error stands for all of them.
        words: What the fuse at an index of `fuses` is.
        where: The place that says so.
    """

    fuses: Sequence[int]
    group: str
    words: Callable[[int], str]
    where: Callable[[], Location]


@dataclass(frozen=True, slots=True)
class PinClaim:
    """A pin that one part of the description says has this role."""

    pin: int
    role: str
    where: Callable[[], Location]


def each_once(count: int, claims: Sequence[FuseClaim]) -> bool:
    """Whether each of so many fuses has exactly one use."""
    used = sorted(chain.from_iterable(claim.fuses for claim in claims))
    return used == list(range(count))


def check_fuses(
    count: int,
    claims: Sequence[FuseClaim],
    at_count: Location,
    diagnostics: Diagnostics,
    explained: Collection[int] = (),
    said_in: str = "",
) -> None:
    """Report fuses used twice, fuses without a use, and fuses that the device does not have.

    Of the fuses without a use those in `explained` are left out: they were reported elsewhere.
    `said_in` names the file that would have to declare them spare, if that is not plain.
    """
    used = list(chain.from_iterable(claim.fuses for claim in claims))
    before = len(diagnostics.found)
    _report_out_of_range(count, claims, at_count, diagnostics)
    _report_overlaps(claims, diagnostics)
    idle = sorted(set(range(count)).difference(used, explained))
    if idle:
        has, them = ("has", "it does nothing") if len(idle) == 1 else ("have", "they do nothing")
        spare = chain.from_iterable(c.fuses for c in claims if c.group.startswith("spare "))
        diagnostics.error(
            "FUSE-GAP",
            f"{len(idle)} of {count} fuses {has} no use: {spans(idle)}",
            at_count,
            f"if {them}, say so: spare = {spare_list({*spare, *idle})}{said_in}"
            if len(diagnostics.found) == before
            else "correct the other fuse numbers first: some of them may belong here",
        )


def _report_out_of_range(
    count: int, claims: Sequence[FuseClaim], at_count: Location, diagnostics: Diagnostics
) -> None:
    found: dict[str, tuple[FuseClaim, int]] = {}
    number: Counter[str] = Counter()
    for claim in claims:
        for index, fuse in enumerate(claim.fuses):
            if not 0 <= fuse < count:
                found.setdefault(claim.group, (claim, index))
                number[claim.group] += 1
    for group, (claim, index) in found.items():
        diagnostics.error(
            "FUSE-RANGE",
            f"fuse {claim.fuses[index]}, {claim.words(index)}, does not exist: fuses go from 0 to "
            f"{count - 1}, as 'fuses' says{beside(at_count, claim.where())}"
            f"{_likewise(number[group] - 1)}",
            claim.where(),
        )


def _report_overlaps(claims: Sequence[FuseClaim], diagnostics: Diagnostics) -> None:
    first: dict[int, tuple[FuseClaim, int]] = {}
    found: dict[tuple[str, str], tuple[tuple[FuseClaim, int], tuple[FuseClaim, int]]] = {}
    number: Counter[tuple[str, str]] = Counter()
    for claim in claims:
        for index, fuse in enumerate(claim.fuses):
            known = first.setdefault(fuse, (claim, index))
            if known[0] is claim and known[1] == index:
                continue
            key = (known[0].group, claim.group)
            found.setdefault(key, (known, (claim, index)))
            number[key] += 1
    for key, pair in found.items():
        (one, i), (other, k) = sorted(pair, key=lambda use: order(use[0].where()))
        fuse = one.fuses[i]
        diagnostics.error(
            "FUSE-OVERLAP",
            f"fuse {fuse} is {one.words(i)}{beside(one.where(), other.where())} and "
            f"{other.words(k)}{_likewise(number[key] - 1)}",
            other.where(),
        )


def check_pins(
    count: int,
    claims: Sequence[PinClaim],
    at_count: Location,
    diagnostics: Diagnostics,
    said_in: str = "",
) -> None:
    """Report pins with two roles, pins without one, and pins that the device does not have.

    `said_in` names the file that would have to declare them unconnected, if that is not plain.
    """
    first: dict[int, PinClaim] = {}
    for claim in claims:
        if not 1 <= claim.pin <= count:
            diagnostics.error(
                "PIN-RANGE",
                f"pin {claim.pin}, {claim.role}, does not exist: pins go from 1 to {count}, "
                f"as 'pins' says{beside(at_count, claim.where())}",
                claim.where(),
            )
            continue
        known = first.setdefault(claim.pin, claim)
        if known is not claim:
            one, other = sorted((known, claim), key=lambda c: order(c.where()))
            again = f"and {other.role}" if one.role != other.role else "and here again"
            diagnostics.error(
                "PIN-TWICE",
                f"pin {claim.pin} is {one.role}{beside(one.where(), other.where())} {again}",
                other.where(),
                _one_role(one, other),
            )
    idle = [pin for pin in range(1, count + 1) if pin not in first]
    if idle:
        has = "has" if len(idle) == 1 else "have"
        listed = sorted({*idle, *(c.pin for c in claims if c.role == "unconnected")})
        diagnostics.error(
            "PIN-IDLE",
            f"{len(idle)} of {count} pins {has} no role: {spans(idle)}; "
            "expected an input column, a cell or a supply",
            at_count,
            f"if nothing is connected there, say unconnected = {listed}{said_in}",
        )


def _one_role(one: PinClaim, other: PinClaim) -> str:
    base = one.where().file
    if one.role == other.role == "an output" and base != other.where().file:
        return (
            "kinds cannot be taken away: where files that extend others need another split, put "
            "these cells into a kind of their own in the extended file"
        )
    return "a pin has one role"


def _likewise(more: int) -> str:
    if more < 1:
        return ""
    return f"; likewise {more} more fuse{'s' if more > 1 else ''}"
