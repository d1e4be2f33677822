"""The command: files, documents, readings judged, refusals."""

import csv
import io
import json

import pytest
from oracles.fuse_file import read_transmission

from pla.cli.main import run

GATE = ["device", "exercise", "gate-9x6"]


@pytest.fixture
def folder(tmp_path):
    return tmp_path / "scrap"


def test_files_of_a_part(folder, capsys):
    assert run([*GATE, "-o", str(folder)]) == 0
    names = sorted(path.name for path in folder.iterdir())
    stem = "gate-9x6-exercise-1"
    assert names == [f"{stem}.csv", f"{stem}.jed", f"{stem}.md", f"{stem}.toml"]
    out, err = capsys.readouterr()
    assert "gate-9x6" in out
    assert err == ""
    data = (folder / f"{stem}.jed").read_bytes()
    assert b"for one scrap part" in data
    assert read_transmission(data).pins == 18
    assert run(["check", str(folder / f"{stem}.toml")]) == 0


def test_the_same_fuses_without_vectors(tmp_path):
    found = []
    for name, options in (("with", []), ("without", ["--no-vectors"])):
        assert run([*GATE, "-o", str(tmp_path / name), *options]) == 0
        found.append((tmp_path / name / "gate-9x6-exercise-1.jed").read_bytes())
    assert b"V0001" in found[0]
    assert b"V0001" not in found[1]
    assert read_transmission(found[0]).states == read_transmission(found[1]).states


def filled(folder, change):
    path = folder / "gate-9x6-exercise-1.csv"
    head, *rows = csv.reader(io.StringIO(path.read_text("utf-8")))
    for row in rows:
        for place, name in enumerate(head):
            if name.startswith("measured"):
                row[place] = change(row[head.index(name.replace("measured", "expected"))], name)
    out = io.StringIO()
    csv.writer(out, delimiter=";").writerows([head, *rows])
    path.write_text(out.getvalue(), "utf-8")
    return str(path)


FLIPPED = {"H": "L", "L": "H"}


@pytest.mark.parametrize(
    ("change", "code", "explained"),
    [
        pytest.param(lambda sign, _: sign, 0, None, id="as-expected"),
        pytest.param(
            lambda sign, name: FLIPPED.get(sign, sign) if name[-2:] in {"15", "16", "17"} else sign,
            1,
            "polarity|sense|settings",
            id="back-inverted",
        ),
    ],
)
def test_readings_are_judged(change, code, explained, folder, capsys):
    assert run([*GATE, "-o", str(folder)]) == 0
    sheet = filled(folder, change)
    capsys.readouterr()
    assert run([*GATE, "--readings", sheet, "--json"]) == code
    found = json.loads(capsys.readouterr().out)
    assert found["readings"] == found["expected_readings"]
    assert bool(found["differing"]) == bool(code)
    if explained:
        assert any("kind back" in slip for slip in found["explained_by"])


def test_a_sheet_that_is_none(folder, capsys):
    assert run([*GATE, "-o", str(folder)]) == 0
    sheet = filled(folder, lambda sign, _: "maybe" if sign == "H" else sign)
    capsys.readouterr()
    assert run([*GATE, "--readings", sheet]) == 2
    err = capsys.readouterr().err
    assert "SHEET-SIGN" in err
    assert "expected H, L, Z or nothing" in err


def test_an_empty_sheet_is_no_agreement(folder, capsys):
    assert run([*GATE, "-o", str(folder)]) == 0
    sheet = filled(folder, lambda _, __: "")
    capsys.readouterr()
    assert run([*GATE, "--readings", sheet]) == 2
    assert "no reading is filled in [SHEET-EMPTY]" in capsys.readouterr().err


def test_a_sheet_of_another_device(folder, capsys):
    assert run([*GATE, "-o", str(folder)]) == 0
    sheet = filled(folder, lambda sign, _: sign)
    assert run(["device", "exercise", "own-9x5", "--readings", sheet]) == 2
    assert "SHEET-OTHER" in capsys.readouterr().err


@pytest.mark.parametrize(
    ("options", "says"),
    [
        pytest.param([], "give either -o FOLDER or --readings", id="neither"),
        pytest.param(["-o", "x", "--readings", "y.csv"], "give either", id="both"),
        pytest.param(["-o", "x", "--parts", "some"], "expected 1 to 999, or all", id="parts"),
    ],
)
def test_wrong_calls(options, says, capsys):
    assert run([*GATE, *options]) == 2
    assert says in capsys.readouterr().err


def test_document(folder, capsys):
    assert run(["device", "exercise", "shared-8x16x4", "-o", str(folder), "--json"]) == 0
    found = json.loads(capsys.readouterr().out)
    assert found["slips"]["shown"] + len(found["parts"][-1]["open"]) == found["slips"]["tried"]
    assert len(found["files"]) == 4
