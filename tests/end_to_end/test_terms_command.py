"""``fuseplan terms`` as the contract has it."""

import pytest
from calls import CISTERN, SAW_BENCH, call, call_json, hard_design, is_text_list

from pla.logic.effort import Effort

KEYS = {
    "name": str,
    "inputs": list,
    "outputs": list,
    "complemented": list,
    "terms": list,
    "count": int,
    "lower_bound": int,
    "proven": bool,
    "proven_by": str,
    "schema_version": int,
}


def starve(monkeypatch):
    monkeypatch.setattr("pla.logic.minimize.Effort", lambda: Effort(work=0, nodes=0))


@pytest.mark.parametrize("design", [CISTERN, SAW_BENCH], ids=["cistern", "saw-bench"])
def test_keys_and_types(design, capsys):
    code, found = call_json(capsys, "terms", design)
    assert code == 0
    assert {key: type(found[key]) for key in KEYS} == KEYS
    assert found["proven_by"] in {"certificate", "solver"}
    for key in ("inputs", "outputs", "complemented"):
        assert is_text_list(found[key])
    assert set(found["complemented"]) <= set(found["outputs"])
    assert [term["number"] for term in found["terms"]] == list(range(1, found["count"] + 1))
    for term in found["terms"]:
        assert set(term) == {"number", "inputs", "outputs"}
        assert len(term["inputs"]) == len(found["inputs"])
        assert set(term["inputs"]) <= set("10-")
        assert term["outputs"]
        assert [o for o in found["outputs"] if o in term["outputs"]] == term["outputs"]


def test_cistern(capsys):
    """Worked out in golden/cistern.md, but for `alarm`, which is one term when true."""
    code, found = call_json(capsys, "terms", CISTERN, "--polarity", "true")
    assert code == 0
    assert found["name"] == "Cistern pump"
    assert found["inputs"] == ["level[1]", "level[0]", "hatch", "call"]
    assert found["outputs"] == ["pump", "slow", "valve", "alarm"]
    assert found["complemented"] == []
    assert found["terms"] == [
        {"number": 1, "inputs": "-101", "outputs": ["pump", "slow"]},
        {"number": 2, "inputs": "1-01", "outputs": ["pump"]},
        {"number": 3, "inputs": "00--", "outputs": ["valve"]},
        {"number": 4, "inputs": "--11", "outputs": ["alarm"]},
    ]
    assert (found["count"], found["lower_bound"], found["proven"]) == (4, 4, True)


def test_polarity(capsys):
    """Worked out in golden/saw_bench.md; with all outputs true `touched` takes three terms more."""
    _, free = call_json(capsys, "terms", SAW_BENCH)
    assert free["complemented"] == ["touched"]
    assert free["terms"] == [
        {"number": 1, "inputs": "110", "outputs": ["drive", "lamp"]},
        {"number": 2, "inputs": "000", "outputs": ["touched", "lamp"]},
    ]
    _, true = call_json(capsys, "terms", SAW_BENCH, "--polarity", "true")
    assert true["complemented"] == []
    assert (true["count"], true["lower_bound"], true["proven"]) == (5, 5, True)
    assert [t["inputs"] for t in true["terms"] if "lamp" in t["outputs"]] == ["110", "000"]


def test_text_names_terms_and_bound(capsys):
    code, out, err = call(capsys, "terms", CISTERN)
    assert (code, err) == (0, "")
    for words in ("Cistern pump", "4 product terms", "level[1]", "alarm"):
        assert words in out
    assert "proven" in out


@pytest.mark.parametrize("options", [(), ("--require-proof",)], ids=["plain", "require-proof"])
def test_unproven_minimum(options, tmp_path, capsys, monkeypatch):
    design = hard_design(tmp_path / "hard.toml", 7, 3)
    starve(monkeypatch)
    code, found = call_json(capsys, "terms", design, *options)
    assert code == (1 if options else 0)
    assert (found["proven"], found["proven_by"]) == (False, None)
    assert found["lower_bound"] < found["count"] == len(found["terms"])


def test_proof_that_is_there_is_no_no(capsys):
    assert call_json(capsys, "terms", CISTERN, "--require-proof")[0] == 0


def test_errors_of_a_design_in_json(tmp_path, capsys):
    design = tmp_path / "bad.toml"
    design.write_text(
        '[inputs]\na = 1\n[outputs]\nf = 1\ng = 1\n[logic]\nf = "a b"\ng = "a ("\n',
        encoding="utf-8",
    )
    code, found = call_json(capsys, "terms", design)
    assert code == 2
    assert set(found) == {"errors", "schema_version"}
    keys = {"file", "line", "column", "code", "message", "hint"}
    assert [set(e) for e in found["errors"]] == [keys] * 2
    assert [(e["file"], e["line"], e["column"]) for e in found["errors"]] == [
        (str(design), 7, 8),
        (str(design), 8, 9),
    ]
    assert all(e["code"] and e["message"] for e in found["errors"])


@pytest.mark.parametrize(
    "arguments",
    [
        pytest.param(["terms"], id="no-design"),
        pytest.param(["terms", "nowhere.toml"], id="no-such-file"),
        pytest.param(["terms", CISTERN, "--polarity", "maybe"], id="no-such-polarity"),
        pytest.param(["terms", CISTERN, "--device", "x"], id="no-such-option"),
        pytest.param(["term", CISTERN], id="no-such-command"),
        pytest.param(["terms", CISTERN, SAW_BENCH], id="two-designs"),
    ],
)
def test_wrong_calls(arguments, capsys):
    code, found = call_json(capsys, *arguments)
    assert code == 2
    (error,) = found["errors"]
    assert error["message"]
    code, out, err = call(capsys, *arguments)
    assert (code, out) == (2, "")
    assert "error: " in err
    assert "Traceback" not in err


def test_fault_of_the_program(capsys, monkeypatch):
    def broken(*_arguments, **_keywords):
        raise ZeroDivisionError("division by zero")

    monkeypatch.setattr("pla.logic.minimize.minimize", broken)
    code, found = call_json(capsys, "terms", CISTERN)
    assert code == 3
    assert [e["code"] for e in found["errors"]] == ["INTERNAL"]
    assert call(capsys, "terms", CISTERN)[:2] == (3, "")


def test_interrupted(capsys, monkeypatch):
    def pressed(*_arguments, **_keywords):
        raise KeyboardInterrupt

    monkeypatch.setattr("pla.logic.minimize.minimize", pressed)
    assert call(capsys, "terms", CISTERN) == (130, "", "\ninterrupted\n")


def test_interrupted_while_a_compiled_library_is_imported(capsys, monkeypatch):
    """Such a library reports a key press as a failed import that it caused."""

    def pressed(*_arguments, **_keywords):
        raise ImportError("initialization failed") from KeyboardInterrupt()

    monkeypatch.setattr("pla.logic.minimize.minimize", pressed)
    assert call(capsys, "terms", CISTERN) == (130, "", "\ninterrupted\n")
