"""``fuseplan inspect`` as a user sees it."""

import io
import json
import re
import sys
from pathlib import Path

import pytest
from jesd3_bytes import GOLDEN, SAMPLE, transmission

from pla.cli.main import run
from pla.device.catalogue import catalogue, find_device
from pla.fuses.fusemap import FuseMap
from pla.fuses.jesd3 import write_fuse_file
from pla.fuses.signature import encode_signature


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
        "device": None,
        "devices": [],
        "other_modes": [],
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
    fuses = FuseMap.filled(device.fuses, 0).changed(device.mode_fuses)
    data = write_fuse_file("x", [], device.pins, fuses, list(device.blocks()))
    _, out, _ = inspect(capsys, tmp_path, data, "--json")
    assert name in json.loads(out)["devices"]
    other = write_fuse_file("x", [], device.pins + 99, FuseMap.filled(device.fuses, 0), [])
    _, out, _ = inspect(capsys, tmp_path, other, "--json")
    assert json.loads(out)["devices"] == []


def test_refused_file(capsys, tmp_path):
    data = b"\x02x*QF4*F0*W1*\r\nL0 10*\r\nL2 21*\x030000"
    code, out, err = inspect(capsys, tmp_path, data)
    assert code == 2
    assert "a.jed: REFUSED, with 1 error;" in out
    assert rows(out)["fuses"] == "4 by QF; their states are not known"
    assert rows(out)["fuse checksum"] == "not given; not computable"
    assert "a.jed:3:4: error: byte 26, field L2: '2' found among the fuse states" in err
    assert "  | L2 21*.0000\n  |    ^\n" in err
    assert "a.jed:1:11: warning: byte 10, field 'W': no such identifier" in err


def rows(out):
    """The summary as a dictionary; of a label that stands there twice, the last."""
    block = out.split("\n\n")[1].splitlines()
    return dict(re.split(r" {2,}", x.strip(), maxsplit=1) for x in block if x[2] != " ")


def golden_array(**changes):
    """A fuse file of the smallest array of the catalogue, and that array."""
    device = find_device("shared-8x16x4")
    data = write_fuse_file(
        "Grain dryer",
        ["rev A"],
        changes.get("pins", device.pins),
        FuseMap.filled(device.fuses, 1),
        list(device.blocks()),
    )
    return device, data


def test_a_changed_fuse_is_refused_and_the_summary_still_shown(capsys, tmp_path):
    device, data = golden_array()
    given = re.search(rb"C([0-9A-F]{4})\*", data)[1].decode()
    changed = re.sub(rb"(L0+ )1", rb"\g<1>0", data, count=1)
    assert changed != data
    code, out, err = inspect(capsys, tmp_path, changed)
    assert code == 2
    assert out.count("REFUSED") == 1
    shown = rows(out)
    assert (shown["design"], shown["note"], shown["pins"]) == (
        "Grain dryer",
        "rev A",
        str(device.pins),
    )
    assert shown["fuses"] == f"{device.fuses}: 1 closed, {device.fuses - 1} open"
    # Fuse 0 weighs 1 in the sum.
    computed = f"{int(given, 16) - 1:04X}"
    assert shown["fuse checksum"] == f"{given} given, {computed} computed: NOT EQUAL"
    assert shown["devices"] == device.name
    assert "Departures" not in out
    # The transmission sum is wrong as well; it stands further behind in the file.
    assert re.findall(r"(error|warning): .*\[(.*)\]", err) == [
        ("error", "WRONG-CHECKSUM"),
        ("warning", "WRONG-SUM"),
    ]


def test_diagnostics_of_a_refused_file_stand_in_order_of_place(capsys, tmp_path):
    data = b"\x02x*QF4*F0*W1*\r\nL0 12*\r\nw*\r\nL2 21*\r\nC 12*\x03FFFF\r\n"
    _, _, err = inspect(capsys, tmp_path, data)
    offsets = [int(n) for n in re.findall(r": byte ([0-9]+)", err)]
    assert offsets == sorted(offsets)
    assert len(offsets) == 8
    found = re.findall(r": (error|warning): ", err)
    assert sorted(set(found)) == ["error", "warning"]
    assert found != sorted(found)


def test_refused_file_in_json(capsys, tmp_path):
    code, out, _ = inspect(capsys, tmp_path, b"\x02x*N a*F0*W*\x030000", "--json")
    document = json.loads(out)
    assert code == 2
    assert [e["code"] for e in document["errors"]] == ["NO-QF"]
    assert document["errors"][0]["file"].endswith("a.jed")
    assert [w["code"] for w in document["warnings"]] == ["UNKNOWN-FIELD"]
    for entry in document["errors"] + document["warnings"]:
        assert sorted(entry) == ["code", "column", "file", "hint", "line", "message"]
    assert (document["design"], document["notes"], document["default"]) == ("x", ["a"], 0)
    for key in ("fuses", "pins", "links", "fuse_checksum", "fuse_checksum_given", "devices"):
        assert document[key] is None


def test_a_wrong_checksum_in_json_leaves_nothing_else_out(capsys, tmp_path):
    data = GOLDEN.replace(b"C00D0", b"C00D1")
    code, out, _ = inspect(capsys, tmp_path, data, "--json")
    refused = json.loads(out)
    assert code == 2
    _, out, _ = inspect(capsys, tmp_path, GOLDEN, "--json")
    whole = json.loads(out)
    assert refused["fuse_checksum_given"] == "00D1"
    assert refused["fuse_checksum"] == whole["fuse_checksum"]
    differ = {key for key in refused if refused[key] != whole.get(key)}
    assert differ == {
        "errors",
        "warnings",
        "departures",
        "fuse_checksum_given",
        "transmission_sum",
    }


def test_a_default_of_doubtful_meaning_leaves_the_fuses_unknown(capsys, tmp_path):
    _, out, _ = inspect(capsys, tmp_path, b"\x02x*QF4*L0 10*F1*\x030000", "--json")
    document = json.loads(out)
    assert [e["code"] for e in document["errors"]] == ["LATE-DEFAULT"]
    assert (document["fuses"], document["links"]) == (4, None)


@pytest.mark.parametrize(
    ("data", "options", "expected"),
    [
        pytest.param(GOLDEN, ["--strict"], 0, id="clean"),
        pytest.param(GOLDEN + b"\r\n", [], 0, id="departure"),
        pytest.param(GOLDEN + b"\r\n", ["--strict"], 1, id="departure-strict"),
        pytest.param(GOLDEN + b"\r\n", ["--strict", "--json"], 1, id="departure-strict-json"),
        pytest.param(GOLDEN.replace(b"C00D0", b"C00D1"), ["--strict"], 2, id="refused-strict"),
    ],
)
def test_strict(capsys, tmp_path, data, options, expected):
    code, out, _ = inspect(capsys, tmp_path, data, *options)
    assert code == expected
    assert out


def test_help_says_what_strict_is_for(capsys):
    assert run(["inspect", "--help"]) == 0
    shown = " ".join(capsys.readouterr().out.split())
    assert "Without it departures are shown but do not fail." in shown


def test_the_device_of_the_file(capsys, tmp_path):
    device, data = golden_array()
    code, out, _ = inspect(capsys, tmp_path, data, "--device", device.name)
    assert code == 0
    assert rows(out)["device"] == f"{device.name}: QF and QP are those of the device"


def test_another_device_is_a_no_in_words(capsys, tmp_path):
    device, data = golden_array()
    other = find_device("shared-12x32x6")
    code, out, err = inspect(capsys, tmp_path, data, "--device", other.name)
    assert (code, err) == (1, "")
    assert rows(out)["device"] == (
        f"{other.name}: NOT THE SAME SIZE: QF is {device.fuses}, but the device has 966 fuses; "
        f"QP is {device.pins}, but the device has 20 pins"
    )
    code, out, _ = inspect(capsys, tmp_path, data, "--device", other.name, "--json")
    assert code == 1
    assert json.loads(out)["device"] == {
        "name": other.name,
        "fuses": 966,
        "pins": 20,
        "matches": False,
        "differences": [
            f"QF is {device.fuses}, but the device has 966 fuses",
            f"QP is {device.pins}, but the device has 20 pins",
        ],
        "family": other.name,
        "signature": None,
    }


def test_pins_alone_may_differ(capsys, tmp_path):
    device, data = golden_array(pins=99)
    code, out, _ = inspect(capsys, tmp_path, data, "--device", device.name)
    assert code == 1
    assert "QF is" not in rows(out)["device"]
    assert f"QP is 99, but the device has {device.pins} pins" in rows(out)["device"]


def test_a_file_without_pins_does_not_contradict_a_device(capsys, tmp_path):
    device, data = golden_array()
    data = data.replace(f"QP{device.pins}*\r\n".encode(), b"")
    code, out, _ = inspect(capsys, tmp_path, data, "--device", device.name)
    assert code == 0
    assert rows(out)["device"] == (
        f"{device.name}: nothing differs, but the file does not give QP, and the device has "
        f"{device.pins} pins"
    )
    _, out, _ = inspect(capsys, tmp_path, data, "--device", device.name, "--json")
    assert json.loads(out)["device"]["matches"] is None


def test_a_device_file_of_ones_own(capsys, tmp_path):
    device, data = golden_array()
    own = tmp_path / "own.toml"
    text = Path(device.location.file).read_text(encoding="utf-8")
    own.write_text(text.replace(device.name, "own-array"), encoding="utf-8")
    code, out, _ = inspect(capsys, tmp_path, data, "--device", str(own))
    assert code == 0
    assert rows(out)["device"].startswith("own-array: QF and QP are those")
    code, _, err = inspect(capsys, tmp_path, data, "--device", "shared-8x16x5")
    assert code == 2
    assert "did you mean 'shared-8x16x4'?" in err


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


FAMILY = ["modal-8x4-gated", "modal-8x4-plain", "modal-8x4-split"]


def modal_file(name, **changes):
    """A blank part of the family in one of its device-wide modes, with a text in it."""
    device = find_device(name)
    fuses = FuseMap.filled(device.fuses, device.links.blank).changed(device.mode_fuses)
    fuses = fuses.changed(encode_signature(device, changes.get("text", "")))
    return device, write_fuse_file("x", [], device.pins, fuses, list(device.blocks()))


@pytest.mark.parametrize("name", FAMILY)
def test_the_device_wide_mode_is_recognised(capsys, tmp_path, name):
    device, data = modal_file(name)
    others = [other for other in FAMILY if other != name]
    code, out, _ = inspect(capsys, tmp_path, data)
    assert code == 0
    lines = out.splitlines()
    (at,) = [i for i, line in enumerate(lines) if line.split()[:1] == ["devices"]]
    assert lines[at].split(maxsplit=1)[1] == f"{name} (family {device.family})"
    for other, line in zip(others, lines[at + 1 :], strict=False):
        wrong = [
            f for f, state in find_device(other).mode_fuses if (f, state) not in device.mode_fuses
        ]
        assert line.strip().startswith(f"not {other} (family {device.family}): fuse {wrong[0]} is ")
    code, out, _ = inspect(capsys, tmp_path, data, "--json")
    document = json.loads(out)
    assert document["devices"] == [name]
    assert [mode["name"] for mode in document["other_modes"]] == others


def test_another_mode_of_the_family_is_a_no(capsys, tmp_path):
    _, data = modal_file(FAMILY[0])
    code, out, _ = inspect(capsys, tmp_path, data, "--device", FAMILY[1])
    assert code == 1
    shown = rows(out)["device"]
    assert shown.startswith(f"{FAMILY[1]}: NOT IN THIS DEVICE-WIDE MODE: fuse ")
    code, out, _ = inspect(capsys, tmp_path, data, "--device", FAMILY[1], "--json")
    document = json.loads(out)["device"]
    assert (code, document["matches"]) == (1, False)
    assert shown.endswith("; ".join(document["differences"]))
    code, out, _ = inspect(capsys, tmp_path, data, "--device", FAMILY[0])
    assert code == 0
    assert rows(out)["device"] == (
        f"{FAMILY[0]}: QF and QP and its mode fuses are those of the device"
    )


@pytest.mark.parametrize(
    ("text", "shown"), [("DRY1", '"DRY1"'), ("", "blank")], ids=["text", "blank"]
)
def test_the_signature_is_shown(capsys, tmp_path, text, shown):
    device, data = modal_file(FAMILY[0], text=text)
    _, out, _ = inspect(capsys, tmp_path, data, "--device", device.name)
    assert rows(out)["signature"] == shown
    _, out, _ = inspect(capsys, tmp_path, data, "--device", device.name, "--json")
    signature = json.loads(out)["device"]["signature"]
    assert signature["text"] == text
    assert bytes.fromhex(signature["bytes"])[: len(text)] == text.encode()
    assert len(signature["bytes"]) == 2 * device.signature.length


def test_a_signature_that_is_no_text(capsys, tmp_path):
    device = find_device(FAMILY[0])
    first = device.signature.first_fuse
    fuses = FuseMap.filled(device.fuses, device.links.blank).changed(device.mode_fuses)
    fuses = fuses.changed({first + bit: 1 - bit % 2 for bit in range(device.signature.bits)})
    data = write_fuse_file("x", [], device.pins, fuses, list(device.blocks()))
    _, out, _ = inspect(capsys, tmp_path, data, "--device", device.name)
    assert rows(out)["signature"] == "no text; its bytes are AA AA AA AA"


def test_modes_of_a_refused_file_are_looked_at_as_well(capsys, tmp_path):
    _, data = modal_file(FAMILY[0])
    code, out, _ = inspect(capsys, tmp_path, re.sub(rb"C[0-9A-F]{4}\*", b"C0001*", data), "--json")
    document = json.loads(out)
    assert code == 2
    assert document["devices"] == [FAMILY[0]]
