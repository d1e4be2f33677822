"""Random designs on random arrays: the fuse file, simulated link by link, does what was asked.

The design's truth table comes from the generator, the levels of the pins from the oracle; of the
program only the written file and the pin list of ``--json`` are used.
"""

import json
import random
import re
from dataclasses import dataclass
from pathlib import Path

import pytest
from device_factory import RandomDevice, random_device
from oracles.array_oracle import Array, output_levels, read_array, read_transmission
from random_designs import FREE, RandomDesign, placed, random_design

from pla.cli.main import run

RUNS = [pytest.param(seed, marks=[pytest.mark.slow] if seed >= 40 else []) for seed in range(200)]


@dataclass
class Case:
    """A random design, its places, and the array it shall go to."""

    design: RandomDesign
    made: RandomDevice
    array: Array
    places: dict[str, int]
    polarity: str
    path: Path
    device: Path


def random_case(seed: int, folder: Path) -> Case:
    rng = random.Random(f"plan {seed}")
    design = random_design(rng)
    n_inputs, n_outputs = len(design.input_names), len(design.output_names)
    tight = rng.random() < 0.15
    made = random_device(
        rng,
        inputs=max(
            1, n_inputs + (-1 if tight and rng.random() < 0.3 else rng.choice([0, 0, 1, 2]))
        ),
        outputs=max(1, n_outputs + (-1 if tight and rng.random() < 0.3 else rng.choice([0, 0, 1]))),
        terms=rng.randint(1, 4) if tight else design.points // 2 + rng.randint(1, 4),
    )
    places = {}
    for names, pins in ((design.input_names, made.inputs), (design.output_names, made.outputs)):
        pairs = zip(rng.sample(names, len(names)), rng.sample(pins, len(pins)), strict=False)
        if rng.random() < 0.4:
            places |= dict(list(pairs)[: rng.randint(1, 3)])
    path, device = folder / "design.toml", folder / "array.toml"
    text = placed(design, made.name, places) if places else design.text
    path.write_text(text, encoding="utf-8")
    device.write_text(made.text, encoding="utf-8")
    array = read_array(made.text)
    polarity = "true" if rng.random() < 0.2 else "free"
    return Case(design, made, array, places, polarity, path, device)


@pytest.mark.parametrize("seed", RUNS)
def test_fuse_file_of_a_random_design_does_what_was_asked(seed, tmp_path, capsys):
    case = random_case(seed, tmp_path)
    code, document = plan(case, tmp_path / "out", capsys)
    if code == 1:
        check_refusal(case, document, tmp_path)
        return
    assert code == 0
    assert document["fits"]
    assert document["reasons"] == []
    data = (tmp_path / "out" / "design.jed").read_bytes()
    check_fuse_file(case, document, read_transmission(data))
    check_pin_list(case, document, data, (tmp_path / "out" / "pin-list.txt").read_text("utf-8"))


def plan(case, folder, capsys):
    options = ["--device", str(case.device), "-o", str(folder), "--polarity", case.polarity]
    code = run(["plan", str(case.path), *options, "--json"])
    shown = capsys.readouterr()
    assert code in {0, 1}, shown.err
    return code, json.loads(shown.out)


def check_fuse_file(case, document, file):
    design, array = case.design, case.array
    assert file.pins == array.pins
    assert document["fuse_checksum"] == f"{checksum(file.states):04X}"
    check_pins(case, document["pins"])
    levels, actual = simulated(case, document["pins"], file.states)
    inverted = design.active_low
    # The oracle ran two cases a point: the pins without a signal are once low, once anything.
    for name, wanted in zip(design.output_names, design.table, strict=True):
        for point, value in enumerate(wanted):
            for run_at in (point, point + design.points):
                got = (levels[document["pins"][name]] >> run_at & 1) ^ inverted[name]
                assert value is FREE or got == value, f"{name} at {point:b}"
    check_terms(design, document, actual)
    fed = {
        term
        for fuses in array.sums.values()
        for term, f in enumerate(fuses)
        if joined(case, file, f)
    }
    live = [t for t in fed if not dead(case, file, t)]
    assert len(live) == document["count"] == document["budget"]["terms"]["used"]
    assert document["count"] <= case.made.terms == document["budget"]["terms"]["available"]


def simulated(case, pins, states):
    """Levels of all output pins, and for each output its asserted value at every point."""
    design = case.design
    cases = 2 * design.points
    rng = random.Random(1)
    levels = {pin: rng.getrandbits(design.points) << design.points for pin in case.array.inputs}
    for index, name in enumerate(design.input_names):
        if name in pins:
            asserted = sum(1 << c for c in range(cases) if c >> index & 1)
            levels[pins[name]] = asserted ^ (((1 << cases) - 1) if design.active_low[name] else 0)
    found = output_levels(case.array, states, levels, cases)
    everywhere = (1 << design.points) - 1
    actual = {
        name: (found[pins[name]] ^ (-1 if design.active_low[name] else 0)) & everywhere
        for name in design.output_names
    }
    return found, actual


def joined(case, file, fuse):
    return file.states[fuse] == case.array.connected


def dead(case, file, term):
    lines = {
        (pin, prime) for fuse, pin, prime in case.array.lines[term] if joined(case, file, fuse)
    }
    return any((pin, not prime) in lines for pin, prime in lines)


def checksum(states):
    return sum(state << fuse % 8 for fuse, state in enumerate(states)) % 65536


def check_pins(case, pins):
    """Every signal on a pin of its kind, none twice, each place kept."""
    design, array = case.design, case.array
    assert len(set(pins.values())) == len(pins)
    assert {k: v for k, v in pins.items() if k in case.places} == case.places
    for name in design.output_names:
        assert pins[name] in array.cells
    for name, pin in pins.items():
        assert name in design.output_names or (name in design.input_names and pin in array.inputs)
    if len(design.input_names) <= len(array.inputs):
        assert set(pins) == {*design.input_names, *design.output_names}


def check_pin_list(case, document, data, text):
    """The table for people: every signal beside its pin; idle output pins do what it says."""
    rows = {int(line.split()[0]): line for line in text.splitlines() if re.match(r" *\d+ ", line)}
    assert list(rows) == list(range(1, case.array.pins + 1))
    for name, pin in document["pins"].items():
        words = rows[pin].split()
        assert words[1] == name
        assert words[2] == ("output" if name in case.design.output_names else "input")
        assert words[3] == ("low" if case.design.active_low[name] else "high")
    levels, _ = simulated(case, document["pins"], read_transmission(data).states)
    always = {"low": 0, "high": (1 << 2 * case.design.points) - 1}
    for pin in set(case.array.cells) - set(document["pins"].values()):
        claimed = re.search(r"drives it (low|high)", rows[pin])
        assert levels[pin] == always[claimed[1]]


def check_terms(design, document, actual):
    """The printed terms are the function that is in the links, don't cares included."""
    for name in design.output_names:
        terms = [t["inputs"] for t in document["terms"] if name in t["outputs"]]
        for point in range(design.points):
            total = any(
                all(sign in ("-", str(point >> i & 1)) for i, sign in enumerate(term))
                for term in terms
            )
            assert actual[name] >> point & 1 == total ^ (name in document["complemented"])


def check_refusal(case, document, folder):
    """Nothing is written, and the reason is not one that plain counting contradicts."""
    assert document["fits"] is False
    assert document["reasons"]
    assert document["files"] == []
    assert document["pins"] is None
    assert not list(folder.rglob("*.jed"))
    design, array = case.design, case.array
    if len(design.input_names) > len(array.inputs) or len(design.output_names) > len(array.cells):
        return
    if not cells_can_serve(case):
        assert "polarity" in " ".join(document["reasons"]).lower()
        return
    # One row a point is always enough, so with that many rows nothing would have been refused.
    assert case.made.terms < design.points
    assert document["count"] > case.made.terms
    assert not document["proven"] or document["lower_bound"] == document["count"]


def cells_can_serve(case):
    """Whether the outputs can be given cells, by trying all ways."""
    design = case.design
    usable = {
        name: [
            pin
            for pin, (_, shows) in case.array.cells.items()
            if case.places.get(name, pin) == pin
            and (pin not in case.places.values() or case.places.get(name) == pin)
            and (
                case.polarity == "free"
                or ("sum'" if design.active_low[name] else "sum") in shows.values()
            )
        ]
        for name in design.output_names
    }

    def settle(names, taken):
        if not names:
            return True
        return any(settle(names[1:], taken | {p}) for p in usable[names[0]] if p not in taken)

    return settle(design.output_names, set())
