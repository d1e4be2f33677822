"""Random links on random devices of every class: the program's simulation against the oracle.

No design stands behind these links, so they do what plans never do: read pins that float, close
rings, leave columns that carry nothing in live rows.
"""

import random
from pathlib import Path

import numpy as np
import pytest
from device_classes import CLASSES, random_class_device
from oracles.device_description import Description, read_device_file
from oracles.pin_simulation import LoopError, every_case, simulate

from pla.device.catalogue import find_device
from pla.fuses.evaluate import Outside
from pla.fuses.fusemap import FuseMap
from pla.fuses.recover import recover
from pla.fuses.simulate import Signal
from pla.fuses.simulate import simulate as simulate_by_program


def random_states(rng: random.Random, device: Description) -> list[int]:
    """Few lines a row, so that not everything is 0."""
    joined, apart = device.connected, 1 - device.connected
    states = [rng.randint(0, 1) for _ in range(device.fuses)]
    for fuse, state in device.mode_fuses.items():
        states[fuse] = state
    for cell in device.cells.values():
        setting = rng.choice(sorted(cell.modes))
        for fuse, state in zip(cell.links, setting, strict=True):
            states[fuse] = int(state)
    lines = [i for i, column in enumerate(device.columns) if column is not None]
    pins = [i for i in lines if not isinstance(device.columns[i], int | str)]
    for fuses in device.links:
        # Rows that see inputs only keep the number of rings small.
        among = pins if rng.random() < 0.85 else lines
        chosen = set(rng.sample(among, rng.choice([0, 1, 1, 2, 2, 3])))
        for column in lines:
            states[fuses[column]] = joined if column in chosen else apart
    for by_row in device.sums.values():
        for fuse in by_row.values():
            states[fuse] = joined if rng.random() < 0.2 else apart
    for fuse in device.drop.values():
        states[fuse] = device.dropped if rng.random() < 0.2 else 1 - device.dropped
    return states


def packed(cases: int, levels: int) -> np.ndarray:
    return np.frombuffer(levels.to_bytes(cases // 8, "little"), dtype=np.uint8)


def number(levels: np.ndarray) -> int:
    return int.from_bytes(levels.tobytes(), "little")


def simulated(which: str, seed: int, folder: Path):
    """What the oracle says, and what the program says."""
    rng = random.Random(f"{which} fuses {seed}")
    path = random_class_device(rng, which).write(folder)
    device = read_device_file(path)
    states = random_states(rng, device)
    # One input in five floats.
    pins = [p for p in {*device.input_pins, *device.enable_pins} if rng.random() < 0.8]
    pins = sorted(pins)[:8]
    cases = max(8, 1 << len(pins))
    everywhere = (1 << cases) - 1
    levels = every_case([*pins, 0, -1, -2][: max(3, len(pins))])
    drivers = {pin: (everywhere, levels[pin]) for pin in pins}
    given = {
        pin: Outside(Signal.of(packed(cases, level))) for pin, level in levels.items() if pin > 0
    }
    realised = recover(find_device(str(path)), FuseMap(bytes(states)))
    by_program = simulate_by_program(realised, given, cases // 8)
    try:
        return simulate(device, states, drivers, cases), by_program
    except LoopError:
        return None, by_program


@pytest.mark.parametrize("which", CLASSES)
def test_simulation_by_program_and_by_oracle(which, tmp_path):
    rings = 0
    for seed in range(40):
        folder = tmp_path / str(seed)
        folder.mkdir()
        true, found = simulated(which, seed, folder)
        assert bool(found.rings) == (true is None)
        if true is None:
            rings += 1
            continue
        for key, value in true.sums.items():
            signal = found.sums[key]
            assert (number(signal.high), number(signal.low)) == (value.high, value.low)
        for pin, signal in found.levels.items():
            level = true.pins[pin]
            assert (number(signal.high), number(signal.low)) == (level.high, level.low)
    assert rings < 30
