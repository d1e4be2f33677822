"""``fuseplan inspect`` as a user sees it."""

import io
import json
import sys

import pytest
from jesd3_bytes import GOLDEN, SAMPLE, transmission

from pla.cli.main import run
from pla.device.catalogue import catalogue, find_device
from pla.fuses.fusemap import FuseMap
from pla.fuses.jesd3 import write_fuse_file


def inspect(capsys, tmp_path, data, *options):
    path = tmp_path / "a.jed"
    path.write_bytes(data)
    code = run(["inspect", str(path), *options])
    shown = capsys.readouterr()
    return code, shown.out, shown.err


def test_text(capsys, tmp_path):
    code, out, err = inspect(capsys, tmp_path, transmission(SAMPLE))
    assert (code, err) == (0, "")
    assert "keeps to the standard in every point" in out
    for words in (
        "memory decoder",
        "448: 298 closed, 150 open",
        "0 (closed) for fuses in no list",
        "8, at most 8 by QV",
        "124E given, 124E computed: equal",
        "6 (fuse list)",
        "    1  000000XXXNXXXHHHLXXN",
    ):
        assert words in out


def test_departures_are_shown_with_place_and_field(capsys, tmp_path):
    data = transmission(SAMPLE).replace(b"C124E", b"C124e") + b"\r\n"
    code, out, _ = inspect(capsys, tmp_path, data)
    assert code == 0
    offset = data.index(b"C124e") + 4
    assert "with 3 departures from the standard" in out
    assert f"13:5: byte {offset}, field C: 'e' found" in out
    assert "NOT EQUAL" in out


def test_json(capsys, tmp_path):
    code, out, err = inspect(capsys, tmp_path, GOLDEN + b"\x1a", "--json")
    document = json.loads(out)
    assert (code, err) == (0, "")
    assert document.pop("file").endswith("a.jed")
    (departure,) = document.pop("departures")
    assert (departure["code"], departure["offset"], departure["field"]) == (
        "BYTES-AFTER",
        113,
        None,
    )
    assert document == {
        "schema_version": 1,
        "design": "Grain dryer",
        "notes": ["rev A"],
        "fuses": 12,
        "pins": 6,
        "vector_limit": 1,
        "default": 0,
        "security": 0,
        "default_condition": 0,
        "fuse_checksum": "00D0",
        "fuse_checksum_given": "00D0",
        "transmission_sum": "1550",
        "transmission_sum_given": "1550",
        "links": {"open": 7, "closed": 5},
        "pin_order": None,
        "vectors": [{"number": 1, "conditions": "01HLXN"}],
        "fields": dict.fromkeys(("C", "F", "G", "N", "QF", "QP", "QV", "V", "X"), 1) | {"L": 2},
        "devices": [],
    }
    keys = list(json.loads(out, object_pairs_hook=lambda pairs: [k for k, _ in pairs]))
    assert keys == sorted(keys)


def test_what_is_unknown_is_null(capsys, tmp_path):
    _, out, _ = inspect(capsys, tmp_path, b"\x02x*QF1*F0*\x030000", "--json")
    document = json.loads(out)
    for key in ("pins", "vector_limit", "security", "default_condition", "fuse_checksum_given"):
        assert document[key] is None
    assert document["transmission_sum_given"] == "0000"


@pytest.mark.parametrize("name", catalogue())
def test_devices_of_that_size_are_named(capsys, tmp_path, name):
    device = find_device(name)
    data = write_fuse_file(
        "x", [], device.pins, FuseMap.filled(device.fuses, 0), list(device.blocks())
    )
    _, out, _ = inspect(capsys, tmp_path, data, "--json")
    assert name in json.loads(out)["devices"]
    other = write_fuse_file("x", [], device.pins + 99, FuseMap.filled(device.fuses, 0), [])
    _, out, _ = inspect(capsys, tmp_path, other, "--json")
    assert json.loads(out)["devices"] == []


def test_refused_file(capsys, tmp_path):
    data = b"\x02x*QF4*F0*W1*\r\nL0 10*\r\nL2 21*\x030000"
    code, out, err = inspect(capsys, tmp_path, data)
    assert (code, out) == (2, "")
    assert "a.jed:3:4: error: byte 26, field L2: '2' found among the fuse states" in err
    assert "  | L2 21*.0000\n  |    ^\n" in err
    assert "a.jed:1:11: warning: byte 10, field 'W': no such identifier" in err


def test_refused_file_in_json(capsys, tmp_path):
    code, out, _ = inspect(capsys, tmp_path, b"\x02x*F0*\x030000", "--json")
    document = json.loads(out)
    assert code == 2
    assert [e["code"] for e in document["errors"]] == ["NO-QF"]
    assert document["errors"][0]["file"].endswith("a.jed")


def test_standard_input(capsys, monkeypatch):
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(GOLDEN)))
    assert run(["inspect", "-"]) == 0
    assert capsys.readouterr().out.startswith("standard input: keeps to the standard")


def test_missing_file(capsys):
    assert run(["inspect", "nowhere.jed"]) == 2
    assert "nowhere.jed: error: no such file [NO-SUCH-FILE]" in capsys.readouterr().err


def test_foreign_text_cannot_move_the_cursor(capsys, tmp_path):
    data = transmission(b"a\x1b[2J*N \x9b1m\xc2\x85*QF1*F0*")
    _, out, err = inspect(capsys, tmp_path, data)
    assert "<1B>[2J" in out
    assert all(c.isprintable() or c == "\n" for c in out + err)


@pytest.mark.parametrize("quiet", [False, True])
def test_quiet_leaves_out_warnings_beside_errors(capsys, tmp_path, quiet):
    path = tmp_path / "a.jed"
    path.write_bytes(b"\x02x*QF4*F0*W1*C0001*\x030000")
    assert run([*(["-q"] if quiet else []), "inspect", str(path)]) == 2
    err = capsys.readouterr().err
    assert ("warning:" in err) == (not quiet)
    assert "error:" in err
