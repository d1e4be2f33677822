"""Random designs on random devices of every class: what the pins do is what was asked.

The wanted levels come from the generator of the designs, the levels at the pins from the oracle;
of the program only the written file and the pins of ``--json`` are used.
"""

import random
import re
from dataclasses import dataclass

import pytest
from calls import call_json
from device_classes import CLASSES, random_class_device
from oracles.device_description import Description, read_device_file
from oracles.fuse_file import UnreadableError, read_transmission
from oracles.pin_simulation import Level, LoopError, signature_text, simulate
from random_bus_designs import BusDesign, Shape, random_bus_design
from random_designs import FREE

IN_SUITE, IN_ALL = 15, 100


def random_shape(rng: random.Random, which: str, device: Description) -> Shape:
    """A size that mostly fits the device."""
    cells = [cell for cell in device.cells.values() if cell.pin is not None]
    modes = [mode for cell in cells for mode in cell.modes.values()]
    own = [len(mode.terms) for mode in modes if mode.terms is not None]
    three_state = [c for c in cells if any(m.enable[0] != "always" for m in c.modes.values())]
    pins_read = any(line and line.kind == "pin" for m in modes for line in m.columns.values())
    sums_read = {c.key for c in device.cells.values() for m in c.modes.values() if m.columns}
    inner = rng.choice([0, 1, 1, 2]) if which in {"buried", "cells"} else rng.choice([0, 0, 1])
    layered = bool(sums_read) and rng.random() < 0.5
    if layered:
        # Room for the inner signal: a buried cell, or that of one output less.
        inner, spare = 1, 0 if which == "buried" else 1
    else:
        spare = rng.choice([0, 0, 1, 2])
    outputs = max(1, len(cells) - spare)
    enabled = rng.randint(0, min(outputs, len(three_state)))
    if device.enable_pins:
        # A cell that a pin enables serves an output without enable only where the pin is tied.
        enabled = min(outputs, len(three_state))
        outputs = min(outputs, enabled + len(cells) - len(three_state))
    inputs = rng.randint(max(1, len(device.input_pins) - 2), len(device.input_pins))
    if outputs < len(cells) and pins_read and rng.random() < 0.5:
        inputs = len(device.input_pins) + 1  # one of them onto the pin of a cell
    tight = own and min(own) < 6
    text = len(device.signature.fuses) // 8 if device.signature is not None else 0
    levels = {mode.enable[2] for mode in modes if mode.enable[0] == "pin"}
    return Shape(
        inputs=inputs,
        outputs=outputs,
        span=3 if tight else 4,
        enabled=enabled,
        enabled_by="input" if device.enable_pins else "product",
        enable_active="low" if 0 in levels else "high",
        bidirectional=rng.choice([0, 1, 2]) if pins_read else 0,
        inner=inner,
        layered=layered,
        signature=text if rng.random() < 0.7 else 0,
    )


def random_case(which, seed, folder):
    rng = random.Random(f"{which} class {seed}")
    path = random_class_device(rng, which).write(folder)
    device = read_device_file(path)
    design = random_bus_design(rng, random_shape(rng, which, device))
    (folder / "design.toml").write_text(design.text, encoding="utf-8")
    return path, device, design


@dataclass
class Planned:
    device: Description
    design: BusDesign
    pins: dict[str, int]
    states: list[int]
    remarks: dict[int, str]


def planned(which, seed, folder, capsys) -> Planned | None:
    """A plan that does what was asked; ``None`` where the design did not fit."""
    path, device, design = random_case(which, seed, folder)
    out = folder / "out"
    code, document = call_json(capsys, "plan", folder / "design.toml", "--device", path, "-o", out)
    assert code in {0, 1}, document.get("errors")
    if code == 1:
        assert document["fits"] is False
        assert document["reasons"]
        assert not list(folder.rglob("*.jed"))
        return None
    states = read_transmission((out / "design.jed").read_bytes()).states
    remarks = idle_remarks((out / "report.md").read_text(encoding="utf-8"))
    plan = Planned(device, design, document["pins"], states, remarks)
    check_pins(plan)
    check_levels(plan, states)
    if design.signature:
        assert signature_text(device, states) == design.signature
    return plan


def check_pins(plan):
    """Every signal has a pin of its own that can serve it; what is read is where it is driven."""
    device, design, pins = plan.device, plan.design, plan.pins
    assert set(range(1, device.pins + 1)) == {*plan.remarks, *pins.values()}
    for output, name in design.reads.items():
        assert pins.get(name, pins[output]) == pins[output]
    own = {name: pin for name, pin in pins.items() if name not in design.read_names}
    assert set(design.output_names) <= set(own)
    assert len(set(own.values())) == len(own)
    for name, pin in own.items():
        assert name in design.output_names or name in design.input_names or pin is None
        assert pin in device.cell_pins or name in design.input_names


def check_levels(plan, states):
    """Two runs of all points: pins that may be tied either way are low, and at anything."""
    device, design, pins, remarks = plan.device, plan.design, plan.pins, plan.remarks
    points, low = design.points, design.active_low
    cases, everywhere = 2 * points, (1 << 2 * points) - 1
    rng = random.Random(1)
    drivers = {}
    for pin, remark in remarks.items():
        if "tie to ground or power" in remark or "tie it through a resistor" in remark:
            drivers[pin] = (everywhere, rng.getrandbits(points) << points)
        elif "tie to" in remark:
            drivers[pin] = (everywhere, everywhere * ("tie to power" in remark))
    for name in design.input_names:
        if name in pins:
            drivers[pins[name]] = (everywhere, signal_level(design, name, cases))
    for output, name in design.reads.items():
        away = [not design.drives[output][case % points] for case in range(cases)]
        outside = sum(1 << case for case, is_away in enumerate(away) if is_away)
        drivers[pins[output]] = (outside, signal_level(design, name, cases))
    found = simulate(device, states, drivers, cases).pins
    for case in range(cases):
        seen = point_seen(design, pins, found, case)
        for name in design.output_names if seen is not None else []:
            drives = design.drives.get(name, [True] * points)[seen]
            wanted = design.table[name][seen]
            if drives:
                level = None if wanted is FREE else f"{wanted ^ low[name]:d}"
            elif name in design.reads:
                # Both levels come from outside in turn: another one here would be contention.
                level = f"{design_bit(design, design.reads[name], case) ^ low[name]:d}"
            else:
                level = None if drives is FREE else "Z"
            told = f"{name} on pin {pins[name]} at {seen:b}"
            assert level in {None, found[pins[name]].at(case)}, told
    check_idle_pins(device, remarks, drivers, found, everywhere)


def check_idle_pins(device, remarks, drivers, found, everywhere):
    """Pins of cells that carry no signal do what the pin list says."""
    for pin, remark in remarks.items():
        if "not driven by the programmed part" in remark:
            # With a level from outside, one from the part would be contention somewhere.
            mask, high = drivers[pin]
            assert (found[pin].high, found[pin].low) == (high, mask & ~high)
    for pin in set(device.cell_pins) & set(remarks) - set(drivers):
        level, remark = found[pin], remarks[pin]
        if "the part does not drive it" in remark:
            assert level.floating == everywhere
        elif "at times" not in remark:
            assert level.floating == 0
            told = re.search(r"the part drives it( low| high|$)", remark)[1]
            assert {" low": level.low, " high": level.high}.get(told, everywhere) == everywhere


def design_bit(design, name, case):
    return case >> design.bit_of(name) & 1


def signal_level(design, name, cases):
    bit, low = design.bit_of(name), design.active_low[name]
    return sum(1 << case for case in range(cases) if (case >> bit & 1) != low)


def point_seen(design: BusDesign, pins: dict[str, int], found: dict[int, Level], case: int):
    """The point that the design sees: a pin that the part drives itself reads what it drives.

    ``None`` where that is undefined and may be, as the output is free there.
    """
    seen = case % design.points
    for output, name in design.reads.items():
        if design.drives[output][seen]:
            level = found[pins[output]].at(case)
            if level not in {"0", "1"}:
                if design.table[output][seen] is FREE:
                    return None
                continue
            bit = 1 << design.bit_of(name)
            asserted = (level == "1") != design.active_low[output]
            seen = seen | bit if asserted else seen & ~bit
    return seen


def idle_remarks(report: str) -> dict[int, str]:
    """What the pin list of the report says of pins without a signal."""
    rows = re.findall(r"^\| +(\d+) \|([^|]*)\|[^|]*\|[^|]*\|([^|]*)\|$", report, re.MULTILINE)
    return {int(pin): remark.strip() for pin, name, remark in rows if not name.strip()}


@pytest.mark.parametrize("which", CLASSES)
def test_random_designs_on_each_class(which, tmp_path, capsys):
    plans = [planned(which, seed, made_folder(tmp_path, seed), capsys) for seed in range(IN_SUITE)]
    assert sum(plan is not None for plan in plans) >= IN_SUITE / 2


@pytest.mark.parametrize("which", CLASSES)
def test_flipped_links_show(which, tmp_path, capsys):
    """The checks above have teeth: many links of used cells and rows matter to some pin."""
    plan = next(
        filter(None, (planned(which, s, made_folder(tmp_path, s), capsys) for s in range(9)))
    )
    device, states = plan.device, plan.states
    used = [cell for cell in device.cells.values() if cell.pin in plan.pins.values()]
    rows = {row for cell in used for row in cell.rows}
    for cell in used:
        by_row = device.sums.get(cell.key, {})
        rows |= {row for row, fuse in by_row.items() if states[fuse] == device.connected}
    links = []
    for row in sorted(rows):
        joined = [fuse for fuse in device.links[row] if states[fuse] == device.connected]
        # In a row that is made dead many links are joined, and one more or less means nothing.
        links += joined if len(joined) < len(device.input_pins) else []
    rng = random.Random(which)
    chosen = [fuse for cell in used for fuse in cell.links]
    chosen += rng.sample(links, min(12, len(links)))
    chosen += [fuse for row, fuse in device.drop.items() if row in rows][:6]
    assert sum(differs(plan, fuse) for fuse in chosen) >= len(chosen) / 4
    assert all(differs(plan, fuse) for fuse in device.mode_fuses)


def differs(plan, fuse):
    states = [state ^ (number == fuse) for number, state in enumerate(plan.states)]
    try:
        check_levels(plan, states)
    except (AssertionError, LoopError, UnreadableError):
        return True
    return False


@pytest.mark.slow
@pytest.mark.parametrize("which", CLASSES)
def test_many_random_designs_on_each_class(which, tmp_path, capsys):
    fitted = 0
    for seed in range(1000, 1000 + 4 * IN_ALL):
        fitted += planned(which, seed, made_folder(tmp_path, seed), capsys) is not None
        if fitted == IN_ALL:
            break
    assert fitted == IN_ALL


def made_folder(folder, seed):
    (folder / str(seed)).mkdir()
    return folder / str(seed)
