"""What holds for every command: options anywhere, failures in words, exit codes, quick start."""

import errno
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from pla.cli.main import COMMANDS, run

EXAMPLES = Path(__file__).parents[2] / "examples"
PUMPS = str(EXAMPLES / "sump-pumps.toml")
DRYER = str(EXAMPLES / "dryer-panel.toml")


def test_bare_call_shows_help_and_fails(capsys):
    assert run([]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("Usage: fuseplan")
    assert "error" not in err.splitlines()[0]


@pytest.mark.parametrize("command", [[], *([name] for name in COMMANDS)])
@pytest.mark.parametrize("option", ["-h", "--help"])
def test_help(capsys, command, option):
    assert run([*command, option]) == 0
    out, err = capsys.readouterr()
    assert out.startswith("Usage: fuseplan")
    assert err == ""
    assert "\b" not in out


def test_version(capsys):
    from pla import __version__

    assert run(["--version"]) == 0
    assert capsys.readouterr().out == f"fuseplan {__version__}\n"


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        pytest.param(["plna"], "Did you mean 'plan'?", id="misspelt-command"),
        pytest.param(["bogus"], "There are: check, terms, plan", id="no-command"),
        pytest.param(["terms"], "Missing argument 'DESIGN'", id="no-argument"),
        pytest.param(["terms", PUMPS, "--polarity", "up"], "'up' is not one of", id="choice"),
        pytest.param(["terms", PUMPS, "--jsn"], "No such option", id="option"),
        pytest.param(["terms", PUMPS, "--color"], "'' is not one of", id="no-colour"),
        pytest.param(["--color", "pink", "terms", PUMPS], "'pink' is not one of", id="colour"),
    ],
)
def test_wrong_usage(capsys, arguments, words):
    assert run(arguments) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert words in err
    assert "[USAGE]" in err
    assert "Traceback" not in err


def test_wrong_usage_as_json(capsys):
    assert run(["plna", "--json"]) == 2
    out, _ = capsys.readouterr()
    (error,) = json.loads(out)["errors"]
    assert (error["code"], error["line"]) == ("USAGE", None)


@pytest.mark.parametrize(
    "arguments",
    [
        pytest.param(["-q", "check", DRYER], id="quiet-before"),
        pytest.param(["check", "-q", DRYER], id="quiet-between"),
        pytest.param(["check", DRYER, "--quiet"], id="quiet-after"),
    ],
)
def test_quiet_stands_anywhere(capsys, arguments):
    assert run(arguments) == 0
    assert capsys.readouterr().err == ""


@pytest.mark.parametrize(
    ("arguments", "environment", "coloured"),
    [
        pytest.param(["--color", "always", "check", "none.toml"], {}, True, id="always-before"),
        pytest.param(["check", "none.toml", "--color", "always"], {}, True, id="always-after"),
        pytest.param(["check", "none.toml", "--color=always"], {}, True, id="always-joined"),
        pytest.param(["check", "none.toml"], {}, False, id="no-terminal"),
        pytest.param(["check", "none.toml"], {"FORCE_COLOR": "1"}, True, id="forced"),
        pytest.param(
            ["check", "none.toml"], {"FORCE_COLOR": "1", "NO_COLOR": "1"}, False, id="forbidden"
        ),
        pytest.param(
            ["check", "none.toml", "--color", "never"], {"FORCE_COLOR": "1"}, False, id="never"
        ),
    ],
)
def test_colour(capsys, monkeypatch, arguments, environment, coloured):
    for name in ("NO_COLOR", "FORCE_COLOR"):
        monkeypatch.delenv(name, raising=False)
    for name, value in environment.items():
        monkeypatch.setenv(name, value)
    assert run(arguments) == 2
    assert ("\x1b[" in capsys.readouterr().err) == coloured


def test_full_disk_is_no_internal_fault(capsys, monkeypatch):
    def full(*_arguments, **_keywords):
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr("pla.cli.check.emit_text", full)
    assert run(["check", DRYER]) == 2
    assert "the output cannot be written: no space left on device [OUTPUT]" in (
        capsys.readouterr().err
    )


def test_a_reader_that_goes_away_is_no_error():
    command = f"{sys.executable} -m pla terms {PUMPS} | head -n 1"
    done = subprocess.run(["bash", "-c", command], capture_output=True, check=True)
    assert done.stdout.count(b"\n") == 1
    assert done.stderr == b""


def test_help_imports_nothing_heavy():
    """What makes the start slow stays out of it: a fact about imports, not about time."""
    code = (
        "import sys\nfrom pla.cli.main import run\nassert run(['--help']) == 0\n"
        "print(sorted({'numpy', 'lark', 'highspy', 'tabulate', 'tomllib'} & set(sys.modules)))"
    )
    done = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, check=True, env=dict(os.environ)
    )
    assert done.stdout.splitlines()[-1] == b"[]"


CLOCKED = ("address-latch", "bus-arbiter", "feeder-guard")


@pytest.mark.parametrize("name", CLOCKED)
def test_every_clocked_example_is_minimized(name, tmp_path, capsys):
    head = (EXAMPLES / f"{name}.toml").read_text(encoding="utf-8").split("\nname = ")[0]
    assert head.endswith(f"\n#   fuseplan terms examples/{name}.toml")
    design = str(EXAMPLES / f"{name}.toml")
    assert run(["check", design]) == 0
    assert run(["terms", design, "--require-proof"]) == 0
    assert capsys.readouterr().err == ""
    folder = tmp_path / name
    for command in (["budget"], ["plan", "--device", "shared-14x40x8", "-o", str(folder)]):
        assert run([command[0], design, *command[1:]]) == 1
        out, err = capsys.readouterr()
        assert out == ""
        assert "registers are planned by a later version [REGISTERS]" in err
    assert not folder.exists()


def test_every_example_is_planned_or_refused(tmp_path, capsys):
    """The examples are what a user tries first; each with the device that its README row suits."""
    wanted = {
        "dryer-panel": ("shared-14x40x8", 0),
        "logger-decoder": ("shared-12x32x6", 0),
        "splitter-interlock": ("shared-8x16x4", 0),
        "rotator-readout": ("shared-20x96x12", 0),
        "sump-pumps": ("shared-12x32x6", 0),
        "egg-totals": ("shared-12x32x6", 1),
        "clamp-card": ("varied-11x5-marked", 0),
        "cabinet-fans": ("joint-10x27x6", 0),
        "silo-valves": ("modal-8x4-plain", 0),
        "loom-card": ("gate-9x6", 0),
        "tape-reader": ("shared-10x28x4", 0),
        "cold-store": ("swap-8x4", 0),
        "weigher-port": ("own-9x5", 0),
    }
    assert {path.stem for path in EXAMPLES.glob("*.toml")} == {*wanted, *CLOCKED}
    for name, (device, expected) in wanted.items():
        folder = tmp_path / name
        command = f"fuseplan plan examples/{name}.toml --device {device} -o out/{name}"
        head = (EXAMPLES / f"{name}.toml").read_text(encoding="utf-8").split("\nname = ")[0]
        assert head.endswith(f"\n#   {command}"), name
        design = str(EXAMPLES / f"{name}.toml")
        assert run(["plan", design, "--device", device, "-o", str(folder)]) == expected, name
        assert (folder / f"{name}.jed").exists() == (expected == 0)
        assert folder.exists() == (expected == 0)
    capsys.readouterr()
