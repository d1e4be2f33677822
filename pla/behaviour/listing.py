"""Who wins: from listed input combinations to what each output must do everywhere.

Tables, minterm lists and address maps all come down to a `Listing`: rows of cubes with values, and
what happens in all other places. ``[never]`` wins over rows, rows over ``others``; so rows that
differ only where inputs are impossible do not contradict each other.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Literal

import numpy as np

from pla.behaviour.conflicts import find_conflicts
from pla.logic import algebra
from pla.logic.cubes import Cover, Cube, Words

if TYPE_CHECKING:
    from collections.abc import Callable

    from pla.behaviour.signals import Signals
    from pla.errors import Diagnostics, Location

__all__ = ["Listing", "ListingBuilder", "Row", "Solved", "Values", "possible", "resolve"]

Values = tuple[int, int, int]
"""Masks of the outputs that are 1, 0, and don't care."""

Reason = Literal["never", "others", "x", "dont_care", "elsewhere", "unused", "disabled"]

_MOST_SHOWN = 10
_MOST_CUBES = 1 << 18


@dataclass(frozen=True, slots=True)
class Row:
    """Values for some input combinations, and where they are given.

    Attributes:
        values: What the outputs do.
        place: Where it stands; called only to report something.
        is_written: A user wrote it; otherwise it follows from something else.
    """

    values: Values
    place: Callable[[], Location]
    is_written: bool = True


@dataclass(frozen=True, slots=True)
class Solved:
    """What some outputs do, outside of impossible inputs.

    Attributes:
        on: Where the outputs of each cube's mask are 1.
        off: Where they are 0.
        open: Where they are free, and why.
    """

    on: Cover
    off: Cover
    open: tuple[tuple[Reason, Cover], ...] = ()


@dataclass(frozen=True, slots=True)
class Listing:
    """Listed input combinations.

    Attributes:
        where: The heading, for errors about the whole.
        what: What the rows are called: ``row``, ``entry``, ``select``.
        inputs: Mask of the inputs that are looked at.
        outputs: Mask of the outputs described; every row gives all of them a value.
        ones: ``uint64[k]``, the literals of each cube.
        zeros: ``uint64[k]``, likewise the complements.
        owner: ``intp[k]``, the row of each cube.
        rows: The rows.
        others: Values of the possible inputs not listed.
        reasons: What makes a don't care of a row, and of `others`.
        others_key: How the user says what the others are.
    """

    where: Location
    what: str
    inputs: int
    outputs: int
    ones: Words
    zeros: Words
    owner: np.ndarray[tuple[int], np.dtype[np.intp]]
    rows: tuple[Row, ...]
    others: Values | None
    reasons: tuple[Reason, Reason]
    others_key: str


@dataclass(slots=True)
class ListingBuilder:
    """Collects the cubes of a listing."""

    ones: list[int] = field(default_factory=list)
    zeros: list[int] = field(default_factory=list)
    owner: list[int] = field(default_factory=list)
    rows: list[Row] = field(default_factory=list)

    def add(self, cubes: list[tuple[int, int]], row: Row) -> None:
        number = len(self.rows)
        self.rows.append(row)
        for ones, zeros in cubes:
            self.ones.append(ones)
            self.zeros.append(zeros)
            self.owner.append(number)

    def build(
        self,
        where: Location,
        what: str,
        inputs: int,
        outputs: int,
        others: Values | None,
        reasons: tuple[Reason, Reason],
        others_key: str,
    ) -> Listing:
        return Listing(
            where=where,
            what=what,
            inputs=inputs,
            outputs=outputs,
            ones=np.array(self.ones, dtype=np.uint64),
            zeros=np.array(self.zeros, dtype=np.uint64),
            owner=np.array(self.owner, dtype=np.intp),
            rows=tuple(self.rows),
            others=others,
            reasons=reasons,
            others_key=others_key,
        )


def resolve(
    listing: Listing, never: Cover, signals: Signals, diagnostics: Diagnostics
) -> Solved | None:
    """Apply the order of precedence.

    Args:
        listing: What the user lists.
        never: Impossible inputs.
        signals: For the words of messages.
        diagnostics: Takes rows that contradict each other, inputs left open (errors), and values
            that can never occur (warnings).

    Returns:
        ``None`` if there was an error.
    """
    n = signals.n_inputs
    cubes = Cover(n, listing.ones, listing.zeros, np.ones(len(listing.ones), dtype=np.uint64))
    cubes, owner = possible(cubes, listing.owner, never)
    _warn_of_idle_rows(listing, owner, diagnostics)
    values = np.array([row.values for row in listing.rows], dtype=np.uint64).reshape(-1, 3)
    good = _report_conflicts(listing, cubes, owner, values, signals, diagnostics)
    try:
        rest = algebra.complement(cubes.feeding(1) + never.feeding(1), _MOST_CUBES)
    except algebra.TooManyCubesError:
        diagnostics.error(
            "LISTING-LARGE",
            f"all input combinations that are not listed need more than {_MOST_CUBES} cubes",
            listing.where,
            "look at fewer inputs at once, or split the outputs over several descriptions",
        )
        return None
    if listing.others is None and len(rest):
        _report_open(listing, rest, signals, diagnostics)
        good = False
    if not good:
        return None
    on, off, free = (
        Cover(n, cubes.ones, cubes.zeros, values[owner, column]).fed() for column in range(3)
    )
    others_free = Cover.of(n)
    if listing.others is not None:
        others_on, others_off, open_mask = listing.others
        on += rest.feeding(others_on).fed()
        off += rest.feeding(others_off).fed()
        others_free = rest.feeding(open_mask).fed()
    sources = zip(listing.reasons, (free, others_free), strict=True)
    return Solved(
        algebra.compact(on),
        algebra.compact(off),
        tuple((reason, algebra.compact(cover)) for reason, cover in sources if len(cover)),
    )


def possible(
    cubes: Cover, owner: np.ndarray[tuple[int], np.dtype[np.intp]], never: Cover
) -> tuple[Cover, np.ndarray[tuple[int], np.dtype[np.intp]]]:
    """The parts of the cubes outside [never], and whose they are."""
    if not len(never) or not len(cubes):
        return cubes, owner
    n = cubes.n_inputs
    meets = np.zeros(len(cubes), dtype=bool)
    inside = np.zeros(len(cubes), dtype=bool)
    for impossible in never:
        ones, zeros = np.uint64(impossible.ones), np.uint64(impossible.zeros)
        meets |= cubes.meeting(impossible)
        inside |= (ones & ~cubes.ones == 0) & (zeros & ~cubes.zeros == 0)
    parts, owners = [cubes.take(~meets)], [owner[~meets]]
    for index in np.flatnonzero(meets & ~inside):
        cube = Cube(int(cubes.ones[index]), int(cubes.zeros[index]))
        part = algebra.difference(Cover.of(n, [cube]), never)
        parts.append(part)
        owners.append(np.full(len(part), owner[index], dtype=np.intp))
    return Cover.joined(n, parts), np.concatenate(owners)


def _warn_of_idle_rows(
    listing: Listing,
    owner: np.ndarray[tuple[int], np.dtype[np.intp]],
    diagnostics: Diagnostics,
) -> None:
    alive = np.zeros(len(listing.rows), dtype=bool)
    alive[owner] = True
    listed = np.zeros(len(listing.rows), dtype=bool)
    listed[listing.owner] = True
    idle = [
        i
        for i in np.flatnonzero(listed & ~alive)
        if listing.rows[i].is_written and any(listing.rows[i].values[:2])
    ]
    for index in idle[:_MOST_SHOWN]:
        diagnostics.warning(
            "ROW-IMPOSSIBLE",
            f"this {listing.what} gives a value, but all its inputs are impossible by [never]",
            listing.rows[index].place(),
            "[never] wins: the value is not used",
        )
    if len(idle) > _MOST_SHOWN:
        diagnostics.warning(
            "ROW-IMPOSSIBLE",
            f"{len(idle) - _MOST_SHOWN} more of these are impossible by [never]",
            listing.where,
        )


def _report_conflicts(
    listing: Listing,
    cubes: Cover,
    owner: np.ndarray[tuple[int], np.dtype[np.intp]],
    values: np.ndarray[tuple[int, int], np.dtype[np.uint64]],
    signals: Signals,
    diagnostics: Diagnostics,
) -> bool:
    """Whether no two rows contradict each other."""
    conflicts = find_conflicts(cubes, owner, values, _MOST_SHOWN)
    for first, second, point in conflicts:
        one, two = listing.rows[first].values, listing.rows[second].values
        differ = next(
            j
            for j in range(len(signals.described_names))
            if any((a ^ b) >> j & 1 for a, b in zip(one, two, strict=True))
        )
        shown = [
            "1" if v[0] >> differ & 1 else "0" if v[1] >> differ & 1 else "x" for v in (one, two)
        ]
        earlier = listing.rows[first].place()
        example = signals.show_point(point, listing.inputs)
        source = (earlier.source or "").strip()
        diagnostics.error(
            "ROW-CONFLICT",
            f"{signals.described_names[differ]!r} gets two values for {example}: {shown[1]} from "
            f"this {listing.what}, {shown[0]} from the {listing.what} at {earlier}",
            listing.rows[second].place(),
            f"the other is: {source}" if source else None,
        )
    return not conflicts


def _report_open(listing: Listing, rest: Cover, signals: Signals, diagnostics: Diagnostics) -> None:
    mask = listing.inputs
    for cube in rest:
        mask |= cube.ones | cube.zeros
    count = algebra.size(rest) >> (signals.n_inputs - mask.bit_count())
    n = signals.n_inputs
    # The first input is the most significant: the smallest as people count.
    example = min((cube.ones for cube in rest), key=lambda p: f"{p:0{n}b}"[::-1])
    names = signals.show_names(mask)
    many = "combination is" if count == 1 else "combinations are"
    diagnostics.error(
        "OPEN-INPUTS",
        f"{count} possible input {many} not listed (of {names}), for example "
        f"{signals.show_point(example, mask)}",
        listing.where,
        f"list them, or say what all others are: {listing.others_key}",
    )
