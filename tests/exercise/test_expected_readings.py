"""What an exercise expects at the pins, against the oracle on shipped and random devices."""

import random
from pathlib import Path

import pytest
from device_classes import CLASSES, random_class_device
from oracles.device_description import read_device_file
from oracles.fuse_file import read_transmission
from simulated_part import measured

from pla.device.catalogue import find_device
from pla.exercise.design import exercise_design
from pla.exercise.fuse_file import exercise_file, vectors
from pla.exercise.part import make_part
from pla.exercise.program import Exercised
from pla.exercise.readings import readings

DEVICES = sorted((Path(__file__).parents[2] / "devices").glob("*.toml"))


def made(path, number, variant=0):
    device = find_device(str(path))
    part = make_part(device, number, variant)
    return Exercised(part, readings(device, part), (), ())


def found_by_oracle(path, own):
    data = exercise_file(own, 1, "part.jed", with_vectors=True)
    steps = [dict(step.levels) for step in own.part.steps]
    return measured(read_device_file(path), read_transmission(data).states, steps)


@pytest.mark.parametrize("number", [1, 2, 3])
@pytest.mark.parametrize("path", DEVICES, ids=lambda path: path.stem)
def test_the_oracle_reads_what_is_expected(path, number):
    own = made(path, number)
    assert found_by_oracle(path, own) == own.expected


@pytest.mark.parametrize("path", DEVICES, ids=lambda path: path.stem)
def test_few_readings_are_unknown(path):
    signs = "".join(made(path, 1).expected.values())
    assert signs.count("?") * 10 <= len(signs)
    assert {"H", "L"} <= set(signs)


@pytest.mark.parametrize("which", CLASSES)
@pytest.mark.parametrize(
    "seed", [*range(4), *(pytest.param(n, marks=pytest.mark.slow) for n in range(4, 20))]
)
def test_random_devices(which, seed, tmp_path):
    path = random_class_device(random.Random(f"exercise {which} {seed}"), which).write(tmp_path)
    for number in (1, 2):
        own = made(path, number, seed % 2)
        assert found_by_oracle(path, own) == own.expected
        exercise_design(own, number)  # an internal error if it is not what is expected


@pytest.mark.parametrize("path", DEVICES, ids=lambda path: path.stem)
def test_vectors_say_what_the_table_says(path):
    own = made(path, 1)
    device = own.part.device
    for k, vector in enumerate(vectors(own)):
        assert len(vector) == device.pins
        for pin, sign in enumerate(vector, 1):
            if pin in own.part.steps[k].levels:
                assert sign == str(int(own.part.steps[k].levels[pin]))
            elif pin in {*device.ground, *device.power, *device.unconnected}:
                assert sign == "N"
            else:
                assert sign == own.expected[pin][k].replace("?", "X")
