"""Random designs with three-state outputs, bidirectional pins and inner signals, and their truth.

As in `random_designs`, the truth comes from the generator's own choices. What an equation names is
there by its value at every point, so nothing has to be read back.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import combinations
from typing import TYPE_CHECKING

from random_designs import (
    FREE,
    INPUT_NAMES,
    OUTPUT_NAMES,
    Signal,
    _cases,
    _equation,
    _fields,
    _key,
    _minterms,
    _signals,
    _toml,
)

if TYPE_CHECKING:
    import random


@dataclass(frozen=True)
class Shape:
    """How large a design may be.

    Attributes:
        inputs: Input bits, those that are read from bidirectional pins not counted.
        outputs: Output bits.
        span: Input bits that one description may speak of.
        enabled: Output bits that have an enable, or fewer where buses do not divide so.
        enabled_by: ``product`` of several inputs, or a single ``input``, the same for all, whose
            active level is `enable_active`.
        bidirectional: Output bits that may be read.
        inner: Inner signals.
        layered: The inner signals take many terms and the outputs name them, so that it costs more
            to fold them in.
        signature: Characters of the signature.
    """

    inputs: int
    outputs: int
    span: int = 4
    enabled: int = 0
    enabled_by: str = "product"
    enable_active: str = "high"
    bidirectional: int = 0
    inner: int = 0
    layered: bool = False
    signature: int = 0


@dataclass
class BusDesign:
    """A design file and the truth about it.

    Point ``p`` has bit ``i`` of ``p`` on the input with bit number ``i``; inputs that are read
    from pins follow the others. `table[output][point]` is the wanted value: 1, 0 or `FREE`;
    `drives[output][point]` whether the output drives its pin: true, false or `FREE`; an output
    that always drives has no entry. `reads` holds for an output the input that its pin gives.
    """

    inputs: list[Signal]
    outputs: list[Signal]
    read: list[Signal] = field(default_factory=list)
    text: str = ""
    signature: str = ""
    enables: dict[str, str] = field(default_factory=dict)
    reads: dict[str, str] = field(default_factory=dict)
    table: dict[str, list[int | None]] = field(default_factory=dict)
    drives: dict[str, list[bool | None]] = field(default_factory=dict)

    @property
    def input_names(self) -> list[str]:
        """Of the inputs that have pins of their own."""
        return [name for signal in self.inputs for name in signal.names]

    @property
    def read_names(self) -> list[str]:
        return [name for signal in self.read for name in signal.names]

    @property
    def output_names(self) -> list[str]:
        return [name for signal in self.outputs for name in signal.names]

    @property
    def points(self) -> int:
        return 1 << len(self.input_names) + len(self.read_names)

    @property
    def active_low(self) -> dict[str, bool]:
        signals = (*self.inputs, *self.read, *self.outputs)
        return {n: s.active_low for s in signals for n in s.names}

    def bit_of(self, name: str) -> int:
        return [*self.input_names, *self.read_names].index(name)


def random_bus_design(rng: random.Random, shape: Shape) -> BusDesign:
    """A design of this shape; whether it uses all that the shape permits is left to chance."""
    made = BusDesign(
        _signals(
            rng,
            shape.inputs,
            [*INPUT_NAMES, "gate", "flow", "lid"],
            ["step", "zone"],
            outputs=False,
        ),
        _signals(rng, shape.outputs, OUTPUT_NAMES, ["code"], outputs=True),
    )
    return _Writer(rng, shape, made).write()


class _Writer:
    def __init__(self, rng, shape, made):
        self.rng, self.shape, self.made = rng, shape, made
        self.keys = {signal.name: {} for signal in made.outputs}
        self.equations, self.sections = [], []
        # What equations may name, and the input bits that each stands for.
        self.equated: dict[str, list[bool]] = {}
        self.support: dict[str, set[int]] = {}
        self.inner: list[str] = []
        self.named: set[str] = set()
        # Inner signals that have a value for impossible inputs too, as an enable needs them.
        self.closed: set[str] = set()

    def write(self) -> BusDesign:
        rng, made = self.rng, self.made
        self._choose_buses()
        self.plain = _fields(made.inputs)
        self.every = self.plain + _fields(made.read)
        lines = ['name = "random bus"']
        if self.shape.signature:
            size = rng.randint(1, self.shape.signature)
            made.signature = "".join(rng.choice("ABCxyz 0189-+") for _ in range(size - 1)) + "!"
            lines.append(f'signature = "{made.signature}"')
        never, conditions = self._never()
        inner_lines = self._inner()
        for signal in made.outputs:
            self._enable(signal, never)
        for signal in made.outputs:
            self._describe(signal, never)
        lines += self._declarations(inner_lines)
        if conditions:
            lines += ["", "[never]", f"when = {_toml(conditions)}"]
        lines += [line for section in self.sections for line in ("", *section)]
        if self.equations:
            rng.shuffle(self.equations)
            lines += ["", "[logic]", *self.equations]
        made.text = "\n".join(lines) + "\n"
        return made

    def _choose_buses(self):
        """Which outputs have an enable, and which of these are read."""
        rng, made = self.rng, self.made
        signals = rng.sample(made.outputs, len(made.outputs))
        sets = [set_ for n in range(len(signals) + 1) for set_ in combinations(signals, n)]
        sizes = [sum(len(signal.names) for signal in set_) for set_ in sets]
        most = max(size for size in sizes if size <= self.shape.enabled)
        chosen = sets[sizes.index(most)]
        self.enabled = [s for s in made.outputs if s in chosen]
        room, first = self.shape.bidirectional, len(made.input_names)
        for signal in self.enabled:
            width = len(signal.names)
            if width <= room and rng.random() < 0.9:
                room -= width
                name = f"{signal.name}_in"
                made.read.append(Signal(name, list(range(first, first + width)), signal.active_low))
                first += width
                self.keys[signal.name]["reads"] = name
                made.reads |= dict(zip(signal.names, made.read[-1].names, strict=True))

    def _never(self):
        """Impossible inputs; inputs that are read from pins are not among them."""
        rng, made = self.rng, self.made
        never, conditions = [False] * made.points, []
        for _ in range(rng.choice([0, 0, 1])):
            text, where = _equation(rng, made, self.plain, {}, depth=2)
            # The first input may be what enables outputs: it keeps both levels.
            kept = {p & 1 for p, out in enumerate(where) if not out}
            if sum(where) <= 0.5 * made.points and len(kept) == 2:
                never = where
                conditions.append(text)
        return never, conditions

    def _inner(self):
        rng, lines = self.rng, []
        for name in rng.sample(["armed", "ready", "warm"], self.shape.inner):
            width = 1 if self.shape.layered else rng.choice([1, 1, 1, 2])
            signal = Signal(name, list(range(width)), active_low=False)
            lines.append(f"{name} = {width}")
            for bit in signal.names:
                fields = self._some(self.every if rng.random() < 0.2 else self.plain)
                support = {b for f in fields for b in f.bits}
                if rng.random() < 0.3 and not self.shape.layered:
                    section, values = _minterms(rng, self.made, fields, bit, complete=True)
                    self.sections.append(section)
                    where = [value == 1 for value in values]
                else:
                    known = dict(self.equated)
                    if rng.random() < 0.4 or self.shape.layered:
                        text, where = self._parity(fields)
                    else:
                        text, where = _equation(rng, self.made, fields, known, depth=2)
                    self.equations.append(f"{_key(bit)} = {_toml(text)}")
                    support = support.union(*(self.support[name] for name in known))
                    if self.closed.issuperset(known):
                        self.closed.add(bit)
                self.equated[bit], self.support[bit] = where, support
                self.inner.append(bit)
        return lines

    def _some(self, fields, span=None):
        """Fields that together have few enough bits, in their order; often what pins give."""
        chosen, bits = [], set()
        candidates = self.rng.sample(fields, len(fields))
        if self.rng.random() < 0.7:
            candidates.sort(key=lambda f: f in self.plain)
        for candidate in candidates:
            if len(bits | set(candidate.bits)) <= (span or self.shape.span):
                chosen.append(candidate)
                bits |= set(candidate.bits)
        return [f for f in fields if f in chosen]

    def _enable(self, signal, never):
        """When the output drives: never by what is read from pins."""
        if signal not in self.enabled:
            return
        rng, made = self.rng, self.made
        text, where = self._enabling(never)
        self.keys[signal.name]["enable"] = text
        made.enables |= dict.fromkeys(signal.names, text)
        drives: list[bool | None] = list(where)
        if (
            any(never)
            and "reads" not in self.keys[signal.name]
            and signal.impossible is None
            and rng.random() < 0.3
        ):
            self.keys[signal.name]["never_too"] = True
            drives = [FREE if out else on for on, out in zip(drives, never, strict=True)]
        made.drives |= dict.fromkeys(signal.names, drives)

    def _enabling(self, never):
        rng, made = self.rng, self.made
        singles = [f for f in self.plain if f.single]
        if self.shape.enabled_by == "input":
            # A pin enables at one level; asserted means that level, or the complement is asked for.
            name = singles[0].name
            prime = made.active_low[name] != (self.shape.enable_active == "low")
            where = [bool(p >> singles[0].bits[0] & 1) != prime for p in range(made.points)]
            return name + "'" * prime, where
        plain = set(range(len(singles)))
        names = [n for n in self.inner if n in self.closed and self.support[n] <= plain]
        while True:
            terms, where = [], [True] * made.points
            for chosen in rng.sample(singles, min(len(singles), rng.choice([1, 1, 2, 2, 3]))):
                bit, prime = chosen.bits[0], rng.random() < 0.4
                terms.append(chosen.name + "'" * prime)
                where = [on and bool(p >> bit & 1) != prime for p, on in enumerate(where)]
            if names and rng.random() < 0.2:
                terms.append(rng.choice(names))
                where = [on and x for on, x in zip(where, self.equated[terms[-1]], strict=True)]
            if any(on and not out for on, out in zip(where, never, strict=True)):
                return " ".join(terms), where

    def _describe(self, signal, never):
        """The output's own pin, and those of outputs behind it, are not in its description."""
        rng, made = self.rng, self.made
        allowed = set(range(made.points.bit_length() - 1))
        if "reads" in self.keys[signal.name]:
            later = made.reads[signal.names[0]]
            allowed = set(range(made.bit_of(later)))
        fields = [f for f in self.every if set(f.bits) <= allowed]
        form = rng.choice(["cases", "minterms", "logic", "logic"])
        if self.shape.layered or (set(self.inner) - self.named and rng.random() < 0.7):
            form = "logic"
        values: dict[str, list[int | None]] = {}
        if form == "cases":
            section, values = _cases(rng, made, self._some(fields), [signal])
            self.sections.append(section)
        for name in signal.names if form != "cases" else []:
            chosen = self._some(fields, 2 if self.shape.layered else None)
            if form == "minterms":
                section, values[name] = _minterms(rng, made, chosen, name)
                self.sections.append(section)
                continue
            known = {n: w for n, w in self.equated.items() if self.support[n] <= allowed}
            text, where = self._equation(chosen, known)
            self.equations.append(f"{_key(name)} = {_toml(text)}")
            values[name] = [int(value) for value in where]
            self.equated[name] = where
            self.support[name] = {b for f in chosen for b in f.bits}.union(
                *(self.support[n] for n in known)
            )
        for name in signal.names:
            drives = made.drives.get(name, [True] * made.points)
            made.table[name] = [
                FREE if not on else signal.impossible if out else value
                for value, on, out in zip(values[name], drives, never, strict=True)
            ]

    def _equation(self, fields, known):
        """Often with an inner signal in it."""
        rng = self.rng
        text, where = _equation(rng, self.made, fields, known, depth=rng.choice([2, 2, 3]))
        names = [name for name in self.inner if name in known]
        fresh = [name for name in names if name not in self.named]
        if names and rng.random() < (1 if self.shape.layered else 0.8):
            name = rng.choice(fresh or names)
            self.named.add(name)
            pairs = zip(where, known[name], strict=True)
            form = rng.choice([0, 1, 2, 2, 2] if self.shape.layered else [0, 1, 2])
            if form == 0:
                return f"{name} ({text})", [a and b for a, b in pairs]
            if form == 1:
                return f"{name} + {text}", [a or b for a, b in pairs]
            return f"{name} ⊕ ({text})", [a != b for a, b in pairs]
        return text, where

    def _parity(self, fields):
        """Nothing takes more terms to fold in."""
        chosen = [f for f in fields if f.single]
        bits = [f.bits[0] for f in chosen]
        where = [sum(p >> b & 1 for b in bits) % 2 == 1 for p in range(self.made.points)]
        return " ⊕ ".join(f.name for f in chosen), where

    def _declarations(self, inner):
        lines = []
        for title, signals in (("inputs", self.made.inputs), ("outputs", self.made.outputs)):
            lines += ["", f"[{title}]"]
            for signal in signals:
                keys = [f"bits = {len(signal.bits)}"] if len(signal.bits) > 1 else []
                keys += ['active = "low"'] * signal.active_low
                if signal.impossible is not None:
                    keys.append(f"impossible = {signal.impossible}")
                more = self.keys.get(signal.name, {}) if title == "outputs" else {}
                for key, value in more.items():
                    keys.append(f"{key} = true" if value is True else f'{key} = "{value}"')
                keys = keys or ["bits = 1"] * (self.rng.random() < 0.1)
                lines.append(f"{signal.name} = " + (f"{{ {', '.join(keys)} }}" if keys else "1"))
        return lines + (["", "[inner]", *inner] if inner else [])
