"""Random device files of the shared-OR class, with what every fuse does, for tests.

Built from the layout outwards and without the program's own model, so that it can serve as an
independent reference for fuse numbers.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import random


@dataclass
class RandomDevice:
    """A valid device file and the truth about it.

    `roles` maps every fuse to ("and", term, pin or None, complement), ("or", term, pin),
    ("cell", pin, index) or ("spare",).
    """

    name: str
    text: str = ""
    fuses: int = 0
    pins: int = 0
    terms: int = 0
    inputs: list[int] = field(default_factory=list)
    outputs: list[int] = field(default_factory=list)
    blank: int = 0
    connected: int = 0
    roles: dict[int, tuple] = field(default_factory=dict)


@dataclass
class _Placed:
    """First fuse of each row and the step between columns."""

    rows: list[int]
    step: int


def random_device_toml(
    rng: random.Random,
    *,
    inputs: int | None = None,
    terms: int | None = None,
    outputs: int | None = None,
) -> str:
    """The text of a valid random device file; sizes are random where not given."""
    return random_device(rng, inputs=inputs, terms=terms, outputs=outputs).text


def random_device(
    rng: random.Random,
    *,
    inputs: int | None = None,
    terms: int | None = None,
    outputs: int | None = None,
    name: str = "random-array",
) -> RandomDevice:
    """A valid random device with the role of each of its fuses."""
    n_in = inputs or rng.randint(1, 7)
    n_out = outputs or rng.randint(1, 5)
    made = RandomDevice(name, terms=terms or rng.randint(1, 9))
    made.blank, made.connected = rng.randint(0, 1), rng.randint(0, 1)

    idle = rng.choice([0, 0, 1, 3])
    made.pins = n_in + n_out + 2 + idle
    order = rng.sample(range(1, made.pins + 1), made.pins)
    made.inputs, made.outputs = sorted(order[:n_in]), sorted(order[n_in : n_in + n_out])
    ground, power, *unconnected = order[n_in + n_out :]

    lines = _random_lines(rng, made.inputs)
    sums = rng.sample(made.outputs, n_out)
    kinds = _random_kinds(rng, made.outputs)
    and_array, or_array = _place(rng, made, lines, sums, kinds)
    spare = [f for f in range(made.fuses) if f not in made.roles]
    for fuse in spare:
        made.roles[fuse] = ("spare",)

    out = [
        f'name = "{name}"',
        f'technology = "{rng.choice(["one-time", "erasable"])}"',
        f"pins = {made.pins}",
        f"fuses = {made.fuses}",
        f"ground = {ground}",
        f"power = {power}",
    ]
    if unconnected:
        out.append(f"unconnected = {sorted(unconnected)}")
    if spare:
        out.append(f"spare = [{', '.join(_ranges(rng, spare))}]")
    out += [
        "",
        "[links]",
        f"blank = {made.blank}",
        f"connected = {made.connected}",
        f'unused_term = "{rng.choice(["blank", "dead"])}"',
        "",
        "[and]",
        f'columns = "{" ".join(lines)}"',
        f"terms = {made.terms}",
        *_rows_toml(rng, and_array),
        "",
        "[or]",
        f'columns = "{" ".join(map(str, sums))}"',
        *_rows_toml(rng, or_array),
    ]
    for kind in kinds:
        out += ["", *kind.toml()]
    made.text = "\n".join(out) + "\n"
    return made


@dataclass
class _Kind:
    name: str
    bits: list[str]
    modes: list[tuple[str, str]]
    pins: list[int]
    links: dict[int, list[int]] = field(default_factory=dict)

    def toml(self) -> list[str]:
        bits = ", ".join(f'"{bit}"' for bit in self.bits)
        modes = ", ".join(f'{{ set = "{s}", pin = "{p}" }}' for s, p in self.modes)
        cells = [f"  {{ pin = {pin}, links = {self.links[pin]} }}," for pin in self.pins]
        return [
            f"[kind.{self.name}]",
            f"bits = [{bits}]",
            f"modes = [ {modes} ]",
            "cells = [",
            *cells,
            "]",
        ]


def _random_lines(rng, pins):
    pairs = [[f"{pin}", f"{pin}'"] for pin in rng.sample(pins, len(pins))]
    if rng.random() < 0.3:
        for pair in pairs:
            pair.reverse()
    lines = [line for pair in pairs for line in pair]
    if rng.random() < 0.3:
        rng.shuffle(lines)
    for _ in range(rng.choice([0, 0, 0, 1, 3])):
        lines.insert(rng.randint(0, len(lines)), ".")
    return lines


_KINDS = [
    ([], [("", "sum")]),
    ([], [("", "sum'")]),
    (["polarity"], [("0", "sum"), ("1", "sum'")]),
    (["polarity"], [("1", "sum"), ("0", "sum'")]),
    (["polarity"], [("1", "sum'")]),
    (["polarity", "sense"], [("01", "sum"), ("10", "sum'")]),
    (["upper", "lower"], [("00", "sum"), ("11", "sum'"), ("10", "sum'"), ("01", "sum")]),
]


def _random_kinds(rng, outputs):
    pins = rng.sample(outputs, len(outputs))
    cut = rng.randint(1, len(pins)) if rng.random() < 0.3 else len(pins)
    groups = [group for group in (pins[:cut], pins[cut:]) if group]
    kinds = []
    for index, group in enumerate(groups):
        bits, modes = rng.choice(_KINDS)
        kinds.append(_Kind(f"k{index}", bits, modes, group))
    return kinds


def _place(rng, made, lines, sums, kinds):
    """Hand out fuse numbers; returns where the arrays are."""
    cursor = 0

    def skip():
        nonlocal cursor
        if rng.random() < 0.25:
            cursor += rng.randint(1, 5)

    def place_cells():
        nonlocal cursor
        skip()
        wanted = [(k, pin, i) for k in kinds for pin in k.pins for i in range(len(k.bits))]
        numbers = list(range(cursor, cursor + len(wanted)))
        if rng.random() < 0.4:
            rng.shuffle(numbers)
        for (kind, pin, index), fuse in zip(wanted, numbers, strict=True):
            kind.links.setdefault(pin, []).append(fuse)
            made.roles[fuse] = ("cell", pin, index)
        for kind in kinds:
            for pin in kind.pins:
                kind.links.setdefault(pin, [])
        cursor += len(wanted)

    def place_rows(widths):
        """Row by row; a row holds one run of each width. Returns one `_Placed` for each."""
        nonlocal cursor
        order = list(range(made.terms))
        style = rng.choice(["regular", "regular", "backwards", "irregular"])
        if style == "backwards":
            order.reverse()
        if style == "irregular":
            rng.shuffle(order)
        pad = rng.choice([0, 0, 1, 2])
        steps = [rng.choice([1, 1, 1, -1]) for _ in widths]
        placed = [_Placed([0] * made.terms, step) for step in steps]
        for term in order:
            for which, width in zip(placed, widths, strict=True):
                which.rows[term] = cursor if which.step == 1 else cursor + width - 1
                cursor += width
            cursor += pad
            if style == "irregular":
                skip()
        return placed

    def place_columns(width):
        """Column by column."""
        nonlocal cursor
        step = made.terms + rng.choice([0, 0, 1])
        placed = _Placed([cursor + term for term in range(made.terms)], step)
        cursor += step * width
        return placed

    def place_array(width):
        skip()
        return place_columns(width) if rng.random() < 0.3 else place_rows([width])[0]

    cells_at = rng.randint(0, 2)
    if cells_at == 0:
        place_cells()
    layout = rng.choice(["interleaved", "apart"])
    skip()
    if layout == "interleaved":
        if rng.random() < 0.7:
            and_array, or_array = place_rows([len(lines), len(sums)])
        else:
            or_array, and_array = place_rows([len(sums), len(lines)])
    elif rng.random() < 0.7:
        and_array = place_array(len(lines))
        if cells_at == 1:
            place_cells()
        or_array = place_array(len(sums))
    else:
        or_array = place_array(len(sums))
        if cells_at == 1:
            place_cells()
        and_array = place_array(len(lines))
    if not all(kind.links for kind in kinds):
        place_cells()
    skip()
    made.fuses = cursor

    for term in range(made.terms):
        for column, line in enumerate(lines):
            fuse = and_array.rows[term] + column * and_array.step
            pin = None if line == "." else int(line.rstrip("'"))
            made.roles[fuse] = ("and", term, pin, line.endswith("'"))
        for column, pin in enumerate(sums):
            made.roles[or_array.rows[term] + column * or_array.step] = ("or", term, pin)
    return and_array, or_array


def _rows_toml(rng, placed):
    rows, step = placed.rows, placed.step
    steps = {b - a for a, b in pairwise(rows)} or {1}
    tail = [] if step == 1 and rng.random() < 0.5 else [f"column_step = {step}"]
    if len(steps) == 1 and rng.random() < 0.8:
        return [f"first_fuse = {rows[0]}", f"term_step = {steps.pop()}", *tail]
    return [f"rows = {rows}", *tail]


def _ranges(rng, numbers):
    found = []
    for number in numbers:
        if found and found[-1][1] == number - 1:
            found[-1][1] = number
        else:
            found.append([number, number])
    texts = []
    for first, last in found:
        if first == last:
            texts.append(rng.choice([str(first), f'"{first}"', f'"{first}..{last}"']))
        else:
            texts.append(f'"{first}..{last}"')
    return texts
