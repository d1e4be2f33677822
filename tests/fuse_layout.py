"""Random fuse numbers for the parts of an array, as data sheets have them: in any order.

Fuse numbers are handed out from 0 up; the caller learns which part got which, and the lines of the
device file that say so.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import random


@dataclass
class Need:
    """What wants fuses.

    `links` holds the number of configuration links of each cell, by any key; `or_rows` and `drops`
    are rows of the AND array.
    """

    columns: int
    rows: int
    sums: int = 0
    or_rows: list[int] = field(default_factory=list)
    links: dict[object, int] = field(default_factory=dict)
    drops: list[int] = field(default_factory=list)
    mode_fuses: int = 0
    signature: int = 0


@dataclass
class Layout:
    """Where everything is; `and_lines`, `or_lines` and `drop_lines` are text of the device file."""

    fuses: int = 0
    links: dict[object, list[int]] = field(default_factory=dict)
    mode_fuses: list[int] = field(default_factory=list)
    signature: int = 0
    spare: list[int] = field(default_factory=list)
    and_lines: list[str] = field(default_factory=list)
    or_lines: list[str] = field(default_factory=list)
    drop_lines: list[str] = field(default_factory=list)


class _Numbers:
    """The next free number, with a gap now and then."""

    def __init__(self, rng):
        self.rng, self.next, self.spare = rng, 0, []

    def take(self, count):
        first, self.next = self.next, self.next + count
        return first

    def pad(self, count):
        self.spare += range(self.next, self.next + count)
        self.next += count

    def gap(self):
        if self.rng.random() < 0.25:
            self.pad(self.rng.randint(1, 5))


def lay_out(rng: random.Random, need: Need) -> Layout:
    """Every part somewhere; fuses between them are spare."""
    made, numbers = Layout(), _Numbers(rng)
    inline_or = need.sums > 0 and rng.random() < 0.5
    inline_drop = bool(need.drops) and rng.random() < 0.5

    def array():
        runs = {"and": (need.columns, set(range(need.rows)))}
        if inline_or:
            runs["or"] = (need.sums, set(need.or_rows))
        if inline_drop:
            runs["drop"] = (1, set(need.drops))
        if len(runs) == 1 and rng.random() < 0.25:
            made.and_lines = _by_columns(rng, numbers, need.columns, need.rows)
            return
        found = _by_rows(rng, numbers, need.rows, runs)
        made.and_lines = _spacing(rng, *found["and"])
        if inline_or:
            made.or_lines = _spacing(rng, *found["or"])
        if inline_drop:
            made.drop_lines = _drop_lines(rng, found["drop"][0])

    def or_array():
        count = len(need.or_rows)
        if rng.random() < 0.3:
            made.or_lines = _by_columns(rng, numbers, need.sums, count)
        else:
            runs = {"or": (need.sums, set(range(count)))}
            made.or_lines = _spacing(rng, *_by_rows(rng, numbers, count, runs)["or"])

    def drop_links():
        first = numbers.take(len(need.drops))
        fuses = list(range(first, first + len(need.drops)))
        style = rng.choice(["up", "down", "any"])
        if style == "down":
            fuses.reverse()
        if style == "any":
            rng.shuffle(fuses)
        made.drop_lines = _drop_lines(rng, fuses)

    def cell_links():
        wanted = [key for key, count in need.links.items() for _ in range(count)]
        first = numbers.take(len(wanted))
        fuses = list(range(first, first + len(wanted)))
        if rng.random() < 0.4:
            rng.shuffle(fuses)
        made.links = {key: [] for key in need.links}
        for key, fuse in zip(wanted, fuses, strict=True):
            made.links[key].append(fuse)

    def mode_fuses():
        first = numbers.take(need.mode_fuses)
        made.mode_fuses = list(range(first, first + need.mode_fuses))

    def signature():
        made.signature = numbers.take(need.signature)

    parts = [array, cell_links]
    parts += [or_array] * (need.sums > 0 and not inline_or)
    parts += [drop_links] * (bool(need.drops) and not inline_drop)
    parts += [mode_fuses] * (need.mode_fuses > 0) + [signature] * (need.signature > 0)
    rng.shuffle(parts)
    for part in parts:
        numbers.gap()
        part()
    numbers.gap()
    made.fuses, made.spare = numbers.next, numbers.spare
    return made


def _by_rows(rng, numbers, count, runs):
    """Row by row; a row holds one run of each array that has it."""
    order = list(range(count))
    style = rng.choice(["regular", "regular", "backwards", "irregular"])
    if style == "backwards":
        order.reverse()
    if style == "irregular":
        rng.shuffle(order)
    pad = rng.choice([0, 0, 0, 1, 2])
    names = rng.sample(sorted(runs), len(runs))
    steps = {name: rng.choice([1, 1, 1, -1]) for name in names}
    starts: dict[str, dict[int, int]] = {name: {} for name in names}
    for row in order:
        for name in names:
            width, having = runs[name]
            if row in having:
                first = numbers.take(width)
                starts[name][row] = first if steps[name] == 1 else first + width - 1
        numbers.pad(pad)
        if style == "irregular":
            numbers.gap()
    return {name: ([starts[name][r] for r in sorted(starts[name])], steps[name]) for name in names}


def _by_columns(rng, numbers, width, count):
    """Column by column."""
    step = count + rng.choice([0, 0, 1])
    first = numbers.take(0)
    for column in range(width):
        numbers.take(count)
        if column < width - 1:
            numbers.pad(step - count)
    return _spacing(rng, [first + row for row in range(count)], step)


def _spacing(rng, rows, step):
    steps = {b - a for a, b in pairwise(rows)} or {1}
    tail = [] if step == 1 and rng.random() < 0.5 else [f"column_step = {step}"]
    if len(steps) == 1 and rng.random() < 0.8:
        return [f"first_fuse = {rows[0]}", f"term_step = {steps.pop()}", *tail]
    return [f"rows = {rows}", *tail]


def _drop_lines(rng, fuses):
    steps = {b - a for a, b in pairwise(fuses)} or {1}
    if len(steps) == 1 and rng.random() < 0.7:
        step = steps.pop()
        tail = [] if step == 1 and rng.random() < 0.5 else [f"term_step = {step}"]
        return [f"first_fuse = {fuses[0]}", *tail]
    return [f"fuses = {fuses}"]
