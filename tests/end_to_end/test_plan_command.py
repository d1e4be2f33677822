"""``fuseplan plan`` as the contract has it."""

import io
import shutil
import signal
import time
from pathlib import Path

import pytest
from calls import (
    CISTERN,
    GOLDEN,
    SAW_BENCH,
    call,
    call_json,
    contents,
    document,
    hard_design,
    is_text_list,
    process,
)
from oracles.array_oracle import read_transmission

from pla.logic.effort import Effort
from pla.logic.minimize import minimize

DEVICES = Path(__file__).parents[2] / "devices"

TERMS_KEYS = {
    *("name", "inputs", "outputs", "complemented", "terms"),
    *("count", "lower_bound", "proven", "proven_by"),
}
PLAN_KEYS = TERMS_KEYS | {
    *("device", "fits", "reasons", "pins", "budget", "fuse_checksum", "proof", "files"),
    "schema_version",
}

WIDE = """
name = "Nine doors"
[inputs]
door = 9
[outputs]
any_open = 1
[logic]
any_open = "door != 0"
"""


@pytest.fixture
def out(tmp_path):
    return tmp_path / "out"


def plan(design, device, folder, *options):
    return ["plan", design, "--device", device, "-o", folder, *options]


# --- it fits ---


def test_document_of_a_plan(out, capsys):
    code, found = call_json(capsys, *plan(SAW_BENCH, "shared-14x40x8", out))
    assert code == 0
    assert set(found) >= PLAN_KEYS
    assert found["device"] == "shared-14x40x8"
    assert (found["fits"], found["reasons"]) == (True, [])
    # Worked out in golden/saw_bench.md.
    assert found["pins"] == {
        "left": 1,
        "right": 2,
        "knee": 8,
        "touched": 22,
        "drive": 15,
        "lamp": 16,
    }
    assert found["budget"] == {
        "terms": {"used": 2, "available": 40},
        "inputs": {"used": 3, "available": 14},
        "outputs": {"used": 3, "available": 8},
    }
    assert found["fuse_checksum"] == "B706"
    assert set(found["proof"]) == {"method", "cases", "equal"}
    assert isinstance(found["proof"]["method"], str)
    assert isinstance(found["proof"]["cases"], int)
    assert found["proof"]["equal"] is True
    assert is_text_list(found["files"])
    assert str(out / "saw_bench.jed") in found["files"]
    assert sorted(found["files"]) == sorted(str(path) for path in out.iterdir())


def test_minimum_is_the_one_of_terms(out, capsys):
    _, terms = call_json(capsys, "terms", SAW_BENCH)
    _, found = call_json(capsys, *plan(SAW_BENCH, "shared-14x40x8", out))
    assert {key: found[key] for key in TERMS_KEYS} == {key: terms[key] for key in TERMS_KEYS}


def test_tables_for_people(out, capsys):
    code, shown, err = call(capsys, *plan(CISTERN, "shared-8x16x4", out))
    assert (code, err) == (0, "")
    assert "Cistern pump" in shown
    assert "fits shared-8x16x4" in shown
    files = contents(out)
    assert [name for name in files if name.endswith(".jed")] == ["cistern.jed"]
    everything = b"\n".join(data for name, data in files.items() if not name.endswith(".jed"))
    for name in ("pump", "slow", "valve", "alarm", "level[1]", "hatch", "0A70"):
        assert name.encode() in everything
    for data in files.values():
        assert data


def test_device_by_name_and_by_file(tmp_path, capsys):
    shutil.copy(DEVICES / "shared-8x16x4.toml", tmp_path / "mine.toml")
    assert call(capsys, *plan(CISTERN, "shared-8x16x4", tmp_path / "a"))[0] == 0
    assert call(capsys, *plan(CISTERN, tmp_path / "mine.toml", tmp_path / "b"))[0] == 0
    assert contents(tmp_path / "a") == contents(tmp_path / "b")


def test_places_of_another_device_do_not_count(tmp_path, capsys):
    design = tmp_path / "saw_bench.toml"
    text = Path(SAW_BENCH).read_text(encoding="utf-8")
    assert text.count("[place.shared-16x48x8]\nknee = 9") == 1
    design.write_text(text.replace("[place.shared-16x48x8]\nknee = 9", "[place.x]\nknee = 99"))
    code, found = call_json(capsys, *plan(design, "shared-12x32x6", tmp_path / "out"))
    assert code == 0
    assert (found["pins"]["knee"], found["pins"]["drive"]) == (3, 15)


def test_polarity_true(tmp_path, capsys):
    _, free = call_json(capsys, *plan(SAW_BENCH, "shared-16x48x8", tmp_path / "a"))
    assert (free["count"], free["complemented"]) == (2, ["touched"])
    code, true = call_json(
        capsys, *plan(SAW_BENCH, "shared-16x48x8", tmp_path / "b", "--polarity", "true")
    )
    assert code == 0
    assert (true["count"], true["complemented"]) == (5, [])


@pytest.mark.parametrize("device", sorted(path.stem for path in DEVICES.glob("*.toml")))
def test_every_device_of_the_catalogue(device, out, capsys):
    code, found = call_json(capsys, *plan(CISTERN, device, out))
    assert code == 0
    file = read_transmission((out / "cistern.jed").read_bytes())
    assert f"device {device}" in file.notes
    total = sum(state << fuse % 8 for fuse, state in enumerate(file.states)) % 65536
    assert found["fuse_checksum"] == f"{total:04X}"


def test_same_bytes_in_every_process(tmp_path):
    shown = []
    for seed in ("0", "1"):
        folder = tmp_path / seed
        folder.mkdir()
        child = process(plan(SAW_BENCH, "shared-16x48x8", "out", "--json"), folder, seed)
        printed, err = child.communicate(timeout=60)
        assert (child.returncode, err) == (0, b"")
        shown.append((printed, contents(folder / "out")))
    assert shown[0] == shown[1]


# --- it does not ---


@pytest.mark.parametrize(
    ("device", "polarity", "reason", "holders"),
    [
        pytest.param(
            "shared-8x16x4",
            "free",
            "9 inputs are needed, the device has 8 input pins",
            {"shared-10x24x6", "shared-12x32x6", "shared-20x96x12"},
            id="inputs",
        ),
        pytest.param("shared-10x24x6", "true", "any_open", {"shared-12x32x6"}, id="polarity"),
    ],
)
def test_design_that_does_not_fit(device, polarity, reason, holders, tmp_path, out, capsys):
    design = tmp_path / "doors.toml"
    design.write_text(WIDE, encoding="utf-8")
    options = plan(design, device, out, "--polarity", polarity)
    code, found = call_json(capsys, *options)
    assert code == 1
    assert set(found) >= PLAN_KEYS
    assert found["fits"] is False
    assert any(reason in text for text in found["reasons"])
    assert found["files"] == []
    for key in ("pins", "fuse_checksum", "proof"):
        assert found[key] is None
    assert holders <= set(found["would_fit"])
    assert device not in found["would_fit"]
    code, shown, _ = call(capsys, *options)
    assert code == 1
    assert reason in " ".join(shown.split())
    assert not out.exists()


def test_too_many_terms(tmp_path, out, capsys):
    design = hard_design(tmp_path / "hard.toml", 6, 2)
    code, found = call_json(capsys, *plan(design, "shared-8x16x4", out))
    assert code == 1
    assert found["budget"]["terms"] == {"used": found["count"], "available": 16}
    assert found["lower_bound"] > 16
    assert any("16" in text and "product terms" in text for text in found["reasons"])
    assert not out.exists()


def test_design_that_does_not_fit_leaves_an_old_folder_alone(tmp_path, out, capsys):
    assert call(capsys, *plan(CISTERN, "shared-8x16x4", out))[0] == 0
    before = contents(out)
    design = tmp_path / "cistern.toml"
    design.write_text(WIDE, encoding="utf-8")
    assert call(capsys, *plan(design, "shared-8x16x4", out, "--force"))[0] == 1
    assert contents(out) == before


def test_require_proof(tmp_path, capsys, monkeypatch):
    design = hard_design(tmp_path / "hard.toml", 7, 3)

    def idle(*arguments, **keywords):
        return minimize(*arguments, **keywords | {"effort": Effort(work=0, nodes=0)})

    monkeypatch.setattr("pla.fitting.minima.minimize", idle)
    demanded = plan(design, "shared-20x96x12", tmp_path / "a", "--require-proof")
    code, found = call_json(capsys, *demanded)
    assert code == 1
    assert (found["proven"], found["files"], found["fuse_checksum"]) == (False, [], None)
    code, _, err = call(capsys, *demanded)
    assert code == 1
    assert f"at least {found['lower_bound']}" in err
    assert not (tmp_path / "a").exists()
    code, found = call_json(capsys, *plan(design, "shared-20x96x12", tmp_path / "b"))
    assert (code, found["proven"]) == (0, False)
    assert (tmp_path / "b" / "hard.jed").exists()


def test_proof_that_is_there_is_no_no(out, capsys):
    assert call(capsys, *plan(CISTERN, "shared-8x16x4", out, "--require-proof"))[0] == 0


# --- folders ---


def test_existing_folder(out, capsys):
    assert call(capsys, *plan(CISTERN, "shared-8x16x4", out))[0] == 0
    (out / "notes.txt").write_bytes(b"mine")
    (out / "cistern.jed").write_bytes(b"old")
    before = contents(out)
    code, found = call_json(capsys, *plan(CISTERN, "shared-8x16x4", out))
    assert code == 2
    assert len(found["errors"]) == 1
    assert "--force" in call(capsys, *plan(CISTERN, "shared-8x16x4", out))[2]
    assert contents(out) == before
    assert call(capsys, *plan(CISTERN, "shared-8x16x4", out, "--force"))[0] == 0
    after = contents(out)
    assert after["cistern.jed"] == (GOLDEN / "cistern.jed").read_bytes()
    assert after["notes.txt"] == b"mine"
    assert set(after) == set(before)


def test_nothing_is_left_when_the_proof_fails(tmp_path, out, capsys, monkeypatch):
    """A fault between minimizing and writing: the program contradicts itself and says so."""
    from pla.fuses import program

    right = program.link

    def wrong(planned):
        fuses = right(planned)
        return fuses.changed({0: 1 - fuses[0]})

    monkeypatch.setattr(program, "link", wrong)
    code, found = call_json(capsys, *plan(CISTERN, "shared-8x16x4", out))
    assert code == 3
    assert [e["code"] for e in found["errors"]] == ["NOT-EQUAL"]
    assert list(tmp_path.iterdir()) == []


def test_folders_above_are_made(tmp_path, capsys):
    target = tmp_path / "a" / "b" / "c"
    assert call(capsys, *plan(CISTERN, "shared-8x16x4", target))[0] == 0
    assert (target / "cistern.jed").is_file()
    assert [p.name for p in (tmp_path / "a").iterdir()] == ["b"]


def test_an_existing_folder_is_refused_before_any_work(out, capsys, monkeypatch):
    def busy(*_arguments, **_keywords):
        raise AssertionError("minimized for nothing")

    monkeypatch.setattr("pla.fitting.minima.minimize", busy)
    out.mkdir()
    code, found = call_json(capsys, *plan(CISTERN, "shared-8x16x4", out))
    assert (code, [e["code"] for e in found["errors"]]) == (2, ["FOLDER-EXISTS"])


def test_a_design_from_standard_input(out, capsys, monkeypatch):
    text = Path(CISTERN).read_bytes()
    monkeypatch.setattr("sys.stdin", io.TextIOWrapper(io.BytesIO(text)))
    assert call(capsys, *plan("-", "shared-8x16x4", out))[0] == 0
    assert (out / "design.jed").is_file()


# --- wrong calls ---


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        pytest.param(["plan"], "DESIGN", id="nothing"),
        pytest.param(["plan", CISTERN, "-o", "x"], "--device", id="no-device"),
        pytest.param(["plan", CISTERN, "--device", "shared-8x16x4"], "-o", id="no-folder"),
        pytest.param(plan("nowhere.toml", "shared-8x16x4", "x"), "no such file", id="no-design"),
        pytest.param(plan(CISTERN, "shared-8x16x5", "x"), "shared-8x16x4", id="no-such-device"),
        pytest.param(plan(CISTERN, "nowhere.toml", "x"), "no such file", id="no-device-file"),
        pytest.param(plan(CISTERN, CISTERN, "x"), "cistern.toml:", id="design-as-device"),
        pytest.param(
            plan(CISTERN, "shared-8x16x4", "x", "--polarity", "up"), "true", id="polarity"
        ),
        pytest.param(plan(CISTERN, "shared-8x16x4", ""), "folder", id="empty-folder"),
    ],
)
def test_wrong_calls(arguments, words, tmp_path, capsys, monkeypatch):
    monkeypatch.chdir(tmp_path)
    code, out, err = call(capsys, *arguments)
    assert (code, out) == (2, "")
    assert words in err
    assert "Traceback" not in err
    code, found = call_json(capsys, *arguments)
    assert code == 2
    assert set(found) == {"errors", "schema_version"}
    assert found["errors"]
    for error in found["errors"]:
        assert set(error) == {"file", "line", "column", "code", "message", "hint"}
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize(
    ("places", "words"),
    [
        pytest.param("pump = 99", "the highest is 14", id="no-such-pin"),
        pytest.param("pump = 7", "ground", id="ground"),
        pytest.param("pump = 1", "pump", id="output-on-an-input"),
        pytest.param("call = 10", "call", id="input-on-an-output"),
    ],
)
def test_places_that_no_pin_can_hold(places, words, tmp_path, out, capsys):
    design = tmp_path / "cistern.toml"
    text = Path(CISTERN).read_text(encoding="utf-8") + f"\n[place.shared-8x16x4]\n{places}\n"
    design.write_text(text, encoding="utf-8")
    code, found = call_json(capsys, *plan(design, "shared-8x16x4", out))
    assert code == 2
    (error,) = found["errors"]
    assert (error["file"], error["line"]) == (str(design), text[:-1].count("\n") + 1)
    assert words in call(capsys, *plan(design, "shared-8x16x4", out))[2]
    assert not out.exists()


# --- Ctrl-C ---


def test_interrupted_between_two_steps(tmp_path, out, capsys, monkeypatch):
    def pressed(*_arguments, **_keywords):
        raise KeyboardInterrupt

    monkeypatch.setattr("pla.files._sync_folder", pressed)
    assert call(capsys, *plan(CISTERN, "shared-8x16x4", out))[:2] == (130, "")
    code, found = call_json(capsys, *plan(CISTERN, "shared-8x16x4", out))
    assert (code, [e["code"] for e in found["errors"]]) == (130, ["INTERRUPTED"])
    assert list(tmp_path.iterdir()) == []


def test_interrupted_while_it_computes(tmp_path):
    """A real key press, at a moment when the program is busy."""
    hard_design(tmp_path / "hard.toml", 11, 6)
    child = process(plan("hard.toml", "shared-20x96x12", "out"), tmp_path)
    time.sleep(3)
    assert child.poll() is None
    child.send_signal(signal.SIGINT)
    pressed = time.monotonic()
    shown, err = child.communicate(timeout=60)
    assert time.monotonic() - pressed < 20
    assert child.returncode == 130
    assert shown == b""
    assert err.split() == [b"interrupted"]
    assert [path.name for path in tmp_path.iterdir()] == ["hard.toml"]


def test_document_alone_on_standard_output(tmp_path):
    """Warnings go to standard error, whatever the libraries print is kept away."""
    design = tmp_path / "idle.toml"
    design.write_text(WIDE.replace("door != 0", "door[8]"), encoding="utf-8")
    child = process(plan("idle.toml", "shared-12x32x6", "out", "--json"), tmp_path)
    shown, err = child.communicate(timeout=60)
    assert child.returncode == 0
    assert document(shown.decode())["fits"] is True
    assert b"warning: " in err
    assert b"INPUT-UNUSED" in err
