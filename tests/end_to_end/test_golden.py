"""Fuse files worked out by hand (see golden/*.md), byte for byte."""

from pathlib import Path

import pytest
from oracles.array_oracle import every_case, output_levels, read_array, read_transmission

from pla.cli.main import run

HERE = Path(__file__).parent
GOLDEN = HERE / "golden"
DEVICES = HERE.parents[1] / "devices"

FILES = [
    pytest.param("cistern.toml", "shared-8x16x4", "cistern.jed", id="cistern"),
    pytest.param("saw_bench.toml", "shared-16x48x8", "saw_bench-16x48x8.jed", id="saw-bench-dead"),
    pytest.param("saw_bench.toml", "shared-14x40x8", "saw_bench-14x40x8.jed", id="saw-bench-blank"),
]


@pytest.fixture(autouse=True)
def _version(monkeypatch):
    monkeypatch.setattr("pla.fuses.program.__version__", "0.1.0")


@pytest.mark.parametrize(("design", "device", "golden"), FILES)
def test_planned_file_is_the_one_worked_out_by_hand(design, device, golden, tmp_path):
    code = run(["plan", str(GOLDEN / design), "--device", device, "-o", str(tmp_path / "out")])
    assert code == 0
    written = (tmp_path / "out" / design).with_suffix(".jed").read_bytes()
    assert written == (GOLDEN / golden).read_bytes()


def levels_of(device, golden, inputs):
    """Levels of the output pins for each combination of `inputs`; all others are low."""
    array = read_array((DEVICES / f"{device}.toml").read_text(encoding="utf-8"))
    states = read_transmission((GOLDEN / golden).read_bytes()).states
    levels = dict.fromkeys(array.inputs, 0) | every_case(inputs)
    cases = 1 << len(inputs)
    found = output_levels(array, states, levels, cases)
    return [{pin: level >> case & 1 for pin, level in found.items()} for case in range(cases)]


def test_cistern_does_what_its_table_says():
    levels = levels_of("shared-8x16x4", "cistern.jed", [1, 2, 3, 4])
    for case, pins in enumerate(levels):
        level, hatch, call = 2 * (case & 1) + (case >> 1 & 1), not case >> 2 & 1, case >> 3 & 1
        if level == 3:
            continue
        assert pins == {
            10: int(level in (1, 2) and not hatch and call),
            11: int(level == 1 and not hatch and call),
            12: int(level == 0),
            13: int(not (hatch and call)),
        }


@pytest.mark.parametrize(
    ("device", "golden", "knee_pin", "touched_pin", "drive_pin", "lamp_pin"),
    [
        pytest.param("shared-16x48x8", "saw_bench-16x48x8.jed", 9, 18, 25, 19, id="dead"),
        pytest.param("shared-14x40x8", "saw_bench-14x40x8.jed", 8, 22, 15, 16, id="blank"),
    ],
)
def test_saw_bench_does_what_its_table_says(
    device, golden, knee_pin, touched_pin, drive_pin, lamp_pin
):
    levels = levels_of(device, golden, [1, 2, knee_pin])
    for case, pins in enumerate(levels):
        left, right, knee = case & 1, case >> 1 & 1, 1 - (case >> 2 & 1)
        if right and knee:
            assert pins[lamp_pin] == 0
            continue
        assert pins[touched_pin] == int(left or right or knee)
        assert pins[drive_pin] == 1 - (left & right)
        assert pins[lamp_pin] == int((left, right, knee) in {(1, 1, 0), (0, 0, 0)})
