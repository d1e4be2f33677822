"""Random designs with registers and state tables, and what their pins have to do clock by clock.

As in `random_designs` the truth comes from the generator's own choices, never from reading the text
back. A right-hand side of a registered signal is its next value, and its name its present value; so
the tables here are over points whose lower bits are inputs and whose higher bits present values.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from clocked_follower import Acting, ClockedDesign, Machine
from random_designs import (
    FREE,
    INPUT_NAMES,
    OUTPUT_NAMES,
    Signal,
    _apart,
    _cases,
    _equation,
    _fields,
    _key,
    _leaves,
    _minterms,
    _output_cell,
    _signals,
    _toml,
)

if TYPE_CHECKING:
    import random

STATE_NAMES = ["shut", "opening", "wide", "closing", "stuck", "idle", "waiting", "busy"]


@dataclass(frozen=True)
class ClockedShape:
    """How large a design may be, and what the part can do.

    Attributes:
        inputs: Input bits, the clock not counted.
        registered: Output bits with registers.
        plain: Output bits without.
        inner: Bits of inner registers.
        states: States of a state table; 0 for none. It takes its outputs from `plain`.
        span: Bits that one description may speak of.
        kinds: Registers that signals ask for.
        falling: The part's registers take at the edge to a low clock pin.
        reset: ``asynchronous``, ``clock`` or ``None``; likewise `preset`.
        reset_level: The level of a pin that resets; ``None`` where a product of inputs may.
        preset_level: Likewise.
        enable_level: The level of a pin that enables the registered outputs; ``None`` for none.
        starts: Whether the part's power-up may be relied upon.
    """

    inputs: int = 3
    registered: int = 2
    plain: int = 1
    inner: int = 0
    states: int = 0
    span: int = 4
    kinds: tuple[str, ...] = ("D", "any")
    falling: bool = False
    reset: str | None = None
    reset_level: int | None = None
    preset: str | None = None
    preset_level: int | None = None
    enable_level: int | None = None
    starts: bool = True


def random_clocked_design(rng: random.Random, shape: ClockedShape) -> ClockedDesign:
    """A design of this shape; whether it uses all that the shape permits is left to chance."""
    return _Writer(rng, shape).write()


class _Writer:
    def __init__(self, rng, shape):
        self.rng, self.shape = rng, shape
        outputs = rng.sample(OUTPUT_NAMES, len(OUTPUT_NAMES))
        inputs = _signals(
            rng, shape.inputs, [*INPUT_NAMES, "gate", "flow"], ["step"], outputs=False
        )
        registered = _signals(
            rng, shape.registered, [*outputs[:3], "relay", "gong"], ["code"], outputs=True
        )
        plain = _signals(
            rng, shape.plain, [*outputs[3:], "buzzer", "shutter", "pump"], ["view"], outputs=True
        )
        inner = []
        if shape.inner:
            inner = [Signal("count", list(range(shape.inner)), active_low=False)]
        first = shape.inputs
        for signal in (*registered, *inner):
            signal.bits[:] = range(first, first + len(signal.bits))
            first += len(signal.bits)
        self.made = ClockedDesign(
            inputs, Signal("clk", [0], rng.random() < 0.3), registered, plain, inner
        )
        self.equations, self.sections = [], []
        self.keys: dict[str, list[str]] = {}
        self.equated: dict[str, list[bool]] = {}

    def write(self) -> ClockedDesign:
        rng, made = self.rng, self.made
        made.never, conditions = self.never()
        self.plain_fields = _fields(made.inputs)
        present = _fields([*made.registered, *made.inner])
        self.every = self.plain_fields + present
        reset = self.acting("reset")
        acting = {"reset": reset, "preset": self.acting("preset", beside=reset)}
        enable = self.enable()
        for signal in (*made.registered, *made.inner):
            self.clocked(signal, acting, enable if signal in made.registered else None)
        self.equated_inner()
        for signal in made.registered:
            self.describe(signal)
        rest = list(made.plain)
        if self.shape.states:
            of_machine = rest[: rng.randint(1, len(rest))]
            rest = rest[len(of_machine) :]
            self.machine(of_machine, acting["reset"])
        for signal in rest:
            self.describe(signal)
        self.close()
        lines = ['name = "random clocked"', *self.declarations()]
        if conditions:
            lines += ["", "[never]", f"when = {_toml(conditions)}"]
        lines += [line for section in self.sections for line in ("", *section)]
        if self.equations:
            rng.shuffle(self.equations)
            lines += ["", "[logic]", *self.equations]
        made.text = "\n".join(lines) + "\n"
        return made

    def close(self):
        """What impossible inputs leave open."""
        made = self.made
        impossible = {n: s.impossible for s in (*made.registered, *made.plain) for n in s.names}
        for name, row in made.table.items():
            for point in range(made.points):
                if made.never[point % made.input_points]:
                    row[point] = impossible.get(name, FREE)
        for by_state in made.machine.outputs.values() if made.machine else ():
            for row in by_state:
                for point, never in enumerate(made.never):
                    row[point] = FREE if never else row[point]

    def never(self):
        rng, made = self.rng, self.made
        if self.shape.inputs > 1 and rng.random() < 0.4:
            at_inputs = ClockedDesign(made.inputs, made.clock, [], [], [])
            text, where = _equation(rng, at_inputs, _fields(made.inputs), {}, depth=1)
            if sum(where) <= 0.4 * len(where):
                return where, [text]
        return [False] * made.input_points, []

    # --- registers ---

    def acting(self, what, beside=None):
        """(equation, when it acts) of a reset or preset, for all alike.

        A reset and a preset of one kind never act at once: that is an error of a design.
        """
        rng, made, shape = self.rng, self.made, self.shape
        when = getattr(shape, what)
        if when is None:
            return None
        level = getattr(shape, f"{what}_level")
        singles = [f for f in _fields(made.inputs) if f.single]
        apart = beside is not None and beside[1].asynchronous == (when == "asynchronous")
        literals = []
        if apart:
            # The complement of one literal of the other, and another input.
            word = beside[0].split()[0]
            first = next(f for f in singles if f.name == word.removesuffix("'"))
            if level is not None or len(singles) < 2:
                return None
            literals.append((first, not word.endswith("'")))
            literals.append(
                (rng.choice([f for f in singles if f is not first]), rng.random() < 0.4)
            )
        else:
            count = 1 if level is not None else min(len(singles), rng.choice([1, 1, 2]))
            for chosen in rng.sample(singles, count):
                prime = rng.random() < 0.4
                if level is not None:
                    prime = made.active_low[chosen.name] != (level == 0)
                literals.append((chosen, prime))
        text = " ".join(f.name + "'" * prime for f, prime in literals)
        where = [
            all(bool(p >> f.bits[0] & 1) != prime for f, prime in literals)
            for p in range(made.input_points)
        ]
        return text, Acting(where, when == "asynchronous")

    def enable(self):
        """The equation of an enable pin for all registered outputs."""
        rng, made, level = self.rng, self.made, self.shape.enable_level
        if level is None:
            return None
        chosen = rng.choice([f for f in _fields(made.inputs) if f.single])
        prime = made.active_low[chosen.name] != (level == 0)
        where = [bool(p >> chosen.bits[0] & 1) != prime for p in range(made.input_points)]
        return chosen.name + "'" * prime, where

    def clock_text(self):
        """The edge of the part, said of the asserted clock."""
        return self.made.clock.name + "'" * (self.shape.falling != self.made.clock.active_low)

    def clocked(self, signal, acting, enable):
        rng, made = self.rng, self.made
        keys = [f'register = "{rng.choice(self.shape.kinds)}"', f'clock = "{self.clock_text()}"']
        for what, known in (("reset", made.resets), ("preset", made.presets)):
            if acting[what] is not None and rng.random() < (0.85 if what == "reset" else 0.5):
                text, when = acting[what]
                keys += self.acting_keys(what, text, when)
                known.update(dict.fromkeys(signal.names, when))
        start = None
        if self.shape.starts and rng.random() < 0.8:
            start = rng.randrange(1 << len(signal.names))
            keys.append(f"start = {rng.choice([str(start), f'0b{start:b}'])}")
        for index, name in enumerate(reversed(signal.names)):
            made.starts[name] = None if start is None else start >> index & 1
        if enable is not None:
            keys.append(f'enable = "{enable[0]}"')
            made.drives |= dict.fromkeys(signal.names, enable[1])
        self.keys[signal.name] = keys

    def acting_keys(self, what, text, when):
        keys = [f'{what} = "{text}"']
        if not when.asynchronous or self.rng.random() < 0.3:
            said = "asynchronous" if when.asynchronous else "clock"
            keys.append(f'{what}_when = "{said}"')
        return keys

    def equated_inner(self):
        """Inner registers, as a counter or anything; nothing is left open, for nobody sees them."""
        rng, made = self.rng, self.made
        for signal in made.inner:
            text, where = _equation(rng, made, self.some(self.plain_fields, 2), {}, depth=1)
            carry = [bool(value) for value in where]
            counting = rng.random() < 0.6
            low = reversed(list(zip(signal.names, signal.bits, strict=True)))
            names = [f"({text})"]
            for name, bit in low:
                if counting:
                    whole = " ".join(names)
                    self.equations.append(f"{_key(name)} = {_toml(f'{name} ⊕ ({whole})')}")
                    made.table[name] = [int(on != bool(p >> bit & 1)) for p, on in enumerate(carry)]
                    carry = [on and bool(p >> bit & 1) for p, on in enumerate(carry)]
                    names.append(name)
                else:
                    one, truth = _equation(rng, made, self.some(self.every), {}, depth=2)
                    self.equations.append(f"{_key(name)} = {_toml(one)}")
                    made.table[name] = [int(value) for value in truth]

    # --- what signals are ---

    def some(self, fields, span=None):
        """Fields that together have few enough bits, in their order."""
        chosen, bits = [], set()
        for candidate in self.rng.sample(fields, len(fields)):
            if len(bits | set(candidate.bits)) <= (span or self.shape.span):
                chosen.append(candidate)
                bits |= set(candidate.bits)
        return [f for f in fields if f in chosen]

    def describe(self, signal):
        rng, made = self.rng, self.made
        # A table does not speak of what it gives.
        others = [f for f in self.every if not set(f.bits) & self.own_bits(signal)]
        form = rng.choice(["cases", "minterms", "logic", "logic", "logic"])
        if form == "cases":
            section, values = _cases(rng, made, self.some(others), [signal])
            self.sections.append(section)
            made.table |= values
            return
        for name in signal.names:
            if form == "minterms":
                section, made.table[name] = _minterms(rng, made, self.some(others), name)
                self.sections.append(section)
                continue
            fields = self.some(self.every)
            known = self.equated if rng.random() < 0.3 else {}
            text, where = _equation(rng, made, fields, known, depth=rng.choice([1, 2, 2]))
            own = [f for f in self.every if f.single and f.name == name]
            if own and rng.random() < 0.5:
                bit = own[0].bits[0]
                if rng.random() < 0.5:
                    text = f"{name} + {text}"
                    where = [on or bool(p >> bit & 1) for p, on in enumerate(where)]
                else:
                    text = f"{name} ⊕ ({text})"
                    where = [on != bool(p >> bit & 1) for p, on in enumerate(where)]
            self.equations.append(f"{_key(name)} = {_toml(text)}")
            made.table[name] = [int(value) for value in where]
            if signal in made.plain:
                self.equated[name] = where

    def own_bits(self, signal):
        return set(signal.bits) if signal in self.made.registered else set()

    # --- the state table ---

    def machine(self, outputs, reset):
        rng, made, count = self.rng, self.made, self.shape.states
        names = rng.sample(STATE_NAMES, count)
        machine = Machine("stage", names, rng.randrange(count))
        columns = _apart(rng, self.plain_fields)[:3]
        output_names = [name for signal in outputs for name in signal.names]
        machine.then = [[0] * made.input_points for _ in names]
        machine.outputs = {n: [[FREE] * made.input_points for _ in names] for n in output_names}
        rows = []
        for state, name in enumerate(names):
            leaves = list(_leaves(rng, columns))
            for index, leaf in enumerate(leaves):
                # Around all states, and from there anywhere.
                then = (state + 1) % count if index == 0 else rng.randrange(count)
                cells, meanings = zip(*(_output_cell(rng, o) for o in outputs), strict=True)
                values = dict(
                    zip(output_names, [v for meaning in meanings for v in meaning], strict=True)
                )
                for point in range(made.input_points):
                    if all(c.value(point) in to for c, (_, to) in zip(columns, leaf, strict=True)):
                        machine.then[state][point] = then
                        for output, value in values.items():
                            machine.outputs[output][state][point] = value
                texts = " ".join(text for text, _ in leaf)
                rows.append(f"{name} | {texts} | {names[then]} | {' '.join(cells)}")
        rng.shuffle(rows)
        heads = " ".join(c.name for c in columns), " ".join(o.name for o in outputs)
        section = [
            "[[state_table]]",
            'of = "stage"',
            f'clock = "{self.clock_text()}"',
            f"states = {_toml(names)}",
            f'start = "{names[machine.start]}"',
            *self.codes(names),
        ]
        if reset is not None:
            section += self.acting_keys("reset", *reset)
            machine.reset = reset[1]
        section += ['rows = """', f"state | {heads[0]} | then | {heads[1]}", *rows, '"""']
        self.sections.append(section)
        made.machine = machine

    def codes(self, names):
        rng, count = self.rng, len(names)
        way = rng.choice(["free", "counting", "gray", "one-hot", "table"])
        bits = max(1, (count - 1).bit_length())
        if way == "one-hot":
            bits = count
        said = f'"{way}"'
        if way == "table":
            bits += rng.choice([0, 0, 1])
            chosen = rng.sample(range(1 << bits), count)
            pairs = zip(names, chosen, strict=True)
            said = "{ " + ", ".join(f'{name} = "{code:0{bits}b}"' for name, code in pairs) + " }"
        lines = [f"codes = {said}"]
        if 1 << bits > count:
            lines.append(f'unused = "{rng.choice(["start", "x"])}"')
        return lines

    def declarations(self):
        made = self.made
        inputs = [*made.inputs, made.clock]
        if self.rng.random() < 0.5:
            inputs = [made.clock, *made.inputs]
        lines = []
        groups = {"inputs": inputs, "outputs": [*made.registered, *made.plain], "inner": made.inner}
        for title, signals in groups.items():
            lines += ["", f"[{title}]"] * bool(signals)
            for signal in signals:
                keys = [f"bits = {len(signal.bits)}"] if len(signal.bits) > 1 else []
                keys += ['active = "low"'] * signal.active_low
                if signal.impossible is not None:
                    keys.append(f"impossible = {signal.impossible}")
                keys += self.keys.get(signal.name, [])
                lines.append(f"{signal.name} = " + (f"{{ {', '.join(keys)} }}" if keys else "1"))
        return lines
