"""One design in every format, reviewed by hand, byte by byte; and what texts say in other cases."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path

import pytest

from pla.behaviour.reader import read_behaviour
from pla.device.catalogue import find_device
from pla.fitting.fit import fit
from pla.fitting.holders import holders
from pla.fuses.program import fuse_file
from pla.logic.minimize import minimize
from pla.logic.phases import Polarity
from pla.report.folder import plan_files
from pla.report.markdown import escaped
from pla.report.pins import pin_list
from pla.report.plan_text import plan_text
from pla.report.refusal_text import refusal_text
from pla.report.rows import ProgrammedRows
from pla.report.terms_text import terms_text
from pla.report.text import WIDTH
from pla.report.verdict import count_sentences, design_sentences, proof_sentence
from pla.wording import listed

GOLDEN = Path(__file__).parent / "golden"
DESIGN = str(GOLDEN / "bottle-washer.toml")
FILES = [
    "budget.txt",
    "dont-care-audit.txt",
    "pin-list.txt",
    "programming-table.txt",
    "report.md",
    "term-sharing.txt",
]


@pytest.fixture(scope="module")
def planned():
    outcome = fit(read_behaviour(DESIGN), find_device("shared-12x32x6"))
    proven = fuse_file(outcome.plan, "bottle-washer.jed")
    return outcome, proven, plan_files(outcome, proven)


def test_all_files_are_there_and_well_formed(planned):
    *_, files = planned
    assert sorted(files) == FILES
    for name, data in files.items():
        text = data.decode("utf-8")
        assert text.endswith("\n"), name
        assert not text.endswith("\n\n"), name
        assert "\r" not in text, name
        assert "\t" not in text, name
        assert all(line == line.rstrip() for line in text.split("\n")), name


@pytest.mark.parametrize("name", FILES)
def test_file_is_as_reviewed(planned, name):
    *_, files = planned
    assert files[name].decode() == (GOLDEN / name).read_text("utf-8")


def test_files_say_nothing_of_the_machine(planned):
    *_, files = planned
    for data in files.values():
        assert str(GOLDEN.parent.parent).encode() not in data


def test_same_bytes_again(planned):
    outcome, proven, files = planned
    assert plan_files(outcome, proven) == files


def test_summary_is_as_reviewed(planned):
    outcome, proven, _ = planned
    text = plan_text(outcome, proven, ["out/report.md", "out/bottle-washer.jed"])
    assert text + "\n" == (GOLDEN / "plan-summary.txt").read_text("utf-8")


def test_terms_are_as_reviewed():
    behaviour = read_behaviour(DESIGN)
    polarities = [Polarity(complement=False)] * len(behaviour.outputs)
    text = terms_text(behaviour, minimize(behaviour.function, polarities), polarities)
    assert text + "\n" == (GOLDEN / "terms.txt").read_text("utf-8")


def test_refusal_is_as_reviewed():
    outcome = fit(read_behaviour(DESIGN), find_device(str(GOLDEN / "narrow.toml")))
    assert outcome.plan is None
    others = [find_device(name) for name in ("shared-8x16x4", "shared-10x24x6", "shared-12x32x6")]
    text = refusal_text(outcome, holders(outcome, others, "free"))
    assert text + "\n" == (GOLDEN / "refusal.txt").read_text("utf-8")
    assert max(map(len, text.split("\n"))) <= WIDTH


def test_refusal_without_a_cover_has_no_number_of_terms():
    outcome = fit(read_behaviour(DESIGN), find_device("shared-12x32x6"))
    barred = replace(outcome, minimum=None, plan=None, reasons=("no cell can show output pump",))
    text = refusal_text(barred, ())
    assert "No cell can show output pump." in text
    assert re.search(r"^product terms +not minimized +32$", text, re.MULTILINE)
    assert "Not minimized: " in text
    assert "No other device of the catalogue would hold this design;" in text
    assert "`fuseplan budget` shows what" in " ".join(text.split())


def test_budget_names_the_outputs_that_keep_it_from_being_minimized():
    outcome = fit(read_behaviour(DESIGN), find_device("shared-10x24x6"), "true")
    assert outcome.minimum is None
    barred = [
        name
        for name, polarity in zip(outcome.behaviour.output_names, outcome.polarities, strict=True)
        if polarity is None
    ]
    said = " ".join(refusal_text(outcome, ()).split())
    assert f"Not minimized: no polarity is left for {listed(barred)}, so" in said
    assert "not known" not in said


def test_verdict_stands_before_the_tables():
    behaviour = read_behaviour(DESIGN)
    polarities = [Polarity()] * len(behaviour.outputs)
    minimum = minimize(behaviour.function, polarities)
    text = terms_text(behaviour, minimum, polarities)
    assert text.index("proven to be the fewest") < text.index("Programming table")
    assert text.split("\n\n")[1].startswith(f"{minimum.count} product terms")


def test_text_of_a_plan_needs_a_plan(planned):
    outcome, proven, _ = planned
    refused = replace(outcome, plan=None)
    with pytest.raises(ValueError, match="does not fit"):
        plan_files(refused, proven)
    with pytest.raises(ValueError, match="does not fit"):
        plan_text(refused, proven, [])


def test_every_pin_is_listed_once_in_order(planned):
    outcome, proven, _ = planned
    device = outcome.device
    rows = pin_list(ProgrammedRows.of(outcome.plan, proven.fuses)).rows
    assert [int(row[0]) for row in rows] == list(range(1, device.pins + 1))
    named = {row[1]: int(row[0]) for row in rows if row[1]}
    assert named == outcome.plan.pins
    assert {rows[pin - 1][2] for pin in device.ground} == {"ground"}
    assert {rows[pin - 1][2] for pin in device.power} == {"power"}


@pytest.mark.parametrize(
    ("mode", "level"),
    [
        pytest.param("sum", "drives it low", id="sum"),
        pytest.param("sum'", "drives it high", id="inverted sum"),
    ],
)
def test_an_unused_output_says_what_it_shows(tmp_path, mode, level):
    """A cell that no output uses has no term: its sum is 0."""
    text = (GOLDEN / "narrow.toml").read_text("utf-8")
    path = tmp_path / "device.toml"
    path.write_text(text.replace('set = "0", pin = "sum" }', f'set = "0", pin = "{mode}" }}'))
    if mode == "sum'":
        path.write_text(
            path.read_text().replace('set = "1", pin = "sum\'"', 'set = "1", pin = "sum"')
        )
    design = tmp_path / "one.toml"
    design.write_text('name = "O"\n[inputs]\na = 1\n[outputs]\nf = 1\n[logic]\nf = "a"\n')
    outcome = fit(read_behaviour(str(design)), find_device(str(path)))
    programmed = ProgrammedRows.of(outcome.plan, fuse_file(outcome.plan, "one.jed").fuses)
    remarks = [row[4] for row in pin_list(programmed).rows if row[2] == "output" and not row[1]]
    assert len(remarks) == 5
    assert all(remark == f"unused, leave open: the part {level}" for remark in remarks)


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        pytest.param({"proven_by": "solver"}, "floating-point", id="solver"),
        pytest.param({"proven_by": "certificate"}, "exact arithmetic", id="certificate"),
        pytest.param(
            {"proven_by": None, "lower_bound": 3},
            "NOT proven to be the fewest: the lower bound is 3, which leaves a gap of 2",
            id="gap",
        ),
        pytest.param({"clock": True}, "cut short by the clock", id="clock"),
        pytest.param({"connections": None}, "is not known", id="connections not known"),
        pytest.param({"connections": "these polarities"}, "in these polarities", id="fixed"),
        pytest.param({"complemented": (False,) * 6}, "Every sum is the asserted", id="all true"),
        pytest.param({"complemented": (True,) * 6}, "Every sum is the complement", id="none true"),
    ],
)
def test_sentences_about_the_count(planned, changes, words):
    outcome, *_ = planned
    minimum = replace(outcome.minimum, **changes)
    said = [*count_sentences(minimum), *design_sentences(outcome.behaviour, minimum)]
    assert words in " ".join(said)


def test_a_proof_by_cubes_says_so(planned):
    outcome, proven, _ = planned
    by_cubes = replace(proven.proof, method="cubes", cases=12)
    said = proof_sentence(by_cubes, outcome.behaviour)
    assert "compared with the design as cubes, 12 cubes in all" in said
    assert "drives each pin" not in said


def test_warnings_and_cautions_stand_in_the_report(planned):
    *_, files = planned
    report = files["report.md"].decode()
    assert "* bottle-washer.toml, line 10: no output depends on spare\\_contact" not in report
    assert "* bottle-washer.toml, line 10: no output depends on spare_contact" in report
    assert "no safety device" in report
    assert "Don't cares are freedom, not safety" in report
    assert f"# {escaped('Bottle washer | racks *1* to 3')}, revision B_2" in report
