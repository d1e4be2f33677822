"""Random clocked designs against the oracle: a part with a row for every point does what they ask.

Nothing is planned here. The part is made for the design: each row is one combination of all inputs
and states, and the links to the sums are the truth table. So what the designs say of themselves and
what the oracle says of a part are held against each other.
"""

import random
from dataclasses import dataclass
from functools import cache

import pytest
from clocked_classes import CLOCKED_CLASSES, random_clocked_device
from clocked_follower import Follower
from clocked_runs import ClockedRun
from clocked_shapes import random_clocked_shape
from oracles.device_description import read_device
from random_clocked_designs import FREE, ClockedShape, random_clocked_design

SEQUENCES, CLOCKS = 10, 30


@dataclass
class Cell:
    """A cell of the part: `register` is ``None`` for a sum that is shown as it is."""

    name: str
    key: int | str
    register: str | None
    stored_low: bool
    turned: tuple[bool, ...] = ()
    values: dict[str, list[int]] = None

    @property
    def gates(self):
        return {"jk": "jk", "sr": "sr"}.get(self.register, "")


class Part:
    """A device file and links for one design."""

    def __init__(self, rng, design, shape):
        self.rng, self.design, self.shape = rng, design, shape
        machine = design.machine
        self.state_bits = (
            [f"stage[{i}]" for i in range((len(machine.states) - 1).bit_length())]
            if machine
            else []
        )
        self.order = [*design.input_names, *design.registered_names, *self.state_bits]
        self.points = 1 << len(self.order)
        self.pin = {name: i for i, name in enumerate([*design.input_names, "clk"], 1)}
        for name in design.output_names:
            self.pin[name] = len(self.pin) + 1
        self.cells = []
        for name in [*design.registered_names, *self.state_bits]:
            kind = rng.choice(["d", "t", "jk", "sr"])
            key = self.pin.get(name, f"n{len(self.cells)}")
            turned = tuple(rng.random() < 0.3 for _ in kind)
            self.cells.append(Cell(name, key, kind, rng.random() < 0.5, turned))
        for name in design.output_names:
            if name not in design.registered_names:
                self.cells.append(Cell(name, self.pin[name], None, rng.random() < 0.5))
        for cell in self.cells:
            cell.values = self.sums(cell)

    def state_at(self, point):
        return point >> len(self.order) - len(self.state_bits)

    def wanted(self, name, point):
        """Asserted next value or value; what is left open is anything."""
        design, found = self.design, FREE
        inputs = point % design.input_points
        if name in self.state_bits or (design.machine and name in design.machine.outputs):
            machine, state = design.machine, self.state_at(point)
            if state < len(machine.states) and name in self.state_bits:
                found = machine.then[state][inputs] >> self.state_bits.index(name) & 1
            elif state < len(machine.states):
                found = machine.outputs[name][state][inputs]
        else:
            found = design.table[name][point % design.points]
        return self.rng.randint(0, 1) if found is FREE else found

    def sums(self, cell):
        """Of each sum of a cell its value at every point."""
        gates = cell.gates or ("" if cell.register is None else cell.register)
        found = {gate: [] for gate in gates or [""]}
        for point in range(self.points):
            value = self.wanted(cell.name, point) ^ cell.stored_low
            if cell.register is None:
                found[""].append(value)
                continue
            q = (point >> self.order.index(cell.name) & 1) ^ cell.stored_low
            any_ = self.rng.randint(0, 1)
            taken = {
                "d": [value],
                "t": [value ^ q],
                "jk": [value, any_] if q == 0 else [any_, 1 - value],
                "sr": [value & (1 - q | any_), (1 - value) & (q | any_)],
            }[cell.register]
            for gate, level, turned in zip(gates, taken, cell.turned, strict=True):
                found[gate].append(level ^ turned)
        return found

    def literals(self, where):
        """The product that is 1 there, as lines of the inputs."""
        bits = range(len(self.design.input_names))
        points = [p for p, on in enumerate(where) if on]
        same = {b: {p >> b & 1 for p in points} for b in bits}
        fixed = {b: values.pop() for b, values in same.items() if len(values) == 1}
        assert len(points) == 1 << len(bits) - len(fixed)
        return {self.line(self.design.input_names[b], value) for b, value in fixed.items()}

    def line(self, name, value):
        """The line that is 1 when an input or a state is so asserted."""
        if name in self.design.input_names:
            return f"{self.pin[name]}" + "'" * (value == self.design.active_low[name])
        cell = next(c for c in self.cells if c.name == name)
        return f"{cell.key}" + "'" * (value == cell.stored_low)

    def build(self):
        """Device file and the state of each fuse; a link that reads 1 joins."""
        design = self.design
        columns = [
            f"{line}{prime}"
            for name in self.order
            for line in [self.line(name, 1).removesuffix("'")]
            for prime in ("", "'")
        ]
        entries = [(c, gate) for c in self.cells for gate in (c.gates or [""])]
        words = [f"{c.key}.{gate}" if gate else str(c.key) for c, gate in entries]
        width = len(columns) + len(entries)
        rows = []
        for point in range(self.points):
            joined = {self.line(name, point >> i & 1) for i, name in enumerate(self.order)}
            links = [int(column in joined) for column in columns]
            links += [c.values[gate or c.register or ""][point] for c, gate in entries]
            rows.append(links)
        control_rows = []
        kinds = []
        for index, cell in enumerate(self.cells):
            kinds += self.kind(index, cell, control_rows)
        fuses = [state for row in rows for state in row]
        for joined in control_rows:
            fuses += [int(column in joined) for column in columns] + [0] * len(entries)
        spare = [
            (self.points + i) * width + len(columns) + j
            for i in range(len(control_rows))
            for j in range(len(entries))
        ]
        pins = max(self.pin.values()) + 2
        text = f"""
name = "made"
technology = "erasable"
pins = {pins}
ground = {pins - 1}
power = {pins}
fuses = {len(fuses)}
spare = {spare}
[links]
blank = 0
connected = 1
unused_term = "dead"
unused_control = "off"
[and]
columns = "{" ".join(columns)}"
terms = {self.points + len(control_rows)}
first_fuse = 0
term_step = {width}
[or]
columns = "{" ".join(words)}"
terms = "0..{self.points - 1}"
first_fuse = {len(columns)}
term_step = {width}
[register]
clock = {{ pin = {self.pin["clk"]}, edge = "{"falling" if self.shape.falling else "rising"}" }}
power_up = "unknown"
"""
        assert design.clock.name == "clk"
        return text + "\n".join(kinds) + "\n", fuses

    def kind(self, index, cell, control_rows):
        design = self.design
        shown = "sum" if cell.register is None else "q"
        mode = ['set = ""']
        if isinstance(cell.key, int):
            prime = cell.stored_low != design.active_low[cell.name]
            mode.append(f'pin = "{shown}' + "'" * prime + '"')
        lines = [f"[kind.k{index}]"]
        place = f"pin = {cell.key}" if isinstance(cell.key, int) else f'name = "{cell.key}"'
        keys = [place, "links = []"]
        if cell.register is not None:
            for name, turned in zip(cell.register, cell.turned, strict=True):
                mode.append(f'{name} = "sum' + "'" * turned + '"')
            mode.append('feedback = "q"')
            start, acting = self.start_and_controls(cell)
            if start is not None:
                lines.append(f"register = {{ power_up = {start ^ cell.stored_low} }}")
            for value, when in acting:
                what = "preset" if value ^ cell.stored_low else "reset"
                said = "asynchronous" if when.asynchronous else "clock"
                keys.append(
                    f'{what} = {{ term = {self.points + len(control_rows)}, when = "{said}" }}'
                )
                control_rows.append(self.literals(when.where))
        if cell.name in design.drives:
            (line,) = self.literals(design.drives[cell.name])
            pin = line.removesuffix("'")
            level = "high" if line == pin else "low"
            lines.append(f'enable = {{ pin = {pin}, active = "{level}" }}')
        lines += [
            "bits = []",
            "modes = [ { " + ", ".join(mode) + " } ]",
            "cells = [ { " + ", ".join(keys) + " } ]",
        ]
        return lines

    def start_and_controls(self, cell):
        """What the register holds at power-up; (value, when) of what resets and presets it."""
        design = self.design
        if cell.name in self.state_bits:
            bit = design.machine.start >> self.state_bits.index(cell.name) & 1
            return bit, [(bit, design.machine.reset)] * (design.machine.reset is not None)
        acting = [(0, design.resets.get(cell.name)), (1, design.presets.get(cell.name))]
        return design.starts[cell.name], [(v, when) for v, when in acting if when is not None]


def random_shape(rng):
    inner = rng.choice([0, 0, 1, 2])
    return ClockedShape(
        inputs=rng.randint(2, 3),
        registered=rng.randint(1, 2),
        plain=rng.randint(1, 3),
        inner=inner,
        states=rng.choice([0, 2, 3, 4] if inner else [0, 3, 4, 5]),
        falling=rng.random() < 0.5,
        reset=rng.choice([None, "asynchronous", "clock"]),
        preset=rng.choice([None, None, "asynchronous", "clock"]),
        enable_level=rng.choice([None, None, 0, 1]),
        starts=rng.random() < 0.8,
    )


def differences(design, part, shape, states, device, rng):
    run = ClockedRun(design, part.pin, falling=shape.falling, sequences=SEQUENCES, clocks=CLOCKS)
    return run.differences(device, states, rng)


@pytest.mark.parametrize("seed", range(24))
def test_a_part_with_a_row_for_every_point(seed):
    rng = random.Random(f"clocked design {seed}")
    shape = random_shape(rng)
    design = random_clocked_design(rng, shape)
    part = Part(rng, design, shape)
    text, states = part.build()
    device = read_device(text)
    fuses, pins = device.role_counts()
    assert set(fuses.values()) == set(pins.values()) == {1}
    assert differences(design, part, shape, states, device, rng) == []


def test_flipped_links_show():
    """The comparison has teeth: many links matter, also in rows that are seldom met."""
    shape = ClockedShape(inputs=2, registered=2, plain=1, reset="asynchronous")
    shown = 0
    for seed in range(3):
        rng = random.Random(f"teeth {seed}")
        design = random_clocked_design(rng, shape)
        part = Part(rng, design, shape)
        text, states = part.build()
        device = read_device(text)
        run = ClockedRun(design, part.pin, falling=shape.falling, sequences=5, clocks=16)
        assert run.differences(device, states, random.Random(1)) == []
        for fuse in rng.sample(range(len(states)), 8):
            changed = [state ^ (number == fuse) for number, state in enumerate(states)]
            shown += run.differences(device, changed, random.Random(1)) != []
    assert shown >= 6


@cache
def many_designs():
    rngs = [random.Random(f"clocked design {seed}") for seed in range(80)]
    return [random_clocked_design(rng, random_shape(rng)) for rng in rngs]


# What comes about, and in how many of 80 designs at least.
MARKS = [
    pytest.param(lambda d: "register" in d.text, 80, id="registers"),
    pytest.param(lambda d: d.machine, 40, id="state-tables"),
    pytest.param(lambda d: d.inner, 25, id="inner-registers"),
    pytest.param(lambda d: d.resets or d.presets, 30, id="resets-and-presets"),
    pytest.param(lambda d: d.resets and d.presets, 8, id="both"),
    pytest.param(lambda d: any(a.asynchronous for a in d.resets.values()), 15, id="asynchronous"),
    pytest.param(lambda d: any(not a.asynchronous for a in d.resets.values()), 12, id="at-clock"),
    pytest.param(lambda d: d.machine and d.machine.reset, 15, id="state-table-with-reset"),
    pytest.param(lambda d: d.drives, 25, id="enables"),
    pytest.param(lambda d: {0, 1} <= set(d.starts.values()), 15, id="starts"),
    pytest.param(lambda d: None in d.starts.values(), 20, id="start-left-open"),
    pytest.param(lambda d: "clk'" in d.text, 20, id="falling-edge"),
    pytest.param(lambda d: d.clock.active_low, 12, id="active-low-clock"),
    pytest.param(lambda d: any(d.never), 5, id="impossible-inputs"),
    pytest.param(lambda d: 'codes = "free"' in d.text, 5, id="free-codes"),
    pytest.param(lambda d: 'codes = "one-hot"' in d.text, 5, id="one-hot-codes"),
    pytest.param(lambda d: "codes = {" in d.text, 5, id="codes-in-a-table"),
    pytest.param(lambda d: 'unused = "start"' in d.text, 10, id="unused-codes"),
    pytest.param(lambda d: None in {v for row in d.table.values() for v in row}, 20, id="open"),
    pytest.param(
        lambda d: (
            any(
                name in d.text.split("[logic]")[-1].split("=", 1)[-1] for name in d.registered_names
            )
            and "[logic]" in d.text
        ),
        40,
        id="present-values",
    ),
]


@pytest.mark.parametrize(("mark", "least"), MARKS)
def test_what_designs_have(mark, least):
    assert sum(bool(mark(design)) for design in many_designs()) >= least


def test_the_same_seed_gives_the_same_design():
    shape = ClockedShape(inner=2, states=4, reset="clock")
    first, again = (random_clocked_design(random.Random(5), shape) for _ in range(2))
    assert first.text == again.text
    assert first.table == again.table


@pytest.mark.parametrize("name", ["reset", "preset"])
def test_a_follower_forgets_what_is_not_held(name):
    """Without a start everything is open until a reset or preset closes it."""
    shape = ClockedShape(inputs=2, registered=1, plain=1, starts=False, **{name: "asynchronous"})
    seen = set()
    for seed in range(40):
        design = random_clocked_design(random.Random(seed), shape)
        (output,) = design.registered_names
        acting = (design.resets if name == "reset" else design.presets).get(output)
        for point in range(design.input_points):
            held = Follower(design, point).held[output]
            acts = acting is not None and acting.where[point]
            assert held == (int(name == "preset") if acts else None)
            seen.add(held)
    assert seen == {None, int(name == "preset")}


@pytest.mark.parametrize("which", CLOCKED_CLASSES)
def test_shapes_for_each_class_of_devices(which):
    found = []
    for seed in range(25):
        rng = random.Random(f"{which} shape {seed}")
        (text,) = random_clocked_device(rng, which).files.values()
        device = read_device(text)
        shape = random_clocked_shape(rng, device)
        design = random_clocked_design(rng, shape)
        assert len(design.registered_names) == shape.registered + shape.inner
        assert len(design.output_names) <= len(device.cell_pins)
        assert shape.falling == device.registers[0].falling
        found.append(design)
    assert sum(bool(design.registered or design.inner) for design in found) >= 15
    assert sum(bool(design.machine) for design in found) >= 3
    assert sum(bool(design.plain) for design in found) >= 15
