"""The command: files, documents, readings judged, refusals."""

import csv
import io
import json
from pathlib import Path

import pytest
from oracles.fuse_file import read_transmission

from pla.cli.main import run
from pla.device.catalogue import catalogue, find_device
from pla.exercise import measured
from pla.exercise.part import make_part
from pla.exercise.program import exercise
from pla.exercise.slip import Slip
from pla.exercise.slips import slips

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
                sign = row[head.index(name.replace("measured", "expected"))].strip("?")
                row[place] = change(sign, name)
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


def test_readings_of_a_part_that_another_description_made(tmp_path, capsys):
    """Two pins exchanged: the sheets are alike but for the fuses of the part."""
    true, wrong = tmp_path / "true.toml", tmp_path / "wrong.toml"
    text = (Path(__file__).parents[2] / "devices" / "gate-9x6.toml").read_text("utf-8")
    true.write_text(text, "utf-8")
    assert text.count("5 5' 6 6'") == 1
    wrong.write_text(text.replace("5 5' 6 6'", "6 6' 5 5'"), "utf-8")
    found = []
    for path in (true, wrong):
        assert run(["device", "exercise", str(path), "-o", str(tmp_path / path.stem)]) == 0
        sheet = tmp_path / path.stem / f"{path.stem}-exercise-1.csv"
        found.append([row[2:] for row in csv.reader(io.StringIO(sheet.read_text("utf-8")))])
    assert found[0] == found[1]
    capsys.readouterr()
    assert run(["device", "exercise", str(true), "--readings", str(sheet)]) == 2
    err = capsys.readouterr().err
    assert err.count("SHEET-OTHER") == 1
    assert "with another device file, or this one was changed since" in err


def lines_of(sheet):
    path = Path(sheet)
    return path, path.read_text("utf-8").splitlines(keepends=True)


def test_a_sheet_in_another_order(folder, capsys):
    assert run([*GATE, "-o", str(folder)]) == 0
    path, (head, *rows) = lines_of(filled(folder, lambda sign, _: sign))
    path.write_text("".join([head, *reversed(rows)]), "utf-8")
    assert run([*GATE, "--readings", str(path)]) == 0
    capsys.readouterr()


@pytest.mark.parametrize(
    ("change", "says"),
    [
        pytest.param(lambda rows: rows[:4] + rows[5:], "no line for step 5", id="missing"),
        pytest.param(lambda rows: rows[:4] + rows[3:], "step '4', expected another", id="twice"),
        pytest.param(lambda rows: rows[:-1], "steps, and the exercise has", id="cut-off"),
    ],
)
def test_steps_that_are_not_all_there_are_one_error(change, says, folder, capsys):
    assert run([*GATE, "-o", str(folder)]) == 0
    path, (head, *rows) = lines_of(filled(folder, lambda sign, _: sign))
    path.write_text("".join([head, *change(rows)]), "utf-8")
    capsys.readouterr()
    assert run([*GATE, "--readings", str(path)]) == 2
    err = capsys.readouterr().err
    assert err.count("error:") == 1
    assert says in err


def test_a_question_mark_is_no_reading(folder, capsys):
    assert run([*GATE, "-o", str(folder)]) == 0
    sheet = filled(folder, lambda sign, _: sign.replace("Z", "?"))
    capsys.readouterr()
    assert run([*GATE, "--readings", sheet]) == 2
    assert "'?' in the column 'measured" in capsys.readouterr().err


def test_a_single_odd_reading_is_measured_again_first(folder, capsys):
    assert run([*GATE, "-o", str(folder)]) == 0
    once = iter("L")
    sheet = filled(folder, lambda sign, _: next(once, sign) if sign == "H" else sign)
    capsys.readouterr()
    assert run([*GATE, "--readings", sheet]) == 1
    out = capsys.readouterr().out
    assert out.startswith("1 of ")
    assert "differs:" in out
    assert "measure it again first" in out


def test_what_a_slip_leaves_unknown_it_does_not_explain(monkeypatch, tmp_path):
    """Of two slips one leaves the differing reading open, and another foretells it."""
    made = exercise(find_device("gate-9x6"), 1).parts[0]
    pin = next(pin for pin, row in made.expected.items() if "H" in row)
    at = made.expected[pin].index("H")

    def with_sign(sign):
        row = made.expected[pin]
        return {**made.expected, pin: row[:at] + sign + row[at + 1 :]}

    said = {"definite": "L", "open": "?", "wrong": "H"}
    every = [Slip(what, what) for what in said]
    monkeypatch.setattr(measured, "slips", lambda _: every)
    monkeypatch.setattr(measured, "readings", lambda what, _: with_sign(said[what]))
    head, *rows = csv.reader(io.StringIO(measured.write_sheet(made, 1)))
    for k, row in enumerate(rows):
        for own, signs in with_sign("L").items():
            row[head.index(f"measured {own}")] = signs[k].strip("?")
    sheet = tmp_path / "sheet.csv"
    sheet.write_text("\n".join(map(",".join, [head, *rows])), "utf-8")
    found = measured.find_slips(measured.read_sheet(str(sheet)), made)
    assert found.differing == ((at, pin),)
    assert found.explaining == ("definite",)
    assert found.perhaps == (("open", 1),)
    assert found.nearest == ()


@pytest.mark.parametrize(
    ("device", "what"),
    [
        ("gate-9x6", "the columns of 1 and of 10 exchanged"),
        ("gate-9x6", "the cells on pins 12 and 14 exchanged"),
        ("gate-9x6", "the active level of enable pin 11 is the other one"),
        ("gate-9x6", "the cell on pin 12 always drives and is not switched"),
    ],
)
def test_slips_that_are_tried(device, what):
    assert what in [own.what for own in slips(find_device(device))]


def test_no_more_than_a_third_of_the_rows_of_a_cell_are_blocked():
    for own in map(find_device, catalogue()):
        for number in (1, 2):
            part = make_part(own, number)
            for cell in own.cells:
                terms = part.modes[cell.key].terms
                words = [part.contents[row] for row in terms]
                blocked = sum(" blocked" in what for what in words)
                assert blocked <= len(terms) / 3
                assert not terms or any(
                    " blocked" not in what and " cut off" not in what for what in words
                )


@pytest.mark.parametrize(
    ("options", "says"),
    [
        pytest.param([], "give either -o FOLDER or --readings", id="neither"),
        pytest.param(["-o", "x", "--readings", "y.csv"], "give either", id="both"),
        pytest.param(["-o", "x", "--parts", "some"], "expected 1 to 999, or all", id="parts"),
        pytest.param(["-o", "x", "--parts", "0"], "expected 1 to 999, or all", id="no-parts"),
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
