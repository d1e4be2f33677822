"""The comparison of devices as text."""

from dataclasses import replace
from pathlib import Path

import pytest

from pla.behaviour.reader import read_behaviour
from pla.device.catalogue import catalogue, find_device
from pla.fitting.budgets import DeviceBudget, budgets
from pla.report.budget_json import budgets_document
from pla.report.budget_text import budgets_text
from pla.report.text import WIDTH

GOLDEN = Path(__file__).parent / "golden"
DESIGN = """
name = "Lift doors"
revision = "B"
[inputs]
a = 1
b = 1
idle = 1
[outputs]
f = 1
[logic]
f = "a ⊕ b"
"""


@pytest.fixture
def behaviour(tmp_path):
    path = tmp_path / "doors.toml"
    path.write_text(DESIGN, encoding="utf-8")
    return read_behaviour(str(path))


def test_text_is_as_reviewed(behaviour):
    devices = [find_device(name) for name in ("shared-20x96x12", "shared-8x16x4")]
    text = budgets_text(behaviour, budgets(behaviour, devices, reserve=15), 15, catalogue())
    assert text + "\n" == (GOLDEN / "budgets.txt").read_text("utf-8")
    assert max(map(len, text.split("\n"))) <= WIDTH


def test_what_is_not_proven_is_said(behaviour):
    found = budgets(behaviour, [find_device(name) for name in catalogue()])
    some = [
        DeviceBudget(
            replace(b.fit, minimum=replace(b.fit.minimum, lower_bound=1, proven_by=None))
            if b.device.name in {"shared-8x16x4", "shared-12x32x6"}
            else b.fit
        )
        for b in found
    ]
    text = " ".join(budgets_text(behaviour, some, 0, catalogue()).split())
    assert (
        "2 product terms for shared-8x16x4 and shared-12x32x6: NOT proven to be the fewest, "
        "at least 1 are needed."
    ) in text
    assert "Each other number of terms is proven" in text
    entries = budgets_document(behaviour, some, "free", 0, catalogue())["devices"]
    assert [e["device"] for e in entries if not e["proven"]] == ["shared-8x16x4", "shared-12x32x6"]
    assert {e["lower_bound"] for e in entries} == {1, 2}
