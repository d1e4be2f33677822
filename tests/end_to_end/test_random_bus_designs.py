"""Random designs with enables, bidirectional pins and inner signals are read as they are meant.

The generator's tables against the reader: where they agree, what a later stage gets wrong is its
own.
"""

import random
from pathlib import Path

import pytest
from random_bus_designs import Shape, random_bus_design
from random_designs import FREE

from pla.behaviour.reader import read_behaviour


def random_case(seed: int, folder: Path):
    rng = random.Random(f"bus {seed}")
    shape = Shape(
        inputs=rng.randint(3, 6),
        outputs=rng.randint(1, 5),
        span=rng.choice([2, 3, 4]),
        enabled=rng.randint(0, 3),
        enabled_by=rng.choice(["product", "input"]),
        enable_active=rng.choice(["low", "high"]),
        bidirectional=rng.randint(0, 3),
        inner=rng.randint(0, 2),
        signature=rng.randint(0, 4),
    )
    design = random_bus_design(rng, shape)
    path = folder / "design.toml"
    path.write_text(design.text, encoding="utf-8")
    return design, read_behaviour(str(path))


def holds(cover, output, point):
    return any(
        cube.outputs >> output & 1 and not cube.ones & ~point and not cube.zeros & point
        for cube in cover
    )


def value(on, off, output, point):
    """1, 0 or free; never both."""
    found = holds(on, output, point), holds(off, output, point)
    assert found != (True, True)
    return {(True, False): 1, (False, True): 0, (False, False): FREE}[found]


@pytest.mark.parametrize("seed", range(40))
def test_reader_and_generator_agree(seed, tmp_path):
    design, behaviour = random_case(seed, tmp_path)
    assert list(behaviour.input_names) == [*design.input_names, *design.read_names]
    assert list(behaviour.output_names) == design.output_names
    assert (behaviour.signature or "") == design.signature
    for index, output in enumerate(behaviour.outputs):
        assert output.reads == design.reads.get(output.name)
        function = behaviour.function
        found = [value(function.on, function.off, index, p) for p in range(design.points)]
        assert found == design.table[output.name], output.name
        if output.name not in design.drives:
            assert output.enable is None
            continue
        enable = output.enable
        drives = [value(enable.on, enable.off, 0, p) for p in range(design.points)]
        assert drives == design.drives[output.name], output.name
