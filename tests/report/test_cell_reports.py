"""Reports of a device whose OR gates have terms of their own, with enables and a buried cell."""

from __future__ import annotations

import json
import re
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import pytest

from pla.behaviour.reader import read_behaviour
from pla.cli.main import run
from pla.device.catalogue import find_device
from pla.device.model import Timing
from pla.fitting.budgets import budgets
from pla.fitting.fit import fit
from pla.fuses.program import fuse_file
from pla.logic.phases import Polarity
from pla.report.budget_json import budgets_document
from pla.report.budget_text import budgets_text
from pla.report.cautions import LABEL_WIDTH, label
from pla.report.cells import cell_table, row_table
from pla.report.delays import delay_table, output_delays
from pla.report.folder import plan_files
from pla.report.gates import group_prices
from pla.report.pins import inner_table, pin_list, pin_summary
from pla.report.plan_text import plan_text
from pla.report.refusal_text import refusal_text
from pla.report.rows import ProgrammedRows
from pla.report.text import WIDTH, filled

GOLDEN = Path(__file__).parent / "golden"
GATES = GOLDEN / "gates.toml"
HOPPER = GOLDEN / "hopper.toml"


@pytest.fixture(scope="module")
def hopper():
    outcome = fit(read_behaviour(str(HOPPER)), find_device(str(GATES)))
    return outcome, fuse_file(outcome.plan, "hopper.jed")


@pytest.fixture
def planned(tmp_path):
    """Plans a design on the device, both given as changes to texts."""

    def made(design, *changes):
        text = GATES.read_text("utf-8")
        for old, new in changes:
            assert old in text
            text = text.replace(old, new)
        (tmp_path / "gates.toml").write_text(text, "utf-8")
        (tmp_path / "design.toml").write_text(design, "utf-8")
        return fit(
            read_behaviour(str(tmp_path / "design.toml")),
            find_device(str(tmp_path / "gates.toml")),
        )

    return made


def programmed(outcome):
    return ProgrammedRows.of(outcome.plan, fuse_file(outcome.plan, "design.jed").fuses)


def remarks(outcome):
    return {int(row[0]): row[4] for row in pin_list(programmed(outcome)).rows}


def test_report_is_as_reviewed(hopper):
    outcome, proven = hopper
    report = plan_files(outcome, proven)["report.md"].decode()
    assert report == (GOLDEN / "hopper-report.md").read_text("utf-8")


def test_summary_is_as_reviewed(hopper):
    outcome, proven = hopper
    text = plan_text(outcome, proven, ["out/report.md", "out/hopper.jed"])
    assert text + "\n" == (GOLDEN / "hopper-summary.txt").read_text("utf-8")


def test_text_files_are_within_the_width(hopper):
    for name, data in plan_files(*hopper).items():
        if name != "report.md":
            assert max(map(len, data.decode().split("\n"))) <= WIDTH, name


def test_rows_are_accounted_for_once(hopper):
    """Every row of a cell stands in its line once: in the sum, as enable, or as left over."""
    outcome, proven = hopper
    table = row_table(ProgrammedRows.of(outcome.plan, proven.fuses))
    for cell, row in zip(outcome.device.cells, table.rows, strict=True):
        told = re.sub(r"[a-z ,]*[a-z]", "", f"{row[4]}; {row[5]}")
        numbers = []
        for part in re.findall(r"\d+\.\.\d+|\d+", told):
            first, _, last = part.partition("..")
            numbers += range(int(first), int(last or first) + 1)
        assert sorted(numbers) == list(cell.rows)
        used, has = (int(n) for n in row[2].split(" of "))
        assert int(row[3]) == has - used == has - len(set(outcome.plan.rows) & set(cell.rows))


def test_cells_say_the_fuses_that_are_programmed(hopper):
    outcome, proven = hopper
    table = cell_table(ProgrammedRows.of(outcome.plan, proven.fuses))
    told = {int(f): int(s) for row in table.rows for f, s in re.findall(r"(\d+)=([01])", row[-1])}
    assert told == {f: proven.fuses[f] for cell in outcome.device.cells for f in cell.links}


LAMP = """
name = "Lamp"
[inputs]
a = 1
[outputs]
lamp = 1
[logic]
lamp = "a"
[place.gates-5x4]
lamp = 9
"""
ONE_TIME = ('"erasable"', '"one-time"')
# Blank links join, so that rows nothing uses are 0; the senses of the cells change places.
JOINED = [("blank = 1", "blank = 0"), ('set = "1"', 'set = "x"'), ('set = "0"', 'set = "1"')]
JOINED += [('set = "x"', 'set = "0"')]
HIGH = "unused, leave open: the part drives it high"
LOW = "unused, leave open: the part drives it low"
QUIET = (
    "unused, not driven by the programmed part: tie it through a resistor, since a blank part may "
    "drive it"
)


@pytest.mark.parametrize(
    ("changes", "with_row", "always"),
    [
        pytest.param([], QUIET, HIGH, id="dead rows, enables off"),
        pytest.param([('enable = "off"', 'enable = "on"')], HIGH, HIGH, id="enables on"),
        pytest.param(
            [('unused_enable = "off"', 'unused_enable = "blank"')], HIGH, HIGH, id="blank enables"
        ),
        pytest.param([ONE_TIME], QUIET, LOW, id="one-time: blank rows are 1"),
        pytest.param([ONE_TIME, *JOINED], QUIET, HIGH, id="one-time: blank rows are 0"),
        pytest.param(
            [
                ('set = "1", pin = "sum\'" }', 'set = "1", pin = "sum" }'),
                ('set = "0", pin = "sum" } ]', 'set = "0", pin = "sum\'" } ]'),
            ],
            QUIET,
            LOW,
            id="blank mode shows the sum",
        ),
    ],
)
def test_idle_cells_say_what_their_pins_do(planned, changes, with_row, always):
    outcome = planned(LAMP, *changes)
    found = remarks(outcome)
    assert (found[7], found[8], found[11]) == (with_row, with_row, always)
    driven = [pin for pin in (7, 8, 10, 11) if "drives it" in found[pin]]
    told = [r for r in pin_list(programmed(outcome)).remarks if "though no signal is there" in r]
    (named,) = re.findall(r"drives pins? ([\d, and]+) though", told[0])
    assert [int(n) for n in re.findall(r"\d+", named)] == driven


def test_enable_pins_without_a_signal_are_tied(planned):
    design = LAMP.replace("lamp = 9", "lamp = 10")
    outcome = planned(design)
    assert remarks(outcome)[5] == "tie to ground, so that lamp is driven"
    assert filled(pin_summary(outcome.plan)[-1]) == "Tie enable pins: 5 low."
    outcome = planned(design, ('active = "low"', 'active = "high"'))
    assert remarks(outcome)[5] == "tie to power, so that lamp is driven"


def test_cells_whose_pins_are_inputs(planned):
    names = [f"i{k}" for k in range(6)]
    inputs = "".join(f"{name} = 1\n" for name in names)
    design = f'name = "Six"\n[inputs]\n{inputs}[outputs]\nf = 1\n[logic]\nf = "{" ".join(names)}"\n'
    outcome = planned(design)
    pin = next(p for n, p in outcome.plan.pins.items() if n != "f" and p in (7, 8))
    assert remarks(outcome)[pin] == "a cell whose pin serves as an input"
    table = cell_table(programmed(outcome))
    (row,) = [row for row in table.rows if row[0] == f"pin {pin}"]
    assert re.fullmatch(r"i\d \(input\)", row[1])
    assert row[4] == "never"


def test_folded_inner_signals_say_so(planned):
    design = LAMP.replace("[logic]", '[inner]\ncalm = 1\n[logic]\ncalm = "a\'"').replace(
        'lamp = "a"', 'lamp = "calm\'"'
    )
    outcome = planned(design)
    table = inner_table(outcome.plan)
    assert table.rows == (("calm", "inner", "none: folded in", "no"),)
    assert "Folded in" in table.remarks[0]
    assert "Inner signals: folded in calm." in map(filled, pin_summary(outcome.plan))
    assert inner_table(planned(LAMP).plan) is None


# Figures of the device: tpd 15, tfb 7.5, ten 18, tdis 12.
@pytest.mark.parametrize(
    ("timing", "motor", "horn_on"),
    [
        # From an input to the pin of line, 15; in again to stuck, 15; fed back to motor, 7.5.
        pytest.param({}, Fraction(75, 2), 18, id="as given"),
        pytest.param({"tfb": None}, 45, 18, id="a second pass takes as long as the first"),
        pytest.param({"tpd": None}, None, 18, id="no delay"),
        pytest.param({"ten": None}, Fraction(75, 2), None, id="no enable time"),
    ],
)
def test_delays(hopper, timing, motor, horn_on):
    outcome, _ = hopper
    device = replace(outcome.device, timing=replace(outcome.device.timing, **timing))
    delays = {d.output: d for d in output_delays(replace(outcome.plan, device=device))}
    assert list(delays) == ["line", "horn", "motor", "lamp"]
    assert [d.passes for d in delays.values()] == [1, 1, 3, 3]
    assert (delays["motor"].worst, delays["horn"].enabled) == (motor, horn_on)
    assert delays["lamp"].enabled is None
    assert {d.asked for d in delays.values()} == {40}
    text = " ".join(delay_table(tuple(delays.values())).remarks)
    assert ("delays are not known" in text) == (motor is None)
    assert ("TOO SLOW: motor, lamp." in text) == (motor is not None and motor > 40)


def test_an_enable_that_waits_for_a_fed_back_signal(hopper):
    """The enable time, and before that the way to the signal: 18 + 7.5."""
    outcome, _ = hopper
    plan = outcome.plan
    line = plan.outputs[0]
    stuck = next(i for i in plan.inputs if i.name == "stuck")
    waits = replace(line.enable, cube=line.enable.cube._replace(ones=1 << stuck.index))
    outputs = (replace(line, enable=waits), *plan.outputs[1:])
    first, *_ = output_delays(replace(plan, outputs=outputs))
    assert (first.enabled, first.disabled) == (Fraction(51, 2), Fraction(39, 2))


def test_nothing_is_told_of_delays_where_there_is_nothing(planned):
    outcome = planned(LAMP)
    plan = replace(outcome.plan, device=replace(outcome.device, timing=Timing()))
    assert delay_table(output_delays(plan)) is None


def test_label_lines_are_short(hopper):
    outcome, proven = hopper
    plan = outcome.plan
    name = "Hopper card for the north silo_and_its_elevator, second floor"
    named = replace(plan, design=replace(plan.design, name=name))
    lines = label(named, proven.fuses)
    assert max(map(len, lines)) <= LABEL_WIDTH
    assert " ".join(lines[:-4]).replace("_ ", "_") == name
    checksum = f"fuse checksum {proven.fuses.checksum:04X}"
    assert lines[-4:-1] == ("rev C", "gates-5x4", checksum)
    assert re.fullmatch(r"date _+", lines[-1])


MIXED = """
name = "Mixed"
[inputs]
a = 1
b = 1
c = 1
[outputs]
own = { impossible = 0 }
one = { impossible = 0 }
two = 1
[never]
when = ["b c"]
[logic]
own = "a b"
one = "a b + c"
two = "a b + a' c'"
[place.joint-10x27x6]
own = 12
one = 14
two = 15
"""


def test_own_and_shared_gates_in_one_device(tmp_path):
    """Three sums need a b; one has terms of its own, so the product is programmed twice."""
    path = tmp_path / "mixed.toml"
    path.write_text(MIXED, "utf-8")
    behaviour = read_behaviour(str(path))
    outcome = fit(behaviour, find_device("joint-10x27x6"), "true")
    proven = fuse_file(outcome.plan, "mixed.jed")
    said = " ".join(plan_files(outcome, proven)["term-sharing.txt"].decode().split())
    assert "The sum of own has terms of its own" in said
    assert "Here 1 row repeats a product that another row has." in said
    summary = " ".join(plan_text(outcome, proven, []).split())
    assert "since some sums have an OR gate with terms of its own" in summary
    assert (
        "Terms of each output, and of its cell: own 1 of 5; one and two share 3 of 15." in summary
    )
    prices = {p.price.output: p for p in group_prices(outcome.plan, [Polarity(True, False)] * 3)}
    # Alone `own` has a b; `one` and `two` share a b beside c and a' c'.
    assert (prices[0].terms, prices[0].alone) == (1, True)
    assert (prices[1].terms, prices[1].alone) == (3, False)
    table = row_table(ProgrammedRows.of(outcome.plan, proven.fuses))
    assert [row[0] for row in table.rows] == ["pin 12, u", "pin 13, v"]


def test_rows_that_are_cut_off(tmp_path):
    path = tmp_path / "lamp.toml"
    path.write_text(LAMP, "utf-8")
    outcome = fit(read_behaviour(str(path)), find_device("modal-8x4-plain"))
    table = row_table(programmed(outcome))
    own = next(row for row in table.rows if row[1] == "lamp")
    first, last = map(int, re.fullmatch(r"(\d+)\.\.(\d+) dropped", own[5]).groups())
    assert last - first + 1 == 5
    assert own[2:4] == ("1 of 6", "5")


PARITY = """
name = "Parity"
[inputs]
a = 1
b = 1
c = 1
[outputs]
odd = 1
[logic]
odd = "a ⊕ b ⊕ c"
[place.gates-5x4]
odd = {pin}
"""


def test_refusal_names_the_place_and_the_cells(planned):
    outcome = planned(PARITY.format(pin=10))
    assert not outcome.fits
    assert planned(PARITY.format(pin=9)).fits
    text = refusal_text(outcome, ())
    assert "It would fit if odd were not placed on pin 10." in text
    assert re.search(r"^odd +4 +4  pin 10 +none$", text, re.MULTILINE)
    said = " ".join(text.split())
    assert "4 terms on pins 9, 11; 3 terms on pins 7, 8, 10." in said
    assert "4 product terms" in said


def test_refusal_counts_the_terms_of_the_polarity_that_a_cell_shows(planned):
    """Four terms, or one of the complement, which only a cell with a choice can show."""
    design = PARITY.format(pin=10).replace("c = 1", "c = 1\nd = 1")
    design = design.replace("a ⊕ b ⊕ c", "a' + b' + c' + d'")
    choice = 'modes = [ { set = "1", pin = "sum\'" }, { set = "0", pin = "sum" } ]'
    outcome = planned(design, (choice, 'modes = [ { set = "0", pin = "sum" } ]'))
    text = refusal_text(outcome, ())
    assert re.search(r"^odd +4 +1  pin 10 +none$", text, re.MULTILINE)
    assert planned(design).fits


# --- the commands ---


def document(capsys, *arguments):
    code = run([str(a) for a in (*arguments, "--json")])
    return code, json.loads(capsys.readouterr().out)


def plan(design, folder, *options):
    return "plan", design, "--device", GATES, "-o", folder, *options


def test_document(tmp_path, capsys):
    code, found = document(capsys, *plan(HOPPER, tmp_path / "out"))
    assert code == 0
    assert found["inputs"] == ["low", "full", "jam", "mute", "back", "stuck"]
    assert found["outputs"] == ["line", "horn", "motor", "lamp", "stuck"]
    assert found["inner"] == {"stuck": "b1"}
    assert found["enables"] == {
        "line": {"row": 0, "pin": None, "inputs": "-10---"},
        "horn": {"row": None, "pin": 5, "inputs": "---0--"},
    }
    assert found["cells"]["7"] == {
        "pin": 7,
        "signal": "line",
        "set": "0",
        "fuses": {"352": 0},
        "terms": {"used": 1, "available": 3},
    }
    assert found["cells"]["b1"]["terms"] == {"used": 2, "available": 3}
    assert found["cells"]["11"]["signal"] is None
    assert found["passes"] == {"line": 1, "horn": 1, "motor": 3, "lamp": 3}
    assert found["delay"] == {"line": 15, "horn": 15, "motor": 37.5, "lamp": 37.5}
    assert found["tied"] == {}
    assert found["signature"] == "H1"
    assert found["label"][0] == "Hopper card"
    assert found["released"] is None


def test_document_of_a_refusal(tmp_path, capsys):
    design = tmp_path / "parity.toml"
    design.write_text(PARITY.format(pin=10), "utf-8")
    code, found = document(capsys, *plan(design, tmp_path / "out"))
    assert code == 1
    assert found["released"] == {"odd": 10}
    for key in ("cells", "delay", "enables", "inner", "label", "passes", "tied"):
        assert found[key] is None


@pytest.mark.parametrize(
    ("text", "code", "signature"),
    [
        pytest.param("K7", 0, "K7", id="another"),
        pytest.param("", 0, None, id="none"),
        pytest.param("toolong", 1, "toolong", id="too long"),
    ],
)
def test_signature_of_the_call(tmp_path, capsys, text, code, signature):
    result, found = document(capsys, *plan(HOPPER, tmp_path / "out", "--signature", text))
    assert (result, found["signature"]) == (code, signature)
    if code:
        assert any("signature" in reason for reason in found["reasons"])


@pytest.mark.parametrize("text", ["Kühl", "a\tb", "a\nb"])
def test_signature_that_no_device_holds(tmp_path, capsys, text):
    code, found = document(capsys, *plan(HOPPER, tmp_path / "out", "--signature", text))
    assert code == 2
    assert "printable ASCII" in found["errors"][0]["message"]
    assert not (tmp_path / "out").exists()


# --- budgets ---


def test_budget_shows_headroom_and_delays():
    behaviour = read_behaviour(str(HOPPER))
    found = budgets(behaviour, [find_device(str(GATES))])
    text = budgets_text(behaviour, found)
    told = "horn 2 of 3, motor 2 of 3, stuck 2 of 3, line 1 of 3,"
    pattern = rf"^gates-5x4 +{told} +3 +37\.5 ns  40 ns\n +lamp 2 of 4$"
    assert re.search(pattern, text, re.MULTILINE)
    (entry,) = budgets_document(behaviour, found, "free", 0)["devices"]
    assert entry["family"] == "gates-5x4"
    assert entry["cells"]["motor"] == {"used": 2, "available": 3, "spare": 1}
    assert entry["delay"]["motor"] == 37.5
    assert set(entry["max_delay"].values()) == {40}


def test_modes_of_a_family_stand_together():
    """The better mode in the place that it has, the other behind it, though another is better."""
    behaviour = read_behaviour(str(GOLDEN / "bottle-washer.toml"))
    names = ("shared-10x24x6", "shared-12x32x6", "shared-14x40x8")
    devices = [find_device(name) for name in names]
    devices = [replace(d, family="twin" if k != 1 else d.name) for k, d in enumerate(devices)]
    found = budgets(behaviour, devices)
    assert [b.device.name for b in found] == list(names)
    lines = budgets_text(behaviour, found).split("\n")
    listed = [line.split("  ")[:2] for line in lines if re.match(r" *shared-\d+x", line)]
    assert listed[:3] == [["shared-10x24x6", ""], ["", "shared-14x40x8"], ["shared-12x32x6", ""]]
    said = " ".join(" ".join(lines).split())
    assert (
        "of one part, twin, best first and together in each table: shared-10x24x6, shared" in said
    )
