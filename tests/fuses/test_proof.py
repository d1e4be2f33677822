"""The proof by simulation and the proof by cubes, held against each other and the oracle."""

import random
from pathlib import Path

import pytest
from oracles.array_oracle import output_levels, read_array

from pla.behaviour.reader import read_behaviour
from pla.device.catalogue import find_device
from pla.fitting.fit import fit
from pla.fuses import proof
from pla.fuses.link import link
from pla.fuses.proof import prove
from pla.fuses.recover import recover

TOP = Path(__file__).parents[2]
PAIRS = [
    ("dryer-panel", "shared-14x40x8"),
    ("splitter-interlock", "shared-8x16x4"),
    ("splitter-interlock", "shared-10x24x6"),
    ("sump-pumps", "shared-12x32x6"),
    ("sump-pumps", "shared-16x48x8"),
]


def planned(example, device):
    behaviour = read_behaviour(str(TOP / "examples" / f"{example}.toml"))
    found = fit(behaviour, find_device(device))
    assert found.plan is not None
    return found.plan


@pytest.mark.parametrize(("example", "device"), PAIRS)
def test_both_roads_say_what_the_oracle_says(example, device, monkeypatch):
    plan = planned(example, device)
    fuses = link(plan)
    array = read_array((TOP / "devices" / f"{device}.toml").read_text(encoding="utf-8"))
    rng = random.Random(f"{example} on {device}")
    verdicts = []
    for flips in [(), *([rng.randrange(len(fuses))] for _ in range(60))]:
        changed = fuses.changed({fuse: 1 - fuses[fuse] for fuse in flips})
        by_simulation = prove(plan, changed)
        with monkeypatch.context() as patch:
            patch.setattr(proof, "MAX_DENSE_INPUTS", -1)
            by_cubes = prove(plan, changed)
        assert (by_simulation.method, by_cubes.method) == ("simulation", "cubes")
        assert by_simulation.equal == by_cubes.equal
        verdicts.append(by_simulation.equal)
        for found in (by_simulation.counterexample, by_cubes.counterexample):
            if found is not None and found.point is not None:
                assert level_at(array, plan, changed, found) == asserted_level(plan, found)
    assert verdicts[0]
    assert False in verdicts[1:]
    assert True in verdicts[1:]


def level_at(array, plan, fuses, found):
    """The level that the oracle sees at the pin, for the inputs of a counterexample."""
    levels = dict.fromkeys(plan.device.input_pins, 0)
    for placed in plan.inputs:
        if placed.pin is not None:
            levels[placed.pin] = (found.point >> placed.index & 1) ^ placed.active_low
    (pin,) = [o.pin for o in plan.outputs if o.name == found.output]
    return output_levels(array, list(fuses.states), levels, 1)[pin] & 1


def asserted_level(plan, found):
    """The level that a wrong output has."""
    (output,) = [o for o in plan.outputs if o.name == found.output]
    return (1 - found.expected) ^ output.active_low


def test_a_link_to_a_pin_without_a_signal_is_noticed():
    plan = planned("sump-pumps", "shared-12x32x6")
    fuses = link(plan)
    array = plan.device.and_array
    column = plan.device.column_of[13, False]
    # Row 0 of the plan now waits for pin 13, which carries nothing.
    changed = fuses.changed({array.fuse(plan.rows[0], column): plan.device.links.connected})
    found = prove(plan, changed).counterexample
    assert found is not None
    assert found.point is None
    assert "carries no input" in found.text


def test_an_array_of_another_size_is_refused():
    plan = planned("sump-pumps", "shared-12x32x6")
    with pytest.raises(ValueError, match="966"):
        recover(find_device("shared-8x16x4"), link(plan))
