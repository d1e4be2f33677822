"""What reports say only where it is so: signatures, hints, doubts, pins that are not driven."""

import json
from pathlib import Path

import pytest

from pla.behaviour.reader import read_behaviour
from pla.cli.main import run
from pla.device.catalogue import catalogue, find_device
from pla.fitting.budgets import budgets
from pla.fitting.fit import fit
from pla.fuses.program import fuse_file
from pla.logic.cubes import Cube
from pla.report.budget_json import budgets_document
from pla.report.budget_text import budgets_text
from pla.report.cases import joined_cases
from pla.report.gates import headroom_text
from pla.report.notation import groups_of
from pla.report.pins import pin_list
from pla.report.refusal_text import refusal_text
from pla.report.rows import ProgrammedRows

EXAMPLES = Path(__file__).parents[2] / "examples"
DESIGN = """name = "Latch card"
signature = "A  B"
max_delay = 50
[inputs]
a = 1
b = 1
c = 1
d = 1
e = 1
[outputs]
f = {{ {keys} }}
g = 1
[logic]
f = "{f}"
g = "a b"
"""


@pytest.fixture
def design(tmp_path):
    def made(f="a b", keys=""):
        path = tmp_path / "latch.toml"
        path.write_text(DESIGN.format(f=f, keys=keys), encoding="utf-8")
        return str(path)

    return made


@pytest.mark.parametrize(
    ("device", "shown"),
    [
        pytest.param("varied-11x5-marked", "A  B", id="fuses for it"),
        pytest.param("shared-8x16x4", None, id="none"),
    ],
)
def test_a_signature_is_claimed_only_where_the_part_has_one(
    design, tmp_path, capsys, device, shown
):
    out = tmp_path / "out"
    call = ["plan", design(), "--device", device, "-o", str(out)]
    assert run(call) == 0
    said = capsys.readouterr()
    report = (out / "report.md").read_text("utf-8")
    assert ('Signature: "A  B".' in said.out) == (shown is not None)
    assert ('* Signature: "A  B"\n' in report) == (shown is not None)
    assert ("Signature: " in said.out + report) == (shown is not None)
    assert ("DELAY-UNKNOWN" in said.err) == (shown is None)
    assert ("so that the max_delay of f and g is not checked" in report) == (shown is None)
    assert run([*call, "--force", "--json"]) == 0
    assert json.loads(capsys.readouterr().out)["signature"] == shown


def test_the_place_of_the_signature(design):
    at = read_behaviour(design()).signature_at
    assert (at.line, at.column) == (2, 13)


PARITY = "a ⊕ b ⊕ c ⊕ d ⊕ e"
SPREAD = "A part of an equation may stand under [inner] instead"
ENABLE = "An enable has one product term, and f would need more"


@pytest.mark.parametrize(
    ("f", "keys", "device", "told"),
    [
        pytest.param(PARITY, "", "own-9x5", {SPREAD}, id="large sum"),
        pytest.param(PARITY, "", "shared-12x32x6", set(), id="shared terms are enough"),
        pytest.param("a", 'enable = "b c + d e"', "own-9x5", {ENABLE}, id="large enable"),
        pytest.param("a", 'enable = "b c + d e"', "shared-8x16x4", set(), id="no enables"),
    ],
)
def test_hints_about_inner_signals(design, f, keys, device, told):
    path = design(f, keys)
    outcome = fit(read_behaviour(path), find_device(device))
    text = " ".join(refusal_text(outcome, ()).split()) if not outcome.fits else ""
    assert {hint for hint in (SPREAD, ENABLE) if hint in text} == told
    assert outcome.fits == (device == "shared-12x32x6")
    assert ("Terms that each output needs" in text) == (SPREAD in told)


def test_no_hint_where_inner_signals_are_known(design, tmp_path):
    path = design("a", 'enable = "b c + d e"')
    text = (tmp_path / "latch.toml").read_text("utf-8")
    text = text.replace("[logic]", "[inner]\nh = 1\n[logic]\nh = 'a b'")
    (tmp_path / "latch.toml").write_text(text.replace('g = "a b"', 'g = "h"'), "utf-8")
    outcome = fit(read_behaviour(path), find_device("own-9x5"))
    assert not outcome.fits
    assert ENABLE not in " ".join(refusal_text(outcome, ()).split())


def test_an_over_long_signature_alone_brings_no_tables_of_terms(design, tmp_path):
    path = design()
    text = (tmp_path / "latch.toml").read_text("utf-8")
    (tmp_path / "latch.toml").write_text(text.replace("A  B", "A long one"), "utf-8")
    outcome = fit(read_behaviour(path), find_device("varied-11x5-marked"))
    said = refusal_text(outcome, ())
    assert "The signature 'A long one' has 10 characters" in said
    assert "Terms that each output needs" not in said


def test_budget_tells_shared_gates_and_every_doubt(design):
    behaviour = read_behaviour(str(EXAMPLES / "weigher-port.toml"))
    outcome = fit(behaviour, find_device("joint-10x27x6"))
    assert (
        headroom_text(outcome.plan)
        .replace("\u00a0", " ")
        .endswith("; counter, latch and display share 6 of 15")
    )
    found = budgets(read_behaviour(design()), [find_device(name) for name in catalogue()])
    text = " ".join(budgets_text(read_behaviour(design()), found, 0, catalogue()).split())
    assert (
        "shared-8x16x4 gives no delays, so that the max_delay of f and g is not checked; likewise "
        "shared-10x24x6, "
    ) in text
    entries = budgets_document(read_behaviour(design()), found, "free", 0, catalogue())["devices"]
    codes = {e["device"]: [w["code"] for w in e["warnings"]] for e in entries}
    assert codes["shared-8x16x4"] == ["SIGNATURE-NONE", "DELAY-UNKNOWN"]
    assert codes["varied-11x5-marked"] == []


def test_files_left_out_are_warnings_too(design, tmp_path, capsys):
    folder = tmp_path / "parts"
    folder.mkdir()
    (folder / "bad.toml").write_text("name = 3\n", "utf-8")
    run(["budget", design(), "--devices", str(folder), "--json"])
    found = json.loads(capsys.readouterr().out)
    assert found["left_out"]
    assert [w for w in found["warnings"] if w in found["left_out"]] == found["left_out"]


def test_pins_that_are_not_driven_are_no_outputs(design):
    outcome = fit(read_behaviour(design()), find_device("varied-11x5"))
    rows = ProgrammedRows.of(outcome.plan, fuse_file(outcome.plan, "latch.jed").fuses)
    table = pin_list(rows)
    cells = outcome.plan.device.cell_of_pin
    idle = [row for row in table.rows if int(row[0]) in cells and not row[1]]
    assert idle
    for row in idle:
        quiet = rows.drive_of(cells[int(row[0])]) == "never"
        assert row[2] == ("none" if quiet else "output")
        assert quiet != ("the part drives it" in row[4])


def test_six_ranges_are_one_line():
    values = (0, 3, 5, 6, 9, 10, 12, 15)
    cubes = [Cube.parse(f"{value:04b}") for value in values]
    names = [f"relay[{k}]" for k in (3, 2, 1, 0)]
    texts = [case.text for case in joined_cases(cubes, groups_of(names))]
    assert texts == ["relay=0,3,5..6,9..10,12,15"]
