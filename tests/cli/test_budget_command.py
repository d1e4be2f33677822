"""The budget command: documents, text, exit codes, folders of device files."""

import json
from pathlib import Path

import pytest

from pla.cli.main import run
from pla.device.catalogue import catalogue, find_device

ROOT = Path(__file__).parents[2]
CLOCKED = {"address-latch", "bus-arbiter", "feeder-guard"}
EXAMPLES = sorted(p for p in (ROOT / "examples").glob("*.toml") if p.stem not in CLOCKED)
LONG = {
    "cabinet-fans",
    "clamp-card",
    "egg-totals",
    "rotator-readout",
    "silo-valves",
    "sump-pumps",
    "tape-reader",
}
SHIPPED = len(catalogue())
SPLITTER = str(ROOT / "examples" / "splitter-interlock.toml")
DEVICES = ROOT / "devices"


def source(name):
    return (DEVICES / f"{name}.toml").read_text("utf-8")


def document(capsys, *arguments):
    code = run(["budget", *map(str, arguments), "--json"])
    out, err = capsys.readouterr()
    return code, json.loads(out), err


def names(found):
    return [entry["device"] for entry in found["devices"]]


@pytest.fixture
def folder(tmp_path):
    made = tmp_path / "arrays"
    made.mkdir()
    return made


@pytest.mark.parametrize(
    "design",
    [
        pytest.param(path, id=path.stem, marks=pytest.mark.slow if path.stem in LONG else ())
        for path in EXAMPLES
    ],
)
def test_agrees_with_plan(design, tmp_path, capsys):
    code, found, _ = document(capsys, design)
    assert sorted(names(found)) == sorted(catalogue())
    holding = [entry for entry in found["devices"] if entry["fits"]]
    others = [entry for entry in found["devices"] if not entry["fits"]]
    for entry in (*holding[:3], *others[:1], *others[-1:]):
        options = ["--device", entry["device"], "-o", str(tmp_path / entry["device"]), "--json"]
        assert run(["plan", str(design), *options]) == (0 if entry["fits"] else 1)
        planned = json.loads(capsys.readouterr().out)
        for key in ("device", "fits", "reasons", "count", "lower_bound", "proven", "proven_by"):
            assert entry[key] == planned[key], (entry["device"], key)
        for resource, usage in planned["budget"].items():
            told = dict(entry["budget"][resource])
            spare = told.pop("spare")
            assert told == usage
            known = usage["used"] is not None
            assert spare == (usage["available"] - usage["used"] if known else None)
        for key in ("passes", "delay"):
            assert entry[key] == planned[key]
    assert code == (0 if any(entry["fits"] for entry in found["devices"]) else 1)


def test_document(capsys):
    code, found, err = document(capsys, SPLITTER, "--reserve", "6", "--polarity", "true")
    assert (code, err) == (0, "")
    keys = ["devices", "left_out", "name", "polarity", "reserve", "schema_version", "warnings"]
    assert sorted(found) == keys
    assert (found["name"], found["polarity"], found["reserve"]) == (
        "Log splitter interlock",
        "true",
        6,
    )
    assert (found["left_out"], found["warnings"]) == ([], [])
    for entry in found["devices"]:
        device = find_device(entry["device"])
        assert (entry["pins"], entry["fuses"]) == (device.pins, device.fuses)
        assert entry["file"] is None
        own = sum(cell.capacity for cell in device.cells)
        assert entry["budget"]["terms"]["available"] == len(device.shared_rows) + own
        if entry["count"] is None:
            unknown = ("missing", "lower_bound", "proven", "proven_by")
            assert {entry[key] for key in unknown} == {None}
            assert (entry["budget"]["terms"]["used"], entry["budget"]["terms"]["spare"]) == (
                None,
                None,
            )
        assert entry["fits"] == (not entry["reasons"])
    assert {entry["count"] is None for entry in found["devices"]} == {True, False}


def test_a_reserve_that_nothing_leaves_is_a_no(capsys):
    assert document(capsys, SPLITTER, "--reserve", "90")[0] == 0
    code, found, _ = document(capsys, SPLITTER, "--reserve", "91")
    assert code == 1
    assert not any(entry["fits"] for entry in found["devices"])
    assert names(found)[0] == "shared-20x96x12"
    assert run(["budget", SPLITTER, "--reserve", "91"]) == 1
    shown = capsys.readouterr().out
    assert f"0 of {SHIPPED} devices hold it with 91 product terms spare" in shown
    assert "Devices that hold it" not in shown
    assert "91 are to be kept" in " ".join(shown.split())


def test_own_devices_are_ranked_among_the_others(folder, capsys):
    text = source("shared-12x32x6").replace('"shared-12x32x6"', '"bench"')
    (folder / "B.TOML").write_text(text, encoding="utf-8")
    (folder / ".hidden.toml").write_text("nonsense", encoding="utf-8")
    (folder / "notes.txt").write_text("nonsense", encoding="utf-8")
    (folder / "copy.toml").write_text(source("shared-8x16x4"), encoding="utf-8")
    code, found, err = document(capsys, SPLITTER, "--devices", folder)
    assert (code, err) == (0, "")
    place = names(found).index("bench")
    assert names(found)[place + 1] == "shared-12x32x6"
    assert found["devices"][place]["file"] == str(folder / "B.TOML")
    assert len(found["devices"]) == SHIPPED + 1
    assert run(["budget", SPLITTER, "--devices", str(folder)]) == 0
    shown = " ".join(capsys.readouterr().out.split())
    assert f"Not of the catalogue: bench in {folder / 'B.TOML'}." in shown


@pytest.mark.parametrize(
    ("text", "code", "line", "column", "message"),
    [
        pytest.param(
            source("shared-12x32x6").replace("fuses = 966", "fuses = 960"),
            "FUSE-RANGE",
            30,
            32,
            "(and 5 more errors)",
            id="several errors",
        ),
        pytest.param("name = ", "TOML-SYNTAX", 1, 8, "left out: ", id="syntax"),
        pytest.param(
            source("shared-8x16x4").replace("one-time", "erasable"),
            "DEVICE-NAME-TAKEN",
            1,
            1,
            "left out: the catalogue has another device shared-8x16x4",
            id="name of the catalogue",
        ),
    ],
)
def test_a_file_left_out_is_a_located_warning(folder, capsys, text, code, line, column, message):
    (folder / "mine.toml").write_text(text, encoding="utf-8")
    result, found, err = document(capsys, SPLITTER, "--devices", folder)
    assert result == 0
    assert len(found["devices"]) == SHIPPED
    (entry,) = found["left_out"]
    place = str(folder / "mine.toml")
    assert (entry["file"], entry["code"], entry["line"]) == (place, code, line)
    assert entry["column"] == column
    assert message in entry["message"]
    assert err.startswith(f"{place}:{line}:{column}: warning: left out: ")
    assert "error: " not in err


def test_of_two_files_with_one_name_the_first_counts(folder, capsys):
    text = source("shared-8x16x4").replace('"shared-8x16x4"', '"mine"')
    (folder / "a.toml").write_text(text, encoding="utf-8")
    (folder / "b.toml").write_text(text.replace("one-time", "erasable"), encoding="utf-8")
    _, found, _ = document(capsys, SPLITTER, "--devices", folder)
    (entry,) = found["left_out"]
    assert entry["file"] == str(folder / "b.toml")
    assert entry["message"] == f"left out: {folder / 'a.toml'} has another device mine"
    assert names(found).count("mine") == 1


def test_an_empty_folder_is_said(folder, capsys):
    code, found, err = document(capsys, SPLITTER, "--devices", folder)
    assert (code, len(found["devices"])) == (0, SHIPPED)
    assert f"{folder}: warning: no device files in it [NO-DEVICE-FILES]" in err


@pytest.mark.parametrize(
    ("path", "code"),
    [
        pytest.param("nowhere", "NO-SUCH-FOLDER", id="none"),
        pytest.param("file.toml", "NOT-A-FOLDER", id="file"),
        pytest.param("nul\0", "CANNOT-READ", id="impossible name"),
    ],
)
def test_a_folder_that_is_none(tmp_path, capsys, path, code):
    (tmp_path / "file.toml").write_text("", encoding="utf-8")
    result, found, _ = document(capsys, SPLITTER, "--devices", f"{tmp_path}/{path}")
    assert result == 2
    (error,) = found["errors"]
    assert error["code"] == code


@pytest.mark.parametrize(
    "arguments",
    [
        pytest.param([SPLITTER, "--reserve", "-1"], id="negative reserve"),
        pytest.param([SPLITTER, "--reserve", "many"], id="reserve in words"),
        pytest.param(["nowhere.toml"], id="no design"),
    ],
)
def test_bad_calls(capsys, arguments):
    code, found, _ = document(capsys, *arguments)
    assert code == 2
    assert found["errors"]


def test_the_rule_is_stated_in_help_and_output(capsys):
    assert run(["budget", "--help"]) == 0
    told = " ".join(capsys.readouterr().out.split())
    assert run(["budget", SPLITTER]) == 0
    shown = " ".join(capsys.readouterr().out.split())
    for words in ("fewest pins, then fewest fuses, then", "are missing together, of equals"):
        assert words in told
        assert words in shown
