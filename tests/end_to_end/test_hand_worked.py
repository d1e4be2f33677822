"""Single fuses and whole fuse files worked out by hand, one device of each structural class.

The workings stand in hand_worked/*.md, the fuses as tables that are read here, the files beside.
"""

import re
from pathlib import Path

import pytest
from oracles.device_description import read_device_file
from oracles.fuse_file import read_transmission
from oracles.pin_simulation import every_case, signature_text, simulate

from pla.cli.main import run
from pla.device.blocks import role_of
from pla.device.catalogue import find_device

HAND_WORKED = Path(__file__).parent / "hand_worked"
DEVICES = Path(__file__).parents[2] / "devices"

DESIGNS = {
    "bottle_lane": "own-9x5",
    "barrier": "modal-8x4-gated",
    "silo_blower": "varied-11x5",
    "kiln_burner": "shared-10x28x4",
    "bench_supply": "gate-9x6",
    "press_guard": "swap-8x4",
    "pump_house": "joint-10x27x6",
}

HEAD = ["fuse", "kind", "term", "column", "line", "cell", "bit", "working"]


def worked_fuses():
    """(device, row of its table) for every fuse that the workings list."""
    for device in DESIGNS.values():
        text = (HAND_WORKED / f"{device}.md").read_text(encoding="utf-8")
        heading = re.search(r"^## Ten fuses of `(.+)`$", text, re.MULTILINE)
        lines = iter(text[heading.end() :].splitlines())
        table = [next(line for line in lines if line.startswith("|"))]
        for line in lines:
            if not line.startswith("|"):
                break
            table.append(line)
        head, _, *rows = [[cell.strip() for cell in line.strip("|").split("|")] for line in table]
        assert head == HEAD
        for row in rows:
            yield heading[1], dict(zip(HEAD, row, strict=True))


def number_or_name(text):
    return int(text) if text.isdigit() else text


FUSES = list(worked_fuses())


def test_there_are_ten_different_fuses_of_each_class():
    listed = [(device, row["fuse"]) for device, row in FUSES]
    assert len(set(listed)) == len(listed) == 10 * len(DESIGNS)


@pytest.mark.parametrize(
    ("device", "worked"), [pytest.param(d, w, id=f"{d}-{w['fuse']}") for d, w in FUSES]
)
def test_a_fuse_does_what_was_worked_out(device, worked):
    role = role_of(find_device(device), int(worked["fuse"]))
    assert role.kind == worked["kind"]
    if worked["term"]:
        assert role.term == int(worked["term"])
    if worked["column"]:
        assert role.column == int(worked["column"])
    if worked["kind"] == "and":
        assert ("." if role.line is None else str(role.line)) == worked["line"]
    if worked["cell"]:
        assert role.key == number_or_name(worked["cell"])
    if worked["bit"]:
        assert role.bit == worked["bit"]


@pytest.fixture
def _version(monkeypatch):
    monkeypatch.setattr("pla.fuses.program.__version__", "0.1.0")


@pytest.mark.usefixtures("_version")
@pytest.mark.parametrize(
    ("design", "device"), [pytest.param(d, v, id=v) for d, v in DESIGNS.items()]
)
def test_planned_file_is_the_one_worked_out_by_hand(design, device, tmp_path):
    source, golden = HAND_WORKED / f"{design}.toml", HAND_WORKED / f"{design}.jed"
    assert run(["plan", str(source), "--device", device, "-o", str(tmp_path / "out")]) == 0
    assert (tmp_path / "out" / f"{design}.jed").read_bytes() == golden.read_bytes()


def driven(enabled, level):
    return "Z" if not enabled else str(int(level))


def two_of_three(a, b, c):
    return a + b + c >= 2


# What each design's equations say of the level of each pin, from asserted values.


def bottle_lane(jam, dust, run, lid):
    return {
        15: driven(1, not ((jam and lid) or (dust and not run))),
        13: driven(1, not run and (not jam or dust)),
        11: driven(run and not lid, not (jam or not dust)),
        14: "Z",
    }


def barrier(coin, ticket, key, loop):
    return {
        13: driven(1, (coin and ticket) or (key and loop)),
        12: driven(1, not ((coin or ticket) and (key or loop))),
        11: driven(key and not loop, not coin or ticket),
        10: driven(1, not (coin and ticket) and (not key or loop)),
    }


def silo_blower(high, middle, low, dust, lid, run):
    return {
        14: driven(1, two_of_three(high, middle, low) or (not dust and lid)),
        16: driven(1, (not high or low) and (not dust or run) and not lid),
        13: driven(run and not lid, not (dust and low)),
        17: "Z",
    }


def kiln_burner(fan, timer, hand, key, gas, flame, door):
    ready = (fan and timer) or (hand and key)
    return {
        12: driven(1, ready and flame),
        13: driven(1, ready or flame or gas),
        14: driven(1, (hand and key) or not gas),
        15: driven(door, not (fan and gas and not flame)),
    }


def bench_supply(grant, run, over, hot, lamp, heavy):
    return {
        12: driven(grant, (over and not hot) or (lamp and heavy)),
        14: driven(grant, (over and hot) or (lamp and not heavy)),
        16: driven(run, not (over and heavy) and (hot or not grant)),
    }


def press_guard(a, b, c, d, e, f, jog):
    return {
        11: driven(1, not (two_of_three(a, b, c) or two_of_three(d, e, f))),
        13: driven(1, (jog and a) or not (c or f)),
        10: driven(jog and not c, d and not b),
        12: "0",  # not used: driven, and all its rows are dead
    }


def pump_house(level, dry, flow, hand, key):
    return {
        13: driven(1, not ((level and dry) or (flow and not hand) or key)),
        14: driven(1, not (level or dry) or (flow and hand)),
        15: driven(1, not ((flow and hand) or (dry and not key))),
        16: driven(1, dry and not key),
        17: driven(1, (level or dry) and (hand or not key)),
    }


# Pins of the signals in that order; negative where the signal is active low.
SAYS = [
    pytest.param(bottle_lane, [10, 12, 1, -7], id="bottle_lane"),
    pytest.param(barrier, [3, -8, 1, 6], id="barrier"),
    pytest.param(silo_blower, [5, 15, 1, 12, -8, 2], id="silo_blower"),
    pytest.param(kiln_burner, [1, 3, 11, 7, 10, 2, -9], id="kiln_burner"),
    pytest.param(bench_supply, [-10, 11, 4, 1, 7, 2], id="bench_supply"),
    pytest.param(press_guard, [2, 6, 4, 1, 5, 3, 8], id="press_guard"),
    pytest.param(pump_house, [11, 2, 12, 8, -1], id="pump_house"),
]


@pytest.mark.parametrize(("says", "placed"), SAYS)
def test_the_file_worked_out_by_hand_does_what_its_equations_say(says, placed):
    design = says.__name__
    part = read_device_file(DEVICES / f"{DESIGNS[design]}.toml")
    states = read_transmission((HAND_WORKED / f"{design}.jed").read_bytes()).states
    levels = dict.fromkeys([*part.input_pins, *part.enable_pins], 0)
    levels |= every_case([abs(pin) for pin in placed])
    cases = 1 << len(placed)
    drivers = {pin: ((1 << cases) - 1, level) for pin, level in levels.items()}
    found = simulate(part, states, drivers, cases).pins
    for case in range(cases):
        asserted = [(levels[abs(pin)] >> case & 1) ^ (pin < 0) for pin in placed]
        expected = says(*asserted)
        assert {pin: found[pin].at(case) for pin in expected} == expected, asserted


def test_the_signature_worked_out_by_hand_is_the_design_s():
    part = read_device_file(DEVICES / "modal-8x4-gated.toml")
    states = read_transmission((HAND_WORKED / "barrier.jed").read_bytes()).states
    assert signature_text(part, states) == "PK1"


@pytest.mark.parametrize(
    "path", [pytest.param(path, id=path.stem) for path in sorted(DEVICES.glob("*.toml"))]
)
def test_every_fuse_has_one_use_and_every_pin_one_role(path):
    part = read_device_file(path)
    fuses, pins = part.role_counts()
    assert fuses == dict.fromkeys(range(part.fuses), 1)
    assert pins == dict.fromkeys(range(1, part.pins + 1), 1)
