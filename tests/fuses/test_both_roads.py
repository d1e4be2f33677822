"""Proof by simulation, proof by cubes and a point-by-point evaluation agree on any fuses."""

import random
from collections import Counter

import pytest
from hand_plans import design, plan
from point_by_point import Point, Wiring, inverse
from small_array import small_array
from test_simulate import random_fuses

from pla.fuses import proof
from pla.fuses.proof import prove


@pytest.fixture(scope="module")
def device(tmp_path_factory):
    return small_array(tmp_path_factory.mktemp("array"))


class Case:
    """A design that is what some fuses do, with freedom where these have no value."""

    def __init__(self, device, rng):
        self.device = device
        self.fuses = random_fuses(device, rng).changed({241: 0})
        self.tied = {5: rng.randrange(2)} if rng.random() < 0.4 else {}
        self.pins = {f"i{pin}": pin for pin in (1, 2, 3, 4, 5) if pin not in self.tied}
        self.low = {name: rng.random() < 0.3 for name in self.pins}
        cells = [7, 8, 9, 10, 11]
        rng.shuffle(cells)
        self.outputs = {f"o{pin}": pin for pin in sorted(cells[: rng.randint(1, 4)])}
        self.low |= {name: rng.random() < 0.3 for name in self.outputs}
        both = [o for o in self.outputs if rng.random() < 0.4]
        self.reads = {f"{name}_in": name for name in both}
        self.pins |= {name: self.outputs[of] for name, of in self.reads.items()}
        self.low |= {name: self.low[of] for name, of in self.reads.items()}
        if rng.random() < 0.4:
            # The pin of a cell that has no output serves as an input.
            self.pins["spare"] = cells[-1]
            self.low["spare"] = rng.random() < 0.3
        order = [name for name in self.pins if name not in self.reads]
        self.inputs = [*order, *self.reads]
        self.design = self.designed(rng)

    def at(self, wiring, point, rule):
        outside = {pin: (level, "holds") for pin, level in self.tied.items()}
        for bit, name in enumerate(self.inputs):
            level = (point >> bit & 1) ^ self.low[name]
            outside[self.pins[name]] = (level, rule if name in self.reads else "holds")
        return Point(wiring, outside)

    def designed(self, rng):
        points = range(1 << len(self.inputs))
        wiring = Wiring(self.device, self.fuses.states)
        made = [self.at(wiring, point, "free") for point in points]
        outputs = []
        for name, pin in self.outputs.items():
            cell = self.device.cell_of_pin[pin]
            shown = [at.shown(cell) for at in made]
            values = [inverse(v) if self.low[name] else v for v in shown]
            driven = [at.driven(cell) for at in made]
            on, off = (
                [p for p in points if values[p] == value and rng.random() < 0.9] for value in (1, 0)
            )
            enable = tuple({p for p in points if driven[p] == does} for does in (1, 0))
            if len(enable[0]) == len(points) and rng.random() < 0.5:
                enable = None
            reads = next((i for i, of in self.reads.items() if of == name), None)
            outputs.append((name, self.low[name], on, off, enable, reads))
        self.wanted = {o[0]: (set(o[2]), set(o[3]), o[4]) for o in outputs}
        inputs = [(name, self.low[name], self.reads.get(name)) for name in self.inputs]
        return design(inputs, outputs)

    def plan(self):
        return plan(
            self.device, self.design, self.pins | self.outputs, tied=tuple(self.tied.items())
        )

    def wrong(self, fuses):
        """What is at fault at any point; and outputs that may hold themselves."""
        found, held = set(), set()
        wiring = Wiring(self.device, fuses.states)
        for point in range(1 << len(self.inputs)):
            made = self.at(wiring, point, "free")
            for name, (on, off, enable) in self.wanted.items():
                cell = self.device.cell_of_pin[self.outputs[name]]
                if point in on | off and made.shown(cell) != (point in on) ^ self.low[name]:
                    found.add((name, "value"))
                drives, rests = ({point}, ()) if enable is None else enable
                if (point in drives or point in rests) and made.driven(cell) != (point in drives):
                    found.add((name, "drive"))
            if "spare" in self.pins:
                cell = self.device.cell_of_pin[self.pins["spare"]]
                if made.driven(cell) != 0:
                    found.add(("spare", "contention"))
            held |= self.held(wiring, point)
        return found, held

    def held(self, wiring, point):
        """Outputs without a value although every bidirectional pin may have its level."""
        made = self.at(wiring, point, "yields")
        for bit, name in enumerate(self.inputs):
            level = made.levels.get(self.pins[name])
            if name in self.reads and level not in {None, (point >> bit & 1) ^ self.low[name]}:
                return set()
        found = set()
        for name, (on, off, enable) in self.wanted.items():
            cell = self.device.cell_of_pin[self.outputs[name]]
            switched = on | off if enable is None else enable[0] | enable[1]
            if (point in on | off and made.shown(cell) is None) or (
                point in switched and made.driven(cell) is None
            ):
                found.add(name)
        return found

    def check(self, found, fuses):
        """A counterexample is one."""
        if found.point is None:
            return
        wiring = Wiring(self.device, fuses.states)
        made = self.at(wiring, found.point, "yields" if found.fault == "held" else "free")
        pin = (self.outputs | self.pins)[found.output]
        cell = self.device.cell_of_pin[pin]
        if found.fault == "value":
            assert made.shown(cell) ^ self.low[found.output] == 1 - found.expected
        elif found.fault == "held":
            assert None in {made.shown(cell), made.driven(cell)}
        elif found.fault == "contention":
            assert made.driven(cell) != 0
        else:
            enable = self.wanted[found.output][2]
            assert made.driven(cell) != (enable is None or found.point in enable[0])


def compared(device, seed, monkeypatch):
    """Faults found over some turned fuses, and how often there was none."""
    rng = random.Random(seed)
    case = Case(device, rng)
    laid_out = case.plan()
    verdicts = Counter()
    for flips in [[], *([rng.randrange(241)] for _ in range(9))]:
        fuses = case.fuses.changed({fuse: 1 - case.fuses[fuse] for fuse in flips})
        by_simulation = prove(laid_out, fuses)
        with monkeypatch.context() as patch:
            patch.setattr(proof, "MAX_DENSE_INPUTS", -1)
            by_cubes = prove(laid_out, fuses)
        assert (by_simulation.method, by_cubes.method) == ("simulation", "cubes")
        wrong, held = case.wrong(fuses)
        faults = [p.counterexample and p.counterexample.fault for p in (by_simulation, by_cubes)]
        assert faults[0] == faults[1]
        if wrong:
            assert faults[0] is not None
            name = by_simulation.counterexample.output
            kind = {"undefined": "value"}.get(faults[0], faults[0])
            assert (name, kind) in wrong
            assert by_cubes.counterexample.output == name
        elif held:
            # Unknown may also be a level that is one or the other, and then nothing is wrong.
            assert faults[0] in {"held", None}
        else:
            assert faults[0] is None
        for found in (by_simulation.counterexample, by_cubes.counterexample):
            if found is not None:
                case.check(found, fuses)
        verdicts[faults[0]] += 1
    return verdicts


def test_random_fuses(device, monkeypatch):
    verdicts = Counter()
    for seed in range(16):
        verdicts += compared(device, seed, monkeypatch)
    assert verdicts[None] > 16
    for fault in ("value", "drive", "undefined", "contention"):
        assert verdicts[fault] > 1, verdicts


@pytest.mark.slow
@pytest.mark.parametrize("start", range(100, 1000, 100))
def test_more_random_fuses(device, start, monkeypatch):
    verdicts = Counter()
    for seed in range(start, start + 100):
        verdicts += compared(device, seed, monkeypatch)
    assert verdicts[None]
