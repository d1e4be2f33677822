"""Single fuses and whole fuse files worked out by hand, one device of each structural class.

The workings stand in hand_worked/*.md, the fuses as tables that are read here, the files beside.
"""

import re
from pathlib import Path

import pytest

from pla.cli.main import run
from pla.device.blocks import role_of
from pla.device.catalogue import find_device

HAND_WORKED = Path(__file__).parent / "hand_worked"

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
