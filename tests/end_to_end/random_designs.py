"""Random designs as a user would write them, each with the truth table it stands for.

The table is worked out from the generator's own choices, never by reading the text back: so it can
serve as an independent reference. Point ``p`` of a table has bit ``i`` of ``p`` on input ``i``.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import random

FREE = None

INPUT_NAMES = ["start", "jam", "hatch", "level", "hot", "door"]
BUS_NAMES = ["step", "zone"]
OUTPUT_NAMES = ["fan", "burner", "lamp", "valve", "horn"]


@dataclass
class Signal:
    """A declared input or output; `bits` are its bit numbers, highest bit of a bus first."""

    name: str
    bits: list[int]
    active_low: bool
    impossible: int | None = None

    @property
    def names(self) -> list[str]:
        if len(self.bits) == 1:
            return [self.name]
        return [f"{self.name}[{i}]" for i in reversed(range(len(self.bits)))]


@dataclass
class RandomDesign:
    """A design file and the truth about it: `table[output][point]` is 1, 0 or `FREE`."""

    inputs: list[Signal]
    outputs: list[Signal]
    text: str = ""
    table: list[list[int | None]] = field(default_factory=list)
    never: list[bool] = field(default_factory=list)

    @property
    def input_names(self) -> list[str]:
        return [name for signal in self.inputs for name in signal.names]

    @property
    def output_names(self) -> list[str]:
        return [name for signal in self.outputs for name in signal.names]

    @property
    def points(self) -> int:
        return 1 << len(self.input_names)

    @property
    def active_low(self) -> dict[str, bool]:
        return {n: s.active_low for s in (*self.inputs, *self.outputs) for n in s.names}


def random_design(rng: random.Random, name: str = "random") -> RandomDesign:
    made = RandomDesign(
        _signals(
            rng, rng.choice([1, 2, 3, 4, 4, 5, 5, 6, 6, 6]), INPUT_NAMES, BUS_NAMES, outputs=False
        ),
        _signals(rng, rng.choice([1, 1, 2, 2, 3, 3, 4, 5]), OUTPUT_NAMES, ["code"], outputs=True),
    )
    fields = _fields(made.inputs)
    lines = [f'name = "{name}"', *_declarations(made)]

    conditions = []
    made.never = [False] * made.points
    for _ in range(rng.choice([0, 1, 1, 2])):
        text, where = _equation(rng, made, fields, {}, depth=2)
        excluded = [a or b for a, b in zip(made.never, where, strict=True)]
        if sum(excluded) <= 0.5 * made.points:
            made.never = excluded
            conditions.append(text)
    if conditions:
        listed = conditions[0] if len(conditions) == 1 and rng.random() < 0.5 else conditions
        lines += ["", "[never]", f"when = {_toml(listed)}"]

    described: dict[str, list[int | None]] = {}
    equations = []
    equated: dict[str, list[bool]] = {}
    waiting = list(made.outputs)
    rng.shuffle(waiting)
    while waiting:
        form = rng.choice(["cases", "minterms", "logic"])
        if form == "cases":
            together = [waiting.pop() for _ in range(rng.randint(1, len(waiting)))]
            text, values = _cases(rng, made, fields, together)
            lines += ["", *text]
            described |= values
            continue
        for output in waiting.pop().names:
            if form == "minterms":
                text, values_of = _minterms(rng, made, fields, output)
                lines += ["", *text]
                described[output] = values_of
            else:
                equation, where = _equation(rng, made, fields, equated, depth=3)
                equations.append(f"{_key(output)} = {_toml(equation)}")
                equated[output] = where
                described[output] = [int(value) for value in where]
    if equations:
        rng.shuffle(equations)
        lines += ["", "[logic]", *equations]
    for signal in made.outputs:
        for output in signal.names:
            row = described[output]
            made.table.append(
                [
                    signal.impossible if never else value
                    for value, never in zip(row, made.never, strict=True)
                ]
            )
    made.text = "\n".join(lines) + "\n"
    return made


def placed(design: RandomDesign, device: str, pins: dict[str, int]) -> str:
    """The design's text with pins decided for a device."""
    lines = [f"{_key(name)} = {pin}" for name, pin in pins.items()]
    return "\n".join([design.text, f"[place.{_key(device)}]", *lines, ""])


def _signals(rng, width, names, buses, *, outputs):
    names, buses = rng.sample(names, len(names)), list(buses)
    found, first = [], 0
    while first < width:
        wide = width - first >= 2 and buses and rng.random() < 0.5
        size = rng.randint(2, min(4, width - first)) if wide else 1
        found.append(
            Signal(
                buses.pop() if wide else names.pop(),
                list(range(first, first + size)),
                rng.random() < 0.35,
                rng.choice([None, None, 0, 1]) if outputs else None,
            )
        )
        first += size
    return found


def _declarations(made):
    lines = []
    for title, signals in (("inputs", made.inputs), ("outputs", made.outputs)):
        lines += ["", f"[{title}]"]
        for signal in signals:
            size = len(signal.bits)
            keys = [] if size == 1 else [f"bits = {size}"]
            if signal.active_low:
                keys.append('active = "low"')
            if signal.impossible is not None:
                keys.append(f"impossible = {signal.impossible}")
            plain = not signal.active_low and signal.impossible is None
            lines.append(f"{signal.name} = {size if plain else '{ ' + ', '.join(keys) + ' }'}")
    return lines


@dataclass
class _Field:
    """Something that a column, a list or a comparison can speak of."""

    name: str
    bits: list[int]
    single: bool

    def value(self, point: int) -> int:
        number = 0
        for bit in self.bits:
            number = 2 * number + (point >> bit & 1)
        return number

    @property
    def size(self) -> int:
        return 1 << len(self.bits)


def _fields(signals):
    """Whole buses, single bits, and for each bus one part of it."""
    found = []
    for signal in signals:
        found += [_Field(n, [b], True) for n, b in zip(signal.names, signal.bits, strict=True)]
        if len(signal.bits) > 1:
            found.append(_Field(signal.name, signal.bits, False))
        if len(signal.bits) > 2:
            found.append(_Field(f"{signal.name}[2:1]", signal.bits[-3:-1], False))
    return found


def _apart(rng, fields):
    """Some fields that share no bits, at least one."""
    chosen, used = [], set()
    for candidate in rng.sample(fields, len(fields)):
        if not used & set(candidate.bits) and (not chosen or rng.random() < 0.9):
            chosen.append(candidate)
            used |= set(candidate.bits)
    return chosen


# --- truth tables ---


def _cases(rng, made, fields, outputs):
    columns = _apart(rng, fields)[:5]
    leaves = list(_leaves(rng, columns))
    values: dict[str, list[int | None]] = {
        name: [FREE] * made.points for signal in outputs for name in signal.names
    }
    rows, listed = [], [False] * made.points
    kept = [leaf for leaf in leaves if rng.random() < 0.85] or leaves[:1]
    for leaf in kept:
        cells, meanings = zip(*(_output_cell(rng, signal) for signal in outputs), strict=True)
        for point in range(made.points):
            if all(
                c.value(point) in allowed for c, (_, allowed) in zip(columns, leaf, strict=True)
            ):
                listed[point] = True
                _give(values, outputs, meanings, point)
        row = " ".join(text for text, _ in leaf) + " | " + " ".join(cells)
        rows += [row] * (2 if rng.random() < 0.05 else 1)
    rng.shuffle(rows)
    if not all(listed):
        cells, meanings = zip(*(_output_cell(rng, signal) for signal in outputs), strict=True)
        rows.insert(rng.randint(0, len(rows)), "others | " + " ".join(cells))
        for point, done in enumerate(listed):
            if not done:
                _give(values, outputs, meanings, point)
    header = " ".join(c.name for c in columns) + " | " + " ".join(o.name for o in outputs)
    return ["[[cases]]", 'rows = """', header, *rows, '"""'], values


def _give(values, outputs, meanings, point):
    for signal, meaning in zip(outputs, meanings, strict=True):
        for name, value in zip(signal.names, meaning, strict=True):
            values[name][point] = value


def _leaves(rng, columns):
    """Rows of (cell, numbers it stands for), none of which overlap, and which leave no gap."""
    if not columns:
        yield ()
        return
    for cell in _partition(rng, columns[0]):
        for rest in _leaves(rng, columns[1:]):
            yield (cell, *rest)


def _partition(rng, column):
    everything = set(range(column.size))
    if rng.random() < 0.12:
        return [("-", everything)]
    if column.single:
        return [("0", {0}), ("1", {1})]
    width = len(column.bits)
    if rng.random() < 0.3:
        place = rng.randrange(width)
        halves = []
        for state in "01":
            text = "".join(state if i == place else "-" for i in range(width))
            shift = width - 1 - place
            halves.append((f"0b{text}", {v for v in everything if v >> shift & 1 == int(state)}))
        return halves
    cuts = sorted(rng.sample(range(1, column.size), rng.randint(1, min(3, column.size - 1))))
    cells = []
    for first, end in pairwise([0, *cuts, column.size]):
        numbers = set(range(first, end))
        cells.append(
            (_number(rng, first, width) if len(numbers) == 1 else f"{first}..{end - 1}", numbers)
        )
    return cells


def _number(rng, value, width):
    return rng.choice([str(value), f"0x{value:X}", f"0b{value:0{width}b}"])


def _output_cell(rng, signal):
    """Text, and the value of each bit from the highest."""
    width = len(signal.bits)
    if rng.random() < 0.15:
        return "x", [FREE] * width
    meaning = [rng.choice([0, 1]) for _ in range(width)]
    if width == 1:
        return str(meaning[0]), meaning
    if rng.random() < 0.4:
        meaning = [FREE if rng.random() < 0.25 else value for value in meaning]
        return "0b" + "".join("x" if v is FREE else str(v) for v in meaning), meaning
    return _number(rng, int("".join(map(str, meaning)), 2), width), meaning


# --- minterm lists ---


def _minterms(rng, made, fields, output, *, complete=False):
    """A list of one bus or of single inputs; `complete` leaves nothing open."""
    buses = [field_ for field_ in fields if not field_.single and "[" not in field_.name]
    if buses and rng.random() < 0.5:
        bus = rng.choice(buses)
        of, bits = _toml(bus.name), bus.bits
    else:
        named = [field_ for field_ in fields if field_.single]
        named = rng.sample(named, rng.randint((len(named) + 1) // 2, len(named)))
        of, bits = _toml([n.name for n in named]), [bit for n in named for bit in n.bits]
    number = _Field("", bits, False)
    kinds = rng.choice([["on", "others"], ["on", "dont_care", "others"], ["on", "off", "others"]])
    if complete:
        kinds = ["on", "off", "others"]
    given = [rng.choice(kinds) for _ in range(number.size)]
    given[rng.randrange(number.size)] = "on"
    others = rng.choice([0, 0, 0, 1] if complete else [0, 0, 0, 1, FREE])
    worth = {"on": 1, "off": 0, "dont_care": FREE, "others": others}
    lines = [f"[minterms.{_key(output)}]", f"of = {of}"]
    for kind in ("on", "off", "dont_care"):
        numbers = [n for n, what in enumerate(given) if what == kind]
        if numbers:
            lines.append(f"{kind} = [{', '.join(_runs(rng, numbers))}]")
    if "others" in given:
        lines.append('others = "x"' if others is FREE else f"others = {others}")
    return lines, [worth[given[number.value(point)]] for point in range(made.points)]


def _runs(rng, numbers):
    runs = []
    for number in numbers:
        if runs and runs[-1][1] == number - 1 and rng.random() < 0.8:
            runs[-1][1] = number
        else:
            runs.append([number, number])
    rng.shuffle(runs)
    return [str(a) if a == b else f'"{a}..{b}"' for a, b in runs]


# --- equations ---

_OR, _XOR, _AND, _NOT, _COMPARE, _NAME = range(6)


def _equation(rng, made, fields, equated, depth):
    """Text and value at every point."""
    tree = _tree(rng, made, fields, equated, depth)
    text, _, where = tree
    return text, where


def _tree(rng, made, fields, equated, depth):
    """(text, how tightly it binds, value at every point)."""
    if depth == 0 or rng.random() < 0.1:
        return _leaf(rng, made, fields, equated)
    kind = rng.choice([_OR, _OR, _XOR, _AND, _AND, _NOT])
    if kind == _NOT:
        text, binding, where = _tree(rng, made, fields, equated, depth - 1)
        inverse = [not value for value in where]
        if rng.random() < 0.5:
            return f"not {_within(text, binding, _NOT)}", _NOT, inverse
        if binding == _NAME and not text.endswith("'"):
            return f"{text}'", _NAME, inverse
        return f"({text})'", _NAME, inverse
    sign = {_OR: [" + ", " or "], _XOR: [" ⊕ ", " xor "], _AND: [" ", " · ", " and "]}[kind]
    parts = [_tree(rng, made, fields, equated, depth - 1) for _ in range(rng.choice([2, 2, 3]))]
    texts = [_within(text, binding, kind) for text, binding, _ in parts]
    joined = texts[0]
    for text in texts[1:]:
        joined += rng.choice(sign) + text
    combine = {_OR: any, _AND: all, _XOR: lambda values: sum(values) % 2 == 1}[kind]
    where = [combine(values) for values in zip(*(part[2] for part in parts), strict=True)]
    return joined, kind, where


def _within(text, binding, wanted):
    return text if binding >= wanted else f"({text})"


def _leaf(rng, made, fields, equated):
    points = range(made.points)
    if equated and rng.random() < 0.15:
        name = rng.choice(sorted(equated))
        return name, _NAME, equated[name]
    field_ = rng.choice(fields)
    if field_.single:
        where = [field_.value(p) == 1 for p in points]
        if rng.random() < 0.5:
            return field_.name, _NAME, where
        return f"{field_.name}'", _NAME, [not value for value in where]
    low = rng.randrange(field_.size)
    if rng.random() < 0.3:
        high = rng.randint(low, field_.size - 1)
        where = [low <= field_.value(p) <= high for p in points]
        return f"{field_.name} in {low}..{high}", _COMPARE, where
    sign, compare = rng.choice(
        [
            ("==", lambda a: a == low),
            ("!=", lambda a: a != low),
            ("<", lambda a: a < low),
            ("<=", lambda a: a <= low),
            (">", lambda a: a > low),
            (">=", lambda a: a >= low),
        ]
    )
    number = _number(rng, low, len(field_.bits))
    return f"{field_.name} {sign} {number}", _COMPARE, [compare(field_.value(p)) for p in points]


def _key(name):
    return f'"{name}"' if "[" in name else name


def _toml(value):
    if isinstance(value, list):
        return f"[{', '.join(_toml(item) for item in value)}]"
    return f'"{value}"'
